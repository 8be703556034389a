package intpoly

import (
	"context"
	"math/big"
	"slices"
	"testing"

	"github.com/stretchr/testify/require"
)

// TestEarlySearchAgrees compares the search on the way up with the one at the
// full modulus.
func TestEarlySearchAgrees(t *testing.T) {
	ctx := context.Background()
	early := 0
	for i, f := range []Poly{
		wilkinson(20), wilkinson(40), Mul(wilkinson(15), cyclotomic(35)), tridiagonal(60), product(randomPolys(43, 10, 3, 5)), product(randomPolys(44, 12, 4, 7)),
		product(randomPolys(40, 6, 3, 5)), product(randomPolys(41, 3, 8, 12)), product(randomPolys(42, 2, 12, 100)),
		Mul(cyclotomic(105), cyclotomic(49)), tridiagonal(30), cyclotomic(84),
		translate(product([]Poly{swinnertonDyer(2, 3, 5), swinnertonDyer(2, 3, 7), ints(-2, 0, 1)}), 1),
		// A factor with larger coefficients than the product.
		product([]Poly{cyclotomic(3 * 5 * 7), cyclotomic(5 * 7), ints(-1, 1)}),
		// Leading coefficients that dwarf the rest.
		product([]Poly{ints(1, 1<<40), ints(3, 1, 1<<40+1), ints(1, 1, 1, 7)}),
	} {
		f = positive(f.primitivePart())
		full, degrees := lifted(t, f)
		s := newSubsets(full, full.factors, degrees)
		require.NoError(t, s.search(ctx, 1<<40))
		require.True(t, s.done())
		l, _ := lifted(t, f)
		l.restart()
		first, err := l.raiseSearching(ctx, degrees)
		require.NoError(t, err)
		if first != nil {
			early++
			require.Negative(t, l.exp-full.exp)
		}
		l.restart()
		got, err := liftAndRecombine(ctx, l, degrees)
		require.NoError(t, err)
		slices.SortFunc(s.found, compare)
		slices.SortFunc(got, compare)
		require.Len(t, got, len(s.found), "input %d", i)
		for j := range got {
			requireSame(t, s.found[j], got[j])
		}
	}
	require.GreaterOrEqual(t, early, 3)
}

func TestRootRadius(t *testing.T) {
	s := rng(77)
	for range 100 {
		f := ints(int64(s.next()%9) + 1)
		most := new(big.Rat)
		for range s.next()%5 + 1 {
			a, b := int64(s.next()>>(s.next()%40+24)), int64(s.next()%1000)+1
			f = Mul(f, ints(-a, b))
			if r := big.NewRat(a, b); r.Cmp(most) > 0 {
				most = r
			}
		}
		bound := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(rootRadius(f))))
		require.LessOrEqual(t, most.Cmp(bound), 0)
	}
	require.Zero(t, rootRadius(ints(1, 1<<40)))
	require.Equal(t, 2, rootRadius(powerMinus(5, 1)))
}

// TestFiltersKeepTrueFactors checks both filters on the sets that belong to
// true factors, with large leading coefficients and roots.
func TestFiltersKeepTrueFactors(t *testing.T) {
	s := rng(78)
	active := 0
	for range 30 {
		parts := []Poly{
			randomPoly(s.next(), int(s.next()%5)+2, int(s.next()%50)+2),
			randomPoly(s.next(), int(s.next()%5)+2, int(s.next()%50)+2),
			translate(swinnertonDyer(2, 3), int64(s.next()%1000)),
		}
		f := positive(product(parts).primitivePart())
		if !isSquareFree(f) {
			continue
		}
		l, degrees := lifted(t, f)
		sub := newSubsets(l, l.factors, degrees)
		for _, p := range parts {
			var sums [2]uint64
			for i, g := range l.factors {
				if len(l.field.RemPoly(reduce(p, l.field), reduce(g, l.field))) > 0 {
					continue
				}
				for e := range sub.traces {
					if sub.traces[e].slack != noSlack {
						sums[e] += sub.traces[e].values[i]
					}
				}
			}
			for e := range sums {
				require.True(t, sub.traces[e].passes(sums[e]))
				if sub.traces[e].slack < 1<<60 {
					active++
				}
			}
		}
	}
	require.Greater(t, active, 60)
}
