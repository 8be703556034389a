package expr

import (
	"context"
	"fmt"
	"go/format"
	"slices"
	"strconv"
	"strings"
	"unicode"
)

// Go source with symbols. An image N/(q[1] ... q[m]) over the field of the
// symbols is expanded in Newton's basis, N = sum of r[j] q[1] ... q[j-1], by
// repeated division by the monic primes q[j]. The coefficients r[j] bring in no
// denominators, and the inverse transforms of 1/(q[j] ... q[m]) are entire
// functions of the coefficients of the q: divided differences of the exponential
// for linear q (Opitz), and their like for others. The code is right, and
// accurate, where rates coincide or nearly do, which the written formula is not.

// symbolSource is GoSource for functions with symbols.
func symbolSource(ctx context.Context, names []string, fs []Function, constants []string, opt GoOptions) (src []byte, err error) {
	defer catchLimit(&err)
	if slices.Contains(predeclared, opt.Func) {
		return nil, Errorf(Syntax, Pos{}, "%s cannot name the function: it has a meaning of its own in the source", Quote(opt.Func))
	}
	w := symbolWriter{opt: opt, names: names, constants: constants, time: "t"}
	if err := w.collect(fs); err != nil {
		return nil, err
	}
	text, err := w.file(ctx, fs)
	if err != nil {
		return nil, wrapCancel(err)
	}
	return format.Source([]byte(text))
}

// predeclared names are used by the source.
var predeclared = []string{"append", "bool", "clear", "errors", "error", "false", "float64", "len", "make", "max", "nil", "true"}

// symbolWriter writes the source of functions with symbols.
type symbolWriter struct {
	goDecomposer
	opt       GoOptions
	names     []string
	constants []string
	fs        []*overField[Constant]
	symbols   []string
	fields    []string // of the symbols
	body      *goBody
	time      string
	numeric   goWriter[Constant] // of the parts without symbols
	divided   [][]int            // sequences of linear primes
	cascades  [][]int
}

// collect takes the functions over one field.
func (w *symbolWriter) collect(fs []Function) error {
	var k *Constants
	for _, f := range fs {
		if c := f.over().field(); c != nil && k == nil {
			k = c
		} else if c != k {
			var err error
			if k, err = joined(k, c); err != nil {
				return err
			}
		}
	}
	w.k = k
	for _, f := range fs {
		x := f.over()
		if x.field() != k {
			var err error
			if x, err = embed(context.Background(), x, k); err != nil {
				return err
			}
		}
		over := x.(*overField[Constant])
		if f.variable != fs[0].variable || len(w.fs) > 0 && !over.sameOrigin(w.fs[0]) {
			panic("expr: Go source of functions in different times")
		}
		w.fs = append(w.fs, over)
	}
	used := map[string]bool{}
	for _, f := range w.fs {
		for _, name := range f.parameters() {
			used[name] = true
		}
	}
	if l := w.opt.Conditions; l != nil && l.k != nil {
		for _, name := range l.k.SymbolsIn(l.factors...) {
			used[name] = true
		}
	}
	for _, g := range k.generators {
		for _, name := range k.SymbolsIn(g.arg) {
			used[name] = true
		}
	}
	for _, name := range k.Symbols() {
		if used[name] {
			w.symbols = append(w.symbols, name)
			delete(used, name)
		}
	}
	if l := w.opt.Conditions; l != nil && l.k != nil {
		for _, name := range l.k.Symbols() {
			if used[name] {
				w.symbols = append(w.symbols, name)
			}
		}
	}
	w.fields = goNames(w.symbols, "Validate")
	return nil
}

func (w *symbolWriter) newBody() *goBody {
	fields := map[string]string{}
	for i, name := range w.symbols {
		fields[name] = w.fields[i]
	}
	return newGoBody(fields)
}

// goTermOf is one image of a function with its factor, the free constant or "".
type goTermOf struct {
	factor string
	parts  []goPart
}

