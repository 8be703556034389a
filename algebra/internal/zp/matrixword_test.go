package zp

import (
	"context"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/require"
)

// wordSamples are square matrices of words, by order: many even entries make
// pivots that are no units.
func wordSamples() map[int][][]uint64 {
	r := rand.New(rand.NewPCG(31, 32))
	edge := []uint64{0, 1, 2, 1 << 31, 1 << 32, 1 << 62, 1 << 63, 1<<63 - 1, 1<<64 - 1}
	out := map[int][][]uint64{0: {{}}}
	for n := 1; n <= 12; n++ {
		for kind := range 6 {
			e := make([]uint64, n*n)
			for i := range e {
				switch kind {
				case 0:
					e[i] = r.Uint64()
				case 1:
					e[i] = edge[r.IntN(len(edge))]
				case 2:
					e[i] = r.Uint64() << r.IntN(64)
				case 3:
					e[i] = r.Uint64N(3) - 1
				case 4:
					e[i] = 2 * r.Uint64N(3)
				case 5:
					if i%n+1 >= i/n { // Hessenberg form
						e[i] = r.Uint64N(9)
					}
				}
			}
			out[n] = append(out[n], e)
		}
	}
	return out
}

// wordBerkowitz is the division-free algorithm, with wrapping arithmetic.
func wordBerkowitz(n int, e []uint64) []uint64 {
	p := []uint64{1} // leading coefficient first
	for r := range n {
		toeplitz := []uint64{1, -e[r*n+r]}
		v := make([]uint64, r)
		for i := range v {
			v[i] = e[i*n+r]
		}
		for range r {
			var dot uint64
			w := make([]uint64, r)
			for i := range r {
				dot -= e[r*n+i] * v[i]
				for j := range r {
					w[i] += e[i*n+j] * v[j]
				}
			}
			toeplitz, v = append(toeplitz, dot), w
		}
		q := make([]uint64, r+2)
		for i := range q {
			for j := 0; j <= i && j < len(p); j++ {
				q[i] += toeplitz[i-j] * p[j]
			}
		}
		p = q
	}
	for i, j := 0, n; i < j; i, j = i+1, j-1 {
		p[i], p[j] = p[j], p[i]
	}
	return p
}

func TestWordCharPolyAndDetAgainstBerkowitz(t *testing.T) {
	for n, list := range wordSamples() {
		for _, e := range list {
			before := append([]uint64{}, e...)
			want := wordBerkowitz(n, e)
			got, err := CharPolyWord(t.Context(), n, e)
			require.NoError(t, err)
			require.Equal(t, want, got)
			det, err := DetWordInPlace(t.Context(), n, slices.Clone(e))
			require.NoError(t, err)
			if n%2 == 1 {
				det = -det
			}
			require.Equal(t, want[0], det)
			require.Equal(t, before, e)
		}
	}
}

func TestWordMisuseAndCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	require.Panics(t, func() { _, _ = CharPolyWord(ctx, 2, make([]uint64, 3)) })
	require.Panics(t, func() { _, _ = DetWordInPlace(ctx, 2, make([]uint64, 5)) })
	cancel()
	_, err := CharPolyWord(ctx, 2, make([]uint64, 4))
	require.ErrorIs(t, err, context.Canceled)
	_, err = DetWordInPlace(ctx, 2, make([]uint64, 4))
	require.ErrorIs(t, err, context.Canceled)
}

func TestInverseWord(t *testing.T) {
	for _, x := range []uint64{1, 3, 5, 1<<31 - 1, 1<<62 + 1, 1<<63 - 1, 1<<63 + 1, 1<<64 - 1} {
		require.EqualValues(t, 1, x*InverseWord(x))
	}
}

