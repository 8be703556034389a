package main

import (
	"fmt"
	"sort"
	"strings"
	"unicode"

	"example.org/closedform/expr"
)

// latex writes the report as a LaTeX document that needs amsmath, graphicx
// and geometry.
func (r *report) latex() string {
	var b strings.Builder
	w := texWriter{b: &b, short: r.short}
	m := r.response.Model()
	w.line(`\section*{Model}`)
	w.line("Equations:")
	for _, eq := range m.Equations() {
		w.equation(eq.Left, eq.Right)
	}
	w.endEquations()
	if list := m.Definitions(); len(list) > 0 {
		w.line("with the constants, exact as they were given,")
		w.inline(list)
	}
	if list := m.SideConditions(); len(list) > 0 {
		w.line("and the side conditions")
		w.inline(list)
	} else if len(r.response.Constants()) == 0 {
		w.line("There are no side conditions, and the equations leave no constant free.")
	} else {
		w.line("There are no side conditions: the solution is the general one, with the free constants $%s$. It has no values and no plots.",
			strings.Join(mapped(r.response.Constants(), expr.LaTeXName), ", "))
	}
	r.latexModes(w)
	w.line(`\section*{Response}`)
	w.functions(r, r.response.State)
	if len(r.conditions) > 0 {
		w.line("These formulas hold for $%s$.", strings.Join(mapped(r.conditions, conditionLaTeX), "$, $"))
	}
	if names := r.response.Parameters(); len(names) > 0 {
		w.line("The symbols $%s$ have no values; there are no plots.", strings.Join(mapped(names, expr.LaTeXName), "$, $"))
	}
	w.line(`\section*{Transient part}`)
	w.line("The complementary function: what the modes contribute.")
	w.functions(r, r.response.Transient)
	w.line(`\section*{Steady part}`)
	w.line("The particular integral: what has the rates of the input.")
	w.functions(r, r.response.Steady)
	r.latexDefinitions(w)
	r.latexValues(w)
	r.latexProof(w)
	r.latexPlots(w)
	w.line("\n\\bigskip\n\\fbox{\\parbox{0.97\\linewidth}{\\textbf{Caution.} %s}}", texEscape(caution))
	return texPreamble(r, b.String()) + b.String() + "\\end{document}\n"
}

func mapped(list []string, f func(string) string) []string {
	out := make([]string, len(list))
	for i, s := range list {
		out[i] = f(s)
	}
	return out
}

// texPreamble returns the document up to the first section. Characters that the
// fonts lack are shown by their code points.
func texPreamble(r *report, body string) string {
	var b strings.Builder
	head := `\documentclass[10pt,a4paper]{article}
\usepackage[utf8]{inputenc}
\IfFileExists{lmodern.sty}{\usepackage[T1]{fontenc}\usepackage{lmodern}}{}
\usepackage{textcomp}
\usepackage{amsmath}
\usepackage{graphicx}
\usepackage[margin=25mm]{geometry}
\allowdisplaybreaks
\setlength{\jot}{5pt}
\setlength{\parindent}{0pt}
\setlength{\parskip}{0.5\baselineskip}
\makeatletter
`
	b.WriteString(head)
	title := fmt.Sprintf("\\section*{\\LARGE\\raggedright %s}\n", texEscape(r.title()))
	if s := r.further(); s != "" {
		title += texEscape(s) + "\n"
	}
	title += "\nSource of the model: " + texEscape(r.src.name) + ".\n"
	seen := map[rune]bool{}
	for _, c := range title + body {
		if c > 0x7f {
			seen[c] = true
		}
	}
	var list []rune
	for c := range seen {
		list = append(list, c)
	}
	sort.Slice(list, func(i, j int) bool { return list[i] < list[j] })
	for _, c := range list {
		fmt.Fprintf(&b, "\\@ifundefined{u8:\\detokenize{%c}}{\\DeclareUnicodeCharacter{%04X}{{[U+%04X]}}}{}\n", c, c, c)
	}
	b.WriteString("\\makeatother\n\\begin{document}\n" + title)
	return b.String()
}

