package main

import (
	"context"
	"fmt"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

const (
	// mostWorkedOrder is the order up to which the working is written out.
	mostWorkedOrder = 6
	// mostWorkedLines is the length of a working that is written out, in lines;
	// some six pages.
	mostWorkedLines = 240
)

// work derives the working where the order allows it.
func (r *report) work(ctx context.Context) error {
	n := order(r.response)
	if n > mostWorkedOrder {
		r.noWorking = fmt.Sprintf("The working is left out: the order of the model is %d, and the working is written out up to order %d.", n, mostWorkedOrder)
		return nil
	}
	steps, err := r.response.Working(ctx)
	if err != nil {
		return err
	}
	lines := 0.0
	for i, s := range steps {
		for j, p := range s.Passages {
			steps[i].Passages[j] = r.withNames(p)
		}
		lines += stepLines(s)
	}
	if lines > mostWorkedLines {
		r.noWorking = "The working is left out: it would take more than six pages."
		return nil
	}
	r.steps = steps
	return nil
}

// withNames returns a passage with names for long roots.
func (r *report) withNames(p linsys.Passage) linsys.Passage {
	var out linsys.Passage
	for _, x := range p.Text {
		if x.Math != nil {
			x.Math = r.short.roots(x.Math)
		}
		out.Text = append(out.Text, x)
	}
	for _, f := range p.Formulas {
		out.Formulas = append(out.Formulas, expr.Equation{Left: r.short.roots(f.Left), Right: r.short.roots(f.Right)})
	}
	return out
}

// stepLines estimates the length of a step.
func stepLines(s linsys.Step) float64 {
	lines := 3.0
	for _, p := range s.Passages {
		lines += 1.5
		if !fits(p) {
			continue
		}
		for _, f := range p.Formulas {
			lines += height(f.Right) + float64(int((width(f.Left)+width(f.Right))/rowWidth))*2
		}
	}
	return lines
}

// height estimates the height of a formula in lines.
func height(n expr.Node) float64 {
	h := 1.2
	switch v := n.(type) {
	case expr.Matrix:
		return 1.3 * float64(len(v.Rows))
	case expr.Quotient, expr.RootSum:
		h = 2
	}
	expr.Children(n, func(c expr.Node) bool {
		h = max(h, height(c))
		return true
	})
	return h
}

// fits tells whether the formulas of a passage can be set: lines end between the
// terms of sums alone, and long numbers would need names.
func fits(p linsys.Passage) bool {
	for _, f := range p.Formulas {
		if holdsLongNumber(f.Right) || !breaks(f.Left, rowWidth-4) || !breaks(f.Right, rowWidth-4-min(width(f.Left), rowWidth/3)) {
			return false
		}
	}
	return true
}

// breaks tells whether rows of a width can hold a formula.
func breaks(n expr.Node, most float64) bool {
	if width(n) <= most {
		return true
	}
	switch v := n.(type) {
	case expr.Sum:
		for _, t := range v.Terms {
			if !breaks(t, most-2.5) {
				return false
			}
		}
		return true
	case expr.Neg:
		return breaks(v.X, most-2)
	case expr.Product:
		for _, f := range v.Factors {
			if _, isSum := f.(expr.Sum); isSum && width(n)-width(f) < most/2 && breaks(f, most-(width(n)-width(f))-2) {
				return true
			}
		}
	}
	return false
}

// workingSection writes the steps up to the constants; what they add up to, and
// the check, have sections of their own.
func (r *report) workingSection(d *document) {
	d.section("Working", atWorking)
	if r.noWorking != "" {
		d.text(r.noWorking)
		return
	}
	checks := 0
	for _, s := range r.steps {
		checks += len(s.Verified)
		for _, p := range s.Passages {
			if !fits(p) {
				r.named(p) // the sentence below is to know whether there are names
			}
		}
	}
	var names []span
	if len(r.short.definitions) > 0 {
		names = say(" Section\u00a0", atNames, " tells what the names of long parts stand for.")
	}
	d.text("Each step was verified in exact arithmetic when it was written, by ", word(checks, "one identity", fmt.Sprintf("%d identities", checks)),
		" altogether. What the steps add up to is in Section\u00a0", atResponse, ", its check by substitution in Section\u00a0", atProof, ".", names)
	for i, s := range r.steps {
		if s.Kind == "response" || s.Kind == "check" {
			continue
		}
		d.part(s.Title, label(fmt.Sprintf("sec:step-%d", i+1)))
		r.passages(d, s)
	}
}

// checkPassages writes the check by substitution.
func (r *report) checkPassages(d *document) {
	for _, s := range r.steps {
		if s.Kind == "check" {
			r.passages(d, s)
		}
	}
}

// narrow is the width up to which a formula is displayed beside others.
const narrow = 16

// packs tells whether formulas are displayed side by side: short ones, vectors
// and matrices.
func packs(list []expr.Equation) bool {
	for _, f := range list {
		_, isMatrix := f.Right.(expr.Matrix)
		if w := width(f.Left) + width(f.Right); w > narrow && !(isMatrix && w < rowWidth-narrow) {
			return false
		}
	}
	return len(list) > 0
}

// passages writes the passages of a step. Those of a few words and one short
// formula share a line.
func (r *report) passages(d *document, s linsys.Step) {
	var row packed
	flush := func() {
		if len(row) > 0 {
			d.add(row)
		}
		row = nil
	}
	for _, p := range s.Passages {
		var text []span
		textWidth := 0.0
		for _, x := range p.Text {
			text = append(text, span{words: x.Words, math: x.Math})
			if textWidth += float64(len(x.Words)); x.Math != nil {
				textWidth += width(x.Math)
			}
		}
		shown := fits(p)
		if !shown {
			if named := r.named(p); fits(named) {
				p, shown = named, true
			}
		}
		if shown && len(p.Formulas) == 1 && packs(p.Formulas) && textWidth < narrow {
			row = append(row, packedItem{text, asRelation(p.Formulas[0])})
			continue
		}
		flush()
		if !shown {
			text = append(text, span{words: " [too long for a line, and left out]"})
		}
		if len(text) > 0 {
			d.add(paragraph{text: text})
		}
		if shown {
			d.add(display(p.Formulas))
		}
	}
	flush()
}

// named returns a passage with names for what no line holds: entries of matrices,
// coefficients and roots. Section Abbreviations tells what they stand for.
func (r *report) named(p linsys.Passage) linsys.Passage {
	out := p
	out.Formulas = nil
	for _, f := range p.Formulas {
		if m, ok := f.Right.(expr.Matrix); ok {
			f.Right = r.short.matrix(m)
		} else {
			f.Right = r.short.shorten(f.Right)
		}
		out.Formulas = append(out.Formulas, f)
	}
	return out
}

// display shows formulas side by side if they are short, or else one below the
// other.
func display(list []expr.Equation) any {
	var row packed
	var column equations
	for _, f := range list {
		row, column = append(row, packedItem{nil, asRelation(f)}), append(column, asRelation(f))
	}
	if len(list) > 1 && packs(list) {
		return row
	}
	return column
}

func asRelation(e expr.Equation) relation { return relation{left: e.Left, sign: "=", right: e.Right} }
