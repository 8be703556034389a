package expr

import "example.org/closedform/algebra"

// biquadratic presents the part of a simple prime s^4 + b s^2 + c whose roots are
// +-i w1 and +-i w2, as two undamped oscillations. With s^2 = y the roots y are
// m +- r, m = -b/2 and r^2 = D/4, D = b^2 - 4c, and
//
//	w = sqrt(-y), or (sqrt(b + 2q) -+ sqrt(b - 2q))/2 where c = q^2.
//
// It returns nil for other primes, and where signs are not decided.
func (w presenter[E]) biquadratic(f Image[E], i int) Node {
	k, pp := w.k, f.den[i]
	p := pp.p
	if pp.e != 1 || p.Degree() != 4 || !k.IsZero(p.Coef(1)) || !k.IsZero(p.Coef(3)) {
		return nil
	}
	b, c := p.Coef(2), p.Coef(0)
	d := k.Sub(k.Mul(b, b), k.Mul(k.FromInt(4), c))
	for _, x := range []E{b, c, d} {
		if sign, ok := w.Sign(x); !ok || sign <= 0 {
			return nil
		}
	}
	half := k.FromRat(algebra.NewRat(1, 2))
	scale, root := w.sqrt(d)
	m, r := k.Neg(k.Mul(half, b)), k.Mul(half, scale) // y = m +- r root
	// c(L) e^(Lt) and its conjugate, with L = iw and c(s) = e(s^2) + s o(s^2), make
	// 2 e(y) cos wt - 2 w o(y) sin wt.
	part := f.local(i).c[0]
	coefficient := func(constant, slope E, sign int64) Node {
		u := k.Add(constant, k.Mul(slope, m))
		return w.surd(u, k.Mul(k.FromInt(sign), k.Mul(slope, r)), root)
	}
	two, minusTwo := k.FromInt(2), k.FromInt(-2)
	var terms []Node
	for _, sign := range []int64{1, -1} { // the lower frequency first
		frequency, alpha, beta, simple := w.undampedFrequency(b, c, m, r, root, sign)
		angle := Mul(frequency, w.time)
		if q, ok := frequency.(Quotient); ok {
			angle = Quotient{Num: Mul(q.Num, w.time), Den: q.Den}
		}
		even := coefficient(k.Mul(two, coef(k, part, 0)), k.Mul(two, coef(k, part, 2)), sign)
		odd := Mul(coefficient(k.Mul(minusTwo, coef(k, part, 1)), k.Mul(minusTwo, coef(k, part, 3)), sign), frequency)
		if simple { // (u + v root)(alpha + beta root)
			u := k.Mul(minusTwo, k.Add(coef(k, part, 1), k.Mul(coef(k, part, 3), m)))
			v := k.Mul(k.FromInt(-2*sign), k.Mul(coef(k, part, 3), r))
			square := k.Mul(d, w.inverse(k.Mul(scale, scale)))
			odd = w.surd(k.Add(k.Mul(u, alpha), k.Mul(square, k.Mul(v, beta))), k.Add(k.Mul(u, beta), k.Mul(v, alpha)), root)
		}
		for _, t := range []Node{Mul(even, Apply("cos", angle)), Mul(odd, Apply("sin", angle))} {
			if !isZeroProduct(t) {
				terms = append(terms, t)
			}
		}
	}
	return Add(terms...)
}

// undampedFrequency writes sqrt(-(m + sign r root)), and returns it as alpha + beta
// root where it is simple enough for that.
func (w presenter[E]) undampedFrequency(b, c, m, r E, root Node, sign int64) (n Node, alpha, beta E, simple bool) {
	k := w.k
	q, inner := w.sqrt(c)
	two := k.FromInt(2)
	high, low := k.Add(b, k.Mul(two, q)), k.Sub(b, k.Mul(two, q))
	if s, ok := w.Sign(low); !isNumber(inner, 1) || !ok || s <= 0 {
		return Apply("sqrt", w.surd(k.Neg(m), k.Mul(k.FromInt(-sign), r), root)), alpha, beta, false
	}
	half := k.FromRat(algebra.NewRat(1, 2))
	u, rootU := w.sqrt(high)
	v, rootV := w.sqrt(low)
	u, v = k.Mul(half, u), k.Mul(k.FromInt(-sign), k.Mul(half, v))
	switch {
	case isNumber(rootV, 1):
		return w.surd(v, u, root), v, u, true
	case isNumber(rootU, 1):
		return w.surd(u, v, root), u, v, true
	}
	content := w.Content(u, v)
	inv := w.inverse(content)
	first := Mul(w.Node(k.Mul(u, inv)), rootU)
	second := Mul(w.Node(k.Mul(v, inv)), rootV)
	return Mul(w.Node(content), Sum{Terms: []Node{first, second}}), alpha, beta, false
}

// isZeroProduct tells whether a product built by Mul is 0.
func isZeroProduct(n Node) bool {
	if neg, ok := n.(Neg); ok {
		n = neg.X
	}
	return isNumber(n, 0)
}

// mostBiquadratic is the length of text up to which undamped oscillations are
// written out, in place of a sum over roots that is shorter.
const mostBiquadratic = 240
