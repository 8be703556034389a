package algebra

import (
	"math"
	"math/big"
	"math/bits"
)

// wordPoly evaluates p(2^exp t) = 2^scale sum C_k t^k for 1/4 <= |t| <= 2^(-level/8)
// in fixed-point numbers of w words: X 2^(-64w) for a two's complement integer X
// of w words, the lowest first.
//
// The scheme of Horner, b_k = C_k + t b_{k+1} and d_k = b_{k+1} + t d_{k+1} for
// the derivative, runs on B_k = 2^-s_k b_k and D_k = 2^-s_k d_k with
// s_k = floor(k level/8), which keeps high coefficients from wasting bits on
// small points: the factor is t or 2t from step to step, the product of those
// from any step to any other at most 2, and to the last at most 1.
// The scale makes the sum of (k+1) 2^-s_k |C_k| less than 1/16. It bounds all
// |B_k| by 1/8 and all |D_k| by 2/(16|t|) <= 1/2: nothing overflows.
type wordPoly struct {
	wordScale
	n     int
	scale int64
	c     []uint64 // 2^-s_k C_k in words w k ... w (k+1) - 1, towards zero
	shift []uint8  // s_{k+1} - s_k
}

// wordScale tells which points a wordPoly is for.
type wordScale struct {
	exp   int64
	level int // 0 ... 8
	w     int
}

// newWordScale is for points of modulus about size 2^exp, 1/4 < size < 1.
func newWordScale(exp int64, size float64, w int) wordScale {
	level := int(-8 * math.Log2(size*(1+0x1p-30)))
	return wordScale{exp, min(max(level, 0), 8), w}
}

// wordPoint is the number 2^(exp+1) (re + i im), of modulus at most 2^exp.
type wordPoint struct {
	re, im []uint64
	exp    int64
}

func newWordPoly(c []*big.Int, s wordScale) *wordPoly {
	n := len(c) - 1
	p := &wordPoly{wordScale: s, n: n, scale: math.MinInt64, c: make([]uint64, (n+1)*s.w), shift: make([]uint8, n+1)}
	at := func(k int) int64 { return s.exp*int64(k) - int64(k*s.level/8) }
	for k, x := range c {
		if x.Sign() != 0 { // |c_k| < 2^BitLen
			p.scale = max(p.scale, int64(x.BitLen()+bits.Len(uint(k+1)))+at(k))
		}
		p.shift[k] = uint8((k+1)*s.level/8 - k*s.level/8)
	}
	p.scale += int64(bits.Len(uint(n+1))) + 4
	for k, x := range c {
		setFixed(p.c[k*s.w:(k+1)*s.w], x, 64*int64(s.w)+at(k)-p.scale)
	}
	return p
}

// errors returns bounds of the errors of the values and the derivatives that
// eval finds, without the rounding to float64. In units of the last place a
// product is off by less than w+1, always downward, see fixedMul. A step
// C + 4(x+iy)b, t = 2(x+iy), is off by less than 4(w+1) in the real part, a
// difference of products, and 8(w+1) in the imaginary part, and C by 1; those
// of fixedFactor2 by less than 16, 24 and 1: at most u = 10(w+1)+1 in all. As the factors from a step to the last one are at most 1,
// the n+1 steps add up to (n+1)u, and to 2(n+1)u for any B_k, as those are at
// most 2. A step of the derivative takes over twice the error of B and adds u:
// in all n (4(n+1) + 1) u.
func (p *wordPoly) errors() (value, deriv float64) {
	n := float64(p.n)
	u := math.Ldexp(float64(10*(p.w+1)+1), -64*p.w)
	return (n + 1) * u, n * (4*n + 5) * u
}

