package intmat

import (
	"context"
	"math/big"
)

// berkowitz returns the characteristic polynomial of a without divisions, in
// O(n^4) ring operations: the way for small matrices and for long entries,
// where modular images would be many and each of them cheap.
//
// With the leading r x r block M, the column S above and the row R left of
// the corner x of the leading (r+1) x (r+1) block, the polynomial of the
// larger block is the product of the Toeplitz matrix with first column
// 1, -x, -R S, -R M S, -R M^2 S, ... and that of the smaller one.
//
// Source: S. Berkowitz, On computing the determinant in small parallel time
// using a small number of processors, Information Processing Letters 18.
func berkowitz(ctx context.Context, a [][]*big.Int) ([]*big.Int, error) {
	p := []*big.Int{big.NewInt(1)} // leading coefficient first
	t := new(big.Int)
	for r := range a {
		toeplitz := make([]*big.Int, r+2)
		toeplitz[0] = big.NewInt(1)
		toeplitz[1] = new(big.Int).Neg(a[r][r])
		v := make([]*big.Int, r)
		for i := range v {
			v[i] = a[i][r]
		}
		for k := 2; k < r+2; k++ {
			dot := new(big.Int)
			for j := range r {
				dot.Sub(dot, t.Mul(a[r][j], v[j]))
			}
			toeplitz[k] = dot
			if k == r+1 {
				break
			}
			w := make([]*big.Int, r)
			for i := range w {
				if err := ctx.Err(); err != nil {
					return nil, err
				}
				w[i] = new(big.Int)
				for j := range r {
					w[i].Add(w[i], t.Mul(a[i][j], v[j]))
				}
			}
			v = w
		}
		q := make([]*big.Int, r+2)
		for i := range q {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			q[i] = new(big.Int)
			for j := 0; j <= i && j < len(p); j++ {
				q[i].Add(q[i], t.Mul(toeplitz[i-j], p[j]))
			}
		}
		p = q
	}
	for i, j := 0, len(p)-1; i < j; i, j = i+1, j-1 {
		p[i], p[j] = p[j], p[i]
	}
	return p, nil
}
