package algebra

import (
	"context"
	"errors"
	"math/big"

	"example.org/closedform/algebra/internal/intmat"
	"example.org/closedform/algebra/internal/intpoly"
)

// toInt returns the integer polynomial d*p and d > 0, the least common
// denominator of p.
func toInt(p Poly[Rat]) (intpoly.Poly, *big.Int) {
	ints, d := clearDenominators(p.c)
	return intpoly.Poly(ints), d
}

// fromInt returns p/d over Q.
func fromInt(p intpoly.Poly, d *big.Int) Poly[Rat] {
	c := make([]Rat, len(p))
	for i, x := range p {
		c[i] = RatFromFrac(x, d)
	}
	return ownPoly[Rat](Q, c)
}

func (Rationals) mulPoly(p, q []Rat) []Rat {
	a, da := clearDenominators(p)
	b, db := clearDenominators(q)
	prod := intpoly.Mul(a, b)
	d := da.Mul(da, db)
	c := make([]Rat, len(prod))
	for i, x := range prod {
		c[i] = RatFromFrac(x, d)
	}
	return c
}

func (Rationals) gcdPoly(p, q Poly[Rat]) Poly[Rat] {
	a, _ := toInt(p)
	b, _ := toInt(q)
	return fromInt(intpoly.GCD(a, b), big.NewInt(1)).Monic(Q)
}

// FactorPoly returns the monic irreducible factors of p over Q with their
// multiplicities, by degree and then by coefficients: Yun's square-free
// decomposition, factors modulo a prime, Hensel lifting and recombination.
func (Rationals) FactorPoly(ctx context.Context, p Poly[Rat]) ([]Factor[Rat], error) {
	a, _ := toInt(p)
	_, factors, err := intpoly.FactorZ(ctx, a)
	if err != nil {
		return nil, err
	}
	out := make([]Factor[Rat], len(factors))
	for i, f := range factors {
		out[i] = Factor[Rat]{P: fromInt(f.P, big.NewInt(1)).Monic(Q), Mult: f.Mult}
	}
	return out, nil
}

// CharPoly returns det(s I - a): with d the common denominator of the entries,
// d^n det(s I - a) is the characteristic polynomial of the integer matrix d*a
// at d*s, which is found modulo primes.
func (Rationals) CharPoly(ctx context.Context, a Matrix[Rat]) (Poly[Rat], error) {
	if a.m != a.n {
		panic(ShapeError{Op: "characteristic polynomial", R1: a.m, C1: a.n, R2: a.m, C2: a.n})
	}
	ints, d := a.intRows()
	c, err := intmat.CharPoly(ctx, ints)
	if err != nil {
		return Poly[Rat]{}, err
	}
	out := make([]Rat, len(c))
	scale := big.NewInt(1)
	for k := len(c) - 1; k >= 0; k-- {
		out[k] = RatFromFrac(c[k], scale)
		scale = new(big.Int).Mul(scale, d)
	}
	return ownPoly[Rat](Q, out), nil
}

func (Rationals) solveMatrix(ctx context.Context, a, b Matrix[Rat]) (Matrix[Rat], error) {
	// (da a) X' = (db b) gives X = X' da / db.
	ai, da := a.intRows()
	bi, db := b.intRows()
	num, den, err := intmat.Solve(ctx, ai, bi)
	if errors.Is(err, intmat.ErrSingular) {
		return Matrix[Rat]{}, ErrSingular
	}
	if err != nil {
		return Matrix[Rat]{}, err
	}
	den.Mul(den, db)
	return MatrixFromFunc[Rat](Q, a.n, b.n, func(i, j int) Rat {
		return RatFromFrac(new(big.Int).Mul(num[i][j], da), den)
	}), nil
}
