package linsys

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"slices"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Response is the closed form of a model's states, proven. Responses are
// immutable.
type Response struct {
	model     *Model
	over      answer
	states    []expr.Function
	transient []expr.Function
	steady    []expr.Function
	constants []string
	modes     []Mode
	bundle    *expr.Bundle
}

var errUnproven = errors.New("linsys: internal error: the residual of a derived response is not zero")

// ClosedForm derives the response and proves it. Bad models and cancellation
// give an error of type *[Error].
func (m *Model) ClosedForm(ctx context.Context) (*Response, error) {
	over, err := m.problem.solve(ctx, m)
	if err != nil {
		return nil, err
	}
	names := make([]string, over.constants())
	for i := range names {
		names[i] = m.constantName(i)
	}
	return m.respond(ctx, over, names)
}

// respond makes a response of an answer whose free constants have the given
// names.
func (m *Model) respond(ctx context.Context, over answer, constants []string) (r *Response, err error) {
	defer catchLimit(&err)
	for _, p := range over.proofs() {
		if !p.Holds() {
			return nil, fmt.Errorf("%w: %s; %s", errUnproven, p.Residual(), p.Side())
		}
	}
	r = &Response{model: m, over: over, constants: constants}
	r.states, r.transient, r.steady = over.functions(m.variable, constants)
	r.bundle = expr.NewBundle(r.states...)
	r.modes, err = over.modes(ctx, m.names)
	return r, err
}

// constantName returns the name of the i-th free constant: C1, C2, ..., with
// another letter if the model uses such a name.
func (m *Model) constantName(i int) string {
	for _, letter := range []string{"C", "B", "A", "const"} {
		taken := false
		for _, s := range append(append(m.States(), m.variable), m.Parameters()...) {
			if rest, ok := strings.CutPrefix(s, letter); ok && strings.Trim(rest, "0123456789") == "" {
				taken = true
			}
		}
		if !taken {
			return fmt.Sprintf("%s%d", letter, i+1)
		}
	}
	return fmt.Sprintf("free_constant_%d", i+1)
}

// solution is a solved model over the field k: images of the unknowns, the
// multiples of the free constants, and the split into parts.
type solution[E any] struct {
	base          []expr.Image[E]
	free          [][]expr.Image[E]
	complementary []expr.Image[E]
	particular    []expr.Image[E]
	modes         expr.Denominator[E]
	proof         Proof
	partProof     Proof // of the particular integral, where it is not the base
	divided       []E   // elements whose denominators were divided by
	nonzero       []E   // elements that were divided by
}

// solve derives and proves the solution of the equations under the conditions,
// or the general solution without conditions.
func solve[E any](ctx context.Context, k algebra.Scalars[E], names []string, eqs, conditions []linear[E]) (*solution[E], error) {
	sys, err := reduce(ctx, k, names, eqs)
	if err != nil {
		return nil, err
	}
	sv, err := newSolver(ctx, sys)
	if err != nil {
		return nil, err
	}
	y0, det, err := sv.initial(ctx, conditions, names)
	if err != nil {
		return nil, err
	}
	y, err := sv.images(ctx, y0, false)
	if err != nil {
		return nil, err
	}
	particular, err := sv.particular(ctx, y)
	if err != nil {
		return nil, err
	}
	sol := &solution[E]{modes: sv.properModes(), particular: sv.unknowns(particular, false), divided: append(sys.divided, y0...), nonzero: det}
	if len(conditions) > 0 {
		sol.base = sv.unknowns(y, false)
	} else {
		sol.base = sol.particular
		basis, err := sv.basis(ctx)
		if err != nil {
			return nil, err
		}
		for _, v := range basis {
			h, err := sv.images(ctx, v, true)
			if err != nil {
				return nil, err
			}
			sol.free = append(sol.free, sv.unknowns(h, true))
		}
	}
	sol.complementary = make([]expr.Image[E], len(names))
	for u := range names {
		sol.complementary[u] = sol.base[u].Sub(sol.particular[u])
	}
	if sol.proof, err = prove(ctx, k, eqs, conditions, sol.base, sol.free); err != nil {
		return nil, err
	}
	if len(conditions) > 0 && sv.inputs.Poly().Degree() > 0 {
		sol.partProof, err = prove(ctx, k, eqs, nil, sol.particular, nil)
	}
	return sol, err
}

