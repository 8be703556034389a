package expr_test

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

// What reads as the same function, however it is written.
func TestReadFunction(t *testing.T) {
	for _, c := range []struct{ name, src, want string }{
		{"zero", "0", "0"},
		{"constant", "0.35", "7/20"},
		{"cancelling", "t - t", "0"},
		{"circle", "sin(t)^2 + cos(t)^2 - 1", "0"},
		{"double angle", "sin(2*t) - 2*sin(t)*cos(t)", "0"},
		{"hyperbola", "cosh(t)^2 - sinh(t)^2 - 1", "0"},
		{"exponential of a sum", "exp(2t)*exp(-3t) - exp(-t)", "0"},
		{"power of an exponential", "exp(t)^(-5) - exp(-5*t)", "0"},
		{"quotient by an exponential", "t/exp(t) - t*exp(-t)", "0"},
		{"sine is odd", "sin(-t) + sin(t)", "0"},
		{"cosine is even", "cos(-t) - cos(t)", "0"},
		{"three sines", "4*sin(t)*sin(2*t)*sin(3*t) - sin(2*t) - sin(4*t) + sin(6*t)", "0"},
		{"triple angle", "cos(3*t) - 4*cos(t)^3 + 3*cos(t)", "0"},
		{"sum formula", "cos(5*t)*cos(3*t) - sin(5*t)*sin(3*t) - cos(8*t)", "0"},
		{"half angles", "sin(t/2)^2 - (1 - cos(t))/2", "0"},
		{"cosh as exponentials", "cosh(3*t) - exp(3*t)/2 - exp(-3*t)/2", "0"},
		{"product of damped oscillations", "(exp(-t)*cos(t))^2 - exp(-2*t)*(1 + cos(2*t))/2", "0"},
		{"binomial", "(1 + t)^3", "t^3 + 3*t^2 + 3*t + 1"},
		{"seventh power of a cosine", "64*cos(t)^7 - cos(7*t) - 7*cos(5*t) - 21*cos(3*t) - 35*cos(t)", "0"},
		{"rational root", "sqrt(4/9)*t", "2*t/3"},
		{"rational power", "8^(2/3)*t", "4*t"},
		{"power of a power", "2^3^2 - 512", "0"},
		{"sign before power", "-2^2", "-4"},
		{"zero to a power", "0^3", "0"},
		{"zeroth power", "t^0", "1"},
		{"zero rate", "exp(0*t)*cos(0*t) + sin(0*t)", "1"},
		{"minus one to a large power", "(-1)^1000000001", "-1"},
		{"largest exponent of one", "1^9223372036854775807", "1"},
		{"smallest exponent of one", "1^(-9223372036854775808)", "1"},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Equal(t, c.want, function(t, c.src).String())
		})
	}
}

func TestReadFunctionErrors(t *testing.T) {
	for _, c := range []struct {
		name, src string
		want      at
	}{
		{"division by time", "1/t", at{expr.OutsideClass, 1, 3}},
		{"division by a sum", "1 + 2/(1 + t)", at{expr.OutsideClass, 1, 8}},
		{"division by a cosine", "1/cos(t)", at{expr.OutsideClass, 1, 3}},
		{"division by zero", "t/(1 - 1)", at{expr.Singular, 1, 4}},
		{"division by a vanishing function", "1/(sin(t)^2 + cos(t)^2 - 1)", at{expr.Singular, 1, 4}},
		{"zero to zero", "0^0", at{expr.Singular, 1, 1}},
		{"zero to a negative power", "t*0^-1", at{expr.Singular, 1, 3}},
		{"negative power of time", "t^-2", at{expr.OutsideClass, 1, 1}},
		{"square in an exponential", "2*exp(t^2)", at{expr.OutsideClass, 1, 3}},
		{"sine of a sine", "sin(sin(t))", at{expr.OutsideClass, 1, 1}},
		{"time in an exponent", "2^t", at{expr.OutsideClass, 1, 3}},
		{"root of time", "sqrt(t)", at{expr.OutsideClass, 1, 1}},
		{"root of a negative number", "sqrt(-4)", at{expr.OutsideClass, 1, 1}},
		{"not a number", "1 + nan*t", at{expr.OutsideClass, 1, 5}},
		{"roots of two symbols", "sqrt(k) + sqrt(m)", at{expr.OutsideClass, 1, 11}},
		{"cube root of a symbol", "k^(1/3)", at{expr.OutsideClass, 1, 1}},
		{"e", "e^t", at{expr.OutsideClass, 1, 1}},
		{"step", "step(t - 1)", at{expr.OutsideClass, 1, 1}},
		{"impulse", "2*impulse(t)", at{expr.OutsideClass, 1, 3}},
		{"unknown function", "1 + tan(t)", at{expr.UnknownFunction, 1, 5}},
		{"derivative", "x'", at{expr.Syntax, 1, 1}},
		{"roots times a function", "t*sumroots(z, z^3-2, exp(z*t))", at{expr.OutsideClass, 1, 1}},
		{"roots times roots", "sumroots(z, z^3-2, exp(z*t))*sumroots(z, z^3-3, exp(z*t))", at{expr.OutsideClass, 1, 30}},
		{"roots of no polynomial", "sumroots(z, exp(z), exp(z*t))", at{expr.OutsideClass, 1, 13}},
		{"roots of a constant", "sumroots(z, 3, exp(z*t))", at{expr.OutsideClass, 1, 13}},
		{"time in the polynomial", "sumroots(z, z^3 - t, exp(z*t))", at{expr.OutsideClass, 1, 19}},
		{"multiple root", "sumroots(z, (z-1)^2, exp(z*t))", at{expr.OutsideClass, 1, 14}},
		{"no exponential", "sumroots(z, z^3 - 2, z)", at{expr.OutsideClass, 1, 22}},
		{"another exponential", "sumroots(z, z^3 - 2, exp(2*z*t))", at{expr.OutsideClass, 1, 22}},
		{"a vanishing denominator", "sumroots(z, z^3 - 2, exp(z*t)/(z^3 - 2))", at{expr.Singular, 1, 32}},
		{"a denominator with time", "sumroots(z, z^3 - 2, exp(z*t)/t)", at{expr.OutsideClass, 1, 31}},
		{"order", "t^251", at{expr.LimitExceeded, 1, 1}},
		{"order of an oscillation", "t^130*cos(t)", at{expr.LimitExceeded, 1, 1}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := expr.ParseFunction(c.src, expr.Limits{})
			assert.Equal(t, c.want, faultOf(t, err), "%v", err)
		})
	}
}

