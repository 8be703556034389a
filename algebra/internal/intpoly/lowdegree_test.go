package intpoly

import (
	"context"
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// TestCubicAgainstGeneral compares with the factorisation by lifting.
func TestCubicAgainstGeneral(t *testing.T) {
	s := rng(31)
	split := 0
	for i := range 400 {
		bits := int(s.next()%20) + 2
		f := Mul(randomPoly(s.next(), 1, bits), randomPoly(s.next(), 2, bits))
		switch i % 4 {
		case 0:
			f = randomPoly(s.next(), 3, 2*bits)
		case 1:
			f = Mul(Mul(randomPoly(s.next(), 1, 15), randomPoly(s.next(), 1, 15)), randomPoly(s.next(), 1, 15))
		}
		f = positive(f.primitivePart())
		if f.Degree() != 3 || f.maxBits() > cubicBits || !isSquareFree(f) {
			continue
		}
		got := factorCubic(f)
		want, err := factorLifting(context.Background(), f)
		require.NoError(t, err)
		require.Len(t, got, len(want), "%v", f)
		requireSame(t, f, product(got))
		if len(got) > 1 {
			split++
		}
	}
	require.Greater(t, split, 100)
}

func TestCubicWithBadPrimes(t *testing.T) {
	// Leading coefficient, discriminant or both divisible by the first primes.
	for _, f := range []Poly{
		product([]Poly{ints(-1, 5*7*11*13), ints(1, 1), ints(2, 1)}),
		product([]Poly{ints(0, 1), ints(5*7*11*13*17, 1), ints(-5*7*11*13*17*19, 1)}),
		product([]Poly{ints(-1, 2), ints(-1, 3), ints(-1, 1<<20)}),
		product([]Poly{ints(1<<46-1, 1), ints(1, 0, 1)}),
		product([]Poly{ints(1, 1<<46-1), ints(1, 1, 1)}),
		product([]Poly{ints(-(1 << 46), 1), ints(-2, 0, 1)}),
	} {
		factors := requireFactored(t, f)
		require.Greater(t, len(factors), 1)
		c := factorCubic(positive(f.primitivePart()))
		require.Len(t, c, len(factors))
	}
	top := new(big.Int).Lsh(big.NewInt(1), cubicBits)
	require.Len(t, requireFactored(t, Mul(New(top, big.NewInt(1)), ints(1, 1, 1))), 2)
}
