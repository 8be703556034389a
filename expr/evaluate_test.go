package expr_test

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"sync"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// value is f(x) to so many digits.
func value(t *testing.T, src, x string, digits int) string {
	t.Helper()
	r, ok := new(big.Rat).SetString(x)
	require.True(t, ok)
	s, err := function(t, src).At(t.Context(), r, digits)
	require.NoError(t, err, "%s at %s", src, x)
	return s
}

func TestAt(t *testing.T) {
	for _, c := range []struct {
		name, src, at string
		digits        int
		want          string
	}{
		// Decimal expansions as in OEIS A001113, A068985, A092605, A049469,
		// A049470, A073742, A073743, from memory.
		{"e", "exp(t)", "1", 40, "2.718281828459045235360287471352662497757"},
		{"1/e", "exp(-t)", "1", 40, "0.3678794411714423215955237701614608674458"},
		{"1/sqrt e", "exp(-t)", "1/2", 40, "0.6065306597126334236037995349911804534419"},
		{"e by a negative time", "exp(-t)", "-1", 40, "2.718281828459045235360287471352662497757"},
		{"sin 1", "sin(t)", "1", 40, "0.8414709848078965066525023216302989996226"},
		{"cos 1", "cos(t)", "1", 40, "0.5403023058681397174009366074429766037323"},
		{"sinh 1", "sinh(t)", "1", 20, "1.1752011936438014569"},
		{"cosh 1", "cosh(t)", "1", 20, "1.5430806348152437785"},
		// The real root of z^3 = z + 1 is the plastic number; the sum of
		// e^(zt) over the roots at 0 counts them.
		{"count of roots", "sumroots(z, z^3 - z - 1, exp(z*t))", "0", 10, "3.000000000"},
		{"rational", "t^2", "3/2", 10, "2.250000000"},
		{"rational, rounded", "t", "2/3", 5, "0.66667"},
		{"rational of many digits", "t^10", "10", 3, "10000000000"},
		{"constant", "7", "1000", 1, "7"},
		{"zero function", "t - t", "5", 30, "0"},
		{"zero at 0", "sin(t)", "0", 30, "0"},
		{"value at 0", "3*cos(t) - exp(-t)/2", "0", 5, "2.5000"},
		{"exact zero of a resonance", "(t-1)*exp(-t)", "1", 40, "0"},
		{"exact zero of a product", "(2*t-3)*(cos(t) + exp(t))", "3/2", 40, "0"},
		{"rational value next to an exact zero", "(t-1)*exp(-t) + t/3", "1", 6, "0.333333"},
		{"zero over named roots", "sumroots(z, z^3 - z - 1, (t-2)*z*exp(z*t))", "2", 40, "0"},
		{"rational value over named roots", "sumroots(z, z^3 - z - 1, (t-2)*z*exp(z*t)) + t", "2", 4, "2.000"},
		{"long decay", "exp(-t)", "1000", 13, "5.075958897549e-435"},
		{"one of two decays survives", "exp(-t) + exp(-2*t)", "1000", 5, "5.0760e-435"},
		{"growth", "exp(t)", "1000", 10, "1.970071114e+434"},
		{"fewer digits than one", "t", "2/3", -3, "0.7"},
		{"ties go away from zero", "t", "1/8", 2, "0.13"},
		{"carry", "t", "9999/10000", 2, "1.0"},
	} {
		t.Run(c.name, func(t *testing.T) { assert.Equal(t, c.want, value(t, c.src, c.at, c.digits)) })
	}
}

// taylor sums the series of e^x, or of e^(ix) in its real and imaginary part,
// in exact rationals: an independent way to 70 digits and more for |x| < 5.
func taylor(x *big.Rat) (exp, cos, sin *big.Rat) {
	exp, cos, sin = new(big.Rat), new(big.Rat), new(big.Rat)
	term := big.NewRat(1, 1)
	for n := range int64(90) {
		exp.Add(exp, term)
		part := cos
		if n%2 == 1 {
			part = sin
		}
		if n%4 < 2 {
			part.Add(part, term)
		} else {
			part.Sub(part, term)
		}
		term = new(big.Rat).Mul(term, x)
		term.Quo(term, big.NewRat(n+1, 1))
	}
	return exp, cos, sin
}

