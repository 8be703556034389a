package expr

import (
	"context"
	"math/big"
	"slices"
	"sort"
	"sync"

	"example.org/closedform/algebra"
)

// Node writes x: numerator and denominator in factors, algebraic numbers in
// their radicals, formal constants as functions of their arguments.
func (c *Constants) Node(x Constant) Node {
	if r, ok := c.Rational(x); ok {
		return Num(r)
	}
	return c.shown.get(c).node(x)
}

// expanded writes a polynomial term by term, positive terms first.
func (c *Constants) expanded(x Constant) Node {
	d := c.shown.get(c)
	y := d.element(x)
	if _, den := d.to.Parts(y); !d.to.Equal(den, d.to.One()) {
		return c.Node(x)
	}
	n := d.sum(y)
	if s, ok := n.(Sum); ok && isNegated(s.Terms[0]) {
		return negatedSum(Sum{Terms: negatedSum(s).(Sum).Terms})
	}
	return n
}

// Content is the common factor of what is written: of numerators and
// denominators with their roots, cosines and sines.
func (c *Constants) Content(x ...Constant) Constant {
	plain := c.Degree() == 1
	for _, f := range c.formals {
		plain = plain && f.kind != halfTangentFormal
	}
	if plain {
		return c.FunctionField.Content(x...)
	}
	d := c.shown.get(c)
	y := make([]algebra.Fraction, len(x))
	for i := range x {
		y[i] = d.element(x[i])
	}
	out, err := d.to.Map(d.to.Content(y...), c.FunctionField, Constant{}, d.values())
	if err != nil {
		panic(err) // a common denominator is not zero
	}
	return out
}

// numericContent returns the positive rational number that x is written with as
// a factor: the gcd of the integers above over that of those below.
func (c *Constants) numericContent(x Constant) algebra.Rat {
	d := c.shown.get(c)
	num, den := d.to.Parts(d.element(x))
	integers := func(terms []algebra.Term) *big.Int {
		g := new(big.Int)
		for _, t := range terms {
			g.GCD(nil, nil, g, new(big.Int).Abs(t.Coef))
		}
		return g
	}
	return algebra.RatFromFrac(integers(num.Numerator()), integers(den.Numerator()))
}

// values returns the variables of the display as elements of the field.
func (d *display) values() []Constant {
	c := d.from
	out := make([]Constant, 0, len(d.vars))
	for i, f := range c.formals {
		u := c.Variable(i)
		if f.kind != halfTangentFormal {
			out = append(out, u)
			continue
		}
		square := c.Mul(u, u)
		sum := c.Add(c.One(), square)
		out = append(out, c.quotient(c.Sub(c.One(), square), sum), c.quotient(c.Mul(c.FromInt(2), u), sum))
	}
	for _, g := range c.generators {
		out = append(out, g.value)
	}
	return out
}

// sharedDisplay is the display of a field, made when first asked for.
type sharedDisplay struct {
	once sync.Once
	d    *display
}

func (s *sharedDisplay) get(c *Constants) *display {
	s.once.Do(func() { s.d = c.display() })
	return s.d
}

// display is the field in which elements are written: in place of the tangent
// of half an angle it has the cosine and the sine, in place of the root the
// generators.
type display struct {
	from   *Constants
	to     *algebra.FunctionField
	vars   []displayVar
	images []int // the first variable of each formal
	root   []algebra.Fraction
}

// displayVar is a variable as it is written: a name, a function of arg, or a
// generator.
type displayVar struct {
	name      string
	fn        string // exp, cos, sin
	arg       Constant
	generator *generator
}

