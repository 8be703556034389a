package mpoly

import (
	"context"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// checkSquareFree checks that the decomposition of p is the one its
// factorisation gives.
func checkSquareFree(t *testing.T, p Poly) []Factor {
	t.Helper()
	parts, err := SquareFree(context.Background(), p)
	require.NoError(t, err)
	want := map[int]Poly{}
	for _, g := range checkFactors(t, p) {
		if w, ok := want[g.Mult]; ok {
			want[g.Mult] = w.Mul(g.P)
		} else {
			want[g.Mult] = g.P
		}
	}
	require.Len(t, parts, len(want))
	for i, g := range parts {
		require.True(t, i == 0 || parts[i-1].Mult < g.Mult)
		require.True(t, g.P.Equal(want[g.Mult]), "part of multiplicity %d", g.Mult)
	}
	return parts
}

func TestSquareFree(t *testing.T) {
	const names = "xyz"
	for _, c := range []struct {
		factors []string
		mult    []int
	}{
		{[]string{"x"}, []int{3}},
		{[]string{"x", "y"}, []int{3, 3}},
		{[]string{"x + y", "x - y"}, []int{2, 1}},
		{[]string{"x^2 + y", "y^2 + z", "z^2 + 3"}, []int{1, 2, 3}},
		{[]string{"y^2 + z", "x*y^2 + x*z + 1"}, []int{2, 1}}, // content in x
		{[]string{"y + z", "y - z", "x*y + 1"}, []int{3, 1, 3}},
		{[]string{"x + y + z + 1"}, []int{6}},
		{[]string{"6*x + 1", "4*x - 9223372036854775807*y"}, []int{2, 2}},
	} {
		p := ConstantWord(3, -6)
		for i, s := range c.factors {
			p = p.Mul(parse(t, names, s).Pow(c.mult[i]))
		}
		sum := 0
		for _, g := range checkSquareFree(t, p) {
			sum += g.P.TotalDegree() * g.Mult
		}
		require.Equal(t, p.TotalDegree(), sum)
	}
	for _, c := range []int64{0, 1, -7} {
		parts, err := SquareFree(context.Background(), ConstantWord(2, c))
		require.NoError(t, err)
		require.Empty(t, parts)
	}
}

func TestSquareFreeRandom(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for range 100 {
		n := 1 + rng.IntN(4)
		p := ConstantWord(n, 1)
		for range 1 + rng.IntN(3) {
			p = p.Mul(randomFactor(rng, n, 4, 2, []int{2, 30, 64}[rng.IntN(3)]).Pow(1 + rng.IntN(3)))
		}
		checkSquareFree(t, p)
	}
}
