package algebra

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// rootsExact returns p(z) and p'(z).
func rootsExact(c []*big.Int, z complexBallPoint) (p, dp complexBallPoint) {
	p, dp = complexBallPoint{new(big.Rat), new(big.Rat)}, complexBallPoint{new(big.Rat), new(big.Rat)}
	for k := len(c) - 1; k >= 0; k-- {
		dp = dp.mul(z).add(p)
		p = p.mul(z).add(complexBallPoint{new(big.Rat).SetInt(c[k]), new(big.Rat)})
	}
	return p, dp
}

// rootsDistance returns |x - y 2^e| as a float64.
func rootsDistance(x complexBallPoint, y complex128, e int64) float64 {
	part := func(a *big.Rat, f float64) float64 {
		b := ratFrom(big.NewInt(1), -e)
		b.Mul(b, a)
		d, _ := b.Sub(b, new(big.Rat).SetFloat64(f)).Float64()
		return d
	}
	return math.Hypot(part(x.re, real(y)), part(x.im, imag(y)))
}

func TestRootsWordPolyErrors(t *testing.T) {
	rng := rand.New(rand.NewPCG(45, 46))
	for round := range 300 {
		c := rootsRandom(rng, 1+rng.IntN(25), 50+50*rng.IntN(4))
		if round%5 == 0 {
			c = rootsWilkinson(1 + rng.Int64N(20))
		}
		w := 2 + rng.IntN(5)
		exp := int64(rng.IntN(20) - 10)
		abs, arg := 0.26+0.73*rng.Float64(), 6.3*rng.Float64()
		if round%3 == 0 {
			arg = 0
		}
		x := wordPoint{make([]uint64, w), make([]uint64, w), exp}
		fixedAddFloat(x.re, abs*math.Cos(arg)/2)
		fixedAddFloat(x.im, abs*math.Sin(arg)/2)
		if arg != 0 {
			x.re[0], x.im[0] = rng.Uint64(), rng.Uint64()
		}
		p := newWordPoly(c, newWordScale(exp, abs, w))
		if p.level < 0 || p.level > 8 || abs > math.Exp2(-float64(p.level)/8) {
			t.Fatalf("level %d for %v", p.level, abs)
		}
		z := complexBallPoint{ratFrom(fixedBig(x.re), exp+1-64*int64(w)), ratFrom(fixedBig(x.im), exp+1-64*int64(w))}
		exact, slope := rootsExact(c, z)
		v, d := p.eval(x, true)
		only, _ := p.eval(x, false)
		if only != v {
			t.Fatal("the value depends on the derivative being asked for")
		}
		ev, ed := p.errors()
		// The derivative is by t = z/2^exp.
		if off := rootsDistance(exact, v, p.scale); off > ev+floatAbs(v)*0x1p-50 {
			t.Fatalf("degree %d, %d words: value off by %g, bound %g", p.n, w, off, ev)
		}
		if off := rootsDistance(slope, d, p.scale-exp); off > ed+floatAbs(d)*0x1p-50 {
			t.Fatalf("degree %d, %d words: derivative off by %g, bound %g", p.n, w, off, ed)
		}
	}
}

func TestRootsFloatErrors(t *testing.T) {
	rng := rand.New(rand.NewPCG(47, 48))
	for round := range 300 {
		c := rootsRandom(rng, 1+rng.IntN(25), 50+50*rng.IntN(4))
		if round%5 == 0 {
			c = rootsWilkinson(1 + rng.Int64N(20))
		}
		f := newFloatRoots(c)
		if f == nil || f.c == nil {
			t.Fatal("float64 does not hold the polynomial")
		}
		z := complex(rng.NormFloat64(), rng.NormFloat64())
		if round%2 == 0 { // near a root
			z = f.z[rng.IntN(len(f.z))] * complex(1+rng.NormFloat64()*0x1p-30, 0)
		}
		p, _, bound := f.eval(z)
		at := complexBallPoint{ratFrom(new(big.Int).SetUint64(1), f.shift), new(big.Rat)}
		at = at.mul(complexBallPoint{new(big.Rat).SetFloat64(real(z)), new(big.Rat).SetFloat64(imag(z))})
		exact, _ := rootsExact(c, at)
		if off := rootsDistance(exact, p, f.scale); off > bound*0x1p-53*(1+0x1p-20) {
			t.Fatalf("value off by %g, bound %g", off, bound*0x1p-53)
		}
	}
}
