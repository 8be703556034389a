// Package intpoly is arithmetic with polynomials in one variable over the
// integers: products, exact quotients, greatest common divisors, square-free
// parts and factorisation into irreducible factors.
package intpoly

import (
	"cmp"
	"math/big"
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

// Content returns the non-negative greatest common divisor of the
// coefficients, 0 for the zero polynomial.
func (p Poly) Content() *big.Int {
	g := new(big.Int)
	// The ends are taken first: they are often coprime already.
	for i := len(p) - 1; i >= 0; i-- {
		if i < len(p)-1 && g.IsInt64() && g.Int64() == 1 {
			break
		}
		if p[i].Sign() != 0 {
			g.GCD(nil, nil, g, new(big.Int).Abs(p[i]))
		}
	}
	return g
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
	if content.IsInt64() && content.Int64() == 1 {
		return content, p
	}
	pp = make(Poly, len(p))
	for i, c := range p {
		pp[i] = new(big.Int).Quo(c, content)
	}
	return content, pp
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
	d := make(Poly, len(p)-1)
	for i := range d {
		d[i] = new(big.Int).Mul(p[i+1], big.NewInt(int64(i+1)))
	}
	return d
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
