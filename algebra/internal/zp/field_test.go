package zp

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// testPrimes are small primes and those at the edges of the allowed words.
var testPrimes = []uint64{3, 5, 13, 101, 65521, 1<<31 - 1, PrimeBelow(1 << 24), PrimeBelow(1 << 32), PrimeBelow(1 << 61), PrimeBelow(MaxPrime)}

// edgeResidues are residues near 0, p/2 and p, and a few others.
func edgeResidues(f Field) []uint64 {
	r := []uint64{0, 1, 2 % f.P, f.P / 2, f.P/2 + 1, f.P - 2, f.P - 1}
	s := splitMix(f.P)
	for range 5 {
		r = append(r, s.next()%f.P)
	}
	return r
}

func TestFieldAgainstBig(t *testing.T) {
	for _, p := range testPrimes {
		f := NewField(p)
		m := new(big.Int).SetUint64(p)
		num := func(x uint64) *big.Int { return new(big.Int).SetUint64(x) }
		check := func(want *big.Int, got uint64) {
			t.Helper()
			require.Zero(t, want.Mod(want, m).Cmp(num(got)), "modulo %d", p)
		}
		for _, x := range edgeResidues(f) {
			check(new(big.Int).Neg(num(x)), f.Neg(x))
			check(new(big.Int).Exp(num(x), big.NewInt(37), m), f.Pow(x, 37))
			check(big.NewInt(f.Lift(x)), x)
			require.LessOrEqual(t, f.Lift(x), int64(p/2))
			require.GreaterOrEqual(t, f.Lift(x), -int64(p/2))
			if x != 0 {
				require.Equal(t, uint64(1), f.Mul(x, f.Inv(x)))
				require.Equal(t, uint64(1), f.Pow(x, p-1), "Fermat")
			}
			for _, y := range edgeResidues(f) {
				check(new(big.Int).Add(num(x), num(y)), f.Add(x, y))
				check(new(big.Int).Sub(num(x), num(y)), f.Sub(x, y))
				check(new(big.Int).Mul(num(x), num(y)), f.Mul(x, y))
			}
		}
		for _, e := range []uint{0, 1, 31, 62, 63, 64, 127, 128, 500} {
			for d := int64(-1); d <= 1; d++ {
				x := new(big.Int).Lsh(big.NewInt(1), e)
				x.Add(x, big.NewInt(d))
				for range 2 {
					check(new(big.Int).Set(x), f.FromBig(x))
					if x.IsInt64() {
						check(new(big.Int).Set(x), f.FromInt64(x.Int64()))
					}
					x.Neg(x)
				}
			}
		}
	}
}

func TestFieldRefusals(t *testing.T) {
	for _, p := range []uint64{0, 1, 2, 4, 1 << 62, 1<<62 + 1, 1<<64 - 1} {
		require.Panics(t, func() { NewField(p) })
	}
	require.Panics(t, func() { NewField(7).Inv(0) })
	require.Panics(t, func() { PrimeBelow(3) })
}

func TestPrimeBelow(t *testing.T) {
	prime := func(n uint64) bool {
		for d := uint64(2); d*d <= n; d++ {
			if n%d == 0 {
				return false
			}
		}
		return n > 1
	}
	for n := uint64(4); n < 2000; n++ {
		p := PrimeBelow(n)
		require.Less(t, p, n)
		require.True(t, prime(p))
		for q := p + 1; q < n; q++ {
			require.False(t, prime(q))
		}
	}
}
