package linsys_test

import (
	"context"
	"fmt"
	"math/big"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// symbolic solves a model under assumptions; its proof must hold.
func symbolic(t *testing.T, model string, assume ...string) *linsys.Response {
	t.Helper()
	m, err := linsys.Read(model)
	require.NoError(t, err, model)
	m, err = m.Assume(assume...)
	require.NoError(t, err, model)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err, model)
	require.True(t, r.Proof().Holds(), model)
	return r
}

// requireFormulas compares states with formulas, given as "state = formula",
// identically in the symbols.
func requireFormulas(t *testing.T, r *linsys.Response, formulas ...string) {
	t.Helper()
	for _, f := range formulas {
		state, formula, ok := strings.Cut(f, " = ")
		require.True(t, ok, f)
		want, err := expr.ParseFunction(formula, expr.Limits{})
		require.NoError(t, err, formula)
		require.True(t, r.State(state).Equal(want), "%s = %s, want %s", state, r.State(state), formula)
		// Equal can tell: a formula that is off by one is another one.
		off, err := expr.ParseFunction(formula+" + 1", expr.Limits{})
		require.NoError(t, err)
		require.False(t, r.State(state).Equal(off))
	}
}

// values reads "k = 1/2, V = 3".
func values(t *testing.T, src string) map[string]*big.Rat {
	t.Helper()
	out := map[string]*big.Rat{}
	for part := range strings.SplitSeq(src, ",") {
		name, text, ok := strings.Cut(part, "=")
		require.True(t, ok, src)
		x, ok := new(big.Rat).SetString(strings.TrimSpace(text))
		require.True(t, ok, src)
		out[strings.TrimSpace(name)] = x
	}
	return out
}

// withDefinitions returns a model with definitions of its symbols.
func withDefinitions(model string, at map[string]*big.Rat) string {
	names := make([]string, 0, len(at))
	for name := range at {
		names = append(names, name)
	}
	slices.Sort(names)
	for _, name := range names {
		model += fmt.Sprintf("\n%s = %s", name, at[name].RatString())
	}
	return model
}

// requireInstance substitutes numbers into a response and compares it with the
// response of the model in which they are definitions.
func requireInstance(t *testing.T, r *linsys.Response, model string, at map[string]*big.Rat) *linsys.Response {
	t.Helper()
	given := map[string]*big.Rat{}
	known := append(r.Model().Parameters(), r.Parameters()...)
	for name, x := range at {
		if slices.Contains(known, name) {
			given[name] = x
		}
	}
	got, err := r.With(given)
	require.NoError(t, err, "%v", at)
	require.True(t, got.Proof().Holds())
	want := symbolic(t, withDefinitions(model, at))
	require.Empty(t, want.Parameters())
	for _, s := range want.States() {
		require.True(t, got.State(s).Equal(want.State(s)), "%s at %v: %s, want %s", s, at, got.State(s), want.State(s))
		require.True(t, got.Steady(s).Equal(want.Steady(s)), "steady part of %s at %v", s, at)
	}
	return got
}

// chain returns the decay chain of n members.
func chain(n int, feed string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "n1' = -k1*n1%s; n1(0) = N0", feed)
	for i := 2; i <= n; i++ {
		fmt.Fprintf(&b, "; n%d' = k%d*n%d - k%d*n%d; n%d(0) = 0", i, i-1, i-1, i, i, i)
	}
	return b.String()
}

// bateman returns the n-th member of the decay chain: N0 k1 ... k(n-1) times the
// sum over i of e^(-ki t)/prod (kj - ki) over j != i.
func bateman(n int) string {
	factors := []string{"N0"}
	for i := 1; i < n; i++ {
		factors = append(factors, fmt.Sprintf("k%d", i))
	}
	var terms []string
	for i := 1; i <= n; i++ {
		term := fmt.Sprintf("exp(-k%d*t)", i)
		for j := 1; j <= n; j++ {
			if j != i {
				term += fmt.Sprintf("/(k%d - k%d)", j, i)
			}
		}
		terms = append(terms, term)
	}
	return strings.Join(factors, "*") + "*(" + strings.Join(terms, " + ") + ")"
}

