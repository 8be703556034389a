package algebra

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

// TestDecimalAgainstRationals compares the decimals of exact balls, and of balls
// with a radius, with those of their rational endpoints.
func TestDecimalAgainstRationals(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 32))
	for range 3000 {
		m := new(big.Int).Lsh(big.NewInt(r.Int64N(1<<40)-1<<39), uint(r.IntN(60)))
		m.Add(m, big.NewInt(r.Int64N(3)-1))
		x := Ball{man: m, exp: int64(r.IntN(300) - 200)}
		if m.Sign() == 0 {
			continue
		}
		digits := 1 + r.IntN(40)
		if got, ok := x.Decimal(digits); !ok || got != RatDecimal(ratFrom(m, x.exp), digits) {
			t.Fatalf("%v 2^%d to %d digits: %q, want %q", m, x.exp, digits, got, RatDecimal(ratFrom(m, x.exp), digits))
		}
		x.rad = magPow2(x.exp - int64(r.IntN(80)))
		lo, hi, e := x.endpoints()
		a, b := RatDecimal(ratFrom(lo, e), digits), RatDecimal(ratFrom(hi, e), digits)
		got, ok := x.Decimal(digits)
		if want := a == b && a != "0"; ok != want && !x.ContainsZero() || ok && got != a {
			t.Fatalf("[%v, %v] 2^%d to %d digits: %q %v, want %q and %q", lo, hi, e, digits, got, ok, a, b)
		}
	}
	// Powers of ten, and what rounds up to them.
	for _, n := range []int64{1, 10, 1000, 999, 9999999, 1e15} {
		for digits := 1; digits < 20; digits++ {
			if got, _ := (Ball{man: big.NewInt(n)}).Decimal(digits); got != RatDecimal(big.NewRat(n, 1), digits) {
				t.Fatalf("%d to %d digits: %q", n, digits, got)
			}
		}
	}
}
