package expr_test

import (
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

func TestLaTeX(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		{"1/2", `\frac{1}{2}`},
		{"-7/3", `-\frac{7}{3}`},
		{"a*b + c", `a b + c`},
		{"2*3", `2 \cdot 3`},
		{"a*2", `a \cdot 2`},
		{"2*x^2", `2 x^{2}`},
		{"a*2^3", `a \cdot 2^{3}`},
		{"(a+b)*c", `(a + b) c`},
		{"a - (b - c)", `a - (b - c)`},
		{"-(a + b)", `-(a + b)`},
		{"a/b", `\frac{a}{b}`},
		{"(a+b)/(c*d)", `\frac{a + b}{c d}`},
		{"(a/b)^2", `\left(\frac{a}{b}\right)^{2}`},
		{"a^b^c", `a^{b^{c}}`},
		{"(a^b)^c", `(a^{b})^{c}`},
		{"(-a)^2", `(-a)^{2}`},
		{"x^-1", `x^{-1}`},
		{"exp(-t)", `e^{-t}`},
		{"exp(-t/2)", `e^{-t/2}`},
		{"exp(t)^2", `(e^{t})^{2}`},
		{"exp(a/(b*c))", `e^{a/(b c)}`},
		{"2*exp(-t)*cos(3*t)", `2 e^{-t} \cos(3 t)`},
		{"sin(t/2)", `\sin\left(\frac{t}{2}\right)`},
		{"sin^2(t)", `\sin^{2}(t)`},
		{"sinh(t) + cosh(t)", `\sinh(t) + \cosh(t)`},
		{"sqrt(3)*t/2", `\frac{\sqrt{3} \, t}{2}`},
		{"step(t - 2)*impulse(t)", `\operatorname{step}(t - 2) \delta(t)`},
		{"x'' + 2*x' + x", `x'' + 2 x' + x`},
		{"x''''", `x^{(4)}`},
		{"x''''^2", `(x^{(4)})^{2}`},
		{"x'^2", `(x')^{2}`},
		{"x(0)", `x(0)`},
		{"x'(0)^2", `x'(0)^{2}`},
		{"x''''(1/2)", `x^{(4)}\left(\frac{1}{2}\right)`},
		{"alpha*β + Omega", `\alpha \beta + \Omega`},
		{"pi", `\pi`},
		{"k_12*x1", `k_{12} x_{1}`},
		{"x₁₂^2", `x_{12}^{2}`},
		{"temp_out", `\mathrm{temp}_{\mathrm{out}}`},
		{"sumroots(z, z^3 - z - 1, exp(z*t)/(3*z^2 - 1))", `\sum_{z:\, z^{3} - z - 1 = 0} \frac{e^{z t}}{3 z^{2} - 1}`},
		{"t + 2*sumroots(z, z^3 - 2, z + 1)", `t + 2 \left(\sum_{z:\, z^{3} - 2 = 0} (z + 1)\right)`},
		{"1 - sumroots(z, z^3 - 2, exp(z*t)) + t", `1 - \left(\sum_{z:\, z^{3} - 2 = 0} e^{z t}\right) + t`},
		{"t - sumroots(z, z^3 - 2, exp(z*t))", `t - \sum_{z:\, z^{3} - 2 = 0} e^{z t}`},
		{"-sumroots(z, z^3 - 2, z)", `-\left(\sum_{z:\, z^{3} - 2 = 0} z\right)`},
		{"sumroots(z, z^3 - 2, z)^2", `\left(\sum_{z:\, z^{3} - 2 = 0} z\right)^{2}`},
	} {
		n, err := expr.Parse(c.src, expr.Limits{})
		require.NoError(t, err)
		assert.Equal(t, c.want, expr.LaTeX(n), c.src)
	}
	assert.Equal(t, `\frac{1}{3} t^{2} e^{-t/2}`, function(t, "t^2*exp(-t/2)/3").LaTeX())
	assert.Equal(t, `2 e^{-t/2} \cos\left(\frac{\sqrt{3} \, t}{2}\right)`, function(t, "sumroots(z, z^2+z+1, exp(z*t))").LaTeX())
}

