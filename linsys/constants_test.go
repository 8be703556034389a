package linsys_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// constantModels are models with pi, roots, exponentials and phase angles, with
// their responses as formulas. They are elementary: variation of constants for
// one state, undetermined coefficients for two.
var constantModels = []struct {
	name, model string
	formulas    []string
}{
	{"daily cycle", "x' = -x/2 + sin(2*pi*t/24); x(0) = 1",
		[]string{"x = (sin(pi*t/12)/2 - pi/12*cos(pi*t/12))/(1/4 + (pi/12)^2) + (1 + (pi/12)/(1/4 + (pi/12)^2))*exp(-t/2)"}},
	{"numeric phase", "x' = -x + sin(2*pi*t/24 + 1/3); x(0) = 0",
		[]string{"x = (sin(pi*t/12 + 1/3) - pi/12*cos(pi*t/12 + 1/3) - (sin(1/3) - pi/12*cos(1/3))*exp(-t))/(1 + (pi/12)^2)"}},
	{"phase that is a fraction of pi", "x' = -x + sin(2*pi*t/24 + pi/6); x(0) = 0",
		[]string{"x = (sin(pi*t/12 + pi/6) - pi/12*cos(pi*t/12 + pi/6) - (1/2 - pi*sqrt(3)/24)*exp(-t))/(1 + (pi/12)^2)"}},
	{"symbolic phase", "x' = -k*x + A0*sin(2*pi*t/24 + phi); x(0) = 0",
		[]string{"x = A0*(k*sin(pi*t/12 + phi) - pi/12*cos(pi*t/12 + phi) - (k*sin(phi) - pi/12*cos(phi))*exp(-k*t))/(k^2 + (pi/12)^2)"}},
	{"two phases", "x' = A*sin(w*t + phi) + B*cos(w*t - psi); x(0) = 0",
		[]string{"x = A/w*(cos(phi) - cos(w*t + phi)) + B/w*(sin(w*t - psi) + sin(psi))"}},
	{"double phase", "x' = sin(t + phi)^2; x(0) = 0",
		[]string{"x = t/2 - (sin(2*t + 2*phi) - sin(2*phi))/4"}},
	{"rate pi", "x' = -pi*x; x(0) = pi^2", []string{"x = pi^2*exp(-pi*t)"}},
	{"frequency pi", "x'' = -pi^2*x; x(0) = 1; x'(0) = pi", []string{"x = cos(pi*t) + sin(pi*t)"}},
	{"resonance at pi", "x'' = -pi^2*x + cos(pi*t); x(0) = 0; x'(0) = 0", []string{"x = t*sin(pi*t)/(2*pi)"}},
	{"square root as a rate", "x'' = 2*x; x(0) = 1; x'(0) = 0", []string{"x = (exp(sqrt(2)*t) + exp(-sqrt(2)*t))/2"}},
	{"square roots together", "x' = -sqrt(2)*x + exp(-sqrt(3)*t); x(0) = 0",
		[]string{"x = (exp(-sqrt(3)*t) - exp(-sqrt(2)*t))/(sqrt(2) - sqrt(3))"}},
	{"resonance of roots in disguise", "x' = -sqrt(8)*x + exp(-2*sqrt(2)*t); x(0) = sqrt(4)",
		[]string{"x = (t + 2)*exp(-sqrt(8)*t)"}},
	{"resonance at a root", "x'' + 2*x = cos(sqrt(2)*t); x(0) = 0; x'(0) = 0", []string{"x = t*sin(sqrt(2)*t)/sqrt(8)"}},
	{"nested roots", "x' = -sqrt(3 + 2*sqrt(2))*x + exp(-t)*exp(-sqrt(2)*t); x(0) = 0", []string{"x = t*exp(-(1 + sqrt(2))*t)"}},
	{"root of a root as a frequency", "x'' = -sqrt(2)*x; x(0) = 1; x'(0) = 0", []string{"x = cos(2^(1/4)*t)"}},
	{"cube root", "x' = -2^(1/3)*x + 4^(1/3); x(0) = 0", []string{"x = 2^(1/3)*(1 - exp(-2^(1/3)*t))"}},
	{"golden angle", "x' = -cos(pi/5)*x; x(0) = cos(2*pi/5)", []string{"x = (sqrt(5) - 1)/4*exp(-(1 + sqrt(5))/4*t)"}},
	{"heptagon", "x' = -(cos(pi/7) - cos(2*pi/7) + cos(3*pi/7))*x; x(0) = 1", []string{"x = exp(-t/2)"}},
	{"shifted exponential", "x' = -x + exp(-(t - 5)); x(0) = 0", []string{"x = exp(5)*t*exp(-t)"}},
	{"powers of e", "x' = -x; x(0) = exp(a)*exp(b) - exp(a + b) + exp(1)*exp(2) - exp(3) + exp(1/2)^2 - exp(1) + 1", []string{"x = exp(-t)"}},
	{"e as a rate", "x' = -exp(1)*x + 1; x(0) = 0", []string{"x = exp(-1)*(1 - exp(-exp(1)*t))"}},
	{"hidden zero of a coefficient", "x' = ((k^2 - 1)/(k - 1) - k - 1)*x + 1; x(0) = 0", []string{"x = t"}},
	{"hidden zero of roots", "x' = (sqrt(2)*sqrt(3) - sqrt(6))*x + 1; x(0) = 0", []string{"x = t"}},
	{"hidden zero of nested roots", "x' = (sqrt(2 + sqrt(3)) - (sqrt(6) + sqrt(2))/2)*x + 1; x(0) = 0", []string{"x = t"}},
	{"hidden zero of angles", "x' = (cos(a + b) - cos(a)*cos(b) + sin(a)*sin(b))*x + 1; x(0) = 0", []string{"x = t"}},
	{"triple angle", "x' = (sin(3*a) - 3*sin(a) + 4*sin(a)^3)*x + 1; x(0) = 0", []string{"x = t"}},
	{"root with a symbol beside", "x' = -k*x + sqrt(2)*A*exp(-k*t); x(0) = sqrt(3)", []string{"x = (sqrt(2)*A*t + sqrt(3))*exp(-k*t)"}},
	{"polynomial times oscillation", "x' = t*cos(pi*t); x(0) = 0", []string{"x = t*sin(pi*t)/pi + (cos(pi*t) - 1)/pi^2"}},
}

