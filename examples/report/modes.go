package main

import (
	"context"
	"fmt"
	"math"
	"strconv"

	"example.org/closedform/examples/internal/roots"
	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// modeRow is a real eigenvalue, or a pair of conjugate ones.
type modeRow struct {
	factor       int // number of the factor, from 1
	factorNode   expr.Node
	multiplicity int
	exact        expr.Node // in radicals, the upper one of a pair; nil if there are none
	re, im       string    // decimals; im is not negative
	sigma, omega float64
	symbolic     string // the exact eigenvalue where it holds symbols
}

// modeRows returns the rows of the table of modes.
func modeRows(ctx context.Context, list []linsys.Mode) ([]modeRow, error) {
	var rows []modeRow
	for i, m := range list {
		for _, x := range m.Roots {
			row := modeRow{factor: i + 1, factorNode: m.Factor, multiplicity: m.Multiplicity}
			var err error
			if !x.IsNumber() {
				row.symbolic = x.String()
				if m.Degree <= 2 {
					if row.exact, err = expr.Parse(row.symbolic, unlimited); err != nil {
						return nil, err
					}
				}
				rows = append(rows, row)
				continue
			}
			if row.re, row.im, err = roots.Decimals(ctx, x, rootDigits); err != nil {
				return nil, err
			}
			row.sigma, _ = strconv.ParseFloat(row.re, 64)
			row.omega, _ = strconv.ParseFloat(row.im, 64)
			if row.omega < 0 {
				continue // the other one of a pair
			}
			if m.Degree <= 2 {
				if row.exact, err = expr.Parse(x.String(), unlimited); err != nil {
					return nil, err
				}
			}
			rows = append(rows, row)
		}
	}
	return rows, nil
}

// isolated tells whether the rounded values of numeric eigenvalues are intervals
// without a common point: of half a unit in the last digit to either side, in the
// real part or in the imaginary one.
func isolated(rows []modeRow) bool {
	reach := func(x float64) float64 {
		return 0.51 * math.Pow(10, math.Floor(math.Log10(max(math.Abs(x), 1e-300)))+1-rootDigits)
	}
	apart := func(x, y float64) bool { return math.Abs(x-y) > reach(x)+reach(y) }
	for i, a := range rows {
		for _, b := range rows[:i] {
			if a.symbolic == "" && b.symbolic == "" && !apart(a.sigma, b.sigma) && !apart(a.omega, b.omega) {
				return false
			}
		}
	}
	return true
}

// name returns the name that the report gives to the factor.
func (m modeRow) name() expr.Node { return expr.Sym(fmt.Sprintf("p_%d", m.factor)) }

// polynomial returns the name of the factor as a polynomial in s.
func (m modeRow) polynomial() expr.Node {
	return expr.Value{Name: fmt.Sprintf("p_%d", m.factor), At: expr.Sym("s")}
}

// unlimited reads what the library itself has written.
var unlimited = expr.Limits{Text: math.MaxInt32, Bits: math.MaxInt32, Terms: math.MaxInt32, Degree: math.MaxInt32}

// decimal writes the eigenvalue, or the pair.
func (m modeRow) decimal() string {
	switch {
	case m.symbolic != "":
		return ""
	case m.omega == 0:
		return m.re
	case m.sigma == 0:
		return "± " + m.im + " i"
	}
	return m.re + " ± " + m.im + " i"
}

// timeConstant returns -1/Re, "" if the mode neither decays nor grows.
func (m modeRow) timeConstant() string {
	if m.sigma == 0 {
		return ""
	}
	return short(-1 / m.sigma)
}

// damping returns the damping ratio of a pair, -Re/|root|.
func (m modeRow) damping() string {
	if m.omega == 0 {
		return ""
	}
	return short(-m.sigma / math.Hypot(m.sigma, m.omega))
}

// period returns the period of a pair, 2 pi/Im.
func (m modeRow) period() string {
	if m.omega == 0 {
		return ""
	}
	return short(2 * math.Pi / m.omega)
}

// remark says what the numbers mean.
func (m modeRow) remark() string {
	switch {
	case m.symbolic != "":
		return "depends on the symbols"
	case m.sigma > 0:
		return "grows"
	case m.sigma == 0 && m.omega > 0:
		return "undamped"
	case m.sigma == 0:
		return "constant"
	case m.omega > 0:
		return "damped"
	}
	return "decays"
}

// short writes a number with five significant digits.
func short(x float64) string { return strconv.FormatFloat(x+0, 'g', 5, 64) }
