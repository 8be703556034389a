package expr_test

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

type elementary = expr.Elementary[algebra.Rat]

func elementaryOf(t *testing.T, src string) elementary {
	t.Helper()
	n, err := expr.Parse(src, expr.Limits{})
	require.NoError(t, err, src)
	f, err := expr.Env[algebra.Rat]{K: algebra.Q, Variable: "t", Lookup: expr.NoNames}.Elementary(n)
	require.NoError(t, err, src)
	return f
}

// plainText is the text of a function of the class without sums over roots.
func (g generator) plainText() string {
	src := g.smallRat()
	for range 1 + g.Intn(3) {
		src += " + " + g.smallRat() + "*" + g.factorText() + "*" + g.factorText()
	}
	return src
}

// Before its image is taken, a function obeys the laws of a differential ring.
func TestElementaryLaws(t *testing.T) {
	g := newGenerator(2)
	equal := func(x, y elementary) {
		t.Helper()
		require.True(t, x.Add(y.Scale(algebra.RatFromInt(-1))).IsZero())
		require.True(t, x.Image().Equal(y.Image()))
	}
	for range 150 {
		a, b, c := elementaryOf(t, g.plainText()), elementaryOf(t, g.plainText()), elementaryOf(t, g.plainText())
		before := a.Image()
		equal(a.Add(b), b.Add(a))
		equal(a.Mul(b), b.Mul(a))
		equal(a.Mul(b).Mul(c), a.Mul(b.Mul(c)))
		equal(a.Mul(b.Add(c)), a.Mul(b).Add(a.Mul(c)))
		equal(a.Mul(b).Derivative(), a.Derivative().Mul(b).Add(a.Mul(b.Derivative())))
		require.True(t, a.Derivative().Image().Equal(a.Image().Derivative()))
		require.True(t, a.Initial().Equal(a.Image().Initial()))
		require.True(t, a.Mul(b).Initial().Equal(a.Initial().Mul(b.Initial())))
		require.True(t, a.Image().Add(b.Image()).Equal(a.Add(b).Image()))
		require.True(t, before.Equal(a.Image()), "an operand has changed")
	}
}

func TestElementaryShift(t *testing.T) {
	f := elementaryOf(t, "t^3 - 2*t + 5")
	got, err := f.Shift(algebra.NewRat(3, 2))
	require.NoError(t, err)
	assert.True(t, got.Image().Equal(elementaryOf(t, "(t + 3/2)^3 - 2*(t + 3/2) + 5").Image()))
	back, err := got.Shift(algebra.NewRat(-3, 2))
	require.NoError(t, err)
	assert.True(t, back.Image().Equal(f.Image()))
	_, err = elementaryOf(t, "exp(t)").Shift(algebra.NewRat(1, 1))
	assert.Equal(t, expr.OutsideClass, faultOf(t, err).kind)
	_, err = elementaryOf(t, "exp(t)").Shift(algebra.Rat{})
	assert.NoError(t, err)
}

func TestElementaryConstant(t *testing.T) {
	for src, want := range map[string]string{
		"0": "0", "3/4": "3/4", "t - t": "0", "sin(t)^2 + cos(t)^2": "1", "exp(t)/exp(t)": "1", "cos(0)": "1", "2*exp(0*t)": "2",
	} {
		x, ok := elementaryOf(t, src).Constant()
		require.True(t, ok, src)
		assert.Equal(t, want, x.String(), src)
	}
	for _, src := range []string{"t", "exp(t)", "cos(t)", "1 + t"} {
		_, ok := elementaryOf(t, src).Constant()
		assert.False(t, ok, src)
	}
}

// Images from a table of Laplace transforms (from memory: any handbook).
func TestElementaryImage(t *testing.T) {
	for _, c := range []struct{ src, num, den string }{
		{"0", "0", "1"},
		{"1", "1", "s"},
		{"t^5", "120", "s^6"},
		{"exp(-3*t)", "1", "s + 3"},
		{"t^2*exp(t/2)", "2", "s^3 - 3/2*s^2 + 3/4*s - 1/8"},
		{"cos(2*t)", "s", "s^2 + 4"},
		{"sin(2*t)", "2", "s^2 + 4"},
		{"t*sin(t)", "2*s", "s^4 + 2*s^2 + 1"},
		{"t*cos(t)", "s^2 - 1", "s^4 + 2*s^2 + 1"},
		{"exp(-t)*sin(3*t)", "3", "s^2 + 2*s + 10"},
		{"exp(-t)*cos(3*t)", "s + 1", "s^2 + 2*s + 10"},
		{"sinh(t)", "1", "s^2 - 1"},
		{"cosh(t)", "s", "s^2 - 1"},
		{"sin(t)^2", "2", "s^3 + 4*s"},
		{"sin(t) - t*cos(t)", "2", "s^4 + 2*s^2 + 1"},
	} {
		f := elementaryOf(t, c.src).Image()
		assert.Equal(t, c.num, f.Numerator().String(), c.src)
		assert.Equal(t, c.den, f.Denominator().Poly().String(), c.src)
	}
}

func TestElementaryImmutable(t *testing.T) {
	f := elementaryOf(t, "t*exp(t) + cos(t)")
	text := f.Image().Numerator().String()
	f.Add(f)
	f.Mul(f)
	f.Scale(algebra.RatFromInt(3))
	f.Derivative()
	_, _ = f.Shift(algebra.RatFromBig(big.NewRat(0, 1)))
	assert.Equal(t, text, f.Image().Numerator().String())
}
