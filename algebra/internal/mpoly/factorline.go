package mpoly

import (
	"context"
)

// line is the restriction of polynomials in x, y_1, ..., y_n modulo P to the
// line y = point + t direction, as polynomials in x and t.
type line struct {
	f         *field
	point     []uint64 // by columns, the first unused
	direction []uint64
	small     []uint64 // inverses of 1, 2, 3, ... at their indices
}

// newLine returns the line through an integer point, in the direction 1 for one
// variable and else in a random one.
func newLine(f *field, point []int64, rng *points) *line {
	l := &line{f: f, point: make([]uint64, len(point)), direction: make([]uint64, len(point))}
	for c := 1; c < len(point); c++ {
		l.point[c] = f.fromWord(point[c])
		l.direction[c] = f.one
		if len(point) > 2 {
			l.direction[c] = rng.next(f)
		}
	}
	return l
}

// at returns the point of the line with the parameter t.
func (l *line) at(t uint64) []uint64 {
	v := make([]uint64, len(l.point))
	for c := range v {
		v[c] = l.f.Add(l.point[c], l.f.times(t, l.direction[c]))
	}
	return v
}

// inverses returns the inverses of 1, ..., n at their indices.
func (l *line) inverses(n int) []uint64 {
	if len(l.small) <= n {
		l.small = make([]uint64, n+1)
		x := uint64(0)
		for i := 1; i <= n; i++ {
			x = l.f.Add(x, l.f.one)
			l.small[i] = x
		}
		l.f.reciprocals(l.small[1:])
	}
	return l.small
}

// restrict returns the restriction of a polynomial with coefficients c by
// powers of x, each a polynomial in t of len(row) - 1 <= degree. It is
// interpolated at t = 0, ..., degree. Cost: degree + 1 evaluations.
func (l *line) restrict(ctx context.Context, t *termTable, c []uint64, degrees []int, degree int) ([][]uint64, error) {
	f := l.f
	rows := newRows(degrees[0]+1, degree+1)
	values := make([]uint64, len(c))
	x := uint64(0)
	for i := 0; i <= degree; i++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		copy(values, c)
		t.evaluate(f, f.powerTable(l.at(x), degrees), values)
		for k, v := range values {
			r := rows[t.exp[k*t.width]]
			r[i] = f.Add(r[i], v)
		}
		x = f.Add(x, f.one)
	}
	for _, r := range rows {
		l.interpolate(ctx, r)
	}
	return rows, ctx.Err()
}

// interpolate replaces the values at 0, 1, 2, ... by the coefficients of the
// polynomial that takes them (Newton's divided differences); it stops early
// when ctx is done.
func (l *line) interpolate(ctx context.Context, r []uint64) {
	f := l.f
	small := l.inverses(len(r))
	for j := 1; j < len(r); j++ {
		if j&63 == 63 && ctx.Err() != nil {
			return
		}
		for i := len(r) - 1; i >= j; i-- {
			r[i] = f.times(f.Sub(r[i], r[i-1]), small[j])
		}
	}
	// Horner's scheme with the nodes from the last but one down to 0.
	node := f.fromWord(int64(len(r) - 2))
	for j := len(r) - 2; j > 0; j-- {
		if j&63 == 63 && ctx.Err() != nil {
			return
		}
		for i := j; i < len(r)-1; i++ {
			r[i] = f.Sub(r[i], f.times(node, r[i+1]))
		}
		node = f.Sub(node, f.one)
	}
}

// lineFactors is the factorisation of the restriction of p to a line over the
// power series in t, lead(t) prod factor_i(x, t)^mult_i with monic factors.
type lineFactors struct {
	line   *line
	degree int      // bounds the degree in t of the restriction
	lead   []uint64 // the leading coefficient of the restriction
	factor [][][]uint64
	mult   []int
}

// precision is the number of power series coefficients beyond the degree: they
// tell factors from products of series that are none.
const precision = 3

