package algebra_test

import (
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

func TestGCDLaws(t *testing.T) {
	t.Run("over Q", func(t *testing.T) {
		algebratest.TestGCD(t, algebra.Q, algebratest.Polys(algebra.Q, algebratest.Rats, 4))
	})
	t.Run("over Q by Euclid", func(t *testing.T) {
		algebratest.TestGCD(t, plainQ, algebratest.Polys[algebra.Rat](plainQ, algebratest.SmallRats, 4))
	})
	for _, name := range []string{"sqrt2", "gauss", "plastic"} {
		t.Run("over "+name, func(t *testing.T) {
			k := numberFields()[name]
			algebratest.TestGCD(t, k, algebratest.Polys(k, algebratest.Elements(k, algebratest.SmallRats), 2))
		})
	}
}

func TestGCDModularAgainstEuclid(t *testing.T) {
	rng := algebratest.Rand(t)
	gen := algebratest.Polys(algebra.Q, algebratest.Rats, 5)
	for range 60 {
		p, d, common := gen(rng), gen(rng), gen(rng)
		p, d = p.Mul(common), d.Mul(common)
		wantPoly(t, "gcd", algebra.GCD(algebra.Q, p, d), algebra.GCD(plainQ, p, d))
	}
}

// TestGCDKnuth is the example of coefficient growth of Knuth, The Art of
// Computer Programming 2, section 4.6.1 (from memory).
func TestGCDKnuth(t *testing.T) {
	p := ints(-5, 2, 8, -3, -3, 0, 1, 0, 1)
	d := ints(21, -9, -4, 0, 5, 0, 3)
	wantPoly(t, "gcd", algebra.GCD(algebra.Q, p, d), ints(1))
	common := ints(7, -3, 2)
	wantPoly(t, "gcd", algebra.GCD(algebra.Q, p.Mul(common), d.Mul(common)), common.Monic(algebra.Q))
}

func TestExtendedGCDOfConstantsAndZero(t *testing.T) {
	for _, c := range []struct{ p, q, g ratPoly }{
		{ints(), ints(), ints()},
		{ints(), ints(2, 4), algebra.NewPoly(algebra.Q, q("1/2"), q("1"))},
		{ints(5), ints(), ints(1)},
		{ints(5), ints(3), ints(1)},
		{ints(5), ints(1, 2, 3), ints(1)},
		{ints(1, 2), ints(3, 6), algebra.NewPoly(algebra.Q, q("1/2"), q("1"))},
	} {
		g, u, v := algebra.ExtendedGCD(algebra.Q, c.p, c.q)
		wantPoly(t, "gcd", g, c.g)
		wantPoly(t, "u p + v q", u.Mul(c.p).Add(v.Mul(c.q)), g)
	}
}

func TestSquareFreeLaws(t *testing.T) {
	t.Run("over Q", func(t *testing.T) {
		algebratest.TestSquareFree(t, algebra.Q, algebratest.Polys(algebra.Q, algebratest.SmallRats, 3))
	})
	t.Run("over Q(i)", func(t *testing.T) {
		k := numberFields()["gauss"]
		algebratest.TestSquareFree(t, k, algebratest.Polys(k, algebratest.Elements(k, algebratest.SmallRats), 2))
	})
}

func TestSquareFreeNamed(t *testing.T) {
	// 4 s^3 (s - 1)^2 (s + 2)^2 (s^2 + 1)
	p := ints(4).Mul(ints(0, 1).Pow(3)).Mul(ints(-1, 1).Pow(2)).Mul(ints(2, 1).Pow(2)).Mul(ints(1, 0, 1))
	parts := algebra.SquareFree(algebra.Q, p)
	if assert.Len(t, parts, 3) {
		for i, want := range []ratPoly{ints(1, 0, 1), ints(-2, 1, 1), ints(0, 1)} {
			assert.Equal(t, i+1, parts[i].Mult)
			wantPoly(t, "part", parts[i].P, want)
		}
	}
	for _, p := range []ratPoly{{}, ints(), ints(7)} {
		assert.Empty(t, algebra.SquareFree(algebra.Q, p))
	}
}
