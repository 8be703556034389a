package algebra

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

func TestBallFuncFraction(t *testing.T) {
	rng := rand.New(rand.NewPCG(65, 66))
	value := func(x fraction) *big.Int {
		m := new(big.Int)
		for _, w := range []uint64{x.hi, x.mid, x.lo} {
			m.Lsh(m, 64).Or(m, new(big.Int).SetUint64(w))
		}
		return m
	}
	for range 20000 {
		u, v := fixedTestWords(rng, 3), fixedTestWords(rng, 3)
		x, y := fraction{u[2], u[1], u[0]}, fraction{v[2], v[1], v[0]}
		d := new(big.Int).Mul(value(x), value(y))
		d.Sub(d, new(big.Int).Lsh(value(x.mul(y)), 192))
		if d.Sign() < 0 || d.Cmp(new(big.Int).Lsh(big.NewInt(4), 192)) >= 0 {
			t.Fatalf("%v times %v is not %v", x, y, x.mul(y))
		}
		if x.add(y).sub(y) != x {
			t.Fatalf("%v plus %v minus that is not the first", x, y)
		}
	}
}

// ballFuncClose fails unless fast and plain meet and fast has about prec bits.
func ballFuncClose(t *testing.T, what string, x Ball, prec uint, fast, plain Ball) {
	t.Helper()
	if !fast.Overlaps(plain) || fast.RelPrec() < int(prec)-2 {
		t.Fatalf("%s of %v at %d bits: %v with %d proven bits, plainly %v", what, x.Mid(), prec, fast.Mid(), fast.RelPrec(), plain.Mid())
	}
}

// ballFuncPoints returns exact points below 2^20: random ones, and some at the
// borders of the tables and of the reductions.
func ballFuncPoints(rng *rand.Rand, n int) []Ball {
	points := []Ball{{man: big.NewInt(1)}, {man: big.NewInt(-1)}, {man: big.NewInt(1 << 19)}, {man: big.NewInt(-1 << 19)}}
	for len(points) < n {
		m := new(big.Int)
		for range 1 + rng.IntN(4) {
			m.Lsh(m, 64).Or(m, new(big.Int).SetUint64(rng.Uint64()))
		}
		x := ownBall(m, int64(rng.IntN(40)-20-m.BitLen()), magnitude{}, uint(1+rng.IntN(250))).point()
		near := big.NewInt(rng.Int64N(200) - 100)
		switch rng.IntN(8) {
		case 0:
			x = Ball{man: big.NewInt(rng.Int64N(1<<12) - 1<<11), exp: -6}
		case 1:
			x = Ball{man: big.NewInt(rng.Int64N(1<<12)<<40 - 1), exp: -46}
		case 2:
			x = Ln2(uint(20+rng.IntN(280))).MulInt(near, 400).point()
		case 3:
			x = Pi(uint(20+rng.IntN(280))).MulInt(near, 400).MulPow2(-1).point()
		case 4:
			x = x.Neg()
		}
		if x.mantissa().Sign() != 0 && x.top() <= 20 {
			points = append(points, x)
		}
	}
	return points
}

func TestBallFuncWordsAgainstSeries(t *testing.T) {
	rng := rand.New(rand.NewPCG(61, 62))
	points := ballFuncPoints(rng, 10000)
	words := 0
	for _, x := range points {
		prec := uint(1 + rng.IntN(wordFuncPrec))
		if z, ok := expInWords(x, prec); ok {
			words++
			ballFuncClose(t, "exp", x, prec, z, expSeries(x, 300))
		}
		if sin, cos, ok := sinCosInWords(x, prec); ok {
			words++
			s, c := sinCosSeries(x, 300)
			ballFuncClose(t, "sin", x, prec, sin, s)
			ballFuncClose(t, "cos", x, prec, cos, c)
		}
	}
	if words < 3*len(points)/2 || words == 2*len(points) {
		t.Errorf("%d values in words at %d points", words, len(points))
	}
}

func TestBallFuncWordsErrors(t *testing.T) {
	// The radii claim 10 and 20 units: the midpoints, not rounded, are to be so
	// close, and not so much closer that the units would not be those of the proof.
	rng := rand.New(rand.NewPCG(63, 64))
	worst := 0.0
	unit := func(fast, plain Ball) {
		d, _ := fast.Sub(plain, 64).midUp().float(true).Float64()
		u, _ := fast.rad.float(true).Float64()
		worst = max(worst, d/u)
	}
	for range 3000 {
		x := Ball{man: new(big.Int).SetUint64(rng.Uint64() | 1), exp: -64}
		if z, ok := expInWords(x, 192); ok {
			unit(z, expSeries(x, 320))
		}
		if sin, cos, ok := sinCosInWords(x, wordFuncPrec); ok {
			s, c := sinCosSeries(x, 320)
			unit(sin, s)
			unit(cos, c)
		}
	}
	if worst > 1 || worst < 1.0/64 {
		t.Errorf("errors are up to %v of the radii", worst)
	}
}
