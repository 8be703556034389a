package zp

import "math/bits"

// lazyPrime bounds the primes for which sums of up to lazyTerms products of
// residues fit a word below 2^63, so that products of polynomials are reduced
// once for a coefficient.
const (
	lazyPrime = 1 << 24
	lazyTerms = 1 << 15
)

// lazy reports whether sums of n products may stay unreduced.
func (f Field) lazy(n int) bool { return f.P < lazyPrime && n < lazyTerms }

// addRow adds q b to r, over the length of b, without reduction.
func addRow(r, b []uint64, q uint64) {
	r = r[:len(b)]
	for len(r) >= 4 && len(b) >= 4 { // unrolled: this is where the time goes
		r[0] += q * b[0]
		r[1] += q * b[1]
		r[2] += q * b[2]
		r[3] += q * b[3]
		r, b = r[4:], b[4:]
	}
	for i, x := range b {
		r[i] += q * x
	}
}

// crossDot returns the sum of a_i b_(n-1-i), n = len(a) = len(b).
func crossDot(a, b []uint64) uint64 {
	var s0, s1 uint64
	for len(a) >= 4 && len(b) >= 4 {
		c := b[len(b)-4:]
		s0 += a[0]*c[3] + a[1]*c[2]
		s1 += a[2]*c[1] + a[3]*c[0]
		a, b = a[4:], b[:len(b)-4]
	}
	for i, x := range a {
		s0 += x * b[len(b)-1-i]
	}
	return s0 + s1
}

// mulLazy sets c, zeros of length len(a) + len(b) - 1, to a b unreduced.
func mulLazy(c, a, b []uint64) {
	if len(a) > len(b) {
		a, b = b, a
	}
	for i, x := range a {
		if x != 0 {
			addRow(c[i:], b, x)
		}
	}
}

// squareLazy is mulLazy of a by itself, at half the cost: the products of
// different terms are formed once and doubled.
func squareLazy(c, a []uint64) {
	for i, x := range a {
		if x != 0 {
			c[2*i] += x * x
			addRow(c[2*i+1:], a[i+1:], 2*x)
		}
	}
}

// divRemLazy divides a, with sums of products as coefficients, by the monic b
// in place: the quotient replaces the upper coefficients, the remainder,
// reduced too, the lower ones.
func (r reducer) divRemLazy(a, b []uint64) {
	m := len(b) - 1
	for k := len(a) - 1; k >= m; k-- {
		q := r.mod(a[k])
		a[k] = q
		if q != 0 {
			addRow(a[k-m:], b[:m], r.p-q)
		}
	}
	for i := range min(m, len(a)) {
		a[i] = r.mod(a[i])
	}
}

// quotients is the ring of polynomials modulo a monic m of degree n >= 1, for a
// field with lazy sums. Elements are slices of length n.
type quotients struct {
	red  reducer
	m    Poly
	wide []uint64 // 2n words of work space
}

func (f Field) newQuotients(m Poly) *quotients {
	return &quotients{newReducer(f.P), m, make([]uint64, 2*len(m))}
}

// element returns a, of any degree, as element.
func (r *quotients) element(a Poly) []uint64 {
	n := len(r.m) - 1
	e := make([]uint64, max(n, len(a)))
	copy(e, a)
	r.red.divRemLazy(e, r.m)
	return e[:n:n]
}

// mul sets c = a b; c may be one of them.
func (r *quotients) mul(c, a, b []uint64) {
	wide := r.wide[:2*len(c)-1]
	clear(wide)
	if &a[0] == &b[0] {
		squareLazy(wide, a)
	} else {
		mulLazy(wide, a, b)
	}
	r.red.divRemLazy(wide, r.m)
	copy(c, wide)
}

// mulX sets a = x a.
func (r *quotients) mulX(a []uint64) {
	n := len(a)
	top := a[n-1]
	copy(a[1:], a)
	a[0] = 0
	if top != 0 {
		top = r.red.p - top
		for j, c := range r.m[:n] {
			a[j] = r.red.mod(a[j] + top*c)
		}
	}
}

// pow returns a^e, e > 0.
func (r *quotients) pow(a []uint64, e uint64) []uint64 {
	p := append([]uint64(nil), a...)
	for i := bits.Len64(e) - 2; i >= 0; i-- {
		r.mul(p, p, p)
		if e>>i&1 == 1 {
			r.mul(p, p, a)
		}
	}
	return p
}

// powX returns x^e.
func (r *quotients) powX(e uint64) []uint64 {
	n := len(r.m) - 1
	p := make([]uint64, n)
	i := bits.Len64(e) - 1
	start := uint64(0) // leading bits of e, as long as they are below n
	for ; i >= 0 && start<<1|e>>i&1 < uint64(n); i-- {
		start = start<<1 | e>>i&1
	}
	p[start] = 1
	for ; i >= 0; i-- {
		r.mul(p, p, p)
		if e>>i&1 == 1 {
			r.mulX(p)
		}
	}
	return p
}
