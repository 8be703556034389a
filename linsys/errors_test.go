package linsys_test

import (
	"context"
	"math/big"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// respondModel derives the response of a model.
func respondModel(m *linsys.Model) (*linsys.Response, error) {
	return m.ClosedForm(context.Background())
}

func respond(src string) (*linsys.Response, error) {
	m, err := linsys.Read(src)
	if err != nil {
		return nil, err
	}
	return respondModel(m)
}

func TestBadModels(t *testing.T) {
	tests := []struct {
		name, src    string
		kind         expr.Kind
		line, column int
	}{
		{"empty", "", expr.Syntax, 0, 0},
		{"only a comment", "# nothing\n\n", expr.Syntax, 0, 0},
		{"product of states", "x' = y*x\ny' = 1", expr.Nonlinear, 1, 6},
		{"power of a state", "x' = 1 - x^2", expr.Nonlinear, 1, 10},
		{"function of a state", "x' = sin(x)", expr.Nonlinear, 1, 6},
		{"division by a state", "x' = 1/x", expr.Nonlinear, 1, 6},
		{"exponent with a state", "x' = 2^x", expr.Nonlinear, 1, 6},
		{"time-varying coefficient", "x' = t*x", expr.TimeVarying, 1, 6},
		{"time-varying coefficient outside the class", "x' = x/t", expr.TimeVarying, 1, 8},
		{"time-varying leading coefficient", "t*x' = x", expr.TimeVarying, 1, 1},
		{"missing equation", "x' = y'", expr.WrongShape, 1, 1},
		{"one equation too many", "x' = -x\nx' + x = 0\ny' = 1\ny' = 2", expr.WrongShape, 4, 1},
		{"defined twice", "x' = k*x\nk = 1\nk = 2", expr.WrongShape, 3, 1},
		{"equation without a state", "0 = 1", expr.WrongShape, 1, 1},
		{"the same equation twice", "x' + y' = x\n2*x' + 2*y' = 2*x", expr.Singular, 2, 1},
		{"contradictory equations", "x' + y' = 1\nx' + y' = 2", expr.Singular, 2, 1},
		{"a state that cancels", "x' - x' = 0\ny' = 1", expr.Singular, 1, 1},
		{"defined by itself", "x' = a*x\na = b\nb = a", expr.Singular, 3, 5},
		{"division by zero", "x' = x/0", expr.Singular, 1, 8},
		{"contradictory conditions", "x' = x\nx(0) = 1\nx(0) = 2", expr.SideConditions, 3, 1},
		{"condition against the equations", "x' = 1\ny = 2*x\nx(0) = 1\ny(0) = 3", expr.SideConditions, 4, 1},
		{"missing condition", "x'' = -x\nx(0) = 1", expr.SideConditions, 0, 0},
		{"condition on no state", "x' = x\nz(0) = 1", expr.SideConditions, 2, 1},
		{"boundary problem", "x'' = -x\nx(0) = 0\nx(1) = 1", expr.OutsideClass, 3, 1},
		{"input 1/t", "x' = 1/t", expr.OutsideClass, 1, 8},
		{"input exp(t^2)", "x' = exp(t^2)", expr.OutsideClass, 1, 6},
		{"input sqrt(t)", "x' = sqrt(t)", expr.OutsideClass, 1, 6},
		{"switched input", "x' = -x + step(t - 2)", expr.OutsideClass, 1, 11},
		{"unknown function", "x' = foo(t)", expr.UnknownFunction, 1, 6},
		{"tan", "x' = tan(t)", expr.UnknownFunction, 1, 6},
		{"unknown function of a number", "x' = foo(2)", expr.UnknownFunction, 1, 6},
		{"unknown function of a state", "x' = tan(x)", expr.UnknownFunction, 1, 6},
		{"unknown function in an algebraic equation", "x' = y\ny = foo(2)", expr.UnknownFunction, 2, 5},
		{"delay", "x' = x(t - 1)", expr.OutsideClass, 1, 6},
		{"unbalanced parenthesis", "x' = (x + 1", expr.Syntax, 1, 6},
		{"closing parenthesis", "x' = x + 1)", expr.Syntax, 1, 11},
		{"nan", "x' = NaN", expr.OutsideClass, 1, 6},
		{"inf", "x' = Inf*x", expr.OutsideClass, 1, 6},
		{"control sequence as a name", `\input{x}' = 1`, expr.Syntax, 1, 1},
		{"invalid UTF-8", "x' = \xff", expr.Syntax, 1, 6},
		{"million parentheses", "x' = " + strings.Repeat("(", 1e6), expr.LimitExceeded, 1, 506},
		{"huge power of t", "x' = t^1000000000", expr.LimitExceeded, 1, 6},
		{"tower of powers", "x' = 10^10^10", expr.LimitExceeded, 1, 6},
		{"many states", manyStates(300), expr.LimitExceeded, 0, 0},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			start := time.Now()
			_, err := respond(tt.src)
			var e *linsys.Error
			require.ErrorAs(t, err, &e)
			assert.Equal(t, tt.kind, e.Kind, e.Error())
			if tt.line > 0 {
				assert.Equal(t, expr.Pos{Line: tt.line, Column: tt.column}, e.Pos, e.Error())
			}
			assert.NotEmpty(t, e.Message)
			assert.Less(t, time.Since(start), 2*time.Second)
		})
	}
}

