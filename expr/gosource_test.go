package expr_test

import (
	"context"
	"fmt"
	"go/ast"
	"go/format"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"math"
	"math/big"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// checkGo parses and type-checks generated source, and returns its file.
func checkGo(t *testing.T, src []byte) *ast.File {
	t.Helper()
	files := token.NewFileSet()
	file, err := parser.ParseFile(files, "response.go", src, parser.ParseComments)
	require.NoError(t, err, "%s", src)
	_, err = (&types.Config{Importer: importer.Default()}).Check("response", files, []*ast.File{file}, nil)
	require.NoError(t, err, "%s", src)
	formatted, err := format.Source(src)
	require.NoError(t, err)
	require.Equal(t, string(formatted), string(src), "gofmt changes it")
	return file
}

// goValues runs a generated function: it evaluates the few forms of syntax that
// occur in one, and returns the fields of the result.
func goValues(t *testing.T, file *ast.File, at float64, constants ...float64) map[string]float64 {
	t.Helper()
	vars := map[string]float64{"t": at}
	var eval func(ast.Expr) float64
	eval = func(e ast.Expr) float64 {
		switch v := e.(type) {
		case *ast.BasicLit:
			x, err := strconv.ParseFloat(v.Value, 64)
			require.NoError(t, err)
			return x
		case *ast.Ident:
			x, ok := vars[v.Name]
			require.True(t, ok, v.Name)
			return x
		case *ast.ParenExpr:
			return eval(v.X)
		case *ast.UnaryExpr:
			require.Equal(t, token.SUB, v.Op)
			return -eval(v.X)
		case *ast.BinaryExpr:
			x, y := eval(v.X), eval(v.Y)
			switch v.Op {
			case token.ADD:
				return x + y
			case token.SUB:
				return x - y
			case token.MUL:
				return x * y
			}
		case *ast.IndexExpr:
			return constants[int(eval(v.Index))]
		case *ast.CallExpr:
			return map[string]func(float64) float64{"Exp": math.Exp, "Sin": math.Sin, "Cos": math.Cos}[v.Fun.(*ast.SelectorExpr).Sel.Name](eval(v.Args[0]))
		}
		t.Fatalf("unexpected %T", e)
		return 0
	}
	out := map[string]float64{}
	for _, d := range file.Decls {
		f, ok := d.(*ast.FuncDecl)
		if !ok || strings.HasSuffix(f.Name.Name, "Values") || strings.HasSuffix(f.Name.Name, "Rates") {
			continue
		}
		for _, s := range f.Body.List {
			switch v := s.(type) {
			case *ast.AssignStmt:
				if len(v.Lhs) == 2 {
					vars[v.Lhs[0].(*ast.Ident).Name], vars[v.Lhs[1].(*ast.Ident).Name] = math.Sincos(eval(v.Rhs[0].(*ast.CallExpr).Args[0]))
				} else {
					vars[v.Lhs[0].(*ast.Ident).Name] = eval(v.Rhs[0])
				}
			case *ast.ReturnStmt:
				for _, field := range v.Results[0].(*ast.CompositeLit).Elts {
					kv := field.(*ast.KeyValueExpr)
					out[kv.Key.(*ast.Ident).Name] = eval(kv.Value)
				}
			}
		}
	}
	return out
}

func goSource(t *testing.T, names []string, fs []expr.Function, constants []string, opt expr.GoOptions) []byte {
	t.Helper()
	src, err := expr.GoSource(t.Context(), names, fs, constants, opt)
	require.NoError(t, err)
	return src
}

func floatAt(t *testing.T, f expr.Function, x *big.Rat) float64 {
	t.Helper()
	s, err := f.At(t.Context(), x, 20)
	require.NoError(t, err)
	v, err := strconv.ParseFloat(s, 64)
	require.NoError(t, err)
	return v
}

// The generated function has the values of the exact one, to what float64 and
// the cancellation between terms allow.
func TestGoSourceValues(t *testing.T) {
	g := newGenerator(11)
	for round := range 60 {
		f, h := g.function(t), g.function(t)
		fs := []expr.Function{f, h}
		if round%3 == 0 { // the same in a local time
			origin := algebra.NewRat(1, 2)
			fs = []expr.Function{expr.NewFunction[algebra.Rat](algebra.Q, "t", origin, g.image(t)), expr.NewFunction[algebra.Rat](algebra.Q, "t", origin, g.image(t))}
		}
		file := checkGo(t, goSource(t, []string{"x", "y"}, fs, nil, expr.GoOptions{}))
		for _, x := range []*big.Rat{new(big.Rat), big.NewRat(1, 2), big.NewRat(-3, 4), big.NewRat(2, 1)} {
			xf, _ := x.Float64()
			got := goValues(t, file, xf)
			for i, name := range []string{"X", "Y"} {
				want := floatAt(t, fs[i], x)
				require.InDelta(t, want, got[name], 1e-7*(1+math.Abs(want)), "%s at %s", fs[i], x)
			}
		}
	}
}

// Constants in the source are the float64 nearest to the exact ones.
func TestGoSourceConstants(t *testing.T) {
	body := func(src string) string {
		s := string(goSource(t, []string{"x"}, []expr.Function{function(t, src)}, nil, expr.GoOptions{}))
		s, _, _ = strings.Cut(s[strings.Index(s, "func "):], "\n// ResponseValues")
		return s
	}
	for _, c := range []struct{ src, want string }{
		{"7", "func Response(_ float64) ResponseState {\n\treturn ResponseState{\n\t\tX: 7,\n\t}\n}\n"},
		{"t - t", "func Response(_ float64) ResponseState {\n\treturn ResponseState{\n\t\tX: 0,\n\t}\n}\n"},
		{"1/3*exp(-t)", "X: 0.3333333333333333 * e1"},
		{"exp(-t/10)", "e1 := math.Exp(-0.1 * t)"},
		{"t^3 - t/2 + 1", "X: 1 + t*(-0.5+t*t),"},
		{"sin(2*t)", "s1 := math.Sin(2 * t)"},
		{"cos(2*t)", "c1 := math.Cos(2 * t)"},
		{"sin(2*t) + cos(2*t)", "s1, c1 := math.Sincos(2 * t)"},
		// sqrt(2) = 1.41421356237309504880...
		{"sumroots(z, z^2 + 2, exp(z*t))", "c1 := math.Cos(1.4142135623730951 * t)"},
		// 1 + 2^-53 lies midway between 1 and the next float64; the even one is 1.
		{"9007199254740993/9007199254740992*cos(t)", "X: c1,"},
		{"exp(-9007199254740993/9007199254740992*t)", "math.Exp(-t)"},
		{"9007199254740995/9007199254740992*cos(t)", "X: 1.0000000000000004 * c1,"},
		// What rounds to 0 leaves no unused name behind.
		{"exp(-t)/10^400 + t", "X: t,"},
		{"exp(t/10^400)", "X: 1,"},
		{"cos(t)/10^400 + sin(t)", "X: s1,"},
		{"cos(t)*exp(-t)/10^400 + 3", "X: 3,"},
	} {
		got := body(c.src)
		assert.Contains(t, got, c.want, c.src)
	}
	for _, src := range []string{"10^400*exp(-t)", "exp(-10^400*t)", "cos(10^400*t)", "10^400*t"} {
		_, err := expr.GoSource(t.Context(), []string{"x"}, []expr.Function{function(t, src)}, nil, expr.GoOptions{})
		assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind, src)
	}
}

