package algebra_test

import (
	"context"
	"errors"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

// testElimination runs the laws of elimination over a field.
func testElimination[E any](t *testing.T, f algebra.Field[E], entry algebratest.Generator[E], maxN int) {
	t.Run("solve", func(t *testing.T) { testSolve(t, f, entry, maxN) })
	t.Run("singular", func(t *testing.T) { testSingular(t, f, entry, maxN) })
	t.Run("reduce", func(t *testing.T) { testReduce(t, f, entry, maxN) })
	t.Run("minimal polynomial", func(t *testing.T) { testMinPoly(t, f, entry, maxN) })
}

func testSolve[E any](t *testing.T, f algebra.Field[E], entry algebratest.Generator[E], maxN int) {
	rng, ctx := algebratest.Rand(t), t.Context()
	for n := range maxN + 1 {
		a := algebratest.Matrices(f, entry, n, n)(rng)
		c := algebratest.Matrices(f, entry, n, n)(rng)
		b := algebratest.Matrices(f, entry, n, n%3)(rng)
		det, err := algebra.Det(ctx, f, a)
		require.NoError(t, err)
		for f.IsZero(det) { // at most n numbers are eigenvalues
			a = a.Add(algebra.Identity(f, n))
			det, err = algebra.Det(ctx, f, a)
			require.NoError(t, err)
		}
		before := a.String() + b.String()
		det2, err := algebra.Det(ctx, f, c)
		require.NoError(t, err)
		product, err := algebra.Det(ctx, f, a.Mul(c))
		require.NoError(t, err)
		assert.True(t, f.Equal(product, f.Mul(det, det2)), "det(a c) of %v and %v", a, c)
		transposed, err := algebra.Det(ctx, f, a.Transpose())
		require.NoError(t, err)
		assert.True(t, f.Equal(transposed, det), "det of the transpose of %v", a)

		x, err := algebra.Solve(ctx, f, a, b)
		require.NoError(t, err)
		inv, err := algebra.Inverse(ctx, f, a)
		require.NoError(t, err)
		wantMatrix(t, "a X", a.Mul(x), b)
		wantMatrix(t, "a 1/a", a.Mul(inv), algebra.Identity(f, n))
		wantMatrix(t, "1/a a", inv.Mul(a), algebra.Identity(f, n))
		wantMatrix(t, "1/a b", inv.Mul(b), x)
		assert.Equal(t, before, a.String()+b.String(), "an operand was changed")
	}
}

// testSingular makes matrices singular by a product through n-1 dimensions.
func testSingular[E any](t *testing.T, f algebra.Field[E], entry algebratest.Generator[E], maxN int) {
	rng, ctx := algebratest.Rand(t), t.Context()
	for n := 1; n <= maxN; n++ {
		a := algebratest.Matrices(f, entry, n, n-1)(rng).Mul(algebratest.Matrices(f, entry, n-1, n)(rng))
		det, err := algebra.Det(ctx, f, a)
		require.NoError(t, err)
		assert.True(t, f.IsZero(det), "det of %v", a)
		// Neither a right side in the image nor none at all, nor a wide one, hides it.
		v := algebratest.Matrices(f, entry, n, 1)(rng)
		for _, b := range []algebra.Matrix[E]{a.Mul(v), algebra.NewMatrix(f, n, 0), algebra.Identity(f, n)} {
			_, err = algebra.Solve(ctx, f, a, b)
			require.ErrorIs(t, err, algebra.ErrSingular, "n = %d", n)
		}
	}
}

func testReduce[E any](t *testing.T, f algebra.Field[E], entry algebratest.Generator[E], maxN int) {
	rng, ctx := algebratest.Rand(t), t.Context()
	for m := range maxN + 1 {
		for n := range maxN + 1 {
			k := min(m, n, 2) // a rank below the full one as often as not
			a := algebratest.Matrices(f, entry, m, n)(rng)
			if (m+n)%2 == 0 {
				a = algebratest.Matrices(f, entry, m, k)(rng).Mul(algebratest.Matrices(f, entry, k, n)(rng))
			}
			before := a.String()
			e, err := algebra.Reduce(ctx, f, a)
			require.NoError(t, err)
			rank, cols := e.Rows.Dims()
			require.Equal(t, n, cols)
			require.Len(t, e.Pivots, rank)
			for i, p := range e.Pivots {
				require.True(t, i == 0 || p > e.Pivots[i-1], "pivots %v", e.Pivots)
				for j := range p {
					require.True(t, f.IsZero(e.Rows.At(i, j)), "left of the pivot in %v", e.Rows)
				}
				for r := range rank {
					require.True(t, f.Equal(e.Rows.At(r, p), algebra.Identity(f, rank).At(r, i)), "column %d of %v", p, e.Rows)
				}
			}
			again, err := algebra.Reduce(ctx, f, e.Rows.Above(a))
			require.NoError(t, err)
			wantMatrix(t, "form of [form; a]", again.Rows, e.Rows)

			basis, err := algebra.Kernel(ctx, f, a)
			require.NoError(t, err)
			require.Len(t, basis, n-rank)
			free := freeColumns(n, e.Pivots)
			for i, v := range basis {
				for _, y := range a.MulVec(v) {
					require.True(t, f.IsZero(y), "%v maps a kernel vector to %s", a, f.Text(y))
				}
				for j, col := range free {
					require.Equal(t, i == j, !f.IsZero(v[col]))
				}
				require.True(t, f.Equal(v[free[i]], f.One()))
			}
			require.Equal(t, before, a.String(), "the operand was changed")
		}
	}
}

func freeColumns(n int, pivots []int) []int {
	var free []int
	for j := range n {
		if len(pivots) > 0 && pivots[0] == j {
			pivots = pivots[1:]
			continue
		}
		free = append(free, j)
	}
	return free
}

func testMinPoly[E any](t *testing.T, f algebra.Field[E], entry algebratest.Generator[E], maxN int) {
	rng, ctx := algebratest.Rand(t), t.Context()
	for n := range maxN + 1 {
		a := algebratest.Matrices(f, entry, n, n)(rng)
		if n > 1 && n%2 == 0 {
			// The blocks b, b have the minimal polynomial of b alone.
			b := algebratest.Matrices(f, entry, n/2, n/2)(rng)
			zero := b.Sub(b)
			a = b.Beside(zero).Above(zero.Beside(b))
		}
		p, err := algebra.MinPoly(ctx, f, a)
		require.NoError(t, err)
		require.True(t, f.Equal(p.Lead(), f.One()))
		require.True(t, valueAt(t, p, a).IsZero(), "%v does not satisfy %v", a, p)
		// The lower powers are linearly independent.
		d := p.Degree()
		powers := algebra.MatrixFromFunc(f, d, n*n, func(k, ij int) E { return powerOf(t, a, k).At(ij/max(n, 1), ij%max(n, 1)) })
		e, err := algebra.Reduce(ctx, f, powers)
		require.NoError(t, err)
		require.Len(t, e.Pivots, d, "the minimal polynomial %v of %v is too long", p, a)
		c, err := algebra.CharPoly(ctx, a)
		require.NoError(t, err)
		_, ok := c.DivExact(f, p)
		require.True(t, ok, "%v does not divide %v", p, c)
		_, ok = p.Pow(n).DivExact(f, c)
		require.True(t, ok, "%v and %v have different roots", p, c)
	}
}

func TestElimination(t *testing.T) {
	t.Run("over Q", func(t *testing.T) { testElimination[algebra.Rat](t, algebra.Q, algebratest.SmallRats, 6) })
	t.Run("over Q, long entries", func(t *testing.T) { testElimination[algebra.Rat](t, algebra.Q, algebratest.Rats, 5) })
	t.Run("over Q by elimination", func(t *testing.T) { testElimination(t, plainQ, algebratest.SmallRats, 6) })
	t.Run("over Q(sqrt 2)", func(t *testing.T) {
		k := numberFields()["sqrt2"]
		testElimination(t, k, algebratest.Elements(k, algebratest.SmallRats), 4)
	})
	t.Run("over a tower", func(t *testing.T) {
		k, l := tower()
		testElimination(t, l, algebratest.Elements(l, algebratest.Elements(k, algebratest.SmallRats)), 2)
	})
}

func TestSolveTwoWays(t *testing.T) {
	rng := algebratest.Rand(t)
	for n := 1; n <= 9; n++ {
		a := algebratest.Matrices(algebra.Q, algebratest.Rats, n, n)(rng)
		b := algebratest.Matrices(algebra.Q, algebratest.Rats, n, 2)(rng)
		fast, err := algebra.Solve(t.Context(), algebra.Q, a, b)
		plain, err2 := algebra.Solve(t.Context(), plainQ, a, b)
		require.Equal(t, err, err2)
		wantMatrix(t, "solution", fast, plain)
	}
}

func TestMinPolyNamed(t *testing.T) {
	for _, c := range []struct {
		name string
		a    algebra.Matrix[algebra.Rat]
		want ratPoly
	}{
		{"empty", ratMatrix(0, 0), ints(1)},
		{"zero", ratMatrix(2, 2, 0, 0, 0, 0), ints(0, 1)},
		{"identity", ratMatrix(3, 3, 1, 0, 0, 0, 1, 0, 0, 0, 1), ints(-1, 1)},
		{"Jordan block", ratMatrix(3, 3, 2, 1, 0, 0, 2, 1, 0, 0, 2), ints(-2, 1).Pow(3)},
		{"blocks of size 2 and 1", ratMatrix(3, 3, 2, 1, 0, 0, 2, 0, 0, 0, 2), ints(-2, 1).Pow(2)},
		{"diagonal", ratMatrix(3, 3, 1, 0, 0, 0, 2, 0, 0, 0, 1), ints(2, -3, 1)},
		{"nilpotent", ratMatrix(2, 2, 0, 1, 0, 0), ints(0, 0, 1)},
	} {
		got, err := algebra.MinPoly(t.Context(), algebra.Q, c.a)
		require.NoError(t, err)
		wantPoly(t, c.name, got, c.want)
	}
}

// TestEliminationReportsAFailedInverse injects a failure at each inversion in
// turn, as a reducible modulus would.
func TestEliminationReportsAFailedInverse(t *testing.T) {
	ctx, fault := t.Context(), errors.New("injected")
	a := ratMatrix(3, 3, 2, 1, 0, 1, 3, 1, 0, 1, 4)
	for after := range 3 {
		f := func() algebra.Field[algebra.Rat] {
			return algebratest.NewFailingInv(algebra.Q, after, fault)
		}
		_, err := algebra.Reduce(ctx, f(), a)
		assert.ErrorIs(t, err, fault)
		_, err = algebra.Kernel(ctx, f(), a)
		assert.ErrorIs(t, err, fault)
		_, err = algebra.Solve(ctx, f(), a, a)
		assert.ErrorIs(t, err, fault)
		_, err = algebra.Inverse(ctx, f(), a)
		assert.ErrorIs(t, err, fault)
		_, err = algebra.MinPoly(ctx, f(), a)
		assert.ErrorIs(t, err, fault)
	}
	_, err := algebra.Reduce(ctx, algebratest.NewFailingInv(algebra.Q, 3, fault), a)
	assert.NoError(t, err)
}

func TestEliminationCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	for _, n := range []int{2, 6} {
		a := algebra.Identity(algebra.Q, n)
		_, err := algebra.Reduce(ctx, algebra.Q, a)
		assert.ErrorIs(t, err, context.Canceled)
		_, err = algebra.Solve(ctx, algebra.Q, a, a)
		assert.ErrorIs(t, err, context.Canceled)
		_, err = algebra.MinPoly(ctx, algebra.Q, a)
		assert.ErrorIs(t, err, context.Canceled)
	}
}
