package linsys

import (
	"fmt"
	"math/big"
	"slices"
	"strings"
	"unicode/utf8"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Model is a linear time-invariant model: equations for its unknowns, called
// states here, and side conditions at one time. Models are immutable.
type Model struct {
	variable   string
	names      []string // the unknowns in order of appearance
	statements []expr.Equation
	limits     expr.Limits
	fixed      bool // the states are given, not found in the statements

	assumed    []expr.Relation
	problem    problem         // the statements over their field
	equationOf []expr.Equation // the statements behind equations
	sideOf     []expr.Equation // the statements behind conditions
	defined    []expr.Equation // the definitions of constants
}

// Read reads a model from text:
//
//	# comment
//	k = 0.35                     a definition, exact
//	x' = -k*x + y + 2 exp(-t)    an equation; x'' + 3 x' = sin(t) is fine too
//	y' = k*x - y
//	x(0) = 1;  y(0) = 0          side conditions, none for the general solution
//
// The states are the names that appear with primes, and those given by an
// algebraic equation such as flow = 3*x. The order of the statements is free.
// Errors are of type *[Error].
func Read(src string) (*Model, error) { return ReadWith(src, expr.Limits{}) }

// ReadWith is [Read] with limits of the caller's choice.
func ReadWith(src string, limits expr.Limits) (*Model, error) {
	text, err := expr.ParseModel(src, limits)
	if err != nil {
		return nil, err
	}
	return FromEquations(text.Equations, text.Variable, limits)
}

// FromEquations builds a model from the statements of a text.
func FromEquations(statements []expr.Equation, variable string, limits expr.Limits) (*Model, error) {
	b := builder{Model: &Model{
		variable:   variable,
		statements: append([]expr.Equation(nil), statements...),
		limits:     limits.WithDefaults(),
	}}
	if len(statements) == 0 {
		return nil, expr.Errorf(expr.Syntax, expr.Pos{}, "the model is empty")
	}
	if err := b.build(); err != nil {
		return nil, err
	}
	return b.Model, nil
}

// FromMatrix builds the model y' = A y + f(t), y(0) = y0, for an n x n matrix A
// in rows. f holds n inputs as text, such as "2*exp(-t)", and may be nil for no
// input; y0 may be nil for the general solution. names are the names of the
// states; nil stands for y1, ..., yn.
func FromMatrix(names []string, a [][]*big.Rat, f []string, y0 []*big.Rat) (*Model, error) {
	minusA := make([][]*big.Rat, len(a))
	for i, row := range a {
		for _, x := range row {
			if x == nil {
				return nil, expr.Errorf(expr.WrongShape, expr.Pos{}, "row %d of A has an entry that is nil", i+1)
			}
			minusA[i] = append(minusA[i], new(big.Rat).Neg(x))
		}
	}
	one := make([][]*big.Rat, len(a))
	for i := range one {
		one[i] = make([]*big.Rat, len(a))
		for j := range one[i] {
			one[i][j] = new(big.Rat)
		}
		one[i][i].SetInt64(1)
	}
	var initial [][]*big.Rat
	if y0 != nil {
		initial = [][]*big.Rat{y0}
	}
	return FromMatrices(names, [][][]*big.Rat{minusA, one}, f, initial)
}

// FromMatrices builds the model A0 q + A1 q' + ... + Am q^(m) = f(t) from m + 1
// matrices of shape n x n, such as stiffness, damping and mass; initial holds
// the values of q, q', ..., q^(m-1) at t = 0, or is nil for the general
// solution. f and names are as in [FromMatrix].
func FromMatrices(names []string, coefs [][][]*big.Rat, f []string, initial [][]*big.Rat) (*Model, error) {
	nodes := make([][][]expr.Node, len(coefs))
	for k, a := range coefs {
		var err error
		if nodes[k], err = numberRows(a, fmt.Sprintf("matrix %d", k)); err != nil {
			return nil, err
		}
	}
	values, err := numberRows(initial, "the initial values")
	if err != nil {
		return nil, err
	}
	return fromMatrices(names, nodes, f, values)
}

// FromTextMatrices is [FromMatrices] for entries and initial values as text: exact
// numbers such as "0.35" or "sqrt(2)", and expressions in symbols such as "k1 +
// k2".
func FromTextMatrices(names []string, coefs [][][]string, f []string, initial [][]string) (*Model, error) {
	nodes := make([][][]expr.Node, len(coefs))
	for k, a := range coefs {
		var err error
		if nodes[k], err = textRows(a, fmt.Sprintf("matrix %d", k)); err != nil {
			return nil, err
		}
	}
	values, err := textRows(initial, "the initial values")
	if err != nil {
		return nil, err
	}
	return fromMatrices(names, nodes, f, values)
}

// numberRows returns rows of numbers as trees, nil for nil.
func numberRows(rows [][]*big.Rat, of string) ([][]expr.Node, error) {
	if rows == nil {
		return nil, nil
	}
	out := make([][]expr.Node, len(rows))
	for i, row := range rows {
		for _, x := range row {
			if x == nil {
				return nil, expr.Errorf(expr.WrongShape, expr.Pos{}, "row %d of %s has an entry that is nil", i+1, of)
			}
			out[i] = append(out[i], expr.Num(algebra.RatFromBig(x)))
		}
	}
	return out, nil
}

// textRows returns rows of texts as trees, nil for nil.
func textRows(rows [][]string, of string) ([][]expr.Node, error) {
	if rows == nil {
		return nil, nil
	}
	out := make([][]expr.Node, len(rows))
	for i, row := range rows {
		for j, text := range row {
			n, err := expr.Parse(text, expr.Limits{})
			if e, ok := err.(*Error); ok {
				in := *e
				in.Message = fmt.Sprintf("row %d, column %d of %s: %s", i+1, j+1, of, e.Message)
				return nil, &in
			}
			if err != nil {
				return nil, err
			}
			out[i] = append(out[i], n)
		}
	}
	return out, nil
}

func fromMatrices(names []string, coefs [][][]expr.Node, f []string, initial [][]expr.Node) (*Model, error) {
	shape := func(format string, args ...any) error {
		return expr.Errorf(expr.WrongShape, expr.Pos{}, format, args...)
	}
	if len(coefs) == 0 {
		return nil, shape("there is no matrix")
	}
	n := len(coefs[0])
	if names == nil {
		for i := range n {
			names = append(names, fmt.Sprintf("y%d", i+1))
		}
	}
	for k, a := range coefs {
		if len(a) != n {
			return nil, shape("matrix %d has %d rows where %d are due", k, len(a), n)
		}
		for i, row := range a {
			if len(row) != n {
				return nil, shape("row %d of matrix %d has %d entries where %d are due", i+1, k, len(row), n)
			}
		}
	}
	if len(names) != n || (f != nil && len(f) != n) || (initial != nil && len(initial) != len(coefs)-1) {
		return nil, shape("%d states need as many names (%d) and inputs (%d), and values for each order below the highest", n, len(names), len(f))
	}
	b := builder{Model: &Model{variable: "t", names: append([]string(nil), names...), fixed: true}, fixed: true}
	b.limits = b.limits.WithDefaults()
	seen := map[string]bool{"t": true, "pi": true}
	for _, name := range names {
		if name == "" || seen[name] || !utf8.ValidString(name) {
			return nil, expr.Errorf(expr.Syntax, expr.Pos{}, "the name %s is empty, taken or not text", expr.Quote(name))
		}
		seen[name] = true
	}
	// withoutStates returns an error if a state or the time stands in a tree.
	withoutStates := func(n expr.Node, what string, time bool) (err error) {
		each(n, func(n expr.Node) {
			if name, _, ok := b.functionOf(n); ok && seen[name] && name != "pi" && (name != "t" || !time) {
				kind := "the state "
				if name == "t" {
					kind = "the time "
				}
				err = expr.Errorf(expr.OutsideClass, n.Pos(), "%s%s stands in %s", kind, expr.Quote(name), what)
			}
		})
		return err
	}
	for i := range n {
		var terms []expr.Node
		for k := len(coefs) - 1; k >= 0; k-- {
			for j := range n {
				if err := withoutStates(coefs[k][i][j], "a matrix, whose entries are constants", false); err != nil {
					return nil, err
				}
				terms = append(terms, expr.Mul(coefs[k][i][j], expr.Derivative(names[j], k)))
			}
		}
		right := expr.Int(0)
		if f != nil {
			var err error
			if right, err = expr.Parse(f[i], b.limits); err != nil {
				return nil, inInput(err, i)
			}
			if err := withoutStates(right, "an input, which is a function of t alone", true); err != nil {
				return nil, inInput(err, i)
			}
		}
		b.statements = append(b.statements, expr.Equation{Left: expr.Add(terms...), Right: right})
	}
	for k, values := range initial {
		if len(values) != n {
			return nil, shape("the initial values of order %d are %d where %d are due", k, len(values), n)
		}
		for j, x := range values {
			b.statements = append(b.statements, expr.Equation{Left: expr.ValueAt(names[j], k, algebra.Rat{}), Right: x})
		}
	}
	if err := b.build(); err != nil {
		return nil, err
	}
	return b.Model, nil
}

// inInput says in which input of a matrix model an error lies; its place is
// that within the input.
func inInput(err error, i int) error {
	if e, ok := err.(*Error); ok {
		in := *e
		in.Message = fmt.Sprintf("input %d: %s", i+1, e.Message)
		return &in
	}
	return err
}

// States returns the names of the states, in the order of their first
// appearance.
func (m *Model) States() []string { return append([]string{}, m.names...) }

// Variable returns the name of the independent variable.
func (m *Model) Variable() string { return m.variable }

// Origin returns the time of the side conditions, 0 if there are none.
func (m *Model) Origin() expr.Node { return m.problem.originNode() }

// Parameters returns the names of the symbols that the model's equations and
// conditions depend on, in order of appearance.
func (m *Model) Parameters() []string { return m.problem.parameters() }

// Assume returns the model under assumptions on its symbols, relations such as
// "k > 0", "k1 > k2 > 0" or "a != b". They spare the response conditions that
// cannot fail and let it choose real forms.
func (m *Model) Assume(relations ...string) (*Model, error) {
	out := *m
	for _, src := range relations {
		list, err := expr.ParseRelations(src, m.limits)
		if err != nil {
			return nil, err
		}
		out.assumed = append(slices.Clip(out.assumed), list...)
	}
	out.names, out.sideOf, out.equationOf, out.defined = nil, nil, nil, nil
	if m.fixed {
		out.names = m.names
	}
	b := builder{Model: &out, fixed: m.fixed}
	if err := b.build(); err != nil {
		return nil, err
	}
	return b.Model, nil
}

// Assumptions returns what the model assumes.
func (m *Model) Assumptions() []expr.Relation { return slices.Clone(m.assumed) }

// Equations returns the equations of the model, without definitions and side
// conditions.
func (m *Model) Equations() []expr.Equation { return append([]expr.Equation(nil), m.equationOf...) }

// SideConditions returns the side conditions.
func (m *Model) SideConditions() []expr.Equation { return append([]expr.Equation(nil), m.sideOf...) }

// Definitions returns the definitions of constants.
func (m *Model) Definitions() []expr.Equation { return append([]expr.Equation(nil), m.defined...) }

// String writes the model in the text form, one statement to a line. It reads
// back unless a matrix model has names that are no names in a text.
func (m *Model) String() string {
	var b strings.Builder
	if m.variable != "t" {
		b.WriteString("independent " + m.variable + "\n")
	}
	for _, s := range m.statements {
		b.WriteString(s.String() + "\n")
	}
	return b.String()
}
