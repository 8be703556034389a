package main

import (
	"bytes"
	"context"
	"encoding/json"
	"encoding/xml"
	"fmt"
	"io"
	"math"
	"math/big"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// hostile has names and notes that would break a file that does not escape
// them, and formulas of every kind.
const hostile = `# <script>alert("1")</script> & 100% of \input{x} $y$ ^ ~ #. _Invented_ {data}.
func'' + 0.3 func' + 4 func = 2*range - 3*θ_1 + sin(2t)
range' = -range + func/7
θ_1'' = -5 θ_1 + 22/7*range_x_y + Жук
range_x_y' = -3 range_x_y + exp(-t/3)
Жук''' = - 2 Жук'' - 3 Жук' - 7/3 Жук + é_1
é_1' = -é_1
__' = 1
func(0)=1; func'(0)=0; range(0)=2; θ_1(0)=0; θ_1'(0)=1; range_x_y(0)=1; __(0)=0
Жук(0)=1; Жук'(0)=0; Жук''(0)=0; é_1(0)=1
`

// runOn runs the program on a model and returns the folder and what it printed.
func runOn(t *testing.T, model string, args ...string) (dir, printed string, err error) {
	t.Helper()
	dir = filepath.Join(t.TempDir(), "out")
	args = append(args, "-o", dir)
	if model != "" {
		file := filepath.Join(t.TempDir(), "a.model")
		require.NoError(t, os.WriteFile(file, []byte(model), 0o600))
		args = append(args, "-model", file)
	}
	stdin, openErr := os.Open(os.DevNull)
	require.NoError(t, openErr)
	defer stdin.Close()
	var out bytes.Buffer
	err = run(context.Background(), args, stdin, &out, io.Discard)
	return dir, out.String(), err
}

func read(t *testing.T, dir, name string) string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(dir, name))
	require.NoError(t, err)
	return string(data)
}

// checkHTML checks that a page is well-formed as XML, and that it loads nothing.
func checkHTML(t *testing.T, page string) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader(page))
	d.Entity = xml.HTMLEntity
	depth := 0
	var ids, targets []string
	for {
		tok, err := d.Token()
		if err == io.EOF {
			break
		}
		require.NoError(t, err)
		switch e := tok.(type) {
		case xml.StartElement:
			depth++
			require.NotContains(t, []string{"script", "link", "img", "image", "iframe", "object"}, e.Name.Local)
			for _, a := range e.Attr {
				require.NotEqual(t, "src", a.Name.Local)
				if a.Name.Local == "href" {
					require.True(t, strings.HasPrefix(a.Value, "#"), "a place in the page, not %s", a.Value)
					targets = append(targets, a.Value[1:])
				}
				if a.Name.Local == "id" {
					require.NotContains(t, ids, a.Value)
					ids = append(ids, a.Value)
				}
			}
		case xml.EndElement:
			depth--
		}
	}
	require.Zero(t, depth)
	require.Subset(t, ids, targets)
	require.NotContains(t, page, "@import")
}

// checkTeX checks that braces and environments are balanced, and compiles the
// document where there is a compiler.
func checkTeX(t *testing.T, dir string) {
	t.Helper()
	src := read(t, dir, "report.tex")
	depth := 0
	escaped := false
	for _, c := range src {
		switch {
		case escaped:
			escaped = false
		case c == '\\':
			escaped = true
		case c == '{':
			depth++
		case c == '}':
			depth--
		}
		require.GreaterOrEqual(t, depth, 0)
	}
	require.Zero(t, depth)
	var open []string
	for _, m := range regexp.MustCompile(`\\(begin|end)\{(\w+\*?)\}`).FindAllStringSubmatch(src, -1) {
		if m[1] == "begin" {
			open = append(open, m[2])
			continue
		}
		require.NotEmpty(t, open)
		require.Equal(t, open[len(open)-1], m[2])
		open = open[:len(open)-1]
	}
	require.Empty(t, open)
	if _, err := exec.LookPath("pdflatex"); err != nil {
		t.Log("pdflatex is not installed: the document is not compiled")
		return
	}
	var out []byte
	for range 2 { // the second time with the references
		cmd := exec.Command("pdflatex", "-interaction=nonstopmode", "-halt-on-error", "-no-shell-escape", "report.tex")
		cmd.Dir = dir
		var err error
		out, err = cmd.CombinedOutput()
		require.NoError(t, err, "%s", out)
	}
	require.NotRegexp(t, `Overfull \\hbox \([0-9]{2,}`, string(out), "formulas must break")
	require.NotContains(t, string(out), "undefined")
	require.FileExists(t, filepath.Join(dir, "report.pdf"))
	checkNumbers(t, dir)
}

