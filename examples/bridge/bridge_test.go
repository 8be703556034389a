package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"go/parser"
	"go/token"
	"io"
	"math/big"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

// exchange sends lines to a server and returns the lines of the answer.
func exchange(t *testing.T, s server, lines ...string) []string {
	t.Helper()
	var out bytes.Buffer
	require.NoError(t, s.serve(strings.NewReader(strings.Join(lines, "\n")), &out))
	require.True(t, out.Len() == 0 || strings.HasSuffix(out.String(), "\n"))
	return strings.Split(strings.TrimSuffix(out.String(), "\n"), "\n")
}

var plain = server{timeout: time.Minute, answer: answer}

type written struct {
	Text, LaTeX, MathML string
}

type response struct {
	ID                          json.RawMessage
	States                      []string
	Solution, Steady, Transient map[string]written
	Go                          string
	Modes                       []struct {
		Factor       string
		Multiplicity int
		Roots        []struct{ Exact, Re, Im string }
	}
	Values []map[string]string
	Proof  struct {
		Residual, Sides string
		Holds           bool
	}
	Conditions []string
	Error      *struct {
		Kind, Message string
		Line, Column  int
	}
}

// ask sends one request and reads the response.
func ask(t *testing.T, request any) (response, string) {
	t.Helper()
	line, ok := request.(string)
	if !ok {
		data, err := json.Marshal(request)
		require.NoError(t, err)
		line = string(data)
	}
	lines := exchange(t, plain, line)
	require.Len(t, lines, 1)
	var r response
	require.NoError(t, json.Unmarshal([]byte(lines[0]), &r))
	return r, lines[0]
}

type fields map[string]any

// The example of the design, value and all.
func TestDesignExample(t *testing.T) {
	r, line := ask(t, fields{
		"id": 1, "model": "x' = -2 x\nx(0) = 1", "at": []string{"1/2", "3"}, "digits": 40,
		"want": []string{"text", "latex", "mathml", "go", "modes"},
	})
	require.Nil(t, r.Error)
	require.Equal(t, "1", string(r.ID))
	require.Equal(t, []string{"x"}, r.States)
	require.Equal(t, "exp(-2*t)", r.Solution["x"].Text)
	require.Equal(t, "e^{-2 t}", r.Solution["x"].LaTeX)
	require.Equal(t, "exp(-2*t)", r.Transient["x"].Text)
	require.Equal(t, "0", r.Steady["x"].Text)
	require.True(t, strings.HasPrefix(r.Solution["x"].MathML, "<math"), r.Solution["x"].MathML)
	require.Equal(t, "s + 2", r.Modes[0].Factor)
	require.Equal(t, 1, r.Modes[0].Multiplicity)
	require.Equal(t, "-2", r.Modes[0].Roots[0].Exact)
	require.Equal(t, "-2."+strings.Repeat("0", 39), r.Modes[0].Roots[0].Re)
	require.Equal(t, "0", r.Modes[0].Roots[0].Im)
	require.Equal(t, map[string]string{"t": "1/2", "x": "0.3678794411714423215955237701614608674458"}, r.Values[0])
	require.Equal(t, map[string]string{"t": "3", "x": "0.002478752176666358423045167430816667891506"}, r.Values[1])
	require.Equal(t, "0", r.Proof.Residual)
	require.Equal(t, "0", r.Proof.Sides)
	require.True(t, r.Proof.Holds)
	_, err := parser.ParseFile(token.NewFileSet(), "response.go", r.Go, parser.AllErrors)
	require.NoError(t, err)
	// The keys come in the order of the design.
	last := -1
	for _, key := range []string{"id", "states", "solution", "go", "steady", "transient", "modes", "values", "proof", "conditions"} {
		i := strings.Index(line, `"`+key+`":`)
		require.Greater(t, i, last, key)
		last = i
	}
	require.Contains(t, line, `"conditions":[]`)
}