// Whatever is constant, missing or underflows, the source compiles.
func TestGoSourceCompiles(t *testing.T) {
	for _, src := range []string{"0", "5", "t", "t^2", "exp(-t)", "exp(-t)/10^400", "exp(t/10^400)", "cos(t)/10^400 + exp(-t)/10^400", "sin(t) + t*cos(t)", "exp(-t)*sin(t)", "sumroots(z, z^5 - z - 1, exp(z*t))"} {
		base := function(t, src)
		checkGo(t, goSource(t, []string{"x"}, []expr.Function{base}, nil, expr.GoOptions{}))
		image := elementary{}.Image()
		if !containsRoots(base) {
			image = elementaryOf(t, src).Image()
		}
		for _, origin := range []algebra.Rat{algebra.NewRat(2, 1), algebra.NewRat(-1, 3)} {
			f := expr.NewFunction[algebra.Rat](algebra.Q, "tau", origin, image, expr.FreeTerm[algebra.Rat]{Name: "C1", Image: image}, expr.FreeTerm[algebra.Rat]{Name: "C2", Image: elementaryOf(t, "exp(-2*t)").Image()})
			file := checkGo(t, goSource(t, []string{"x"}, []expr.Function{f}, []string{"C1", "C2"}, expr.GoOptions{}))
			with := valued(t, f, map[string]*big.Rat{"C1": big.NewRat(3, 1), "C2": big.NewRat(-1, 2)})
			want := floatAt(t, with, big.NewRat(1, 4))
			require.InDelta(t, want, goValues(t, file, 0.25, 3, -0.5)["X"], 1e-12*(1+math.Abs(want)), src)
		}
	}
	checkGo(t, goSource(t, nil, nil, nil, expr.GoOptions{}))

	f := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.Rat{}, expr.Image[algebra.Rat]{}, expr.FreeTerm[algebra.Rat]{Name: "C1", Image: elementaryOf(t, "exp(t)").Image()})
	_, err := expr.GoSource(t.Context(), []string{"x"}, []expr.Function{f}, []string{"C2"}, expr.GoOptions{})
	assert.Equal(t, expr.SideConditions, faultOf(t, err).kind)
	assert.Panics(t, func() {
		local := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.NewRat(1, 1), elementaryOf(t, "t").Image())
		_, _ = expr.GoSource(t.Context(), []string{"x", "y"}, []expr.Function{function(t, "t"), local}, nil, expr.GoOptions{})
	})
}

