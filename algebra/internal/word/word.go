// Package word holds the arithmetic of machine integers that several kernels
// share.
package word

import (
	"math/bits"

	"golang.org/x/exp/constraints"
)

// Abs returns |x|, which fits also for the least value of the type.
func Abs[T constraints.Signed](x T) uint64 {
	if x < 0 {
		return -uint64(x)
	}
	return uint64(x)
}

// GCD returns the greatest common divisor of x and y, 0 for two zeros, by the
// binary algorithm (Stein 1967).
func GCD(x, y uint64) uint64 {
	if x == 0 {
		return y
	}
	if y == 0 {
		return x
	}
	shift := bits.TrailingZeros64(x | y)
	x >>= bits.TrailingZeros64(x)
	for y != 0 {
		y >>= bits.TrailingZeros64(y)
		if x > y {
			x, y = y, x
		}
		y -= x
	}
	return x << shift
}

// Dot returns the sum of x[i] y[i] modulo 2^64. y is at least as long as x.
func Dot(x, y []uint64) uint64 {
	var s, t uint64
	y = y[:len(x)]
	for len(x) >= 4 && len(y) >= 4 {
		s += x[0]*y[0] + x[1]*y[1]
		t += x[2]*y[2] + x[3]*y[3]
		x, y = x[4:], y[4:]
	}
	for i, v := range x {
		s += v * y[i]
	}
	return s + t
}