func TestWhatIsWantedIsGiven(t *testing.T) {
	const model = "x' = -x + 1\nx(0) = 0"
	keys := func(line string) map[string]json.RawMessage {
		var m map[string]json.RawMessage
		require.NoError(t, json.Unmarshal([]byte(line), &m))
		return m
	}
	always := []string{"states", "solution", "steady", "transient", "proof", "conditions"}
	for _, c := range []struct {
		name  string
		want  any // nil: absent
		forms []string
		more  []string
	}{
		{"absent", nil, []string{"text", "latex", "mathml"}, []string{"modes"}},
		{"nothing", []string{}, nil, nil},
		{"text", []string{"text"}, []string{"text"}, nil},
		{"latex and modes", []string{"modes", "latex"}, []string{"latex"}, []string{"modes"}},
		{"go alone", []string{"go"}, nil, []string{"go"}},
		{"twice", []string{"text", "text"}, []string{"text"}, nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			req := fields{"model": model}
			if c.want != nil {
				req["want"] = c.want
			}
			_, line := ask(t, req)
			got := keys(line)
			require.Len(t, got, len(always)+len(c.more))
			for _, k := range append(c.more, always...) {
				require.Contains(t, got, k)
			}
			forms := keys(string(keys(string(got["solution"]))["x"]))
			require.Len(t, forms, len(c.forms))
			for _, f := range c.forms {
				require.Contains(t, forms, f)
			}
		})
	}
}

func TestErrorKinds(t *testing.T) {
	for _, c := range []struct {
		name         string
		request      any
		kind         expr.Kind
		line, column int
	}{
		{"model syntax", fields{"model": "x' = -x +\nx(0) = 1"}, expr.Syntax, 1, 10},
		{"unknown function", fields{"model": "x' = tan(t)"}, expr.UnknownFunction, 1, 6},
		{"product without its sign", fields{"model": "x' = -x\ny' = x y\ny(0)=1"}, expr.Syntax, 2, 8},
		{"product of states", fields{"model": "x' = -x\ny' = x*y"}, expr.Nonlinear, 2, 6},
		{"time-varying", fields{"model": "x' = t*x"}, expr.TimeVarying, 1, 6},
		{"wrong shape", fields{"model": "x' = -x\nx' = 2"}, expr.WrongShape, 2, 1},
		{"singular", fields{"model": "x' + y' = 1\nx' + y' = 2"}, expr.Singular, 2, 1},
		{"side condition missing", fields{"model": "x' = y; y' = x\nx(0) = 1"}, expr.SideConditions, 0, 0},
		{"side condition contradictory", fields{"model": "x' = x\nx(0) = 1\nx(0) = 2"}, expr.SideConditions, 3, 1},
		{"outside the class", fields{"model": "x' = 1/t"}, expr.OutsideClass, 1, 8},
		{"limit of the model", fields{"model": "x' = " + strings.Repeat("(", 5000) + "x" + strings.Repeat(")", 5000)}, expr.LimitExceeded, 1, -1},
		{"empty model", fields{"model": ""}, expr.Syntax, 0, 0},
		{"general solution without constants", fields{"model": "x' = -x", "at": []string{"1"}}, expr.SideConditions, 0, 0},
		{"set of a name unknown", fields{"model": "x' = -x\nx(0)=1", "set": fields{"C1": "1"}}, expr.OutsideClass, 0, 0},
		{"set without a number", fields{"model": "x' = -x", "set": fields{"C1": "1 +"}}, expr.Syntax, 0, 0},
		{"set that is a list", fields{"model": "x' = -x", "set": []int{1}}, expr.Syntax, 0, 0},
		{"no model", fields{"id": 1}, expr.Syntax, 0, 0},
		{"null model", fields{"model": nil}, expr.Syntax, 0, 0},
		{"model no text", fields{"model": 3}, expr.Syntax, 0, 0},
		{"at no list", fields{"model": "x'=x", "at": "1"}, expr.Syntax, 0, 0},
		{"at no number", fields{"model": "x'=x", "at": []string{"soon"}}, expr.Syntax, 0, 0},
		{"at a zero denominator", fields{"model": "x'=x", "at": []string{"1/0"}}, expr.Syntax, 0, 0},
		{"at a huge exponent", `{"model":"x'=x","at":[1e999999999]}`, expr.Syntax, 0, 0},
		{"at a list within", fields{"model": "x'=x", "at": []any{[]int{1}}}, expr.Syntax, 0, 0},
		{"digits zero", fields{"model": "x'=x", "digits": 0}, expr.Syntax, 0, 0},
		{"digits negative", fields{"model": "x'=x", "digits": -1}, expr.Syntax, 0, 0},
		{"digits a fraction", fields{"model": "x'=x", "digits": 1.5}, expr.Syntax, 0, 0},
		{"digits a text", fields{"model": "x'=x", "digits": "17"}, expr.Syntax, 0, 0},
		{"digits too many", fields{"model": "x'=x", "digits": 10001}, expr.LimitExceeded, 0, 0},
		{"digits beyond words", `{"model":"x'=x","digits":99999999999999999999}`, expr.LimitExceeded, 0, 0},
		{"want unknown", fields{"model": "x'=x", "want": []string{"text", "html"}}, expr.Syntax, 0, 0},
		{"want no list", fields{"model": "x'=x", "want": "text"}, expr.Syntax, 0, 0},
		{"form no object", fields{"model": "x'=x", "form": "mixed"}, expr.Syntax, 0, 0},
		{"form with an unknown field", fields{"model": "x'=x", "form": fields{"number": "mixed"}}, expr.Syntax, 0, 0},
		{"form with unknown numbers", fields{"model": "x'=x", "form": fields{"numbers": "roman"}}, expr.Syntax, 0, 0},
		{"form without digits", fields{"model": "x'=x", "form": fields{"digits": 0}}, expr.Syntax, 0, 0},
		{"form with too many digits", fields{"model": "x'=x", "form": fields{"digits": 1000000000}}, expr.LimitExceeded, 0, 0},
		{"form of symbols in decimals", fields{"model": "x'=-k*x; x(0)=1", "form": fields{"numbers": "decimal"}}, expr.NeedsAssumption, 0, 0},
		{"assume without relation", fields{"model": "x'=x", "assume": []string{"k"}}, expr.Syntax, 0, 0},
		{"assume on a state", fields{"model": "x'=x", "assume": []string{"x > 0"}}, expr.OutsideClass, 0, 0},
		{"assume an equation", fields{"model": "x'=x", "assume": []string{"k = 1"}}, expr.Syntax, 0, 0},
		{"assume half", fields{"model": "x'=x", "assume": []string{"k >"}}, expr.Syntax, 0, 0},
		{"assume a factorial", fields{"model": "x'=x", "assume": []string{"k! > 0"}}, expr.Syntax, 0, 0},
		{"unknown field", fields{"model": "x'=x", "digit": 3}, expr.Syntax, 0, 0},
		{"no object", `[1, 2]`, expr.Syntax, 0, 0},
		{"null", `null`, expr.Syntax, 0, 0},
		{"broken", `{"model": "x'=x"`, expr.Syntax, 0, 0},
		{"two objects", `{"model": "x'=x"} {"model": "x'=x"}`, expr.Syntax, 0, 0},
		{"no UTF-8", "{\"model\": \"\xff'=x\"}", expr.Syntax, 0, 0},
		{"deep nesting", strings.Repeat("[", 20000), expr.Syntax, 0, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, line := ask(t, c.request)
			require.NotNil(t, r.Error, line)
			require.Equal(t, string(c.kind), r.Error.Kind, line)
			require.NotEmpty(t, r.Error.Message)
			require.Equal(t, c.line, r.Error.Line, line)
			if c.column >= 0 {
				require.Equal(t, c.column, r.Error.Column, line)
			}
			require.Equal(t, c.line > 0, strings.Contains(line, `"line":`))
			require.Empty(t, r.States)
		})
	}
}

