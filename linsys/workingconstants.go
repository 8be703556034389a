package linsys

import (
	"context"
	"slices"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// complementaryStep writes the complementary function with its constants, and
// finds these from the side conditions.
func (d *derivation[E]) complementaryStep(ctx context.Context) error {
	if d.sv.properModes().Poly().Degree() == 0 {
		return nil
	}
	a := d.ans
	if len(a.problemOver.conditions) == 0 {
		return d.generalStep(ctx)
	}
	basis, err := d.sv.basis(ctx)
	if err != nil {
		return err
	}
	var free [][]expr.Image[E]
	var names []string
	for i, v := range basis {
		h, err := d.sv.images(ctx, v, true)
		if err != nil {
			return err
		}
		free = append(free, d.sv.unknowns(h, true))
		names = append(names, d.constantName(i))
	}
	s := d.step("complementary", "Complementary function")
	if err := d.showComplementary(ctx, s, free, names, nil); err != nil {
		return err
	}
	return d.constantStep(ctx, free, names)
}

// constantName names a constant, apart from the names of the working.
func (d *derivation[E]) constantName(i int) string { return d.r.model.constantName(i) }

// showComplementary writes the complementary function; given is the part whose
// constants have values.
func (d *derivation[E]) showComplementary(ctx context.Context, s *Step, free [][]expr.Image[E], names []string, given []expr.Image[E]) error {
	var formulas []expr.Equation
	for u, name := range d.r.model.names {
		base := expr.ZeroImage(d.k)
		if given != nil {
			base = given[u]
		}
		var terms []expr.FreeTerm[E]
		for i, f := range free {
			terms = append(terms, expr.FreeTerm[E]{Name: names[i], Image: f[u]})
		}
		formulas = append(formulas, equation(at(d.part(name, "c"), 0, d.t()), d.function(base, terms...)))
	}
	words := "The solutions of the equations without input, combined from the modes in real form:"
	if len(free) == 0 {
		words = "The solution of the equations without input that the constants select:"
	}
	s.add(say(words).show(formulas...))
	p, err := prove(ctx, d.k, d.homogeneous(), nil, zeroImages(d.k, len(formulas)), free)
	if err != nil {
		return err
	}
	for i, r := range p.Residuals {
		if err := s.verify(r == "0", "the residual of equation %d without input is 0 for all values of the constants", i+1); err != nil {
			return err
		}
	}
	return nil
}

func zeroImages[E any](k algebra.Scalars[E], n int) []expr.Image[E] {
	out := make([]expr.Image[E], n)
	for i := range out {
		out[i] = expr.ZeroImage(k)
	}
	return out
}

// homogeneous returns the equations without inputs.
func (d *derivation[E]) homogeneous() []linear[E] {
	var out []linear[E]
	for _, eq := range d.ans.equations {
		out = append(out, linear[E]{coef: eq.coef, rest: expr.ZeroElementary(d.k), pos: eq.pos})
	}
	return out
}

// generalStep is the complementary function of a general solution; of one with
// values for some constants what these give is a part of it.
func (d *derivation[E]) generalStep(ctx context.Context) error {
	a := d.ans
	s := d.step("complementary", "Complementary function")
	given := make([]expr.Image[E], len(a.base))
	for u := range given {
		given[u] = a.base[u].Sub(a.particular[u])
	}
	if err := d.showComplementary(ctx, s, a.free, d.r.constants, given); err != nil {
		return err
	}
	if len(d.r.constants) < d.sv.properModes().Poly().Degree() {
		s.add(say("The other constants have been given values."))
	}
	return nil
}

// constantStep solves the side conditions for the constants.
func (d *derivation[E]) constantStep(ctx context.Context, free [][]expr.Image[E], names []string) error {
	k, a := d.k, d.ans
	conditions := a.problemOver.conditions
	top := 0
	forcing := expr.NewDenominator[E](k, nil)
	for _, c := range conditions {
		for x := range c.coef {
			top = max(top, x.order)
		}
	}
	particular := substitute(k, a.particular, forcing, top)
	var parts []substitution[E]
	for _, f := range free {
		parts = append(parts, substitute(k, f, forcing, top))
	}
	n := len(names)
	m := algebra.MatrixFromFunc[E](k, len(conditions), n+1, func(i, j int) E {
		if j < n {
			return parts[j].side(conditions[i], true)
		}
		return k.Neg(particular.side(conditions[i], false))
	})
	ech, err := algebra.Reduce[E](ctx, k, m)
	if err != nil {
		return err
	}
	s := d.step("constants", "Constants from the side conditions")
	var rows, values []expr.Equation
	for i := range conditions {
		var terms []expr.Node
		for j, name := range names {
			if c := m.At(i, j); !k.IsZero(c) {
				terms = append(terms, expr.Mul(expr.NodeOf(k, c), expr.Sym(name)))
			}
		}
		rows = append(rows, equation(expr.Add(terms...), expr.NodeOf(k, m.At(i, n))))
	}
	words := "Put into the side conditions, the sum of complementary function and particular integral gives for the constants:"
	if !d.forced() {
		words = "Put into the side conditions, the complementary function gives for the constants:"
	}
	s.add(say(words).show(rows...))
	if err := s.verify(len(ech.Pivots) == n && (n == 0 || ech.Pivots[n-1] == n-1), "the constants are determined"); err != nil {
		return err
	}
	c := make([]E, n)
	for j, name := range names {
		c[j] = ech.Rows.At(j, n)
		values = append(values, equation(expr.Sym(name), expr.NodeOf(k, c[j])))
	}
	if !slices.EqualFunc(rows, values, func(a, b expr.Equation) bool { return a.String() == b.String() }) {
		s.add(say("The solution is").show(values...))
	}
	for i := range conditions {
		x := k.Neg(m.At(i, n))
		for j := range c {
			x = k.Add(x, k.Mul(m.At(i, j), c[j]))
		}
		if err := s.verify(k.IsZero(x), "side condition %d holds with these constants", i+1); err != nil {
			return err
		}
	}
	same := true
	for u := range a.base {
		sum := a.particular[u]
		for j, f := range free {
			sum = sum.Add(f[u].Scale(c[j]))
		}
		same = same && sum.Equal(a.base[u])
	}
	return s.verify(same, "complementary function and particular integral add up to the response")
}

// responseStep writes the response.
func (d *derivation[E]) responseStep(context.Context) error {
	s := d.step("response", "The response")
	var formulas []expr.Equation
	same := true
	for u, name := range d.r.model.names {
		formulas = append(formulas, equation(at(name, 0, d.t()), d.r.states[u].Node()))
		same = same && d.ans.complementary[u].Add(d.ans.particular[u]).Equal(d.ans.base[u])
	}
	words := "The response is the sum of the complementary function and the particular integral:"
	switch {
	case len(d.sv.states) == 0:
		words = "The relations give the states:"
	case !d.forced():
		words = "There is no input; the response is the complementary function:"
	}
	s.add(say(words).show(formulas...))
	return s.verify(same, "the parts add up to the response")
}

// checkStep substitutes the response into the equations and side conditions as
// they were read.
func (d *derivation[E]) checkStep(ctx context.Context) error {
	a := d.ans
	p, err := prove(ctx, d.k, a.equations, a.problemOver.conditions, a.base, a.free)
	if err != nil {
		return err
	}
	s := d.step("check", "Check by substitution")
	list := func(eqs []expr.Equation) []expr.Equation {
		var out []expr.Equation
		for _, eq := range eqs {
			left := eq.Left
			if x, ok := eq.Right.(expr.Number); !ok || !x.Val.IsZero() {
				left = minus(left, eq.Right)
			}
			out = append(out, equation(left, expr.Int(0)))
		}
		return out
	}
	s.add(say("Substituted into the equations as they were given, the response satisfies them identically:").show(list(d.r.model.Equations())...))
	for i, r := range p.Residuals {
		if err := s.verify(r == "0", "the residual of equation %d is 0", i+1); err != nil {
			return err
		}
	}
	if len(p.Sides) > 0 {
		s.add(say("and the side conditions:").show(list(d.r.model.SideConditions())...))
	}
	for i, r := range p.Sides {
		if err := s.verify(r == "0", "the residual of side condition %d is 0", i+1); err != nil {
			return err
		}
	}
	return nil
}
