package expr_test

import (
	"fmt"
	"math/big"
	"math/rand"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// generator makes random trees and functions; every test seeds its own with a
// constant.
type generator struct{ *rand.Rand }

func newGenerator(seed int64) generator { return generator{rand.New(rand.NewSource(seed))} }

// rat favours 0, 1, -1 and the borders of words.
func (g generator) rat() algebra.Rat {
	switch g.Intn(12) {
	case 0:
		return algebra.RatFromInt(0)
	case 1:
		return algebra.RatFromInt(1)
	case 2:
		return algebra.RatFromInt(-1)
	case 3:
		border := new(big.Int).Lsh(big.NewInt(1), []uint{31, 62, 63, 64}[g.Intn(4)])
		return algebra.RatFromBigInt(border.Add(border, big.NewInt(int64(g.Intn(3)-1))))
	}
	return algebra.NewRat(int64(g.Intn(19)-9), int64(1+g.Intn(6)))
}

// tree returns a tree of any shape, sense or nonsense, of at most the depth.
func (g generator) tree(depth int) expr.Node {
	if depth == 0 || g.Intn(8) == 0 {
		switch g.Intn(5) {
		case 0:
			return expr.Num(g.rat())
		case 1:
			return expr.Value{Name: g.name(), Order: g.Intn(5), At: expr.Num(g.rat())}
		case 2:
			return expr.Derivative(g.name(), g.Intn(5))
		}
		return expr.Sym(g.name())
	}
	sub := func() expr.Node { return g.tree(depth - 1) }
	some := func() []expr.Node {
		nodes := make([]expr.Node, 2+g.Intn(3))
		for i := range nodes {
			nodes[i] = sub()
		}
		return nodes
	}
	switch g.Intn(8) {
	case 0:
		return expr.Sum{Terms: some()}
	case 1:
		return expr.Product{Factors: some()}
	case 2:
		return expr.Quotient{Num: sub(), Den: sub()}
	case 3:
		return expr.Power{Base: sub(), Exp: sub()}
	case 4:
		return expr.Neg{X: sub()}
	case 5:
		return expr.Value{Name: g.name(), Order: g.Intn(3), At: sub()}
	case 6:
		return expr.RootSum{Var: "z", Poly: sub(), Body: sub()}
	}
	return expr.Apply([]string{"exp", "sin", "cos", "sinh", "cosh", "sqrt", "step", "impulse"}[g.Intn(8)], sub())
}

func (g generator) name() string {
	return []string{"x", "y", "t", "pi", "k_12", "x2", "α", "Ω", "température", "_", "x₁", "func"}[g.Intn(12)]
}

// smallRat is a rational that keeps functions presentable.
func (g generator) smallRat() string {
	return fmt.Sprintf("(%d/%d)", g.Intn(11)-5, 1+g.Intn(3))
}

// factorText is the text of a factor of the class.
func (g generator) factorText() string {
	switch g.Intn(6) {
	case 0:
		return fmt.Sprintf("t^%d", g.Intn(4))
	case 1:
		return "exp(" + g.smallRat() + "*t)"
	case 2:
		return "sin(" + g.smallRat() + "*t)"
	case 3:
		return "cos(" + g.smallRat() + "*t)"
	case 4:
		return "cosh(" + g.smallRat() + "*t)"
	}
	return g.smallRat()
}

// functionText is the text of a random function of the class, with sums over
// named roots among its terms.
func (g generator) functionText() string {
	var terms []string
	for range 1 + g.Intn(4) {
		if g.Intn(4) == 0 {
			terms = append(terms, g.rootSumText())
			continue
		}
		factors := []string{g.smallRat()}
		for range 1 + g.Intn(3) {
			factors = append(factors, g.factorText())
		}
		terms = append(terms, strings.Join(factors, "*"))
	}
	return strings.Join(terms, " + ")
}

// rootSumText is a sum over the roots of a polynomial without radicals, of one
// whose roots are written in radicals or cosines, or of a product with a factor of
// lower degree.
func (g generator) rootSumText() string {
	list := []string{
		"z^3 - z - 1", "z^4 + z + 1", "(z^3 - z - 1)*(z + 2)", "z^6 + 7*z^4 + 11*z^2 + 3",
		"z^3 - 2", "(z^3 - 2)*(z^2 + 1)", "z^4 + 2", "z^4 + 4*z^2 + 2", "z^4 - z^2 + 2", "z^4 - 10*z^2 + 1", "z^4 + z^3 + z^2 + z + 1",
		"z^3 + 5*z^2 + 6*z + 1", "z^6 + 5*z^4 + 6*z^2 + 1",
	}
	p := list[g.Intn(len(list))]
	body := fmt.Sprintf("(%s*z + %s)*t^%d*exp(z*t)", g.smallRat(), g.smallRat(), g.Intn(3))
	if g.Intn(2) == 0 {
		body += "/(z^2 + 5)"
	}
	return "sumroots(z, " + p + ", " + body + ")"
}

func (g generator) function(t testing.TB) expr.Function { return function(t, g.functionText()) }

// function reads a function that is known to be one.
func function(t testing.TB, src string) expr.Function {
	t.Helper()
	f, err := expr.ParseFunction(src, expr.Limits{})
	require.NoError(t, err, src)
	return f
}

// requireEqual is equality of functions, printing both.
func requireEqual(t testing.TB, want, got expr.Function, about ...any) {
	t.Helper()
	require.True(t, want.Equal(got), "%s\nwant %s\ngot  %s", fmt.Sprint(about...), want, got)
}
