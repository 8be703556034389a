package mpoly

import "context"

// level is a polynomial modulo P in x, y_1, ..., y_j with the rest of the
// variables evaluated: rows of exponents in descending lexicographic order.
type level struct {
	width int
	exp   []uint16
	c     []uint64
}

func (l *level) row(i int) []uint16 { return l.exp[i*l.width : i*l.width+l.width] }

// collapse returns l at y_j = x for its last variable.
func (l *level) collapse(f *field, x uint64, degree int) *level {
	powers := make([]uint64, degree+1)
	f.powers(powers, x)
	w := l.width - 1
	r := &level{width: w, exp: make([]uint16, 0, len(l.c)*w)}
	for i, c := range l.c {
		row := l.row(i)
		if e := row[w]; e > 0 {
			c = f.times(c, powers[e])
		}
		if k := len(r.c) - 1; k >= 0 && equalRows(r.row(k), row[:w]) {
			r.c[k] = f.Add(r.c[k], c)
			continue
		}
		r.exp = append(r.exp, row[:w]...)
		r.c = append(r.c, c)
	}
	return r
}

func equalRows(a, b []uint16) bool {
	for i, x := range a {
		if x != b[i] {
			return false
		}
	}
	return true
}

// levels returns a polynomial with its last variables set to those of the
// point, at index j with the variables x, y_1, ..., y_j left.
func levels(f *field, t *termTable, c []uint64, degrees []int, point []uint64) []*level {
	n := t.width - 1
	r := make([]*level, n+1)
	r[n] = &level{width: n + 1, exp: t.exp, c: c}
	for j := n - 1; j >= 1; j-- {
		r[j] = r[j+1].collapse(f, point[j+1], degrees[j+1])
	}
	return r
}

// partialFactor is a factor without its leading term in x, as far as it is known:
// block[i] holds the coefficient of x^i.
type partialFactor struct {
	degree int
	block  []level // rows without x
}

// sequence evaluates a polynomial at the powers of a point: cell[i] is the
// place where term i is added up, value[i] its current value.
type sequence struct {
	cell  []int32
	value []uint64
	ratio []uint64
}

// next sets the cells to the values at the next power of the point.
func (s *sequence) next(f *field, cells []uint64) {
	clear(cells)
	for i, v := range s.value {
		v = f.times(v, s.ratio[i])
		s.value[i] = v
		c := s.cell[i]
		cells[c] = f.Add(cells[c], v)
	}
}

// sparseLift finds factors in x, y_1, ..., y_n modulo P from their values in x
// at a random point and their leading coefficients in x.
//
// A factor is extended by one y_j after the other. Its terms in the variables
// before y_j are those it has at the value of y_j, but for bad luck; their
// coefficients, polynomials in y_j, follow by linear equations from the
// factors at as many points for the variables before as a coefficient has
// terms, and these factors, in x and y_j, from Hensel lifting. With the powers
// of one random point for points the equations are of Vandermonde's kind.
//
// Sources: Zippel, Interpolating polynomials from their values, J. Symb. Comp.
// 9 (1990); Monagan and Tuncer, Using sparse interpolation in Hensel lifting,
// CASC 2016; Chen and Monagan, The complexity and parallel implementation of
// two sparse multivariate Hensel lifting algorithms for polynomial
// factorization, CASC 2020.
type sparseLift struct {
	f       *field
	rng     *points
	point   []uint64
	degrees []int // of the polynomial by columns
	p       []*level
	lead    [][]*level
	mult    []int
}

// run returns the factors without their leading terms, nil when luck was bad.
// first[s][i] is the coefficient of x^i of factor s at the point.
func (l *sparseLift) run(ctx context.Context, first [][]uint64) ([]*partialFactor, error) {
	known := make([]*partialFactor, len(first))
	for s, g := range first {
		k := &partialFactor{degree: len(g) - 1, block: make([]level, len(g)-1)}
		for i := range k.block {
			if g[i] != 0 {
				k.block[i].c = []uint64{g[i]}
			}
		}
		known[s] = k
	}
	for j := 1; j < len(l.point); j++ {
		next, err := l.extend(ctx, known, j)
		if next == nil || err != nil {
			return nil, err
		}
		known = next
	}
	return known, nil
}

// extension is the state of the step that adds y_j.
type extension struct {
	l          *sparseLift
	j          int
	known      []*partialFactor
	width      int // coefficients in y_j
	points     int
	polynomial *sequence
	lead       []*sequence
	factor     []*sequence
	solver     [][]*powerSystem
	lift       *seriesLift
	leads      [][]uint64     // by factor, the leading coefficients at all points, in powers of y_j - its value
	inverses   [][]uint64     // those of the values of the leading coefficients
	values     [][][][]uint64 // by factor, power of x and of y_j, at all points
}

// extend adds the variable y_j; nil means bad luck.
func (l *sparseLift) extend(ctx context.Context, known []*partialFactor, j int) ([]*partialFactor, error) {
	e := &extension{l: l, j: j, known: known, width: l.degrees[j] + 1}
	if !e.prepare(ctx) {
		return nil, ctx.Err()
	}
	precision := e.width
	a := newRows(e.width, l.degrees[0]+1)
	cells := make([]uint64, (l.degrees[0]+1)*e.width)
	for at := range e.points {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		e.image(ctx, at, cells, a)
		if !e.lift.start() || !e.lift.lift(ctx, a, precision) {
			return nil, ctx.Err()
		}
		if at == 0 {
			precision = e.lift.degree() + 1
		}
		e.record(ctx, at, precision)
	}
	next := e.solve(ctx, precision)
	return next, ctx.Err()
}

