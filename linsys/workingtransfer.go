package linsys

import (
	"context"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// TransferFunction is the rational function G of the Laplace variable that
// takes the image of an input, added to the right side of one equation, to that
// of a state, all initial values being 0.
type TransferFunction struct {
	Variable string // of the Laplace transform
	State    string
	// G = Numerator/Denominator in lowest terms, without common content.
	Numerator, Denominator expr.Node
	Equation               expr.Equation // G(s) = Numerator/Denominator
	Factored               expr.Node     // with the denominator in irreducible factors
	Verified               []string
	step                   Step
}

// Step writes the transfer function as a step of a working, of kind "transfer
// function".
func (g *TransferFunction) Step() Step { return g.step }

// TransferFunction returns the transfer function from an input to a state. The
// input u is a term added to the right side of the equation with the given index
// in [Model.Equations]: with the equations written P(d/dt) x = ... + u e, it is
// the entry of P(s)^-1 e for the state, for a model y' = A y + f that of the
// resolvent (s I - A)^-1 e. It comes from fraction-free elimination over K[s] (E.
// H. Bareiss, Sylvester's identity and multistep integer-preserving Gaussian
// elimination, 1968), and P(s) X = e is verified. The cost is O(n^3) operations
// on polynomials of degree at most the order of the model. It panics when the
// model has no state of the name; an equation that does not exist is an error.
func (r *Response) TransferFunction(ctx context.Context, equation int, state string) (_ *TransferFunction, err error) {
	defer catchLimit(&err)
	g, err := r.over.(deriver).transfer(ctx, r, equation, r.index(state))
	return g, wrapCancel(err)
}

func (a *answerOver[E]) transfer(ctx context.Context, r *Response, input, u int) (*TransferFunction, error) {
	k := a.problemOver.k
	n := len(a.equations)
	if input < 0 || input >= n {
		return nil, expr.Errorf(expr.WrongShape, expr.Pos{}, "the model has %d equations, there is none with the index %d", n, input)
	}
	operators := make([][]algebra.Poly[E], n)
	for i, eq := range a.equations {
		operators[i] = make([]algebra.Poly[E], n)
		for j := range n {
			operators[i][j] = algebra.NewPoly[E](k)
		}
		for _, d := range eq.keys() {
			operators[i][d.u] = operators[i][d.u].Add(algebra.Monomial[E](k, eq.coef[d], d.order))
		}
	}
	x, den, err := solvePolynomial(ctx, k, operators, input)
	if err != nil {
		return nil, err
	}
	d := &derivation[E]{ans: a, r: r, k: k, nameTable: newNameTable(r, a)}
	v := expr.Sym(d.s)
	out := &TransferFunction{Variable: d.s, State: r.model.names[u]}
	s := d.step("transfer function", "Transfer function")
	holds := true
	for i, row := range operators {
		sum := algebra.NewPoly[E](k)
		for j, p := range row {
			sum = sum.Add(p.Mul(x[j]))
		}
		if i == input {
			sum = sum.Sub(den)
		}
		holds = holds && sum.IsZero()
	}
	if err := s.verify(holds && !den.IsZero(), "the equations hold for the images of all states"); err != nil {
		return nil, err
	}
	num := x[u]
	g := algebra.GCD[E](k, num, den)
	num, _ = num.DivExact(k, g)
	den, _ = den.DivExact(k, g)
	factors, err := k.FactorPoly(ctx, den)
	if err != nil {
		return nil, err
	}
	lead, err := k.Inv(den.Lead())
	if err != nil {
		return nil, err
	}
	monic := num.Scale(lead)
	out.Factored = expr.Int(0)
	if !num.IsZero() {
		out.Factored = expr.Div(expr.PolyNodeOf(k, monic, v), d.product(factors, v))
	}
	out.Numerator, out.Denominator = d.ratio(num, den, v)
	name := at(d.name("G", "H", "T"), 0, v)
	value := expr.Node(expr.Int(0))
	if !num.IsZero() {
		value = expr.Div(out.Numerator, out.Denominator)
	}
	out.Equation = equation(name, value)
	s.add(say("An input added to the right side of equation %v acts on %v, all initial values being 0, with the transfer function", input+1, expr.Sym(out.State)).show(out.Equation))
	if len(factors) > 1 || len(factors) == 1 && factors[0].Mult > 1 {
		s.add(say("with the denominator in factors:").show(equation(name, out.Factored)))
	}
	out.Verified, out.step = s.Verified, *s
	return out, nil
}

// ratio writes num/den with contents taken out, so that neither has fractions in
// its coefficients.
func (d *derivation[E]) ratio(num, den algebra.Poly[E], v expr.Node) (top, bottom expr.Node) {
	k := d.k
	if num.IsZero() {
		return expr.Int(0), expr.Int(1)
	}
	primitive := func(p algebra.Poly[E]) (E, algebra.Poly[E]) {
		c := expr.ContentOf(k, p.Coefs()...)
		if k.Negative(p.Lead()) {
			c = k.Neg(c)
		}
		inv, err := k.Inv(c)
		if err != nil {
			return k.One(), p
		}
		return c, p.Scale(inv)
	}
	cn, n := primitive(num)
	cd, q := primitive(den)
	inv, err := k.Inv(cd)
	if err != nil {
		return expr.PolyNodeOf(k, num, v), expr.PolyNodeOf(k, den, v)
	}
	c := expr.NodeOf(k, k.Mul(cn, inv))
	sign := false
	if m, ok := c.(expr.Neg); ok {
		c, sign = m.X, true
	}
	above, below := c, expr.Node(expr.Int(1))
	switch c := c.(type) {
	case expr.Quotient:
		above, below = c.Num, c.Den
	case expr.Number:
		above, below = expr.Num(algebra.RatFromBigInt(c.Val.Num())), expr.Num(algebra.RatFromBigInt(c.Val.Den()))
	}
	top = expr.Mul(above, expr.PolyNodeOf(k, n, v))
	if sign {
		top = expr.Negate(top)
	}
	return top, expr.Mul(below, expr.PolyNodeOf(k, q, v))
}

// solvePolynomial returns x and den with P x = den e, e a unit vector, for a
// square matrix P of polynomials with a determinant that is not 0.
func solvePolynomial[E any](ctx context.Context, k algebra.Scalars[E], p [][]algebra.Poly[E], e int) (x []algebra.Poly[E], den algebra.Poly[E], err error) {
	n := len(p)
	m := make([][]algebra.Poly[E], n)
	for i := range m {
		m[i] = append([]algebra.Poly[E](nil), p[i]...)
		m[i] = append(m[i], algebra.NewPoly[E](k))
		if i == e {
			m[i][n] = algebra.Constant[E](k, k.One())
		}
	}
	last := algebra.Constant[E](k, k.One())
	for c := range n {
		pivot := -1
		for i := c; i < n; i++ {
			if !m[i][c].IsZero() && (pivot < 0 || m[i][c].Degree() < m[pivot][c].Degree()) {
				pivot = i
			}
		}
		if pivot < 0 {
			return nil, den, algebra.ErrSingular
		}
		m[c], m[pivot] = m[pivot], m[c]
		for i := range m {
			if i == c {
				continue
			}
			if err := ctx.Err(); err != nil {
				return nil, den, err
			}
			f := m[i][c]
			for j := range m[i] {
				y := m[c][c].Mul(m[i][j]).Sub(f.Mul(m[c][j]))
				m[i][j], _ = y.DivExact(k, last)
			}
		}
		last = m[c][c]
	}
	for i := range n {
		x = append(x, m[i][n])
	}
	return x, last, nil
}
