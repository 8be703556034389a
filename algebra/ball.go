package algebra

import (
	"math"
	"math/big"
)

// floatFrom returns m 2^e, an infinity or 0 if the exponent is beyond those of
// [big.Float].
func floatFrom(m *big.Int, e int64) *big.Float {
	f := new(big.Float).SetInt(m)
	switch t := e + int64(m.BitLen()); {
	case t > big.MaxExp:
		return f.SetInf(m.Sign() < 0)
	case t < big.MinExp:
		return f.SetInt64(0)
	}
	return f.SetMantExp(f, int(e))
}

// floatToward returns m 2^e like floatFrom, but the next number above, or
// below, if the exponent is beyond those of [big.Float].
func floatToward(m *big.Int, e int64, up bool) *big.Float {
	f := floatFrom(m, e)
	outward := up == (m.Sign() > 0)
	one := big.NewFloat(math.Copysign(0.5, float64(m.Sign())))
	switch {
	case f.IsInf() && !outward:
		return f.SetMantExp(one, big.MaxExp)
	case f.Sign() == 0 && m.Sign() != 0 && outward:
		return f.SetMantExp(one, big.MinExp)
	}
	return f
}

// Ball is a real number known to lie in [m-r, m+r]: a midpoint m of any
// precision and a radius r of 32 bits, both with 64-bit exponents, so that
// e^(-10^6) is as good a number as any. The zero value is exactly 0. Balls are
// immutable. The result of an operation contains the results for all numbers
// in the operands; prec is the number of bits the midpoint is rounded to, and
// the rounding is added to the radius. A ball of infinite radius knows
// nothing, and nothing computed from it knows more.
//
// Source: J. van der Hoeven, Ball arithmetic, Logical Approaches to Barriers
// in Computing and Complexity, 2010, section 3.
type Ball struct {
	man *big.Int // the midpoint is man 2^exp, nil for 0
	exp int64
	rad magnitude
}

var bigZero = new(big.Int)

// unknown is the ball that contains everything.
func unknown() Ball { return Ball{rad: infinite} }

// ownBall returns m 2^e +- r with the midpoint rounded to prec bits. It takes m over.
func ownBall(m *big.Int, e int64, r magnitude, prec uint) Ball {
	n := m.BitLen()
	if n == 0 {
		return Ball{rad: r}
	}
	if uint(n) > prec {
		s := uint(n) - prec
		if m.TrailingZeroBits() < s {
			r = r.addUp(magPow2(e + int64(s))) // rounding down loses less than a unit
		}
		m.Rsh(m, s)
		e += int64(s)
	}
	if r.isInf() {
		return unknown()
	}
	return Ball{m, e, r}
}

// BallFromInt returns n exactly.
func BallFromInt(n *big.Int) Ball {
	if n.Sign() == 0 {
		return Ball{}
	}
	return Ball{man: new(big.Int).Set(n)}
}

// BallFromRat returns a ball around x, with radius 0 if x has a power of two
// as denominator and fits prec bits.
func BallFromRat(x *big.Rat, prec uint) Ball {
	return BallFromInt(x.Num()).Quo(BallFromInt(x.Denom()), prec)
}

// BallFromFloat returns x exactly. It panics if x is infinite.
func BallFromFloat(x *big.Float) Ball {
	if x.IsInf() {
		panic("algebra: ball around an infinity")
	}
	if x.Sign() == 0 {
		return Ball{}
	}
	f := new(big.Float)
	e := x.MantExp(f)
	p := int(x.MinPrec())
	m, _ := f.SetMantExp(f, p).Int(nil)
	return Ball{man: m, exp: int64(e) - int64(p)}
}

func (x Ball) mantissa() *big.Int {
	if x.man == nil {
		return bigZero
	}
	return x.man
}

// top returns t with 2^(t-1) <= |m| < 2^t for a midpoint m other than 0.
func (x Ball) top() int64 { return x.exp + int64(x.man.BitLen()) }

func (x Ball) midUp() magnitude   { return intMagUp(x.mantissa(), x.exp) }
func (x Ball) midDown() magnitude { return intMagDown(x.mantissa(), x.exp) }

// absUp returns an upper bound of the absolute values in x.
func (x Ball) absUp() magnitude { return x.midUp().addUp(x.rad) }

// absDown returns a lower bound of the absolute values in x.
func (x Ball) absDown() magnitude { return x.midDown().subDown(x.rad) }

func (x Ball) isZero() bool { return x.man == nil && x.rad.isZero() }

// point returns the midpoint as an exact ball.
func (x Ball) point() Ball { return Ball{man: x.man, exp: x.exp} }

// widen returns x with r added to the radius.
func (x Ball) widen(r magnitude) Ball {
	if r = x.rad.addUp(r); r.isInf() {
		return unknown()
	}
	return Ball{x.man, x.exp, r}
}

