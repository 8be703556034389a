package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// CharPoly returns the coefficients of det(s I - A) for a square A, that of
// s^i at index i, monic of length n+1.
//
// The diagonal blocks of the block triangular form ([diagonalBlocks]) are
// treated one by one and their polynomials multiplied. A block of order m
// takes its Hessenberg form modulo as many 62-bit primes as the proven bound
// on the coefficients asks for: O(m^3) word operations for each of about
// m log2(1 + r) / 62 primes, where r is the mean row norm.
//
// Source: H. Cohen, A Course in Computational Algebraic Number Theory,
// section 2.2.4, with the bound derived at charPolyBound.
func CharPoly(ctx context.Context, a [][]*big.Int) ([]*big.Int, error) {
	mustBeSquare(a)
	poly := []*big.Int{big.NewInt(1)}
	for _, block := range diagonalBlocks(a) {
		factor, err := blockCharPoly(ctx, submatrix(a, block, block))
		if err != nil {
			return nil, err
		}
		if poly, err = mulPoly(ctx, poly, factor); err != nil {
			return nil, err
		}
	}
	return poly, ctx.Err()
}

// blockCharPoly is CharPoly without the split into blocks.
func blockCharPoly(ctx context.Context, a [][]*big.Int) ([]*big.Int, error) {
	n := len(a)
	count := primesFor(charPolyBound(a))
	if preferDivisionFree(n, count) {
		return berkowitz(ctx, a)
	}
	fields := make([]zp.Field, count)
	images := make([][]uint64, count)
	err := forEach(ctx, count, modularNanos(n, count, 2), func(ctx context.Context, i int) error {
		fields[i] = zp.NewField(prime(i))
		var err error
		images[i], err = fields[i].MatrixFromBig(a).CharPoly(ctx)
		return err
	})
	if err != nil {
		return nil, err
	}
	return newCRT(fields).liftAll(ctx, images)
}

// preferDivisionFree tells whether the O(n^4) products of the division-free
// way cost less than images modulo count primes.
func preferDivisionFree(n, count int) bool {
	return n <= 4 || n <= 16 && count > 4*n*n
}

// modularNanos estimates the time of an O(n^3) task modulo count primes.
func modularNanos(n, count int, perEntry float64) float64 {
	return perEntry * float64(n) * float64(n) * float64(n) * float64(count)
}

// mulPoly returns the product of two polynomials, constant terms first.
func mulPoly(ctx context.Context, p, q []*big.Int) ([]*big.Int, error) {
	prod := make([]*big.Int, len(p)+len(q)-1)
	for i := range prod {
		prod[i] = new(big.Int)
	}
	t := new(big.Int)
	for j, y := range q {
		if y.Sign() == 0 {
			continue
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		for i, x := range p {
			prod[i+j].Add(prod[i+j], t.Mul(x, y))
		}
	}
	return prod, nil
}
