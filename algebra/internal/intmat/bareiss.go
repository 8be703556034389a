package intmat

import (
	"context"
	"math/bits"

	"example.org/closedform/algebra/internal/zp"
)

// minorBits bounds the minors of a matrix for [square.bareiss]: twice the
// product of two of them fits two signed words.
const minorBits = 62

// bareiss overwrites the words of s by d A^(-1) and returns d, the determinant
// up to its sign, when all minors of A are below 2^minorBits; 0 when A is
// singular. All numbers on the way are minors, each of them an exact quotient
// of two-word numbers, found by a multiplication modulo 2^64: n^3 in all, and
// no inverse modulo a prime.
//
// Source: E. Bareiss, Sylvester's identity and multistep integer-preserving
// Gaussian elimination; in place and for the inverse as in N. Higham, Accuracy
// and Stability of Numerical Algorithms, section 14.4 (Gauss-Jordan
// elimination).
func (s *square) bareiss(ctx context.Context) (d uint64, err error) {
	n, a := s.n, s.e
	swaps := make([]int, n)
	d = 1
	for k := range n {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		pivot := k
		for pivot < n && a[pivot*n+k] == 0 {
			pivot++
		}
		if pivot == n {
			return 0, nil
		}
		swaps[k] = pivot
		top := a[k*n : (k+1)*n]
		if pivot > k {
			for j, x := range a[pivot*n : (pivot+1)*n] {
				top[j], a[pivot*n+j] = x, top[j]
			}
		}
		p, twos := top[k], bits.TrailingZeros64(d)
		inv := zp.InverseWord(uint64(int64(d) >> twos))
		top[k] = 0 // makes the entry of the inverse -u d / d below
		for i := range n {
			if i == k {
				continue
			}
			row := a[i*n : (i+1)*n]
			u := row[k]
			if u == 0 && p == d {
				continue
			}
			if twos == 0 { // known from its value modulo 2^64
				for j, x := range top[:len(row)] {
					row[j] = (p*row[j] - u*x) * inv
				}
			} else {
				for j, x := range top[:len(row)] {
					h0, l0 := mulSigned(p, row[j])
					h1, l1 := mulSigned(u, x)
					lo, borrow := bits.Sub64(l0, l1, 0)
					row[j] = (lo>>(twos&63) | (h0-h1-borrow)<<(-twos&63)) * inv
				}
			}
			row[k] = -u
		}
		top[k], d = d, p
	}
	for k := n - 1; k >= 0; k-- { // a swap of rows before is one of columns now
		if l := swaps[k]; l != k {
			for i := 0; i < n*n; i += n {
				a[i+k], a[i+l] = a[i+l], a[i+k]
			}
		}
	}
	return d, nil
}

// mulSigned returns the product of two signed words.
func mulSigned(x, y uint64) (hi, lo uint64) {
	hi, lo = bits.Mul64(x, y)
	return hi - uint64(int64(x)>>63)&y - uint64(int64(y)>>63)&x, lo
}
