package zp

import "math/bits"

// Poly is a polynomial over a prime field: the coefficient of x^i at index i,
// the last one non-zero; nil is the zero polynomial. The field is not stored:
// the operations are methods of [Field]. Polynomials are never modified once
// built, and results never share memory with arguments unless said so.
type Poly []uint64

// Degree returns the degree, -1 for the zero polynomial.
func (a Poly) Degree() int { return len(a) - 1 }

// Lead returns the leading coefficient, 0 for the zero polynomial.
func (a Poly) Lead() uint64 {
	if len(a) == 0 {
		return 0
	}
	return a[len(a)-1]
}

// trim cuts leading zeros off in place.
func trim(a Poly) Poly {
	for len(a) > 0 && a[len(a)-1] == 0 {
		a = a[:len(a)-1]
	}
	if len(a) == 0 {
		return nil
	}
	return a
}

// NewPoly returns the polynomial with coefficients c modulo P, lowest first.
func (f Field) NewPoly(c ...uint64) Poly {
	a := make(Poly, len(c))
	for i, x := range c {
		a[i] = x % f.P
	}
	return trim(a)
}

// AddPoly returns a + b.
func (f Field) AddPoly(a, b Poly) Poly {
	if len(a) < len(b) {
		a, b = b, a
	}
	s := append(Poly(nil), a...)
	for i, x := range b {
		s[i] = f.Add(s[i], x)
	}
	return trim(s)
}

// SubPoly returns a - b.
func (f Field) SubPoly(a, b Poly) Poly {
	d := make(Poly, max(len(a), len(b)))
	copy(d, a)
	for i, x := range b {
		d[i] = f.Sub(d[i], x)
	}
	return trim(d)
}

// ScalePoly returns c a.
func (f Field) ScalePoly(a Poly, c uint64) Poly {
	if c == 0 {
		return nil
	}
	s := make(Poly, len(a))
	for i, x := range a {
		s[i] = f.Mul(x, c)
	}
	return trim(s)
}

// MonicPoly returns a divided by its leading coefficient, nil for zero.
func (f Field) MonicPoly(a Poly) Poly {
	if len(a) == 0 {
		return nil
	}
	if a.Lead() == 1 {
		return append(Poly(nil), a...)
	}
	return f.ScalePoly(a, f.Inv(a.Lead()))
}

// DerivativePoly returns the derivative of a.
func (f Field) DerivativePoly(a Poly) Poly {
	return f.DerivativeTo(make(Poly, len(a)), a)
}

// EvalPoly returns a(x).
func (f Field) EvalPoly(a Poly, x uint64) uint64 {
	var y uint64
	for i := len(a) - 1; i >= 0; i-- {
		y = f.Add(f.Mul(y, x), a[i])
	}
	return y
}

// crossSum returns the sum of a[i] b[n-1-i] over equally long slices: one
// coefficient of a product, reduced once. Products of small residues are
// summed in one word, others in two: with P < 2^62 the high word of a product
// is below P, so taking P off whenever it reaches P keeps the value modulo P
// and never overflows.
func (f Field) crossSum(a, b []uint64) uint64 {
	n := len(a)
	b = b[:n]
	if n == 0 {
		return 0
	}
	if f.lazy(n) {
		return crossDot(a, b) % f.P
	}
	var hi, lo uint64
	for i, x := range a {
		h, l := bits.Mul64(x, b[n-1-i])
		var c uint64
		lo, c = bits.Add64(lo, l, 0)
		hi += h + c
		if hi >= f.P {
			hi -= f.P
		}
	}
	_, r := bits.Div64(hi, lo, f.P)
	return r
}

// coeffOfProduct returns the coefficient of x^k in a b.
func (f Field) coeffOfProduct(a, b []uint64, k int) uint64 {
	lo, hi := max(0, k-len(b)+1), min(k, len(a)-1)
	if lo > hi {
		return 0
	}
	return f.crossSum(a[lo:hi+1], b[k-hi:k-lo+1])
}

