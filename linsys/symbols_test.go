package linsys_test

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

const (
	oral       = "g' = -ka*g; x' = ka*g - ke*x; g(0) = D; x(0) = 0"
	oscillator = "x'' + w0^2*x = F*cos(w*t); x(0) = 0; x'(0) = 0"
)

// conditionCases are the conditions of the model and those of the formula, both
// sorted, in the words of the output.
var conditionCases = []struct {
	name, model    string
	assume         string
	onModel, onUse []string
}{
	{"rates", oral, "", nil, []string{"ka != ke"}},
	{"rates, assumed apart", oral, "ka > ke", nil, nil},
	{"rates, assumed apart the other way", oral, "ke > ka", nil, nil},
	{"rates, assumed unequal", oral, "ke != ka", nil, nil},
	{"rates, assumed positive", oral, "ka > 0, ke > 0", nil, []string{"ka != ke"}},
	{"rate", "x' = F - k*x; x(0) = 0", "", nil, []string{"k != 0"}},
	{"rate, positive", "x' = F - k*x; x(0) = 0", "k > 0", nil, nil},
	{"rate, negative", "x' = F - k*x; x(0) = 0", "k < 0", nil, nil},
	{"rate, greater than a number", "x' = F - k*x; x(0) = 0", "k >= 2", nil, nil},
	{"rate, not negative", "x' = F - k*x; x(0) = 0", "k >= 0", nil, []string{"k != 0"}},
	{"frequencies", oscillator, "w > 0, w0 > 0", nil, []string{"w != w0"}},
	{"frequencies, ordered", oscillator, "w > w0 > 0", nil, nil},
	{"resonance", "x'' + w^2*x = F*cos(w*t); x(0) = 0; x'(0) = 0", "", nil, []string{"w != 0"}},
	{"resonance, positive", "x'' + w^2*x = F*cos(w*t); x(0) = 0; x'(0) = 0", "w > 0", nil, nil},
	{"mass", "m*x'' = -k*x + F; x(0) = 0; x'(0) = 0", "", []string{"m != 0"}, []string{"k != 0"}},
	{"mass, positive", "m*x'' = -k*x + F; x(0) = 0; x'(0) = 0", "m > 0", nil, []string{"k != 0"}},
	{"mass and stiffness, product positive", "m*x'' = -k*x + F; x(0) = 0; x'(0) = 0", "m*k > 0", nil, nil},
	{"denominator", "x' = -x/(a - b); x(0) = 1", "", []string{"a != b"}, nil},
	{"denominators without duplicates", "x' = -x/(a - b) + y/(b - a)^2; y' = -y/(a^2 - b^2); x(0) = 1; y(0) = 0", "a + b > 0", []string{"a != b"}, nil},
	{"model's condition is not the formula's too", "(a - b)*x' = -x + t; x(0) = 1", "", []string{"a != b"}, nil},
	{"three rates", chain(3, ""), "", nil, []string{"k1 != k2", "k1 != k3", "k2 != k3"}},
	{"three rates, ordered", chain(3, ""), "k1 > k2 > k3", nil, nil},
	{"three rates, ordered in two assumptions", chain(3, ""), "k1 > k2, k2 > k3", nil, nil},
	{"three rates, partly ordered", chain(3, ""), "k1 > k2, k1 > k3", nil, []string{"k2 != k3"}},
	{"sum of positives", "x' = 1 - (k1 + k2 + 3)*x; x(0) = 0", "k1 > 0, k2 > 0", nil, nil},
	{"sum of products of positives", "x' = 1 - (k1*k2 + k3^2*k1)*x; x(0) = 0", "k1 > 0, k2 > 0, k3 > 0", nil, nil},
	{"difference of squares", "x' = 1 - (k1^2 - k2^2)*x; x(0) = 0", "k1 > k2 > 0", nil, nil},
	{"square and a positive number", "x' = 1 - (k^2 + 1)*x; x(0) = 0", "", nil, nil},
	{"equal numbers", "x' = 1 - (pi - 3)*k*x; x(0) = 0", "k > 0", nil, nil},
	{"between", "x' = 1 - (1 - a)*x; x(0) = 0", "0 < a < 1", nil, nil},
	{"exponentials are positive", "x' = 1 - (exp(a) + exp(b))*x; x(0) = 0", "", nil, nil},
	{"exponentials", "(exp(a) - 1)*x' = -x; x(0) = 1", "", []string{"exp(a) != 1"}, nil},
	{"root and a positive symbol", "x' = 1 - (k + sqrt(2))*x; x(0) = 0", "k > 0", nil, nil},
	{"root beside symbols", "x' = 1 - (sqrt(2)*k + m)*x; x(0) = 0", "k > 0, m > 0", nil, nil},
	{"root", "(sqrt(2)*b - 2)*x' = -x + 1; x(0) = 3", "", []string{"b != sqrt(2)"}, nil},
	{"sum of squares", "x' = 1 - (a^2 + b^2)*x; x(0) = 0", "", nil, []string{"a^2 + b^2 != 0"}},
	{"cosine", "cos(phi)*x' = -x; x(0) = 1", "", []string{"cos(phi) != 0"}, nil},
	{"sine", "x' = -x/sin(phi); x(0) = 1", "", []string{"sin(phi) != 0"}, nil},
	{"two tanks", "V1*c1' = q*(c0 - c1); V2*c2' = q*(c1 - c2); c1(0) = 0; c2(0) = 0", "",
		[]string{"V1 != 0", "V2 != 0"}, []string{"V1 != V2"}},
	{"two tanks, positive", "V1*c1' = q*(c0 - c1); V2*c2' = q*(c1 - c2); c1(0) = 0; c2(0) = 0", "V1 > 0, V2 > 0, q > 0",
		nil, []string{"V1 != V2"}},
	{"algebraic loop", "x' = -y; y = a*y + x; x(0) = 1", "", []string{"a != 1"}, nil},
	{"side conditions", "x' = -k*x; a*x(0) = b", "", []string{"a != 0"}, nil},
	{"nothing to exclude", "x' = -k*x + a*exp(-k*t); x(0) = b", "", nil, nil},
}

