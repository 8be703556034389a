package zp

import (
	"context"
	"fmt"
	"math/bits"
)

// wide is an integer modulo 2^128.
type wide struct{ lo, hi uint64 }

func (x wide) mul(y wide) wide {
	hi, lo := bits.Mul64(x.lo, y.lo)
	return wide{lo, hi + x.lo*y.hi + x.hi*y.lo}
}

func (x wide) sub(y wide) wide {
	lo, borrow := bits.Sub64(x.lo, y.lo, 0)
	hi, _ := bits.Sub64(x.hi, y.hi, borrow)
	return wide{lo, hi}
}

// shiftRight returns x / 2^k rounded down, for k < 128.
func (x wide) shiftRight(k int) wide {
	if k >= 64 {
		return wide{x.hi >> (k - 64), 0}
	}
	return wide{x.lo>>k | x.hi<<(64-k), x.hi >> k}
}

// trailingZeros returns the exponent of 2 in x, 128 for zero.
func (x wide) trailingZeros() int {
	if x.lo == 0 {
		return 64 + bits.TrailingZeros64(x.hi)
	}
	return bits.TrailingZeros64(x.lo)
}

// inverse returns 1/x for an odd x: a step of Newton's iteration more than
// [InverseWord].
func (x wide) inverse() wide {
	y := wide{lo: InverseWord(x.lo)}
	return y.mul(wide{lo: 2}.sub(x.mul(y)))
}

// subScaled subtracts u x from y, where x is at least as long as y.
func subScaled(y, x []wide, u wide) {
	x = x[:len(y)]
	for i := range x {
		v := x[i]
		hi, lo := bits.Mul64(u.lo, v.lo)
		hi += u.lo*v.hi + u.hi*v.lo
		var borrow uint64
		lo, borrow = bits.Sub64(y[i].lo, lo, 0)
		hi, _ = bits.Sub64(y[i].hi, hi, borrow)
		y[i].lo, y[i].hi = lo, hi
	}
}

// DetWide is [DetWordInPlace] modulo 2^128 without touching e, for entries of w words each in two's
// complement, the lowest one first. A determinant in [-2^127, 2^127) is known
// from it at less cost than from its values modulo 2^64 and modulo a prime,
// whose n pivots want inverses by Euclid's algorithm.
func DetWide(ctx context.Context, n, w int, e []uint64) (lo, hi uint64, err error) {
	if len(e) != n*n*w {
		panic(fmt.Sprintf("zp: %d words for entries of %d words and order %d", len(e), w, n))
	}
	a := make([]wide, n*n)
	for i := range a {
		a[i].lo = e[i*w]
		if w > 1 {
			a[i].hi = e[i*w+1]
		} else {
			a[i].hi = uint64(int64(e[i]) >> 63)
		}
	}
	det := wide{lo: 1}
	for k := range n {
		if err := ctx.Err(); err != nil {
			return 0, 0, err
		}
		pivot, zeros := -1, 128
		for i := k; i < n && zeros > 0; i++ {
			if z := a[i*n+k].trailingZeros(); z < zeros {
				pivot, zeros = i, z
			}
		}
		if pivot < 0 {
			return 0, 0, nil
		}
		top := a[k*n+k : (k+1)*n]
		if pivot > k {
			for j, x := range a[pivot*n+k : (pivot+1)*n] {
				top[j], a[pivot*n+k+j] = x, top[j]
			}
			det = wide{}.sub(det)
		}
		det = det.mul(top[0])
		inv := top[0].shiftRight(zeros).inverse()
		for i := k + 1; i < n; i++ {
			row := a[i*n+k : (i+1)*n]
			if u := row[0].shiftRight(zeros).mul(inv); u != (wide{}) {
				subScaled(row, top, u)
			}
		}
	}
	return det.lo, det.hi, nil
}
