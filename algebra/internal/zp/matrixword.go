package zp

import (
	"context"
	"fmt"
	"math/bits"
	"slices"
)

// CharPolyWord returns the coefficients of det(s I - A) modulo 2^64 for the
// n x n matrix A with rows e, that of s^i at index i, in O(n^3). Signed words
// in two's complement are residues too, so that an answer in [-2^63, 2^63)
// is known from its image.
//
// Source: the elimination of [hessenberg] over the integers modulo 2^64.
func CharPolyWord(ctx context.Context, n int, e []uint64) ([]uint64, error) {
	mustHaveEntries(n, e)
	h, err := hessenberg(ctx, dyadic{}, n, slices.Clone(e))
	if err != nil {
		return nil, err
	}
	return hessenbergCharPoly(ctx, dyadic{}, n, h)
}

// DetWordInPlace returns the determinant modulo 2^64 of the n x n matrix with
// rows e, which it overwrites, in n^3/3 products, fewer for zeros: elimination
// by rows, as wrapping sums need no reduction that dot products would save. The
// pivot divides its column: it has the fewest trailing zeros.
//
// Source: G. Golub, C. Van Loan, Matrix Computations, section 3.2 (outer
// product elimination).
func DetWordInPlace(ctx context.Context, n int, e []uint64) (uint64, error) {
	mustHaveEntries(n, e)
	if isHessenberg(n, e) {
		return hessenbergDet(ctx, dyadic{}, n, e)
	}
	det := uint64(1)
	for k := range n {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		pivot, zeros := -1, 64
		for i := k; i < n && zeros > 0; i++ {
			if z := bits.TrailingZeros64(e[i*n+k]); z < zeros {
				pivot, zeros = i, z
			}
		}
		if pivot < 0 {
			return 0, nil
		}
		top := e[k*n+k : (k+1)*n]
		if pivot > k {
			for j, x := range e[pivot*n+k : (pivot+1)*n] {
				top[j], e[pivot*n+k+j] = x, top[j]
			}
			det = -det
		}
		det *= top[0]
		inv := InverseWord(top[0] >> zeros)
		for i := k + 1; i < n; i++ {
			row := e[i*n+k : (i+1)*n]
			if u := row[0] >> zeros * inv; u != 0 {
				for j, x := range top[:len(row)] {
					row[j] -= u * x
				}
			}
		}
	}
	return det, nil
}

func mustHaveEntries(n int, e []uint64) {
	if len(e) != n*n {
		panic(fmt.Sprintf("zp: %d entries for a matrix of order %d", len(e), n))
	}
}