func (c *Constants) display() *display {
	d := &display{from: c}
	for _, f := range c.formals {
		d.images = append(d.images, len(d.vars))
		switch f.kind {
		case symbolFormal:
			d.vars = append(d.vars, displayVar{name: f.name})
		case piFormal:
			d.vars = append(d.vars, displayVar{name: "pi"})
		case expFormal:
			d.vars = append(d.vars, displayVar{fn: "exp", arg: f.arg})
		case halfTangentFormal:
			d.vars = append(d.vars, displayVar{fn: "cos", arg: f.arg}, displayVar{fn: "sin", arg: f.arg})
		}
	}
	generators := len(d.vars)
	for i := range c.generators {
		d.vars = append(d.vars, displayVar{generator: &c.generators[i]})
	}
	d.to = algebra.NewFunctionField(make([]string, len(d.vars)), nil)
	if _, ok := c.Surd(); ok {
		d.root = []algebra.Fraction{d.to.One(), d.to.Mul(d.element(c.generators[0].scale), d.to.Variable(generators))}
		return d
	}
	for _, row := range c.table {
		sum := d.to.Zero()
		for m, r := range row {
			y := d.to.FromRat(r)
			for i, e := range c.exponents(m) {
				for range e {
					y = d.to.Mul(y, d.to.Variable(generators+i))
				}
			}
			sum = d.to.Add(sum, y)
		}
		d.root = append(d.root, sum)
	}
	return d
}

// varNode writes a variable.
func (d *display) varNode(i int) Node {
	switch v := d.vars[i]; {
	case v.generator != nil:
		return d.from.generatorNode(*v.generator)
	case v.fn != "":
		return Apply(v.fn, d.from.Node(v.arg))
	default:
		return Sym(v.name)
	}
}

func (c *Constants) generatorNode(g generator) Node {
	if g.q == 0 {
		return Apply("cos", Mul(Num(g.angle), Sym("pi")))
	}
	arg := c.expanded(g.arg)
	if g.q == 2 {
		return Apply("sqrt", arg)
	}
	return Power{Base: arg, Exp: Num(algebra.NewRat(1, int64(g.q)))}
}

// exponents returns the powers of the generators in the m-th product of the
// basis.
func (c *Constants) exponents(m int) []int {
	out := make([]int, len(c.generators))
	for i, g := range c.generators {
		out[i] = m % g.degree
		m /= g.degree
	}
	return out
}

// powersInGenerators returns the powers of the root in the basis of products of
// generators: the inverse of the matrix of these products in powers of the root.
func (c *Constants) powersInGenerators() [][]algebra.Rat {
	n := c.Degree()
	columns := make([][]algebra.Rat, n)
	for m := range n {
		y := c.One()
		for i, e := range c.exponents(m) {
			for range e {
				y = c.Mul(y, c.generators[i].value)
			}
		}
		columns[m] = make([]algebra.Rat, n)
		den := algebra.RatFromInt(1)
		if d := y.Denominator(); d != nil {
			den = algebra.RatFromBigInt(d[0].Coef)
		}
		for _, t := range y.Numerator() {
			columns[m][t.Exp[0]] = algebra.RatFromBigInt(t.Coef).Quo(den)
		}
	}
	products := algebra.MatrixFromFunc[algebra.Rat](algebra.Q, n, n, func(i, j int) algebra.Rat { return columns[j][i] })
	inv, err := algebra.Inverse[algebra.Rat](context.Background(), algebra.Q, products)
	if err != nil {
		panic(err) // the products are a basis
	}
	out := make([][]algebra.Rat, n)
	for j := range out {
		out[j] = make([]algebra.Rat, n)
		for i := range out[j] {
			out[j][i] = inv.At(i, j)
		}
	}
	return out
}

// element returns x in the field of the display, in which it is written.
func (d *display) element(x Constant) algebra.Fraction {
	if c := d.from; x.HasRoot() && x.Denominator() != nil {
		if _, symbolic := c.Surd(); !symbolic {
			if num, den := c.Cancelled(x, mostCancelled); den.HasRoot() {
				return d.quotient(d.plain(num), d.plain(den))
			}
		}
	}
	return d.plain(x)
}