// bodies returns the lines of the function and the expressions of its fields.
func (w *symbolWriter) bodies(ctx context.Context) (lines, out []string, err error) {
	w.body = w.newBody()
	all := make([][]goTermOf, len(w.fs))
	for i, f := range w.fs {
		for _, t := range f.free {
			at := slices.Index(w.constants, t.Name)
			if at < 0 {
				return nil, nil, Errorf(SideConditions, Pos{}, "the free constant %s is not among the constants", t.Name)
			}
			parts, err := w.parts(ctx, t.Image)
			if err != nil {
				return nil, nil, err
			}
			all[i] = append(all[i], goTermOf{fmt.Sprintf("c[%d]", at), parts})
		}
		parts, err := w.parts(ctx, f.base)
		if err != nil {
			return nil, nil, err
		}
		all[i] = append(all[i], goTermOf{"", parts})
	}
	w.register(all)
	w.numeric.k, w.numeric.opt, w.numeric.time = w.k, w.opt, w.time
	for _, terms := range all {
		for _, t := range terms {
			for _, p := range t.parts {
				if p.kind == goNumeric {
					w.numeric.images = append(w.numeric.images, p.exact)
				}
			}
		}
	}
	for _, terms := range all {
		var sum goSum
		for _, t := range terms {
			s, err := w.image(ctx, t.parts)
			switch {
			case err != nil:
				return nil, nil, err
			case s == "0":
			case t.factor == "":
				sum.add(false, s)
			case strings.Contains(s, " "):
				sum.add(false, t.factor+"*("+s+")")
			default:
				sum.add(false, t.factor+"*"+s)
			}
		}
		out = append(out, sum.String())
	}
	lines, out = w.body.finish(out)
	return append(w.numeric.factors(strings.Join(append(lines, out...), " ")), lines...), out, nil
}

// register collects the sequences of primes that calls are needed for: those
// that are not the start of another one.
func (w *symbolWriter) register(all [][]goTermOf) {
	longest := func(list [][]int, seq []int) [][]int {
		for i, old := range list {
			switch {
			case startsWith(old, seq):
				return list
			case startsWith(seq, old):
				list[i] = seq
				return slices.DeleteFunc(list, func(x []int) bool { return len(x) < len(seq) && startsWith(seq, x) })
			}
		}
		return append(list, seq)
	}
	for _, terms := range all {
		for _, t := range terms {
			for _, p := range t.parts {
				switch {
				case p.kind == goDivided && !constantSequence(p.seq):
					w.divided = longest(w.divided, p.seq)
				case p.kind == goCascade:
					w.cascades = longest(w.cascades, p.seq)
				}
			}
		}
	}
}

func startsWith(seq, start []int) bool {
	return len(start) <= len(seq) && slices.Equal(seq[:len(start)], start)
}

func constantSequence(seq []int) bool {
	return !slices.ContainsFunc(seq, func(i int) bool { return i != seq[0] })
}

// image writes the sum of the parts of an image.
func (w *symbolWriter) image(ctx context.Context, parts []goPart) (string, error) {
	var sum goSum
	for _, p := range parts {
		for j := len(p.coefs) - 1; j >= 0; j-- {
			for i, x := range p.coefs[j] {
				product, err := w.body.element(w.k, x)
				if err != nil {
					return "", err
				}
				factors, err := w.basis(ctx, p, j, i)
				if err != nil {
					return "", err
				}
				if product.zero {
					continue
				}
				product.above = append(product.above, factors...)
				sum.add(product.minus, product.size())
			}
		}
	}
	return sum.String(), nil
}

