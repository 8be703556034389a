package algebra_test

import (
	"math"
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/algebra"
)

func TestAtan2(t *testing.T) {
	ball := func(n, d int64) algebra.Ball { return algebra.BallFromRat(big.NewRat(n, d), 400) }
	for _, c := range [][4]int64{{0, 1, 1, 1}, {1, 1, 0, 1}, {1, 1, 1, 1}, {-1, 1, 1, 1}, {1, 3, -7, 2}, {-5, 1, -1, 1000}, {1, 1000000, 1, 1}, {3, 1, 4, 1}} {
		y, x := ball(c[0], c[1]), ball(c[2], c[3])
		a := algebra.Atan2(y, x, 300)
		got, _ := a.Mid().Float64()
		want := math.Atan2(float64(c[0])/float64(c[1]), float64(c[2])/float64(c[3]))
		assert.InDelta(t, want, got, 1e-14)
		rad, _ := a.Rad().Float64()
		assert.Less(t, rad, 1e-88)
		// y cos a = x sin a
		sin, cos := a.SinCos(300)
		assert.True(t, y.Mul(cos, 300).Sub(x.Mul(sin, 300), 300).ContainsZero())
	}
	// atan 1 = pi/4
	assert.True(t, algebra.Atan2(ball(1, 1), ball(1, 1), 500).MulPow2(2).Overlaps(algebra.Pi(500)))
	assert.True(t, algebra.Atan2(algebra.Ball{}, algebra.Ball{}, 64).Rad().IsInf(), "the origin has no angle")
}

func TestBallRoot(t *testing.T) {
	for _, c := range []struct {
		n, d int64
		q    int
	}{{2, 1, 2}, {2, 1, 3}, {27, 1, 3}, {1, 1000000007, 5}, {7, 3, 7}, {-8, 1, 3}, {1, 1 << 40, 4}} {
		x := algebra.BallFromRat(big.NewRat(c.n, c.d), 300)
		r := x.Root(c.q, 200)
		power := algebra.BallFromInt(big.NewInt(1))
		for range c.q {
			power = power.Mul(r, 300)
		}
		assert.True(t, power.Overlaps(x), "%v", c)
		assert.Greater(t, r.RelPrec(), 190, "%v", c)
	}
	assert.True(t, algebra.BallFromInt(big.NewInt(-4)).Root(4, 64).Rad().IsInf())
}

func TestIntRoot(t *testing.T) {
	for _, q := range []int{1, 2, 3, 5, 17} {
		for _, n := range []int64{0, 1, 2, 7, 8, 26, 27, 28, 1<<31 - 1, 1 << 31, 1<<62 - 1, 1 << 62, math.MaxInt64} {
			r := algebra.IntRoot(big.NewInt(n), q)
			power := func(x *big.Int) *big.Int { return new(big.Int).Exp(x, big.NewInt(int64(q)), nil) }
			assert.LessOrEqual(t, power(r).Cmp(big.NewInt(n)), 0)
			assert.Positive(t, power(new(big.Int).Add(r, big.NewInt(1))).Cmp(big.NewInt(n)))
		}
	}
}
