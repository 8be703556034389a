package expr

import (
	"context"
	"fmt"
	"go/format"
	gotoken "go/token"
	"math"
	"slices"
	"sort"
	"strconv"
	"strings"

	"example.org/closedform/algebra"
)

// GoOptions says how generated Go source is named.
type GoOptions struct {
	Package string // default "response"
	Func    string // default "Response", and the type of its result is FuncState
	// Doc holds lines for the comment at the top, such as the model.
	Doc []string
	// Conditions holds what the model divides by, for functions with symbols.
	Conditions *Conditions
}

// GoSource writes a Go function that evaluates the named functions at a time,
// with no dependency but math, formatted by gofmt. Every constant is the float64
// nearest to its exact value; exponentials, sines and cosines are computed once
// for all functions; polynomials in time are in Horner's form. Free constants
// become an array argument. It panics when the variables or origins of the
// functions differ.
//
// Symbols become the fields of a struct FuncParams, the first argument, whose
// method Validate returns an error for a field that is not a finite number and
// for a condition or an assumption that does not hold; the source then imports
// errors too. It is accurate where rates coincide or nearly do: images are
// expanded in Newton's basis and evaluated by divided differences of the
// exponential (A. McCurdy, K. C. Ng, B. N. Parlett, Accurate computation of
// divided differences of the exponential function, Math. Comp. 43, 1984), entire
// functions of the square of a frequency, and exponentials of block matrices.
func GoSource(ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) ([]byte, error) {
	if opt.Package == "" {
		opt.Package = "response"
	}
	if opt.Func == "" {
		opt.Func = "Response"
	}
	for _, id := range []string{opt.Package, opt.Func} {
		if !gotoken.IsIdentifier(id) {
			return nil, Errorf(Syntax, Pos{}, "%s is not a Go identifier", Quote(id))
		}
	}
	switch {
	case opt.Package == "_":
		return nil, Errorf(Syntax, Pos{}, "the blank identifier cannot name a package")
	case slices.Contains([]string{"_", "init", "main", "math", "float64"}, opt.Func):
		return nil, Errorf(Syntax, Pos{}, "%s cannot name the function: it has a meaning of its own in the source", Quote(opt.Func))
	}
	if len(names) != len(fs) {
		panic(fmt.Sprintf("expr: Go source of %d functions with %d names", len(fs), len(names)))
	}
	for _, f := range fs {
		if len(f.Parameters()) > 0 {
			return symbolSource(ctx, names, fs, constants, opt)
		}
	}
	if len(fs) == 0 || fs[0].over().field() == nil {
		return goSource[algebra.Rat](ctx, names, fs, constants, opt)
	}
	return goSource[Constant](ctx, names, fs, constants, opt)
}

func goSource[E any](ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) ([]byte, error) {
	g := goWriter[E]{opt: opt, names: names, constants: constants, time: "t"}
	for _, f := range fs {
		x, ok := f.over().(*overField[E])
		if !ok || f.variable != fs[0].variable || len(g.fs) > 0 && !x.sameOrigin(g.fs[0]) {
			panic("expr: Go source of functions in different times or over different fields")
		}
		g.k = x.k
		g.fs = append(g.fs, x)
		for _, t := range x.free {
			g.images = append(g.images, t.Image)
		}
		g.images = append(g.images, x.base)
	}
	if len(fs) > 0 && !g.k.IsZero(g.fs[0].origin) {
		g.time = "tau"
		var err error
		if g.origin, err = g.float(g.fs[0].origin); err != nil {
			return nil, err
		}
	}
	bodies := make([]string, len(fs))
	for i, f := range g.fs {
		var err error
		if bodies[i], err = g.function(ctx, f); err != nil {
			return nil, err
		}
	}
	return format.Source([]byte(g.file(fs, bodies)))
}

// float returns the float64 nearest to an element of the field.
func (g *goWriter[E]) float(x E) (float64, error) {
	for prec := uint(128); prec <= mostPrecision; prec *= 2 {
		if y, ok := roundBall(g.k.Enclose(x, prec), 0, prec); ok {
			return y, finite([]float64{y})
		}
	}
	return 0, errRounding
}

// mostComment is the length up to which a closed form is repeated in a comment.
const mostComment = 4000

// goWriter collects the rates that the functions share.
type goWriter[E any] struct {
	k         algebra.Scalars[E]
	opt       GoOptions
	fs        []*overField[E]
	names     []string
	origin    float64
	constants []string
	time      string // t, or tau for a local time
	rates     []goRate[E]
	images    []Image[E] // of all functions: the free constants', then the base
	cache     expansions[E]
	done      int       // images written
	sizes     []float64 // of each function without free constants: the sum of the coefficients' sizes
}

