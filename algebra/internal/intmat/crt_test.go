package intmat

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

func TestCRTAtTheEndsOfItsRange(t *testing.T) {
	for _, count := range []int{0, 1, 2, 3, 7, 31, 32, 33, 40} {
		c := leadingCRT(count)
		require.Len(t, c.fields, count)
		product := big.NewInt(1)
		for i, f := range c.fields {
			require.Equal(t, prime(i), f.P)
			product.Mul(product, new(big.Int).SetUint64(f.P))
		}
		require.Zero(t, product.Cmp(bigLimbs(c.product)))
		require.GreaterOrEqual(t, product.BitLen(), primeBits*count)
		quarter := new(big.Int).Rsh(product, 2)
		wide := new(big.Int).Mul(product, new(big.Int).SetUint64(1<<63-4))
		for _, limit := range []*big.Int{quarter, wide} {
			beside := limit == wide
			if count == 0 && !beside {
				continue
			}
			values := []*big.Int{new(big.Int), big.NewInt(1), big.NewInt(-1)}
			for _, d := range []int64{1, 2, 1 << 40} {
				x := new(big.Int).Sub(limit, big.NewInt(d))
				values = append(values, x, new(big.Int).Neg(x))
				y := new(big.Int).Quo(limit, big.NewInt(d+1))
				values = append(values, y, new(big.Int).Neg(y))
			}
			for _, x := range append(values, borders()...) {
				if x.CmpAbs(limit) >= 0 {
					continue
				}
				images := make([][]uint64, count)
				for i, f := range c.fields {
					images[i] = []uint64{f.FromBig(x)}
				}
				var words []uint64
				if beside {
					words = []uint64{appendLimbs(nil, x, count+2)[0]}
				}
				got, err := c.liftAll(t.Context(), images, words)
				require.NoError(t, err)
				require.Zero(t, x.Cmp(got[0]), "%d primes: want %v, got %v", count, x, got[0])
			}
		}
	}
	for bits := range 1000 {
		require.Greater(t, primeBits*primesFor(bits)-1, bits+1)
		if k := primesBeside(bits); k > 0 {
			require.Greater(t, bits, 63)
			require.GreaterOrEqual(t, primeBits*k-1+62, bits)
			require.Less(t, primeBits*(k-1)-1+62, bits)
		}
	}
}
