package expr_test

import (
	"context"
	"fmt"
	"math/rand"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

// assume returns the field of some symbols under assumptions.
func assume(t *testing.T, symbols string, assumptions string) *expr.Constants {
	t.Helper()
	k := expr.NewConstants(strings.Fields(symbols)...)
	if assumptions == "" {
		return k
	}
	relations, err := expr.ParseRelations(assumptions, expr.Limits{})
	require.NoError(t, err)
	for _, r := range relations {
		k, err = k.Assume(r, expr.Limits{})
		require.NoError(t, err, r.String())
	}
	return k
}

// constant reads an expression; the field grows where it must.
func constant(t *testing.T, k *expr.Constants, src string) (*expr.Constants, expr.Constant) {
	t.Helper()
	n, err := expr.Parse(src, expr.Limits{})
	require.NoError(t, err, src)
	var x expr.Constant
	k, err = expr.Grow(k, func(k *expr.Constants) error {
		var err error
		x, err = expr.Env[expr.Constant]{K: k, Lookup: k.Lookup}.Scalar(n)
		return err
	})
	require.NoError(t, err, src)
	return k, x
}

const undecided = 9

var signCases = []struct {
	assumptions, of string
	sign            int
}{
	{"", "a", undecided},
	{"", "a^2 + 1", 1},
	{"", "-a^2 - b^2 - 1/3", -1},
	{"", "a^2", undecided}, // may be 0
	{"", "pi - 3", 1},
	{"", "pi - 22/7", -1},
	{"", "sqrt(2) + sqrt(3) - pi", 1}, // 3.1462... - 3.1415...
	{"", "a - a", 0},
	{"", "exp(a)", 1},
	{"", "-exp(a - b)", -1},
	{"", "exp(a) + exp(-a) + pi", 1},
	{"", "cos(a)^2 + sin(a)^2", 1},
	{"a > 0", "a", 1},
	{"a > 0", "-a", -1},
	{"a > 0", "1/a", 1},
	{"a > 0", "-3/(2*a^3)", -1},
	{"a < 0", "a", -1},
	{"a < 0", "a^2", 1},
	{"a < 0", "a^3", -1},
	{"a != 0", "a", undecided},
	{"a != 0", "a^2", 1},
	{"a >= 0", "a", undecided},
	{"a >= 0", "a + 1", 1},
	{"a > 0, b > 0", "a + b", 1},
	{"a > 0, b > 0", "a*b", 1},
	{"a > 0, b > 0", "-a/b", -1},
	{"a > 0, b > 0", "a - b", undecided},
	{"a > 0, b > 0", "a*b^2 + 2*a + 3*b", 1},
	{"a > 0, b > 0", "pi*a + b/7", 1},
	{"a > 0, b >= 0", "a + b", 1},
	{"a < 0, b < 0", "a + b", -1},
	{"a < 0, b < 0", "a*b", 1},
	{"a < 0 < b", "b - a", 1},
	{"a > b", "a - b", 1},
	{"a > b", "b - a", -1},
	{"a > b", "2*a - 2*b", 1},
	{"a > b", "a", undecided},
	{"a > b > 0", "a", 1},
	{"a > b > 0", "a^2 - b^2", 1},
	{"a > b > c", "a - c", 1},
	{"a > b > c", "2*a - b - c", 1},
	{"a > b, b > c", "c - a", -1},
	{"a > b, a > c", "b - c", undecided},
	{"0 < a < 1", "1 - a", 1},
	{"0 < a < 1", "1 - a^2", 1},
	{"a > 2", "a - 1", 1},
	{"a > 1/2", "a - 1", undecided},
	{"a*b > c", "a*b - c", 1},
	{"a*b > 0", "a", undecided},
	{"1/a > 0", "a", 1},
	{"a > b", "(a^2 - b^2)/(a + b)", 1},
	{"a > 0", "exp(b) + a", 1},
}

func TestSigns(t *testing.T) {
	for _, c := range signCases {
		k, x := constant(t, assume(t, "a b c", c.assumptions), c.of)
		sign, ok := k.Sign(x)
		if c.sign == undecided {
			assert.False(t, ok, "%s under %s is said to have the sign %d", c.of, c.assumptions, sign)
			continue
		}
		if assert.True(t, ok, "%s under %s", c.of, c.assumptions) {
			assert.Equal(t, c.sign, sign, "%s under %s", c.of, c.assumptions)
		}
		assert.Equal(t, c.sign != 0, k.NotZero(x), "%s under %s", c.of, c.assumptions)
	}
}

// TestNotZero: what is known not to vanish without a sign.
func TestNotZero(t *testing.T) {
	for _, c := range []struct {
		assumptions, of string
		not             bool
	}{
		{"", "a", false},
		{"a != 0", "a", true},
		{"a != 0", "-3*a^3", true},
		{"a != 0, b != 0", "a*b", true},
		{"a != 0, b != 0", "a + b", false},
		{"a*b != 0", "a", true},
		{"a*b != 0", "a/b", true},
		{"a != b", "b - a", true},
		{"a != b", "a^2 - b^2", false},
		{"a != b, a != -b", "a^2 - b^2", true},
		{"a^2 != b^2", "a + b", true},
		{"a >= 0", "a", false},
		{"a > 0", "a - b", false},
	} {
		k, x := constant(t, assume(t, "a b c", c.assumptions), c.of)
		assert.Equal(t, c.not, k.NotZero(x), "%s under %q", c.of, c.assumptions)
	}
}

// TestSignsAgainstValues draws random polynomials and assumptions and checks
// what is said of the sign at random points that satisfy the assumptions.
func TestSignsAgainstValues(t *testing.T) {
	rnd := rand.New(rand.NewSource(31))
	lists := []string{"a > 0, b > 0", "a > b > c", "a > b > 0", "0 < a < 1, b > 2", "a < 0, b > a", "a >= 0, b > c", "a*b > 1", "a > 1 - b", "a^2 > b", "a != b, c < -1/2"}
	monomials := []string{"a", "b", "c", "a*b", "a^2", "b^2", "b*c", "a*c", "1", "a^2*b", "1/a", "(a - b)", "(a - c)"}
	decided, checked := 0, 0
	for range 400 {
		list := lists[rnd.Intn(len(lists))]
		var terms []string
		for range 1 + rnd.Intn(3) {
			terms = append(terms, fmt.Sprintf("(%d)*%s", rnd.Intn(7)-3, monomials[rnd.Intn(len(monomials))]))
		}
		src := strings.Join(terms, " + ")
		if rnd.Intn(3) == 0 {
			src = "(" + src + ")*" + monomials[rnd.Intn(len(monomials))]
		}
		k, x := constant(t, assume(t, "a b c", list), src)
		sign, ok := k.Sign(x)
		not := k.NotZero(x)
		if !ok && !not {
			continue
		}
		decided++
		relations, err := expr.ParseRelations(list, expr.Limits{})
		require.NoError(t, err)
		for range 25 {
			values := map[string]expr.Node{}
			for _, name := range []string{"a", "b", "c"} {
				n, err := expr.Parse(fmt.Sprintf("(%d)/%d", rnd.Intn(25)-12, 1+rnd.Intn(6)), expr.Limits{})
				require.NoError(t, err)
				values[name] = n
			}
			to := expr.NewConstants()
			s, err := expr.NewSubstitution(k, to, values)
			require.NoError(t, err)
			number := func(src string) (int, bool) {
				_, y := constant(t, k, src)
				z, err := expr.SubstituteScalar(s, y)
				if err != nil {
					return 0, false
				}
				return to.Sign(z)
			}
			holds := true
			for _, r := range relations {
				d, ok := number("(" + r.Left.String() + ") - (" + r.Right.String() + ")")
				holds = holds && ok && map[string]bool{">": d > 0, ">=": d >= 0, "<": d < 0, "<=": d <= 0, "!=": d != 0}[r.Op]
			}
			if !holds {
				continue
			}
			got, defined := number(src)
			if !defined {
				continue
			}
			checked++
			if ok {
				require.Equal(t, sign, got, "%s under %s at %v", src, list, values)
			}
			require.True(t, !not || got != 0, "%s under %s at %v is 0", src, list, values)
		}
	}
	assert.Greater(t, decided, 60)
	assert.Greater(t, checked, 200)
}

func TestAssumptionsThatCannotHold(t *testing.T) {
	for _, src := range []string{"1 < 0", "0 > 0", "0 != 0", "a > a", "pi < 3", "sqrt(2) > 3/2", "exp(a) < 0"} {
		relations, err := expr.ParseRelations(src, expr.Limits{})
		require.NoError(t, err)
		_, err = expr.NewConstants("a").Assume(relations[0], expr.Limits{})
		var e *expr.Error
		require.ErrorAs(t, err, &e, src)
		assert.Equal(t, expr.NeedsAssumption, e.Kind, src)
	}
	k := assume(t, "a b", "a > b > 0")
	for _, src := range []string{"a < 0", "b > a", "a + b < 0", "a <= b"} {
		relations, err := expr.ParseRelations(src, expr.Limits{})
		require.NoError(t, err)
		_, err = k.Assume(relations[0], expr.Limits{})
		var e *expr.Error
		require.ErrorAs(t, err, &e, "%s against a > b > 0", src)
	}
}

func TestParseRelations(t *testing.T) {
	for src, want := range map[string][]string{
		"k > 0":               {"k > 0"},
		"k1 > k2 > 0":         {"k1 > k2", "k2 > 0"},
		"0 <= z < 1, w != 0":  {"0 <= z", "z < 1", "w != 0"},
		"a ≠ b, a ≥ 1, b ≤ 2": {"a != b", "a >= 1", "b <= 2"},
		"R^2*C = 4*L":         {"R^2*C = 4*L"},
		"ω>ω0":                {"ω > ω0"},
		"a<-1":                {"a < -1"},
	} {
		list, err := expr.ParseRelations(src, expr.Limits{})
		require.NoError(t, err, src)
		var got []string
		for _, r := range list {
			got = append(got, r.String())
			assert.True(t, r.Pos.IsValid())
		}
		assert.Equal(t, want, got)
	}
	for _, src := range []string{"", "k", "k >", "> k", "k > 0,", "k > > 0", "k == 0", "(k > 0)", "k > 0; m > 0", "x(0) > ", "k ! 0", strings.Repeat("(", 600) + "a > 0"} {
		_, err := expr.ParseRelations(src, expr.Limits{})
		var e *expr.Error
		require.ErrorAs(t, err, &e, src)
	}
	_, err := expr.ParseRelations("k > 0, m > ?", expr.Limits{})
	var e *expr.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.Pos{Line: 1, Column: 12}, e.Pos)
}

