package algebra

import (
	"math"
	"math/big"
	"math/bits"
	"sync"
)

// realConstant computes and keeps a positive constant. Values are computed at
// fixed levels of precision, so that what a caller gets does not depend on
// what was asked before.
type realConstant struct {
	terms []atanTerm
	mu    sync.Mutex
	level map[uint]*big.Int
}

// atanTerm stands for c atan(1/n), or c artanh(1/n) if sign is 1 and not -1.
type atanTerm struct{ c, n, sign int64 }

var (
	// pi = 48 atan(1/18) + 32 atan(1/57) - 20 atan(1/239), Gauss.
	constPi = realConstant{terms: []atanTerm{{48, 18, -1}, {32, 57, -1}, {-20, 239, -1}}}
	// ln 2 = 18 artanh(1/26) - 2 artanh(1/4801) + 8 artanh(1/8749).
	constLn2 = realConstant{terms: []atanTerm{{18, 26, 1}, {-2, 4801, 1}, {8, 8749, 1}}}
	// ln 10 = 46 artanh(1/31) + 34 artanh(1/49) + 20 artanh(1/161).
	constLn10 = realConstant{terms: []atanTerm{{46, 31, 1}, {34, 49, 1}, {20, 161, 1}}}
)

// fixed returns an integer v with |v - c 2^q| <= 2. The caller must not modify it.
func (c *realConstant) fixed(q uint) *big.Int {
	l := max(256, uint(1)<<bits.Len(q-1))
	c.mu.Lock()
	defer c.mu.Unlock()
	v := c.level[l]
	if v == nil {
		// Each series is off by at most two units of 2^-(l+16) before it is
		// multiplied by c < 2^7, so that the sum is off by less than 2^-5 units of 2^-l.
		sum := new(big.Int)
		for _, t := range c.terms {
			s := atanSeries(t.n, t.sign, l+16)
			sum.Add(sum, s.Mul(s, big.NewInt(t.c)))
		}
		v = sum.Rsh(sum, 16)
		if c.level == nil {
			c.level = make(map[uint]*big.Int)
		}
		c.level[l] = v
	}
	return new(big.Int).Rsh(v, l-q)
}

// ball returns the constant with prec bits.
func (c *realConstant) ball(prec uint) Ball {
	q := prec + 8
	return ownBall(c.fixed(q), -int64(q), magPow2(1-int64(q)), prec+4)
}

// atanSeries returns v with |v - 2^q f(1/n)| <= 2, f = atan for sign = -1 and
// artanh for sign = 1, by binary splitting of sum sign^k / ((2k+1) n^(2k+1)).
// Source: B. Haible, T. Papanikolaou, Fast multiprecision evaluation of series
// of rational numbers, ANTS-III, 1998, section 2.
func atanSeries(n, sign int64, q uint) *big.Int {
	// The rest of the series after N terms is below 2 n^(-2N-1) < 2^-q.
	terms := int64(float64(q)/(2*math.Log2(float64(n)))) + 2
	n2 := big.NewInt(n * n)
	// split returns t, b, p with sum_{a<=k<c} sign^(k-a) / ((2k+1) n^(2(k-a))) = t / (b p).
	var split func(a, c int64) (t, b, p *big.Int)
	split = func(a, c int64) (t, b, p *big.Int) {
		if c-a == 1 {
			return n2, big.NewInt(2*a + 1), n2
		}
		m := (a + c) / 2
		t1, b1, p1 := split(a, m)
		t2, b2, p2 := split(m, c)
		t = new(big.Int).Mul(t1, b2)
		t.Mul(t, p2)
		u := new(big.Int).Mul(b1, t2)
		if sign < 0 && (m-a)%2 != 0 {
			u.Neg(u)
		}
		return t.Add(t, u), new(big.Int).Mul(b1, b2), new(big.Int).Mul(p1, p2)
	}
	t, b, p := split(0, terms)
	b.Mul(b, p)
	t = new(big.Int).Lsh(t, q)
	return t.Quo(t, b.Mul(b, big.NewInt(n)))
}

// Pi returns a ball around pi with prec proven bits. Safe for concurrent use;
// values are cached. Source: C. F. Gauss, Werke 2, p. 525 (the arctangent formula).
func Pi(prec uint) Ball { return constPi.ball(prec) }

// Ln2 returns a ball around the natural logarithm of 2 with prec proven bits.
// Safe for concurrent use; values are cached.
func Ln2(prec uint) Ball { return constLn2.ball(prec) }

// Ln10 returns a ball around the natural logarithm of 10 with prec proven
// bits. Safe for concurrent use; values are cached.
func Ln10(prec uint) Ball { return constLn10.ball(prec) }

