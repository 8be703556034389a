package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

func TestSlabValuesDoNotTouchEachOther(t *testing.T) {
	for _, w := range []int{3, 4} {
		b := borders()
		s := newSlab(len(b), w)
		for i, x := range b {
			s.set(i, appendLimbs(nil, x, w))
		}
		requireSameVec(t, b, s.values)
		for i, x := range s.values { // grow one, in every way, and look at the others
			others := make([]*big.Int, len(b))
			for k, y := range s.values {
				others[k] = new(big.Int).Set(y)
			}
			x.Lsh(x, 64)
			x.Add(x, big.NewInt(-1))
			x.Mul(x, x)
			x.SetBits(append(x.Bits()[:0], ^big.Word(0), ^big.Word(0), ^big.Word(0), ^big.Word(0), ^big.Word(0)))
			for k, y := range s.values {
				if k != i {
					require.Zero(t, others[k].Cmp(y))
				}
			}
		}
	}
	words := []uint64{0, 1, 1<<64 - 1, 1<<63 - 1, 1 << 63}
	for i, x := range bigWords(words) {
		require.Equal(t, int64(words[i]), x.Int64())
		require.True(t, x.IsInt64())
	}
}

// Results are laid out side by side, too.
func TestResultsDoNotTouchEachOther(t *testing.T) {
	r := rand.New(rand.NewPCG(49, 50))
	for _, n := range []int{4, 9, 25} {
		a := random(r, n, n, 99)
		p, err := CharPoly(t.Context(), a)
		require.NoError(t, err)
		want := plainCharPoly(a)
		for i := range p {
			p[i].Lsh(p[i], 200).Add(p[i], big.NewInt(1))
			requireSameVec(t, want[i+1:], p[i+1:])
		}
	}
}