func TestAssumptionsOfGoodForm(t *testing.T) {
	r, _ := ask(t, fields{"model": "x' = -x\nx(0) = 1", "assume": []string{"k > 0", "k1 - k2 != 0", "a<=b", "2 k ≥ 1", "a ≠ b", "0 < k < 1"}})
	require.Nil(t, r.Error)
	require.Equal(t, "exp(-t)", r.Solution["x"].Text)
}

func TestForm(t *testing.T) {
	for _, c := range []struct {
		form fields
		want string
	}{
		{nil, "2 - exp(-t)*(2*cos(2*t) + sin(2*t))"},
		{fields{"amplitude": true, "steady_last": true}, "-sqrt(5)*exp(-t)*cos(2*t - atan(1/2)) + 2"},
		{fields{"numbers": "decimal", "digits": 4, "amplitude": true}, "2 - 2.236*exp(-t)*cos(2*t - 0.4636)"},
		{fields{"numbers": "mixed"}, "2 - exp(-t)*(2*cos(2*t) + sin(2*t))"},
	} {
		r, _ := ask(t, fields{"model": "x'' + 2x' + 5x = 10; x(0) = 0; x'(0) = 0", "form": c.form, "want": []string{"text"}})
		require.Nil(t, r.Error)
		require.Equal(t, c.want, r.Solution["x"].Text)
	}
}