// TestBateman: H. Bateman, Solution of a system of differential equations
// occurring in the theory of radio-active transformations, Proc. Cambridge Phil.
// Soc. 15 (1910), 423-427; the formula from memory.
func TestBateman(t *testing.T) {
	for n := 2; n <= 6; n++ {
		r := symbolic(t, chain(n, ""))
		for i := 1; i <= n; i++ {
			requireFormulas(t, r, fmt.Sprintf("n%d = %s", i, bateman(i)))
		}
		model, formula, err := r.Conditions(context.Background())
		require.NoError(t, err)
		assert.Empty(t, model)
		var want []string
		for i := 1; i <= n; i++ {
			for j := i + 1; j <= n; j++ {
				want = append(want, fmt.Sprintf("k%d != k%d", i, j))
			}
		}
		assert.ElementsMatch(t, want, formula)
	}
}

// publishedSymbolic are formulas with symbols. Where no other source is named
// they are the usual ones of textbooks, from memory.
var publishedSymbolic = []struct {
	name, source string
	model        string
	assume       []string
	formulas     []string
}{
	{
		"one compartment, first-order input",
		"the Bateman function of pharmacokinetics, J. Wagner, Fundamentals of Clinical Pharmacokinetics, 1975, from memory",
		"gut' = -ka*gut; c' = ka*F*gut/V - ke*c; gut(0) = D; c(0) = 0", nil,
		[]string{"gut = D*exp(-ka*t)", "c = F*D*ka/(V*(ka - ke))*(exp(-ke*t) - exp(-ka*t))"},
	},
	{
		"one compartment, infusion",
		"textbook, from memory",
		"c' = R0/V - CL/V*c; c(0) = 0", nil,
		[]string{"c = R0/CL*(1 - exp(-CL/V*t))"},
	},
	{
		// The hybrid rates alpha and beta enter in place of k12 and k10, so that the
		// characteristic polynomial splits: k21 + k12 + k10 = alpha + beta and
		// k21 k10 = alpha beta.
		"two compartments, first-order input",
		"M. Gibaldi, D. Perrier, Pharmacokinetics, 1982, chapter 2, from memory",
		`k10 = alpha*beta/k21
		k12 = alpha + beta - k21 - k10
		gut' = -ka*gut
		c' = ka*gut - (k10 + k12)*c + k21*p
		p' = k12*c - k21*p
		gut(0) = D; c(0) = 0; p(0) = 0`, nil,
		[]string{
			`c = ka*D*((k21 - alpha)/((ka - alpha)*(beta - alpha))*exp(-alpha*t) + (k21 - beta)/((ka - beta)*(alpha - beta))*exp(-beta*t)
			 + (k21 - ka)/((alpha - ka)*(beta - ka))*exp(-ka*t))`,
			`p = ka*D*(alpha + beta - k21 - alpha*beta/k21)*(exp(-alpha*t)/((ka - alpha)*(beta - alpha)) + exp(-beta*t)/((ka - beta)*(alpha - beta))
			 + exp(-ka*t)/((alpha - ka)*(beta - ka)))`,
		},
	},
	{
		"two compartments, bolus",
		"M. Gibaldi, D. Perrier, Pharmacokinetics, 1982, chapter 2, from memory",
		`k10 = alpha*beta/k21
		k12 = alpha + beta - k21 - k10
		c' = -(k10 + k12)*c + k21*p
		p' = k12*c - k21*p
		c(0) = D/V; p(0) = 0`, nil,
		[]string{"c = D/V*((alpha - k21)/(alpha - beta)*exp(-alpha*t) + (k21 - beta)/(alpha - beta)*exp(-beta*t))"},
	},
	{
		"availability of a repairable unit",
		"R. Barlow, F. Proschan, Mathematical Theory of Reliability, 1965, chapter 3, from memory",
		"up' = -lambda*up + mu*down; down' = lambda*up - mu*down; up(0) = 1; down(0) = 0",
		[]string{"lambda > 0, mu > 0"},
		[]string{
			"up = mu/(lambda + mu) + lambda/(lambda + mu)*exp(-(lambda + mu)*t)",
			"down = lambda/(lambda + mu)*(1 - exp(-(lambda + mu)*t))",
		},
	},
	{
		// Two units fail and are repaired independently: the square of one unit.
		"1-out-of-2 pair, two crews",
		"two independent units, products of their probabilities",
		`both' = -2*lambda*both + mu*one
		one' = 2*lambda*both - (lambda + mu)*one + 2*mu*none
		none' = lambda*one - 2*mu*none
		both(0) = 1; one(0) = 0; none(0) = 0`,
		[]string{"lambda > 0, mu > 0"},
		[]string{
			"both = (mu + lambda*exp(-(lambda + mu)*t))^2/(lambda + mu)^2",
			"none = lambda^2*(1 - exp(-(lambda + mu)*t))^2/(lambda + mu)^2",
			"one = 2*lambda*(mu + lambda*exp(-(lambda + mu)*t))*(1 - exp(-(lambda + mu)*t))/(lambda + mu)^2",
		},
	},
	{
		// s1 and s2 are the roots of s^2 + (3 lambda + 2 mu) s + 2 lambda^2 +
		// 2 lambda mu + mu^2; a discriminant (d lambda)^2 makes them rational:
		// lambda (lambda + 4 mu) = (d lambda)^2 for mu = lambda (d^2 - 1)/4.
		"1-out-of-2 pair, one crew",
		"1 - A(t) = 2 lambda^2/(s1 s2) (1 - (s1 e^(s2 t) - s2 e^(s1 t))/(s1 - s2)), R. Barlow, F. Proschan, 1965, chapter 5, from memory",
		`mu = lambda*(d^2 - 1)/4
		both' = -2*lambda*both + mu*one
		one' = 2*lambda*both - (lambda + mu)*one + mu*none
		none' = lambda*one - mu*none
		both(0) = 1; one(0) = 0; none(0) = 0`,
		[]string{"lambda > 0, d > 1"},
		[]string{
			`none = 2*lambda^2/((lambda*(d^2 + 5)/4)^2 - (d*lambda/2)^2)*(1 - ((-lambda*(d^2 + 5)/4 + d*lambda/2)*exp((-lambda*(d^2 + 5)/4 - d*lambda/2)*t)
			 - (-lambda*(d^2 + 5)/4 - d*lambda/2)*exp((-lambda*(d^2 + 5)/4 + d*lambda/2)*t))/(d*lambda))`,
		},
	},
	{
		"two tanks in series",
		"D. Seborg, T. Edgar, D. Mellichamp, Process Dynamics and Control, step response of two first-order processes, from memory",
		"tau1*y1' + y1 = K*M; tau2*y2' + y2 = y1; y1(0) = 0; y2(0) = 0",
		[]string{"tau1 > 0, tau2 > 0"},
		[]string{
			"y1 = K*M*(1 - exp(-t/tau1))",
			"y2 = K*M*(1 - (tau1*exp(-t/tau1) - tau2*exp(-t/tau2))/(tau1 - tau2))",
		},
	},
	{
		"forced oscillator without damping",
		"S. Timoshenko, Vibration Problems in Engineering, art. 8, from memory",
		"m*x'' + m*p^2*x = P*sin(w*t); x(0) = 0; x'(0) = 0",
		[]string{"m > 0, p > 0, w > 0"},
		[]string{"x = P/(m*(p^2 - w^2))*(sin(w*t) - w/p*sin(p*t))"},
	},
	{
		"resonance",
		"S. Timoshenko, Vibration Problems in Engineering, art. 8, from memory",
		"x'' + w^2*x = F*cos(w*t); x(0) = 0; x'(0) = 0", nil,
		[]string{"x = F*t*sin(w*t)/(2*w)"},
	},
	{
		"general model of order 2 with real rates",
		"e^(At) by Sylvester's formula with a + d = p + q, a d - b c = p q",
		`a = p + q - d
		b = (a*d - p*q)/c
		x' = a*x + b*y
		y' = c*x + d*y
		x(0) = x0; y(0) = y0`, nil,
		[]string{
			"x = ((p + q - d - q)*x0 + ((p + q - d)*d - p*q)/c*y0)/(p - q)*exp(p*t) - ((p + q - d - p)*x0 + ((p + q - d)*d - p*q)/c*y0)/(p - q)*exp(q*t)",
			"y = (c*x0 + (d - q)*y0)/(p - q)*exp(p*t) - (c*x0 + (d - p)*y0)/(p - q)*exp(q*t)",
		},
	},
}

