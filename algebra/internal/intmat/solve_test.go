package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra/internal/zp"
)

// requireSolution checks A num = den b, den > 0 and lowest terms.
func requireSolution(t *testing.T, a, b, num [][]*big.Int, den *big.Int) {
	t.Helper()
	require.Positive(t, den.Sign())
	scaled := copyOf(b)
	g := new(big.Int).Set(den)
	for i := range scaled {
		for j := range scaled[i] {
			scaled[i][j].Mul(scaled[i][j], den)
			g.GCD(nil, nil, g, new(big.Int).Abs(num[i][j]))
		}
	}
	require.EqualValues(t, 1, g.Int64(), "common factor %v", g)
	requireSame(t, scaled, plainMul(a, num))
}

func TestSolveAndInverse(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	singular := 0
	for _, a := range samples() {
		n := len(a)
		b := random(r, n, 3, 20)
		if n%2 == 0 {
			b = randomBorders(r, n, 3)
		}
		beforeA, beforeB := copyOf(a), copyOf(b)
		num, den, err := Solve(t.Context(), a, b)
		inv, invDen, invErr := Inverse(t.Context(), a)
		requireSame(t, beforeA, a)
		requireSame(t, beforeB, b)
		if plainDet(a).Sign() == 0 {
			singular++
			require.ErrorIs(t, err, ErrSingular)
			require.ErrorIs(t, invErr, ErrSingular)
			continue
		}
		require.NoError(t, err)
		require.NoError(t, invErr)
		requireSolution(t, a, b, num, den)
		requireSolution(t, a, identity(n), inv, invDen)
	}
	require.Greater(t, singular, 10)
}

func TestSolveKeepsSmallSolutionsSmall(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	a := random(r, 40, 40, 9)
	x := random(r, 40, 2, 5)
	num, den, err := Solve(t.Context(), a, plainMul(a, x))
	require.NoError(t, err)
	require.EqualValues(t, 1, den.Int64())
	requireSame(t, x, num)
	num, den, err = Solve(t.Context(), a, zeros(40, 1))
	require.NoError(t, err)
	require.EqualValues(t, 1, den.Int64())
	requireSame(t, zeros(40, 1), num)
}

// A determinant divisible by the first primes of the sequence must not look
// singular, and columns may have unrelated denominators.
func TestSolveWithUnluckyPrimesAndMixedDenominators(t *testing.T) {
	a := identity(6)
	for i := range 3 {
		a[i][i].SetUint64(prime(i))
	}
	a[0][5].SetInt64(3)
	a[3][3].SetInt64(4)
	a[4][4].SetInt64(-6)
	num, den, err := Inverse(t.Context(), a)
	require.NoError(t, err)
	requireSolution(t, a, identity(6), num, den)
	det, err := Det(t.Context(), a)
	require.NoError(t, err)
	require.Zero(t, plainDet(a).Cmp(det))
}

// The Hilbert matrix, scaled to integers, has an integer inverse up to the
// scale (from memory: M.-D. Choi, Tricks or treats with the Hilbert matrix).
func TestInverseOfHilbertMatrix(t *testing.T) {
	const n = 20
	scale := big.NewInt(1)
	for k := int64(2); k < 2*n; k++ {
		g := new(big.Int).GCD(nil, nil, scale, big.NewInt(k))
		scale.Mul(scale, big.NewInt(k))
		scale.Quo(scale, g)
	}
	h := zeros(n, n)
	for i := range h {
		for j := range h {
			h[i][j].Quo(scale, big.NewInt(int64(i+j+1)))
		}
	}
	num, den, err := Inverse(t.Context(), h)
	require.NoError(t, err)
	requireSolution(t, h, identity(n), num, den)
	require.Zero(t, new(big.Int).Mod(scale, den).Sign())
}

func TestReconstructFindsExactlyTheFractionsInBounds(t *testing.T) {
	m := big.NewInt(10007)
	bound := big.NewInt(70) // 2 bound^2 < m
	found := 0
	for x := range int64(10007) {
		u, v, ok, err := reconstruct(t.Context(), big.NewInt(x), m, bound)
		require.NoError(t, err)
		if !ok {
			continue
		}
		found++
		w := new(big.Int).Mul(v, big.NewInt(x))
		require.Zero(t, w.Sub(w, u).Mod(w, m).Sign())
		require.Positive(t, v.Sign())
		require.LessOrEqual(t, v.Cmp(bound), 0)
		require.LessOrEqual(t, u.CmpAbs(bound), 0)
	}
	want := 0
	for u := int64(-70); u <= 70; u++ {
		for v := int64(1); v <= 70; v++ {
			if new(big.Int).GCD(nil, nil, new(big.Int).Abs(big.NewInt(u)), big.NewInt(v)).Int64() == 1 {
				want++
			}
		}
	}
	require.Equal(t, want, found)
}

// Small primes make chance hits of the early stopping rule frequent; the
// comparison that ends an attempt must catch them all.
func TestLifterWithSmallPrimes(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 24))
	solved := 0
	for _, a := range samples() {
		for _, p := range []uint64{3, 5, 7, 101} {
			f := zp.NewField(p)
			inv, ok, err := f.MatrixFromBig(a).Inverse(t.Context())
			require.NoError(t, err)
			if !ok {
				continue
			}
			solved++
			l := newLifter(squareOf(a), f, inv)
			for _, b := range [][][]*big.Int{random(r, len(a), 1, 9), randomBorders(r, len(a), 1)} {
				rhs := make([]*big.Int, len(a))
				for i := range rhs {
					rhs[i] = b[i][0]
				}
				det := plainDet(a)
				for _, hint := range []*big.Int{big.NewInt(1), det.Abs(det)} {
					x, den, err := l.column(t.Context(), rhs, hint)
					require.NoError(t, err)
					num := zeros(len(a), 1)
					for i := range x {
						num[i][0] = x[i]
					}
					requireSolution(t, a, b, num, den)
				}
			}
		}
	}
	require.Greater(t, solved, 50)
}