func TestMatrixRingAgainstPlainArithmetic(t *testing.T) {
	for _, f := range matrixFields() {
		ring := newMatrixRing(f)
		edge := []uint64{0, 1, 2, f.P / 2, f.P - 2, f.P - 1}
		for n := range 40 {
			x, y := make([]uint64, n), make([]uint64, n)
			var want uint64
			for i := range n {
				x[i], y[i] = f.P-1, edge[(i+n)%len(edge)]
				want = f.Add(want, f.Mul(x[i], y[i]))
			}
			mx, my := append([]uint64{}, x...), append([]uint64{}, y...)
			ring.encode(mx)
			ring.encode(my)
			require.Equal(t, want, ring.reduce(0, ring.dot(mx, my)))
			require.Equal(t, want, ring.dot(mx, y))
			// The largest words of the form.
			require.Equal(t, f.Mul(f.rowDot(x, x), f.Inv(ring.r1)), ring.dot(x, x))
			ring.decode(mx)
			require.Equal(t, x, mx)
		}
		for _, x := range edge[1:] {
			if x == 0 {
				continue
			}
			v := []uint64{x}
			ring.encode(v)
			require.Equal(t, ring.one(), ring.mul(v[0], ring.invert(v[0])))
		}
	}
}

func TestInverseDetMultiplierAndScaled(t *testing.T) {
	for _, f := range matrixFields() {
		for _, m := range matrixSamples(t, f) {
			before := m.Clone()
			inv, det, err := m.InverseDet(t.Context())
			require.NoError(t, err)
			require.Equal(t, matrixPlainDet(m), det)
			require.Equal(t, det == 0, inv == nil)
			require.Equal(t, before, m)
			x := make([]uint64, m.Cols)
			for i := range x {
				x[i] = f.P - 1 - uint64(i)%f.P
			}
			require.Equal(t, m.MulVec(x), m.Multiplier().MulVec(x))
			require.Equal(t, before, m)
			for i, y := range m.Scaled(f.P - 2) {
				require.Equal(t, f.Mul(m.e[i], f.P-2), y)
			}
		}
		require.Panics(t, func() { f.NewMatrix(2, 3).Multiplier().MulVec(make([]uint64, 2)) })
	}
}

// Cyclic never errs when it says yes, and says yes to companion matrices.
func TestCyclicImpliesFullMinimalPolynomial(t *testing.T) {
	yes := 0
	for _, f := range matrixFields() {
		for _, m := range matrixSamples(t, f) {
			cyclic, err := m.Cyclic(t.Context())
			require.NoError(t, err)
			p, err := m.MinPoly(t.Context())
			require.NoError(t, err)
			if cyclic {
				yes++
				require.Len(t, p, m.Rows+1)
			}
		}
		c := f.NewMatrix(6, 6)
		for i := range 5 {
			c.Set(i+1, i, 1)
		}
		cyclic, err := c.Cyclic(t.Context())
		require.NoError(t, err)
		require.True(t, cyclic)
		cyclic, err = f.IdentityMatrix(2).Cyclic(t.Context())
		require.NoError(t, err)
		require.False(t, cyclic)
	}
	require.Greater(t, yes, 50)
}

// Over fields and modulo 2^64 the recurrence for Hessenberg matrices agrees
// with the plain algorithms.
func TestHessenbergDetAgainstElimination(t *testing.T) {
	r := rand.New(rand.NewPCG(61, 62))
	for _, f := range matrixFields() {
		for n := range 16 {
			for band := range 4 { // diagonals above the main one, then all
				m := f.NewMatrix(n, n)
				word := make([]uint64, n*n)
				for i := range n {
					for j := max(0, i-1); j < n && (band == 3 || j <= i+band); j++ {
						if r.IntN(5) > 0 {
							m.Set(i, j, r.Uint64N(f.P))
							word[i*n+j] = r.Uint64() << r.IntN(4)
						}
					}
				}
				got, err := m.Det(t.Context())
				require.NoError(t, err)
				require.Equal(t, matrixPlainDet(m), got)
				got, err = DetWordInPlace(t.Context(), n, slices.Clone(word))
				require.NoError(t, err)
				want := wordBerkowitz(n, word)[0]
				if n%2 == 1 {
					want = -want
				}
				require.Equal(t, want, got)
			}
		}
	}
}
