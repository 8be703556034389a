package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

func TestKernelAgainstRationalElimination(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	cases := samples()
	for range 40 {
		m, n, k := 1+r.IntN(9), 1+r.IntN(9), 1+r.IntN(5)
		cases = append(cases, random(r, m, n, 2), plainMul(random(r, m, k, 5), random(r, k, n, 5)),
			plainMul(random(r, m, k, 2), randomBorders(r, k, n)))
	}
	for _, a := range cases {
		before := copyOf(a)
		n := mustBeRectangular(a)
		got, err := Kernel(t.Context(), a)
		require.NoError(t, err)
		requireSame(t, plainKernel(a, n), got)
		requireSame(t, before, a)
	}
}

// The images modulo the first primes have too small a rank, or the wrong
// pivots.
func TestKernelWithUnluckyPrimes(t *testing.T) {
	p := new(big.Int).SetUint64(prime(0))
	q := new(big.Int).Mul(p, new(big.Int).SetUint64(prime(1)))
	one, zero := big.NewInt(1), new(big.Int)
	for _, a := range [][][]*big.Int{
		{{p, one}},                           // pivot 1 modulo p
		{{q, one, zero}, {zero, one, p}},     // pivots shift twice
		{{one, zero}, {zero, q}},             // full rank only modulo the third
		{{one, one, one}, {one, one, p}},     // the free column moves
		{{p, p, zero}, {q, q, q}, {p, p, p}}, // vanishes modulo p
	} {
		got, err := Kernel(t.Context(), a)
		require.NoError(t, err)
		requireSame(t, plainKernel(a, len(a[0])), got)
	}
}
