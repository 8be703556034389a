package algebra

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

// TestDotContains compares sums of products with exact rationals: the result
// contains the sum of every choice of members, and is about as narrow as one
// rounding allows.
func TestDotContains(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for range 500 {
		n := r.IntN(6)
		a, b := make([]Ball, n), make([]Ball, n)
		ints := make([]*big.Int, n)
		sum, intSum := new(big.Rat), new(big.Rat)
		for i := range a {
			x := big.NewRat(r.Int64N(2001)-1000, 1+r.Int64N(1<<uint(r.IntN(40))))
			y := big.NewRat(r.Int64N(2001)-1000, 1+r.Int64N(1<<uint(r.IntN(40))))
			a[i], b[i] = BallFromRat(x, 60), BallFromRat(y, 70)
			ints[i] = new(big.Int).Lsh(big.NewInt(r.Int64N(2001)-1000), uint(r.IntN(90)))
			sum.Add(sum, new(big.Rat).Mul(x, y))
			intSum.Add(intSum, new(big.Rat).Mul(new(big.Rat).SetInt(ints[i]), y))
		}
		for _, c := range []struct {
			got  Ball
			want *big.Rat
		}{{Dot(a, b, 64), sum}, {dotInts(ints, b, 64), intSum}} {
			if !c.got.Contains(c.want) {
				t.Fatalf("%v +- %v does not contain %v", c.got.Mid(), c.got.Rad(), c.want)
			}
		}
	}
	if !Dot([]Ball{{}}, []Ball{unknown()}, 64).rad.isInf() {
		t.Fatal("0 times anything is known")
	}
}

// TestTaylorAgainstHorner evaluates by powers and by Horner's rule.
func TestTaylorAgainstHorner(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	for range 100 {
		c := make([]Rat, 1+r.IntN(8))
		for i := range c {
			c[i] = NewRat(r.Int64N(2001)-1000, 1+r.Int64N(9))
		}
		p := NewPoly[Rat](Q, c...)
		z := ComplexBall{Re: BallFromRat(big.NewRat(r.Int64N(200)-100, 7), 90)}
		if r.IntN(2) == 0 {
			z.Im = BallFromRat(big.NewRat(r.Int64N(200)-100, 11), 90)
		}
		powers := NewPowers(z, len(c), 90)
		q := p
		fact := RatFromInt(1)
		for j := range len(c) + 1 {
			if j > 0 {
				q = q.Derivative()
				fact = fact.Mul(RatFromInt(int64(j)))
			}
			var want ComplexBall
			for i := q.Degree(); i >= 0; i-- {
				want = want.Mul(z, 90).Add(ComplexBall{Re: BallFromRat(q.Coef(i).Quo(fact).Big(), 90)}, 90)
			}
			if got := Taylor[Rat](Q, p, j, powers); !got.Overlaps(want) || got.Re.RelPrec() < 40 && !got.Re.ContainsZero() {
				t.Fatalf("coefficient %d of %v at %v: %v, want %v", j, p, z.Re.Mid(), got.Re.Mid(), want.Re.Mid())
			}
		}
	}
}