// transpose returns the columns of rows as rows.
func transpose(rows [][]uint64) [][]uint64 {
	c := newRows(len(rows[0]), len(rows))
	for i, r := range rows {
		for k, x := range r {
			c[k][i] = x
		}
	}
	return c
}

// liftLine lifts the factors of the image of the polynomial at the point of
// the line, given modulo P with any leading coefficients. It returns nil when
// P or the point does not allow it.
func liftLine(ctx context.Context, ln *line, t *termTable, c []uint64, degrees []int, image [][]uint64, mult []int) (*lineFactors, error) {
	f := ln.f
	r := &lineFactors{line: ln, degree: t.lineDegree(), mult: mult}
	rows, err := ln.restrict(ctx, t, c, degrees, r.degree)
	if err != nil {
		return nil, err
	}
	r.lead = rows[len(rows)-1]
	if r.lead[0] == 0 {
		return nil, nil
	}
	n := r.degree + 1 + precision
	inverse := f.inverseSeries(ctx, r.lead, n)
	for i, row := range rows {
		monic := make([]uint64, n)
		f.shortProduct(ctx, monic, row, inverse)
		rows[i] = monic
	}
	sizes := make([]int, len(image))
	for i, g := range image {
		sizes[i] = len(g) - 1
	}
	lift := newSeriesLift(f, sizes, mult, n)
	for i, g := range image {
		d := sizes[i]
		if g[d] == 0 {
			return nil, nil
		}
		copy(lift.factor[i].row[0], g)
		scaleBy(f, lift.factor[i].row[0], f.reciprocal(g[d]))
		lift.lead[i] = f.one
	}
	if !lift.start() || !lift.lift(ctx, transpose(rows), n) {
		return nil, ctx.Err()
	}
	for _, g := range lift.factor {
		r.factor = append(r.factor, g.row)
	}
	return r, nil
}

// multiplySeries returns the product of two polynomials in x over the power
// series in t, modulo t^n; it stops early when ctx is done.
func (f *field) multiplySeries(ctx context.Context, a, b [][]uint64, n int) [][]uint64 {
	c := newRows(n, len(a[0])+len(b[0])-1)
	for k := range c {
		if k&15 == 15 && ctx.Err() != nil {
			break
		}
		for i := range c[k] {
			var s dotSum
			for j := max(0, k-len(b)+1); j <= min(k, len(a)-1); j++ {
				s = f.coefficient(s, a[j], b[k-j], i)
			}
			c[k][i] = f.redc(s.hi, s.lo)
		}
	}
	return c
}

// product returns the product of the factors with the given numbers modulo
// t^n, as coefficients of t^k, unless ctx is done.
func (r *lineFactors) product(ctx context.Context, pick []int, n int) [][]uint64 {
	g := r.factor[pick[0]]
	for _, i := range pick[1:] {
		g = r.line.f.multiplySeries(ctx, g, r.factor[i], n)
	}
	return g[:n]
}

// scaled returns the product lead(t) g modulo t^n by powers of x, unless
// ctx is done.
func (r *lineFactors) scaled(ctx context.Context, lead []uint64, g [][]uint64, n int) [][]uint64 {
	f := r.line.f
	rows := transpose(g[:n])
	for i, row := range rows {
		c := make([]uint64, n)
		f.shortProduct(ctx, c, row, lead)
		rows[i] = c
	}
	return rows
}

// isFactor reports whether lead(t) times the factors picked is a polynomial in
// x and t of degree at most degree in t, as far as the series tell. For the
// restriction of a true factor it is one: its leading coefficient divides lead,
// and the cofactor in lead has no larger degree than the cofactor itself.
func (r *lineFactors) isFactor(ctx context.Context, pick []int) bool {
	n := r.degree + 1 + precision
	for _, row := range r.scaled(ctx, r.lead, r.product(ctx, pick, n), n) {
		for _, c := range row[r.degree+1:] {
			if c != 0 {
				return false
			}
		}
	}
	return true
}