func TestConditions(t *testing.T) {
	for _, c := range conditionCases {
		t.Run(c.name, func(t *testing.T) {
			var assume []string
			if c.assume != "" {
				assume = []string{c.assume}
			}
			r := symbolic(t, c.model, assume...)
			model, formula, err := r.Conditions(context.Background())
			require.NoError(t, err)
			assert.ElementsMatch(t, c.onModel, model, "of the model")
			assert.ElementsMatch(t, c.onUse, formula, "of the formula %s", r.State(r.States()[0]))
		})
	}
}

// TestCancelledParameters: what cancels leaves no trace.
func TestCancelledParameters(t *testing.T) {
	ctx := context.Background()
	for _, model := range []string{
		"x' = -x + a - a; x(0) = 1",
		"x' = -x*(b + 1)/(b + 1); x(0) = 1",
		"a*x' = -a*x; x(0) = 1",
		"x' = -((k^2 - 1)/(k - 1) - k)*x; x(0) = 1",
		"x' = -x + 0*exp(a); x(0) = cos(b)^2 + sin(b)^2",
		"x' = -x; x(0) = exp(a)*exp(b)/exp(a + b)",
		"x' = -x; x(0) = (2*sin(b)*cos(b) + 1)/(sin(2*b) + 1)",
	} {
		r := symbolic(t, model)
		assert.Empty(t, r.Parameters(), model)
		assert.Equal(t, "exp(-t)", r.State("x").String(), model)
		onModel, onUse, err := r.Conditions(ctx)
		require.NoError(t, err)
		assert.Empty(t, onUse, model)
		if !strings.HasPrefix(model, "a*x'") {
			assert.Empty(t, onModel, model)
		}
	}
}

