package algebra_test

import (
	"context"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

var _ algebra.Scalars[algebra.Rat] = algebra.Q

func TestRationalsIsAField(t *testing.T) {
	algebratest.TestField[algebra.Rat](t, algebra.Q, algebratest.Rats)
}

func TestRationalsAsScalars(t *testing.T) {
	for _, s := range []string{"0", "1", "-1", "-22/7", "9223372036854775808", "-1/18446744073709551617"} {
		x := q(s)
		assert.True(t, algebra.Q.FromRat(x).Equal(x), s)
		assert.Equal(t, x.Sign() < 0, algebra.Q.Negative(x), s)
		r, ok := algebra.Q.Rational(x)
		assert.True(t, ok && r.Equal(x), s)
		for _, prec := range []uint{2, 53, 200} {
			ball := algebra.Q.Enclose(x, prec)
			assert.True(t, ball.Contains(x.Big()), "%s at %d bits", s, prec)
			assert.GreaterOrEqual(t, ball.RelPrec(), int(prec)-2, "%s at %d bits", s, prec)
		}
	}
}

func TestRationalsRoots(t *testing.T) {
	ctx := context.Background()
	// (s - 1/2)(s + 1/3)(s^2 + 1/4): three denominators to clear.
	p := algebra.NewPoly(algebra.Q, q("-1/2"), q("1")).
		Mul(algebra.NewPoly(algebra.Q, q("1/3"), q("1"))).
		Mul(algebra.NewPoly(algebra.Q, q("1/4"), q("0"), q("1")))
	roots, err := algebra.Q.Roots(ctx, p)
	require.NoError(t, err)
	require.Equal(t, 4, roots.Len())
	require.Equal(t, 2, roots.NumReal())
	for i, want := range []struct{ re, im string }{{"-1/3", "0"}, {"1/2", "0"}, {"0", "1/2"}, {"0", "-1/2"}} {
		z, err := roots.Enclose(ctx, i, 80)
		require.NoError(t, err)
		assert.True(t, z.Re.Contains(q(want.re).Big()) && z.Im.Contains(q(want.im).Big()), "root %d", i)
	}
	_, err = algebra.Q.Roots(ctx, ints(1, 2, 1))
	assert.ErrorIs(t, err, algebra.ErrNotSquareFree)
	_, err = algebra.Q.Roots(ctx, ints(5))
	assert.Error(t, err)
}

func BenchmarkRoots(b *testing.B) {
	for _, deg := range []int{4, 16, 64} {
		for _, bits := range []int{16, 128} {
			b.Run("deg="+strconv.Itoa(deg)+"/bits="+strconv.Itoa(bits), func(b *testing.B) {
				p := densePoly(algebratest.Rand(b), deg, bits)
				b.ReportAllocs()
				for b.Loop() {
					if _, err := algebra.Q.Roots(b.Context(), p); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
