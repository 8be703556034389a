package mpoly

import (
	"context"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// randomResidues returns n random elements, the last one not 0.
func randomResidues(rng *rand.Rand, f *field, n int) []uint64 {
	a := make([]uint64, n)
	for i := range a {
		a[i] = f.fromWord(rng.Int64() - rng.Int64())
	}
	if n > 0 && a[n-1] == 0 {
		a[n-1] = f.one
	}
	return a
}

func TestResiduePolynomials(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	f := fieldAt(0)
	for range 200 {
		a, b := randomResidues(rng, f, 1+rng.IntN(6)), randomResidues(rng, f, 2+rng.IntN(6))
		c := randomResidues(rng, f, 1+rng.IntN(3))
		x := f.fromWord(rng.Int64())
		ab := f.product(a, b)
		require.Equal(t, f.times(f.evaluate(a, x), f.evaluate(b, x)), f.evaluate(ab, x))
		q, ok := f.quotient(ab, b)
		require.True(t, ok)
		require.Equal(t, a, q)
		_, ok = f.quotient(append([]uint64{f.Add(ab[0], f.one)}, ab[1:]...), b)
		require.False(t, ok)
		g := f.gcd(f.product(a, c), f.product(b, c))
		require.Len(t, g, len(c), "random polynomials are coprime")
		_, ok = f.quotient(g, c)
		require.True(t, ok)
		if len(a) < len(b) {
			s, d := f.inverseModulo(make([]uint64, 4*len(b)+4), a, b)
			require.NotZero(t, d)
			r, _ := f.reduce(f.product(s, a), b, f.reciprocal(b[len(b)-1]))
			require.Equal(t, []uint64{d}, trimmed(r))
			_, d = f.inverseModulo(make([]uint64, 4*len(b)+4*len(c)+4), f.product(a, c), f.product(b, c))
			require.Equal(t, len(c) > 1, d == 0)
		}
		y := f.evaluate(a, f.Add(x, b[0]))
		f.translate(context.Background(), a, b[0])
		require.Equal(t, y, f.evaluate(a, x))
		if b[0] != 0 {
			unit := make([]uint64, 9)
			f.shortProduct(context.Background(), unit, b, f.inverseSeries(context.Background(), b, 9))
			require.Equal(t, []uint64{f.one}, trimmed(unit))
		}
	}
}

// TestSeriesLift lifts products of random series with multiplicities back.
func TestSeriesLift(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 1))
	f := fieldAt(1)
	ctx := context.Background()
	for range 100 {
		n := 2 + rng.IntN(5)
		count := 1 + rng.IntN(4)
		var degrees, mult []int
		var factors [][][]uint64
		var product [][]uint64
		for range count {
			degrees = append(degrees, 1+rng.IntN(3))
			mult = append(mult, 1+rng.IntN(3))
			g := newRows(n, degrees[len(degrees)-1]+1)
			for k := range 1 + rng.IntN(n) { // some are of low degree in t
				copy(g[k], randomResidues(rng, f, len(g[k])))
			}
			factors = append(factors, g)
			for range mult[len(mult)-1] {
				if product == nil {
					product = g
				} else {
					product = f.multiplySeries(ctx, product, g, n)
				}
			}
		}
		l := newSeriesLift(f, degrees, mult, n)
		for i, g := range factors {
			copy(l.factor[i].row[0], g[0])
			for k := range n {
				l.factor[i].row[k][degrees[i]] = g[k][degrees[i]]
			}
			l.lead[i] = f.reciprocal(g[0][degrees[i]])
		}
		require.True(t, l.start())
		require.True(t, l.lift(ctx, product, n))
		for i, g := range factors {
			require.Equal(t, g, l.factor[i].row)
		}
	}
}

func TestPowerSystem(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	f := fieldAt(0)
	ctx := context.Background()
	for n := range 9 {
		nodes := randomResidues(rng, f, n)
		sides := newRows(2, n)
		want := newRows(2, n)
		for b := range sides {
			copy(want[b], randomResidues(rng, f, n))
			for i, x := range nodes {
				p := x
				for k := range n {
					sides[b][k] = f.Add(sides[b][k], f.times(want[b][i], p))
					p = f.times(p, x)
				}
			}
		}
		v := newPowerSystem(ctx, f, nodes)
		require.NotNil(t, v)
		got := newRows(2, n)
		v.solve(ctx, sides, func(i, b int, c uint64) { got[b][i] = c })
		require.Equal(t, want, got)
		if n > 1 {
			nodes[0] = nodes[n-1]
			require.Nil(t, newPowerSystem(ctx, f, nodes))
		}
	}
}

// TestLineRestrict compares the restriction with values at points of the line.
func TestLineRestrict(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 1))
	f := fieldAt(0)
	for range 50 {
		n := 2 + rng.IntN(3)
		p := randomFactor(rng, n, 6, 4, 66)
		order := rng.Perm(n)
		for _, sorted := range []bool{false, true} {
			table := newTermTable(p, order, sorted)
			source := points(1)
			ln := newLine(f, []int64{0, 3, -2, 7}[:n], &source)
			rows, err := ln.restrict(context.Background(), table, table.coefficients(f), table.degrees(), table.lineDegree())
			require.NoError(t, err)
			at, x := f.fromWord(rng.Int64()), f.fromWord(rng.Int64())
			values := ln.at(at)
			values[0] = x
			want := uint64(0)
			for term := range p.Terms() {
				v := f.fromBig(term.Coef)
				for c, i := range order {
					for range term.Exp[i] {
						v = f.times(v, values[c])
					}
				}
				want = f.Add(want, v)
			}
			got := uint64(0)
			for i := len(rows) - 1; i >= 0; i-- {
				got = f.Add(f.times(got, x), f.evaluate(rows[i], at))
			}
			require.Equal(t, want, got)
		}
	}
}
