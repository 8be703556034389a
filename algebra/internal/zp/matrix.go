package zp

import (
	"context"
	"fmt"
	"math/big"
	"math/bits"
	"slices"
)

// Matrix is a dense Rows x Cols matrix over Field, stored by rows. Empty
// shapes are legal. The methods leave the receiver alone, save for
// [Matrix.Set] and writes through [Matrix.Row].
type Matrix struct {
	Field      Field
	Rows, Cols int
	e          []uint64
}

// NewMatrix returns the zero matrix of the given shape.
func (f Field) NewMatrix(rows, cols int) *Matrix {
	return &Matrix{Field: f, Rows: rows, Cols: cols, e: make([]uint64, rows*cols)}
}

// IdentityMatrix returns the n x n identity.
func (f Field) IdentityMatrix(n int) *Matrix {
	m := f.NewMatrix(n, n)
	for i := range n {
		m.e[i*n+i] = 1
	}
	return m
}

// MatrixFromBig returns a modulo P. The rows of a must have equal lengths; a
// matrix without rows is taken to have no columns.
func (f Field) MatrixFromBig(a [][]*big.Int) *Matrix {
	cols := 0
	if len(a) > 0 {
		cols = len(a[0])
	}
	m := f.NewMatrix(len(a), cols)
	for i, row := range a {
		if len(row) != cols {
			panic(fmt.Sprintf("zp: row %d has %d entries, want %d", i, len(row), cols))
		}
		for j, x := range row {
			m.e[i*cols+j] = f.FromBig(x)
		}
	}
	return m
}

// At returns the entry in row i and column j.
func (m *Matrix) At(i, j int) uint64 { return m.Row(i)[j] }

// Set makes x, a residue in [0, P), the entry in row i and column j.
func (m *Matrix) Set(i, j int, x uint64) { m.Row(i)[j] = x }

// Row returns row i. It shares memory with m.
func (m *Matrix) Row(i int) []uint64 {
	return m.e[i*m.Cols : (i+1)*m.Cols : (i+1)*m.Cols]
}

// Clone returns a copy of m.
func (m *Matrix) Clone() *Matrix {
	c := *m
	c.e = slices.Clone(m.e)
	return &c
}

// MulVec returns m x. It panics when the lengths disagree.
func (m *Matrix) MulVec(x []uint64) []uint64 {
	if len(x) != m.Cols {
		panic(fmt.Sprintf("zp: vector of length %d for %d columns", len(x), m.Cols))
	}
	y := make([]uint64, m.Rows)
	for i := range y {
		y[i] = m.Field.rowDot(m.Row(i), x)
	}
	return y
}

// Mul returns m o in O(n^3). It panics when the shapes or fields disagree.
func (m *Matrix) Mul(ctx context.Context, o *Matrix) (*Matrix, error) {
	if m.Cols != o.Rows || m.Field != o.Field {
		panic(fmt.Sprintf("zp: product of %dx%d and %dx%d matrices", m.Rows, m.Cols, o.Rows, o.Cols))
	}
	// Rows of the transpose make every entry a dot product with one division.
	t := o.transpose()
	r := m.Field.NewMatrix(m.Rows, o.Cols)
	for i := range m.Rows {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		row, out := m.Row(i), r.Row(i)
		for j := range out {
			out[j] = m.Field.rowDot(row, t.Row(j))
		}
	}
	return r, nil
}

func (m *Matrix) transpose() *Matrix {
	t := m.Field.NewMatrix(m.Cols, m.Rows)
	for i := range m.Rows {
		for j, x := range m.Row(i) {
			t.e[j*t.Cols+i] = x
		}
	}
	return t
}

// Hessenberg returns a matrix similar to the square matrix m whose entries
// below the subdiagonal are zero, in O(n^3). Columns already in that shape
// cost only the scan, so a tridiagonal matrix costs O(n^2).
//
// Source: H. Cohen, A Course in Computational Algebraic Number Theory,
// Algorithm 2.2.9 (steps 1 to 4).
func (m *Matrix) Hessenberg(ctx context.Context) (*Matrix, error) {
	m.mustBeSquare()
	h := m.Clone()
	f, n := m.Field, m.Rows
	u := make([]uint64, n)
	for k := 1; k+1 < n; k++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		pivot := k
		for pivot < n && h.At(pivot, k-1) == 0 {
			pivot++
		}
		if pivot == n {
			continue
		}
		if pivot != k {
			h.swapRows(pivot, k)
			h.swapCols(pivot, k)
		}
		top := h.Row(k)
		minusInv := f.Neg(f.Inv(top[k-1]))
		first, last := n, 0
		for i := k + 1; i < n; i++ {
			row := h.Row(i)
			if row[k-1] == 0 {
				u[i] = 0
				continue
			}
			c := f.Mul(row[k-1], minusInv)
			f.rowAddScaled(row[k-1:], top[k-1:], c)
			u[i] = f.Neg(c)
			first, last = min(first, i), i+1
		}
		if first >= last {
			continue
		}
		// The inverse column operations all change column k only.
		for i := range n {
			row := h.Row(i)
			row[k] = f.Add(row[k], f.rowDot(row[first:last], u[first:last]))
		}
	}
	return h, nil
}

