package expr_test

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

func TestPresentation(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		{"0*t", "0"},
		{"-1/2", "-1/2"},
		{"1 - t^2", "-t^2 + 1"},
		{"t/3 - 7", "t/3 - 7"},
		{"exp(t/2) - 2/3*exp(-3*t/2)", "exp(t/2) - 2/3*exp(-3*t/2)"},
		{"t^2*exp(-t/2)/3", "1/3*t^2*exp(-t/2)"},
		{"(1-2*t)*exp(-t)", "(1 - 2*t)*exp(-t)"},
		{"(2*t-1)*exp(-t)", "(2*t - 1)*exp(-t)"},
		{"(t^2+t+1)*exp(-t)/6", "1/6*(t^2 + t + 1)*exp(-t)"},
		{"-(t+1)*exp(-t)", "-(t + 1)*exp(-t)"},
		{"-3*sin(t/2)", "-3*sin(t/2)"},
		{"exp(-t)*(cos(2*t) - sin(2*t)/2)", "exp(-t)*(cos(2*t) - 1/2*sin(2*t))"},
		{"exp(-t)*(sin(2*t)/2 - 3*cos(2*t))", "-1/2*exp(-t)*(6*cos(2*t) - sin(2*t))"},
		{"exp(-t)*(t*cos(t) + (1-t)*sin(t))", "exp(-t)*(t*cos(t) + (1 - t)*sin(t))"},
		{"sumroots(z, z^2-2, exp(z*t))", "2*cosh(sqrt(2)*t)"},
		{"sumroots(z, z^2-2, z*exp(z*t))", "2*sqrt(2)*sinh(sqrt(2)*t)"},
		{"sumroots(z, z^2-2, (1+z)*exp(z*t))", "(1 + sqrt(2))*exp(sqrt(2)*t) + (1 - sqrt(2))*exp(-sqrt(2)*t)"},
		{"sumroots(z, z^2-8, exp(z*t))", "2*cosh(2*sqrt(2)*t)"},
		{"sumroots(z, z^2+z+1, exp(z*t))", "2*exp(-t/2)*cos(sqrt(3)*t/2)"},
		{"sumroots(z, z^2-z-1, exp(z*t)/(2*z-1))", "2*sqrt(5)/5*exp(t/2)*sinh(sqrt(5)*t/2)"},
		{"sumroots(z, z^2-1, z*exp(z*t))", "exp(t) - exp(-t)"},
		{"sumroots(z, z^2 + 2*z, (z + 1)*exp(z*t))", "1 - exp(-2*t)"},
		{"sumroots(z, z, t*exp(t*z))", "t"},
		{"sumroots(z, 2*z^3 - z/3 - 1/3, exp(z*t)/z)", "sumroots(z, 6*z^3 - z - 1, exp(z*t)/z)"},
		{"sumroots(z, z^3 - z - 1, t*exp(z*t))", "sumroots(z, z^3 - z - 1, t*exp(z*t))"},
		{"sumroots(z, (z^3 - z - 2)*(z + 1), exp(z*t))", "exp(-t) + sumroots(z, z^3 - z - 2, exp(z*t))"},
		// Slowly decaying first, then slow oscillations, named roots last.
		{"exp(-t) + cos(2*t) + 1 + exp(t) + cos(t) + sumroots(z, z^3 - z - 2, exp(z*t)) + t", "exp(t) + t + 1 + cos(t) + cos(2*t) + exp(-t) + sumroots(z, z^3 - z - 2, exp(z*t))"},
	} {
		assert.Equal(t, c.want, function(t, c.src).String(), c.src)
	}
}

