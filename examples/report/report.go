package main

import (
	"context"
	"errors"
	"math/big"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

const (
	// valueDigits is how many digits of a value are given.
	valueDigits = 10
	// statesPerTable is how many columns of values fit on a page.
	statesPerTable = 4
	// rootDigits is how many digits of an eigenvalue are given.
	rootDigits = 8
)

// caution stands in every report.
const caution = "This report supports the responsible professional and does not replace " +
	"that person's judgement, nor the local code of practice. The formulas are proven for the model as " +
	"it is stated here; whether the model fits the plant is for the reader to decide."

// report is all that the files are written from.
type report struct {
	src      source
	response *linsys.Response
	goSource []byte
	modes    []modeRow
	// conditions are those of the model, then those of the formulas.
	conditions []string
	window     window
	values     []valueRow
	curves     []curve
	rounded    []string      // the states that are written with decimals
	steps      []linsys.Step // the working, or nil
	noWorking  string        // why there is none
	short      *shortener
	document   *document
}

// general tells whether constants or symbols are free: then there are no values.
func (r *report) general() bool { return len(r.response.Constants())+len(r.response.Parameters()) > 0 }

// valueRow holds the states at one time.
type valueRow struct {
	time   *big.Rat
	values []string
}

// derive does the mathematics, under assumptions on the symbols; nil for from or
// to stands for the default.
func derive(ctx context.Context, src source, from, to *big.Rat, assume ...string) (*report, error) {
	m, err := linsys.Read(src.text)
	if err != nil {
		return nil, err
	}
	if m, err = m.Assume(assume...); err != nil {
		var e *expr.Error
		if errors.As(err, &e) {
			return nil, expr.Errorf(e.Kind, expr.Pos{}, "-assume, column %d: %s", e.Pos.Column, e.Message)
		}
		return nil, err
	}
	names := append(m.States(), m.Variable())
	if len(m.States()) == 0 {
		return nil, &linsys.Error{Kind: expr.WrongShape, Message: "the model has no states to report on"}
	}
	for _, eq := range m.Definitions() {
		names = append(names, eq.Left.String())
	}
	names = append(names, m.Parameters()...)
	r := &report{src: src, short: newShortener(m.Variable(), names)}
	if r.response, err = m.ClosedForm(ctx); err != nil {
		return nil, err
	}
	if r.goSource, err = r.response.GoSource(ctx, linsys.GoOptions{Package: "response"}); err != nil {
		return nil, err
	}
	ofModel, ofFormulas, err := r.response.Conditions(ctx)
	if err != nil {
		return nil, err
	}
	r.conditions = append(ofModel, ofFormulas...)
	if r.modes, err = modeRows(ctx, r.response.Modes()); err != nil {
		return nil, err
	}
	if err := r.work(ctx); err != nil {
		return nil, err
	}
	if !r.general() {
		if err := r.evaluate(ctx, from, to); err != nil {
			return nil, err
		}
	}
	r.document, err = r.compose(ctx)
	return r, err
}

// evaluate chooses the range of time, and computes values and curves in it.
func (r *report) evaluate(ctx context.Context, from, to *big.Rat) error {
	m := r.response.Model()
	var steady []expr.Node
	for _, name := range r.response.States() {
		steady = append(steady, r.response.Steady(name).Node())
	}
	origin, err := algebra.ParseRat(m.Origin().String())
	if err != nil {
		return expr.Errorf(expr.OutsideClass, expr.Pos{}, "the side conditions hold at the time %s; a report has values and curves from a rational time on", m.Origin())
	}
	if r.window, err = chooseWindow(r.modes, inputFrequencies(steady, m.Variable()), origin.Big(), from, to); err != nil {
		return err
	}
	for _, share := range []string{"0", "1/100", "1/20", "1/10", "1/5", "1/2", "3/4", "1"} {
		x, _ := algebra.ParseRat(share)
		row := valueRow{time: r.window.at(x.Big())}
		if row.values, err = r.response.At(ctx, row.time, valueDigits); err != nil {
			return err
		}
		r.values = append(r.values, row)
	}
	for _, name := range r.response.States() {
		c, err := sample(ctx, name, r.response.State(name), r.window)
		if err != nil {
			return err
		}
		r.curves = append(r.curves, c)
	}
	return nil
}

// title is the first sentence of the notes.
func (r *report) title() string {
	if first, _, _ := strings.Cut(r.src.notes(), ". "); first != "" {
		return strings.TrimSuffix(first, ".")
	}
	return "Response of a linear model"
}

// further is the rest of the notes.
func (r *report) further() string {
	_, rest, _ := strings.Cut(r.src.notes(), ". ")
	return rest
}

// timeText writes a time: as a decimal number if it is a short one.
func timeText(x *big.Rat) string {
	if n, exact := x.FloatPrec(); exact && n <= 12 {
		return x.FloatString(n)
	}
	return x.RatString()
}
