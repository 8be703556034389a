package intmat

import (
	"context"
	"math/big"
)

// reconstruct returns the fraction u/v with v t = u modulo m, |u| <= bound,
// 0 < v <= bound and u, v coprime, for 0 <= t < m. There is at most one when
// 2 bound^2 < m; ok is false when there is none.
//
// Source: P. Wang, A p-adic algorithm for univariate partial fractions,
// section 3; J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
// Theorem 5.26.
func reconstruct(ctx context.Context, t, m, bound *big.Int) (u, v *big.Int, ok bool, err error) {
	r0, r1 := new(big.Int).Set(m), new(big.Int).Set(t)
	v0, v1 := new(big.Int), big.NewInt(1)
	q, w := new(big.Int), new(big.Int)
	for r1.Cmp(bound) > 0 {
		if err := ctx.Err(); err != nil {
			return nil, nil, false, err
		}
		q.QuoRem(r0, r1, w)
		r0, r1, w = r1, w, r0
		w.Mul(q, v1)
		v0.Sub(v0, w)
		v0, v1 = v1, v0
		if v1.CmpAbs(bound) > 0 {
			return nil, nil, false, nil
		}
	}
	if v1.Sign() < 0 {
		r1.Neg(r1)
		v1.Neg(v1)
	}
	// A common factor means the fraction does not represent t.
	if q.GCD(nil, nil, w.Abs(r1), v1).Cmp(big.NewInt(1)) != 0 {
		return nil, nil, false, nil
	}
	return r1, v1, true, nil
}
