package algebra_test

import (
	"context"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

func TestIsImaginary(t *testing.T) {
	for _, c := range []struct {
		p    []int64
		want int // imaginary roots
	}{
		{[]int64{1, 0, 1}, 2},
		{[]int64{1, 1, 1}, 0},
		{[]int64{-2, 0, 1}, 0},
		{[]int64{-1, 0, 3, 0, 1}, 2},
		{[]int64{3, 0, 11, 0, 7, 0, 1}, 6},
		{[]int64{-2, 0, 11, 0, 7, 0, 1}, 4},
		{[]int64{-1, -1, 0, 1}, 0},
		{[]int64{1, 1, 1, 1, 1}, 0},
	} {
		p := algebra.PolyFromInts(c.p...)
		roots, err := algebra.Q.Roots(context.Background(), p)
		require.NoError(t, err)
		n := 0
		for j := range roots.Len() {
			is, err := algebra.IsImaginary[algebra.Rat](context.Background(), algebra.Q, p, roots, j)
			require.NoError(t, err)
			if is {
				n++
			}
		}
		assert.Equal(t, c.want, n, "%v", c.p)
	}
}
