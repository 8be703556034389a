package linsys_test

import (
	"bytes"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/linsys"
)

// goRun is a generated source with the calls that the test program makes.
type goRun struct {
	name, model string
	assume      []string
	most        float64 // the error that is allowed, relative
	normwise    bool    // relative to the largest value of the state
	points      []goPoint
}

type goPoint struct {
	values map[string]float64
	times  []float64
}

// goFields reads the fields of a struct of a source with their comments, the
// names that they stand for.
func goFields(src, typ string) (fields, names []string) {
	_, body, _ := strings.Cut(src, "type "+typ+" struct {\n")
	body, _, _ = strings.Cut(body, "\n}")
	for _, l := range strings.Split(body, "\n") {
		field, name, _ := strings.Cut(l, "//")
		fields = append(fields, strings.Fields(field)[0])
		names = append(names, strings.TrimSpace(name))
	}
	return fields, names
}

// runGo vets and runs a program of several packages, one for each source; calls
// are the statements of main. It returns the lines of its output.
func runGo(t *testing.T, sources [][]byte, calls []string) []string {
	t.Helper()
	dir := t.TempDir()
	write := func(name, text string) {
		path := filepath.Join(dir, name)
		require.NoError(t, os.MkdirAll(filepath.Dir(path), 0o755))
		require.NoError(t, os.WriteFile(path, []byte(text), 0o644))
	}
	write("go.mod", "module generated\n\ngo 1.26\n")
	var main strings.Builder
	main.WriteString("package main\n\nimport (\n\"fmt\"\n\"math\"\n")
	for i, src := range sources {
		write(fmt.Sprintf("p%d/response.go", i), string(src))
		fmt.Fprintf(&main, "\"generated/p%d\"\n", i)
	}
	main.WriteString(")\n\nvar _ = math.Pi\n\nfunc main() {\n")
	for i := range calls { // functions of their own, to keep the compiler quick
		fmt.Fprintf(&main, "f%d()\n", i)
	}
	main.WriteString("}\n")
	for i, c := range calls {
		fmt.Fprintf(&main, "func f%d() {\n%s\n}\n", i, c)
	}
	write("main.go", main.String())
	out := ""
	for _, args := range [][]string{{"vet", "./..."}, {"run", "."}} {
		cmd := exec.CommandContext(t.Context(), "go", args...)
		cmd.Dir = dir
		cmd.Env = append(os.Environ(), "GOWORK=off", "GOFLAGS=", "GO111MODULE=on")
		var stdout, stderr bytes.Buffer
		cmd.Stdout, cmd.Stderr = &stdout, &stderr
		require.NoError(t, cmd.Run(), "go %v: %s", args, stderr.String())
		out = stdout.String()
	}
	return strings.Split(strings.TrimSpace(out), "\n")
}

// literal writes a struct of parameters.
func (p goPoint) literal(pkg string, fields, names []string) string {
	var list []string
	for i, f := range fields {
		list = append(list, fmt.Sprintf("%s: %s", f, strconv.FormatFloat(p.values[names[i]], 'g', -1, 64)))
	}
	return fmt.Sprintf("%s.ResponseParams{%s}", pkg, strings.Join(list, ", "))
}

