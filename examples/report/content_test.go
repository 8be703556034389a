package main

import (
	"context"
	"fmt"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

// Where the exact form is long, it follows one with decimals; elsewhere it stands
// alone.
func TestMixedForm(t *testing.T) {
	const model = "x''' + x' + x = 1; y' = -y; x(0) = 0; x'(0) = 0; x''(0) = 0; y(0) = 1/3\n"
	dir, _, err := runOn(t, model)
	require.NoError(t, err)
	checkTeX(t, dir)
	src, page := read(t, dir, "report.tex"), read(t, dir, "report.html")
	n, err := derived(t, model).State("x").Write(context.Background(), expr.Form{Numbers: expr.DecimalNumbers, Digits: 6})
	require.NoError(t, err)
	for _, term := range n.(expr.Sum).Terms {
		if m, ok := negated(term); ok {
			term = m
		}
		require.Contains(t, src, expr.LaTeX(term))
		require.Contains(t, page, expr.MathML(term))
	}
	require.Contains(t, src, `x &\approx `)
	require.NotContains(t, src, `y &\approx `)
	require.Equal(t, 2, strings.Count(page, "<td>≈</td>"), "in the response and in its transient part")
	require.Contains(t, src, "rounded to 6 significant digits")
	require.Contains(t, src, expr.LaTeX(derived(t, model).State("x").Node()))

	dir, _, err = runOn(t, "x' = -x; x(0) = 1/3")
	require.NoError(t, err)
	require.NotContains(t, read(t, dir, "report.html"), "≈")
	require.Contains(t, read(t, dir, "report.html"), "All formulas are exact.")
}

// The working has the steps of the response, and is left out in one sentence
// where it would be long.
func TestWorking(t *testing.T) {
	dir, _, err := runOn(t, "")
	require.NoError(t, err)
	steps, err := derived(t, container).Working(context.Background())
	require.NoError(t, err)
	src, page := read(t, dir, "report.tex"), read(t, dir, "report.html")
	for _, s := range steps {
		if s.Kind == "response" || s.Kind == "check" {
			continue // these are the sections on the response and on the proof
		}
		require.Contains(t, src, `\subsection{`+s.Title+`}`)
		require.Contains(t, page, "\u2002"+s.Title+"</h3>")
		for _, p := range s.Passages {
			for _, f := range p.Formulas {
				require.Contains(t, src, expr.LaTeX(f.Right))
			}
		}
	}

	var b strings.Builder
	for i := range mostWorkedOrder + 1 {
		fmt.Fprintf(&b, "y%d' = y%d - %d*y%d; y%d(0) = 1\n", i, (i+1)%mostWorkedOrder, i+1, i, i)
	}
	dir, _, err = runOn(t, b.String())
	require.NoError(t, err)
	checkHTML(t, read(t, dir, "report.html"))
	checkTeX(t, dir)
	require.Contains(t, read(t, dir, "report.html"), "The working is left out: the order of the model is 7")
	require.NotContains(t, read(t, dir, "report.tex"), "Characteristic polynomial")
}

// Assumptions are part of the report, and spare conditions.
func TestAssumptions(t *testing.T) {
	const model = "depot' = -ka*depot; body' = ka*depot - ke*body; depot(0) = D; body(0) = 0"
	dir, _, err := runOn(t, model, "-assume", "ka > ke > 0")
	require.NoError(t, err)
	checkHTML(t, read(t, dir, "report.html"))
	src := read(t, dir, "report.tex")
	require.Contains(t, src, `\section{Assumptions}`)
	require.NotContains(t, src, "hold for")

	dir, _, err = runOn(t, model)
	require.NoError(t, err)
	require.NotContains(t, read(t, dir, "report.tex"), `\section{Assumptions}`)
	require.Contains(t, read(t, dir, "report.tex"), "hold for")

	_, _, err = runOn(t, model, "-assume", "ka >")
	require.ErrorContains(t, err, "-assume, column")
}

// A sum behind a minus sign keeps its parentheses wherever a line ends.
func TestParentheses(t *testing.T) {
	n, err := expr.Parse("a - (b + c - (d + e))", unlimited)
	require.NoError(t, err)
	tags := regexp.MustCompile(`<[^>]*>|\s`)
	require.Equal(t, "a−(b+c−(d+e))", tags.ReplaceAllString(pieces(n), ""))
	latex := strings.NewReplacer(" ", "", `\Bigl`, "", `\Bigr`, "")
	for _, most := range []float64{100, 20, 10, 5, 1} {
		require.Equal(t, "a-(b+c-(d+e))", latex.Replace(strings.Join(rows(n, most), "")), "%v", most)
	}
	n, err = expr.Parse("-(b + c)", unlimited)
	require.NoError(t, err)
	require.Equal(t, "-(b+c)", latex.Replace(strings.Join(rows(n, 1), "")))
	n, err = expr.Parse("a - ("+strings.Repeat("bbbbbbbb*cccccccc + ", 6)+"d)", unlimited)
	require.NoError(t, err)
	text := tags.ReplaceAllString(pieces(n), "")
	require.True(t, strings.HasPrefix(text, "a−(bbb") && strings.HasSuffix(text, "+d)"), text)
}

// Equal long parts share a name, and what holds the time gets none.
func TestNamesOfLongParts(t *testing.T) {
	root := "sqrt(" + strings.Repeat("a*bbbb*cccc + ", 4) + "d)"
	n, err := expr.Parse(root+"*exp("+root+"*t) + t*R_1", unlimited)
	require.NoError(t, err)
	s := newShortener("t", []string{"R_1"})
	require.Equal(t, "R_2*exp(R_2*t) + t*R_1", s.shorten(n).String())
	require.Equal(t, "R_2*exp(R_2*t) + t*R_1", s.roots(n).String())
	require.Len(t, s.definitions, 1)

	for _, c := range []struct{ factor, want string }{
		{strings.Repeat("aaaa*bbbb + ", 8), "K_1"},
		{strings.Repeat("aaaa*t + ", 10), "aaaa*t"},
	} {
		n, err := expr.Parse("7*("+c.factor+"c)*exp(-t)", unlimited)
		require.NoError(t, err)
		require.Contains(t, newShortener("t", nil).shorten(n).String(), c.want)
	}
}