func TestStream(t *testing.T) {
	lines := exchange(t, plain,
		`{"id": "a<b>&c", "model": "x' = -x; x(0) = 1", "want": ["text"]}`,
		"not JSON",
		"",
		"   ",
		`{"id": {"n": [1, 2.50]}, "model": "x' = x^2", "want": []}`+"\r",
		`{"id": 12345678901234567890123, "mod`,
		`{"model": "x' = 2", "id": null, "want": ["text"]}`,
		`{"model": "x' = -x; x(0) = 2", "want": ["text"]}`, // no newline at the end
	)
	require.Len(t, lines, 6)
	require.True(t, strings.HasPrefix(lines[0], `{"id":"a<b>&c","states":["x"],`), lines[0])
	require.True(t, strings.HasPrefix(lines[1], `{"error":{"kind":"syntax",`), lines[1])
	require.True(t, strings.HasPrefix(lines[2], `{"id":{"n":[1,2.50]},"error":{"kind":"nonlinear",`), lines[2])
	require.True(t, strings.HasPrefix(lines[3], `{"id":12345678901234567890123,"error":{"kind":"syntax",`), lines[3])
	require.True(t, strings.HasPrefix(lines[4], `{"id":null,"states":`), lines[4])
	require.True(t, strings.HasPrefix(lines[5], `{"states":`), lines[5])
	require.Empty(t, strings.Join(exchange(t, plain, ""), ""))
}

// Every response is written before the next request is read.
func TestAnswersAtOnce(t *testing.T) {
	in, requests := io.Pipe()
	responses, out := io.Pipe()
	done := make(chan error, 1)
	go func() { done <- plain.serve(in, out) }()
	d := json.NewDecoder(responses)
	for i := range 3 {
		_, err := fmt.Fprintf(requests, "{\"id\": %d, \"model\": \"x' = %d\"}\n", i, i)
		require.NoError(t, err)
		var r response
		require.NoError(t, d.Decode(&r))
		require.Equal(t, fmt.Sprint(i), string(r.ID))
	}
	require.NoError(t, requests.Close())
	require.NoError(t, <-done)
}

func TestLongLines(t *testing.T) {
	pad := strings.Repeat(" ", longestLine)
	fits := `{"id": 1, "model": "x' = 1; x(0) = 0"` // padded to the limit exactly
	fits += pad[:longestLine-len(fits)-1] + "}"
	lines := exchange(t, plain, fits, `{"id": 2, "model": "x' = 1"`+pad+`}`, `{"id": 3, "model": "x' = 1"}`)
	require.Len(t, lines, 3)
	require.True(t, strings.HasPrefix(lines[0], `{"id":1,"states":`), lines[0])
	require.True(t, strings.HasPrefix(lines[1], `{"id":2,"error":{"kind":"limit exceeded",`), lines[1])
	require.True(t, strings.HasPrefix(lines[2], `{"id":3,"states":`), lines[2])
}

func TestFaultsInsideAreErrors(t *testing.T) {
	const good = `{"id": 7, "model": "x' = 1"}`
	kindOf := func(s server) string {
		lines := exchange(t, s, good, good)
		require.Len(t, lines, 2, "the server goes on")
		require.Equal(t, lines[0], lines[1])
		var r response
		require.NoError(t, json.Unmarshal([]byte(lines[0]), &r))
		require.Equal(t, "7", string(r.ID))
		return r.Error.Kind
	}
	panics := func(context.Context, request) (object, error) { panic("a fault") }
	require.Equal(t, "internal", kindOf(server{time.Minute, panics}))
	fails := func(context.Context, request) (object, error) { return nil, errors.New("a fault") }
	require.Equal(t, "internal", kindOf(server{time.Minute, fails}))
	waits := func(ctx context.Context, _ request) (object, error) {
		<-ctx.Done()
		return nil, ctx.Err()
	}
	require.Equal(t, "cancelled", kindOf(server{time.Millisecond, waits}))
	wraps := func(ctx context.Context, _ request) (object, error) {
		<-ctx.Done()
		return nil, &expr.Error{Kind: expr.Cancelled, Message: ctx.Err().Error(), Cause: ctx.Err()}
	}
	require.Equal(t, "cancelled", kindOf(server{time.Millisecond, wraps}))
}