func manyStates(n int) string {
	var b strings.Builder
	for i := range n {
		b.WriteString("x" + strings.Repeat("a", i) + "' = 1\n")
	}
	return b.String()
}

func TestUnusualModels(t *testing.T) {
	tests := []struct {
		name, src string
		want      map[string]string
	}{
		{"no states", "k = 3", map[string]string{}},
		{"one state", "x' = 0\nx(0) = 5/2", map[string]string{"x": "5/2"}},
		{"zero matrix", "x' = 0; y' = 0; x(0) = 1; y(0) = 2", map[string]string{"x": "1", "y": "2"}},
		{"nilpotent", "x' = y; y' = z; z' = 0; x(0) = 1; y(0) = 2; z(0) = 6", map[string]string{"x": "3*t^2 + 2*t + 1", "y": "6*t + 2", "z": "6"}},
		{"Go keyword", "func' = -func; func(0) = 1", map[string]string{"func": "exp(-t)"}},
		{"algebraic state", "x' = -x\ny = 2*x + t\nx(0) = 1", map[string]string{"x": "exp(-t)", "y": "t + 2*exp(-t)"}},
		{"implicit algebraic state", "x' = -x + y\n0 = y - 3*x\nx(0) = 1", map[string]string{"x": "exp(2*t)", "y": "3*exp(2*t)"}},
		{"only algebraic", "x = 2*t\ny = x + 1", map[string]string{"x": "2*t", "y": "2*t + 1"}},
		{"relation among states", "x' + y' = 1; x' + y' = x; y(0) = 2", map[string]string{"x": "1", "y": "t + 2"}},
		{"index 2", "x' = y\nx = sin(t)\ny = z", map[string]string{"x": "sin(t)", "y": "cos(t)", "z": "cos(t)"}},
		{"condition on a derivative", "x' = -2*x + 4; x'(0) = 2", map[string]string{"x": "2 - exp(-2*t)"}},
		{"conditions in combination", "x' = y; y' = x; x(0) + y(0) = 2; x(0) - y(0) = 0", map[string]string{"x": "exp(t)", "y": "exp(t)"}},
		{"another origin", "x' = t\nx(2) = 3", map[string]string{"x": "t^2/2 + 1"}},
		{"argument written out", "x'(t) = -x(t)\nx(0) = 1", map[string]string{"x": "exp(-t)"}},
		{"another variable", "independent tau\nx' = tau\nx(0) = 0", map[string]string{"x": "tau^2/2"}},
		{"parameters by definition", "k = 0.35; V = 2*k\nx' = -V*x\nx(0) = 1", map[string]string{"x": "exp(-7*t/10)"}},
		{"constants named like states", "C1' = C1", map[string]string{"C1": "B1*exp(t)"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			r, err := respond(tt.src)
			require.NoError(t, err)
			assert.True(t, r.Proof().Holds())
			got := map[string]string{}
			for _, s := range r.States() {
				got[s] = r.State(s).String()
			}
			assert.Equal(t, tt.want, got)
		})
	}
}

