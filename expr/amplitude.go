package expr

import "example.org/closedform/algebra"

// amplitude presents a cosine and a sine as R e^(ht) cos(wt - phi), with
// R^2 = a^2 + b^2 and tan phi = b/a. It returns nil where the form is not asked for,
// where symbols leave open which quadrant phi is in, and where R would be a root in
// a root that no decimal replaces.
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
	if sign < 0 { // the angle of (a, b) lies half a turn from that of (-a, -b)
		s, ok := w.Sign(b)
		if !ok {
			return nil
		}
		half := Node(Sym("pi"))
		if s < 0 {
			half = Neg{X: half}
		}
		phase = addPhases(half, phase)
	}
	terms := []Node{phase}
	if s, ok := phase.(Sum); ok {
		terms = s.Terms
	}
	turned := []Node{w.perTime(w.times(q.c, q.root))}
	for _, t := range terms {
		turned = append(turned, Negate(t))
	}
	return Mul(w.times(c, root), w.exp(w.Node(q.h)), Apply("cos", Add(turned...)))
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

// addPhases adds a half turn to a phase, as one fraction of pi where both are.
func addPhases(half, phase Node) Node {
	x, ok1 := turnsOf(half)
	y, ok2 := turnsOf(phase)
	if !ok1 || !ok2 {
		return Add(half, phase)
	}
	sum := x.Add(y)
	n := Mul(Num(sum.Abs()), Sym("pi"))
	if sum.Sign() < 0 {
		return Neg{X: n}
	}
	return n
}

// turnsOf returns r for r pi.
func turnsOf(n Node) (algebra.Rat, bool) {
	switch v := n.(type) {
	case Neg:
		r, ok := turnsOf(v.X)
		return r.Neg(), ok
	case Symbol:
		return algebra.RatFromInt(1), v.Name == "pi"
	case Quotient:
		num, ok1 := turnsOf(v.Num)
		den, ok2 := v.Den.(Number)
		if ok1 && ok2 {
			return num.Quo(den.Val), true
		}
	case Product:
		if c, ok := v.Factors[0].(Number); ok && len(v.Factors) == 2 {
			r, ok := turnsOf(v.Factors[1])
			return c.Val.Mul(r), ok
		}
	}
	return algebra.Rat{}, false
}