// goErrors builds and runs the sources of the runs and returns the greatest error
// of each against proven digits.
func goErrors(t *testing.T, runs []goRun) []float64 {
	t.Helper()
	var sources [][]byte
	var calls []string
	responses := make([]*linsys.Response, len(runs))
	for i, run := range runs {
		m, err := linsys.Read(run.model)
		require.NoError(t, err, run.name)
		m, err = m.Assume(run.assume...)
		require.NoError(t, err, run.name)
		r, err := m.ClosedForm(t.Context())
		require.NoError(t, err, run.name)
		pkg := fmt.Sprintf("p%d", i)
		src, err := r.GoSource(t.Context(), linsys.GoOptions{Package: pkg})
		require.NoError(t, err, run.name)
		responses[i] = r
		sources = append(sources, src)
		fields, names := goFields(string(src), "ResponseParams")
		states, _ := goFields(string(src), "ResponseState")
		var b strings.Builder
		for _, p := range run.points {
			fmt.Fprintf(&b, "{\np := %s\nif err := p.Validate(); err != nil {\npanic(err)\n}\n", p.literal(pkg, fields, names))
			var times []string
			for _, x := range p.times {
				times = append(times, strconv.FormatFloat(x, 'g', -1, 64))
			}
			fmt.Fprintf(&b, "for _, t := range []float64{%s} {\ns := %s.Response(p, t)\nfmt.Println(", strings.Join(times, ", "), pkg)
			for j, s := range states {
				if j > 0 {
					b.WriteString(", ")
				}
				b.WriteString("s." + s)
			}
			b.WriteString(")\n}\n}\n")
		}
		calls = append(calls, b.String())
	}
	lines := runGo(t, sources, calls)
	worst := make([]float64, len(runs))
	for i, run := range runs {
		for _, p := range run.points {
			values := map[string]*big.Rat{}
			for name, v := range p.values {
				values[name] = new(big.Rat).SetFloat64(v)
			}
			r, err := responses[i].With(values)
			require.NoError(t, err, run.name)
			var got, want [][]float64
			for _, x := range p.times {
				digits, err := r.At(t.Context(), new(big.Rat).SetFloat64(x), 22)
				require.NoError(t, err)
				var row, exact []float64
				for j, field := range strings.Fields(lines[0]) {
					g, err := strconv.ParseFloat(field, 64)
					require.NoError(t, err, field)
					w, err := strconv.ParseFloat(digits[j], 64)
					require.NoError(t, err)
					row, exact = append(row, g), append(exact, w)
				}
				got, want = append(got, row), append(want, exact)
				lines = lines[1:]
			}
			for x := range got {
				for j := range got[x] {
					size := max(math.Abs(want[x][j]), 1e-290) // below, float64 has fewer bits
					for y := range want {
						if run.normwise {
							size = max(size, math.Abs(want[y][j]))
						}
					}
					e := math.Abs(got[x][j] - want[x][j])
					if e > 0 {
						e /= size
					}
					if e > worst[i] || math.IsNaN(e) {
						worst[i] = e
						if !(e <= run.most) {
							t.Errorf("%s: state %d at %v for %v: %v, exactly %v, error %.2g", run.name, j, p.times[x], p.values, got[x][j], want[x][j], e)
						}
					}
				}
			}
		}
	}
	for i, run := range runs {
		t.Logf("%-40s %.2g", run.name, worst[i])
	}
	return worst
}

// TestGoSymbolsValidate: what the code divides by, and what the model assumes,
// is reported by name; what only the formulas divide by is not.
func TestGoSymbolsValidate(t *testing.T) {
	source := func(model, pkg string, assume ...string) []byte {
		m, err := linsys.Read(model)
		require.NoError(t, err)
		m, err = m.Assume(assume...)
		require.NoError(t, err)
		r, err := m.ClosedForm(t.Context())
		require.NoError(t, err)
		src, err := r.GoSource(t.Context(), linsys.GoOptions{Package: pkg})
		require.NoError(t, err)
		return src
	}
	general := source("x' = -k*x + exp(-2*t)", "p3")
	hostile := source("x' = -func*x + p*math*exp(-range*t); y' = -P*y + k_1*x + k1*errors; x(0) = validate; y(0) = alpha*cos(β) + t0", "p4")
	lines := runGo(t, [][]byte{
		source("m*x'' + k*x = a/(b - c); x(0) = 0; x'(0) = 0", "p0"),
		source("m*x'' + k*x = a/(b - c); x(0) = 0; x'(0) = 0", "p1", "m > 0", "k >= 0", "b != 2*c"),
		source(chainModel, "p2"), general, hostile,
	}, []string{`
		good := p0.ResponseParams{M: 1, K: 2, A: 3, B: 4, C: 5}
		fmt.Println(good.Validate())
		for _, x := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
			bad := good
			bad.K = x
			fmt.Println(bad.Validate())
		}
		bad := good
		bad.M = 0
		fmt.Println(bad.Validate())
		bad = good
		bad.B = 5
		fmt.Println(bad.Validate())
	`, `
		good := p1.ResponseParams{M: 1, K: 0, A: 3, B: 4, C: 5}
		fmt.Println(good.Validate())
		bad := good
		bad.M = 0
		fmt.Println(bad.Validate())
		bad = good
		bad.K = -1
		fmt.Println(bad.Validate())
		bad = good
		bad.B = 10
		fmt.Println(bad.Validate())
	`, `
		fmt.Println(p2.ResponseParams{Ka: 1, Ke: 1, D: 1}.Validate())
	`, `
		fmt.Println(p3.ResponseParams{K: 2}.Validate())
		fmt.Println(p3.ResponseParams{K: 1}.Validate(), p3.Response(p3.ResponseParams{K: 1}, 0, [1]float64{3}).X)
	`, `
		fmt.Println(p4.ResponseParams{}.Validate())
	`})
	assert.Equal(t, []string{
		"<nil>",
		"k is not a finite number", "k is not a finite number", "k is not a finite number",
		"m must not be 0", "b must not equal c",
		"<nil>",
		"m > 0 is assumed and does not hold", "k >= 0 is assumed and does not hold", "b must not equal 2*c",
		"<nil>",
		"k must not equal 2",
		"<nil> 2", // 3 - 1
		"<nil>",
	}, lines)
	_, names := goFields(string(hostile), "ResponseParams")
	slices.Sort(names)
	assert.Equal(t, []string{"P", "alpha", "errors", "func", "k1", "k_1", "math", "p", "range", "t0", "validate", "β"}, names)
	assert.Contains(t, string(general), "//\tk != 2")
}