// Work that does not look at its context is abandoned.
func TestDeafWorkIsAbandoned(t *testing.T) {
	release := make(chan struct{})
	defer close(release)
	deaf := func(context.Context, request) (object, error) {
		<-release
		return nil, nil
	}
	lines := exchange(t, server{time.Millisecond, deaf}, `{"id": 1, "model": "x' = 1"}`)
	require.Len(t, lines, 1)
	require.Contains(t, lines[0], `"kind":"cancelled"`)
}

// A derivation that would take long stops at the time limit.
func TestTimeLimit(t *testing.T) {
	var b strings.Builder
	const n = 60
	for i := range n {
		fmt.Fprintf(&b, "x%d' = ", i)
		for j := range n {
			fmt.Fprintf(&b, "+ %d/%d*x%d ", (i*7+j*13)%97-48, (i*i+3*j)%89+1, j)
		}
		fmt.Fprintf(&b, "\nx%d(0) = %d/7\n", i, i)
	}
	line, err := json.Marshal(fields{"model": b.String()})
	require.NoError(t, err)
	start := time.Now()
	lines := exchange(t, server{200 * time.Millisecond, answer}, string(line))
	require.Contains(t, lines[0], `"kind":"cancelled"`)
	require.Less(t, time.Since(start), 200*time.Millisecond+grace+time.Second)
}

func TestHostileNames(t *testing.T) {
	model := "θ_1' = -θ_1; func' = -func/2 + __x; __x' = 1; Жук' = 0\nθ_1(0)=1; func(0)=1; __x(0)=0; Жук(0)=2"
	r, line := ask(t, fields{"model": model, "at": []string{"1"}, "want": []string{"text", "latex", "go"}})
	require.Nil(t, r.Error, line)
	require.Equal(t, []string{"θ_1", "func", "__x", "Жук"}, r.States)
	require.Equal(t, "2.0000000000000000", r.Values[0]["Жук"])
	require.Contains(t, line, `"solution":{"θ_1":{`) // the order of the states
	_, err := parser.ParseFile(token.NewFileSet(), "response.go", r.Go, parser.AllErrors)
	require.NoError(t, err)

	// States named like the keys of the response.
	r, line = ask(t, fields{"model": "text' = -text; error' = 0; id' = 1\ntext(0)=1; error(0)=0; id(0)=0", "at": []any{json.Number("2.50")}})
	require.Nil(t, r.Error, line)
	require.Equal(t, "2.5000000000000000", r.Values[0]["id"])
	require.Equal(t, "2.50", r.Values[0]["t"])

	// A state t moves the time to the name of the independent variable.
	r, line = ask(t, fields{"model": "independent s\nt' = 1\nt(0) = 5", "at": []any{1}})
	require.Nil(t, r.Error, line)
	require.Equal(t, []map[string]string{{"s": "1", "t": "6.0000000000000000"}}, r.Values)
}

func TestGeneralSolution(t *testing.T) {
	const model = "x'' = -x + 1"
	r, line := ask(t, fields{"model": model, "at": []any{0}, "set": fields{"C1": json.Number("0.5"), "C2": "-1/3"}})
	require.Nil(t, r.Error, line)
	require.Contains(t, r.Solution["x"].Text, "C1", "the formula keeps the constants")
	require.Contains(t, r.Transient["x"].Text, "C2")
	require.Equal(t, "1", r.Steady["x"].Text)
	want, _ := new(big.Rat).SetString("3/2") // C1 is the value at 0 of x less its steady part
	got, ok := new(big.Rat).SetString(r.Values[0]["x"])
	require.True(t, ok)
	require.Zero(t, want.Cmp(got))
	// No values are asked for, so none are missing.
	r, line = ask(t, fields{"model": model})
	require.Nil(t, r.Error, line)
	r, line = ask(t, fields{"model": model, "at": []any{}, "set": fields{"C1": 1}})
	require.Nil(t, r.Error, line)
	require.Contains(t, line, `"values":[]`)
}

func TestModesOfEveryKind(t *testing.T) {
	r, line := ask(t, fields{"model": "x''''' + 2 x'''' + x''' - 6 x'' = 0\ny'' + 4 y = 0", "digits": 5})
	require.Nil(t, r.Error, line)
	type root struct{ exact, re, im string }
	got := map[string][]root{}
	for _, m := range r.Modes {
		for _, x := range m.Roots {
			got[fmt.Sprintf("%s, %d", m.Factor, m.Multiplicity)] = append(got[fmt.Sprintf("%s, %d", m.Factor, m.Multiplicity)], root{x.Exact, x.Re, x.Im})
		}
	}
	require.Equal(t, map[string][]root{
		"s, 2":       {{"0", "0", "0"}},
		"s^2 + 4, 1": {{"2*i", "0", "2.0000"}, {"-2*i", "0", "-2.0000"}},
		"s^3 + 2*s^2 + s - 6, 1": {
			{"root(1, z^3 + 2*z^2 + z - 6)", "1.2188", "0"},
			{"root(2, z^3 + 2*z^2 + z - 6)", "-1.6094", "1.5274"},
			{"root(3, z^3 + 2*z^2 + z - 6)", "-1.6094", "-1.5274"},
		},
	}, got)
}