func TestPublishedSymbolic(t *testing.T) {
	for _, c := range publishedSymbolic {
		t.Run(c.name, func(t *testing.T) {
			r := symbolic(t, c.model, c.assume...)
			requireFormulas(t, r, c.formulas...)
		})
	}
}

// TestDailyCycle: the steady part of a first-order lag under a sinusoid with
// symbolic amplitude and phase.
func TestDailyCycle(t *testing.T) {
	r := symbolic(t, "T' = -k*(T - Tm - A0*sin(2*pi*t/24 + phi)); T(0) = Tm", "k > 0")
	want, err := expr.ParseFunction("Tm + A0*k*(k*sin(pi*t/12 + phi) - pi/12*cos(pi*t/12 + phi))/(k^2 + (pi/12)^2)", expr.Limits{})
	require.NoError(t, err)
	require.True(t, r.Steady("T").Equal(want), "%s", r.Steady("T"))
	transient, err := expr.ParseFunction("-A0*k*(k*sin(phi) - pi/12*cos(phi))/(k^2 + (pi/12)^2)*exp(-k*t)", expr.Limits{})
	require.NoError(t, err)
	require.True(t, r.Transient("T").Equal(transient), "%s", r.Transient("T"))
}

// rlc is the series circuit under a step, in state form.
const rlc = "L*i' + R*i + v = V; C*v' = i; i(0) = 0; v(0) = 0"

