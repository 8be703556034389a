package expr_test

import (
	"errors"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

func TestParse(t *testing.T) {
	for _, c := range []struct{ name, src, want string }{
		{"number", "12", "12"},
		{"decimal", "0.35", "7/20"},
		{"power of ten", "1.5e-3", "3/2000"},
		{"leading zeros are decimal", "010", "10"},
		{"sum", "a+b-c", "a + b - c"},
		{"product before sum", "a+b*c", "a + b*c"},
		{"left to right", "a/b/c", "a/b/c"},
		{"quotient then product", "a/b*c", "a/b*c"},
		{"power before product", "2*x^2", "2*x^2"},
		{"power to the right", "2^3^2", "2^(3^2)"},
		{"sign of an exponent", "x^-2", "x^(-2)"},
		{"sign of an exponent and power", "x^-2^3", "x^(-2^3)"},
		{"sign before power", "-x^2", "-x^2"},
		{"sign before product", "-x*y", "-x*y"},
		{"plus sign", "+x", "x"},
		{"signs after operators", "a*-b", "a*(-b)"},
		{"double sign", "a - -b", "a - (-b)"},
		{"many signs", "--+-a", "-(-(-a))"},
		{"parentheses", "(a+b)*(c)", "(a + b)*c"},
		{"number before a name", "2x", "2*x"},
		{"number before a parenthesis", "2(x+1)", "2*(x + 1)"},
		{"number before a function", "2 exp(-t)", "2*exp(-t)"},
		{"number with e before a function", "2exp(t)", "2*exp(t)"},
		{"parentheses side by side", "(a)(b)", "a*b"},
		{"parenthesis before a name", "(a+b)c", "(a + b)*c"},
		{"fraction before a name", "1/2x", "1/2*x"},
		{"fraction before a function", "-3/2 sin(t)", "-3/2*sin(t)"},
		{"power before a name", "2^3x", "2^3*x"},
		{"sign and implied product", "-2x", "-2*x"},
		{"quotient by a parenthesis", "a/(b c)", "!"},
		{"functions", "exp(t)+sin(t)+cos(t)+sinh(t)+cosh(t)+sqrt(2)+step(t-2)+impulse(t)",
			"exp(t) + sin(t) + cos(t) + sinh(t) + cosh(t) + sqrt(2) + step(t - 2) + impulse(t)"},
		{"power of a function", "sin^2(t)", "sin(t)^2"},
		{"power of a function, raised sign", "cos²(2t)", "cos(2*t)^2"},
		{"power after a function", "sin(t)^2", "sin(t)^2"},
		{"derivatives", "x' + x'' + x'''' ", "x' + x'' + x''''"},
		{"derivative, typographic", "x′ + x″ + x‴", "x' + x'' + x'''"},
		{"value", "x(0)", "x(0)"},
		{"value of a derivative", "x''(1/2)", "x''(1/2)"},
		{"function of time", "x(t) + x'(t)", "x(t) + x'(t)"},
		{"derivative squared", "x'^2", "x'^2"},
		{"pi", "2π", "2*pi"},
		{"Greek", "α·β", "α*β"},
		{"typographic", "−2·x² × 3 ÷ y³", "-2*x^2*3/y^3"},
		{"minus", "a − b – c", "a - b - c"},
		{"raised number", "10²³", "10^23"},
		{"lines in parentheses", "(a +\n b)", "a + b"},
		{"lines around", "\n\n a \n\n", "a"},
		{"no-break space", "a\u00a0+\u00a0b", "a + b"},
		{"comment", "a # + b", "a"},
		{"roots", "sumroots(z, z^3 - z - 1, exp(z*t)/(3z^2-1))", "sumroots(z, z^3 - z - 1, exp(z*t)/(3*z^2 - 1))"},
		{"sumroots alone is a name", "sumroots", "sumroots"},
		{"names that mean nothing", "func + os", "func + os"},
	} {
		t.Run(c.name, func(t *testing.T) {
			n, err := expr.Parse(c.src, expr.Limits{})
			if c.want == "!" {
				require.Error(t, err)
				return
			}
			require.NoError(t, err)
			assert.Equal(t, c.want, n.String())
		})
	}
}

func TestParseModel(t *testing.T) {
	text, err := expr.ParseModel("\ufeff# a tank\r\nk = 0.35\r\n\r\nx′ = −k·x + y;; y' = (k*x\r\n - y) # end\nindependent tau\nx(0) = 1;  y(0) = 0", expr.Limits{})
	require.NoError(t, err)
	var lines []string
	for _, e := range text.Equations {
		lines = append(lines, e.String())
	}
	assert.Equal(t, []string{"k = 7/20", "x' = -k*x + y", "y' = k*x - y", "x(0) = 1", "y(0) = 0"}, lines)
	assert.Equal(t, "tau", text.Variable)
	assert.Equal(t, expr.Pos{Line: 4, Column: 17}, text.Equations[2].Pos)

	empty, err := expr.ParseModel(" \n# nothing\n;", expr.Limits{})
	require.NoError(t, err)
	assert.Empty(t, empty.Equations)
	assert.Equal(t, "t", empty.Variable)
}

// at is an error's kind and place.
type at struct {
	kind         expr.Kind
	line, column int
}

func faultOf(t *testing.T, err error) at {
	t.Helper()
	var e *expr.Error
	require.True(t, errors.As(err, &e), "error %v", err)
	assert.NotEmpty(t, e.Message)
	return at{e.Kind, e.Pos.Line, e.Pos.Column}
}

func TestParseErrors(t *testing.T) {
	for _, c := range []struct {
		name, src string
		want      at
	}{
		{"empty", "", at{expr.Syntax, 1, 1}},
		{"only a comment", "# x", at{expr.Syntax, 1, 4}},
		{"missing operand", "a + ", at{expr.Syntax, 1, 5}},
		{"missing operand in line 2", "(α +\n )", at{expr.Syntax, 2, 2}},
		{"operator first", "*a", at{expr.Syntax, 1, 1}},
		{"two operators", "αβ + * b", at{expr.Syntax, 1, 6}},
		{"two names", "a b", at{expr.Syntax, 1, 3}},
		{"two numbers", "2 3", at{expr.Syntax, 1, 3}},
		{"number after a name", "x 3", at{expr.Syntax, 1, 3}},
		{"ambiguous quotient", "a/2x", at{expr.Syntax, 1, 4}},
		{"ambiguous quotient of a parenthesis", "1/(a)b", at{expr.Syntax, 1, 6}},
		{"blank before an argument", "x (0)", at{expr.Syntax, 1, 3}},
		{"stray prime", "2'", at{expr.Syntax, 1, 2}},
		{"prime after an argument", "x(0)'", at{expr.Syntax, 1, 5}},
		{"not closed", "2*(a + (b)", at{expr.Syntax, 1, 3}},
		{"not closed before the next line", "(a\nb'", at{expr.Syntax, 2, 1}},
		{"closed too often", "(a))", at{expr.Syntax, 1, 4}},
		{"empty parentheses", "x()", at{expr.Syntax, 1, 3}},
		{"function without argument", "sin", at{expr.Syntax, 1, 4}},
		{"function without parentheses", "sin t", at{expr.Syntax, 1, 5}},
		{"inverse function", "sin^-1(t)", at{expr.Syntax, 1, 5}},
		{"two arguments", "exp(a, b)", at{expr.Syntax, 1, 6}},
		{"decimal comma", "0,35", at{expr.Syntax, 1, 2}},
		{"two points", "1.2.3", at{expr.Syntax, 1, 4}},
		{"illegal character", "α + $", at{expr.Syntax, 1, 5}},
		{"backslash", `\input{x}`, at{expr.Syntax, 1, 1}},
		{"markup", "<script>", at{expr.Syntax, 1, 1}},
		{"invalid UTF-8", "αβ\xff", at{expr.Syntax, 1, 3}},
		{"NUL", "\x00", at{expr.Syntax, 1, 1}},
		{"equation", "a = b", at{expr.Syntax, 1, 3}},
		{"two statements", "a; b", at{expr.Syntax, 1, 4}},
		{"roots without a name", "sumroots(2, z, z)", at{expr.Syntax, 1, 10}},
		{"roots with two arguments", "sumroots(z, z)", at{expr.Syntax, 1, 14}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := expr.Parse(c.src, expr.Limits{})
			assert.Equal(t, c.want, faultOf(t, err), "%v", err)
		})
	}
}

