package linsys

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Response is the closed form of a model's states, proven. Responses are
// immutable.
type Response struct {
	model     *Model
	states    []expr.Function
	transient []expr.Function
	steady    []expr.Function
	constants []string
	modes     []Mode
	proof     Proof
	bundle    *expr.Bundle
}

// Mode is an irreducible factor of the characteristic polynomial of a model.
type Mode struct {
	Factor       algebra.Poly[algebra.Rat] // monic, irreducible over Q
	Multiplicity int
	Roots        []algebra.Algebraic // the eigenvalues: real ones ascending, then conjugate pairs
}

var errUnproven = errors.New("linsys: internal error: the residual of a derived response is not zero")

// ClosedForm derives the response and proves it. Bad models and cancellation
// give an error of type *[Error].
func (m *Model) ClosedForm(ctx context.Context) (*Response, error) {
	sol, err := solve[algebra.Rat](ctx, algebra.Q, m.names, m.equations, m.conditions)
	if err != nil {
		return nil, err
	}
	for _, p := range []Proof{sol.proof, sol.partProof} {
		if !p.Holds() {
			return nil, fmt.Errorf("%w: %s; %s", errUnproven, p.Residual(), p.Side())
		}
	}
	r := &Response{model: m, proof: sol.proof}
	for i := range sol.free {
		r.constants = append(r.constants, m.constantName(i))
	}
	function := func(base []expr.Image[algebra.Rat], free [][]expr.Image[algebra.Rat]) []expr.Function {
		out := make([]expr.Function, len(m.names))
		for u := range out {
			var terms []expr.FreeTerm
			for i, f := range free {
				terms = append(terms, expr.FreeTerm{Name: r.constants[i], Image: f[u]})
			}
			out[u] = expr.NewFunction(m.variable, m.origin, base[u], terms...)
		}
		return out
	}
	r.states = function(sol.base, sol.free)
	r.bundle = expr.NewBundle(r.states...)
	r.transient = function(sol.complementary, sol.free)
	r.steady = function(sol.particular, nil)
	for i, f := range sol.modes.Factors() {
		roots, err := sol.modes.Roots(ctx, i)
		if err != nil {
			return nil, wrapCancel(err)
		}
		r.modes = append(r.modes, Mode{Factor: f.P, Multiplicity: f.Mult, Roots: algebra.RootsIn(f.P, roots)})
	}
	return r, nil
}

// constantName returns the name of the i-th free constant: C1, C2, ..., with
// another letter if the model uses such a name.
func (m *Model) constantName(i int) string {
	for _, letter := range []string{"C", "K", "c", "const"} {
		taken := false
		for _, s := range append(m.States(), m.variable) {
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
	y0, err := sv.initial(ctx, conditions, names)
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
	sol := &solution[E]{modes: sv.properModes(), particular: sv.unknowns(particular, false)}
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
// input, as the method of undetermined coefficients gives it.
func (r *Response) Steady(name string) expr.Function { return r.steady[r.index(name)] }

// Constants returns the names of the free constants of a general solution.
func (r *Response) Constants() []string { return append([]string(nil), r.constants...) }

// Modes returns the factors of the characteristic polynomial.
func (r *Response) Modes() []Mode { return append([]Mode(nil), r.modes...) }

// Proof returns the proof, which holds.
func (r *Response) Proof() Proof { return r.proof }

// With returns the response with values for free constants. Unknown names give
// an error.
func (r *Response) With(values map[string]*big.Rat) (*Response, error) {
	known := map[string]bool{}
	for _, c := range r.constants {
		known[c] = true
	}
	for name, v := range values {
		if v == nil {
			return nil, expr.Errorf(expr.Syntax, expr.Pos{}, "%s has the value nil", expr.Quote(name))
		}
		if !known[name] {
			return nil, expr.Errorf(expr.OutsideClass, expr.Pos{}, "%s is not a free constant of the response", expr.Quote(name))
		}
	}
	out := *r
	set := func(list []expr.Function) []expr.Function {
		fs := make([]expr.Function, len(list))
		for i, f := range list {
			fs[i] = f.With(values)
		}
		return fs
	}
	out.states, out.transient = set(r.states), set(r.transient)
	out.bundle = expr.NewBundle(out.states...)
	out.constants = nil
	for _, c := range r.constants {
		if _, ok := values[c]; !ok {
			out.constants = append(out.constants, c)
		}
	}
	return &out, nil
}
