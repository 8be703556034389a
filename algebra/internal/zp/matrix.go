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
// below the subdiagonal are zero, in O(n^3); m itself when it has that shape.
// See [hessenberg].
func (m *Matrix) Hessenberg(ctx context.Context) (*Matrix, error) {
	ring, cols, err := m.hessenberg(ctx)
	if err != nil {
		return nil, err
	}
	n := m.Rows
	h := m.Field.NewMatrix(n, n)
	ring.decode(cols)
	for j := range n {
		for i := range min(n, j+2) {
			h.e[i*n+j] = cols[j*n+i]
		}
	}
	return h, nil
}

// hessenberg returns the columns of the Hessenberg form in Montgomery form.
func (m *Matrix) hessenberg(ctx context.Context) (*matrixRing, []uint64, error) {
	m.mustBeSquare()
	ring := newMatrixRing(m.Field)
	a := slices.Clone(m.e)
	ring.encode(a)
	cols, err := hessenberg(ctx, ring, m.Rows, a)
	return ring, cols, err
}

// CharPoly returns the coefficients of det(s I - m) for a square m, that of
// s^i at index i, monic of length n+1, in O(n^3), from the Hessenberg form.
//
// Source: H. Cohen, A Course in Computational Algebraic Number Theory,
// Algorithm 2.2.9.
func (m *Matrix) CharPoly(ctx context.Context) ([]uint64, error) {
	ring, h, err := m.hessenberg(ctx)
	if err != nil {
		return nil, err
	}
	p, err := hessenbergCharPoly(ctx, ring, m.Rows, h)
	if err != nil {
		return nil, err
	}
	ring.decode(p)
	return p, nil
}

// Cyclic tells whether the Hessenberg form of a square m has no zero on its
// subdiagonal. Then the powers of m on the first unit vector span the space,
// so the minimal and the characteristic polynomial of m agree; the converse
// fails for an unlucky first vector. The cost is O(n^3).
func (m *Matrix) Cyclic(ctx context.Context) (bool, error) {
	_, h, err := m.hessenberg(ctx)
	if err != nil {
		return false, err
	}
	for i := 1; i < m.Rows; i++ {
		if h[(i-1)*m.Rows+i] == 0 {
			return false, nil
		}
	}
	return true, nil
}

// Det returns the determinant of a square m by Gaussian elimination in O(n^3).
func (m *Matrix) Det(ctx context.Context) (uint64, error) {
	m.mustBeSquare()
	ring := newMatrixRing(m.Field)
	a := slices.Clone(m.e)
	ring.encode(a)
	det, err := determinant(ctx, ring, m.Rows, a)
	return ring.reduce(0, det), err
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

// shoupQuotient returns floor(u 2^64 / P), which replaces division by P in many
// products with u: its product with v, cut to the high word, misses the
// quotient of u v by P by at most one.
//
// Source: D. Harvey, Faster arithmetic for number-theoretic transforms,
// section 2 (the trick is V. Shoup's).
func (f Field) shoupQuotient(u uint64) uint64 {
	q, _ := bits.Div64(u, 0, f.P)
	return q
}

// shoupMul returns v u, where q is shoupQuotient(u).
func (f Field) shoupMul(v, u, q uint64) uint64 {
	h, _ := bits.Mul64(q, v)
	r := u*v - h*f.P
	if r >= f.P {
		r -= f.P
	}
	return r
}

// rowAddScaled adds u x to y, where x is at least as long as y.
func (f Field) rowAddScaled(y, x []uint64, u uint64) {
	p, p2 := f.P, 2*f.P
	q := f.shoupQuotient(u)
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
