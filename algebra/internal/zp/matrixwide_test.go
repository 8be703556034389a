package zp

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/require"
)

// wideValue returns the signed number of the given words, lowest first.
func wideValue(e []uint64) *big.Int {
	x := new(big.Int).SetInt64(int64(e[len(e)-1]))
	for i := len(e) - 2; i >= 0; i-- {
		x.Add(x.Lsh(x, 64), new(big.Int).SetUint64(e[i]))
	}
	return x
}

// wideLaplace returns the determinant by expansion along the first row.
func wideLaplace(a [][]*big.Int) *big.Int {
	det := big.NewInt(1)
	if len(a) == 0 {
		return det
	}
	det.SetInt64(0)
	for j, x := range a[0] {
		minor := make([][]*big.Int, len(a)-1)
		for i := range minor {
			minor[i] = append(append([]*big.Int{}, a[i+1][:j]...), a[i+1][j+1:]...)
		}
		t := new(big.Int).Mul(x, wideLaplace(minor))
		if j%2 == 1 {
			t.Neg(t)
		}
		det.Add(det, t)
	}
	return det
}

func TestDetWideAgainstLaplace(t *testing.T) {
	r := rand.New(rand.NewPCG(71, 72))
	edge := []uint64{0, 1, 2, 1 << 31, 1 << 32, 1 << 62, 1 << 63, 1<<63 - 1, 1<<64 - 1}
	modulus := new(big.Int).Lsh(big.NewInt(1), 128)
	for round := range 600 {
		n, w, kind := r.IntN(6), 1+r.IntN(3), round%4
		e := make([]uint64, n*n*w)
		for i := range e {
			switch kind {
			case 0:
				e[i] = r.Uint64()
			case 1:
				e[i] = edge[r.IntN(len(edge))]
			case 2: // pivots with many factors 2, in one word or two
				e[i] = r.Uint64() << r.IntN(64) * r.Uint64N(2)
			case 3:
				e[i] = 2 * r.Uint64N(3)
			}
		}
		before := append([]uint64{}, e...)
		lo, hi, err := DetWide(t.Context(), n, w, e)
		require.NoError(t, err)
		require.Equal(t, before, e)
		rows := make([][]*big.Int, n)
		for i := range rows {
			for j := range n {
				k := (i*n + j) * w
				rows[i] = append(rows[i], wideValue(e[k:k+w]))
			}
		}
		off := wideLaplace(rows)
		off.Sub(off, wideValue([]uint64{lo, hi}))
		require.Zero(t, off.Rem(off, modulus).Sign())
	}
}

func TestDetWideMisuseAndCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	require.Panics(t, func() { _, _, _ = DetWide(ctx, 2, 2, make([]uint64, 4)) })
	cancel()
	_, _, err := DetWide(ctx, 2, 1, make([]uint64, 4))
	require.ErrorIs(t, err, context.Canceled)
}

// BenchmarkDetWays compares elimination modulo 2^64, modulo 2^128 and modulo a
// prime.
func BenchmarkDetWays(b *testing.B) {
	ctx := context.Background()
	f := NewField(PrimeBelow(MaxPrime))
	r := rand.New(rand.NewPCG(73, 74))
	for _, n := range []int{5, 10, 24, 50} {
		e, m := make([]uint64, n*n), f.NewMatrix(n, n)
		for i := range e {
			x := r.Int64N(19) - 9
			e[i], m.e[i] = uint64(x), f.FromInt64(x)
		}
		for _, way := range []struct {
			name string
			run  func()
		}{
			{"word", func() { _, _ = DetWordInPlace(ctx, n, slices.Clone(e)) }},
			{"wide", func() { _, _, _ = DetWide(ctx, n, 1, e) }},
			{"prime", func() { _, _ = m.Det(ctx) }},
		} {
			b.Run(fmt.Sprintf("way=%s/n=%d", way.name, n), func(b *testing.B) {
				for b.Loop() {
					way.run()
				}
			})
		}
	}
}
