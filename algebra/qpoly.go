package algebra

import (
	"math"
	"math/big"
	"math/bits"

	"example.org/closedform/algebra/internal/intpoly"
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
		words[i] = big.Word(abs64(x))
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
	if den == nil || (den.IsInt64() && den.Int64() == 1) {
		return &qpoly{w: w}
	}
	var g uint64
	for _, x := range w {
		g = gcd64(g, abs64(x))
		if g == 1 {
			return &qpoly{w: w, den: den}
		}
	}
	var c, r big.Int
	c.GCD(nil, nil, c.SetUint64(g), den)
	if c.IsInt64() && c.Int64() == 1 {
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
	if den != nil && den.IsInt64() && den.Int64() == 1 {
		den = nil
	}
	if den != nil {
		g := new(big.Int).Set(den)
		for _, x := range b {
			if g.IsInt64() && g.Int64() == 1 {
				break
			}
			if x.Sign() != 0 {
				g.GCD(nil, nil, g, new(big.Int).Abs(x))
			}
		}
		if !g.IsInt64() || g.Int64() != 1 {
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
		m |= abs64(x)
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

// mul returns p q: on words while the products and their sums fit one or two,
// by the integer product otherwise.
func (p *qpoly) mul(q *qpoly) *qpoly {
	if p == nil || q == nil {
		return nil
	}
	den := mulDen(p.den, q.den)
	if p.w != nil && q.w != nil {
		short := min(len(p.w), len(q.w))
		if size := maxBits(p.w) + maxBits(q.w) + bits.Len(uint(short)); size <= 63 && short <= wordProductMost {
			return mulWords(p.w, q.w).over(den)
		} else if size <= 126 && short <= wideProductMost {
			return newQBig(mulWide(p.w, q.w), den)
		}
	}
	return newQBig(intpoly.Mul(p.ints(), q.ints()), den)
}

// Lengths of the shorter factor up to which the schoolbook kernels on words are
// used; see BenchmarkPolyMul.
var (
	wordProductMost = 400
	wideProductMost = 100
)

// mulWords returns the product by the schoolbook method, the sums fitting a word.
func mulWords(a, b []int64) *qpoly {
	if len(a) > len(b) {
		a, b = b, a
	}
	p := zeroWords(len(a) + len(b) - 1)
	for i, x := range a {
		if x == 0 {
			continue
		}
		row := p.w[i : i+len(b)]
		for j, y := range b {
			row[j] += x * y
		}
	}
	return p
}

// zeroWords returns n zero coefficients to be filled in; a short polynomial is
// one allocation.
func zeroWords(n int) *qpoly {
	if n <= 12 {
		p := &struct {
			q   qpoly
			buf [12]int64
		}{}
		p.q.w = p.buf[:n:n]
		return &p.q
	}
	return &qpoly{w: make([]int64, n)}
}

// over returns p/den for a p whose leading coefficient is not zero.
func (p *qpoly) over(den *big.Int) *qpoly {
	if den == nil {
		return p
	}
	return newQ(p.w, den)
}

// mulWide is mulWords with sums of two words. The values of the result share a
// backing array, each limited to its own part.
func mulWide(a, b []int64) intpoly.Poly {
	n := len(a) + len(b) - 1
	vals := make([]big.Int, n)
	words := make([]big.Word, 2*n)
	out := make(intpoly.Poly, n)
	for k := range out {
		var hi, lo uint64
		for i := max(0, k-len(b)+1); i <= min(k, len(a)-1); i++ {
			x, y := a[i], b[k-i]
			h, l := bits.Mul64(uint64(x), uint64(y))
			// The unsigned product exceeds the signed one by 2^64 times the other
			// factor for each negative one.
			h -= uint64(x>>63)&uint64(y) + uint64(y>>63)&uint64(x)
			var carry uint64
			lo, carry = bits.Add64(lo, l, 0)
			hi, _ = bits.Add64(hi, h, carry)
		}
		negative := int64(hi) < 0
		if negative {
			var borrow uint64
			lo, borrow = bits.Sub64(0, lo, 0)
			hi, _ = bits.Sub64(0, hi, borrow)
		}
		slot := words[2*k : 2*k+2 : 2*k+2]
		slot[0], slot[1] = big.Word(lo), big.Word(hi)
		vals[k].SetBits(slot)
		if negative {
			vals[k].Neg(&vals[k])
		}
		out[k] = &vals[k]
	}
	return out
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

// quoRem returns the quotient and the remainder, d not zero. The remainder is
// multiplied by a factor of the leading coefficient of d where that does not
// divide its own.
func (p *qpoly) quoRem(d *qpoly) (quo, rem *qpoly) {
	n := p.length() - d.length()
	if n < 0 {
		return nil, p
	}
	if p.w != nil && d.w != nil && abs64(d.w[len(d.w)-1]) == 1 {
		if q, r, ok := quoRemWords(p.w, d.w); ok {
			return newQ(q, p.den).scaleDen(d.den), newQ(r, p.den)
		}
	}
	dc := d.ints()
	m := len(dc) - 1
	lead := dc[m]
	r := make([]*big.Int, p.length())
	for i, x := range p.ints() {
		r[i] = new(big.Int).Set(x)
	}
	q := make([]*big.Int, n+1)
	scale := big.NewInt(1)
	var g, f, t big.Int
	unit := lead.IsInt64() && abs64(lead.Int64()) == 1
	for k := n; k >= 0; k-- {
		top := r[k+m]
		q[k] = new(big.Int)
		if top.Sign() == 0 {
			continue
		}
		if !unit {
			g.GCD(nil, nil, new(big.Int).Abs(top), new(big.Int).Abs(lead))
			f.Quo(lead, &g)
			if !f.IsInt64() || f.Int64() != 1 {
				for i := range k + m + 1 {
					r[i].Mul(r[i], &f)
				}
				for i := k + 1; i <= n; i++ {
					q[i].Mul(q[i], &f)
				}
				scale.Mul(scale, &f)
			}
		}
		q[k].Quo(top, lead)
		for j := range m {
			r[k+j].Sub(r[k+j], t.Mul(q[k], dc[j]))
		}
	}
	den := mulDen(scale, p.den)
	if den.Sign() < 0 {
		den = new(big.Int).Neg(den)
		for _, list := range [][]*big.Int{q, r[:m]} {
			for _, x := range list {
				x.Neg(x)
			}
		}
	}
	return newQBig(q, den).scaleDen(d.den), newQBig(r[:m], den)
}

// scaleDen returns x p for the denominator x of another polynomial.
func (p *qpoly) scaleDen(x *big.Int) *qpoly {
	if p == nil || x == nil {
		return p
	}
	return p.scale(RatFromBigInt(x))
}

// quoRemWords divides by a polynomial with the leading coefficient 1 or -1,
// unless a number leaves the word.
func quoRemWords(p, d []int64) (q, r []int64, ok bool) {
	m := len(d) - 1
	n := len(p) - len(d)
	buf := append([]int64(nil), p...)
	q = make([]int64, n+1)
	for k := n; k >= 0; k-- {
		x := buf[k+m] * d[m]
		q[k] = x
		if x == 0 {
			continue
		}
		for j := range m {
			t, ok1 := mul64(x, d[j])
			s := buf[k+j] - t
			if !ok1 || (s < buf[k+j]) != (t > 0) || s == math.MinInt64 {
				return nil, nil, false
			}
			buf[k+j] = s
		}
	}
	return q, buf[:m], true
}

// divExact returns p/d if d divides p. By Gauss's lemma it is enough to divide
// the primitive parts over the integers.
func (p *qpoly) divExact(d *qpoly) (*qpoly, bool) {
	if p == nil {
		return nil, true
	}
	if p.length() < d.length() {
		return nil, false
	}
	if p.w != nil && d.w != nil && abs64(d.w[len(d.w)-1]) == 1 {
		if q, r, ok := quoRemWords(p.w, d.w); ok {
			for _, x := range r {
				if x != 0 {
					return nil, false
				}
			}
			return newQ(q, p.den).scaleDen(d.den), true
		}
	}
	cp, pp := p.ints().Primitive()
	cd, dd := d.ints().Primitive()
	q, ok := intpoly.DivExact(pp, dd)
	if !ok {
		return nil, false
	}
	num, den := cp, mulDen(cd, p.den)
	return newQBig(q, nil).scale(RatFromFrac(num, den)).scaleDen(d.den), true
}
