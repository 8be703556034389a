package expr

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"slices"
	"sort"
	"strconv"
	"strings"

	"example.org/closedform/algebra"
)

// float returns the float64 nearest to an element of the field.
func (g *goWriter[E]) float(x E) (float64, error) {
	for prec := uint(128); prec <= mostPrecision; prec *= 2 {
		if y, ok := roundBall(g.k.Enclose(x, prec), 0, prec); ok {
			return y, finite([]float64{y})
		}
	}
	return 0, errRounding
}

// mostExact is the length up to which an exact value is repeated in a comment.
const mostExact = 40

// number rounds an element of the field.
func (g *goWriter[E]) number(x E) (goConst, error) {
	y, err := g.float(x)
	n := goConst{x: y}
	if err != nil {
		return n, err
	}
	if r, ok := g.k.Rational(x); ok {
		exact, short := new(big.Rat).SetFloat64(y), new(big.Rat)
		n.exact = exact.Cmp(r.Big()) == 0
		if _, ok := short.SetString(goFloat(y)); ok && short.Cmp(r.Big()) == 0 {
			return n, nil
		}
	}
	if bitLen(g.k, x) <= 4*mostExact {
		n.text = shortText(styleOf(g.k).Node(x))
	}
	return n, nil
}

// shortText writes the size of a number if that is short.
func shortText(n Node) string {
	if x, ok := encloseNode(n, 64); ok {
		if sign, _ := x.Sign(); sign < 0 {
			n = opposite(n)
		}
	}
	s := n.String()
	if len(s) > mostExact {
		return ""
	}
	return inert(s)
}

// opposite returns -n, the sign inside of sums where it can be.
func opposite(n Node) Node {
	switch v := n.(type) {
	case Sum:
		return negatedSum(v)
	case Quotient:
		return Quotient{Num: opposite(v.Num), Den: v.Den}
	case Product:
		if last := len(v.Factors) - 1; last >= 0 {
			if s, ok := v.Factors[last].(Sum); ok {
				return Product{Factors: append(slices.Clone(v.Factors[:last]), negatedSum(s))}
			}
		}
	}
	return Negate(n)
}

// goTerm is (c[0] + c[1] t + ...) times the exponential of a rate, with the
// coefficients of the cosine and of the sine.
type goTerm struct {
	rate     *goRate
	cos, sin []goConst
}

// exactTerm is what is known exactly of the terms at a root.
type exactTerm struct {
	re, im, cos, sin []goConst // NaN where only the text is known; re and im of length 0 or 1
}

// exactTerms returns what is known exactly of the terms of a factor of degree 1 or
// 2, for each of its roots.
func (g *goWriter[E]) exactTerms(f Image[E], i int) ([]exactTerm, error) {
	p := f.den[i].p
	switch p.Degree() {
	case 1:
		var t exactTerm
		re, err := g.number(g.k.Neg(p.Coef(0)))
		if err != nil {
			return nil, err
		}
		t.re = []goConst{re}
		for _, c := range f.local(i).c {
			n, err := g.number(coef[E](g.k, c, 0))
			if err != nil {
				return nil, err
			}
			t.cos = append(t.cos, n)
		}
		return []exactTerm{t}, nil
	case 2:
		t, err := g.quadraticTerms(f.local(i))
		var limit *Error
		if errors.As(err, &limit) && limit.Kind == LimitExceeded {
			return nil, nil // comments are not worth that much work
		}
		return t, err
	}
	return nil, nil
}