func TestParseModelErrors(t *testing.T) {
	for _, c := range []struct {
		name, src string
		want      at
	}{
		{"no equation sign", "x' = 1\nx' + 2", at{expr.Syntax, 2, 7}},
		{"two equation signs", "x = y = z", at{expr.Syntax, 1, 7}},
		{"no right side", "x' =", at{expr.Syntax, 1, 5}},
		{"no left side", "a=1;= 2", at{expr.Syntax, 1, 5}},
		{"not closed", "x' = (1 + 2\ny' = 3", at{expr.Syntax, 1, 6}},
		{"no variable", "independent", at{expr.Syntax, 1, 12}},
		{"a number as variable", "independent 3", at{expr.Syntax, 1, 13}},
		{"two variables", "independent a\nindependent b", at{expr.Syntax, 2, 1}},
		{"pi as variable", "independent π", at{expr.Syntax, 1, 13}},
		{"a function as variable", "independent exp", at{expr.Syntax, 1, 13}},
		{"more behind the variable", "independent a b", at{expr.Syntax, 1, 15}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := expr.ParseModel(c.src, expr.Limits{})
			assert.Equal(t, c.want, faultOf(t, err), "%v", err)
		})
	}
}

// Hostile texts end in an error or a result, soon.
func TestParseHostile(t *testing.T) {
	rep := strings.Repeat
	for _, c := range []struct {
		name, src string
		want      expr.Kind // "" for success
	}{
		{"parentheses", rep("(", 1e6), expr.LimitExceeded},
		{"parentheses, few", rep("(", 400) + "1" + rep(")", 400), ""},
		{"signs", rep("-", 1e6) + "1", expr.LimitExceeded},
		{"calls", rep("sin(", 1e6), expr.LimitExceeded},
		{"values", rep("x(", 1e6), expr.LimitExceeded},
		{"roots", rep("sumroots(z,", 1e5), expr.LimitExceeded},
		{"powers", "2" + rep("^2", 1e6), expr.LimitExceeded},
		{"quotients", "1" + rep("/2", 1e6), expr.LimitExceeded},
		{"quotients in parentheses", rep("(", 400) + "1" + rep("/2/2)", 400), expr.LimitExceeded},
		{"quotients in divisors", "1" + rep("/(1/2", 300) + rep(")", 300), ""},
		{"primes", "x" + rep("'", 1e6), expr.LimitExceeded},
		{"double primes", "x" + rep("″", 1e5), expr.LimitExceeded},
		{"digits", rep("7", 1e5), expr.LimitExceeded},
		{"digits after the point", "0." + rep("7", 1e5), expr.LimitExceeded},
		{"raised digits", "t" + rep("²", 1e5), expr.LimitExceeded},
		{"digits within the limit", rep("7", 3e4), ""},
		{"power of ten", "1e999999999", expr.LimitExceeded},
		{"negative power of ten", "1e-999999999", expr.LimitExceeded},
		{"power of ten beyond int64", "1e" + rep("9", 40), expr.LimitExceeded},
		{"power of ten at a quarter of 2^64", "1e4611686018427387904", expr.LimitExceeded},
		{"terms", "1" + rep("+1", 1e6), expr.LimitExceeded},
		{"factors", "1" + rep("*1", 1e6), expr.LimitExceeded},
		{"implied factors", rep("(1)", 1e6), expr.LimitExceeded},
		{"name", rep("x", 1e6), ""},
		{"comments", rep("#\n", 1e6) + "x", ""},
		{"semicolons", rep(";", 1e6) + "x", ""},
		{"text", rep(" ", 5<<20), expr.LimitExceeded},
		{"combining marks", "x" + rep("\u0301", 1e6), ""},
		{"invalid UTF-8", rep("\xff", 1e6), expr.Syntax},
		{"byte order marks", rep("\ufeff", 1e5), expr.Syntax},
	} {
		t.Run(c.name, func(t *testing.T) {
			start := time.Now()
			n, err := expr.Parse(c.src, expr.Limits{})
			if c.want != "" {
				assert.Equal(t, c.want, faultOf(t, err).kind)
				assert.Less(t, len(err.Error()), 300)
			} else {
				require.NoError(t, err)
				assert.NotEmpty(t, n.String())
			}
			assert.Less(t, time.Since(start), 5*time.Second)
		})
	}
}

