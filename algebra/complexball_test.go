package algebra

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// complexBallPoint is an exact complex rational.
type complexBallPoint struct{ re, im *big.Rat }

func (p complexBallPoint) add(q complexBallPoint) complexBallPoint {
	return complexBallPoint{new(big.Rat).Add(p.re, q.re), new(big.Rat).Add(p.im, q.im)}
}

func (p complexBallPoint) mul(q complexBallPoint) complexBallPoint {
	m := func(a, b *big.Rat) *big.Rat { return new(big.Rat).Mul(a, b) }
	return complexBallPoint{new(big.Rat).Sub(m(p.re, q.re), m(p.im, q.im)), new(big.Rat).Add(m(p.re, q.im), m(p.im, q.re))}
}

func (p complexBallPoint) neg() complexBallPoint {
	return complexBallPoint{new(big.Rat).Neg(p.re), new(big.Rat).Neg(p.im)}
}

func complexBallContains(t *testing.T, what string, z ComplexBall, p complexBallPoint) {
	t.Helper()
	ballTestContains(t, what+", real part", z.Re, p.re)
	ballTestContains(t, what+", imaginary part", z.Im, p.im)
}

func complexBallAround(rng *rand.Rand) (ComplexBall, []complexBallPoint) {
	re, res := ballTestAround(rng, 80)
	im, ims := ballTestAround(rng, 80)
	if rng.IntN(5) == 0 {
		im, ims = Ball{}, []*big.Rat{new(big.Rat)}
	}
	var ps []complexBallPoint
	for _, a := range res {
		for _, b := range ims {
			ps = append(ps, complexBallPoint{a, b})
		}
	}
	return ComplexBall{re, im}, ps
}

func TestComplexBallContainsImages(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	for range 60 {
		z, zs := complexBallAround(rng)
		w, ws := complexBallAround(rng)
		prec := uint(1 + rng.IntN(200))
		sum, dif, mul, quo, sqr := z.Add(w, prec), z.Sub(w, prec), z.Mul(w, prec), z.Quo(w, prec), z.Sqr(prec)
		lo, hi := z.AbsBounds()
		l, _ := lo.Rat(nil)
		h, _ := hi.Rat(nil)
		abs := z.Abs(prec)
		for _, p := range zs {
			complexBallContains(t, "-z", z.Neg(), p.neg())
			complexBallContains(t, "conj z", z.Conj(), complexBallPoint{p.re, new(big.Rat).Neg(p.im)})
			complexBallContains(t, "z^2", sqr, p.mul(p))
			norm := new(big.Rat).Add(new(big.Rat).Mul(p.re, p.re), new(big.Rat).Mul(p.im, p.im))
			if new(big.Rat).Mul(l, l).Cmp(norm) > 0 || new(big.Rat).Mul(h, h).Cmp(norm) < 0 {
				t.Fatalf("|z|^2 = %v is not between the squares of %v and %v", norm, lo, hi)
			}
			low, high := abs.Interval()
			a, _ := low.Rat(nil)
			b, _ := high.Rat(nil)
			if a.Sign() > 0 && a.Mul(a, a).Cmp(norm) > 0 || b.Mul(b, b).Cmp(norm) < 0 {
				t.Fatalf("|z|^2 = %v is not between the squares of %v and %v", norm, low, high)
			}
			if norm.Sign() == 0 && !z.ContainsZero() {
				t.Fatal("ContainsZero is false for a rectangle around 0")
			}
			for _, q := range ws {
				complexBallContains(t, "z+w", sum, p.add(q))
				complexBallContains(t, "z-w", dif, p.add(q.neg()))
				complexBallContains(t, "z w", mul, p.mul(q))
				n := new(big.Rat).Add(new(big.Rat).Mul(q.re, q.re), new(big.Rat).Mul(q.im, q.im))
				if n.Sign() != 0 {
					inv := complexBallPoint{new(big.Rat).Quo(q.re, n), new(big.Rat).Quo(new(big.Rat).Neg(q.im), n)}
					complexBallContains(t, "z/w", quo, p.mul(inv))
				}
			}
		}
	}
}

