package algebra

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"sync"
	"testing"
	"time"
)

type rootsCoef = func(ctx context.Context, prec uint) ([]Ball, error)

// rootsMapped gives f of the coefficients in c.
func rootsMapped(c []*big.Int, f func(i int, x *big.Int, prec uint) Ball) rootsCoef {
	return func(_ context.Context, prec uint) ([]Ball, error) {
		b := make([]Ball, len(c))
		for i, x := range c {
			b[i] = f(i, x, prec)
		}
		return b, nil
	}
}

// rootsBallWays gives the coefficients in c, or multiples with the same roots,
// as balls of several kinds.
func rootsBallWays(c []*big.Int) map[string]rootsCoef {
	return map[string]rootsCoef{
		"exact": rootsMapped(c, func(_ int, x *big.Int, _ uint) Ball { return BallFromInt(x) }),
		"pi":    rootsMapped(c, func(_ int, x *big.Int, prec uint) Ball { return Pi(prec).MulInt(x, prec) }),
		"third": rootsMapped(c, func(_ int, x *big.Int, prec uint) Ball {
			return BallFromRat(new(big.Rat).SetFrac(x, big.NewInt(-3)), prec)
		}),
		// The number in any place of the ball, zeros but those at the end unknown.
		"fuzzy": rootsMapped(c, func(i int, x *big.Int, prec uint) Ball {
			if i == 0 && x.Sign() == 0 {
				return Ball{}
			}
			rng := rand.New(rand.NewPCG(uint64(i), uint64(prec)))
			rad := intMagUp(x, -int64(prec)).addUp(magPow2(-int64(prec)))
			off := Ball{man: big.NewInt(rng.Int64N(1<<30) - 1<<29), exp: rad.e + 2}
			return BallFromInt(x).Add(off, 2*prec+uint(x.BitLen())).widen(rad)
		}),
	}
}

