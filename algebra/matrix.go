package algebra

import (
	"context"
	"strings"
)

// Matrix is an immutable m x n matrix over a ring. Either dimension may be 0.
type Matrix[E any] struct {
	ring Ring[E]
	m, n int
	e    []E      // row by row
	q    *qmatrix // over Rationals, in place of e
}

// NewMatrix returns the m x n matrix with the given entries, row by row. It
// panics when their number is not m n.
func NewMatrix[E any](r Ring[E], m, n int, entries ...E) Matrix[E] {
	if len(entries) != m*n {
		panic(ShapeError{Op: "construction", R1: m, C1: n, R2: len(entries), C2: 1})
	}
	return ownMatrix(r, m, n, append([]E(nil), entries...))
}

// MatrixFromFunc returns the m x n matrix with the entry f(i, j) in row i,
// column j, counted from 0.
func MatrixFromFunc[E any](r Ring[E], m, n int, f func(i, j int) E) Matrix[E] {
	e := make([]E, 0, m*n)
	for i := range m {
		for j := range n {
			e = append(e, f(i, j))
		}
	}
	return ownMatrix(r, m, n, e)
}

// ownMatrix takes possession of the entries.
func ownMatrix[E any](r Ring[E], m, n int, e []E) Matrix[E] {
	if _, ok := any(r).(Rationals); ok {
		return Matrix[E]{ring: r, m: m, n: n, q: qmatrixFromRats(any(e).([]Rat))}
	}
	return Matrix[E]{ring: r, m: m, n: n, e: e}
}

// Identity returns the n x n identity matrix.
func Identity[E any](r Ring[E], n int) Matrix[E] {
	return MatrixFromFunc(r, n, n, func(i, j int) E {
		if i == j {
			return r.One()
		}
		return r.Zero()
	})
}

// Ring returns the ring of the entries.
func (a Matrix[E]) Ring() Ring[E] { return a.ring }

// Dims returns the numbers of rows and columns.
func (a Matrix[E]) Dims() (m, n int) { return a.m, a.n }

// At returns the entry in row i, column j, counted from 0.
func (a Matrix[E]) At(i, j int) E {
	if a.q != nil && uint(j) < uint(a.n) {
		return any(a.q.entry(i*a.n + j)).(E)
	}
	return a.row(i)[j]
}

// Row returns a copy of row i.
func (a Matrix[E]) Row(i int) []E { return append([]E(nil), a.row(i)...) }

// row returns row i for reading only.
func (a Matrix[E]) row(i int) []E {
	if a.q != nil {
		return any(a.q.rats(i*a.n, (i+1)*a.n)).([]E)
	}
	return a.e[i*a.n : (i+1)*a.n : (i+1)*a.n]
}

// entries returns all entries, row by row, for reading only.
func (a Matrix[E]) entries() []E {
	if a.q == nil {
		return a.e
	}
	return any(a.q.rats(0, a.m*a.n)).([]E)
}

// Equal tells whether a = b; matrices of different shape are not equal.
func (a Matrix[E]) Equal(b Matrix[E]) bool {
	if a.m != b.m || a.n != b.n {
		return false
	}
	x, y := a.entries(), b.entries()
	for i := range x {
		if !a.ring.Equal(x[i], y[i]) {
			return false
		}
	}
	return true
}

// IsZero tells whether every entry is 0.
func (a Matrix[E]) IsZero() bool {
	for _, x := range a.entries() {
		if !a.ring.IsZero(x) {
			return false
		}
	}
	return true
}

// Add returns a + b.
func (a Matrix[E]) Add(b Matrix[E]) Matrix[E] {
	if a.m != b.m || a.n != b.n {
		panic(ShapeError{Op: "sum", R1: a.m, C1: a.n, R2: b.m, C2: b.n})
	}
	return MatrixFromFunc(a.ring, a.m, a.n, func(i, j int) E { return a.ring.Add(a.At(i, j), b.At(i, j)) })
}

// Scale returns x a.
func (a Matrix[E]) Scale(x E) Matrix[E] {
	return MatrixFromFunc(a.ring, a.m, a.n, func(i, j int) E { return a.ring.Mul(x, a.At(i, j)) })
}

// Sub returns a - b.
func (a Matrix[E]) Sub(b Matrix[E]) Matrix[E] { return a.Add(b.Scale(a.ring.FromInt(-1))) }

// Transpose returns the transpose of a.
func (a Matrix[E]) Transpose() Matrix[E] {
	return MatrixFromFunc(a.ring, a.n, a.m, func(i, j int) E { return a.At(j, i) })
}

// Mul returns the product a b, in m n k multiplications.
func (a Matrix[E]) Mul(b Matrix[E]) Matrix[E] {
	if a.n != b.m {
		panic(ShapeError{Op: "product", R1: a.m, C1: a.n, R2: b.m, C2: b.n})
	}
	p, err := a.mul(context.Background(), b)
	if err != nil {
		panic(err) // the context does not end
	}
	return p
}

// mul is Mul under a context.
func (a Matrix[E]) mul(ctx context.Context, b Matrix[E]) (Matrix[E], error) {
	x, y := a.entries(), b.entries()
	e := make([]E, 0, a.m*b.n)
	for i := range a.m {
		for j := range b.n {
			s := a.ring.Zero()
			for k, c := range x[i*a.n : (i+1)*a.n] {
				if !a.ring.IsZero(c) {
					s = a.ring.Add(s, a.ring.Mul(c, y[k*b.n+j]))
				}
			}
			e = append(e, s)
		}
		if err := ctx.Err(); err != nil {
			return Matrix[E]{}, err
		}
	}
	return ownMatrix(a.ring, a.m, b.n, e), nil
}

