package intmat

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// fromLimbs is the inverse of appendLimbs.
func fromLimbs(x []uint64) *big.Int {
	v := new(big.Int)
	for i := len(x) - 1; i >= 0; i-- {
		v.Lsh(v, 64)
		v.Or(v, new(big.Int).SetUint64(x[i]))
	}
	if x[len(x)-1]>>63 == 1 {
		v.Sub(v, new(big.Int).Lsh(big.NewInt(1), uint(64*len(x))))
	}
	return v
}

func TestLimbArithmetic(t *testing.T) {
	for _, w := range []int{4, 5} {
		for _, x := range borders() {
			limbs := appendLimbs(nil, x, w)
			require.Zero(t, x.Cmp(fromLimbs(limbs)))
			for _, p := range []uint64{3, 101, prime(0)} {
				bigP := new(big.Int).SetUint64(p)
				want := new(big.Int).Mod(x, bigP).Uint64()
				require.Equal(t, want, residueOfLimbs(limbs, p))

				pinv := new(big.Int).ModInverse(bigP, new(big.Int).Lsh(big.NewInt(1), 64)).Uint64()
				multiple := appendLimbs(nil, new(big.Int).Mul(x, bigP), w)
				divideLimbs(multiple, p, pinv)
				require.Zero(t, x.Cmp(fromLimbs(multiple)))

				for _, y := range borders() {
					acc := appendLimbs(nil, y, w)
					subMulLimbs(acc, limbs, p)
					d := new(big.Int).Mul(x, bigP)
					require.Zero(t, d.Sub(y, d).Cmp(fromLimbs(acc)))
				}
			}
		}
	}
}