// quadraticTerms is exactTerms for a factor of degree 2.
func (g *goWriter[E]) quadraticTerms(part localPart[E]) (out []exactTerm, err error) {
	defer catchLimit(&err)
	w := presenter[E]{k: g.k, style: styleOf(g.k)}
	q := w.quadraticPart(part)
	switch {
	case !q.decided:
		return nil, nil
	case q.sign > 0:
		return g.surdTerms(part), nil
	}
	var failed error
	number := func(x E) goConst {
		n, err := g.number(x)
		if err != nil && failed == nil {
			failed = err
		}
		return n
	}
	timesRoot := func(x E, over bool) goConst {
		switch {
		case isNumber(q.root, 1):
			return number(x)
		case g.k.IsZero(x):
			return goConst{exact: true}
		case over:
			return goConst{x: math.NaN(), text: shortText(Div(w.Node(x), q.root))}
		}
		return goConst{x: math.NaN(), text: shortText(Mul(w.Node(x), q.root))}
	}
	t := exactTerm{re: []goConst{number(q.h)}, im: []goConst{timesRoot(q.c, false)}}
	for j := range part.c {
		t.cos = append(t.cos, number(coef[E](g.k, q.a, j)))
		t.sin = append(t.sin, timesRoot(coef[E](g.k, q.b, j), q.over))
	}
	return []exactTerm{t, t}, failed
}

// surdTerms returns the texts of the terms at two real roots.
func (g *goWriter[E]) surdTerms(part localPart[E]) []exactTerm {
	if _, ok := any(g.k).(*Constants); ok {
		return nil // their order is not known
	}
	out := make([]exactTerm, 2)
	for r, n := range RootNodes(g.k, part.p, Sym("i")) {
		out[r].re = []goConst{{x: math.NaN(), text: shortText(n)}}
	}
	for _, c := range part.c {
		for r, n := range RootValues(g.k, part.p, c, Sym("i")) {
			out[r].cos = append(out[r].cos, goConst{x: math.NaN(), text: shortText(n)})
		}
	}
	return out
}

// known returns the number x, with what is known exactly of its size.
func known(x float64, exact []goConst, i int) goConst {
	if i >= len(exact) {
		return goConst{x: x}
	}
	return goConst{x: x, exact: exact[i].exact && math.Abs(exact[i].x) == math.Abs(x), text: exact[i].text}
}

// terms returns the terms of an image with correctly rounded constants, in the order
// of the written form.
func (g *goWriter[E]) terms(ctx context.Context, image int) ([]goTerm, error) {
	f := g.images[image]
	order := make([]int, len(f.den))
	for i := range order {
		order[i] = i
	}
	w := presenter[E]{k: g.k, style: styleOf(g.k)}
	sort.SliceStable(order, func(a, b int) bool { return w.before(f.den[order[a]].p, f.den[order[b]].p) })
	exact := make([][]exactTerm, len(f.den))
	for i := range f.den {
		var err error
		if exact[i], err = g.exactTerms(f, i); err != nil {
			return nil, err
		}
	}
	for prec := uint(128); prec <= mostPrecision; prec *= 2 {
		x, err := g.cache.get(ctx, g.k, g.images, prec)
		if err != nil {
			return nil, wrapCancel(err)
		}
		byPrime := make([][]goTerm, len(f.den))
		ok := true
		next := 0
		for i, pp := range f.den {
			roots, err := pp.rootSet(ctx, f.k)
			if err != nil {
				return nil, err
			}
			for r := range roots.Len() {
				if roots.Conjugate(r) < r {
					continue
				}
				s := x.terms[image][next]
				next++
				var e exactTerm
				if r < len(exact[i]) {
					e = exact[i][r]
				}
				t, certain := roundTerm(s, x.rates[s.rate], e, prec)
				ok = ok && certain
				if !certain {
					continue
				}
				if pp.p.Degree() > 2 {
					t.rate.nameRoot(fmt.Sprintf("root(%d, %s)", r+1, shortText(PolyNodeOf(g.k, pp.p, Sym("z")))), x.rates[s.rate].paired)
				}
				t.rate = g.rate(t.rate)
				byPrime[i] = append(byPrime[i], t)
				if err := t.finite(); err != nil {
					return nil, err
				}
			}
		}
		if ok {
			var out []goTerm
			for _, i := range order {
				out = append(out, byPrime[i]...)
			}
			return out, nil
		}
	}
	return nil, errRounding
}