// TestRLC: W. Hayt, J. Kemmerly, Engineering Circuit Analysis, step response of
// the series RLC circuit with alpha = R/(2L), w0^2 = 1/(LC); from memory. The
// damping ratio is written through a rational parametrisation, so that the
// formulas hold no roots.
func TestRLC(t *testing.T) {
	ctx := context.Background()
	instances := []string{
		"L = 1, R = 5, C = 1/4, V = 3",   // overdamped, rates -1 and -4
		"L = 1, R = 2, C = 1/5, V = 3/2", // underdamped, -1 +- 2i
		"L = 2, R = 4, C = 1/2, V = 7",   // critically damped, rate -1 twice
		"L = 1, R = 1, C = 3, V = 1",     // irrational
		"L = 1, R = 3, C = 1, V = 1",
	}
	for _, assume := range []string{"L > 0, C > 0, R > 0", "L > 0, C > 0, R > 0, R^2*C > 4*L", "L > 0, C > 0, R > 0, R^2*C < 4*L"} {
		r := symbolic(t, rlc, assume)
		model, formula, err := r.Conditions(ctx)
		require.NoError(t, err)
		assert.Empty(t, model, assume)
		assert.Empty(t, formula, assume)
		checked := 0
		for _, src := range instances {
			at := values(t, src)
			if _, err := r.With(at); err != nil { // against the assumption
				assert.Contains(t, err.Error(), "contradict", assume)
				continue
			}
			requireInstance(t, r, rlc, at)
			checked++
		}
		assert.GreaterOrEqual(t, checked, 2, assume)
	}
	r := symbolic(t, rlc, "L > 0, C > 0, R > 0")
	critical, err := r.When(ctx, "C = 4*L/R^2")
	require.NoError(t, err)
	requireFormulas(t, critical,
		"v = V*(1 - (1 + R*t/(2*L))*exp(-R/(2*L)*t))",
		"i = V/L*t*exp(-R/(2*L)*t)")
	// R = 2 L a, C = 1/(L (a^2 - d^2)): the rates -a +- d.
	overdamped := symbolic(t, "R = 2*L*a; C = 1/(L*(a^2 - d^2));"+rlc, "a > d > 0, L > 0")
	requireFormulas(t, overdamped,
		"v = V*(1 - ((a + d)*exp(-(a - d)*t) - (a - d)*exp(-(a + d)*t))/(2*d))",
		"i = V/(2*L*d)*(exp(-(a - d)*t) - exp(-(a + d)*t))")
	underdamped := symbolic(t, "R = 2*L*a; C = 1/(L*(a^2 + w^2));"+rlc, "a > 0, w > 0, L > 0")
	requireFormulas(t, underdamped,
		"v = V*(1 - exp(-a*t)*(cos(w*t) + a/w*sin(w*t)))",
		"i = V/(L*w)*exp(-a*t)*sin(w*t)")
	equal, err := overdamped.Substitute(ctx, map[string]expr.Node{"a": node(t, "2*d")})
	require.NoError(t, err)
	requireFormulas(t, equal, "v = V*(1 - (3*exp(-d*t) - exp(-3*d*t))/2)")
}

