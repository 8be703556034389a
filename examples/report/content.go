package main

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

const (
	// formulaDigits is how many digits the decimals in formulas have.
	formulaDigits = 6
	// rowsPerTable is how many lines of a table fit on a page.
	rowsPerTable = 30
)

// Places that the text refers to.
const (
	atModel      label = "sec:model"
	atWorking    label = "sec:working"
	atResponse   label = "sec:response"
	atStates     label = "sec:states"
	atExact      label = "sec:exact"
	atModes      label = "sec:modes"
	atValues     label = "sec:values"
	atProof      label = "sec:proof"
	atNames      label = "sec:abbreviations"
	atModesTable label = "tab:modes"
)

// compose makes the document.
func (r *report) compose(ctx context.Context) (*document, error) {
	d := newDocument()
	d.text(r.overview())
	r.modelSection(d)
	if list := r.response.Model().Assumptions(); len(list) > 0 {
		d.section("Assumptions", "sec:assumptions")
		d.text("The symbols are assumed to satisfy")
		var all inline
		for _, a := range list {
			all = append(all, relation{left: a.Left, sign: a.Op, right: a.Right})
		}
		d.add(all)
	}
	r.workingSection(d)
	d.section("Response", atResponse)
	if err := r.statesPart(ctx, d); err != nil {
		return nil, err
	}
	if err := r.partsOf(ctx, d); err != nil {
		return nil, err
	}
	r.exactPart(d)
	r.abbreviations(d)
	r.modesSection(d)
	r.valuesSection(d)
	d.section("Proof", atProof)
	d.text(r.proofText())
	r.checkPassages(d)
	d.section("Caution", "sec:caution")
	d.add(box{"Caution.", caution})
	d.add(heading{0, "Appendix: the model as it was read", "sec:source"})
	d.text("From " + r.src.name + ":")
	d.add(listing(strings.TrimSpace(r.src.text)))
	return d, nil
}

// partsOf gives the transient and the steady part, or says that there is no input.
func (r *report) partsOf(ctx context.Context, d *document) error {
	driven := slices.ContainsFunc(r.response.States(), func(name string) bool { return !r.response.Steady(name).IsZero() })
	if !driven {
		d.part("Parts", "sec:transient")
		d.text("The model has no input. The particular integral is 0, and the states are the complementary function: what the modes of Section\u00a0", atModes, " contribute.")
		return nil
	}
	d.part("Transient part", "sec:transient")
	d.text("The complementary function: what the modes of Section\u00a0", atModes, " contribute.")
	transient, _, err := r.functions(ctx, r.response.Transient)
	if err != nil {
		return err
	}
	d.add(transient)
	d.part("Steady part", "sec:steady")
	d.text("The particular integral: what has the rates of the input.")
	steady, _, err := r.functions(ctx, r.response.Steady)
	if err != nil {
		return err
	}
	d.add(steady)
	return nil
}

// overview says in a few lines what the report holds, and where.
func (r *report) overview() []span {
	states := r.response.States()
	out := say("This report derives the response of a linear time-invariant model with the ", word(len(states), "state", "states"), " ", symbols(states),
		"; its order is ", order(r.response), ". The exact response is in Section\u00a0", atResponse)
	if r.steps != nil {
		out = append(out, say(", its derivation in Section\u00a0", atWorking)...)
	}
	if len(r.modes) > 0 {
		out = append(out, say(", the modes are in Table\u00a0", atModesTable)...)
	}
	if len(r.values) > 0 {
		out = append(out, say(", values in ", refer("Table", r.valueTables()), " and curves in ", refer("Figure", r.figures()))...)
	}
	return append(out, say(". What was proven is in Section\u00a0", atProof, ".")...)
}

func word(n int, one, more string) string {
	if n == 1 {
		return one
	}
	return more
}

// order returns the order of the model: the degree of its characteristic
// polynomial.
func order(r *linsys.Response) int {
	n := 0
	for _, m := range r.Modes() {
		n += m.Multiplicity * m.Degree
	}
	return n
}

func (r *report) modelSection(d *document) {
	m := r.response.Model()
	d.section("Model", atModel)
	d.text("The equations, in the independent variable ", expr.Sym(m.Variable()), ", are")
	d.add(r.relations(m.Equations()))
	if list := m.Definitions(); len(list) > 0 {
		d.text("with the constants, exact as they were given,")
		d.add(inline(r.relations(list)))
	}
	switch list := m.SideConditions(); {
	case len(list) > 0:
		d.text("and the side conditions are")
		d.add(inline(r.relations(list)))
	case len(r.response.Constants()) == 0:
		d.text("There are no side conditions, and the equations leave no constant free.")
	default:
		d.text("There are no side conditions: the solution is the general one, with the free ",
			word(len(r.response.Constants()), "constant", "constants"), " ", symbols(r.response.Constants()), ".")
	}
}

