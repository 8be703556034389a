package mpoly

import (
	"context"
	"math/big"
)

// leadFactors is the factorisation of the leading coefficient of a polynomial
// in its main variable.
type leadFactors struct {
	content *big.Int
	factor  []Factor
}

// distribute returns polynomials that are multiples by integers of the leading
// coefficients of the true factors, whose restrictions to the line are the
// groups of local factors; image[i] is the local factor i at the point of the
// line over Z. It returns nil when the groups do not belong to true factors or
// the line is unlucky.
//
// Which factors of the leading coefficient go where is told by dividing the
// leading coefficients of the restrictions by theirs, as Wang does with
// divisors of integers. With f = c prod l_k^(e_k) x^d + ... and f(x, point) =
// delta u(x) for a primitive u, lc(u) divides c prod l_k(point)^(e_k), which
// bounds c from below; what the products of these bounds leave of the content
// goes to all factors.
//
// Source: Wang, An improved multivariate polynomial factoring algorithm, Math.
// Comp. 32 (1978), section 3.
func (w *wangLift) distribute(ctx context.Context, r *lineFactors, groups [][]int) ([]Poly, error) {
	f := r.line.f
	n := w.p.n
	var images [][]uint64
	if len(w.lead.factor) > 0 {
		for _, l := range w.lead.factor {
			t := newTermTable(l.P, w.order, true)
			rows, err := r.line.restrict(ctx, t, t.coefficients(f), t.degrees(), t.lineDegree())
			if err != nil {
				return nil, err
			}
			g := trimmed(rows[0])
			if len(g) < 2 {
				return nil, nil
			}
			images = append(images, g)
		}
	}
	left := make([]int, len(images))
	for k := range left {
		left[k] = w.lead.factor[k].Mult
	}
	rest := new(big.Int).Abs(w.lead.content)
	leads := make([]Poly, len(groups))
	consts := make([]*big.Int, len(groups))
	for s, group := range groups {
		mult := r.mult[group[0]]
		leads[s] = ConstantWord(n, 1)
		value := big.NewInt(1) // of the leading coefficient at the point
		if len(images) > 0 {
			own, err := r.groupLead(ctx, group)
			if err != nil {
				return nil, err
			}
			for k, g := range images {
				for len(own) >= len(g) {
					q, ok := f.quotient(own, g)
					if !ok {
						break
					}
					own = q
					left[k] -= mult
					leads[s] = leads[s].Mul(w.lead.factor[k].P)
					value.Mul(value, w.leadValue[k])
				}
			}
			if len(own) > 1 {
				return nil, nil
			}
		}
		u := big.NewInt(1)
		for _, i := range group {
			u.Mul(u, w.image[i].P[len(w.image[i].P)-1])
		}
		c := new(big.Int).GCD(nil, nil, u, value.Abs(value))
		consts[s] = c.Quo(u, c)
		for range mult {
			var m big.Int
			rest.QuoRem(rest, consts[s], &m)
			if m.Sign() != 0 {
				return nil, nil
			}
		}
	}
	for _, m := range left {
		if m != 0 {
			return nil, nil
		}
	}
	for s := range leads {
		leads[s] = leads[s].MulInt(consts[s].Mul(consts[s], rest))
	}
	return leads, nil
}

// groupLead returns the leading coefficient in x, up to a constant, of the
// primitive polynomial in x and t that is a multiple of the product of a group
// of local factors.
func (r *lineFactors) groupLead(ctx context.Context, group []int) ([]uint64, error) {
	f := r.line.f
	n := r.degree + 1
	rows := r.scaled(ctx, r.lead, r.product(ctx, group, n), n)
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	top := trimmed(rows[len(rows)-1])
	content := top
	for i := len(rows) - 2; i >= 0 && len(content) > 1; i-- {
		content = f.gcd(content, rows[i])
	}
	q, _ := f.quotient(top, content)
	return q, nil
}
