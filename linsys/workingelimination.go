package linsys

import (
	"context"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Elimination is the equation of higher order that a state alone satisfies,
//
//	p(d/dt) x = sum over j of q_j(d/dt) f_j
//
// whatever the initial values.
type Elimination struct {
	State    string
	Order    int
	Equation expr.Equation   // with the inputs by their names, in derivatives
	Inputs   []expr.Equation // what the names of the inputs stand for
	Explicit expr.Equation   // the same with its right side worked out
	// Initial holds the values of the state and its derivatives below Order at the
	// time of the side conditions; it is empty for a general solution.
	Initial  []expr.Equation
	Verified []string
	step     Step
}

// Step writes the elimination as a step of a working, of kind "elimination".
func (e *Elimination) Step() Step { return e.step }

// Elimination eliminates all states but one. With c the row that gives the
// state in y' = A y + f, and the row w(s) = c adj(s I - A) of polynomials, the
// polynomials p and q_j are det(s I - A) and the entries of w without their
// common divisor: p is the least polynomial that annihilates c under A
// (elimination with operators, E. L. Ince, Ordinary Differential Equations,
// section 6.4, from memory). It is verified by substitution of the response. The
// cost is O(n^3) operations in K for w and n gcds. It panics when the model has
// no state of the name.
func (r *Response) Elimination(ctx context.Context, state string) (_ *Elimination, err error) {
	defer catchLimit(&err)
	e, err := r.over.(deriver).elimination(ctx, r, r.index(state))
	return e, wrapCancel(err)
}

func (a *answerOver[E]) elimination(ctx context.Context, r *Response, u int) (*Elimination, error) {
	d, err := a.derive(ctx, r)
	if err != nil {
		return nil, err
	}
	k := d.k
	self := d.sv.express(derivative{u, 0})
	rhs := make([]algebra.Poly[E], len(self.row))
	for i, c := range self.row {
		rhs[i] = d.sv.chi.Scale(c)
	}
	row, _, err := algebra.DivideResolvent(ctx, d.sv.a.Transpose(), rhs)
	if err != nil {
		return nil, err
	}
	p := d.sv.chi
	common := p
	for _, w := range row {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if !w.IsZero() {
			common = algebra.GCD[E](k, common, w)
		}
	}
	exact := func(q algebra.Poly[E]) algebra.Poly[E] {
		out, _ := q.DivExact(k, common)
		return out
	}
	p = exact(p)
	name := r.model.names[u]
	out := &Elimination{State: name, Order: p.Degree()}
	var right []expr.Node
	sum := expr.ZeroElementary(k)
	enter := func(input string, f expr.Elementary[E], q algebra.Poly[E]) {
		if f.IsZero() || q.IsZero() {
			return
		}
		out.Inputs = append(out.Inputs, equation(at(input, 0, d.t()), d.function(f.Image())))
		right = append(right, d.operator(q, input)...)
		for i := range q.Degree() + 1 {
			sum = sum.Add(f.Scale(q.Coef(i)))
			f = f.Derivative()
		}
	}
	for j, w := range row {
		enter(indexed(d.f, j+1, len(row)), d.sv.f[j], exact(w))
	}
	enter(d.name("g", "h"), self.rest, p)
	left := expr.Add(d.operator(p, name)...)
	out.Equation = equation(left, expr.Add(right...))
	out.Explicit = equation(left, d.function(sum.Image()))

	eq := linear[E]{coef: map[derivative]E{}, rest: sum.Scale(k.FromInt(-1))}
	for i := range p.Degree() + 1 {
		if c := p.Coef(i); !k.IsZero(c) {
			eq.coef[derivative{u, i}] = c
		}
	}
	proof, err := prove(ctx, k, []linear[E]{eq}, nil, a.base, a.free)
	if err != nil {
		return nil, err
	}
	s := d.step("elimination", "Equation for one state alone")
	s.add(say("Elimination of the other states leaves an equation of order %v for %v:", out.Order, expr.Sym(name)).show(out.Equation))
	if len(out.Inputs) > 0 {
		s.add(say("with the inputs").show(out.Inputs...))
		s.add(say("which, worked out, is").show(out.Explicit))
	}
	if len(a.free) == 0 {
		values := substitute(k, a.base[u:u+1], expr.NewDenominator[E](k, nil), out.Order)
		for i := range out.Order {
			out.Initial = append(out.Initial, equation(at(name, i, d.origin()), expr.NodeOf(k, values.at0[0][i])))
		}
		if out.Order > 0 {
			s.add(say("Its initial values are").show(out.Initial...))
		}
	}
	if err := s.verify(proof.Holds(), "the response satisfies the equation for %s", name); err != nil {
		return nil, err
	}
	out.Verified = s.Verified
	out.step = *s
	return out, nil
}

// operator returns the terms of p(d/dt) of a named function, highest derivative
// first.
func (d *derivation[E]) operator(p algebra.Poly[E], name string) []expr.Node {
	var terms []expr.Node
	for i := p.Degree(); i >= 0; i-- {
		if c := p.Coef(i); !d.k.IsZero(c) {
			terms = append(terms, expr.Mul(expr.NodeOf(d.k, c), expr.Derivative(name, i)))
		}
	}
	return terms
}
