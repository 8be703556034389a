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
			even, odd, evenNot, oddNot := "cosh", "sinh", "cos", "sin"
			if q.sign < 0 {
				even, odd, evenNot, oddNot = evenNot, oddNot, even, odd
			}
			s := "the formula holds for either sign of " + w.expanded(q.square).String() +
				": with r its square root, " + even + "(r*t) and " + odd + "(r*t)/r become " +
				evenNot + " and " + oddNot + " of the root of its absolute value where it is negative, and 1 and t where it is 0"
			if !slices.Contains(out, s) {
				out = append(out, s)
			}
		}
	}
	return out
}