// CharPoly returns the coefficients of det(s I - m) for a square m, that of
// s^i at index i, monic of length n+1, in O(n^3).
//
// With H the Hessenberg form and p_k the characteristic polynomial of its
// leading k x k block, expanding along the last column gives
//
//	p_k = (s - h_kk) p_(k-1) - sum_(i<k) h_ik (h_(i+1,i) ... h_(k,k-1)) p_(i-1).
//
// Zero multipliers are skipped, and the sum stops at a zero subdiagonal.
//
// Source: H. Cohen, A Course in Computational Algebraic Number Theory,
// Algorithm 2.2.9 (steps 5 to 7).
func (m *Matrix) CharPoly(ctx context.Context) ([]uint64, error) {
	h, err := m.Hessenberg(ctx)
	if err != nil {
		return nil, err
	}
	f, n := m.Field, m.Rows
	p := make([][]uint64, n+1)
	p[0] = []uint64{1}
	for k := range n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		q := make([]uint64, k+2)
		copy(q[1:], p[k])
		if c := h.At(k, k); c != 0 {
			f.rowAddScaled(q[:k+1], p[k], f.Neg(c))
		}
		chain := uint64(1)
		for i := k - 1; i >= 0; i-- {
			chain = f.Mul(chain, h.At(i+1, i))
			if chain == 0 {
				break
			}
			if c := h.At(i, k); c != 0 {
				f.rowAddScaled(q[:i+1], p[i], f.Neg(f.Mul(chain, c)))
			}
		}
		p[k+1] = q
	}
	return p[n], nil
}

// Det returns the determinant of a square m by Gaussian elimination in O(n^3).
func (m *Matrix) Det(ctx context.Context) (uint64, error) {
	m.mustBeSquare()
	e, err := m.eliminate(ctx, m.Cols, false)
	if err != nil {
		return 0, err
	}
	if len(e.cols) < m.Rows {
		return 0, nil
	}
	return e.det, nil
}

// Rank returns the rank of m in O(n^3).
func (m *Matrix) Rank(ctx context.Context) (int, error) {
	e, err := m.eliminate(ctx, m.Cols, false)
	if err != nil {
		return 0, err
	}
	return len(e.cols), nil
}

// Profile returns the rows and columns of a nonsingular square submatrix of
// m of maximal size. The columns are the pivots of the echelon form, in
// increasing order; the rows are in the order elimination chose them.
func (m *Matrix) Profile(ctx context.Context) (rows, cols []int, err error) {
	e, err := m.eliminate(ctx, m.Cols, false)
	if err != nil {
		return nil, nil, err
	}
	return e.rows[:len(e.cols):len(e.cols)], e.cols, nil
}

// ReducedEchelon returns the reduced row echelon form of m and its pivot
// columns, in O(n^3).
func (m *Matrix) ReducedEchelon(ctx context.Context) (*Matrix, []int, error) {
	e, err := m.eliminate(ctx, m.Cols, true)
	if err != nil {
		return nil, nil, err
	}
	return e.m, e.cols, nil
}

// Kernel returns a basis of {x : m x = 0}: for every column without a pivot
// the vector that is 1 there and 0 in the other columns without a pivot.
func (m *Matrix) Kernel(ctx context.Context) ([][]uint64, error) {
	r, pivots, err := m.ReducedEchelon(ctx)
	if err != nil {
		return nil, err
	}
	basis := make([][]uint64, 0, m.Cols-len(pivots))
	next := 0
	for j := range m.Cols {
		if next < len(pivots) && pivots[next] == j {
			next++
			continue
		}
		v := make([]uint64, m.Cols)
		v[j] = 1
		for i, c := range pivots[:next] {
			v[c] = m.Field.Neg(r.At(i, j))
		}
		basis = append(basis, v)
	}
	return basis, nil
}

