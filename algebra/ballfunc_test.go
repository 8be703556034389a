package algebra

import (
	"math"
	"math/big"
	"math/rand/v2"
	"strconv"
	"strings"
	"sync"
	"testing"
)

func TestBallFuncConstants(t *testing.T) {
	one := BallFromInt(big.NewInt(1))
	sin, cos := one.SinCos(250)
	for _, c := range []struct {
		name string
		x    Ball
		want string // OEIS A000796, A001113, A002162, A002392, A049469, A049470; from memory
	}{
		{"pi", Pi(250), "3.1415926535897932384626433832795028841971693993751"},
		{"e", one.Exp(250), "2.7182818284590452353602874713526624977572470937000"},
		{"ln 2", Ln2(250), "0.69314718055994530941723212145817656807550013436026"},
		{"ln 10", Ln10(250), "2.3025850929940456840179914546843642076011014886288"},
		{"sin 1", sin, "0.84147098480789650665250232163029899962256306079837"},
		{"cos 1", cos, "0.54030230586813971740093660744297660373231042061792"},
	} {
		if d, ok := c.x.Decimal(50); !ok || d != c.want {
			t.Errorf("%s = %s, %v, want %s", c.name, d, ok, c.want)
		}
	}
}

func TestBallFuncConstantsByOtherFormulas(t *testing.T) {
	machin := &realConstant{terms: []atanTerm{{16, 5, -1}, {-4, 239, -1}}}
	// ln 2 = 2 artanh(1/3), ln 10 = 3 ln 2 + 2 artanh(1/9).
	ln2 := &realConstant{terms: []atanTerm{{2, 3, 1}}}
	ln10 := &realConstant{terms: []atanTerm{{6, 3, 1}, {2, 9, 1}}}
	for _, prec := range []uint{1, 2, 53, 64, 255, 256, 257, 1000, 4096, 20000} {
		for _, p := range [][2]*realConstant{{&constPi, machin}, {&constLn2, ln2}, {&constLn10, ln10}} {
			x, y := p[0].ball(prec), p[1].ball(prec)
			if !x.Overlaps(y) || x.RelPrec() < int(prec) {
				t.Errorf("constants differ at %d bits, or %d proven bits are too few", prec, x.RelPrec())
			}
		}
	}
	before := Pi(100)
	Pi(5000)
	if after := Pi(100); before.Mid().Cmp(after.Mid()) != 0 || before.Rad().Cmp(after.Rad()) != 0 {
		t.Error("Pi depends on what was asked before")
	}
}

func TestBallFuncPiConcurrent(t *testing.T) {
	constPi.mu.Lock()
	constPi.level = nil
	constPi.mu.Unlock()
	var wg sync.WaitGroup
	got := make([]string, 16)
	for i := range got {
		wg.Go(func() {
			Pi(uint(100 * (i + 4)))
			got[i], _ = Pi(uint(400)).Decimal(100)
		})
	}
	wg.Wait()
	for _, g := range got {
		if g != got[0] || g == "" {
			t.Fatalf("%q and %q", g, got[0])
		}
	}
}

// ballFuncSeries returns rational bounds of e^x (odd 0), or of sin x (odd 1)
// and cos x (odd 2), |x| <= 4, by the first terms of the series.
func ballFuncSeries(x *big.Rat, terms, odd int) (lo, hi *big.Rat) {
	sum, term := new(big.Rat), big.NewRat(1, 1)
	for k := range terms {
		switch {
		case odd == 0, odd == 1 && k%4 == 1, odd == 2 && k%4 == 0:
			sum.Add(sum, term)
		case odd == 1 && k%4 == 3, odd == 2 && k%4 == 2:
			sum.Sub(sum, term)
		}
		term.Mul(term, x).Quo(term, big.NewRat(int64(k+1), 1))
	}
	// The rest is at most 2 |term| if |x| <= (terms+1)/2.
	term.Abs(term).Mul(term, big.NewRat(2, 1))
	return new(big.Rat).Sub(sum, term), new(big.Rat).Add(sum, term)
}

func ballFuncMeets(b Ball, lo, hi *big.Rat) bool {
	l, h := b.Interval()
	bl, _ := l.Rat(nil)
	bh, _ := h.Rat(nil)
	return bl.Cmp(hi) <= 0 && bh.Cmp(lo) >= 0
}

