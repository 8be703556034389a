package expr_test

import (
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/expr"
)

// Undamped vibrations without radicals are sums over their frequencies.
func TestFrequencies(t *testing.T) {
	requireWritten(t, []struct{ src, want string }{
		{"sumroots(z, z^6 + 7*z^4 + 11*z^2 + 3, exp(z*t))", "sumroots(omega, omega^6 - 7*omega^4 + 11*omega^2 - 3, cos(omega*t))"},
		{"sumroots(z, z^6 + 7*z^4 + 11*z^2 + 3, exp(z*t)/z)", "sumroots(omega, omega^6 - 7*omega^4 + 11*omega^2 - 3, sin(omega*t)/omega)"},
		{"sumroots(z, z^6 + 7*z^4 + 11*z^2 + 3, (z + 2)*exp(z*t)) + sin(3*t)",
			"sin(3*t) + sumroots(omega, omega^6 - 7*omega^4 + 11*omega^2 - 3, 2*cos(omega*t) - omega*sin(omega*t))"},
		{"sumroots(z, m*z^4 + (c + k)*z^2 + k, exp(z*t))", "sumroots(omega, m*omega^4 - (c + k)*omega^2 + k, cos(omega*t))"},
		// real roots among those of the square: not a vibration
		{"sumroots(z, z^6 + 7*z^4 + 11*z^2 - 2, exp(z*t))", "sumroots(z, z^6 + 7*z^4 + 11*z^2 - 2, exp(z*t))"},
	})
	assert.Equal(t, "sumroots(nu, k*nu^4 - 3*nu^2 + omega, cos(nu*t))", function(t, "sumroots(z, k*z^4 + 3*z^2 + omega, exp(z*t))").String())
}

// In a sum over an even polynomial, cosines and sines are read, also where it falls
// into factors that are not even: (w^2 - w - 1)(w^2 + w - 1).
func TestReadFrequencies(t *testing.T) {
	for src, want := range map[string]string{
		"sumroots(w, w^4 - 3*w^2 + 1, cos(w*t))":              "sumroots(z, z^4 + 3*z^2 + 1, exp(z*t))",
		"sumroots(w, w^4 - 3*w^2 + 1, w*sin(w*t))":            "-sumroots(z, z^4 + 3*z^2 + 1, z*exp(z*t))",
		"sumroots(w, w^4 - 3*w^2 + 1, (1 + w)*t*cos(w*t))":    "sumroots(z, z^4 + 3*z^2 + 1, t*exp(z*t))",
		"sumroots(w, w^4 - 3*w^2 + 1, sin(w*t)/w + cos(w*t))": "sumroots(z, z^4 + 3*z^2 + 1, (1 + 1/z)*exp(z*t))",
		"sumroots(w, w^2 + 4, cos(w*t))":                      "2*cosh(2*t)",
	} {
		requireEqual(t, function(t, want), function(t, src))
	}
	for src, want := range map[string]string{
		"sumroots(w, w^3 - 2, cos(w*t))":            "even powers",
		"sumroots(w, w^4 - 2, cos(w*t)*sin(w*t))":   "one cosine or sine",
		"sumroots(w, w^4 - 2, cos(w*t) + exp(w*t))": "one factor cos",
		"sumroots(w, w^4 - 2, cos(w*t) + 1)":        "one factor cos",
		"sumroots(w, w^4 - 2, 1/cos(w*t))":          "not a sum of terms",
		"sumroots(w, w^4 - 2, cos(2*w*t))":          "not a sum of terms",
	} {
		_, err := expr.ParseFunction(src, expr.Limits{})
		assert.ErrorContains(t, err, want, src)
	}
}
