package expr_test

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Functions, sums over named roots among them, are a differential vector space.
func TestFunctionLaws(t *testing.T) {
	g := newGenerator(5)
	a := big.NewRat(-3, 2)
	for range 80 {
		f, h := g.function(t), g.function(t)
		requireEqual(t, f.Add(h).Derivative(), f.Derivative().Add(h.Derivative()))
		requireEqual(t, f.Scale(a).Derivative(), f.Derivative().Scale(a))
		requireEqual(t, f, f.Integral().Derivative())
		constant := function(t, f.Initial().String())
		requireEqual(t, f.Sub(constant), f.Derivative().Integral())
		requireEqual(t, f.Add(f.Derivative().TimesT()), f.TimesT().Derivative())
		requireEqual(t, f.TimesExp(a).Scale(a).Add(f.Derivative().TimesExp(a)), f.TimesExp(a).Derivative())
		requireEqual(t, f.TimesT().TimesExp(a), f.TimesExp(a).TimesT())
		requireEqual(t, f, f.Add(h).Sub(h))
		require.True(t, f.Sub(f).IsZero())
		require.Equal(t, "0", f.Integral().Initial().String())
		require.Equal(t, "0", f.TimesT().Initial().String())
	}
}

// The text of a function is the function again, where it holds no square root.
func TestFunctionRoundTrip(t *testing.T) {
	g := newGenerator(6)
	roots := 0
	for range 250 {
		f := g.function(t)
		back := function(t, f.String())
		requireEqual(t, f, back)
		require.Equal(t, f.String(), back.String())
		if len(f.String()) > 0 && containsRoots(f) {
			roots++
		}
	}
	require.Greater(t, roots, 50)
}

func containsRoots(f expr.Function) bool {
	found := false
	var visit func(expr.Node) bool
	visit = func(n expr.Node) bool {
		if _, ok := n.(expr.RootSum); ok {
			found = true
		}
		expr.Children(n, visit)
		return !found
	}
	visit(f.Node())
	return found
}

// valued returns f with values for names.
func valued(t *testing.T, f expr.Function, values map[string]*big.Rat) expr.Function {
	t.Helper()
	g, err := f.With(values)
	require.NoError(t, err)
	return g
}

func TestFunctionZeroValue(t *testing.T) {
	var zero expr.Function
	assert.True(t, zero.IsZero())
	assert.Equal(t, "0", zero.String())
	assert.Equal(t, "0", zero.LaTeX())
	assert.Equal(t, "0", zero.Initial().String())
	for _, f := range []expr.Function{zero.Derivative(), zero.Integral(), zero.TimesT(), zero.TimesExp(big.NewRat(1, 1)), zero.Scale(big.NewRat(2, 1)), zero.Sub(zero), valued(t, zero, nil)} {
		assert.True(t, f.IsZero())
		assert.True(t, f.Equal(zero))
	}
	for _, tt := range []*big.Rat{new(big.Rat), big.NewRat(-3, 7)} {
		s, err := zero.At(t.Context(), tt, 5)
		require.NoError(t, err)
		assert.Equal(t, "0", s)
	}
}

