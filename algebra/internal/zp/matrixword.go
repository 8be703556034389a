package zp

import (
	"context"
	"fmt"
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

// DetWord returns the determinant modulo 2^64 of the n x n matrix with rows
// e, in O(n^3).
func DetWord(ctx context.Context, n int, e []uint64) (uint64, error) {
	mustHaveEntries(n, e)
	return determinant(ctx, dyadic{}, n, slices.Clone(e))
}

func mustHaveEntries(n int, e []uint64) {
	if len(e) != n*n {
		panic(fmt.Sprintf("zp: %d entries for a matrix of order %d", len(e), n))
	}
}