func points(times []float64, names string, rows ...[]float64) []goPoint {
	var out []goPoint
	for _, row := range rows {
		p := goPoint{values: map[string]float64{}, times: times}
		for i, name := range strings.Fields(names) {
			p.values[name] = row[i]
		}
		out = append(out, p)
	}
	return out
}

const (
	chainModel = "x' = -ka*x; y' = ka*x - ke*y; x(0) = D; y(0) = 0"
	rlcModel   = "L*C*v'' + R*C*v' + v = V; v(0) = 0; v'(0) = 0"
)

// The generated code has the values of the exact response, also where rates
// coincide.
func TestGoSymbolsValues(t *testing.T) {
	times := []float64{0, 0.125, 1, 3.7, 24}
	damping := [][]float64{}
	for _, r := range []float64{0, 0.1, 1.9, 2 - 1e-9, 2, 2 + 1e-9, 2.1, 10} {
		damping = append(damping, []float64{1, r, 1, 5})
	}
	goErrors(t, []goRun{
		{name: "chain of 2", model: chainModel, most: 1e-14,
			points: points(times, "ka ke D", []float64{1.3, 0.2, 100}, []float64{0.2, 1.3, 100}, []float64{0.7, 0.7, 1}, []float64{0, 0.5, 1}, []float64{0, 0, 1}, []float64{40, 0.01, 1})},
		{name: "chain of 3 with initial values", model: "x' = -a*x; y' = a*x - b*y; z' = b*y - c*z; x(0) = D; y(0) = E; z(0) = 1", most: 1e-14,
			points: points(times, "a b c D E", []float64{1, 2, 3, 5, 2}, []float64{1, 1, 1, 5, 2}, []float64{3, 1, 3, 5, 0}, []float64{0.1, 1.1, 0, 5, 2})},
		{name: "chain of 4", model: "w' = -a*w; x' = a*w - b*x; y' = b*x - c*y; z' = c*y; w(0) = 1; x(0) = 0; y(0) = 0; z(0) = 0", most: 1e-14,
			points: points(times, "a b c", []float64{1, 2, 3}, []float64{1, 1, 1}, []float64{3, 1, 3.0000001}, []float64{0.1, 0.2, 0})},
		{name: "two compartments, first-order input", model: "g' = -ka*g; x' = ka*g - (k10 + k12)*x + k21*y; y' = k12*x - k21*y; g(0) = D; x(0) = 0; y(0) = 0", most: 1e-14,
			points: points(times, "ka k10 k12 k21 D", []float64{1, 0.2, 0.5, 0.3, 100}, []float64{0.3, 0.2, 0.5, 0.3, 100}, []float64{0.6, 0.2, 0, 0.3, 100}, []float64{1, 0.5, 0.25, 0.5, 1})},
		{name: "RLC step", model: rlcModel, most: 1e-14, normwise: true, points: points(times, "L R C V", damping...)},
		{name: "RLC step, assumptions", model: rlcModel, assume: []string{"L > 0", "C > 0", "R >= 0"}, most: 1e-14, normwise: true, points: points(times, "L R C V", damping...)},
		{name: "RLC free", model: "L*C*v'' + R*C*v' + v = 0; v(0) = V; v'(0) = 0", most: 1e-14, normwise: true, points: points(times, "L R C V", damping...)},
		{name: "forced oscillator", model: "x'' + w0^2*x = F*cos(w*t); x(0) = 0; x'(0) = 1", most: 1e-14, normwise: true,
			points: points(times, "w0 w F", []float64{1, 1, 1}, []float64{1, 1 + 1e-9, 1}, []float64{2, 2.001, 1}, []float64{2, 0.5, 3}, []float64{0, 0, 3}, []float64{0, 1, 3})},
		{name: "damped forced oscillator", model: "x'' + c*x' + k*x = F*sin(w*t); x(0) = 1; x'(0) = 0", most: 1e-14, normwise: true,
			points: points(times, "c k w F", []float64{0, 4, 2, 1}, []float64{1e-8, 4, 2, 1}, []float64{4, 4, 2, 1}, []float64{0.5, 4, 1.9, 1})},
		{name: "mammillary", model: "x' = -(k10 + k12 + k13)*x + k21*y + k31*z; y' = k12*x - k21*y; z' = k13*x - k31*z; x(0) = D; y(0) = 0; z(0) = 0", most: 1e-14,
			points: points(times, "k10 k12 k13 k21 k31 D", []float64{0.2, 0.5, 0.1, 0.3, 0.02, 100}, []float64{0.5, 0.5, 0.5, 0.5, 0.5, 1}, []float64{0.5, 0, 0.5, 0.25, 0.5, 1})},
		{name: "general 2x2", model: "x' = a*x + b*y; y' = c*x + d*y; x(0) = x0; y(0) = y0", most: 1e-14, normwise: true,
			points: points([]float64{0, -1, 0.5, 2, 7}, "a b c d x0 y0", []float64{-1, 2, -3, -0.5, 1, 2}, []float64{-1, 1, 0, -1, 1, 2}, []float64{-1, 2, 1, -3, 1, 0}, []float64{0, 0, 0, 0, 1, 1}, []float64{-2, 1, -1, 0, 1, 1})},
		{name: "phase angle", model: "x' = -k*x + a*cos(w*t + phi); x(0) = 0", most: 1e-14, normwise: true,
			points: points(times, "k a w phi", []float64{1, 2, 3, 0.5}, []float64{0, 2, 1, math.Pi}, []float64{0.1, 2, 0.01, -1})},
		{name: "24-hour cycle", model: "x' = -k*x + M*(1 + A*cos(2*pi*t/24)); x(0) = x0", most: 1e-14, normwise: true,
			points: points(append(times, 1000), "k M A x0", []float64{0.3, 10, 0.5, 1}, []float64{0, 10, 0.5, 1}, []float64{0.26, 10, 1, 0})},
		{name: "numbers with symbols beside them", model: "x''' = y - x; y' = -2*y + a*sin(3*t) + b*sqrt(2); z'' + 2*z' + 5*z = a*exp(-k)*t; x(0) = a; x'(0) = 0; x''(0) = b; y(0) = pi; z(0) = 1; z'(0) = 0", most: 1e-14, normwise: true,
			points: points([]float64{0, 0.5, 2, 5}, "a b k", []float64{1, 2, 0.5}, []float64{0, 1, 1})},
		{name: "origin and negative times", model: "x' = -k*x + u; y' = k*x - m*y; x(t0) = 0; y(t0) = 1", most: 1e-14,
			points: points([]float64{2, 1.5, 3, 8, -6}, "k u m t0", []float64{1, 2, 1, 2}, []float64{1, 2, 0.5, 2})},
		{name: "repeated quadratic", model: "x'' + w^2*x = y; y'' + w^2*y = z; z'' + w^2*z = 0; x(0) = 1; x'(0) = 0; y(0) = 0; y'(0) = 1; z(0) = 1; z'(0) = 0", most: 1e-14, normwise: true,
			points: points(times, "w", []float64{1}, []float64{0}, []float64{2.5})},
		{name: "exponential constant", model: "x' = -k*x + exp(-k*T)*exp(-m*t); x(0) = 1/(1 + exp(-k*T))", most: 1e-14,
			points: points(times, "k T m", []float64{1, 2, 3}, []float64{1, 2, 1}, []float64{0.5, -1, 0.5})},
	})
}

