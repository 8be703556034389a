package zp

import (
	"context"
	"slices"
)

// Inverse returns the inverse of a square m in O(n^3); ok is false when m is
// singular.
func (m *Matrix) Inverse(ctx context.Context) (inv *Matrix, ok bool, err error) {
	inv, _, err = m.InverseDet(ctx)
	return inv, inv != nil, err
}

// InverseDet returns the inverse and the determinant of a square m, nil and 0
// when m is singular, by elimination in place: n^3 products.
//
// Clearing column c turns it from that of the given matrix to that of the
// inverse. A row swap before means a column swap of the result.
//
// Source: N. Higham, Accuracy and Stability of Numerical Algorithms,
// section 14.4 (Gauss-Jordan elimination).
func (m *Matrix) InverseDet(ctx context.Context) (inv *Matrix, det uint64, err error) {
	m.mustBeSquare()
	f, n, a := m.Field, m.Rows, m.Clone()
	det = 1
	swaps := make([]int, n)
	for c := range n {
		if err := ctx.Err(); err != nil {
			return nil, 0, err
		}
		pivot := c
		for pivot < n && a.e[pivot*n+c] == 0 {
			pivot++
		}
		if pivot == n {
			return nil, 0, nil
		}
		swaps[c] = pivot
		if pivot != c {
			a.swapRows(pivot, c)
			det = f.Neg(det)
		}
		top := a.Row(c)
		det = f.Mul(det, top[c])
		scale := f.Inv(top[c])
		top[c] = 1
		f.rowScale(top, scale)
		for i := range n {
			row := a.Row(i)
			if u := row[c]; u != 0 && i != c {
				row[c] = 0
				f.rowAddScaled(row, top, f.P-u)
			}
		}
	}
	for c := n - 1; c >= 0; c-- {
		if swaps[c] != c {
			a.swapCols(swaps[c], c)
		}
	}
	return a, det, nil
}

// rowScale multiplies x by u in place.
func (f Field) rowScale(x []uint64, u uint64) {
	q := f.shoupQuotient(u)
	for i, v := range x {
		if v != 0 {
			x[i] = f.shoupMul(v, u, q)
		}
	}
}

// Scaled returns the entries of m, by rows, multiplied by u.
func (m *Matrix) Scaled(u uint64) []uint64 {
	x := slices.Clone(m.e)
	m.Field.rowScale(x, u)
	return x
}
