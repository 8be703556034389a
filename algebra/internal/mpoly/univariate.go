package mpoly

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/intpoly"
	"example.org/closedform/algebra/internal/zp"
)

// longDegree is the degree from which a gcd in one variable is left to dense
// arithmetic.
const longDegree = 40

// univariateGCD returns the gcd, up to sign, of p and q, which are primitive and
// have the variable x_i only. Small ones are usually found from one prime.
func univariateGCD(ctx context.Context, p, q Poly, i int) (Poly, error) {
	dp, dq := p.Degree(i), q.Degree(i)
	if p.bigs == nil && q.bigs == nil && max(dp, dq) < longDegree {
		f := fieldAt(0)
		mem := make([]uint64, dp+dq+2)
		a, b := mem[:dp+1], mem[dp+1:]
		p.reduceTo(a, f, i)
		q.reduceTo(b, f, i)
		lead := gcdWords(magnitude(p.words[0]), magnitude(q.words[0]))
		if l := f.fromWord(int64(lead)); l != 0 { // lead is a divisor of a word
			g := f.GCDInPlace(zp.Poly(trimmed(a)), zp.Poly(trimmed(b)))
			if len(g) == 1 {
				return ConstantWord(p.n, 1), nil
			}
			scaleBy(f, g, f.times(l, f.reciprocal(g[len(g)-1])))
			if values := newLifting(f, g); values.final {
				h := fromWords(p.n, i, values.words)
				h = h.divWord(h.wordContent(0))
				_, ok, err := divide(ctx, p, h)
				if ok {
					_, ok, err = divide(ctx, q, h)
				}
				if ok || err != nil {
					return h, err
				}
			}
		}
	}
	return fromUnivariate(p.n, i, intpoly.GCD(p.univariate(i), q.univariate(i))), ctx.Err()
}

// reduceTo writes the coefficients of p, which has the variable x_i only and
// coefficients in words, to a, which is zero.
func (p Poly) reduceTo(a []uint64, f *field, i int) {
	for t, c := range p.words {
		a[exponent(p.exp(t), i)] = f.fromWord(c)
	}
}

// fromWords returns the polynomial in x_i with the given coefficients.
func fromWords(n, i int, c []int64) Poly {
	b := newBuilder(n, len(c))
	e := make([]uint64, wordsOf(n))
	w, s := fieldOf(i)
	for d := len(c) - 1; d >= 0; d-- {
		e[w] = uint64(d) << s
		b.addWord(e, c[d])
	}
	return b.poly()
}

// univariate returns p, which has no variable but x_i, as a dense polynomial.
func (p Poly) univariate(i int) intpoly.Poly {
	c := make(intpoly.Poly, p.Degree(i)+1)
	zero := new(big.Int)
	for d := range c {
		c[d] = zero
	}
	for t := range p.Len() {
		c[exponent(p.exp(t), i)] = p.coef(t)
	}
	return c
}

// fromUnivariate returns c as a polynomial in x_i.
func fromUnivariate(n, i int, c intpoly.Poly) Poly {
	b := newBuilder(n, len(c))
	e := make([]uint64, wordsOf(n))
	w, s := fieldOf(i)
	for d := len(c) - 1; d >= 0; d-- {
		e[w] = uint64(d) << s
		b.addBig(e, c[d])
	}
	return b.poly()
}
