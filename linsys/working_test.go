package linsys_test

import (
	"context"
	"encoding/xml"
	"errors"
	"io"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// workedModels cover the structures; the numbers are of statements verified.
var workedModels = []struct {
	name, src string
	kinds     string
	verified  int
	holds     []string // lines of the working
}{
	{"distinct", "x' = -3x + y; y' = x - 3y + sin(t); x(0) = 1; y(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 31,
		[]string{"det(s*I - A) = (s + 2)*(s + 4)", "P = [1, 1; 1, -1]", "P^(-1) = [1/2, 1/2; 1/2, -1/2]", "w_1' = -2*w_1 + 1/2*f_2(t)",
			"-A*b - a = [0; 1]", "b = [7/85; 27/85]", "C1 + C2 = 91/85", "C2 = 8/17"}},
	{"repeated, not defective", "x' = 2x; y' = 2y; x(0) = 1; y(0) = 3",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|complementary|constants|response|check", 24,
		[]string{"v_1 = [1; 0]", "v_2 = [0; 1]", "J = [2, 0; 0, 2]"}},
	{"defective", "x' = 3x - 2y + z; y' = 2x - y + z; z' = z",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|complementary|response|check", 22,
		[]string{"det(s*I - A) = (s - 1)^3", "(A - lambda*I)*v_2 = v_1", "J = [1, 1, 0; 0, 1, 0; 0, 0, 1]"}},
	{"complex", "x'' + 2x' + 5x = 10",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|response|check", 18,
		[]string{"lambda_2 = -1 - 2*i", "v_1 = [1; -1 + 2*i]", "J = [-1 + 2*i, 0; 0, -1 - 2*i]", "x_p(t) = a", "a = 2"}},
	{"complex, defective", "x'''' + 2x'' + x = sin(t)",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|response|check", 21,
		[]string{"v_2 = [1; 0; 1; 2*i]", "J = [i, 1, 0, 0; 0, i, 0, 0; 0, 0, -i, 1; 0, 0, 0, -i]", "x_p(t) = t^2*(a*cos(t) + b*sin(t))", "b = -1/8"}},
	{"irrational", "x' = x + y; y' = 2y + x; x(0) = 1; y(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|complementary|constants|response|check", 23,
		[]string{"lambda_1 = (3 - sqrt(5))/2", "lambda_2 = (3 + sqrt(5))/2"}},
	{"cubic", "x' = y; y' = z; z' = -x - y + exp(-t); x(1) = 1; y(1) = 0; z(1) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|trial|particular|complementary|constants|response|check", 28,
		[]string{"v_1 = [1; r; r^2]", "r^3 + r + 1 = 0", "(-I - A)*a = [0; 0; exp(-1)]"}},
	{"cubic, repeated", "x' = y + u; y' = z; z' = -x - y; u' = v; v' = w; w' = -u - v",
		"model|characteristic polynomial|eigenvalues|eigenvectors|complementary|response|check", 25,
		[]string{"det(s*I - A) = (s^3 + s + 1)^2"}},
	{"resonance of order 1", "x'' + 4x = 8cos(2t); x(0) = 1; x'(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 25,
		[]string{"x_p(t) = t*(a*cos(2*t) + b*sin(2*t))", "b = 2"}},
	{"resonance of order 2", "x'' + 2x' + x = t*exp(-t); x(0) = 0; x'(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 28,
		[]string{"x_p(t) = t^2*(a_0 + a_1*t)*exp(-t)", "a_0 = 0", "a_1 = 1/6"}},
	{"resonance in a system", "x' = 3x - 2y + z + exp(2t); y' = x + z; z' = 2z + t",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|trial|particular|complementary|response|check", 34,
		[]string{"(2*I - A)*a_0 + a_1 = [1; 0; 0]", "a_1 = [2; 1; 0]"}},
	{"higher orders", "m'' = -2m + n; n'' = m - 2n + 1; m(0) = 1; m'(0) = 0; n(0) = 0; n'(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 35,
		[]string{"y = [m; m'; n; n']", "lambda_1 = i", "lambda_3 = sqrt(3)*i"}},
	{"algebraic", "x' = -x + flow; flow = 3x + sin(t); x(0) = 1",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 25,
		[]string{"flow = 3*x + sin(t)", "A = [2]"}},
	{"relation with an input of its own", "x' = -x + 1; y = x + sin(t); x(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 25,
		[]string{"y_p(t) = 1 + sin(t)"}},
	{"constraint", "x' + y' = x; x' + y' = y + t; x(0) = 1",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 30,
		[]string{"-x + y + t = 0", "q_p(t) = a_0 + a_1*t"}},
	{"relations alone", "p = 3t; q = p + 1", "model|response|check", 5, []string{"q = 3*t + 1"}},
	{"RLC", "i' = -R/L*i - q/(L*C) + U/L; q' = i; i(0) = 0; q(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|trial|particular|complementary|constants|response|check", 27,
		[]string{"det(s*I - A) = s^2 + R/L*s + 1/(C*L)", "lambda_1 = 1/(2*C*L)*(-C*R + sqrt(4*C*L - C^2*R^2)*j)", "B2 = U/L"}},
	{"two compartments", "a' = -k1*a + k2*b; b' = k1*a - k2*b - ke*b; a(0) = D; b(0) = 0",
		"model|characteristic polynomial|eigenvalues|eigenvectors|decoupling|complementary|constants|response|check", 23,
		[]string{"det(s*I - A) = s^2 + (k1 + k2 + ke)*s + k1*ke", "C2 = 1/2*D*(k2 + ke - k1)"}},
}

func responseOf(t *testing.T, src string) *linsys.Response {
	t.Helper()
	m, err := linsys.Read(src)
	require.NoError(t, err, src)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err, src)
	return r
}

