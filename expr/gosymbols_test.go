package expr_test

import (
	"fmt"
	"go/ast"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// linearFactor returns s + x.
func linearFactor(k *expr.Constants, x expr.Constant) algebra.Poly[expr.Constant] {
	return algebra.NewPoly[expr.Constant](k, x, k.One())
}

// over returns the function with the image num/(the product of the factors).
func over(k *expr.Constants, num expr.Constant, factors ...algebra.Poly[expr.Constant]) expr.Function {
	d := expr.Denominator[expr.Constant]{}
	for i, p := range factors {
		e := expr.NewDenominator[expr.Constant](k, []algebra.Factor[expr.Constant]{{P: p, Mult: 1}})
		if i == 0 {
			d = e
		} else {
			d = d.Mul(e)
		}
	}
	return expr.NewFunction[expr.Constant](k, "t", k.Zero(), d.Image(algebra.Constant[expr.Constant](k, num)))
}

// fieldsOf returns the names of the fields of a type.
func fieldsOf(file *ast.File, name string) []string {
	var out []string
	ast.Inspect(file, func(n ast.Node) bool {
		if s, ok := n.(*ast.TypeSpec); ok && s.Name.Name == name {
			for _, f := range s.Type.(*ast.StructType).Fields.List {
				out = append(out, f.Names[0].Name)
			}
		}
		return true
	})
	return out
}

// Hostile names of symbols become distinct exported fields and harmless
// comments, with any name of the function.
func TestGoSymbolsNames(t *testing.T) {
	names := append([]string{"type", "range", "exp", "cos", "p", "P", "validate", "Validate", "errors", "NaN", "rate1", "sum1", "K", "k", "k_1", "k1"}, hostileNames...)
	seen := map[string]bool{}
	var symbols []string
	for _, name := range names {
		if !seen[name] {
			symbols = append(symbols, name)
			seen[name] = true
		}
	}
	k := expr.NewConstants(symbols...)
	var fs []expr.Function
	for i := range symbols {
		x, y := k.Variable(i), k.Variable((i+1)%len(symbols))
		fs = append(fs, over(k, k.Add(x, y), linearFactor(k, x), linearFactor(k, y)))
	}
	for _, opt := range []expr.GoOptions{{}, {Package: "math", Func: "t", Doc: symbols}, {Package: "errors", Func: "p"}, {Func: "rate1"}, {Func: "exp1"}, {Func: "Validate"}, {Func: "diff1"}, {Func: "温度"}, {Func: "É"}, {Func: "X"}, {Func: "string"}} {
		if opt.Package == "" && opt.Func != "" {
			symbols, fs = symbols[:20], fs[:19]
		}
		states := symbols[:len(fs)]
		src := goSource(t, states, fs, nil, opt)
		file := checkGo(t, src)
		if opt.Func == "" {
			opt.Func = "Response"
		}
		fields := fieldsOf(file, opt.Func+"Params")
		require.Len(t, fields, len(symbols), opt.Func)
		distinct := map[string]bool{"Validate": true}
		for _, f := range fields {
			assert.True(t, ast.IsExported(f), f)
			assert.False(t, distinct[f], f)
			distinct[f] = true
		}
		for _, d := range file.Comments {
			for _, c := range d.List {
				assert.False(t, strings.HasPrefix(c.Text, "//go:") || strings.HasPrefix(c.Text, "// +build"), c.Text)
			}
		}
		require.Equal(t, string(src), string(goSource(t, states, fs, nil, opt)), "the same every time")
	}
	for _, name := range []string{"len", "make", "max", "append", "errors", "math", "float64", "nil", "func"} {
		_, err := expr.GoSource(t.Context(), symbols[:len(fs)], fs, nil, expr.GoOptions{Func: name})
		assert.Equal(t, expr.Syntax, faultOf(t, err).kind, name)
	}
}

// The source holds what it needs, and nothing else.
func TestGoSymbolsSource(t *testing.T) {
	for _, c := range []struct {
		src      string
		contains []string
		missing  []string
	}{
		{"a*exp(-k*t)", []string{"rate1 := -p.K", "X: p.A * exp1,"}, []string{"func responseDivided", "func responsePair", "func responseCascade"}},
		{"a*t^3 + exp(-2*t)", []string{"X: "}, []string{"responseDivided(", "responsePair("}},
		{"a*exp(-t/3) + exp(-t)", []string{"math.Exp(-0.3333333333333333 * t)", "math.Exp(-t)"}, nil},
		{"a*exp(-k*t) - b*exp(-m*t)", []string{"func responseDivided"}, []string{"responsePair("}},
		{"a*exp(-t/3)*cos(pi*t/12)", []string{"math.Exp(-0.3333333333333333 * t)", "0.26179938779914946 * t"}, []string{"responsePair(", "responseDivided("}},
		{"exp(-k*t)*sin(3*t)", []string{"func responsePair", "func responseRates"}, []string{"responseDivided(", "responseCascade("}},
		{"a + exp(-k*t)*sin(w*t)", []string{"func responsePair", "func responseDivided", "func responseCascade"}, []string{"responseRoots("}},
		{"sumroots(z, z^3 + k*z + 1, exp(z*t))", []string{"func responseCascade", "func responseRoots"}, nil},
		{"a*exp(-2*t) + b*exp(-2001/1000*t)", []string{"responseDivided(t, -2.001, -2)"}, []string{"responsePair("}},
		{"a*exp(-2*t) + b*exp(-3*t)", []string{"X: p.A*exp1 + p.B*exp2,"}, []string{"responseDivided("}},
		{"exp(k)*cos(phi)*exp(-t)", []string{"math.Exp(p.K)", "math.Cos(p.Phi)"}, nil},
		{"a*sqrt(2)/3*exp(-t)", []string{"0.4714045207910317 * p.A"}, nil},
		{"a*exp(2)*exp(-t)/7", []string{"1.0555794427043785 * p.A"}, nil},
		{"a/(b - c)", []string{"case p.B-p.C == 0:", `"b must not equal c"`, "X: p.A / (p.B - p.C),"}, nil},
		{"(a^2 - 2*a*b + b^2)*exp(-t)", []string{"sum1 := p.A - p.B", "sum1 * sum1 * exp1"}, nil},
		{"a^12*exp(-t)", []string{"math.Pow(p.A, 12)"}, nil},
		{"a + 1/3", []string{"(3*p.A + 1) / 3"}, nil},
		{"sin(t)/3 + a*exp(-2*t)", []string{"0.3333333333333333*s1 + p.A*exp1"}, nil},
		{"exp(-t/(b + 1))", []string{"rate1 := -1.0 / (p.B + 1)"}, nil},
	} {
		src := string(goSource(t, []string{"x"}, []expr.Function{function(t, c.src)}, nil, expr.GoOptions{}))
		checkGo(t, []byte(src))
		for _, s := range c.contains {
			assert.Contains(t, src, s, c.src)
		}
		for _, s := range c.missing {
			assert.NotContains(t, src, s, c.src)
		}
	}
}

// Functions over different fields meet in one; what cannot be written is refused
// by name.
func TestGoSymbolsFields(t *testing.T) {
	fs := []expr.Function{function(t, "exp(-2*t)"), function(t, "exp(-k*t)"), function(t, "m*exp(-k*t)*cos(pi*t)")}
	file := checkGo(t, goSource(t, []string{"x", "y", "z"}, fs, nil, expr.GoOptions{}))
	assert.ElementsMatch(t, []string{"K", "M"}, fieldsOf(file, "ResponseParams"))

	symbols := make([]string, 25)
	for i := range symbols {
		symbols[i] = fmt.Sprintf("k%d", i)
	}
	k := expr.NewConstants(symbols...)
	var factors []algebra.Poly[expr.Constant]
	for i := range symbols {
		factors = append(factors, linearFactor(k, k.Variable(i)))
	}
	checkGo(t, goSource(t, []string{"x"}, []expr.Function{over(k, k.One(), factors[:24]...)}, nil, expr.GoOptions{}))
	_, err := expr.GoSource(t.Context(), []string{"x"}, []expr.Function{over(k, k.One(), factors...)}, nil, expr.GoOptions{})
	assert.Equal(t, expr.OutsideClass, faultOf(t, err).kind)
	assert.ErrorContains(t, err, "25 rates may coincide")

	free := expr.NewFunction[expr.Constant](k, "t", k.Zero(), expr.Image[expr.Constant]{}, expr.FreeTerm[expr.Constant]{Name: "C1", Image: expr.NewDenominator[expr.Constant](k, []algebra.Factor[expr.Constant]{{P: factors[0], Mult: 1}}).Image(algebra.Constant[expr.Constant](k, k.One()))})
	src := string(goSource(t, []string{"x"}, []expr.Function{free}, []string{"C1"}, expr.GoOptions{}))
	checkGo(t, []byte(src))
	assert.Contains(t, src, "t float64, c [1]float64")
	_, err = expr.GoSource(t.Context(), []string{"x"}, []expr.Function{free}, []string{"C2"}, expr.GoOptions{})
	assert.Equal(t, expr.SideConditions, faultOf(t, err).kind)
}
