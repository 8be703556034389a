package main

import (
	"fmt"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

const (
	// rowWidth is what fits on a line of the printed page, in digits.
	rowWidth = 72
	// longNumber is how many digits a number in a formula may have; longer
	// ones get a name.
	longNumber = 30
)

// definition says what a name in a formula stands for.
type definition struct {
	left  expr.Node
	right expr.Node
}

// shortener replaces the parts of formulas that no line can hold by names:
// polynomials in sums over roots, long numbers, roots and coefficients. Equal
// parts share a name.
type shortener struct {
	variable    string // what holds it is no coefficient
	taken       map[string]bool
	definitions []definition
	names       map[string]expr.Node // by kind and text of what they stand for
	counts      map[string]int
}

// newShortener returns a shortener whose names are not among those taken. Free
// constants have no underscore, as its names do.
func newShortener(variable string, taken []string) *shortener {
	s := &shortener{variable: variable, taken: map[string]bool{}, names: map[string]expr.Node{}, counts: map[string]int{}}
	for _, name := range taken {
		s.taken[name] = true
	}
	return s
}

// name returns the name for a part; arg is the argument of a polynomial, or nil.
func (s *shortener) name(letter string, part, arg expr.Node) expr.Node {
	key := letter + part.String()
	if n, ok := s.names[key]; ok {
		return n
	}
	name := ""
	for name == "" || s.taken[name] {
		s.counts[letter]++
		name = fmt.Sprintf("%s_%d", letter, s.counts[letter])
	}
	n := expr.Sym(name)
	if arg != nil {
		n = expr.Value{Name: name, At: arg}
	}
	s.names[key] = n
	place := len(s.definitions)
	s.definitions = append(s.definitions, definition{left: n})
	switch v := part.(type) {
	case expr.Number:
	case expr.Call: // a root
		part = expr.Call{Func: v.Func, Arg: s.shorten(v.Arg)}
	default:
		part = s.shorten(part)
	}
	s.definitions[place].right = part
	return n
}

// matrix returns a matrix with names for entries that are wider than a column.
func (s *shortener) matrix(m expr.Matrix) expr.Matrix {
	out := expr.Matrix{}
	for _, row := range m.Rows {
		most := (rowWidth-narrow)/float64(len(row)) - 2
		cells := make([]expr.Node, len(row))
		for j, cell := range row {
			if cells[j] = cell; width(cell) > most {
				cells[j] = s.name("K", cell, nil)
			}
		}
		out.Rows = append(out.Rows, cells)
	}
	return out
}

// shorten returns n with names for what is too long.
func (s *shortener) shorten(n expr.Node) expr.Node {
	switch v := n.(type) {
	case expr.Number:
		if numberWidth(v.Val) > longNumber {
			if v.Val.Sign() < 0 {
				return expr.Neg{X: s.name("K", expr.Num(v.Val.Neg()), nil)}
			}
			return s.name("K", n, nil)
		}
	case expr.Product:
		if width(n) <= rowWidth {
			break
		}
		out := make([]expr.Node, len(v.Factors))
		for i, f := range v.Factors {
			out[i] = s.shorten(f)
			if _, isSum := out[i].(expr.Sum); isSum && width(out[i]) > rowWidth/2 && s.isCoefficient(f) {
				out[i] = s.name("K", f, nil)
			}
		}
		return expr.Product{Factors: out}
	case expr.Call:
		if isLongRoot(v) {
			return s.name("R", v, nil)
		}
	case expr.RootSum:
		if width(n) <= rowWidth && !holdsLongNumber(n) {
			return n
		}
		z := expr.Sym(v.Var)
		poly := v.Poly
		if width(poly) > rowWidth/3 {
			poly = s.name("P", poly, z)
		}
		return expr.RootSum{Var: v.Var, Poly: poly, Body: s.shortenBody(v.Body, z)}
	}
	return within(n, s.shorten)
}

// isLongRoot tells whether a square root gets a name.
func isLongRoot(v expr.Call) bool { return v.Func == "sqrt" && width(v.Arg) > rowWidth/3 }

// isCoefficient tells whether the time and the roots of sums do not occur.
func (s *shortener) isCoefficient(n expr.Node) bool {
	switch v := n.(type) {
	case expr.Symbol:
		return v.Name != s.variable
	case expr.Value, expr.RootSum:
		return false
	}
	free := true
	expr.Children(n, func(c expr.Node) bool {
		free = free && s.isCoefficient(c)
		return free
	})
	return free
}

// roots returns n with names for long square roots, and all else as it is.
func (s *shortener) roots(n expr.Node) expr.Node {
	if v, ok := n.(expr.Call); ok && isLongRoot(v) {
		return s.name("R", v, nil)
	}
	return within(n, s.roots)
}

// within returns n with f of its parts; values and sums over roots stay.
func within(n expr.Node, f func(expr.Node) expr.Node) expr.Node {
	each := func(list []expr.Node) []expr.Node {
		out := make([]expr.Node, len(list))
		for i, x := range list {
			out[i] = f(x)
		}
		return out
	}
	switch v := n.(type) {
	case expr.Sum:
		return expr.Sum{Terms: each(v.Terms)}
	case expr.Product:
		return expr.Product{Factors: each(v.Factors)}
	case expr.Quotient:
		return expr.Quotient{Num: f(v.Num), Den: f(v.Den)}
	case expr.Power:
		return expr.Power{Base: f(v.Base), Exp: v.Exp}
	case expr.Neg:
		return expr.Neg{X: f(v.X)}
	case expr.Call:
		return expr.Call{Func: v.Func, Arg: f(v.Arg)}
	case expr.Matrix:
		out := expr.Matrix{}
		for _, row := range v.Rows {
			out.Rows = append(out.Rows, each(row))
		}
		return out
	}
	return n
}

// shortenBody shortens the body of a sum over roots: numerator and denominator
// get names, the exponential stays.
func (s *shortener) shortenBody(n, z expr.Node) expr.Node {
	switch v := n.(type) {
	case expr.Neg:
		return expr.Neg{X: s.shortenBody(v.X, z)}
	case expr.Quotient:
		return expr.Quotient{Num: s.shortenBody(v.Num, z), Den: s.name("D", v.Den, z)}
	case expr.Product:
		var plain, exps []expr.Node
		for _, f := range v.Factors {
			if c, ok := f.(expr.Call); ok && c.Func == "exp" {
				exps = append(exps, f)
			} else {
				plain = append(plain, f)
			}
		}
		if len(plain) == 0 || (len(plain) == 1 && width(plain[0]) < 12) {
			return n
		}
		top := plain[0]
		if len(plain) > 1 {
			top = expr.Product{Factors: plain}
		}
		return expr.Product{Factors: append([]expr.Node{s.name("N", top, z)}, exps...)}
	}
	return n
}

func holdsLongNumber(n expr.Node) bool {
	if v, ok := n.(expr.Number); ok {
		return numberWidth(v.Val) > longNumber
	}
	found := false
	expr.Children(n, func(c expr.Node) bool {
		found = found || holdsLongNumber(c)
		return !found
	})
	return found
}

func numberWidth(x algebra.Rat) float64 {
	return float64(max(len(x.Num().String()), len(x.Den().String())))
}

// width estimates how wide a formula is set, in digits.
func width(n expr.Node) float64 {
	sum := func(list []expr.Node, between float64) float64 {
		total := between * float64(len(list)-1)
		for _, x := range list {
			total += width(x)
			if _, isSum := x.(expr.Sum); isSum {
				total += 2
			}
		}
		return total
	}
	switch v := n.(type) {
	case expr.Number:
		return numberWidth(v.Val)
	case expr.Decimal:
		return float64(len(v.Text))
	case expr.Matrix:
		total := 1.0
		for j := range v.Rows[0] {
			column := 0.0
			for _, row := range v.Rows {
				column = max(column, width(row[j]))
			}
			total += column + 2
		}
		return total
	case expr.Symbol:
		return nameWidth(v.Name)
	case expr.Value:
		w := nameWidth(v.Name) + float64(v.Order)/2
		if v.At != nil {
			w += 2 + width(v.At)
		}
		return w
	case expr.Sum:
		return sum(v.Terms, 2.5)
	case expr.Product:
		return sum(v.Factors, 0.7)
	case expr.Quotient:
		return max(width(v.Num), width(v.Den)) + 0.5
	case expr.Power:
		return width(v.Base) + 0.7*width(v.Exp)
	case expr.Neg:
		return 2 + width(v.X)
	case expr.Call:
		switch v.Func {
		case "exp":
			return 1 + 0.7*width(v.Arg)
		case "sqrt":
			return 2 + width(v.Arg)
		}
		return float64(len(v.Func)) + 2 + width(v.Arg)
	case expr.RootSum:
		return max(3, 0.7*(width(v.Poly)+5)) + width(v.Body)
	}
	return 0
}

func nameWidth(name string) float64 {
	w, size := 0.0, 1.0
	for _, c := range name {
		switch {
		case c == '_':
			size = 0.7
		case c > 0x3ff: // neither Western nor Greek: shown by its code point
			w += 9 * size
		default:
			w += 1.1 * size
		}
	}
	return w
}

// rows writes n as rows of LaTeX no wider than most, broken between the terms
// of sums. All rows but the first begin with a sign.
func rows(n expr.Node, most float64) []string {
	if width(n) <= most {
		return []string{expr.LaTeX(n)}
	}
	switch v := n.(type) {
	case expr.Sum:
		return sumRows(v.Terms, most)
	case expr.Neg:
		out := rows(group(v.X), most-2)
		out[0] = "-" + out[0]
		return out
	case expr.Product:
		// The rows of the longest sum among the factors, in parentheses.
		longest, at := 0.0, -1
		for i, f := range v.Factors {
			if _, isSum := f.(expr.Sum); isSum && width(f) > longest {
				longest, at = width(f), i
			}
		}
		if at < 0 {
			break
		}
		before, after := factorsLaTeX(v.Factors[:at]), factorsLaTeX(v.Factors[at+1:])
		out := rows(v.Factors[at], max(20, most-width(n)+longest-2))
		out[0] = before + `\Bigl(` + out[0]
		out[len(out)-1] += `\Bigr)` + after
		return out
	}
	return []string{expr.LaTeX(n)}
}

// negated returns the expression that stands behind the minus sign of a term, if
// it has one.
func negated(n expr.Node) (expr.Node, bool) {
	switch v := n.(type) {
	case expr.Neg:
		return group(v.X), true
	case expr.Number:
		if v.Val.Sign() < 0 {
			return expr.Num(v.Val.Neg()), true
		}
	}
	return nil, false
}

// group makes a sum a factor, so that it is written in parentheses.
func group(n expr.Node) expr.Node {
	if _, isSum := n.(expr.Sum); isSum {
		return expr.Product{Factors: []expr.Node{n}}
	}
	return n
}

func factorsLaTeX(list []expr.Node) string {
	switch len(list) {
	case 0:
		return ""
	case 1:
		if _, isSum := list[0].(expr.Sum); !isSum {
			return expr.LaTeX(list[0]) + " "
		}
	}
	// A factor 1 more makes the writer put parentheses where they are due.
	return strings.TrimPrefix(expr.LaTeX(expr.Product{Factors: append([]expr.Node{expr.Sym("#")}, list...)}), expr.LaTeX(expr.Sym("#"))) + " "
}

// sumRows fills rows with terms.
func sumRows(terms []expr.Node, most float64) []string {
	var out []string
	row, used := "", 0.0
	flush := func() {
		if row != "" {
			out = append(out, row)
		}
		row, used = "", 0
	}
	for i, t := range terms {
		sign := "+ "
		if m, ok := negated(t); ok {
			sign, t = "- ", m
		}
		if i == 0 {
			sign = strings.TrimPrefix(sign, "+ ")
		}
		w := width(t) + 2.5
		if used > 0 && used+w > most {
			flush()
		}
		if w <= most {
			row += sign + expr.LaTeX(t) + " "
			used += w
			continue
		}
		parts := rows(t, most-2.5)
		parts[0] = sign + parts[0]
		out = append(out, parts...)
	}
	flush()
	return out
}