// mostCancelled is the number of terms up to which factors over the algebraic
// numbers are cancelled.
const mostCancelled = 24

func (d *display) quotient(x, y algebra.Fraction) algebra.Fraction {
	inv, err := d.to.Inv(y)
	if err != nil {
		panic(err) // a denominator is not zero
	}
	return d.to.Mul(x, inv)
}

// plain is element for a quotient as the field has it.
func (d *display) plain(x Constant) algebra.Fraction {
	return d.quotient(d.polynomial(x.Numerator(), d.degrees(x)), d.denominator(x))
}

// denominator returns the denominator of x up to a number.
func (d *display) denominator(x Constant) algebra.Fraction {
	den := x.Denominator()
	if den == nil {
		den = []algebra.Term{{Coef: big.NewInt(1), Exp: make([]int, len(d.from.formals)+1)}}
	}
	return d.polynomial(den, d.degrees(x))
}

// degrees returns the even degrees to which tangents of half angles are
// homogenised: with u = S/C, S = sin b/2 and C = cos b/2, u^i becomes S^i C^(n-i)
// in numerator and denominator.
func (d *display) degrees(x Constant) []int {
	degrees := make([]int, len(d.from.formals))
	for i, f := range d.from.formals {
		if f.kind == halfTangentFormal {
			degrees[i] = (d.from.DegreeIn(x, i) + 1) &^ 1
		}
	}
	return degrees
}

// polynomial returns 2^(n/2) times a polynomial, n the sum of the degrees.
func (d *display) polynomial(terms []algebra.Term, degrees []int) algebra.Fraction {
	f := d.to
	if d.root == nil && slices.Max(append(degrees, 0)) == 0 {
		return f.FromTerms(d.renamed(terms))
	}
	parts := make([]algebra.Fraction, len(terms))
	for k, t := range terms {
		exp := make([]int, len(d.vars)+1)
		for i, formal := range d.from.formals {
			if formal.kind != halfTangentFormal {
				exp[d.images[i]+1] = t.Exp[i+1]
			}
		}
		y := f.FromTerms([]algebra.Term{{Coef: t.Coef, Exp: exp}})
		if d.root != nil {
			y = f.Mul(y, d.root[t.Exp[0]])
		}
		for i, formal := range d.from.formals {
			if formal.kind != halfTangentFormal {
				continue
			}
			// 2 S^2 = 1 - cos b, 2 C^2 = 1 + cos b, 2 S C = sin b
			e := t.Exp[i+1]
			cos, sin := f.Variable(d.images[i]), f.Variable(d.images[i]+1)
			y = f.Mul(y, power(f, sin, e%2))
			y = f.Mul(y, power(f, f.Sub(f.One(), cos), e/2))
			y = f.Mul(y, power(f, f.Add(f.One(), cos), (degrees[i]-e)/2))
		}
		parts[k] = y
	}
	return f.Sum(parts)
}

// renamed returns terms free of the root and of tangents in the variables of the
// display.
func (d *display) renamed(terms []algebra.Term) []algebra.Term {
	out := make([]algebra.Term, len(terms))
	for k, t := range terms {
		exp := make([]int, len(d.vars)+1)
		for i := range d.from.formals {
			exp[d.images[i]+1] = t.Exp[i+1]
		}
		out[k] = algebra.Term{Coef: t.Coef, Exp: exp}
	}
	return out
}

func power(f *algebra.FunctionField, x algebra.Fraction, n int) algebra.Fraction {
	out := f.One()
	for range n {
		out = f.Mul(out, x)
	}
	return out
}

// mostFactored is the number of terms up to which numerators and denominators
// are written in factors.
const mostFactored = 400

// node writes an element of the field.
func (d *display) node(x Constant) Node { return d.write(d.element(x)) }