// eval returns sum C_k t^k and, if asked for, its derivative by t at the point
// z = 2^exp t with the exponent of p and as many words, within the bounds of
// errors and 2^-50 of the value.
func (p *wordPoly) eval(z wordPoint, deriv bool) (value, slope complex128) {
	real := true
	for _, x := range z.im {
		real = real && x == 0
	}
	switch {
	case p.w == 2 && real:
		return p.evalReal2(z, deriv)
	case p.w == 2:
		return p.evalComplex2(z, deriv)
	}
	var mem [8 * maxWords]uint64
	part := func(i int) []uint64 { return mem[i*maxWords : i*maxWords+p.w] }
	br, bi, dr, di := part(0), part(1), part(2), part(3)
	nr, ni, u, v := part(4), part(5), part(6), part(7)
	// step returns the parts of 2(x+iy)(a+bi), in nr and ni.
	step := func(a, b []uint64) {
		fixedMul(u, z.re, a)
		if real {
			fixedAdd(nr, u, u)
			return
		}
		fixedMul(v, z.im, b)
		fixedSub(u, u, v)
		fixedAdd(nr, u, u)
		fixedMul(u, z.re, b)
		fixedMul(v, z.im, a)
		fixedAdd(u, u, v)
		fixedAdd(ni, u, u)
	}
	for k := p.n; k >= 0; k-- {
		twice := p.shift[k] > 0
		if deriv && k < p.n {
			step(dr, di)
			fixedAdd(dr, nr, br)
			fixedAdd(di, ni, bi)
			if twice {
				fixedAdd(dr, dr, dr)
				fixedAdd(di, di, di)
			}
		}
		c := p.c[k*p.w : (k+1)*p.w]
		if k == p.n {
			copy(br, c)
			continue
		}
		step(br, bi)
		if twice {
			fixedAdd(nr, nr, nr)
			fixedAdd(ni, ni, ni)
		}
		fixedAdd(br, nr, c)
		bi, ni = ni, bi
	}
	return complex(fixedFloat(br), fixedFloat(bi)), complex(fixedFloat(dr), fixedFloat(di))
}

// evalReal2 is eval for two words and a real point.
func (p *wordPoly) evalReal2(z wordPoint, deriv bool) (value, slope complex128) {
	x0, x1 := z.re[0], z.re[1]
	var b0, b1, d0, d1 uint64
	for k := p.n; k >= 0; k-- {
		s := p.shift[k] & 1
		if deriv {
			t1, t0 := fixedMul2(x1, x0, d1, d0)
			t1, t0 = t1<<1|t0>>63, t0<<1
			var c uint64
			d0, c = bits.Add64(t0, b0, 0)
			d1 = t1 + b1 + c
			d1, d0 = d1<<s|d0>>63>>(s^1), d0<<s
		}
		t1, t0 := fixedMul2(x1, x0, b1, b0)
		s++
		t1, t0 = t1<<s|t0>>(64-s), t0<<s
		var c uint64
		b0, c = bits.Add64(t0, p.c[2*k], 0)
		b1 = t1 + p.c[2*k+1] + c
	}
	return complex(fixedFloat2(b1, b0), 0), complex(fixedFloat2(d1, d0), 0)
}

// evalComplex2 is eval for two words.
func (p *wordPoly) evalComplex2(z wordPoint, deriv bool) (value, slope complex128) {
	f := newFixedFactor2(z.re[1], z.re[0], z.im[1], z.im[0])
	var r0, r1, i0, i1, dr0, dr1, di0, di1 uint64
	for k := p.n; k >= 0; k-- {
		var c uint64
		s := p.shift[k] & 1
		if deriv {
			a1, a0, b1, b0 := f.mul(dr1, dr0, di1, di0)
			a1, a0, b1, b0 = a1<<1|a0>>63, a0<<1, b1<<1|b0>>63, b0<<1
			a0, c = bits.Add64(a0, r0, 0)
			a1 += r1 + c
			b0, c = bits.Add64(b0, i0, 0)
			b1 += i1 + c
			dr1, dr0 = a1<<s|a0>>63>>(s^1), a0<<s
			di1, di0 = b1<<s|b0>>63>>(s^1), b0<<s
		}
		a1, a0, b1, b0 := f.mul(r1, r0, i1, i0)
		s++
		a1, a0, b1, b0 = a1<<s|a0>>(64-s), a0<<s, b1<<s|b0>>(64-s), b0<<s
		r0, c = bits.Add64(a0, p.c[2*k], 0)
		r1 = a1 + p.c[2*k+1] + c
		i0, i1 = b0, b1
	}
	return complex(fixedFloat2(r1, r0), fixedFloat2(i1, i0)), complex(fixedFloat2(dr1, dr0), fixedFloat2(di1, di0))
}

