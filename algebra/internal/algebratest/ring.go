package algebratest

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"example.org/closedform/algebra"
)

// rounds is the number of random operands of a suite.
const rounds = 60

// law reports a law that does not hold, with both sides and the operands.
func law[E any](t *testing.T, r algebra.Ring[E], name string, left, right E, operands ...E) {
	t.Helper()
	if r.Equal(left, right) && r.Equal(right, left) && r.Text(left) == r.Text(right) {
		return
	}
	texts := make([]string, len(operands))
	for i, x := range operands {
		texts[i] = r.Text(x)
	}
	t.Fatalf("%s: %s is not %s for the operands %q", name, r.Text(left), r.Text(right), texts)
}

// related draws three elements, now and then equal or opposite ones.
func related[E any](r algebra.Ring[E], gen Generator[E], rng *rand.Rand) (x, y, z E) {
	x, y, z = gen(rng), gen(rng), gen(rng)
	switch rng.IntN(8) {
	case 0:
		y = x
	case 1:
		y = r.Neg(x)
	case 2:
		z = y
	case 3:
		z = r.Neg(r.Add(x, y))
	case 4:
		y = r.Add(x, r.One())
	}
	return x, y, z
}

// unchanged returns a check that the operands still read as they did.
func unchanged[E any](t *testing.T, r algebra.Ring[E], operands ...E) func() {
	before := make([]string, len(operands))
	for i, x := range operands {
		before[i] = r.Text(x)
	}
	return func() {
		t.Helper()
		for i, x := range operands {
			if now := r.Text(x); now != before[i] {
				t.Fatalf("operand %d was %s and is now %s", i, before[i], now)
			}
		}
	}
}

// TestRing checks the axioms of a commutative ring, that FromInt is a
// homomorphism, that equal elements read the same, and that operations leave
// their operands alone.
func TestRing[E any](t *testing.T, r algebra.Ring[E], gen Generator[E]) {
	t.Helper()
	testIntegers(t, r)
	rng := Rand(t)
	zero, one := r.Zero(), r.One()
	if !r.IsZero(zero) || r.IsZero(one) {
		t.Fatalf("IsZero(0) = %v, IsZero(1) = %v", r.IsZero(zero), r.IsZero(one))
	}
	for range rounds {
		x, y, z := related(r, gen, rng)
		check := unchanged(t, r, x, y, z)
		law(t, r, "x + 0 = x", r.Add(x, zero), x, x)
		law(t, r, "0 + x = x", r.Add(zero, x), x, x)
		law(t, r, "x + y = y + x", r.Add(x, y), r.Add(y, x), x, y)
		law(t, r, "(x + y) + z = x + (y + z)", r.Add(r.Add(x, y), z), r.Add(x, r.Add(y, z)), x, y, z)
		law(t, r, "x + -x = 0", r.Add(x, r.Neg(x)), zero, x)
		law(t, r, "-(-x) = x", r.Neg(r.Neg(x)), x, x)
		law(t, r, "x - y = x + -y", r.Sub(x, y), r.Add(x, r.Neg(y)), x, y)
		law(t, r, "(x + y) - y = x", r.Sub(r.Add(x, y), y), x, x, y)
		law(t, r, "x 1 = x", r.Mul(x, one), x, x)
		law(t, r, "x 0 = 0", r.Mul(x, zero), zero, x)
		law(t, r, "x y = y x", r.Mul(x, y), r.Mul(y, x), x, y)
		law(t, r, "(x y) z = x (y z)", r.Mul(r.Mul(x, y), z), r.Mul(x, r.Mul(y, z)), x, y, z)
		law(t, r, "x (y + z) = x y + x z", r.Mul(x, r.Add(y, z)), r.Add(r.Mul(x, y), r.Mul(x, z)), x, y, z)
		law(t, r, "(-x) y = -(x y)", r.Mul(r.Neg(x), y), r.Neg(r.Mul(x, y)), x, y)
		law(t, r, "2 x = x + x", r.Mul(r.FromInt(2), x), r.Add(x, x), x)
		if r.Equal(x, y) != r.IsZero(r.Sub(x, y)) || r.Equal(x, y) != (r.Text(x) == r.Text(y)) {
			t.Fatalf("Equal(%s, %s) = %v does not agree with difference and text", r.Text(x), r.Text(y), r.Equal(x, y))
		}
		check()
	}
}

func testIntegers[E any](t *testing.T, r algebra.Ring[E]) {
	t.Helper()
	law(t, r, "FromInt(0)", r.FromInt(0), r.Zero())
	law(t, r, "FromInt(1)", r.FromInt(1), r.One())
	law(t, r, "FromInt(-1)", r.FromInt(-1), r.Neg(r.One()))
	small := []int64{0, 1, -1, 2, -3, 1 << 31, -1 << 31, 1<<31 + 1, -1<<31 - 1}
	for _, m := range small {
		for _, n := range small {
			law(t, r, "FromInt of a sum", r.FromInt(m+n), r.Add(r.FromInt(m), r.FromInt(n)))
			law(t, r, "FromInt of a product", r.FromInt(m*n), r.Mul(r.FromInt(m), r.FromInt(n)))
		}
	}
	law(t, r, "FromInt(-2^63)", r.FromInt(math.MinInt64), r.Sub(r.FromInt(-math.MaxInt64), r.One()))
}

// TestField checks the laws of [TestRing] and those of inverses.
func TestField[E any](t *testing.T, f algebra.Field[E], gen Generator[E]) {
	t.Helper()
	TestRing[E](t, f, gen)
	if _, err := f.Inv(f.Zero()); !errors.Is(err, algebra.ErrDivisionByZero) {
		t.Fatalf("the inverse of 0 is refused with %v, want %v", err, algebra.ErrDivisionByZero)
	}
	inv := func(x E) E {
		t.Helper()
		y, err := f.Inv(x)
		if err != nil {
			t.Fatalf("the inverse of %s: %v", f.Text(x), err)
		}
		return y
	}
	rng := Rand(t)
	one := f.One()
	law(t, f, "1/1 = 1", inv(one), one)
	for range rounds / 2 {
		x, y, _ := related[E](f, gen, rng)
		if f.IsZero(x) || f.IsZero(y) {
			continue
		}
		check := unchanged(t, f, x, y)
		law(t, f, "x 1/x = 1", f.Mul(x, inv(x)), one, x)
		law(t, f, "1/(1/x) = x", inv(inv(x)), x, x)
		law(t, f, "1/(x y) = 1/x 1/y", inv(f.Mul(x, y)), f.Mul(inv(x), inv(y)), x, y)
		if f.IsZero(f.Mul(x, y)) {
			t.Fatalf("%s and %s are zero divisors", f.Text(x), f.Text(y))
		}
		check()
	}
}