func TestParseLimits(t *testing.T) {
	small := expr.Limits{Nesting: 5, Text: 60, Terms: 4, Degree: 3, Bits: 30}
	for _, src := range []string{
		"((((((1))))))", "1/1/1/1/1/1/1", "1+1+1+1+1", "1*1*1*1*1", "x''''", "12345678901", "1e9", rep60,
	} {
		_, err := expr.Parse(src, small)
		assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind, src)
	}
	for _, src := range []string{"(((1)))", "1/1/1/1/1/1", "1+1+1+1", "x'''", "1234567890", "1e7"} {
		_, err := expr.Parse(src, small)
		assert.NoError(t, err, src)
	}
	_, err := expr.ParseModel("a=1;a=1;a=1;a=1;a=1", small)
	assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind)
}

var rep60 = strings.Repeat(" ", 61)

// The text of any tree reads back as a tree with the same text.
func TestTextRoundTrip(t *testing.T) {
	g := newGenerator(1)
	for range 3000 {
		n := g.tree(1 + g.Intn(5))
		back, err := expr.Parse(n.String(), expr.Limits{})
		require.NoError(t, err, n.String())
		require.Equal(t, n.String(), back.String())
	}
}

// A tree and the one read from its text are not only written alike: a tree that
// binds differently is written differently.
func TestTextTellsTreesApart(t *testing.T) {
	a, b, c := expr.Sym("a"), expr.Sym("b"), expr.Sym("c")
	for _, x := range []struct {
		n    expr.Node
		want string
	}{
		{expr.Quotient{Num: a, Den: expr.Product{Factors: []expr.Node{b, c}}}, "a/(b*c)"},
		{expr.Quotient{Num: expr.Product{Factors: []expr.Node{a, b}}, Den: c}, "a*b/c"},
		{expr.Product{Factors: []expr.Node{a, expr.Quotient{Num: b, Den: c}}}, "a*(b/c)"},
		{expr.Power{Base: expr.Power{Base: a, Exp: b}, Exp: c}, "(a^b)^c"},
		{expr.Power{Base: a, Exp: expr.Power{Base: b, Exp: c}}, "a^(b^c)"},
		{expr.Power{Base: expr.Neg{X: a}, Exp: b}, "(-a)^b"},
		{expr.Neg{X: expr.Power{Base: a, Exp: b}}, "-a^b"},
		{expr.Power{Base: expr.Int(-2), Exp: expr.Int(2)}, "(-2)^2"},
		{expr.Neg{X: expr.Sum{Terms: []expr.Node{a, b}}}, "-(a + b)"},
		{expr.Sum{Terms: []expr.Node{a, expr.Neg{X: expr.Sum{Terms: []expr.Node{b, c}}}}}, "a - (b + c)"},
		{expr.Sum{Terms: []expr.Node{a, expr.Sum{Terms: []expr.Node{b, c}}}}, "a + (b + c)"},
		{expr.Quotient{Num: expr.Neg{X: a}, Den: b}, "(-a)/b"},
		{expr.Neg{X: expr.Quotient{Num: a, Den: b}}, "-a/b"},
		{expr.Value{Name: "x", Order: 2, At: expr.Neg{X: a}}, "x''(-a)"},
	} {
		require.Equal(t, x.want, x.n.String())
		back, err := expr.Parse(x.want, expr.Limits{})
		require.NoError(t, err)
		require.Equal(t, x.want, back.String())
	}
}
