package word

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestAbs(t *testing.T) {
	for x, want := range map[int64]uint64{0: 0, 1: 1, -1: 1, math.MaxInt64: 1<<63 - 1, math.MinInt64: 1 << 63} {
		assert.Equal(t, want, Abs(x))
	}
	assert.Equal(t, uint64(128), Abs(int8(-128)))
}

// TestAgainstBig compares with math/big at random values and word borders.
func TestAgainstBig(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	draw := func() uint64 {
		if r.IntN(4) == 0 {
			return []uint64{0, 1, 2, 1 << 31, 1<<62 - 1, 1 << 63, math.MaxUint64}[r.IntN(7)]
		}
		return r.Uint64() >> r.IntN(64)
	}
	number := func(x uint64) *big.Int { return new(big.Int).SetUint64(x) }
	for range 2000 {
		x, y := draw(), draw()
		assert.Equal(t, new(big.Int).GCD(nil, nil, number(x), number(y)).Uint64(), GCD(x, y), "gcd of %d and %d", x, y)

		a, b := make([]uint64, r.IntN(10)), make([]uint64, 10)
		sum := new(big.Int)
		for i := range b {
			b[i] = draw()
			if i < len(a) {
				a[i] = draw()
				sum.Add(sum, new(big.Int).Mul(number(a[i]), number(b[i])))
			}
		}
		low := sum.And(sum, number(math.MaxUint64))
		assert.Equal(t, low.Uint64(), Dot(a, b))
	}
}
