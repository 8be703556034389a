package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// Det returns the determinant of a square A, 1 when A is empty.
//
// It is the product over the diagonal blocks of the block triangular form;
// each block of order m is eliminated modulo enough 62-bit primes for
// Hadamard's bound, O(m^3) word operations for each.
//
// Source: J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
// Algorithm 5.10 (small primes determinant).
func Det(ctx context.Context, a [][]*big.Int) (*big.Int, error) {
	mustBeSquare(a)
	det := big.NewInt(1)
	for _, block := range diagonalBlocks(a) {
		d, err := blockDet(ctx, submatrix(a, block, block))
		if err != nil {
			return nil, err
		}
		if det.Mul(det, d); d.Sign() == 0 {
			return det, nil
		}
	}
	return det, ctx.Err()
}

// blockDet is Det without the split into blocks.
func blockDet(ctx context.Context, a [][]*big.Int) (*big.Int, error) {
	n := len(a)
	count := primesFor(hadamardBound(a))
	if preferDivisionFree(n, count) {
		p, err := berkowitz(ctx, a)
		if err != nil {
			return nil, err
		}
		if n%2 == 1 {
			p[0].Neg(p[0])
		}
		return p[0], nil
	}
	fields := make([]zp.Field, count)
	residues := make([]uint64, count)
	err := forEach(ctx, count, modularNanos(n, count, 1), func(ctx context.Context, i int) error {
		fields[i] = zp.NewField(prime(i))
		var err error
		residues[i], err = fields[i].MatrixFromBig(a).Det(ctx)
		return err
	})
	if err != nil {
		return nil, err
	}
	return newCRT(fields).lift(ctx, residues)
}
