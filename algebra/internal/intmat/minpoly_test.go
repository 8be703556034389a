package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

func TestMinPolyAgainstPowers(t *testing.T) {
	short := 0
	for _, a := range samples() {
		if len(a) > 8 {
			continue
		}
		before := copyOf(a)
		got, err := MinPoly(t.Context(), a)
		require.NoError(t, err)
		requireSameVec(t, plainMinPoly(a), got)
		requireSame(t, before, a)
		if len(got) < len(a)+1 {
			short++
		}
	}
	require.Greater(t, short, 5)
}

// jordan puts Jordan blocks (eigenvalue, size) along the diagonal.
func jordan(blocks ...[2]int64) [][]*big.Int {
	n := 0
	for _, b := range blocks {
		n += int(b[1])
	}
	a := zeros(n, n)
	k := 0
	for _, b := range blocks {
		for i := range int(b[1]) {
			a[k][k].SetInt64(b[0])
			if i > 0 {
				a[k-1][k].SetInt64(1)
			}
			k++
		}
	}
	return a
}

// conjugate returns P A P^(-1) for a unimodular P.
func conjugate(t *testing.T, r *rand.Rand, a [][]*big.Int) [][]*big.Int {
	n := len(a)
	lower, upper := identity(n), identity(n)
	for i := range n {
		for j := range i {
			lower[i][j].SetInt64(r.Int64N(3) - 1)
			upper[j][i].SetInt64(r.Int64N(3) - 1)
		}
	}
	p := plainMul(lower, upper)
	inv, den, err := Inverse(t.Context(), p)
	require.NoError(t, err)
	require.EqualValues(t, 1, den.Int64())
	return plainMul(plainMul(p, a), inv)
}

func powerOf(t *testing.T, root int64, e int64, p []*big.Int) []*big.Int {
	for range e {
		var err error
		p, err = mulPoly(t.Context(), p, []*big.Int{big.NewInt(-root), big.NewInt(1)})
		require.NoError(t, err)
	}
	return p
}

func TestJordanBlocks(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	for _, blocks := range [][][2]int64{
		{{2, 1}, {2, 1}}, {{2, 3}, {2, 2}}, {{0, 4}, {0, 4}, {0, 1}},
		{{1, 2}, {-1, 3}, {1, 5}, {-1, 1}}, {{3, 10}}, {{1 << 31, 2}, {1 << 31, 2}, {-1 << 62, 1}},
		{{5, 2}, {5, 2}, {5, 2}, {5, 2}, {7, 1}, {7, 1}, {7, 1}},
	} {
		char, minimal := []*big.Int{big.NewInt(1)}, []*big.Int{big.NewInt(1)}
		largest := map[int64]int64{}
		for _, b := range blocks {
			char = powerOf(t, b[0], b[1], char)
			if more := b[1] - largest[b[0]]; more > 0 {
				minimal = powerOf(t, b[0], more, minimal)
				largest[b[0]] = b[1]
			}
		}
		plain := jordan(blocks...)
		for _, a := range [][][]*big.Int{plain, conjugate(t, r, plain)} {
			got, err := CharPoly(t.Context(), a)
			require.NoError(t, err)
			requireSameVec(t, char, got)
			got, err = MinPoly(t.Context(), a)
			require.NoError(t, err)
			requireSameVec(t, minimal, got)
		}
	}
}

// Modulo the first prime p the matrix diag(0, p, p) loses a factor.
func TestMinPolyWithUnluckyPrimes(t *testing.T) {
	p := new(big.Int).SetUint64(prime(0))
	a := zeros(3, 3)
	a[1][1].Set(p)
	a[2][2].Set(p)
	got, err := MinPoly(t.Context(), a)
	require.NoError(t, err)
	requireSameVec(t, []*big.Int{new(big.Int), new(big.Int).Neg(p), big.NewInt(1)}, got)
}

// Two copies of a random matrix share its characteristic polynomial as
// minimal polynomial.
func TestMinPolyOfTwoCopies(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	const n = 15
	b := random(r, n, n, 9)
	a := zeros(2*n, 2*n)
	for i := range n {
		for j := range n {
			a[i][j].Set(b[i][j])
			a[n+i][n+j].Set(b[i][j])
		}
	}
	got, err := MinPoly(t.Context(), conjugate(t, r, a))
	require.NoError(t, err)
	requireSameVec(t, plainCharPoly(b), got)
}
