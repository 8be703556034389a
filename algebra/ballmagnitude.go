package algebra

import (
	"cmp"
	"math"
	"math/big"
	"math/bits"
)

// magnitude is a non-negative bound m 2^e with a 32-bit mantissa: zero when m
// is zero, else m lies in [2^31, 2^32). Every operation says in its name which
// way it rounds. An exponent of magnitudeInf or more stands for infinity.
type magnitude struct {
	m uint32
	e int64
}

const magnitudeInf = int64(1) << 61

var infinite = magnitude{1 << 31, magnitudeInf}

// magUp returns v 2^e rounded up.
func magUp(v uint64, e int64) magnitude {
	r := magDown(v, e)
	if s := bits.Len64(v) - 32; s > 0 && uint64(r.m)<<s != v {
		return r.next()
	}
	return r
}

// magDown returns v 2^e rounded down.
func magDown(v uint64, e int64) magnitude {
	if v == 0 {
		return magnitude{}
	}
	s := bits.Len64(v) - 32
	if s <= 0 {
		return magnitude{uint32(v << -s), e + int64(s)}
	}
	return magnitude{uint32(v >> s), e + int64(s)}
}

// magPow2 returns 2^e.
func magPow2(e int64) magnitude { return magnitude{1 << 31, e - 31} }

// intMagDown returns |n| 2^e rounded down.
func intMagDown(n *big.Int, e int64) magnitude {
	w := n.Bits()
	if len(w) == 0 {
		return magnitude{}
	}
	l := n.BitLen()
	hi := w[len(w)-1]
	k := bits.Len(uint(hi))
	var m uint64
	switch {
	case k >= 32:
		m = uint64(hi >> (k - 32))
	case len(w) == 1:
		m = uint64(hi) << (32 - k)
	default:
		m = uint64(hi)<<(32-k) | uint64(w[len(w)-2]>>(bits.UintSize-32+k))
	}
	return magnitude{uint32(m), e + int64(l) - 32}
}

// intMagUp returns |n| 2^e rounded up, at most one unit above the best bound.
func intMagUp(n *big.Int, e int64) magnitude {
	r := intMagDown(n, e)
	if n.BitLen() > 32 {
		return r.next()
	}
	return r
}

// next returns the magnitude one unit in the last place above a > 0.
func (a magnitude) next() magnitude {
	if a.m == math.MaxUint32 {
		return magnitude{1 << 31, a.e + 1}
	}
	return magnitude{a.m + 1, a.e}
}

func (a magnitude) isZero() bool { return a.m == 0 }
func (a magnitude) isInf() bool  { return a.m != 0 && a.e >= magnitudeInf }

// top returns the exponent t with 2^(t-1) <= a < 2^t, for a > 0.
func (a magnitude) top() int64 { return a.e + 32 }

func (a magnitude) cmp(b magnitude) int {
	if a.m == 0 || b.m == 0 || a.e == b.e {
		return cmp.Compare(a.m, b.m)
	}
	return cmp.Compare(a.e, b.e)
}

func (a magnitude) addUp(b magnitude) magnitude {
	if a.m == 0 || b.m != 0 && a.e < b.e {
		a, b = b, a
	}
	switch d := a.e - b.e; {
	case b.m == 0 || a.isInf():
		return a
	case d >= 32:
		return a.next() // b is below one unit of a
	default:
		return magUp(uint64(a.m)<<d+uint64(b.m), b.e)
	}
}

// subDown returns max(0, a-b) rounded down.
func (a magnitude) subDown(b magnitude) magnitude {
	switch d := a.e - b.e; {
	case b.m == 0:
		return a
	case b.isInf() || a.cmp(b) <= 0:
		return magnitude{}
	case a.isInf():
		return a
	case d >= 32:
		return magDown(uint64(a.m)-1, a.e)
	default:
		return magDown(uint64(a.m)<<d-uint64(b.m), b.e)
	}
}

// addDown returns a+b rounded down.
func (a magnitude) addDown(b magnitude) magnitude {
	if b.m == 0 || a.m != 0 && a.e >= b.e+32 {
		return a
	}
	if a.m == 0 || b.e >= a.e+32 {
		return b
	}
	if a.e < b.e {
		a, b = b, a
	}
	return magDown(uint64(a.m)<<(a.e-b.e)+uint64(b.m), b.e)
}

func (a magnitude) mulUp(b magnitude) magnitude {
	if a.isInf() || b.isInf() {
		return infinite
	}
	return magUp(uint64(a.m)*uint64(b.m), a.e+b.e)
}

func (a magnitude) mulDown(b magnitude) magnitude {
	if a.m == 0 || b.m == 0 {
		return magnitude{}
	}
	if a.isInf() || b.isInf() {
		return infinite
	}
	return magDown(uint64(a.m)*uint64(b.m), a.e+b.e)
}

func (a magnitude) mulPow2(k int64) magnitude {
	if a.m == 0 || a.isInf() {
		return a
	}
	return magnitude{a.m, a.e + k}
}

// quoUp returns a/b rounded up, infinity for b = 0.
func (a magnitude) quoUp(b magnitude) magnitude {
	switch {
	case a.isInf() || b.m == 0:
		return infinite
	case a.m == 0 || b.isInf():
		return magnitude{}
	}
	q, r := bits.Div64(uint64(a.m)>>1, uint64(a.m)<<63, uint64(b.m)<<31)
	// q = floor(a.m 2^63 / (b.m 2^31)) is below 2^33.
	if r != 0 {
		q++
	}
	return magUp(q, a.e-b.e-32)
}

// sqrtFloor returns r 2^e <= sqrt(a) < (r+1) 2^e for a finite a > 0, where r has 31 or 32 bits.
func (a magnitude) sqrtFloor() (r uint64, e int64) {
	s := int64(30)
	if (a.e-s)&1 != 0 {
		s++
	}
	v := uint64(a.m) << s // below 2^63
	r = uint64(math.Sqrt(float64(v)))
	for r*r > v {
		r--
	}
	for (r+1)*(r+1) <= v {
		r++
	}
	return r, (a.e - s) / 2
}

// sqrtDown returns the square root of a rounded down.
func (a magnitude) sqrtDown() magnitude {
	if a.m == 0 || a.isInf() {
		return a
	}
	return magDown(a.sqrtFloor())
}

// sqrtUp returns an upper bound of the square root of a.
func (a magnitude) sqrtUp() magnitude {
	if a.m == 0 || a.isInf() {
		return a
	}
	r, e := a.sqrtFloor()
	return magUp(r+1, e)
}

// float returns a, rounded up or down if its exponent is beyond those of [big.Float].
func (a magnitude) float(up bool) *big.Float {
	if a.isInf() {
		return new(big.Float).SetInf(false)
	}
	return floatToward(new(big.Int).SetUint64(uint64(a.m)), a.e, up)
}

// magFloatUp returns f >= 0 rounded up.
func magFloatUp(f float64) magnitude {
	if f == 0 {
		return magnitude{}
	}
	frac, k := math.Frexp(f)
	return magUp(uint64(frac*0x1p53), int64(k)-53)
}

// magFloatDown returns f > 0 rounded down.
func magFloatDown(f float64) magnitude {
	frac, k := math.Frexp(f)
	return magDown(uint64(frac*0x1p53), int64(k)-53)
}
