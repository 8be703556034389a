package zp

import (
	"context"
	"testing"

	"github.com/stretchr/testify/require"
)

var smallPrimes = []uint64{3, 5, 13, 257, 65537, 1<<24 - 3}

func TestLazyProductsAgainstPlain(t *testing.T) {
	s := splitMix(21)
	for _, p := range smallPrimes {
		f := NewField(p)
		red := newReducer(p)
		for range 50 {
			a := somePoly(f, &s, int(s.next()%40))
			b := somePoly(f, &s, int(s.next()%40))
			require.Equal(t, plainMul(f, a, b), f.MulPoly(a, b))
			square := make(Poly, 2*len(a)-1)
			squareLazy(square, a)
			for i := range square {
				square[i] = red.mod(square[i])
			}
			require.Equal(t, plainMul(f, a, a), trim(square))
			n := min(len(a), len(b))
			var want uint64
			for i := range n {
				want = f.Add(want, f.Mul(a[i], b[n-1-i]))
			}
			require.Equal(t, want, crossDot(a[:n], b[:n])%p)
		}
	}
}

func TestQuotientsAgainstPlain(t *testing.T) {
	s := splitMix(22)
	for _, p := range smallPrimes {
		f := NewField(p)
		for range 20 {
			m := f.MonicPoly(somePoly(f, &s, int(s.next()%30)+2))
			a, b := somePoly(f, &s, 45), somePoly(f, &s, int(s.next()%10))
			// Division by a divisor that is not monic takes the plain way.
			plain := func(a Poly) Poly { return f.RemPoly(a, f.ScalePoly(m, p-1)) }
			r := f.newQuotients(m)
			x, y := r.element(a), r.element(b)
			require.Equal(t, plain(a), trim(append(Poly(nil), x...)))
			prod := make([]uint64, len(x))
			r.mul(prod, x, y)
			require.Equal(t, plain(plainMul(f, a, b)), trim(prod))
			power, xPower := plain(Poly{1}), plain(Poly{1})
			for e := uint64(1); e < 40; e++ {
				power = plain(plainMul(f, power, plain(a)))
				xPower = plain(plainMul(f, xPower, Poly{0, 1}))
				require.Equal(t, power, trim(r.pow(x, e)))
				require.Equal(t, xPower, trim(r.powX(e)))
			}
		}
	}
}

// TestEqualDegreeWithAndWithoutMap compares parts that carry the Frobenius map
// of a multiple with bare ones.
func TestEqualDegreeWithAndWithoutMap(t *testing.T) {
	ctx := context.Background()
	s := splitMix(23)
	for _, p := range []uint64{3, 5, 31, 257, 1<<24 + 43, 1<<31 - 1} {
		f := NewField(p)
		split := 0
		for range 12 {
			a := f.MonicPoly(somePoly(f, &s, 14))
			if !f.IsSquareFree(a) {
				continue
			}
			parts, err := f.DistinctDegree(ctx, a)
			require.NoError(t, err)
			for _, part := range parts {
				want, err := f.EqualDegree(ctx, part.P, part.Degree)
				require.NoError(t, err)
				got, err := f.FactorParts(ctx, []DegreePart{part})
				require.NoError(t, err)
				require.Equal(t, want, got)
				require.Len(t, got, part.Count())
				prod := Poly{1}
				for _, g := range got {
					require.Equal(t, part.Degree, g.Degree())
					prod = f.MulPoly(prod, g)
				}
				require.Equal(t, part.P, prod)
				if len(got) > 1 {
					split++
				}
			}
		}
		require.Positive(t, split)
	}
}
