// Package zp is arithmetic modulo a word-size prime: the engine room of the
// multimodular algorithms (factoring, characteristic polynomials, p-adic
// lifting).
//
// Residues are plain uint64 values in [0, p) with p an odd prime below 2^62,
// so that the sum of two residues, and of four, fits a word.
package zp

import (
	"fmt"
	"math/big"
	"math/bits"
)

// The kernels read the words of a big.Int as 64 bits each: a platform with
// shorter ones is refused here, at compile time.
const _ uint = bits.UintSize - 64

// Field is the prime field with P elements.
type Field struct {
	P uint64
}

// MaxPrime bounds the moduli: every prime used is below 2^62.
const MaxPrime = 1 << 62

// NewField returns the field with p elements, p an odd prime below [MaxPrime].
// Primality is the caller's promise.
func NewField(p uint64) Field {
	if p < 3 || p%2 == 0 || p >= MaxPrime {
		panic(fmt.Sprintf("zp: modulus %d is not an odd prime below 2^62", p))
	}
	return Field{P: p}
}

// Add returns x + y.
func (f Field) Add(x, y uint64) uint64 {
	s := x + y
	if s >= f.P {
		s -= f.P
	}
	return s
}

// Sub returns x - y.
func (f Field) Sub(x, y uint64) uint64 {
	d := x - y
	if x < y {
		d += f.P
	}
	return d
}

// Neg returns -x.
func (f Field) Neg(x uint64) uint64 {
	if x == 0 {
		return 0
	}
	return f.P - x
}

// Mul returns x y.
func (f Field) Mul(x, y uint64) uint64 {
	hi, lo := bits.Mul64(x, y)
	_, r := bits.Div64(hi, lo, f.P)
	return r
}

// Pow returns x^e.
func (f Field) Pow(x, e uint64) uint64 {
	r := uint64(1)
	for ; e > 0; e >>= 1 {
		if e&1 == 1 {
			r = f.Mul(r, x)
		}
		x = f.Mul(x, x)
	}
	return r
}

// Inv returns 1/x by the extended Euclidean algorithm. It panics when x is 0.
func (f Field) Inv(x uint64) uint64 {
	if x == 0 {
		panic("zp: inverse of zero")
	}
	r0, r1 := f.P, x
	var t0, t1 int64 = 0, 1
	for r1 != 0 {
		q := r0 / r1
		r0, r1 = r1, r0-q*r1
		t0, t1 = t1, t0-int64(q)*t1
	}
	if t0 < 0 {
		t0 += int64(f.P)
	}
	return uint64(t0)
}

// FromInt64 returns x modulo P.
func (f Field) FromInt64(x int64) uint64 {
	if x >= 0 {
		return uint64(x) % f.P
	}
	return f.Neg((-uint64(x)) % f.P)
}

// FromBig returns x modulo P.
func (f Field) FromBig(x *big.Int) uint64 {
	if x.IsInt64() {
		return f.FromInt64(x.Int64())
	}
	var r uint64
	words := x.Bits()
	for i := len(words) - 1; i >= 0; i-- {
		_, r = bits.Div64(r, uint64(words[i]), f.P)
	}
	if x.Sign() < 0 {
		return f.Neg(r)
	}
	return r
}

// Lift returns the residue of least absolute value that represents x.
func (f Field) Lift(x uint64) int64 {
	if x > f.P/2 {
		return int64(x) - int64(f.P)
	}
	return int64(x)
}

// PrimeBelow returns the largest prime below n, for n > 3.
func PrimeBelow(n uint64) uint64 {
	for p := (n - 2) | 1; p > 2; p -= 2 {
		if new(big.Int).SetUint64(p).ProbablyPrime(0) { // exact below 2^64 (Baillie-PSW)
			return p
		}
	}
	panic("zp: no prime below 4")
}