// fixedFactor2 is a factor x+iy of two words prepared for products with many
// numbers a+bi. With every number raised by 1/2, and so without a sign,
//
//	x a - y b = x' a' - y' b' - (x-y)/2 - (a-b)/2
//	x b + y a = x' b' + y' a' - (x+y)/2 - (a+b)/2 - 1/2
//
// which spares the four corrections of the signs.
type fixedFactor2 struct {
	x1, x0, y1, y0 uint64 // x' and y'
	r1, r0, i1, i0 uint64 // (x-y)/2 and (x+y)/2 + 1/2
}

func newFixedFactor2(x1, x0, y1, y0 uint64) fixedFactor2 {
	f := fixedFactor2{x1: x1 ^ 1<<63, x0: x0, y1: y1 ^ 1<<63, y0: y0}
	x1, x0, y1, y0 = uint64(int64(x1)>>1), x1<<63|x0>>1, uint64(int64(y1)>>1), y1<<63|y0>>1
	var c uint64
	f.r0, c = bits.Sub64(x0, y0, 0)
	f.r1 = x1 - y1 - c
	f.i0, c = bits.Add64(x0, y0, 0)
	f.i1 = (x1 + y1 + c) ^ 1<<63
	return f
}

// mul returns the parts of the product with a+bi. Products without a sign miss
// three carries from below, so are off by less than 3 units of the last place,
// downward, and halves by 1/2: in all less than 4 in the real part, a difference,
// and 6 in the imaginary part.
func (f *fixedFactor2) mul(a1, a0, b1, b0 uint64) (r1, r0, i1, i0 uint64) {
	var c uint64
	h1, h0, k1, k0 := uint64(int64(a1)>>1), a1<<63|a0>>1, uint64(int64(b1)>>1), b1<<63|b0>>1
	a1, b1 = a1^1<<63, b1^1<<63

	r1, r0 = fixedMulUnsigned2(f.x1, f.x0, a1, a0)
	s1, s0 := fixedMulUnsigned2(f.y1, f.y0, b1, b0)
	r0, c = bits.Sub64(r0, s0, 0)
	r1, _ = bits.Sub64(r1, s1, c)
	r0, c = bits.Sub64(r0, h0, 0)
	r1, _ = bits.Sub64(r1, h1, c)
	r0, c = bits.Add64(r0, k0, 0)
	r1, _ = bits.Add64(r1, k1, c)
	r0, c = bits.Sub64(r0, f.r0, 0)
	r1, _ = bits.Sub64(r1, f.r1, c)

	i1, i0 = fixedMulUnsigned2(f.x1, f.x0, b1, b0)
	s1, s0 = fixedMulUnsigned2(f.y1, f.y0, a1, a0)
	i0, c = bits.Add64(i0, s0, 0)
	i1, _ = bits.Add64(i1, s1, c)
	i0, c = bits.Sub64(i0, h0, 0)
	i1, _ = bits.Sub64(i1, h1, c)
	i0, c = bits.Sub64(i0, k0, 0)
	i1, _ = bits.Sub64(i1, k1, c)
	i0, c = bits.Sub64(i0, f.i0, 0)
	i1, _ = bits.Sub64(i1, f.i1, c)
	return r1, r0, i1, i0
}

// fixedMulUnsigned2 returns the upper words of a product without signs, up to
// three carries.
func fixedMulUnsigned2(x1, x0, y1, y0 uint64) (z1, z0 uint64) {
	h, _ := bits.Mul64(x0, y1)
	k, _ := bits.Mul64(x1, y0)
	z1, z0 = bits.Mul64(x1, y1)
	z0, c := bits.Add64(z0, h, 0)
	z1 += c
	z0, c = bits.Add64(z0, k, 0)
	return z1 + c, z0
}
