// Package intpoly is arithmetic with polynomials in one variable over the
// integers: products, exact quotients, greatest common divisors, square-free
// parts and factorisation into irreducible factors.
package intpoly

import (
	"cmp"
	"math/big"
	"math/bits"
)

// Poly is a polynomial over Z: the coefficient of s^i at index i, the last
// one non-zero; nil is 0. A Poly and its coefficients are never modified once
// built, so results may share coefficients with arguments.
type Poly []*big.Int

// New returns the polynomial with the given coefficients, lowest first. The
// coefficients are copied.
func New(c ...*big.Int) Poly {
	p := make(Poly, len(c))
	for i, x := range c {
		p[i] = new(big.Int).Set(x)
	}
	return trim(p)
}

// trim cuts leading zeros off.
func trim(p Poly) Poly {
	for len(p) > 0 && p[len(p)-1].Sign() == 0 {
		p = p[:len(p)-1]
	}
	if len(p) == 0 {
		return nil
	}
	return p
}

// Degree returns the degree, -1 for the zero polynomial.
func (p Poly) Degree() int { return len(p) - 1 }

// lead returns the leading coefficient of p != 0; it must not be modified.
func (p Poly) lead() *big.Int { return p[len(p)-1] }

// isOne reports whether x = 1.
func isOne(x *big.Int) bool { return x.IsInt64() && x.Int64() == 1 }

// one returns the polynomial 1.
func one() Poly { return Poly{big.NewInt(1)} }

// Content returns the non-negative greatest common divisor of the
// coefficients, 0 for the zero polynomial.
func (p Poly) Content() *big.Int {
	g := new(big.Int)
	// The ends are taken first: they are often coprime already.
	for i := len(p) - 1; i >= 0; i-- {
		if g.Sign() != 0 && g.IsUint64() {
			return g.SetUint64(wordContent(p[:i+1], g.Uint64()))
		}
		if p[i].Sign() != 0 {
			g.GCD(nil, nil, g, new(big.Int).Abs(p[i]))
		}
	}
	return g
}

// wordContent returns the gcd of g > 0 and the coefficients.
func wordContent(p Poly, g uint64) uint64 {
	for i := len(p) - 1; i >= 0 && g != 1; i-- {
		for a, b := g, remWord(p[i], g); ; a, b = b, a%b {
			if b == 0 {
				g = a
				break
			}
		}
	}
	return g
}

// remWord returns |x| modulo m > 0.
func remWord(x *big.Int, m uint64) uint64 {
	if x.IsInt64() {
		v := x.Int64()
		if v < 0 {
			v = -v // -2^63 stays itself, which is right as unsigned number
		}
		return uint64(v) % m
	}
	if bits.UintSize < 64 {
		t := new(big.Int).SetUint64(m)
		return t.Rem(x, t).Abs(t).Uint64()
	}
	var r uint64
	w := x.Bits()
	for i := len(w) - 1; i >= 0; i-- {
		_, r = bits.Div64(r, uint64(w[i]), m)
	}
	return r
}

// Primitive returns p = content pp, where pp has content 1 and a positive
// leading coefficient and content has the sign of p's leading coefficient;
// 0 and nil for the zero polynomial.
func (p Poly) Primitive() (content *big.Int, pp Poly) {
	content = p.Content()
	if len(p) == 0 {
		return content, nil
	}
	if p.lead().Sign() < 0 {
		content.Neg(content)
	}
	return content, p.over(content)
}

// primitivePart returns the primitive part of p != 0, with the sign of p.
func (p Poly) primitivePart() Poly {
	if isOne(p.lead()) {
		return p
	}
	return p.over(p.Content())
}

// over returns p / c for a divisor c of all coefficients.
func (p Poly) over(c *big.Int) Poly {
	if isOne(c) {
		return p
	}
	q := make(Poly, len(p))
	cells := make([]big.Int, len(p))
	d := c.Bits()
	if len(d) > 1 {
		for i, x := range p {
			q[i] = cells[i].Quo(x, c)
		}
		return q
	}
	size := 0
	for _, x := range p {
		size += len(x.Bits())
	}
	words := make([]big.Word, size)
	for i, x := range p {
		w := x.Bits()
		v := words[:len(w):len(w)]
		words = words[len(w):]
		var rem uint
		for j := len(w) - 1; j >= 0; j-- {
			if rem == 0 {
				v[j], rem = w[j]/d[0], uint(w[j]%d[0])
				continue
			}
			var quo uint
			quo, rem = bits.Div(rem, uint(w[j]), uint(d[0]))
			v[j] = big.Word(quo)
		}
		q[i] = cells[i].SetBits(v)
		if x.Sign() != c.Sign() {
			q[i].Neg(q[i])
		}
	}
	return q
}

// Add returns p + q.
func Add(p, q Poly) Poly {
	if len(p) < len(q) {
		p, q = q, p
	}
	s := append(Poly(nil), p...)
	for i, c := range q {
		s[i] = new(big.Int).Add(p[i], c)
	}
	return trim(s)
}

// Sub returns p - q.
func Sub(p, q Poly) Poly {
	d := make(Poly, max(len(p), len(q)))
	for i := range d {
		switch {
		case i >= len(q):
			d[i] = p[i]
		case i >= len(p):
			d[i] = new(big.Int).Neg(q[i])
		default:
			d[i] = new(big.Int).Sub(p[i], q[i])
		}
	}
	return trim(d)
}

// Scale returns c p.
func (p Poly) Scale(c *big.Int) Poly {
	if c.Sign() == 0 {
		return nil
	}
	s := make(Poly, len(p))
	for i, x := range p {
		s[i] = new(big.Int).Mul(x, c)
	}
	return trim(s)
}

// Derivative returns p'.
func (p Poly) Derivative() Poly {
	if len(p) < 2 {
		return nil
	}
	k := wordsFor(p.maxBits() + bits.Len(uint(len(p))))
	a := toFlat(p[1:], k, false)
	for i := range len(p) - 1 {
		scaleWords(a.at(i), uint64(i+1))
	}
	return a.poly()
}

// compare orders polynomials by degree, then by coefficients from the top.
func compare(p, q Poly) int {
	if c := cmp.Compare(len(p), len(q)); c != 0 {
		return c
	}
	for i := len(p) - 1; i >= 0; i-- {
		if c := p[i].Cmp(q[i]); c != 0 {
			return c
		}
	}
	return 0
}

// maxBits returns the bit length of the largest coefficient.
func (p Poly) maxBits() int {
	b := 0
	for _, c := range p {
		b = max(b, c.BitLen())
	}
	return b
}
