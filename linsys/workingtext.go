package linsys

import (
	"strings"

	"example.org/closedform/expr"
)

// String writes the step as text: the title, then sentences and, on lines of
// their own, formulas in the text form of [expr.Node].
func (s Step) String() string {
	var b strings.Builder
	b.WriteString(s.Title + "\n")
	for _, p := range s.Passages {
		if t := p.write(func(w string) string { return w }, expr.Node.String); t != "" {
			b.WriteString("  " + t + "\n")
		}
		for _, f := range p.Formulas {
			b.WriteString("    " + f.String() + "\n")
		}
	}
	return b.String()
}

// LaTeX writes the step as LaTeX: a paragraph with its title, sentences, and the
// formulas in aligned displays of amsmath.
func (s Step) LaTeX() string {
	var b strings.Builder
	b.WriteString(`\paragraph{` + latexWords(s.Title) + "}\n")
	for _, p := range s.Passages {
		if t := p.write(latexWords, func(n expr.Node) string { return "$" + expr.LaTeX(n) + "$" }); t != "" {
			b.WriteString(t + "\n")
		}
		if len(p.Formulas) == 0 {
			continue
		}
		var lines []string
		for _, f := range p.Formulas {
			lines = append(lines, latexLines(f)...)
		}
		b.WriteString("\\begin{align*}\n" + strings.Join(lines, " \\\\\n") + "\n\\end{align*}\n")
	}
	return b.String()
}

// longFormula is the length in LaTeX from which the terms of a sum stand on
// lines of their own.
const longFormula = 240

// latexLines writes an equation, of which the right side is broken between the
// terms of a sum when it is long.
func latexLines(f expr.Equation) []string {
	left, right := expr.LaTeX(f.Left), expr.LaTeX(f.Right)
	sum, ok := f.Right.(expr.Sum)
	if !ok || len(right) < longFormula {
		return []string{left + " &= " + right}
	}
	lines := []string{left + " &= " + expr.LaTeX(sum.Terms[0])}
	for _, t := range sum.Terms[1:] {
		// Written behind a 0, a term shows how it goes on.
		term := strings.TrimPrefix(expr.LaTeX(expr.Sum{Terms: []expr.Node{expr.Int(0), t}}), "0 ")
		lines = append(lines, `&\quad {} `+term)
	}
	return lines
}

// HTML writes the step as HTML with MathML Core.
func (s Step) HTML() string {
	var b strings.Builder
	b.WriteString("<h4>" + htmlWords(s.Title) + "</h4>\n")
	for _, p := range s.Passages {
		if t := p.write(htmlWords, expr.MathML); t != "" {
			b.WriteString("<p>" + t + "</p>\n")
		}
		for _, f := range p.Formulas {
			m := expr.MathMLEquation(f)
			b.WriteString(`<div class="formula">` + m + "</div>\n")
		}
	}
	return b.String()
}

func (p Passage) write(words func(string) string, math func(expr.Node) string) string {
	var b strings.Builder
	for _, s := range p.Text {
		if s.Math != nil {
			b.WriteString(math(s.Math))
		} else {
			b.WriteString(words(s.Words))
		}
	}
	return b.String()
}

var latexWords = strings.NewReplacer(
	`\`, `\textbackslash{}`, "{", `\{`, "}", `\}`, "$", `\$`, "&", `\&`, "#", `\#`, "%", `\%`,
	"_", `\_`, "^", `\textasciicircum{}`, "~", `\textasciitilde{}`,
).Replace

var htmlWords = strings.NewReplacer("&", "&amp;", "<", "&lt;", ">", "&gt;", `"`, "&quot;", "'", "&#39;").Replace