// The sweep: rates and damping ratios that approach each other, to equality.
func TestGoSymbolsSweep(t *testing.T) {
	times := []float64{0.01, 0.5, 1, 5, 30}
	gaps := []float64{0}
	for j := 1; j <= 15; j++ {
		gaps = append(gaps, math.Pow(10, -float64(j)))
	}
	var two, three, damping, resonance [][]float64
	for _, g := range gaps {
		two = append(two, []float64{0.7 * (1 + g), 0.7, 3}, []float64{0.7, 0.7 * (1 + g), 3})
		three = append(three, []float64{0.7, 0.7 * (1 + g), 0.7 * (1 - g)}, []float64{0.7 * (1 + g), 0.7, 0.7})
		resonance = append(resonance, []float64{2, 2 * (1 + g), 1}, []float64{2 * (1 + g), 2, 1})
		damping = append(damping, []float64{1, 2 * (1 + g), 1, 5}, []float64{1, 2 * (1 - g), 1, 5})
	}
	worst := goErrors(t, []goRun{
		{name: "two rates", model: chainModel, most: 1e-14, points: points(times, "ka ke D", two...)},
		{name: "two rates, assumed apart", model: chainModel, assume: []string{"ka > 0", "ke > 0"}, most: 1e-14, points: points(times, "ka ke D", two...)},
		{name: "three rates", model: "x' = -a*x; y' = a*x - b*y; z' = b*y - c*z; x(0) = 1; y(0) = 0; z(0) = 0", most: 1e-14, points: points(times, "a b c", three...)},
		{name: "damping ratio, step", model: rlcModel, most: 1e-14, points: points(times, "L R C V", damping...)},
		{name: "damping ratio, free", model: "L*C*v'' + R*C*v' + v = 0; v(0) = V; v'(0) = V", most: 1e-14, normwise: true, points: points(times, "L R C V", damping...)},
		{name: "resonance", model: "x'' + w0^2*x = F*cos(w*t); x(0) = 0; x'(0) = 0", most: 1e-14, normwise: true, points: points(times, "w0 w F", resonance...)},
	})
	assert.Less(t, slices.Max(worst), 1e-14)
}

