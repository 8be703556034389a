package intpoly

import (
	"context"
	"math/big"
	"slices"
	"testing"

	"example.org/closedform/algebra/internal/zp"
	"github.com/stretchr/testify/require"
)

// lifted returns the lift of f and the degrees its factors may have.
func lifted(t *testing.T, f Poly) (*lift, *big.Int) {
	t.Helper()
	ctx := context.Background()
	c, err := choosePrime(ctx, f)
	require.NoError(t, err)
	local, err := c.field.FactorParts(ctx, c.parts)
	require.NoError(t, err)
	l, err := newLift(ctx, f, c.field, local, factorBound(f))
	require.NoError(t, err)
	return l, c.degrees
}

// requireLift checks f = lc prod factors modulo p^exp > 2 bound.
func requireLift(t *testing.T, l *lift) {
	t.Helper()
	require.Positive(t, l.modulus.Cmp(new(big.Int).Lsh(l.bound, 1)))
	p := new(big.Int).SetUint64(l.field.P)
	require.Zero(t, l.modulus.Cmp(p.Exp(p, big.NewInt(int64(l.exp)), nil)))
	prod := New(l.f.lead())
	for _, g := range l.factors {
		require.Zero(t, g.lead().Cmp(big.NewInt(1)))
		prod = Mul(prod, g)
	}
	requireSame(t, reduceBy(l.f, l.modulus), reduceBy(prod, l.modulus))
}

func TestLift(t *testing.T) {
	for _, f := range []Poly{
		wilkinson(7), cyclotomic(105), translate(swinnertonDyer(2, 3, 5), 1),
		product(randomPolys(6, 4, 4, 30)), product(randomPolys(7, 2, 9, 200)),
	} {
		l, _ := lifted(t, f)
		requireLift(t, l)
		before, low := l.factors, l.modulus
		// Raised with its tree and without, the factors keep their places.
		bare := &lift{f: l.f, field: l.field, bound: l.bound, exp: l.exp, modulus: l.modulus, factors: l.factors}
		for _, m := range []*lift{l, bare} {
			require.NoError(t, m.raise(context.Background(), 2*m.exp+1))
			requireLift(t, m)
			require.Len(t, m.factors, len(before))
			for i, g := range m.factors {
				requireSame(t, before[i], reduceBy(g, low))
			}
		}
		require.Equal(t, l.exp, bare.exp)
	}
}

func TestKnapsackAgreesWithSubsetSearch(t *testing.T) {
	ctx := context.Background()
	for _, f := range []Poly{
		wilkinson(10),
		cyclotomic(105),
		translate(swinnertonDyer(2, 3, 5, 7, 11), 1),
		Mul(translate(swinnertonDyer(2, 3, 5, 7), 1), translate(swinnertonDyer(2, 3, 5, 11), 2)),
		product(randomPolys(8, 7, 3, 20)),
		product([]Poly{cyclotomic(15), cyclotomic(24), cyclotomic(40), ints(-3, 2)}),
	} {
		l, degrees := lifted(t, f)
		s := newSubsets(l, l.factors, degrees)
		require.NoError(t, s.search(ctx, 1<<40))
		require.True(t, s.done())
		fast, err := knapsack(ctx, l, degrees)
		require.NoError(t, err)
		slices.SortFunc(s.found, compare)
		slices.SortFunc(fast, compare)
		require.Len(t, fast, len(s.found))
		for i := range fast {
			requireSame(t, s.found[i], fast[i])
		}
	}
}

func TestKnapsackWithMoreFactorsThanSearched(t *testing.T) {
	for _, f := range []Poly{wilkinson(20), Mul(wilkinson(16), translate(swinnertonDyer(2, 3, 5), 30))} {
		l, degrees := lifted(t, f)
		got, err := knapsack(context.Background(), l, degrees)
		require.NoError(t, err)
		slices.SortFunc(got, compare)
		want := requireFactored(t, f)
		require.Greater(t, len(want), searchUpTo)
		require.Len(t, got, len(want))
		for i := range got {
			requireSame(t, want[i].P, got[i])
		}
	}
}

func TestKnapsackRaisesThePrecision(t *testing.T) {
	ctx := context.Background()
	// An irreducible polynomial has no factor to bound, and precision 1 is
	// too little for any column, whether the lift has a tree or not.
	f := translate(swinnertonDyer(2, 3, 5, 7, 11, 13), 1)
	for _, tree := range []bool{true, false} {
		l, degrees := lifted(t, f)
		local := make([]zp.Poly, len(l.factors))
		for i, g := range l.factors {
			local[i] = reduce(g, l.field)
		}
		low, err := newLift(ctx, f, l.field, local, big.NewInt(1))
		require.NoError(t, err)
		require.Equal(t, 1, low.exp)
		if !tree {
			low.root, low.words = nil, nil
		}
		got, err := knapsack(ctx, low, degrees)
		require.NoError(t, err)
		require.Len(t, got, 1)
		requireSame(t, f, got[0])
		require.Greater(t, low.exp, 1)
	}
}

func TestRecombineByBothWays(t *testing.T) {
	// Small factors are found by the search, the rest by the lattice.
	f := product([]Poly{
		translate(swinnertonDyer(2, 3, 5, 7, 11, 13), 1), ints(-1000, 3), ints(7, 0, 5, 1), translate(swinnertonDyer(2, 3, 5, 7, 11), 2),
	})
	require.Equal(t, "1^1 3^1 32^1 64^1 ", shape(requireFactored(t, f)))
}

