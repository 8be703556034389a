package linsys

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Step is one step of the derivation of a response. What it states was verified
// exactly when it was produced; Verified says how.
type Step struct {
	// Kind is a word for programs: "model", "characteristic polynomial",
	// "eigenvalues", "eigenvectors", "decoupling", "trial", "complementary",
	// "constants", "response", "check", or "limit" in place of steps that are too
	// long to be written.
	Kind     string
	Title    string
	Passages []Passage
	Verified []string // what was found to hold exactly
}

// Passage is a sentence or two, followed by displayed formulas. Either may be
// missing.
type Passage struct {
	Text     []Span
	Formulas []expr.Equation
}

// Span is a piece of a sentence: words, or a formula that stands among them.
type Span struct {
	Words string
	Math  expr.Node // nil for words
}

// mostWorked is the largest order of a system whose working is written out.
const mostWorked = 12

// Working derives the response anew as a report does it, in steps: the model in
// matrix form, characteristic polynomial, eigenvalues, eigenvectors or Jordan
// chains, the decoupled equations, the trial form and its coefficients for every
// rate of the input, the constants from the side conditions, the response, and
// the check by substitution (method of undetermined coefficients, as in E. A.
// Coddington, N. Levinson, Theory of Ordinary Differential Equations, chapter 3).
//
// Each step is verified exactly when it is produced, over the field K of the
// model's numbers or, where roots occur, over K[s]/(p); an error says that one
// failed, which would be a fault of this package. Steps that are too long to be
// written are replaced by one that says so. The cost is that of the response,
// O(n^4) operations in K and, for the eigenvectors of a factor of degree d,
// O(n^3) operations in K[s]/(p).
func (r *Response) Working(ctx context.Context) ([]Step, error) {
	return r.over.(deriver).working(ctx, r)
}

// deriver derives how an answer comes about; implemented by *answerOver.
type deriver interface {
	working(ctx context.Context, r *Response) ([]Step, error)
	elimination(ctx context.Context, r *Response, u int) (*Elimination, error)
	transfer(ctx context.Context, r *Response, equation, u int) (*TransferFunction, error)
}

// derivation is the working of one response under construction.
type derivation[E any] struct {
	ans  *answerOver[E]
	sv   *solver[E]
	r    *Response
	k    algebra.Scalars[E]
	time expr.Node // t, or t - t0
	nameTable
	parts  map[string]string
	groups []*rootGroup[E]
	steps  []Step
}

func (a *answerOver[E]) derive(ctx context.Context, r *Response) (*derivation[E], error) {
	k := a.problemOver.k
	sys, err := reduce(ctx, k, r.model.names, a.equations)
	if err != nil {
		return nil, err
	}
	sv, err := newSolver(ctx, sys)
	if err != nil {
		return nil, err
	}
	d := &derivation[E]{ans: a, sv: sv, r: r, k: k, nameTable: newNameTable(r, a), parts: map[string]string{}}
	d.time = expr.Sym(r.model.variable)
	if !k.IsZero(a.origin) {
		d.time = minus(d.time, expr.NodeOf(k, a.origin))
	}
	return d, nil
}

func (a *answerOver[E]) working(ctx context.Context, r *Response) (steps []Step, err error) {
	defer catchLimit(&err)
	d, err := a.derive(ctx, r)
	if err != nil {
		return nil, err
	}
	type part struct {
		title string
		run   func(context.Context) error
	}
	parts := []part{
		{"The model in matrix form", d.modelStep},
		{"Characteristic polynomial", d.polynomialStep},
		{"Eigenvalues", d.eigenvalueStep},
		{"Eigenvectors", d.vectorStep},
		{"Particular integral", d.inputSteps},
		{"Complementary function", d.complementaryStep},
		{"The response", d.responseStep},
		{"Check by substitution", d.checkStep},
	}
	if n := len(d.sv.states); n > mostWorked {
		d.step("limit", "Derivation", say("The working is written out for systems of at most %d first-order equations; this one has %d.", mostWorked, n))
		parts = parts[len(parts)-2:]
	}
	for _, p := range parts {
		if err := d.guarded(ctx, p.title, p.run); err != nil {
			return nil, wrapCancel(err)
		}
	}
	return d.steps, nil
}

