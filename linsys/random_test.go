package linsys_test

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// input is coef t^n e^(at) cos(bt), or sin(bt), in the equation of one state.
type input struct {
	state   int
	coef    int64
	n       int
	a, b    int64
	useSine bool
}

func (f input) String() string {
	trig := fmt.Sprintf("cos(%d*t)", f.b)
	if f.useSine {
		trig = fmt.Sprintf("sin(%d*t)", f.b)
	}
	return fmt.Sprintf("%d*t^%d*exp(%d*t)*%s", f.coef, f.n, f.a, trig)
}

// block is a square integer matrix on the diagonal of a model.
type block [][]int64

// jordan returns a Jordan block.
func jordan(eigenvalue int64, size int) block {
	b := newBlock(size)
	for i := range b {
		b[i][i] = eigenvalue
		if i+1 < size {
			b[i][i+1] = 1
		}
	}
	return b
}

// rotation returns a real Jordan block with the eigenvalues a +- bi.
func rotation(a, w int64, size int) block {
	b := newBlock(2 * size)
	for i := range size {
		r := 2 * i
		b[r][r], b[r][r+1], b[r+1][r], b[r+1][r+1] = a, -w, w, a
		if i+1 < size {
			b[r][r+2], b[r+1][r+3] = 1, 1
		}
	}
	return b
}

// companion returns the companion matrix of the monic polynomial with these
// lower coefficients, the constant one first.
func companion(c ...int64) block {
	b := newBlock(len(c))
	for i := range c {
		if i+1 < len(c) {
			b[i][i+1] = 1
		}
		b[len(c)-1][i] = -c[i]
	}
	return b
}

func newBlock(n int) block {
	b := make(block, n)
	for i := range b {
		b[i] = make([]int64, n)
	}
	return b
}

// structures lists the eigenstructures, each with inputs that are resonant with
// it where the name says so.
var structures = []struct {
	name   string
	blocks []block
	inputs []input
}{
	{"distinct", []block{jordan(-1, 1), jordan(2, 1), jordan(-3, 1)}, []input{{0, 2, 1, 1, 0, false}}},
	{"zero matrix", []block{newBlock(3)}, []input{{1, 1, 2, 0, 0, false}}},
	{"nilpotent", []block{jordan(0, 4)}, []input{{0, 1, 0, -1, 2, true}}},
	{"repeated semisimple", []block{jordan(-2, 1), jordan(-2, 1), jordan(1, 1)}, []input{{2, 3, 0, 0, 1, false}}},
	{"defective 2", []block{jordan(-1, 2), jordan(-1, 1)}, []input{{1, 1, 1, 2, 0, false}}},
	{"defective 3", []block{jordan(-1, 3), jordan(2, 2)}, nil},
	{"defective 4", []block{jordan(-2, 4)}, []input{{3, 1, 3, 0, 0, false}}},
	{"complex", []block{rotation(-1, 2, 1), jordan(1, 1)}, []input{{0, 5, 0, 0, 3, true}}},
	{"complex defective", []block{rotation(0, 1, 2)}, []input{{2, 1, 1, -1, 1, false}}},
	{"irrational", []block{companion(-2, 0), companion(1, 3)}, []input{{1, 1, 1, 0, 0, false}}},
	{"irrational complex", []block{companion(3, 1)}, []input{{0, 1, 0, 1, 0, false}}},
	{"irreducible 3", []block{companion(-1, -1, 0)}, []input{{0, 1, 0, 0, 2, false}}},
	{"irreducible 4", []block{companion(2, 0, 4, 0)}, nil},
	{"irreducible 5", []block{companion(-1, -1, 0, 0, 0)}, []input{{4, 1, 1, 0, 0, false}}},
	{"irreducible 6 and 1", []block{companion(3, 3, 0, 0, 0, 0), jordan(-1, 1)}, []input{{0, 1, 0, -1, 0, false}}},
	{"irreducible 7", []block{companion(2, 2, 0, 0, 0, 0, 0)}, nil},
	{"irreducible 8", []block{companion(5, 0, 5, 0, 0, 0, 0, 0)}, []input{{7, 1, 0, -1, 1, true}}},
	{"irreducible 3 twice", []block{companion(-1, -1, 0), companion(-1, -1, 0)}, nil},
	{"irreducible 3 defective", []block{coupled(companion(1, 0, 1))}, []input{{0, 1, 0, 0, 0, false}}},
	{"resonant 1", []block{jordan(-1, 1), jordan(3, 1)}, []input{{0, 2, 0, -1, 0, false}, {1, 1, 0, -1, 0, false}}},
	{"resonant 2", []block{jordan(-1, 2)}, []input{{1, 1, 1, -1, 0, false}, {0, 3, 0, 0, 0, false}}},
	{"resonant 3", []block{jordan(-1, 3), jordan(0, 1)}, []input{{2, 1, 2, -1, 0, false}, {3, 1, 1, 0, 0, false}}},
	{"resonant complex", []block{rotation(0, 2, 1)}, []input{{0, 1, 0, 0, 2, true}}},
	{"resonant complex 2", []block{rotation(-1, 1, 2)}, []input{{1, 1, 1, -1, 1, false}}},
}