// TestSolveFor: equations are solved for a symbol they are linear in.
func TestSolveFor(t *testing.T) {
	for _, c := range []struct{ equation, name, value string }{
		{"ka = ke", "ke", "ka"},
		{"k = 2", "k", "2"},
		{"2 = k", "k", "2"},
		{"w0 = 2*w", "w0", "2*w"},
		{"R^2*C = 4*L", "L", "R^2*C/4"},
		{"k*m = 1", "k", "1/m"},
		{"a - b = 0", "a", "b"},
	} {
		list, err := expr.ParseRelations(c.equation, expr.Limits{})
		require.NoError(t, err)
		symbols := strings.FieldsFunc(c.equation, func(r rune) bool {
			return strings.ContainsRune(" =*^-+/", r) || r == '2' && !strings.Contains(c.equation, "k2")
		})
		var names []string
		for _, s := range symbols {
			if s[0] >= 'A' {
				names = append(names, s)
			}
		}
		name, value, err := expr.SolveFor(list[0], names)
		require.NoError(t, err, c.equation)
		// The solution, put in, makes both sides equal.
		k, difference := constant(t, expr.NewConstants(names...), "("+list[0].Left.String()+") - ("+list[0].Right.String()+")")
		to := expr.NewConstants(names...)
		s, err := expr.NewSubstitution(k, to, map[string]expr.Node{name: value})
		require.NoError(t, err)
		y, err := expr.SubstituteScalar(s, difference)
		require.NoError(t, err)
		assert.True(t, to.IsZero(y), "%s with %s = %s", c.equation, name, value)
		_, got := constant(t, to, value.String())
		_, want := constant(t, to, c.value)
		if name == c.name {
			assert.True(t, to.Equal(got, want), "%s: %s = %s, want %s", c.equation, name, value, c.value)
		}
	}
}

// TestFunctionConditions: what the written form of a function divides by.
func TestFunctionConditions(t *testing.T) {
	for src, want := range map[string][]string{
		"exp(-a*t)":                           nil,
		"(exp(-a*t) - exp(-b*t))/(a - b)":     {"a != b"},
		"sin(w*t)/w":                          {"w != 0"},
		"t*exp(-a*t)/(a^2 - b^2)":             {"a != -b", "a != b"},
		"(a^2 - 1)/(a - 1)*exp(t)":            nil,
		"exp(a)/(exp(a) + 1)*t":               nil,
		"t/(exp(a) - 1)":                      {"exp(a) != 1"},
		"t/(pi - 3)":                          nil,
		"cos(w*t + phi)/(2*k)":                {"k != 0"},
		"t/cos(phi)":                          {"cos(phi) != 0"},
		"t/(a^2 + 1)":                         nil,
		"sqrt(2)*t/(1 + sqrt(2))":             nil,
		"exp(-a*t)/(b - 2) + exp(-b*t)/(b-2)": {"b != 2"},
	} {
		l, err := function(t, src).Conditions(context.Background())
		require.NoError(t, err, src)
		assert.Equal(t, want, l.Strings(), src)
	}
}
