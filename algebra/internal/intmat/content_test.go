package intmat

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// Rows with contents at the borders of words give the answers of the plain
// ways, whether their contents are split off or not.
func TestRowContents(t *testing.T) {
	r := rand.New(rand.NewPCG(51, 52))
	b := borders()
	split, whole, singular := 0, 0, 0
	for round := range 400 {
		n := 1 + r.IntN(6)
		a := random(r, n, n, 3)
		for i := range a {
			c := b[r.IntN(len(b))]
			for j := range a[i] {
				a[i][j].Mul(a[i][j], c)
				if round%5 == 0 {
					a[i][j].Mul(a[i][j], b[r.IntN(len(b))])
				}
			}
		}
		before := copyOf(a)
		p, c, err := rowContents(t.Context(), a)
		require.NoError(t, err)
		if c == nil {
			whole++
			requireSame(t, a, p)
		} else {
			split++
			for i := range a {
				require.Positive(t, c[i].Sign())
				g := new(big.Int)
				for j := range a[i] {
					require.Zero(t, a[i][j].Cmp(new(big.Int).Mul(c[i], p[i][j])))
					g.GCD(nil, nil, g, new(big.Int).Abs(p[i][j]))
				}
				require.LessOrEqual(t, g.Cmp(big.NewInt(1)), 0) // 0 for a row of zeros
			}
		}
		want := plainDet(a)
		det, err := Det(t.Context(), a)
		require.NoError(t, err)
		require.Zero(t, want.Cmp(det))
		num, den, err := Inverse(t.Context(), a)
		requireSame(t, before, a)
		if want.Sign() == 0 {
			singular++
			require.ErrorIs(t, err, ErrSingular)
			continue
		}
		require.NoError(t, err)
		requireSolution(t, a, identity(n), num, den)
	}
	require.Greater(t, split, 50)
	require.Greater(t, whole, 50)
	require.Greater(t, singular, 20)
}

func TestRowContentsCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, _, err := rowContents(ctx, [][]*big.Int{{new(big.Int).Lsh(big.NewInt(1), 70)}})
	require.ErrorIs(t, err, context.Canceled)
}
