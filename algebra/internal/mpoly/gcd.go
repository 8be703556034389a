package mpoly

import (
	"context"
	"math/big"
)

// GCD returns the greatest common divisor of p and q over Z, integer content
// included, with positive leading coefficient; GCD(0, 0) = 0.
//
// Contents, variables that only one of the two has and variables in which an
// image of the gcd modulo a prime has degree 0 are split off first. What is
// left is interpolated from images modulo word primes, variable by variable:
// with all monomials where these are few, with those of a first image where
// they are sparse. The result is proven by exact division. The only error is
// ctx.Err().
//
// Source: Brown, On Euclid's algorithm and the computation of polynomial
// greatest common divisors, J. ACM 18 (1971); Zippel, Probabilistic algorithms
// for sparse polynomials, EUROSAM 1979.
func GCD(ctx context.Context, p, q Poly) (Poly, error) {
	n := join(p, q)
	if err := ctx.Err(); err != nil {
		return Poly{}, err
	}
	if p.IsZero() || q.IsZero() {
		if p.IsZero() {
			p = q
		}
		p.n = n
		return p.positive(), nil
	}
	if p.IsConstant() || q.IsConstant() {
		return Constant(n, gcdInts(p.Content(), q.Content())), nil
	}
	ep, eq := p.minExponents(), q.minExponents()
	common := minMonomials(ep, eq)
	var c *big.Int
	p, q = p.divMonomial(ep), q.divMonomial(eq)
	if p.bigs == nil && q.bigs == nil {
		cp, cq := p.wordContent(0), q.wordContent(0)
		p, q = p.divWord(cp), q.divWord(cq)
		if u := gcdWords(cp, cq); u != 1 {
			c = new(big.Int).SetUint64(u)
		}
	} else {
		cp, cq := p.Content(), q.Content()
		c = gcdInts(cp, cq)
		p, q = p.DivInt(cp), q.DivInt(cq)
	}
	g := ConstantWord(n, 1)
	if p.Len() > 1 && q.Len() > 1 {
		var err error
		if g, err = gcdPrimitive(ctx, p, q); err != nil {
			return Poly{}, err
		}
	}
	g = g.mulMonomial(common).positive()
	if c != nil {
		g = g.MulInt(c)
	}
	return g, nil
}

// gcdInts returns the gcd of a and b, which are not negative.
func gcdInts(a, b *big.Int) *big.Int { return new(big.Int).GCD(nil, nil, a, b) }

// minMonomials returns the gcd of the monomials a and b.
func minMonomials(a, b []uint64) []uint64 {
	m := make([]uint64, len(a))
	for i, x := range a {
		s := selectGreater(x, b[i])
		m[i] = b[i]&s | x&^s
	}
	return m
}

// positive returns p or -p, with positive leading coefficient.
func (p Poly) positive() Poly {
	if p.LeadSign() < 0 {
		return p.Neg()
	}
	return p
}

// mulMonomial returns p times the monomial e.
func (p Poly) mulMonomial(e []uint64) Poly {
	if isUnit(e) {
		return p
	}
	return p.mulTerm(Poly{n: p.n, exps: e, words: []int64{1}}, 0)
}

// gcdPrimitive returns the gcd, up to sign, of polynomials other than 0 that
// are primitive over Z and have no monomial content.
func gcdPrimitive(ctx context.Context, p, q Poly) (Poly, error) {
	if p.IsConstant() || q.IsConstant() {
		return ConstantWord(p.n, 1), nil
	}
	if p.Len() == q.Len() && (p.Equal(q) || p.positive().Equal(q.positive())) {
		return p, nil
	}
	dp, dq := p.maxExponents(), q.maxExponents()
	if stride, any := strides(p, q); any {
		g, err := gcdPrimitive(ctx, p.scaleExponents(stride, false), q.scaleExponents(stride, false))
		return g.scaleExponents(stride, true), err
	}
	vars := make([]int, 0, 2*p.n) // the common ones from the front, the others behind
	others := vars[p.n:p.n]
	private := make([]uint64, len(dp)) // the fields of variables the gcd does not have
	hide := func(i int) {
		w, s := fieldOf(i)
		private[w] |= fieldMask << s
	}
	for i := range p.n {
		a, b := exponent(dp, i), exponent(dq, i)
		switch {
		case a > 0 && b > 0:
			vars = append(vars, i)
		case a > 0 || b > 0:
			others = append(others, i)
			hide(i)
		}
	}
	if len(vars) == 0 {
		return ConstantWord(p.n, 1), nil
	}
	if len(vars) == 1 && len(others) == 0 {
		return univariateGCD(ctx, p, q, vars[0])
	}
	bound := degreeBounds(p, q, dp, dq, vars, others)
	used := make([]int, 0, len(vars))
	for _, i := range vars {
		if bound[i] > 0 {
			used = append(used, i)
		} else {
			hide(i)
		}
	}
	if len(used) == 0 {
		return ConstantWord(p.n, 1), nil
	}
	if reached(bound, dp) {
		if _, ok, err := divide(ctx, q, p); ok || err != nil {
			return p, err
		}
	}
	if reached(bound, dq) {
		if _, ok, err := divide(ctx, p, q); ok || err != nil {
			return q, err
		}
	}
	switch {
	case len(used) < len(vars) || len(others) > 0:
		return GCDs(ctx, append(p.parts(private), q.parts(private)...))
	}
	m := &modularProblem{p: p, q: q, bound: bound}
	if err := m.chooseMain(ctx, used); err != nil {
		return Poly{}, err
	}
	return m.solve(ctx)
}

// reached reports whether the bounds are the packed degrees d.
func reached(bound []int, d []uint64) bool {
	for i, b := range bound {
		if b != exponent(d, i) {
			return false
		}
	}
	return true
}
