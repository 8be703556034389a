package linsys_test

import (
	"context"
	"encoding/json"
	"math/big"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// publishedCase is a case of testdata/published.json; testdata/README.md says
// what the fields mean and names the sources, each case its own.
type publishedCase struct {
	ID         string            `json:"id"`
	Source     string            `json:"source"`
	Topic      string            `json:"topic"`
	States     []string          `json:"states"`
	Equations  []string          `json:"equations"`
	Initial    []string          `json:"initial"`
	Outcome    string            `json:"outcome"`
	Parameters []string          `json:"parameters"`
	Answer     map[string]string `json:"answer"`
	Instance   struct {
		Initial    []string          `json:"initial"`
		Parameters map[string]string `json:"parameters"`
	} `json:"numeric_instance"`
	Check []map[string]string `json:"check"`
}

// waiting lists the published cases whose notation is not covered yet: switched
// inputs, boundary conditions.
var waiting = strings.Fields(`
	dq-6-2-ex2 dq-6-2-102 mcninch-ps13-6 trench-8-5-3 trench-8-5-1 dq-6-4-102
	boyce-6-5-1 dq-6-4-beam bvp-sinh dq-5-1-101-first bvp-none bvp-periodic bvp-mixed-system
`)

func readPublished(t *testing.T) []publishedCase {
	data, err := os.ReadFile("../testdata/published.json")
	require.NoError(t, err)
	var cases []publishedCase
	require.NoError(t, json.Unmarshal(data, &cases))
	require.NotEmpty(t, cases)
	return cases
}

func (c publishedCase) text(initial []string) string {
	return strings.Join(append(append([]string(nil), c.Equations...), initial...), "\n")
}

// solve derives the general solution, if the case asks for it, and the one that
// its values belong to.
func (c publishedCase) solve(ctx context.Context) (general, special *linsys.Response, err error) {
	initial := c.Initial
	if len(initial) == 0 {
		m, err := linsys.Read(c.text(nil))
		if err != nil {
			return nil, nil, err
		}
		if general, err = m.ClosedForm(ctx); err != nil {
			return nil, nil, err
		}
		initial = c.Instance.Initial
	}
	m, err := linsys.Read(c.text(initial))
	if err != nil {
		return nil, nil, err
	}
	special, err = m.ClosedForm(ctx)
	return general, special, err
}

func TestPublished(t *testing.T) {
	isWaiting := map[string]bool{}
	for _, id := range waiting {
		isWaiting[id] = true
	}
	formulas := 0
	for _, c := range readPublished(t) {
		t.Run(c.ID, func(t *testing.T) {
			ctx := context.Background()
			general, r, err := c.solve(ctx)
			if isWaiting[c.ID] {
				delete(isWaiting, c.ID)
				var e *linsys.Error
				require.ErrorAs(t, err, &e, "the case no longer waits: take it off the list")
				assert.Equal(t, expr.OutsideClass, e.Kind)
				return
			}
			require.NoError(t, err)
			assert.True(t, r.Proof().Holds())
			if general != nil {
				assert.True(t, general.Proof().Holds())
				order := 0
				for _, m := range general.Modes() {
					order += m.Multiplicity * m.Degree
				}
				assert.Len(t, general.Constants(), order, "a free constant for every order")
				assertFits(t, general, r)
			}
			c.assertValues(t, c.instance(t, r))
			if general == nil {
				for s, formula := range c.Answer {
					f, err := expr.ParseFunction(formula, expr.Limits{})
					if err == nil && r.State(s).Origin().String() == "0" {
						formulas++
						assert.True(t, f.Equal(r.State(s)), "%s: got %s, want %s, source: %s", s, r.State(s), formula, c.Source)
					}
				}
			}
		})
	}
	assert.Empty(t, isWaiting, "waiting names that are no cases")
	assert.Greater(t, formulas, 50, "published formulas that were compared exactly")
}

// instance returns the response with the numbers that the values belong to.
func (c publishedCase) instance(t *testing.T, r *linsys.Response) *linsys.Response {
	t.Helper()
	values := map[string]*big.Rat{}
	for name, text := range c.Instance.Parameters {
		if !slices.Contains(r.Parameters(), name) {
			continue
		}
		x, ok := new(big.Rat).SetString(text)
		require.True(t, ok)
		values[name] = x
	}
	r, err := r.With(values)
	require.NoError(t, err)
	assert.True(t, r.Proof().Holds())
	return r
}

// assertValues compares with the 40-digit values of the case.
func (c publishedCase) assertValues(t *testing.T, r *linsys.Response) {
	t.Helper()
	for _, check := range c.Check {
		at, ok := new(big.Rat).SetString(check["t"])
		require.True(t, ok)
		for _, s := range c.States {
			want, ok := check[s]
			if !ok {
				continue
			}
			got, err := r.State(s).At(context.Background(), at, 40)
			require.NoError(t, err)
			assert.Equal(t, want, got, "%s(%s), source: %s", s, check["t"], c.Source)
		}
	}
}

// TestPublishedInstances solves the cases with parameters for the numbers that
// their values belong to, given as definitions.
func TestPublishedInstances(t *testing.T) {
	ran := 0
	for _, c := range readPublished(t) {
		if len(c.Parameters) == 0 || c.Topic == "step-impulse-piecewise" {
			continue
		}
		t.Run(c.ID, func(t *testing.T) {
			text := c.text(c.Initial)
			for _, p := range c.Parameters {
				text += "\n" + p + " = " + c.Instance.Parameters[p]
			}
			m, err := linsys.Read(text)
			require.NoError(t, err)
			r, err := m.ClosedForm(context.Background())
			require.NoError(t, err)
			c.assertValues(t, r)
			ran++
		})
	}
	assert.Greater(t, ran, 5)
}

// assertFits checks that the special solution r is a member of the general one:
// constants exist with which all initial values agree.
func assertFits(t *testing.T, general, r *linsys.Response) {
	t.Helper()
	ctx := context.Background()
	names := general.Constants()
	values, ok := fitConstants(ctx, general, r)
	require.True(t, ok, "constants %v that give the special solution", names)
	fitted, err := general.With(values)
	require.NoError(t, err)
	for _, s := range r.States() {
		assert.True(t, fitted.State(s).Equal(r.State(s)), "%s: %s is not %s", s, fitted.State(s), r.State(s))
	}
}
