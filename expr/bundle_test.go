package expr_test

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// A bundle gives what its functions give one by one.
func TestBundle(t *testing.T) {
	g := newGenerator(12)
	for range 20 {
		f := g.function(t)
		fs := []expr.Function{f, f.Derivative(), g.function(t), function(t, "t - t"), function(t, "3/4"), function(t, "(t - 1/2)*exp(t)"), f.Integral()}
		b := expr.NewBundle(fs...)
		for _, x := range []*big.Rat{new(big.Rat), big.NewRat(1, 2), big.NewRat(-7, 3)} {
			got, err := b.At(t.Context(), x, 25)
			require.NoError(t, err)
			for i, f := range fs {
				want, err := f.At(t.Context(), x, 25)
				require.NoError(t, err)
				require.Equal(t, want, got[i], "%s at %s", f, x)
			}
		}
	}
	none, err := expr.NewBundle().At(t.Context(), big.NewRat(1, 2), 5)
	require.NoError(t, err)
	assert.Empty(t, none)
	free := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.Rat{}, expr.Image[algebra.Rat]{}, expr.FreeTerm[algebra.Rat]{Name: "C1", Image: elementaryOf(t, "1").Image()})
	_, err = expr.NewBundle(function(t, "t"), free).At(t.Context(), big.NewRat(1, 2), 5)
	assert.Equal(t, expr.SideConditions, faultOf(t, err).kind)
	assert.Panics(t, func() {
		expr.NewBundle(function(t, "t"), expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.NewRat(1, 1), elementaryOf(t, "t").Image()))
	})
}
