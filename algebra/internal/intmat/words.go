package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/word"
	"example.org/closedform/algebra/internal/zp"
)

// wordSolve returns x and d with A x = d b, column after column, for the k
// columns of b given one after the other, when |det A| and all entries of
// adj(A) b are below 2^63: both are known from their values modulo 2^64.
//
// With p(s) = c_0 + ... + c_n s^n the characteristic polynomial, p(A) = 0
// gives A (c_1 + c_2 A + ... + c_n A^(n-1)) = -c_0; the sum is evaluated on b
// by Horner's rule, n^3 products for p and k n^3 for the sum, none of them
// longer than a word. d is zero when A is singular, x then has no meaning.
//
// Source: F. Gantmacher, The Theory of Matrices, volume 1, chapter IV,
// section 4 (the adjoint as a polynomial in A).
func (s *square) wordSolve(ctx context.Context, b []uint64, k int) (x []uint64, d uint64, err error) {
	n := s.n
	c, err := zp.CharPolyWord(ctx, n, s.e)
	if err != nil || c[0] == 0 {
		return nil, 0, err
	}
	x, y := make([]uint64, n*k), make([]uint64, n*k)
	copy(x, b)
	for i := n - 1; i > 0; i-- {
		if err := ctx.Err(); err != nil {
			return nil, 0, err
		}
		for j := 0; j < n*k; j += n {
			col := x[j : j+n]
			for r, v := range b[j : j+n] {
				y[j+r] = word.Dot(s.e[r*n:(r+1)*n], col) + c[i]*v
			}
		}
		x, y = y, x
	}
	return x, -c[0], nil
}

// lowestWords divides the signed words x and d, d not zero, by their greatest
// common divisor and makes d positive. None of them is -2^63.
func lowestWords(x []uint64, d uint64) ([]uint64, uint64) {
	negative := int64(d) < 0
	g := absWord(d)
	for _, v := range x {
		if g == 1 {
			break
		}
		g = word.GCD(g, absWord(v))
	}
	if g != 1 {
		for i, v := range x {
			x[i] = uint64(int64(v) / int64(g))
		}
		d = uint64(int64(d) / int64(g))
	}
	if negative {
		for i := range x {
			x[i] = -x[i]
		}
		d = -d
	}
	return x, d
}

func absWord(x uint64) uint64 {
	if int64(x) < 0 {
		return -x
	}
	return x
}

// wordSolution is wordSolve for callers of Solve: rows of numerators and
// their common denominator.
func (s *square) wordSolution(ctx context.Context, b []uint64, k int) (num [][]*big.Int, den *big.Int, err error) {
	x, d, err := s.wordSolve(ctx, b, k)
	if err != nil {
		return nil, nil, err
	}
	if d == 0 {
		return nil, nil, ErrSingular
	}
	rows := x
	if k > 1 {
		rows = make([]uint64, s.n*k)
		for j := range k {
			for i := range s.n {
				rows[i*k+j] = x[j*s.n+i]
			}
		}
	}
	rows, d = lowestWords(rows, d)
	return rowsOf(bigWords(rows), s.n, k), new(big.Int).SetUint64(d), ctx.Err()
}

// wordInverse overwrites s and returns x, row after row, and d > 0 with
// A x = d I in lowest terms, for the bound 2^bits, at most 2^minorBits, of the
// minors of A. Only a row or column of zeros goes with entries longer than
// words, and has a bound below 1.
func (s *square) wordInverse(ctx context.Context, bits int) (x []uint64, d uint64, err error) {
	if bits > 0 {
		if d, err = s.bareiss(ctx); err != nil {
			return nil, 0, err
		}
	}
	if d == 0 {
		return nil, 0, ErrSingular
	}
	x, d = lowestWords(s.e, d)
	return x, d, ctx.Err()
}