func TestConstantModels(t *testing.T) {
	for _, c := range constantModels {
		t.Run(c.name, func(t *testing.T) {
			r := symbolic(t, c.model)
			requireFormulas(t, r, c.formulas...)
			for _, s := range r.States() {
				text := r.State(s).String()
				back, err := expr.ParseFunction(text, expr.Limits{})
				require.NoError(t, err, text)
				assert.True(t, back.Equal(r.State(s)), "%s reads back as %s", text, back)
			}
		})
	}
}

// TestConstantOrigins: data at a time other than 0, a number or a symbol. The
// response is that of the shifted model, in the local time.
func TestConstantOrigins(t *testing.T) {
	ctx := context.Background()
	for _, c := range []struct {
		name, model, at string
		value           string // of x there
		formula         string // in t, for numbers that are rational
	}{
		{"exponential input at 1", "x' = -2*x + exp(-t); x(1) = 3", "1", "3", "exp(-t) + (3 - exp(-1))*exp(2)*exp(-2*t)"},
		{"exponential input at -1/2", "x' = -x + t*exp(-t); x(-1/2) = 0", "-1/2", "0", "(t^2 - 1/4)/2*exp(-t)"},
		{"oscillation at pi", "x'' = -x; x(pi) = 1; x'(pi) = 0", "3", "", "-cos(t)"},
		{"oscillation at 1", "x' = cos(t); x(1) = 0", "1", "0", "sin(t) - sin(1)"},
		{"forced at pi/4", "x' = -x + sin(t); x(pi/4) = 0", "0", "", "(sin(t) - cos(t))/2"},
		{"at a root", "x' = -x; x(sqrt(2)) = 1", "0", "", "exp(sqrt(2))*exp(-t)"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := symbolic(t, c.model)
			x := r.State("x")
			if c.value != "" {
				assert.Equal(t, c.value, x.Initial().String())
			}
			want, err := expr.ParseFunction(c.formula, expr.Limits{})
			require.NoError(t, err)
			for _, at := range []*big.Rat{new(big.Rat), big.NewRat(1, 1), big.NewRat(-7, 3), big.NewRat(22, 7)} {
				got, err := x.At(ctx, at, 40)
				require.NoError(t, err)
				digits, err := want.At(ctx, at, 40)
				require.NoError(t, err)
				assert.Equal(t, digits, got, "at %s: %s", at.RatString(), x)
			}
		})
	}
}

