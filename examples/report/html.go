package main

import (
	_ "embed"
	"html/template"
	"strings"

	"example.org/closedform/expr"
)

//go:embed report.html.tmpl
var page string

var pageTemplate = template.Must(template.New("report").Parse(page))

// formula writes a formula for a browser; the writer escapes names.
func formula(n expr.Node) template.HTML { return template.HTML(expr.MathML(n)) }

// equation is an equation, or a state with a function.
type equation struct{ Left, Right template.HTML }

type htmlMode struct {
	Factor, Exact                                     template.HTML
	Multiplicity                                      int
	Eigenvalue, TimeConstant, Damping, Period, Remark string
}

// htmlTable holds the values of some of the states.
type htmlTable struct {
	States []template.HTML
	Rows   []htmlRow
}

type htmlRow struct {
	Time   string
	Values []string
}

type htmlPlot struct {
	Name template.HTML
	SVG  template.HTML
}

// htmlPage is what the template is filled with; it escapes all texts.
type htmlPage struct {
	Title, Notes, Source, ModelText            string
	Equations, Definitions, Sides, Factors     []equation
	Constants                                  []string
	Modes                                      []htmlMode
	Solution, Transient, Steady, Abbreviations []equation
	Variable                                   template.HTML
	Tables                                     []htmlTable
	Digits                                     int
	Proof, From, To, Why, Caution              string
	Oscillates                                 bool
	Conditions, Symbols                        []string
	Plots                                      []htmlPlot
}

// html writes the report as one HTML file without outside resources.
func (r *report) html() (string, error) {
	m := r.response.Model()
	p := htmlPage{
		Title: r.title(), Notes: r.further(), Source: r.src.name, ModelText: strings.TrimSpace(r.src.text),
		Equations: r.equations(m.Equations()), Definitions: r.equations(m.Definitions()), Sides: r.equations(m.SideConditions()),
		Constants: r.response.Constants(), Variable: formula(expr.Sym(m.Variable())), Digits: valueDigits,
		Solution: r.functions(r.response.State), Transient: r.functions(r.response.Transient), Steady: r.functions(r.response.Steady),
		Conditions: r.conditions, Symbols: r.response.Parameters(),
		Proof: r.proofText(), Caution: caution, Oscillates: oscillates(r.modes),
	}
	last := 0
	for _, mode := range r.modes {
		if mode.factor != last {
			last = mode.factor
			p.Factors = append(p.Factors, r.equation(mode.polynomial(), mode.factorNode))
		}
		p.Modes = append(p.Modes, htmlMode{
			Factor: formula(mode.name()), Multiplicity: mode.multiplicity,
			Eigenvalue: mode.decimal(), Exact: mode.exact.html, TimeConstant: mode.timeConstant(),
			Damping: mode.damping(), Period: mode.period(), Remark: mode.remark(),
		})
	}
	p.Abbreviations = r.abbreviations()
	if !r.general() {
		p.From, p.To, p.Why = timeText(r.window.from), timeText(r.window.to), r.window.why
	}
	names := r.response.States()
	for from := 0; from < len(names) && len(r.values) > 0; from += statesPerTable {
		to := min(len(names), from+statesPerTable)
		var table htmlTable
		for _, name := range names[from:to] {
			table.States = append(table.States, formula(expr.Sym(name)))
		}
		for _, row := range r.values {
			table.Rows = append(table.Rows, htmlRow{timeText(row.time), row.values[from:to]})
		}
		p.Tables = append(p.Tables, table)
	}
	for _, c := range r.curves {
		svg, err := c.svg()
		if err != nil {
			return "", err
		}
		p.Plots = append(p.Plots, htmlPlot{formula(expr.Sym(c.name)), template.HTML(svg)})
	}
	var b strings.Builder
	err := pageTemplate.Execute(&b, p)
	return b.String(), err
}

// pieces writes a formula as a row of math elements between which a line may
// end: at the top-level terms, and inside of parentheses that no line can hold.
func pieces(n expr.Node) template.HTML {
	var list []string
	addPieces(&list, "", n)
	return template.HTML(`<span class="piece">` + strings.Join(list, "</span> <span class=\"piece\">") + "</span>")
}

func addPieces(list *[]string, sign string, n expr.Node) {
	switch v := n.(type) {
	case expr.Sum:
		for i, t := range v.Terms {
			s := "+ "
			if m, ok := t.(expr.Neg); ok {
				s, t = "− ", m.X
			} else if m, ok := t.(expr.Number); ok && m.Val.Sign() < 0 {
				s, t = "− ", expr.Num(m.Val.Neg())
			}
			if i == 0 {
				s = sign + strings.TrimSpace(strings.TrimPrefix(s, "+ "))
			}
			addPieces(list, s, t)
		}
		return
	case expr.Product:
		last, isSum := v.Factors[len(v.Factors)-1].(expr.Sum)
		if isSum && width(n) > rowWidth {
			front := expr.Node(expr.Int(1))
			if k := len(v.Factors) - 1; k == 1 {
				front = v.Factors[0]
			} else if k > 1 {
				front = expr.Product{Factors: v.Factors[:k]}
			}
			begin := len(*list)
			addPieces(list, "", last)
			(*list)[begin] = sign + expr.MathML(front) + " (" + (*list)[begin]
			(*list)[len(*list)-1] += ")"
			return
		}
	}
	*list = append(*list, sign+expr.MathML(n))
}

// equation writes an equation, shortened where no line can hold it.
func (r *report) equation(left, right expr.Node) equation {
	return equation{pieces(left), pieces(r.short.shorten(right))}
}

func (r *report) equations(list []expr.Equation) []equation {
	var out []equation
	for _, eq := range list {
		out = append(out, r.equation(eq.Left, eq.Right))
	}
	return out
}

func (r *report) functions(of func(string) expr.Function) []equation {
	var out []equation
	for _, name := range r.response.States() {
		out = append(out, r.equation(expr.Sym(name), of(name).Node()))
	}
	return out
}

// abbreviations returns what the names in shortened formulas stand for; long
// numbers are text that may break anywhere.
func (r *report) abbreviations() []equation {
	var out []equation
	var numbers []equation
	for _, d := range r.short.definitions {
		if _, isNumber := d.right.(expr.Number); isNumber {
			numbers = append(numbers, equation{pieces(d.left), template.HTML("<code>" + d.right.String() + "</code>")})
		} else {
			out = append(out, equation{pieces(d.left), pieces(d.right)})
		}
	}
	return append(out, numbers...)
}
