package algebra

import (
	"math"
	"math/big"

	"example.org/closedform/algebra/internal/intpoly"
	"example.org/closedform/algebra/internal/word"
)

// quoRem returns the quotient and the remainder, d not zero. The remainder is
// multiplied by a factor of the leading coefficient of d where that does not
// divide its own.
func (p *qpoly) quoRem(d *qpoly) (quo, rem *qpoly) {
	n := p.length() - d.length()
	if n < 0 {
		return nil, p
	}
	if p.w != nil && d.w != nil && word.Abs(d.w[len(d.w)-1]) == 1 {
		if q, r, ok := quoRemWords(p.w, d.w); ok {
			return newQ(q, p.den).scaleDen(d.den), newQ(r, p.den)
		}
	}
	dc := d.ints()
	m := len(dc) - 1
	lead := dc[m]
	r := make([]*big.Int, p.length())
	for i, x := range p.ints() {
		r[i] = new(big.Int).Set(x)
	}
	q := make([]*big.Int, n+1)
	scale := big.NewInt(1)
	var g, f, t big.Int
	unit := lead.IsInt64() && word.Abs(lead.Int64()) == 1
	for k := n; k >= 0; k-- {
		top := r[k+m]
		q[k] = new(big.Int)
		if top.Sign() == 0 {
			continue
		}
		if !unit {
			g.GCD(nil, nil, new(big.Int).Abs(top), new(big.Int).Abs(lead))
			f.Quo(lead, &g)
			if !isOne(&f) {
				for i := range k + m + 1 {
					r[i].Mul(r[i], &f)
				}
				for i := k + 1; i <= n; i++ {
					q[i].Mul(q[i], &f)
				}
				scale.Mul(scale, &f)
			}
		}
		q[k].Quo(top, lead)
		for j := range m {
			r[k+j].Sub(r[k+j], t.Mul(q[k], dc[j]))
		}
	}
	den := mulDen(scale, p.den)
	if den.Sign() < 0 {
		den = new(big.Int).Neg(den)
		for _, list := range [][]*big.Int{q, r[:m]} {
			for _, x := range list {
				x.Neg(x)
			}
		}
	}
	return newQBig(q, den).scaleDen(d.den), newQBig(r[:m], den)
}

// scaleDen returns x p for the denominator x of another polynomial.
func (p *qpoly) scaleDen(x *big.Int) *qpoly {
	if p == nil || x == nil {
		return p
	}
	return p.scale(RatFromBigInt(x))
}

// quoRemWords divides by a polynomial with the leading coefficient 1 or -1,
// unless a number leaves the word.
func quoRemWords(p, d []int64) (q, r []int64, ok bool) {
	m := len(d) - 1
	n := len(p) - len(d)
	buf := append([]int64(nil), p...)
	q = make([]int64, n+1)
	for k := n; k >= 0; k-- {
		x := buf[k+m] * d[m]
		q[k] = x
		if x == 0 {
			continue
		}
		for j := range m {
			t, ok1 := mul64(x, d[j])
			s := buf[k+j] - t
			if !ok1 || (s < buf[k+j]) != (t > 0) || s == math.MinInt64 {
				return nil, nil, false
			}
			buf[k+j] = s
		}
	}
	return q, buf[:m], true
}

// divExact returns p/d if d divides p. By Gauss's lemma it is enough to divide
// the primitive parts over the integers.
func (p *qpoly) divExact(d *qpoly) (*qpoly, bool) {
	if p == nil {
		return nil, true
	}
	if p.length() < d.length() {
		return nil, false
	}
	if p.w != nil && d.w != nil && word.Abs(d.w[len(d.w)-1]) == 1 {
		if q, r, ok := quoRemWords(p.w, d.w); ok {
			for _, x := range r {
				if x != 0 {
					return nil, false
				}
			}
			return newQ(q, p.den).scaleDen(d.den), true
		}
	}
	cp, pp := p.ints().Primitive()
	cd, dd := d.ints().Primitive()
	q, ok := intpoly.DivExact(pp, dd)
	if !ok {
		return nil, false
	}
	num, den := cp, mulDen(cd, p.den)
	return newQBig(q, nil).scale(RatFromFrac(num, den)).scaleDen(d.den), true
}
