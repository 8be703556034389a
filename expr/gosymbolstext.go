package expr

import (
	"context"
	"fmt"
	"math/big"
	"slices"
	"strings"

	"example.org/closedform/algebra"
)

// goBody writes the statements of a generated function. A value that is used
// more than once becomes a variable; until all uses are known it is a mark in
// the text.
type goBody struct {
	terms  int               // of the elements written so far
	fields map[string]string // the names of symbols in Go
	values []goValue
	place  map[string]int // of a text among the values
	names  map[string]int // variables of each kind
	zeros  []goZero       // what is divided by
}

// goValue is a value of the body.
type goValue struct {
	kind string // the start of the variable's name
	text string
	own  bool // has a variable of its own even if used once
	uses int
	name string
}

// goZero is an element that must not be zero, a polynomial in the variables of a
// display.
type goZero struct {
	d *display
	p algebra.Fraction
}

func newGoBody(fields map[string]string) *goBody {
	return &goBody{fields: fields, place: map[string]int{}, names: map[string]int{}}
}

const markOpen, markClose = "\x01", "\x02"

// value returns the mark of a value with the given text.
func (b *goBody) value(kind, text string, own bool) string {
	i, ok := b.place[text]
	if !ok {
		i = len(b.values)
		b.place[text] = i
		b.values = append(b.values, goValue{kind: kind, text: text})
	}
	b.values[i].own = b.values[i].own || own
	return fmt.Sprintf("%s%d%s", markOpen, i, markClose)
}

// finish returns the lines that define the variables, and the texts with the
// marks replaced.
func (b *goBody) finish(texts []string) (lines, out []string) {
	reached := make([]bool, len(b.values))
	var count func(text string)
	count = func(text string) {
		eachMark(text, func(i int) string {
			b.values[i].uses++
			if !reached[i] {
				reached[i] = true
				count(b.values[i].text)
			}
			return ""
		})
	}
	for _, t := range texts {
		count(t)
	}
	var expand func(text string) string
	expand = func(text string) string {
		return eachMark(text, func(i int) string {
			v := b.values[i]
			if v.name != "" {
				return v.name
			}
			inner := expand(v.text)
			if v.kind == "sum" || v.kind == "part" && strings.Contains(inner, " ") {
				inner = "(" + inner + ")"
			}
			return inner
		})
	}
	// A text refers to earlier values only.
	for i := range b.values {
		v := &b.values[i]
		if !reached[i] || !v.own && v.uses < 2 {
			continue
		}
		text := expand(v.text)
		b.names[v.kind]++
		v.name = fmt.Sprintf("%s%d", v.kind, b.names[v.kind])
		lines = append(lines, v.name+" := "+text)
	}
	for _, t := range texts {
		out = append(out, expand(t))
	}
	return lines, out
}

// eachMark replaces the marks in a text.
func eachMark(text string, by func(i int) string) string {
	var out strings.Builder
	for {
		before, rest, ok := strings.Cut(text, markOpen)
		out.WriteString(before)
		if !ok {
			return out.String()
		}
		number, after, _ := strings.Cut(rest, markClose)
		i := 0
		for _, r := range number {
			i = 10*i + int(r-'0')
		}
		out.WriteString(by(i))
		text = after
	}
}

// goProduct is a product in the making, 0 where zero is set.
type goProduct struct {
	zero, minus bool
	above       []string
	below       []string
}

func (p goProduct) times(factors ...string) goProduct {
	p.above = append(slices.Clone(p.above), factors...)
	return p
}

// size writes the product without its sign.
func (p goProduct) size() string {
	above := slices.DeleteFunc(slices.Clone(p.above), func(s string) bool { return s == "1" })
	s := strings.Join(above, "*")
	switch {
	case p.zero:
		return "0"
	case s == "":
		s = "1"
	}
	if len(p.below) > 0 {
		s = floatLiteral(s) // 1/3 would be a quotient of integers
	}
	switch len(p.below) {
	case 0:
		return s
	case 1:
		return s + "/" + p.below[0]
	}
	return s + "/(" + strings.Join(p.below, "*") + ")"
}

// floatLiteral writes an integer literal as one of floating point.
func floatLiteral(s string) string {
	if strings.Trim(s, "0123456789") == "" {
		return s + ".0"
	}
	return s
}

func (p goProduct) String() string {
	if p.minus && !p.zero {
		return "-" + p.size()
	}
	return p.size()
}

// mostSource bounds the terms in the expressions of a generated function: about
// 200 kB of source.
const mostSource = 8000

