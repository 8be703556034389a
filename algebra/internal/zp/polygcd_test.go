package zp

import (
	"testing"

	"github.com/stretchr/testify/require"
)

// gcdPrimes lie at the borders of the ways to reduce.
var gcdPrimes = []uint64{
	3, 5, 7, 101, 1<<24 - 3, 1<<24 + 43, 1<<31 - 1, 1<<31 + 11, 1<<61 - 1, PrimeBelow(MaxPrime),
}

// plainGCD is Euclid's algorithm with remainders.
func plainGCD(f Field, a, b Poly) Poly {
	for len(b) > 0 {
		a, b = b, f.RemPoly(a, b)
	}
	return f.MonicPoly(a)
}

func TestGCDAgainstRemainders(t *testing.T) {
	s := splitMix(11)
	for _, p := range gcdPrimes {
		f := NewField(p)
		for range 60 {
			d := somePoly(f, &s, int(s.next()%8)-1)
			a := f.MulPoly(d, somePoly(f, &s, int(s.next()%30)-1))
			b := f.MulPoly(d, somePoly(f, &s, int(s.next()%12)-1))
			want := plainGCD(f, a, b)
			require.Equal(t, want, f.GCDPoly(a, b))
			require.Equal(t, want, f.GCDPoly(b, a))
			g := f.GCDInPlace(append(Poly(nil), a...), append(Poly(nil), b...))
			require.Equal(t, want, f.MonicPoly(g))
		}
		top := make(Poly, 40) // largest residues: the sums of products at their largest
		for i := range top {
			top[i] = p - 1
		}
		require.Equal(t, plainGCD(f, top, top[:39]), f.GCDPoly(top, top[:39]))
		require.Equal(t, plainGCD(f, top, top[:38]), f.GCDPoly(top, top[:38]))
	}
}

func TestReducersAtTheBorders(t *testing.T) {
	for _, p := range []uint64{3, 5, 101, 1<<24 - 3, 1<<31 - 1} {
		r, f := newReducer(p), NewField(p)
		top := 3 * (p - 1) * (p - 1)
		if p < 1<<24 {
			top = 1<<63 - 1
		}
		for _, x := range []uint64{0, 1, p - 1, p, p + 1, top, top - 1, top - top%p, top - top%p - 1} {
			require.Equal(t, x%f.P, r.mod(x))
		}
	}
	for _, p := range gcdPrimes {
		f, m := NewField(p), newRedc(p)
		r := f.Pow(2%p, 64) // 2^64
		for _, x := range []uint64{0, 1, 2, p / 2, p - 2, p - 1} {
			for _, y := range []uint64{0, 1, p - 1} {
				require.Equal(t, f.Mul(x, y), f.Mul(m.mul(x, y), r))
				require.Equal(t, f.Add(f.Mul(x, y), f.Mul(y, y)), f.Mul(m.dot2(x, y, y, y), r))
				a := []uint64{x, x}
				m.combine2(a, []uint64{y, y}, p-1, p-1, p-1)
				require.Equal(t, f.Neg(f.Add(x, y)), f.Mul(a[0], r))
				require.Equal(t, f.Neg(f.Add(x, f.Add(y, y))), f.Mul(a[1], r))
			}
		}
	}
}

func TestSquareFreePoly(t *testing.T) {
	s := splitMix(12)
	for _, p := range []uint64{101, 1<<31 - 1, PrimeBelow(MaxPrime)} {
		f := NewField(p)
		for range 40 {
			lead := s.next()%(p-1) + 1
			a := Poly{lead}
			for _, m := range []int{1, 2, 5, 20} {
				g := f.MonicPoly(somePoly(f, &s, int(s.next()%3)))
				for range m {
					a = f.MulPoly(a, g)
				}
			}
			if a.Degree() < 1 {
				continue
			}
			prod, last := Poly{lead}, 0
			all := Poly{1}
			for _, part := range f.SquareFreePoly(a) {
				require.Greater(t, part.Mult, last)
				last = part.Mult
				require.Equal(t, uint64(1), part.P.Lead())
				all = f.MulPoly(all, part.P)
				for range part.Mult {
					prod = f.MulPoly(prod, part.P)
				}
			}
			require.Equal(t, a, prod)
			require.True(t, f.IsSquareFree(all))
		}
	}
}
