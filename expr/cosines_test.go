package expr_test

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/expr"
)

// Rates and frequencies of chains: those of the matrices with -2 in the diagonal
// and 1 beside it are -4 sin^2(j pi/(2(n + 1))) (Yueh 2005, from memory).
func TestChains(t *testing.T) {
	requireWritten(t, []struct{ src, want string }{
		// n = 6, j odd
		{"sumroots(z, z^3 + 5*z^2 + 6*z + 1, exp(z*t))",
			"exp(-4*sin(pi/14)^2*t) + exp(-4*sin(3*pi/14)^2*t) + exp(-4*sin(5*pi/14)^2*t)"},
		{"sumroots(z, z^6 + 5*z^4 + 6*z^2 + 1, exp(z*t))",
			"2*cos(2*sin(pi/14)*t) + 2*cos(2*sin(3*pi/14)*t) + 2*cos(2*sin(5*pi/14)*t)"},
		// spring and mass 3 to 1, with a damping
		{"sumroots(z, (z + 1)^6 + 15*(z + 1)^4 + 54*(z + 1)^2 + 27, exp(z*t))",
			"2*exp(-t)*cos(2*sqrt(3)*sin(pi/14)*t) + 2*exp(-t)*cos(2*sqrt(3)*sin(3*pi/14)*t) + 2*exp(-t)*cos(2*sqrt(3)*sin(5*pi/14)*t)"},
		{"sumroots(z, z^3 - 3*z + 1, z*exp(z*t))",
			"2*cos(2*pi/9)*exp(2*cos(2*pi/9)*t) + 2*cos(4*pi/9)*exp(2*cos(4*pi/9)*t) - 2*cos(pi/9)*exp(-2*cos(pi/9)*t)"},
	})
	// an irrational stiffness
	g := function(t, "sumroots(z, "+strings.ReplaceAll("z^3 + 5*K*z^2 + 6*K^2*z + K^3", "K", "(2 - sqrt(3))")+", exp(z*t))")
	assert.NotContains(t, g.String(), "sumroots")
	requireEqual(t, g, function(t, g.String()))
	requireValue(t, g, expr.Form{})
	f := function(t, "sumroots(z, m^3*z^6 + 5*k*m^2*z^4 + 6*k^2*m*z^2 + k^3, exp(z*t))")
	assert.Equal(t, "2*cos(2*sqrt(k/m)*sin(pi/14)*t) + 2*cos(2*sqrt(k/m)*sin(3*pi/14)*t) + 2*cos(2*sqrt(k/m)*sin(5*pi/14)*t)", f.String())
}
