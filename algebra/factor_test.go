package algebra_test

import (
	"context"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

// checkFactors requires the factors of p to multiply back to it up to its
// leading coefficient, to be monic, pairwise coprime, irreducible as far as
// factoring again can tell, and in order.
func checkFactors(t *testing.T, p ratPoly) []algebra.Factor[algebra.Rat] {
	t.Helper()
	factors, err := algebra.Q.FactorPoly(t.Context(), p)
	require.NoError(t, err)
	product := ints(1)
	for i, f := range factors {
		require.Positive(t, f.Mult)
		require.True(t, f.P.Degree() > 0 && f.P.Lead().IsOne(), "factor %v", f.P)
		again, err := algebra.Q.FactorPoly(t.Context(), f.P)
		require.NoError(t, err)
		require.Len(t, again, 1, "factor %v", f.P)
		for _, g := range factors[:i] {
			require.LessOrEqual(t, g.P.Degree(), f.P.Degree())
			wantPoly(t, "gcd of factors", algebra.GCD(algebra.Q, f.P, g.P), ints(1))
		}
		product = product.Mul(f.P.Pow(f.Mult))
	}
	wantPoly(t, "product of the factors", product, p.Monic(algebra.Q))
	return factors
}

func TestFactorPolyMultipliesBack(t *testing.T) {
	rng := algebratest.Rand(t)
	gen := algebratest.Polys(algebra.Q, algebratest.SmallRats, 3)
	wide := algebratest.Polys(algebra.Q, algebratest.Rats, 3)
	for range 40 {
		p := gen(rng).Mul(gen(rng).Pow(2)).Mul(wide(rng))
		if !p.IsZero() {
			checkFactors(t, p)
		}
	}
}

func TestFactorPolyNamed(t *testing.T) {
	s105 := algebra.Monomial(algebra.Q, q("1"), 105).Sub(ints(1))
	for _, c := range []struct {
		name string
		p    ratPoly
		want []string // each factor with its multiplicity
	}{
		{"constant", ints(-7), nil},
		{"linear", ints(3, -6), []string{"(s - 1/2)^1"}},
		{"power of s", ints(0, 0, 0, 5), []string{"(s)^3"}},
		{"difference of squares", ints(-4, 0, 9), []string{"(s - 2/3)^1", "(s + 2/3)^1"}},
		// Reducible modulo every prime and irreducible over Q.
		{"eighth cyclotomic", ints(1, 0, 0, 0, 1), []string{"(s^4 + 1)^1"}},
		{"Sophie Germain", ints(4, 0, 0, 0, 1), []string{"(s^2 - 2*s + 2)^1", "(s^2 + 2*s + 2)^1"}},
		// Roots +-sqrt2 +-sqrt3 +-sqrt5: Swinnerton-Dyer, from memory.
		{"Swinnerton-Dyer", ints(576, 0, -960, 0, 352, 0, -40, 0, 1), []string{"(s^8 - 40*s^6 + 352*s^4 - 960*s^2 + 576)^1"}},
		{"repeated", ints(1, 1).Pow(4).Mul(ints(-2, 0, 1).Pow(2)), []string{"(s + 1)^4", "(s^2 - 2)^2"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			var got []string
			for _, f := range checkFactors(t, c.p) {
				got = append(got, "("+f.P.String()+")^"+strconv.Itoa(f.Mult))
			}
			assert.Equal(t, c.want, got)
		})
	}
	// One cyclotomic factor for each of the 8 divisors of 105; the last, of
	// degree 48, is the first with a coefficient -2.
	factors := checkFactors(t, s105)
	require.Len(t, factors, 8)
	assert.Equal(t, 48, factors[7].P.Degree())
	assert.Equal(t, "-2", factors[7].P.Coef(7).String())
}

func TestFactorPolyOfZero(t *testing.T) {
	for _, p := range []ratPoly{{}, ints()} {
		factors, err := algebra.Q.FactorPoly(t.Context(), p)
		require.NoError(t, err)
		assert.Empty(t, factors)
	}
}

func TestFactorPolyAgreesWithSquareFree(t *testing.T) {
	rng := algebratest.Rand(t)
	gen := algebratest.Polys(algebra.Q, algebratest.SmallRats, 2)
	for range 30 {
		p := gen(rng).Mul(gen(rng).Pow(2)).Mul(gen(rng).Pow(3))
		if p.IsZero() {
			continue
		}
		byMult := map[int]ratPoly{}
		for _, f := range checkFactors(t, p) {
			part, ok := byMult[f.Mult]
			if !ok {
				part = ints(1)
			}
			byMult[f.Mult] = part.Mul(f.P)
		}
		parts := algebra.SquareFree(plainQ, p)
		assert.Len(t, parts, len(byMult))
		for _, part := range parts {
			wantPoly(t, "square-free part", byMult[part.Mult], part.P)
		}
	}
}

func TestFactorPolyIsDeterministic(t *testing.T) {
	p := algebra.Monomial(algebra.Q, q("1"), 60).Sub(ints(1))
	first := checkFactors(t, p)
	for range 3 {
		again := checkFactors(t, p)
		require.Len(t, again, len(first))
		for i := range first {
			wantPoly(t, "factor of a second run", again[i].P, first[i].P)
		}
	}
}

func TestFactorPolyCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := algebra.Q.FactorPoly(ctx, ints(-1, 0, 1))
	assert.ErrorIs(t, err, context.Canceled)
}

func BenchmarkFactorPoly(b *testing.B) {
	for _, deg := range []int{4, 16, 64} {
		for _, bits := range []int{16, 64} {
			b.Run("factors=2/deg="+strconv.Itoa(deg)+"/bits="+strconv.Itoa(bits), func(b *testing.B) {
				rng := algebratest.Rand(b)
				p := densePoly(rng, deg/2, bits).Mul(densePoly(rng, deg/2, bits))
				b.ReportAllocs()
				for b.Loop() {
					if _, err := algebra.Q.FactorPoly(b.Context(), p); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
