package intmat

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra/internal/zp"
)

// Every way to an answer, taken by force, gives that of the plain algorithm.

func TestCharPolyAndDetPathsAgree(t *testing.T) {
	onlyWords := 0
	for _, a := range samples() {
		s, want, det := squareOf(a), plainCharPoly(a), plainDet(a)
		low, err := zp.CharPolyWord(t.Context(), s.n, s.low())
		require.NoError(t, err)
		for i, c := range want {
			require.Equal(t, appendLimbs(nil, c, c.BitLen()/64+1)[0], low[i])
		}
		if bits := s.charPolyBits(); bits <= 63 {
			onlyWords++
			got, err := s.wordCharPoly(t.Context())
			require.NoError(t, err)
			requireSameVec(t, want, got)
		}
		for _, extra := range []int{0, 1, 62, 200} { // more primes than needed
			got, err := s.blockCharPoly(t.Context(), s.charPolyBits()+extra)
			require.NoError(t, err)
			requireSameVec(t, want, got)
			d, err := s.blockDet(t.Context(), s.hadamardBits()+extra)
			require.NoError(t, err)
			require.Zero(t, det.Cmp(d))
		}
	}
	require.Greater(t, onlyWords, 30)
}

func TestSolvePathsAgree(t *testing.T) {
	r := rand.New(rand.NewPCG(41, 42))
	words, wide := 0, 0
	for _, a := range samples() {
		s, n := squareOf(a), len(a)
		if n == 0 {
			continue
		}
		b := random(r, n, 2, 9)
		bits := s.hadamardBits()
		num, den, err := s.cramer(t.Context(), b, 2, bits+8, 4)
		inv, invDen, invErr := s.cramer(t.Context(), nil, n, bits, 1)
		singular := plainDet(a).Sign() == 0
		if singular {
			require.ErrorIs(t, err, ErrSingular)
			require.ErrorIs(t, invErr, ErrSingular)
			_, err := findLifter(t.Context(), s)
			require.ErrorIs(t, err, ErrSingular)
		} else {
			require.NoError(t, err)
			require.NoError(t, invErr)
			requireSolution(t, a, b, num, den)
			requireSolution(t, a, identity(n), inv, invDen)
			l, err := findLifter(t.Context(), s)
			require.NoError(t, err)
			lifted, liftedDen, err := l.columns(t.Context(), b, 2)
			require.NoError(t, err)
			requireSame(t, num, lifted)
			require.Zero(t, den.Cmp(liftedDen))
			wide++
		}
		if s.w > 1 || bits+8 > 62 {
			continue
		}
		words++
		cols := make([]uint64, 0, 2*n)
		unit := make([]uint64, n*n)
		for j := range 2 {
			for i := range n {
				cols = append(cols, uint64(b[i][j].Int64()))
			}
		}
		for i := range n {
			unit[i*n+i] = 1
		}
		x, d, err := s.wordSolution(t.Context(), cols, 2)
		all := [][][]*big.Int{}
		var errs []error
		add := func(m [][]*big.Int, d *big.Int, err error) {
			all, errs = append(all, m), append(errs, err)
			if err == nil {
				require.Zero(t, invDen.Cmp(d))
			}
		}
		add(s.wordSolution(t.Context(), unit, n))
		add(squareOf(a).invert(t.Context()))
		if singular {
			for _, err := range append(errs, err) {
				require.ErrorIs(t, err, ErrSingular)
			}
			continue
		}
		require.NoError(t, err)
		requireSame(t, num, x)
		require.Zero(t, den.Cmp(d))
		for i := range all {
			require.NoError(t, errs[i])
			requireSame(t, inv, all[i])
		}
	}
	require.Greater(t, words, 30)
	require.Greater(t, wide, 50)
}

// det A is the product of the first five primes of the sequence.
func TestCramerSkipsPrimesDividingTheDeterminant(t *testing.T) {
	a := identity(9)
	for i := range 5 {
		a[i][i].SetUint64(prime(i))
		a[i][8].SetInt64(int64(i) - 7)
		a[8][i+1].SetInt64(1 << 33)
	}
	s := squareOf(a)
	num, den, err := s.cramer(t.Context(), nil, 9, s.hadamardBits(), 1)
	require.NoError(t, err)
	requireSolution(t, a, identity(9), num, den)
	for i := range 5 {
		a[8][i+1].SetInt64(0)
	}
	s = squareOf(a)
	num, den, err = s.cramer(t.Context(), nil, 9, s.hadamardBits(), 1)
	require.NoError(t, err)
	requireSolution(t, a, identity(9), num, den)
	for _, last := range []int64{0, 1} { // a zero row, and one that repeats another
		for j := range 9 {
			a[8][j].Mul(a[0][j], big.NewInt(last))
		}
		s = squareOf(a)
		_, _, err = s.cramer(t.Context(), nil, 9, s.hadamardBits(), 1)
		require.ErrorIs(t, err, ErrSingular)
	}
}

