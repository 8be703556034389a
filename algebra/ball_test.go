package algebra

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// ballTestRat returns a rational with numerator and denominator of up to the given bits.
func ballTestRat(rng *rand.Rand, bits int) *big.Rat {
	n, d := ballTestInt(rng, bits), ballTestInt(rng, bits)
	d.Abs(d)
	return new(big.Rat).SetFrac(n, d.Add(d, big.NewInt(1)))
}

func ballTestInt(rng *rand.Rand, bits int) *big.Int {
	edges := []int64{0, 1, -1, 1 << 31, -1 << 31, 1 << 62, -1 << 62, math.MaxInt64, math.MinInt64}
	if rng.IntN(4) == 0 {
		return big.NewInt(edges[rng.IntN(len(edges))])
	}
	n := new(big.Int)
	for range 1 + rng.IntN(bits)/60 {
		n.Lsh(n, 60).Add(n, big.NewInt(rng.Int64N(1<<60)))
	}
	if rng.IntN(2) == 0 {
		n.Neg(n)
	}
	return n
}

// ballTestAround returns a ball of the given relative width and points in it.
func ballTestAround(rng *rand.Rand, bits int) (Ball, []*big.Rat) {
	c := ballTestRat(rng, bits)
	r := new(big.Rat).SetFrac(ballTestInt(rng, 40), new(big.Int).Lsh(big.NewInt(1), uint(rng.IntN(200))))
	r.Abs(r)
	if rng.IntN(4) == 0 {
		r.SetInt64(0)
	}
	f := new(big.Float).SetPrec(64).SetMode(big.AwayFromZero).SetRat(r)
	x := BallFromRat(c, uint(20+rng.IntN(200))).AddError(f)
	lo, hi := new(big.Rat).Sub(c, r), new(big.Rat).Add(c, r)
	mid := new(big.Rat).Add(c, new(big.Rat).Mul(r, big.NewRat(1, 3)))
	return x, []*big.Rat{c, lo, hi, mid}
}

func ballTestContains(t *testing.T, what string, x Ball, q *big.Rat) {
	t.Helper()
	if !x.Contains(q) {
		t.Fatalf("%s: [%v +- %v] does not contain %s", what, x.Mid(), x.Rad(), q.FloatString(30))
	}
}

func TestBallArithmeticContainsImages(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	finite := 0
	for range 1200 {
		x, xs := ballTestAround(rng, 150)
		y, ys := ballTestAround(rng, 150)
		prec := uint(1 + rng.IntN(300))
		sum, dif, mul, quo, sqr := x.Add(y, prec), x.Sub(y, prec), x.Mul(y, prec), x.Quo(y, prec), x.Sqr(prec)
		n := ballTestInt(rng, 100)
		tim, uni := x.MulInt(n, prec), x.Union(y, prec)
		if !quo.rad.isInf() {
			finite++
		}
		for _, p := range xs {
			ballTestContains(t, "x", x, p)
			ballTestContains(t, "round", x.Round(prec), p)
			ballTestContains(t, "-x", x.Neg(), new(big.Rat).Neg(p))
			ballTestContains(t, "x^2", sqr, new(big.Rat).Mul(p, p))
			ballTestContains(t, "n x", tim, new(big.Rat).Mul(p, new(big.Rat).SetInt(n)))
			ballTestContains(t, "union", uni, p)
			for _, q := range ys {
				ballTestContains(t, "union", uni, q)
				ballTestContains(t, "x+y", sum, new(big.Rat).Add(p, q))
				ballTestContains(t, "x-y", dif, new(big.Rat).Sub(p, q))
				ballTestContains(t, "x y", mul, new(big.Rat).Mul(p, q))
				if q.Sign() != 0 {
					ballTestContains(t, "x/y", quo, new(big.Rat).Quo(p, q))
				}
				if !x.Overlaps(y) && p.Cmp(q) == 0 {
					t.Fatalf("balls with the common point %v are said to be disjoint", p)
				}
			}
			lo, hi := x.Interval()
			l, _ := lo.Rat(nil)
			h, _ := hi.Rat(nil)
			if l.Cmp(p) > 0 || h.Cmp(p) < 0 {
				t.Fatalf("%v lies outside of [%v, %v]", p, lo, hi)
			}
			if s, certain := x.Sign(); certain && s != p.Sign() {
				t.Fatalf("sign %d of a ball with the point %v", s, p)
			}
			if p.Sign() == 0 && !x.ContainsZero() {
				t.Fatal("ContainsZero is false for a ball around 0")
			}
			if k := x.RelPrec(); k > 0 && k < math.MaxInt {
				bound := new(big.Rat).Abs(p)
				bound.Quo(bound, new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(k))))
				if r, _ := x.Rad().Rat(nil); r.Cmp(bound) > 0 {
					t.Fatalf("RelPrec %d of [%v +- %v] is too large", k, x.Mid(), x.Rad())
				}
			}
		}
	}
	if finite < 500 {
		t.Fatalf("only %d finite quotients", finite)
	}
}

