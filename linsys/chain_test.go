package linsys_test

import (
	"context"
	"fmt"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// equalChain is a chain of n equal elements between fixed ends, released with the
// first displaced by 1: masses, or cells that exchange heat.
func equalChain(n int, masses bool) string {
	var b strings.Builder
	prime := "'"
	if masses {
		prime = "''"
	}
	for i := 1; i <= n; i++ {
		fmt.Fprintf(&b, "u%d%s = -2*u%d", i, prime, i)
		if i > 1 {
			fmt.Fprintf(&b, " + u%d", i-1)
		}
		if i < n {
			fmt.Fprintf(&b, " + u%d", i+1)
		}
		fmt.Fprintf(&b, "\nu%d(0) = %d\n", i, 1/i)
		if masses {
			fmt.Fprintf(&b, "u%d'(0) = 0\n", i)
		}
	}
	return b.String()
}

// Responses of chains are written in sines and cosines of fractions of pi, and read
// back as the same functions.
func TestChains(t *testing.T) {
	for _, n := range []int{3, 5, 6, 7, 8, 10, 12} {
		for _, masses := range []bool{true, false} {
			m, err := linsys.Read(equalChain(n, masses))
			require.NoError(t, err)
			r, err := m.ClosedForm(context.Background())
			require.NoError(t, err)
			for _, name := range r.States() {
				f := r.State(name)
				text := f.String()
				assert.NotContains(t, text, "sumroots", "n = %d", n)
				back, err := expr.ParseFunction(text, expr.Limits{})
				require.NoError(t, err, text)
				assert.True(t, back.Equal(f), text)
				if n > 7 {
					break
				}
			}
		}
	}
}

// Responses of damped and driven chains, and of others with roots in roots, read back
// although all their numbers together would make a field beyond the limit.
func TestRootsInRootsReadBack(t *testing.T) {
	models := []string{
		"a'' = -3a + b; b'' = a - 3b + c; c'' = b - 3c + d; d'' = c - 3d\na(0) = 1; a'(0) = 0; b(0) = 0; b'(0) = 0; c(0) = 0; c'(0) = 1; d(0) = 0; d'(0) = 0",
		"x'' = -(7x + 6y + z) - x' + cos(2t); y'' = -(6x + 11y + 2z) - y'; z'' = -(x + 2y + 3z) - z'\nx(0) = 4; x'(0) = 1; y(0) = 0; y'(0) = 0; z(0) = 0; z'(0) = 3",
	}
	for _, n := range []int{4, 5, 9} {
		var b strings.Builder
		for i := 1; i <= n; i++ {
			fmt.Fprintf(&b, "u%d'' = -2*u%d - u%d'/5", i, i, i)
			if i > 1 {
				fmt.Fprintf(&b, " + u%d", i-1)
			}
			if i < n {
				fmt.Fprintf(&b, " + u%d", i+1)
			}
			fmt.Fprintf(&b, "\nu%d(0) = %d; u%d'(0) = 0\n", i, 1/i, i)
		}
		models = append(models, b.String())
	}
	for _, src := range models {
		r := responseOf(t, src)
		for _, name := range r.States() {
			text := r.State(name).String()
			back, err := expr.ParseFunction(text, expr.Limits{})
			require.NoError(t, err, text)
			assert.True(t, back.Equal(r.State(name)), text)
		}
	}
}
