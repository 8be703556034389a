package expr_test

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

func TestBuild(t *testing.T) {
	x, y := expr.Sym("x"), expr.Sym("y")
	num := func(a, b int64) expr.Node { return expr.Num(algebra.NewRat(a, b)) }
	root := expr.Apply("sqrt", expr.Int(3))
	for _, c := range []struct {
		name string
		n    expr.Node
		want string
	}{
		{"empty sum", expr.Add(), "0"},
		{"sum of zeros", expr.Add(expr.Int(0), num(0, 5)), "0"},
		{"zeros in a sum", expr.Add(expr.Int(0), x, expr.Int(0)), "x"},
		{"nested sums", expr.Add(expr.Add(x, y), expr.Negate(x)), "x + y - x"},
		{"negated number", expr.Negate(num(1, 2)), "-1/2"},
		{"negated zero", expr.Negate(expr.Int(0)), "0"},
		{"negated twice", expr.Negate(expr.Negate(x)), "x"},
		{"empty product", expr.Mul(), "1"},
		{"zero in a product", expr.Mul(x, expr.Int(0), y), "0"},
		{"ones in a product", expr.Mul(expr.Int(1), x, num(2, 2)), "x"},
		{"numbers gathered", expr.Mul(expr.Int(2), x, num(3, 4), y), "3*x*y/2"},
		{"signs gathered", expr.Mul(expr.Negate(x), expr.Int(-2), expr.Negate(y)), "-2*x*y"},
		{"quotient by a number", expr.Mul(expr.Quotient{Num: x, Den: expr.Int(6)}, expr.Int(2)), "x/3"},
		{"quotient by zero stays", expr.Mul(expr.Quotient{Num: x, Den: expr.Int(0)}, expr.Int(2)), "2*x/0"},
		{"surd over a denominator", expr.Mul(num(1, 2), root, x), "sqrt(3)*x/2"},
		{"surd in front", expr.Mul(x, root), "sqrt(3)*x"},
		{"fraction of a function", expr.Mul(num(2, 3), expr.Apply("exp", x)), "2/3*exp(x)"},
		{"surd fraction of a function", expr.Mul(num(2, 3), root, expr.Apply("exp", x)), "2*sqrt(3)/3*exp(x)"},
		{"quotient", expr.Div(x, y), "x/y"},
		{"quotient of a negation", expr.Div(expr.Negate(x), y), "-x/y"},
		{"quotient by a fraction", expr.Div(x, num(2, 3)), "3*x/2"},
		{"first power", expr.Pow(x, 1), "x"},
		{"power", expr.Pow(expr.Add(x, y), 3), "(x + y)^3"},
		{"derivatives", expr.Add(expr.Derivative("x", 0), expr.Derivative("x", 2), expr.ValueAt("x", 1, algebra.NewRat(-1, 2))), "x + x'' + x'(-1/2)"},
		{"zero polynomial", expr.PolyNodeOf(algebra.Q, algebra.Poly[algebra.Rat]{}, x), "0"},
		{"polynomial", expr.PolyNodeOf(algebra.Q, algebra.PolyFromInts(-1, 0, 1, -3), x), "-3*x^3 + x^2 - 1"},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Equal(t, c.want, c.n.String())
			_, err := expr.Parse(c.n.String(), expr.Limits{})
			require.NoError(t, err)
		})
	}
}

// The constructors leave their arguments alone.
func TestBuildImmutable(t *testing.T) {
	factors := make([]expr.Node, 2, 8)
	factors[0], factors[1] = expr.Sym("x"), expr.Sym("y")
	p := expr.Product{Factors: factors}
	terms := make([]expr.Node, 2, 8)
	terms[0], terms[1] = expr.Sym("x"), expr.Sym("y")
	s := expr.Sum{Terms: terms}
	a, b := expr.Mul(p, expr.Int(2)), expr.Mul(p, expr.Sym("z"))
	c, d := expr.Add(s, expr.Int(2)), expr.Add(s, expr.Sym("z"))
	for want, n := range map[string]expr.Node{"x*y": p, "x + y": s, "2*x*y": a, "x*y*z": b, "x + y + 2": c, "x + y + z": d} {
		assert.Equal(t, want, n.String())
	}
}

func TestChildren(t *testing.T) {
	for src, want := range map[string][]string{
		"7": nil, "x": nil, "x'": nil, "x(a)": {"a"}, "a + b - c": {"a", "b", "-c"}, "a*b": {"a", "b"},
		"a/b": {"a", "b"}, "a^b": {"a", "b"}, "-a": {"a"}, "exp(a)": {"a"}, "sumroots(z, a, b)": {"a", "b"},
	} {
		n, err := expr.Parse(src, expr.Limits{})
		require.NoError(t, err)
		var got []string
		expr.Children(n, func(c expr.Node) bool {
			got = append(got, c.String())
			return true
		})
		assert.Equal(t, want, got, src)
	}
	n, err := expr.Parse("a + b", expr.Limits{})
	require.NoError(t, err)
	count := 0
	expr.Children(n, func(expr.Node) bool { count++; return false })
	assert.Equal(t, 1, count)
}
