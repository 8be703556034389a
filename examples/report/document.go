package main

import (
	"fmt"

	"example.org/closedform/expr"
)

// document is the report before it is written: blocks in their order. Both the
// page and the LaTeX document are written from it, so that they say the same and
// count sections, tables and figures alike.
type document struct {
	blocks  []any            // heading, paragraph, equations, packed, inline, longNumbers, table, figure, listing, box
	numbers map[label]string // of headings, tables and figures
	counts  map[string]int
}

// label is the name by which the text refers to a heading, a table or a figure.
type label string

// heading begins a section, or a part of one at level 2; level 0 has no number.
type heading struct {
	level int
	text  string
	label label
}

// span is a piece of a sentence: words, a formula, a decimal number, or a
// reference.
type span struct {
	words  string
	math   expr.Node
	number string
	to     label
}

type paragraph struct {
	text []span
	note bool // in smaller letters
}

// relation is an equation, or another relation between two expressions. One that
// is no formula stands in words, in inline relations only.
type relation struct {
	left  expr.Node
	sign  string // = ≈ ≠ > >= < <=
	right expr.Node
	words []span
}

// equations are displayed, one below the other.
type equations []relation

// packed relations are displayed side by side, as many as a line holds.
type packed []packedItem

// packedItem is a relation, after some words or none.
type packedItem struct {
	lead []span
	relation
}

// inline relations follow each other in the text.
type inline []relation

// longNumbers are numbers that need lines of their own.
type longNumbers []definition

type table struct {
	label   label
	caption []span
	columns []column
	rows    [][][]span
}

type column struct {
	head  []span
	right bool // set flush right
}

type figure struct {
	label   label
	caption []span
	curve   int // index of the curve
}

// listing is a text that is shown as it is.
type listing string

// box is a paragraph in a frame, after a word in bold letters.
type box struct{ word, text string }

// say makes a sentence of words, formulas (expr.Node), references (label) and
// pieces made before.
func say(parts ...any) []span {
	var out []span
	for _, p := range parts {
		switch v := p.(type) {
		case string:
			out = append(out, span{words: v})
		case int:
			out = append(out, span{words: fmt.Sprint(v)})
		case expr.Node:
			out = append(out, span{math: v})
		case label:
			out = append(out, span{to: v})
		case []span:
			out = append(out, v...)
		default:
			panic(fmt.Sprintf("say: %T", p))
		}
	}
	return out
}

// number makes a piece of a decimal number.
func number(s string) []span { return []span{{number: s}} }

// symbols lists names as formulas: a, b and c.
func symbols(names []string) []span {
	var out []span
	for i, name := range names {
		switch {
		case i > 0 && i == len(names)-1:
			out = append(out, span{words: " and "})
		case i > 0:
			out = append(out, span{words: ", "})
		}
		out = append(out, span{math: expr.Sym(name)})
	}
	return out
}

// refer refers to labels that were numbered one after the other, such as
// "Table 2" or "Figures 1 to 3".
func refer(kind string, list []label) []span {
	if len(list) == 1 {
		return say(kind+"\u00a0", list[0])
	}
	between := " to "
	if len(list) == 2 {
		between = " and "
	}
	return say(kind+"s\u00a0", list[0], between, list[len(list)-1])
}

func newDocument() *document {
	return &document{numbers: map[label]string{}, counts: map[string]int{}}
}

// add adds a block, and gives it its number.
func (d *document) add(b any) {
	switch v := b.(type) {
	case heading:
		switch v.level {
		case 1:
			d.counts["section"]++
			d.counts["part"] = 0
			d.numbers[v.label] = fmt.Sprint(d.counts["section"])
		case 2:
			d.counts["part"]++
			d.numbers[v.label] = fmt.Sprintf("%d.%d", d.counts["section"], d.counts["part"])
		}
	case table:
		d.counts["table"]++
		d.numbers[v.label] = fmt.Sprint(d.counts["table"])
	case figure:
		d.counts["figure"]++
		d.numbers[v.label] = fmt.Sprint(d.counts["figure"])
	case equations:
		if len(v) == 0 {
			return
		}
	}
	d.blocks = append(d.blocks, b)
}

// section begins a section.
func (d *document) section(text string, l label) { d.add(heading{1, text, l}) }

// part begins a part of a section.
func (d *document) part(text string, l label) { d.add(heading{2, text, l}) }

// text adds a paragraph; see say.
func (d *document) text(parts ...any) { d.add(paragraph{text: say(parts...)}) }
