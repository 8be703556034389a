package intpoly

import (
	"context"
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// TestSquareFreeImageIsYun compares the decomposition from one prime with the
// one by gcds over Z, up to the 20th power.
func TestSquareFreeImageIsYun(t *testing.T) {
	s := rng(51)
	image := 0
	for i := range 60 {
		p := ints(1)
		for _, m := range []int{1, 2, 3, 20} {
			g := randomPoly(s.next(), int(s.next()%4), int(s.next()%uint64(2+i))+1)
			for range m {
				p = Mul(p, g)
			}
		}
		p = positive(p.primitivePart())
		if p.Degree() < 1 {
			continue
		}
		want, err := squareFreeYun(context.Background(), p)
		require.NoError(t, err)
		ways := [][]Factor{SquareFree(p)}
		if parts := squareFreeImage(p); parts != nil {
			ways = append(ways, parts)
			image++
		}
		for _, got := range ways {
			require.Len(t, got, len(want))
			for j := range got {
				requireSame(t, want[j].P, got[j].P)
				require.Equal(t, want[j].Mult, got[j].Mult)
			}
		}
	}
	require.Greater(t, image, 10)
}

func TestSquareFreeWithBadPrimes(t *testing.T) {
	a, b := big.NewInt(certificatePrime), new(big.Int).SetUint64(gcdPrime(0))
	for _, p := range []*big.Int{a, b, new(big.Int).Mul(a, b)} {
		// s (s + p) is a square modulo p; p s + 1 loses its degree.
		for _, f := range []Poly{
			Mul(ints(0, 1), New(p, big.NewInt(1))),
			Mul(New(big.NewInt(1), p), ints(1, 1)),
		} {
			parts := SquareFree(f)
			require.Len(t, parts, 1)
			require.Equal(t, 1, parts[0].Mult)
			requireSame(t, f, parts[0].P)
			parts = SquareFree(Mul(f, f))
			require.Len(t, parts, 1)
			require.Equal(t, 2, parts[0].Mult)
			requireSame(t, f, parts[0].P)
		}
	}
}

func TestIsProductRefuses(t *testing.T) {
	f := ints(1, 2, 1)
	require.True(t, isProduct(f, []Factor{{ints(1, 1), 2}}))
	require.False(t, isProduct(f, []Factor{{ints(1, 1), 1}}))
	require.False(t, isProduct(f, []Factor{{ints(1, 2), 2}}))
	// Different by a multiple of the first primes.
	m := big.NewInt(1)
	for i := range 3 {
		m.Mul(m, new(big.Int).SetUint64(gcdPrime(i)))
	}
	require.False(t, isProduct(Add(f, New(m)), []Factor{{ints(1, 1), 2}}))
	require.False(t, isProduct(f, []Factor{{New(new(big.Int).Add(m, big.NewInt(1)), big.NewInt(1)), 2}}))
}

func TestContentAtWordBorders(t *testing.T) {
	for _, c := range borders() {
		if c.Sign() == 0 {
			continue
		}
		for _, p := range []Poly{ints(1), ints(3, 0, -2), ints(1, 1<<62, -1), New(borders()[3:]...)} {
			q := p.Scale(c)
			require.Zero(t, q.Content().CmpAbs(c))
			got, pp := q.Primitive()
			requireSame(t, q, pp.Scale(got))
			requireSame(t, positive(p), positive(pp))
			requireSame(t, positive(p), positive(q.primitivePart()))
		}
	}
}
