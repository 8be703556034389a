package linsys_test

import (
	"context"
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// A response with values is that of a model with definitions.
func TestSubstitutedModel(t *testing.T) {
	r, err := respond("x' = -k*x + 1; x(0) = a")
	require.NoError(t, err)
	two, err := r.With(map[string]*big.Rat{"k": big.NewRat(2, 1)})
	require.NoError(t, err)
	assert.Equal(t, []string{"a"}, two.Model().Parameters())
	assert.Contains(t, two.Model().String(), "k = 2\n")
	again, err := respond(two.Model().String())
	require.NoError(t, err)
	assert.True(t, again.State("x").Equal(two.State("x")))
	src, err := two.GoSource(context.Background(), linsys.GoOptions{})
	require.NoError(t, err)
	assert.Contains(t, string(src), "k = 2")
	// A symbol has a value once.
	_, err = two.With(map[string]*big.Rat{"k": big.NewRat(3, 1)})
	var e *linsys.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.OutsideClass, e.Kind)
	// When gives one as well.
	equal, err := r.When(context.Background(), "a = 1/k")
	require.NoError(t, err)
	assert.Equal(t, "1/k", equal.State("x").String())
	assert.Contains(t, equal.Model().String(), "a = 1/k")
}

func TestSubstituteRefuses(t *testing.T) {
	r, err := respond("x' = -k*x + y; y' = -y; x(0) = 1; y(0) = 0")
	require.NoError(t, err)
	for _, v := range []expr.Node{nil, expr.Sym("t"), expr.Sym("y"), expr.Add(expr.Sym("a"), expr.Sym("t"))} {
		_, err := r.Substitute(context.Background(), map[string]expr.Node{"k": v})
		var e *linsys.Error
		require.ErrorAs(t, err, &e, "%v", v)
		_, err = r.State("x").Substitute(context.Background(), map[string]expr.Node{"k": v})
		if v == nil || v.String() != "y" { // y is a name like others for a function
			require.ErrorAs(t, err, &e, "%v", v)
		}
	}
}

// Assumptions may hold roots that the model does not have.
func TestAssumptionsWithRoots(t *testing.T) {
	for _, c := range []struct{ model, assume, want string }{
		{"x' = -k*x + 1; x(0) = 1", "k > sqrt(2)", "1/k + (k - 1)/k*exp(-k*t)"},
		{"m*x'' + c*x' + k*x = 0; x(0) = 1; x'(0) = 0", "m > 0, k > 0, c > 0, c < 2*sqrt(k*m)", ""},
		{"x' = -a*x; x(0) = 1", "a > 2^(1/3)", "exp(-a*t)"},
	} {
		m, err := linsys.Read(c.model)
		require.NoError(t, err)
		m, err = m.Assume(c.assume)
		require.NoError(t, err)
		r, err := respondModel(m)
		require.NoError(t, err)
		text := r.State("x").String()
		if c.want != "" {
			assert.Equal(t, c.want, text)
		}
		_, formula, err := r.Conditions(context.Background())
		require.NoError(t, err)
		assert.Empty(t, formula)
	}
}

func TestAssumptionOnADefinedName(t *testing.T) {
	m, err := linsys.Read("k = 3; x' = -k*x; x(0) = 1")
	require.NoError(t, err)
	_, err = m.Assume("k > 5")
	var e *linsys.Error
	require.ErrorAs(t, err, &e)
	assert.Contains(t, e.Message, "has a value")
}

func TestSquaresAsConditions(t *testing.T) {
	for _, c := range []struct {
		model, assume string
		want          []string
	}{
		{"x' = -k*x + sin(w*t); x(0) = 0", "w != 0", nil},
		{"x'''''' = k*x; x(0) = 1; x'(0) = 0; x''(0) = 0; x'''(0) = 0; x''''(0) = 0; x'''''(0) = 0", "k != 1", []string{"k != 0"}},
	} {
		m, err := linsys.Read(c.model)
		require.NoError(t, err)
		m, err = m.Assume(c.assume)
		require.NoError(t, err)
		r, err := respondModel(m)
		require.NoError(t, err)
		_, formula, err := r.Conditions(context.Background())
		require.NoError(t, err)
		assert.Equal(t, c.want, formula)
	}
}
