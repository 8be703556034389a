package mpoly

import (
	"cmp"
	"context"
	"math/big"
	"math/bits"
	"slices"

	"example.org/closedform/algebra/internal/intpoly"
)

// Factor is a polynomial together with its multiplicity.
type Factor struct {
	P    Poly
	Mult int
}

// FactorZ returns the factorisation of p over Z,
//
//	p = content prod factors[i].P^factors[i].Mult,
//
// with factors irreducible over Q, primitive, pairwise different, of positive
// leading coefficient, ordered by total degree, then number of terms, then
// [Poly.Compare], and a content carrying the sign. Constants have no factors;
// the zero polynomial has content 0. The result is proven: the factors are
// exact divisors, and each has an irreducible image or one all of whose
// splittings were refuted. The only error is ctx.Err().
//
// Cost: a few evaluations and the factorisation of a polynomial in one variable
// when p is irreducible; see wangLift for the rest.
func FactorZ(ctx context.Context, p Poly) (content *big.Int, factors []Factor, err error) {
	if err := ctx.Err(); err != nil {
		return nil, nil, err
	}
	if p.IsZero() {
		return new(big.Int), nil, nil
	}
	content, p = p.splitContent()
	low := p.minExponents()
	p = p.divMonomial(low)
	for i := range p.n {
		if e := exponent(low, i); e > 0 {
			factors = append(factors, Factor{Variable(p.n, i), e})
		}
	}
	more, err := factorUsed(ctx, p)
	if err != nil {
		return nil, nil, err
	}
	factors = append(factors, more...)
	sortFactors(factors)
	return content, factors, nil
}

// sortFactors sorts by total degree, number of terms and terms.
func sortFactors(factors []Factor) {
	slices.SortFunc(factors, func(a, b Factor) int {
		return cmp.Or(
			cmp.Compare(a.P.TotalDegree(), b.P.TotalDegree()),
			cmp.Compare(a.P.Len(), b.P.Len()),
			a.P.Compare(b.P),
		)
	})
}

// splitContent returns p = content pp for p != 0 with pp primitive of positive
// leading coefficient.
func (p Poly) splitContent() (content *big.Int, pp Poly) {
	content = p.Content()
	if p.LeadSign() < 0 {
		content.Neg(content)
	}
	return content, p.DivInt(content)
}

// factorUsed factors a primitive polynomial not divisible by a variable. One
// that is homogeneous is factored by way of its value at 1 for one variable:
// factors correspond, and the degree in the other variables stays. The variable
// of the highest degree is dropped.
func factorUsed(ctx context.Context, p Poly) ([]Factor, error) {
	if p.IsConstant() {
		return nil, nil
	}
	top := p.maxExponents()
	var vars []int
	drop := -1
	for i := range p.n {
		if e := exponent(top, i); e > 0 {
			vars = append(vars, i)
			if drop < 0 || e > exponent(top, drop) {
				drop = i
			}
		}
	}
	if len(vars) == 1 || !p.isHomogeneous() {
		return factorIn(ctx, p, vars, -1)
	}
	vars = slices.DeleteFunc(vars, func(i int) bool { return i == drop })
	factors, err := factorIn(ctx, p, vars, drop)
	if err != nil {
		return nil, err
	}
	if len(factors) == 1 && factors[0].Mult == 1 {
		return []Factor{{p, 1}}, nil
	}
	for k, g := range factors {
		factors[k].P = g.P.homogenised(drop)
	}
	return factors, nil
}

// isHomogeneous reports whether all terms have the same total degree.
func (p Poly) isHomogeneous() bool {
	d := 0
	for i := range p.Len() {
		if e := monomialDegree(p.exp(i)); i == 0 {
			d = e
		} else if e != d {
			return false
		}
	}
	return true
}

// monomialDegree returns the sum of the exponents of e.
func monomialDegree(e []uint64) int {
	d := 0
	for _, x := range e {
		d += int(x>>48) + int(x>>32&fieldMask) + int(x>>16&fieldMask) + int(x&fieldMask)
	}
	return d
}

// atOne returns p at x_i = 1, with positive leading coefficient.
func (p Poly) atOne(i int) Poly {
	return p.mapMonomials(func(e []uint64) {
		at, shift := fieldOf(i)
		e[at] &^= fieldMask << shift
	})
}

