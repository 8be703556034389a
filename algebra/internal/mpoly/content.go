package mpoly

import (
	"math/big"
	"math/bits"
)

// Content returns the positive greatest common divisor of the coefficients, 0
// for 0.
func (p Poly) Content() *big.Int {
	if p.bigs == nil {
		return new(big.Int).SetUint64(p.wordContent(0))
	}
	g := new(big.Int)
	for _, c := range p.bigs {
		g.GCD(nil, nil, g, new(big.Int).Abs(c))
		if g.IsInt64() && g.Int64() == 1 {
			break
		}
	}
	return g
}

// wordContent returns the gcd of g and the coefficients, which are words.
func (p Poly) wordContent(g uint64) uint64 {
	// The ends are taken first: they are often coprime already.
	for i := len(p.words) - 1; i >= 0 && g != 1; i-- {
		g = gcdWords(g, magnitude(p.words[i]))
	}
	return g
}

// divWord returns p / c for a positive divisor c of the coefficients, which are
// words.
func (p Poly) divWord(c uint64) Poly {
	if c == 1 {
		return p
	}
	words := make([]int64, len(p.words))
	for i, x := range p.words {
		words[i] = x / int64(c) // c <= |x| < 2^63
	}
	p.words = words
	return p
}

// gcdWords returns the greatest common divisor of a and b.
//
// Source: Stein, Computational problems associated with Racah algebra, J.
// Comput. Phys. 1 (1967) (the binary algorithm).
func gcdWords(a, b uint64) uint64 {
	if a == 0 || b == 0 {
		return a | b
	}
	s := bits.TrailingZeros64(a | b)
	a >>= uint(bits.TrailingZeros64(a))
	for b != 0 {
		b >>= uint(bits.TrailingZeros64(b))
		if a > b {
			a, b = b, a
		}
		b -= a
	}
	return a << uint(s)
}

// Monomial returns the exponents of the greatest common divisor of the
// monomials, zeros for 0.
func (p Poly) Monomial() []int {
	m := p.minExponents()
	x := make([]int, p.n)
	for i := range x {
		x[i] = exponent(m, i)
	}
	return x
}

// divMonomial returns p divided by the monomial e, which divides every term.
func (p Poly) divMonomial(e []uint64) Poly {
	if isUnit(e) {
		return p
	}
	w := wordsOf(p.n)
	exps := make([]uint64, len(p.exps))
	for k := 0; k < len(exps); k += w {
		for i, x := range e {
			exps[k+i] = p.exps[k+i] - x
		}
	}
	p.exps = exps
	return p
}
