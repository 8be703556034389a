package algebra

import (
	"math"
	"math/big"
	"math/bits"
)

// Fixed-point numbers are integers X of w words in two's complement, the lowest
// first, that stand for X 2^(-64w), in [-1/2, 1/2).

// maxWords bounds the words of a fixed-point number: more would not fit the
// exponents of float64, and big.Int is as fast by then.
const maxWords = 14

// fixedMul2 is fixedMul for two words.
func fixedMul2(x1, x0, y1, y0 uint64) (z1, z0 uint64) {
	ah, al := bits.Mul64(x0, y1)
	bh, bl := bits.Mul64(x1, y0)
	z1, z0 = bits.Mul64(x1, y1)
	_, c := bits.Add64(al, bl, 0)
	z0, c = bits.Add64(z0, ah, c)
	z1 += c
	z0, c = bits.Add64(z0, bh, 0)
	z1 += c
	m := uint64(int64(x1) >> 63)
	z0, c = bits.Sub64(z0, y0&m, 0)
	z1 -= y1&m + c
	m = uint64(int64(y1) >> 63)
	z0, c = bits.Sub64(z0, x0&m, 0)
	z1 -= x1&m + c
	return z1, z0
}

// fixedMul sets z to the product of x and y, all of w words, off by less than
// w+1 units in the last place, downward. z is neither x nor y.
//
// The product of the words as unsigned numbers is formed from the columns from
// w-1 on. The others hold at most w-1 high halves of products beside numbers
// below one of their units, so dropping them costs less than w units, and
// dropping column w-1 then one more. A negative x stands for x + 2^(64w), whose
// product has y 2^(64w) too much: subtract it, and likewise for y.
func fixedMul(z, x, y []uint64) {
	w := len(z)
	x, y = x[:w], y[:w]
	switch w {
	case 3:
		fixedMul3((*[3]uint64)(z), (*[3]uint64)(x), (*[3]uint64)(y))
		return
	case 4:
		fixedMul4((*[4]uint64)(z), (*[4]uint64)(x), (*[4]uint64)(y))
		return
	}
	// Row i reaches column w-1+i, which is z[i-1], and carries into z[i].
	_, low := bits.Mul64(x[0], y[w-1])
	z[0], _ = bits.Mul64(x[0], y[w-1])
	for i := 1; i < w; i++ {
		a := x[i]
		carry, l := bits.Mul64(a, y[w-1-i])
		var c uint64
		low, c = bits.Add64(low, l, 0)
		carry += c
		row, out := y[w-i:], z[:i]
		for j, s := range out {
			h, l := bits.Mul64(a, row[j])
			l, c = bits.Add64(l, s, 0)
			h += c
			l, c = bits.Add64(l, carry, 0)
			carry = h + c
			out[j] = l
		}
		z[i] = carry
	}
	if int64(x[w-1]) < 0 {
		fixedSub(z, z, y)
	}
	if int64(y[w-1]) < 0 {
		fixedSub(z, z, x)
	}
}

// fixedMul3 is fixedMul for three words, by rows.
func fixedMul3(z, x, y *[3]uint64) {
	var h, l, c uint64
	var a0, a1, a2, a3 uint64
	a1, a0 = bits.Mul64(x[0], y[2])
	h, l = bits.Mul64(x[1], y[1])
	a0, c = bits.Add64(a0, l, 0)
	a1, c = bits.Add64(a1, h, c)
	a2 += c
	h, l = bits.Mul64(x[1], y[2])
	a1, c = bits.Add64(a1, l, 0)
	a2 += h + c
	h, l = bits.Mul64(x[2], y[0])
	_, c = bits.Add64(a0, l, 0)
	a1, c = bits.Add64(a1, h, c)
	a2, c = bits.Add64(a2, 0, c)
	a3 += c
	h, l = bits.Mul64(x[2], y[1])
	a1, c = bits.Add64(a1, l, 0)
	a2, c = bits.Add64(a2, h, c)
	a3 += c
	h, l = bits.Mul64(x[2], y[2])
	a2, c = bits.Add64(a2, l, 0)
	a3 += h + c
	h = uint64(int64(x[2]) >> 63)
	a1, c = bits.Sub64(a1, y[0]&h, 0)
	a2, c = bits.Sub64(a2, y[1]&h, c)
	a3 -= y[2]&h + c
	h = uint64(int64(y[2]) >> 63)
	a1, c = bits.Sub64(a1, x[0]&h, 0)
	a2, c = bits.Sub64(a2, x[1]&h, c)
	a3 -= x[2]&h + c
	z[0] = a1
	z[1] = a2
	z[2] = a3
}

