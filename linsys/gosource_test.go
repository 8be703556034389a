package linsys_test

import (
	"bytes"
	"context"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// TestGoSourceStatesErrors: three rates that differ by 1e-10 need coefficients of
// 1e20 for values of order 1, or a series.
func TestGoSourceStatesErrors(t *testing.T) {
	source := func(model string, opt linsys.GoOptions) string {
		r, err := respond(model)
		require.NoError(t, err)
		src, err := r.GoSource(context.Background(), opt)
		require.NoError(t, err)
		return string(src)
	}
	close := "x' = -x; y' = x - 1.0000000001*y; z' = y - 1.0000000002*z; x(0) = 1; y(0) = 0; z(0) = 0"
	src := source(close, linsys.GoOptions{})
	assert.Contains(t, src, "a series where they cancel")
	assert.NotContains(t, src, "is not met")
	src = source(close, linsys.GoOptions{Tolerance: 1e-17})
	assert.Contains(t, strings.ReplaceAll(src, "\n//", ""), "The tolerance of 1e-17 of the largest value is not met for X, Y, Z: terms cancel,")
	src = source(close, linsys.GoOptions{Tolerance: 1e30})
	assert.NotContains(t, src, "a series where they cancel")

	src = source("x' = -x + y; y' = -3*y; x(0) = 1; y(0) = 2", linsys.GoOptions{From: -1, To: 2})
	assert.Contains(t, src, "// Error: for -1 <= t <= 2 every value")
	assert.NotContains(t, src, "a series where they cancel")
	growing := "x' = x/2; y' = -y/100; x(0) = 1; y(0) = 1"
	src = source(growing, linsys.GoOptions{})
	assert.Contains(t, src, "// Error: for 0 <= t <= 40 every value")
	src = source(growing, linsys.GoOptions{To: 3000})
	assert.Contains(t, src, "//\tX  (no bound is known)\n//\tY  ")
	assert.NotContains(t, src, "is not met")
	src = source("x'' + x = 0", linsys.GoOptions{})
	assert.Contains(t, src, "// Nothing is said of the errors")
	src = source("x'' + x = t/3", linsys.GoOptions{})
	assert.Contains(t, src, "That is for constants that are all 0; nothing\n// is said of their terms.")

	r, err := respond("x' = -x; x(0) = 1")
	require.NoError(t, err)
	for _, opt := range []linsys.GoOptions{{From: 1}, {From: math.NaN(), To: 1}, {To: math.Inf(1)}, {To: 1, Tolerance: -1}, {To: 1, Tolerance: math.NaN()}} {
		_, err := r.GoSource(context.Background(), opt)
		var e *linsys.Error
		require.ErrorAs(t, err, &e, "%+v", opt)
		assert.Equal(t, expr.Syntax, e.Kind)
	}
	r, err = respond("x' = -k*x; x(0) = 1")
	require.NoError(t, err)
	_, err = r.GoTest(context.Background(), linsys.GoOptions{})
	var e *linsys.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.NeedsAssumption, e.Kind)
}

// statedErrors reads the statements of a source: the times, and the bounds on the
// states and on their derivatives.
func statedErrors(t *testing.T, src string) (from, to float64, bounds [2][]float64) {
	t.Helper()
	number := func(s string) float64 {
		x, err := strconv.ParseFloat(s, 64)
		require.NoError(t, err)
		return x
	}
	all := regexp.MustCompile(`// Error: for (\S+) <= t <= (\S+)\s(?:.*\n// )*.*\n//\n((?://\t.*\n)+)`).FindAllStringSubmatch(src, -1)
	require.Len(t, all, 2, "%s", src)
	for i, m := range all {
		from, to = number(m[1]), number(m[2])
		for _, l := range strings.Split(strings.TrimSpace(m[3]), "\n") {
			bounds[i] = append(bounds[i], number(strings.TrimSuffix(strings.Fields(l)[2], ",")))
		}
	}
	return from, to, bounds
}

// goCase is a response whose source is run.
type goCase struct {
	text     string
	r        *linsys.Response
	src      string
	times    []float64
	bounds   [2][]float64
	relative float64 // the largest stated bound, relative to the largest value
}

