package algebra

import "context"

// Echelon is the reduced row echelon form of a matrix over a field.
type Echelon[E any] struct {
	Rows   Matrix[E] // the non-zero rows, each with a leading 1
	Pivots []int     // the column of the leading 1 of each row, ascending
}

// Reduce returns the reduced row echelon form of a by Gauss-Jordan
// elimination, O(m n rank) operations.
func Reduce[E any](ctx context.Context, f Field[E], a Matrix[E]) (Echelon[E], error) {
	rows := make([][]E, a.m)
	for i := range rows {
		rows[i] = a.Row(i)
	}
	var pivots []int
	rank := 0
	for col := 0; col < a.n && rank < a.m; col++ {
		if err := ctx.Err(); err != nil {
			return Echelon[E]{}, err
		}
		p := rank
		for p < a.m && f.IsZero(rows[p][col]) {
			p++
		}
		if p == a.m {
			continue
		}
		rows[rank], rows[p] = rows[p], rows[rank]
		inv, err := f.Inv(rows[rank][col])
		if err != nil {
			return Echelon[E]{}, err
		}
		for j := col; j < a.n; j++ {
			rows[rank][j] = f.Mul(inv, rows[rank][j])
		}
		for i := range rows {
			if i == rank || f.IsZero(rows[i][col]) {
				continue
			}
			if err := ctx.Err(); err != nil {
				return Echelon[E]{}, err
			}
			x := rows[i][col]
			for j := col; j < a.n; j++ {
				if !f.IsZero(rows[rank][j]) {
					rows[i][j] = f.Sub(rows[i][j], f.Mul(x, rows[rank][j]))
				}
			}
		}
		pivots = append(pivots, col)
		rank++
	}
	e := make([]E, 0, rank*a.n)
	for _, row := range rows[:rank] {
		e = append(e, row...)
	}
	return Echelon[E]{Rows: ownMatrix[E](f, rank, a.n, e), Pivots: pivots}, nil
}

// Kernel returns a basis of {x : a x = 0}, one vector for every column without
// a pivot, which holds 1 there and 0 in the other such columns.
func (e Echelon[E]) Kernel() [][]E {
	f := e.Rows.ring
	n := e.Rows.n
	isPivot := make([]bool, n)
	for _, p := range e.Pivots {
		isPivot[p] = true
	}
	var basis [][]E
	for free := range n {
		if isPivot[free] {
			continue
		}
		v := make([]E, n)
		for i := range v {
			v[i] = f.Zero()
		}
		v[free] = f.One()
		for i, p := range e.Pivots {
			v[p] = f.Neg(e.Rows.At(i, free))
		}
		basis = append(basis, v)
	}
	return basis
}

// Kernel returns a basis of {x : a x = 0} in the form of [Echelon.Kernel]; over
// Q modulo primes.
func Kernel[E any](ctx context.Context, f Field[E], a Matrix[E]) ([][]E, error) {
	if s, ok := any(f).(intMatrices); ok {
		v, err := s.kernel(ctx, any(a).(Matrix[Rat]))
		return any(v).([][]E), err
	}
	e, err := Reduce(ctx, f, a)
	if err != nil {
		return nil, err
	}
	return e.Kernel(), nil
}

// Solve returns X with a X = b for a square invertible a, or ErrSingular.
func Solve[E any](ctx context.Context, f Field[E], a, b Matrix[E]) (Matrix[E], error) {
	if a.m != a.n || a.m != b.m {
		panic(ShapeError{Op: "solution", R1: a.m, C1: a.n, R2: b.m, C2: b.n})
	}
	if s, ok := any(f).(intMatrices); ok {
		x, err := s.solve(ctx, any(a).(Matrix[Rat]), any(b).(Matrix[Rat]))
		return any(x).(Matrix[E]), err
	}
	e, err := Reduce(ctx, f, a.Beside(b))
	if err != nil {
		return Matrix[E]{}, err
	}
	if len(e.Pivots) < a.n || (a.n > 0 && e.Pivots[a.n-1] >= a.n) {
		return Matrix[E]{}, ErrSingular
	}
	return MatrixFromFunc[E](f, a.n, b.n, func(i, j int) E { return e.Rows.At(i, a.n+j) }), nil
}

// intMatrices is the capability of Q to work with integer matrices and one
// common denominator.
type intMatrices interface {
	det(ctx context.Context, a Matrix[Rat]) (Rat, error)
	minPoly(ctx context.Context, a Matrix[Rat]) (Poly[Rat], error)
	solve(ctx context.Context, a, b Matrix[Rat]) (Matrix[Rat], error)
	inverse(ctx context.Context, a Matrix[Rat]) (Matrix[Rat], error)
	kernel(ctx context.Context, a Matrix[Rat]) ([][]Rat, error)
}

