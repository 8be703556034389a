package intpoly

import (
	"context"
	"math/big"
)

// norm2 returns an upper bound, tight within 1, for the Euclidean norm of the
// coefficients.
func norm2(p Poly) *big.Int {
	s := new(big.Int)
	var t big.Int
	for _, c := range p {
		s.Add(s, t.Mul(c, c))
	}
	s.Sqrt(s)
	return s.Add(s, big.NewInt(1))
}

// factorBound returns B such that for every factor g of f with degree at most
// deg(f)/2, all coefficients of (lc(f)/lc(g)) g are at most B in size. That
// polynomial has the leading coefficient of f and some of its roots, so its
// Mahler measure is at most that of f, which is at most norm2(f), and
//
//	|coefficient of s^i| <= C(d-1, i) norm2(f) + C(d-1, i-1) |lc(f)|.
//
// Source: Cohen, A Course in Computational Algebraic Number Theory, theorem
// 3.5.1 (Mignotte); Knuth, The Art of Computer Programming 2, exercise 4.6.2-20.
func factorBound(f Poly) *big.Int {
	d := int64(f.Degree() / 2)
	// Binomials are largest in the middle; both are bounded by that one.
	mid := new(big.Int).Binomial(d-1, (d-1)/2)
	b := norm2(f)
	b.Add(b, new(big.Int).Abs(f.lead()))
	return b.Mul(b, mid)
}

// logDerivativeBound returns, for i = 0, ..., deg f - 1, a bound C_i such that
// for every factor g of f the coefficient of s^i in f g'/g is at most deg(g)
// C_i in size. The polynomial is the sum of f/(s-a) over the roots a of g,
// whose coefficient of s^i is both sum_(k>i) f_k a^(k-i-1) and
// -sum_(k<=i) f_k a^(k-i-1); the first bound grows with |a| and the second
// falls, so at any radius the larger one bounds both cases. Radii 2^e are
// tried.
//
// Source: Hart, van Hoeij and Novocin, Practical polynomial factoring in
// polynomial time, ISSAC 2011, section 2.
func logDerivativeBound(ctx context.Context, f Poly) ([]*big.Int, error) {
	n := f.Degree()
	best := make([]*big.Int, n)
	abs := make([]*big.Int, n+1)
	for i, c := range f {
		abs[i] = new(big.Int).Abs(c)
	}
	for i := range best {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		best[i] = radiusBound(abs, i, 0)
		for _, sign := range []int{1, -1} { // downhill from the unit circle
			for e := sign; ; e += sign {
				b := radiusBound(abs, i, e)
				if b.Cmp(best[i]) >= 0 {
					break
				}
				best[i] = b
			}
		}
	}
	return best, nil
}

// radiusBound returns the bound of logDerivativeBound for the radius 2^e,
// rounded up.
func radiusBound(abs []*big.Int, i, e int) *big.Int {
	var above, below, t big.Int
	// scaled adds c 2^s to sum, rounding up.
	scaled := func(sum, c *big.Int, s int) {
		if s >= 0 {
			sum.Add(sum, t.Lsh(c, uint(s)))
			return
		}
		if c.Sign() != 0 {
			sum.Add(sum, t.Rsh(c, uint(-s)))
			sum.Add(sum, big.NewInt(1))
		}
	}
	for k, c := range abs {
		if k > i {
			scaled(&above, c, e*(k-i-1))
		} else {
			scaled(&below, c, e*(k-i-1))
		}
	}
	if above.Cmp(&below) < 0 {
		return &below
	}
	return &above
}
