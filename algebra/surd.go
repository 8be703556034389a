package algebra

import "math/big"

// SqrtParts returns c and m with sqrt(x) = c sqrt(m), m a positive integer
// without the square of a prime below 2^16, for x > 0. It panics when x <= 0.
func SqrtParts(x Rat) (c Rat, m *big.Int) {
	if x.Sign() <= 0 {
		panic("algebra: square root parts of a number that is not positive")
	}
	// sqrt(a/b) = sqrt(ab)/b
	den := x.Den()
	n := x.Num()
	n.Mul(n, den)
	outer := big.NewInt(1)
	m = big.NewInt(1)
	var q, r big.Int
	for p := int64(2); p < 1<<16 && n.Cmp(big.NewInt(p*p)) >= 0; p++ {
		bp := big.NewInt(p)
		exp := 0
		for {
			q.QuoRem(n, bp, &r)
			if r.Sign() != 0 {
				break
			}
			n.Set(&q)
			exp++
		}
		if exp > 0 {
			outer.Mul(outer, new(big.Int).Exp(bp, big.NewInt(int64(exp/2)), nil))
			if exp%2 == 1 {
				m.Mul(m, bp)
			}
		}
	}
	if s := new(big.Int).Sqrt(n); new(big.Int).Mul(s, s).Cmp(n) == 0 {
		outer.Mul(outer, s)
	} else {
		m.Mul(m, n)
	}
	return RatFromFrac(outer, den), m
}

// Quadratic returns h and d with h +- sqrt(d) the roots of the monic
// polynomial p of degree 2. It panics on other degrees.
func Quadratic(p Poly[Rat]) (h, d Rat) {
	if p.Degree() != 2 || !p.Lead().IsOne() {
		panic("algebra: not a monic polynomial of degree 2")
	}
	h = p.Coef(1).Mul(NewRat(-1, 2))
	return h, h.Mul(h).Sub(p.Coef(0))
}