func TestAtTaylor(t *testing.T) {
	g := newGenerator(8)
	for range 60 {
		a, b := big.NewRat(int64(g.Intn(9)-4), int64(1+g.Intn(3))), big.NewRat(int64(g.Intn(9)-4), int64(1+g.Intn(3)))
		c, d := big.NewRat(int64(g.Intn(9)-4), 3), big.NewRat(int64(1+g.Intn(9)), 7)
		n := g.Intn(4)
		x := big.NewRat(int64(g.Intn(41)-20), 19)
		f := function(t, fmt.Sprintf("t^%d*exp((%s)*t)*((%s)*cos((%s)*t) + (%s)*sin((%s)*t)) + 1/3", n, a.RatString(), c.RatString(), b.RatString(), d.RatString(), b.RatString()))
		exp, _, _ := taylor(new(big.Rat).Mul(a, x))
		_, cos, sin := taylor(new(big.Rat).Mul(b, x))
		want := cos.Add(cos.Mul(cos, c), sin.Mul(sin, d))
		want.Mul(want, exp)
		for range n {
			want.Mul(want, x)
		}
		want.Add(want, big.NewRat(1, 3))
		got, err := f.At(t.Context(), x, 40)
		require.NoError(t, err)
		require.Equal(t, algebra.RatDecimal(want, 40), got, "%s at %s", f, x.RatString())
	}
}

// Where nearly everything cancels, the digits are still right.
func TestAtCancellation(t *testing.T) {
	// exp(-t) - 1 + t - t^2/2 = -t^3/6 + t^4/24 - ...
	x := big.NewRat(1, 1000)
	exp, _, _ := taylor(big.NewRat(-1, 1000))
	want := new(big.Rat).Sub(exp, big.NewRat(1, 1))
	want.Add(want, x)
	want.Sub(want, new(big.Rat).Mul(new(big.Rat).Mul(x, x), big.NewRat(1, 2)))
	assert.Equal(t, algebra.RatDecimal(want, 30), value(t, "exp(-t) - 1 + t - t^2/2", "1/1000", 30))

	// sinh(t) - t - t^3/6 at 10^-30 is t^5/120: cancels 120 digits.
	assert.Equal(t, "8.3333333333333333333e-153", value(t, "sinh(t) - t - t^3/6", "1/1000000000000000000000000000000", 20))
}

// A ball holds the value, and shrinks with the precision.
func TestEnclose(t *testing.T) {
	f := function(t, "t*exp(-t) + sumroots(z, z^3 - 2, exp(z*t)) - cos(3*t)")
	x := big.NewRat(7, 5)
	last := 0
	for _, prec := range []uint{64, 128, 512} {
		b, err := f.Enclose(t.Context(), x, prec)
		require.NoError(t, err)
		fine, err := f.Enclose(t.Context(), x, 2*prec)
		require.NoError(t, err)
		assert.True(t, b.Overlaps(fine))
		assert.Greater(t, b.RelPrec(), last)
		last = b.RelPrec()
	}
	assert.Greater(t, last, 450)
	b, err := f.Enclose(t.Context(), new(big.Rat), 64)
	require.NoError(t, err)
	assert.True(t, b.Contains(big.NewRat(2, 1)), "0 + 3 - 1")
}

func TestAtLimits(t *testing.T) {
	f := function(t, "exp(-t)")
	_, err := f.At(t.Context(), big.NewRat(1, 3), 1_000_000_000)
	assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind)
	huge := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(1000), nil))
	start := time.Now()
	_, err = f.At(t.Context(), huge, 10)
	assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind)
	_, err = function(t, "cos(2^20000*t)*exp(2^20000*t)").At(t.Context(), big.NewRat(1, 3), 10)
	assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind)
	assert.Less(t, time.Since(start), 10*time.Second)
}

func TestAtCancelled(t *testing.T) {
	f := function(t, "sumroots(z, z^120 - z - 1, t*exp(z*t))")
	done, cancel := context.WithCancel(t.Context())
	cancel()
	soon, cancelSoon := context.WithTimeout(t.Context(), 30*time.Millisecond)
	defer cancelSoon()
	for _, ctx := range []context.Context{done, soon} {
		start := time.Now()
		_, err := f.At(ctx, big.NewRat(1, 3), 5000)
		assert.Less(t, time.Since(start), 2*time.Second)
		assert.Equal(t, expr.Cancelled, faultOf(t, err).kind)
		assert.True(t, errors.Is(err, ctx.Err()))
		_, err = f.Enclose(ctx, big.NewRat(1, 3), 20000)
		assert.Equal(t, expr.Cancelled, faultOf(t, err).kind)
	}
}

func TestAtConcurrent(t *testing.T) {
	f := function(t, "sumroots(z, z^5 - z - 1, exp(z*t)) + t*exp(-t)")
	want := value(t, f.String(), "1/3", 50)
	var group sync.WaitGroup
	got := make([]string, 8)
	for i := range got {
		group.Go(func() {
			g := f.Derivative().Integral().Add(function(t, "5")) // shares the primes
			got[i], _ = g.At(context.Background(), big.NewRat(1, 3), 50)
		})
	}
	group.Wait()
	for _, s := range got {
		assert.Equal(t, want, s)
	}
}
