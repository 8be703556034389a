package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// plainReconstruct divides one step at a time.
func plainReconstruct(x, m, bound *big.Int) (u, v *big.Int, ok bool) {
	r0, r1 := new(big.Int).Set(m), new(big.Int).Set(x)
	v0, v1 := new(big.Int), big.NewInt(1)
	for r1.Cmp(bound) > 0 {
		q, r := new(big.Int).QuoRem(r0, r1, new(big.Int))
		r0, r1 = r1, r
		v0, v1 = v1, q.Sub(v0, q.Mul(q, v1))
	}
	if v1.Sign() < 0 {
		r1.Neg(r1)
		v1.Neg(v1)
	}
	g := new(big.Int).GCD(nil, nil, new(big.Int).Abs(r1), v1)
	return r1, v1, v1.Cmp(bound) <= 0 && g.BitLen() == 1
}

func TestReconstructAgainstSingleSteps(t *testing.T) {
	r := rand.New(rand.NewPCG(51, 52))
	number := func(bits int) *big.Int {
		x := new(big.Int)
		for x.BitLen() < bits {
			x.Lsh(x, 32)
			switch r.IntN(4) {
			case 0: // runs of equal bits make long quotients
			case 1:
				x.Add(x, big.NewInt(1<<32-1))
			default:
				x.Add(x, big.NewInt(r.Int64N(1<<32)))
			}
			if x.Sign() == 0 {
				x.SetInt64(1)
			}
		}
		return x.Rsh(x, uint(x.BitLen()-bits))
	}
	found := 0
	for range 4000 {
		m := number(2 + r.IntN(700))
		x := new(big.Int).Mod(number(1+r.IntN(700)), m)
		bound := new(big.Int).Sqrt(new(big.Int).Rsh(m, 1))
		switch r.IntN(3) {
		case 0:
			bound = number(1 + r.IntN(m.BitLen()))
		case 1: // a fraction that exists
			den := new(big.Int).Add(new(big.Int).Mod(number(300), bound), big.NewInt(1))
			if inv := new(big.Int).ModInverse(den, m); inv != nil {
				x.Mod(inv.Mul(inv, new(big.Int).Mod(number(300), bound)), m)
			}
		}
		if bound.Sign() == 0 {
			continue
		}
		u, v, ok := plainReconstruct(x, m, bound)
		gotU, gotV, gotOK, err := reconstruct(t.Context(), x, m, bound)
		require.NoError(t, err)
		require.Equal(t, ok, gotOK)
		if ok {
			found++
			require.Zero(t, u.Cmp(gotU))
			require.Zero(t, v.Cmp(gotV))
		}
	}
	require.Greater(t, found, 1000)
}
