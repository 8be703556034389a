package linsys_test

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"strings"
	"sync"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// A response compiles once and is evaluated many times, with proven error bounds.
func ExampleResponse_Float64() {
	model, _ := linsys.Read(`
		a' = -a/2            # a chain of two tanks
		b' = a/2 - b/3
		a(0) = 1;  b(0) = 0
	`)
	response, _ := model.ClosedForm(context.Background())
	program, err := response.Float64(context.Background())
	if err != nil {
		fmt.Println(err)
		return
	}
	times := []float64{0, 1, 10}
	values := program.EvalMany(nil, times)
	for k, t := range times {
		fmt.Printf("%g: %.10f\n", t, values[k*program.Len():][:program.Len()])
	}
	fmt.Println(program.Bound(nil, 10)[1] < 1e-15)
	// Output:
	// 0: [1.0000000000 0.0000000000]
	// 1: [0.6065306597 0.3300019526]
	// 10: [0.0067379470 0.0868081390]
	// true
}

// compiled solves a model and compiles its response.
func compiled(t testing.TB, text string) (*linsys.Response, *linsys.Compiled) {
	t.Helper()
	m, err := linsys.Read(text)
	require.NoError(t, err, text)
	r, err := m.ClosedForm(t.Context())
	require.NoError(t, err, text)
	c, err := r.Float64(t.Context())
	require.NoError(t, err, text)
	return r, c
}

// requireBounds compares a program with enclosures and returns the largest ratio of
// an error to its bound, and of a bound to the value.
func requireBounds(t testing.TB, text string, r *linsys.Response, c *linsys.Compiled, times ...float64) (used, relative float64) {
	t.Helper()
	got, bound := make([]float64, c.Len()), make([]float64, c.Len())
	for _, at := range times {
		prec := uint(500)
		if at != 0 && math.Abs(math.Log10(math.Abs(at))) > 30 {
			prec = 1500 // a phase needs as many bits as the time, a small value as its exponent
		}
		got, bound = c.Eval(got, at), c.Bound(bound, at)
		for i, s := range r.States() {
			if math.IsInf(bound[i], 1) {
				continue
			}
			b, err := r.State(s).Enclose(t.Context(), new(big.Rat).SetFloat64(at), prec)
			require.NoError(t, err)
			lo, hi := b.Interval()
			x := big.NewFloat(got[i])
			worst := new(big.Float).SetPrec(1600).Sub(hi, x)
			if d := new(big.Float).SetPrec(1600).Sub(x, lo); d.Cmp(worst) > 0 {
				worst = d
			}
			require.True(t, worst.Cmp(big.NewFloat(bound[i])) <= 0, "%s at %g is %g, the error %.3g is beyond %.3g in\n%s", s, at, got[i], worst, bound[i], text)
			e, _ := worst.Float64()
			used = max(used, e/bound[i])
			if got[i] != 0 {
				relative = max(relative, bound[i]/math.Abs(got[i]))
			}
		}
	}
	return used, relative
}

// boundTimes are times of all sizes and signs.
func boundTimes(r *rand.Rand) []float64 {
	times := []float64{0, 1, -1, 1e-9, 0.1, math.Pi, 1e15, -1e15, 1e300, 5e-324, 0x1p31, 0x1p62, -0x1p63, 0x1p64}
	for range 12 {
		times = append(times, (r.Float64()-0.3)*math.Pow(10, float64(r.IntN(9)-4)))
	}
	return times
}

func TestCompiledRandomStructures(t *testing.T) {
	worst := 0.0
	for _, s := range structures {
		t.Run(s.name, func(t *testing.T) {
			r := rand.New(rand.NewPCG(3, uint64(len(s.name))))
			y0 := make([]int64, len(mix(r, s.blocks)))
			for i := range y0 {
				y0[i] = int64(r.IntN(11) - 5)
			}
			text := modelText(mix(r, s.blocks), s.inputs, y0)
			res, c := compiled(t, text)
			used, _ := requireBounds(t, text, res, c, boundTimes(r)...)
			worst = max(worst, used)
		})
	}
	assert.Greater(t, worst, 0.01, "the bounds are loose")
}

// Rates from 1e-6 to 1e6, multiple ones, pi and square roots, and a time t0.
var compiledModels = []string{
	"x' = -x/1000000; y' = -1000000*y + x; z' = x - z; x(0) = 1; y(0) = 3; z(0) = 0",
	"x' = -pi*x + y; y' = -sqrt(2)*y; z' = x - pi*z; x(0) = 1; y(0) = 2; z(0) = -1",
	"x'' + sqrt(3)*x' + pi^2*x = cos(pi*t); x(0) = 1; x'(0) = 0",
	"x'' + 4*x = 8*cos(2*t); x(0) = 1; x'(0) = 0",
	"x' = -x/3 + t; x(1/3) = 2",
	"x'' + x = sin(t); x(1/10) = 1; x'(1/10) = -1",
	"x' = -x + y; y' = -y + z; z' = -z + w; w' = -w + v; v' = -v + u; u' = -u; x(1000000) = 1; y(1000000) = 1; z(1000000) = 1; w(1000000) = 0; v(1000000) = 0; u(1000000) = 7",
	"x' = 3*x + 1; x(0) = 0",
	"x' = 0; y' = 1; x(0) = 1/3; y(0) = 2/3",
	"x' = -10^6*x + sin(10^6*t); y' = x; x(0) = 0; y(0) = 0",
}

func TestCompiledModels(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	for _, text := range compiledModels {
		text = strings.ReplaceAll(text, "; ", "\n")
		res, c := compiled(t, text)
		requireBounds(t, text, res, c, append(boundTimes(r), 1.0/3, 0.1, math.Nextafter(0.1, 1), 1e6, 1e6+1, 700, 745.2, -709.5)...)
	}
}

