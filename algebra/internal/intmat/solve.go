package intmat

import (
	"context"
	"fmt"
	"math/big"
	mathbits "math/bits"

	"example.org/closedform/algebra/internal/zp"
)

// Solve returns num and den with A num = den b for a square A and an n x k
// matrix b of right-hand sides, so that num/den is the solution of A x = b;
// den > 0 has no factor in common with all of num. It returns [ErrSingular]
// when det A = 0, proven by Hadamard's bound.
//
// A solution known to fit words is found modulo 2^64 ([square.wordSolve]);
// many right-hand sides use Cramer's rule modulo primes ([square.cramer]),
// O(n^3) for each prime; few are lifted p-adically ([lifter]): O(n^3) for
// the inverse modulo p, then O(n^2) word operations for every 62 bits of a
// column.
//
// Source: J. Dixon, Exact solution of linear equations using p-adic
// expansions, Numerische Mathematik 40.
func Solve(ctx context.Context, a, b [][]*big.Int) (num [][]*big.Int, den *big.Int, err error) {
	return squareOf(a).solve(ctx, b)
}

// SolveWords is [Solve] for the matrix of order n with rows a.
func SolveWords(ctx context.Context, n int, a []int64, b [][]*big.Int) (num [][]*big.Int, den *big.Int, err error) {
	return squareOfWords(n, a).solve(ctx, b)
}

// wordSolveOrder and wordSolveColumns bound the systems solved by powers
// modulo 2^64; BenchmarkWordSolve compares.
var (
	wordSolveOrder   = 64
	wordSolveColumns = 2
)

func (s *square) solve(ctx context.Context, b [][]*big.Int) (num [][]*big.Int, den *big.Int, err error) {
	n := s.n
	if len(b) != n {
		panic(fmt.Sprintf("intmat: %d right-hand rows for a matrix of order %d", len(b), n))
	}
	k := mustBeRectangular(b)
	bits, entryBits := s.hadamardBits(), 0
	for _, row := range b {
		for _, x := range row {
			entryBits = max(entryBits, x.BitLen())
		}
	}
	// adj(A) b is a sum of n products of a minor and an entry.
	rhsBits := entryBits + mathbits.Len(uint(n))
	if s.w == 1 && bits+rhsBits <= 63 && n <= wordSolveOrder && k <= wordSolveColumns {
		cols := make([]uint64, 0, n*k)
		for j := range k {
			for i := range n {
				cols = append(cols, uint64(b[i][j].Int64()))
			}
		}
		return s.wordSolution(ctx, cols, k)
	}
	if 2*k >= n {
		return s.cramer(ctx, b, k, bits+rhsBits, entryBits)
	}
	l, err := findLifter(ctx, s)
	if err != nil {
		return nil, nil, err
	}
	return l.columns(ctx, b, k)
}

// Inverse returns num and den with A num = den I for a square A: the inverse
// is num/den, with den > 0 and no factor in common with all of num. It
// returns [ErrSingular] when det A = 0. See [Solve].
func Inverse(ctx context.Context, a [][]*big.Int) (num [][]*big.Int, den *big.Int, err error) {
	a, contents, err := rowContents(ctx, a)
	if err != nil {
		return nil, nil, err
	}
	num, den, err = squareOf(a).invert(ctx)
	if err != nil || contents == nil {
		return num, den, err
	}
	return scaledColumns(ctx, num, den, contents)
}

// InverseWords is [Inverse] for the matrix of order n with rows a.
func InverseWords(ctx context.Context, n int, a []int64) (num [][]*big.Int, den *big.Int, err error) {
	return squareOfWords(n, a).invert(ctx)
}

// SmallInverse is [InverseWords] with the answer in words, row after row; ok is
// false when Hadamard's bound does not promise that it fits.
func SmallInverse(ctx context.Context, n int, a []int64) (num []int64, den int64, ok bool, err error) {
	s := squareOfWords(n, a)
	bits := s.hadamardBits()
	if bits > minorBits {
		return nil, 0, false, nil
	}
	x, d, err := s.wordInverse(ctx, bits)
	if err != nil {
		return nil, 0, true, err
	}
	num = make([]int64, len(x))
	for i, v := range x {
		num[i] = int64(v)
	}
	return num, int64(d), true, nil
}

// invert is Inverse; it may overwrite s.
func (s *square) invert(ctx context.Context) (num [][]*big.Int, den *big.Int, err error) {
	bits := s.hadamardBits()
	if bits <= minorBits {
		x, d, err := s.wordInverse(ctx, bits)
		if err != nil {
			return nil, nil, err
		}
		return rowsOf(bigWords(x), s.n, s.n), new(big.Int).SetUint64(d), nil
	}
	return s.cramer(ctx, nil, s.n, bits, 1)
}

// findLifter finds a prime that does not divide det A. When the product of
// the primes that do exceeds Hadamard's bound, det A is 0.
func findLifter(ctx context.Context, s *square) (*lifter, error) {
	for i, tries := 0, primesFor(s.hadamardBits()); i < tries; i++ {
		f := zp.NewField(prime(i))
		inv, ok, err := s.image(ctx, f).Inverse(ctx)
		if err != nil {
			return nil, err
		}
		if ok {
			return newLifter(s, f, inv), nil
		}
	}
	return nil, ErrSingular
}

// columns solves for the k columns of b and brings them to a common
// denominator. The denominator of the first column, mostly that of all,
// halves the lifting of the others.
func (l *lifter) columns(ctx context.Context, b [][]*big.Int, k int) (num [][]*big.Int, den *big.Int, err error) {
	n := len(b)
	nums, dens := make([][]*big.Int, k), make([]*big.Int, k)
	solve := func(ctx context.Context, j int, hint *big.Int) error {
		rhs := make([]*big.Int, n)
		for i := range rhs {
			rhs[i] = b[i][j]
		}
		var err error
		nums[j], dens[j], err = l.column(ctx, rhs, hint)
		return err
	}
	den = big.NewInt(1)
	if k > 0 {
		if err := solve(ctx, 0, den); err != nil {
			return nil, nil, err
		}
		steps := float64(dens[0].BitLen()+l.norm.BitLen())/primeBits + 1
		nanos := 2 * steps * float64(n) * float64(n) * float64(k-1)
		err := forEach(ctx, k-1, nanos, func(ctx context.Context, j int) error {
			return solve(ctx, j+1, dens[0])
		})
		if err != nil {
			return nil, nil, err
		}
	}
	g := new(big.Int)
	for _, d := range dens {
		g.GCD(nil, nil, den, d)
		den.Mul(den, new(big.Int).Quo(d, g))
	}
	// Columns in lowest terms stay so, as a whole, over the least common
	// multiple of their denominators.
	num = make([][]*big.Int, n)
	for i := range num {
		num[i] = make([]*big.Int, k)
		for j := range num[i] {
			if err := ctx.Err(); err != nil {
				return nil, nil, err
			}
			x := new(big.Int).Quo(den, dens[j])
			num[i][j] = x.Mul(x, nums[j][i])
		}
	}
	return num, den, nil
}