func TestLaTeXName(t *testing.T) {
	for name, want := range map[string]string{
		"x": "x", "X": "X", "x1": "x_{1}", "x_1": "x_{1}", "x_12_3": "x_{12,3}", "k12": "k_{12}",
		"temp": `\mathrm{temp}`, "T_in": `T_{\mathrm{in}}`, "omega0": `\omega_{0}`, "ω_0": `\omega_{0}`,
		"Δp": `\mathrm{\Delta p}`, "x₁": "x_{1}", "x₁₂": "x_{12}", "ο": "o", "ς": `\varsigma`,
		"12": "12", "été": `\mathrm{\text{é}t\text{é}}`, "": `\mathrm{}`, "_": `\mathrm{\_}`, "x_": "x",
		"lambda_out": `\lambda_{\mathrm{out}}`, "a_b₁": `a_{\mathrm{b1}}`, "₁": "1",
	} {
		assert.Equal(t, want, expr.LaTeXName(name), name)
	}
}

// hostileNames are names that a matrix model could give its states.
var hostileNames = []string{
	"", " ", "_", "___", "func", "X", "x", "init", "math", "float64", "t", "e1", "c", "12", "1x", "-", "...", "'", "''", "`",
	`\write18{rm -rf /}`, `\input{x}`, `}{`, `}}\end{document}`, "$x$", "%", "#1", "&", "^^41", "~", "x^2_3", "{", "}", `\`,
	"<script>alert(1)</script>", `"><img src=x onerror=alert(1)>`, "&lt;", "</mi>", "<!--", "]]>", "javascript:x",
	"x\"; os.Exit(1)", "*/ os.Exit(1) /*", "x\nimport \"os\"", "\r", "\u2028", "\u202eevil", "\x00", "\x1b[31m", "\ufeff", "\ufffe", "x\xff",
	"//go:build ignore", "\n//go:embed x", "+build", "温度", "ß", "ǆ", "é", "e\u0301", "𝑥", "x₁₂", "₀", "²", "١", "a_b_c", "a__b", "α", "Α", "ͅ",
	strings.Repeat("long", 200), "\u00ad", "\U000e0041", "🙂",
}

// latexCommands are all that names may expand to.
var latexCommands = regexp.MustCompile(`\\([a-zA-Z]+|.)`)

func TestLaTeXNameInert(t *testing.T) {
	allowed := map[string]bool{"mathrm": true, "text": true, "backslash": true, "varsigma": true}
	for _, w := range strings.Fields("alpha beta gamma Delta Omega pi") {
		allowed[w] = true
	}
	for _, name := range hostileNames {
		for _, s := range []string{
			expr.LaTeXName(name),
			expr.LaTeX(expr.Add(expr.Sym(name), expr.Pow(expr.Derivative(name, 2), 2), expr.RootSum{Var: name, Poly: expr.Sym(name), Body: expr.Sym(name)})),
		} {
			requireBalanced(t, s)
			for _, m := range latexCommands.FindAllStringSubmatch(s, -1) {
				switch m[1] {
				case "sum", ",", ":":
				default:
					if len(m[1]) > 1 || strings.ContainsAny(m[1], "abcdefghijklmnopqrstuvwxyz") {
						require.True(t, allowed[m[1]], "%q in %q", m[0], s)
					} else {
						require.Contains(t, `#$%&{}_^~`, m[1], "%q in %q", m[0], s)
					}
				}
			}
			plain := latexCommands.ReplaceAllString(s, "")
			require.False(t, strings.ContainsAny(plain, "$%#&~\"\n\r\x00"), "%q", s)
			require.NotContains(t, plain, "^^")
		}
	}
}

// requireBalanced checks braces, and that no subscript or superscript follows
// another of its kind.
func requireBalanced(t *testing.T, s string) {
	t.Helper()
	depth := 0
	bare := latexCommands.ReplaceAllStringFunc(s, func(m string) string {
		if m == `\{` || m == `\}` {
			return "."
		}
		return m
	})
	for _, r := range bare {
		switch r {
		case '{':
			depth++
		case '}':
			depth--
			require.GreaterOrEqual(t, depth, 0, s)
		}
	}
	require.Zero(t, depth, s)
	require.Equal(t, strings.Count(s, `\left`), strings.Count(s, `\right`), s)
	require.NotRegexp(t, `_\{[^{}]*\}_|\^\{[^{}]*\}\^|_\d_`, s)
}

func TestLaTeXBalanced(t *testing.T) {
	g := newGenerator(9)
	for range 500 {
		requireBalanced(t, expr.LaTeX(g.tree(1+g.Intn(5))))
	}
}
