package algebratest

import (
	"flag"
	"math/big"
	"math/rand/v2"
	"testing"

	"example.org/closedform/algebra"
)

var seed = flag.Uint64("algebra.seed", 1, "seed of the random values of the law suites")

// Rand returns the source of random values of a test. If the test fails, it
// prints the seed.
func Rand(t testing.TB) *rand.Rand {
	t.Helper()
	t.Cleanup(func() {
		if t.Failed() {
			t.Logf("random values from -algebra.seed=%d", *seed)
		}
	})
	return rand.New(rand.NewPCG(*seed, 0x9E3779B97F4A7C15))
}

// Generator returns a random element of a domain.
type Generator[E any] func(rng *rand.Rand) E

// SmallRats generates fractions of one or two digits, and often 0, 1 and -1.
func SmallRats(rng *rand.Rand) algebra.Rat {
	switch rng.IntN(6) {
	case 0:
		return algebra.Rat{}
	case 1:
		return algebra.RatFromInt(1 - 2*rng.Int64N(2))
	case 2, 3:
		return algebra.RatFromInt(rng.Int64N(19) - 9)
	}
	return algebra.NewRat(rng.Int64N(199)-99, 1+rng.Int64N(12))
}

// Rats generates [SmallRats], fractions at the borders of words and fractions
// of up to 130 bits.
func Rats(rng *rand.Rand) algebra.Rat {
	switch rng.IntN(4) {
	case 0:
		return algebra.RatFromFrac(borderInt(rng), positive(borderInt(rng)))
	case 1:
		return algebra.RatFromFrac(wideInt(rng), positive(wideInt(rng)))
	}
	return SmallRats(rng)
}

// WideRats generates fractions with numerators of exactly the given number of
// bits and denominators of one or two digits.
func WideRats(bits int) Generator[algebra.Rat] {
	return func(rng *rand.Rand) algebra.Rat {
		n := big.NewInt(1)
		for range bits - 1 {
			n.Lsh(n, 1)
			n.SetBit(n, 0, rng.UintN(2))
		}
		return algebra.RatFromFrac(n, big.NewInt(1+rng.Int64N(12)))
	}
}

// borderInt returns one of +-2^k + {-1, 0, 1}.
func borderInt(rng *rand.Rand) *big.Int {
	exps := [...]uint{0, 31, 32, 62, 63, 64}
	n := new(big.Int).Lsh(big.NewInt(1), exps[rng.IntN(len(exps))])
	if rng.IntN(2) == 0 {
		n.Neg(n)
	}
	return n.Add(n, big.NewInt(rng.Int64N(3)-1))
}

func wideInt(rng *rand.Rand) *big.Int {
	n := new(big.Int).SetUint64(rng.Uint64())
	n.Lsh(n, 64)
	n.Add(n, new(big.Int).SetUint64(rng.Uint64()))
	n.Rsh(n, uint(rng.IntN(128)))
	if rng.IntN(2) == 0 {
		n.Neg(n)
	}
	return n
}

func positive(n *big.Int) *big.Int {
	if n.Sign() == 0 {
		return big.NewInt(1)
	}
	return n.Abs(n)
}

// Polys generates polynomials of degree at most maxDegree; the zero polynomial,
// constants and gaps are frequent.
func Polys[E any](r algebra.Ring[E], coef Generator[E], maxDegree int) Generator[algebra.Poly[E]] {
	return func(rng *rand.Rand) algebra.Poly[E] {
		c := make([]E, rng.IntN(maxDegree+2))
		for i := range c {
			c[i] = coef(rng)
		}
		return algebra.NewPoly(r, c...)
	}
}

// Elements generates elements of an extension.
func Elements[E any](x *algebra.Extension[E], coef Generator[E]) Generator[algebra.Poly[E]] {
	r := x.Modulus().Ring()
	return Polys(r, coef, x.Modulus().Degree()-1)
}

// Matrices generates m x n matrices.
func Matrices[E any](r algebra.Ring[E], entry Generator[E], m, n int) Generator[algebra.Matrix[E]] {
	return func(rng *rand.Rand) algebra.Matrix[E] {
		return algebra.MatrixFromFunc(r, m, n, func(int, int) E { return entry(rng) })
	}
}
