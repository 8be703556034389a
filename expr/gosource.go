package expr

import (
	"context"
	"fmt"
	"go/format"
	gotoken "go/token"
	"slices"
	"strings"

	"example.org/closedform/algebra"
)

// GoOptions says how generated Go source is named and on which times it is
// examined.
type GoOptions struct {
	Package string // default "response"
	Func    string // default "Response", and the type of its result is FuncState
	// Doc holds lines for the comment at the top, such as the model.
	Doc []string
	// Conditions holds what the model divides by, for functions with symbols.
	Conditions *Conditions
	// From and To are the times between which the errors are bounded, for functions
	// without symbols. If both are 0, To is five times the slowest time constant
	// after the origin From, or ten times the longest period if that is more, but
	// ends where growing terms reach about e^20.
	From, To float64
	// Tolerance is the error that calls for another form, relative to the largest
	// value of a function between From and To; default 1e-9.
	Tolerance float64
}

// GoSource writes a Go function Func that evaluates the named functions at a
// time, FuncValues for many times and FuncRates for the derivatives, with no
// dependency but math, formatted by gofmt. Every constant is the float64 nearest to
// its exact value, which stands in a comment where it is short; exponentials, sines
// and cosines are computed once for all functions; polynomials in time are in
// Horner's form. Free constants become an array argument. It panics when the
// variables or origins of the functions differ.
//
// The comments of Func and FuncRates state a proven bound on the error of every
// value, under the assumptions on package math of [Compiled]: the written
// operations are followed through intervals of time with the roundings of
// constants, arguments, products and sums, fused or not (R. E. Moore, Methods and
// Applications of Interval Analysis, chapter 3; N. J. Higham, Accuracy and Stability
// of Numerical Algorithms, section 3.3). Where the bound is beyond the tolerance,
// terms of close rates are replaced near the origin by their Taylor series, as in
// [Compile]; where that does not help, the comment says so. The cost is some hundred
// evaluations of the functions in intervals, and some in balls.
//
// Symbols become the fields of a struct FuncParams, the first argument, whose
// method Validate returns an error for a field that is not a finite number and
// for a condition or an assumption that does not hold; the source then imports
// errors too, and holds neither FuncValues and FuncRates nor bounds. It is accurate
// where rates coincide or nearly do: images are expanded in Newton's basis and
// evaluated by divided differences of the exponential (A. McCurdy, K. C. Ng, B. N.
// Parlett, Accurate computation of divided differences of the exponential function,
// Math. Comp. 43, 1984), entire functions of the square of a frequency, and
// exponentials of block matrices.
func GoSource(ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) ([]byte, error) {
	opt, err := opt.checked()
	if err != nil {
		return nil, err
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

// checked returns the options with defaults.
func (opt GoOptions) checked() (GoOptions, error) {
	if opt.Package == "" {
		opt.Package = "response"
	}
	if opt.Func == "" {
		opt.Func = "Response"
	}
	if opt.Tolerance == 0 {
		opt.Tolerance = 1e-9
	}
	for _, id := range []string{opt.Package, opt.Func} {
		if !gotoken.IsIdentifier(id) {
			return opt, Errorf(Syntax, Pos{}, "%s is not a Go identifier", Quote(id))
		}
	}
	switch {
	case opt.Package == "_":
		return opt, Errorf(Syntax, Pos{}, "the blank identifier cannot name a package")
	case slices.Contains([]string{"_", "init", "main", "math", "float64", "append"}, opt.Func):
		return opt, Errorf(Syntax, Pos{}, "%s cannot name the function: it has a meaning of its own in the source", Quote(opt.Func))
	case opt.From-opt.From != 0 || opt.To-opt.To != 0 || opt.From > opt.To:
		return opt, Errorf(Syntax, Pos{}, "from %g to %g is no interval of times", opt.From, opt.To)
	case !(opt.Tolerance > 0):
		return opt, Errorf(Syntax, Pos{}, "the tolerance %g is not positive", opt.Tolerance)
	}
	return opt, nil
}

func goSource[E any](ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) ([]byte, error) {
	g, err := newGoWriter[E](ctx, names, fs, constants, opt)
	if err != nil {
		return nil, err
	}
	return format.Source([]byte(g.file(fs)))
}

// mostComment is the length up to which a closed form is repeated in a comment.
const mostComment = 4000

// goWriter collects the rates that the functions share.
type goWriter[E any] struct {
	k         algebra.Scalars[E]
	opt       GoOptions
	variable  string
	names     []string
	fs        []*overField[E]
	origin    goConst
	constants []string
	time      string // t, or tau for a local time
	rates     []*goRate
	numbers   []goConst  // of the terms, and the origin, for comments
	images    []Image[E] // of all functions, then of all derivatives: the free constants', then the base
	cache     expansions[E]
	done      int       // images written
	from, to  float64   // the times that are examined
	values    goRoutine // of the functions
	slopes    goRoutine // of their derivatives
}

// goRoutine is the code that evaluates functions at a time.
type goRoutine struct {
	functions [][]goFree // of each function: the images of the free constants; the last one is the base
	lines     []string
	exprs     []string
	math      bool // there are exponentials, sines or cosines
	bounds    []float64
	sizes     []float64 // at most the largest values
}

// goFree is an image with the index of its free constant, -1 for the base.
type goFree struct{ image, constant int }

func newGoWriter[E any](ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) (*goWriter[E], error) {
	g := &goWriter[E]{opt: opt, names: names, constants: constants, time: "t", variable: "t", origin: goConst{exact: true}}
	for _, f := range fs {
		x, ok := f.over().(*overField[E])
		if !ok || f.variable != fs[0].variable || len(g.fs) > 0 && !x.sameOrigin(g.fs[0]) {
			panic("expr: Go source of functions in different times or over different fields")
		}
		g.k, g.variable = x.k, f.variable
		g.fs = append(g.fs, x)
	}
	for _, r := range []*goRoutine{&g.values, &g.slopes} {
		for _, x := range g.fs {
			if r == &g.slopes {
				x = x.derivative().(*overField[E])
			}
			var list []goFree
			for _, t := range x.free {
				i := slices.Index(constants, t.Name)
				if i < 0 {
					return nil, Errorf(SideConditions, Pos{}, "the free constant %s is not among the constants", t.Name)
				}
				list = append(list, goFree{len(g.images), i})
				g.images = append(g.images, t.Image)
			}
			r.functions = append(r.functions, append(list, goFree{len(g.images), -1}))
			g.images = append(g.images, x.base)
		}
	}
	if len(fs) > 0 && !g.k.IsZero(g.fs[0].origin) {
		g.time = "tau"
		var err error
		if g.origin, err = g.number(g.fs[0].origin); err != nil {
			return nil, err
		}
		g.numbers = append(g.numbers, g.origin)
	}
	return g, g.write(ctx)
}

// write writes the routines, with series of close rates where the plain form is
// beyond the tolerance.
func (g *goWriter[E]) write(ctx context.Context) error {
	terms := make([][]goTerm, len(g.images))
	for i := range terms {
		var err error
		if terms[i], err = g.terms(ctx, i); err != nil {
			return err
		}
		for _, t := range terms[i] {
			g.numbers = append(append(append(g.numbers, t.rate.re, t.rate.im), t.cos...), t.sin...)
		}
	}
	g.from, g.to = g.opt.From, g.opt.To
	if g.from == 0 && g.to == 0 {
		g.from = g.origin.x
		g.to = g.from + g.span()
	}
	var series *goSeries[E]
	planned := false
	for _, r := range []*goRoutine{&g.values, &g.slopes} {
		var err error
		if r.sizes, err = g.sizes(ctx, r.bases()); err != nil {
			return err
		}
		plain := func(images []int) (lines []string, out []goCode) {
			for _, image := range images {
				out = append(out, g.sum(terms[image]).code())
			}
			return nil, out
		}
		if err = g.routine(ctx, r, plain); err != nil {
			return err
		}
		if g.meets(r) {
			continue
		}
		if !planned {
			if series, err = g.series(ctx, terms); err != nil {
				return err
			}
			planned = true
		}
		if series == nil {
			continue
		}
		other := goRoutine{functions: r.functions, sizes: r.sizes}
		if err = g.routine(ctx, &other, series.codes); err != nil {
			return err
		}
		if g.excess(&other) < g.excess(r) {
			*r = other
		}
	}
	return nil
}

// bases returns the images of the functions without free constants.
func (r *goRoutine) bases() []int {
	var out []int
	for _, f := range r.functions {
		out = append(out, f[len(f)-1].image)
	}
	return out
}

func (g *goWriter[E]) meets(r *goRoutine) bool {
	for i, b := range r.bounds {
		if !g.within(b, r.sizes[i]) {
			return false
		}
	}
	return true
}

// excess returns the largest relative bound of a routine.
func (g *goWriter[E]) excess(r *goRoutine) float64 {
	worst := 0.0
	for i, b := range r.bounds {
		if b > 0 {
			worst = max(worst, b/max(r.sizes[i], tiny))
		}
	}
	return worst
}

// routine writes a routine with the codes of its images, and bounds its errors.
func (g *goWriter[E]) routine(ctx context.Context, r *goRoutine, codes func(images []int) ([]string, []goCode)) (err error) {
	var images []int
	for _, f := range r.functions {
		for _, t := range f {
			images = append(images, t.image)
		}
	}
	lines, list := codes(images)
	var ops []goOp
	r.exprs = nil
	for _, f := range r.functions {
		var sum goSum
		for _, t := range f {
			c := list[0]
			list = list[1:]
			switch {
			case t.constant >= 0 && strings.ContainsAny(c.text, " *-"):
				sum.add(false, fmt.Sprintf("c[%d]*(%s)", t.constant, c.text))
			case t.constant >= 0:
				sum.add(false, fmt.Sprintf("c[%d]*%s", t.constant, c.text))
			case c.text != "0":
				text, minus := strings.CutPrefix(c.text, "-")
				sum.add(minus, text)
			}
			if t.constant < 0 {
				ops = append(ops, c.op)
			}
		}
		r.exprs = append(r.exprs, sum.String())
	}
	r.lines = append(g.factors(strings.Join(r.exprs, " ")), lines...)
	r.math = len(r.lines) > 0
	r.bounds, err = g.bound(ctx, ops)
	return err
}