// fixedMul4 is fixedMul for four words, by rows.
func fixedMul4(z, x, y *[4]uint64) {
	var h, l, c uint64
	var a0, a1, a2, a3, a4 uint64
	a1, a0 = bits.Mul64(x[0], y[3])
	h, l = bits.Mul64(x[1], y[2])
	a0, c = bits.Add64(a0, l, 0)
	a1, c = bits.Add64(a1, h, c)
	a2 += c
	h, l = bits.Mul64(x[1], y[3])
	a1, c = bits.Add64(a1, l, 0)
	a2 += h + c
	h, l = bits.Mul64(x[2], y[1])
	a0, c = bits.Add64(a0, l, 0)
	a1, c = bits.Add64(a1, h, c)
	a2, c = bits.Add64(a2, 0, c)
	a3 += c
	h, l = bits.Mul64(x[2], y[2])
	a1, c = bits.Add64(a1, l, 0)
	a2, c = bits.Add64(a2, h, c)
	a3 += c
	h, l = bits.Mul64(x[2], y[3])
	a2, c = bits.Add64(a2, l, 0)
	a3 += h + c
	h, l = bits.Mul64(x[3], y[0])
	_, c = bits.Add64(a0, l, 0)
	a1, c = bits.Add64(a1, h, c)
	a2, c = bits.Add64(a2, 0, c)
	a3, c = bits.Add64(a3, 0, c)
	a4 += c
	h, l = bits.Mul64(x[3], y[1])
	a1, c = bits.Add64(a1, l, 0)
	a2, c = bits.Add64(a2, h, c)
	a3, c = bits.Add64(a3, 0, c)
	a4 += c
	h, l = bits.Mul64(x[3], y[2])
	a2, c = bits.Add64(a2, l, 0)
	a3, c = bits.Add64(a3, h, c)
	a4 += c
	h, l = bits.Mul64(x[3], y[3])
	a3, c = bits.Add64(a3, l, 0)
	a4 += h + c
	h = uint64(int64(x[3]) >> 63)
	a1, c = bits.Sub64(a1, y[0]&h, 0)
	a2, c = bits.Sub64(a2, y[1]&h, c)
	a3, c = bits.Sub64(a3, y[2]&h, c)
	a4 -= y[3]&h + c
	h = uint64(int64(y[3]) >> 63)
	a1, c = bits.Sub64(a1, x[0]&h, 0)
	a2, c = bits.Sub64(a2, x[1]&h, c)
	a3, c = bits.Sub64(a3, x[2]&h, c)
	a4 -= x[3]&h + c
	z[0] = a1
	z[1] = a2
	z[2] = a3
	z[3] = a4
}

func fixedAdd(z, x, y []uint64) {
	var c uint64
	x, y = x[:len(z)], y[:len(z)]
	for i := range z {
		z[i], c = bits.Add64(x[i], y[i], c)
	}
}

func fixedSub(z, x, y []uint64) {
	var c uint64
	x, y = x[:len(z)], y[:len(z)]
	for i := range z {
		z[i], c = bits.Sub64(x[i], y[i], c)
	}
}

// fixedHalve sets x to x/2, rounded down.
func fixedHalve(x []uint64) {
	for i := range x {
		hi := uint64(int64(x[i]) >> 63)
		if i+1 < len(x) {
			hi = x[i+1]
		}
		x[i] = x[i]>>1 | hi<<63
	}
}

