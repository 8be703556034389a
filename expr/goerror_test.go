package expr

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

// evaluate returns the computed value of an operation at a local time, and a ball
// around the exact one for constants that are off by the given part of their slips.
func evaluate(o goOp, tau, off float64) (float64, algebra.Ball) {
	const prec = 300
	exact := func(n goConst) algebra.Ball {
		return ballOf(n.x).Add(ballOf(n.slip()).Mul(ballOf(off), prec), prec)
	}
	rate := func(n goConst) (float64, algebra.Ball) { return n.x * tau, exact(n).Mul(ballOf(tau), prec) }
	switch o.kind {
	case goConstant:
		return o.number.x, exact(o.number)
	case goTime:
		return tau, ballOf(tau)
	case goExp:
		x, y := rate(o.rate.re)
		return math.Exp(x), y.Exp(prec)
	case goCos:
		x, y := rate(o.rate.im)
		_, c := y.SinCos(prec)
		return math.Cos(x), c
	case goSin:
		x, y := rate(o.rate.im)
		s, _ := y.SinCos(prec)
		return math.Sin(x), s
	case goBranch:
		if math.Abs(tau) <= o.until {
			return evaluate(o.args[0], tau, off)
		}
		return evaluate(o.args[1], tau, off)
	}
	x, y := evaluate(o.args[0], tau, off)
	for i, a := range o.args[1:] {
		u, v := evaluate(a, tau, off)
		switch {
		case o.kind == goMultiply:
			x, y = x*u, y.Mul(v, prec)
		case o.minus[i+1]:
			x, y = x-u, y.Sub(v, prec)
		default:
			x, y = x+u, y.Add(v, prec)
		}
	}
	return x, y
}

// randomOp returns an operation with sums and products to some depth.
func randomOp(r *rand.Rand, depth int) goOp {
	number := func(size float64) goConst {
		n := goConst{x: (r.Float64() - 0.5) * size, exact: r.IntN(2) == 0}
		if r.IntN(4) == 0 {
			n.x = math.Ldexp(1, r.IntN(9)-4)
		}
		return n
	}
	if depth == 0 {
		rate := &goRate{re: number(4), im: number(40)}
		return goOp{kind: []goOpKind{goConstant, goTime, goExp, goCos, goSin}[r.IntN(5)], number: number(100), rate: rate}
	}
	o := goOp{kind: []goOpKind{goAdd, goMultiply, goBranch}[r.IntN(3)], until: r.Float64() * 4}
	for i := range 2 + r.IntN(2) {
		o.args = append(o.args, randomOp(r, depth-1))
		o.minus = append(o.minus, i > 0 && r.IntN(2) == 0)
	}
	return o
}

// Ranges enclose the exact values, and bound the errors, of random operations at
// random times of random intervals, down to single times.
func TestGoRanges(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 5))
	beyond := func(b algebra.Ball, x float64) (below, above float64) {
		lo, hi := b.Interval()
		below, _ = new(big.Float).SetPrec(2000).Sub(big.NewFloat(x), lo).Float64()
		above, _ = new(big.Float).SetPrec(2000).Sub(hi, big.NewFloat(x)).Float64()
		return below, above
	}
	for range 1500 {
		o := randomOp(r, r.IntN(4))
		a := (r.Float64() - 0.5) * 10
		width := math.Ldexp(r.Float64(), -r.IntN(60)) * float64(r.IntN(2))
		v := goInterval{goRange{a, a + width, 0}}
		got := o.rangeOf(v)
		for range 4 {
			tau := min(max(a, a+width*r.Float64()), a+width)
			off := []float64{-1, 0, 1}[r.IntN(3)]
			x, exact := evaluate(o, tau, off)
			below, above := beyond(exact, x)
			require.LessOrEqual(t, max(math.Abs(below), math.Abs(above)), got.err, "%+v at %g: %g", o, tau, x)
			below, _ = beyond(exact, got.lo)
			require.LessOrEqual(t, below, 0.0, "%+v at %g", o, tau)
			_, above = beyond(exact, got.hi)
			require.LessOrEqual(t, above, 0.0, "%+v at %g", o, tau)
		}
	}
}

// What the bounds assume of math.Sin and math.Cos; see TestCompiledAssumptions.
func TestGoSineAssumptions(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 9))
	for range 4000 {
		x := (r.Float64() - 0.5) * []float64{1e-3, 2, 100, 1e8, 0x1p31, 1e18}[r.IntN(6)]
		if r.IntN(2) == 0 {
			x = math.Round(x) * math.Pi / 4
		}
		sin, cos := ballOf(x).SinCos(200)
		s, _ := sin.Sub(ballOf(math.Sin(x)), 200).Mid().Float64()
		c, _ := cos.Sub(ballOf(math.Cos(x)), 200).Mid().Float64()
		require.LessOrEqual(t, math.Abs(s), 4*unit*min(1, math.Abs(x)), "sin(%g)", x)
		require.LessOrEqual(t, math.Abs(c), 4*unit, "cos(%g)", x)
	}
}

func TestUpward(t *testing.T) {
	require.Equal(t, "1.0e+00", upward(1))
	require.Equal(t, "1.1e+00", upward(1.05))
	require.Equal(t, "1.1e+00", upward(1.0000000000000002))
	require.Equal(t, "4.9e-324", upward(tiny))
	require.Equal(t, "1.0e-15", upward(9.99e-16))
}
