package linsys

import (
	"context"
	"errors"
	"slices"
	"sort"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// builder sorts the statements of a model into definitions, equations and side
// conditions.
type builder struct {
	*Model
	fixed bool // the unknowns are given, not found

	unknowns    map[string]int
	definitions map[string]expr.Equation
	equations   []expr.Equation
}

func (b *builder) build() (err error) {
	defer catchLimit(&err)
	b.unknowns = map[string]int{}
	b.definitions = map[string]expr.Equation{}
	if err := b.classify(); err != nil {
		return err
	}
	if len(b.names) > b.limits.States {
		return expr.Errorf(expr.LimitExceeded, expr.Pos{}, "the model has %d states, at most %d are taken", len(b.names), b.limits.States)
	}
	symbols := b.symbols()
	if len(symbols) == 0 && len(b.assumed) == 0 {
		p, err := readProblem[algebra.Rat](b, algebra.Q, expr.NoNames)
		if err == nil {
			b.Model.problem = p
			return nil
		}
		if !errors.Is(err, expr.ErrIrrational) {
			return err
		}
	}
	k := expr.NewConstants(symbols...)
	for _, r := range b.assumed {
		for _, side := range []expr.Node{r.Left, r.Right} {
			if b.dependsOnState(side) {
				return expr.Errorf(expr.OutsideClass, r.Pos, "%s is about a state or time; assumptions are on symbols", expr.Quote(r.String()))
			}
			for _, name := range expr.Names(side) {
				if _, defined := b.definitions[name]; defined {
					return expr.Errorf(expr.OutsideClass, r.Pos, "%s has a value in the model; assumptions are on symbols", expr.Quote(name))
				}
			}
		}
		if k, err = k.Assume(r, b.limits); err != nil {
			return err
		}
	}
	_, err = expr.Grow(k, func(k *expr.Constants) error {
		p, err := readProblem[expr.Constant](b, k, k.Lookup)
		if err == nil {
			b.Model.problem = simplest(p)
		}
		return err
	})
	return err
}

// symbols returns the names without a value, pi among them, in order of
// appearance.
func (b *builder) symbols() []string {
	statements := append(append([]expr.Equation(nil), b.defined...), b.equations...)
	names := b.looseNames(append(statements, b.sideOf...), map[string]bool{b.variable: true})
	for _, r := range b.assumed {
		for _, name := range b.looseNames([]expr.Equation{{Left: r.Left, Right: r.Right}}, map[string]bool{b.variable: true}) {
			if !slices.Contains(names, name) {
				names = append(names, name)
			}
		}
	}
	return names
}

// functionOf returns the derivative that a node denotes: x, x', x” or, with the
// argument written out, x'(t).
func (b *builder) functionOf(n expr.Node) (name string, order int, ok bool) {
	switch v := n.(type) {
	case expr.Symbol:
		return v.Name, 0, true
	case expr.Value:
		if s, isName := v.At.(expr.Symbol); v.At == nil || (isName && s.Name == b.variable) {
			return v.Name, v.Order, true
		}
	}
	return "", 0, false
}

// each calls visit for n and all nodes below it, in source order.
func each(n expr.Node, visit func(expr.Node)) {
	visit(n)
	expr.Children(n, func(c expr.Node) bool {
		each(c, visit)
		return true
	})
}

// isSide tells whether a statement contains the value of something at a time,
// and no derivative at all times, which makes it a side condition.
func (b *builder) isSide(eq expr.Equation) bool {
	value, derivative := false, false
	for _, side := range []expr.Node{eq.Left, eq.Right} {
		each(side, func(n expr.Node) {
			v, ok := n.(expr.Value)
			if !ok {
				return
			}
			if _, order, isFunction := b.functionOf(v); !isFunction {
				value = true
			} else if order > 0 {
				derivative = true
			}
		})
	}
	return value && !derivative
}

// classify finds the unknowns and sorts the statements.
func (b *builder) classify() error {
	var dynamic []expr.Equation
	for _, eq := range b.statements {
		if b.isSide(eq) {
			b.sideOf = append(b.sideOf, eq)
		} else {
			dynamic = append(dynamic, eq)
		}
	}
	var reserved error
	for _, eq := range dynamic {
		for _, side := range []expr.Node{eq.Left, eq.Right} {
			each(side, func(n expr.Node) {
				v, ok := n.(expr.Value)
				if !ok || v.Order == 0 {
					return
				}
				if v.Name == b.variable || v.Name == "pi" {
					reserved = expr.Errorf(expr.Syntax, v.Pos(), "%s cannot be a state", v.Name)
				}
				if !b.fixed {
					b.addUnknown(v.Name)
				}
			})
		}
	}
	if reserved != nil {
		return reserved
	}
	if b.fixed {
		for i, name := range b.names {
			b.unknowns[name] = i
		}
		b.equations = dynamic
		b.equationOf = dynamic
		return nil
	}
	// name = expression may define a constant.
	candidates := map[string]expr.Equation{}
	for _, eq := range dynamic {
		s, ok := eq.Left.(expr.Symbol)
		if _, isUnknown := b.unknowns[s.Name]; !ok || isUnknown || s.Name == b.variable {
			continue
		}
		if s.Name == "pi" {
			return expr.Errorf(expr.Syntax, s.Pos(), "pi has a value already")
		}
		if first, twice := candidates[s.Name]; twice {
			return expr.Errorf(expr.WrongShape, s.Pos(), "%s is defined a second time; the first is at line %d", s.Name, first.Pos.Line)
		}
		candidates[s.Name] = eq
	}
	b.divide(dynamic, candidates)
	surplus := len(b.equations) - len(b.names)
	if loose := b.looseNames(dynamic, map[string]bool{b.variable: true, "pi": true}); surplus > 0 && surplus == len(loose) {
		// As many equations are left over as there are names without a value: the
		// names are states given by algebraic equations.
		for _, name := range loose {
			b.addUnknown(name)
		}
		b.divide(dynamic, candidates)
		surplus = 0
	}
	b.equationOf = b.equations
	if surplus == 0 {
		return nil
	}
	at := expr.Pos{}
	if len(b.equations) > 0 {
		at = b.equations[len(b.equations)-1].Pos
	}
	if surplus > 0 && len(b.names) == 0 {
		return expr.Errorf(expr.WrongShape, at, "an equation without a state: states appear with primes, as in x' = -x")
	}
	return expr.Errorf(expr.WrongShape, at, "%d equations for %d states (%s)", len(b.equations), len(b.names), strings.Join(b.names, ", "))
}

// divide divides statements into definitions and equations. A candidate whose
// right side holds time or a state, itself or through another, is an equation
// for one more state.
func (b *builder) divide(statements []expr.Equation, candidates map[string]expr.Equation) {
	for changed := true; changed; {
		changed = false
		for _, eq := range statements {
			s, ok := eq.Left.(expr.Symbol)
			if _, candidate := candidates[s.Name]; ok && candidate && b.dependsOnState(eq.Right) {
				delete(candidates, s.Name)
				b.addUnknown(s.Name)
				changed = true
			}
		}
	}
	b.equations, b.defined = nil, nil
	clear(b.definitions)
	for _, eq := range statements {
		if s, ok := eq.Left.(expr.Symbol); ok {
			if _, isDefinition := candidates[s.Name]; isDefinition {
				b.definitions[s.Name] = eq
				b.defined = append(b.defined, eq)
				continue
			}
		}
		b.equations = append(b.equations, eq)
	}
}

// looseNames returns the names that are neither states nor defined nor seen, in
// order of appearance.
func (b *builder) looseNames(statements []expr.Equation, seen map[string]bool) []string {
	var loose []string
	for _, eq := range statements {
		for _, side := range []expr.Node{eq.Left, eq.Right} {
			each(side, func(n expr.Node) {
				name, order, ok := b.functionOf(n)
				_, isUnknown := b.unknowns[name]
				_, isDefinition := b.definitions[name]
				if ok && order == 0 && !isUnknown && !isDefinition && !seen[name] {
					seen[name] = true
					loose = append(loose, name)
				}
			})
		}
	}
	return loose
}

func (b *builder) addUnknown(name string) {
	if _, ok := b.unknowns[name]; !ok {
		b.unknowns[name] = len(b.names)
		b.names = append(b.names, name)
	}
}

// dependsOnState tells whether a state or the independent variable occurs.
func (b *builder) dependsOnState(n expr.Node) bool {
	found := false
	each(n, func(c expr.Node) {
		if name, _, ok := b.functionOf(c); ok {
			if _, isUnknown := b.unknowns[name]; isUnknown || name == b.variable {
				found = true
			}
		}
	})
	return found
}

// problem is a model over some field; implemented by *problemOver.
type problem interface {
	originNode() expr.Node
	parameters() []string
	solve(ctx context.Context, m *Model) (answer, error)
}

// problemOver is a model over the field k: equations in the local time of the
// origin, and conditions there.
type problemOver[E any] struct {
	k          algebra.Scalars[E]
	origin     E // time of the side conditions
	equations  []linear[E]
	conditions []linear[E]
}

// reading reads the statements of a model over a field.
type reading[E any] struct {
	*builder
	*problemOver[E]
	free       func(expr.Symbol) (E, error) // names without a definition
	values     map[string]E
	inProgress map[string]bool
}

func readProblem[E any](b *builder, k algebra.Scalars[E], free func(expr.Symbol) (E, error)) (*problemOver[E], error) {
	r := reading[E]{
		builder: b, problemOver: &problemOver[E]{k: k, origin: k.Zero()},
		free: free, values: map[string]E{}, inProgress: map[string]bool{},
	}
	if err := r.readConditions(); err != nil {
		return nil, err
	}
	return r.problemOver, r.readEquations()
}

// lookup returns the value of a name.
func (b *reading[E]) lookup(s expr.Symbol) (E, error) {
	if x, ok := b.values[s.Name]; ok {
		return x, nil
	}
	zero := b.k.Zero()
	def, ok := b.definitions[s.Name]
	if !ok {
		return b.free(s)
	}
	if b.inProgress[s.Name] {
		return zero, expr.Errorf(expr.Singular, s.Pos(), "%s is defined by itself", s.Name)
	}
	if len(b.inProgress) > b.limits.Nesting {
		return zero, expr.Errorf(expr.LimitExceeded, s.Pos(), "definitions are nested more than %d deep", b.limits.Nesting)
	}
	b.inProgress[s.Name] = true
	defer delete(b.inProgress, s.Name)
	f, err := b.env().Elementary(def.Right)
	if err != nil {
		return zero, err
	}
	x, ok := f.Constant()
	if !ok {
		return x, expr.Errorf(expr.OutsideClass, def.Right.Pos(), "%s is not a constant", s.Name)
	}
	b.values[s.Name] = x
	return x, nil
}

func (b *reading[E]) env() expr.Env[E] {
	return expr.Env[E]{K: b.k, Variable: b.variable, Lookup: b.lookup, Limits: b.limits}
}

// readConditions reads the side conditions and finds their time.
func (b *reading[E]) readConditions() error {
	first := true
	var fault error
	r := linearReader[E]{env: b.env()}
	r.env.Lookup = func(s expr.Symbol) (E, error) {
		_, isUnknown := b.unknowns[s.Name]
		if isUnknown || s.Name == b.variable {
			return b.k.Zero(), expr.Errorf(expr.SideConditions, s.Pos(), "%s stands without a time in a side condition", s.Name)
		}
		return b.lookup(s)
	}
	// The independent variable has no place in a condition either.
	r.env.Variable = ""
	r.unknown = func(n expr.Node) (derivative, bool) {
		v, ok := n.(expr.Value)
		if !ok || v.At == nil || fault != nil {
			return derivative{}, false
		}
		u, isUnknown := b.unknowns[v.Name]
		if !isUnknown {
			return derivative{}, false
		}
		at, err := r.env.Elementary(v.At)
		if err != nil {
			fault = err
			return derivative{}, false
		}
		t0, _ := at.Constant()
		if !first && !b.k.Equal(t0, b.origin) {
			fault = expr.Errorf(expr.OutsideClass, v.Pos(), "conditions at more than one time (%s and %s) make a boundary problem, which is not covered", b.k.Text(b.origin), b.k.Text(t0))
			return derivative{}, false
		}
		first = false
		b.origin = t0
		return derivative{u, v.Order}, true
	}
	for _, eq := range b.sideOf {
		if err := b.refuseFunctions(eq); err != nil {
			return err
		}
		l, err := r.readEquation(eq)
		if fault != nil {
			return fault
		}
		if err != nil {
			return err
		}
		b.conditions = append(b.conditions, l)
	}
	return nil
}

// readEquations reads the equations in the local time of the origin.
func (b *reading[E]) readEquations() error {
	r := linearReader[E]{env: b.env(), unknown: func(n expr.Node) (derivative, bool) {
		name, order, ok := b.functionOf(n)
		u, isUnknown := b.unknowns[name]
		return derivative{u, order}, ok && isUnknown
	}}
	for _, eq := range b.builder.equations {
		if err := b.refuseDelays(eq); err != nil {
			return err
		}
		l, err := r.readEquation(eq)
		if err != nil {
			return err
		}
		if l.rest, err = l.rest.Shift(b.origin); err != nil {
			if e, ok := err.(*Error); ok {
				e.Pos = eq.Pos
			}
			return err
		}
		b.problemOver.equations = append(b.problemOver.equations, l)
	}
	// A definition that no equation uses must still have a value.
	names := make([]string, 0, len(b.definitions))
	for name := range b.definitions {
		names = append(names, name)
	}
	sort.Strings(names)
	for _, name := range names {
		if _, err := b.lookup(expr.Sym(name).(expr.Symbol)); err != nil {
			return err
		}
	}
	return nil
}

// refuseFunctions names what is written like the value of a state in a side
// condition and is none: in z(0) = 1 a state that is missing, in y = f(2) a
// function.
func (b *builder) refuseFunctions(eq expr.Equation) (err error) {
	for _, side := range []expr.Node{eq.Left, eq.Right} {
		each(side, func(n expr.Node) {
			v, ok := n.(expr.Value)
			if _, isUnknown := b.unknowns[v.Name]; !ok || isUnknown || err != nil {
				return
			}
			kind := expr.UnknownFunction
			if left, ok := eq.Left.(expr.Value); ok && left.Name == v.Name {
				kind = expr.SideConditions
			}
			err = expr.Errorf(kind, v.Pos(), "%s is not a state of the model", expr.Quote(v.Name))
		})
	}
	return err
}

// refuseDelays names a state at another time, such as x(t - 1).
func (b *builder) refuseDelays(eq expr.Equation) (err error) {
	for _, side := range []expr.Node{eq.Left, eq.Right} {
		each(side, func(n expr.Node) {
			v, ok := n.(expr.Value)
			if !ok || err != nil {
				return
			}
			_, isUnknown := b.unknowns[v.Name]
			if _, _, isFunction := b.functionOf(v); isUnknown && !isFunction {
				err = expr.Errorf(expr.OutsideClass, v.Pos(), "%s is a value at another time: equations with delays are not covered", expr.Quote(v.String()))
			}
		})
	}
	return err
}

// readEquation returns left side minus right side.
func (r linearReader[E]) readEquation(eq expr.Equation) (linear[E], error) {
	left, err := r.read(eq.Left)
	if err != nil {
		return left, err
	}
	right, err := r.read(eq.Right)
	if err != nil {
		return right, err
	}
	l := left.add(r.env.K, r.env.K.FromInt(-1), right)
	l.pos = eq.Pos
	return l, nil
}