// write writes an element of the field of the display.
func (d *display) write(y algebra.Fraction) Node {
	num, den := d.to.Parts(y)
	if n, ok := d.surds(num, den); ok {
		return n
	}
	c, top := d.product(num)
	e, bottom := d.product(den)
	c = c.Quo(e)
	// Powers of e^x go to the side where the whole exponent is taken.
	exponent := d.from.Zero()
	collect := func(factors []factorNode, sign int64) []Node {
		var out []Node
		for _, f := range factors {
			if f.variable >= 0 && d.vars[f.variable].fn == "exp" {
				n := d.from.FromInt(sign * int64(f.exp))
				exponent = d.from.Add(exponent, d.from.Mul(n, d.vars[f.variable].arg))
				continue
			}
			out = append(out, powerNode(f.base, f.exp))
		}
		return out
	}
	if c.Sign() < 0 { // b - a rather than -(a - b)
		for i, f := range top {
			if s, ok := f.base.(Sum); ok && f.exp%2 == 1 && 2*negatedIn(s) >= len(s.Terms) {
				top[i].base = negatedSum(s)
				c = c.Neg()
				break
			}
		}
	}
	above, below := collect(top, 1), collect(bottom, -1)
	if !d.from.IsZero(exponent) {
		above = append(above, Apply("exp", d.from.Node(exponent)))
	}
	if len(below) == 0 {
		if len(above) == 1 && c.Equal(algebra.RatFromInt(-1)) {
			if sum, ok := above[0].(Sum); ok && negatedIn(sum) > 0 {
				return negatedSum(sum)
			}
		}
		return Mul(append([]Node{Num(c)}, above...)...)
	}
	sign := c.Sign()
	n := Mul(append([]Node{Num(algebra.RatFromBigInt(c.Abs().Num()))}, above...)...)
	m := Mul(append([]Node{Num(algebra.RatFromBigInt(c.Den()))}, below...)...)
	if sign < 0 {
		return Negate(Div(n, m))
	}
	return Div(n, m)
}

// powerNode returns base^n for n >= 1: of the root 2^(1/3) the square 2^(2/3).
func powerNode(base Node, n int) Node {
	if p, ok := base.(Power); ok && n > 1 {
		if e, ok := p.Exp.(Number); ok {
			e.Val = e.Val.Mul(algebra.RatFromInt(int64(n)))
			if e.Val.Equal(algebra.NewRat(1, 2)) {
				return Apply("sqrt", p.Base)
			}
			return Power{Base: p.Base, Exp: e}
		}
	}
	return Pow(base, n)
}

func isNegated(n Node) bool {
	_, ok := n.(Neg)
	return ok
}

// negatedIn counts the terms that are subtracted.
func negatedIn(s Sum) (n int) {
	for _, t := range s.Terms {
		if isNegated(t) {
			n++
		}
	}
	return n
}

// negatedSum returns -(a - b + ...) as a sum, positive terms first.
func negatedSum(s Sum) Node {
	var plus, minus []Node
	for _, t := range s.Terms {
		if n, ok := t.(Neg); ok {
			plus = append(plus, n.X)
		} else {
			minus = append(minus, signed(Negate(t)))
		}
	}
	return Sum{Terms: append(plus, minus...)}
}

// factorNode is a power of a factor as it is written.
type factorNode struct {
	base     Node
	variable int // the variable that the base is, or -1
	exp      int
}

// product writes a polynomial as a rational number times factors: variables
// first, then sums.
func (d *display) product(p algebra.Fraction) (algebra.Rat, []factorNode) {
	if p.Size() > mostFactored {
		return algebra.RatFromInt(1), []factorNode{{d.sum(p), -1, 1}}
	}
	c, factors, err := d.to.Factors(context.Background(), p)
	if err != nil {
		panic(err) // the context does not end
	}
	var names, sums []factorNode
	for _, f := range factors {
		if i := d.variable(f.Base); i >= 0 {
			names = append(names, factorNode{d.varNode(i), i, f.Exp})
			continue
		}
		if d.writtenNegative(f.Base) {
			f.Base = d.to.Neg(f.Base)
			if f.Exp%2 == 1 {
				c = c.Neg()
			}
		}
		sums = append(sums, factorNode{d.sum(f.Base), -1, f.Exp})
	}
	sort.SliceStable(names, func(i, j int) bool { return d.before(names[i].variable, names[j].variable) })
	return c, append(names, sums...)
}

