package linsys

import (
	"context"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// system is a model over the field k, reduced to first order in local time:
//
//	y' = A y + f(t),   constraints: 0 = g y + r(t)
//
// The components of y are the derivatives of the unknowns below their order.
// The constraints hold at all times if they hold at one.
type system[E any] struct {
	k           algebra.Scalars[E]
	order       []int        // of each unknown; 0 for one given by an algebraic equation
	states      []derivative // the components of y
	a           algebra.Matrix[E]
	f           []expr.Elementary[E]
	top         []affine[E] // u^(order) of each unknown
	constraints []affine[E]
	divided     []E // elements whose denominators were divided by
}

// affine is the function row y + rest(t).
type affine[E any] struct {
	row  []E
	rest expr.Elementary[E]
}

// reduce solves the equations for the highest derivatives and writes them as a
// first-order system. Where the matrix of the highest derivatives is singular,
// a combination of the equations in which these cancel is an algebraic relation
// among lower derivatives: it becomes a constraint, and its derivatives take
// the place of one of the equations, until the matrix is regular.
func reduce[E any](ctx context.Context, k algebra.Scalars[E], names []string, eqs []linear[E]) (*system[E], error) {
	eqs = append([]linear[E](nil), eqs...)
	n := len(names)
	var constraints []linear[E]
	var divided []E
	budget := 4
	for _, o := range highest(n, eqs) {
		budget += 2 * (o + 1)
	}
	for {
		order := highest(n, eqs)
		for u, o := range order {
			if o < 0 {
				return nil, expr.Errorf(expr.Singular, firstPos(eqs), "the equations do not determine %s", names[u])
			}
		}
		lead := algebra.MatrixFromFunc[E](k, n, n, func(i, j int) E {
			if c, ok := eqs[i].coef[derivative{j, order[j]}]; ok {
				return c
			}
			return k.Zero()
		})
		ech, err := algebra.Reduce[E](ctx, k, lead.Beside(algebra.Identity[E](k, n)))
		if err != nil {
			return nil, wrapCancel(err)
		}
		if _, ok := any(k).(*expr.Constants); ok {
			// The denominators of an inverse have the factors of the determinant.
			for i := range ech.Pivots {
				divided = append(divided, ech.Rows.Row(i)...)
			}
		}
		dependent := -1
		for i, p := range ech.Pivots {
			if p >= n {
				dependent = i
			}
		}
		if dependent < 0 {
			s, err := firstOrder(ctx, k, order, eqs, ech, constraints)
			if err == nil {
				s.divided = divided
			}
			return s, err
		}
		budget--
		if budget < 0 {
			return nil, expr.Errorf(expr.Singular, firstPos(eqs), "the equations do not determine the states: the determinant of the system vanishes identically")
		}
		combination := linear[E]{coef: map[derivative]E{}, rest: expr.ZeroElementary(k)}
		replaced := -1
		for i := range n {
			x := ech.Rows.At(dependent, n+i)
			if !k.IsZero(x) {
				combination = combination.add(k, x, eqs[i])
				replaced = i
			}
		}
		combination.pos = eqs[replaced].pos
		if len(combination.coef) == 0 {
			if combination.rest.IsZero() {
				return nil, expr.Errorf(expr.Singular, combination.pos, "this equation follows from the others")
			}
			return nil, expr.Errorf(expr.Singular, combination.pos, "this equation contradicts the others")
		}
		eqs[replaced] = combination
		order = highest(n, eqs)
		for lag := lagOf(combination, order); lag > 0; lag-- {
			constraints = append(constraints, combination)
			combination = combination.derivative()
			budget--
		}
		eqs[replaced] = combination
	}
}

func firstPos[E any](eqs []linear[E]) expr.Pos {
	if len(eqs) == 0 {
		return expr.Pos{}
	}
	return eqs[0].pos
}

// highest returns the highest order in which each unknown occurs, -1 if it does
// not.
func highest[E any](n int, eqs []linear[E]) []int {
	order := make([]int, n)
	for i := range order {
		order[i] = -1
	}
	for _, eq := range eqs {
		for d := range eq.coef {
			order[d.u] = max(order[d.u], d.order)
		}
	}
	return order
}

// lagOf returns how often l must be differentiated to reach the highest order
// of some unknown.
func lagOf[E any](l linear[E], order []int) int {
	lag := -1
	for d := range l.coef {
		if gap := order[d.u] - d.order; lag < 0 || gap < lag {
			lag = gap
		}
	}
	return lag
}

// firstOrder builds the system from equations whose leading matrix is regular;
// ech is the reduced form [I M^-1] of that matrix beside the identity.
func firstOrder[E any](ctx context.Context, k algebra.Scalars[E], order []int, eqs []linear[E], ech algebra.Echelon[E], constraints []linear[E]) (*system[E], error) {
	n := len(order)
	s := &system[E]{k: k, order: order}
	index := map[derivative]int{}
	for u := range n {
		for o := range order[u] {
			index[derivative{u, o}] = len(s.states)
			s.states = append(s.states, derivative{u, o})
		}
	}
	dim := len(s.states)
	zero := expr.ZeroElementary(k)
	// The equations say M top = -(lower derivatives) - rest.
	lower := make([]affine[E], n)
	for i, eq := range eqs {
		lower[i] = affine[E]{row: zeroVec(k, dim), rest: eq.rest}
		for d, c := range eq.coef {
			if d.order < order[d.u] {
				lower[i].row[index[d]] = c
			}
		}
	}
	for u := range n {
		t := affine[E]{row: zeroVec(k, dim), rest: zero}
		for i := range n {
			if x := k.Neg(ech.Rows.At(u, n+i)); !k.IsZero(x) {
				t = t.add(k, x, lower[i])
			}
		}
		s.top = append(s.top, t)
	}
	rows := make([]E, 0, dim*dim)
	for _, d := range s.states {
		next := s.express(derivative{d.u, d.order + 1})
		rows = append(rows, next.row...)
		s.f = append(s.f, next.rest)
	}
	s.a = algebra.NewMatrix[E](k, dim, dim, rows...)
	for _, c := range constraints {
		if err := ctx.Err(); err != nil {
			return nil, wrapCancel(err)
		}
		s.constraints = append(s.constraints, s.combine(c))
	}
	return s, nil
}

func zeroVec[E any](k algebra.Ring[E], n int) []E {
	v := make([]E, n)
	for i := range v {
		v[i] = k.Zero()
	}
	return v
}

// add returns a + x b.
func (a affine[E]) add(k algebra.Scalars[E], x E, b affine[E]) affine[E] {
	row := make([]E, len(a.row))
	for i := range row {
		row[i] = k.Add(a.row[i], k.Mul(x, b.row[i]))
	}
	return affine[E]{row: row, rest: a.rest.Add(b.rest.Scale(x))}
}

// express returns u^(order) as a function of the state. Derivatives beyond the
// order of the unknown follow from the differential equation.
func (s *system[E]) express(d derivative) affine[E] {
	if d.order < s.order[d.u] {
		out := affine[E]{row: zeroVec(s.k, len(s.states)), rest: expr.ZeroElementary(s.k)}
		for i, x := range s.states {
			if x == d {
				out.row[i] = s.k.One()
			}
		}
		return out
	}
	out := s.top[d.u]
	for range d.order - s.order[d.u] {
		next := affine[E]{row: zeroVec(s.k, len(s.states)), rest: out.rest.Derivative()}
		for j, c := range out.row {
			if s.k.IsZero(c) {
				continue
			}
			for i := range next.row {
				next.row[i] = s.k.Add(next.row[i], s.k.Mul(c, s.a.At(j, i)))
			}
			next.rest = next.rest.Add(s.f[j].Scale(c))
		}
		out = next
	}
	return out
}

// combine returns a linear form as a function of the state.
func (s *system[E]) combine(l linear[E]) affine[E] {
	out := affine[E]{row: zeroVec(s.k, len(s.states)), rest: l.rest}
	for _, d := range l.keys() {
		out = out.add(s.k, l.coef[d], s.express(d))
	}
	return out
}