func fixedNeg(z []uint64) {
	c := uint64(1)
	for i := range z {
		z[i], c = bits.Add64(^z[i], 0, c)
	}
}

// setFixed sets z to m 2^shift rounded towards zero. The result must fit.
func setFixed(z []uint64, m *big.Int, shift int64) {
	words := m.Bits()
	word := func(i int64) uint64 {
		if wordBits == 32 {
			var v uint64
			for k := 2*i + 1; k >= 2*i; k-- {
				v <<= 32
				if k >= 0 && k < int64(len(words)) {
					v |= uint64(words[k])
				}
			}
			return v
		}
		if i < 0 || i >= int64(len(words)) {
			return 0
		}
		return uint64(words[i])
	}
	q, s := (-shift)>>6, uint(-shift)&63
	for i := range z {
		z[i] = word(q+int64(i))>>s | word(q+int64(i)+1)<<(64-s) // a shift by 64 gives 0
	}
	if m.Sign() < 0 {
		fixedNeg(z)
	}
}

// fixedBig returns the integer X.
func fixedBig(x []uint64) *big.Int {
	neg := int64(x[len(x)-1]) < 0
	if neg {
		y := make([]uint64, len(x))
		copy(y, x)
		fixedNeg(y)
		x = y
	}
	var m *big.Int
	if wordBits == 64 {
		w := make([]big.Word, len(x))
		for i, v := range x {
			w[i] = big.Word(v)
		}
		m = new(big.Int).SetBits(w)
	} else {
		m = new(big.Int)
		for i := len(x) - 1; i >= 0; i-- {
			m.Lsh(m, 64).Or(m, new(big.Int).SetUint64(x[i]))
		}
	}
	if neg {
		m.Neg(m)
	}
	return m
}

// fixedFloat returns the number x within 2^-51 of its absolute value.
func fixedFloat(x []uint64) float64 {
	neg := int64(x[len(x)-1]) < 0
	i, carry := len(x)-1, uint64(0)
	if neg { // the words of -x are the complements, plus a carry from below
		carry = ^uint64(0)
	}
	for i > 0 && x[i] == carry {
		i--
	}
	if i < 2 {
		i = min(2, len(x)-1)
	}
	// Three words from the first that counts hold at least 128 bits of it, so that
	// leaving out the carry that the lower ones may send is harmless.
	var f float64
	for k := i; k >= max(i-2, 0); k-- {
		f = f*0x1p64 + float64(x[k]^carry)
	}
	if neg {
		if i <= 2 {
			f++
		}
		f = -f
	}
	return math.Ldexp(f, 64*(max(i-2, 0)-len(x)))
}

// fixedFloat2 is fixedFloat for two words.
func fixedFloat2(x1, x0 uint64) float64 {
	neg := int64(x1) < 0
	if neg {
		var c uint64
		x0, c = bits.Sub64(0, x0, 0)
		x1 = -x1 - c
	}
	f := float64(x1)*0x1p-64 + float64(x0)*0x1p-128
	if neg {
		return -f
	}
	return f
}

// fixedAddFloat adds f to x, rounded to a unit in the last place. |f| < 1/2.
func fixedAddFloat(x []uint64, f float64) {
	if f == 0 {
		return
	}
	frac, e := math.Frexp(math.Abs(f)) // f = frac 2^e = m 2^(e-53)
	m := uint64(frac * 0x1p53)
	s := e - 53 + 64*len(x)
	if s < 0 {
		m >>= uint(min(-s, 64))
		s = 0
	}
	i := s / 64
	lo, hi := m<<(s%64), m>>(64-s%64)
	var c uint64
	add := func(v uint64) {
		if i < len(x) {
			if f > 0 {
				x[i], c = bits.Add64(x[i], v, c)
			} else {
				x[i], c = bits.Sub64(x[i], v, c)
			}
			i++
		}
	}
	add(lo)
	add(hi)
	for i < len(x) && c != 0 {
		add(0)
	}
}