func TestManyDigits(t *testing.T) {
	r, _ := ask(t, fields{"model": "x' = x; x(0) = 1", "at": []any{1}, "digits": 10000, "want": []string{}})
	require.Nil(t, r.Error)
	require.Len(t, r.Values[0]["x"], 10001)
	require.True(t, strings.HasPrefix(r.Values[0]["x"], "2.71828182845904523536028747135266249775724709369995"))
}

func TestDeterministic(t *testing.T) {
	const request = `{"id":1,"model":"b' = -a; a' = b + sin(t); c' = a\na(0)=1;b(0)=2;c(0)=3","at":["1"],"want":["text","latex","go","modes"]}`
	first := exchange(t, plain, request)
	for range 5 {
		require.Equal(t, first, exchange(t, plain, request))
	}
}

// Symbols stay in the formulas; set gives values through the images, in the
// excluded cases of the formulas too.
func TestSymbols(t *testing.T) {
	chain := "x' = -ka*x\ny' = ka*x - ke*y\nx(0) = D\ny(0) = 0"
	r, line := ask(t, fields{"model": chain, "at": []string{"1"}, "set": fields{"ka": "1", "ke": 1, "D": "exp(1)"}, "digits": 30})
	require.Nil(t, r.Error, line)
	require.Equal(t, "D*ka/(ka - ke)*(exp(-ke*t) - exp(-ka*t))", r.Solution["y"].Text)
	require.Contains(t, line, `"conditions":["ka != ke"]`)
	require.Contains(t, line, `"values":[{"t":"1","x":"1.00000000000000000000000000000","y":"1.00000000000000000000000000000"}]`)

	r, line = ask(t, fields{"model": chain, "assume": []string{"ka > ke > 0"}})
	require.Nil(t, r.Error, line)
	require.Contains(t, line, `"conditions":[]`)

	oscillator := "m*x'' + k*x = F\nx(0) = 0\nx'(0) = 0"
	r, line = ask(t, fields{"model": oscillator, "want": []string{"text", "modes"}})
	require.Nil(t, r.Error, line)
	require.Contains(t, line, `"conditions":["m != 0","k != 0"],"remarks":["the formula holds for either sign of k/m:`)
	require.Contains(t, line, `{"factor":"s^2 + k/m","multiplicity":1,"roots":[{"exact":"sqrt(k/m)*i"},{"exact":"-sqrt(k/m)*i"}]}`)

	for _, c := range []struct {
		set     fields
		kind    string
		message string
	}{
		{fields{"m": 0, "k": 1, "F": 1}, "singular", "m != 0"},
		{fields{"m": 1, "F": 1}, "needs an assumption", "k has no value"},
		{fields{"q": 1}, "outside the class of inputs", "q"},
	} {
		r, line := ask(t, fields{"model": oscillator, "at": []string{"1"}, "set": c.set})
		require.NotNil(t, r.Error, line)
		require.Equal(t, c.kind, r.Error.Kind)
		require.Contains(t, r.Error.Message, c.message)
	}
}

func TestWorking(t *testing.T) {
	r, line := ask(t, fields{"model": "x'' + 4*x = 8*cos(2*t)\nx(0) = 1\nx'(0) = 0", "want": []string{"working"}})
	require.Nil(t, r.Error, line)
	var answer struct {
		Working []struct {
			Kind, Title, Text, Latex, HTML string
			Verified                       []string
		}
	}
	require.NoError(t, json.Unmarshal([]byte(line), &answer))
	var kinds []string
	for _, s := range answer.Working {
		kinds = append(kinds, s.Kind)
		require.NotEmpty(t, s.Title)
		require.NotEmpty(t, s.Text)
		require.NotEmpty(t, s.Latex)
		require.Contains(t, s.HTML, "<math")
	}
	require.Contains(t, kinds, "trial")
	require.Contains(t, line, "resonance")
}
