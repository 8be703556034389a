package zp

import (
	"context"
	"testing"

	"github.com/stretchr/testify/require"
)

// monics calls do for every monic polynomial of the degree.
func monics(f Field, degree int, do func(Poly)) {
	count := 1
	for range degree {
		count *= int(f.P)
	}
	for code := range count {
		a := make(Poly, degree+1)
		x := uint64(code)
		for i := range degree {
			a[i], x = x%f.P, x/f.P
		}
		a[degree] = 1
		do(a)
	}
}

// plainIrreducible tries all monic divisors of up to half the degree.
func plainIrreducible(f Field, a Poly) bool {
	irreducible := true
	for d := 1; 2*d <= a.Degree(); d++ {
		monics(f, d, func(b Poly) {
			irreducible = irreducible && len(f.RemPoly(a, b)) > 0
		})
	}
	return irreducible
}

func TestFactorEveryTinyPolynomial(t *testing.T) {
	for _, c := range []struct {
		p      uint64
		degree int
	}{{3, 1}, {3, 2}, {3, 4}, {3, 5}, {5, 3}, {5, 4}, {7, 3}} {
		f := NewField(c.p)
		irreducible := 0
		monics(f, c.degree, func(a Poly) {
			if !f.IsSquareFree(a) {
				return
			}
			factors, err := f.FactorSquareFree(context.Background(), a)
			require.NoError(t, err)
			prod := Poly{1}
			for i, g := range factors {
				require.True(t, plainIrreducible(f, g))
				prod = f.MulPoly(prod, g)
				if i > 0 {
					require.Negative(t, ComparePoly(factors[i-1], g))
				}
			}
			require.Equal(t, a, prod)
			if len(factors) == 1 {
				irreducible++
			}
		})
		// Gauss: the sum over d | n of d (number of degree d) is p^n.
		total := 1
		for range c.degree {
			total *= int(c.p)
		}
		if c.degree == 4 { // degrees 1 and 2 divide as well
			total = int(c.p*c.p*c.p*c.p - c.p*c.p)
		} else if c.degree > 1 {
			total -= int(c.p)
		}
		require.Equal(t, total/c.degree, irreducible)
	}
}

func TestFactorFermatPolynomial(t *testing.T) {
	for _, p := range []uint64{3, 5, 13, 101} {
		f := NewField(p)
		a := make(Poly, p+1)
		a[1], a[p] = p-1, 1 // x^p - x
		factors, err := f.FactorSquareFree(context.Background(), a)
		require.NoError(t, err)
		require.Len(t, factors, int(p))
		for i, g := range factors {
			require.Equal(t, 1, g.Degree())
			require.Equal(t, uint64(i), g[0])
		}
	}
}

func TestDistinctDegreeOverAnyPrime(t *testing.T) {
	ctx := context.Background()
	s := splitMix(6)
	for _, p := range testPrimes {
		f := NewField(p)
		for tries := 0; tries < 6; {
			a := somePoly(f, &s, int(s.next()%25)+1)
			if !f.IsSquareFree(a) {
				continue
			}
			tries++
			parts, err := f.DistinctDegree(ctx, a)
			require.NoError(t, err)
			prod := Poly{1}
			last, count := 0, 0
			for _, part := range parts {
				require.Greater(t, part.Degree, last)
				last = part.Degree
				count += part.Count()
				require.Zero(t, part.P.Degree()%part.Degree)
				prod = f.MulPoly(prod, part.P)
			}
			require.Equal(t, f.MonicPoly(a), prod)
			factors, err := f.FactorSquareFree(ctx, a)
			require.NoError(t, err)
			require.Len(t, factors, count)
			prod = Poly{1}
			for _, g := range factors {
				prod = f.MulPoly(prod, g)
				// x^(p^d) = x modulo an irreducible g of degree d, not earlier.
				power := f.RemPoly(Poly{0, 1}, g)
				x := power
				for d := 1; d <= g.Degree(); d++ {
					power = f.PowModPoly(power, p, g)
					require.Equal(t, d == g.Degree(), ComparePoly(power, x) == 0)
				}
			}
			require.Equal(t, f.MonicPoly(a), prod)
		}
	}
}

func TestFrobeniusByStepsAndByProducts(t *testing.T) {
	s := splitMix(7)
	for _, p := range []uint64{3, 13, 17, 101} {
		f := NewField(p)
		for _, n := range []int{2, 6, 8, 9, 60} { // p <= 2n for some, not for others
			m := f.MonicPoly(somePoly(f, &s, n))
			fr, err := f.newFrobenius(context.Background(), m)
			require.NoError(t, err)
			h := somePoly(f, &s, n-1)
			require.Equal(t, f.PowModPoly(h, p, m), fr.apply(h))
			require.Equal(t, Poly{1}, fr.apply(Poly{1}))
			require.Empty(t, fr.apply(nil))
		}
	}
}

func TestFactorHonoursCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	f := NewField(101)
	a := Poly{1, 2, 3, 4, 1}
	_, err := f.DistinctDegree(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, err = f.EqualDegree(ctx, Poly{2, 3, 1}, 1)
	require.ErrorIs(t, err, context.Canceled)
	_, err = f.FactorSquareFree(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
}
