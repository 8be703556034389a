package zp

import (
	"testing"

	"github.com/stretchr/testify/require"
)

// somePoly has exactly the given degree, with many edge residues.
func somePoly(f Field, s *splitMix, degree int) Poly {
	edge := edgeResidues(f)
	a := make(Poly, degree+1)
	for i := range a {
		a[i] = s.next() % f.P
		if s.next()%2 == 0 {
			a[i] = edge[s.next()%uint64(len(edge))]
		}
	}
	if degree >= 0 && a[degree] == 0 {
		a[degree] = f.P - 1
	}
	return trim(a)
}

// plainMul is the product by single field operations.
func plainMul(f Field, a, b Poly) Poly {
	if len(a) == 0 || len(b) == 0 {
		return nil
	}
	c := make(Poly, len(a)+len(b)-1)
	for i, x := range a {
		for j, y := range b {
			c[i+j] = f.Add(c[i+j], f.Mul(x, y))
		}
	}
	return trim(c)
}

func TestPolyRingLaws(t *testing.T) {
	s := splitMix(1)
	for _, p := range testPrimes {
		f := NewField(p)
		for range 30 {
			a := somePoly(f, &s, int(s.next()%30)-1)
			b := somePoly(f, &s, int(s.next()%30)-1)
			c := somePoly(f, &s, int(s.next()%30)-1)
			require.Equal(t, plainMul(f, a, b), f.MulPoly(a, b))
			require.Equal(t, f.MulPoly(b, a), f.MulPoly(a, b))
			require.Equal(t, f.AddPoly(b, a), f.AddPoly(a, b))
			require.Equal(t, f.MulPoly(a, f.AddPoly(b, c)), f.AddPoly(f.MulPoly(a, b), f.MulPoly(a, c)))
			require.Equal(t, f.MulPoly(a, f.MulPoly(b, c)), f.MulPoly(f.MulPoly(a, b), c))
			require.Equal(t, f.SubPoly(a, b), f.AddPoly(a, f.ScalePoly(b, f.P-1)))
			require.Equal(t, Poly(nil), f.SubPoly(a, a))
			require.Equal(t, f.DerivativePoly(f.MulPoly(a, b)),
				f.AddPoly(f.MulPoly(f.DerivativePoly(a), b), f.MulPoly(a, f.DerivativePoly(b))))
			x := s.next() % p
			require.Equal(t, f.Mul(f.EvalPoly(a, x), f.EvalPoly(b, x)), f.EvalPoly(f.MulPoly(a, b), x))
		}
	}
}

func TestPolyLongProductsOfLargestResidues(t *testing.T) {
	for _, p := range testPrimes {
		f := NewField(p)
		a := make(Poly, 300)
		for i := range a {
			a[i] = p - 1
		}
		require.Equal(t, plainMul(f, a, a), f.MulPoly(a, a))
	}
}

func TestPolyDivision(t *testing.T) {
	s := splitMix(2)
	for _, p := range testPrimes {
		f := NewField(p)
		for range 40 {
			a := somePoly(f, &s, int(s.next()%40)-1)
			b := somePoly(f, &s, int(s.next()%20))
			q, r := f.DivRemPoly(a, b)
			require.Less(t, r.Degree(), b.Degree())
			require.Equal(t, a, f.AddPoly(f.MulPoly(q, b), r))
			q, r = f.DivRemPoly(f.MulPoly(a, b), b)
			require.Equal(t, a, q)
			require.Empty(t, r)
		}
		require.Panics(t, func() { f.DivRemPoly(Poly{1}, nil) })
	}
}

func TestPolyGCDAndBezout(t *testing.T) {
	s := splitMix(3)
	for _, p := range testPrimes {
		f := NewField(p)
		require.Empty(t, f.GCDPoly(nil, nil))
		require.Equal(t, Poly{1}, f.GCDPoly(nil, Poly{p - 1}))
		for range 30 {
			d := somePoly(f, &s, int(s.next()%6))
			a := f.MulPoly(d, somePoly(f, &s, int(s.next()%12)))
			b := f.MulPoly(d, somePoly(f, &s, int(s.next()%12)))
			g := f.GCDPoly(a, b)
			require.Equal(t, uint64(1), g.Lead())
			require.Empty(t, f.RemPoly(a, g))
			require.Empty(t, f.RemPoly(b, g))
			require.Empty(t, f.RemPoly(g, d), "a common divisor divides the gcd")
			h, u, v := f.BezoutPoly(a, b)
			require.Equal(t, g, h)
			require.Equal(t, g, f.AddPoly(f.MulPoly(u, a), f.MulPoly(v, b)))
			if g.Degree() == 0 && a.Degree() > 0 && b.Degree() > 0 {
				require.Less(t, u.Degree(), b.Degree())
				require.Less(t, v.Degree(), a.Degree())
			}
		}
	}
}

func TestPolyPowMod(t *testing.T) {
	s := splitMix(4)
	for _, p := range testPrimes {
		f := NewField(p)
		m := somePoly(f, &s, 5)
		a := somePoly(f, &s, 7)
		want := Poly{1}
		for e := range uint64(20) {
			require.Equal(t, want, f.PowModPoly(a, e, m))
			want = f.MulModPoly(want, a, m)
		}
		require.Empty(t, f.PowModPoly(a, 0, Poly{p - 1}), "modulo a unit")
	}
}

func TestPolyFunctionsKeepTheirArguments(t *testing.T) {
	f := NewField(101)
	s := splitMix(5)
	a, b := somePoly(f, &s, 9), somePoly(f, &s, 4)
	ca, cb := append(Poly(nil), a...), append(Poly(nil), b...)
	for _, r := range []Poly{
		f.AddPoly(a, b), f.AddPoly(b, a), f.AddPoly(a, nil), f.SubPoly(a, b), f.SubPoly(a, nil), f.ScalePoly(a, 1),
		f.MonicPoly(a), f.MonicPoly(Poly{5, 1}), f.RemPoly(b, a), f.GCDPoly(a, nil), f.MulPoly(a, Poly{1}),
	} {
		for i := range r {
			r[i] = 77
		}
	}
	require.Equal(t, ca, a)
	require.Equal(t, cb, b)
}

func TestReducerAtTheBorders(t *testing.T) {
	for _, p := range []uint64{3, 5, 7, 101, 65537, 1<<29 - 3, 1<<30 - 35} {
		r := newReducer(p)
		top := uint64(1<<63 - 1)
		for _, x := range []uint64{0, 1, p - 1, p, p + 1, 2*p - 1, 2 * p, p * p, p*p - 1, top, top - top%p, top - top%p - 1} {
			require.Equal(t, x%p, r.mod(x))
		}
	}
}