func TestComplexBallQuoByZero(t *testing.T) {
	one := ComplexBall{Re: BallFromInt(big.NewInt(1))}
	around := ComplexBall{Ball{}.AddError(big.NewFloat(1)), Ball{}.AddError(big.NewFloat(1))}
	for _, w := range []ComplexBall{{}, around} {
		q := one.Quo(w, 64)
		if !q.ContainsZero() || !q.Overlaps(one) || !q.Re.Rad().IsInf() || !q.Im.Rad().IsInf() {
			t.Error("a quotient by 0 certifies something")
		}
	}
}

func TestComplexBallExp(t *testing.T) {
	rng := rand.New(rand.NewPCG(23, 24))
	point := func() ComplexBall {
		f := func() Ball { return BallFromRat(big.NewRat(rng.Int64N(1<<40)-1<<39, 1<<36), 100) }
		return ComplexBall{f(), f()}
	}
	one := complexBallPoint{big.NewRat(1, 1), new(big.Rat)}
	for range 100 {
		z, w := point(), point()
		prec := uint(10 + rng.IntN(300))
		e := z.Exp(prec)
		p := e.Mul(z.Neg().Exp(prec), prec)
		complexBallContains(t, "e^z e^-z", p, one)
		if p.Re.RelPrec() < int(prec)-6 {
			t.Fatalf("e^z e^-z has %d proven bits of %d", p.Re.RelPrec(), prec)
		}
		if !z.Add(w, 200).Exp(prec).Overlaps(e.Mul(w.Exp(prec), prec)) {
			t.Fatal("e^(z+w) is not e^z e^w")
		}
		if !z.Conj().Exp(prec).Overlaps(e.Conj()) {
			t.Fatal("e^conj(z) is not conj(e^z)")
		}
	}
	euler := ComplexBall{Im: Pi(200)}.Exp(200)
	complexBallContains(t, "e^(i pi)", euler, complexBallPoint{big.NewRat(-1, 1), new(big.Rat)})
	if euler.Re.RelPrec() < 190 {
		t.Errorf("e^(i pi) has %d proven bits", euler.Re.RelPrec())
	}
}

func TestComplexBallScaled(t *testing.T) {
	rng := rand.New(rand.NewPCG(25, 26))
	random := func() (scaled, complex128) {
		c := complex(rng.NormFloat64(), rng.NormFloat64()) * complex(math.Ldexp(1, rng.IntN(200)-100), 0)
		e := rng.IntN(60) - 30
		return newScaled(c*complex(math.Ldexp(1, -e), 0), e), c
	}
	value := func(x scaled) complex128 { return x.c * complex(math.Ldexp(1, x.e), 0) }
	near := func(what string, got scaled, want complex128, size float64) {
		t.Helper()
		d := value(got) - want
		if math.Hypot(real(d), imag(d)) > size*1e-15 {
			t.Fatalf("%s is %v, want %v", what, value(got), want)
		}
	}
	abs := func(c complex128) float64 { return math.Hypot(real(c), imag(c)) }
	for range 5000 {
		x, a := random()
		y, b := random()
		near("x+y", x.add(y), a+b, abs(a)+abs(b))
		near("x-y", x.sub(y), a-b, abs(a)+abs(b))
		near("x y", x.mul(y), a*b, abs(a*b))
		near("x/y", x.quo(y), a/b, abs(a/b))
		near("x+0", x.add(scaled{}), a, abs(a))
		near("0+x", scaled{}.add(x), a, abs(a))
		near("ball", x.ball().scaled(), a, abs(a))
		if s := math.Log2(abs(a)); math.Abs(float64(x.size())-s) > 1.1 {
			t.Fatalf("size %d of %v", x.size(), a)
		}
	}
	tiny := scaled{1, -1 << 40}
	if q := tiny.mul(tiny).quo(tiny); q.c == 0 || q.size() != tiny.size() {
		t.Error("exponents overflow")
	}
}

func TestComplexBallAberthPartsEqualPoints(t *testing.T) {
	it := newAberth(rootsInts(-2, 1, 3, 5))
	it.prec = 64
	for i := range it.at {
		it.at[i] = ComplexBall{Re: BallFromInt(big.NewInt(7))}
		it.z[i] = it.at[i].scaled()
	}
	it.start = it.z
	it.raise(128)
	for i := range it.at {
		for j := range i {
			if d := it.at[i].Sub(it.at[j], 64); d.ContainsZero() {
				t.Errorf("points %d and %d are still equal", i, j)
			}
		}
	}
}