// Rates that nearly coincide lose nothing: their terms are of size 1e12 to 1e24, the
// values of size 1.
func TestCompiledNearRates(t *testing.T) {
	for name, text := range map[string]string{
		"real":        "x' = -x\ny' = x - 1000000000001/1000000000000*y\nx(0) = 1\ny(0) = 0",
		"three":       "x' = -x\ny' = x - 1000000000001/1000000000000*y\nz' = y - 1000000000003/1000000000000*z\nx(0) = 1\ny(0) = 0\nz(0) = 0",
		"tiny":        "x' = -1/10^30*x + 1\nx(0) = 0",
		"complex":     "x'' + 4*x = cos(2000000000001/1000000000000*t)\nx(0) = 0\nx'(0) = 0",
		"pair":        "x'' + 2*x' + (1 + 1/10^24)*x = 0\nx(0) = 1\nx'(0) = 0",
		"double pair": "x'''' = -4*x''' - (6 + 2/10^20)*x'' - (4 + 4/10^20)*x' - (1 + 1/10^20)^2*x\nx(0) = 1\nx'(0) = 0\nx''(0) = 0\nx'''(0) = 1",
		"triple root": "x''' + 3*x'' + 3*x' + (1 + 1/10^15)*x = 0\nx(0) = 1\nx'(0) = 0\nx''(0) = 0",
		"damped":      "x'' + x'/5 + 4*x = z\nz'' + z'/5 + (4 + 1/10^10)*z = 0\nx(0) = 1\nx'(0) = 0\nz(0) = 1\nz'(0) = 1",
		"nested":      "x' = -x\ny' = x - 1000000000001/1000000000000*y\nz' = y - 1001/1000*z\nw' = z - 1002/1000*w\nx(0) = 1\ny(0) = 0\nz(0) = 0\nw(0) = 0",
	} {
		res, c := compiled(t, text)
		for _, at := range []float64{0.25, 1, 2, 10, 30} {
			_, relative := requireBounds(t, text, res, c, at)
			assert.Less(t, relative, 1e-11, "%s at %g", name, at)
		}
		requireBounds(t, text, res, c, 1e-12, 1e3, 1e9, 1e12, 3e12, 1e29, 5e29, 1e31, -1, -100)
	}
}

func TestCompiledNotFinite(t *testing.T) {
	_, c := compiled(t, "x' = -x\ny' = 1\nz'' = -z\nx(0) = 1\ny(0) = 0\nz(0) = 0\nz'(0) = 1")
	for _, at := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		for i, x := range c.Eval(nil, at) {
			assert.True(t, math.IsNaN(x))
			assert.True(t, math.IsInf(c.Bound(nil, at)[i], 1))
		}
	}
	// Beyond float64 the bound says so, for the functions concerned only.
	assert.True(t, math.IsInf(c.Bound(nil, -1e3)[0], 1))
	assert.Less(t, c.Bound(nil, -1e3)[2], 2e-15)
	assert.Equal(t, 0.0, c.Eval(nil, 1e308)[0])
	assert.Less(t, c.Bound(nil, 1e308)[0], 1e-320)
}

func TestCompiledErrors(t *testing.T) {
	for text, kind := range map[string]expr.Kind{
		"x' = -k*x\nx(0) = 1":    expr.NeedsAssumption,
		"x' = -x":                expr.SideConditions,
		"x' = -10^400*x\nx(0)=1": expr.LimitExceeded,
	} {
		m, err := linsys.Read(text)
		require.NoError(t, err)
		r, err := m.ClosedForm(t.Context())
		require.NoError(t, err)
		_, err = r.Float64(t.Context())
		var e *linsys.Error
		require.ErrorAs(t, err, &e, text)
		assert.Equal(t, kind, e.Kind, text)
	}
	m, err := linsys.Read("x''' = -x - x'\nx(0) = 1\nx'(0) = 0\nx''(0) = 0")
	require.NoError(t, err)
	r, err := m.ClosedForm(t.Context())
	require.NoError(t, err)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, err = r.Float64(ctx)
	var e *linsys.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.Cancelled, e.Kind)
}

func TestCompiledAllocations(t *testing.T) {
	_, c := compiled(t, "x'' + x'/2 + x = t*exp(-t)\ny' = x - 3*y\nx(1/3) = 1\nx'(1/3) = 0\ny(1/3) = 2")
	dst, times := make([]float64, 4*c.Len()), []float64{0, 1, 2, 3}
	assert.Zero(t, testing.AllocsPerRun(100, func() { c.Eval(dst, 1.5) }))
	assert.Zero(t, testing.AllocsPerRun(100, func() { c.EvalMany(dst, times) }))
	// A longer slice is used in part, a shorter one replaced.
	assert.Same(t, &dst[0], &c.Eval(dst, 1)[0])
	assert.Len(t, c.Eval(dst, 1), c.Len())
	assert.Len(t, c.Eval(dst[:1], 1), c.Len())
	many := c.EvalMany(nil, times)
	for k, at := range times {
		assert.Equal(t, c.Eval(nil, at), many[k*c.Len():(k+1)*c.Len()])
	}
}

func TestCompiledConcurrently(t *testing.T) {
	_, c := compiled(t, "x'' + x'/2 + x = t*exp(-t)\nx(0) = 1\nx'(0) = 0")
	var wg sync.WaitGroup
	want, bound := c.Eval(nil, 2), c.Bound(nil, 2)
	for range 8 {
		wg.Go(func() {
			for range 100 {
				assert.Equal(t, want, c.Eval(nil, 2))
				assert.Equal(t, bound, c.Bound(nil, 2))
			}
		})
	}
	wg.Wait()
}
