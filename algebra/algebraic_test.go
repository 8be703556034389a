package algebra_test

import (
	"context"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

func algebraicRoots(t *testing.T, p ratPoly) []algebra.Algebraic {
	t.Helper()
	roots, err := algebra.AlgebraicRoots(t.Context(), p)
	require.NoError(t, err)
	require.Len(t, roots, p.Degree())
	return roots
}

func TestAlgebraicString(t *testing.T) {
	for _, c := range []struct {
		name string
		p    ratPoly
		want []string
	}{
		{"rational", ints(-3, 2), []string{"3/2"}},
		{"zero", ints(0, 5), []string{"0"}},
		{"sqrt 2", ints(-2, 0, 1), []string{"-sqrt(2)", "sqrt(2)"}},
		{"h > 0, d > 0", ints(-1, -1, 1), []string{"1/2 - sqrt(5)/2", "1/2 + sqrt(5)/2"}},
		{"h < 0, d > 0", ints(2, 4, 1), []string{"-2 - sqrt(2)", "-2 + sqrt(2)"}},
		{"c > 1", ints(-12, 0, 1), []string{"-2*sqrt(3)", "2*sqrt(3)"}},
		{"c a fraction", ints(-12, 0, 25), []string{"-2*sqrt(3)/5", "2*sqrt(3)/5"}},
		{"i", ints(1, 0, 1), []string{"i", "-i"}},
		{"2 i", ints(4, 0, 1), []string{"2*i", "-2*i"}},
		{"i/2", ints(1, 0, 4), []string{"i/2", "-i/2"}},
		{"3 i/2", ints(9, 0, 4), []string{"3*i/2", "-3*i/2"}},
		{"h > 0, d < 0", ints(2, -2, 1), []string{"1 + i", "1 - i"}},
		{"h < 0, d < 0", ints(1, 1, 1), []string{"-1/2 + sqrt(3)*i/2", "-1/2 - sqrt(3)*i/2"}},
		{"sqrt(m) i", ints(12, 0, 1), []string{"2*sqrt(3)*i", "-2*sqrt(3)*i"}},
		{"cubic", ints(-2, 0, 0, 1), []string{"root(1, z^3 - 2)", "root(2, z^3 - 2)", "root(3, z^3 - 2)"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			for i, x := range algebraicRoots(t, c.p) {
				assert.Equal(t, c.want[i], x.String())
			}
		})
	}
}

// TestAlgebraicQuadraticIsEnclosed compares the h and d of a written quadratic
// root with its enclosure: (Re - h)^2 = d or Re = h and Im^2 = -d.
func TestAlgebraicQuadraticIsEnclosed(t *testing.T) {
	const prec = 100
	for _, p := range []ratPoly{ints(-1, -1, 1), ints(2, 4, 1), ints(1, 1, 1), ints(5, -2, 1), ints(-12, 0, 25), ints(12, 0, 1)} {
		roots := algebraicRoots(t, p)
		h, d := algebra.Quadratic(p.Monic(algebra.Q))
		for i, x := range roots {
			z, err := x.Enclose(t.Context(), prec)
			require.NoError(t, err)
			if d.Sign() > 0 {
				diff := z.Re.Sub(algebra.BallFromRat(h.Big(), prec), prec)
				sign, certain := diff.Sign()
				assert.True(t, certain && sign == 2*i-1 && z.Im.Contains(algebra.Rat{}.Big()), "%v", x)
				assert.True(t, diff.Sqr(prec).Contains(d.Big()), "%v", x)
				continue
			}
			sign, certain := z.Im.Sign()
			assert.True(t, certain && sign == 1-2*i && z.Re.Contains(h.Big()), "%v", x)
			assert.True(t, z.Im.Sqr(prec).Contains(d.Neg().Big()), "%v", x)
		}
	}
}

func TestAlgebraicEqualAndConj(t *testing.T) {
	// One real root and a pair; a constant factor does not matter.
	p := ints(-2, 0, 0, 1)
	roots, again := algebraicRoots(t, p), algebraicRoots(t, p.Scale(q("-3/7")))
	for i, x := range roots {
		assert.Equal(t, i, x.Index())
		wantPoly(t, "minimal polynomial", again[i].MinPoly(), p)
		for j, y := range again {
			assert.Equal(t, i == j, x.Equal(y), "%v and %v", x, y)
		}
		assert.True(t, x.Conj().Conj().Equal(x))
		assert.Equal(t, x.IsReal(), x.Conj().Equal(x))
		_, ok := x.Rational()
		assert.False(t, ok)
	}
	assert.True(t, roots[0].IsReal() && !roots[1].IsReal() && !roots[2].IsReal())
	assert.True(t, roots[1].Conj().Equal(roots[2]))
	assert.False(t, roots[0].Equal(algebraicRoots(t, ints(-3, 0, 0, 1))[0]))
	r, ok := algebraicRoots(t, ints(-3, 2))[0].Rational()
	assert.True(t, ok)
	assert.Equal(t, "3/2", r.String())
}

func TestAlgebraicCompare(t *testing.T) {
	// Ascending: one number for each polynomial, by the place of its root.
	hair := algebra.NewPoly(algebra.Q, q("-2").Sub(q("1e-120")), q("0"), q("1"))
	order := []struct {
		p ratPoly
		i int
	}{
		{ints(-2, 0, 1), 0},           // -sqrt 2
		{ints(1, 1), 0},               // -1
		{ints(-1, -1, 1), 0},          // 1/2 - sqrt(5)/2
		{ints(0, 1), 0},               // 0
		{ints(-1, 2), 0},              // 1/2
		{ints(-2, 0, 0, 1), 0},        // cube root of 2
		{ints(-1, -1, 0, 1), 0},       // 1.3247
		{ints(-99, 70), 0},            // 99/70 = 1.4142857
		{ints(-10, 0, 0, 0, 0, 1), 0}, // 1.58
	}
	var xs []algebra.Algebraic
	for _, o := range order {
		xs = append(xs, algebraicRoots(t, o.p)[o.i])
	}
	for i, x := range xs {
		sign, err := x.Sign(t.Context())
		require.NoError(t, err)
		want := 1
		if i < 3 {
			want = -1
		} else if i == 3 {
			want = 0
		}
		assert.Equal(t, want, sign, "sign of %v", x)
	}
	for i, x := range xs {
		for j, y := range xs {
			if i == 5 || j == 5 {
				continue // 1.2599 < 1.3247 is checked below
			}
			got, err := x.Compare(t.Context(), y)
			require.NoError(t, err)
			want := 0
			if i < j {
				want = -1
			} else if i > j {
				want = 1
			}
			assert.Equal(t, want, got, "%v and %v", x, y)
		}
	}
	sqrt2 := algebraicRoots(t, ints(-2, 0, 1))[1]
	for _, c := range []struct {
		x, y algebra.Algebraic
		want int
	}{
		{xs[5], xs[6], -1},
		{sqrt2, algebraicRoots(t, hair)[1], -1}, // 3.5e-121 apart
		{algebraicRoots(t, hair)[1], sqrt2, 1},
		{sqrt2, algebraicRoots(t, ints(-2, 0, 1))[1], 0},
	} {
		got, err := c.x.Compare(t.Context(), c.y)
		require.NoError(t, err)
		assert.Equal(t, c.want, got, "%v and %v", c.x, c.y)
	}
}

func TestAlgebraicOrderOfComplexNumbersPanics(t *testing.T) {
	i := algebraicRoots(t, ints(1, 0, 1))[0]
	one := algebraicRoots(t, ints(-1, 1))[0]
	assert.Panics(t, func() { _, _ = i.Compare(t.Context(), one) })
	assert.Panics(t, func() { _, _ = one.Compare(t.Context(), i) })
	assert.Panics(t, func() { _, _ = i.Sign(t.Context()) })
}

// TestAlgebraicSumsOfRoots compares sum and product of the enclosures with the
// coefficients, and checks that real parts alone are left.
func TestAlgebraicSumsOfRoots(t *testing.T) {
	const prec = 120
	rng := algebratest.Rand(t)
	polys := []ratPoly{ints(-1, -1, 0, 0, 0, 1), ints(1, 0, 0, 0, 1), ints(-2, 0, 0, 1), ints(3, 7), ints(2, 4, 1)}
	for range 8 {
		for _, f := range checkFactors(t, densePoly(rng, 5, 20)) {
			polys = append(polys, f.P)
		}
	}
	for _, p := range polys {
		p = p.Monic(algebra.Q)
		d := p.Degree()
		var sum algebra.ComplexBall
		product := algebra.ComplexBall{Re: algebra.BallFromRat(q("1").Big(), prec)}
		for _, x := range algebraicRoots(t, p) {
			z, err := x.Enclose(t.Context(), prec)
			require.NoError(t, err)
			sum, product = sum.Add(z, prec), product.Mul(z, prec)
			if x.IsReal() {
				assert.Zero(t, z.Im.Mid().Sign())
				assert.Zero(t, z.Im.Rad().Sign())
			}
		}
		constant := p.Coef(0)
		if d%2 == 1 {
			constant = constant.Neg()
		}
		zero := algebra.Rat{}.Big()
		assert.True(t, sum.Re.Contains(p.Coef(d-1).Neg().Big()) && sum.Im.Contains(zero), "sum of the roots of %v", p)
		assert.True(t, product.Re.Contains(constant.Big()) && product.Im.Contains(zero), "product of the roots of %v", p)
		assert.Greater(t, product.Re.RelPrec(), 90, "the enclosures are narrow enough to tell")
	}
}

func TestAlgebraicRefusesAndCancels(t *testing.T) {
	_, err := algebra.AlgebraicRoots(t.Context(), ints(1))
	assert.Error(t, err)
	x := algebraicRoots(t, ints(-2, 0, 1))[1]
	y := algebraicRoots(t, ints(-3, 0, 1))[1]
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err = x.Compare(ctx, y)
	assert.ErrorIs(t, err, context.Canceled)
	_, err = algebra.AlgebraicRoots(ctx, ints(-2, 0, 1))
	assert.ErrorIs(t, err, context.Canceled)
}