// texEscape makes a text inert.
func texEscape(s string) string {
	var b strings.Builder
	for _, c := range s {
		switch c {
		case '\\':
			b.WriteString(`\textbackslash{}`)
		case '{', '}', '$', '&', '#', '%', '_':
			b.WriteString(`\` + string(c))
		case '^', '~':
			b.WriteString(`\` + string(c) + `{}`)
		case '<':
			b.WriteString(`\textless{}`)
		case '>':
			b.WriteString(`\textgreater{}`)
		case '|':
			b.WriteString(`\textbar{}`)
		case '"':
			b.WriteString(`\textquotedbl{}`)
		case '`', '-':
			b.WriteString(string(c) + `{}`) // no ligatures
		default:
			if unicode.IsPrint(c) {
				b.WriteRune(c)
			} else {
				b.WriteByte(' ')
			}
		}
	}
	return strings.ReplaceAll(b.String(), `\textquotedbl{}`, `{\char34}`)
}

// texWriter writes lines; equations are gathered into one display.
type texWriter struct {
	b     *strings.Builder
	short *shortener
	open  *bool
}

func (w *texWriter) line(format string, args ...any) { fmt.Fprintf(w.b, format+"\n", args...) }

// equation adds an equation to a display.
func (w *texWriter) equation(left, right expr.Node) {
	if w.open == nil {
		w.open = new(bool)
	}
	if !*w.open {
		w.line(`\begin{align*}`)
		*w.open = true
	} else {
		w.line(`\\`)
	}
	leftWidth := width(left)
	if leftWidth > rowWidth/3 {
		// The right side starts on a row of its own.
		for i, row := range rows(left, rowWidth) {
			if i > 0 {
				row = `\\ &\qquad {}` + row
			} else {
				row = "& " + row
			}
			w.line("%s", row)
		}
		w.line(`\\`)
		leftWidth = 0
		left = nil
	}
	for i, row := range rows(w.short.shorten(right), rowWidth-leftWidth) {
		switch {
		case i > 0:
			row = `\\ &\qquad {}` + row
		case left == nil:
			row = `&\quad {}= ` + row
		default:
			row = expr.LaTeX(left) + " &= " + row
		}
		w.line("%s", row)
	}
}

func (w *texWriter) endEquations() {
	if w.open != nil && *w.open {
		w.line(`\end{align*}`)
		*w.open = false
	}
}

// inline writes short equations one after the other, as text that breaks.
func (w *texWriter) inline(list []expr.Equation) {
	parts := make([]string, len(list))
	for i, eq := range list {
		parts[i] = "$" + expr.LaTeX(eq.Left) + " = " + expr.LaTeX(w.short.shorten(eq.Right)) + "$"
	}
	w.line("\\begin{quote}\\raggedright\\renewcommand{\\baselinestretch}{1.3}\\selectfont\n%s.\n\\end{quote}", strings.Join(parts, ",\\quad\n"))
}

func (w *texWriter) functions(r *report, of func(string) expr.Function) {
	for _, name := range r.response.States() {
		w.equation(expr.Sym(name), of(name).Node())
	}
	w.endEquations()
}

// conditionLaTeX writes a condition such as k1 != k2, and one in words as it is.
func conditionLaTeX(s string) string {
	list, err := expr.ParseRelations(s, unlimited)
	if err != nil || len(list) != 1 {
		return `\text{` + s + `}`
	}
	sign := map[string]string{"!=": `\neq`, ">=": `\geq`, ">": ">"}[list[0].Op]
	return expr.LaTeX(list[0].Left) + " " + sign + " " + expr.LaTeX(list[0].Right)
}

func (r *report) latexModes(w texWriter) {
	w.line(`\section*{Modes}`)
	if len(r.modes) == 0 {
		w.line("The model has no modes: its states follow the input at once.")
		return
	}
	w.line("The irreducible factors of the characteristic polynomial:")
	last := 0
	for _, m := range r.modes {
		if m.factor != last {
			w.equation(m.polynomial(), m.factorNode)
			last = m.factor
		}
	}
	w.endEquations()
	oscillating := oscillates(r.modes)
	columns, head := "lrlll", "factor & mult. & eigenvalue & exact & time constant"
	if oscillating {
		columns, head = columns+"ll", head+" & damping ratio & period"
	}
	var lines []string
	for _, m := range r.modes {
		exact := ""
		if m.exact.latex != "" && len(m.exact.text) < 24 {
			exact = "$" + m.exact.latex + "$"
		}
		decimal := "$" + strings.NewReplacer("±", `\pm`, "i", `\,\mathrm{i}`).Replace(m.decimal()) + "$"
		line := fmt.Sprintf("$%s$ & %d & %s & %s & %s", expr.LaTeX(m.name()), m.multiplicity, decimal, exact, texNumber(m.timeConstant()))
		if oscillating {
			line += " & " + texNumber(m.damping()) + " & " + texNumber(m.period())
		}
		lines = append(lines, line+" & "+m.remark())
	}
	w.table(columns+"l", head+" & ", lines)
	w.line(`Time constant $-1/\operatorname{Re}$, damping ratio $-\operatorname{Re}/|s|$, period $2\pi/\operatorname{Im}$ of an eigenvalue $s$, in the time unit of the model.`)
}

// table writes a table, in pieces that fit on a page.
func (w *texWriter) table(columns, head string, lines []string) {
	const most = 30
	for ; len(lines) > 0; lines = lines[min(len(lines), most):] {
		w.line("\\begin{center}\\setlength{\\tabcolsep}{4pt}\\renewcommand{\\arraystretch}{1.25}\n\\begin{tabular}{%s}\n%s \\\\ \\hline", columns, head)
		for _, l := range lines[:min(len(lines), most)] {
			w.line(`%s \\`, l)
		}
		w.line("\\end{tabular}\n\\end{center}")
	}
}

// texNumber sets a decimal number, with its power of ten as such.
func texNumber(s string) string {
	if s == "" {
		return ""
	}
	if m, e, ok := strings.Cut(s, "e"); ok {
		s = m + ` \cdot 10^{` + strings.TrimPrefix(e, "+") + "}"
	}
	return "$" + s + "$"
}

func (r *report) latexDefinitions(w texWriter) {
	if len(w.short.definitions) == 0 {
		return
	}
	w.line(`\section*{Abbreviations}`)
	var numbers []definition
	for _, d := range w.short.definitions {
		if _, isNumber := d.right.(expr.Number); isNumber {
			numbers = append(numbers, d)
		} else {
			w.equation(d.left, d.right)
		}
	}
	w.endEquations()
	for _, d := range numbers {
		v := d.right.(expr.Number).Val
		text := digits(v.Num().String())
		if !v.IsInt() {
			text += " / " + digits(v.Den().String())
		}
		w.line("\\begin{quote}\\raggedright\\footnotesize $%s$ = %s\\end{quote}", expr.LaTeX(d.left), text)
	}
}

// digits writes a long number in groups between which a line may end.
func digits(s string) string {
	var groups []string
	for len(s) > 10 {
		groups = append(groups, s[:10])
		s = s[10:]
	}
	return strings.Join(append(groups, s), `\hspace{0pt}`)
}

func (r *report) latexValues(w texWriter) {
	if len(r.values) == 0 {
		return
	}
	w.line(`\section*{Values}`)
	w.line("To %d significant digits, every one proven, the last one rounded.", valueDigits)
	names := r.response.States()
	for from := 0; from < len(names); from += statesPerTable {
		to := min(len(names), from+statesPerTable)
		head := "$" + expr.LaTeXName(r.response.Model().Variable()) + "$ & " +
			strings.Join(mapped(names[from:to], func(s string) string { return "$" + expr.LaTeXName(s) + "$" }), " & ")
		var lines []string
		for _, row := range r.values {
			lines = append(lines, texNumber(timeText(row.time))+" & "+strings.Join(mapped(row.values[from:to], texNumber), " & "))
		}
		w.table("l"+strings.Repeat("r", to-from), head, lines)
	}
}

func (r *report) latexProof(w texWriter) {
	w.line(`\section*{Proof}`)
	w.line("%s", texEscape(r.proofText()))
}

func (r *report) latexPlots(w texWriter) {
	if len(r.curves) == 0 {
		return
	}
	w.line(`\section*{Plots}`)
	w.line("Range of time: $%s$ from %s to %s, %s.", expr.LaTeXName(r.response.Model().Variable()), timeText(r.window.from), timeText(r.window.to), texEscape(r.window.why))
	for i, c := range r.curves {
		w.line("\\begin{center}\n$%s$\\\\*[2pt]\n\\includegraphics[width=\\linewidth]{plot-%d.pdf}\n\\end{center}", expr.LaTeXName(c.name), i+1)
	}
}