// unknowns returns the images of the unknowns from those of the state's
// components.
func (sv *solver[E]) unknowns(y []expr.Image[E], homogeneous bool) []expr.Image[E] {
	out := make([]expr.Image[E], len(sv.order))
	for u := range out {
		a := sv.express(derivative{u, 0})
		out[u] = expr.ZeroImage(sv.k)
		if !homogeneous {
			out[u] = a.rest.Image()
		}
		for i, c := range a.row {
			out[u] = out[u].Add(y[i].Scale(c))
		}
	}
	return out
}

// Model returns the model.
func (r *Response) Model() *Model { return r.model }

// States returns the names of the states.
func (r *Response) States() []string { return r.model.States() }

// index returns the index of a state. It panics when there is none of the name.
func (r *Response) index(state string) int {
	for i, name := range r.model.names {
		if name == state {
			return i
		}
	}
	panic(fmt.Sprintf("linsys: the model has no state %q", state))
}

// State returns the state of the given name as a function of time. It panics
// when there is none; [Response.States] lists them.
func (r *Response) State(name string) expr.Function { return r.states[r.index(name)] }

// At returns the values of all states at the time t, in the order of
// [Response.States], to the given number of proven significant digits; see
// [expr.Function.At]. It is faster than asking every state.
func (r *Response) At(ctx context.Context, t *big.Rat, digits int) ([]string, error) {
	return r.bundle.At(ctx, t, digits)
}

// Transient returns the complementary function in a state: what the modes
// contribute.
func (r *Response) Transient(name string) expr.Function { return r.transient[r.index(name)] }

// Steady returns the particular integral in a state: what has the rates of the
// input, as the method of undetermined coefficients gives it. It is 0 where there
// is no input, also where the transient part tends to a constant.
func (r *Response) Steady(name string) expr.Function { return r.steady[r.index(name)] }

// Constants returns the names of the free constants of a general solution.
func (r *Response) Constants() []string { return append([]string(nil), r.constants...) }

// Modes returns the factors of the characteristic polynomial.
func (r *Response) Modes() []Mode { return append([]Mode(nil), r.modes...) }

// Proof returns the proof, which holds.
func (r *Response) Proof() Proof { return r.over.proofs()[0] }

// Conditions returns the conditions under which the response holds: those of the
// model itself, such as a leading coefficient that must not vanish, and those of
// the formulas as they are written, such as rates that must not be equal. Both
// are relations such as "k1 != k2", without those that the assumptions of the
// model guarantee; see [Model.Assume]. In the excluded cases of the formulas
// [Response.When] has others.
func (r *Response) Conditions(ctx context.Context) (model, formula []string, err error) {
	defer catchLimit(&err)
	m, err := r.over.conditions(ctx)
	if err != nil {
		return nil, nil, err
	}
	all := m
	for _, list := range [][]expr.Function{r.states, r.transient, r.steady} {
		for _, f := range list {
			c, err := f.Conditions(ctx)
			var e *Error
			if errors.As(err, &e) && e.Kind == expr.LimitExceeded {
				return m.Strings(), []string{"the formulas are too long to be written"}, nil
			}
			if err != nil {
				return nil, nil, wrapCancel(err)
			}
			all = all.Join(c)
		}
	}
	return m.Strings(), all.Without(m).Strings(), nil
}

