package algebra

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

func TestBallWords(t *testing.T) {
	rng := rand.New(rand.NewPCG(71, 72))
	number := func() *big.Int {
		w := fixedTestWords(rng, 1+rng.IntN(2))
		m := new(big.Int)
		for _, v := range w {
			m.Lsh(m, 64).Or(m, new(big.Int).SetUint64(v))
		}
		if rng.IntN(2) == 0 {
			m.Neg(m)
		}
		return m
	}
	// A result must be the exact one cut to prec bits, and own up to the cut.
	check := func(what string, z Ball, exact *big.Int, r magnitude, prec uint) {
		t.Helper()
		plain := ownBall(new(big.Int).Abs(exact), 0, r, prec) // rounds towards 0 as well
		if exact.Sign() < 0 {
			plain = plain.Neg()
		}
		if z.mantissa().Cmp(plain.mantissa()) != 0 || z.man != nil && z.exp != plain.exp || z.rad != plain.rad {
			t.Fatalf("%s: %v 2^%d, want %v 2^%d", what, z.man, z.exp, plain.man, plain.exp)
		}
	}
	for range 50000 {
		m, n := number(), number()
		prec := uint(1 + rng.IntN(128))
		r := magnitude{}
		if rng.IntN(2) == 0 {
			r = magPow2(int64(rng.IntN(250)))
		}
		z, ok := mulInWords(m, n, 0, r, prec)
		if !ok {
			t.Fatalf("%v times %v is too much", m, n)
		}
		check("product", z, new(big.Int).Mul(m, n), r, prec)
		shift := rng.Int64N(128)
		z, ok = addInWords(m, n, shift, 0, r, prec)
		if !ok {
			t.Fatalf("%v and %v are too much", m, n)
		}
		exact := new(big.Int).Lsh(m, uint(shift))
		check("sum", z, exact.Add(exact, n), r, prec)
	}
	long := new(big.Int).Lsh(intOne, 128)
	for _, p := range [][2]*big.Int{{long, intOne}, {intOne, long}} {
		if _, ok := mulInWords(p[0], p[1], 0, magnitude{}, 64); ok {
			t.Error("a product of three words")
		}
		if _, ok := addInWords(p[0], p[1], 0, 0, magnitude{}, 64); ok {
			t.Error("a sum of three words")
		}
	}
	if _, ok := addInWords(intOne, intOne, 128, 0, magnitude{}, 64); ok {
		t.Error("a shift of two words")
	}
}

func BenchmarkBallArithmetic(b *testing.B) {
	x, y := BallFromRat(big.NewRat(22, 7), 128), BallFromRat(big.NewRat(-355, 113), 128)
	b.Run("mul", func(b *testing.B) {
		for b.Loop() {
			x.Mul(y, 128)
		}
	})
	b.Run("add", func(b *testing.B) {
		for b.Loop() {
			x.Add(y, 128)
		}
	})
}