// coupled returns the Jordan-like block [C I; 0 C].
func coupled(c block) block {
	n := len(c)
	b := newBlock(2 * n)
	for i := range n {
		for j := range n {
			b[i][j], b[n+i][n+j] = c[i][j], c[i][j]
		}
		b[i][n+i] = 1
	}
	return b
}

// mix returns P B P^-1 for the block-diagonal B and a random unimodular P, so
// that all states are coupled and all entries are integers.
func mix(r *rand.Rand, blocks []block) block {
	n := 0
	for _, b := range blocks {
		n += len(b)
	}
	a := newBlock(n)
	at := 0
	for _, b := range blocks {
		for i := range b {
			copy(a[at+i][at:], b[i])
		}
		at += len(b)
	}
	for range 2 * n {
		i, j := r.IntN(n), r.IntN(n)
		if i == j {
			continue
		}
		x := int64(r.IntN(3) - 1)
		// Row i += x row j, column j -= x column i.
		for k := range n {
			a[i][k] += x * a[j][k]
		}
		for k := range n {
			a[k][j] -= x * a[k][i]
		}
	}
	return a
}

// modelText writes y' = A y + f with the states y1, y2, ...
func modelText(a block, inputs []input, y0 []int64) string {
	var b strings.Builder
	for i, row := range a {
		fmt.Fprintf(&b, "y%d' = 0", i+1)
		for j, x := range row {
			fmt.Fprintf(&b, " + (%d)*y%d", x, j+1)
		}
		for _, f := range inputs {
			if f.state == i {
				b.WriteString(" + " + f.String())
			}
		}
		b.WriteString("\n")
	}
	for i, x := range y0 {
		fmt.Fprintf(&b, "y%d(0) = %d\n", i+1, x)
	}
	return b.String()
}

// taylor solves y' = A y + f by the exponential series of the system enlarged
// by generators of its inputs: a check that knows nothing of eigenvalues.
func taylor(a block, inputs []input, y0 []int64, t *big.Rat, prec uint) []*big.Float {
	type generator struct {
		n    int
		a, b int64
	}
	n := len(a)
	size := n
	at := map[generator]int{}
	for _, f := range inputs {
		for k := 0; k <= f.n; k++ {
			g := generator{k, f.a, f.b}
			if _, ok := at[g]; !ok {
				at[g] = size
				size += 2
			}
		}
	}
	m := newBlock(size)
	for i := range a {
		copy(m[i], a[i])
	}
	z := make([]*big.Float, size)
	for i := range z {
		z[i] = new(big.Float).SetPrec(prec)
		if i < n {
			z[i].SetInt64(y0[i])
		}
	}
	for g, r := range at {
		// (t^n e^(at) cos bt)' and the same with the sine.
		m[r][r], m[r][r+1], m[r+1][r], m[r+1][r+1] = g.a, -g.b, g.b, g.a
		if g.n > 0 {
			low := at[generator{g.n - 1, g.a, g.b}]
			m[r][low], m[r+1][low+1] = int64(g.n), int64(g.n)
		} else {
			z[r].SetInt64(1)
		}
	}
	for _, f := range inputs {
		c := at[generator{f.n, f.a, f.b}]
		if f.useSine {
			c++
		}
		m[f.state][c] += f.coef
	}
	// z(t) = sum of (t^k/k!) M^k z(0).
	x := new(big.Float).SetPrec(prec).SetRat(t)
	term := z
	sum := make([]*big.Float, size)
	for i := range sum {
		sum[i] = new(big.Float).SetPrec(prec).Set(z[i])
	}
	for k := 1; k < 2000; k++ {
		next := make([]*big.Float, size)
		small := true
		for i := range next {
			next[i] = new(big.Float).SetPrec(prec)
			for j, c := range m[i] {
				if c != 0 {
					p := new(big.Float).SetPrec(prec).SetInt64(c)
					next[i].Add(next[i], p.Mul(p, term[j]))
				}
			}
			next[i].Mul(next[i], x)
			next[i].Quo(next[i], new(big.Float).SetInt64(int64(k)))
			sum[i].Add(sum[i], next[i])
			small = small && (next[i].Sign() == 0 || next[i].MantExp(nil) < -int(prec))
		}
		term = next
		if small {
			break
		}
	}
	return sum[:n]
}