// t0 is the origin of a local time: f(t) is the function of t - t0.
func TestFunctionOrigin(t *testing.T) {
	origin := algebra.NewRat(5, 2)
	base := elementaryOf(t, "t^2*exp(-t) + 3").Image()
	f := expr.NewFunction[algebra.Rat](algebra.Q, "t", origin, base)
	g := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.Rat{}, base)
	for _, x := range []*big.Rat{big.NewRat(5, 2), big.NewRat(0, 1), big.NewRat(7, 3)} {
		want, err := g.At(t.Context(), new(big.Rat).Sub(x, origin.Big()), 30)
		require.NoError(t, err)
		got, err := f.At(t.Context(), x, 30)
		require.NoError(t, err)
		assert.Equal(t, want, got)
	}
	assert.Equal(t, "5/2", f.Origin().String())
	assert.Equal(t, "3 + (t - 5/2)^2*exp(-(t - 5/2))", f.String())
	assert.False(t, f.Equal(g))
	// In the origin 0 the sum needs constants such as exp(5/2).
	sum := f.Add(g)
	want := function(t, "3 + (t - 5/2)^2*exp(-(t - 5/2)) + t^2*exp(-t) + 3")
	assert.True(t, sum.Equal(want), "%s", sum)
	// t f(t), not (t - t0) f(t), which would vanish at the origin.
	s, err := f.TimesT().At(t.Context(), big.NewRat(5, 2), 5)
	require.NoError(t, err)
	assert.Equal(t, "7.5000", s)
	s, err = f.Integral().At(t.Context(), big.NewRat(5, 2), 5)
	require.NoError(t, err)
	assert.Equal(t, "0", s)
}

func TestFunctionFreeConstants(t *testing.T) {
	one, exp, cos := elementaryOf(t, "1").Image(), elementaryOf(t, "exp(-t)").Image(), elementaryOf(t, "cos(t)").Image()
	f := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.Rat{}, one, expr.FreeTerm[algebra.Rat]{Name: "C1", Image: exp}, expr.FreeTerm[algebra.Rat]{Name: "C2", Image: cos},
		expr.FreeTerm[algebra.Rat]{Name: "C3", Image: expr.ZeroImage[algebra.Rat](algebra.Q)})
	assert.Equal(t, []string{"C1", "C2"}, f.Constants())
	assert.Equal(t, "C1*exp(-t) + C2*cos(t) + 1", f.String())
	_, err := f.At(t.Context(), big.NewRat(1, 1), 10)
	assert.Equal(t, expr.SideConditions, faultOf(t, err).kind)
	_, err = f.Enclose(t.Context(), big.NewRat(1, 1), 64)
	assert.Equal(t, expr.SideConditions, faultOf(t, err).kind)

	half := valued(t, f, map[string]*big.Rat{"C1": big.NewRat(1, 2), "C9": big.NewRat(7, 1)})
	assert.Equal(t, []string{"C2"}, half.Constants())
	all := valued(t, half, map[string]*big.Rat{"C2": new(big.Rat)})
	requireEqual(t, function(t, "1 + exp(-t)/2"), all)
	assert.Equal(t, []string{"C1", "C2"}, f.Constants(), "the receiver is unchanged")

	sum := f.Add(f)
	assert.Equal(t, []string{"C1", "C2"}, sum.Constants())
	assert.True(t, sum.Equal(f.Scale(big.NewRat(2, 1))))
	assert.True(t, f.Sub(f).IsZero())
	assert.Equal(t, "-C1*exp(-t) - C2*sin(t)", f.Derivative().String())
	assert.Equal(t, "C1*exp(-t) + C2*cos(t) + 1", f.String())
}

func TestFunctionOf(t *testing.T) {
	n, err := expr.Parse("tau*exp(-tau)", expr.Limits{})
	require.NoError(t, err)
	f, err := expr.FunctionOf(n, "tau", expr.Limits{})
	require.NoError(t, err)
	assert.Equal(t, "tau", f.Variable())
	assert.Equal(t, "tau*exp(-tau)", f.String())
	constant, err := expr.FunctionOf(n, "t", expr.Limits{})
	require.NoError(t, err)
	assert.Equal(t, []string{"tau"}, constant.Parameters())
	assert.Panics(t, func() { f.Add(function(t, "t")) })
	// A variable with the name of roots gives way.
	n, err = expr.Parse("sumroots(r, r^3 - r - 2, exp(r*z))", expr.Limits{})
	require.NoError(t, err)
	f, err = expr.FunctionOf(n, "z", expr.Limits{})
	require.NoError(t, err)
	assert.Equal(t, "sumroots(r, r^3 - r - 2, exp(r*z))", f.String())
}