// prepare sets the evaluations up; ok is false when a system of equations is
// singular or a leading coefficient vanishes.
func (e *extension) prepare(ctx context.Context) (ok bool) {
	l, f := e.l, e.l.f
	base := make([]uint64, e.j)
	for c := 1; c < e.j; c++ {
		base[c] = l.rng.next(f)
	}
	powers := f.powerTable(base, l.degrees[:e.j])
	e.polynomial = newSequence(f, l.p[e.j], powers, e.width)
	e.points = 1
	var sizes []int
	for s, k := range e.known {
		e.lead = append(e.lead, newSequence(f, l.lead[s][e.j], powers, e.width))
		factor, solver := k.sequence(ctx, f, powers)
		if factor == nil {
			return false
		}
		e.factor, e.solver = append(e.factor, factor), append(e.solver, solver)
		for i := range k.block {
			e.points = max(e.points, len(k.block[i].c))
		}
		sizes = append(sizes, k.degree)
	}
	for _, k := range e.known {
		values := make([][][]uint64, k.degree)
		for i := range values {
			values[i] = newRows(e.width, len(k.block[i].c))
		}
		e.values = append(e.values, values)
	}
	e.lift = newSeriesLift(f, sizes, l.mult, e.width)
	return e.leadingCoefficients(ctx)
}

// leadingCoefficients evaluates the leading coefficients at all points.
func (e *extension) leadingCoefficients(ctx context.Context) (ok bool) {
	f := e.l.f
	for _, q := range e.lead {
		rows, inverses := make([]uint64, e.points*e.width), make([]uint64, e.points)
		for at := range e.points {
			row := rows[at*e.width : (at+1)*e.width]
			q.next(f, row)
			f.translate(ctx, row, e.l.point[e.j])
			if row[0] == 0 || ctx.Err() != nil {
				return false
			}
			inverses[at] = row[0]
		}
		f.reciprocals(inverses)
		e.leads, e.inverses = append(e.leads, rows), append(e.inverses, inverses)
	}
	return true
}

// image sets a to the image of the polynomial at the next point, by powers of
// y_j - its value, and what is known of the factors.
func (e *extension) image(ctx context.Context, at int, cells []uint64, a [][]uint64) {
	f := e.l.f
	e.polynomial.next(f, cells)
	for i := range len(a[0]) {
		r := cells[i*e.width : (i+1)*e.width]
		f.translate(ctx, r, e.l.point[e.j])
		for k, x := range r {
			a[k][i] = x
		}
	}
	for s, k := range e.known {
		g := e.lift.factor[s].row
		e.lift.lead[s] = e.inverses[s][at]
		for i := range g {
			g[i][k.degree] = e.leads[s][at*e.width+i]
		}
		e.factor[s].next(f, g[0][:k.degree])
	}
}

// record keeps the coefficients of the lifted factors in powers of y_j.
func (e *extension) record(ctx context.Context, at, precision int) {
	f := e.l.f
	back := f.Neg(e.l.point[e.j])
	row := make([]uint64, precision)
	for s, k := range e.known {
		for i := range k.block {
			if at >= len(k.block[i].c) {
				continue
			}
			for b := range row {
				row[b] = e.lift.factor[s].row[b][i]
			}
			f.translate(ctx, row, back)
			for b, x := range row {
				e.values[s][i][b][at] = x
			}
		}
	}
}

// solve returns the factors with the terms in y_j.
func (e *extension) solve(ctx context.Context, precision int) []*partialFactor {
	next := make([]*partialFactor, len(e.known))
	for s, k := range e.known {
		next[s] = &partialFactor{degree: k.degree, block: make([]level, k.degree)}
		for i := range k.block {
			old, block := &k.block[i], &next[s].block[i]
			block.width = e.j
			e.solver[s][i].solve(ctx, e.values[s][i][:precision], func(term, b int, c uint64) {
				block.exp = append(append(block.exp, old.row(term)...), uint16(b))
				block.c = append(block.c, c)
			})
		}
	}
	return next
}

// newSequence returns the evaluation of a polynomial in x, y_1, ..., y_j at
// powers of a point for the variables between x and y_j, into cells of one row
// of the given width for each power of x.
func newSequence(f *field, p *level, powers [][]uint64, width int) *sequence {
	s := &sequence{
		cell:  make([]int32, len(p.c)),
		value: append([]uint64(nil), p.c...),
		ratio: make([]uint64, len(p.c)),
	}
	j := p.width - 1
	for i := range p.c {
		row := p.row(i)
		s.cell[i] = int32(int(row[0])*width + int(row[j]))
		s.ratio[i] = f.monomial(row[1:j], powers[1:])
	}
	return s
}

// monomial returns the value of a monomial, given the powers of the values.
func (f *field) monomial(row []uint16, powers [][]uint64) uint64 {
	r := f.one
	for c, e := range row {
		if e > 0 {
			r = f.times(r, powers[c][e])
		}
	}
	return r
}

// sequence returns the evaluation of a factor and the equations for its
// coefficients, nil when the values of two monomials agree.
func (k *partialFactor) sequence(ctx context.Context, f *field, powers [][]uint64) (*sequence, []*powerSystem) {
	s := &sequence{}
	solvers := make([]*powerSystem, k.degree)
	for i := range k.block {
		b := &k.block[i]
		from := len(s.ratio)
		for t, c := range b.c {
			s.cell = append(s.cell, int32(i))
			s.value = append(s.value, c)
			s.ratio = append(s.ratio, f.monomial(b.row(t), powers[1:]))
		}
		if solvers[i] = newPowerSystem(ctx, f, s.ratio[from:len(s.ratio):len(s.ratio)]); solvers[i] == nil {
			return nil, nil
		}
	}
	return s, solvers
}
