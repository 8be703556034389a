package algebra_test

import (
	"context"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

// TestKernelOverQ compares the kernel modulo primes with that of the echelon
// form, for every shape and rank.
func TestKernelOverQ(t *testing.T) {
	ctx := context.Background()
	r := rand.New(rand.NewPCG(41, 42))
	for range 300 {
		m, n, den := r.IntN(5), r.IntN(6), int64(1+r.IntN(2)*r.IntN(9))
		a := algebra.MatrixFromFunc[algebra.Rat](algebra.Q, m, n, func(int, int) algebra.Rat {
			return algebra.NewRat(int64(r.IntN(5)-2), 1+r.Int64N(den))
		})
		ech, err := algebra.Reduce[algebra.Rat](ctx, algebra.Q, a)
		require.NoError(t, err)
		want := ech.Kernel()
		got, err := algebra.Kernel[algebra.Rat](ctx, algebra.Q, a)
		require.NoError(t, err)
		require.Len(t, got, len(want), "%s", a)
		for i := range want {
			for j := range want[i] {
				require.True(t, got[i][j].Equal(want[i][j]), "vector %d of the kernel of %s: %v, want %v", i, a, got[i], want[i])
			}
		}
	}
}

// TestInverseKeepsItsEntries reads the entries of a matrix that is held over one
// denominator in every way.
func TestInverseKeepsItsEntries(t *testing.T) {
	ctx := context.Background()
	r := rand.New(rand.NewPCG(43, 44))
	for range 100 {
		n := 1 + r.IntN(4)
		a := algebra.MatrixFromFunc[algebra.Rat](algebra.Q, n, n, func(int, int) algebra.Rat {
			return algebra.NewRat(int64(r.IntN(19)-9), 1+r.Int64N(3))
		})
		x, err := algebra.Inverse[algebra.Rat](ctx, algebra.Q, a)
		if err != nil {
			require.ErrorIs(t, err, algebra.ErrSingular)
			continue
		}
		plain := algebra.MatrixFromFunc[algebra.Rat](algebra.Q, n, n, x.At)
		one := algebra.Identity[algebra.Rat](algebra.Q, n)
		require.True(t, x.Equal(plain) && plain.Equal(x))
		require.True(t, a.Mul(x).Equal(one) && x.Mul(a).Equal(one))
		require.True(t, x.Above(one).Beside(x.Above(one)).Equal(plain.Above(one).Beside(plain.Above(one))))
		require.Equal(t, plain.String(), x.String())
		back, err := algebra.Inverse[algebra.Rat](ctx, algebra.Q, x)
		require.NoError(t, err)
		require.True(t, back.Equal(a))
	}
}