func (r *report) statesPart(ctx context.Context, d *document) error {
	d.part("States", atStates)
	list, rounded, err := r.functions(ctx, r.response.State)
	if err != nil {
		return err
	}
	r.rounded = rounded
	explained := say("All formulas are exact.")
	if len(rounded) > 0 {
		explained = say("What stands behind = is exact. Behind ≈ the numbers with a decimal point are rounded to ", formulaDigits,
			" significant digits, each of them proven; all other numbers are exact. Section\u00a0", atExact, " has the exact forms of these states.")
	}
	if len(r.short.definitions) > 0 {
		explained = append(explained, say(" Section\u00a0", atNames, " tells what the names of long parts stand for.")...)
	}
	d.text(explained)
	d.add(list)
	if len(r.conditions) > 0 {
		var all inline
		for _, c := range r.conditions {
			all = append(all, readCondition(c))
		}
		d.text("These formulas hold for")
		d.add(all)
	}
	for _, s := range r.response.Remarks() {
		d.text(readRemark(s)...)
	}
	if names := r.response.Parameters(); len(names) > 0 {
		d.text("The ", word(len(names), "symbol ", "symbols "), symbols(names), word(len(names), " has", " have"),
			" no value, so there are neither values nor curves.")
	} else if len(r.response.Constants()) > 0 {
		d.text("The free constants have no values, so there are neither values nor curves.")
	}
	return nil
}

// readCondition reads a condition such as k1 != k2, or that the roots of a polynomial
// are distinct.
func readCondition(s string) relation {
	list, err := expr.ParseRelations(s, unlimited)
	if err != nil || len(list) != 1 {
		if poly, ok := strings.CutPrefix(s, "the roots of "); ok {
			if poly, ok = strings.CutSuffix(poly, " are distinct"); ok {
				if n, err := expr.Parse(poly, unlimited); err == nil {
					return relation{words: say("the roots of ", n, " are distinct")}
				}
			}
		}
		return relation{words: say(s)}
	}
	return relation{left: list[0].Left, sign: list[0].Op, right: list[0].Right}
}

// readRemark makes a sentence of a remark, with the expression in it as a formula.
func readRemark(s string) []any {
	const sign = "the formula holds for either sign of "
	of, rest, ok := strings.Cut(strings.TrimPrefix(s, sign), ": ")
	n, err := expr.Parse(of, unlimited)
	if !ok || !strings.HasPrefix(s, sign) || err != nil {
		return []any{"Remark: " + s + "."}
	}
	return []any{"Remark: " + sign, n, ": " + rest + "."}
}

// relation makes an equation, shortened where no line can hold it.
func (r *report) relation(left, right expr.Node) relation {
	return relation{left: left, sign: "=", right: r.short.shorten(right)}
}

func (r *report) relations(list []expr.Equation) equations {
	var out equations
	for _, eq := range list {
		out = append(out, r.relation(eq.Left, eq.Right))
	}
	return out
}

// functions writes a function of every state, numbers that are long as decimals, and
// returns the states whose functions hold such.
func (r *report) functions(ctx context.Context, of func(string) expr.Function) (out equations, rounded []string, err error) {
	for _, name := range r.response.States() {
		n, err := of(name).Write(ctx, expr.Form{Numbers: expr.MixedNumbers, Digits: formulaDigits})
		if err != nil {
			return nil, nil, err
		}
		eq := r.relation(expr.Sym(name), n)
		if holdsDecimal(n) {
			eq.sign = "≈"
			rounded = append(rounded, name)
		}
		out = append(out, eq)
	}
	return out, rounded, nil
}

func holdsDecimal(n expr.Node) bool {
	_, found := n.(expr.Decimal)
	expr.Children(n, func(c expr.Node) bool {
		found = found || holdsDecimal(c)
		return !found
	})
	return found
}

// exactPart gives the exact forms of the states that were written with decimals.
func (r *report) exactPart(d *document) {
	if len(r.rounded) == 0 {
		return
	}
	d.part("Exact forms", atExact)
	var list equations
	for _, name := range r.rounded {
		list = append(list, r.relation(expr.Sym(name), r.response.State(name).Node()))
	}
	d.add(list)
}

// abbreviations tells what the names in shortened formulas stand for.
func (r *report) abbreviations(d *document) {
	r.factors() // what follows may need names too
	for _, m := range r.modes {
		if m.exact != nil {
			r.short.shorten(m.exact)
		}
	}
	if len(r.short.definitions) == 0 {
		return
	}
	d.part("Abbreviations", atNames)
	var list equations
	var numbers longNumbers
	for _, def := range r.short.definitions {
		if _, isNumber := def.right.(expr.Number); isNumber {
			numbers = append(numbers, def)
		} else {
			list = append(list, relation{left: def.left, sign: "=", right: def.right})
		}
	}
	d.add(list)
	if len(numbers) > 0 {
		d.add(numbers)
	}
}

// factors returns the factors of the characteristic polynomial.
func (r *report) factors() equations {
	var out equations
	last := 0
	for _, m := range r.modes {
		if m.factor != last {
			last = m.factor
			out = append(out, r.relation(m.polynomial(), m.factorNode))
		}
	}
	return out
}