func TestSymbolicErrors(t *testing.T) {
	for _, c := range []struct {
		name, model string
		kind        expr.Kind
		about       string
	}{
		{"identically singular", "((k^2 - 1)/(k - 1) - k - 1)*x' = -x + 1; y' = x; x(0) = 0; y(0) = 0", expr.SideConditions, ""},
		{"identically singular system", "x' = a*y' + 1; y' = x'/a; x(0) = 0; y(0) = 0", expr.Singular, ""},
		{"division by a hidden zero", "x' = x/((k^2 - 1)/(k - 1) - k - 1); x(0) = 1", expr.Singular, ""},
		{"division by a hidden zero of cosines", "x' = x/(cos(b)^2 + sin(b)^2 - 1); x(0) = 1", expr.Singular, ""},
		{"division by a hidden zero of roots", "x' = x/(sqrt(8) - 2*sqrt(2)); x(0) = 1", expr.Singular, ""},
		{"division by a hidden zero of exponentials", "x' = x/(exp(a)*exp(-a) - 1); x(0) = 1", expr.Singular, ""},
		{"product of states with a symbol", "x' = k*x*y; y' = 1", expr.Nonlinear, ""},
		{"coefficient in time", "x' = k*t*x", expr.TimeVarying, ""},
		{"contradictory conditions", "x' = -k*x; x(0) = a; x(0) = b", expr.SideConditions, ""},
		{"too few conditions", "x'' = -k*x; x(0) = a", expr.SideConditions, ""},
		{"not a number", "x' = -inf*x", expr.OutsideClass, "inf"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := respond(c.model)
			var e *linsys.Error
			require.ErrorAs(t, err, &e)
			assert.Equal(t, c.kind, e.Kind, e.Error())
			assert.Contains(t, e.Message, c.about)
		})
	}
}

// TestViolatedConditions: values that the model excludes are refused by name,
// values that only the formula excludes are not.
func TestViolatedConditions(t *testing.T) {
	ctx := context.Background()
	for _, c := range []struct{ model, value, named string }{
		{"m*x'' = -k*x + F; x(0) = 0; x'(0) = 0", "m = 0", "m != 0"},
		{"x' = -x/(a - b); x(0) = 1", "a = b", "a != b"},
		{"x' = -x/(a - b); x(0) = 1", "b = a", "a != b"},
		{"(a^2 - 2)*x' = -x; x(0) = 1", "a = sqrt(2)", "a^2 != 2"},
		{"(pi*a - 2)*x' = -x; x(0) = 1", "a = 2/pi", "pi*a != 2"},
		{"(exp(a) - exp(b))*x' = -x; x(0) = 1", "a = b", "exp(a) != exp(b)"},
		{"x' = -x/cos(phi); x(0) = 1", "phi = pi/2", "cos(phi) != 0"},
		{"x' = -y; y = a*y + x; x(0) = 1", "a = 1", "a != 1"},
		{"x' = -k*x; a*x(0) = b", "a = 0", "a != 0"},
		{"(sqrt(2)*a - 2)*x' = -x; x(0) = 1", "a = sqrt(2)", "a != sqrt(2)"},
		{"x' = -x/(cos(phi) + 1); x(0) = 1", "phi = pi", "cos(phi) != -1"},
	} {
		r := symbolic(t, c.model)
		_, err := r.When(ctx, c.value)
		var e *linsys.Error
		require.ErrorAs(t, err, &e, "%s with %s", c.model, c.value)
		assert.Equal(t, expr.Singular, e.Kind)
		assert.Contains(t, e.Message, c.named)
	}
	for _, c := range []struct{ model, value, state, formula string }{
		{oral, "ka = ke", "x", "D*ke*t*exp(-ke*t)"},
		{"x' = F - k*x; x(0) = 0", "k = 0", "x", "F*t"},
		{"x' = -x/cos(phi); x(0) = 1", "phi = pi", "x", "exp(t)"},
		{"x' = -x/sin(phi); x(0) = 1", "phi = pi/2", "x", "exp(-t)"},
		{"x' = (k - 1)*x + 1/(k^2 + 1); x(0) = 0", "k = 1", "x", "t/2"},
		{"x' = (exp(a) - 1)*x + 1; x(0) = 0", "a = 0", "x", "t"},
		{"x' = (sqrt(2)*a - 2)*x + 1; x(0) = 1", "a = sqrt(2)", "x", "t + 1"},
		{"(sqrt(2)*a - 2)*x' = -x; x(0) = 1", "a = -sqrt(2)", "x", "exp(t/4)"},
		{"x' = -x/(cos(phi) + 1); x(0) = 1", "phi = pi/3", "x", "exp(-2*t/3)"},
	} {
		r := symbolic(t, c.model)
		special, err := r.When(ctx, c.value)
		require.NoError(t, err, "%s with %s", c.model, c.value)
		requireFormulas(t, special, c.state+" = "+c.formula)
	}
}

