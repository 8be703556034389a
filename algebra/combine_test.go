package algebra_test

import (
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

// TestCombine compares with scaling, shifting and adding one by one.
func TestCombine(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	for range 200 {
		den := int64(1 + r.IntN(2)*r.IntN(12))
		rat := func() algebra.Rat { return algebra.NewRat(r.Int64N(41)-20, 1+r.Int64N(den)) }
		var terms []algebra.Multiple[algebra.Rat]
		want := algebra.PolyFromInts()
		for range r.IntN(6) {
			c := make([]algebra.Rat, r.IntN(5))
			for i := range c {
				c[i] = rat()
			}
			m := algebra.Multiple[algebra.Rat]{C: rat(), P: algebra.NewPoly[algebra.Rat](algebra.Q, c...), Shift: r.IntN(3)}
			terms = append(terms, m)
			want = want.Add(m.P.Scale(m.C).ShiftUp(m.Shift))
		}
		got := algebra.Combine[algebra.Rat](algebra.Q, terms)
		require.True(t, got.Equal(want), "%s is not %s", got, want)
	}
}
