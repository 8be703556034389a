package intmat

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

func TestCharPolyAgainstFaddeevLeVerrier(t *testing.T) {
	for _, a := range samples() {
		before := copyOf(a)
		want := plainCharPoly(a)
		got, err := CharPoly(t.Context(), a)
		require.NoError(t, err)
		requireSameVec(t, want, got)
		requireSame(t, before, a)
		byBerkowitz, err := berkowitz(t.Context(), a)
		require.NoError(t, err)
		requireSameVec(t, want, byBerkowitz)
		bits := squareOf(a).charPolyBits()
		for _, c := range want {
			require.LessOrEqual(t, c.BitLen(), bits)
		}
	}
}

func TestDetAgainstBareiss(t *testing.T) {
	for _, a := range samples() {
		before := copyOf(a)
		want := plainDet(a)
		got, err := Det(t.Context(), a)
		require.NoError(t, err)
		require.Zero(t, want.Cmp(got), "want %v, got %v", want, got)
		require.LessOrEqual(t, want.BitLen(), squareOf(a).hadamardBits())
		requireSame(t, before, a)
	}
}

func TestCharPolyLargeIsDeterministicAndMatchesDet(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	a := random(r, 40, 40, 1<<40)
	p, err := CharPoly(t.Context(), a)
	require.NoError(t, err)
	q, err := CharPoly(t.Context(), a)
	require.NoError(t, err)
	requireSameVec(t, p, q)
	require.Zero(t, p[0].Cmp(plainDet(a)))
	trace := new(big.Int)
	for i := range a {
		trace.Sub(trace, a[i][i])
	}
	require.Zero(t, trace.Cmp(p[39]))
	requireSame(t, zeros(40, 40), evalMatrix(p, a)) // Cayley-Hamilton
}

func TestCompanionMatricesGiveBackTheirPolynomial(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	b := borders()
	for n := 1; n <= 30; n++ {
		p := make([]*big.Int, n+1)
		c := zeros(n, n)
		for i := range n {
			p[i] = b[r.IntN(len(b))]
			c[i][n-1].Neg(p[i])
			if i > 0 {
				c[i][i-1].SetInt64(1)
			}
		}
		p[n] = big.NewInt(1)
		got, err := CharPoly(t.Context(), c)
		require.NoError(t, err)
		requireSameVec(t, p, got)
		got, err = MinPoly(t.Context(), c)
		require.NoError(t, err)
		requireSameVec(t, p, got)
	}
}

// The determinant of s I - A for the second difference matrix satisfies
// p_k = (s+2) p_(k-1) - p_(k-2), a Chebyshev polynomial U_n(1 + s/2).
func TestCharPolyOfSecondDifferences(t *testing.T) {
	prev, p := []*big.Int{}, []*big.Int{big.NewInt(1)}
	for range 100 {
		next, err := mulPoly(t.Context(), p, []*big.Int{big.NewInt(2), big.NewInt(1)})
		require.NoError(t, err)
		for i, x := range prev {
			next[i].Sub(next[i], x)
		}
		prev, p = p, next
	}
	got, err := CharPoly(t.Context(), tridiagonal(100))
	require.NoError(t, err)
	requireSameVec(t, p, got)
	det, err := Det(t.Context(), tridiagonal(100))
	require.NoError(t, err)
	require.EqualValues(t, 101, det.Int64()) // (-1)^n (n+1)
}

func TestDiagonalBlocksMakeTheMatrixTriangular(t *testing.T) {
	sizes := map[int]bool{}
	for _, a := range samples() {
		place := make([]int, len(a))
		for i := range place {
			place[i] = -1
		}
		for k, block := range diagonalBlocks(squareOf(a)) {
			sizes[len(block)] = true
			for _, i := range block {
				require.Equal(t, -1, place[i])
				place[i] = k
			}
		}
		for i := range a {
			require.GreaterOrEqual(t, place[i], 0)
			for j := range a {
				if a[i][j].Sign() != 0 {
					require.GreaterOrEqual(t, place[i], place[j])
				}
			}
		}
	}
	require.Greater(t, len(sizes), 3)
	chain := zeros(4, 4)
	for i := range 3 {
		chain[i][i+1].SetInt64(1)
	}
	require.Equal(t, [][]int{{3}, {2}, {1}, {0}}, diagonalBlocks(squareOf(chain)))
	chain[3][0].SetInt64(1)
	require.Len(t, diagonalBlocks(squareOf(chain)), 1)
}

func TestWrongShapesPanic(t *testing.T) {
	ragged := ints([]int64{1, 2}, []int64{3})
	ctx := context.Background()
	require.Panics(t, func() { _, _ = CharPoly(ctx, ragged) })
	require.Panics(t, func() { _, _ = Det(ctx, ragged) })
	require.Panics(t, func() { _, _ = MinPoly(ctx, ragged) })
	require.Panics(t, func() { _, _ = Kernel(ctx, ragged) })
	require.Panics(t, func() { _, _, _ = Inverse(ctx, ragged) })
	require.Panics(t, func() { _, _, _ = Solve(ctx, identity(2), ragged) })
	require.Panics(t, func() { _, _, _ = Solve(ctx, identity(2), identity(3)) })
}
