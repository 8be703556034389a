package linsys

import (
	"context"
	"fmt"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// inputSteps writes, for the terms of the input with one rate, the trial form
// and its coefficients, and then the particular integral.
func (d *derivation[E]) inputSteps(ctx context.Context) error {
	factors := d.sv.inputs.Factors()
	if !d.forced() || len(d.sv.states) == 0 {
		return nil
	}
	y := d.particularState()
	inputs := make([]expr.Image[E], len(y))
	for i, f := range d.sv.f {
		inputs[i] = f.Image()
	}
	cos, sin := d.name("a", "c", "k"), d.name("b", "d", "l")
	for i, f := range factors {
		if err := d.trialStep(f, y, inputs, cos, sin, i+1, len(factors)); err != nil {
			return err
		}
	}
	s := d.step("particular", "Particular integral")
	var formulas []expr.Equation
	for u, name := range d.r.model.names {
		formulas = append(formulas, equation(at(d.part(name, "p"), 0, d.t()), d.function(d.ans.particular[u])))
	}
	rates := d.sv.inputs
	for _, t := range d.sv.top {
		rates = rates.Join(t.rest.Image().Denominator())
	}
	words := "Together these make up the particular integral:"
	switch {
	case len(rates.Factors()) > len(factors):
		words = "With the inputs of the algebraic relations the particular integral is"
	case len(factors) == 1:
		words = "This makes up the particular integral:"
	}
	s.add(say(words).show(formulas...))
	// Nothing is in it but parts at the rates of the input.
	only := true
	for _, img := range d.ans.particular {
		for _, f := range img.Denominator().Factors() {
			only = only && rates.Exponent(f.P) > 0
		}
	}
	if err := s.verify(only, "the particular integral has the rates of the input alone"); err != nil {
		return err
	}
	p, err := prove(ctx, d.k, d.ans.equations, nil, d.ans.particular, nil)
	if err != nil {
		return err
	}
	for i, r := range p.Residuals {
		if err := s.verify(r == "0", "the residual of equation %d for the particular integral is 0", i+1); err != nil {
			return err
		}
	}
	return nil
}

// forced tells whether there is a particular integral.
func (d *derivation[E]) forced() bool {
	for _, f := range d.ans.particular {
		if !f.IsZero() {
			return true
		}
	}
	return false
}

// part names a part of a state, x_p for the particular integral, x_c for the
// complementary function.
func (d *derivation[E]) part(name, index string) string {
	key := name + " " + index
	if d.parts[key] == "" {
		d.parts[key] = d.name(name + "_" + index)
	}
	return d.parts[key]
}

// particularState returns the particular integral in the components of the
// state.
func (d *derivation[E]) particularState() []expr.Image[E] {
	y := make([]expr.Image[E], len(d.sv.states))
	for i, s := range d.sv.states {
		y[i] = d.ans.particular[s.u]
		for range s.order {
			y[i] = y[i].Derivative()
		}
	}
	return y
}

// scalar tells whether the model is a single equation for one state.
func (d *derivation[E]) scalar() bool {
	return len(d.sv.order) == 1 && len(d.sv.states) > 0 && len(d.sv.constraints) == 0
}

// trialStep compares coefficients for the terms of the input with the rates of
// one factor.
func (d *derivation[E]) trialStep(f algebra.Factor[E], y, inputs []expr.Image[E], cos, sin string, number, of int) error {
	k := d.k
	mult := d.sv.properModes().Exponent(f.P)
	p := expr.PolyNodeOf(k, f.P, expr.Sym(d.s))
	title := "Trial form for the input"
	if of > 1 {
		title = fmt.Sprintf("Trial form for the input, part %d of %d", number, of)
	}
	s := d.step("trial", title)
	trials, forcings := make([]expr.Trial[E], len(y)), make([]expr.Trial[E], len(y))
	in := true
	top := 0
	for i := range y {
		var ok1, ok2 bool
		trials[i], ok1 = expr.TrialOf(k, y[i], f.P)
		forcings[i], ok2 = expr.TrialOf(k, inputs[i], f.P)
		in = in && ok1 && ok2
		top = max(top, len(trials[i].Cos), f.Mult+mult)
	}
	rate, _ := expr.TrialOf(k, expr.ZeroImage(k), f.P)
	if !in || len(y) == 0 {
		s.add(say("The terms with the factor %v of their Laplace image contribute to the particular integral:", p).show(d.shares(f.P)...))
		return nil
	}
	s.add(d.resonance(f, mult, p, rate))
	real := k.IsZero(rate.Frequency)
	carrier := func(c, b expr.Node) expr.Node {
		h := expr.Int(1)
		if !k.IsZero(rate.Rate) {
			h = expr.Apply("exp", d.timed(rate.Rate))
		}
		if real {
			return expr.Mul(c, h)
		}
		w := d.timed(rate.Frequency)
		return expr.Mul(h, expr.Add(expr.Mul(c, expr.Apply("cos", w)), expr.Mul(b, expr.Apply("sin", w))))
	}
	polynomial := func(name string, from, to int, lower int) expr.Node {
		var terms []expr.Node
		for i := from; i < to; i++ {
			t := expr.Sym(d.coefficient(name, i-lower, to-from))
			if i > lower {
				t = expr.Mul(t, expr.Pow(d.time, i-lower))
			}
			terms = append(terms, t)
		}
		return expr.Add(terms...)
	}
	if d.scalar() {
		return d.scalarTrial(s, f, y, mult, real, carrier, polynomial, cos, sin)
	}
	s.add(say("The trial form, with vectors for coefficients:").show(
		equation(at(d.part(d.y, "p"), 0, d.t()), carrier(polynomial(cos, 0, top, 0), polynomial(sin, 0, top, 0)))))
	var formulas []expr.Equation
	for j := range top {
		formulas = append(formulas, equation(expr.Sym(d.coefficient(cos, j, top)), d.coefficientColumn(trials, false, j)))
		if !real {
			formulas = append(formulas, equation(expr.Sym(d.coefficient(sin, j, top)), d.coefficientColumn(trials, true, j)))
		}
	}
	s.add(say("Put into the system, with the coefficients of like terms compared, it gives for them").
		show(d.comparison(forcings, rate, top, cos, sin)...))
	s.add(say("with the solution").show(formulas...))
	holds := d.compared(trials, forcings, rate, top)
	for j, ok := range holds {
		if err := s.verify(ok, "the coefficients of the power %d agree", j); err != nil {
			return err
		}
	}
	return nil
}

// comparison writes the equations that compared verifies.
func (d *derivation[E]) comparison(f []expr.Trial[E], rate expr.Trial[E], top int, cos, sin string) []expr.Equation {
	k := d.k
	h, w := expr.NodeOf(k, rate.Rate), expr.NodeOf(k, rate.Frequency)
	operator := expr.Negate(expr.Sym(d.a))
	if !k.IsZero(rate.Rate) {
		operator = minus(expr.Mul(h, expr.Sym(d.identity)), expr.Sym(d.a))
	}
	var out []expr.Equation
	line := func(name, other string, sign int64, isSin bool, j int) {
		terms := []expr.Node{expr.Mul(operator, expr.Sym(d.coefficient(name, j, top)))}
		if !k.IsZero(rate.Frequency) {
			terms = append(terms, expr.Mul(expr.Int(sign), w, expr.Sym(d.coefficient(other, j, top))))
		}
		if j+1 < top {
			terms = append(terms, expr.Mul(expr.Int(int64(j+1)), expr.Sym(d.coefficient(name, j+1, top))))
		}
		out = append(out, equation(expr.Add(terms...), d.coefficientColumn(f, isSin, j)))
	}
	for j := top - 1; j >= 0; j-- {
		line(cos, sin, 1, false, j)
		if !k.IsZero(rate.Frequency) {
			line(sin, cos, -1, true, j)
		}
	}
	return out
}

// timed returns x times the local time.
func (d *derivation[E]) timed(x E) expr.Node {
	n := expr.NodeOf(d.k, x)
	if q, ok := n.(expr.Quotient); ok {
		return expr.Div(expr.Mul(q.Num, d.time), q.Den)
	}
	return expr.Mul(n, d.time)
}

func (d *derivation[E]) coefficient(name string, i, of int) string {
	if of == 1 {
		return name
	}
	return fmt.Sprintf("%s_%d", name, i)
}

// resonance says what the exponent of the input's factor in the characteristic
// polynomial means for the trial form.
func (d *derivation[E]) resonance(f algebra.Factor[E], mult int, p expr.Node, rate expr.Trial[E]) Passage {
	var which Passage
	switch {
	case !d.k.IsZero(rate.Frequency):
		which = say("The terms of the input with the frequency %v and the rate %v belong to the factor %v.", expr.NodeOf(d.k, rate.Frequency), expr.NodeOf(d.k, rate.Rate), p)
	case d.k.IsZero(rate.Rate):
		which = say("The terms of the input that are constant or a power of the time belong to the factor %v.", p)
	default:
		which = say("The terms of the input with the rate %v belong to the factor %v.", expr.NodeOf(d.k, rate.Rate), p)
	}
	if f.Mult > 1 {
		which.Text = append(which.Text, say(" They hold powers of the time up to %v.", f.Mult-1).Text...)
	}
	var rule Passage
	switch {
	case mult == 0:
		rule = say(" It does not divide the characteristic polynomial: there is no resonance, and the trial form has the powers of the input.")
	case d.scalar():
		rule = say(" It divides the characteristic polynomial %v: resonance, and the trial form is that of the input times %v.", times(mult), expr.Pow(d.time, mult))
	default:
		rule = say(" It divides the characteristic polynomial %v: resonance, and the trial form has powers of the time up to %v.", times(mult), f.Mult-1+mult)
	}
	which.Text = append(which.Text, rule.Text...)
	return which
}

func times(n int) string {
	switch n {
	case 1:
		return "once"
	case 2:
		return "twice"
	}
	return fmt.Sprintf("%d times", n)
}

// coefficientColumn writes the coefficients of one power in all components.
func (d *derivation[E]) coefficientColumn(trials []expr.Trial[E], sin bool, j int) expr.Node {
	entries := make([]expr.Node, len(trials))
	for i, t := range trials {
		entries[i] = expr.NodeOf(d.k, entry(d.k, t, sin, j))
	}
	return expr.Col(entries...)
}

// entry returns the coefficient of the j-th power, 0 where there is none.
func entry[E any](k algebra.Ring[E], t expr.Trial[E], sin bool, j int) E {
	list := t.Cos
	if sin {
		list = t.Sin
	}
	if j < len(list) {
		return list[j]
	}
	return k.Zero()
}

// compared tells for every power of the time whether y' - A y = f holds in its
// coefficients: with those of e^(ht) t^j cos wt and e^(ht) t^j sin wt in y being
// a[j] and b[j],
//
//	h a[j] + w b[j] + (j+1) a[j+1] - A a[j]   and   h b[j] - w a[j] + (j+1) b[j+1] - A b[j]
//
// are those in f.
func (d *derivation[E]) compared(y, f []expr.Trial[E], rate expr.Trial[E], top int) []bool {
	k := d.k
	out := make([]bool, top)
	column := func(t []expr.Trial[E], sin bool, j int) []E {
		v := make([]E, len(t))
		for i := range v {
			v[i] = entry(k, t[i], sin, j)
		}
		return v
	}
	// Parts without terms at this rate do not know its frequency.
	h, w := rate.Rate, rate.Frequency
	for j := range out {
		next := k.FromInt(int64(j + 1))
		a, b := column(y, false, j), column(y, true, j)
		a1, b1 := column(y, false, j+1), column(y, true, j+1)
		fa, fb := column(f, false, j), column(f, true, j)
		ma, mb := d.sv.a.MulVec(a), d.sv.a.MulVec(b)
		out[j] = true
		for i := range y {
			x := k.Sub(k.Add(k.Add(k.Mul(h, a[i]), k.Mul(w, b[i])), k.Mul(next, a1[i])), k.Add(ma[i], fa[i]))
			z := k.Sub(k.Add(k.Sub(k.Mul(h, b[i]), k.Mul(w, a[i])), k.Mul(next, b1[i])), k.Add(mb[i], fb[i]))
			out[j] = out[j] && k.IsZero(x) && k.IsZero(z)
		}
	}
	return out
}

// scalarTrial is the trial form of a single equation, with the power of the time
// that resonance asks for taken out.
func (d *derivation[E]) scalarTrial(s *Step, f algebra.Factor[E], y []expr.Image[E], mult int, real bool, carrier func(a, b expr.Node) expr.Node, polynomial func(name string, from, to, lower int) expr.Node, cos, sin string) error {
	t, _ := expr.TrialOf(d.k, y[0], f.P)
	to := mult + f.Mult
	form := carrier(polynomial(cos, mult, to, mult), polynomial(sin, mult, to, mult))
	if mult > 0 {
		form = expr.Mul(expr.Pow(d.time, mult), form)
	}
	s.add(say("The trial form:").show(equation(at(d.part(d.r.model.names[0], "p"), 0, d.t()), form)))
	var formulas []expr.Equation
	for j := mult; j < to; j++ {
		formulas = append(formulas, equation(expr.Sym(d.coefficient(cos, j-mult, f.Mult)), expr.NodeOf(d.k, entry(d.k, t, false, j))))
		if !real {
			formulas = append(formulas, equation(expr.Sym(d.coefficient(sin, j-mult, f.Mult)), expr.NodeOf(d.k, entry(d.k, t, true, j))))
		}
	}
	s.add(say("Put into the equation, with the coefficients of like terms compared, it gives:").show(formulas...))
	fits := len(t.Cos) <= to
	for j := range mult {
		fits = fits && d.k.IsZero(entry(d.k, t, false, j)) && d.k.IsZero(entry(d.k, t, true, j))
	}
	if err := s.verify(fits, "the particular integral has the trial form"); err != nil {
		return err
	}
	return d.compareScalar(s, f, y)
}

// compareScalar verifies the coefficients in the system of first order.
func (d *derivation[E]) compareScalar(s *Step, f algebra.Factor[E], y []expr.Image[E]) error {
	trials, forcings := make([]expr.Trial[E], len(y)), make([]expr.Trial[E], len(y))
	top := 0
	for i := range y {
		trials[i], _ = expr.TrialOf(d.k, y[i], f.P)
		forcings[i], _ = expr.TrialOf(d.k, d.sv.f[i].Image(), f.P)
		top = max(top, len(trials[i].Cos), len(forcings[i].Cos))
	}
	rate, _ := expr.TrialOf(d.k, expr.ZeroImage(d.k), f.P)
	for j, ok := range d.compared(trials, forcings, rate, top) {
		if err := s.verify(ok, "the coefficients of the power %d agree", j); err != nil {
			return err
		}
	}
	return nil
}

// shares writes the parts of the particular integral at one factor.
func (d *derivation[E]) shares(p algebra.Poly[E]) []expr.Equation {
	parts, _, err := expr.Split(context.Background(), d.k, d.ans.particular, func(q algebra.Poly[E]) bool { return q.Equal(p) })
	if err != nil {
		panic(err) // the context does not end
	}
	var out []expr.Equation
	for u, name := range d.r.model.names {
		out = append(out, equation(at(d.part(name, "p"), 0, d.t()), d.function(parts[u])))
	}
	return out
}
