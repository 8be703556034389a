package expr_test

import (
	"context"
	"fmt"
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

func written(t *testing.T, f expr.Function, form expr.Form) expr.Node {
	t.Helper()
	n, err := f.Write(context.Background(), form)
	require.NoError(t, err)
	return n
}

func TestAmplitude(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		{"3*cos(2*t) + 4*sin(2*t)", "5*cos(2*t - atan(4/3))"},
		{"3*cos(2*t) - 4*sin(2*t)", "5*cos(2*t + atan(4/3))"},
		{"-3*cos(2*t) + 4*sin(2*t)", "-5*cos(2*t + atan(4/3))"},
		{"-3*cos(2*t) - 4*sin(2*t)", "-5*cos(2*t - atan(4/3))"},
		{"exp(-t)*(cos(3*t) + sin(3*t))", "sqrt(2)*exp(-t)*cos(3*t - pi/4)"},
		{"-cos(t) + sin(t)", "-sqrt(2)*cos(t + pi/4)"},
		{"cos(t) - sqrt(3)*sin(t)", "2*cos(t + pi/3)"},
		{"cos(sqrt(2)*t) + sin(sqrt(2)*t)", "sqrt(2)*cos(sqrt(2)*t - pi/4)"},
		{"exp(-t)*(cos(sqrt(2)*t) + 5*sin(sqrt(2)*t)/sqrt(2))", "3*sqrt(6)/2*exp(-t)*cos(sqrt(2)*t - atan(5*sqrt(2)/2))"},
		{"2*cos(t)", "2*cos(t)"},
		{"sin(2*t)/2", "1/2*sin(2*t)"},
		{"t*cos(t) + sin(t)", "t*cos(t) + sin(t)"},
		{"cosh(t) + 2*sinh(t)", "3/2*exp(t) - 1/2*exp(-t)"},
		{"A*cos(w*t) + B*sin(w*t)", "A*cos(w*t) + B*sin(w*t)"}, // the sign of A is open
		{"cos(w*t) + w*tau*sin(w*t)", "sqrt(tau^2*w^2 + 1)*cos(w*t - atan(tau*w))"},
		{"cos(w*t)/(1 + w^2*tau^2) + w*tau*sin(w*t)/(1 + w^2*tau^2)", "1/sqrt(tau^2*w^2 + 1)*cos(w*t - atan(tau*w))"},
		{"sumroots(z, z^4 + 2, (1 + z)*exp(z*t))", ""},
	} {
		f := function(t, c.src)
		n := written(t, f, expr.Form{Amplitude: true})
		if c.want != "" {
			assert.Equal(t, c.want, n.String(), c.src)
		}
		requireEqual(t, f, function(t, n.String()))
		requireBalanced(t, expr.LaTeX(n))
		mathmlText(t, expr.MathML(n))
	}
}

func TestSteadyLast(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		{"2 + cos(t) - exp(-t) + 3*exp(-2*t)", "-exp(-t) + 3*exp(-2*t) + 2 + cos(t)"},
		{"t + exp(-t) + sumroots(z, z^3 + z + 1, exp(z*t))", "exp(-t) + sumroots(z, z^3 + z + 1, exp(z*t)) + t"},
		{"a + b*exp(-k*t)", "b*exp(-k*t) + a"},
	} {
		n := written(t, function(t, c.src), expr.Form{SteadyLast: true})
		assert.Equal(t, c.want, n.String(), c.src)
		requireEqual(t, function(t, c.src), function(t, n.String()))
	}
	n := written(t, function(t, "2 + cos(t) - exp(-t)/3"), expr.Form{Numbers: expr.DecimalNumbers, Digits: 3, SteadyLast: true})
	assert.Equal(t, "-0.333*exp(-t) + 2 + cos(t)", n.String())
}