// Inverse returns the inverse of a square matrix, or ErrSingular.
func Inverse[E any](ctx context.Context, f Field[E], a Matrix[E]) (Matrix[E], error) {
	a.mustBeSquare("inverse")
	if s, ok := any(f).(intMatrices); ok {
		x, err := s.inverse(ctx, any(a).(Matrix[Rat]))
		return any(x).(Matrix[E]), err
	}
	return Solve(ctx, f, a, Identity[E](f, a.m))
}

// Det returns the determinant of a square matrix: (-1)^n times the constant
// coefficient of its characteristic polynomial; over Q modulo primes.
func Det[E any](ctx context.Context, f Field[E], a Matrix[E]) (E, error) {
	a.mustBeSquare("determinant")
	if s, ok := any(f).(intMatrices); ok {
		d, err := s.det(ctx, any(a).(Matrix[Rat]))
		return any(d).(E), err
	}
	var p Poly[E]
	var err error
	if s, ok := any(f).(Scalars[E]); ok {
		p, err = s.CharPoly(ctx, a)
	} else {
		p, err = CharPoly(ctx, a)
	}
	if err != nil {
		var zero E
		return zero, err
	}
	d := p.Coef(0)
	if a.m%2 == 1 {
		d = f.Neg(d)
	}
	return d, nil
}

// MinPoly returns the minimal polynomial of a square matrix, the least common
// multiple of the minimal polynomials of the unit vectors, each from its Krylov
// sequence v, a v, a^2 v, ...
func MinPoly[E any](ctx context.Context, f Field[E], a Matrix[E]) (Poly[E], error) {
	a.mustBeSquare("minimal polynomial")
	if s, ok := any(f).(intMatrices); ok {
		p, err := s.minPoly(ctx, any(a).(Matrix[Rat]))
		return any(p).(Poly[E]), err
	}
	m := Constant[E](f, f.One())
	for i := range a.n {
		v := make([]E, a.n)
		for j := range v {
			v[j] = f.Zero()
		}
		v[i] = f.One()
		// What m already annihilates needs no further factor; otherwise the
		// annihilator of m(a) v is what m lacks.
		w := applyPoly(a, m, v)
		q, err := annihilator(ctx, f, a, w)
		if err != nil {
			return Poly[E]{}, err
		}
		m = m.Mul(q)
	}
	return m, nil
}

// applyPoly returns p(a) v.
func applyPoly[E any](a Matrix[E], p Poly[E], v []E) []E {
	r := a.ring
	w := make([]E, len(v))
	for i := range w {
		w[i] = r.Zero()
	}
	for k := p.Degree(); k >= 0; k-- {
		w = a.MulVec(w)
		for i := range w {
			w[i] = r.Add(w[i], r.Mul(p.Coef(k), v[i]))
		}
	}
	return w
}

// annihilator returns the monic polynomial q of least degree with q(a) v = 0.
func annihilator[E any](ctx context.Context, f Field[E], a Matrix[E], v []E) (Poly[E], error) {
	// Rows of reduced Krylov vectors, each with its combination of the powers.
	type row struct {
		v, comb []E
		pivot   int
	}
	var rows []row
	for k := 0; ; k++ {
		if err := ctx.Err(); err != nil {
			return Poly[E]{}, err
		}
		w := append([]E(nil), v...)
		comb := make([]E, k+1)
		for i := range comb {
			comb[i] = f.Zero()
		}
		comb[k] = f.One()
		for _, r := range rows {
			x := w[r.pivot]
			if f.IsZero(x) {
				continue
			}
			for j := range w {
				w[j] = f.Sub(w[j], f.Mul(x, r.v[j]))
			}
			for j := range r.comb {
				comb[j] = f.Sub(comb[j], f.Mul(x, r.comb[j]))
			}
		}
		p := 0
		for p < len(w) && f.IsZero(w[p]) {
			p++
		}
		if p == len(w) {
			return ownPoly[E](f, comb), nil
		}
		inv, err := f.Inv(w[p])
		if err != nil {
			return Poly[E]{}, err
		}
		for j := range w {
			w[j] = f.Mul(w[j], inv)
		}
		for j := range comb {
			comb[j] = f.Mul(comb[j], inv)
		}
		rows = append(rows, row{w, comb, p})
		v = a.MulVec(v)
	}
}
