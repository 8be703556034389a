package expr_test

import (
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// beyond returns how far x is at most from the number in a ball.
func beyond(x float64, b algebra.Ball) *big.Float {
	lo, hi := b.Interval()
	y := big.NewFloat(x)
	below, above := new(big.Float).SetPrec(2000).Sub(y, lo), new(big.Float).SetPrec(2000).Sub(hi, y)
	if below.Cmp(above) < 0 {
		return above
	}
	return below
}

// The errors that Compiled assumes of package math, at random arguments and near
// the multiples of pi/4.
func TestCompiledAssumptions(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	const u = 0x1p-53
	exact := func(x float64) algebra.Ball { return algebra.BallFromFloat(big.NewFloat(x)) }
	worstExp, worstSin := 0.0, 0.0
	for range 8000 {
		x := (r.Float64() - 0.5) * []float64{1e-3, 1, 20, 1490}[r.IntN(4)]
		if y := math.Exp(x); y <= math.MaxFloat64 {
			e, _ := beyond(y, exact(x).Exp(160)).Float64()
			require.LessOrEqual(t, e, 4*u*y+2*math.SmallestNonzeroFloat64, "exp(%g)", x)
			if y > 1e-300 {
				worstExp = max(worstExp, e/(u*y))
			}
		}
		x = (r.Float64() - 0.5) * []float64{1e-3, 2, 100, 1e8, 0x1p31, 1e18}[r.IntN(6)]
		if r.IntN(2) == 0 {
			x = math.Round(x) * math.Pi / 4
		}
		s, c := math.Sincos(x)
		sin, cos := exact(x).SinCos(200)
		es, _ := beyond(s, sin).Float64()
		ec, _ := beyond(c, cos).Float64()
		require.LessOrEqual(t, es, 4*u*min(1, math.Abs(x)), "sin(%g)", x)
		require.LessOrEqual(t, ec, 4*u, "cos(%g)", x)
		worstSin = max(worstSin, es/u, ec/u)
	}
	t.Logf("largest errors: Exp %.2f u relative, Sincos %.2f u", worstExp, worstSin)
}

// Programs of random functions stay within their bounds.
func TestCompiledRandom(t *testing.T) {
	g := newGenerator(31)
	for range 25 {
		f := g.function(t)
		fs := []expr.Function{f, f.Derivative(), g.function(t), function(t, "t - t"), f.Integral()}
		c, err := expr.Compile(t.Context(), fs...)
		var e *expr.Error
		if assert.Equal(t, err != nil, c == nil) && err != nil {
			require.ErrorAs(t, err, &e)
			require.Equal(t, expr.LimitExceeded, e.Kind, "%s", err)
			continue
		}
		for _, at := range []float64{0, 1, -1, 0.1, -2.5, 17.3, 1e-5} {
			got, bound := c.Eval(nil, at), c.Bound(nil, at)
			for i, f := range fs {
				if math.IsInf(bound[i], 1) {
					continue
				}
				b, err := f.Enclose(t.Context(), new(big.Rat).SetFloat64(at), 1500)
				require.NoError(t, err)
				require.LessOrEqual(t, beyond(got[i], b).Cmp(big.NewFloat(bound[i])), 0, "%s at %g is %g, bound %g", f, at, got[i], bound[i])
			}
		}
	}
}

func TestCompileRefuses(t *testing.T) {
	c, err := expr.Compile(t.Context())
	require.NoError(t, err)
	assert.Empty(t, c.Eval(nil, 1))
	assert.Empty(t, c.EvalMany(nil, []float64{1, 2}))
	_, err = expr.Compile(t.Context(), function(t, "a*t"))
	assert.Equal(t, expr.NeedsAssumption, faultOf(t, err).kind)
	free := expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.Rat{}, expr.Image[algebra.Rat]{}, expr.FreeTerm[algebra.Rat]{Name: "C1", Image: elementaryOf(t, "1").Image()})
	_, err = expr.Compile(t.Context(), free)
	assert.Equal(t, expr.SideConditions, faultOf(t, err).kind)
	_, err = expr.Compile(t.Context(), function(t, "10^400*exp(t)"))
	assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind)
	assert.Panics(t, func() {
		_, _ = expr.Compile(t.Context(), function(t, "t"), expr.NewFunction[algebra.Rat](algebra.Q, "t", algebra.NewRat(1, 1), elementaryOf(t, "t").Image()))
	})
}

// Slow rates side by side keep their digits at the times of faster ones, and at the
// time 1.
func TestCompiledSlowRates(t *testing.T) {
	for _, src := range []string{
		"1e12*(1 - exp(-t/1e12))", "1e12*(1 - exp(-t/1e12)) + exp(-t)", "1e6*(exp(-t/1e6) - exp(-2*t/1e6)) + exp(-3*t)", "1e9*sin(t/1e9) + cos(20*t)",
	} {
		f := function(t, src)
		c, err := expr.Compile(t.Context(), f)
		require.NoError(t, err)
		for _, at := range []float64{1, 30, 1e3, 1e5} {
			b, err := f.Enclose(t.Context(), new(big.Rat).SetFloat64(at), 200)
			require.NoError(t, err)
			bound := c.Bound(nil, at)[0]
			assert.Less(t, bound, 1e-14*(1+at), "%s at %g", src, at)
			assert.LessOrEqual(t, beyond(c.Eval(nil, at)[0], b).Cmp(big.NewFloat(bound)), 0, "%s at %g", src, at)
		}
	}
}

