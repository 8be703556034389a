package expr

import (
	"context"

	"example.org/closedform/algebra"
)

// frequencies presents the part of a simple even prime p whose roots are +-iw, of
// undamped vibrations, as a sum of cosines and sines over the roots w of p(iw). It
// returns nil for other primes; where symbols leave it open whether all w are real,
// the form is right all the same.
func (w presenter[E]) frequencies(f Image[E], i int, local func() localPart[E]) Node {
	k, p := w.k, f.den[i].p
	if f.den[i].e > 1 || !w.isVibration(p) {
		return nil
	}
	num, den := w.residue(f, i, local)
	odd := 0 // the parity of den
	for odd < 2 && !turned(k, den, 1-odd).IsZero() {
		odd++
	}
	if odd == 2 {
		return nil
	}
	// With z = iw the even part of the residue stands at cos wt, the odd one at
	// i sin wt.
	below := turned(k, den, odd)
	cos, sin := turned(k, num, odd), turned(k, num, 1-odd)
	if odd == 0 {
		sin = sin.Neg()
	}
	name := w.freeName("omega", "nu", "w")
	v := Sym(name)
	angle := Mul(v, w.time)
	var body []Node
	for _, t := range []struct {
		num algebra.Poly[E]
		fn  string
	}{{cos, "cos"}, {sin, "sin"}} {
		if t.num.IsZero() {
			continue
		}
		minus, n := w.fraction(t.num, below, v, Apply(t.fn, angle))
		if minus {
			n = Negate(n)
		}
		body = append(body, n)
	}
	poly := w.poly(w.primitive(turned(k, p, 0).Monic(k)), v)
	return sumOverRoots(name, poly, Add(body...), false)
}

// turned returns f(iw) for the even part of f, f(iw)/i for the odd one.
func turned[E any](k algebra.Ring[E], f algebra.Poly[E], odd int) algebra.Poly[E] {
	c := make([]E, f.Degree()+1)
	for i := range c {
		c[i] = k.Zero()
		if i%2 == odd {
			if c[i] = f.Coef(i); (i/2)%2 == 1 {
				c[i] = k.Neg(c[i])
			}
		}
	}
	return algebra.NewPoly[E](k, c...)
}

// isVibration tells whether p is a polynomial in s^2 whose roots s^2 are real and
// negative, or with symbols, for typical signs of its coefficients may be.
func (w presenter[E]) isVibration(p algebra.Poly[E]) bool {
	h, q, ok := w.squares(p)
	if !ok || !w.k.IsZero(h) {
		return false
	}
	numbers := true
	c, symbolic := any(w.k).(*Constants)
	for i := range q.Degree() {
		if w.typicalSign(q.Coef(i)) <= 0 {
			return false
		}
		numbers = numbers && (!symbolic || c.IsNumber(any(q.Coef(i)).(Constant)))
	}
	if !numbers {
		return true
	}
	roots, err := w.k.Roots(context.Background(), q)
	return err == nil && roots.NumReal() == q.Degree() // with positive coefficients none is positive
}