// confluentCases are excluded cases: equations, the model with them put in by
// hand, and formulas for what comes out (from memory).
var confluentCases = []struct {
	name, model string
	when        string
	special     string
	formulas    []string
}{
	{"equal rates", oral, "ka = ke", "g' = -ke*g; x' = ke*g - ke*x; g(0) = D; x(0) = 0", []string{"x = D*ke*t*exp(-ke*t)"}},
	{"equal rates, the other name", oral, "ke = ka", "g' = -ka*g; x' = ka*g - ka*x; g(0) = D; x(0) = 0", []string{"x = D*ka*t*exp(-ka*t)"}},
	{"equal rates, as a difference", oral, "ka - ke = 0", "g' = -ke*g; x' = ke*g - ke*x; g(0) = D; x(0) = 0", []string{"x = D*ke*t*exp(-ke*t)"}},
	{"three equal rates", chain(3, ""), "k2 = k1, k3 = k1",
		"n1' = -k1*n1; n2' = k1*n1 - k1*n2; n3' = k1*n2 - k1*n3; n1(0) = N0; n2(0) = 0; n3(0) = 0",
		[]string{"n2 = N0*k1*t*exp(-k1*t)", "n3 = N0*(k1*t)^2/2*exp(-k1*t)"}},
	{"the outer two of three", chain(3, ""), "k3 = k1",
		"n1' = -k1*n1; n2' = k1*n1 - k2*n2; n3' = k2*n2 - k1*n3; n1(0) = N0; n2(0) = 0; n3(0) = 0",
		[]string{"n3 = N0*k1*k2*((exp(-k2*t) - exp(-k1*t))/(k1 - k2)^2 - t*exp(-k1*t)/(k1 - k2))"}},
	{"a rate of zero", oral, "ke = 0", "g' = -ka*g; x' = ka*g; g(0) = D; x(0) = 0", []string{"x = D*(1 - exp(-ka*t))"}},
	{"resonance", oscillator, "w = w0", "x'' + w0^2*x = F*cos(w0*t); x(0) = 0; x'(0) = 0", []string{"x = F*t*sin(w0*t)/(2*w0)"}},
	{"resonance with the opposite sign", oscillator, "w = -w0", "x'' + w0^2*x = F*cos(w0*t); x(0) = 0; x'(0) = 0", []string{"x = F*t*sin(w0*t)/(2*w0)"}},
	{"no restoring force", oscillator, "w0 = 0", "x'' = F*cos(w*t); x(0) = 0; x'(0) = 0", []string{"x = F*(1 - cos(w*t))/w^2"}},
	{"neither", oscillator, "w0 = 0, w = 0", "x'' = F; x(0) = 0; x'(0) = 0", []string{"x = F*t^2/2"}},
	{"critical damping", "x'' + 2*a*x' + w0^2*x = w0^2; x(0) = 0; x'(0) = 0", "a = w0",
		"x'' + 2*w0*x' + w0^2*x = w0^2; x(0) = 0; x'(0) = 0", []string{"x = 1 - (1 + w0*t)*exp(-w0*t)"}},
	{"critical damping by its ratio", "x'' + 2*z*w0*x' + w0^2*x = 0; x(0) = x0; x'(0) = v0", "z = 1",
		"x'' + 2*w0*x' + w0^2*x = 0; x(0) = x0; x'(0) = v0", []string{"x = (x0 + (v0 + w0*x0)*t)*exp(-w0*t)"}},
	{"input at the rate", "x' = -k*x + A*exp(-m*t); x(0) = 0", "m = k", "x' = -k*x + A*exp(-k*t); x(0) = 0", []string{"x = A*t*exp(-k*t)"}},
	{"input at a double rate", "x'' + 2*k*x' + k^2*x = A*exp(-m*t); x(0) = 0; x'(0) = 0", "m = k",
		"x'' + 2*k*x' + k^2*x = A*exp(-k*t); x(0) = 0; x'(0) = 0", []string{"x = A*t^2/2*exp(-k*t)"}},
	{"equal tanks", "V1*c1' = q*(c0 - c1); V2*c2' = q*(c1 - c2); c1(0) = 0; c2(0) = 0", "V2 = V1",
		"V1*c1' = q*(c0 - c1); V1*c2' = q*(c1 - c2); c1(0) = 0; c2(0) = 0", []string{"c2 = c0*(1 - (1 + q*t/V1)*exp(-q*t/V1))"}},
}