func rootsOf(t *testing.T, n int, coef rootsCoef) *RootSet {
	t.Helper()
	r, err := NewRootSetOf(context.Background(), n, coef)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func rootsEnclose(t *testing.T, r *RootSet, i int, prec uint) ComplexBall {
	t.Helper()
	z, err := r.Enclose(context.Background(), i, prec)
	if err != nil {
		t.Fatal(err)
	}
	return z
}

func TestRootSetOfIntegers(t *testing.T) {
	rng := rand.New(rand.NewPCG(61, 62))
	two60 := new(big.Int).Lsh(intOne, 60)
	cases := map[string][]*big.Int{
		"linear":      rootsInts(-3, 7),
		"s":           rootsInts(0, 1),
		"s^2-2":       rootsInts(-2, 0, 1),
		"s^2+1":       rootsInts(1, 0, 1),
		"s^3-s":       rootsInts(0, -1, 0, 1),
		"s(s^2+2)":    rootsInts(0, 2, 0, 1),
		"s^16+1":      rootsBinomial(1, 16, 1),
		"s^24-2":      rootsBinomial(1, 24, -2),
		"all real":    rootsTridiagonal(12),
		"no real":     rootsProduct(rootsInts(1, 1, 1), rootsInts(5, 2, 1), rootsInts(3, -1, 2)),
		"imaginary":   rootsProduct(rootsInts(1, 0, 1), rootsInts(2, 0, 1), rootsInts(1000003, 0, 1)),
		"same Re":     rootsProduct(rootsInts(10, 2, 1), rootsInts(2, 2, 1), rootsInts(5, 2, 1), rootsInts(1, 1)),
		"Wilkinson":   rootsWilkinson(10),
		"Wilkinson 2": rootsWilkinson(20),
		"Mignotte":    rootsMignotte(20, 10),
		"Mignotte 2":  rootsMignotte(9, 1000000),
		"2^62":        rootsInts(1<<62, 1, -1<<63, 1<<31, 1),
		"1000 bits":   rootsRandom(rng, 8, 1000),
		"scaled":      rootsProduct([]*big.Int{big.NewInt(-1), rootsPow10(30)}, rootsInts(-1, 1), []*big.Int{new(big.Int).Neg(rootsPow10(30)), big.NewInt(1)}),
		"scaled 2":    rootsProduct([]*big.Int{big.NewInt(1), big.NewInt(0), rootsPow10(300)}, rootsInts(-2, 0, 0, 1), []*big.Int{rootsPow10(200), big.NewInt(0), big.NewInt(-1)}),
		"four close":  {new(big.Int).Sub(new(big.Int).Lsh(two60, 2), intOne), new(big.Int), new(big.Int).Lsh(two60, 2), new(big.Int), two60},
		"two close":   {new(big.Int).Sub(new(big.Int).Lsh(two60, 2), intOne), new(big.Int), new(big.Int).Neg(new(big.Int).Lsh(two60, 2)), new(big.Int), two60},
		"close":       rootsProduct([]*big.Int{new(big.Int).Neg(rootsPow10(80)), rootsPow10(80)}, []*big.Int{new(big.Int).Add(rootsPow10(80), intOne), new(big.Int).Neg(rootsPow10(80))}, rootsInts(1, 0, 1)),
		"cube":        rootsPerturbed(rootsProduct(rootsInts(-2, 0, 0, 1), rootsInts(-2, 0, 0, 1), rootsInts(-2, 0, 0, 1)), 100, 0),
		"near axis":   rootsProduct([]*big.Int{new(big.Int).Add(rootsPow10(60), intOne), new(big.Int).Mul(big.NewInt(-2), rootsPow10(60)), rootsPow10(60)}, rootsInts(-3, 1)),
	}
	for i := range 15 {
		cases[fmt.Sprint("random ", i)] = rootsRandom(rng, 1+rng.IntN(9), 50)
	}
	for name, c := range cases {
		want, err := NewRootSet(context.Background(), c)
		if err != nil {
			t.Fatal(err)
		}
		for way, coef := range rootsBallWays(c) {
			t.Run(name+" "+way, func(t *testing.T) {
				r := rootsOf(t, len(c)-1, coef)
				rootsCheck(t, c, r, 64)
				rootsCheck(t, c, r, 300)
				for i := range r.Len() {
					if a, b := rootsEnclose(t, r, i, 300), rootsEnclose(t, want, i, 300); !a.Overlaps(b) {
						t.Errorf("root %d is %v + %vi, want %v + %vi", i, a.Re.Mid(), a.Im.Mid(), b.Re.Mid(), b.Im.Mid())
					}
				}
			})
		}
	}
}

// rootsNumbers gives pi, e and sqrt 2 and what can be made of them by f.
func rootsNumbers(f func(pi, e, sqrt2 Ball, prec uint) []Ball) rootsCoef {
	return func(_ context.Context, prec uint) ([]Ball, error) {
		p := prec + 8
		return f(Pi(p), BallFromInt(intOne).Exp(p), BallFromInt(big.NewInt(2)).Sqrt(p), p), nil
	}
}

var rootsTranscendental = map[string]rootsCoef{
	"pi s + e":             rootsNumbers(func(pi, e, _ Ball, _ uint) []Ball { return []Ball{e, pi} }),
	"e s^2 - pi":           rootsNumbers(func(pi, e, _ Ball, _ uint) []Ball { return []Ball{pi.Neg(), {}, e} }),
	"e s^2 + sqrt2 s + pi": rootsNumbers(func(pi, e, w Ball, _ uint) []Ball { return []Ball{pi, w, e} }),
	"s^2 - 2 pi s + pi^2 - 2^-90": rootsNumbers(func(pi, _, _ Ball, p uint) []Ball {
		return []Ball{pi.Sqr(p).Sub(BallFromInt(intOne).MulPow2(-90), p), pi.MulPow2(1).Neg(), BallFromInt(intOne)}
	}),
	"s^2 - 2 pi s + pi^2 + 2^-90": rootsNumbers(func(pi, _, _ Ball, p uint) []Ball {
		return []Ball{pi.Sqr(p).Add(BallFromInt(intOne).MulPow2(-90), p), pi.MulPow2(1).Neg(), BallFromInt(intOne)}
	}),
	"degree 5": rootsNumbers(func(pi, e, w Ball, _ uint) []Ball { return []Ball{pi, e.Neg(), w, {}, e, w.Neg()} }),
	"degree 9": rootsNumbers(func(pi, e, w Ball, _ uint) []Ball {
		return []Ball{e, pi.Neg(), w, w, pi, BallFromInt(intOne), e.Neg(), w, pi, w.Neg()}
	}),
	"sizes": rootsNumbers(func(pi, e, w Ball, _ uint) []Ball {
		return []Ball{e.MulPow2(-400), pi.Neg(), w.MulPow2(300), e.MulPow2(-200)}
	}),
}

func TestRootSetOfTranscendental(t *testing.T) {
	for name, coef := range rootsTranscendental {
		for _, prec := range []uint{64, 500, 3400} {
			want, _ := coef(context.Background(), 2*prec)
			n := len(want) - 1
			r := rootsOf(t, n, coef)
			// Vieta: a_n times the product of all s - z_i has the coefficients.
			p := []ComplexBall{{Re: want[n]}}
			for i := range n {
				z := rootsEnclose(t, r, i, prec)
				bound := z.absUp().mulPow2(-int64(prec))
				if z.Re.rad.cmp(bound) > 0 || z.Im.rad.cmp(bound) > 0 {
					t.Errorf("%s: root %d has radii %v, %v", name, i, z.Re.Rad(), z.Im.Rad())
				}
				if real := i < r.NumReal(); real != z.Im.isZero() || real != (r.Conjugate(i) == i) {
					t.Errorf("%s: root %d is real or not", name, i)
				}
				q := make([]ComplexBall, len(p)+1)
				for k, x := range p {
					q[k+1] = q[k+1].Add(x, 2*prec)
					q[k] = q[k].Sub(x.Mul(z, 2*prec), 2*prec)
				}
				p = q
			}
			for k, x := range p {
				if !x.Overlaps(ComplexBall{Re: want[k]}) {
					t.Errorf("%s: coefficient %d is %v, want %v", name, k, x.Re.Mid(), want[k].Mid())
				}
			}
			if k := p[0].Re.RelPrec(); k < int(prec)-20 {
				t.Errorf("%s: the product of the roots has %d proven bits of %d", name, k, prec)
			}
		}
	}
}

func TestRootSetOfKnownRoots(t *testing.T) {
	sqrt := func(n int64) func(uint) Ball {
		return func(prec uint) Ball { return BallFromInt(big.NewInt(n)).Sqrt(prec) }
	}
	// (s - sqrt 2)(s - sqrt 3)(s - pi)((s + pi)^2 + 2)((s + pi)^2 + 3): two pairs with
	// the same real part, which only their imaginary parts put in order.
	coef := func(_ context.Context, prec uint) ([]Ball, error) {
		p, q := prec+20, []Ball{BallFromInt(intOne)}
		mul := func(f ...Ball) {
			r := make([]Ball, len(q)+len(f)-1)
			for i, x := range q {
				for j, y := range f {
					r[i+j] = r[i+j].Add(x.Mul(y, p), p)
				}
			}
			q = r
		}
		one := BallFromInt(intOne)
		mul(sqrt(2)(p).Neg(), one)
		mul(sqrt(3)(p).Neg(), one)
		mul(Pi(p).Neg(), one)
		mul(Pi(p).Sqr(p).Add(BallFromInt(big.NewInt(3)), p), Pi(p).MulPow2(1), one)
		mul(Pi(p).Sqr(p).Add(BallFromInt(big.NewInt(2)), p), Pi(p).MulPow2(1), one)
		return q, nil
	}
	r := rootsOf(t, 7, coef)
	if r.NumReal() != 3 {
		t.Fatalf("%d real roots", r.NumReal())
	}
	for _, prec := range []uint{30, 100, 1000} {
		m := Pi(2 * prec).Neg()
		for i, want := range []ComplexBall{
			{Re: sqrt(2)(2 * prec)}, {Re: sqrt(3)(2 * prec)}, {Re: Pi(2 * prec)},
			{m, sqrt(2)(2 * prec)}, {m, sqrt(2)(2 * prec).Neg()}, {m, sqrt(3)(2 * prec)}, {m, sqrt(3)(2 * prec).Neg()},
		} {
			if z := rootsEnclose(t, r, i, prec); !z.Overlaps(want) {
				t.Errorf("root %d is %v + %vi", i, z.Re.Mid(), z.Im.Mid())
			}
		}
	}
}

func TestRootSetOfThousandDigits(t *testing.T) {
	// pi s^2 - 2 pi has the root sqrt 2.
	r := rootsOf(t, 2, rootsBallWays(rootsInts(-2, 0, 1))["pi"])
	got, ok := rootsEnclose(t, r, 1, 3400).Re.Decimal(1001)
	want := new(big.Int).Sqrt(new(big.Int).Mul(big.NewInt(2), rootsPow10(2000))).String()
	if !ok || strings.Replace(got, ".", "", 1)[:1000] != want[:1000] {
		t.Errorf("sqrt 2 = %s", got)
	}
	c := rootsWilkinson(10)
	rootsCheck(t, c, rootsOf(t, 10, rootsBallWays(c)["pi"]), 3400)
}

func TestRootSetOfSmallAndHugeNumbers(t *testing.T) {
	// e^-20000 s^2 - pi e^20000 has the roots +-sqrt(pi) e^20000.
	coef := func(_ context.Context, prec uint) ([]Ball, error) {
		x := BallFromInt(big.NewInt(20000)).Exp(prec)
		return []Ball{Pi(prec).Mul(x, prec).Neg(), {}, BallFromInt(intOne).Quo(x, prec)}, nil
	}
	r := rootsOf(t, 2, coef)
	want := Pi(200).Sqrt(200).Mul(BallFromInt(big.NewInt(20000)).Exp(200), 200)
	if z := rootsEnclose(t, r, 1, 150); r.NumReal() != 2 || !z.Re.Overlaps(want) || z.Re.RelPrec() < 149 {
		t.Errorf("root %v", z.Re.Mid())
	}
}

func TestRootSetOfIsDeterministic(t *testing.T) {
	ctx := context.Background()
	same := func(x, y Ball) bool { return x.Mid().Cmp(y.Mid()) == 0 && x.rad == y.rad }
	coef := rootsTranscendental["degree 9"]
	precs := []uint{10, 2000, 64, 65, 200, 64, 1000, 130, 135}
	fresh := make([][]ComplexBall, len(precs))
	for k, prec := range precs {
		r := rootsOf(t, 9, coef)
		for i := range r.Len() {
			fresh[k] = append(fresh[k], rootsEnclose(t, r, i, prec))
		}
	}
	shared := rootsOf(t, 9, coef)
	var wg sync.WaitGroup
	for range 3 {
		for k, prec := range precs {
			wg.Go(func() {
				for i := range shared.Len() {
					z, err := shared.Enclose(ctx, i, prec)
					if w := fresh[k][i]; err != nil || !same(z.Re, w.Re) || !same(z.Im, w.Im) {
						t.Errorf("root %d at %d bits depends on what was asked before (%v)", i, prec, err)
					}
				}
			})
		}
	}
	wg.Wait()
}

func TestRootSetOfRejects(t *testing.T) {
	ctx := context.Background()
	one := BallFromInt(intOne)
	fixed := func(b ...Ball) rootsCoef {
		return func(context.Context, uint) ([]Ball, error) { return b, nil }
	}
	failure := errors.New("no more digits")
	zero := func(prec uint) Ball { return Ball{rad: magPow2(-int64(prec))} }
	for name, c := range map[string]struct {
		n    int
		coef rootsCoef
		want error // nil for any
	}{
		"degree 0":     {0, fixed(one), nil},
		"few":          {2, fixed(one, one), nil},
		"many":         {2, fixed(one, one, one, one), nil},
		"lead 0":       {2, fixed(one, one, Ball{}), nil},
		"all 0":        {1, fixed(Ball{}, Ball{}), nil},
		"s^2":          {2, fixed(Ball{}, Ball{}, one), ErrNotSquareFree},
		"(s-1)^2":      {2, fixed(one, one.MulPow2(1).Neg(), one), ErrNotSquareFree},
		"sizes":        {1, fixed(one, one.MulPow2(1<<40)), nil},
		"unknown":      {2, fixed(one, unknown(), one), ErrRootsTooClose},
		"vague":        {2, fixed(one, one.widen(magPow2(2)), one), ErrRootsTooClose},
		"pi^2 (s-1)^2": {2, rootsBallWays(rootsInts(1, -2, 1))["fuzzy"], ErrRootsTooClose},
		"(w s - 1)^2": {2, func(_ context.Context, prec uint) ([]Ball, error) {
			w := BallFromInt(big.NewInt(2)).Sqrt(prec)
			return []Ball{one, w.MulPow2(1).Neg(), w.Sqr(prec)}, nil
		}, ErrRootsTooClose},
		"(s^2 + w)^2": {4, func(_ context.Context, prec uint) ([]Ball, error) {
			w := BallFromInt(big.NewInt(2)).Sqrt(prec)
			return []Ball{w.Sqr(prec), {}, w.MulPow2(1), {}, one}, nil
		}, ErrRootsTooClose},
		"(s-1)^2, about": {2, func(_ context.Context, prec uint) ([]Ball, error) {
			return []Ball{one.widen(magPow2(-int64(prec))), one.MulPow2(1).Neg(), one}, nil
		}, ErrRootsTooClose},
		"unknown 0": {2, func(_ context.Context, prec uint) ([]Ball, error) {
			return []Ball{zero(prec), one, one}, nil
		}, ErrRootsTooClose},
		"unknown lead": {2, func(_ context.Context, prec uint) ([]Ball, error) {
			return []Ball{one, one, zero(prec)}, nil
		}, ErrRootsTooClose},
		"failure": {2, func(_ context.Context, prec uint) ([]Ball, error) {
			return nil, failure
		}, failure},
	} {
		r, err := NewRootSetOf(ctx, c.n, c.coef)
		if err == nil || r != nil || c.want != nil && !errors.Is(err, c.want) {
			t.Errorf("%s: error %v", name, err)
		}
	}

	// Coefficients that fail, or stop to be known better, after the isolation.
	for _, late := range []rootsCoef{
		func(context.Context, uint) ([]Ball, error) { return nil, failure },
		func(context.Context, uint) ([]Ball, error) { return []Ball{Pi(300).Neg(), {}, one}, nil },
	} {
		r := rootsOf(t, 2, func(ctx context.Context, prec uint) ([]Ball, error) {
			if prec > 256 {
				return late(ctx, prec)
			}
			return []Ball{Pi(prec).Neg(), {}, one}, nil
		})
		if _, err := r.Enclose(ctx, 0, 2000); err == nil {
			t.Error("digits that nobody knows")
		}
		if z := rootsEnclose(t, r, 1, 100); !z.Re.Sqr(200).Overlaps(Pi(200)) {
			t.Errorf("after a failure: %v", z.Re.Mid())
		}
	}
}

func TestRootSetOfUnknownZeros(t *testing.T) {
	// A 0 in the middle whose ball has a radius of 2^-prec, or much more.
	for _, loss := range []int64{0, 40, -40} {
		r := rootsOf(t, 4, func(_ context.Context, prec uint) ([]Ball, error) {
			return []Ball{Pi(prec).Neg(), {}, {rad: magPow2(loss - int64(prec))}, {}, BallFromInt(intOne)}, nil
		})
		if z := rootsEnclose(t, r, 1, 400); r.NumReal() != 2 || !z.Re.Sqr(500).Sqr(500).Overlaps(Pi(500)) || z.Re.RelPrec() < 399 {
			t.Errorf("root %v", z.Re.Mid())
		}
	}
}

func TestRootsBallValues(t *testing.T) {
	// The coefficients k+1 + 2^-300, the last term hidden in the radius.
	tiny := BallFromInt(intOne).MulPow2(-300)
	s := &ballSource{degree: 3, coef: func(context.Context, uint) ([]Ball, error) {
		b := make([]Ball, 4)
		for k := range b {
			b[k] = BallFromInt(big.NewInt(int64(k + 1))).widen(magPow2(-300))
		}
		return b, nil
	}}
	one := BallFromInt(intOne)
	for _, z := range []ComplexBall{{Re: one}, {Re: one.MulPow2(-1).Neg()}, {one.MulPow2(2), one}} {
		var p, dp ComplexBall // exact
		for k := 3; k >= 0; k-- {
			dp = dp.Mul(z, 2000).Add(p, 2000)
			p = p.Mul(z, 2000).Add(ComplexBall{Re: BallFromInt(big.NewInt(int64(k+1))).Add(tiny, 2000)}, 2000)
		}
		for slope, want := range map[bool]ComplexBall{false: p, true: dp} {
			v, err := s.value(context.Background(), z, 250, slope)
			if err != nil || !v.Overlaps(want) || v.Re.RelPrec() < 200 || v.isReal() != z.isReal() {
				t.Errorf("slope %v: %v + %vi is not within %v, %v", slope, want.Re.Mid(), want.Im.Mid(), v.Re.Rad(), err)
			}
		}
	}
	if _, err := s.value(context.Background(), ComplexBall{Re: one}, 400, false); err == nil {
		t.Error("400 bits of a number known to 300")
	}
}

func TestRootSetOfMidpointsWithDoubleRoot(t *testing.T) {
	// s (s-1)^2 - 2^-200 s and s ((s-1)^2 + 2^-200): below 200 bits the midpoints
	// are those of s (s-1)^2.
	for _, sign := range []int64{1, -1} {
		tiny := Ball{man: big.NewInt(-sign), exp: -200}
		one := BallFromInt(intOne)
		r := rootsOf(t, 3, func(_ context.Context, prec uint) ([]Ball, error) {
			return []Ball{{}, one.Add(tiny, prec), one.MulPow2(1).Neg(), one}, nil
		})
		if want := map[int64]int{1: 3, -1: 1}[sign]; r.NumReal() != want {
			t.Fatalf("%d real roots, want %d", r.NumReal(), want)
		}
		if z := rootsEnclose(t, r, 0, 100); !z.Re.isZero() || !z.Im.isZero() {
			t.Errorf("the root 0 is %v", z.Re.Mid())
		}
		for i := 1; i < 3; i++ {
			d := rootsEnclose(t, r, i, 300).Sub(ComplexBall{Re: one}, 300)
			if sq := d.Sqr(300).Add(ComplexBall{Re: tiny}, 300); !sq.ContainsZero() || sq.absUp().cmp(magPow2(-300)) > 0 {
				t.Errorf("root %d is 1 + %v + %vi", i, d.Re.Mid(), d.Im.Mid())
			}
		}
	}
}

func TestRootsBallCertifyRoughPoints(t *testing.T) {
	// The roots are known: 1 ... a and k +- i for k = 1 ... b, and the points near
	// them. The coefficients are off by as much as they say.
	rng := rand.New(rand.NewPCG(65, 66))
	certified := 0
	const tries, unit = 600, 60
	for range tries {
		c := rootsWilkinson(1 + rng.Int64N(4))
		reals := len(c) - 1
		var exact []complexBallPoint // with the lower ones at the end
		for k := range reals {
			exact = append(exact, complexBallPoint{big.NewRat(int64(k+1), 1), new(big.Rat)})
		}
		pairs := rng.Int64N(3)
		for _, im := range []int64{1, -1} {
			for k := range pairs {
				exact = append(exact, complexBallPoint{big.NewRat(k+1, 1), big.NewRat(im, 1)})
			}
		}
		for k := range pairs {
			c = rootsMul(c, rootsInts((k+1)*(k+1)+1, -2*(k+1), 1))
		}
		p := ballPoly{c: c, err: make([]magnitude, len(c)), exp: -unit}
		size := 10 + rng.IntN(unit-10)
		for i, x := range c {
			off := rng.Int64N(1 << size)
			p.err[i] = magUp(uint64(off), 0)
			if rng.IntN(2) == 0 {
				off = -off
			}
			c[i] = x.Lsh(x, unit).Add(x, big.NewInt(off))
		}
		scale := int64(1) << (6 + rng.IntN(25)) // at times too far for a certificate
		off := func(x *big.Rat) Ball {
			return BallFromRat(new(big.Rat).Add(x, big.NewRat(rng.Int64N(1<<20)-1<<19, scale<<20)), 80).point()
		}
		z := make([]ComplexBall, reals+int(pairs))
		for i := range z {
			z[i].Re = off(exact[i].re)
			if i >= reals {
				z[i].Im = off(exact[i].im)
			}
		}
		discs, gaps, err := p.certify(context.Background(), z, reals, 64)
		if err != nil {
			t.Fatal(err)
		}
		if discs == nil {
			continue
		}
		certified++
		for i, d := range discs {
			if magUp(64*uint64(len(c)-1), 0).mulDown(d.rad).cmp(gaps[i]) > 0 {
				t.Fatalf("disc of radius %v with gap %v", d.rad.float(true), gaps[i].float(true))
			}
			for k, e := range exact {
				dist := d.at.Sub(ComplexBall{BallFromRat(e.re, 80), BallFromRat(e.im, 80)}, 100)
				if i == k && dist.absDown().cmp(d.rad) > 0 {
					t.Fatalf("disc %d of radius %v does not contain the root at %v", i, d.rad.float(true), dist.absDown().float(false))
				}
				if i != k && dist.absUp().cmp(gaps[i]) < 0 {
					t.Fatalf("a root lies in the gap around disc %d", i)
				}
			}
		}
	}
	if certified < 100 || certified == tries {
		t.Errorf("%d of %d point sets certified", certified, tries)
	}
}

func TestRootSetOfCancel(t *testing.T) {
	done, cancel := context.WithCancel(context.Background())
	cancel()
	coef := rootsTranscendental["degree 5"]
	if _, err := NewRootSetOf(done, 5, coef); !errors.Is(err, context.Canceled) {
		t.Errorf("NewRootSetOf: %v", err)
	}
	r := rootsOf(t, 5, coef)
	if _, err := r.Enclose(done, 0, 100); !errors.Is(err, context.Canceled) {
		t.Errorf("Enclose: %v", err)
	}
	within := func(what string, f func(ctx context.Context) error) {
		soon, cancel := context.WithTimeout(context.Background(), 30*time.Millisecond)
		defer cancel()
		start := time.Now()
		if err := f(soon); !errors.Is(err, context.DeadlineExceeded) {
			t.Errorf("%s: %v", what, err)
		}
		if d := time.Since(start); d > 5*time.Second { // 100 ms, with room for a busy machine and the race detector
			t.Errorf("%s: cancelled after %v", what, d)
		}
	}
	within("many roots", func(ctx context.Context) error {
		_, err := NewRootSetOf(ctx, 150, rootsBallWays(rootsTridiagonal(150))["pi"])
		return err
	})
	within("a double root", func(ctx context.Context) error {
		_, err := NewRootSetOf(ctx, 12, rootsBallWays(rootsProduct(rootsWilkinson(6), rootsWilkinson(6)))["fuzzy"])
		return err
	})
	within("a long resultant", func(ctx context.Context) error {
		b, _ := rootsBallWays(rootsWilkinson(12))["third"](ctx, maxRootBits)
		p, err := newBallPoly(b)
		if err == nil {
			_, err = p.squareFree(ctx, maxRootBits)
		}
		return err
	})
	slow := rootsOf(t, 10, rootsBallWays(rootsMignotte(10, 10))["third"])
	within("digits", func(ctx context.Context) error {
		_, err := slow.Enclose(ctx, 0, 2_000_000)
		return err
	})
	if z := rootsEnclose(t, r, 0, 200); z.Re.RelPrec() < 199 {
		t.Error("too few bits after a cancelled call")
	}
}

func TestRootsBallSquareFree(t *testing.T) {
	rng := rand.New(rand.NewPCG(63, 64))
	ctx := context.Background()
	for range 60 {
		c := rootsRandom(rng, 1+rng.IntN(8), 50)
		square := rng.IntN(2) == 0
		if square {
			f := rootsRandom(rng, 1+rng.IntN(3), 50)
			c = rootsProduct(c, f, f)
		}
		for way, coef := range rootsBallWays(c) {
			b, _ := coef(ctx, 2000)
			p, err := newBallPoly(b)
			if err != nil {
				t.Fatal(err)
			}
			ok, err := p.squareFree(ctx, 2000)
			if err != nil || ok == square {
				t.Errorf("%s, a multiple root %v: square-free %v, %v", way, square, ok, err)
			}
		}
	}
}

// The roots of s^3 - pi s + 1, whose coefficients are known to any precision.
func ExampleNewRootSetOf() {
	ctx := context.Background()
	one := BallFromInt(big.NewInt(1))
	coef := func(_ context.Context, prec uint) ([]Ball, error) {
		return []Ball{one, Pi(prec).Neg(), {}, one}, nil
	}
	roots, err := NewRootSetOf(ctx, 3, coef)
	if err != nil {
		fmt.Println(err)
		return
	}
	for i := range roots.Len() {
		z, err := roots.Enclose(ctx, i, 120)
		if err != nil {
			fmt.Println(err)
			return
		}
		x, ok := z.Re.Decimal(30)
		fmt.Println(x, ok)
	}
	// Output:
	// -1.91416158879158187156700400871 true
	// 0.329719883447429002755797927167 true
	// 1.58444170534415286881120608154 true
}

func BenchmarkRootSetOf(b *testing.B) {
	for name, c := range map[string][]*big.Int{
		"degree5": rootsInts(-1, -1, 0, 0, 0, 1), "Wilkinson10": rootsWilkinson(10), "tridiagonal40": rootsTridiagonal(40),
	} {
		coef := rootsBallWays(c)["pi"]
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if _, err := NewRootSetOf(context.Background(), len(c)-1, coef); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
