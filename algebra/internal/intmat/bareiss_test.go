package intmat

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// Minors up to the bound of the method, with even pivots among them, against
// Cramer's rule modulo primes.
func TestBareissAtTheBorders(t *testing.T) {
	r := rand.New(rand.NewPCG(53, 54))
	tried, full, singular := 0, 0, 0
	for range 6000 {
		n := 1 + r.IntN(7)
		a := zeros(n, n)
		for i := range a {
			for j := range a[i] {
				// Powers of two and their neighbours, some of them long.
				x := int64(1)<<r.IntN(1+minorBits/n) + r.Int64N(3) - 1
				a[i][j].SetInt64(x * (r.Int64N(3) - 1))
			}
		}
		s := squareOf(a)
		bits := s.hadamardBits()
		if bits > minorBits {
			continue
		}
		tried++
		e := make([]int64, n*n)
		for i, x := range s.e {
			e[i] = int64(x)
		}
		before := append([]int64{}, e...)
		num, den, ok, err := SmallInverse(t.Context(), n, e)
		require.True(t, ok)
		require.Equal(t, before, e)
		want, wantDen, wantErr := s.cramer(t.Context(), nil, n, bits, 1)
		require.Equal(t, wantErr, err)
		if err != nil {
			singular++
			continue
		}
		require.Equal(t, wantDen.Int64(), den)
		for i, x := range num {
			require.Equal(t, want[i/n][i%n].Int64(), x)
		}
		got, gotDen, err := InverseWords(t.Context(), n, e)
		require.NoError(t, err)
		requireSame(t, want, got)
		require.Zero(t, wantDen.Cmp(gotDen))
		if wantDen.BitLen() > minorBits-3 {
			full++
		}
	}
	require.Greater(t, tried, 1000)
	require.Greater(t, full, 10)
	require.Greater(t, singular, 100)
}

// A row of zeros makes Hadamard's bound zero, whatever the other entries.
func TestBareissWithZeroRowsAndColumns(t *testing.T) {
	r := rand.New(rand.NewPCG(55, 56))
	for range 200 {
		n := 1 + r.IntN(5)
		e := make([]int64, n*n)
		zero, column := r.IntN(n), r.IntN(2) == 0
		for i := range e {
			if (column && i%n != zero) || (!column && i/n != zero) {
				e[i] = int64(r.Uint64())
			}
		}
		_, _, ok, err := SmallInverse(t.Context(), n, e)
		require.True(t, ok)
		require.ErrorIs(t, err, ErrSingular)
	}
	_, _, ok, err := SmallInverse(t.Context(), 2, []int64{1 << 40, 1, 1, 1 << 40})
	require.NoError(t, err)
	require.False(t, ok)
	num, den, ok, err := SmallInverse(t.Context(), 0, nil)
	require.NoError(t, err)
	require.True(t, ok)
	require.Empty(t, num)
	require.EqualValues(t, 1, den)
}

// Determinants near 2^63 and 2^127, where two ways meet.
func TestDetAtTheEndsOfWords(t *testing.T) {
	for _, x := range borders() {
		for _, y := range borders() {
			for _, a := range [][][]*big.Int{
				{{x, new(big.Int)}, {new(big.Int), y}},
				{{new(big.Int), x}, {y, big.NewInt(1)}},
				{{x, big.NewInt(1), big.NewInt(2)}, {big.NewInt(2), y, big.NewInt(0)}, {big.NewInt(1), big.NewInt(0), big.NewInt(-1)}},
			} {
				det, err := Det(t.Context(), a)
				require.NoError(t, err)
				require.Zero(t, plainDet(a).Cmp(det))
			}
		}
	}
}

// BenchmarkBareiss compares inverses in words with Cramer's rule modulo a prime.
func BenchmarkBareiss(b *testing.B) {
	ctx := context.Background()
	r := rand.New(rand.NewPCG(57, 58))
	for _, n := range []int{3, 5, 8, 12} {
		e := make([]int64, n*n)
		for i := range e {
			e[i] = r.Int64N(9) - 4
		}
		b.Run(fmt.Sprintf("way=bareiss/n=%d", n), func(b *testing.B) {
			for b.Loop() {
				_, _, _, _ = SmallInverse(ctx, n, e)
			}
		})
		b.Run(fmt.Sprintf("way=cramer/n=%d", n), func(b *testing.B) {
			for b.Loop() {
				_, _, _ = squareOfWords(n, e).cramer(ctx, nil, n, minorBits, 1)
			}
		})
	}
}
