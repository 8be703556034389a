package expr

import "example.org/closedform/algebra"

// amplitude presents a cosine and a sine as R e^(ht) cos(wt - phi), with
// R^2 = a^2 + b^2 and tan phi = b/a, |phi| < pi/2; R has the sign of a. It returns
// nil where the form is not asked for, where symbols leave that sign open, and where
// R would be a root in a root that no decimal replaces.
func (w presenter[E]) amplitude(q quadraticPart[E]) Node {
	if !w.form.Amplitude || q.sign > 0 || !q.decided || q.a.Degree() != 0 || q.b.Degree() != 0 {
		return nil
	}
	k := w.k
	a, b := q.a.Coef(0), q.b.Coef(0)
	sign, ok := w.Sign(a)
	if !ok {
		return nil
	}
	// The sine has the coefficient b root, or b/root.
	factor := q.square
	if q.over {
		factor = w.inverse(factor)
	}
	ratio := k.Mul(b, w.inverse(a))
	c, root := w.sqrt(k.Add(k.Mul(a, a), k.Mul(k.Mul(b, b), factor)))
	if f, ok := root.(Call); ok && w.form.Numbers == ExactNumbers && len(numbersIn(f.Arg)) > 0 {
		return nil
	}
	phase, ok := w.phase(ratio, k.Mul(k.Mul(ratio, ratio), factor), q)
	if !ok {
		return nil
	}
	n := Mul(w.times(c, root), w.exp(w.Node(q.h)), Apply("cos", Add(w.perTime(w.times(q.c, q.root)), Negate(phase))))
	if sign < 0 {
		return Negate(n)
	}
	return n
}

// phase writes atan of the ratio times root or over root, whose square is given: a
// fraction of pi where it is one.
func (w presenter[E]) phase(ratio, square E, q quadraticPart[E]) (Node, bool) {
	k := w.k
	if x, ok := k.Rational(square); ok {
		for _, known := range []struct {
			square algebra.Rat
			angle  int64
		}{{algebra.RatFromInt(1), 4}, {algebra.RatFromInt(3), 3}, {algebra.NewRat(1, 3), 6}} {
			if !x.Equal(known.square) {
				continue
			}
			sign, ok := w.Sign(ratio)
			n := Mul(Num(algebra.NewRat(1, known.angle)), Sym("pi"))
			if sign < 0 {
				n = Negate(n)
			}
			return n, ok
		}
	}
	if q.over { // ratio/root = ratio root/root^2
		ratio = k.Mul(ratio, w.inverse(q.square))
	}
	n := signed(w.times(ratio, q.root))
	if neg, ok := n.(Neg); ok {
		return Neg{X: Apply("atan", neg.X)}, true
	}
	return Apply("atan", n), true
}