// TestSymbolicOrigin: the same with a symbol, at which numbers are put in later.
func TestSymbolicOrigin(t *testing.T) {
	ctx := context.Background()
	const model = "x' = -k*x + exp(-m*t) + sin(w*t); x(t0) = x0"
	r := symbolic(t, model)
	assert.Equal(t, "t0", r.State("x").Origin().String())
	assert.Equal(t, "x0", r.State("x").Initial().String())
	for _, src := range []string{"k = 2, m = 1, w = 3, t0 = 1, x0 = 5", "k = 1, m = 1, w = 1/2, t0 = -3/2, x0 = 0", "k = 0, m = 0, w = 0, t0 = 2, x0 = 1"} {
		at := values(t, src)
		got, err := r.With(at)
		require.NoError(t, err)
		want := symbolic(t, withDefinitions(model, at))
		require.True(t, got.State("x").Equal(want.State("x")), "%s: %s, want %s", src, got.State("x"), want.State("x"))
		for _, time := range []*big.Rat{at["t0"], big.NewRat(9, 4)} {
			a, err := got.State("x").At(ctx, time, 40)
			require.NoError(t, err)
			b, err := want.State("x").At(ctx, time, 40)
			require.NoError(t, err)
			assert.Equal(t, b, a)
		}
	}
	resonant, err := r.When(ctx, "m = k")
	require.NoError(t, err)
	direct := symbolic(t, "x' = -k*x + exp(-k*t) + sin(w*t); x(t0) = x0")
	assert.True(t, resonant.State("x").Equal(direct.State("x")), "%s, want %s", resonant.State("x"), direct.State("x"))
}

// TestConstantModes: eigenvalues over Q(pi) and Q(a) are enclosed and written.
func TestConstantModes(t *testing.T) {
	ctx := context.Background()
	for _, c := range []struct {
		model string
		roots []string
		value []string // real and imaginary part, to 30 digits, from memory
	}{
		{"x' = -pi*x", []string{"-pi"}, []string{"-3.14159265358979323846264338328"}},
		{"x'' = -pi^2*x", []string{"pi*i", "-pi*i"}, []string{"0", "0"}},
		{"x'' = 3*x", []string{"-sqrt(3)", "sqrt(3)"}, []string{"-1.73205080756887729352744634151", "1.73205080756887729352744634151"}},
		{"x' = -sqrt(2)*x; y' = x - sqrt(2)*y", []string{"-sqrt(2)"}, []string{"-1.41421356237309504880168872421"}},
	} {
		r := symbolic(t, c.model)
		var got, value []string
		for _, m := range r.Modes() {
			for _, e := range m.Roots {
				got = append(got, e.String())
				z, err := e.Enclose(ctx, 120)
				require.NoError(t, err)
				if sign, certain := z.Re.Sign(); certain && sign == 0 {
					value = append(value, "0")
					continue
				}
				value = append(value, text30(z.Re.Mid()))
			}
		}
		assert.Equal(t, c.roots, got)
		assert.Equal(t, c.value, value)
	}
}

func text30(x *big.Float) string { return x.Text('f', 29) }

