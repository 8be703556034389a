package expr_test

import (
	"context"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

type image = expr.Image[algebra.Rat]

// imageOf is the image of random text of the class.
func (g generator) image(t *testing.T) image { return elementaryOf(t, g.plainText()).Image() }

// checkCanonical verifies the invariant of images: lowest terms, monic
// irreducible primes, the numerator below the denominator.
func checkCanonical(t *testing.T, f image) {
	t.Helper()
	d := f.Denominator()
	if f.IsZero() {
		require.Empty(t, d.Factors())
		return
	}
	require.Less(t, f.Numerator().Degree(), d.Poly().Degree())
	for _, fac := range d.Factors() {
		require.True(t, fac.P.Lead().IsOne())
		require.Positive(t, fac.Mult)
		parts, err := algebra.Q.FactorPoly(t.Context(), fac.P)
		require.NoError(t, err)
		require.Len(t, parts, 1)
		require.Equal(t, 1, parts[0].Mult)
		_, divides := f.Numerator().DivExact(algebra.Q, fac.P)
		require.False(t, divides, "%s divides the numerator", fac.P)
	}
}

func TestImageLaws(t *testing.T) {
	g := newGenerator(3)
	x, y := algebra.NewRat(3, 2), algebra.NewRat(-5, 7)
	for range 100 {
		a, b, c := g.image(t), g.image(t), g.image(t)
		for _, f := range []image{a, a.Add(b), a.Sub(b), a.Sub(a), a.Scale(x), a.Derivative(), a.Integral(), a.TimesT(), a.TimesExp(y)} {
			checkCanonical(t, f)
		}
		same := func(p, q image) {
			t.Helper()
			require.True(t, p.Equal(q) && q.Equal(p))
		}
		same(a.Add(b), b.Add(a))
		same(a.Add(b).Add(c), a.Add(b.Add(c)))
		same(a.Add(b).Sub(b), a)
		same(a.Add(b).Scale(x), a.Scale(x).Add(b.Scale(x)))
		same(a.Scale(algebra.Rat{}), expr.ZeroImage[algebra.Rat](algebra.Q))
		same(a.Integral().Derivative(), a)
		same(a.TimesExp(x).TimesExp(y), a.TimesExp(x.Add(y)))
		same(a.TimesExp(x).TimesExp(x.Neg()), a)
		// (t f)' = f + t f', and (e^(xt) f)' = x e^(xt) f + e^(xt) f'
		same(a.TimesT().Derivative(), a.Add(a.Derivative().TimesT()))
		same(a.TimesExp(x).Derivative(), a.TimesExp(x).Scale(x).Add(a.Derivative().TimesExp(x)))
		// The integral of f' is f - f(0).
		one := elementaryOf(t, "1").Image()
		same(a.Derivative().Integral(), a.Sub(one.Scale(a.Initial())))
		require.Equal(t, !a.Sub(b).IsZero(), !a.Equal(b))
	}
}

func TestImageZero(t *testing.T) {
	var zero image // the zero value is the zero function
	f := elementaryOf(t, "exp(t)").Image()
	for _, z := range []image{zero, expr.ZeroImage[algebra.Rat](algebra.Q), f.Sub(f)} {
		assert.True(t, z.IsZero())
		assert.True(t, z.Add(f).Equal(f))
		assert.True(t, f.Sub(z).Equal(f))
		assert.True(t, z.Sub(z).IsZero())
		assert.True(t, z.Scale(algebra.NewRat(2, 1)).IsZero())
		assert.True(t, z.Derivative().IsZero())
		assert.True(t, z.Integral().IsZero())
		assert.True(t, z.TimesT().IsZero())
		assert.True(t, z.TimesExp(algebra.NewRat(2, 1)).IsZero())
		assert.True(t, z.Initial().IsZero())
		assert.False(t, z.Equal(f))
	}
}

// The parts of a split add up, and each keeps its primes.
func TestImageSplit(t *testing.T) {
	g := newGenerator(4)
	for range 100 {
		f := g.image(t)
		keep := func(p algebra.Poly[algebra.Rat]) bool { return p.Degree() == 1 }
		parts, rests, err := expr.Split(context.Background(), algebra.Q, []expr.Image[algebra.Rat]{f}, keep)
		if err != nil {
			t.Fatal(err)
		}
		part, rest := parts[0], rests[0]
		checkCanonical(t, part)
		checkCanonical(t, rest)
		require.True(t, part.Add(rest).Equal(f))
		for _, fac := range part.Denominator().Factors() {
			require.True(t, keep(fac.P))
		}
		for _, fac := range rest.Denominator().Factors() {
			require.False(t, keep(fac.P))
		}
	}
}

func TestDenominator(t *testing.T) {
	a, b := elementaryOf(t, "t*exp(t) + cos(t)").Image().Denominator(), elementaryOf(t, "exp(t) + 1 + t*sin(t)").Image().Denominator()
	assert.Equal(t, "s^4 - 2*s^3 + 2*s^2 - 2*s + 1", a.Poly().String())
	exponent := func(d expr.Denominator[algebra.Rat], c ...int64) int { return d.Exponent(algebra.PolyFromInts(c...)) }
	join, mul := a.Join(b), a.Mul(b)
	assert.Equal(t, []int{2, 2, 1, 0}, []int{exponent(join, -1, 1), exponent(join, 1, 0, 1), exponent(join, 0, 1), exponent(join, 2, 1)})
	assert.Equal(t, []int{3, 3, 1}, []int{exponent(mul, -1, 1), exponent(mul, 1, 0, 1), exponent(mul, 0, 1)})
	assert.True(t, mul.Poly().Equal(a.Poly().Mul(b.Poly())))
	again := expr.NewDenominator[algebra.Rat](algebra.Q, a.Factors())
	assert.True(t, again.Poly().Equal(a.Poly()))

	f := elementaryOf(t, "t*exp(t) + cos(t)").Image()
	require.True(t, join.Image(join.Numerator(f)).Equal(f), "lowest terms are found again")
}