// Many times together have the values that each has alone, whatever parts they take.
func TestEvalMany(t *testing.T) {
	c, err := expr.Compile(t.Context(), function(t, "exp(-t)*cos(3*t) - t^2*exp(-t/3) + sin(t)/7"),
		function(t, "1e9*exp(-t) - 1e9*exp(-1.000000001*t)"), function(t, "exp(1000*t) + t^4"), function(t, "0"), function(t, "exp(-800*t)"))
	require.NoError(t, err)
	r := rand.New(rand.NewPCG(7, 7))
	for range 300 {
		times := make([]float64, r.IntN(50))
		for i := range times {
			times[i] = r.NormFloat64() * math.Exp(4*r.NormFloat64())
			switch r.IntN(40) {
			case 0:
				times[i] = math.NaN()
			case 1:
				times[i] = math.Inf(1)
			case 2:
				times[i] = 0
			}
		}
		got := c.EvalMany(nil, times)
		require.Len(t, got, c.Len()*len(times))
		for i, at := range times {
			for j, want := range c.Eval(nil, at) {
				x := got[i*c.Len()+j]
				require.True(t, x == want || math.IsNaN(x) && math.IsNaN(want), "function %d at %g: %g, %g", j, at, x, want)
			}
		}
	}
}

// A phase is accurate for long times: the rounding of the rate and of the product
// would cost 4 digits at 1e4, and all of them at 1e16.
func TestCompiledLongTimes(t *testing.T) {
	for _, src := range []string{"cos(t/3)", "sin(sqrt(2)*t)", "cos(pi*t) + 1", "exp(-t/1000000007)"} {
		f := function(t, src)
		c, err := expr.Compile(t.Context(), f)
		require.NoError(t, err)
		for _, at := range []float64{1e4 + 0.1, 1e8 + 0.3, 1e12 / 7, 1e15 / 3} {
			assert.Less(t, c.Bound(nil, at)[0], 5e-15, "%s at %g", src, at)
			b, err := f.Enclose(t.Context(), new(big.Rat).SetFloat64(at), 300)
			require.NoError(t, err)
			assert.LessOrEqual(t, beyond(c.Eval(nil, at)[0], b).Cmp(big.NewFloat(c.Bound(nil, at)[0])), 0, "%s at %g", src, at)
		}
	}
}

// benchSum returns n functions with n real rates, and a loop that evaluates them as
// one would write it by hand.
func benchSum(b *testing.B, n int, oscillating bool) (*expr.Compiled, func(dst []float64, t float64)) {
	fs := make([]expr.Function, n)
	rates := make([]float64, n)
	coefs, sines := make([][]float64, n), make([][]float64, n)
	for i := range fs {
		var terms []string
		for j := range n {
			x, y, r := float64(i*7+j*3)/64+1, float64(i+j)/32+1, float64(j+1)/16
			rates[j] = r
			coefs[i], sines[i] = append(coefs[i], x), append(sines[i], y)
			if oscillating {
				terms = append(terms, fmt.Sprintf("(%d/64*cos(%d/16*t) + %d/32*sin(%d/16*t))*exp(-%d/16*t)", i*7+j*3+64, j+1, i+j+32, j+1, j+1))
			} else {
				terms = append(terms, fmt.Sprintf("%d/64*exp(-%d/16*t)", i*7+j*3+64, j+1))
			}
		}
		f, err := expr.ParseFunction(strings.Join(terms, " + "), expr.Limits{})
		require.NoError(b, err)
		fs[i] = f
	}
	c, err := expr.Compile(b.Context(), fs...)
	require.NoError(b, err)
	e, s := make([]float64, n), make([]float64, n)
	hand := func(dst []float64, t float64) {
		for j, r := range rates {
			e[j] = math.Exp(-r * t)
			if oscillating {
				sin, cos := math.Sincos(r * t)
				e[j], s[j] = e[j]*cos, e[j]*sin
			}
		}
		for i := range dst {
			sum := 0.0
			a := coefs[i][:len(e)]
			if oscillating {
				z := sines[i][:len(e)]
				for j, x := range e {
					sum += a[j]*x + z[j]*s[j]
				}
			} else {
				for j, x := range e {
					sum += a[j] * x
				}
			}
			dst[i] = sum
		}
	}
	return c, hand
}

// BenchmarkCompiled alternates a program with the loop by hand, at 1000 times, and
// reports the ratios of their shortest times, and that of the bounds.
func BenchmarkCompiled(b *testing.B) {
	for _, kind := range []string{"real", "complex"} {
		for _, n := range []int{3, 10, 30} {
			b.Run(fmt.Sprintf("kind=%s/n=%d", kind, n), func(b *testing.B) {
				c, hand := benchSum(b, n, kind == "complex")
				times := make([]float64, 1000)
				for i := range times {
					times[i] = float64(i+1) / 100
				}
				dst := make([]float64, n*len(times))
				each := func(f func(dst []float64, t float64)) func() {
					return func() {
						for i, t := range times {
							f(dst[i*n:(i+1)*n], t)
						}
					}
				}
				ways := []func(){
					each(hand),
					func() { c.EvalMany(dst, times) },
					each(func(dst []float64, t float64) { c.Eval(dst, t) }),
					each(func(dst []float64, t float64) { c.Bound(dst, t) }),
				}
				least := []time.Duration{math.MaxInt64, math.MaxInt64, math.MaxInt64, math.MaxInt64}
				for b.Loop() {
					for way, f := range ways {
						start := time.Now()
						f()
						least[way] = min(least[way], time.Since(start))
					}
				}
				b.ReportMetric(float64(least[1])/float64(len(times)), "many-ns")
				b.ReportMetric(float64(least[1])/float64(least[0]), "many/hand")
				b.ReportMetric(float64(least[2])/float64(least[0]), "eval/hand")
				b.ReportMetric(float64(least[3])/float64(least[2]), "bound/eval")
			})
		}
	}
}
