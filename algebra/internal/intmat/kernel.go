package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// Kernel returns a basis of {x : A x = 0} for an m x n matrix A; a matrix
// without rows is taken to have no columns. A column is free when it depends
// on the columns before it. The basis has one primitive integer vector for
// every free column, in increasing order: positive there, zero in the other
// free columns and in all columns behind, which makes it unique.
//
// Rank and free columns come from an image modulo a prime, which gives a
// lower bound r on the rank. The vectors solve the system of r independent
// rows and columns ([Solve]); they are accepted when A v = 0 holds exactly
// and no vector reaches behind its free column, which proves both the rank
// and the choice of free columns. Otherwise the next prime is tried; only
// the finitely many divisors of some minors of A fail.
//
// Source: the reduced echelon form of, for example, H. Cohen, A Course in
// Computational Algebraic Number Theory, Algorithm 2.3.1, lifted by Dixon's
// method.
func Kernel(ctx context.Context, a [][]*big.Int) ([][]*big.Int, error) {
	n := mustBeRectangular(a)
	for i := 0; ; i++ {
		basis, ok, err := kernelFrom(ctx, a, n, zp.NewField(prime(i)))
		if err != nil || ok {
			return basis, err
		}
	}
}

// kernelFrom is Kernel with the rank of the image in f; ok tells whether the
// outcome is proven.
func kernelFrom(ctx context.Context, a [][]*big.Int, n int, f zp.Field) (basis [][]*big.Int, ok bool, err error) {
	rows, pivots, err := f.MatrixFromBig(a).Profile(ctx)
	if err != nil {
		return nil, false, err
	}
	free := complement(n, pivots)
	if len(free) == 0 {
		return [][]*big.Int{}, true, nil
	}
	minor := squareOf(submatrix(a, rows, pivots))
	inv, regular, err := minor.image(ctx, f).Inverse(ctx)
	if err != nil {
		return nil, false, err
	}
	if !regular {
		panic("intmat: singular pivots")
	}
	l := newLifter(minor, f, inv)
	num, den, err := l.columns(ctx, submatrix(a, rows, free), len(free))
	if err != nil {
		return nil, false, err
	}
	others := complement(len(a), rows)
	basis = make([][]*big.Int, len(free))
	for j, c := range free {
		v := make([]*big.Int, n)
		for i := range v {
			v[i] = new(big.Int)
		}
		v[c].Set(den)
		for i, p := range pivots {
			v[p].Neg(num[i][j])
			if p > c && v[p].Sign() != 0 {
				return nil, false, nil
			}
		}
		cancel(v, new(big.Int).Set(v[c]))
		for _, i := range others {
			if err := ctx.Err(); err != nil {
				return nil, false, err
			}
			if !orthogonal(a[i], v) {
				return nil, false, nil
			}
		}
		basis[j] = v
	}
	return basis, true, nil
}

// complement returns the elements of 0, ..., n-1 that are not in s.
func complement(n int, s []int) []int {
	in := make([]bool, n)
	for _, i := range s {
		in[i] = true
	}
	out := make([]int, 0, n-len(s))
	for i, taken := range in {
		if !taken {
			out = append(out, i)
		}
	}
	return out
}

// orthogonal tells whether the dot product of x and y is zero.
func orthogonal(x, y []*big.Int) bool {
	sum, t := new(big.Int), new(big.Int)
	for i := range x {
		if x[i].Sign() != 0 && y[i].Sign() != 0 {
			sum.Add(sum, t.Mul(x[i], y[i]))
		}
	}
	return sum.Sign() == 0
}
