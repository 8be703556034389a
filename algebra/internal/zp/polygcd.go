package zp

import "math/bits"

// wordPrime bounds the primes for which three products of residues fit one
// word: 3 (p-1)^2 < 2^64 (1 - 1/p).
const wordPrime = 1 << 31

// GCDPoly returns the monic greatest common divisor of a and b, nil when both
// are zero. Cost: about deg(a) deg(b) word products.
func (f Field) GCDPoly(a, b Poly) Poly {
	g := f.GCDInPlace(append(Poly(nil), a...), append(Poly(nil), b...))
	if len(g) > 0 && g.Lead() != 1 {
		f.scaleInPlace(g, f.Inv(g.Lead()))
	}
	return g
}

// scaleInPlace multiplies a by c.
func (f Field) scaleInPlace(a Poly, c uint64) {
	if f.P < wordPrime {
		red := newReducer(f.P)
		for i, x := range a {
			a[i] = red.mod(x * c)
		}
		return
	}
	for i, x := range a {
		a[i] = f.Mul(x, c)
	}
}

// GCDInPlace returns a greatest common divisor of a and b, not made monic, in
// the memory of one of them; both are destroyed.
//
// It is Euclid's algorithm with pseudo-remainders, so nothing is inverted on
// the way. Quotients of two terms, the rule, are taken off in one pass: with
// the leading coefficients l of b and u of a, and c = l a_(n-2) - u b_(m-2),
//
//	l^2 a - (l u x + c) x^(n-m-1) b
//
// has two terms less than a, at one reduction for a coefficient.
func (f Field) GCDInPlace(a, b Poly) Poly {
	if len(a) < len(b) {
		a, b = b, a
	}
	small, red, wide := f.P < wordPrime, newReducer(f.P), newRedc(f.P)
	for len(b) > 1 {
		for len(a) >= len(b) {
			n, m := len(a), len(b)
			l, u := b[m-1], a[n-1]
			if n == m {
				if small {
					red.combine(a[:n-1], b, l, f.P-u)
				} else {
					wide.combine(a[:n-1], b, l, f.P-u)
				}
				a = trim(a[:n-1])
				continue
			}
			low := a[n-m-1 : n-2]
			if small {
				c := red.mod(l*a[n-2] + (f.P-u)*b[m-2])
				red.combine2(low, b, red.mod(l*l), f.P-red.mod(l*u), f.P-c)
				for i, x := range a[:n-m-1] { // keep the scale uniform
					a[i] = red.mod(x * red.mod(l*l))
				}
			} else {
				// Every product below carries the factor 2^-64, as does l^2.
				c := wide.dot2(l, a[n-2], f.P-u, b[m-2])
				l2 := wide.mul(l, l)
				wide.combine2(low, b, l2, f.P-wide.mul(l, u), f.P-c)
				for i, x := range a[:n-m-1] {
					a[i] = wide.mul(x, l2)
				}
			}
			a = trim(a[:n-2])
		}
		a, b = b, a
	}
	if len(b) == 1 { // a non-zero constant
		return b
	}
	return a
}

// reducer reduces words modulo a fixed p < 2^32 without division.
//
// Source: Barrett, Implementing the Rivest Shamir and Adleman public key
// encryption algorithm on a standard digital signal processor, CRYPTO 1986.
type reducer struct{ p, inverse uint64 }

func newReducer(p uint64) reducer { return reducer{p, ^uint64(0) / p} }

// mod returns x modulo p for x < 2^64 (1 - 1/p): the quotient estimate is at
// most 1 low.
func (r reducer) mod(x uint64) uint64 {
	q, _ := bits.Mul64(x, r.inverse)
	x -= q * r.p
	if x >= r.p {
		x -= r.p
	}
	return x
}

// combine sets a to x a + y b, over the length of a.
func (r reducer) combine(a, b []uint64, x, y uint64) {
	b = b[:len(a)]
	for i := range a {
		a[i] = r.mod(x*a[i] + y*b[i])
	}
}

// combine2 sets a_i to x a_i + y b_(i-1) + z b_i, over the length of a, with
// b_(-1) = 0.
func (r reducer) combine2(a, b []uint64, x, y, z uint64) {
	b = b[:len(a)]
	var last uint64
	for i, c := range b {
		a[i] = r.mod(x*a[i] + y*last + z*c)
		last = c
	}
}

