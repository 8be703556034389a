package linsys_test

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// fitConstants returns the values of the free constants of a general solution
// that make it equal to r, from the derivatives of all states at the origin.
func fitConstants(ctx context.Context, general, r *linsys.Response) (map[string]*big.Rat, bool) {
	names := general.Constants()
	n := len(names)
	zero := map[string]*big.Rat{}
	for _, c := range names {
		zero[c] = new(big.Rat)
	}
	var rows []algebra.Rat
	count := 0 // of equations
	base, err := general.With(zero)
	if err != nil {
		return nil, false
	}
	var units []*linsys.Response
	for _, c := range names {
		one := map[string]*big.Rat{}
		for k := range zero {
			one[k] = new(big.Rat)
		}
		one[c] = big.NewRat(1, 1)
		u, err := general.With(one)
		if err != nil {
			return nil, false
		}
		units = append(units, u)
	}
	for _, s := range r.States() {
		b, target := base.State(s), r.State(s).Sub(base.State(s))
		for range n {
			for _, u := range units {
				d := u.State(s).Sub(b)
				for range count % n {
					d = d.Derivative()
				}
				rows = append(rows, atOrigin(d))
			}
			d := target
			for range count % n {
				d = d.Derivative()
			}
			rows = append(rows, atOrigin(d))
			count++
		}
	}
	m := algebra.NewMatrix[algebra.Rat](algebra.Q, count, n+1, rows...)
	ech, err := algebra.Reduce[algebra.Rat](ctx, algebra.Q, m)
	if err != nil || len(ech.Pivots) != n || (n > 0 && ech.Pivots[n-1] != n-1) {
		return nil, false
	}
	out := map[string]*big.Rat{}
	for i, c := range names {
		out[c] = ech.Rows.At(i, n).Big()
	}
	return out, true
}

// atOrigin returns the value of f at its origin.
func atOrigin(f expr.Function) algebra.Rat {
	x, err := algebra.ParseRat(f.Initial().String())
	if err != nil {
		panic(err)
	}
	return x
}
