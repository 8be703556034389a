package main

import (
	"fmt"
	"regexp"
	"sort"
	"strings"
	"unicode"

	"example.org/closedform/expr"
)

// latex writes the report as a LaTeX document that needs amsmath, graphicx
// and geometry.
func (r *report) latex() string {
	w := texWriter{b: &strings.Builder{}}
	for _, b := range r.document.blocks {
		w.block(b)
	}
	return texPreamble(r, w.b.String()) + w.b.String() + "\\end{document}\n"
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
\setlength{\emergencystretch}{2em}
\renewcommand{\arraystretch}{1.2}
\makeatletter
% A table or a figure that stays where it is.
\newenvironment{exhibit}[1]{\par\medskip\noindent\begin{minipage}{\linewidth}\centering\def\@captype{#1}%
  \setlength{\abovecaptionskip}{4pt}\setlength{\belowcaptionskip}{6pt}%
  \setlength{\tabcolsep}{4pt}\renewcommand{\arraystretch}{1.25}}{\end{minipage}\par\medskip}
% Formulas side by side.
\newenvironment{packed}{\par\begingroup\centering\lineskiplimit=2pt\lineskip=8pt\relax}{\unskip\par\endgroup}
`
	b.WriteString(head)
	title := fmt.Sprintf("{\\LARGE\\bfseries\\raggedright %s\\par}\\bigskip\n", texEscape(r.title()))
	if s := r.further(); s != "" {
		title += texEscape(s) + "\n"
	}
	title += "\nSource of the model: " + texEscape(r.src.name) + ".\n\n"
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
		case '\u00a0':
			b.WriteByte('~')
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

// texWriter writes blocks.
type texWriter struct{ b *strings.Builder }

func (w *texWriter) line(format string, args ...any) { fmt.Fprintf(w.b, format+"\n", args...) }

func (w *texWriter) block(b any) {
	switch v := b.(type) {
	case heading:
		if v.level == 0 {
			w.line(`\section*{%s}`, texEscape(v.text))
			break
		}
		w.line(`%s{%s}\label{%s}`, []string{`\section`, `\subsection`}[v.level-1], texEscape(v.text), v.label)
	case paragraph:
		if v.note {
			w.line("\n{\\footnotesize %s\\par}", texSpans(v.text))
		} else {
			w.line("\n%s", texSpans(v.text))
		}
	case equations:
		w.equations(v)
	case packed:
		w.line(`\begin{packed}`)
		for _, q := range v {
			lead := ""
			if len(q.lead) > 0 {
				lead = texSpans(q.lead) + `\enspace `
			}
			w.line(`\mbox{%s$\displaystyle %s %s %s$}\qquad`, lead, expr.LaTeX(q.left), latexSign(q.sign), expr.LaTeX(q.right))
		}
		w.line(`\end{packed}`)
	case inline:
		w.inline(v)
	case longNumbers:
		for _, d := range v {
			x := d.right.(expr.Number).Val
			text := digits(x.Num().String())
			if !x.IsInt() {
				text += " / " + digits(x.Den().String())
			}
			w.line("\\begin{quote}\\raggedright\\footnotesize $%s$ = %s\\end{quote}", expr.LaTeX(d.left), text)
		}
	case table:
		w.table(v)
	case figure:
		w.line("\\begin{exhibit}{figure}\n\\includegraphics[width=\\linewidth]{plot-%d.pdf}\n\\caption{%s}\\label{%s}\n\\end{exhibit}\n",
			v.curve+1, texSpans(v.caption), v.label)
	case listing:
		w.line("\n" + `{\footnotesize\ttfamily\raggedright\parskip=0pt\relax`)
		for line := range strings.Lines(string(v)) {
			w.line(`\mbox{}%s\par`, texListing(line))
		}
		w.line("}\n")
	case box:
		w.line("\n\\fbox{\\parbox{0.97\\linewidth}{\\textbf{%s} %s}}\n", texEscape(v.word), texEscape(v.text))
	default:
		panic(fmt.Sprintf("latex: %T", b))
	}
}

// texListing sets a line of a text as it is, with places where it may break.
func texListing(line string) string {
	var b strings.Builder
	run := 0
	for _, c := range strings.TrimRight(line, " \t\r\n") {
		switch {
		case c == ' ' || c == '\t':
			b.WriteString(`\ `)
			run = 0
			continue
		case run == 40:
			b.WriteString(`\hspace{0pt}`)
			run = 0
		}
		b.WriteString(texEscape(string(c)))
		run++
	}
	return b.String()
}

func texSpans(list []span) string {
	var b strings.Builder
	for _, s := range list {
		switch {
		case s.math != nil:
			b.WriteString("$" + expr.LaTeX(s.math) + "$")
		case s.to != "":
			fmt.Fprintf(&b, `\ref{%s}`, s.to)
		case s.number != "":
			b.WriteString(texNumber(s.number))
		default:
			b.WriteString(texWords(s.words))
		}
	}
	return b.String()
}

// texWords writes words, with signs of formulas as such.
func texWords(s string) string { return texSigns.Replace(texEscape(s)) }

var texSigns = strings.NewReplacer("−", `$-$`, "±", `$\pm$`, "π", `$\pi$`, "≈", `$\approx$`, `\textbar{}`, "$|$")

// texNumber sets a decimal number, or a pair of them, with powers of ten as such.
func texNumber(s string) string {
	if s == "" {
		return ""
	}
	s = texPower.ReplaceAllString(s, ` \cdot 10^{$1$2}`)
	return "$" + strings.NewReplacer("±", `\pm`, "i", `\,\mathrm{i}`).Replace(s) + "$"
}

var texPower = regexp.MustCompile(`e\+?(-?)0*([0-9]+)`)

var latexSigns = map[string]string{"!=": `\neq`, ">=": `\geq`, "<=": `\leq`, "≈": `\approx`}

func latexSign(sign string) string {
	if s, ok := latexSigns[sign]; ok {
		return s
	}
	return sign
}

// equations writes a display.
func (w *texWriter) equations(list equations) {
	w.line(`\begin{align*}`)
	left, right := 0.0, 0.0
	for _, q := range list {
		left, right = max(left, width(q.left)), max(right, width(q.right))
	}
	for i, q := range list {
		if i > 0 {
			w.line(`\\`)
		}
		w.equation(q, left+right < rowWidth-4)
	}
	w.line(`\end{align*}`)
}

// equation writes a relation on one row, or where that may be too short on some.
func (w *texWriter) equation(q relation, short bool) {
	left, leftWidth := expr.LaTeX(q.left)+" &", width(q.left)
	if !short && leftWidth > rowWidth/3 {
		// The right side starts on a row of its own.
		for i, row := range rows(q.left, rowWidth) {
			if i > 0 {
				row = `\\ &\qquad {}` + row
			} else {
				row = "& " + row
			}
			w.line("%s", row)
		}
		w.line(`\\`)
		left, leftWidth = `&\quad {}`, 0
	}
	for i, row := range rows(q.right, rowWidth-leftWidth) {
		if i > 0 {
			row = `\\ &\qquad {}` + row
		} else {
			row = left + latexSign(q.sign) + " " + row
		}
		w.line("%s", row)
	}
}

// inline writes short relations one after the other, as text that breaks.
func (w *texWriter) inline(list inline) {
	parts := make([]string, len(list))
	for i, q := range list {
		if parts[i] = texSpans(q.words); q.words == nil {
			parts[i] = "$" + expr.LaTeX(q.left) + " " + latexSign(q.sign) + " " + expr.LaTeX(q.right) + "$"
		}
	}
	w.line("\\begin{quote}\\raggedright\\renewcommand{\\baselinestretch}{1.3}\\selectfont\n%s.\n\\end{quote}", strings.Join(parts, ",\\quad\n"))
}

// table writes a table, in pieces that fit on a page.
func (w *texWriter) table(t table) {
	columns, heads := "", make([]string, len(t.columns))
	for i, c := range t.columns {
		heads[i] = texSpans(c.head)
		if c.right {
			columns += "r"
		} else {
			columns += "l"
		}
	}
	for from := 0; from < len(t.rows); from += rowsPerTable {
		w.line(`\begin{exhibit}{table}`)
		if from == 0 {
			w.line(`\caption{%s}\label{%s}`, texSpans(t.caption), t.label)
		}
		w.line(`\small`)
		w.line("\\begin{tabular}{%s}\n%s \\\\ \\hline", columns, strings.Join(heads, " & "))
		for _, row := range t.rows[from:min(len(t.rows), from+rowsPerTable)] {
			cells := make([]string, len(row))
			for i, cell := range row {
				cells[i] = texSpans(cell)
			}
			w.line(`%s \\`, strings.Join(cells, " & "))
		}
		w.line("\\hline\n\\end{tabular}\n\\end{exhibit}\n")
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
