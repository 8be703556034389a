package expr

import (
	"context"
	"fmt"
	"strings"
)

// goCode is an expression with the operation that it stands for. A factor with no
// text is 1 in the source.
type goCode struct {
	text string
	op   goOp
}

// goSum is a sum in the making.
type goSum struct{ b strings.Builder }

func (s *goSum) add(minus bool, term string) {
	switch {
	case minus && s.b.Len() == 0:
		s.b.WriteString("-")
	case minus:
		s.b.WriteString(" - ")
	case s.b.Len() > 0:
		s.b.WriteString(" + ")
	}
	s.b.WriteString(term)
}

func (s *goSum) String() string {
	if s.b.Len() == 0 {
		return "0"
	}
	return s.b.String()
}

// goSumCode is a sum in the making with its operation.
type goSumCode struct {
	goSum
	op goOp
}

func (s *goSumCode) addCode(minus bool, c goCode) {
	s.add(minus, c.text)
	s.addSilently(minus, c.op)
}

// addSilently adds what the source leaves out.
func (s *goSumCode) addSilently(minus bool, op goOp) {
	s.op.kind = goAdd
	s.op.args, s.op.minus = append(s.op.args, op), append(s.op.minus, minus)
}

func (s *goSumCode) code() goCode {
	if len(s.op.args) == 0 {
		s.op = goOp{kind: goConstant, number: goConst{exact: true}}
	}
	return goCode{s.String(), s.op}
}

func goProductOp(args ...goOp) goOp { return goOp{kind: goMultiply, args: args} }

// image returns the expression of the next image, entering its rates.
func (g *goWriter[E]) image(ctx context.Context) (string, goOp, error) {
	terms, err := g.terms(ctx, g.done)
	g.done++
	if err != nil {
		return "", goOp{}, err
	}
	c := g.sum(terms).code()
	return c.text, c.op, nil
}

// timeCode is the local time.
func (g *goWriter[E]) timeCode() goCode { return goCode{g.time, goOp{kind: goTime}} }

// sum returns the sum of terms.
func (g *goWriter[E]) sum(terms []goTerm) *goSumCode {
	sum := &goSumCode{}
	for _, t := range terms {
		r := t.rate
		addWave(sum, t.cos, t.sin, g.timeCode(), r, fmt.Sprintf("e%d", r.id), fmt.Sprintf("c%d", r.id), fmt.Sprintf("s%d", r.id))
	}
	return sum
}

// addWave adds two polynomials in x times the exponential and the cosine or sine of
// a rate.
func addWave(sum *goSumCode, cos, sin []goConst, x goCode, r *goRate, exp, cosine, sine string) {
	e := goCode{op: goOp{kind: goExp, rate: r}}
	var growth []goCode
	if r.re.x != 0 {
		e.text = exp
	}
	if !r.re.isZero() {
		growth = append(growth, e)
	}
	if r.im.x == 0 {
		addProduct(sum, cos, x, growth...)
		if !r.im.exact {
			sum.addSilently(false, goOp{kind: goUnknown})
		}
		return
	}
	c, s := goCode{cosine, goOp{kind: goCos, rate: r}}, goCode{sine, goOp{kind: goSin, rate: r}}
	if e.text == "" || allZero(cos) || allZero(sin) {
		addProduct(sum, cos, x, append(growth, c)...)
		addProduct(sum, sin, x, append(growth, s)...)
		return
	}
	var inner goSumCode
	addProduct(&inner, cos, x, c)
	addProduct(&inner, sin, x, s)
	in := inner.code()
	sum.addCode(false, goCode{e.text + "*(" + in.text + ")", goProductOp(e.op, in.op)})
}

func allZero(c []goConst) bool {
	for _, n := range c {
		if n.x != 0 {
			return false
		}
	}
	return true
}

