package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra/internal/zp"
)

func TestSquareKeepsEntriesAndImages(t *testing.T) {
	f := zp.NewField(prime(0))
	for _, a := range samples() {
		s := squareOf(a)
		requireSame(t, a, s.bigs())
		image, want := s.image(t.Context(), f), f.MatrixFromBig(a)
		for i := range a {
			require.Equal(t, want.Row(i), image.Row(i))
			for j := range a {
				require.Equal(t, a[i][j].Sign() == 0, s.isZero(i, j))
				got := bitLen(s.at(i, j))
				require.GreaterOrEqual(t, got, a[i][j].BitLen())
				require.LessOrEqual(t, got, a[i][j].BitLen()+1)
			}
		}
	}
	for _, x := range borders() {
		for _, p := range []uint64{3, 5, 1<<31 - 1, prime(0), prime(7)} {
			if x.IsInt64() {
				require.Equal(t, zp.NewField(p).FromBig(x), residueOfWord(uint64(x.Int64()), p))
			}
		}
	}
}

// The bounds hold for entries of any length, where sums of squares overflow
// floating point too, and are tight for diagonal matrices.
func TestBoundsOfLongEntries(t *testing.T) {
	r := rand.New(rand.NewPCG(45, 46))
	for _, length := range []uint{1, 60, 400, 440, 447, 448, 460, 600, 1100} {
		for n := 1; n <= 6; n++ {
			a := random(r, n, n, 9)
			d := identity(n)
			for i := range a {
				for j := range a {
					if r.IntN(2) == 0 {
						a[i][j].Lsh(a[i][j], length-1)
					}
				}
				d[i][i].Lsh(d[i][i], length)
				d[i][i].Sub(d[i][i], big.NewInt(1))
			}
			for _, m := range [][][]*big.Int{a, d} {
				s := squareOf(m)
				require.LessOrEqual(t, plainDet(m).BitLen(), s.hadamardBits())
				for i, c := range plainCharPoly(m) {
					require.LessOrEqual(t, c.BitLen(), s.charPolyBits())
					sum := new(big.Int)
					if i < n {
						for _, x := range m[i] {
							sum.Add(sum, new(big.Int).Abs(x))
						}
					}
					require.LessOrEqual(t, sum.BitLen(), s.rowSumBits())
				}
			}
			if length < 400 {
				require.LessOrEqual(t, squareOf(d).hadamardBits(), int(length)*n+1)
			}
		}
	}
}

func TestConnectedAgreesWithTheSearch(t *testing.T) {
	r := rand.New(rand.NewPCG(47, 48))
	seen := map[bool]int{}
	for range 400 {
		n := 1 + r.IntN(64)
		a := zeros(n, n)
		for range n + r.IntN(3*n) {
			a[r.IntN(n)][r.IntN(n)].SetInt64(1)
		}
		if r.IntN(2) == 0 {
			for i := range n {
				a[i][(i+1)%n].SetInt64(-1)
			}
		}
		s := squareOf(a)
		got := connected(s)
		// Beyond 64 vertices, here by two of their own, the search decides.
		wider := zeros(n+65, n+65)
		for i := range n {
			copy(wider[i], a[i])
		}
		require.Equal(t, len(diagonalBlocks(squareOf(wider))) == 66, got)
		seen[got]++
	}
	require.Greater(t, seen[true], 50)
	require.Greater(t, seen[false], 50)
}

// By Cramer's rule the numerators are determinants with a column replaced.
func TestBoundsOfCramersRule(t *testing.T) {
	r := rand.New(rand.NewPCG(53, 54))
	checked := 0
	for _, a := range samples() {
		n := len(a)
		if n == 0 || n > 8 || plainDet(a).Sign() == 0 {
			continue
		}
		s := squareOf(a)
		for _, v := range [][][]*big.Int{random(r, n, 1, 1), random(r, n, 1, 1<<40), randomBorders(r, n, 1)} {
			sum, squares := new(big.Int), new(big.Int)
			for i := range v {
				sum.Add(sum, new(big.Int).Abs(v[i][0]))
				squares.Add(squares, new(big.Int).Mul(v[i][0], v[i][0]))
			}
			byRows := sum.Lsh(sum, uint(s.hadamardBits()))
			norm := squares.Sqrt(squares)
			byCols := norm.Lsh(norm.Add(norm, big.NewInt(1)), uint(s.columnBits()))
			for k := range n {
				replaced := copyOf(a)
				for i := range n {
					replaced[i][k].Set(v[i][0])
				}
				num := plainDet(replaced)
				require.LessOrEqual(t, num.CmpAbs(byRows), 0)
				require.LessOrEqual(t, num.CmpAbs(byCols), 0)
				checked++
			}
		}
	}
	require.Greater(t, checked, 200)
}