func TestRandomStructures(t *testing.T) {
	for _, s := range structures {
		t.Run(s.name, func(t *testing.T) {
			r := rand.New(rand.NewPCG(1, uint64(len(s.name))))
			for range 3 {
				checkRandom(t, r, mix(r, s.blocks), s.inputs)
			}
		})
	}
}

// checkRandom solves a model with random initial values and compares it with the
// equation, exactly, and with the exponential series, to 40 digits.
func checkRandom(t *testing.T, rnd *rand.Rand, a block, inputs []input) {
	t.Helper()
	ctx := context.Background()
	y0 := make([]int64, len(a))
	for i := range y0 {
		y0[i] = int64(rnd.IntN(11) - 5)
	}
	text := modelText(a, inputs, y0)
	m, err := linsys.Read(text)
	require.NoError(t, err, text)
	res, err := m.ClosedForm(ctx)
	require.NoError(t, err, text)
	require.True(t, res.Proof().Holds(), text)
	states := res.States()
	forcing := make([]expr.Function, len(a))
	for i := range forcing {
		forcing[i], err = expr.ParseFunction("0", expr.Limits{})
		require.NoError(t, err)
		for _, f := range inputs {
			if f.state == i {
				g, err := expr.ParseFunction(f.String(), expr.Limits{})
				require.NoError(t, err)
				forcing[i] = forcing[i].Add(g)
			}
		}
	}
	satisfies := func(what string, function func(string) expr.Function, withInput bool) {
		for i, row := range a {
			residual := function(states[i]).Derivative()
			for j, x := range row {
				residual = residual.Sub(function(states[j]).Scale(big.NewRat(x, 1)))
			}
			if withInput {
				residual = residual.Sub(forcing[i])
			}
			assert.True(t, residual.IsZero(), "%s leaves %s in equation %d of\n%s", what, residual, i+1, text)
		}
	}
	satisfies("the response", res.State, true)
	satisfies("the particular integral", res.Steady, true)
	satisfies("the complementary function", res.Transient, false)
	for i, s := range states {
		assert.Equal(t, fmt.Sprint(y0[i]), res.State(s).Initial().String())
		assert.True(t, res.Steady(s).Add(res.Transient(s)).Equal(res.State(s)))
		back, err := expr.ParseFunction(res.State(s).String(), expr.Limits{})
		if err != nil {
			// Irrational rates of degree 2 print as square roots, which are no input yet.
			assert.Contains(t, res.State(s).String(), "sqrt", err)
		} else {
			assert.True(t, back.Equal(res.State(s)), "the text %s reads back as %s", res.State(s), back)
		}
	}
	for _, at := range []*big.Rat{big.NewRat(1, 3), big.NewRat(-7, 5)} {
		want := taylor(a, inputs, y0, at, 400)
		for i, s := range states {
			got, err := res.State(s).At(ctx, at, 40)
			require.NoError(t, err)
			assert.Equal(t, want[i].Text('e', 39), scientific(t, got), "%s at %s in\n%s", s, at, text)
		}
	}
	checkGeneral(t, modelText(a, inputs, nil), res)
}

// scientific rewrites a decimal in the form of big.Float.
func scientific(t *testing.T, s string) string {
	t.Helper()
	x, _, err := big.ParseFloat(s, 10, 400, big.ToNearestEven)
	require.NoError(t, err)
	return x.Text('e', 39)
}

// checkGeneral solves without side conditions and checks that the special
// solution r is a member of the family.
func checkGeneral(t *testing.T, text string, r *linsys.Response) {
	t.Helper()
	m, err := linsys.Read(text)
	require.NoError(t, err)
	general, err := m.ClosedForm(context.Background())
	require.NoError(t, err)
	require.True(t, general.Proof().Holds())
	require.Len(t, general.Constants(), len(r.States()))
	assertFits(t, general, r)
}
