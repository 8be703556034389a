package expr_test

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

// Two undamped oscillations are written out where radicals say it shorter than
// their polynomial; what is written is the same function.
func TestUndampedPairs(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		// w^2 = 2 -+ sqrt(2), of three equal masses on equal springs
		{"sumroots(z, z^4 + 4*z^2 + 2, exp(z*t))", "2*cos(sqrt(2 - sqrt(2))*t) + 2*cos(sqrt(2 + sqrt(2))*t)"},
		// w = (sqrt(5) -+ 1)/2
		{"sumroots(z, z^4 + 3*z^2 + 1, z*exp(z*t))", "(1 - sqrt(5))*sin((-1 + sqrt(5))*t/2) - (1 + sqrt(5))*sin((1 + sqrt(5))*t/2)"},
		// w = sqrt(3) -+ sqrt(2)
		{"sumroots(z, z^4 + 10*z^2 + 1, exp(z*t))", "2*cos((sqrt(3) - sqrt(2))*t) + 2*cos((sqrt(3) + sqrt(2))*t)"},
	} {
		f := function(t, c.src)
		assert.Equal(t, c.want, f.String())
		requireEqual(t, f, function(t, f.String()))
	}
	// Damped, hyperbolic and complex ones stay sums over their roots.
	for _, src := range []string{
		"sumroots(z, z^4 + z^2 + 2, exp(z*t))", "sumroots(z, z^4 - 4*z^2 + 2, exp(z*t))", "sumroots(z, z^4 + z + 2, exp(z*t))", "sumroots(z, z^4 - 2, exp(z*t))",
	} {
		assert.Equal(t, src, function(t, src).String())
	}
}
