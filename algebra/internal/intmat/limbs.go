package intmat

import (
	"math/big"
	"math/bits"
)

// appendLimbs appends the w limbs of x, |x| < 2^(64 w - 1).
func appendLimbs(to []uint64, x *big.Int, w int) []uint64 {
	if w == 1 && x.IsInt64() {
		return append(to, uint64(x.Int64()))
	}
	start := len(to)
	words := x.Bits()
	for i := range w {
		var limb uint64
		for h := range wordsPerLimb {
			if k := i*wordsPerLimb + h; k < len(words) {
				limb |= uint64(words[k]) << (h * bits.UintSize)
			}
		}
		to = append(to, limb)
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
	r := residueOfWord(x[top], p)
	for i := top - 1; i >= 0; i-- {
		_, r = bits.Div64(r, x[i], p)
	}
	return r
}

// residueOfWord returns the signed word x modulo p, below 2^62.
func residueOfWord(x, p uint64) uint64 {
	if int64(x) >= 0 {
		if x >= p {
			x %= p
		}
		return x
	}
	if r := x + p; r < p { // x is at least -p
		return r
	}
	if r := -x % p; r > 0 {
		return p - r
	}
	return 0
}

// subMulLimbs subtracts c d from acc, which is at least as long as the
// nonnegative c, or as long as the signed c.
func subMulLimbs(acc, c []uint64, d uint64) {
	var carry, borrow uint64
	head := acc[:len(c)]
	for i, x := range c {
		hi, lo := bits.Mul64(x, d)
		var up uint64
		lo, up = bits.Add64(lo, carry, 0)
		carry = hi + up
		head[i], borrow = bits.Sub64(head[i], lo, borrow)
	}
	for i := len(c); i < len(acc); i++ {
		acc[i], borrow = bits.Sub64(acc[i], carry, borrow)
		carry = 0
	}
}

// addMulLimbs adds c d to acc, which is at least as long as the nonnegative
// c.
func addMulLimbs(acc, c []uint64, d uint64) {
	var carry, up uint64
	head := acc[:len(c)]
	for i, x := range c {
		hi, lo := bits.Mul64(x, d)
		lo, up = bits.Add64(lo, carry, 0)
		carry = hi + up
		head[i], up = bits.Add64(head[i], lo, 0)
		carry += up
	}
	for i := len(c); i < len(acc); i++ {
		acc[i], carry = bits.Add64(acc[i], carry, 0)
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