// TestKnapsackLatticeKeepsTrueFactors adds every column of several precisions
// and checks that the classes always lie within the true factors and end as
// exactly those.
func TestKnapsackLatticeKeepsTrueFactors(t *testing.T) {
	ctx := context.Background()
	parts := []Poly{
		translate(swinnertonDyer(2, 3, 5), 1), translate(swinnertonDyer(2, 3, 7), 2), cyclotomic(16), cyclotomic(15),
	}
	l, _ := lifted(t, product(parts))
	owner := func(g Poly) int {
		return slices.IndexFunc(parts, func(p Poly) bool {
			return len(l.field.RemPoly(reduce(p, l.field), reduce(g, l.field))) == 0
		})
	}
	k := newKnapsackLattice(l)
	require.Len(t, k.classes(), len(l.factors))
	bounds, err := logDerivativeBound(ctx, l.f)
	require.NoError(t, err)
	added := 0
	for range 3 {
		columns, err := logDerivatives(ctx, l)
		require.NoError(t, err)
		for i := range bounds {
			ok, err := k.add(ctx, columns, i, bounds[i])
			require.NoError(t, err)
			if ok {
				added++
			}
			require.GreaterOrEqual(t, len(k.rows), len(parts))
			for _, class := range k.classes() {
				for _, g := range class {
					require.Equal(t, owner(class[0]), owner(g))
				}
			}
		}
		require.NoError(t, l.raise(ctx, 2*l.exp))
	}
	require.Greater(t, added, l.f.Degree(), "later rounds use further digits")
	require.Len(t, k.classes(), len(parts))
	require.Len(t, k.rows, len(parts))
}

func TestFactorBounds(t *testing.T) {
	s := rng(31)
	for range 200 {
		g := randomPoly(s.next(), int(s.next()%6)+1, int(s.next()%40)+1)
		h := randomPoly(s.next(), g.Degree()+int(s.next()%5), int(s.next()%40)+1)
		f := Mul(g, h)
		b := factorBound(f)
		for _, c := range g { // (lc(f)/lc(g)) g = lc(h) g
			require.LessOrEqual(t, new(big.Int).Mul(c, h.lead()).CmpAbs(b), 0)
		}
		bounds, err := logDerivativeBound(context.Background(), f)
		require.NoError(t, err)
		require.Len(t, bounds, f.Degree())
		for i, c := range Mul(h, g.Derivative()) { // f g'/g
			most := new(big.Int).Mul(bounds[i], big.NewInt(int64(g.Degree())))
			require.LessOrEqual(t, c.CmpAbs(most), 0)
		}
	}
	// Extreme: all roots at -1.
	f := ints(1)
	for range 40 {
		f = Mul(f, ints(1, 1))
	}
	g := ints(1)
	for range 20 {
		g = Mul(g, ints(1, 1))
	}
	b := factorBound(f)
	for _, c := range g {
		require.LessOrEqual(t, c.CmpAbs(b), 0)
	}
}

func TestInflationProofsAreTrue(t *testing.T) {
	ctx := context.Background()
	proven, reducible := 0, 0
	for a := int64(-6); a <= 6; a++ {
		for b := int64(-4); b <= 4; b++ {
			for _, h := range []Poly{ints(a, 1), ints(a, b, 1), ints(a, b, 0, 1), ints(a, b, 1, 3)} {
				if a == 0 {
					continue
				}
				if f := requireFactored(t, h); len(f) != 1 || f[0].Mult != 1 {
					continue
				}
				for _, l := range []int{2, 3, 5} {
					irreducible, err := staysIrreducible(ctx, h, l)
					require.NoError(t, err)
					plain, err := factorDense(ctx, inflate(h, l))
					require.NoError(t, err)
					if irreducible {
						proven++
						require.Len(t, plain, 1, "%v at %d", h, l)
					} else if len(plain) > 1 {
						reducible++
					}
					requireSame(t, h, deflate(inflate(h, l), l))
				}
			}
		}
	}
	require.Greater(t, proven, 500)
	require.Greater(t, reducible, 10)
}

func TestExactRoot(t *testing.T) {
	for _, x := range borders() {
		for _, n := range []int{2, 3, 5, 7} {
			pow := new(big.Int).Exp(x, big.NewInt(int64(n)), nil)
			r, ok := exactRoot(pow, n)
			require.True(t, ok)
			if n == 2 {
				require.Zero(t, r.CmpAbs(x))
			} else {
				require.Zero(t, r.Cmp(x))
			}
			if x.BitLen() > 1 {
				for _, d := range []int64{-1, 1} {
					_, ok = exactRoot(new(big.Int).Add(pow, big.NewInt(d)), n)
					require.False(t, ok)
				}
			}
		}
	}
	_, ok := exactRoot(big.NewInt(-4), 2)
	require.False(t, ok)
}

func TestDivRemMonic(t *testing.T) {
	m := new(big.Int).Exp(big.NewInt(13), big.NewInt(20), nil)
	for i := range 20 {
		a := reduceBy(randomPoly(uint64(i), 3*i, 90), m)
		b := reduceBy(Add(randomPoly(uint64(i+50), i, 90), powerMinus(i+1, 0)), m)
		q, r := divRemMonic(a, b, m)
		require.Less(t, len(r), len(b))
		requireSame(t, a, reduceBy(Add(Mul(q, b), r), m))
	}
}

func TestSymmetricResidues(t *testing.T) {
	m := big.NewInt(27)
	for x := int64(-60); x <= 60; x++ {
		r := symmetricInt(big.NewInt(x), m).Int64()
		require.Zero(t, (x-r)%27)
		require.LessOrEqual(t, r, int64(13))
		require.GreaterOrEqual(t, r, int64(-13))
	}
	f := zp.NewField(13)
	requireSame(t, ints(12, 1), fromField(f.NewPoly(12, 14)))
}
