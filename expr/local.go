package expr

import (
	"example.org/closedform/algebra"
)

// localPart is the share of one irreducible factor p^e in an exponential
// polynomial: the sum over the roots L of p of
//
//	(c[0](L) + c[1](L) t + ... + c[e-1](L) t^(e-1)) e^(Lt)
//
// with the c[k] in K[s]/(p).
type localPart[E any] struct {
	*prime[E]
	c []algebra.Poly[E]
}

// local returns the part of f at its i-th prime: c[k] is 1/k! times the
// coefficient of (s - L)^-(k+1) in the Laurent series at L.
func (f Image[E]) local(i int) localPart[E] {
	pp := f.den[i]
	l := algebra.NewExtension[E](f.k, pp.p, "z")
	// p(L + h) = h q(h); with Q the other factors, the series is N/(q^e Q) h^-e. One
	// factor is divided by after another, so that what cancels does so early.
	series := func(p algebra.Poly[E], skip int) []algebra.Poly[E] {
		return taylor(l, p, skip, pp.e)
	}
	one := append([]algebra.Poly[E]{l.One()}, make([]algebra.Poly[E], pp.e-1)...)
	g := series(f.num, 0)
	for j, other := range f.den {
		skip := 0
		if j == i {
			skip = 1
		}
		inv := divSeries(l, one, series(other.p, skip), pp.e)
		for range other.e {
			g = mulSeries(l, g, inv, pp.e)
		}
	}
	for len(g) < pp.e {
		g = append(g, l.Zero())
	}
	c := make([]algebra.Poly[E], pp.e)
	fact := f.k.One()
	for k := range c {
		if k > 1 {
			fact = f.k.Mul(fact, f.k.FromInt(int64(k)))
		}
		inv, err := f.k.Inv(fact)
		if err != nil {
			panic(err) // the field has characteristic 0
		}
		c[k] = g[pp.e-1-k].Scale(inv)
	}
	return localPart[E]{pp.prime, c}
}

// mustInvert inverts an element of K[s]/(p) that is known not to vanish: the
// primes of a denominator are irreducible and distinct.
func mustInvert[E any](l *algebra.Extension[E], x algebra.Poly[E]) algebra.Poly[E] {
	y, err := l.Inv(x)
	if err != nil {
		panic(err)
	}
	return y
}

// taylor returns n coefficients of the expansion of p at the root of l, from
// the power skip on.
func taylor[E any](l *algebra.Extension[E], p algebra.Poly[E], skip, n int) []algebra.Poly[E] {
	k := p.Ring()
	out := make([]algebra.Poly[E], n)
	for j := range out {
		// The coefficient of h^m is sum over i of binomial(i, m) p_i L^(i-m).
		m := j + skip
		if p.Degree() < m {
			out[j] = l.Zero()
			continue
		}
		c := make([]E, p.Degree()-m+1)
		binomial := k.One()
		for i := m; i <= p.Degree(); i++ {
			c[i-m] = k.Mul(binomial, p.Coef(i))
			// binomial(i+1, m) = binomial(i, m) (i+1)/(i+1-m)
			binomial = exactQuo(k, k.Mul(binomial, k.FromInt(int64(i+1))), int64(i+1-m))
		}
		out[j] = l.Reduce(algebra.NewPoly(k, c...))
	}
	return out
}

// residueRatio returns N and D' modulo the i-th prime, which is simple: the
// residue at its roots is their ratio, and this way of writing it is shorter
// than the quotient.
func (f Image[E]) residueRatio(i int) (num, den algebra.Poly[E]) {
	pp := f.den[i]
	l := algebra.NewExtension[E](f.k, pp.p, "z")
	den = l.Reduce(pp.p.Derivative())
	for j, other := range f.den {
		if j != i {
			for range other.e {
				den = l.Mul(den, l.Reduce(other.p))
			}
		}
	}
	return l.Reduce(f.num), den
}

// exactQuo returns x/n.
func exactQuo[E any](k algebra.Ring[E], x E, n int64) E {
	inv, err := k.(algebra.Field[E]).Inv(k.FromInt(n))
	if err != nil {
		panic(err) // the field has characteristic 0
	}
	return k.Mul(x, inv)
}

// mulSeries returns the first n coefficients of a b, without trailing zeros.
func mulSeries[E any](l *algebra.Extension[E], a, b []algebra.Poly[E], n int) []algebra.Poly[E] {
	out := make([]algebra.Poly[E], min(n, max(0, len(a)+len(b)-1)))
	for i, x := range a {
		for j := 0; j < len(b) && i+j < n; j++ {
			if !x.IsZero() && !b[j].IsZero() {
				out[i+j] = l.Add(out[i+j], l.Mul(x, b[j]))
			}
		}
	}
	for len(out) > 0 && out[len(out)-1].IsZero() {
		out = out[:len(out)-1]
	}
	return out
}

// divSeries returns the first n coefficients of a/b, b[0] not zero.
func divSeries[E any](l *algebra.Extension[E], a, b []algebra.Poly[E], n int) []algebra.Poly[E] {
	inv := mustInvert(l, b[0])
	out := make([]algebra.Poly[E], n)
	for i := range out {
		x := a[i]
		for j := 1; j <= i && j < len(b); j++ {
			if !b[j].IsZero() {
				x = l.Sub(x, l.Mul(b[j], out[i-j]))
			}
		}
		out[i] = l.Mul(x, inv)
	}
	return out
}

// ConstantCoefficient returns the coefficient c(L) of c(L) e^(Lt) in f,
// for the roots L of the irreducible polynomial p, as an element of l = K[s]/(p).
func (f Image[E]) ConstantCoefficient(l *algebra.Extension[E], p algebra.Poly[E]) algebra.Poly[E] {
	i := f.Denominator().find(p)
	if i < 0 {
		return l.Zero()
	}
	return f.local(i).c[0]
}
