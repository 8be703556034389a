package intmat

import (
	"context"
	"fmt"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// Solve returns num and den with A num = den b for a square A and an n x k
// matrix b of right-hand sides, so that num/den is the solution of A x = b;
// den > 0 has no factor in common with all of num. It returns [ErrSingular]
// when det A = 0, proven by Hadamard's bound.
//
// The solution is lifted p-adically ([lifter]): O(n^3) for the inverse modulo
// p, then O(n^2) word operations for every 62 bits of a column.
//
// Source: J. Dixon, Exact solution of linear equations using p-adic
// expansions, Numerische Mathematik 40.
func Solve(ctx context.Context, a, b [][]*big.Int) (num [][]*big.Int, den *big.Int, err error) {
	n := mustBeSquare(a)
	if len(b) != n {
		panic(fmt.Sprintf("intmat: %d right-hand rows for a matrix of order %d", len(b), n))
	}
	k := mustBeRectangular(b)
	l, err := findLifter(ctx, a)
	if err != nil {
		return nil, nil, err
	}
	return l.columns(ctx, b, k)
}

// Inverse returns num and den with A num = den I for a square A: the inverse
// is num/den, with den > 0 and no factor in common with all of num. It
// returns [ErrSingular] when det A = 0. See [Solve].
func Inverse(ctx context.Context, a [][]*big.Int) (num [][]*big.Int, den *big.Int, err error) {
	n := mustBeSquare(a)
	unit := make([][]*big.Int, n)
	for i := range unit {
		unit[i] = make([]*big.Int, n)
		for j := range unit[i] {
			unit[i][j] = new(big.Int)
		}
		unit[i][i].SetInt64(1)
	}
	return Solve(ctx, a, unit)
}

// findLifter finds a prime that does not divide det A. When the product of
// the primes that do exceeds Hadamard's bound, det A is 0.
func findLifter(ctx context.Context, a [][]*big.Int) (*lifter, error) {
	for i, tries := 0, primesFor(hadamardBound(a)); i < tries; i++ {
		f := zp.NewField(prime(i))
		inv, ok, err := f.MatrixFromBig(a).Inverse(ctx)
		if err != nil {
			return nil, err
		}
		if ok {
			return newLifter(a, f, inv), nil
		}
	}
	return nil, ErrSingular
}

// columns solves for the k columns of b and brings them to a common
// denominator. The denominator of the first column, mostly that of all,
// halves the lifting of the others.
func (l *lifter) columns(ctx context.Context, b [][]*big.Int, k int) (num [][]*big.Int, den *big.Int, err error) {
	n := len(b)
	nums, dens := make([][]*big.Int, k), make([]*big.Int, k)
	solve := func(ctx context.Context, j int, hint *big.Int) error {
		rhs := make([]*big.Int, n)
		for i := range rhs {
			rhs[i] = b[i][j]
		}
		var err error
		nums[j], dens[j], err = l.column(ctx, rhs, hint)
		return err
	}
	den = big.NewInt(1)
	if k > 0 {
		if err := solve(ctx, 0, den); err != nil {
			return nil, nil, err
		}
		steps := float64(dens[0].BitLen()+l.norm.BitLen())/primeBits + 1
		nanos := 2 * steps * float64(n) * float64(n) * float64(k-1)
		err := forEach(ctx, k-1, nanos, func(ctx context.Context, j int) error {
			return solve(ctx, j+1, dens[0])
		})
		if err != nil {
			return nil, nil, err
		}
	}
	g := new(big.Int)
	for _, d := range dens {
		g.GCD(nil, nil, den, d)
		den.Mul(den, new(big.Int).Quo(d, g))
	}
	// Columns in lowest terms stay so, as a whole, over the least common
	// multiple of their denominators.
	num = make([][]*big.Int, n)
	for i := range num {
		num[i] = make([]*big.Int, k)
		for j := range num[i] {
			if err := ctx.Err(); err != nil {
				return nil, nil, err
			}
			x := new(big.Int).Quo(den, dens[j])
			num[i][j] = x.Mul(x, nums[j][i])
		}
	}
	return num, den, nil
}