// Sqrt returns the square root of x. The negative numbers of a ball around or
// touching 0 are left out; a ball of negative numbers gives the ball of
// infinite radius. The radius comes from |sqrt(x) - sqrt(a)| <= |x-a|/sqrt(a).
func (x Ball) Sqrt(prec uint) Ball {
	switch sign, certain := x.Sign(); {
	case x.rad.isInf() || certain && sign < 0:
		return unknown()
	case x.isZero():
		return x
	case !certain: // [0, sqrt(m+r)]
		_, hi, e := x.endpoints()
		h := intMagUp(hi, e).sqrtUp().mulPow2(-1)
		return Ball{man: new(big.Int).SetUint64(uint64(h.m)), exp: h.e, rad: h}
	}
	r := x.rad.quoUp(x.midDown().sqrtDown())
	s := max(2*int64(prec)+4-int64(x.man.BitLen()), 0)
	if (x.exp-s)&1 != 0 {
		s++
	}
	m := new(big.Int).Lsh(x.man, uint(s))
	z := new(big.Int).Sqrt(m)
	e := (x.exp - s) / 2
	if new(big.Int).Mul(z, z).Cmp(m) != 0 {
		r = r.addUp(magPow2(e))
	}
	return ownBall(z, e, r, prec)
}

// scaledFloor returns floor(m 2^(e+q)).
func scaledFloor(m *big.Int, e, q int64) *big.Int {
	s := e + q
	if s >= 0 {
		return new(big.Int).Lsh(m, uint(s))
	}
	return new(big.Int).Rsh(m, uint(-s))
}

// halvings returns how often to halve an argument so that the squarings that
// undo it cost about what they save in terms of the Taylor series.
func halvings(prec int64) int64 { return int64(math.Sqrt(float64(prec))) }

// maxExpTop bounds the exponent of arguments of exp: beyond 2^maxExpTop the
// result overflows the exponents of balls in most uses.
const maxExpTop = 40

// Exp returns e^x. The midpoint is reduced by multiples of ln 2, halved about
// sqrt(prec) times and put into the Taylor series; e^(m+t) with |t| <= r adds
// e^m (e^r - 1) <= e^m (r + r^2) to the radius when r <= 1. Arguments above
// 2^40 give the ball of infinite radius, those below -2^40 a tiny ball around 0.
//
// Cost: O(sqrt(prec)) products of prec bits.
// Source: R. P. Brent, P. Zimmermann, Modern Computer Arithmetic, 2010,
// sections 4.3 (argument reduction) and 4.4 (power series).
func (x Ball) Exp(prec uint) Ball {
	if x.rad.isInf() {
		return unknown()
	}
	if !x.rad.isZero() && x.rad.top() > -2 { // a wide ball: exp is monotonic
		lo, hi := x.ends()
		return lo.Exp(prec).Union(hi.Exp(prec), prec)
	}
	if x.man != nil && x.top() > maxExpTop {
		if x.man.Sign() > 0 {
			return unknown()
		}
		return Ball{rad: magPow2(-1 << (maxExpTop - 1))} // e^x < 2^x and x < -2^(maxExpTop-1)
	}
	z := expPoint(x, prec)
	if !x.rad.isZero() {
		z = z.widen(z.absUp().mulUp(x.rad.addUp(x.rad.mulUp(x.rad))))
	}
	return z
}

// expPoint returns e^m for the midpoint m of x.
func expPoint(x Ball, prec uint) Ball {
	if x.man == nil {
		return Ball{man: intOne}
	}
	top := x.top()
	if 2*top < -int64(prec) { // |e^m - 1 - m| <= m^2 for |m| <= 1
		m := x.midUp()
		return Ball{man: intOne}.Add(x.point(), prec).widen(m.mulUp(m))
	}
	if prec <= wordFuncPrec && top <= 20 {
		if z, ok := expInWords(x, prec); ok {
			return z
		}
	}
	return expSeries(x, prec)
}

// expSeries is expPoint for any precision and a midpoint other than 0.
func expSeries(x Ball, prec uint) Ball {
	top := x.top()
	h := halvings(int64(prec))
	wp := int64(prec) + h + 12 + int64(bits.Len(prec))
	// m = k ln 2 + t. In units of 2^-q, t is off by at most 1 + 2 |k| <= 3 + 3 2^top.
	q := wp + max(top, 0) + 3
	k, t := new(big.Int), new(big.Int)
	k.DivMod(scaledFloor(x.man, x.exp, q), constLn2.fixed(uint(q)), t)
	// After the shift to units of 2^-wp the error is at most 2; halving leaves
	// at most 2 in r = t/2^h, which is below 1.
	r := t.Rsh(t, uint(q-wp+h))
	// Every term of the series is off by at most 2: the product of the last one
	// with r/j <= 1/2 by 1, and two roundings. The rest is below twice the first term
	// that vanishes, and the error of r changes e^r by at most 2 e^r < 6.
	sum := new(big.Int).Lsh(intOne, uint(wp))
	term := new(big.Int).Set(r)
	n := int64(1)
	for term.Sign() != 0 {
		sum.Add(sum, term)
		n++
		term.Rsh(term.Mul(term, r), uint(wp))
		term.Quo(term, big.NewInt(n))
	}
	one := magPow2(-wp)
	err := magUp(uint64(2*n+10), -wp)
	for range h { // (s+d)^2 = s^2 + 2sd + d^2
		err = err.mulUp(intMagUp(sum, 1-wp)).addUp(err.mulUp(err)).addUp(one)
		sum.Rsh(sum.Mul(sum, sum), uint(wp))
	}
	return ownBall(sum, k.Int64()-wp, err.mulPow2(k.Int64()), prec)
}