// checkNumbers checks that LaTeX counts headings, tables and figures as the page
// does.
func checkNumbers(t *testing.T, dir string) {
	t.Helper()
	page := read(t, dir, "report.html")
	labels := regexp.MustCompile(`\\newlabel\{((?:sec|tab|fig):[^}]*)\}\{\{([^}]*)\}`).FindAllStringSubmatch(read(t, dir, "report.aux"), -1)
	require.NotEmpty(t, labels)
	for _, m := range labels {
		label, number := m[1], m[2]
		at := strings.Index(page, `id="`+label+`"`)
		require.Positive(t, at, label)
		want := map[string]string{"sec": ">" + number + "\u2002", "tab": "<caption>Table " + number + ". ", "fig": "<figcaption>Figure " + number + ". "}[label[:3]]
		begin := strings.Index(page[at:], want)
		require.GreaterOrEqual(t, begin, 0, "%s is %s", label, number)
		if label[:3] != "fig" { // a figure holds a drawing with names of its own
			require.NotContains(t, page[at+1:at+begin], " id=", label)
		}
	}
}

// checkGo builds and runs response.go in a module of its own, and compares it
// with proven digits.
func checkGo(t *testing.T, dir string, r *linsys.Response) {
	t.Helper()
	mod := t.TempDir()
	write := func(name, text string) {
		path := filepath.Join(mod, name)
		require.NoError(t, os.MkdirAll(filepath.Dir(path), 0o755))
		require.NoError(t, os.WriteFile(path, []byte(text), 0o600))
	}
	write("go.mod", "module example.org/check\n\ngo 1.26\n")
	write("response/response.go", read(t, dir, "response.go"))
	times := []string{"0", "1/8", "1/2", "3", "17/2", "20"}
	write("main.go", `package main

import (
	"encoding/json"
	"os"
	"reflect"

	"example.org/check/response"
)

func main() {
	var out [][]float64
	for _, t := range []float64{0, 0.125, 0.5, 3, 8.5, 20} {
		v := reflect.ValueOf(response.Response(t))
		var row []float64
		for i := range v.NumField() {
			row = append(row, v.Field(i).Float())
		}
		out = append(out, row)
	}
	if err := json.NewEncoder(os.Stdout).Encode(out); err != nil {
		panic(err)
	}
}
`)
	for _, args := range [][]string{{"vet", "./..."}, {"run", "."}} {
		cmd := exec.Command("go", args...)
		cmd.Dir = mod
		cmd.Env = append(os.Environ(), "GOFLAGS=", "GOWORK=off")
		var stdout, stderr bytes.Buffer
		cmd.Stdout, cmd.Stderr = &stdout, &stderr
		require.NoError(t, cmd.Run(), "%s", stderr.String())
		if args[0] != "run" {
			continue
		}
		var got [][]float64
		require.NoError(t, json.Unmarshal(stdout.Bytes(), &got))
		for i, at := range times {
			x, _ := new(big.Rat).SetString(at)
			for j, name := range r.States() {
				digits, err := r.State(name).At(context.Background(), x, 20)
				require.NoError(t, err)
				want, err := strconv.ParseFloat(digits, 64)
				require.NoError(t, err)
				// Relative to the size of the terms, which cancel near a zero crossing.
				require.InDelta(t, want, got[i][j], 1e-12*math.Max(1, math.Abs(want)), "%s at %s", name, at)
			}
		}
	}
}