// Random models at small rational values, where many rates coincide.
func TestGoSymbolsRandom(t *testing.T) {
	g := rand.New(rand.NewPCG(7, 2))
	pick := func(s ...string) string { return s[g.IntN(len(s))] }
	var runs []goRun
	for len(runs) < 15 {
		names := []string{"x", "y", "z"}[:1+g.IntN(3)]
		var statements []string
		for _, s := range names {
			var terms []string
			for _, o := range names {
				if o == s || g.IntN(2) == 0 {
					terms = append(terms, pick("a", "b", "c", "a*b", "-a", "-b", "-c", "-1", "-3/2", "(a - b)", "a/d", "-(a + c)", "w", "sqrt(2)", "pi*a")+"*"+o)
				}
			}
			if g.IntN(2) == 0 {
				terms = append(terms, pick("a", "b*t", "exp(-a*t)", "exp(-2*t)*cos(3*t)", "c*cos(w*t)", "sin(w*t + phi)", "t^2*exp(-b*t)", "exp(-c)*sin(2*pi*t)"))
			}
			order := "'"
			if g.IntN(4) == 0 {
				order = "''"
				statements = append(statements, s+"'(0) = "+pick("0", "b", "1"))
			}
			statements = append(statements, s+order+" = "+strings.Join(terms, " + "), s+"(0) = "+pick("0", "a", "1", "b", "w"))
		}
		run := goRun{name: strings.Join(statements, "; "), most: 1e-11, normwise: true}
		run.model = run.name
		m, err := linsys.Read(run.model)
		require.NoError(t, err, run.model)
		r, err := m.ClosedForm(t.Context())
		if err != nil || len(r.Parameters()) == 0 {
			continue // without symbols, or beyond the limits of work
		}
		for range 3 {
			p := goPoint{values: map[string]float64{}, times: []float64{0, 0.5, 1, 3, -0.75}}
			for _, name := range r.Parameters() {
				p.values[name] = float64(g.IntN(9)-3) / 4
			}
			if _, ok := p.values["d"]; ok {
				p.values["d"] = 1.5
			}
			run.points = append(run.points, p)
		}
		runs = append(runs, run)
	}
	goErrors(t, runs)
}