// Hostile names become distinct exported fields and harmless comments.
func TestGoSourceNames(t *testing.T) {
	fs := make([]expr.Function, len(hostileNames))
	for i := range fs {
		fs[i] = function(t, fmt.Sprintf("%d*exp(-t)", i+1))
	}
	src := goSource(t, hostileNames, fs, hostileNames[:5], expr.GoOptions{Package: "plant", Func: "respond", Doc: hostileNames})
	file := checkGo(t, src)
	values := goValues(t, file, 0, make([]float64, 5)...)
	require.Len(t, values, len(hostileNames), "every name has a field of its own")
	sum := 0.0
	for name, x := range values {
		assert.True(t, ast.IsExported(name), name)
		sum += x
	}
	n := float64(len(hostileNames))
	assert.InDelta(t, n*(n+1)/2, sum, 1e-9)
	require.Len(t, file.Imports, 1)
	for _, d := range file.Comments {
		for _, c := range d.List {
			assert.False(t, strings.HasPrefix(c.Text, "//go:") || strings.HasPrefix(c.Text, "// +build"), c.Text)
		}
	}
	assert.NotContains(t, string(src), "\u202e")
	again := goSource(t, hostileNames, fs, hostileNames[:5], expr.GoOptions{Package: "plant", Func: "respond", Doc: hostileNames})
	assert.Equal(t, string(src), string(again))
}

func TestGoSourceOptions(t *testing.T) {
	f := []expr.Function{function(t, "exp(-t) + 1")}
	for _, opt := range []expr.GoOptions{
		{Package: "func"}, {Package: "a b"}, {Package: "_"}, {Package: "x\nimport \"os\""}, {Package: "1a"},
		{Func: "func"}, {Func: "x.y"}, {Func: "f()"}, {Func: "_"}, {Func: "init"}, {Func: "main"}, {Func: "math"}, {Func: "float64"}, {Func: "append"},
	} {
		_, err := expr.GoSource(t.Context(), []string{"x"}, f, nil, opt)
		assert.Equal(t, expr.Syntax, faultOf(t, err).kind, "%+v", opt)
	}
	for _, opt := range []expr.GoOptions{{Package: "main"}, {Func: "t"}, {Func: "e1"}, {Func: "tau"}, {Func: "c"}, {Package: "math"}, {Func: "é"}, {Func: "string"}, {Func: "X"}, {Func: "dst"}, {Func: "times"}, {Func: "p1"}, {Func: "ResponseRates"}, {Func: "testing"}} {
		file := checkGo(t, goSource(t, []string{"x"}, f, nil, opt))
		var names []string
		for _, d := range file.Decls {
			if d, ok := d.(*ast.FuncDecl); ok {
				names = append(names, d.Name.Name)
			}
		}
		if opt.Func == "" {
			opt.Func = "Response"
		}
		assert.Equal(t, []string{opt.Func, opt.Func + "Values", opt.Func + "Rates"}, names)
	}
}

