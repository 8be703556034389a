package algebra_test

import (
	"context"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

// TestDivideResolvent multiplies back: r = (s I - a) quo + rem, over Q with and
// without denominators, and over an extension.
func TestDivideResolvent(t *testing.T) {
	ctx := context.Background()
	r := rand.New(rand.NewPCG(3, 4))
	for range 60 {
		n, den := r.IntN(5), int64(1+r.IntN(3)*r.IntN(4))
		rat := func() algebra.Rat { return algebra.NewRat(int64(r.IntN(19)-9), 1+r.Int64N(den)) }
		a := algebra.MatrixFromFunc[algebra.Rat](algebra.Q, n, n, func(int, int) algebra.Rat { return rat() })
		v := make([]algebra.Poly[algebra.Rat], n)
		for i := range v {
			c := make([]algebra.Rat, r.IntN(7))
			for j := range c {
				c[j] = rat()
			}
			v[i] = algebra.NewPoly[algebra.Rat](algebra.Q, c...)
		}
		checkDivision[algebra.Rat](t, ctx, algebra.Q, a, v)

		ext := algebra.NewExtension[algebra.Rat](algebra.Q, algebra.PolyFromInts(-2, 0, 1), "r")
		lift := func(x algebra.Rat) algebra.Poly[algebra.Rat] { return ext.Add(ext.FromBase(x), ext.Root()) }
		la := algebra.MatrixFromFunc[algebra.Poly[algebra.Rat]](ext, n, n, func(i, j int) algebra.Poly[algebra.Rat] { return lift(a.At(i, j)) })
		lv := make([]algebra.Poly[algebra.Poly[algebra.Rat]], n)
		for i := range lv {
			lv[i] = algebra.ReplaceBy(v[i], ext, lift)
		}
		checkDivision[algebra.Poly[algebra.Rat]](t, ctx, ext, la, lv)
	}
}

func checkDivision[E any](t *testing.T, ctx context.Context, k algebra.Ring[E], a algebra.Matrix[E], v []algebra.Poly[E]) {
	t.Helper()
	quo, rem, err := algebra.DivideResolvent(ctx, a, v)
	require.NoError(t, err)
	for i := range v {
		back := quo[i].ShiftUp(1).Add(algebra.Constant(k, rem[i]))
		for j := range v {
			back = back.Sub(quo[j].Scale(a.At(i, j)))
		}
		require.True(t, back.Equal(v[i]), "row %d: %s is not %s", i, back, v[i])
	}
}