// homogenised returns the homogeneous polynomial of the total degree of p that
// is p at x_i = 1, with positive leading coefficient, for p free of x_i.
func (p Poly) homogenised(i int) Poly {
	d := p.TotalDegree()
	return p.mapMonomials(func(e []uint64) {
		at, shift := fieldOf(i)
		e[at] |= uint64(d-monomialDegree(e)) << shift
	})
}

// mapMonomials returns p with its monomials replaced, with positive leading
// coefficient.
func (p Poly) mapMonomials(change func(e []uint64)) Poly {
	b := newBuilder(p.n, p.Len())
	e := make([]uint64, wordsOf(p.n))
	for i := range p.Len() {
		copy(e, p.exp(i))
		change(e)
		b.addTerm(e, p, i)
	}
	return b.sorted().positive()
}

// factorIn factors a primitive polynomial that uses the variables vars and is
// divisible by none of them, at x_drop = 1 when drop >= 0; it uses no others.
func factorIn(ctx context.Context, p Poly, vars []int, drop int) ([]Factor, error) {
	whole := func() Poly {
		if drop < 0 {
			return p
		}
		return p.atOne(drop)
	}
	if len(vars) == 1 {
		return factorUnivariate(ctx, p, vars[0])
	}
	r := newProbe(p, vars)
	main := r.mainVariable()
	if !r.primitive(main) {
		q := whole()
		content, err := contentIn(ctx, q, vars[main])
		if err != nil {
			return nil, err
		}
		if !content.IsConstant() {
			factors, err := factorUsed(ctx, content)
			if err != nil {
				return nil, err
			}
			if q, err = quotient(ctx, q, content); err != nil {
				return nil, err
			}
			more, err := factorUsed(ctx, q)
			if err != nil {
				return nil, err
			}
			return append(factors, more...), nil
		}
	}
	if r.degrees[main] == 1 {
		return []Factor{{p, 1}}, nil
	}
	multiplicities, ok := r.multiplicities(main)
	if !ok {
		multiplicities = []int{0, r.degrees[main]}
	}
	w := newWangLift(r.t, main)
	irreducible, err := w.start(ctx, multiplicities)
	if err != nil {
		return nil, err
	}
	if irreducible {
		return []Factor{{p, 1}}, nil
	}
	return w.factor(ctx, whole(), multiplicities)
}

// factorUnivariate factors a polynomial in x_i, given with a variable that makes
// it homogeneous or without.
func factorUnivariate(ctx context.Context, p Poly, i int) ([]Factor, error) {
	_, found, err := intpoly.FactorZ(ctx, p.univariate(i))
	if err != nil {
		return nil, err
	}
	var factors []Factor
	for _, g := range found {
		factors = append(factors, Factor{fromUnivariate(p.n, i, g.P), g.Mult})
	}
	return factors, nil
}

// mainVariable returns the column of the variable to factor in: one of degree
// 1, with few variables that might occur in the content, else one of low degree
// with a simple leading coefficient.
func (r *probe) mainVariable() int {
	best, bestCost := -1, 0
	for i, d := range r.degrees {
		cost := r.variableCost(i, d)
		if best < 0 || cost < bestCost {
			best, bestCost = i, cost
		}
	}
	return best
}

// variableCost orders the variables for mainVariable.
func (r *probe) variableCost(i, d int) int {
	if d == 1 {
		return bits.OnesCount64(r.variables(i)) - 1000
	}
	terms, constant := 0, false
	for k := range r.used {
		if int(r.t.row(k)[i]) == d {
			terms++
			constant = r.used[k] == 1<<(i%64)
		}
	}
	cost := 4 * d
	if !constant || terms > 1 {
		cost += 4 + 2*bits.Len(uint(terms))
	}
	return cost
}

// contentIn returns the content of a primitive p in x_main, with positive
// leading coefficient.
func contentIn(ctx context.Context, p Poly, main int) (Poly, error) {
	g, err := GCDs(ctx, slices.DeleteFunc(p.Coefficients(main), Poly.IsZero))
	if err != nil {
		return Poly{}, err
	}
	_, g = g.splitContent()
	return g, nil
}

// quotient returns p / q for a known divisor q; the only error is ctx.Err().
func quotient(ctx context.Context, p, q Poly) (Poly, error) {
	r, ok, err := divide(ctx, p, q)
	if err == nil && !ok {
		panic("mpoly: a known divisor does not divide")
	}
	return r, err
}
