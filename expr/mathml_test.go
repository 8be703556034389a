package expr_test

import (
	"encoding/xml"
	"errors"
	"io"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

// mathmlText checks that s is well-formed XML of the elements of MathML Core
// without attributes that could do harm, and returns its text.
func mathmlText(t *testing.T, s string) string {
	t.Helper()
	known := map[string]int{ // with the number of children where it is fixed
		"math": 0, "mrow": 0, "mi": 0, "mn": 0, "mo": 0, "mfrac": 2, "msup": 2, "msub": 2, "msqrt": 0, "munder": 2,
		"mroot": 2, "msubsup": 3, "mspace": 0,
	}
	var text strings.Builder
	var open []string
	var children []int
	d := xml.NewDecoder(strings.NewReader(s))
	d.Strict = true
	for {
		tok, err := d.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		require.NoError(t, err, s)
		switch v := tok.(type) {
		case xml.StartElement:
			_, ok := known[v.Name.Local]
			require.True(t, ok, "<%s> in %s", v.Name.Local, s)
			for _, a := range v.Attr {
				require.Contains(t, []string{"xmlns", "form", "width"}, a.Name.Local, s)
			}
			if len(children) > 0 {
				children[len(children)-1]++
			}
			open, children = append(open, v.Name.Local), append(children, 0)
		case xml.EndElement:
			n := len(open) - 1
			if want := known[open[n]]; want > 0 {
				require.Equal(t, want, children[n], "children of %s in %s", open[n], s)
			}
			open, children = open[:n], children[:n]
		case xml.CharData:
			text.Write(v)
		default:
			t.Fatalf("%T in %s", tok, s)
		}
	}
	require.Empty(t, open)
	return text.String()
}

func TestMathML(t *testing.T) {
	const times, apply = "\u2062", "\u2061"
	for _, c := range []struct{ src, want string }{
		{"-1/2", "−12"},
		{"a*b - c", "a" + times + "b−c"},
		{"2*3", "2⋅3"},
		{"(a+b)*c", "(a+b)" + times + "c"},
		{"exp(-t/2)", "e−t/2"},
		{"sin(t)^2", "sin2" + apply + "(t)"},
		{"sqrt(2)", "2"},
		{"impulse(t)", "δ" + apply + "(t)"},
		{"x''(0)", "x″(0)"},
		{"alpha + x_1 + x₂", "α+x1+x2"},
		{"x''''", "x(4)"},
		{"1 + sumroots(z, z^3 - 2, exp(z*t))", "1+∑z:z3−2=0ez" + times + "t"},
		{"sumroots(z, z^3 - 2, exp(z*t)) + 1", "(∑z:z3−2=0ez" + times + "t)+1"},
	} {
		n, err := expr.Parse(c.src, expr.Limits{})
		require.NoError(t, err)
		got := strings.ReplaceAll(mathmlText(t, expr.MathML(n)), "′′", "″")
		assert.Equal(t, c.want, got, c.src)
	}
	n, err := expr.Parse("x^2/3", expr.Limits{})
	require.NoError(t, err)
	assert.Equal(t, `<math xmlns="http://www.w3.org/1998/Math/MathML"><mrow><mfrac><mrow><msup><mrow><mi>x</mi></mrow><mrow><mn>2</mn></mrow></msup></mrow><mrow><mn>3</mn></mrow></mfrac></mrow></math>`, expr.MathML(n))
}

func TestMathMLWellFormed(t *testing.T) {
	g := newGenerator(10)
	for range 500 {
		mathmlText(t, expr.MathML(g.tree(1+g.Intn(5))))
	}
}

func TestMathMLInert(t *testing.T) {
	for _, name := range hostileNames {
		n := expr.Add(expr.Sym(name), expr.Derivative(name, 2), expr.RootSum{Var: name, Poly: expr.Sym(name), Body: expr.Sym(name)})
		s := expr.MathML(n)
		text := mathmlText(t, s)
		assert.False(t, strings.ContainsAny(text, "\x00\x1b\u202e\u2028"), "%q", s)
	}
}