// MulVec returns a v for a column v.
func (a Matrix[E]) MulVec(v []E) []E {
	if a.n != len(v) {
		panic(ShapeError{Op: "product", R1: a.m, C1: a.n, R2: len(v), C2: 1})
	}
	out := make([]E, a.m)
	e := a.entries()
	for i := range out {
		s := a.ring.Zero()
		for k, x := range e[i*a.n : (i+1)*a.n] {
			if !a.ring.IsZero(x) && !a.ring.IsZero(v[k]) {
				s = a.ring.Add(s, a.ring.Mul(x, v[k]))
			}
		}
		out[i] = s
	}
	return out
}

// mustBeSquare panics with a ShapeError when a is not square.
func (a Matrix[E]) mustBeSquare(op string) {
	if a.m != a.n {
		panic(ShapeError{Op: op, R1: a.m, C1: a.n, R2: a.m, C2: a.n})
	}
}

// Pow returns a^k of a square matrix for k >= 0.
func (a Matrix[E]) Pow(ctx context.Context, k int) (r Matrix[E], err error) {
	a.mustBeSquare("power")
	r = Identity(a.ring, a.m)
	for ; k > 0; k >>= 1 {
		if k&1 == 1 {
			if r, err = r.mul(ctx, a); err != nil {
				return r, err
			}
		}
		if k > 1 {
			if a, err = a.mul(ctx, a); err != nil {
				return a, err
			}
		}
	}
	return r, nil
}

// EvalPoly returns p(a) of a square matrix by Horner's rule.
func (a Matrix[E]) EvalPoly(ctx context.Context, p Poly[E]) (y Matrix[E], err error) {
	a.mustBeSquare("polynomial")
	y = Identity(a.ring, a.m).Scale(a.ring.Zero())
	for i := p.Degree(); i >= 0; i-- {
		if y, err = y.mul(ctx, a); err != nil {
			return y, err
		}
		y = y.Add(Identity(a.ring, a.m).Scale(p.Coef(i)))
	}
	return y, nil
}

// Beside returns the matrix [a b].
func (a Matrix[E]) Beside(b Matrix[E]) Matrix[E] {
	if a.m != b.m {
		panic(ShapeError{Op: "juxtaposition", R1: a.m, C1: a.n, R2: b.m, C2: b.n})
	}
	return MatrixFromFunc(a.ring, a.m, a.n+b.n, func(i, j int) E {
		if j < a.n {
			return a.At(i, j)
		}
		return b.At(i, j-a.n)
	})
}

// Above returns a stacked on b.
func (a Matrix[E]) Above(b Matrix[E]) Matrix[E] {
	if a.n != b.n {
		panic(ShapeError{Op: "stacking", R1: a.m, C1: a.n, R2: b.m, C2: b.n})
	}
	return ownMatrix(a.ring, a.m+b.m, a.n, append(append([]E(nil), a.entries()...), b.entries()...))
}

// CharPoly returns the characteristic polynomial det(s I - a) of a square
// matrix over any commutative ring by Berkowitz's algorithm (On computing the
// determinant in small parallel time using a small number of processors, 1984),
// in O(n^4) ring operations without a division. Over a field of
// [Scalars] that field's own method is faster.
func CharPoly[E any](ctx context.Context, a Matrix[E]) (Poly[E], error) {
	a.mustBeSquare("characteristic polynomial")
	r := a.ring
	// c holds the characteristic polynomial of the leading k x k block, highest
	// power first.
	c := []E{r.One()}
	for k := range a.n {
		if err := ctx.Err(); err != nil {
			return Poly[E]{}, err
		}
		// The Toeplitz column is 1, -a_kk, -R C, -R M C, -R M^2 C, ... with the
		// leading block M, the row R left of a_kk and the column C above it.
		col := make([]E, 0, k+2)
		col = append(col, r.One(), r.Neg(a.At(k, k)))
		v := make([]E, k)
		for i := range v {
			v[i] = a.At(i, k)
		}
		for i := 0; i < k; i++ {
			if err := ctx.Err(); err != nil {
				return Poly[E]{}, err
			}
			s := r.Zero()
			for j := range v {
				s = r.Add(s, r.Mul(a.At(k, j), v[j]))
			}
			col = append(col, r.Neg(s))
			w := make([]E, k)
			for p := range w {
				w[p] = r.Zero()
				for q := range v {
					w[p] = r.Add(w[p], r.Mul(a.At(p, q), v[q]))
				}
			}
			v = w
		}
		next := make([]E, k+2)
		for i := range next {
			next[i] = r.Zero()
			for j := 0; j <= min(i, k); j++ {
				next[i] = r.Add(next[i], r.Mul(col[i-j], c[j]))
			}
		}
		c = next
	}
	for i, j := 0, len(c)-1; i < j; i, j = i+1, j-1 {
		c[i], c[j] = c[j], c[i]
	}
	return ownPoly(r, c), nil
}

// String writes the rows in brackets: "[[1, 2], [3, 4]]".
func (a Matrix[E]) String() string {
	var b strings.Builder
	b.WriteString("[")
	for i := range a.m {
		if i > 0 {
			b.WriteString(", ")
		}
		b.WriteString("[")
		for j, x := range a.row(i) {
			if j > 0 {
				b.WriteString(", ")
			}
			b.WriteString(a.ring.Text(x))
		}
		b.WriteString("]")
	}
	return b.String() + "]"
}