// The test file is formatted, the same every time, and its names are legal.
func TestGoTest(t *testing.T) {
	fs := make([]expr.Function, len(hostileNames))
	for i := range fs {
		fs[i] = function(t, fmt.Sprintf("%d*exp(-t)", i+1))
	}
	fs[0] = function(t, "exp(-t) + sin(2*t)/3")
	for name, want := range map[string]string{"": "TestResponseExact", "é": "TestÉExact", "_x": "Test_xExact", "Test": "TestTestExact", "ß": "Test_ßExact"} {
		opt := expr.GoOptions{Func: name, Doc: hostileNames}
		src, err := expr.GoTest(t.Context(), hostileNames, fs, nil, opt)
		require.NoError(t, err)
		file, err := parser.ParseFile(token.NewFileSet(), "response_test.go", src, 0)
		require.NoError(t, err, "%s", src)
		assert.NotNil(t, file.Scope.Lookup(want), want)
		formatted, err := format.Source(src)
		require.NoError(t, err)
		require.Equal(t, string(formatted), string(src))
		again, err := expr.GoTest(t.Context(), hostileNames, fs, nil, opt)
		require.NoError(t, err)
		require.Equal(t, string(src), string(again))
	}
	_, err := expr.GoTest(t.Context(), []string{"x"}, fs[:1], nil, expr.GoOptions{Func: "testing"})
	assert.Equal(t, expr.Syntax, faultOf(t, err).kind)
	_, err = expr.GoTest(t.Context(), []string{"x"}, []expr.Function{function(t, "k*t")}, nil, expr.GoOptions{})
	assert.Equal(t, expr.NeedsAssumption, faultOf(t, err).kind)
	_, err = expr.GoTest(t.Context(), nil, nil, nil, expr.GoOptions{})
	require.NoError(t, err)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, err = expr.GoTest(ctx, hostileNames, fs, nil, expr.GoOptions{})
	assert.Equal(t, expr.Cancelled, faultOf(t, err).kind)
}

// Exact values stand in comments where they are short and not what the constant
// says by itself.
func TestGoSourceExactValues(t *testing.T) {
	for _, c := range []struct{ src, want, not string }{
		{"exp(-t/3)/7", "// 0.3333333333333333 is 1/3, 0.14285714285714285 is 1/7.", ""},
		{"exp(-t/10)*3/8 - 5", "", " is "},
		{"cos(sqrt(2)*t)*sqrt(3)", "1.4142135623730951 is sqrt(2)", ""},
		{"sin(sqrt(2)*t)/sqrt(2)", "0.7071067811865476 is ", ""},
		{"exp(-t/7)*(cos(pi*t)/3 + t*sin(pi*t)/exp(1))", "3.141592653589793 is pi", ""},
		{"exp(sqrt(3)*t)*sin(t)/sqrt(6) + sqrt(5)*t*exp(-sqrt(3)*t)", "1.7320508075688772 is sqrt(3)", ""},
		{"exp(-pi*t) + pi^2", "9.869604401089358 is pi^2, 3.141592653589793 is pi.", ""},
		{"exp(-(1 + sqrt(5))*t/2) + exp(-(1 - sqrt(5))*t/2)", "1.618033988749895 is ", ""},
		{"sumroots(z, z^2 + 4*z + 2, (1 + z)*exp(z*t))", "3.414213562373095 is 2 + sqrt(2)", ""},
		{"sumroots(z, z^3 - z - 1, exp(z*t))", "0.662358978622373 is -re(root(2, z^3 - z - 1))", ""},
		{"sumroots(z, z^3 - z - 1, exp(z*t))", "1.324717957244746 is root(1, z^3 - z - 1)", ""},
		{"exp(-123456789012345678901234567890123/1000000000000000000000000000000001*t)", "", "123456789012345678901234567890123/1000000000000000000000000000000001."},
	} {
		src := string(goSource(t, []string{"x"}, []expr.Function{function(t, c.src)}, nil, expr.GoOptions{}))
		_, body, _ := strings.Cut(src, "func Response(")
		body = strings.ReplaceAll(body, "\n\t// ", " ")
		body = strings.Replace(body, "{ ", "{\n\t// ", 1)
		assert.Contains(t, body, c.want, "%s", src)
		for _, m := range regexp.MustCompile(`([0-9.e+-]+) is ([^,]*?)(?:, |\.\n)`).FindAllStringSubmatch(body, -1) {
			if strings.Contains(m[2], "root(") {
				continue
			}
			x, err := strconv.ParseFloat(m[1], 64)
			require.NoError(t, err)
			assert.Equal(t, x, floatAt(t, function(t, m[2]), new(big.Rat)), "%s", m[0])
		}
		if c.not != "" {
			assert.NotContains(t, body, c.not)
		}
	}
}