func (r *report) modesSection(d *document) {
	d.section("Modes", atModes)
	if len(r.modes) == 0 {
		d.text("The model has no modes: its states follow the input at once.")
		return
	}
	d.text("The characteristic polynomial has the irreducible ", word(r.modes[len(r.modes)-1].factor, "factor", "factors"))
	d.add(r.factors())
	d.text("Table\u00a0", atModesTable, " lists the roots, which are the eigenvalues.")
	t := table{label: atModesTable, caption: say("Modes, by the eigenvalues.")}
	// Along another variable than the time, what decays does so along a length.
	constant, period, unit := "time constant", "period", say("in the time unit of the model")
	if v := r.response.Model().Variable(); v != "t" && v != "tau" {
		constant, period, unit = "decay length", "wavelength", say("in the unit of ", expr.Sym(v))
	}
	for i, head := range []string{"eigenvalue", "factor", "mult.", "value", constant, "damping ratio", period, "behaviour"} {
		t.columns = append(t.columns, column{say(head), i >= 2 && i <= 6})
	}
	var exact []expr.Equation
	numeric, paired := false, false
	for i, m := range r.modes {
		name := expr.Sym(fmt.Sprintf("s_%d", i+1))
		if m.exact != nil {
			exact = append(exact, expr.Equation{Left: name, Right: r.short.shorten(m.exact)})
		}
		numeric, paired = numeric || m.symbolic == "", paired || m.omega > 0
		t.rows = append(t.rows, [][]span{
			say(name), say(m.name()), number(fmt.Sprint(m.multiplicity)), number(m.decimal()),
			number(m.timeConstant()), number(m.damping()), number(m.period()), say(m.remark()),
		})
	}
	d.add(t.withoutEmptyColumns())
	s := expr.Sym("s")
	if paired {
		text := say("For an eigenvalue ", s, " the "+constant+" is −1/Re ", s, ", the damping ratio −Re ", s, "/|", s, "|, the "+period+" 2π/Im ", s, ", ")
		text = append(append(text, unit...), say(". A pair of conjugate eigenvalues has one line.")...)
		d.add(paragraph{text, true})
	} else if numeric {
		text := say("For an eigenvalue ", s, " the "+constant+" is −1/", s, ", ")
		d.add(paragraph{append(append(text, unit...), say(".")...), true})
	}
	if numeric && isolated(r.modes) {
		d.add(paragraph{say("Each value, with half a unit of its last digit to either side, is an interval that holds one eigenvalue alone: together with the factor it defines it."), true})
	}
	if len(exact) > 0 {
		if paired {
			d.text("Written in radicals, and of a pair the one with positive imaginary part, they are")
		} else {
			d.text("Exactly, they are")
		}
		d.add(display(exact))
		if len(exact) < len(r.modes) {
			d.text("The others have no form in radicals that is given here; their factors define them.")
		}
	}
}

// withoutEmptyColumns returns the table without the columns that say nothing.
func (t table) withoutEmptyColumns() table {
	out := table{label: t.label, caption: t.caption, rows: make([][][]span, len(t.rows))}
	for j, c := range t.columns {
		empty := true
		for _, row := range t.rows {
			for _, s := range row[j] {
				empty = empty && s == (span{})
			}
		}
		if empty {
			continue
		}
		out.columns = append(out.columns, c)
		for i, row := range t.rows {
			out.rows[i] = append(out.rows[i], row[j])
		}
	}
	return out
}

// valueTables returns the labels of the tables of values.
func (r *report) valueTables() []label {
	var out []label
	for range (len(r.response.States()) + statesPerTable - 1) / statesPerTable {
		out = append(out, label(fmt.Sprintf("tab:values-%d", len(out)+1)))
	}
	return out
}

// figures returns the labels of the figures.
func (r *report) figures() []label {
	var out []label
	for i := range r.curves {
		out = append(out, label(fmt.Sprintf("fig:curve-%d", i+1)))
	}
	return out
}

func (r *report) valuesSection(d *document) {
	if len(r.values) == 0 {
		return
	}
	d.section("Values and curves", atValues)
	variable := expr.Sym(r.response.Model().Variable())
	tables, figures := r.valueTables(), r.figures()
	verb := word(len(tables), " gives", " give")
	d.text(refer("Table", tables), verb, " the states to ", valueDigits, " significant digits, every one proven, the last one rounded. ",
		refer("Figure", figures), word(len(figures), " shows", " show"), " them from ", variable, " = ", number(timeText(r.window.from)), " to ", number(timeText(r.window.to)),
		" ("+r.window.why+").")
	names := r.response.States()
	for i, l := range tables {
		from, to := i*len(names)/len(tables), (i+1)*len(names)/len(tables)
		t := table{label: l, caption: say("Values of ", symbols(names[from:to]), "."), columns: []column{{say(variable), true}}}
		for _, name := range names[from:to] {
			t.columns = append(t.columns, column{say(expr.Sym(name)), true})
		}
		for _, row := range r.values {
			cells := [][]span{number(timeText(row.time))}
			for _, v := range row.values[from:to] {
				cells = append(cells, number(v))
			}
			t.rows = append(t.rows, cells)
		}
		d.add(t)
	}
	for i, l := range figures {
		d.add(figure{l, say("The state ", expr.Sym(r.curves[i].name), " over ", variable, "."), i})
	}
}