func working(t *testing.T, r *linsys.Response) (steps []linsys.Step, kinds, text string, verified int) {
	t.Helper()
	steps, err := r.Working(context.Background())
	require.NoError(t, err)
	var k []string
	for _, s := range steps {
		k = append(k, s.Kind)
		text += s.String()
		verified += len(s.Verified)
		balanced(t, s)
	}
	return steps, strings.Join(k, "|"), text, verified
}

// balanced tests that what a step is written as nests properly.
func balanced(t *testing.T, s linsys.Step) {
	t.Helper()
	tex := s.LaTeX()
	depth := 0
	for i, c := range tex {
		if i > 0 && tex[i-1] == '\\' {
			continue
		}
		switch c {
		case '{':
			depth++
		case '}':
			depth--
		}
		if depth < 0 {
			break
		}
	}
	assert.Zero(t, depth, tex)
	for _, pair := range [][2]string{{`\begin{`, `\end{`}, {`\left(`, `\right)`}} {
		assert.Equal(t, strings.Count(tex, pair[0]), strings.Count(tex, pair[1]), tex)
	}
	assert.Zero(t, strings.Count(tex, "$")%2, tex)
	d := xml.NewDecoder(strings.NewReader("<div>" + s.HTML() + "</div>"))
	for {
		if _, err := d.Token(); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err, s.HTML())
		}
	}
}

func TestWorking(t *testing.T) {
	for _, c := range workedModels {
		t.Run(c.name, func(t *testing.T) {
			r := responseOf(t, c.src)
			_, kinds, text, verified := working(t, r)
			assert.Equal(t, c.kinds, kinds)
			assert.Equal(t, c.verified, verified)
			lines := map[string]bool{}
			for _, l := range strings.Split(text, "\n") {
				lines[strings.TrimSpace(l)] = true
			}
			for _, l := range c.holds {
				assert.True(t, lines[l], "%s\nis not in\n%s", l, text)
			}
			_, _, again, _ := working(t, r)
			assert.Equal(t, text, again)
		})
	}
}

