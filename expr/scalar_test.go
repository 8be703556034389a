package expr

import (
	"math"
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

func TestScalarPow(t *testing.T) {
	s := scalarEval[algebra.Rat]{algebra.Q, Limits{}.WithDefaults()}
	for _, c := range []struct{ x, e, want string }{
		{"2", "10", "1024"}, {"2", "-3", "1/8"}, {"-3/2", "3", "-27/8"}, {"5", "0", "1"}, {"0", "4", "0"},
		{"4/9", "1/2", "2/3"}, {"4/9", "-1/2", "3/2"}, {"27", "2/3", "9"}, {"0", "1/2", "0"}, {"1", "1/64", "1"},
		{"18446744073709551616", "1/64", "2"}, {"1/18446744073709551616", "3/64", "1/8"},
		{"-1", "9223372036854775807", "-1"}, {"-1", "-9223372036854775808", "1"},
	} {
		x, err := algebra.ParseRat(c.x)
		require.NoError(t, err)
		e, err := algebra.ParseRat(c.e)
		require.NoError(t, err)
		got, err := s.pow(x, e, Pos{})
		require.NoError(t, err, "%s^%s", c.x, c.e)
		assert.Equal(t, c.want, got.String(), "%s^%s", c.x, c.e)
	}
	for _, c := range []struct {
		x, e string
		want Kind
	}{
		{"0", "0", Singular}, {"0", "-1", Singular}, {"0", "-1/2", Singular},
		{"2", "1/2", OutsideClass}, {"2", "1/65", OutsideClass}, {"-1", "1/2", OutsideClass}, {"4/3", "1/2", OutsideClass},
		{"2", "100001", LimitExceeded}, {"2", "-9223372036854775808", LimitExceeded}, {"2", "9223372036854775808", LimitExceeded},
		{"1/3", "1000000000", LimitExceeded}, {"4", "1000000001/2", LimitExceeded},
	} {
		x, err := algebra.ParseRat(c.x)
		require.NoError(t, err)
		e, err := algebra.ParseRat(c.e)
		require.NoError(t, err)
		_, err = s.pow(x, e, Pos{})
		var failure *Error
		require.ErrorAs(t, err, &failure, "%s^%s", c.x, c.e)
		assert.Equal(t, c.want, failure.Kind, "%s^%s", c.x, c.e)
	}
}

// A root is exact where there is one, and one off it there is none.
func TestExactRoot(t *testing.T) {
	for _, q := range []int{2, 3, 5, 64} {
		for _, r := range []string{"1", "2", "10", "4294967295", "4294967296", "18446744073709551617", "123456789012345678901234567890"} {
			root, _ := new(big.Int).SetString(r, 10)
			n := new(big.Int).Exp(root, big.NewInt(int64(q)), nil)
			got, ok := exactRoot(n, q)
			require.True(t, ok)
			require.Zero(t, root.Cmp(got), "root %d of %s", q, n)
			_, ok = exactRoot(new(big.Int).Add(n, big.NewInt(1)), q)
			require.False(t, ok)
			if r != "1" {
				_, ok = exactRoot(new(big.Int).Sub(n, big.NewInt(1)), q)
				require.False(t, ok)
			}
		}
	}
}

func TestAbs(t *testing.T) {
	for _, c := range [][2]int64{{0, 0}, {1, 1}, {-1, 1}, {-2, 2}, {math.MaxInt64, math.MaxInt64}, {-math.MaxInt64, math.MaxInt64}, {math.MinInt64, math.MaxInt64}} {
		assert.Equal(t, c[1], abs(c[0]))
	}
}