// guarded runs a step, and says in a step when it is beyond the limits on terms.
func (d *derivation[E]) guarded(ctx context.Context, title string, run func(context.Context) error) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	before := len(d.steps)
	err := func() (err error) {
		defer catchLimit(&err)
		return run(ctx)
	}()
	if e, ok := err.(*Error); ok && e.Kind == expr.LimitExceeded {
		d.steps = d.steps[:before]
		d.step("limit", title, say("This step is too long to be written out: %s.", e.Message))
		return nil
	}
	return err
}

// step adds a step and returns it for additions.
func (d *derivation[E]) step(kind, title string, passages ...Passage) *Step {
	d.steps = append(d.steps, Step{Kind: kind, Title: title, Passages: passages})
	return &d.steps[len(d.steps)-1]
}

func (s *Step) add(p Passage) { s.Passages = append(s.Passages, p) }

// verify notes that a statement holds, or returns an error.
func (s *Step) verify(holds bool, format string, args ...any) error {
	claim := fmt.Sprintf(format, args...)
	if !holds {
		return fmt.Errorf("linsys: internal error: the step %q of the working fails: not %s", s.Title, claim)
	}
	s.Verified = append(s.Verified, claim)
	return nil
}

// say makes a sentence; the arguments for %v that are trees become formulas.
func say(format string, args ...any) Passage {
	var p Passage
	for i, words := range strings.SplitAfter(format, "%") {
		if i == 0 {
			p.Text = append(p.Text, Span{Words: strings.TrimSuffix(words, "%")})
			continue
		}
		verb, rest := args[i-1], words[1:]
		if n, ok := verb.(expr.Node); ok {
			p.Text = append(p.Text, Span{Math: n})
		} else {
			p.Text = append(p.Text, Span{Words: fmt.Sprint(verb)})
		}
		p.Text = append(p.Text, Span{Words: strings.TrimSuffix(rest, "%")})
	}
	return p
}

// show adds displayed formulas to a sentence.
func (p Passage) show(formulas ...expr.Equation) Passage {
	p.Formulas = append(p.Formulas, formulas...)
	return p
}

func equation(left, right expr.Node) expr.Equation { return expr.Equation{Left: left, Right: right} }

func minus(a, b expr.Node) expr.Node { return expr.Add(a, expr.Negate(b)) }

// at returns f(t), the value of a named function.
func at(name string, order int, t expr.Node) expr.Node {
	return expr.Value{Name: name, Order: order, At: t}
}

// nameTable gives the quantities of the working names that the model has not.
type nameTable struct {
	used    []string
	y, a, f string // state vector, matrix, input vector
	s, unit string // variable of polynomials; imaginary unit
	identity,
	lambda, z, v, p, j string
}

func newNameTable[E any](r *Response, a *answerOver[E]) nameTable {
	t := nameTable{used: []string{"pi", "det", r.model.variable}}
	t.used = append(append(append(t.used, r.model.names...), r.model.Parameters()...), r.constants...)
	t.used = append(t.used, a.parameters()...)
	t.used = append(t.used, r.model.constantName(0))
	for _, eq := range r.model.defined {
		t.used = append(t.used, eq.Left.String())
	}
	t.y, t.a, t.f = t.name("y", "x", "q", "w"), t.name("A", "M", "K"), t.name("f", "g", "u")
	t.s, t.identity, t.lambda = t.name("s", "p", "z"), t.name("I", "E"), t.name("lambda", "mu", "nu")
	t.unit = t.name("i", "j", "iota")
	t.z, t.v, t.p, t.j = t.name("z", "r", "q"), t.name("v", "u", "w"), t.name("P", "T", "S"), t.name("J", "D", "L")
	return t
}

// name returns the first of the names that neither is used nor differs from a
// used one by an index alone, and reserves it.
func (t *nameTable) name(candidates ...string) string {
	for n := 1; ; n++ {
		for _, c := range candidates {
			if n > 1 {
				c += strings.Repeat("_", n-1)
			}
			taken := slices.ContainsFunc(t.used, func(u string) bool {
				rest, ok := strings.CutPrefix(u, c)
				return ok && strings.Trim(rest, "_0123456789") == ""
			})
			if !taken {
				t.used = append(t.used, c)
				return c
			}
		}
	}
}

// indexed returns a name with an index, alone where there is only one.
func indexed(name string, i, of int) string {
	if of == 1 {
		return name
	}
	return fmt.Sprintf("%s_%d", name, i)
}
