package mpoly

import "context"

// vandermonde solves y_s = sum_i c_i m_i^s, s = 1..len(m), for the c_i, the m_i
// being different and not 0.
//
// Source: Zippel, Interpolating polynomials from their values, J. Symbolic
// Comput. 9 (1990), section 3 (the transposed Vandermonde system).
type vandermonde struct {
	f      *field
	nodes  []uint64
	master []uint64 // prod (z - m_i), without the leading 1
	scale  []uint64 // 1 / (m_i prod_(l != i) (m_i - m_l))
	quo    []uint64
}

// longSystem is the number of unknowns from which solving looks at the context
// on the way.
const longSystem = 512

// newVandermonde returns the system with the nodes m, and ok false when two of
// them are equal or the context ends.
func newVandermonde(ctx context.Context, f *field, m []uint64) (v *vandermonde, ok bool) {
	k := len(m)
	mem := make([]uint64, 3*k)
	v = &vandermonde{f: f, nodes: m, master: mem[:k:k], scale: mem[k : 2*k : 2*k], quo: mem[2*k:]}
	multiplyOut(f, v.master, m)
	for i, x := range m {
		if k > longSystem && ctx.Err() != nil {
			return nil, false
		}
		v.quotient(x)
		var y uint64
		for j := k - 1; j >= 0; j-- {
			y = f.Add(f.times(y, x), v.quo[j])
		}
		if y == 0 {
			return nil, false
		}
		v.scale[i] = f.times(x, y)
	}
	f.reciprocals(v.scale)
	return v, true
}

// quotient sets quo to the master polynomial over z - x.
func (v *vandermonde) quotient(x uint64) {
	f, k := v.f, len(v.nodes)
	c := f.one
	for j := k - 1; j >= 0; j-- {
		v.quo[j] = c
		c = f.Add(v.master[j], f.times(c, x))
	}
}

// solve calls use(i, r, c_i) for every right-hand side r in number rhs, whose
// entries are y(r, s) = values[r*size + (s-1)*step]. It ends early when the
// context does.
func (v *vandermonde) solve(ctx context.Context, values []uint64, rhs, size, step int, use func(i, r int, c uint64)) {
	f := v.f
	if len(v.nodes) == 1 {
		for r := range rhs {
			use(0, r, f.times(values[r*size], v.scale[0]))
		}
		return
	}
	for i, x := range v.nodes {
		if len(v.nodes) > longSystem && ctx.Err() != nil {
			return
		}
		v.quotient(x)
		for r := range rhs {
			var sum uint64
			at := r * size
			for _, q := range v.quo {
				sum = f.Add(sum, f.times(q, values[at]))
				at += step
			}
			use(i, r, f.times(sum, v.scale[i]))
		}
	}
}

// lagrange returns, by rows, the coefficients of the polynomials that are 1 at
// one of the nodes, which are different, and 0 at the others.
func lagrange(f *field, nodes []uint64) [][]uint64 {
	k := len(nodes)
	mem := make([]uint64, k*(k+1)+k)
	rows := make([][]uint64, k)
	norm, master := mem[k*k:k*k+k], mem[k*k+k:]
	multiplyOut(f, master, nodes)
	for r, x := range nodes {
		row := mem[r*k : (r+1)*k : (r+1)*k]
		rows[r] = row
		c := f.one
		for j := k - 1; j >= 0; j-- {
			row[j] = c
			c = f.Add(master[j], f.times(c, x))
		}
		var y uint64
		for j := k - 1; j >= 0; j-- {
			y = f.Add(f.times(y, x), row[j])
		}
		norm[r] = y
	}
	f.reciprocals(norm)
	for r, row := range rows {
		for j := range row {
			row[j] = f.times(row[j], norm[r])
		}
	}
	return rows
}

// multiplyOut sets c to prod (z - m_i), without the leading 1.
func multiplyOut(f *field, c, m []uint64) {
	for d, x := range m {
		var below uint64
		for i := range d { // times z - x: the degree was d
			c[i], below = f.Sub(below, f.times(c[i], x)), c[i]
		}
		c[d] = f.Sub(below, x)
	}
}
