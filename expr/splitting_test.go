package expr_test

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

// requireWritten asserts how functions are written, and that what is written is the
// same function.
func requireWritten(t *testing.T, cases []struct{ src, want string }) {
	t.Helper()
	for _, c := range cases {
		f := function(t, c.src)
		assert.Equal(t, c.want, f.String(), c.src)
		requireEqual(t, f, function(t, f.String()))
	}
}

func TestUndampedPairs(t *testing.T) {
	requireWritten(t, []struct{ src, want string }{
		// w^2 = 2 -+ sqrt(2), of three equal masses on equal springs
		{"sumroots(z, z^4 + 4*z^2 + 2, exp(z*t))", "2*cos(sqrt(2 - sqrt(2))*t) + 2*cos(sqrt(2 + sqrt(2))*t)"},
		// w = (sqrt(5) -+ 1)/2
		{"sumroots(z, z^4 + 3*z^2 + 1, z*exp(z*t))", "(1 - sqrt(5))*sin((sqrt(5) - 1)*t/2) - (1 + sqrt(5))*sin((1 + sqrt(5))*t/2)"},
		// w = sqrt(3) -+ sqrt(2)
		{"sumroots(z, z^4 + 10*z^2 + 1, exp(z*t))", "2*cos((sqrt(3) - sqrt(2))*t) + 2*cos((sqrt(3) + sqrt(2))*t)"},
	})
}

func TestBiquadratics(t *testing.T) {
	requireWritten(t, []struct{ src, want string }{
		{"sumroots(z, z^4 - 4*z^2 + 2, exp(z*t))", "2*cosh(sqrt(2 + sqrt(2))*t) + 2*cosh(sqrt(2 - sqrt(2))*t)"},
		{"sumroots(z, z^4 + 3*z^2 - 1, exp(z*t))", "2*cosh(sqrt((sqrt(13) - 3)/2)*t) + 2*cos(sqrt((3 + sqrt(13))/2)*t)"},
		{"sumroots(z, z^4 + z^2 + 2, exp(z*t))",
			"2*exp(sqrt(2*sqrt(2) - 1)*t/2)*cos(sqrt(1 + 2*sqrt(2))*t/2) + 2*exp(-sqrt(2*sqrt(2) - 1)*t/2)*cos(sqrt(1 + 2*sqrt(2))*t/2)"},
		// with one damping for both oscillations
		{"sumroots(z, (z + 1)^4 + 4*(z + 1)^2 + 2, exp(z*t))", "2*exp(-t)*cos(sqrt(2 - sqrt(2))*t) + 2*exp(-t)*cos(sqrt(2 + sqrt(2))*t)"},
		// a multiple one
		{"sumroots(z, z^4 + 4*z^2 + 2, t*exp(z*t))", "2*t*cos(sqrt(2 - sqrt(2))*t) + 2*t*cos(sqrt(2 + sqrt(2))*t)"},
	})
	src := "sumroots(z, z^4 + z + 2, exp(z*t))"
	assert.Equal(t, src, function(t, src).String(), "without a form in square roots")
}

func TestBinomials(t *testing.T) {
	requireWritten(t, []struct{ src, want string }{
		{"sumroots(z, z^3 - 2, exp(z*t))", "exp(2^(1/3)*t) + 2*exp(-2^(1/3)*t/2)*cos(2^(1/3)*sqrt(3)*t/2)"},
		{"sumroots(z, 6*z^3 - 1, exp(z*t)/z)",
			"6^(1/3)*exp(6^(2/3)*t/6) - 6^(1/3)*exp(-6^(2/3)*t/12)*(cos(6^(2/3)*sqrt(3)*t/12) - sqrt(3)*sin(6^(2/3)*sqrt(3)*t/12))"},
		{"sumroots(z, z^4 - 2, z*exp(z*t))", "2*2^(1/4)*sinh(2^(1/4)*t) - 2*2^(1/4)*sin(2^(1/4)*t)"},
		// the bent beam on an elastic bed
		{"sumroots(z, z^4 + 2, exp(z*t))", "2*exp(2^(3/4)*t/2)*cos(2^(3/4)*t/2) + 2*exp(-2^(3/4)*t/2)*cos(2^(3/4)*t/2)"},
		{"sumroots(z, z^6 - 2, exp(z*t))",
			"2*cosh(2^(1/6)*t) + 2*exp(2^(1/6)*t/2)*cos(2^(1/6)*sqrt(3)*t/2) + 2*exp(-2^(1/6)*t/2)*cos(2^(1/6)*sqrt(3)*t/2)"},
		{"sumroots(z, (z + 1)^3 - 5, exp(z*t))",
			"exp((5^(1/3) - 1)*t) + 2*exp(-(2 + 5^(1/3))*t/2)*cos(5^(1/3)*sqrt(3)*t/2)"},
	})
	requireWritten(t, []struct{ src, want string }{
		{"sumroots(z, z^4 + z^3 + z^2 + z + 1, exp(z*t))",
			"2*exp((sqrt(5) - 1)*t/4)*cos(sqrt((5 + sqrt(5))/8)*t) + 2*exp(-(1 + sqrt(5))*t/4)*cos(sqrt((5 - sqrt(5))/8)*t)"},
		{"sumroots(z, z^4 - 2*z^3 + 4*z^2 - 8*z + 16, exp(z*t))",
			"2*exp((1 + sqrt(5))*t/2)*cos(sqrt((5 - sqrt(5))/2)*t) + 2*exp((1 - sqrt(5))*t/2)*cos(sqrt((5 + sqrt(5))/2)*t)"},
	})
	src := "sumroots(z, z^5 - 2, exp(z*t))" // radicals of degree 20
	assert.Equal(t, src, function(t, src).String())
}