func derived(t *testing.T, model string) *linsys.Response {
	t.Helper()
	m, err := linsys.Read(model)
	require.NoError(t, err)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err)
	return r
}

func TestReports(t *testing.T) {
	for _, c := range []struct {
		name, model string // no model: the built-in one
		states      int
	}{
		{"built-in", "", 3},
		{"hostile names", hostile, 7},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir, printed, err := runOn(t, c.model)
			require.NoError(t, err)
			page := read(t, dir, "report.html")
			checkHTML(t, page)
			require.Equal(t, c.states, strings.Count(page, "<svg"))
			require.Contains(t, page, "does not replace")
			require.Contains(t, printed, "holds")
			require.Contains(t, printed, dir)
			for i := range c.states {
				require.True(t, strings.HasPrefix(read(t, dir, fmt.Sprintf("plot-%d.pdf", i+1)), "%PDF-"))
			}
			checkTeX(t, dir)
			model := c.model
			if model == "" {
				model = container
			}
			checkGo(t, dir, derived(t, model))
		})
	}
}

// The values in the report are those of the response.
func TestValuesOfBuiltInModel(t *testing.T) {
	dir, _, err := runOn(t, "", "-from", "0", "-to", "100")
	require.NoError(t, err)
	page := read(t, dir, "report.html")
	r := derived(t, container)
	for _, name := range r.States() {
		for _, at := range []int64{0, 1, 5, 10, 20, 50, 75, 100} {
			v, err := r.State(name).At(context.Background(), big.NewRat(at, 1), 10)
			require.NoError(t, err)
			require.Contains(t, page, ">"+v+"<", "%s at %d", name, at)
		}
	}
	for _, s := range []string{"0.25", "30"} { // time constants
		require.Contains(t, page, `<td class="number">`+s+"</td>")
	}
}

// With symbols there are formulas and conditions, and no values.
func TestSymbols(t *testing.T) {
	dir, printed, err := runOn(t, "m*x'' + k*x = F\nx(0) = 0\nx'(0) = 0\n")
	require.NoError(t, err)
	page := read(t, dir, "report.html")
	checkHTML(t, page)
	checkTeX(t, dir)
	require.Regexp(t, `hold for</p>\n<p class="inline">.*<mi>m</mi>.*≠.*<mn>0</mn>.*,.*<mi>k</mi>.*≠`, page)
	require.Contains(t, page, "Remark: ")
	require.Contains(t, page, "depends on the symbols")
	require.Contains(t, read(t, dir, "report.tex"), "$m \\neq 0$,\\quad\n$k \\neq 0$")
	require.Contains(t, printed, "none: the symbols F, k, m have none")
}

func TestGeneralSolution(t *testing.T) {
	dir, printed, err := runOn(t, "x'''' + 4x'' + 2x = 3\ny' = -x + cos(t)\n")
	require.NoError(t, err)
	page := read(t, dir, "report.html")
	checkHTML(t, page)
	checkTeX(t, dir)
	require.NotContains(t, page, "<svg")
	require.Contains(t, page, "general")
	require.Contains(t, printed, "general, with C1, C2, C3, C4, C5")
	entries, err := os.ReadDir(dir)
	require.NoError(t, err)
	for _, e := range entries {
		require.NotContains(t, e.Name(), "plot")
	}
}

// Long exact numbers and polynomials get names instead of running off the page.
func TestLongFormulas(t *testing.T) {
	var b strings.Builder
	for i := range 6 {
		fmt.Fprintf(&b, "y%d' = ", i+1)
		for j := range 6 {
			fmt.Fprintf(&b, " + (%d/%d)*y%d", (5*i+3*j*j)%17-8, (i+2*j)%7+1, j+1)
		}
		fmt.Fprintf(&b, " + %d*sin(t/3)*exp(-t/7)\ny%d(0) = %d/7\n", i, i+1, i-2)
	}
	dir, _, err := runOn(t, b.String(), "-to", "1")
	require.NoError(t, err)
	checkHTML(t, read(t, dir, "report.html"))
	checkTeX(t, dir)
	src := read(t, dir, "report.tex")
	require.Contains(t, src, `N_{1}(z) &= `)
	require.Contains(t, src, `K_{1}`)
}