// The equation for one state alone, read as a model with the initial values
// that come with it, has that state for its response.
func TestEliminationReadsBack(t *testing.T) {
	for _, c := range workedModels {
		r := responseOf(t, c.src)
		for _, state := range r.States() {
			e, err := r.Elimination(context.Background(), state)
			require.NoError(t, err, c.name)
			assert.Len(t, e.Verified, 1)
			balanced(t, e.Step())
			if e.Order == 0 || len(r.Constants()) > 0 || strings.Contains(c.name, "cubic") {
				continue
			}
			src := e.Explicit.String()
			for _, eq := range e.Initial {
				src += "; " + eq.String()
			}
			alone := responseOf(t, src)
			assert.True(t, alone.State(state).Equal(r.State(state)), "%s: %s", c.name, src)
		}
	}
}

// With u = exp(7t) added to an equation, the particular integral gains
// G(7) exp(7t).
func TestTransferFunctionActs(t *testing.T) {
	for _, c := range workedModels {
		r := responseOf(t, c.src)
		for i, eq := range r.Model().Equations() {
			list := r.Model().Equations()
			list[i].Right = expr.Add(eq.Right, expr.Apply("exp", expr.Mul(expr.Int(7), expr.Sym("t"))))
			m, err := linsys.FromEquations(list, "t", expr.Limits{})
			require.NoError(t, err)
			driven, err := m.ClosedForm(context.Background())
			require.NoError(t, err)
			base, err := linsys.FromEquations(r.Model().Equations(), "t", expr.Limits{})
			require.NoError(t, err)
			free, err := base.ClosedForm(context.Background())
			require.NoError(t, err)
			for _, state := range r.States() {
				g, err := r.TransferFunction(context.Background(), i, state)
				require.NoError(t, err)
				assert.Len(t, g.Verified, 1)
				balanced(t, g.Step())
				gain := at(t, g.Equation.Right, g.Variable)
				assert.True(t, driven.Steady(state).Sub(free.Steady(state)).Equal(gain), "%s: %s, input %d: %s", c.name, state, i, g.Equation)
				assert.True(t, gain.Equal(at(t, g.Factored, g.Variable)), g.Factored)
			}
		}
	}
}

// at returns G(7) exp(7t).
func at(t *testing.T, g expr.Node, variable string) expr.Function {
	t.Helper()
	src := strings.ReplaceAll(g.String(), "sqrt", "SQRT")
	src = strings.ReplaceAll(strings.ReplaceAll(src, variable, "(7)"), "SQRT", "sqrt")
	f, err := expr.ParseFunction("("+src+")*exp(7t)", expr.Limits{})
	require.NoError(t, err, src)
	return f
}

func TestWorkingAfterSubstitution(t *testing.T) {
	ctx := context.Background()
	r := responseOf(t, "x'' + 2*d*x' + w^2*x = cos(w*t)")
	r, err := r.When(ctx, "d = 0")
	require.NoError(t, err)
	_, _, text, _ := working(t, r)
	assert.Contains(t, text, "x_p(t) = t*(a*cos(w*t) + b*sin(w*t))")
	r, err = r.With(map[string]*big.Rat{"w": big.NewRat(2, 1), "C1": big.NewRat(3, 1)})
	require.NoError(t, err)
	_, kinds, text, _ := working(t, r)
	assert.NotContains(t, kinds, "constants")
	assert.Contains(t, text, "The other constants have been given values.")
	assert.Contains(t, text, "x_c(t) = 1/2*C2*sin(2*t) + 3*cos(2*t)")
}

func TestWorkingLimits(t *testing.T) {
	n := 13
	a := make([][]*big.Rat, n)
	for i := range a {
		a[i] = make([]*big.Rat, n)
		for j := range a[i] {
			a[i][j] = big.NewRat(int64(i-j), 3)
		}
	}
	m, err := linsys.FromMatrix(nil, a, nil, nil)
	require.NoError(t, err)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err)
	_, kinds, text, _ := working(t, r)
	assert.Equal(t, "limit|response|check", kinds)
	assert.Contains(t, text, "at most 12 first-order equations; this one has 13")

	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	var e *linsys.Error
	_, err = r.Working(ctx)
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.Cancelled, e.Kind)
	_, err = r.TransferFunction(context.Background(), 13, "y1")
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.WrongShape, e.Kind)
}

