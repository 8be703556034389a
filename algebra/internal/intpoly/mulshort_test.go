package intpoly

import (
	"math/big"
	"math/bits"
	"testing"

	"github.com/stretchr/testify/require"
)

// TestMulShortIsSchoolbook compares every way of short products that applies.
func TestMulShortIsSchoolbook(t *testing.T) {
	ps := samples()
	for _, e := range []uint{1, 15, 30, 31, 32, 62, 63, 64} {
		m := new(big.Int).Sub(new(big.Int).Lsh(big.NewInt(1), e), big.NewInt(1))
		for _, n := range []int{1, 2, 7, 33, 70} {
			p := make(Poly, n)
			for i := range p {
				p[i] = m
			}
			ps = append(ps, p, p.Scale(big.NewInt(-1)))
		}
	}
	words := 0
	for _, p := range ps {
		for _, q := range ps {
			if len(p) == 0 || len(q) == 0 {
				continue
			}
			want := mulSchoolbook(p, q)
			k := wordsFor(slotFor(p, q) - 1)
			requireSame(t, want, mulFlat(p, q, k))
			requireSame(t, want, mulFlat(p, q, k+1))
			if p.maxBits() <= bits.UintSize && q.maxBits() <= bits.UintSize {
				requireSame(t, want, mulWord(p, q, k))
				words++
			}
			requireSame(t, want, Mul(p, q))
		}
	}
	require.Greater(t, words, 1000)
}

// TestCoefficientsDoNotShareRoom grows a coefficient of a result in place: its
// neighbours in memory have to stay.
func TestCoefficientsDoNotShareRoom(t *testing.T) {
	p, q := randomPoly(5, 9, 60), randomPoly(6, 9, 200)
	quo, _ := DivExact(Mul(p, q), q)
	for _, r := range []Poly{
		Mul(p, p), Mul(p, q), mulPacked(p, q), mulPackedTwo(p, q), mulSchoolbook(p, q),
		quo, GCD(Mul(p, q), Mul(p, p)), p.Derivative(), fromField([]uint64{1, 2, 3}),
	} {
		want := New(r...)
		for i, c := range r {
			before := new(big.Int).Set(c)
			c.Lsh(c, 500)
			c.Sub(c, big.NewInt(1))
			for j := range r {
				if j != i {
					require.Zero(t, r[j].Cmp(want[j]))
				}
			}
			c.Set(before)
		}
	}
}