// Round returns x with the midpoint rounded to prec bits.
func (x Ball) Round(prec uint) Ball {
	if x.man == nil || uint(x.man.BitLen()) <= prec {
		return x
	}
	return ownBall(new(big.Int).Set(x.man), x.exp, x.rad, prec)
}

// Neg returns -x.
func (x Ball) Neg() Ball {
	if x.man == nil {
		return x
	}
	m := new(big.Int).SetBits(x.man.Bits()) // balls are immutable and may share words
	if x.man.Sign() > 0 {
		m.Neg(m)
	}
	return Ball{m, x.exp, x.rad}
}

// Add returns x + y.
func (x Ball) Add(y Ball, prec uint) Ball {
	switch {
	case x.man == nil:
		return y.widen(x.rad).Round(prec)
	case y.man == nil:
		return x.widen(y.rad).Round(prec)
	}
	if x.top() < y.top() {
		x, y = y, x
	}
	r := x.rad.addUp(y.rad)
	if x.top()-y.top() > int64(prec)+2 { // y does not reach the result's bits
		return Ball{x.man, x.exp, r.addUp(y.midUp())}.widen(magnitude{}).Round(prec)
	}
	if x.exp < y.exp {
		x, y = y, x
	}
	d := x.exp - y.exp
	if prec <= 128 {
		if z, ok := addInWords(x.man, y.man, d, y.exp, r, prec); ok {
			return z
		}
	}
	z := new(big.Int).Lsh(x.man, uint(d))
	return ownBall(z.Add(z, y.man), y.exp, r, prec)
}

// Sub returns x - y.
func (x Ball) Sub(y Ball, prec uint) Ball { return x.Add(y.Neg(), prec) }

// Mul returns x y: |xy - ab| <= |a| s + |b| r + r s for balls a +- r and b +- s.
func (x Ball) Mul(y Ball, prec uint) Ball {
	if x.rad.isInf() || y.rad.isInf() {
		return unknown()
	}
	var r magnitude
	if !x.rad.isZero() || !y.rad.isZero() {
		r = x.midUp().mulUp(y.rad).addUp(y.midUp().mulUp(x.rad)).addUp(x.rad.mulUp(y.rad))
	}
	if x.man == nil || y.man == nil {
		return Ball{rad: r}
	}
	if prec <= 128 {
		if z, ok := mulInWords(x.man, y.man, x.exp+y.exp, r, prec); ok {
			return z
		}
	}
	return ownBall(new(big.Int).Mul(x.man, y.man), x.exp+y.exp, r, prec)
}

// Sqr returns x^2.
func (x Ball) Sqr(prec uint) Ball { return x.Mul(x, prec) }

// MulInt returns n x.
func (x Ball) MulInt(n *big.Int, prec uint) Ball {
	if n.Sign() == 0 && !x.rad.isInf() {
		return Ball{}
	}
	return x.Mul(Ball{man: n}, prec)
}

// MulPow2 returns 2^k x exactly.
func (x Ball) MulPow2(k int64) Ball {
	return Ball{x.man, x.exp + k, x.rad.mulPow2(k)}
}

// Quo returns x / y. If y contains 0 the result is the ball of infinite
// radius, which never certifies anything. The radius comes from
// |x/y - a/b| <= (|a| s + |b| r) / (|b| (|b| - s)) for balls a +- r and b +- s.
func (x Ball) Quo(y Ball, prec uint) Ball {
	if x.rad.isInf() || y.ContainsZero() {
		return unknown()
	}
	var r magnitude
	if !x.rad.isZero() || !y.rad.isZero() {
		r = x.midUp().mulUp(y.rad).quoUp(y.midDown()).addUp(x.rad).quoUp(y.absDown())
	}
	if x.man == nil || r.isInf() {
		return Ball{rad: r}
	}
	s := int64(prec) + 2 + int64(y.man.BitLen()) - int64(x.man.BitLen())
	z := new(big.Int).Set(x.man)
	if s > 0 {
		z.Lsh(z, uint(s))
	} else {
		s = 0
	}
	rem := new(big.Int)
	z.QuoRem(z, y.man, rem)
	e := x.exp - y.exp - s
	if rem.Sign() != 0 {
		r = r.addUp(magPow2(e))
	}
	if tz := z.TrailingZeroBits(); tz > 0 { // keep exact quotients short
		z.Rsh(z, tz)
		e += int64(tz)
	}
	return ownBall(z, e, r, prec)
}

// AddError returns x with the radius enlarged by e >= 0. It panics if e is negative.
func (x Ball) AddError(e *big.Float) Ball {
	switch {
	case e.Sign() < 0:
		panic("algebra: negative error bound")
	case e.IsInf():
		return unknown()
	}
	return x.widen(BallFromFloat(e).midUp())
}