// The order of the written terms does not depend on how a function came about,
// even where rates are beyond float64 or agree in it.
func TestPresentationOrder(t *testing.T) {
	for _, rates := range [][]string{
		{"1", "2", "-1"},
		{"10^400", "2*10^400", "-10^400", "-2*10^400"},
		{"1/10^400", "2/10^400", "0", "-1/10^400"},
		{"1 + 1/10^30", "1 + 2/10^30", "1"},
	} {
		up, down := "0", "0"
		for i := range rates {
			for _, g := range []string{"exp((%s)*t)", "cos((%s)*t)", "exp((%s)*t)*cos(3*t)"} {
				up += " + " + fmt.Sprintf(g, rates[i])
				down += " + " + fmt.Sprintf(g, rates[len(rates)-1-i])
			}
		}
		a, b := function(t, up), function(t, down)
		requireEqual(t, a, b)
		assert.True(t, a.String() == b.String(), rates)
	}
	large := []string{"z^2 + 2*10^400*z + 3", "z^2 - 10^500*z + 3", "z^2 + 10^500*z + 2", "z^2 - 10^700"}
	up, down := "0", "0"
	for i := range large {
		up += " + sumroots(z, " + large[i] + ", exp(z*t))"
		down += " + sumroots(z, " + large[len(large)-1-i] + ", exp(z*t))"
	}
	assert.True(t, function(t, up).String() == function(t, down).String())
}

// valueOf evaluates a tree in float64, a way of its own to the value of what is
// written. Sums over roots are out of its reach.
func valueOf(t *testing.T, n expr.Node, at float64) float64 {
	t.Helper()
	sub := func(n expr.Node) float64 { return valueOf(t, n, at) }
	switch v := n.(type) {
	case expr.Number:
		return v.Val.Float64()
	case expr.Symbol:
		require.Equal(t, "t", v.Name)
		return at
	case expr.Neg:
		return -sub(v.X)
	case expr.Sum:
		x := 0.0
		for _, c := range v.Terms {
			x += sub(c)
		}
		return x
	case expr.Product:
		x := 1.0
		for _, c := range v.Factors {
			x *= sub(c)
		}
		return x
	case expr.Quotient:
		return sub(v.Num) / sub(v.Den)
	case expr.Power:
		return math.Pow(sub(v.Base), sub(v.Exp))
	case expr.Call:
		return map[string]func(float64) float64{"exp": math.Exp, "sin": math.Sin, "cos": math.Cos, "sinh": math.Sinh, "cosh": math.Cosh, "sqrt": math.Sqrt}[v.Func](sub(v.Arg))
	}
	t.Fatalf("unexpected %T", n)
	return 0
}

// What is written has the value that At gives, radicals and all.
func TestPresentationValues(t *testing.T) {
	g := newGenerator(7)
	for range 200 {
		src := g.plainText()
		for range g.Intn(3) {
			p := fmt.Sprintf("z^2 + %d*z + %d", g.Intn(7)-3, g.Intn(11)-5)
			if p == "z^2 + 2*z + 1" || p == "z^2 + -2*z + 1" || p == "z^2 + 0*z + 0" {
				continue // a double root
			}
			src += fmt.Sprintf(" + sumroots(z, %s, (%s + %s*z)*t^%d*exp(z*t))", p, g.smallRat(), g.smallRat(), g.Intn(3))
		}
		f := function(t, src)
		for _, x := range []*big.Rat{new(big.Rat), big.NewRat(1, 2), big.NewRat(-5, 4)} {
			s, err := f.At(t.Context(), x, 17)
			require.NoError(t, err)
			want, err := strconv.ParseFloat(s, 64)
			require.NoError(t, err)
			xf, _ := x.Float64()
			require.InDelta(t, want, valueOf(t, f.Node(), xf), 1e-9*(1+math.Abs(want)), "%s at %s: %s", src, x, f)
		}
	}
	// The same at a distance from the origin.
	image := elementaryOf(t, "t*exp(-t) + 2").Image()
	local := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.NewRat(1, 3), image)
	s, err := local.At(t.Context(), big.NewRat(2, 1), 17)
	require.NoError(t, err)
	want, err := strconv.ParseFloat(s, 64)
	require.NoError(t, err)
	require.InDelta(t, want, valueOf(t, local.Node(), 2), 1e-12)
}
