package expr

import (
	"context"
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// file assembles the source of functions with symbols.
func (w *symbolWriter) file(ctx context.Context, fs []Function) (string, error) {
	origin := w.fs[0].origin
	if !w.k.IsZero(origin) {
		w.time = "tau"
	}
	lines, bodies, err := w.bodies(ctx)
	if err != nil {
		return "", err
	}
	if usesName(strings.Join(append(lines, bodies...), "\n"), "tau") {
		body := w.newBody()
		p, err := body.element(w.k, origin)
		if err != nil {
			return "", err
		}
		w.body.zeros = append(w.body.zeros, body.zeros...)
		before, text := body.finish([]string{p.String()})
		lines = append(append(before, "tau := t - "+text[0]), lines...)
	}
	validate, conditions, err := w.validate()
	if err != nil {
		return "", err
	}
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	goHead(line, w.opt)
	line("import (\n\"errors\"\n\"math\"\n)\n")
	params, state := w.opt.Func+"Params", w.opt.Func+"State"
	line("// %s holds the parameters of the response.", params)
	goStruct(line, params, w.fields, w.symbols)
	line("// Validate returns an error if a parameter is not a finite number, or if the")
	line("// parameters violate a condition of the model.")
	line("func (p %s) Validate() error {", params)
	for _, l := range validate {
		line("%s", l)
	}
	line("return nil\n}\n")
	line("// %s holds the values of the states at one time.", state)
	states := goNames(w.names)
	goStruct(line, state, states, w.names)
	line("// %s returns the states at the time %s for parameters that are valid:", w.opt.Func, inert(fs[0].variable))
	line("//")
	goFormulas(line, w.names, fs)
	line("//\n// Where rates of these formulas coincide, or nearly do, the code still holds and")
	line("// needs no case distinction.")
	if len(conditions) > 0 {
		line("// The model's conditions, which Validate checks:\n//")
		for _, c := range conditions {
			line("//\t%s", inert(c))
		}
	}
	arg := ""
	if n := len(w.constants); n > 0 {
		line("//\n// c holds the constants %s.", inert(strings.Join(w.constants, ", ")))
		arg = fmt.Sprintf(", c [%d]float64", n)
	}
	line("func %s(p %s, t float64%s) %s {", w.opt.Func, params, arg, state)
	for _, l := range lines {
		line("%s", l)
	}
	line("return %s{", state)
	for i, f := range states {
		line("%s: %s,", f, bodies[i])
	}
	line("}\n}")
	all := strings.Join(append(lines, bodies...), "\n")
	cascade, roots := usesName(all, w.helper("Cascade")), ""
	for _, seq := range w.cascades {
		if slices.ContainsFunc(seq, func(i int) bool { return w.primes[i].degree > 2 }) {
			roots = goRootsCase
		}
	}
	for _, h := range []struct {
		needed bool
		text   string
	}{
		{cascade || usesName(all, w.helper("Divided")), goDividedHelper},
		{cascade || usesName(all, w.helper("Pair")), goPairHelper},
		{roots != "", goRootsHelper},
		{cascade, goCascadeHelper},
	} {
		if h.needed {
			line("%s", strings.ReplaceAll(strings.ReplaceAll(h.text, "ROOTS", roots), "NAME", w.helper("")))
		}
	}
	return b.String(), nil
}

// goCheck is a condition of the parameters: where the expression is true, the
// message says what is wrong.
type goCheck struct{ violated, message, condition string }

// validate returns the lines of the method Validate, and the conditions: the
// assumptions of the field, those of the model, and what the code divides by.
func (w *symbolWriter) validate() (lines, conditions []string, err error) {
	body := w.newBody()
	var checks []goCheck
	for i, f := range w.fields {
		checks = append(checks, goCheck{
			violated: fmt.Sprintf("math.IsNaN(p.%s) || math.IsInf(p.%s, 0)", f, f),
			message:  w.symbols[i] + " is not a finite number",
		})
	}
	known := map[string]bool{}
	enter := func(c goCheck) {
		if !known[c.violated] {
			known[c.violated] = true
			checks = append(checks, c)
		}
	}
	for _, a := range w.k.assumed.list {
		if w.k.IsNumber(a.p) || !w.covers(w.k.SymbolsIn(a.p)) {
			continue
		}
		p, err := body.element(w.k, a.p)
		if err != nil {
			return nil, nil, err
		}
		if a.kind == notZero {
			relation := w.k.unequal(a.p)
			enter(goCheck{p.size() + " == 0", mustDiffer(relation), relation.String()})
			continue
		}
		op := map[assumptionKind]string{isPositive: ">", notNegative: ">="}[a.kind]
		condition := w.k.Node(a.p).String() + " " + op + " 0"
		enter(goCheck{"!(" + p.String() + " " + op + " 0)", condition + " is assumed and does not hold", condition})
	}
	for _, g := range w.k.generators {
		if w.k.IsNumber(g.arg) {
			continue
		}
		p, err := body.element(w.k, g.arg)
		if err != nil {
			return nil, nil, err
		}
		text := w.k.Node(g.arg).String()
		enter(goCheck{"!(" + p.String() + " >= 0)", text + " must not be negative", text + " >= 0"})
	}
	if l := w.opt.Conditions; l != nil {
		for _, p := range l.factors {
			q, err := body.element(l.k, p)
			if err != nil {
				return nil, nil, err
			}
			relation := l.k.unequal(p)
			enter(goCheck{q.size() + " == 0", mustDiffer(relation), relation.String()})
		}
	}
	for _, z := range w.body.zeros {
		i := z.d.variable(z.p)
		if i >= 0 && z.d.vars[i].fn == "" && z.d.vars[i].generator == nil && w.k.NotZero(w.k.Variable(w.k.index(z.d.vars[i].name))) {
			continue // by an assumption
		}
		text, err := body.factor(z.d, z.p)
		if err != nil {
			return nil, nil, err
		}
		relation := Relation{Left: z.d.sum(z.p), Right: Int(0), Op: "!="}
		if s, ok := relation.Left.(Sum); ok && len(s.Terms) == 2 && isNegated(s.Terms[1]) {
			relation.Left, relation.Right = s.Terms[0], Negate(s.Terms[1])
		}
		enter(goCheck{text + " == 0", mustDiffer(relation), relation.String()})
	}
	texts := make([]string, len(checks))
	for i, c := range checks {
		texts[i] = c.violated
		if c.condition != "" {
			conditions = append(conditions, c.condition)
		}
	}
	lines, texts = body.finish(texts)
	lines = append(lines, "switch {")
	for i, c := range checks {
		if t := texts[i]; strings.Count(t, "(") == 1 && strings.HasPrefix(t, "(") {
			texts[i] = strings.NewReplacer("(", "", ")", "").Replace(t)
		}
		lines = append(lines, fmt.Sprintf("case %s:\nreturn errors.New(%s)", texts[i], strconv.Quote(c.message)))
	}
	return append(lines, "}"), conditions, nil
}

// covers tells whether all names are parameters.
func (w *symbolWriter) covers(names []string) bool {
	for _, name := range names {
		if !slices.Contains(w.symbols, name) {
			return false
		}
	}
	return true
}

// mustDiffer says that a relation x != y is demanded.
func mustDiffer(r Relation) string {
	if isNumber(r.Right, 0) {
		return r.Left.String() + " must not be 0"
	}
	return r.Left.String() + " must not equal " + r.Right.String()
}