func TestBallRadiiAreTight(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for range 500 {
		p, q := ballTestRat(rng, 100), ballTestRat(rng, 100)
		if p.Sign() == 0 || q.Sign() == 0 {
			continue
		}
		x, y := BallFromRat(p, 128), BallFromRat(q, 128)
		abs := BallFromRat(new(big.Rat).Abs(p), 128)
		for what, z := range map[string]Ball{"x": x, "x y": x.Mul(y, 128), "x/y": x.Quo(y, 128), "sqrt": abs.Sqrt(128)} {
			if z.RelPrec() < 124 {
				t.Fatalf("%s has %d proven bits of 128", what, z.RelPrec())
			}
		}
	}
}

func TestBallExactness(t *testing.T) {
	for _, n := range []int64{0, 1, -1, 3, 1 << 31, -1 << 31, 1 << 62, math.MaxInt64, math.MinInt64} {
		b := big.NewInt(n)
		x := BallFromInt(b)
		if x.RelPrec() != math.MaxInt || !x.Contains(new(big.Rat).SetInt(b)) {
			t.Errorf("BallFromInt(%d) is not exact", n)
		}
		half := BallFromRat(new(big.Rat).SetFrac(b, big.NewInt(8)), 64)
		if half.RelPrec() != math.MaxInt || !half.Contains(new(big.Rat).SetFrac(b, big.NewInt(8))) {
			t.Errorf("BallFromRat(%d/8) is not exact", n)
		}
		if s := x.Sqr(128).Sqrt(64); s.RelPrec() != math.MaxInt || !s.Contains(new(big.Rat).SetInt(new(big.Int).Abs(b))) {
			t.Errorf("sqrt(%d^2) is not exact", n)
		}
		b.Add(b, big.NewInt(7)) // the ball must not share memory
		if !x.Contains(new(big.Rat).SetInt64(n)) {
			t.Errorf("BallFromInt(%d) changed with its argument", n)
		}
	}
	x := BallFromRat(big.NewRat(5, 4), 64)
	x.Mid().SetInt64(9)
	if !x.Contains(big.NewRat(5, 4)) {
		t.Error("Mid does not return a copy")
	}
	if f, _ := BallFromFloat(big.NewFloat(-0.15625)).Mid().Float64(); f != -0.15625 {
		t.Errorf("BallFromFloat(-0.15625) = %v", f)
	}
}

func TestBallKnowsNothing(t *testing.T) {
	zero, one := Ball{}, BallFromInt(big.NewInt(1))
	around := one.AddError(big.NewFloat(1))
	if !around.ContainsZero() {
		t.Error("[0, 2] does not contain 0")
	}
	for what, x := range map[string]Ball{
		"1/0": one.Quo(zero, 64), "0/0": zero.Quo(zero, 64), "1/[0,2]": one.Quo(around, 64), "sqrt(-1)": one.Neg().Sqrt(64),
	} {
		sin, _ := x.SinCos(64)
		for _, y := range []Ball{x, x.Mul(zero, 64), zero.Mul(x, 64), x.Add(one, 64), x.Sub(x, 64), x.Exp(64), x.Sqrt(64),
			x.Quo(one, 64), zero.Quo(x, 64), x.MulInt(big.NewInt(0), 64), sin, x.Union(one, 64)} {
			if s, certain := y.Sign(); certain || s != 0 || !y.ContainsZero() || y.RelPrec() != 0 || !y.Overlaps(one) || !y.Rad().IsInf() {
				t.Errorf("something is certified from %s", what)
			}
			if d, ok := y.Decimal(1); ok {
				t.Errorf("Decimal gives %s from %s", d, what)
			}
		}
	}
}

func TestBallSqrt(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for range 1000 {
		x, xs := ballTestAround(rng, 150)
		r := x.Sqrt(uint(1 + rng.IntN(200)))
		for _, p := range xs {
			if p.Sign() < 0 || r.rad.isInf() {
				continue
			}
			// sqrt(p) in [lo, hi] exactly if lo <= 0 or lo^2 <= p, and hi >= 0 and hi^2 >= p.
			lo, hi := r.Interval()
			l, _ := lo.Rat(nil)
			h, _ := hi.Rat(nil)
			if l.Sign() > 0 && new(big.Rat).Mul(l, l).Cmp(p) > 0 || h.Sign() < 0 || new(big.Rat).Mul(h, h).Cmp(p) < 0 {
				t.Fatalf("sqrt(%v) is not in [%v, %v]", p, lo, hi)
			}
		}
	}
	if d, ok := BallFromInt(big.NewInt(2)).Sqrt(200).Decimal(50); d != "1.4142135623730950488016887242096980785696718753769" || !ok {
		t.Errorf("sqrt 2 = %s, %v", d, ok)
	}
}