func TestWhen(t *testing.T) {
	ctx := context.Background()
	for _, c := range confluentCases {
		t.Run(c.name, func(t *testing.T) {
			got, err := symbolic(t, c.model).When(ctx, c.when)
			require.NoError(t, err)
			require.True(t, got.Proof().Holds())
			requireFormulas(t, got, c.formulas...)
			want := symbolic(t, c.special)
			for _, s := range want.States() {
				assert.True(t, got.State(s).Equal(want.State(s)), "%s: %s, want %s", s, got.State(s), want.State(s))
				assert.True(t, got.Steady(s).Equal(want.Steady(s)), "steady %s: %s, want %s", s, got.Steady(s), want.Steady(s))
				assert.True(t, got.Transient(s).Equal(want.Transient(s)))
			}
		})
	}
}

// TestWhenIsTheLimit: the general formula at parameters that approach an
// excluded case encloses values that approach those of the special one, at the
// speed of the parameters.
func TestWhenIsTheLimit(t *testing.T) {
	ctx := context.Background()
	at := big.NewRat(7, 5)
	for _, c := range []struct{ model, when, numbers, moved, state string }{
		{oral, "ka = ke", "ke = 2/3, D = 5", "ka = 2/3", "x"},
		{oscillator, "w = w0", "w0 = 3/2, F = 2", "w = 3/2", "x"},
		{"x'' + 2*a*x' + w0^2*x = w0^2; x(0) = 0; x'(0) = 0", "a = w0", "w0 = 5/4", "a = 5/4", "x"},
		{chain(3, ""), "k3 = k1", "k1 = 1/2, k2 = 3, N0 = 10", "k3 = 1/2", "n3"},
		{"x' = F - k*x; x(0) = 0", "k = 0", "F = 3", "k = 0", "x"},
	} {
		general := symbolic(t, c.model)
		special, err := general.When(ctx, c.when)
		require.NoError(t, err)
		special, err = special.With(values(t, c.numbers))
		require.NoError(t, err)
		limit, err := special.State(c.state).Enclose(ctx, at, 200)
		require.NoError(t, err)
		// Function.With puts numbers into the formula and does not solve again.
		formula := general.State(c.state)
		previous := 0.0
		for e := 4; e <= 64; e *= 2 {
			step := new(big.Rat).SetFrac(big.NewInt(1), new(big.Int).Lsh(big.NewInt(1), uint(e)))
			numbers := values(t, c.numbers)
			for name, x := range values(t, c.moved) {
				numbers[name] = x.Add(x, step)
			}
			near, err := formula.With(numbers)
			require.NoError(t, err)
			ball, err := near.Enclose(ctx, at, 300)
			require.NoError(t, err)
			difference := ball.Sub(limit, 200)
			slope := difference.MulPow2(int64(e))
			f, _ := slope.Mid().Float64()
			require.NotZero(t, f, "%s at a distance of 2^-%d", c.when, e)
			require.Less(t, max(f, -f), 1000.0, "%s at a distance of 2^-%d", c.when, e)
			if e > 16 {
				assert.InEpsilon(t, previous, f, 1e-3, "%s: difference quotients approach a slope", c.when)
			}
			previous = f
		}
	}
}