func TestBallFuncAgainstRationalSeries(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 10))
	for i := range 60 {
		x := big.NewRat(rng.Int64N(1<<22)-1<<21, 1<<uint(19+rng.IntN(30)))
		if i < 8 {
			x = []*big.Rat{big.NewRat(1, 1), big.NewRat(-1, 1), big.NewRat(1, 2), big.NewRat(-3, 1), big.NewRat(1, 1<<60),
				big.NewRat(-1, 1<<40), big.NewRat(7, 2), big.NewRat(710, 226)}[i] // 355/113 is close to pi
		}
		prec := uint(1 + rng.IntN(300))
		b := BallFromRat(x, 400)
		e := b.Exp(prec)
		s, c := b.SinCos(prec)
		for odd, f := range []Ball{e, s, c} {
			lo, hi := ballFuncSeries(x, 90, odd)
			if !ballFuncMeets(f, lo, hi) {
				t.Fatalf("function %d of %v at %d bits", odd, x, prec)
			}
			// The error of x is relative 2^-400 and counts for nothing.
			if f.RelPrec() < int(prec)-3 {
				t.Fatalf("function %d of %v at %d bits has %d proven bits", odd, x, prec, f.RelPrec())
			}
		}
	}
}

func TestBallFuncIdentities(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	one := big.NewRat(1, 1)
	for _, prec := range []uint{2, 30, 64, 200, 1000, 4000} {
		for i := range 25 {
			x := BallFromRat(ballTestRat(rng, 60), prec)
			if i%3 == 0 {
				x = x.Round(20).point().MulPow2(int64(rng.IntN(20)))
			}
			if x.man != nil && x.top() > 12 { // Contains writes exponents out
				x = x.MulPow2(12 - x.top())
			}
			p := x.Exp(prec).Mul(x.Neg().Exp(prec), prec)
			ballTestContains(t, "exp(x) exp(-x)", p, one)
			s, c := x.SinCos(prec)
			q := s.Sqr(prec).Add(c.Sqr(prec), prec)
			ballTestContains(t, "sin^2 + cos^2", q, one)
			s2, c2 := x.MulPow2(1).SinCos(prec)
			if !s2.Overlaps(s.Mul(c, prec).MulPow2(1)) || !c2.Overlaps(c.Sqr(prec).Sub(s.Sqr(prec), prec)) {
				t.Fatal("double angle")
			}
			if x.rad.isZero() && (p.RelPrec() < int(prec)-5 || q.RelPrec() < int(prec)-5) {
				t.Fatalf("%d and %d proven bits of %d", p.RelPrec(), q.RelPrec(), prec)
			}
		}
	}
}

func TestBallFuncWideArguments(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	for range 300 {
		mid := big.NewRat(rng.Int64N(1<<30)-1<<29, 1<<26)
		rad := big.NewRat(rng.Int64N(1<<30), 1<<uint(28+rng.IntN(30)))
		f, _ := rad.Float64()
		x := BallFromRat(mid, 64).AddError(big.NewFloat(f))
		e := x.Exp(80)
		s, c := x.SinCos(80)
		for _, k := range []int64{-4, -3, 0, 1, 4} {
			p := new(big.Rat).Add(mid, new(big.Rat).Mul(rad, big.NewRat(k, 4)))
			y := BallFromRat(p, 300)
			ys, yc := y.SinCos(200)
			ye := y.Exp(200)
			if !e.Overlaps(ye) || !s.Overlaps(ys) || !c.Overlaps(yc) {
				t.Fatalf("the image of %v +- %v misses that of %v", mid, rad, p)
			}
		}
	}
}

