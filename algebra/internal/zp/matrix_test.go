package zp

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// matrixFields are small fields, where accidents are common, and the largest.
func matrixFields() []Field {
	return []Field{NewField(3), NewField(5), NewField(101), NewField(PrimeBelow(1 << 31)), NewField(PrimeBelow(MaxPrime))}
}

func randomMatrix(f Field, r *rand.Rand, rows, cols int) *Matrix {
	m := f.NewMatrix(rows, cols)
	for i := range rows {
		for j := range cols {
			switch r.IntN(4) {
			case 0: // zeros exercise the skipped multipliers
			case 1:
				m.Set(i, j, f.P-1)
			default:
				m.Set(i, j, r.Uint64N(f.P))
			}
		}
	}
	return m
}

// matrixSamples are square matrices over f, many of them singular.
func matrixSamples(t *testing.T, f Field) []*Matrix {
	r := rand.New(rand.NewPCG(f.P, 1))
	out := []*Matrix{f.NewMatrix(0, 0), f.NewMatrix(4, 4), f.IdentityMatrix(5)}
	for n := 1; n <= 20; n++ {
		k := 1 + r.IntN(n)
		low, err := randomMatrix(f, r, n, k).Mul(t.Context(), randomMatrix(f, r, k, n))
		require.NoError(t, err)
		tri := f.NewMatrix(n, n)
		for i := range n {
			for j := max(0, i-1); j < min(n, i+2); j++ {
				tri.Set(i, j, r.Uint64N(f.P))
			}
		}
		out = append(out, randomMatrix(f, r, n, n), low, tri)
	}
	return out
}

// matrixPlainDet expands by elimination with one modular product at a time.
func matrixPlainDet(m *Matrix) uint64 {
	f, n := m.Field, m.Rows
	a, det := m.Clone(), uint64(1)
	for k := range n {
		p := k
		for p < n && a.At(p, k) == 0 {
			p++
		}
		if p == n {
			return 0
		}
		if p != k {
			for j := range n {
				x, y := a.At(p, j), a.At(k, j)
				a.Set(p, j, y)
				a.Set(k, j, x)
			}
			det = f.Neg(det)
		}
		det = f.Mul(det, a.At(k, k))
		for i := k + 1; i < n; i++ {
			c := f.Mul(a.At(i, k), f.Inv(a.At(k, k)))
			for j := k; j < n; j++ {
				a.Set(i, j, f.Sub(a.At(i, j), f.Mul(c, a.At(k, j))))
			}
		}
	}
	return det
}

// matrixPlainMul is the definition of the product.
func matrixPlainMul(a, b *Matrix) *Matrix {
	c := a.Field.NewMatrix(a.Rows, b.Cols)
	for i := range a.Rows {
		for j := range b.Cols {
			var s uint64
			for k := range a.Cols {
				s = a.Field.Add(s, a.Field.Mul(a.At(i, k), b.At(k, j)))
			}
			c.Set(i, j, s)
		}
	}
	return c
}

// matrixAtPoly returns p(m).
func matrixAtPoly(m *Matrix, p []uint64) *Matrix {
	r := m.Field.NewMatrix(m.Rows, m.Rows)
	for i := len(p) - 1; i >= 0; i-- {
		r = matrixPlainMul(r, m)
		for j := range m.Rows {
			r.Set(j, j, m.Field.Add(r.At(j, j), p[i]))
		}
	}
	return r
}

func TestMatrixRowOperationsAtTheBorders(t *testing.T) {
	for _, f := range matrixFields() {
		edge := []uint64{0, 1, 2, f.P / 2, f.P - 2, f.P - 1}
		for n := range 40 {
			x, y := make([]uint64, n), make([]uint64, n)
			for i := range n {
				x[i], y[i] = f.P-1, edge[i%len(edge)]
			}
			var want uint64
			for i := range n {
				want = f.Add(want, f.Mul(x[i], x[i]))
			}
			require.Equal(t, want, f.rowDot(x, x))
			for _, u := range edge {
				got := append([]uint64(nil), x...)
				f.rowAddScaled(got, y, u)
				for i := range n {
					require.Equal(t, f.Add(x[i], f.Mul(u, y[i])), got[i])
				}
			}
		}
	}
}

func TestMatrixCharPoly(t *testing.T) {
	for _, f := range matrixFields() {
		for _, m := range matrixSamples(t, f) {
			n, before := m.Rows, m.Clone()
			p, err := m.CharPoly(t.Context())
			require.NoError(t, err)
			require.Len(t, p, n+1)
			require.EqualValues(t, 1, p[n])
			require.Equal(t, f.NewMatrix(n, n), matrixAtPoly(m, p)) // Cayley-Hamilton
			// p(x) = det(x I - m) at many points.
			for x := range min(f.P, uint64(n+1)) {
				shifted := f.NewMatrix(n, n)
				for i := range n {
					for j := range n {
						shifted.Set(i, j, f.Neg(m.At(i, j)))
					}
					shifted.Set(i, i, f.Add(shifted.At(i, i), x))
				}
				var value uint64
				for i := n; i >= 0; i-- {
					value = f.Add(f.Mul(value, x), p[i])
				}
				require.Equal(t, matrixPlainDet(shifted), value)
			}
			h, err := m.Hessenberg(t.Context())
			require.NoError(t, err)
			for i := range n {
				for j := range max(0, i-1) {
					require.Zero(t, h.At(i, j))
				}
			}
			require.Equal(t, before, m)
		}
	}
}