// before puts square roots and pi before symbols, and functions last.
func (d *display) before(i, j int) bool {
	rank := func(v int) int {
		switch x := d.vars[v]; {
		case x.generator != nil && x.generator.q > 0:
			return 0
		case x.generator != nil:
			return 3
		case x.name == "pi":
			return 1
		case x.fn == "":
			return 2
		}
		return 3
	}
	if a, b := rank(i), rank(j); a != b {
		return a < b
	}
	return i < j
}

// isTrigonometric tells whether a cosine or a sine of a formal angle occurs.
func (d *display) isTrigonometric(p algebra.Fraction) bool {
	for i, v := range d.vars {
		if (v.fn == "cos" || v.fn == "sin") && d.to.Uses(p, i) {
			return true
		}
	}
	return false
}

// variable returns the index of the variable that p is, or -1.
func (d *display) variable(p algebra.Fraction) int {
	t := p.Numerator()
	if len(t) != 1 || !t[0].Coef.IsInt64() || t[0].Coef.Int64() != 1 {
		return -1
	}
	at := -1
	for i, e := range t[0].Exp {
		switch {
		case e == 1 && at < 0:
			at = i - 1
		case e != 0:
			return -1
		}
	}
	return at
}

// ordered returns the terms by falling degree in what are no algebraic numbers,
// rational ones before the others: 2 + sqrt(3).
func (d *display) ordered(p algebra.Fraction) []algebra.Term {
	terms := p.Numerator()
	degree := func(t algebra.Term, roots bool) int {
		n := 0
		for i, e := range t.Exp[1:] {
			if (d.vars[i].generator != nil) == roots {
				n += e
			}
		}
		return n
	}
	sort.SliceStable(terms, func(i, j int) bool {
		a, b := degree(terms[i], false), degree(terms[j], false)
		return a > b || a == b && degree(terms[i], true) < degree(terms[j], true)
	})
	return terms
}

// writtenNegative tells whether the sum is written with the opposite sign: its
// first term is negative.
func (d *display) writtenNegative(p algebra.Fraction) bool { return d.ordered(p)[0].Coef.Sign() < 0 }

// sum writes a polynomial term by term.
func (d *display) sum(p algebra.Fraction) Node {
	var terms []Node
	for _, t := range d.ordered(p) {
		var factors []factorNode
		exponent := d.from.Zero()
		for i, e := range t.Exp[1:] {
			switch {
			case e == 0:
			case d.vars[i].fn == "exp":
				exponent = d.from.Add(exponent, d.from.Mul(d.from.FromInt(int64(e)), d.vars[i].arg))
			default:
				factors = append(factors, factorNode{d.varNode(i), i, e})
			}
		}
		sort.SliceStable(factors, func(i, j int) bool { return d.before(factors[i].variable, factors[j].variable) })
		nodes := []Node{Num(algebra.RatFromBigInt(t.Coef))}
		for _, f := range factors {
			nodes = append(nodes, powerNode(f.base, f.exp))
		}
		if !d.from.IsZero(exponent) {
			nodes = append(nodes, Apply("exp", d.from.Node(exponent)))
		}
		terms = append(terms, signed(Mul(nodes...)))
	}
	return Add(terms...)
}

// signed returns a number with its sign as a Neg, so that sums print
// differences, and other nodes as they are.
func signed(n Node) Node {
	if x, ok := n.(Number); ok {
		return signedNum(x.Val)
	}
	return n
}