// redc reduces two-word numbers modulo a fixed odd p < 2^62 to their
// quotient by 2^64.
//
// Source: Montgomery, Modular multiplication without trial division, Math.
// Comp. 44 (1985).
type redc struct{ p, inverse uint64 } // inverse p = 1 modulo 2^64

func newRedc(p uint64) redc {
	inv := p // correct to 3 bits; each Newton step doubles that
	for range 5 {
		inv *= 2 - p*inv
	}
	return redc{p, inv}
}

// reduce returns (hi 2^64 + lo) / 2^64 modulo p, for hi < p.
func (m redc) reduce(hi, lo uint64) uint64 {
	t, _ := bits.Mul64(lo*m.inverse, m.p)
	r := hi - t
	if hi < t {
		r += m.p
	}
	return r
}

// mul returns x y / 2^64.
func (m redc) mul(x, y uint64) uint64 {
	return m.reduce(bits.Mul64(x, y))
}

// dot2 returns (x y + z w) / 2^64.
func (m redc) dot2(x, y, z, w uint64) uint64 {
	h0, l0 := bits.Mul64(x, y)
	h1, l1 := bits.Mul64(z, w)
	lo, c := bits.Add64(l0, l1, 0)
	return m.reduce(h0+h1+c, lo)
}

// combine sets a to (x a + y b) / 2^64, over the length of a.
func (m redc) combine(a, b []uint64, x, y uint64) {
	b = b[:len(a)]
	for i := range a {
		a[i] = m.dot2(x, a[i], y, b[i])
	}
}

// combine2 sets a_i to (x a_i + y b_(i-1) + z b_i) / 2^64, over the length of
// a, with b_(-1) = 0: the three products sum to less than 3/4 p 2^64.
func (m redc) combine2(a, b []uint64, x, y, z uint64) {
	b = b[:len(a)]
	var last uint64
	for i, c := range b {
		h0, l0 := bits.Mul64(x, a[i])
		h1, l1 := bits.Mul64(y, last)
		h2, l2 := bits.Mul64(z, c)
		lo, c1 := bits.Add64(l0, l1, 0)
		lo, c2 := bits.Add64(lo, l2, 0)
		a[i] = m.reduce(h0+h1+h2+c1+c2, lo)
		last = c
	}
}

// PowerPart is a square-free polynomial with the multiplicity of its roots.
type PowerPart struct {
	P    Poly // monic
	Mult int
}

// SquareFreePoly returns the monic square-free parts, ascending in Mult, of a
// polynomial a of degree below P: a = lead prod P^Mult. Parts of degree 0 are
// left out. Cost: a few gcds.
//
// Source: Yun, On square-free decomposition algorithms, SYMSAC 1976.
func (f Field) SquareFreePoly(a Poly) []PowerPart {
	var parts []PowerPart
	d := f.DerivativePoly(a)
	g := f.GCDPoly(a, d)
	c := f.MonicPoly(f.quoPoly(a, g))
	d = f.ScalePoly(d, f.Inv(a.Lead()))
	w := f.SubPoly(f.quoPoly(d, g), f.DerivativePoly(c))
	for i := 1; len(c) > 1; i++ {
		if len(w) == 0 {
			return append(parts, PowerPart{c, i})
		}
		g = f.GCDPoly(c, w)
		if len(g) > 1 {
			parts = append(parts, PowerPart{g, i})
			c, w = f.quoPoly(c, g), f.quoPoly(w, g)
		}
		w = f.SubPoly(w, f.DerivativePoly(c))
	}
	return parts
}

// quoPoly returns the quotient of a by a monic b.
func (f Field) quoPoly(a, b Poly) Poly {
	n, m := len(a), len(b)
	if n < m {
		return nil
	}
	if m == 1 {
		return a
	}
	q := make(Poly, n-m+1)
	for k := n - m; k >= 0; k-- {
		top := min(k+m-1, n-m)
		q[k] = f.Sub(a[k+m-1], f.crossSum(q[k+1:top+1], b[k+m-1-top:m-1]))
	}
	return trim(q)
}

// DerivativeTo is DerivativePoly into the memory of d, as long as a at least.
func (f Field) DerivativeTo(d, a Poly) Poly {
	if len(a) < 2 {
		return nil
	}
	d = d[:len(a)-1]
	if f.P < wordPrime {
		red := newReducer(f.P)
		for i := range d {
			d[i] = red.mod(a[i+1] * red.mod(uint64(i+1)))
		}
		return trim(d)
	}
	for i := range d {
		d[i] = f.Mul(a[i+1], uint64(i+1))
	}
	return trim(d)
}