func TestMatrixElimination(t *testing.T) {
	for _, f := range matrixFields() {
		singular := 0
		for _, m := range matrixSamples(t, f) {
			n, before := m.Rows, m.Clone()
			want := matrixPlainDet(m)
			det, err := m.Det(t.Context())
			require.NoError(t, err)
			require.Equal(t, want, det)
			inv, ok, err := m.Inverse(t.Context())
			require.NoError(t, err)
			require.Equal(t, want != 0, ok)
			if ok {
				require.Equal(t, f.IdentityMatrix(n), matrixPlainMul(m, inv))
				b := randomMatrix(f, rand.New(rand.NewPCG(1, 2)), n, 3)
				x, ok, err := m.Solve(t.Context(), b)
				require.NoError(t, err)
				require.True(t, ok)
				require.Equal(t, b, matrixPlainMul(m, x))
			} else {
				singular++
			}
			require.Equal(t, before, m)
		}
		require.Greater(t, singular, 5)
	}
}

func TestMatrixRankKernelAndProfile(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for _, f := range matrixFields() {
		for range 60 {
			rows, cols, k := r.IntN(9), r.IntN(9), r.IntN(6)
			m := matrixPlainMul(randomMatrix(f, r, rows, k), randomMatrix(f, r, k, cols))
			rank, err := m.Rank(t.Context())
			require.NoError(t, err)
			require.LessOrEqual(t, rank, min(rows, cols, k))
			ri, ci, err := m.Profile(t.Context())
			require.NoError(t, err)
			require.Len(t, ri, rank)
			require.Len(t, ci, rank)
			minor := f.NewMatrix(rank, rank)
			for i, a := range ri {
				for j, b := range ci {
					minor.Set(i, j, m.At(a, b))
				}
			}
			require.NotZero(t, matrixPlainDet(minor))
			basis, err := m.Kernel(t.Context())
			require.NoError(t, err)
			require.Len(t, basis, cols-rank) // rank-nullity
			for _, v := range basis {
				require.Equal(t, make([]uint64, rows), m.MulVec(v))
			}
			stacked := f.NewMatrix(len(basis), cols)
			for i, v := range basis {
				copy(stacked.Row(i), v)
			}
			independent, err := stacked.Rank(t.Context())
			require.NoError(t, err)
			require.Equal(t, len(basis), independent)
			e, pivots, err := m.ReducedEchelon(t.Context())
			require.NoError(t, err)
			require.Equal(t, ci, pivots)
			for i, c := range pivots {
				for j := range rows {
					require.EqualValues(t, map[bool]int{true: 1}[i == j], e.At(j, c))
				}
			}
		}
	}
}

// The minimal polynomial annihilates; its degree is the rank of the powers
// I, m, m^2, ... written as vectors.
func TestMatrixMinPoly(t *testing.T) {
	for _, f := range matrixFields() {
		for _, m := range matrixSamples(t, f) {
			n := m.Rows
			if n > 10 {
				continue
			}
			p, err := m.MinPoly(t.Context())
			require.NoError(t, err)
			require.EqualValues(t, 1, p[len(p)-1])
			require.Equal(t, f.NewMatrix(n, n), matrixAtPoly(m, p))
			powers := f.NewMatrix(n+1, n*n)
			power := f.IdentityMatrix(n)
			for k := range n + 1 {
				for i := range n {
					copy(powers.Row(k)[i*n:], power.Row(i))
				}
				power = matrixPlainMul(power, m)
			}
			rank, err := powers.Rank(t.Context())
			require.NoError(t, err)
			require.Equal(t, rank, len(p)-1)
		}
	}
}

func TestMatrixFromBigReduces(t *testing.T) {
	f := NewField(PrimeBelow(MaxPrime))
	p := new(big.Int).SetUint64(f.P)
	big64 := new(big.Int).Lsh(big.NewInt(1), 64)
	m := f.MatrixFromBig([][]*big.Int{{p, big.NewInt(-1)}, {big64, new(big.Int).Neg(big64)}})
	want := new(big.Int).Mod(big64, p).Uint64()
	require.Equal(t, []uint64{0, f.P - 1}, m.Row(0))
	require.Equal(t, []uint64{want, f.P - want}, m.Row(1))
}

func TestMatrixMisuseAndCancellation(t *testing.T) {
	f := NewField(101)
	m := f.NewMatrix(2, 3)
	ctx, cancel := context.WithCancel(t.Context())
	require.Panics(t, func() { _, _ = m.CharPoly(ctx) })
	require.Panics(t, func() { _, _ = m.Det(ctx) })
	require.Panics(t, func() { _, _ = m.MinPoly(ctx) })
	require.Panics(t, func() { m.MulVec(make([]uint64, 2)) })
	require.Panics(t, func() { _, _ = m.Mul(ctx, m) })
	require.Panics(t, func() { f.MatrixFromBig([][]*big.Int{{big.NewInt(1)}, {}}) })
	cancel()
	sq := f.IdentityMatrix(5)
	_, err := sq.CharPoly(ctx)
	require.ErrorIs(t, err, context.Canceled)
	_, err = sq.Det(ctx)
	require.ErrorIs(t, err, context.Canceled)
	_, err = sq.MinPoly(ctx)
	require.ErrorIs(t, err, context.Canceled)
	_, err = sq.Mul(ctx, sq)
	require.ErrorIs(t, err, context.Canceled)
}