// MulPoly returns a b. Cost: len(a) len(b) word products, one reduction for a
// coefficient.
func (f Field) MulPoly(a, b Poly) Poly {
	if len(a) == 0 || len(b) == 0 {
		return nil
	}
	c := make(Poly, len(a)+len(b)-1)
	if f.lazy(min(len(a), len(b))) {
		mulLazy(c, a, b)
		red := newReducer(f.P)
		for i, x := range c {
			c[i] = red.mod(x)
		}
		return trim(c)
	}
	for k := range c {
		c[k] = f.coeffOfProduct(a, b, k)
	}
	return trim(c)
}

// DivRemPoly returns q and r with a = q b + r and deg r < deg b. It panics
// when b is zero. Cost: len(q) len(b) word products.
func (f Field) DivRemPoly(a, b Poly) (q, r Poly) {
	if len(b) == 0 {
		panic("zp: division by the zero polynomial")
	}
	n, m := len(a), len(b)
	if n < m {
		return nil, append(Poly(nil), a...)
	}
	inv := uint64(1)
	if b.Lead() != 1 {
		inv = f.Inv(b.Lead())
	}
	if inv == 1 && f.lazy(n-m+1) {
		r = append(r, a...)
		newReducer(f.P).divRemLazy(r, b)
		return trim(r[m-1:]), trim(r[: m-1 : m-1])
	}
	q = make(Poly, n-m+1)
	for k := n - m; k >= 0; k-- {
		// q_k lead(b) = a_{k+m-1} minus what the higher q already give there.
		top := min(k+m-1, n-m)
		s := f.crossSum(q[k+1:top+1], b[k+m-1-top:m-1])
		q[k] = f.Sub(a[k+m-1], s)
		if inv != 1 {
			q[k] = f.Mul(q[k], inv)
		}
	}
	r = make(Poly, m-1)
	for i := range r {
		r[i] = f.Sub(a[i], f.coeffOfProduct(q, b, i))
	}
	return trim(q), trim(r)
}

// RemPoly returns the remainder of a by b.
func (f Field) RemPoly(a, b Poly) Poly {
	_, r := f.DivRemPoly(a, b)
	return r
}

// MulModPoly returns a b modulo m.
func (f Field) MulModPoly(a, b, m Poly) Poly {
	return f.RemPoly(f.MulPoly(a, b), m)
}

// PowModPoly returns a^e modulo m by binary powering.
func (f Field) PowModPoly(a Poly, e uint64, m Poly) Poly {
	a = f.RemPoly(a, m)
	if len(a) > 0 && e > 0 && f.lazy(2*len(m)) && m.Lead() == 1 {
		ring := f.newQuotients(m)
		return trim(ring.pow(ring.element(a), e))
	}
	r := f.RemPoly(Poly{1}, m)
	for i := bits.Len64(e) - 1; i >= 0; i-- {
		r = f.MulModPoly(r, r, m)
		if e>>i&1 == 1 {
			r = f.MulModPoly(r, a, m)
		}
	}
	return r
}

// BezoutPoly returns the monic greatest common divisor g of a and b and s, t
// with s a + t b = g, deg s < deg b and deg t < deg a when a and b have
// positive degree and are coprime.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, section 3.2.
func (f Field) BezoutPoly(a, b Poly) (g, s, t Poly) {
	r0, r1 := append(Poly(nil), a...), append(Poly(nil), b...)
	s0, s1 := Poly{1}, Poly(nil)
	t0, t1 := Poly(nil), Poly{1}
	for len(r1) > 0 {
		q, r := f.DivRemPoly(r0, r1)
		r0, r1 = r1, r
		s0, s1 = s1, f.SubPoly(s0, f.MulPoly(q, s1))
		t0, t1 = t1, f.SubPoly(t0, f.MulPoly(q, t1))
	}
	if len(r0) == 0 {
		return nil, nil, nil
	}
	c := f.Inv(r0.Lead())
	return f.ScalePoly(r0, c), f.ScalePoly(s0, c), f.ScalePoly(t0, c)
}