// Remarks says what a reader of the written states should know; see
// [expr.Function.Remarks].
func (r *Response) Remarks() []string {
	var out []string
	for _, list := range [][]expr.Function{r.states, r.transient, r.steady} {
		for _, f := range list {
			for _, s := range f.Remarks() {
				if !slices.Contains(out, s) {
					out = append(out, s)
				}
			}
		}
	}
	return out
}

// Parameters returns the names of the symbols in the states.
func (r *Response) Parameters() []string {
	var out []string
	for _, f := range r.states {
		for _, name := range f.Parameters() {
			if !slices.Contains(out, name) {
				out = append(out, name)
			}
		}
	}
	return out
}

// With returns the response with numbers for symbols and free constants. See
// [Response.Substitute].
func (r *Response) With(values map[string]*big.Rat) (*Response, error) {
	nodes, err := rationals(values)
	if err != nil {
		return nil, err
	}
	return r.Substitute(context.Background(), nodes)
}

// Substitute returns the response with values for symbols and free constants,
// numbers or expressions in symbols. The model is solved with them, so that the
// formulas are right in every case that the model allows, and proven again. A
// value that violates a condition of the model, and a name that is neither a
// symbol nor a free constant, are errors.
func (r *Response) Substitute(ctx context.Context, values map[string]expr.Node) (*Response, error) {
	known := append(append(slices.Clone(r.constants), r.model.Parameters()...), r.Parameters()...)
	for name, v := range values {
		if v == nil {
			return nil, expr.Errorf(expr.Syntax, expr.Pos{}, "%s has the value nil", expr.Quote(name))
		}
		if !slices.Contains(known, name) {
			return nil, expr.Errorf(expr.OutsideClass, expr.Pos{}, "%s is neither a symbol nor a free constant of the response", expr.Quote(name))
		}
	}
	if len(values) == 0 {
		return r, nil
	}
	for name, v := range values {
		for _, inner := range expr.Names(v) {
			if inner == r.model.variable || slices.Contains(r.model.names, inner) {
				return nil, expr.Errorf(expr.OutsideClass, expr.Pos{}, "the value of %s holds %s, which is a state or the time; use another name", expr.Quote(name), expr.Quote(inner))
			}
			if _, given := values[inner]; !given && slices.Contains(r.constants, inner) {
				return nil, expr.Errorf(expr.OutsideClass, expr.Pos{}, "the value of %s holds %s, which is a free constant of the response; use another name", expr.Quote(name), inner)
			}
		}
	}
	over, constants, err := r.over.substitute(ctx, r.model, r.constants, values)
	if err != nil {
		return nil, wrapCancel(err)
	}
	return r.model.defining(values, over).respond(ctx, over, constants)
}

// defining returns the model with definitions of the symbols that have values.
func (m *Model) defining(values map[string]expr.Node, over answer) *Model {
	out := *m
	for _, name := range m.Parameters() {
		if v, ok := values[name]; ok {
			eq := expr.Equation{Left: expr.Sym(name), Right: v}
			out.statements = append(slices.Clip(out.statements), eq)
			out.defined = append(slices.Clip(out.defined), eq)
		}
	}
	out.problem = over.asProblem()
	return &out
}

// When returns the response in a special case, equations among the symbols such
// as "ka = ke" or "w0 = 2*w", several of them separated by commas. Each must be
// linear in a symbol, which it gives a value.
func (r *Response) When(ctx context.Context, equations string) (*Response, error) {
	list, err := expr.ParseRelations(equations, r.model.limits)
	if err != nil {
		return nil, err
	}
	for _, eq := range list {
		if eq.Op != "=" {
			return nil, expr.Errorf(expr.Syntax, eq.Pos, "a case is given by equations, %s is none", expr.Quote(eq.String()))
		}
		name, value, err := expr.SolveFor(eq, r.Parameters())
		if err != nil {
			return nil, err
		}
		if r, err = r.Substitute(ctx, map[string]expr.Node{name: value}); err != nil {
			return nil, err
		}
	}
	return r, nil
}
