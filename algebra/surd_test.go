package algebra_test

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/algebra"
)

// checkSqrtParts requires c^2 m = x with c > 0 and m > 0.
func checkSqrtParts(t *testing.T, x algebra.Rat) (algebra.Rat, *big.Int) {
	t.Helper()
	before := x.String()
	c, m := algebra.SqrtParts(x)
	if got := c.Mul(c).Mul(algebra.RatFromBigInt(m)); !got.Equal(x) || c.Sign() != 1 || m.Sign() != 1 {
		t.Errorf("SqrtParts(%v) = %v, %v, and c^2 m = %v", x, c, m, got)
	}
	if x.String() != before {
		t.Errorf("SqrtParts changed %s to %v", before, x)
	}
	return c, m
}

func TestSqrtPartsOfSmallFractions(t *testing.T) {
	for a := int64(1); a <= 60; a++ {
		for b := int64(1); b <= 40; b++ {
			_, m := checkSqrtParts(t, algebra.NewRat(a, b))
			for p := int64(2); p*p <= m.Int64(); p++ {
				if m.Int64()%(p*p) == 0 {
					t.Fatalf("the radicand %v for %d/%d has the square of %d", m, a, b, p)
				}
			}
		}
	}
}

func TestSqrtPartsNamed(t *testing.T) {
	for _, c := range []struct{ x, c, m string }{
		{"1", "1", "1"}, {"2", "1", "2"}, {"4", "2", "1"}, {"8", "2", "2"}, {"1/2", "1/2", "2"}, {"12/25", "2/5", "3"},
		{"3/4", "1/2", "3"}, {"5/12", "1/6", "15"}, {"720", "12", "5"},
		{"9223372036854775808", "2147483648", "2"},     // 2^63
		{"18446744073709551616", "4294967296", "1"},    // 2^64
		{"1/9223372036854775808", "1/4294967296", "2"}, // 2^-63
		{"4294836225", "65535", "1"},
		{"281273161412879", "65521", "65519"},       // the two largest primes below 2^16, the first squared
		{"4294967291", "1", "4294967291"},           // the largest prime below 2^32
		{"18446744030759878681", "4294967291", "1"}, // its square: beyond trial division
	} {
		got, m := checkSqrtParts(t, q(c.x))
		assert.Equal(t, c.c, got.String(), "c of %s", c.x)
		assert.Equal(t, c.m, m.String(), "m of %s", c.x)
	}
}

// TestSqrtPartsOfALargeSquare: the square of a prime beyond 2^16 is seen when it
// stands alone and may stay in the radicand otherwise.
func TestSqrtPartsOfALargeSquare(t *testing.T) {
	_, m := checkSqrtParts(t, q("36893488061519757362")) // 2 * 4294967291^2
	assert.Contains(t, []string{"2", "36893488061519757362"}, m.String())
}

func TestSqrtPartsOfNoPositiveNumberPanics(t *testing.T) {
	assert.Panics(t, func() { algebra.SqrtParts(algebra.Rat{}) })
	assert.Panics(t, func() { algebra.SqrtParts(q("-1/2")) })
	assert.Panics(t, func() { algebra.SqrtParts(q("-18446744073709551616")) })
}

func TestQuadratic(t *testing.T) {
	for _, c := range []struct{ b, c, h, d string }{
		{"0", "0", "0", "0"}, {"0", "1", "0", "-1"}, {"-3", "2", "3/2", "1/4"}, {"1", "1", "-1/2", "-3/4"},
		{"-2/3", "1/9", "1/3", "0"}, {"4294967296", "0", "-2147483648", "4611686018427387904"},
	} {
		p := algebra.NewPoly(algebra.Q, q(c.c), q(c.b), q("1"))
		h, d := algebra.Quadratic(p)
		assert.Equal(t, [2]string{c.h, c.d}, [2]string{h.String(), d.String()}, p.String())
		// (s - h)^2 - d = p
		square := ints(0, 1).Sub(algebra.Constant(algebra.Q, h)).Pow(2)
		wantPoly(t, "(s - h)^2 - d", square.Sub(algebra.Constant(algebra.Q, d)), p)
	}
	for _, p := range []ratPoly{{}, ints(1, 1), ints(1, 1, 2), ints(1, 1, 1, 1)} {
		assert.Panics(t, func() { algebra.Quadratic(p) }, p.String())
	}
}