// goRate is a pair of conjugate rates, or a real one.
type goRate[E any] struct {
	p      algebra.Poly[E]
	root   int
	re, im float64
}

// rate returns the index of a rate in the list, entering it if it is new.
func (g *goWriter[E]) rate(p algebra.Poly[E], root int, re, im float64) int {
	for i, r := range g.rates {
		if r.root == root && r.p.Equal(p) {
			return i
		}
	}
	g.rates = append(g.rates, goRate[E]{p, root, re, im})
	return len(g.rates) - 1
}

// function returns the expression of f.
func (g *goWriter[E]) function(ctx context.Context, f *overField[E]) (string, error) {
	var sum goSum
	for _, t := range f.free {
		s, _, err := g.image(ctx)
		if err != nil {
			return "", err
		}
		i := slices.Index(g.constants, t.Name)
		if i < 0 {
			return "", Errorf(SideConditions, Pos{}, "the free constant %s is not among the constants", t.Name)
		}
		sum.add(false, fmt.Sprintf("c[%d]*(%s)", i, s))
	}
	s, size, err := g.image(ctx)
	if err != nil {
		return "", err
	}
	g.sizes = append(g.sizes, size)
	if s != "0" {
		sum.add(false, s)
	}
	return sum.String(), nil
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

// goTerm is (c[0] + c[1] t + ...) times the exponential of a rate, with the
// coefficients of the cosine and of the sine.
type goTerm struct {
	rate     int
	cos, sin []float64
}

// image returns the expression of the next image, entering its rates, and the
// sum of the sizes of its coefficients.
func (g *goWriter[E]) image(ctx context.Context) (string, float64, error) {
	terms, err := g.terms(ctx, g.done)
	g.done++
	if err != nil {
		return "", 0, err
	}
	var sum goSum
	size := 0.0
	for _, t := range terms {
		for _, c := range [][]float64{t.cos, t.sin} {
			for _, x := range c {
				size += math.Abs(x)
			}
		}
		r := g.rates[t.rate]
		exp := ""
		if r.re != 0 {
			exp = fmt.Sprintf("e%d", t.rate+1)
		}
		if r.im == 0 {
			g.addProduct(&sum, t.cos, exp)
			continue
		}
		cos, sin := fmt.Sprintf("c%d", t.rate+1), fmt.Sprintf("s%d", t.rate+1)
		if exp == "" || allZero(t.cos) || allZero(t.sin) {
			g.addProduct(&sum, t.cos, exp, cos)
			g.addProduct(&sum, t.sin, exp, sin)
			continue
		}
		var inner goSum
		g.addProduct(&inner, t.cos, cos)
		g.addProduct(&inner, t.sin, sin)
		sum.add(false, exp+"*("+inner.String()+")")
	}
	return sum.String(), size, nil
}

func allZero(c []float64) bool {
	for _, x := range c {
		if x != 0 {
			return false
		}
	}
	return true
}

// addProduct adds a polynomial in time, in Horner's form, times the factors
// that are not empty.
func (g *goWriter[E]) addProduct(sum *goSum, c []float64, factors ...string) {
	if allZero(c) {
		return
	}
	var parts []string
	for _, f := range factors {
		if f != "" {
			parts = append(parts, f)
		}
	}
	for c[len(c)-1] == 0 {
		c = c[:len(c)-1]
	}
	minus, poly := c[len(c)-1] < 0, goFloat(math.Abs(c[len(c)-1]))
	for i := len(c) - 2; i >= 0; i-- {
		if strings.Contains(poly, " ") {
			poly = "(" + poly + ")"
		}
		poly = g.time + "*" + poly
		if poly == g.time+"*1" {
			poly = g.time
		}
		if c[i] != 0 {
			var s goSum
			s.add(c[i] < 0, goFloat(math.Abs(c[i])))
			s.add(minus, poly)
			minus, poly = false, s.String()
		}
	}
	if strings.Contains(poly, " ") && (minus || len(parts) > 0) {
		poly = "(" + poly + ")"
	}
	if poly != "1" || len(parts) == 0 {
		parts = append([]string{poly}, parts...)
	}
	sum.add(minus, strings.Join(parts, "*"))
}

func goFloat(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

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
			var exact []float64
			if pp.p.Degree() == 1 {
				for _, c := range f.local(i).c {
					y, err := g.float(coef[E](g.k, c, 0))
					if err != nil {
						return nil, err
					}
					exact = append(exact, y)
				}
			}
			for r := range roots.Len() {
				if roots.Conjugate(r) < r {
					continue
				}
				s := x.terms[image][next]
				next++
				rate := x.rates[s.rate]
				re, okRe := roundBall(rate.at.Re, 0, prec)
				im, okIm := roundBall(rate.at.Im, 0, prec)
				ok = ok && okRe && okIm
				t := goTerm{cos: exact}
				for k := 0; exact == nil && k < len(s.c); k++ {
					double := int64(0)
					if rate.paired {
						double = 1
					}
					u, okU := roundBall(s.c[k].Re, double, prec)
					v, okV := 0.0, true
					if rate.paired {
						v, okV = roundBall(s.c[k].Im, double, prec)
					}
					ok = ok && okU && okV
					t.cos, t.sin = append(t.cos, u), append(t.sin, -v)
				}
				if ok {
					t.rate = g.rate(pp.p, r, re, im)
					byPrime[i] = append(byPrime[i], t)
					if err := finite(append([]float64{re, im}, append(t.cos, t.sin...)...)); err != nil {
						return nil, err
					}
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

// file assembles the source.
func (g *goWriter[E]) file(fs []Function, bodies []string) string {
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	state := g.opt.Func + "State"
	variable := "t"
	if len(fs) > 0 {
		variable = fs[0].variable
	}
	goHead(line, g.opt)
	all := strings.Join(bodies, " ")
	used := g.factors(all)
	if len(used) > 0 {
		line("import \"math\"\n")
	}
	line("// %s holds the values of the states at one time.", state)
	fields := goNames(g.names)
	goStruct(line, state, fields, g.names)
	line("// %s returns the states at the time %s:", g.opt.Func, inert(variable))
	line("//")
	goFormulas(line, g.names, fs)
	g.warn(fields, line)
	arg := ""
	if n := len(g.constants); n > 0 {
		line("//\n// c holds the constants %s.", inert(strings.Join(g.constants, ", ")))
		arg = fmt.Sprintf(", c [%d]float64", n)
	}
	switch {
	case len(used) == 0 && !usesName(all, g.time):
		line("func %s(_ float64%s) %s {", g.opt.Func, arg, state) // all states are constant
	case g.time == "t":
		line("func %s(t float64%s) %s {", g.opt.Func, arg, state)
	default:
		line("func %s(t float64%s) %s {", g.opt.Func, arg, state)
		line("tau := t - %s", goFloat(g.origin))
	}
	for _, u := range used {
		line("%s", u)
	}
	line("return %s{", state)
	for i, f := range fields {
		line("%s: %s,", f, bodies[i])
	}
	line("}\n}")
	return b.String()
}

// factors returns the definitions of the exponentials, sines and cosines that
// occur in the expressions.
func (g *goWriter[E]) factors(all string) []string {
	var lines []string
	for i, r := range g.rates {
		e, s, c := fmt.Sprintf("e%d", i+1), fmt.Sprintf("s%d", i+1), fmt.Sprintf("c%d", i+1)
		if usesName(all, e) {
			lines = append(lines, fmt.Sprintf("%s := math.Exp(%s)", e, g.times(r.re)))
		}
		sin, cos := usesName(all, s), usesName(all, c)
		switch {
		case sin && cos:
			lines = append(lines, fmt.Sprintf("%s, %s := math.Sincos(%s)", s, c, g.times(r.im)))
		case cos:
			lines = append(lines, fmt.Sprintf("%s := math.Cos(%s)", c, g.times(r.im)))
		case sin:
			lines = append(lines, fmt.Sprintf("%s := math.Sin(%s)", s, g.times(r.im)))
		}
	}
	return lines
}

// warn says where the terms of a function are much larger than the values that
// the functions start from, so that their rounding errors may be as well.
func (g *goWriter[E]) warn(fields []string, line func(string, ...any)) {
	start := 0.0
	for _, f := range g.fs {
		if x, err := g.float(f.base.Initial()); err == nil {
			start = max(start, math.Abs(x))
		}
	}
	if start == 0 {
		start = 1
	}
	for i, size := range g.sizes {
		if size > 1e6*start {
			line("//\n// Cancellation: the terms of %s add up to %.1e in size; where they cancel, its", fields[i], size)
			line("// absolute error is up to about %.0e.", size*0x1p-51)
		}
	}
}

// times returns x times the time.
func (g *goWriter[E]) times(x float64) string {
	switch x {
	case 1:
		return g.time
	case -1:
		return "-" + g.time
	}
	return goFloat(x) + " * " + g.time
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