// TestWhenErrors: what When refuses, it refuses by name.
func TestWhenErrors(t *testing.T) {
	r := symbolic(t, "x' = -k*x; x(0) = a")
	for _, c := range []struct {
		equations string
		kind      expr.Kind
	}{
		{"k > 1", expr.Syntax},
		{"k", expr.Syntax},
		{"", expr.Syntax},
		{"k^2 = 1", expr.OutsideClass},
		{"k = k", expr.OutsideClass},
		{"k = k + 1", expr.OutsideClass},
		{"1 = 2", expr.OutsideClass},
		{"q = k", expr.OutsideClass},
	} {
		_, err := r.When(context.Background(), c.equations)
		var e *linsys.Error
		require.ErrorAs(t, err, &e, c.equations)
		assert.Equal(t, c.kind, e.Kind, "%q: %v", c.equations, err)
	}
	_, err := r.With(map[string]*big.Rat{"zeta": big.NewRat(1, 1)})
	require.Error(t, err)
	assert.Contains(t, err.Error(), `"zeta"`)
	_, err = r.With(map[string]*big.Rat{"k": nil})
	require.Error(t, err)
	// A symbol must not become one with a free constant.
	_, err = symbolic(t, "x' = -k*x").Substitute(context.Background(), map[string]expr.Node{"k": expr.Sym("C1")})
	require.Error(t, err)
	assert.Contains(t, err.Error(), "C1")
}

// TestContradictedAssumptions: assumptions stay after a substitution, and values
// against them are refused.
func TestContradictedAssumptions(t *testing.T) {
	ctx := context.Background()
	r := symbolic(t, oscillator, "w0 > 0, w > 0")
	same, err := r.When(ctx, "w = w0")
	require.NoError(t, err)
	model, formula, err := same.Conditions(ctx)
	require.NoError(t, err)
	assert.Empty(t, model)
	assert.Empty(t, formula, "w0 > 0 is still assumed")
	for _, value := range []string{"w = -w0", "w = 0", "w0 = -1/2"} {
		_, err := r.When(ctx, value)
		var e *linsys.Error
		require.ErrorAs(t, err, &e, value)
		assert.Equal(t, expr.NeedsAssumption, e.Kind)
	}
	for _, never := range []string{"1 < 0", "k > 0, 1 > 2", "x > 0", "t > 0", "k = 1", "k >"} {
		m, err := linsys.Read("x' = -k*x; x(0) = 1")
		require.NoError(t, err)
		_, err = m.Assume(never)
		var e *linsys.Error
		require.ErrorAs(t, err, &e, never)
	}
}