// element writes an element of a field: numerator and denominator in factors,
// so that differences that are factors do not cancel, and what is free of
// symbols as the nearest float64.
func (b *goBody) element(k *Constants, x Constant) (goProduct, error) {
	if k.IsZero(x) {
		return goProduct{zero: true}, nil
	}
	if k.IsNumber(x) {
		if r, ok := k.Rational(x); ok {
			return goRational(r)
		}
		v, err := (&goWriter[Constant]{k: k}).float(x)
		return goNumber(v), err
	}
	if b.terms += x.Size(); b.terms > mostSource {
		return goProduct{}, Errorf(LimitExceeded, Pos{}, "Go source with more than %d terms in the symbols", mostSource)
	}
	d := k.shown.get(k)
	num, den := d.to.Parts(d.element(x))
	var out goProduct
	r := algebra.RatFromInt(1)
	var numbers []goFactor // factors without symbols
	exponent := k.Zero()
	for side, p := range []algebra.Fraction{num, den} {
		content, factors, err := d.factors(p)
		if err != nil {
			return out, err
		}
		if side == 1 {
			content = content.Inv()
			for i := range factors {
				factors[i].exp = -factors[i].exp
			}
		}
		r = r.Mul(content)
		for _, f := range factors {
			if d.isNumber(f.p) {
				numbers = append(numbers, f)
				continue
			}
			if i := d.variable(f.p); i >= 0 && d.vars[i].fn == "exp" {
				exponent = k.Add(exponent, k.Mul(k.FromInt(int64(f.exp)), d.vars[i].arg))
				continue
			}
			text, err := b.factor(d, f.p)
			if err != nil {
				return out, err
			}
			if f.exp > 0 {
				out.above = append(out.above, powerText(text, f.exp)...)
			} else {
				out.below = append(out.below, powerText(text, -f.exp)...)
				b.zeros = append(b.zeros, goZero{d, f.p})
			}
		}
	}
	if !k.IsZero(exponent) {
		text, err := b.call(k, "math.Exp", "exp", exponent)
		if err != nil {
			return out, err
		}
		out.above = append(out.above, text)
	}
	number, err := goRational(r)
	if err == nil && len(numbers) > 0 {
		var v float64
		v, err = d.float(func(prec uint) algebra.Ball {
			ball := algebra.BallFromRat(r.Big(), prec)
			for _, f := range numbers {
				y := d.ball(f.p.Numerator(), prec)
				for range max(f.exp, -f.exp) {
					if f.exp > 0 {
						ball = ball.Mul(y, prec)
					} else {
						ball = ball.Quo(y, prec)
					}
				}
			}
			return ball
		})
		number = goNumber(v)
	}
	out.zero = number.zero
	out.minus = number.minus
	out.above = append(number.above, out.above...)
	out.below = append(number.below, out.below...)
	return out, err
}

// goRational writes a rational number: as a quotient of integers where float64
// holds both.
func goRational(r algebra.Rat) (goProduct, error) {
	if num, den := r.Num(), r.Den(); num.BitLen() <= 53 && den.BitLen() <= 53 {
		n, _ := new(big.Float).SetInt(num).Float64()
		m, _ := new(big.Float).SetInt(den).Float64()
		p := goNumber(n)
		if m != 1 {
			p.below = []string{goFloat(m)}
		}
		return p, nil
	}
	v, _ := r.Big().Float64()
	return goNumber(v), finite([]float64{v})
}

func goNumber(v float64) goProduct {
	p := goProduct{zero: v == 0, minus: v < 0}
	if v < 0 {
		v = -v
	}
	if v != 1 {
		p.above = []string{goFloat(v)}
	}
	return p
}

// powerText returns the factors of a power.
func powerText(text string, n int) []string {
	if n > 8 {
		return []string{fmt.Sprintf("math.Pow(%s, %d)", text, n)}
	}
	return slices.Repeat([]string{text}, n)
}

// factor writes an irreducible polynomial, not a number.
func (b *goBody) factor(d *display, p algebra.Fraction) (string, error) {
	if i := d.variable(p); i >= 0 {
		return b.variable(d, i)
	}
	text, err := b.sum(d, p)
	return b.value("sum", text, false), err
}

// variable writes a variable of the display.
func (b *goBody) variable(d *display, i int) (string, error) {
	v := d.vars[i]
	switch {
	case v.generator != nil:
		return b.call(d.from, "math.Sqrt", "root", v.generator.arg)
	case v.fn != "":
		return b.call(d.from, map[string]string{"exp": "math.Exp", "cos": "math.Cos", "sin": "math.Sin"}[v.fn], v.fn, v.arg)
	}
	field, ok := b.fields[v.name]
	if !ok {
		return "", Errorf(OutsideClass, Pos{}, "the symbol %s is not among the parameters", v.name)
	}
	return "p." + field, nil
}

