package mpoly

import "context"

// powerSystem is the system of equations sum_i c_i node_i^k = v_k, k = 1, ...,
// n, with n different non-zero nodes.
//
// Source: Zippel, Interpolating polynomials from their values, J. Symb. Comp.
// 9 (1990), section 3 (the transposed Vandermonde system).
type powerSystem struct {
	f    *field
	node []uint64
	all  []uint64 // prod (z - node_i)
	unit []uint64 // inverses of node_i prod_(k != i) (node_i - node_k)
}

// newPowerSystem returns nil when two nodes are equal or ctx is done. Cost:
// n^2.
func newPowerSystem(ctx context.Context, f *field, node []uint64) *powerSystem {
	n := len(node)
	v := &powerSystem{f: f, node: node, all: make([]uint64, 1, n+1), unit: make([]uint64, n)}
	v.all[0] = f.one
	for _, x := range node {
		if ctx.Err() != nil {
			return nil
		}
		v.all = append(v.all, 0)
		for i := len(v.all) - 1; i > 0; i-- {
			v.all[i] = f.Sub(v.all[i-1], f.times(x, v.all[i]))
		}
		v.all[0] = f.Neg(f.times(x, v.all[0]))
	}
	d := f.derivative(v.all) // its values are the products wanted
	for i, x := range node {
		if ctx.Err() != nil {
			return nil
		}
		v.unit[i] = f.times(x, f.evaluate(d, x))
		if v.unit[i] == 0 {
			return nil
		}
	}
	f.reciprocals(v.unit)
	return v
}

// solve calls yield(i, b, c) with the non-zero solutions c = c_i for each
// right-hand side b, ascending in i, then b; it stops when ctx is done. Cost:
// n^2 for each side.
func (v *powerSystem) solve(ctx context.Context, sides [][]uint64, yield func(i, b int, c uint64)) {
	f := v.f
	n := len(v.node)
	q := make([]uint64, n) // all / (z - node_i), highest coefficient first
	for i, x := range v.node {
		if ctx.Err() != nil {
			return
		}
		c := f.one
		for k := n - 1; k >= 0; k-- {
			q[n-1-k] = c
			c = f.Add(v.all[k], f.times(c, x))
		}
		for b, side := range sides {
			s := f.cross(dotSum{}, q, side)
			if r := f.redc(s.hi, s.lo); r != 0 {
				yield(i, b, f.times(r, v.unit[i]))
			}
		}
	}
}