// TestInvariance renames states and reorders equations.
func TestInvariance(t *testing.T) {
	one, err := respond("x' = -3*x + y\ny' = x - 3*y + sin(t)\nx(0) = 1\ny(0) = 0")
	require.NoError(t, err)
	other, err := respond("a(0) = 0; b(0) = 1\nb - 3*a + sin(t) = a'\nb' = a - 3*b")
	require.NoError(t, err)
	assert.True(t, one.State("x").Equal(other.State("b")))
	assert.True(t, one.State("y").Equal(other.State("a")))
	assert.Equal(t, one.State("x").String(), other.State("b").String())
}

func TestDeterminism(t *testing.T) {
	src := modelText(block{{-2, 1, 3}, {0, -1, 1}, {1, 1, -4}}, []input{{0, 1, 1, -1, 2, true}}, []int64{1, 2, 3})
	outputs := map[string]bool{}
	for range 10 {
		r, err := respond(src)
		require.NoError(t, err)
		var b strings.Builder
		for _, s := range r.States() {
			v, err := r.State(s).At(context.Background(), big.NewRat(3, 7), 30)
			require.NoError(t, err)
			b.WriteString(s + r.State(s).String() + r.State(s).LaTeX() + r.Steady(s).String() + v)
		}
		src, err := r.GoSource(context.Background(), linsys.GoOptions{})
		require.NoError(t, err)
		outputs[b.String()+string(src)] = true
	}
	assert.Len(t, outputs, 1)
}

func TestMatrixModels(t *testing.T) {
	rat := func(x ...int64) []*big.Rat {
		out := make([]*big.Rat, len(x))
		for i := range x {
			out[i] = big.NewRat(x[i], 1)
		}
		return out
	}
	m, err := linsys.FromMatrix([]string{"u", "v"}, [][]*big.Rat{rat(-3, 1), rat(1, -3)}, []string{"0", "sin(t)"}, rat(1, 0))
	require.NoError(t, err)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err)
	want, err := respond("u' = -3*u + v; v' = u - 3*v + sin(t); u(0) = 1; v(0) = 0")
	require.NoError(t, err)
	assert.True(t, r.State("u").Equal(want.State("u")))
	assert.True(t, r.State("v").Equal(want.State("v")))

	// A mass on a spring: 2 q'' + 8 q = 0, q(0) = 1, q'(0) = 0.
	m, err = linsys.FromMatrices(nil, [][][]*big.Rat{{rat(8)}, {rat(0)}, {rat(2)}}, nil, [][]*big.Rat{rat(1), rat(0)})
	require.NoError(t, err)
	r, err = m.ClosedForm(context.Background())
	require.NoError(t, err)
	assert.Equal(t, "cos(2*t)", r.State("y1").String())

	_, err = linsys.FromMatrix(nil, [][]*big.Rat{rat(1)}, []string{"3*y1 + t"}, nil)
	require.ErrorContains(t, err, "input 1: the state \"y1\" stands in an input")

	for name, build := range map[string]func() (*linsys.Model, error){
		"not square": func() (*linsys.Model, error) { return linsys.FromMatrix(nil, [][]*big.Rat{rat(1, 2)}, nil, nil) },
		"ragged": func() (*linsys.Model, error) {
			return linsys.FromMatrix(nil, [][]*big.Rat{rat(1, 2), rat(1)}, nil, nil)
		},
		"inputs": func() (*linsys.Model, error) {
			return linsys.FromMatrix(nil, [][]*big.Rat{rat(1)}, []string{"1", "2"}, nil)
		},
		"initial value": func() (*linsys.Model, error) { return linsys.FromMatrix(nil, [][]*big.Rat{rat(1)}, nil, rat(1, 2)) },
		"nil entry":     func() (*linsys.Model, error) { return linsys.FromMatrix(nil, [][]*big.Rat{{nil}}, nil, nil) },
		"names": func() (*linsys.Model, error) {
			return linsys.FromMatrix([]string{"a", "b"}, [][]*big.Rat{rat(1)}, nil, nil)
		},
	} {
		_, err := build()
		var e *linsys.Error
		require.ErrorAs(t, err, &e, name)
		assert.Equal(t, expr.WrongShape, e.Kind, name)
	}
}

func TestCancellation(t *testing.T) {
	m, err := linsys.Read("x' = -x; x(0) = 1")
	require.NoError(t, err)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err = m.ClosedForm(ctx)
	var e *linsys.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.Cancelled, e.Kind)
	require.ErrorIs(t, err, context.Canceled)
}