// addProduct adds a polynomial in x, in Horner's form, times the factors.
func addProduct(sum *goSumCode, c []goConst, x goCode, factors ...goCode) {
	for i, n := range c {
		if n.x == 0 && !n.exact {
			args := []goOp{{kind: goConstant, number: goConst{x: 1, exact: true}}}
			for range i {
				args = append(args, x.op)
			}
			for _, f := range factors {
				args = append(args, f.op)
			}
			sum.addSilently(false, goOp{kind: goLost, args: []goOp{goProductOp(args...)}})
		}
	}
	if allZero(c) {
		return
	}
	for c[len(c)-1].x == 0 {
		c = c[:len(c)-1]
	}
	last := c[len(c)-1]
	minus, poly := last.x < 0, last.abs().code()
	for i := len(c) - 2; i >= 0; i-- {
		if strings.Contains(poly.text, " ") {
			poly.text = "(" + poly.text + ")"
		}
		if poly.text == "1" {
			poly = goCode{x.text, goProductOp(poly.op, x.op)}
		} else {
			poly = goCode{x.text + "*" + poly.text, goProductOp(x.op, poly.op)}
		}
		if c[i].x != 0 {
			var s goSumCode
			s.addCode(c[i].x < 0, c[i].abs().code())
			s.addCode(minus, poly)
			minus, poly = false, s.code()
		}
	}
	var parts []string
	args := []goOp{poly.op}
	for _, f := range factors {
		args = append(args, f.op)
		if f.text != "" {
			parts = append(parts, f.text)
		}
	}
	if strings.Contains(poly.text, " ") && (minus || len(parts) > 0) {
		poly.text = "(" + poly.text + ")"
	}
	if poly.text != "1" || len(parts) == 0 {
		parts = append([]string{poly.text}, parts...)
	}
	sum.addCode(minus, goCode{strings.Join(parts, "*"), goProductOp(args...)})
}

// code writes a constant.
func (n goConst) code() goCode { return goCode{goFloat(n.x), goOp{kind: goConstant, number: n}} }

// factors returns the definitions of the exponentials, sines and cosines that
// occur in the expressions.
func (g *goWriter[E]) factors(all string) []string {
	var lines []string
	for _, r := range g.rates {
		lines = append(lines, waveLines(all, g.time, r, fmt.Sprintf("e%d", r.id), fmt.Sprintf("c%d", r.id), fmt.Sprintf("s%d", r.id))...)
	}
	return lines
}

// waveLines defines the exponential, cosine and sine of a rate, as far as they
// occur.
func waveLines(all, time string, r *goRate, exp, cosine, sine string) []string {
	var lines []string
	if usesName(all, exp) {
		lines = append(lines, fmt.Sprintf("%s := math.Exp(%s)", exp, timesText(r.re.x, time)))
	}
	sin, cos := usesName(all, sine), usesName(all, cosine)
	switch {
	case sin && cos:
		lines = append(lines, fmt.Sprintf("%s, %s := math.Sincos(%s)", sine, cosine, timesText(r.im.x, time)))
	case cos:
		lines = append(lines, fmt.Sprintf("%s := math.Cos(%s)", cosine, timesText(r.im.x, time)))
	case sin:
		lines = append(lines, fmt.Sprintf("%s := math.Sin(%s)", sine, timesText(r.im.x, time)))
	}
	return lines
}

// timesText returns x times the time.
func timesText(x float64, time string) string {
	switch x {
	case 1:
		return time
	case -1:
		return "-" + time
	}
	return goFloat(x) + " * " + time
}

// usesName tells whether an identifier occurs in an expression.
func usesName(src, name string) bool {
	for at := 0; ; {
		i := strings.Index(src[at:], name)
		if i < 0 {
			return false
		}
		start, end := at+i, at+i+len(name)
		if (start == 0 || !isNamePart(rune(src[start-1]))) && (end == len(src) || !isNamePart(rune(src[end]))) {
			return true
		}
		at = start + 1
	}
}