// TestFieldsOfConstantsDoNotMix: what cannot be one field is refused, what can
// is put together.
func TestFieldsOfConstantsDoNotMix(t *testing.T) {
	a := symbolic(t, "x' = -pi*x; x(0) = 1").State("x")
	b := symbolic(t, "x' = -sqrt(2)*x; x(0) = k").State("x")
	c := symbolic(t, "x' = -x; x(0) = exp(1)").State("x")
	sum := a.Add(b).Add(c)
	want, err := expr.ParseFunction("exp(-pi*t) + k*exp(-sqrt(2)*t) + exp(1)*exp(-t)", expr.Limits{})
	require.NoError(t, err)
	assert.True(t, sum.Equal(want), "%s", sum)
	assert.False(t, a.Equal(b))
	assert.True(t, sum.Sub(b).Sub(c).Equal(a))
	assert.True(t, sum.Sub(sum).IsZero())
	pi := symbolic(t, "x' = -x; x(0) = 22/7").State("x")
	other := symbolic(t, "x' = -x; x(0) = pi").State("x")
	assert.False(t, pi.Equal(other), "22/7 is not pi")
}

// TestConstantsAtLimits: too much is refused by name, and soon.
func TestConstantsAtLimits(t *testing.T) {
	for _, c := range []struct{ model, about string }{
		{"x' = -x; x(0) = sqrt(2) + sqrt(3) + sqrt(5) + sqrt(7) + sqrt(11)", "degree"},
		{"x' = -x; x(0) = cos(pi/101)", "degree"},
		{"x' = -x; x(0) = sqrt(2) + 3^(1/3) + 5^(1/5)", "degree"},
	} {
		_, err := respond(c.model)
		var e *linsys.Error
		require.ErrorAs(t, err, &e, c.model)
		assert.Equal(t, expr.LimitExceeded, e.Kind, "%s: %v", c.model, err)
		assert.Contains(t, e.Message, c.about)
	}
	// Far multiples of an exponent count as independent of it.
	r, err := respond("x' = -x; x(0) = exp(1000*a) + exp(a) + cos(7853/10000) + cos(12341/10000)")
	require.NoError(t, err)
	r, err = r.With(map[string]*big.Rat{"a": big.NewRat(1, 1000)})
	require.NoError(t, err)
	x, err := r.At(context.Background(), new(big.Rat), 10)
	require.NoError(t, err)
	want := math.E + math.Exp(1e-3) + math.Cos(0.7853) + math.Cos(1.2341)
	got, err := strconv.ParseFloat(x[0], 64)
	require.NoError(t, err)
	assert.InDelta(t, want, got, 1e-8)
	_, err = respond(fmt.Sprintf("x' = -x; x(0) = 0%s", func() (s string) {
		for i := range 70 {
			s += fmt.Sprintf(" + exp(a%d)", i)
		}
		return s
	}()))
	var e *linsys.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.LimitExceeded, e.Kind)
}

// dense returns the model y' = A y of order n with a symbol for every entry and
// initial value.
func dense(n int, input string) string {
	var b strings.Builder
	for i := range n {
		fmt.Fprintf(&b, "y%d' = 0", i)
		for j := range n {
			fmt.Fprintf(&b, " + a%d%d*y%d", i, j, j)
		}
		fmt.Fprintf(&b, "%s; y%d(0) = c%d\n", strings.ReplaceAll(input, "#", fmt.Sprint(i)), i, i)
	}
	return b.String()
}

// reversible returns a chain of n members with steps back.
func reversible(n int) string {
	var b strings.Builder
	for i := 1; i <= n; i++ {
		fmt.Fprintf(&b, "n%d' = 0", i)
		if i > 1 {
			fmt.Fprintf(&b, " + k%d*n%d - r%d*n%d", i-1, i-1, i-1, i)
		}
		if i < n {
			fmt.Fprintf(&b, " - k%d*n%d + r%d*n%d", i, i, i, i+1)
		}
		fmt.Fprintf(&b, "; n%d(0) = %d\n", i, 1/i)
	}
	return b.String()
}