func node(t *testing.T, src string) expr.Node {
	t.Helper()
	n, err := expr.Parse(src, expr.Limits{})
	require.NoError(t, err)
	return n
}

// absorber is a main mass M with a spring K under a force, and an absorber m, k
// on it, without damping.
const absorber = `M*x1'' + K*x1 + k*(x1 - x2) = P*sin(w*t)
	m*x2'' + k*(x2 - x1) = 0
	x1(0) = 0; x1'(0) = 0; x2(0) = 0; x2'(0) = 0`

// TestAbsorber: J. Den Hartog, Mechanical Vibrations, section 3.2, from memory:
// where w^2 = k/m the main mass stands still, and the absorber moves with
// -P/k sin wt, which cancels the force.
func TestAbsorber(t *testing.T) {
	ctx := context.Background()
	r := symbolic(t, absorber, "M > 0, m > 0, K > 0, k > 0")
	for state, formula := range map[string]string{
		"x1": "P*(k - m*w^2)/((K + k - M*w^2)*(k - m*w^2) - k^2)*sin(w*t)",
		"x2": "P*k/((K + k - M*w^2)*(k - m*w^2) - k^2)*sin(w*t)",
	} {
		want, err := expr.ParseFunction(formula, expr.Limits{})
		require.NoError(t, err)
		assert.True(t, r.Steady(state).Equal(want), "%s", r.Steady(state))
	}
	for _, free := range []string{"k = m*w^2", "m = k/w^2"} {
		still, err := symbolic(t, absorber).When(ctx, free)
		require.NoError(t, err)
		assert.True(t, still.Proof().Holds())
		assert.True(t, still.Steady("x1").IsZero(), "%s", still.Steady("x1"))
		force := "-P/(m*w^2)*sin(w*t)"
		if free != "k = m*w^2" {
			force = "-P/k*sin(w*t)"
		}
		want, err := expr.ParseFunction(force, expr.Limits{})
		require.NoError(t, err)
		assert.True(t, still.Steady("x2").Equal(want), "%s", still.Steady("x2"))
	}
	for _, at := range []string{"M = 3, m = 1, K = 5, k = 2, w = 7/3, P = 1", "M = 1, m = 1, K = 1, k = 6, w = 1/2, P = 2"} {
		requireInstance(t, r, absorber, values(t, at))
	}
}

// mammillary is a central compartment with two peripheral ones and a bolus.
const mammillary = `c' = -(ke + k12 + k13)*c + k21*p + k31*q
	p' = k12*c - k21*p
	q' = k13*c - k31*q
	c(0) = D; p(0) = 0; q(0) = 0`

// TestMammillary: the rates are roots of a cubic that no radicals split
// conveniently, so that the model is compared with the numeric one, and with
// the formula c = D sum (k21 - l)(k31 - l)/prod(l' - l) e^(-lt) over the rates l
// where these are the parameters (M. Gibaldi, D. Perrier, Pharmacokinetics,
// 1982, appendix B, from memory).
func TestMammillary(t *testing.T) {
	r := symbolic(t, mammillary, "ke > 0, k12 > 0, k13 > 0, k21 > 0, k31 > 0")
	for _, at := range []string{
		"ke = 1/2, k12 = 1/3, k13 = 1/5, k21 = 1/7, k31 = 1/11, D = 100",
		"ke = 1, k12 = 2, k13 = 3, k21 = 4, k31 = 5, D = 1",
		"ke = 1, k12 = 1, k13 = 1, k21 = 2, k31 = 2, D = -3/8", // a factor splits off
	} {
		requireInstance(t, r, mammillary, values(t, at))
	}
	// The sum over the roots of the cubic, written with its coefficients.
	requireFormulas(t, r, `c = sumroots(z, z^3 + (ke + k12 + k13 + k21 + k31)*z^2 + (ke*k21 + ke*k31 + k12*k31 + k13*k21 + k21*k31)*z + ke*k21*k31,
		D*(z + k21)*(z + k31)*exp(z*t)/(3*z^2 + 2*(ke + k12 + k13 + k21 + k31)*z + ke*k21 + ke*k31 + k12*k31 + k13*k21 + k21*k31))`)
	rates := symbolic(t, `ke = l1*l2*l3/(k21*k31)
		k12 = (l1 - k21)*(l2 - k21)*(l3 - k21)/(k21*(k21 - k31))
		k13 = (l1 - k31)*(l2 - k31)*(l3 - k31)/(k31*(k31 - k21))
		`+mammillary)
	requireFormulas(t, rates, `c = D*((k21 - l1)*(k31 - l1)/((l2 - l1)*(l3 - l1))*exp(-l1*t) + (k21 - l2)*(k31 - l2)/((l1 - l2)*(l3 - l2))*exp(-l2*t)
		+ (k21 - l3)*(k31 - l3)/((l1 - l3)*(l2 - l3))*exp(-l3*t))`)
}

