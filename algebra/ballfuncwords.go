package algebra

import (
	"math"
	"math/big"
	"math/bits"
	"sync"
)

// This file has exponential, sine and cosine for up to wordFuncPrec bits in
// fractions of three words: the argument is reduced by ln 2 or pi/2, then by
// the nearest 1/64 below, whose function values are in a table, and the rest
// r < 1/64 goes into the Taylor series. Sources: R. P. Brent, P. Zimmermann, Modern
// Computer Arithmetic, 2010, sections 4.3 and 4.4; P. T. P. Tang, Table-driven
// implementation of the exponential function, ACM TOMS 15, 1989.

// wordFuncPrec is the greatest precision for which the errors, below 2^-185, do
// not show; up to shortFuncPrec, those of a shorter series do not, below 2^-140.
const (
	wordFuncPrec  = 176
	shortFuncPrec = 130
)

// fraction stands for (hi 2^128 + mid 2^64 + lo) 2^-192.
type fraction struct{ hi, mid, lo uint64 }

// mul returns x y, less than 4 units in the last place too small: the columns
// of low words, with two high halves of products in the last of them, are left out,
// and so is the column before the result.
func (x fraction) mul(y fraction) fraction {
	var h, l, c uint64
	a1, a0 := bits.Mul64(x.lo, y.hi)
	h, l = bits.Mul64(x.mid, y.mid)
	a0, c = bits.Add64(a0, l, 0)
	a1, a2 := bits.Add64(a1, h, c)
	h, l = bits.Mul64(x.hi, y.lo)
	_, c = bits.Add64(a0, l, 0)
	a1, c = bits.Add64(a1, h, c)
	a2 += c
	h, l = bits.Mul64(x.mid, y.hi)
	a1, c = bits.Add64(a1, l, 0)
	a2, a3 := bits.Add64(a2, h, c)
	h, l = bits.Mul64(x.hi, y.mid)
	a1, c = bits.Add64(a1, l, 0)
	a2, c = bits.Add64(a2, h, c)
	a3 += c
	h, l = bits.Mul64(x.hi, y.hi)
	a2, c = bits.Add64(a2, l, 0)
	return fraction{a3 + h + c, a2, a1}
}

func (x fraction) add(y fraction) fraction {
	lo, c := bits.Add64(x.lo, y.lo, 0)
	mid, c := bits.Add64(x.mid, y.mid, c)
	return fraction{x.hi + y.hi + c, mid, lo}
}

func (x fraction) sub(y fraction) fraction {
	lo, c := bits.Sub64(x.lo, y.lo, 0)
	mid, c := bits.Sub64(x.mid, y.mid, c)
	return fraction{x.hi - y.hi - c, mid, lo}
}

// ball returns x 2^e with an error of at most err units in the last place of x,
// rounded to prec bits, for x > 0.
func (x fraction) ball(e int64, err uint64, prec uint, neg bool) Ball {
	mem := new(struct {
		m big.Int
		w [192 / wordBits]big.Word
	})
	for i := range mem.w {
		v := x.lo
		switch i * wordBits / 64 {
		case 1:
			v = x.mid
		case 2:
			v = x.hi
		}
		mem.w[i] = big.Word(v >> (i * wordBits % 64))
	}
	m := mem.m.SetBits(mem.w[:])
	if neg {
		m.Neg(m)
	}
	return ownBall(m, e-192, magUp(err, e-192), prec)
}

// wordFuncTables holds what the functions need, each entry the number rounded
// down to three words, or less by one unit in the last place.
type wordFuncTables struct {
	inverse  [23]fraction  // 1/n!; 0 and 1 are not used
	exp      [45]fraction  // e^(i/64) / 2
	sin, cos [101]fraction // of i/64, / 2
	ln2, pi2 reducer
}

// reducer is ln 2 or pi/2 in units of 2^-256, off by at most 2, the lowest word first.
type reducer [5]uint64

// float returns the number about.
func (c *reducer) float() float64 {
	return float64(int64(c[4])) + float64(c[3])*0x1p-64
}

var wordFuncs = sync.OnceValue(func() *wordFuncTables {
	const prec = 320
	t := new(wordFuncTables)
	down := func(x Ball) fraction {
		lo, _, e := x.endpoints()
		var w [3]uint64
		setFixed(w[:], lo, e+192)
		return fraction{w[2], w[1], w[0]}
	}
	f := Ball{man: intOne}
	for n := range t.inverse {
		if n > 1 {
			f = f.Quo(Ball{man: big.NewInt(int64(n))}, prec)
			t.inverse[n] = down(f)
		}
	}
	step := Ball{man: intOne, exp: -6}
	e, x := expSeries(step, prec), Ball{man: intOne}
	for i := range t.exp {
		t.exp[i] = down(x.MulPow2(-1))
		x = x.Mul(e, prec)
	}
	s, c := sinCosSeries(step, prec)
	y := ComplexBall{Re: Ball{man: intOne}}
	for i := range t.sin {
		if i > 0 {
			t.sin[i] = down(y.Im.MulPow2(-1))
		}
		t.cos[i] = down(y.Re.MulPow2(-1))
		y = y.Mul(ComplexBall{c, s}, prec)
	}
	setFixed(t.ln2[:], constLn2.fixed(256), 0)
	setFixed(t.pi2[:], constPi.fixed(255), 0)
	return t
})

