package expr_test

import (
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/expr"
)

// A phase given by its tangent is read by the addition formulas.
func TestReadPhases(t *testing.T) {
	for src, want := range map[string]string{
		"5*cos(2*t - atan(4/3))":             "3*cos(2*t) + 4*sin(2*t)",
		"5*sin(2*t + atan(4/3))":             "3*sin(2*t) + 4*cos(2*t)",
		"5*cos(2*t + atan(4/3) - pi)":        "-3*cos(2*t) + 4*sin(2*t)",
		"cos(t - 2*atan(1/2))":               "3/5*cos(t) + 4/5*sin(t)",
		"sqrt(3)*cos(t - atan(sqrt(2)))":     "cos(t) + sqrt(2)*sin(t)",
		"sqrt(a^2 + 1)*cos(w*t - atan(a))":   "cos(w*t) + a*sin(w*t)",
		"cos(atan(3/4))":                     "4/5",
		"sqrt(5)*exp(-t)*cos(t + atan(1/2))": "exp(-t)*(2*cos(t) - sin(t))",
	} {
		requireEqual(t, function(t, want), function(t, src))
	}
	for _, src := range []string{"atan(2)*t", "exp(atan(2)*t)", "cos(t*atan(2))", "cos(atan(t))"} {
		_, err := expr.ParseFunction(src, expr.Limits{})
		assert.Error(t, err, src)
	}
}