func TestBallFuncExtremes(t *testing.T) {
	million := BallFromInt(big.NewInt(-1_000_000))
	// e^-10^6 = 10^(-10^6/ln 10): compare the logarithms through 10^-434295 e^(r), independent of Exp's reduction.
	d, ok := million.Exp(128).Decimal(13)
	frac := BallFromInt(big.NewInt(1_000_000)).Quo(Ln10(200), 200) // 434294.48...
	rest := BallFromInt(big.NewInt(434295)).Sub(frac, 200).Mul(Ln10(200), 200).Exp(128)
	want, _ := rest.Decimal(13)
	if !ok || d != want+"e-434295" {
		t.Errorf("e^-10^6 = %s, %v, want %se-434295", d, ok, want)
	}
	d, ok = BallFromInt(big.NewInt(-1000)).Exp(128).Decimal(13)
	if !ok || d != "5.075958897549e-435" {
		t.Errorf("e^-1000 = %s, %v", d, ok)
	}
	huge := BallFromInt(big.NewInt(1)).MulPow2(41)
	if !huge.Exp(64).Rad().IsInf() {
		t.Error("exp(2^41) is finite")
	}
	if x := huge.Neg().Exp(64); !x.ContainsZero() || x.rad.cmp(magPow2(-1000)) > 0 {
		t.Error("exp(-2^41) is not tiny")
	}
	if x := huge.Neg().widen(magPow2(30)).Exp(64); !x.ContainsZero() || x.rad.isInf() {
		t.Error("exp(-2^41 +- 2^30) is not tiny")
	}
	s, c := huge.MulPow2(1 << 30).SinCos(64)
	for _, x := range []Ball{s, c} {
		if lo, hi := x.Interval(); lo.Cmp(big.NewFloat(-1)) != 0 || hi.Cmp(big.NewFloat(1)) != 0 {
			t.Errorf("sine of a huge number in [%v, %v]", lo, hi)
		}
	}
	// 10^22 is exact in binary; the value is a classical test of argument
	// reduction (from memory: W. Kahan, Minimizing q*m-n, 1983).
	s, _ = BallFromFloat(big.NewFloat(1e22)).SinCos(64)
	if d, ok := s.Decimal(16); !ok || d != "-0.8522008497671888" {
		t.Errorf("sin 10^22 = %s", d)
	}
	// The double next to pi: its sine is pi - x to the third order.
	x := BallFromFloat(big.NewFloat(math.Pi))
	s, _ = x.SinCos(100)
	diff := Pi(400).Sub(x, 400)
	if s.RelPrec() < 97 || !s.Overlaps(diff.widen(magPow2(-150))) {
		t.Errorf("sin(float64(pi)) = %v, %d proven bits", s.Mid(), s.RelPrec())
	}
}

func TestBallFuncDecimal(t *testing.T) {
	for _, c := range []struct {
		num, den int64
		digits   int
		want     string
	}{
		{0, 1, 5, "0"}, {1, 1, 1, "1"}, {1, 1, 3, "1.00"}, {-1, 1, 2, "-1.0"}, {5, 2, 1, "3"}, {-5, 2, 1, "-3"}, {7, 2, 1, "4"},
		{249, 100, 1, "2"}, {1, 3, 4, "0.3333"}, {2, 3, 4, "0.6667"}, {999, 1000, 2, "1.0"}, {9995, 10, 3, "1000"}, {12345, 1, 2, "12000"},
		{1, 100000, 3, "0.0000100"}, {1, 1000000, 3, "1.00e-6"}, {99999, 10000000000, 2, "0.000010"}, {-2107984, 10000000000, 7, "-0.0002107984"},
		{1 << 62, 1, 5, "4611700000000000000"}, {1 << 62, 1, 19, "4611686018427387904"}, {1, 1 << 62, 4, "2.168e-19"}, {25, 1, 1, "30"}, {15, 10, 1, "2"},
	} {
		x := big.NewRat(c.num, c.den)
		if got := RatDecimal(x, c.digits); got != c.want {
			t.Errorf("RatDecimal(%v, %d) = %s, want %s", x, c.digits, got, c.want)
		}
		b := BallFromInt(big.NewInt(c.num))
		if c.den&(c.den-1) == 0 { // an exact ball, ties included
			if got, ok := b.Quo(BallFromInt(big.NewInt(c.den)), 200).Decimal(c.digits); !ok || got != c.want {
				t.Errorf("Decimal(%v, %d) = %s, %v, want %s", x, c.digits, got, ok, c.want)
			}
		}
	}
	ten21 := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(21), nil))
	if got := RatDecimal(ten21, 3); got != "1.00e+21" {
		t.Error(got)
	}
	if got := RatDecimal(ten21.Sub(ten21, big.NewRat(1, 1)), 21); got != strings.Repeat("9", 21) {
		t.Error(got)
	}
	tie := BallFromRat(big.NewRat(5, 2), 64).AddError(big.NewFloat(1e-30))
	if got, ok := tie.Decimal(1); ok {
		t.Errorf("an uncertain tie gives %s", got)
	}
	if got, ok := tie.Decimal(3); !ok || got != "2.50" {
		t.Errorf("2.5 +- 10^-30 gives %s, %v", got, ok)
	}
	huge := BallFromInt(big.NewInt(3)).MulPow2(1 << 20)
	if got, ok := huge.widen(magPow2(1<<20 - 40)).Decimal(15); ok {
		t.Errorf("3 2^(2^20) with 40 proven bits gives 15 digits %s", got)
	}
	if got, ok := huge.widen(magPow2(1<<20 - 60)).Decimal(12); !ok || got != RatDecimal(ratFrom(big.NewInt(3), 1<<20), 12) {
		t.Errorf("3 2^(2^20) with 60 proven bits gives %s, %v", got, ok)
	}
	if got, ok := huge.Neg().Decimal(12); !ok || got != RatDecimal(ratFrom(big.NewInt(-3), 1<<20), 12) {
		t.Errorf("-3 2^(2^20) gives %s, %v", got, ok)
	}
	defer func() {
		if recover() == nil {
			t.Error("no panic for 0 digits")
		}
	}()
	RatDecimal(ten21, 0)
}