// reduce returns k, j and r with x = k c + j/64 + r and 0 <= r < 1/64, the sum of
// the latter about in [0, c), for the midpoint of x below 2^20. With the errors
// of c, r is off by at most 2|k|+2 units of 2^-256, which is below 2^-232, and
// then rounded down to three words. ok is false if no such k was found.
func (x Ball) reduce(c *reducer) (k int64, j int, r fraction, ok bool) {
	var m reducer // x in the same units
	setFixed(m[:], x.man, x.exp+256)
	k = int64(math.Floor(m.float() / c.float()))
	for range 3 {
		n := uint64(max(k, -k))
		var p reducer // |k| c
		var carry uint64
		for i, v := range c {
			h, l := bits.Mul64(n, v)
			var b uint64
			p[i], b = bits.Add64(l, carry, 0)
			carry = h + b
		}
		t := m
		if k >= 0 {
			fixedSub(t[:], t[:], p[:])
		} else {
			fixedAdd(t[:], t[:], p[:])
		}
		switch {
		case int64(t[4]) < 0:
			k--
		case t[4] > c[4] || t[4] == c[4] && (t[3] > c[3] || t[3] == c[3] && t[2] >= c[2]):
			k++
		default:
			return k, int(t[4]<<6 | t[3]>>58), fraction{t[3] << 6 >> 6, t[2], t[1]}, true
		}
	}
	return 0, 0, r, false
}

// expInWords returns e^m for the midpoint m of x, 0 < |m| < 2^20, or ok = false.
//
// In units of 2^-192: every step of Horner's scheme for h, the sum of
// r^(n-2)/n! for n = 2 ... 22, is off by less than 4 + 1 + 1/8, the rest of the
// series is below 1, so s = e^r - 1 = r + r (r h) is off by less than 7 with the
// error 1 of r. The table is off by 1, less than 2 after the product with 1 + s,
// so that the result is off by less than 2 + 4 + 7/2 < 10. For the lower
// precision the terms from n = 18 on are left out, below 2^(-108-52) = 2^32 units.
func expInWords(x Ball, prec uint) (z Ball, ok bool) {
	tab := wordFuncs()
	k, j, r, ok := x.reduce(&tab.ln2)
	if !ok || j >= len(tab.exp) {
		return z, false
	}
	last, err := 22, uint64(10)
	if prec <= shortFuncPrec {
		last, err = 17, 1<<33
	}
	h := tab.inverse[last]
	for n := last - 1; n >= 2; n-- {
		h = h.mul(r).add(tab.inverse[n])
	}
	s := r.add(r.mul(r.mul(h)))
	e := tab.exp[j]
	e = e.add(e.mul(s))
	if e.hi>>63 == 0 { // 1 or more, for t close to ln 2
		return z, false
	}
	return e.ball(k+1, err, prec, false), true
}

// sinCosInWords returns sine and cosine of the midpoint of x, of modulus below
// 2^20, or ok = false, also if one of them is so small that bits are missing.
//
// In units of 2^-192: q = r^2 is off by less than 5, and every step of Horner's
// schemes in q by less than 4 + 1 + 1/8, so sin r = r - r (q a) by less than 7
// and v = 1 - cos r by less than 8, with the rests of the series below 1. The
// halves of sin(b + r) = sin b - v sin b + sin r cos b and
// cos(b + r) = cos b - v cos b - sin r sin b for b = j/64 are off by less than 1
// for the table, and 4 + 8/2 + 1 for each product: less than 20. For the lower
// precision the terms from r^18 on are left out, as for exp.
func sinCosInWords(x Ball, prec uint) (sin, cos Ball, ok bool) {
	tab := wordFuncs()
	k, j, r, ok := x.reduce(&tab.pi2)
	if !ok || j >= len(tab.sin) {
		return sin, cos, false
	}
	last, err := 21, uint64(20)
	// Up to 2^-(prec+2) of a sine or cosine of at least 2^(prec-least) is error.
	least := uint(192 - 5 - 2)
	if prec <= shortFuncPrec {
		last, err, least = 17, 1<<34, 192-34-2
	}
	q := r.mul(r)
	a, v := tab.inverse[last], tab.inverse[last+1]
	for n := last - 2; n >= 3; n -= 2 {
		a = tab.inverse[n].sub(a.mul(q))
		v = tab.inverse[n+1].sub(v.mul(q))
	}
	s := r.sub(r.mul(q.mul(a)))
	v = q.mul(fraction{hi: 1 << 63}.sub(q.mul(v)))
	b, c := tab.sin[j], tab.cos[j]
	y := b.sub(b.mul(v)).add(c.mul(s))
	z := c.sub(c.mul(v)).sub(b.mul(s))
	// A negative number, by rounding, has a high word beyond 2^63.
	low := uint64(1) << max(64+int(prec)-int(least), 0)
	if y.hi < low || z.hi < low || y.hi > 1<<63 || z.hi > 1<<63 {
		return sin, cos, false
	}
	if k&1 != 0 { // sin(t + pi/2) = cos t, cos(t + pi/2) = -sin t
		return z.ball(1, err, prec, k&2 != 0), y.ball(1, err, prec, k&2 == 0), true
	}
	return y.ball(1, err, prec, k&2 != 0), z.ball(1, err, prec, k&2 != 0), true
}
