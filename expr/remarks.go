package expr

import "slices"

// Remarks says what a reader of the written form should know: where a square
// root may be taken of a negative number, which form holds for either sign.
func (f Function) Remarks() []string {
	return f.over().remarks()
}

func (f *overField[E]) remarks() (out []string) {
	var limit error
	defer catchLimit(&limit) // what is too long to be written needs no remark
	w := presenter[E]{k: f.k, style: styleOf(f.k)}
	for _, m := range f.images() {
		for i, pp := range m.den {
			if pp.p.Degree() != 2 {
				continue
			}
			q := w.quadraticPart(m.local(i))
			if q.decided {
				continue
			}
			form, other := "hyperbolic cosine and sine", "cosine and sine"
			if q.sign < 0 {
				form, other = other, form
			}
			s := "the formula holds for either sign of " + w.expanded(q.square).String() + ": where it is negative, " +
				form + " of its square root times the time are " + other +
				" of the square root of its absolute value, and where it is 0 the formula has a limit"
			if !slices.Contains(out, s) {
				out = append(out, s)
			}
		}
	}
	return out
}