func newGoCase(t *testing.T, rnd *rand.Rand, dir, text string, number int, opt linsys.GoOptions, test bool) goCase {
	t.Helper()
	r, err := respond(text)
	require.NoError(t, err, text)
	opt.Package, opt.Func = "main", fmt.Sprintf("R%d", number)
	src, err := r.GoSource(t.Context(), opt)
	require.NoError(t, err, text)
	c := goCase{text: text, r: r, src: string(src)}
	write := func(name string, text []byte) {
		require.NoError(t, os.WriteFile(filepath.Join(dir, name), text, 0o644))
	}
	write(fmt.Sprintf("r%d.go", number), src)
	if test {
		file, err := r.GoTest(t.Context(), opt)
		require.NoError(t, err, text)
		write(fmt.Sprintf("r%d_test.go", number), file)
	}
	from, to, bounds := statedErrors(t, c.src)
	c.bounds = bounds
	c.times = []float64{from, to}
	for j := range 24 {
		x := from + (to-from)*rnd.Float64()
		if j%4 == 0 {
			x = from + (to-from)*math.Ldexp(rnd.Float64(), -j/2)
		}
		c.times = append(c.times, min(max(x, from), to))
	}
	for _, m := range regexp.MustCompile(`or (\S+) of its largest value there`).FindAllStringSubmatch(c.src, -1) {
		x, err := strconv.ParseFloat(m[1], 64)
		require.NoError(t, err)
		c.relative = max(c.relative, x)
	}
	return c
}

// runGoCases builds, vets, tests and runs the sources, and returns the values and
// derivatives by case, time and state.
func runGoCases(t *testing.T, dir string, cases []goCase) [][2][][]float64 {
	t.Helper()
	var main strings.Builder
	main.WriteString("package main\n\nimport \"fmt\"\n\nfunc main() {\n")
	for i := range cases {
		fmt.Fprintf(&main, "f%d()\n", i)
	}
	main.WriteString("}\n")
	for i, c := range cases {
		var times []string
		for _, x := range c.times {
			times = append(times, strconv.FormatFloat(x, 'g', -1, 64))
		}
		arg := ""
		if n := len(c.r.Constants()); n > 0 {
			arg = fmt.Sprintf(", [%d]float64{}", n)
		}
		fmt.Fprintf(&main, "func f%d() {\ntimes := []float64{%s}\nfor i, s := range R%dValues(nil, times%s) {\nfmt.Println(s, R%dRates(times[i]%s))\n}\n}\n", i, strings.Join(times, ", "), i, arg, i, arg)
	}
	write := func(name, text string) {
		require.NoError(t, os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644))
	}
	write("main.go", main.String())
	write("go.mod", "module generated\n\ngo 1.26\n")
	write("main_test.go", "package main\n\nimport \"testing\"\n\nfunc TestMainValues(*testing.T) { main() }\n")
	cmd := exec.CommandContext(t.Context(), "go", "test", "-vet=all", "-v", ".") // builds, vets and runs
	cmd.Dir = dir
	cmd.Env = append(os.Environ(), "GOWORK=off", "GOFLAGS=", "GO111MODULE=on")
	var stdout, stderr bytes.Buffer
	cmd.Stdout, cmd.Stderr = &stdout, &stderr
	require.NoError(t, cmd.Run(), "%s%s", stdout.String(), stderr.String())
	var lines []string
	for _, l := range strings.Split(stdout.String(), "\n") {
		if strings.HasPrefix(l, "{") {
			lines = append(lines, l)
		}
	}
	values := make([][2][][]float64, len(cases))
	for i, c := range cases {
		for range c.times {
			var row []float64
			for _, f := range strings.Fields(strings.NewReplacer("{", " ", "}", " ").Replace(lines[0])) {
				x, err := strconv.ParseFloat(f, 64)
				require.NoError(t, err)
				row = append(row, x)
			}
			lines = lines[1:]
			n := len(row) / 2
			values[i][0], values[i][1] = append(values[i][0], row[:n]), append(values[i][1], row[n:])
		}
	}
	return values
}