// TestLargeSymbolicModels: models whose expressions explode end with an answer
// or an error of kind LimitExceeded, soon, and writing what was answered does
// not panic.
func TestLargeSymbolicModels(t *testing.T) {
	for _, c := range []struct{ name, model string }{
		{"dense 4 with inputs", dense(4, " + b#*sin(w*t)")},
		{"dense 5", dense(5, "")},
		{"dense 5 with inputs", dense(5, " + b#*sin(w*t)")},
		{"dense 6 with inputs", dense(6, " + b#*sin(w*t)")},
		{"dense 8 with inputs", dense(8, " + b#*sin(w*t)")},
		{"chain of 9 with input", chain(9, " + F*sin(w*t)")},
		{"reversible chain of 4", reversible(4)},
		{"reversible chain of 5", reversible(5)},
		{"reversible chain of 6", reversible(6)},
		{"roots and phases", `y0' = sqrt(8)*y0 - y1 + k*y2 + sin(m*t + phi); y1' = cos(pi*t/12 + phi)
			(1 + k^2)*y2' = -m*y0 + exp(-1)*y2; y0(0) = m*m; y1(0) = 0; y2(0) = 0`},
		{"roots, a phase and a damped input", `y0' = k*k*y0 + sqrt(8)*y1 + m*exp(-m*t); k*y1' = -k*y0 - sqrt(3)*y1 + sin(m*t + phi)
			y0(0) = -m; y1(0) = 0`},
	} {
		t.Run(c.name, func(t *testing.T) {
			start := time.Now()
			r, err := respond(c.model)
			if err != nil {
				var e *linsys.Error
				require.ErrorAs(t, err, &e)
				assert.Equal(t, expr.LimitExceeded, e.Kind, e.Error())
				assert.Contains(t, e.Message, "terms", "what grew is named")
			} else {
				assert.True(t, r.Proof().Holds())
				assert.NotPanics(t, func() {
					f := r.State(r.States()[0])
					assert.NotEmpty(t, f.String())
					assert.NotEmpty(t, f.LaTeX())
					f.Remarks()
				})
				_, _, err := r.Conditions(context.Background())
				var e *linsys.Error
				if err != nil && !errors.As(err, &e) {
					t.Errorf("conditions: %v", err)
				}
			}
			assert.Less(t, time.Since(start), 90*time.Second) // with room for a busy machine and the race detector
		})
	}
}

// TestSymbolicCancellation: the end of a context ends the work within a fraction
// of a second.
func TestSymbolicCancellation(t *testing.T) {
	for _, model := range []string{dense(6, ""), dense(8, " + b#*t*exp(-q*t)"), dense(4, " + b#*sin(w*t)"), chain(12, " + F*sin(w*t)"), reversible(8)} {
		m, err := linsys.Read(model)
		require.NoError(t, err)
		for _, after := range []time.Duration{0, 5 * time.Millisecond, 50 * time.Millisecond} {
			ctx, cancel := context.WithTimeout(context.Background(), after)
			start := time.Now()
			_, err := m.ClosedForm(ctx)
			took := time.Since(start)
			cancel()
			assert.Less(t, took, after+4*time.Second, "%.60s ... (%v)", model, err)
			if after == 0 {
				var e *linsys.Error
				require.ErrorAs(t, err, &e)
				assert.Equal(t, expr.Cancelled, e.Kind)
			}
		}
	}
}

// TestConstantFieldCancellation: roots of a high degree beside pi and e, in the
// characteristic polynomial of a model without symbols. The end of a context
// ends the work.
func TestConstantFieldCancellation(t *testing.T) {
	for _, model := range []string{
		"y0' = (exp(-1) - sqrt(2))*y0 + sqrt(3)*y1; y1' = (pi/12 - sqrt(2))*y0 - 1/2*y2; y2' = exp(-1)*y0 + cos(pi/7)*y2",
		`y0' = sqrt(3)*y0 + cos(pi*t/12 + 1/3); y1' = y0 + 1/2*y1 + (exp(-1) - pi/12)*y2 + t*cos(pi*t)
			3*y2' = (sqrt(2) - pi/12)*y0 - pi/12*y1; y0(1/2) = 0; y1(1/2) = 0; y2(1/2) = 1`,
	} {
		m, err := linsys.Read(model)
		require.NoError(t, err)
		ctx, cancel := context.WithTimeout(context.Background(), 100*time.Millisecond)
		start := time.Now()
		r, err := m.ClosedForm(ctx)
		took := time.Since(start)
		cancel()
		assert.Less(t, took, 8*time.Second, model)
		var e *linsys.Error
		if err == nil {
			assert.True(t, r.Proof().Holds())
		} else if assert.ErrorAs(t, err, &e) {
			assert.Equal(t, expr.Cancelled, e.Kind)
		}
	}
}