// Functions that ask for too much are refused, soon.
func TestReadFunctionHostile(t *testing.T) {
	rep := strings.Repeat
	rates := func(format string, n int) string {
		var b strings.Builder
		for i := 1; i <= n; i++ {
			fmt.Fprintf(&b, format, i)
		}
		return b.String()
	}
	for _, c := range []struct{ name, src string }{
		{"tower", "10^10^10"},
		{"power of time", "t^1000000000"},
		{"negative power of two", "2^-(10^9)"},
		{"exponent beyond int64", "2^(10^30)"},
		{"smallest int64 as exponent", "2^(-9223372036854775808)"},
		{"smallest int64 as exponent of an exponential", "exp(t)^(-9223372036854775808)"},
		{"large power of a sum", "(1+t+exp(t))^900"},
		{"power of a sum within the degree", "(1+t+exp(t))^250"},
		{"many powers of sums", "0" + rep(" + (1+t+exp(t))^60", 20000/2)},
		{"power of powers", "((((1+t)^9+exp(t))^9+cos(t))^9+1)^9"},
		{"product of large numbers", "1" + rep("*2^99999", 19000)},
		{"sum of large fractions", "0" + rates(" + 1/(%d^9999)", 900)},
		{"powers of large numbers", "0" + rep(" + 2^99999", 19000)},
		{"product of sums", "1" + rep("*(1+t+exp(t)+cos(t))", 300)},
		{"many rates", rates("+exp(%d*t)", 1000)},
		{"long rates", rates("+exp(7^30000*%d*t)", 100)},
		{"many roots", "0" + rep(" + sumroots(z, z^100 - z - 1, exp(z*t))", 10000)},
		{"power of time in a sum over roots", "sumroots(z, z^3 - z - 1, ((1+t)^200)^200*exp(z*t))"},
		{"power in a sum over roots", "sumroots(z, z^100 - z - 1, ((z+1)^200/(z+2)^200+t)^200*exp(z*t))"},
	} {
		t.Run(c.name, func(t *testing.T) {
			start := time.Now()
			_, err := expr.ParseFunction(c.src, expr.Limits{})
			assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind, "%v", err)
			assert.Less(t, time.Since(start), 10*time.Second)
		})
	}
}

// What just keeps the limits is read and written within reason.
func TestReadFunctionLarge(t *testing.T) {
	var sum strings.Builder
	for i := 1; i <= 100; i++ {
		fmt.Fprintf(&sum, " + %d*exp(-%d/7*t)", i, i)
	}
	for _, src := range []string{"t^250", "cos(t)^100", "2^99999*t", "0" + sum.String(), "1" + strings.Repeat("+1", 10000)} {
		start := time.Now()
		f := function(t, src)
		requireEqual(t, f, function(t, f.String()))
		assert.Less(t, time.Since(start), 10*time.Second)
	}
	require.Equal(t, "20001", function(t, "1"+strings.Repeat("+2", 10000)).String())
}