// Solve returns the x with m x = b for a square m, by elimination in O(n^3);
// ok is false when m is singular.
func (m *Matrix) Solve(ctx context.Context, b *Matrix) (x *Matrix, ok bool, err error) {
	m.mustBeSquare()
	if b.Rows != m.Rows || b.Field != m.Field {
		panic(fmt.Sprintf("zp: %d right-hand rows for a matrix of order %d", b.Rows, m.Rows))
	}
	n, w := m.Rows, m.Cols+b.Cols
	aug := m.Field.NewMatrix(n, w)
	for i := range n {
		copy(aug.Row(i), m.Row(i))
		copy(aug.Row(i)[n:], b.Row(i))
	}
	e, err := aug.eliminate(ctx, n, true)
	if err != nil || len(e.cols) < n {
		return nil, false, err
	}
	x = m.Field.NewMatrix(n, b.Cols)
	for i := range n {
		copy(x.Row(i), e.m.Row(i)[n:])
	}
	return x, true, nil
}

// Inverse returns the inverse of a square m in O(n^3); ok is false when m is
// singular.
func (m *Matrix) Inverse(ctx context.Context) (inv *Matrix, ok bool, err error) {
	m.mustBeSquare()
	return m.Solve(ctx, m.Field.IdentityMatrix(m.Rows))
}

// echelon is the outcome of eliminating in the leading columns of a matrix.
type echelon struct {
	m    *Matrix
	rows []int  // original index of each row
	cols []int  // pivot columns
	det  uint64 // product of the pivots, signed by the row swaps
}

// eliminate brings the leading width columns to row echelon form, or to
// reduced row echelon form, choosing the first nonzero entry as pivot.
func (m *Matrix) eliminate(ctx context.Context, width int, reduced bool) (*echelon, error) {
	f, a := m.Field, m.Clone()
	e := &echelon{m: a, rows: make([]int, m.Rows), det: 1}
	for i := range e.rows {
		e.rows[i] = i
	}
	for c := 0; c < width && len(e.cols) < m.Rows; c++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		k := len(e.cols)
		pivot := k
		for pivot < m.Rows && a.At(pivot, c) == 0 {
			pivot++
		}
		if pivot == m.Rows {
			continue
		}
		if pivot != k {
			a.swapRows(pivot, k)
			e.rows[pivot], e.rows[k] = e.rows[k], e.rows[pivot]
			e.det = f.Neg(e.det)
		}
		top := a.Row(k)[c:]
		e.det = f.Mul(e.det, top[0])
		inv := f.Inv(top[0])
		first := k + 1
		if reduced {
			first = 0
			for j, x := range top {
				if x != 0 {
					top[j] = f.Mul(x, inv)
				}
			}
			inv = 1
		}
		minusInv := f.Neg(inv)
		for i := first; i < m.Rows; i++ {
			if row := a.Row(i)[c:]; i != k && row[0] != 0 {
				f.rowAddScaled(row, top, f.Mul(row[0], minusInv))
			}
		}
		e.cols = append(e.cols, c)
	}
	return e, nil
}

func (m *Matrix) swapRows(i, k int) {
	x, y := m.Row(i), m.Row(k)
	for j := range x {
		x[j], y[j] = y[j], x[j]
	}
}

func (m *Matrix) swapCols(i, k int) {
	for r := range m.Rows {
		row := m.Row(r)
		row[i], row[k] = row[k], row[i]
	}
}

func (m *Matrix) mustBeSquare() {
	if m.Rows != m.Cols {
		panic(fmt.Sprintf("zp: %dx%d matrix is not square", m.Rows, m.Cols))
	}
}

// rowAddScaled adds u x to y, where x is at least as long as y.
//
// The quotient floor(u 2^64 / P) replaces division: its product with x, cut
// to the high word, misses the quotient of u x by P by at most one.
//
// Source: D. Harvey, Faster arithmetic for number-theoretic transforms,
// section 2 (the trick is V. Shoup's).
func (f Field) rowAddScaled(y, x []uint64, u uint64) {
	p, p2 := f.P, 2*f.P
	q, _ := bits.Div64(u, 0, p)
	x = x[:len(y)]
	for i, v := range x {
		h, _ := bits.Mul64(q, v)
		s := y[i] + (u*v - h*p) // below 3 P < 2^64
		if s >= p2 {
			s -= p2
		}
		if s >= p {
			s -= p
		}
		y[i] = s
	}
}

// rowDot returns the sum of x_i y_i, where y is at least as long as x. A
// high word reduced below 2^62 leaves room for eight products below 2^124.
func (f Field) rowDot(x, y []uint64) uint64 {
	var hi, lo, carry uint64
	y = y[:len(x)]
	for len(x) >= 8 {
		a, b := x[:8], y[:8]
		for i := range 8 {
			h, l := bits.Mul64(a[i], b[i])
			lo, carry = bits.Add64(lo, l, 0)
			hi += h + carry
		}
		hi %= f.P
		x, y = x[8:], y[8:]
	}
	for i, v := range x {
		h, l := bits.Mul64(v, y[i])
		lo, carry = bits.Add64(lo, l, 0)
		hi += h + carry
	}
	_, r := bits.Div64(hi%f.P, lo, f.P)
	return r
}

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