// TestHostileNames: symbols and states may have any name, and what is written
// reads back.
func TestHostileNames(t *testing.T) {
	const template = "X'' + A*X' + B*X = C*cos(D*t) + E; X(0) = G; X'(0) = 0"
	for _, names := range [][]string{
		{"x", "exp1", "pi2", "sin_", "cos2", "sqrt1", "t0"},
		{"z", "C1", "C2", "K1", "r", "z1", "s"},
		{"C1", "z", "r", "q", "s", "c1", "const1"},
		{"func", "type", "range", "go", "chan", "map", "return"},
		{"x₁", "λ", "ω", "Δ", "φ₀", "μ₁₂", "ξ"},
		{"e", "i", "E", "I", "j", "π2", "nil"},
		{"root", "sumroots", "math", "len", "float64", "error", "string"},
		{"s", "x_1", "x_12", "x1", "x12", "X", "Y"},
	} {
		pairs := []string{}
		for i, letter := range []string{"X", "A", "B", "C", "D", "E", "G"} {
			pairs = append(pairs, letter, names[i])
		}
		// cos stays: no letter of the template occurs in it.
		model := strings.NewReplacer(pairs...).Replace(template)
		t.Run(names[0]+" "+names[1], func(t *testing.T) {
			r := symbolic(t, model)
			assert.ElementsMatch(t, names[1:], r.Parameters())
			f := r.State(names[0])
			at := map[string]*big.Rat{}
			for i, name := range names[1:] {
				at[name] = big.NewRat(int64(2*i+1), int64(i+2))
			}
			numeric, err := r.With(at)
			require.NoError(t, err)
			plain := symbolic(t, withDefinitions(template, rename(names[1:], at)))
			assert.True(t, numeric.State(names[0]).Equal(plain.State("X")), "%s, want %s", numeric.State(names[0]), plain.State("X"))
			assert.NotEmpty(t, expr.LaTeX(f.Node()))
			assert.NotEmpty(t, expr.MathML(f.Node()))
			general := symbolic(t, strings.Split(model, ";")[0])
			require.Len(t, general.Constants(), 2)
			for _, c := range general.Constants() {
				assert.NotContains(t, names, c, "a free constant has a name of its own")
			}
			_, _, err = r.Conditions(context.Background())
			require.NoError(t, err)
		})
	}
}

func rename(names []string, at map[string]*big.Rat) map[string]*big.Rat {
	out := map[string]*big.Rat{}
	for i, letter := range []string{"A", "B", "C", "D", "E", "G"} {
		out[letter] = at[names[i]]
	}
	return out
}

// TestNamedRootsAndNames: the variable of a sum over roots is none of the
// symbols, and that of a polynomial in a condition neither.
func TestNamedRootsAndNames(t *testing.T) {
	for _, names := range [][]string{{"z", "s", "r"}, {"s", "z", "q"}, {"r", "r1", "z"}, {"z2", "z", "s2"}} {
		r := symbolic(t, fmt.Sprintf("u' = v; v' = y; y' = -%s*u - %s*v - %s*y; u(0) = 1; v(0) = 0; y(0) = 0", names[0], names[1], names[2]))
		assert.ElementsMatch(t, names, r.Parameters())
		text := r.State("u").String()
		back, err := expr.ParseFunction(text, expr.Limits{})
		require.NoError(t, err, text)
		assert.True(t, back.Equal(r.State("u")), text)
		_, formula, err := r.Conditions(context.Background())
		require.NoError(t, err)
		require.Len(t, formula, 1)
		for _, n := range names {
			assert.NotContains(t, formula[0], "of "+n+"^3", formula[0])
		}
	}
}

// randomModel is a model of n states with coefficients from small integers and
// symbols; some have a singular leading matrix.
func randomModel(rnd *rand.Rand, singular bool) (text string, symbols []string) {
	n := 2 + rnd.IntN(2)
	symbols = []string{"k1", "k2", "w", "F"}[:1+rnd.IntN(4)]
	entry := func() string {
		switch rnd.IntN(5) {
		case 0, 1:
			return "0"
		case 2:
			return symbols[rnd.IntN(len(symbols))]
		case 3:
			return "(" + symbols[rnd.IntN(len(symbols))] + " - " + fmt.Sprint(rnd.IntN(3)) + ")"
		}
		return fmt.Sprintf("(%d)", rnd.IntN(7)-3)
	}
	inputs := []string{"", " + exp(-k1*t)", " + 2*t", " + k1*cos(2*t)", " + " + symbols[len(symbols)-1], " - sin(k1*t)"}
	var b strings.Builder
	for i := range n {
		left := fmt.Sprintf("y%d'", i+1)
		if singular && i == n-1 {
			left = fmt.Sprintf("y%d", n) // an algebraic relation
		}
		fmt.Fprintf(&b, "%s = 0", left)
		for j := range n {
			if singular && i == n-1 && j == i {
				continue
			}
			fmt.Fprintf(&b, " + %s*y%d", entry(), j+1)
		}
		b.WriteString(inputs[rnd.IntN(len(inputs))] + "\n")
	}
	for i := range n {
		if !singular || i < n-1 {
			fmt.Fprintf(&b, "y%d(0) = %s\n", i+1, entry())
		}
	}
	return b.String(), symbols
}