// basis writes the function of time with the image s^i/(q[0] ... q[j]), as a list
// of factors.
func (w *symbolWriter) basis(ctx context.Context, p goPart, j, i int) ([]string, error) {
	switch p.kind {
	case goNumeric:
		text, _, err := w.numeric.image(ctx)
		if _, number := strconv.ParseFloat(text, 64); number == nil { // its terms underflow
			return []string{text}, err
		}
		return []string{w.body.value("part", text, false)}, err
	case goPair:
		call, err := w.pair(p.seq[0])
		return []string{fmt.Sprintf("%s[%d]", call, i)}, err
	case goCascade:
		at := i
		for _, q := range p.seq[:j] {
			at += w.primes[q].degree
		}
		call, err := w.call("Cascade", "cascade", w.cascades, p.seq, w.factor)
		return []string{fmt.Sprintf("%s[%d]", call, at)}, err
	}
	if !constantSequence(p.seq[:j+1]) {
		call, err := w.call("Divided", "diff", w.divided, p.seq, w.rate)
		return []string{fmt.Sprintf("%s[%d]", call, j)}, err
	}
	// t^j/j! e^(rate t)
	if j == 0 && slices.ContainsFunc(w.divided, func(seq []int) bool { return seq[0] == p.seq[0] }) {
		call, err := w.call("Divided", "diff", w.divided, p.seq[:1], w.rate)
		return []string{call + "[0]"}, err
	}
	factorial := 1.0
	for n := 2; n <= j; n++ {
		factorial *= float64(n)
	}
	var out []string
	if factorial > 1 {
		out = append(out, goFloat(1/factorial))
	}
	out = append(out, powerText(w.time, j)...)
	if mean := w.primes[p.seq[0]].mean; !w.k.IsZero(mean) {
		rate, err := w.rate(p.seq[0])
		if err != nil {
			return nil, err
		}
		exponent := rate + "*" + w.time
		if rate == "1" || rate == "-1" {
			exponent = strings.TrimSuffix(rate, "1") + w.time
		}
		out = append(out, w.body.value("exp", "math.Exp("+exponent+")", true))
	}
	return out, nil
}

func (w *symbolWriter) helper(suffix string) string {
	name := []rune(w.opt.Func)
	name[0] = unicode.ToLower(name[0])
	return string(name) + suffix
}

// call writes the call of a helper for the sequence that starts with seq.
func (w *symbolWriter) call(helper, kind string, list [][]int, seq []int, arg func(int) (string, error)) (string, error) {
	i := slices.IndexFunc(list, func(x []int) bool { return startsWith(x, seq) })
	args := []string{w.time}
	for _, q := range list[i] {
		s, err := arg(q)
		if err != nil {
			return "", err
		}
		args = append(args, s)
	}
	return w.body.value(kind, fmt.Sprintf("%s(%s)", w.helper(helper), strings.Join(args, ", ")), true), nil
}

// rate writes the mean of the roots of a prime.
func (w *symbolWriter) rate(prime int) (string, error) {
	return w.shared("rate", w.primes[prime].mean, true)
}

// shared writes an element that may occur in several places; own says that it
// has a variable of its own in any case.
func (w *symbolWriter) shared(kind string, x Constant, own bool) (string, error) {
	if w.k.IsNumber(x) {
		v, err := (&goWriter[Constant]{k: w.k}).float(x)
		return goFloat(v), err
	}
	p, err := w.body.element(w.k, x)
	return w.body.value(kind, p.String(), own), err
}

// factor writes a prime as an argument of the cascade.
func (w *symbolWriter) factor(prime int) (string, error) {
	q := w.primes[prime]
	rate, err := w.rate(prime)
	if err != nil {
		return "", err
	}
	list := []string{rate}
	if q.degree > 1 {
		for _, x := range append(q.p.Coefs()[:q.degree], q.moved.Coefs()[:q.degree-1]...) {
			s, err := w.shared("coef", x, false)
			if err != nil {
				return "", err
			}
			list = append(list, s)
		}
	}
	return "[]float64{" + strings.Join(list, ", ") + "}", nil
}

// pair writes the call of the helper for a quadratic prime.
func (w *symbolWriter) pair(prime int) (string, error) {
	q := w.primes[prime]
	rate, err := w.rate(prime)
	if err != nil {
		return "", err
	}
	d, err := w.shared("square", w.k.Neg(q.moved.Coef(0)), false)
	if err != nil {
		return "", err
	}
	product, err := w.shared("coef", q.p.Coef(0), false)
	return w.body.value("pair", fmt.Sprintf("%s(%s, %s, %s, %s)", w.helper("Pair"), w.time, rate, d, product), true), err
}