// maxTrigTop bounds the exponent of arguments of sine and cosine.
const maxTrigTop = 1 << 16

// SinCos returns the sine and the cosine of x. The midpoint is reduced by
// multiples of pi/2, at a precision raised by its exponent, and halved about
// sqrt(prec) times; both functions have Lipschitz constant 1. Arguments of more than
// 2^16 bits before the binary point and radii of 1 or more give [-1, 1].
//
// Cost: O(sqrt(prec)) products of prec bits.
// Source: R. P. Brent, P. Zimmermann, Modern Computer Arithmetic, 2010,
// sections 4.3 and 4.4.
func (x Ball) SinCos(prec uint) (sin, cos Ball) {
	switch {
	case x.rad.isInf():
		return unknown(), unknown()
	case !x.rad.isZero() && x.rad.top() > 0, x.man != nil && x.top() > maxTrigTop:
		all := Ball{rad: magPow2(0)}
		return all, all
	}
	sin, cos = sinCosPoint(x, prec)
	return sin.widen(x.rad), cos.widen(x.rad)
}

// sinCosPoint returns sine and cosine of the midpoint of x.
func sinCosPoint(x Ball, prec uint) (sin, cos Ball) {
	if x.man == nil {
		return Ball{}, Ball{man: intOne}
	}
	top := x.top()
	if 2*top < -int64(prec) { // |sin m - m| <= |m|^3/6, 1 - cos m <= m^2/2
		m := x.midUp()
		m2 := m.mulUp(m)
		sin = x.point().Round(prec).widen(m2.mulUp(m).mulPow2(-2))
		return sin, Ball{man: intOne, rad: m2.mulPow2(-1)}
	}
	if prec <= wordFuncPrec && top <= 20 {
		if sin, cos, ok := sinCosInWords(x, prec); ok {
			return sin, cos
		}
	}
	return sinCosSeries(x, prec)
}

// sinCosSeries is sinCosPoint for any precision and a midpoint other than 0.
func sinCosSeries(x Ball, prec uint) (sin, cos Ball) {
	top := x.top()
	h := halvings(int64(prec))
	guard := h + 14 + int64(bits.Len(prec))
	wp := int64(prec) + guard + max(-top, 0)
	var k, t *big.Int
	var q int64
	for try := 0; ; try++ {
		// m = k pi/2 + t with |t| <= pi/4. In units of 2^-q, t is off by at most
		// 1 + 2 |k| <= 3 + 2^(top+1).
		q = wp + max(top, 0) + 3
		half := constPi.fixed(uint(q - 1))
		t = scaledFloor(x.man, x.exp, q)
		k = new(big.Int).Rsh(half, 1)
		k.Add(k, t)
		k.Div(k, half)
		t.Sub(t, new(big.Int).Mul(k, half))
		lost := q - int64(t.BitLen())
		need := int64(prec) + guard + lost
		if lost <= 4 || wp >= need || try == 1 {
			break
		}
		wp = need // close to a multiple of pi/2: make up for the cancellation once
	}
	// In units of 2^-wp the error is below 1 now, at most 2 after the halvings.
	r := t.Rsh(t, uint(q-wp+h))
	// Each term is off by at most 2 and the rest of the series by 4, as for exp.
	s, c := new(big.Int), new(big.Int).Lsh(intOne, uint(wp))
	term := new(big.Int).Set(r)
	n := int64(1)
	for term.Sign() != 0 {
		switch n % 4 {
		case 1:
			s.Add(s, term)
		case 2:
			c.Sub(c, term)
		case 3:
			s.Sub(s, term)
		default:
			c.Add(c, term)
		}
		n++
		term.Rsh(term.Mul(term, r), uint(wp))
		term.Quo(term, big.NewInt(n))
	}
	one := magPow2(-wp)
	errS := magUp(uint64(2*n+10), -wp)
	errC := errS
	for range h { // sin 2a = 2 sin a cos a, cos 2a = 1 - 2 sin^2 a
		ms, mc := intMagUp(s, -wp).addUp(errS), intMagUp(c, -wp)
		errS, errC = ms.mulUp(errC).addUp(mc.mulUp(errS)).mulPow2(1).addUp(one),
			ms.mulUp(errS).mulPow2(2).addUp(one)
		c.Rsh(c.Mul(c, s), uint(wp-1))
		s.Rsh(s.Mul(s, s), uint(wp-1))
		s, c = c, s.Sub(new(big.Int).Lsh(intOne, uint(wp)), s)
	}
	sin = ownBall(s, -wp, errS, prec)
	cos = ownBall(c, -wp, errC, prec)
	switch new(big.Int).And(k, big.NewInt(3)).Int64() {
	case 0:
		return sin, cos
	case 1:
		return cos, sin.Neg()
	case 2:
		return sin.Neg(), cos.Neg()
	}
	return cos.Neg(), sin
}