// TestRandomSymbolicModels compares symbolic responses with numbers put in with
// the numeric models; small values are frequent, so that excluded cases occur.
func TestRandomSymbolicModels(t *testing.T) {
	rnd := rand.New(rand.NewPCG(4, 2))
	used := 0
	for round := range 60 {
		text, symbols := randomModel(rnd, round%4 == 3)
		r, err := respond(text)
		require.NoError(t, err, text)
		require.True(t, r.Proof().Holds(), text)
		_, formula, err := r.Conditions(context.Background())
		require.NoError(t, err, text)
		for i, c := range formula {
			assert.NotContains(t, formula[:i], c, text)
		}
		for range 3 {
			at := map[string]*big.Rat{}
			for _, s := range symbols {
				at[s] = big.NewRat(int64(rnd.IntN(7)-3), int64(1+rnd.IntN(2)))
			}
			requireInstance(t, r, text, at)
			used += len(r.Parameters())
		}
	}
	assert.Greater(t, used, 200, "models with symbols")
}

// TestRandomConditions: where a condition of the model evaluates to zero the
// values are refused, elsewhere they are not.
func TestRandomConditions(t *testing.T) {
	rnd := rand.New(rand.NewPCG(4, 3))
	refused, taken := 0, 0
	for range 60 {
		a, b, c := rnd.IntN(3)-1, rnd.IntN(3)-1, rnd.IntN(3)-1
		text := fmt.Sprintf("(%d*a + %d*b + %d)*x' + (a*b - %d)*y' = -x; x' - y' = y; x(0) = 1; y(0) = a", a, b, c, c)
		r, err := respond(text)
		if err != nil { // singular for all values
			var e *linsys.Error
			require.ErrorAs(t, err, &e, text)
			continue
		}
		for range 4 {
			va, vb := int64(rnd.IntN(5)-2), int64(rnd.IntN(5)-2)
			at := map[string]*big.Rat{"a": big.NewRat(va, 1), "b": big.NewRat(vb, 1)}
			lead := int64(a)*va + int64(b)*vb + int64(c) + va*vb - int64(c)
			_, err := r.With(at)
			if lead == 0 {
				var e *linsys.Error
				require.ErrorAs(t, err, &e, "%s at a = %d, b = %d", text, va, vb)
				assert.Equal(t, expr.Singular, e.Kind)
				assert.Contains(t, e.Message, "!=")
				refused++
			} else {
				require.NoError(t, err, "%s at a = %d, b = %d", text, va, vb)
				requireInstance(t, r, text, at)
				taken++
			}
		}
	}
	assert.Greater(t, refused, 20)
	assert.Greater(t, taken, 50)
}

// TestSymbolicDeterminism: the same text has the same output.
func TestSymbolicDeterminism(t *testing.T) {
	for _, model := range []string{oral, oscillator, rlc, mammillary, general2, absorber, chain(5, " + F*sin(w*t)")} {
		var first []string
		for range 3 {
			r := symbolic(t, model)
			var out []string
			for _, s := range r.States() {
				out = append(out, r.State(s).String(), r.Steady(s).LaTeX())
			}
			a, b, err := r.Conditions(context.Background())
			require.NoError(t, err)
			out = slices.Concat(out, a, b, r.Parameters())
			if first == nil {
				first = out
			}
			require.Equal(t, first, out)
		}
	}
}
