package roots

import (
	"context"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

func TestDecimals(t *testing.T) {
	type part struct{ re, im string }
	for _, c := range []struct {
		name   string
		p      algebra.Poly[algebra.Rat]
		digits int
		want   []part
	}{
		{"rational", algebra.PolyFromInts(2, 1), 4, []part{{"-2.000", "0"}}},
		{"zero", algebra.PolyFromInts(0, 1), 4, []part{{"0", "0"}}},
		{"real surds", algebra.PolyFromInts(-2, 0, 1), 5, []part{{"-1.4142", "0"}, {"1.4142", "0"}}},
		{"imaginary unit", algebra.PolyFromInts(1, 0, 1), 3, []part{{"0", "1.00"}, {"0", "-1.00"}}},
		{"imaginary surd", algebra.PolyFromInts(3, 0, 1), 3, []part{{"0", "1.73"}, {"0", "-1.73"}}},
		// s^2 - s + 29/16: 1/2 +- 5/4 i, a tie at two digits
		{"tie of degree 2", algebra.NewPoly[algebra.Rat](algebra.Q, algebra.NewRat(29, 16), algebra.NewRat(-1, 1), algebra.NewRat(1, 1)), 2,
			[]part{{"0.50", "1.3"}, {"0.50", "-1.3"}}},
		{"all imaginary, degree 4", algebra.PolyFromInts(2, 0, 4, 0, 1), 6,
			[]part{{"0", "0.765367"}, {"0", "-0.765367"}, {"0", "1.84776"}, {"0", "-1.84776"}}},
		// even, but its roots +-1 +- i... times 2^(1/4) lie off the axes
		{"even, off the axis", algebra.PolyFromInts(2, 0, 0, 0, 1), 6,
			[]part{{"-0.840896", "0.840896"}, {"-0.840896", "-0.840896"}, {"0.840896", "0.840896"}, {"0.840896", "-0.840896"}}},
		// s^4 - 2 has two real and two imaginary roots
		{"mixed", algebra.PolyFromInts(-2, 0, 0, 0, 1), 6,
			[]part{{"-1.18921", "0"}, {"1.18921", "0"}, {"0", "1.18921"}, {"0", "-1.18921"}}},
		// the minimal polynomial of sqrt(2) + i
		{"rational imaginary part", algebra.PolyFromInts(9, 0, -2, 0, 1), 6,
			[]part{{"-1.41421", "1.00000"}, {"-1.41421", "-1.00000"}, {"1.41421", "1.00000"}, {"1.41421", "-1.00000"}}},
		{"odd degree", algebra.PolyFromInts(-2, 0, 0, 1), 4, []part{{"1.260", "0"}, {"-0.6300", "1.091"}, {"-0.6300", "-1.091"}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			roots, err := algebra.AlgebraicRoots(context.Background(), c.p)
			require.NoError(t, err)
			var got []part
			for _, x := range roots {
				re, im, err := algebraic(context.Background(), x, c.digits)
				require.NoError(t, err)
				got = append(got, part{re, im})
			}
			require.Equal(t, c.want, got)
		})
	}
}

// p(s - 5/4) has the real part 5/4 where p(s) has 0, p = s^4 + 4 s^2 + 2: a tie
// at two digits that no enclosure decides. The roots of (s - 1)^2 = 2 turned by a
// shift of 5/4 i have the imaginary part 5/4.
func TestDecimalsOfTies(t *testing.T) {
	ctx := context.Background()
	shifted := algebra.PolyFromInts(2, 0, 4, 0, 1).Translate(algebra.NewRat(-5, 4))
	roots, err := algebra.AlgebraicRoots(ctx, shifted)
	require.NoError(t, err)
	for _, x := range roots {
		re, _, err := algebraic(ctx, x, 2)
		require.NoError(t, err)
		require.Equal(t, "1.3", re)
	}
	// sqrt(2) + 5/4 i: ((s^2 + 25/16) - 2)^2 ... = s^4 - 2 (2 - 25/16) s^2 + (2 + 25/16)^2
	m := algebra.NewPoly[algebra.Rat](algebra.Q, algebra.NewRat(57*57, 256), algebra.Rat{}, algebra.NewRat(-7, 8), algebra.Rat{}, algebra.NewRat(1, 1))
	roots, err = algebra.AlgebraicRoots(ctx, m)
	require.NoError(t, err)
	for i, x := range roots {
		re, im, err := algebraic(ctx, x, 2)
		require.NoError(t, err)
		require.Equal(t, []string{"-1.4", "-1.4", "1.4", "1.4"}[i], re)
		require.Equal(t, []string{"1.3", "-1.3", "1.3", "-1.3"}[i], im)
	}
}

func TestDecimalsStopsWhenCancelled(t *testing.T) {
	roots, err := algebra.AlgebraicRoots(context.Background(), algebra.PolyFromInts(-2, 0, 0, 1))
	require.NoError(t, err)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, _, err = algebraic(ctx, roots[1], 100)
	require.ErrorIs(t, err, context.Canceled)
}