func TestBallFuncDecimalRounding(t *testing.T) {
	rng := rand.New(rand.NewPCG(15, 16))
	half := big.NewRat(1, 2)
	proven := 0
	for range 2000 {
		x := ballTestRat(rng, 200)
		digits := 1 + rng.IntN(30)
		s := RatDecimal(x, digits)
		if x.Sign() == 0 {
			continue
		}
		y, ok := new(big.Rat).SetString(s)
		if !ok {
			t.Fatal(s)
		}
		// |y - x| is at most half a unit of the last of the digits of y.
		m, e, found := strings.Cut(strconv.Quote(s), "e")
		unit := big.NewRat(1, 1)
		if i := strings.IndexByte(m, '.'); i >= 0 {
			unit.SetFrac64(1, 1)
			for range len(strings.TrimRight(m, `"`)) - i - 1 {
				unit.Quo(unit, big.NewRat(10, 1))
			}
		} else if !found {
			for range len(strings.Trim(m, `"-`)) - digits {
				unit.Mul(unit, big.NewRat(10, 1))
			}
		}
		if found {
			p, _ := new(big.Rat).SetString("1e" + strings.Trim(e, `"`))
			unit.Mul(unit, p)
		}
		d := new(big.Rat).Sub(x, y)
		if d.Abs(d).Cmp(unit.Mul(unit, half)) > 0 {
			t.Fatalf("%v is not the %d-digit decimal nearest to %v", s, digits, x)
		}
		if got, ok := BallFromRat(x, 150).Decimal(digits); ok {
			proven++
			if got != s {
				t.Fatalf("the ball gives %s, the rational %s", got, s)
			}
		}
		// The path for huge exponents must agree with the plain one.
		if digits > 2 {
			continue
		}
		big1 := BallFromRat(x, 150).Mul(pow10(20000, 400), 400)
		if got, ok := big1.Decimal(digits); ok {
			z := new(big.Rat).Mul(x, new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(20000), nil)))
			if want := RatDecimal(z, digits); got != want {
				t.Fatalf("the huge ball gives %s, want %s", got, want)
			}
		}
	}
	if proven < 1500 {
		t.Errorf("only %d decimals were proven", proven)
	}
}

func BenchmarkBallExp(b *testing.B) {
	for _, prec := range []uint{64, 256, 2000} {
		x := BallFromRat(big.NewRat(22, 7), prec)
		b.Run(strconv.Itoa(int(prec)), func(b *testing.B) {
			for b.Loop() {
				x.Exp(prec)
			}
		})
	}
}

func BenchmarkBallSinCos(b *testing.B) {
	for _, prec := range []uint{64, 256, 2000} {
		x := BallFromRat(big.NewRat(22, 7), prec)
		b.Run(strconv.Itoa(int(prec)), func(b *testing.B) {
			for b.Loop() {
				x.SinCos(prec)
			}
		})
	}
}
