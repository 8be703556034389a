package intpoly

import (
	"context"
	"math/big"
	"testing"

	"example.org/closedform/algebra/internal/zp"
	"github.com/stretchr/testify/require"
)

// TestWordLiftIsLift compares the lift on words with the one on big integers,
// at every exponent that fits a word and some beyond.
func TestWordLiftIsLift(t *testing.T) {
	ctx := context.Background()
	for _, f := range []Poly{
		wilkinson(7), cyclotomic(105), translate(swinnertonDyer(2, 3, 5), 1),
		product(randomPolys(6, 4, 4, 30)), product(randomPolys(7, 2, 9, 200)),
	} {
		full, _ := lifted(t, f)
		local := make([]zp.Poly, len(full.factors))
		for i, g := range full.factors {
			local[i] = reduce(g, full.field)
		}
		for exp := 1; exp < 50; exp += 1 + exp/4 {
			fast := &lift{f: f, field: full.field, bound: big.NewInt(1)}
			fast.start(local)
			plain := &lift{f: f, field: full.field, bound: big.NewInt(1)}
			plain.start(local)
			plain.root, plain.words = plain.words.big(), nil
			for _, l := range []*lift{fast, plain} {
				require.NoError(t, l.raise(ctx, exp))
				requireLift(t, l)
			}
			require.Zero(t, fast.modulus.Cmp(plain.modulus))
			for i := range local {
				requireSame(t, plain.factors[i], fast.factors[i])
			}
		}
	}
}

func TestWordStep(t *testing.T) {
	l := &lift{field: zp.NewField(3)}
	st, ok := l.wordStep(19, 39) // 3^39 < 2^62 < 3^40
	require.True(t, ok)
	require.Equal(t, uint64(1162261467), st.m.P)
	require.Equal(t, st.next.P, st.m.P*st.gain.P)
	_, ok = l.wordStep(20, 40)
	require.False(t, ok)
}
