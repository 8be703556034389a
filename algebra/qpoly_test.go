package algebra

import (
	"math/big"
	"testing"
)

// TestSlabValuesAreApart grows every number of a slab and looks at the others:
// values that share a backing array are limited to their own part.
func TestSlabValuesAreApart(t *testing.T) {
	w := []int64{1, -2, 1<<62 + 7, -(1<<63 - 1), 0, 5}
	for name, values := range map[string][]*big.Int{
		"words":   bigWords(w),
		"product": mulWide(w, w),
	} {
		before := make([]*big.Int, len(values))
		for i, x := range values {
			before[i] = new(big.Int).Set(x)
		}
		for i, x := range values {
			x.Lsh(x, 300)
			x.Add(x, big.NewInt(-1))
			x.Mul(x, x)
			for j, y := range values {
				if j != i && y.Cmp(before[j]) != 0 {
					t.Fatalf("%s: growing number %d changed number %d", name, i, j)
				}
			}
			x.Set(before[i])
		}
	}
}
