package algebra

import (
	"math"
	"math/big"
	"math/bits"

	"example.org/closedform/algebra/internal/intpoly"
	"example.org/closedform/algebra/internal/word"
)

// qpoly is a non-zero polynomial over Q in the form that [Poly] keeps over
// [Rationals]: integer coefficients over one common denominator. They are flat
// machine words if all fit, whatever the history of the value. Immutable.
type qpoly struct {
	w   []int64      // the coefficients if every |w[i]| < 2^63; nil otherwise
	b   intpoly.Poly // the coefficients if w is nil
	den *big.Int     // the denominator, nil for 1; coprime to the content
}

// length returns the number of coefficients, 0 for a nil polynomial.
func (p *qpoly) length() int {
	if p == nil {
		return 0
	}
	if p.w != nil {
		return len(p.w)
	}
	return len(p.b)
}

// coef returns the coefficient of s^i.
func (p *qpoly) coef(i int) Rat {
	switch {
	case p.w != nil && p.den == nil:
		return Rat{num: p.w[i], den: 1}
	case p.w != nil:
		return RatFromFrac(big.NewInt(p.w[i]), p.den)
	case p.den == nil:
		return RatFromBigInt(p.b[i])
	}
	return RatFromFrac(p.b[i], p.den)
}

func (p *qpoly) rats() []Rat {
	out := make([]Rat, p.length())
	for i := range out {
		out[i] = p.coef(i)
	}
	return out
}

// ints returns the integer coefficients for reading only.
func (p *qpoly) ints() intpoly.Poly {
	if p == nil {
		return nil
	}
	if p.w == nil {
		return p.b
	}
	return bigWords(p.w)
}

// bigWords returns the numbers as big.Ints in three allocations. The values
// share a backing array; each is limited to its own word, so that no growth of
// one can reach another.
func bigWords(w []int64) []*big.Int {
	vals := make([]big.Int, len(w))
	words := make([]big.Word, len(w))
	out := make([]*big.Int, len(w))
	for i, x := range w {
		words[i] = big.Word(word.Abs(x))
		vals[i].SetBits(words[i : i+1 : i+1])
		if x < 0 {
			vals[i].Neg(&vals[i])
		}
		out[i] = &vals[i]
	}
	return out
}

// newQ establishes the normal form from words, which it takes over, and a
// denominator.
func newQ(w []int64, den *big.Int) *qpoly {
	n := len(w)
	for n > 0 && w[n-1] == 0 {
		n--
	}
	if n == 0 {
		return nil
	}
	w = w[:n:n]
	if den == nil || isOne(den) {
		return &qpoly{w: w}
	}
	var g uint64
	for _, x := range w {
		g = word.GCD(g, word.Abs(x))
		if g == 1 {
			return &qpoly{w: w, den: den}
		}
	}
	var c, r big.Int
	c.GCD(nil, nil, c.SetUint64(g), den)
	if isOne(&c) {
		return &qpoly{w: w, den: den}
	}
	d := c.Int64()
	for i := range w {
		w[i] /= d
	}
	return newQ(w, r.Quo(den, &c))
}

// newQBig is newQ for big coefficients, which it does not modify.
func newQBig(b intpoly.Poly, den *big.Int) *qpoly {
	n := len(b)
	for n > 0 && b[n-1].Sign() == 0 {
		n--
	}
	b = b[:n:n]
	if n == 0 {
		return nil
	}
	if den != nil && isOne(den) {
		den = nil
	}
	if den != nil {
		g := new(big.Int).Set(den)
		for _, x := range b {
			if isOne(g) {
				break
			}
			if x.Sign() != 0 {
				g.GCD(nil, nil, g, new(big.Int).Abs(x))
			}
		}
		if !isOne(g) {
			out := make(intpoly.Poly, n)
			for i, x := range b {
				out[i] = new(big.Int).Quo(x, g)
			}
			return newQBig(out, new(big.Int).Quo(den, g))
		}
	}
	for _, x := range b {
		if !fits63(x) {
			return &qpoly{b: b, den: den}
		}
	}
	w := make([]int64, n)
	for i, x := range b {
		w[i] = x.Int64()
	}
	return &qpoly{w: w, den: den}
}

// qFromRats returns the polynomial with these coefficients.
func qFromRats(c []Rat) *qpoly {
	if w, ok := wordsOf(c); ok {
		return newQ(w, nil)
	}
	ints, d := clearDenominators(c)
	return newQBig(ints, d)
}

// maxBits returns the bit length of the largest word.
func maxBits(w []int64) int {
	var m uint64
	for _, x := range w {
		m |= word.Abs(x)
	}
	return bits.Len64(m)
}

// mulDen returns the product of two denominators.
func mulDen(a, b *big.Int) *big.Int {
	switch {
	case a == nil:
		return b
	case b == nil:
		return a
	}
	return new(big.Int).Mul(a, b)
}

// sameDen tells whether two denominators are equal.
func sameDen(a, b *big.Int) bool {
	if a == nil || b == nil {
		return a == b
	}
	return a.Cmp(b) == 0
}

func (p *qpoly) equal(q *qpoly) bool {
	if p.length() != q.length() {
		return false
	}
	if p == nil {
		return true
	}
	if (p.w == nil) != (q.w == nil) || !sameDen(p.den, q.den) {
		return false
	}
	for i := range p.w {
		if p.w[i] != q.w[i] {
			return false
		}
	}
	for i := range p.b {
		if p.b[i].Cmp(q.b[i]) != 0 {
			return false
		}
	}
	return true
}