// In a mixed form every number is written in the way that is easier to read.
func TestMixed(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		{"exp(-t/3)/7 - 12345678/9876541*exp(-2*t)", "1/7*exp(-t/3) - 1.2500*exp(-2*t)"},
		{"(13 - 3*sqrt(13))/13*exp(-(3 + sqrt(13))*t/2)", "(13 - 3*sqrt(13))/13*exp(-(3 + sqrt(13))*t/2)"},
		{"(13873 - 3421*sqrt(13))/1312*exp(-(3 + sqrt(13))*t/2)", "1.1726*exp(-3.3028*t)"},
		{"cos((1387 + 34*sqrt(13))*t/2341)", "cos(0.64485*t)"},
		{"sumroots(z, z^3 - z - 1, exp(z*t)) + exp(-t)", "exp(-t) + exp(1.3247*t) + 2*exp(-0.66236*t)*cos(0.56228*t)"},
		{"k*(13873 - 3421*sqrt(13))/1312*exp(-t)/m", "1.1726*k/m*exp(-t)"},
		{"sumroots(z, z^3 - k*z - 1, exp(z*t))", "sumroots(z, z^3 - k*z - 1, exp(z*t))"},
		{"t^2*sqrt(5)*(12345 - sqrt(3))/1234567 + 1/2", "0.022356*t^2 + 1/2"},
	} {
		n := written(t, function(t, c.src), expr.Form{Numbers: expr.MixedNumbers, Digits: 5})
		assert.Equal(t, c.want, n.String(), c.src)
	}
	n := written(t, function(t, "exp(-t)*(cos(3*t) + 12345678*sin(3*t))"), expr.Form{Numbers: expr.MixedNumbers, Amplitude: true})
	assert.Equal(t, "1.23457e7*exp(-t)*cos(3*t - 1.57080)", n.String())
}

// A mixed form in many digits has the values of the function.
func TestMixedValues(t *testing.T) {
	for _, src := range []string{
		"sumroots(z, z^5 - 3*z + 1, (z + 2)*exp(z*t)/(z^2 + 5)) + t*exp(-t)", "(138 - 34*sqrt(13))/131*t*exp(-(341 + sqrt(13))*t/271)*cos(sqrt(5)*t)",
		"sumroots(z, z^6 + 5*z^4 + 6*z^2 + 1, (1 + z)*exp(z*t))", "sumroots(z, z^4 + z^2 + 2, (z^3 + 7)*exp(z*t))/3",
		"sumroots(z, z^4 + 2, (1 + z)*exp(z*t))",
	} {
		f := function(t, src)
		for _, amplitude := range []bool{false, true} {
			n := written(t, f, expr.Form{Numbers: expr.MixedNumbers, Digits: 40, Amplitude: amplitude})
			g, err := expr.FunctionOf(n, "t", expr.Limits{})
			require.NoError(t, err)
			x := big.NewRat(7, 3)
			want, err := f.At(context.Background(), x, 30)
			require.NoError(t, err)
			got, err := g.At(context.Background(), x, 30)
			require.NoError(t, err)
			assert.Equal(t, want, got, "%s, written %s", src, n)
		}
	}
}

func ExampleFunction_Write() {
	f, err := expr.ParseFunction("2 - exp(-t)*(2*cos(2*t) + sin(2*t)) + 35512/2261131*exp(-3*t)", expr.Limits{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, form := range []expr.Form{
		{},
		{Amplitude: true, SteadyLast: true},
		{Numbers: expr.MixedNumbers, Digits: 4},
		{Numbers: expr.DecimalNumbers, Digits: 4, Amplitude: true},
	} {
		n, err := f.Write(context.Background(), form)
		fmt.Println(n, err)
	}
	// Output:
	// 2 - exp(-t)*(2*cos(2*t) + sin(2*t)) + 35512/2261131*exp(-3*t) <nil>
	// -sqrt(5)*exp(-t)*cos(2*t - atan(1/2)) + 35512/2261131*exp(-3*t) + 2 <nil>
	// 2 - exp(-t)*(2*cos(2*t) + sin(2*t)) + 0.01571*exp(-3*t) <nil>
	// 2 - 2.236*exp(-t)*cos(2*t - 0.4636) + 0.01571*exp(-3*t) <nil>
}