// general2 is the general model of order 2.
const general2 = "x' = a*x + b*y; y' = c*x + d*y; x(0) = x0; y(0) = y0"

// TestGeneral2: real and complex, distinct and equal rates of one formula.
func TestGeneral2(t *testing.T) {
	ctx := context.Background()
	r := symbolic(t, general2)
	model, formula, err := r.Conditions(ctx)
	require.NoError(t, err)
	assert.Empty(t, model)
	assert.Empty(t, formula)
	for _, at := range []string{
		"a = 1, b = 2, c = 3, d = 4, x0 = 1, y0 = -1",     // irrational
		"a = 1, b = -2, c = 2, d = 1, x0 = 3, y0 = 5",     // 1 +- 2i
		"a = 3, b = 1, c = -1, d = 1, x0 = 1/2, y0 = 7",   // 2 twice, not diagonal
		"a = 2, b = 0, c = 0, d = 2, x0 = 4, y0 = 9",      // 2 twice, diagonal
		"a = 0, b = 1, c = 0, d = 0, x0 = 1, y0 = 1",      // nilpotent
		"a = 1/3, b = 1/5, c = 0, d = -7/2, x0 = 1, y0=0", // triangular
		"a = 0, b = 0, c = 0, d = 0, x0 = 1, y0 = 2",
	} {
		requireInstance(t, r, general2, values(t, at))
	}
	for _, b := range []string{"b = 0", "c = 0", "a = d", "b = -(a - d)^2/(4*c)"} {
		special, err := r.When(ctx, b)
		require.NoError(t, err, b)
		assert.True(t, special.Proof().Holds())
		defined := symbolic(t, b+";"+general2)
		if b == "a = d" {
			defined = symbolic(t, "x' = d*x + b*y; y' = c*x + d*y; x(0) = x0; y(0) = y0")
		}
		for _, s := range special.States() {
			assert.True(t, special.State(s).Equal(defined.State(s)), "%s: %s, want %s", b, special.State(s), defined.State(s))
		}
	}
	nilpotent, err := r.When(ctx, "d = -a, b = 0, a = 0")
	require.NoError(t, err)
	requireFormulas(t, nilpotent, "x = x0", "y = y0 + c*x0*t")
}

// TestGeneral2Derivatives proves the closed form by its Taylor coefficients:
// the k-th derivative at 0 is A^k (x0, y0).
func TestGeneral2Derivatives(t *testing.T) {
	r := symbolic(t, general2)
	x, y := r.State("x"), r.State("y")
	wantX, wantY := "x0", "y0"
	for range 4 {
		for got, want := range map[string]string{x.Initial().String(): wantX, y.Initial().String(): wantY} {
			difference, err := expr.ParseFunction("("+got+") - ("+want+")", expr.Limits{})
			require.NoError(t, err)
			assert.True(t, difference.IsZero(), "%s, want %s", got, want)
		}
		wantX, wantY = fmt.Sprintf("(a*(%s) + b*(%s))", wantX, wantY), fmt.Sprintf("(c*(%s) + d*(%s))", wantX, wantY)
		x, y = x.Derivative(), y.Derivative()
	}
}
