package main

import (
	_ "embed"
	"fmt"
	"html"
	"html/template"
	"strings"

	"example.org/closedform/expr"
)

//go:embed report.html.tmpl
var page string

var pageTemplate = template.Must(template.New("report").Parse(page))

// html writes the report as one HTML file without outside resources.
func (r *report) html() (string, error) {
	w := htmlWriter{r: r}
	for _, b := range r.document.blocks {
		if err := w.block(b); err != nil {
			return "", err
		}
	}
	var b strings.Builder
	err := pageTemplate.Execute(&b, struct {
		Title, Notes, Source string
		Body                 template.HTML
	}{r.title(), r.further(), r.src.name, template.HTML(w.b.String())})
	return b.String(), err
}

// htmlWriter writes blocks; it escapes all texts, and the writer of formulas
// escapes names.
type htmlWriter struct {
	r *report
	b strings.Builder
}

func (w *htmlWriter) line(format string, args ...any) { fmt.Fprintf(&w.b, format+"\n", args...) }

func (w *htmlWriter) block(b any) error {
	switch v := b.(type) {
	case heading:
		tag, number := "h2", w.r.document.numbers[v.label]
		if v.level == 2 {
			tag = "h3"
		}
		if number != "" {
			number += "\u2002"
		}
		w.line(`<%s id="%s">%s%s</%[1]s>`, tag, v.label, number, html.EscapeString(v.text))
	case paragraph:
		class := ""
		if v.note {
			class = ` class="note"`
		}
		w.line("<p%s>%s</p>", class, w.spans(v.text))
	case equations:
		w.line(`<div class="wide"><table class="equations">`)
		for _, q := range v {
			w.line("<tr><td>%s</td><td>%s</td><td>%s</td></tr>", pieces(q.left), htmlSign(q.sign), pieces(q.right))
		}
		w.line("</table></div>")
	case packed:
		w.line(`<div class="packed">`)
		for _, q := range v {
			lead := ""
			if len(q.lead) > 0 {
				lead = w.spans(q.lead) + "\u2002"
			}
			w.line("<span>%s%s %s %s</span>", lead, expr.MathML(q.left), htmlSign(q.sign), expr.MathML(q.right))
		}
		w.line("</div>")
	case inline:
		list := make([]string, len(v))
		for i, q := range v {
			if list[i] = w.spans(q.words); q.words == nil {
				list[i] = pieces(q.left) + " " + htmlSign(q.sign) + " " + pieces(q.right)
			}
		}
		w.line(`<p class="inline"><span>%s.</span></p>`, strings.Join(list, ",</span> <span>"))
	case longNumbers:
		w.line(`<div class="wide"><table class="equations">`)
		for _, d := range v {
			w.line("<tr><td>%s</td><td>=</td><td><code>%s</code></td></tr>", pieces(d.left), html.EscapeString(d.right.String()))
		}
		w.line("</table></div>")
	case table:
		w.table(v)
	case figure:
		svg, err := w.r.curves[v.curve].svg()
		if err != nil {
			return err
		}
		w.line("<figure id=\"%s\">\n%s\n<figcaption>Figure %s. %s</figcaption>\n</figure>", v.label, svg, w.r.document.numbers[v.label], w.spans(v.caption))
	case listing:
		w.line("<pre>%s</pre>", html.EscapeString(string(v)))
	case box:
		w.line(`<p class="caution"><strong>%s</strong> %s</p>`, html.EscapeString(v.word), html.EscapeString(v.text))
	default:
		panic(fmt.Sprintf("html: %T", b))
	}
	return nil
}

func (w *htmlWriter) table(t table) {
	class := make([]string, len(t.columns))
	for i, c := range t.columns {
		if c.right {
			class[i] = ` class="number"`
		}
	}
	w.line(`<div class="wide"><table id="%s">`, t.label)
	w.line("<caption>Table %s. %s</caption>\n<tr>", w.r.document.numbers[t.label], w.spans(t.caption))
	for i, c := range t.columns {
		w.line("<th%s>%s</th>", class[i], w.spans(c.head))
	}
	w.line("</tr>")
	for _, row := range t.rows {
		w.b.WriteString("<tr>")
		for i, cell := range row {
			fmt.Fprintf(&w.b, "<td%s>%s</td>", class[i], w.spans(cell))
		}
		w.line("</tr>")
	}
	w.line("</table></div>")
}

func (w *htmlWriter) spans(list []span) string {
	var b strings.Builder
	for _, s := range list {
		switch {
		case s.math != nil:
			b.WriteString(expr.MathML(s.math))
		case s.to != "":
			fmt.Fprintf(&b, `<a href="#%s">%s</a>`, s.to, w.r.document.numbers[s.to])
		default:
			b.WriteString(html.EscapeString(s.words + s.number))
		}
	}
	return b.String()
}

var htmlSigns = map[string]string{"!=": "≠", ">=": "≥", "<=": "≤", ">": "&gt;", "<": "&lt;"}

func htmlSign(sign string) string {
	if s, ok := htmlSigns[sign]; ok {
		return s
	}
	return sign
}

// pieces writes a formula as a row of math elements between which a line may
// end: at the top-level terms, and inside of parentheses that no line can hold.
func pieces(n expr.Node) string {
	var list []string
	addPieces(&list, "", n)
	return `<span class="piece">` + strings.Join(list, "</span> <span class=\"piece\">") + "</span>"
}

func addPieces(list *[]string, sign string, n expr.Node) {
	switch v := n.(type) {
	case expr.Sum:
		for i, t := range v.Terms {
			s := "+ "
			if m, ok := negated(t); ok {
				s, t = "− ", m
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
			front := ""
			if k := len(v.Factors) - 1; k == 1 {
				front = expr.MathML(v.Factors[0]) + " "
			} else if k > 1 {
				front = expr.MathML(expr.Product{Factors: v.Factors[:k]}) + " "
			}
			begin := len(*list)
			addPieces(list, "", last)
			(*list)[begin] = sign + front + "(" + (*list)[begin]
			(*list)[len(*list)-1] += ")"
			return
		}
	}
	*list = append(*list, sign+expr.MathML(n))
}
