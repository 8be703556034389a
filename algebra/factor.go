package algebra

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/intpoly"
)

// overZ returns the integer polynomial d*p and d > 0, the least common
// denominator of p; both for reading only.
func overZ(p Poly[Rat]) (intpoly.Poly, *big.Int) {
	if p.q == nil || p.q.den == nil {
		return p.q.ints(), big.NewInt(1)
	}
	return p.q.ints(), p.q.den
}

// overQ returns the monic multiple of an integer polynomial.
func overQ(p intpoly.Poly) Poly[Rat] {
	return Poly[Rat]{ring: Q, q: newQBig(p, nil).monic()}
}

func (Rationals) gcdPoly(p, q Poly[Rat]) Poly[Rat] {
	if p.q != nil && p.q.w != nil && q.q != nil && q.q.w != nil {
		if g, ok := intpoly.GCDWords(p.q.w, q.q.w); ok {
			return Poly[Rat]{ring: Q, q: (&qpoly{w: g}).monic()}
		}
	}
	a, _ := overZ(p)
	b, _ := overZ(q)
	return overQ(intpoly.GCD(a, b))
}

func (Rationals) squareFree(p Poly[Rat]) []Factor[Rat] {
	a, _ := overZ(p)
	return factorsOverQ(intpoly.SquareFree(a))
}

// factorsOverQ returns the monic multiples of integer factors.
func factorsOverQ(factors []intpoly.Factor) []Factor[Rat] {
	out := make([]Factor[Rat], len(factors))
	for i, f := range factors {
		out[i] = Factor[Rat]{P: overQ(f.P), Mult: f.Mult}
	}
	return out
}

// FactorPoly returns the monic irreducible factors of p over Q with their
// multiplicities, by degree and then by coefficients: Yun's square-free
// decomposition, factors modulo a prime, Hensel lifting and recombination.
// Constants, zero among them, have no factors.
func (Rationals) FactorPoly(ctx context.Context, p Poly[Rat]) ([]Factor[Rat], error) {
	a, _ := overZ(p)
	_, factors, err := intpoly.FactorZ(ctx, a)
	if err != nil {
		return nil, err
	}
	return factorsOverQ(factors), nil
}