func TestWordsAndIntegersGiveTheSame(t *testing.T) {
	ctx := t.Context()
	tried, smallDets := 0, 0
	for _, a := range samples() {
		n := len(a)
		e := []int64{}
		for _, row := range a {
			for _, x := range row {
				if x.IsInt64() {
					e = append(e, x.Int64())
				}
			}
		}
		if len(e) < n*n {
			continue
		}
		tried++
		before := append([]int64{}, e...)
		for _, pair := range []struct {
			words    func(context.Context, int, []int64) ([]*big.Int, error)
			integers func(context.Context, [][]*big.Int) ([]*big.Int, error)
		}{{CharPolyWords, CharPoly}, {MinPolyWords, MinPoly}} {
			want, err := pair.integers(ctx, a)
			require.NoError(t, err)
			got, err := pair.words(ctx, n, e)
			require.NoError(t, err)
			requireSameVec(t, want, got)
		}
		det, err := DetWords(ctx, n, e)
		require.NoError(t, err)
		require.Zero(t, plainDet(a).Cmp(det))
		small, ok, err := SmallDet(ctx, n, e)
		require.NoError(t, err)
		if ok {
			require.Zero(t, det.Cmp(big.NewInt(small)))
			smallDets++
		}
		want, wantDen, wantErr := Inverse(ctx, a)
		got, gotDen, gotErr := InverseWords(ctx, n, e)
		require.Equal(t, wantErr, gotErr)
		b := identity(n)
		_, solveDen, solveErr := SolveWords(ctx, n, e, b)
		require.Equal(t, wantErr, solveErr)
		if wantErr == nil {
			requireSame(t, want, got)
			require.Zero(t, wantDen.Cmp(gotDen))
			require.Zero(t, wantDen.Cmp(solveDen))
		}
		require.Equal(t, before, e)
	}
	require.Greater(t, tried, 50)
	require.Greater(t, smallDets, 30)
	require.Panics(t, func() { _, _ = CharPolyWords(ctx, 2, make([]int64, 3)) })
}

// Answers modulo 2^64 at the ends of the range: 1 x 1 and triangular
// matrices with determinant and entries near 2^63.
func TestWordAnswersAtTheBorders(t *testing.T) {
	for _, x := range borders() {
		for _, a := range [][][]*big.Int{
			{{x}},
			{{x, big.NewInt(1)}, {new(big.Int), big.NewInt(1)}},
			{{big.NewInt(0), x}, {big.NewInt(1), big.NewInt(0)}},
			{{big.NewInt(2), x, new(big.Int)}, {new(big.Int), big.NewInt(3), x}, {new(big.Int), new(big.Int), big.NewInt(-1)}},
		} {
			p, err := CharPoly(t.Context(), a)
			require.NoError(t, err)
			requireSameVec(t, plainCharPoly(a), p)
			det, err := Det(t.Context(), a)
			require.NoError(t, err)
			require.Zero(t, plainDet(a).Cmp(det))
			num, den, err := Inverse(t.Context(), a)
			if det.Sign() == 0 {
				require.ErrorIs(t, err, ErrSingular)
				continue
			}
			require.NoError(t, err)
			requireSolution(t, a, identity(len(a)), num, den)
		}
	}
}

func TestCompanionPolyIsReadOffCompanionMatricesOnly(t *testing.T) {
	r := rand.New(rand.NewPCG(43, 44))
	b := borders()
	for n := 3; n <= 9; n++ {
		for range 20 {
			c, d := zeros(n, n), zeros(n, n)
			for i := range n {
				x := b[r.IntN(len(b))]
				c[i][n-1].Set(x)
				d[n-1][i].Set(x)
				if i > 0 {
					c[i][i-1].SetInt64(1)
					d[i-1][i].SetInt64(1)
				}
			}
			for _, a := range [][][]*big.Int{c, d} {
				require.NotNil(t, squareOf(a).companionPoly())
				requireSameVec(t, plainCharPoly(a), squareOf(a).companionPoly())
				i, j := r.IntN(n), r.IntN(n)
				a[i][j].Add(a[i][j], big.NewInt(1))
				if p := squareOf(a).companionPoly(); p != nil {
					requireSameVec(t, plainCharPoly(a), p)
				}
				det, err := Det(t.Context(), a)
				require.NoError(t, err)
				require.Zero(t, plainDet(a).Cmp(det))
			}
		}
	}
}