// requireStated compares computed values with proven digits: no error exceeds its
// stated bound. It returns the ratios of bounds and largest errors.
func requireStated(t *testing.T, c goCase, values [2][][]float64) []float64 {
	t.Helper()
	var fs [2][]expr.Function
	zero := map[string]*big.Rat{}
	for _, name := range c.r.Constants() {
		zero[name] = new(big.Rat)
	}
	r, err := c.r.With(zero)
	require.NoError(t, err)
	for _, name := range r.States() {
		fs[0] = append(fs[0], r.State(name))
		fs[1] = append(fs[1], r.State(name).Derivative())
	}
	var ratios []float64
	for way, list := range fs {
		bundle := expr.NewBundle(list...)
		worst := make([]float64, len(list))
		for j, at := range c.times {
			digits, err := bundle.At(t.Context(), new(big.Rat).SetFloat64(at), 22)
			require.NoError(t, err)
			for i, d := range digits {
				want, _, err := big.ParseFloat(d, 10, 200, big.ToNearestEven)
				require.NoError(t, err)
				require.False(t, math.IsNaN(values[way][j][i]) || math.IsInf(values[way][j][i], 0), "%s\n%s", c.text, c.src)
				e, _ := new(big.Float).Sub(want, big.NewFloat(values[way][j][i])).Float64()
				size, _ := want.Float64()
				e = max(0, math.Abs(e)-1e-21*math.Abs(size))
				worst[i] = max(worst[i], e)
				require.LessOrEqual(t, e, c.bounds[way][i], "%s\nstate %d of way %d at %v\n%s", c.text, i, way, at, c.src)
			}
		}
		for i, w := range worst {
			if w > 0 {
				ratios = append(ratios, c.bounds[way][i]/w)
			}
		}
	}
	return ratios
}

// randomGoModels returns models of 2 to 6 states of every eigenstructure.
func randomGoModels(rnd *rand.Rand, n int) []string {
	blocks := func() block {
		a, w := int64(rnd.IntN(5)-4), int64(rnd.IntN(3)+1)
		switch rnd.IntN(6) {
		case 0:
			return jordan(a, 1)
		case 1:
			return jordan(a, 2+rnd.IntN(2))
		case 2:
			return rotation(a, w, 1)
		case 3:
			return rotation(min(a, 0), w, 2)
		case 4:
			return [...]block{companion(-2, 0), companion(1, 3), companion(3, 1)}[rnd.IntN(3)]
		}
		return [...]block{companion(-1, -1, 0), companion(2, 0, 4, 0), companion(3, 5, 2), companion(-1, -1, 0, 0, 0)}[rnd.IntN(4)]
	}
	var out []string
	for i := 0; len(out) < n; i++ {
		var list []block
		var inputs []input
		if i < len(structures) {
			list, inputs = structures[i].blocks, structures[i].inputs
		}
		size := 0
		for _, b := range list {
			size += len(b)
		}
		for target := 2 + rnd.IntN(5); size < target; {
			b := blocks()
			if size+len(b) <= target {
				list, size = append(list, b), size+len(b)
			}
		}
		if size > 6 {
			continue
		}
		if i >= len(structures) && rnd.IntN(3) > 0 {
			inputs = append(inputs, input{state: rnd.IntN(size), coef: int64(rnd.IntN(9) - 4), n: rnd.IntN(3), a: int64(-rnd.IntN(3)), b: int64(rnd.IntN(3)), useSine: rnd.IntN(2) == 0})
		}
		y0 := make([]int64, size)
		for j := range y0 {
			y0[j] = int64(rnd.IntN(11) - 5)
		}
		text := modelText(mix(rnd, list), inputs, y0)
		switch i % 5 {
		case 1:
			text = strings.ReplaceAll(text, "(0) =", "(7/3) =")
		case 2:
			text = strings.ReplaceAll(text, "(0) =", "(-2) =")
		}
		out = append(out, text)
	}
	return out
}