func TestOverwritingIsTold(t *testing.T) {
	dir := t.TempDir()
	stdin, err := os.Open(os.DevNull)
	require.NoError(t, err)
	defer stdin.Close()
	var first, second bytes.Buffer
	require.NoError(t, run(context.Background(), []string{"-o", dir}, stdin, &first, io.Discard))
	require.NotContains(t, first.String(), "overwritten")
	require.NoError(t, run(context.Background(), []string{"-o", dir}, stdin, &second, io.Discard))
	require.Contains(t, second.String(), "overwritten: report.html, report.tex, response.go, plot-1.pdf")
}

func TestModelFromPipe(t *testing.T) {
	for _, c := range []struct{ name, input, want string }{
		{"model", "x' = -x; x(0) = 5", "x = "},
		{"empty", "", "refrigerated container"},
		{"white space", " \n\n", "refrigerated container"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, w, err := os.Pipe()
			require.NoError(t, err)
			defer r.Close()
			_, err = io.WriteString(w, c.input)
			require.NoError(t, err)
			require.NoError(t, w.Close())
			var out bytes.Buffer
			require.NoError(t, run(context.Background(), []string{"-o", t.TempDir()}, r, &out, io.Discard))
			require.Contains(t, out.String(), c.want)
		})
	}
}

func TestBadModels(t *testing.T) {
	_, _, err := runOn(t, "a = 2\n\tx' = a + x*x\nx(0) = 1\n")
	require.Error(t, err)
	lines := strings.Split(err.Error(), "\n")
	require.Len(t, lines, 3)
	require.Contains(t, lines[0], "line 2, column 11: nonlinear: ")
	require.Equal(t, "    \tx' = a + x*x", lines[1])
	require.Equal(t, "    \t         ^", lines[2])

	_, _, err = runOn(t, "x' = y; y' = x\nx(0) = 1")
	require.ErrorContains(t, err, string(expr.SideConditions))

	for _, args := range [][]string{{"-to", "0"}, {"-from", "5", "-to", "1/2"}, {"-to", "soon"}, {"stray"}, {"-model", "/no/such/file"}} {
		_, _, err = runOn(t, "", args...)
		require.Error(t, err, "%v", args)
	}
	_, _, err = runOn(t, "x' = 1000 x; x(0) = 1", "-to", "10")
	require.ErrorContains(t, err, "too large for a plot")
}

func TestWindows(t *testing.T) {
	for _, c := range []struct{ name, model, from, to string }{
		{"decay", "x' = -x/30; x(0)=1", "0", "120"},
		{"another origin", "x' = -2x; x(3)=1", "3", "5"},
		{"undamped", "x'' = -x; x(0)=1; x'(0)=0", "0", "20"},
		{"input", "x' = -100x + sin(t/5); x(0)=1", "0", "100"},
		{"light damping", "x'' + 0.01x' + 100 x = 1; x(0)=1; x'(0)=0", "0", "30"},
		{"growth", "x' = x; x(0)=1", "0", "3"},
		{"constant", "x' = 0; x(0)=1", "0", "10"},
		{"no modes", "x = sin(t); x' = cos(t) + y", "0", "20"},
	} {
		t.Run(c.name, func(t *testing.T) {
			rep, err := derive(context.Background(), source{"test", c.model}, nil, nil)
			require.NoError(t, err)
			require.Equal(t, c.from, timeText(rep.window.from))
			require.Equal(t, c.to, timeText(rep.window.to))
			require.NotEmpty(t, rep.window.why)
		})
	}
}

func TestTexEscape(t *testing.T) {
	require.Equal(t, `\textbackslash{}a\{\}\$\&\#\%\_\^{}\~{}\textless{}\textgreater{} b`, texEscape("\\a{}$&#%_^~<>\nb"))
	require.Equal(t, `Section~3: $-$\~{}$|$`, texWords("Section\u00a03: −~|"))
}
