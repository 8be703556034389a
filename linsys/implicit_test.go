package linsys_test

import (
	"errors"
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// determinant expands along the first row; small matrices only.
func determinant(m [][]algebra.Poly[algebra.Rat]) algebra.Poly[algebra.Rat] {
	if len(m) == 0 {
		return algebra.PolyFromInts(1)
	}
	var sum algebra.Poly[algebra.Rat]
	for j, x := range m[0] {
		var minor [][]algebra.Poly[algebra.Rat]
		for _, row := range m[1:] {
			minor = append(minor, append(append([]algebra.Poly[algebra.Rat](nil), row[:j]...), row[j+1:]...))
		}
		d := x.Mul(determinant(minor))
		if j%2 == 1 {
			d = d.Neg()
		}
		sum = sum.Add(d)
	}
	return sum
}

// TestRandomImplicit solves random systems P(d/dt) y = f, many with a singular
// leading matrix. Their order is the degree of det P, and their characteristic
// polynomial is det P, up to a factor.
func TestRandomImplicit(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 7))
	orders := map[int]int{}
	for range 300 {
		n := 1 + r.IntN(3)
		p := make([][]algebra.Poly[algebra.Rat], n)
		var text strings.Builder
		mentioned := make([]bool, n)
		for i := range n {
			p[i] = make([]algebra.Poly[algebra.Rat], n)
			for j := range n {
				c := make([]int64, 3)
				for k := range c {
					if r.IntN(3) == 0 {
						c[k] = int64(r.IntN(5) - 2)
					}
				}
				p[i][j] = algebra.PolyFromInts(c...)
				for k := p[i][j].Degree(); k >= 0; k-- {
					fmt.Fprintf(&text, " + (%d)*y%d%s", c[k], j, strings.Repeat("'", k))
				}
				mentioned[j] = mentioned[j] || p[i][j].Degree() > 0
			}
			fmt.Fprintf(&text, " + 0*y0 = %s\n", []string{"0", "t", "exp(-t)", "2", "sin(t)"}[r.IntN(5)])
		}
		allDynamic := true
		for _, m := range mentioned {
			allDynamic = allDynamic && m
		}
		if !allDynamic {
			continue // a symbol that no derivative marks as a state
		}
		det := determinant(p)
		m, err := linsys.Read(text.String())
		require.NoError(t, err, text.String())
		res, err := respondModel(m)
		if det.IsZero() {
			var e *linsys.Error
			require.True(t, errors.As(err, &e), "%v for\n%s", err, &text)
			assert.Equal(t, expr.Singular, e.Kind)
			continue
		}
		require.NoError(t, err, text.String())
		orders[det.Degree()]++
		assert.True(t, res.Proof().Holds())
		assert.Len(t, res.Constants(), det.Degree(), text.String())
		product := algebra.PolyFromInts(1)
		for _, mode := range res.Modes() {
			x, ok := mode.Roots[0].Algebraic()
			require.True(t, ok)
			product = product.Mul(x.MinPoly().Pow(mode.Multiplicity))
		}
		assert.True(t, product.Equal(det.Monic(algebra.Q)), "modes %s, det P = %s for\n%s", product, det, &text)
	}
	assert.Greater(t, len(orders), 4, "orders that occurred")
}
