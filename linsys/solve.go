package linsys

import (
	"context"
	"errors"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// solver holds what the images of all solutions of a system share: the factored
// characteristic polynomial and the forcing over one denominator.
type solver[E any] struct {
	*system[E]
	chi     algebra.Poly[E]     // characteristic polynomial of A
	modes   expr.Denominator[E] // chi in factors
	forcing expr.Denominator[E] // denominator of F
	inputs  expr.Denominator[E] // the same with the inputs of the constraints
	c       []algebra.Poly[E]   // F = c/forcing
}

func newSolver[E any](ctx context.Context, s *system[E]) (*solver[E], error) {
	chi, err := s.k.CharPoly(ctx, s.a)
	if err != nil {
		return nil, wrapCancel(err)
	}
	factors, err := s.k.FactorPoly(ctx, chi)
	if err != nil {
		return nil, wrapCancel(err)
	}
	sv := &solver[E]{system: s, chi: chi, modes: expr.NewDenominator(s.k, factors)}
	images := make([]expr.Image[E], len(s.f))
	sv.forcing = expr.NewDenominator[E](s.k, nil)
	for i, f := range s.f {
		images[i] = f.Image()
		sv.forcing = sv.forcing.Join(images[i].Denominator())
	}
	for _, img := range images {
		sv.c = append(sv.c, sv.forcing.Numerator(img))
	}
	// Differentiation may have taken all inputs out of F.
	sv.inputs = sv.forcing
	for _, c := range s.constraints {
		sv.inputs = sv.inputs.Join(c.rest.Image().Denominator())
	}
	return sv, nil
}

var errRemainder = errors.New("linsys: the characteristic polynomial does not annihilate the matrix")

// images returns the images of the components of y for the initial value y0,
// with the forcing or, if homogeneous, without it.
//
// The numerators N over the denominator D = chi q, with q the denominator of
// the forcing, satisfy (s I - A) N = chi (q y0 + c). Synthetic division by
// s I - A gives them and leaves no remainder, because chi annihilates A (Cayley
// and Hamilton).
func (sv *solver[E]) images(ctx context.Context, y0 []E, homogeneous bool) ([]expr.Image[E], error) {
	k := sv.k
	den := sv.modes
	q := algebra.Constant[E](k, k.One())
	if !homogeneous {
		den = den.Mul(sv.forcing)
		q = sv.forcing.Poly()
	}
	rhs := make([]algebra.Poly[E], len(y0))
	for i := range rhs {
		b := q.Scale(y0[i])
		if !homogeneous {
			b = b.Add(sv.c[i])
		}
		rhs[i] = b.Mul(sv.chi)
	}
	numerators, rem, err := algebra.DivideResolvent(ctx, sv.a, rhs)
	if err != nil {
		return nil, wrapCancel(err)
	}
	for _, x := range rem {
		if !k.IsZero(x) {
			return nil, errRemainder
		}
	}
	out := make([]expr.Image[E], len(y0))
	for i := range out {
		if err := ctx.Err(); err != nil {
			return nil, wrapCancel(err)
		}
		out[i] = den.Image(numerators[i])
	}
	return out, nil
}

// initial solves the constraints and the side conditions, each of the form
// row y0 + value = 0, for the value y0 of the state at the origin. Without
// conditions it returns one solution of the constraints. The determinant of the
// conditions, where they are as many as the components, is returned as well. The
// error says what is missing or contradictory.
func (sv *solver[E]) initial(ctx context.Context, conditions []linear[E], names []string) (y0, det []E, err error) {
	k := sv.k
	dim := len(sv.states)
	type row struct {
		affine[E]
		pos expr.Pos
	}
	var rows []row
	for _, c := range sv.constraints {
		rows = append(rows, row{c, expr.Pos{}})
	}
	for _, c := range conditions {
		// The rest of a condition is a number, not an input.
		a := sv.combine(linear[E]{coef: c.coef, rest: expr.ZeroElementary(k)})
		a.rest = a.rest.Add(c.rest)
		rows = append(rows, row{a, c.pos})
	}
	build := func(n int) algebra.Matrix[E] {
		return algebra.MatrixFromFunc[E](k, n, dim+1, func(i, j int) E {
			if j < dim {
				return rows[i].row[j]
			}
			return k.Neg(rows[i].rest.Initial())
		})
	}
	ech, err := algebra.Reduce[E](ctx, k, build(len(rows)))
	if err != nil {
		return nil, nil, wrapCancel(err)
	}
	if r := len(ech.Pivots); r > 0 && ech.Pivots[r-1] == dim {
		// Name the first condition that cannot be met with the ones before it.
		for n := len(sv.constraints); n <= len(rows); n++ {
			e, err := algebra.Reduce[E](ctx, k, build(n))
			if err != nil {
				return nil, nil, wrapCancel(err)
			}
			if r := len(e.Pivots); r > 0 && e.Pivots[r-1] == dim {
				if n == 0 || !rows[n-1].pos.IsValid() {
					return nil, nil, expr.Errorf(expr.SideConditions, expr.Pos{}, "the side conditions contradict the equations")
				}
				return nil, nil, expr.Errorf(expr.SideConditions, rows[n-1].pos, "this condition contradicts the equations or the conditions before it")
			}
		}
	}
	y0 = zeroVec[E](k, dim)
	pivot := make([]bool, dim+1)
	for i, p := range ech.Pivots {
		y0[p] = ech.Rows.At(i, dim)
		pivot[p] = true
	}
	if len(conditions) > 0 && len(ech.Pivots) < dim {
		missing := ""
		for i, d := range sv.states {
			if !pivot[i] {
				if missing != "" {
					missing += ", "
				}
				missing += expr.Derivative(names[d.u], d.order).String()
			}
		}
		return nil, nil, expr.Errorf(expr.SideConditions, expr.Pos{}, "the conditions leave open: %s; give as many independent conditions as the order of the model, or none for the general solution", missing)
	}
	if _, ok := any(k).(*expr.Constants); ok && len(rows) == dim {
		c := algebra.MatrixFromFunc[E](k, dim, dim, func(i, j int) E { return rows[i].row[j] })
		d, err := algebra.Det[E](ctx, k, c)
		if err != nil {
			return nil, nil, wrapCancel(err)
		}
		det = append(det, d)
	}
	return y0, det, nil
}

// constraintMatrix returns the rows of the constraints.
func (sv *solver[E]) constraintMatrix() algebra.Matrix[E] {
	var entries []E
	for _, c := range sv.constraints {
		entries = append(entries, c.row...)
	}
	return algebra.NewMatrix[E](sv.k, len(sv.constraints), len(sv.states), entries...)
}

// properModes returns the characteristic polynomial of the model: that of A
// without a root 0 for every constraint, which A has because the constraints
// were differentiated.
func (sv *solver[E]) properModes() expr.Denominator[E] {
	return sv.modes.Without(algebra.Monomial[E](sv.k, sv.k.One(), 1), len(sv.constraints))
}

// basis returns initial values that span the solutions of the homogeneous
// system, each belonging to the modes of one factor p of the characteristic
// polynomial. With h the mean of the roots of p, they are dual to the values of
// the first states and of their derivatives under d/dt - h: the first state
// becomes a combination of e^(ht), t e^(ht), ... for p = s - h, and of
// e^(ht) cos wt, e^(ht) sin(wt)/w for a simple p of degree 2.
func (sv *solver[E]) basis(ctx context.Context) ([][]E, error) {
	k := sv.k
	dim := len(sv.states)
	var out [][]E
	for _, f := range sv.properModes().Factors() {
		vectors, err := sv.generalised(ctx, f.P)
		if err != nil {
			return nil, wrapCancel(err)
		}
		d := f.P.Degree()
		degree, err := k.Inv(k.FromInt(int64(-d)))
		if err != nil {
			return nil, err
		}
		h := k.Mul(f.P.Coef(d-1), degree)
		shifted := sv.a.Sub(algebra.Identity[E](k, dim).Scale(h))
		steps := d * sv.modes.Exponent(f.P)
		// duals[v][i*steps+j] is component i of shifted^j v.
		duals := make([][]E, len(vectors))
		for r, v := range vectors {
			duals[r] = make([]E, dim*steps)
			for j := range steps {
				if err := ctx.Err(); err != nil {
					return nil, wrapCancel(err)
				}
				for i := range dim {
					duals[r][i*steps+j] = v[i]
				}
				v = shifted.MulVec(v)
			}
		}
		dual, err := sv.dualBasis(ctx, vectors, duals)
		if err != nil {
			return nil, wrapCancel(err)
		}
		out = append(out, dual...)
	}
	return out, nil
}

// generalised returns a basis of the solutions' initial values in the kernel of
// p(A)^n, for n large enough.
func (sv *solver[E]) generalised(ctx context.Context, p algebra.Poly[E]) ([][]E, error) {
	dim := len(sv.states)
	mult := sv.modes.Exponent(p)
	if mult*p.Degree() == dim && len(sv.constraints) == 0 { // it is everything
		out := make([][]E, dim)
		for i := range out {
			out[i] = zeroVec[E](sv.k, dim)
			out[i][i] = sv.k.One()
		}
		return out, nil
	}
	m, err := sv.a.EvalPoly(ctx, p)
	if err != nil {
		return nil, err
	}
	if m, err = m.Pow(ctx, mult); err != nil {
		return nil, err
	}
	return algebra.Kernel[E](ctx, sv.k, m.Above(sv.constraintMatrix()))
}

// dualBasis returns the combinations of the vectors that are dual to the first
// independent columns of duals, which holds a row for each of them.
func (sv *solver[E]) dualBasis(ctx context.Context, vectors, duals [][]E) ([][]E, error) {
	k, r := sv.k, len(vectors)
	if r == 0 {
		return nil, nil
	}
	build := func(rows [][]E, columns int) algebra.Matrix[E] {
		return algebra.MatrixFromFunc[E](k, r, columns, func(i, j int) E { return rows[i][j] })
	}
	// Most often the first r columns, the first state and its derivatives, do.
	all := build(vectors, len(vectors[0]))
	x, err := algebra.Solve[E](ctx, k, build(duals, r), all)
	if errors.Is(err, algebra.ErrSingular) {
		var ech algebra.Echelon[E]
		if ech, err = algebra.Reduce[E](ctx, k, build(duals, len(duals[0]))); err != nil {
			return nil, err
		}
		chosen := algebra.MatrixFromFunc[E](k, r, r, func(i, j int) E { return duals[i][ech.Pivots[j]] })
		x, err = algebra.Solve[E](ctx, k, chosen, all)
	}
	if err != nil {
		return nil, err
	}
	out := make([][]E, r)
	for i := range out {
		out[i] = x.Row(i)
	}
	return out, nil
}

// echelonKernel returns the basis of the kernel of m that is in reduced row
// echelon form.
func echelonKernel[E any](ctx context.Context, k algebra.Field[E], m algebra.Matrix[E]) ([][]E, error) {
	vectors, err := algebra.Kernel(ctx, k, m)
	if err != nil || len(vectors) == 0 {
		return nil, err
	}
	var entries []E
	for _, v := range vectors {
		entries = append(entries, v...)
	}
	ech, err := algebra.Reduce(ctx, k, algebra.NewMatrix[E](k, len(vectors), len(vectors[0]), entries...))
	if err != nil {
		return nil, err
	}
	out := make([][]E, len(vectors))
	for i := range out {
		out[i] = ech.Rows.Row(i)
	}
	return out, nil
}