// Names do nothing but stand in the output.
func TestWorkingHostileNames(t *testing.T) {
	one := big.NewRat(1, 1)
	m, err := linsys.FromMatrix([]string{`\write18{rm}`, `<script>&`}, [][]*big.Rat{{one, one}, {one, one}}, []string{"t", "0"}, []*big.Rat{one, one})
	require.NoError(t, err)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err)
	steps, _, _, _ := working(t, r)
	for _, s := range steps {
		assert.NotContains(t, s.LaTeX(), `\write18`)
		assert.NotContains(t, s.HTML(), "<script>")
	}
}

// Every published case that is solved has a working, verified and well-formed.
func TestWorkingPublished(t *testing.T) {
	ctx := context.Background()
	worked := 0
	for _, c := range readPublished(t) {
		general, special, err := c.solve(ctx)
		if err != nil {
			continue
		}
		for _, r := range []*linsys.Response{general, special} {
			if r == nil {
				continue
			}
			_, kinds, text, verified := working(t, r)
			assert.NotContains(t, kinds, "limit", "%s: %s", c.ID, text)
			assert.Greater(t, verified, len(r.States()), c.ID)
			for i := range r.Model().Equations() {
				for _, state := range r.States() {
					_, err := r.TransferFunction(ctx, i, state)
					assert.NoError(t, err, c.ID)
				}
			}
			for _, state := range r.States() {
				_, err := r.Elimination(ctx, state)
				assert.NoError(t, err, c.ID)
			}
			worked++
		}
	}
	assert.Greater(t, worked, 50)
}

// The Jordan matrix of a model mixed from blocks has their sizes.
func TestWorkingJordanStructure(t *testing.T) {
	tests := []struct {
		name   string
		blocks []block
		ones   int // above the diagonal of J
	}{
		{"one chain", []block{jordan(2, 4)}, 3},
		{"two chains of one root", []block{jordan(-1, 3), jordan(-1, 2)}, 3},
		{"chains of equal length", []block{jordan(0, 2), jordan(0, 2), jordan(3, 1)}, 2},
		{"three roots", []block{jordan(1, 2), jordan(-1, 2), jordan(0, 1)}, 2},
		{"conjugate chains", []block{rotation(-1, 2, 2), rotation(-1, 2, 1)}, 2},
		{"irrational", []block{companion(-2, 0), companion(-2, 0)}, 0},
		{"no chain", []block{jordan(5, 1), jordan(5, 1), jordan(5, 1)}, 0},
	}
	for _, c := range tests {
		t.Run(c.name, func(t *testing.T) {
			rnd := rand.New(rand.NewPCG(1, uint64(len(c.name))))
			for range 3 {
				a := mix(rnd, c.blocks)
				r := responseOf(t, modelText(a, nil, make([]int64, len(a))))
				steps, _, _, _ := working(t, r)
				ones, found := 0, false
				for _, s := range steps {
					for _, p := range s.Passages {
						for _, f := range p.Formulas {
							m, ok := f.Right.(expr.Matrix)
							if !ok || f.Left.String() != "J" {
								continue
							}
							found = true
							for i := range m.Rows[1:] {
								if m.Rows[i][i+1].String() == "1" {
									ones++
								}
							}
						}
					}
				}
				assert.True(t, found)
				assert.Equal(t, c.ones, ones)
			}
		})
	}
}

// Long sums are broken between their terms, with their signs.
func TestWorkingBreaksLongSums(t *testing.T) {
	r := responseOf(t, "a' = -k1*a + k2*b; b' = k1*a - k2*b - ke*b")
	steps, _, _, _ := working(t, r)
	tex := steps[len(steps)-2].LaTeX()
	assert.Contains(t, tex, "a(t) &= C_{1} ")
	assert.Contains(t, tex, " \\\\\n&\\quad {} + ")
}