// add returns p + q.
func (p *qpoly) add(q *qpoly) *qpoly {
	if p == nil {
		return q
	}
	if q == nil {
		return p
	}
	if sameDen(p.den, q.den) {
		if p.w != nil && q.w != nil {
			if s, ok := addWords(p.w, q.w); ok {
				return newQ(s, p.den)
			}
		}
		return newQBig(intpoly.Add(p.ints(), q.ints()), p.den)
	}
	// a/d + b/e = (a e/g + b d/g)/(d e/g)
	one := big.NewInt(1)
	d, e := p.den, q.den
	if d == nil {
		d = one
	}
	if e == nil {
		e = one
	}
	g := new(big.Int).GCD(nil, nil, d, e)
	dg, eg := new(big.Int).Quo(d, g), new(big.Int).Quo(e, g)
	return newQBig(intpoly.Add(p.ints().Scale(eg), q.ints().Scale(dg)), dg.Mul(dg, e))
}

// addWords returns a + b unless a coefficient leaves the word.
func addWords(a, b []int64) ([]int64, bool) {
	if len(a) < len(b) {
		a, b = b, a
	}
	s := make([]int64, len(a))
	copy(s, a)
	for i, y := range b {
		x := s[i]
		s[i] = x + y
		if (s[i] > x) != (y > 0) || s[i] == math.MinInt64 {
			return nil, false
		}
	}
	return s, true
}

func (p *qpoly) neg() *qpoly {
	if p == nil {
		return nil
	}
	if p.w != nil {
		w := make([]int64, len(p.w))
		for i, x := range p.w {
			w[i] = -x
		}
		return &qpoly{w: w, den: p.den}
	}
	b := make(intpoly.Poly, len(p.b))
	for i, x := range p.b {
		b[i] = new(big.Int).Neg(x)
	}
	return &qpoly{b: b, den: p.den}
}

// scale returns x p.
func (p *qpoly) scale(x Rat) *qpoly {
	if p == nil || x.IsZero() {
		return nil
	}
	if x.IsOne() {
		return p
	}
	return p.mul(qFromRats([]Rat{x}))
}

// shiftUp returns s^n p.
func (p *qpoly) shiftUp(n int) *qpoly {
	if p.w != nil {
		return &qpoly{w: append(make([]int64, n, n+len(p.w)), p.w...), den: p.den}
	}
	b := make(intpoly.Poly, n, n+len(p.b))
	zero := new(big.Int)
	for i := range b {
		b[i] = zero
	}
	return &qpoly{b: append(b, p.b...), den: p.den}
}

// derivative returns dp/ds.
func (p *qpoly) derivative() *qpoly {
	if p.length() < 2 {
		return nil
	}
	if p.w != nil {
		w := make([]int64, len(p.w)-1)
		fits := true
		for i := range w {
			x, ok := mul64(int64(i+1), p.w[i+1])
			w[i], fits = x, fits && ok
		}
		if fits {
			return newQ(w, p.den)
		}
	}
	return newQBig(p.ints().Derivative(), p.den)
}

// eval returns p(x): with x = a/b, Horner's rule on the homogeneous form keeps
// to integers.
func (p *qpoly) eval(x Rat) Rat {
	if p == nil {
		return Rat{}
	}
	a, b := x.Num(), x.Den()
	c := p.ints()
	n := len(c) - 1
	y := new(big.Int).Set(c[n])
	power := big.NewInt(1)
	integral := x.IsInt()
	var t big.Int
	for i := n - 1; i >= 0; i-- {
		y.Mul(y, a)
		if integral {
			y.Add(y, c[i])
			continue
		}
		power.Mul(power, b)
		y.Add(y, t.Mul(power, c[i]))
	}
	if p.den != nil {
		power.Mul(power, p.den)
	}
	return ownRat(new(big.Rat).SetFrac(y, power))
}

// translate returns p(s + x): with x = a/b, P(s) = p(s/b) b^n has integer
// coefficients, is moved by a and scaled back.
func (p *qpoly) translate(x Rat) *qpoly {
	a, b := x.Num(), x.Den()
	n := p.length() - 1
	c := make(intpoly.Poly, n+1)
	scale := big.NewInt(1)
	src := p.ints()
	for i := n; i >= 0; i-- {
		c[i] = new(big.Int).Mul(src[i], scale)
		scale = new(big.Int).Mul(scale, b)
	}
	var t big.Int
	for i := range n {
		for j := n - 1; j >= i; j-- {
			c[j].Add(c[j], t.Mul(a, c[j+1]))
		}
	}
	// c holds b^n p((s + a)/b) at s; replace s by b s and divide by b^n.
	power := big.NewInt(1)
	for i := range c {
		c[i].Mul(c[i], power)
		power = new(big.Int).Mul(power, b)
	}
	power.Quo(power, b)
	return newQBig(c, mulDen(p.den, power))
}

// monic returns p divided by its leading coefficient.
func (p *qpoly) monic() *qpoly {
	if p == nil {
		return nil
	}
	n := p.length() - 1
	if p.w != nil {
		lead := p.w[n]
		if lead == 1 {
			return newQ(p.w, nil)
		}
		w := append([]int64(nil), p.w...)
		if lead < 0 {
			for i := range w {
				w[i] = -w[i]
			}
			lead = -lead
		}
		return newQ(w, big.NewInt(lead))
	}
	lead := p.b[n]
	if lead.Sign() < 0 {
		q := p.neg()
		return newQBig(q.b, q.b[n])
	}
	return newQBig(p.b, lead)
}
