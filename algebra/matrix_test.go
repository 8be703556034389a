package algebra_test

import (
	"context"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

// testMatrixAlgebra checks the laws of sums, products, powers and transposes.
func testMatrixAlgebra[E any](t *testing.T, r algebra.Ring[E], entry algebratest.Generator[E]) {
	rng := algebratest.Rand(t)
	for n := range 4 {
		a := algebratest.Matrices(r, entry, n, n+1)(rng)
		b := algebratest.Matrices(r, entry, n+1, 2)(rng)
		c := algebratest.Matrices(r, entry, 2, n)(rng)
		d := algebratest.Matrices(r, entry, n, n+1)(rng)
		x := entry(rng)
		before := a.String()
		wantMatrix(t, "(a b) c", a.Mul(b).Mul(c), a.Mul(b.Mul(c)))
		wantMatrix(t, "(a + d) b", a.Add(d).Mul(b), a.Mul(b).Add(d.Mul(b)))
		wantMatrix(t, "a + d - d", a.Add(d).Sub(d), a)
		wantMatrix(t, "d + a", d.Add(a), a.Add(d))
		wantMatrix(t, "x (a b)", a.Mul(b).Scale(x), a.Scale(x).Mul(b))
		wantMatrix(t, "(a b)^T", a.Mul(b).Transpose(), b.Transpose().Mul(a.Transpose()))
		wantMatrix(t, "1 a", algebra.Identity(r, n).Mul(a), a)
		wantMatrix(t, "a 1", a.Mul(algebra.Identity(r, n+1)), a)
		wantMatrix(t, "[a d]^T", a.Beside(d).Transpose(), a.Transpose().Above(d.Transpose()))
		assert.True(t, a.Sub(a).IsZero())
		for j := range 2 {
			v := make([]E, n+1)
			for i := range v {
				v[i] = b.At(i, j)
			}
			for i, y := range a.MulVec(v) {
				assert.True(t, r.Equal(y, a.Mul(b).At(i, j)), "a v in row %d", i)
			}
		}
		s := a.Mul(b).Mul(c)
		power := algebra.Identity(r, n)
		for k := range 5 {
			wantMatrix(t, "power", powerOf(t, s, k), power)
			power = power.Mul(s)
		}
		p := algebratest.Polys(r, entry, 3)(rng)
		q := algebratest.Polys(r, entry, 3)(rng)
		wantMatrix(t, "(p q)(s)", valueAt(t, p.Mul(q), s), valueAt(t, p, s).Mul(valueAt(t, q, s)))
		assert.Equal(t, before, a.String(), "an operand was changed")
	}
}

func TestMatrixAlgebra(t *testing.T) {
	t.Run("over Q", func(t *testing.T) { testMatrixAlgebra[algebra.Rat](t, algebra.Q, algebratest.Rats) })
	t.Run("over Q(z)", func(t *testing.T) {
		k := numberFields()["quintic"]
		testMatrixAlgebra[ratPoly](t, k, algebratest.Elements(k, algebratest.SmallRats))
	})
	t.Run("over Q[s]", func(t *testing.T) {
		r := algebratest.PolyRing[algebra.Rat]{R: algebra.Q}
		testMatrixAlgebra(t, r, algebratest.Polys(algebra.Q, algebratest.SmallRats, 2))
	})
}

// testCharPoly checks the theorem of Cayley and Hamilton, trace, similarity and
// transposition for one way to the characteristic polynomial.
func testCharPoly[E any](t *testing.T, f algebra.Field[E], entry algebratest.Generator[E], maxN int,
	charPoly func(context.Context, algebra.Matrix[E]) (algebra.Poly[E], error)) {
	rng := algebratest.Rand(t)
	of := func(a algebra.Matrix[E]) algebra.Poly[E] {
		p, err := charPoly(t.Context(), a)
		require.NoError(t, err)
		return p
	}
	for n := range maxN + 1 {
		a := algebratest.Matrices(f, entry, n, n)(rng)
		b := algebratest.Matrices(f, entry, n, n)(rng)
		before := a.String()
		p := of(a)
		require.Equal(t, n, p.Degree())
		require.True(t, f.Equal(p.Lead(), f.One()))
		assert.True(t, valueAt(t, p, a).IsZero(), "%v does not satisfy its %v", a, p)
		trace := f.Zero()
		for i := range n {
			trace = f.Add(trace, a.At(i, i))
		}
		if n > 0 {
			assert.True(t, f.Equal(f.Neg(trace), p.Coef(n-1)), "trace of %v and %v", a, p)
		}
		wantPoly(t, "that of the transpose", of(a.Transpose()), p)
		wantPoly(t, "that of a b and b a", of(a.Mul(b)), of(b.Mul(a)))
		zero := algebra.Identity(f, n).Scale(f.Zero())
		wantPoly(t, "that of a block matrix", of(a.Beside(b).Above(zero.Beside(b))), p.Mul(of(b)))
		assert.Equal(t, before, a.String(), "the operand was changed")
	}
}

func TestCharPoly(t *testing.T) {
	t.Run("over Q, modular", func(t *testing.T) {
		testCharPoly[algebra.Rat](t, algebra.Q, algebratest.SmallRats, 8, algebra.Q.CharPoly)
	})
	t.Run("over Q, modular, long entries", func(t *testing.T) {
		testCharPoly[algebra.Rat](t, algebra.Q, algebratest.Rats, 5, algebra.Q.CharPoly)
	})
	t.Run("over Q, Berkowitz", func(t *testing.T) {
		testCharPoly[algebra.Rat](t, algebra.Q, algebratest.Rats, 5, algebra.CharPoly[algebra.Rat])
	})
	t.Run("over Q(sqrt 2)", func(t *testing.T) {
		k := numberFields()["sqrt2"]
		testCharPoly(t, k, algebratest.Elements(k, algebratest.SmallRats), 4, algebra.CharPoly[ratPoly])
	})
}

func TestCharPolyTwoWays(t *testing.T) {
	rng := algebratest.Rand(t)
	for n := range 8 {
		for _, entry := range []algebratest.Generator[algebra.Rat]{algebratest.SmallRats, algebratest.Rats} {
			a := algebratest.Matrices(algebra.Q, entry, n, n)(rng)
			fast, err := algebra.Q.CharPoly(t.Context(), a)
			require.NoError(t, err)
			plain, err := algebra.CharPoly(t.Context(), a)
			require.NoError(t, err)
			wantPoly(t, "characteristic polynomial", fast, plain)
		}
	}
}

// TestCharPolyOverARing: Berkowitz divides by nothing, so that det(s I - a)
// over Q[t] at t = c is that of the matrix at t = c.
func TestCharPolyOverARing(t *testing.T) {
	rng := algebratest.Rand(t)
	r := algebratest.PolyRing[algebra.Rat]{R: algebra.Q}
	entry := algebratest.Polys(algebra.Q, algebratest.SmallRats, 2)
	for n := range 5 {
		a := algebratest.Matrices(r, entry, n, n)(rng)
		p, err := algebra.CharPoly(t.Context(), a)
		require.NoError(t, err)
		for _, c := range []string{"0", "1", "-2/3"} {
			at := func(x ratPoly) algebra.Rat { return x.Eval(q(c)) }
			m := algebra.MatrixFromFunc(algebra.Q, n, n, func(i, j int) algebra.Rat { return at(a.At(i, j)) })
			want, err := algebra.Q.CharPoly(t.Context(), m)
			require.NoError(t, err)
			wantPoly(t, "value of the characteristic polynomial", algebra.ReplaceBy(p, algebra.Ring[algebra.Rat](algebra.Q), at), want)
		}
	}
}

func TestCharPolyNamed(t *testing.T) {
	companion := ratMatrix(3, 3, 0, 0, 5, 1, 0, -7, 0, 1, 2)
	for _, c := range []struct {
		name string
		a    algebra.Matrix[algebra.Rat]
		want ratPoly
	}{
		{"empty", ratMatrix(0, 0), ints(1)},
		{"one", ratMatrix(1, 1, 7), ints(-7, 1)},
		{"zero", ratMatrix(2, 2, 0, 0, 0, 0), ints(0, 0, 1)},
		{"rotation", ratMatrix(2, 2, 0, -1, 1, 0), ints(1, 0, 1)},
		{"companion of s^3 - 2 s^2 + 7 s - 5", companion, ints(-5, 7, -2, 1)},
	} {
		for way, f := range map[string]func(context.Context, algebra.Matrix[algebra.Rat]) (ratPoly, error){
			"modular": algebra.Q.CharPoly, "Berkowitz": algebra.CharPoly[algebra.Rat],
		} {
			got, err := f(t.Context(), c.a)
			require.NoError(t, err)
			wantPoly(t, c.name+", "+way, got, c.want)
		}
	}
}

func TestCharPolyCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	a := algebra.Identity(algebra.Q, 3)
	_, err := algebra.CharPoly(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, err = algebra.Q.CharPoly(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, err = algebra.Det(ctx, algebra.Q, a)
	require.ErrorIs(t, err, context.Canceled)
}

func TestMatrixShapeErrors(t *testing.T) {
	ctx := t.Context()
	a, b := ratMatrix(2, 3, 1, 2, 3, 4, 5, 6), ratMatrix(2, 2, 1, 2, 3, 4)
	one, empty := algebra.Identity(algebra.Q, 1), ratMatrix(0, 2)
	for _, c := range []struct {
		want algebra.ShapeError
		call func()
	}{
		{algebra.ShapeError{Op: "construction", R1: 2, C1: 2, R2: 1, C2: 1}, func() { ratMatrix(2, 2, 1) }},
		{algebra.ShapeError{Op: "sum", R1: 2, C1: 3, R2: 2, C2: 2}, func() { a.Add(b) }},
		{algebra.ShapeError{Op: "sum", R1: 2, C1: 2, R2: 2, C2: 3}, func() { b.Sub(a) }},
		{algebra.ShapeError{Op: "product", R1: 2, C1: 3, R2: 2, C2: 2}, func() { a.Mul(b) }},
		{algebra.ShapeError{Op: "product", R1: 2, C1: 3, R2: 2, C2: 1}, func() { a.MulVec(b.Row(0)) }},
		{algebra.ShapeError{Op: "juxtaposition", R1: 1, C1: 1, R2: 2, C2: 3}, func() { one.Beside(a) }},
		{algebra.ShapeError{Op: "stacking", R1: 2, C1: 3, R2: 2, C2: 2}, func() { a.Above(b) }},
		{algebra.ShapeError{Op: "characteristic polynomial", R1: 2, C1: 3, R2: 2, C2: 3}, func() { _, _ = algebra.CharPoly(ctx, a) }},
		{algebra.ShapeError{Op: "characteristic polynomial", R1: 2, C1: 3, R2: 2, C2: 3}, func() { _, _ = algebra.Q.CharPoly(ctx, a) }},
		{algebra.ShapeError{Op: "characteristic polynomial", R1: 0, C1: 2, R2: 0, C2: 2}, func() { _, _ = algebra.Q.CharPoly(ctx, empty) }},
		{algebra.ShapeError{Op: "determinant", R1: 2, C1: 3, R2: 2, C2: 3}, func() { _, _ = algebra.Det(ctx, algebra.Q, a) }},
		{algebra.ShapeError{Op: "minimal polynomial", R1: 2, C1: 3, R2: 2, C2: 3}, func() { _, _ = algebra.MinPoly(ctx, algebra.Q, a) }},
		{algebra.ShapeError{Op: "solution", R1: 2, C1: 3, R2: 2, C2: 2}, func() { _, _ = algebra.Solve(ctx, algebra.Q, a, b) }},
		{algebra.ShapeError{Op: "solution", R1: 2, C1: 2, R2: 1, C2: 1}, func() { _, _ = algebra.Solve(ctx, algebra.Q, b, one) }},
		{algebra.ShapeError{Op: "power", R1: 2, C1: 3, R2: 2, C2: 3}, func() { _, _ = a.Pow(t.Context(), 1) }},
		{algebra.ShapeError{Op: "polynomial", R1: 2, C1: 3, R2: 2, C2: 3}, func() { _, _ = a.EvalPoly(t.Context(), ints(1)) }},
	} {
		assert.PanicsWithValue(t, c.want, c.call)
	}
}

// TestMatrixAtBeyondTheRow: the column n of row 0 once read as the first entry
// of row 1.
func TestMatrixAtBeyondTheRow(t *testing.T) {
	a := ratMatrix(2, 2, 1, 2, 3, 4)
	for _, at := range [][2]int{{0, 2}, {1, -1}, {2, 0}, {-1, 0}, {0, -1}} {
		assert.Panics(t, func() { a.At(at[0], at[1]) }, "%v", at)
	}
}

func TestMatrixAccess(t *testing.T) {
	entries := []algebra.Rat{q("1"), q("2"), q("3"), q("4"), q("5"), q("6")}
	a := algebra.NewMatrix(algebra.Q, 2, 3, entries...)
	entries[0] = q("9")
	a.Row(1)[0] = q("9")
	m, n := a.Dims()
	assert.Equal(t, [2]int{2, 3}, [2]int{m, n})
	assert.Equal(t, "[[1, 2, 3], [4, 5, 6]]", a.String())
	assert.Equal(t, "6", a.At(1, 2).String())
	assert.Equal(t, algebra.Ring[algebra.Rat](algebra.Q), a.Ring())
	assert.False(t, a.Equal(a.Transpose()))
	assert.False(t, a.Equal(ratMatrix(2, 3, 1, 2, 3, 4, 5, 7)))
	assert.False(t, a.IsZero())
	assert.True(t, ratMatrix(0, 3).IsZero())
	assert.Equal(t, "[]", ratMatrix(0, 3).String())
	assert.Equal(t, "[[], []]", ratMatrix(2, 0).String())
	wantMatrix(t, "a product through nothing", ratMatrix(2, 0).Mul(ratMatrix(0, 2)), ratMatrix(2, 2, 0, 0, 0, 0))
}

func BenchmarkCharPoly(b *testing.B) {
	for _, n := range []int{4, 16, 64} {
		for _, bits := range []int{8, 64} {
			name := "n=" + strconv.Itoa(n) + "/bits=" + strconv.Itoa(bits)
			a := algebratest.Matrices(algebra.Q, algebratest.WideRats(bits), n, n)(algebratest.Rand(b))
			b.Run("method=modular/"+name, func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := algebra.Q.CharPoly(b.Context(), a); err != nil {
						b.Fatal(err)
					}
				}
			})
			if n > 16 {
				continue
			}
			b.Run("method=berkowitz/"+name, func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := algebra.CharPoly(b.Context(), a); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// powerOf returns a^k.
func powerOf[E any](t *testing.T, a algebra.Matrix[E], k int) algebra.Matrix[E] {
	t.Helper()
	r, err := a.Pow(t.Context(), k)
	require.NoError(t, err)
	return r
}

// valueAt returns p(a).
func valueAt[E any](t *testing.T, p algebra.Poly[E], a algebra.Matrix[E]) algebra.Matrix[E] {
	t.Helper()
	r, err := a.EvalPoly(t.Context(), p)
	require.NoError(t, err)
	return r
}

func TestMatrixPowersStopWhenCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	a := algebra.Identity[algebra.Rat](algebra.Q, 3)
	_, err := a.Pow(ctx, 5)
	assert.ErrorIs(t, err, context.Canceled)
	_, err = a.EvalPoly(ctx, ints(1, 2, 3))
	assert.ErrorIs(t, err, context.Canceled)
}
