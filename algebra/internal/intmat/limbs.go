package intmat

import (
	"context"
	"encoding/binary"
	"math/big"
	"math/bits"
)

// limbSteps is [lifter.wordSteps] with residuals modulo 2^(64 w), in two's
// complement, least limb first, for |b| and row sums below 2^(64 w - 2).
func (l *lifter) limbSteps(b []*big.Int, w int) func(context.Context) ([]uint64, error) {
	n, f := len(b), l.field
	a := make([]uint64, 0, n*n*w)
	for _, row := range l.a {
		for _, x := range row {
			a = appendLimbs(a, x, w)
		}
	}
	r := make([]uint64, 0, n*w)
	for _, x := range b {
		r = appendLimbs(r, x, w)
	}
	residue := make([]uint64, n)
	return func(ctx context.Context) ([]uint64, error) {
		for i := range residue {
			residue[i] = residueOfLimbs(r[i*w:(i+1)*w], f.P)
		}
		x := l.inverse.MulVec(residue)
		for i := range n {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			acc := r[i*w : (i+1)*w]
			row := a[i*n*w : (i+1)*n*w]
			for _, d := range x {
				subMulLimbs(acc, row[:w], d)
				row = row[w:]
			}
			divideLimbs(acc, f.P, l.pinv)
		}
		return x, nil
	}
}

// appendLimbs appends the w limbs of x, |x| < 2^(64 w - 1).
func appendLimbs(to []uint64, x *big.Int, w int) []uint64 {
	magnitude := x.FillBytes(make([]byte, 8*w))
	start := len(to)
	for i := w - 1; i >= 0; i-- {
		to = append(to, binary.BigEndian.Uint64(magnitude[8*i:]))
	}
	if x.Sign() < 0 {
		negateLimbs(to[start:])
	}
	return to
}

// negateLimbs replaces x by -x.
func negateLimbs(x []uint64) {
	carry := uint64(1)
	for i := range x {
		x[i], carry = bits.Add64(^x[i], 0, carry)
	}
}

// residueOfLimbs returns the signed x modulo p, below 2^62.
func residueOfLimbs(x []uint64, p uint64) uint64 {
	// Only the top limb carries a sign.
	top := len(x) - 1
	var r uint64
	if s := int64(x[top]); s >= 0 {
		r = uint64(s) % p
	} else if r = -uint64(s) % p; r > 0 {
		r = p - r
	}
	for i := top - 1; i >= 0; i-- {
		_, r = bits.Div64(r, x[i], p)
	}
	return r
}

// subMulLimbs subtracts c d from acc.
func subMulLimbs(acc, c []uint64, d uint64) {
	var carry, borrow uint64
	c = c[:len(acc)]
	for i := range acc {
		hi, lo := bits.Mul64(c[i], d)
		var up uint64
		lo, up = bits.Add64(lo, carry, 0)
		carry = hi + up
		acc[i], borrow = bits.Sub64(acc[i], lo, borrow)
	}
}

// divideLimbs replaces x, a multiple of the odd p, by x/p, where pinv is the
// inverse of p modulo 2^64.
//
// Source: T. Jebelean, An algorithm for exact division, Journal of Symbolic
// Computation 15.
func divideLimbs(x []uint64, p, pinv uint64) {
	var carry uint64
	for i := range x {
		v, borrow := bits.Sub64(x[i], carry, 0)
		x[i] = v * pinv
		carry, _ = bits.Mul64(x[i], p)
		carry += borrow
	}
}