// TestGoSourceErrors runs the sources of random models and of hard ones: the errors
// never exceed the stated bounds, and the bounds are not far above them.
func TestGoSourceErrors(t *testing.T) {
	rnd := rand.New(rand.NewPCG(7, 11))
	dir := t.TempDir()
	var cases []goCase
	add := func(text string, opt linsys.GoOptions, test bool) goCase {
		c := newGoCase(t, rnd, dir, text, len(cases), opt, test)
		cases = append(cases, c)
		return c
	}
	for i, text := range randomGoModels(rnd, 200) {
		add(text, linsys.GoOptions{}, i%20 == 0)
	}
	random := len(cases)
	for _, gap := range []string{"1e-3", "1e-6", "1e-10", "1e-14"} {
		gap := "(1 + " + strings.Replace(gap, "1e", "10^(", 1) + "))"
		for _, text := range []string{
			"x' = -x; y' = x - " + gap + "*y; z' = y - " + gap + "^2*z; x(0) = 1; y(0) = 0; z(0) = 0",
			"x' = -x/7; y' = x - " + gap + "*y/7; z' = 3*y - 2*z; x(1/3) = 1; y(1/3) = 0; z(1/3) = 1",
			"x'' + 4*x = y; y'' + 4*" + gap + "*y = 0; x(0) = 0; x'(0) = 0; y(0) = 1; y'(0) = 0",
			"x'' + 2*" + gap + "*x' + x = 1; x(0) = 0; x'(0) = 0",
			"x'' + x' + 5*x = y; y'' + " + gap + "*y' + 5*y = 0; x(-1) = 0; x'(-1) = 0; y(-1) = 1; y'(-1) = 0",
		} {
			c := add(text, linsys.GoOptions{}, true)
			assert.LessOrEqual(t, c.relative, 1e-9, "%s\n%s", text, c.src)
		}
	}
	for _, text := range []string{
		"x'' + 4*x = sin(2*t)",
		"x' = -x + t^2; y' = x - 2*y",
		"x''' = x + x' + t*pi; x(sqrt(2)) = 1; x'(sqrt(2)) = 0; x''(sqrt(2)) = exp(1)",
		"x' = 1; y' = x; z' = 0; x(0) = 1; y(0) = 1/3; z(0) = 5",
		"x' = -1000*x + y; y' = -y/1000; x(0) = 1; y(0) = 1",
		"x' = 3*x; y' = -y/100 + x; x(0) = 1; y(0) = 1",
		"x' = -10^(-7)*x; x(10^6) = 1",
	} {
		add(text, linsys.GoOptions{}, true)
	}
	add("x' = -x + y; y' = -3*y + cos(100*t); x(0) = 1; y(0) = 2", linsys.GoOptions{From: -3, To: 1000}, true)
	add("x' = -x; y' = x - 1.0000001*y; x(0) = 1; y(0) = 0", linsys.GoOptions{From: -20, To: 1e9}, true)
	add("x' = -x; y' = x - 1.0000001*y; x(0) = 1; y(0) = 0", linsys.GoOptions{Tolerance: 1}, true)
	nested := add("x' = -x; y' = x - 1.0000000001*y; z' = y - 1.01*z; x(0) = 1; y(0) = 0; z(0) = 0", linsys.GoOptions{From: -3, To: 500}, true)
	assert.Contains(t, nested.src, "p2[1]")
	assert.LessOrEqual(t, nested.relative, 1e-12)
	add("x'' + 4*x = y; y'' + 4.00000001*y = z; z'' + 4.1*z = 0; x(0) = 0; x'(0) = 0; y(0) = 1; y'(0) = 0; z(0) = 1; z'(0) = 1", linsys.GoOptions{To: 3000}, true)
	add("x' = -x; y' = x - 2*y; x(0) = 1; y(0) = 0", linsys.GoOptions{From: 1.5, To: 1.5}, true)

	values := runGoCases(t, dir, cases)
	var ratios, relative []float64
	for i, c := range cases {
		r := requireStated(t, c, values[i])
		if i < random {
			ratios, relative = append(ratios, r...), append(relative, c.relative)
		}
	}
	slices.Sort(ratios)
	slices.Sort(relative)
	t.Logf("%d models, %d states and derivatives: stated bound over observed maximum %.3g to %.3g, median %.3g; relative bounds to %.2g, median %.2g", random, len(ratios), ratios[0], ratios[len(ratios)-1], ratios[len(ratios)/2], relative[len(relative)-1], relative[len(relative)/2])
	assert.LessOrEqual(t, ratios[len(ratios)/2], 100.0)
}