// Union returns a ball that contains x and y.
func (x Ball) Union(y Ball, prec uint) Ball {
	if x.rad.isInf() || y.rad.isInf() {
		return unknown()
	}
	lo, hi := x.ends()
	l, h := y.ends()
	if s, _ := lo.Sub(l, 32).Sign(); s > 0 {
		lo = l
	}
	if s, _ := hi.Sub(h, 32).Sign(); s < 0 {
		hi = h
	}
	m := lo.Add(hi, prec).MulPow2(-1).point()
	r, t := m.Sub(lo, 32).absUp(), m.Sub(hi, 32).absUp()
	if r.cmp(t) < 0 {
		r = t
	}
	return m.widen(r)
}

// ends returns the ends of a finite ball, rounded outward, as exact balls.
func (x Ball) ends() (lo, hi Ball) {
	l, h, e := x.endpoints()
	return ownBall(l, e, magnitude{}, math.MaxUint), ownBall(h, e, magnitude{}, math.MaxUint)
}

// endpoints returns lo 2^e <= m-r and hi 2^e >= m+r for a finite ball: equal
// unless m and r are so far apart that aligning them would waste memory.
func (x Ball) endpoints() (lo, hi *big.Int, e int64) {
	m, r := x.mantissa(), new(big.Int).SetUint64(uint64(x.rad.m))
	switch {
	case x.rad.isZero():
		return new(big.Int).Set(m), new(big.Int).Set(m), x.exp
	case x.man == nil:
		return new(big.Int).Neg(r), r, x.rad.e
	case x.rad.top() < x.exp-64: // r is below 2^-64 units of m: take that much
		lo = new(big.Int).Lsh(m, 64)
		hi = new(big.Int).Add(lo, intOne)
		return lo.Sub(lo, intOne), hi, x.exp - 64
	case x.top() < x.rad.e-64: // m is below 2^-64 units of r
		r.Add(r, intOne)
		return new(big.Int).Neg(r), r, x.rad.e
	case x.exp >= x.rad.e:
		m = new(big.Int).Lsh(m, uint(x.exp-x.rad.e))
		e = x.rad.e
	default:
		r.Lsh(r, uint(x.rad.e-x.exp))
		e = x.exp
	}
	return new(big.Int).Sub(m, r), r.Add(m, r), e
}

var intOne = big.NewInt(1)

// Interval returns lo and hi with every number of x in [lo, hi].
func (x Ball) Interval() (lo, hi *big.Float) {
	if x.rad.isInf() {
		return new(big.Float).SetInf(true), new(big.Float).SetInf(false)
	}
	l, h, e := x.endpoints()
	return floatToward(l, e, false), floatToward(h, e, true)
}

// Mid returns the midpoint, a copy. An exponent beyond those of [big.Float]
// gives an infinity or 0.
func (x Ball) Mid() *big.Float { return floatFrom(x.mantissa(), x.exp) }

// Rad returns an upper bound of the radius: the radius itself unless it is too
// small for [big.Float].
func (x Ball) Rad() *big.Float { return x.rad.float(true) }

// Sign returns the common sign of all numbers in x, or (0, false) if they do
// not have one.
func (x Ball) Sign() (sign int, certain bool) {
	if x.ContainsZero() {
		return 0, x.isZero()
	}
	return x.man.Sign(), true
}

// ContainsZero reports whether 0 lies in x.
func (x Ball) ContainsZero() bool {
	switch {
	case x.man == nil || x.rad.isInf():
		return true
	case x.rad.isZero():
		return false
	case x.midDown().cmp(x.rad) > 0:
		return false
	}
	lo, hi, _ := x.endpoints() // exact: the magnitudes are close, or r is far larger
	return lo.Sign() <= 0 && hi.Sign() >= 0
}

// Contains reports whether q lies in x, exactly. The cost grows with the
// exponents in x, which are written out.
func (x Ball) Contains(q *big.Rat) bool {
	if x.rad.isInf() {
		return true
	}
	d := new(big.Rat).Sub(ratFrom(x.mantissa(), x.exp), q)
	return d.Abs(d).Cmp(ratFrom(new(big.Int).SetUint64(uint64(x.rad.m)), x.rad.e)) <= 0
}

// ratFrom returns m 2^e.
func ratFrom(m *big.Int, e int64) *big.Rat {
	if e >= 0 {
		return new(big.Rat).SetInt(new(big.Int).Lsh(m, uint(e)))
	}
	return new(big.Rat).SetFrac(m, new(big.Int).Lsh(intOne, uint(-e)))
}

// Overlaps reports whether x and y may have a number in common: false is
// proven, true may be wrong when the balls are within 2^-31 of touching.
func (x Ball) Overlaps(y Ball) bool { return x.Sub(y, 64).ContainsZero() }

// RelPrec returns the number of bits of x that are proven: the largest k such
// that the radius is at most 2^-k |t| for every t in x. It is 0 if that k is
// negative or x contains 0, and [math.MaxInt] if x is exact.
func (x Ball) RelPrec() int {
	if x.rad.isZero() {
		return math.MaxInt
	}
	q := x.rad.quoUp(x.absDown())
	if q.isInf() {
		return 0
	}
	k := -q.top() // q < 2^-k
	if q.m == 1<<31 {
		k++
	}
	return int(max(k, 0))
}
