package linsys_test

import (
	"context"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

var updateGolden = flag.Bool("golden.update", false, "write the golden outputs anew")

// TestGolden compares what is written of the models of testdata/golden, one of
// every structure, with outputs that were read and found right. They are to be
// read again when they change.
func TestGolden(t *testing.T) {
	files, err := filepath.Glob("../testdata/golden/*.model")
	require.NoError(t, err)
	require.GreaterOrEqual(t, len(files), 40)
	for _, file := range files {
		name := strings.TrimSuffix(filepath.Base(file), ".model")
		t.Run(name, func(t *testing.T) {
			src, err := os.ReadFile(file)
			require.NoError(t, err)
			m, err := linsys.Read(string(src))
			require.NoError(t, err)
			got := golden(t, m)
			out := strings.TrimSuffix(file, ".model") + ".out"
			if *updateGolden {
				require.NoError(t, os.WriteFile(out, []byte(got), 0o644))
			}
			want, err := os.ReadFile(out)
			require.NoError(t, err)
			assert.Equal(t, string(want), got)
		})
	}
}

// golden writes a response: for every state its formulas in text and LaTeX, the
// decimal form, the conditions.
func golden(t *testing.T, m *linsys.Model) string {
	t.Helper()
	ctx := context.Background()
	r, err := m.ClosedForm(ctx)
	require.NoError(t, err)
	var b strings.Builder
	section := func(title string, of func(string) expr.Function) {
		for _, s := range r.States() {
			f := of(s)
			fmt.Fprintf(&b, "%s %s\n  text   %s\n  latex  %s\n", title, s, f, f.LaTeX())
			if len(f.Parameters()) == 0 {
				n, err := f.Write(ctx, expr.Form{Numbers: expr.DecimalNumbers, Digits: 5})
				require.NoError(t, err)
				fmt.Fprintf(&b, "  digits %s\n", n)
			}
			if f.Origin().String() == "0" && len(f.Constants()) == 0 {
				n, err := expr.Parse(f.String(), expr.Limits{})
				require.NoError(t, err)
				back, err := expr.FunctionOf(n, f.Variable(), expr.Limits{})
				require.NoError(t, err)
				assert.True(t, back.Equal(f), "%s reads back as %s", f, back)
			}
		}
	}
	section("state", r.State)
	for _, of := range []struct {
		title string
		form  expr.Form
	}{{"amplitude", expr.Form{Amplitude: true, SteadyLast: true}}, {"mixed", expr.Form{Numbers: expr.MixedNumbers}}} {
		for _, s := range r.States() {
			f := r.State(s)
			n, err := f.Write(ctx, of.form)
			require.NoError(t, err)
			if n.String() != f.String() {
				fmt.Fprintf(&b, "%s %s\n  text   %s\n  latex  %s\n", of.title, s, n, expr.LaTeX(n))
			}
			if of.form.Amplitude && f.Origin().String() == "0" && len(f.Constants()) == 0 {
				back, err := expr.FunctionOf(n, f.Variable(), expr.Limits{})
				require.NoError(t, err)
				assert.True(t, back.Equal(f), "%s is %s", n, f)
			}
		}
	}
	section("transient", r.Transient)
	section("steady", r.Steady)
	for _, mode := range r.Modes() {
		fmt.Fprintf(&b, "mode (%s)^%d %v\n", mode.Factor, mode.Multiplicity, mode.Roots)
	}
	ofModel, ofFormulas, err := r.Conditions(ctx)
	require.NoError(t, err)
	fmt.Fprintf(&b, "conditions of the model %q, of the formulas %q\n", ofModel, ofFormulas)
	for _, remark := range r.Remarks() {
		fmt.Fprintf(&b, "remark %s\n", remark)
	}
	return b.String()
}
