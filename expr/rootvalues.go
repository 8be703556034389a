package expr

import "example.org/closedform/algebra"

// RootNodes writes the roots of a monic irreducible polynomial of degree 1 or 2,
// nil for others: the lesser real root first, of a pair the upper one; unit stands
// for the imaginary unit.
func RootNodes[E any](k algebra.Scalars[E], p algebra.Poly[E], unit Node) []Node {
	return RootValues(k, p, algebra.Monomial[E](k, k.One(), 1), unit)
}

// RootValues writes a(z) at the roots z of a monic irreducible polynomial p of
// degree 1 or 2, in the order of [RootNodes], as u + v sqrt(d); unit stands for
// the imaginary unit. It returns nil for other degrees.
func RootValues[E any](k algebra.Scalars[E], p, a algebra.Poly[E], unit Node) []Node {
	w := presenter[E]{k: k, style: styleOf(k)}
	a = a.Rem(k, p)
	switch p.Degree() {
	case 1:
		return []Node{w.Node(coef(k, a, 0))}
	case 2:
		h, d := quadraticRoots(k, p)
		sign, decided := w.weakSign(d)
		if !decided {
			sign = w.typicalSign(d)
		}
		if sign < 0 {
			d = k.Neg(d)
		}
		c, root := w.sqrt(d)
		v := coef(k, a, 1)
		u := k.Add(coef(k, a, 0), k.Mul(v, h))
		v = k.Mul(v, c)
		if sign < 0 {
			root = Mul(root, unit)
		} else {
			v = k.Neg(v)
		}
		return []Node{w.binomial(u, v, root), w.binomial(u, k.Neg(v), root)}
	}
	return nil
}

// binomial is surd without a sign in front of integers: -1 - 2*i.
func (w presenter[E]) binomial(a, b E, root Node) Node {
	if w.k.IsZero(a) || w.k.IsZero(b) || !w.k.Equal(w.Content(a, b), w.k.One()) {
		return w.surd(a, b, root)
	}
	return Sum{Terms: []Node{signed(w.Node(a)), Mul(w.Node(b), root)}}
}

// ContentOf returns the common factor of elements that is taken out of a sum,
// without a sign, 1 for zeros: over Q the positive c such that the x/c are
// coprime integers.
func ContentOf[E any](k algebra.Scalars[E], x ...E) E { return styleOf(k).Content(x...) }

// Trial is the part of an exponential polynomial that belongs to one real rate
// or to one pair of conjugate rates,
//
//	e^(ht) (sum Cos[k] t^k cos wt + sum Sin[k] t^k sin wt)
//
// with h the Rate and w the Frequency. For a real rate w is 0 and Sin is nil.
type Trial[E any] struct {
	Rate, Frequency E
	Cos, Sin        []E
}

// TrialOf returns the part of f at the irreducible polynomial p of degree 1 or
// 2, with no coefficients if f has no such part. It fails where the frequency is
// not in the field.
func TrialOf[E any](k algebra.Scalars[E], f Image[E], p algebra.Poly[E]) (Trial[E], bool) {
	w := presenter[E]{k: k, style: styleOf(k)}
	var part localPart[E]
	if i := f.Denominator().find(p); i >= 0 {
		part = f.local(i)
	} else {
		part.prime = newPrime(k, p)
	}
	switch p.Degree() {
	case 1:
		t := Trial[E]{Rate: k.Neg(part.p.Coef(0)), Frequency: k.Zero()}
		for _, c := range part.c {
			t.Cos = append(t.Cos, coef(k, c, 0))
		}
		return t, true
	case 2:
		q := w.quadraticPart(part)
		if q.sign >= 0 || !isNumber(q.root, 1) {
			return Trial[E]{}, false
		}
		t := Trial[E]{Rate: q.h, Frequency: q.c}
		for i := range part.c {
			t.Cos = append(t.Cos, coef(k, q.a, i))
			t.Sin = append(t.Sin, coef(k, q.b, i))
		}
		return t, true
	}
	return Trial[E]{}, false
}
