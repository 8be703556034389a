package mpoly

import (
	"context"
	"math/bits"
)

// redc returns (hi 2^64 + lo) / 2^64 for hi < P.
func (f *field) redc(hi, lo uint64) uint64 {
	t, _ := bits.Mul64(lo*f.inverse, f.P)
	r := hi - t
	if hi < t {
		r += f.P
	}
	return r
}

// dotSum is a sum of products of residues, two words wide: with P < 2^62 the
// high word of a product is below P, so taking P off whenever it reaches P
// keeps the value modulo P and never overflows.
type dotSum struct{ hi, lo uint64 }

// cross adds the sum of a[i] b[n-1-i] over two slices of n elements.
func (f *field) cross(s dotSum, a, b []uint64) dotSum {
	hi, lo := s.hi, s.lo
	b = b[:len(a)]
	p := f.P
	for i, x := range a {
		h, l := bits.Mul64(x, b[len(b)-1-i])
		var c uint64
		lo, c = bits.Add64(lo, l, 0)
		hi += h + c
		if hi >= p {
			hi -= p
		}
	}
	return dotSum{hi, lo}
}

// coefficient adds the coefficient of x^k in a b.
func (f *field) coefficient(s dotSum, a, b []uint64, k int) dotSum {
	lo, hi := max(0, k-len(b)+1), min(k, len(a)-1)
	if lo > hi {
		return s
	}
	return f.cross(s, a[lo:hi+1], b[k-hi:k-lo+1])
}

// Polynomials in one variable are slices, constant term first; a slice may end
// in zeros unless trimmed.

// product returns a b, of len(a) + len(b) - 1 coefficients, for non-empty
// arguments.
func (f *field) product(a, b []uint64) []uint64 {
	c := make([]uint64, len(a)+len(b)-1)
	f.productTo(c, a, b)
	return c
}

// productTo sets c to a b, for non-empty arguments and room for the product.
func (f *field) productTo(c, a, b []uint64) {
	for k := range c {
		s := f.coefficient(dotSum{}, a, b, k)
		c[k] = f.redc(s.hi, s.lo)
	}
}

// reduce replaces a by its remainder modulo b, whose leading coefficient has
// the given inverse, and returns it and the quotient, both within a.
func (f *field) reduce(a, b []uint64, inverse uint64) (rem, quo []uint64) {
	m := len(b) - 1
	if len(a) <= m {
		return a, nil
	}
	for k := len(a) - 1; k >= m; k-- {
		c := a[k]
		if c == 0 {
			continue
		}
		if inverse != f.one {
			c = f.times(c, inverse)
			a[k] = c
		}
		c = f.Neg(c)
		row := a[k-m : k : k]
		for i := range row {
			row[i] = f.Add(row[i], f.times(c, b[i]))
		}
	}
	return a[:m], a[m:]
}

// quotient returns a / b and whether the division is exact, for b != 0 trimmed.
func (f *field) quotient(a, b []uint64) (quo []uint64, ok bool) {
	r, q := f.reduce(append([]uint64(nil), a...), b, f.reciprocal(b[len(b)-1]))
	return q, len(trimmed(r)) == 0
}

// eliminate replaces a by a multiple of its remainder modulo b, both trimmed,
// and, when s and t are given, s by the same combination of s and t.
func (f *field) eliminate(a, b, s, t []uint64) (rem, cofactor []uint64) {
	lead := b[len(b)-1]
	for len(a) >= len(b) {
		k := len(a) - len(b)
		c := f.Neg(a[len(a)-1])
		a = a[:len(a)-1]
		for i := range a {
			a[i] = f.times(a[i], lead)
			if i >= k {
				a[i] = f.Add(a[i], f.times(c, b[i-k]))
			}
		}
		a = trimmed(a)
		if len(t) == 0 {
			continue
		}
		for i := range s {
			s[i] = f.times(s[i], lead)
		}
		for len(s) < len(t)+k {
			s = append(s, 0)
		}
		for i, x := range t {
			s[i+k] = f.Add(s[i+k], f.times(c, x))
		}
	}
	return a, s
}

// gcd returns a greatest common divisor of a and b, with any leading
// coefficient; empty when both are zero.
func (f *field) gcd(a, b []uint64) []uint64 {
	a = trimmed(append([]uint64(nil), a...))
	b = trimmed(append([]uint64(nil), b...))
	for len(b) > 0 {
		if len(b) == 1 {
			return b
		}
		a, _ = f.eliminate(a, b, nil, nil)
		a, b = b, a
	}
	return a
}

// inverseModulo returns s and c with s a = c modulo m, for trimmed a and m, the
// degree of a being lower; c is 0 when they have a common factor. The result is
// in room, which has 4 len(m) + 4 elements.
func (f *field) inverseModulo(room, a, m []uint64) (s []uint64, c uint64) {
	if len(a) == 0 {
		return nil, 0
	}
	n := len(m)
	r0 := append(room[:0:n], m...)
	r1 := append(room[n:n:2*n], a...)
	s0 := room[2*n : 2*n : 3*n+1]
	s1 := append(room[3*n+1:3*n+1:4*n+2], f.one)
	for len(r1) > 1 {
		// r_i = s_i a modulo m throughout.
		r0, s0 = f.eliminate(r0, r1, s0, s1)
		r0, r1, s0, s1 = r1, r0, s1, s0
	}
	if len(r1) == 0 {
		return nil, 0
	}
	return trimmed(s1), r1[0]
}

// shortProduct sets c to a b modulo x^len(c); it stops early when ctx is done.
func (f *field) shortProduct(ctx context.Context, c, a, b []uint64) {
	for k := range c {
		if k&63 == 63 && ctx.Err() != nil {
			return
		}
		s := f.coefficient(dotSum{}, a, b, k)
		c[k] = f.redc(s.hi, s.lo)
	}
}

// evaluate returns a(x).
func (f *field) evaluate(a []uint64, x uint64) uint64 {
	var y uint64
	for i := len(a) - 1; i >= 0; i-- {
		y = f.Add(f.times(y, x), a[i])
	}
	return y
}

// translate replaces a(x) by a(x + c); it stops early when ctx is done.
func (f *field) translate(ctx context.Context, a []uint64, c uint64) {
	for i := range a {
		if i&63 == 63 && ctx.Err() != nil {
			return
		}
		for j := len(a) - 2; j >= i; j-- {
			a[j] = f.Add(a[j], f.times(c, a[j+1]))
		}
	}
}

// inverseSeries returns 1/a modulo x^n for a(0) != 0; it stops early when ctx is
// done.
func (f *field) inverseSeries(ctx context.Context, a []uint64, n int) []uint64 {
	r := make([]uint64, n)
	r[0] = f.reciprocal(a[0])
	c := f.Neg(r[0])
	for k := 1; k < n; k++ {
		if k&63 == 63 && ctx.Err() != nil {
			break
		}
		top := min(k, len(a)-1)
		s := f.cross(dotSum{}, a[1:top+1], r[k-top:k])
		r[k] = f.times(c, f.redc(s.hi, s.lo))
	}
	return r
}
