package expr

import (
	"context"
	"fmt"
	"go/format"
	"math"
	"math/big"
	"strconv"
	"strings"
	"unicode"

	"example.org/closedform/algebra"
)

// GoTest writes a test of what [GoSource] writes with the same arguments, a file
// of the same package: it compares the functions and their derivatives with proven
// values at some times between From and To, and asks for the stated bounds. Free
// constants are 0. Functions with symbols are refused.
func GoTest(ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) ([]byte, error) {
	opt, err := opt.checked()
	if err != nil {
		return nil, err
	}
	if len(names) != len(fs) {
		panic(fmt.Sprintf("expr: Go test of %d functions with %d names", len(fs), len(names)))
	}
	if opt.Func == "testing" {
		return nil, Errorf(Syntax, Pos{}, "%s cannot name the function: it has a meaning of its own in the test", Quote(opt.Func))
	}
	for _, f := range fs {
		if p := f.Parameters(); len(p) > 0 {
			return nil, Errorf(NeedsAssumption, Pos{}, "the symbol %s has no value to be tested with", p[0])
		}
	}
	if len(fs) == 0 || fs[0].over().field() == nil {
		return goTest[algebra.Rat](ctx, names, fs, constants, opt)
	}
	return goTest[Constant](ctx, names, fs, constants, opt)
}

func goTest[E any](ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) ([]byte, error) {
	g, err := newGoWriter[E](ctx, names, fs, constants, opt)
	if err != nil {
		return nil, err
	}
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	name := []rune(opt.Func)
	name[0] = unicode.ToUpper(name[0])
	test := "Test" + string(name) + "Exact"
	if unicode.IsLower(name[0]) {
		test = "Test_" + string(name) + "Exact"
	}
	fields := goNames(g.names)
	state := opt.Func + "State"
	arg := ""
	if n := len(constants); n > 0 {
		arg = fmt.Sprintf(", [%d]float64{}", n)
	}
	line("package %s\n\nimport (\n\"math\"\n\"testing\"\n)\n", opt.Package)
	line("// %s compares the states and their derivatives with proven values, whose", test)
	line("// digits are all right but for the rounding of the last one.")
	line("func %s(t *testing.T) {", test)
	line("bounds, slopes := %s, %s", stateLiteral(state, fields, boundTexts(g.values.bounds)), stateLiteral(state, fields, boundTexts(g.slopes.bounds)))
	line("for _, c := range []struct{\nat float64\nwant, rates %s\n}{", state)
	for _, at := range g.testTimes() {
		var texts [2][]string
		huge := false
		for i, r := range []*goRoutine{&g.values, &g.slopes} {
			if texts[i], err = g.digits(ctx, r.bases(), at); err != nil {
				return nil, err
			}
			for _, s := range texts[i] {
				_, err := strconv.ParseFloat(s, 64)
				huge = huge || err != nil
			}
		}
		if huge {
			continue // no constant of the language
		}
		line("{%s, %s, %s},", goFloat(at), stateLiteral(state, fields, texts[0]), stateLiteral(state, fields, texts[1]))
	}
	line("} {")
	line("got, rates := %s(c.at%s), %sRates(c.at%s)", opt.Func, arg, opt.Func, arg)
	line("if many := %sValues(nil, []float64{c.at}%s); len(many) != 1 || many[0] != got {", opt.Func, arg)
	line("t.Errorf(\"%sValues gives %%v at %%v, not %%v\", many, c.at, got)\n}", opt.Func)
	line("for _, x := range []struct{\nname string\ngot, want, bound float64\n}{")
	for i, f := range fields {
		for _, v := range []struct{ got, want, bound, of string }{{"got", "c.want", "bounds", ""}, {"rates", "c.rates", "slopes", "rate of "}} {
			b := v.bound + "." + f
			if r := map[string]*goRoutine{"bounds": &g.values, "slopes": &g.slopes}[v.bound]; math.IsInf(r.bounds[i], 1) {
				b = "math.Inf(1)"
			}
			line("{%q, %s.%s, %s.%s, %s},", v.of+f, v.got, f, v.want, f, b)
		}
	}
	line("} {\nif e := math.Abs(x.got - x.want); !(e <= x.bound+0x1p-52*math.Abs(x.want)+math.SmallestNonzeroFloat64) {")
	line("t.Errorf(\"%%s at %%v is %%v, exactly %%v: an error of %%g\", x.name, c.at, x.got, x.want, e)")
	line("}\n}\n}\n}")
	return format.Source([]byte(b.String()))
}

func boundTexts(bounds []float64) []string {
	out := make([]string, len(bounds))
	for i, b := range bounds {
		out[i] = "0"
		if b > 0 && b <= math.MaxFloat64 {
			out[i] = upward(b)
		}
	}
	return out
}

// stateLiteral writes a value of the type of the states.
func stateLiteral(state string, fields, values []string) string {
	var list []string
	for i, f := range fields {
		list = append(list, f+": "+values[i])
	}
	return state + "{" + strings.Join(list, ", ") + "}"
}

// testTimes returns the times of the test: the ends, even steps between them, and
// some near the start.
func (g *goWriter[E]) testTimes() []float64 {
	out := []float64{g.from}
	add := func(t float64) {
		if t > out[len(out)-1] && t < g.to {
			out = append(out, t)
		}
	}
	for _, part := range []float64{1.0 / 1024, 1.0 / 64, 1.0 / 8, 1.0 / 4, 3.0 / 8, 1.0 / 2, 5.0 / 8, 3.0 / 4, 7.0 / 8} {
		add(g.from + (g.to-g.from)*part)
	}
	if g.to > g.from {
		out = append(out, g.to)
	}
	return out
}

// digits returns the values of images to 20 digits.
func (g *goWriter[E]) digits(ctx context.Context, images []int, at float64) ([]string, error) {
	list := make([]Image[E], len(images))
	for i, image := range images {
		list[i] = g.images[image]
	}
	if len(list) == 0 {
		return nil, nil
	}
	tau := g.k.Sub(g.k.FromRat(algebra.RatFromBig(new(big.Rat).SetFloat64(at))), g.fs[0].origin)
	values, err := new(expansions[E]).digits(ctx, g.k, list, tau, 20)
	return values, wrapCancel(err)
}