func TestBallHugeExponents(t *testing.T) {
	one := BallFromInt(big.NewInt(1))
	tiny := one.MulPow2(-1 << 40)
	if s := one.Add(tiny, 64); s.RelPrec() < 60 || s.RelPrec() == math.MaxInt {
		t.Errorf("1 + 2^-2^40 has %d proven bits", s.RelPrec())
	}
	if s, certain := tiny.Sub(one.MulPow2(-1<<41), 64).Sign(); s != 1 || !certain {
		t.Error("2^-2^40 - 2^-2^41 is not positive")
	}
	if q := tiny.Quo(tiny, 64); !q.Contains(big.NewRat(1, 1)) || q.RelPrec() < 60 {
		t.Error("x/x is not 1")
	}
	wide := tiny.widen(magPow2(0))
	lo, hi := wide.Interval()
	if !wide.ContainsZero() || lo.Cmp(big.NewFloat(-1)) > 0 || hi.Cmp(big.NewFloat(1)) <= 0 || hi.Cmp(big.NewFloat(1.01)) > 0 {
		t.Errorf("2^-2^40 +- 1 is [%v, %v]", lo, hi)
	}
	if u := one.Union(tiny, 64); !u.Contains(big.NewRat(1, 1)) || !u.Contains(big.NewRat(1, 1<<62)) || u.rad.cmp(magPow2(0)) > 0 {
		t.Errorf("union of 1 and 2^-2^40 is %v +- %v", u.Mid(), u.Rad())
	}
	if lo, hi := tiny.Interval(); lo.Sign() != 0 || hi.Sign() <= 0 {
		t.Errorf("2^-2^40 is in [%v, %v]", lo, hi)
	}
	if lo, hi := one.Quo(tiny, 64).Neg().Interval(); !lo.IsInf() || lo.Sign() > 0 || hi.IsInf() || hi.Sign() >= 0 {
		t.Errorf("-2^2^40 is in [%v, %v]", lo, hi)
	}
}

func TestBallMagnitude(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 8))
	random := func() magnitude {
		switch rng.IntN(8) {
		case 0:
			return magnitude{}
		case 1:
			return magnitude{math.MaxUint32, int64(rng.IntN(80) - 40)}
		case 2:
			return magPow2(int64(rng.IntN(80) - 40))
		}
		return magnitude{1<<31 | rng.Uint32(), int64(rng.IntN(80) - 40)}
	}
	rat := func(a magnitude) *big.Rat { return ratFrom(new(big.Int).SetUint64(uint64(a.m)), a.e) }
	// near checks low <= x <= high, and that the bounds differ by little.
	near := func(what string, low, x, high *big.Rat) {
		t.Helper()
		slack := new(big.Rat).Mul(low, big.NewRat(1<<29+1, 1<<29))
		if low.Cmp(x) > 0 || high.Cmp(x) < 0 || low.Sign() > 0 && high.Cmp(slack) > 0 {
			t.Fatalf("%s: %v in [%v, %v]", what, x, low, high)
		}
	}
	for range 8000 {
		a, b := random(), random()
		x, y := rat(a), rat(b)
		near("+", rat(a.addDown(b)), rat(a.addUp(b)), rat(a.addUp(b)))
		if s := new(big.Rat).Add(x, y); s.Cmp(rat(a.addUp(b))) > 0 || s.Cmp(rat(a.addDown(b))) < 0 {
			t.Fatal("sum")
		}
		near("*", rat(a.mulDown(b)), new(big.Rat).Mul(x, y), rat(a.mulUp(b)))
		if !b.isZero() {
			q := new(big.Rat).Quo(x, y)
			near("/", q, q, rat(a.quoUp(b)))
		}
		if d := new(big.Rat).Sub(x, y); d.Sign() > 0 {
			near("-", rat(a.subDown(b)), d, d)
		} else if !a.subDown(b).isZero() {
			t.Fatal("difference below 0")
		}
		if a.cmp(b) != x.Cmp(y) {
			t.Fatal("comparison")
		}
		l, h := rat(a.sqrtDown()), rat(a.sqrtUp())
		near("sqrt", l.Mul(l, l), x, h.Mul(h, h))
	}
}