// call writes a function of an element.
func (b *goBody) call(k *Constants, fn, kind string, arg Constant) (string, error) {
	p, err := b.element(k, arg)
	return b.value(kind, fn+"("+p.String()+")", true), err
}

// sum writes a polynomial term by term; coefficients without symbols are one
// number.
func (b *goBody) sum(d *display, p algebra.Fraction) (string, error) {
	type monomial struct {
		exps  []int
		terms []algebra.Term // the numbers
	}
	var list []*monomial
	byKey := map[string]*monomial{}
	for _, t := range d.ordered(p) {
		exps, number := slices.Clone(t.Exp[1:]), slices.Clone(t.Exp)
		for i := range exps {
			if d.isNumberVariable(i) {
				exps[i] = 0
			} else {
				number[i+1] = 0
			}
		}
		key := fmt.Sprint(exps)
		m := byKey[key]
		if m == nil {
			m = &monomial{exps: exps}
			byKey[key] = m
			list = append(list, m)
		}
		m.terms = append(m.terms, algebra.Term{Coef: t.Coef, Exp: number})
	}
	var sum goSum
	for _, m := range list {
		v, err := d.float(func(prec uint) algebra.Ball { return d.ball(m.terms, prec) })
		if err != nil {
			return "", err
		}
		product := goNumber(v)
		for i, e := range m.exps {
			if e == 0 {
				continue
			}
			text, err := b.variable(d, i)
			if err != nil {
				return "", err
			}
			product = product.times(powerText(text, e)...)
		}
		if !product.zero {
			sum.add(product.minus, product.size())
		}
	}
	return sum.String(), nil
}

// goFactor is a power of a polynomial.
type goFactor struct {
	p   algebra.Fraction
	exp int
}

// factors returns a polynomial as a rational number times factors that are
// written with a positive term first.
func (d *display) factors(p algebra.Fraction) (algebra.Rat, []goFactor, error) {
	c, list := algebra.RatFromInt(1), []algebra.Power{{Base: p, Exp: 1}}
	if p.Size() <= mostFactored {
		var err error
		if c, list, err = d.to.Factors(context.Background(), p); err != nil {
			return c, nil, err
		}
	}
	var out []goFactor
	for _, f := range list {
		if d.writtenNegative(f.Base) {
			f.Base = d.to.Neg(f.Base)
			if f.Exp%2 == 1 {
				c = c.Neg()
			}
		}
		out = append(out, goFactor{f.Base, f.Exp})
	}
	return c, out, nil
}

// isNumberVariable tells whether a variable of the display is free of symbols.
func (d *display) isNumberVariable(i int) bool {
	switch v := d.vars[i]; {
	case v.generator != nil:
		return d.from.IsNumber(v.generator.arg)
	case v.fn != "":
		return d.from.IsNumber(v.arg)
	default:
		return v.name == "pi"
	}
}

func (d *display) isNumber(p algebra.Fraction) bool {
	for _, t := range p.Numerator() {
		for i, e := range t.Exp[1:] {
			if e > 0 && !d.isNumberVariable(i) {
				return false
			}
		}
	}
	return true
}

// ball encloses a polynomial without symbols.
func (d *display) ball(terms []algebra.Term, prec uint) algebra.Ball {
	vars := make([]*algebra.Ball, len(d.vars))
	var sum algebra.Ball
	for _, t := range terms {
		y := algebra.BallFromInt(t.Coef)
		for i, e := range t.Exp[1:] {
			if e == 0 {
				continue
			}
			if vars[i] == nil {
				v := d.variableBall(i, prec)
				vars[i] = &v
			}
			for range e {
				y = y.Mul(*vars[i], prec)
			}
		}
		sum = sum.Add(y, prec)
	}
	return sum
}

func (d *display) variableBall(i int, prec uint) algebra.Ball {
	v := d.vars[i]
	switch {
	case v.generator != nil:
		return d.from.Enclose(v.generator.value, prec)
	case v.fn == "":
		return algebra.Pi(prec)
	}
	arg := d.from.Enclose(v.arg, prec+16)
	if v.fn == "exp" {
		return arg.Exp(prec)
	}
	sin, cos := arg.SinCos(prec)
	if v.fn == "cos" {
		return cos
	}
	return sin
}

// float returns the float64 nearest to the number in a ball.
func (d *display) float(ball func(prec uint) algebra.Ball) (float64, error) {
	for prec := uint(128); prec <= mostPrecision; prec *= 2 {
		if y, ok := roundBall(ball(prec), 0, prec); ok {
			return y, finite([]float64{y})
		}
	}
	return 0, errRounding
}
