package linsys

import (
	"context"
	"fmt"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// t returns the independent variable.
func (d *derivation[E]) t() expr.Node { return expr.Sym(d.r.model.variable) }

// origin returns the time of the side conditions.
func (d *derivation[E]) origin() expr.Node { return expr.NodeOf(d.k, d.ans.origin) }

// function writes an exponential polynomial in the local time.
func (d *derivation[E]) function(f expr.Image[E], free ...expr.FreeTerm[E]) expr.Node {
	return expr.NewFunction(d.k, d.r.model.variable, d.ans.origin, f, free...).Node()
}

// stateNode returns the unknown's derivative that is component i of the state.
func (d *derivation[E]) stateNode(i int) expr.Node {
	s := d.sv.states[i]
	return expr.Derivative(d.r.model.names[s.u], s.order)
}

// matrixNode writes a matrix over K.
func (d *derivation[E]) matrixNode(m algebra.Matrix[E]) expr.Node {
	rows, cols := m.Dims()
	return expr.Mat(rows, cols, func(i, j int) expr.Node { return expr.NodeOf(d.k, m.At(i, j)) })
}

// combination writes row y + rest in the components of the state.
func (d *derivation[E]) combination(a affine[E]) expr.Node {
	var terms []expr.Node
	for i, c := range a.row {
		if !d.k.IsZero(c) {
			terms = append(terms, expr.Mul(expr.NodeOf(d.k, c), d.stateNode(i)))
		}
	}
	if !a.rest.IsZero() {
		terms = append(terms, d.function(a.rest.Image()))
	}
	return expr.Add(terms...)
}

// modelStep writes the model as y' = A y + f.
func (d *derivation[E]) modelStep(ctx context.Context) error {
	n := len(d.sv.states)
	s := d.step("model", "The model in matrix form")
	y, a := expr.Sym(d.y), expr.Sym(d.a)
	if n > 0 {
		components := make([]expr.Node, n)
		inputs := make([]expr.Node, n)
		forced := false
		for i := range n {
			components[i] = d.stateNode(i)
			inputs[i] = d.function(d.sv.f[i].Image())
			forced = forced || !d.sv.f[i].IsZero()
		}
		right := expr.Mul(a, y)
		rows := []expr.Equation{
			equation(y, expr.Col(components...)),
			equation(a, d.matrixNode(d.sv.a)),
		}
		if forced {
			right = expr.Add(right, at(d.f, 0, d.t()))
			rows = append(rows, equation(at(d.f, 0, d.t()), expr.Col(inputs...)))
		}
		words := "With the states gathered in the vector %v the model is a system of first order."
		if len(d.ans.equations) < n {
			words = "With the states and their derivatives below the highest gathered in the vector %v the model is a system of first order."
		}
		s.add(say(words, y).show(append([]expr.Equation{equation(expr.Derivative(d.y, 1), right)}, rows...)...))
	} else {
		s.add(say("The model has no differential equation: its relations determine the states."))
	}
	var given []expr.Equation
	for u, o := range d.sv.order {
		if o == 0 {
			given = append(given, equation(expr.Sym(d.r.model.names[u]), d.combination(d.sv.top[u])))
		}
	}
	if len(given) > 0 {
		s.add(say("The algebraic relations give the remaining states in terms of these.").show(given...))
	}
	var bound []expr.Equation
	for _, c := range d.sv.constraints {
		bound = append(bound, equation(d.combination(c), expr.Int(0)))
	}
	if len(bound) > 0 {
		s.add(say("The matrix of the highest derivatives is singular. Relations among lower derivatives were differentiated to take the place of equations, and hold at all times since they hold at one.").show(bound...))
	}
	// Each equation of the text vanishes when the state is put into it: it is
	// expressed in the state and has no coefficient left.
	for i, eq := range d.ans.equations {
		rest := d.sv.combine(eq)
		holds := rest.rest.IsZero()
		for _, c := range rest.row {
			holds = holds && d.k.IsZero(c)
		}
		if !holds { // a constraint, at most
			holds = d.constrained(ctx, rest)
		}
		if err := s.verify(holds, "equation %d follows from the system", i+1); err != nil {
			return err
		}
	}
	return d.sideConditions(s)
}

// constrained tells whether row y + rest is a combination of the constraints.
func (d *derivation[E]) constrained(ctx context.Context, a affine[E]) bool {
	n := len(d.sv.constraints)
	if n == 0 {
		return false
	}
	m := algebra.MatrixFromFunc[E](d.k, len(a.row), n+1, func(i, j int) E {
		if j < n {
			return d.sv.constraints[j].row[i]
		}
		return a.row[i]
	})
	ech, err := algebra.Reduce[E](ctx, d.k, m)
	if err != nil || len(ech.Pivots) > 0 && ech.Pivots[len(ech.Pivots)-1] == n {
		return false
	}
	rest := a.rest
	for i, p := range ech.Pivots {
		rest = rest.Add(d.sv.constraints[p].rest.Scale(d.k.Neg(ech.Rows.At(i, n))))
	}
	return rest.IsZero()
}

// sideConditions adds the side conditions as they were read.
func (d *derivation[E]) sideConditions(s *Step) error {
	if len(d.ans.problemOver.conditions) == 0 {
		if d.sv.properModes().Poly().Degree() == 0 {
			return nil
		}
		s.add(say("There are no side conditions: the general solution is sought."))
		return nil
	}
	s.add(say("The side conditions are given at %v = %v.", expr.Sym(d.r.model.Variable()), d.origin()).show(d.r.model.SideConditions()...))
	if !d.k.IsZero(d.ans.origin) {
		s.add(say("The time is counted from there, and the functions below are written in %v.", d.time))
	}
	return nil
}

// polynomialStep writes det(s I - A) and its factors.
func (d *derivation[E]) polynomialStep(ctx context.Context) error {
	if len(d.sv.states) == 0 {
		return nil
	}
	s := d.step("characteristic polynomial", "Characteristic polynomial")
	v := expr.Sym(d.s)
	left := expr.Apply("det", minus(expr.Mul(v, expr.Sym(d.identity)), expr.Sym(d.a)))
	formulas := []expr.Equation{equation(left, expr.PolyNodeOf(d.k, d.sv.chi, v))}
	factors := d.sv.modes.Factors()
	if len(factors) > 1 || factors[0].Mult > 1 {
		formulas = append(formulas, equation(left, d.product(factors, v)))
	}
	s.add(say("The characteristic polynomial, and its factors that are irreducible over the field of the model's coefficients:").show(formulas...))
	if len(formulas) == 1 {
		s.Passages[0].Text = say("The characteristic polynomial is irreducible over the field of the model's coefficients.").Text
		if d.sv.chi.Degree() == 1 {
			s.Passages[0].Text = say("The characteristic polynomial:").Text
		}
	}
	if c := len(d.sv.constraints); c > 0 {
		words := "The factor %v occurs %v more than in the model itself, because %v relations were differentiated; the relations exclude the solutions that belong to this."
		if c == 1 {
			words = "The factor %v occurs %v more than in the model itself, because %v relation was differentiated; the relation excludes the solutions that belong to this."
		}
		s.add(say(words, v, times(c), c))
	}
	if err := s.verify(d.sv.modes.Poly().Equal(d.sv.chi), "the product of the factors is the characteristic polynomial"); err != nil {
		return err
	}
	again, err := algebra.CharPoly(ctx, d.sv.a)
	if err != nil {
		return err
	}
	return s.verify(again.Equal(d.sv.chi), "det(%s*%s - %s) by a second method", d.s, d.identity, d.a)
}

// product writes a product of powers of polynomials in v.
func (d *derivation[E]) product(factors []algebra.Factor[E], v expr.Node) expr.Node {
	var out []expr.Node
	for _, f := range factors {
		out = append(out, expr.Pow(expr.PolyNodeOf(d.k, f.P, v), f.Mult))
	}
	return expr.Mul(out...)
}

// rootGroup is a factor of the characteristic polynomial with what belongs to
// its roots: chains of generalised eigenvectors over L = K[s]/(p),
//
//	(A - z I) v[0] = 0,  (A - z I) v[i+1] = v[i]
//
// and the dual rows w, w v = I.
type rootGroup[E any] struct {
	p      algebra.Poly[E]
	mult   int
	l      *algebra.Extension[E]
	names  []string    // of the roots; of all at once beyond degree 2
	values []expr.Node // nil beyond degree 2
	chains [][]lvector[E]
	dual   []lvector[E] // a row for every vector of the chains, in order
}

// lvector is a vector over K[s]/(p).
type lvector[E any] []algebra.Poly[E]

// eigenvalueStep names the eigenvalues.
func (d *derivation[E]) eigenvalueStep(ctx context.Context) error {
	if len(d.sv.states) == 0 {
		return nil
	}
	s := d.step("eigenvalues", "Eigenvalues")
	factors := d.sv.modes.Factors()
	simple, named := 0, 0
	for _, f := range factors {
		if f.P.Degree() <= 2 {
			simple += f.P.Degree()
		} else {
			named++
		}
	}
	count, countNamed := 0, 0
	var formulas []expr.Equation
	var beyond []Passage
	d.groups = nil
	for _, f := range factors {
		g := &rootGroup[E]{p: f.P, mult: f.Mult, l: algebra.NewExtension[E](d.k, f.P, "z")}
		d.groups = append(d.groups, g)
		if f.P.Degree() > 2 {
			countNamed++
			g.names = []string{indexed(d.z, countNamed, named)}
			z := expr.Sym(g.names[0])
			beyond = append(beyond, d.namedRoots(g).show(equation(expr.PolyNodeOf(d.k, f.P, z), expr.Int(0))))
			continue
		}
		g.values = expr.RootValues(d.k, f.P, g.l.Root(), expr.Sym(d.unit))
		for _, v := range g.values {
			count++
			g.names = append(g.names, indexed(d.lambda, count, simple))
			formulas = append(formulas, equation(expr.Sym(g.names[len(g.names)-1]), v))
		}
	}
	if len(formulas) > 0 {
		s.add(say("The eigenvalues are the roots of the factors.").show(formulas...))
	}
	for i, g := range d.groups {
		if g.mult > 1 {
			p := expr.PolyNodeOf(d.k, factors[i].P, expr.Sym(d.s))
			if len(g.names) == 2 {
				s.add(say("%v and %v have the multiplicity %v, the exponent of %v.", expr.Sym(g.names[0]), expr.Sym(g.names[1]), g.mult, p))
			} else {
				s.add(say("%v has the multiplicity %v, the exponent of %v.", expr.Sym(g.names[0]), g.mult, p))
			}
		}
	}
	for _, p := range beyond {
		s.add(p)
	}
	for _, g := range d.groups {
		if err := s.verify(g.l.Reduce(d.sv.chi).IsZero(), "%s is a root of the characteristic polynomial", g.names[0]); err != nil {
			return err
		}
	}
	return nil
}

// namedRoots introduces the roots of a factor of degree 3 or more.
func (d *derivation[E]) namedRoots(g *rootGroup[E]) Passage {
	words := "%v stands for each of the %v roots of an irreducible polynomial; what is written with it holds for all of them."
	total, reals := g.p.Degree(), 0
	for i, f := range d.sv.properModes().Factors() {
		if !f.P.Equal(g.p) || !d.r.modes[i].Roots[0].IsNumber() {
			continue
		}
		for _, e := range d.r.modes[i].Roots {
			if e.IsReal() {
				reals++
			}
		}
		words = "%v stands for each of the %v roots of an irreducible polynomial, %v of them real; what is written with it holds for all of them."
		count := "none"
		if reals > 0 {
			count = fmt.Sprint(reals)
		}
		return say(words, expr.Sym(g.names[0]), total, count)
	}
	return say(words, expr.Sym(g.names[0]), total)
}