// roundTerm rounds the terms at a root, if all are certain. Frequencies and the
// coefficients of sines may have either sign.
func roundTerm(s series, at rate, e exactTerm, prec uint) (t goTerm, ok bool) {
	ok = true
	ball := func(b algebra.Ball, double int64, exact []goConst, i int) goConst {
		if i < len(exact) && exact[i].isZero() {
			return exact[i]
		}
		x, certain := roundBall(b, double, prec)
		ok = ok && certain
		return known(x, exact, i)
	}
	round := func(b algebra.Ball, double int64, exact []goConst, i int) goConst {
		if i < len(exact) && !math.IsNaN(exact[i].x) {
			return exact[i]
		}
		return ball(b, double, exact, i)
	}
	t.rate = &goRate{index: s.rate, re: round(at.at.Re, 0, e.re, 0), im: goConst{exact: true}}
	double := int64(0)
	if at.paired {
		double = 1
		t.rate.im = ball(at.at.Im, 0, e.im, 0)
	}
	for k, c := range s.c {
		t.cos = append(t.cos, round(c.Re, double, e.cos, k))
		if at.paired {
			sin := ball(c.Im, double, e.sin, k)
			sin.x = 0 - sin.x
			t.sin = append(t.sin, sin)
		}
	}
	return t, ok
}

// nameRoot gives a rate the text of a named root.
func (r *goRate) nameRoot(name string, paired bool) {
	switch {
	case len(name) > mostExact || strings.HasSuffix(name, ", )"):
	case paired:
		r.re.text, r.im.text = sized("re("+name+")", r.re.x), sized("im("+name+")", r.im.x)
	default:
		r.re.text = sized(name, r.re.x)
	}
}

// sized writes the size of a number with a name.
func sized(name string, x float64) string {
	if x < 0 {
		return "-" + name
	}
	return name
}

// rate returns the rate of the list at the same root, entering it if it is new.
func (g *goWriter[E]) rate(r *goRate) *goRate {
	for _, old := range g.rates {
		if old.index == r.index {
			return old
		}
	}
	g.rates = append(g.rates, r)
	r.id = len(g.rates)
	return r
}

// finite returns an error if a constant of the term is beyond float64.
func (t goTerm) finite() error {
	list := []float64{t.rate.re.x, t.rate.im.x}
	for _, c := range [][]goConst{t.cos, t.sin} {
		for _, n := range c {
			list = append(list, n.x)
		}
	}
	return finite(list)
}

var errRounding = Errorf(LimitExceeded, Pos{}, "a constant of the formula needs more than %d bits to be rounded", mostPrecision)

// finite returns an error if a constant of the formula is beyond float64.
func finite(constants []float64) error {
	for _, x := range constants {
		if math.IsInf(x, 0) {
			return Errorf(LimitExceeded, Pos{}, "a constant of the formula is beyond the range of float64")
		}
	}
	return nil
}

// tiePrecision is the precision in bits where a number that still may round to
// either of two neighbours is taken to lie midway between them.
const tiePrecision = 4096

// roundBall returns the float64 nearest to 2^shift times the number in the
// ball, if the ball determines it; midway between two, the even one. A number
// that is 0 is certain to round to 0 once the ball is below the smallest
// float64.
func roundBall(b algebra.Ball, shift int64, prec uint) (float64, bool) {
	lo, hi := b.MulPow2(shift).Interval()
	x, _ := lo.Float64()
	y, _ := hi.Float64()
	if prec >= tiePrecision && y == math.Nextafter(x, math.Inf(1)) && math.Float64bits(x)&1 == 1 {
		x = y
	}
	ok := x == y || prec >= tiePrecision && y == math.Nextafter(x, math.Inf(1))
	return x + 0, ok // + 0 turns -0 into 0
}

func goFloat(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }
