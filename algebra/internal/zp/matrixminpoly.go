package zp

import "context"

// MinPoly returns the minimal polynomial of a square m, monic, the
// coefficient of s^i at index i.
//
// It chooses generators v_1, v_2, ... of the space as a module over
// polynomials in m: the first pseudo-random (constant seed), the others unit
// vectors outside the span of what the earlier ones generate. The minimal
// polynomial is the least common multiple of the orders of the generators,
// where a polynomial f is extended to lcm(f, ord v) by the factor
// ord(f(m) v). The result is exact whatever the pseudo-random vector; a good
// one makes the cost O(s d n^2) with s generators and degree d.
//
// Source: M. Neunhoeffer, C. Praeger, Computing minimal polynomials of
// matrices (the reduction to orders of module generators).
func (m *Matrix) MinPoly(ctx context.Context) ([]uint64, error) {
	m.mustBeSquare()
	f, n := m.Field, m.Rows
	if n == 0 {
		return []uint64{1}, nil
	}
	v := make([]uint64, n)
	state := uint64(0x9e3779b97f4a7c15)
	for i := range v {
		state = state*6364136223846793005 + 1442695040888963407
		v[i] = (state >> 2) % f.P
	}
	if v[0] == 0 {
		v[0] = 1
	}
	span := &krylovSpan{m: m, taken: make([]bool, n)}
	poly, err := span.spin(ctx, v, true)
	if err != nil {
		return nil, err
	}
	for len(span.rows) < n {
		v := make([]uint64, n)
		for j, taken := range span.taken {
			if !taken { // a span holds no unit vector off its pivots
				v[j] = 1
				break
			}
		}
		w, err := m.evalAt(ctx, poly, v)
		if err != nil {
			return nil, err
		}
		if !isZeroRow(w) {
			alone := &krylovSpan{m: m, taken: make([]bool, n)}
			g, err := alone.spin(ctx, w, true)
			if err != nil {
				return nil, err
			}
			prod := make([]uint64, len(poly)+len(g)-1)
			for i, c := range g {
				f.rowAddScaled(prod[i:i+len(poly)], poly, c)
			}
			poly = prod
		}
		if _, err := span.spin(ctx, v, false); err != nil {
			return nil, err
		}
	}
	return poly, nil
}

// evalAt returns poly(m) v by Horner's rule.
func (m *Matrix) evalAt(ctx context.Context, poly, v []uint64) ([]uint64, error) {
	w := make([]uint64, len(v))
	for i := len(poly) - 1; i >= 0; i-- {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		w = m.MulVec(w)
		m.Field.rowAddScaled(w, v, poly[i])
	}
	return w, nil
}

// krylovSpan is a subspace closed under m, as rows (v | c) in the order they
// were found: v reduced by the rows before, with pivot 1, and c the
// combination of m^k v_0 that gives v, tracked on demand.
type krylovSpan struct {
	m      *Matrix
	rows   [][]uint64
	pivots []int
	taken  []bool // taken[j]: column j is a pivot
}

// spin adds v, m v, m^2 v, ... until the span is closed. On an empty span
// with track it returns the order of v: the least monic polynomial that
// takes v to zero.
func (s *krylovSpan) spin(ctx context.Context, v []uint64, track bool) ([]uint64, error) {
	f, n := s.m.Field, s.m.Rows
	for k := 0; ; k++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		row := make([]uint64, n, 2*n+1)
		copy(row, v)
		if track {
			row = row[:n+k+1]
			row[n+k] = 1
		}
		for i, r := range s.rows {
			if c := row[s.pivots[i]]; c != 0 {
				f.rowAddScaled(row[:min(len(r), len(row))], r, f.Neg(c))
			}
		}
		pivot := 0
		for pivot < n && row[pivot] == 0 {
			pivot++
		}
		if pivot == n {
			return row[n:], nil
		}
		inv := f.Inv(row[pivot])
		for j, x := range row {
			row[j] = f.Mul(x, inv)
		}
		s.rows, s.pivots = append(s.rows, row), append(s.pivots, pivot)
		s.taken[pivot] = true
		v = s.m.MulVec(v)
	}
}

func isZeroRow(v []uint64) bool {
	for _, x := range v {
		if x != 0 {
			return false
		}
	}
	return true
}
