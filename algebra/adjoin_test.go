package algebra_test

import (
	"context"
	"math/big"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

// adjoinStep is a number: the root of a polynomial over Q near a decimal.
type adjoinStep struct {
	p    ratPoly
	near string
}

// nearRoot encloses the real root of p next to a number.
func nearRoot(t *testing.T, p ratPoly, near string) func(uint) algebra.Ball {
	t.Helper()
	x, ok := new(big.Rat).SetString(near)
	require.True(t, ok)
	simple := ints(1)
	for _, part := range algebra.SquareFree[algebra.Rat](algebra.Q, p) {
		simple = simple.Mul(part.P)
	}
	var best algebra.Algebraic
	var least *big.Rat
	for _, r := range algebraicRoots(t, simple) {
		if !r.IsReal() {
			continue
		}
		z, err := r.Enclose(context.Background(), 64)
		require.NoError(t, err)
		mid, _ := z.Re.Mid().Rat(nil)
		d := mid.Sub(mid, x)
		d.Abs(d)
		if least == nil || d.Cmp(least) < 0 {
			best, least = r, d
		}
	}
	require.NotNil(t, least)
	return func(prec uint) algebra.Ball {
		z, err := best.Enclose(context.Background(), prec)
		require.NoError(t, err)
		return z.Re
	}
}

func overField(f *functions, p ratPoly) fractionPoly {
	c := make([]fraction, p.Degree()+1)
	for i := range c {
		c[i] = f.FromRat(p.Coef(i))
	}
	return algebra.NewPoly[fraction](f, c...)
}

var adjoinCases = []struct {
	name   string
	steps  []adjoinStep
	degree int
}{
	{"sqrt 2", []adjoinStep{{ints(-2, 0, 1), "1.4"}}, 2},
	{"-sqrt 2", []adjoinStep{{ints(-2, 0, 1), "-1.4"}}, 2},
	{"sqrt 2 twice", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-2, 0, 1), "1.4"}}, 2},
	{"sqrt 2, -sqrt 2", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-2, 0, 1), "-1.4"}}, 2},
	{"sqrt 2, sqrt 8", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-8, 0, 1), "2.8"}}, 2},
	{"sqrt 2, sqrt 3", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-3, 0, 1), "1.7"}}, 4},
	{"sqrt 2, sqrt 3, sqrt 6", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-3, 0, 1), "1.7"}, {ints(-6, 0, 1), "2.4"}}, 4},
	{"sqrt 2, sqrt 3, sqrt 5", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-3, 0, 1), "1.7"}, {ints(-5, 0, 1), "2.2"}}, 8},
	{"a rational number", []adjoinStep{{ints(-4, 0, 1), "2"}}, 1},
	{"a rational number with a denominator", []adjoinStep{{ints(-4, 0, 9), "0.66"}}, 1},
	{"sqrt(1/2), not an integer", []adjoinStep{{ints(-1, 0, 2), "0.7"}}, 2},
	{"cube root of 2, sqrt 2", []adjoinStep{{ints(-2, 0, 0, 1), "1.25"}, {ints(-2, 0, 1), "1.4"}}, 6},
	{"sqrt 2, cube root of 2, sixth root of 2", []adjoinStep{{ints(-2, 0, 1), "1.4"}, {ints(-2, 0, 0, 1), "1.25"}, {ints(-2, 0, 0, 0, 0, 0, 1), "1.12"}}, 6},
	{"all roots of a cyclic cubic", []adjoinStep{{ints(1, -3, 0, 1), "1.5"}, {ints(1, -3, 0, 1), "0.35"}, {ints(1, -3, 0, 1), "-1.88"}}, 3},
	{"two roots of a cubic with group S3", []adjoinStep{{ints(1, -4, 0, 1), "1.86"}, {ints(1, -4, 0, 1), "0.25"}}, 6},
	{"a root of a reducible polynomial", []adjoinStep{{ints(6, 0, -5, 0, 1), "1.7"}, {ints(-2, 0, 1), "1.4"}}, 4},
	{"a root of a polynomial with multiple factors", []adjoinStep{{ints(4, 0, -4, 0, 1), "1.4"}}, 2},
	{"sqrt 2 + sqrt 3, then sqrt 2", []adjoinStep{{ints(1, 0, -10, 0, 1), "3.14"}, {ints(-2, 0, 1), "1.4"}, {ints(-3, 0, 1), "-1.7"}}, 4},
	{"golden ratio, sqrt 5", []adjoinStep{{ints(-1, -1, 1), "1.6"}, {ints(-5, 0, 1), "2.2"}}, 2},
	{"2 cos(2 pi/7), 2 cos(4 pi/7)", []adjoinStep{{ints(-1, -2, 1, 1), "1.25"}, {ints(-1, -2, 1, 1), "-0.44"}}, 3},
	{"plastic number, sqrt 2", []adjoinStep{{ints(-1, -1, 0, 1), "1.32"}, {ints(-2, 0, 1), "1.4"}}, 6},
}

// TestAdjoin: the numbers adjoined satisfy their polynomials and have the values
// they should, those adjoined before included; the field with variables behaves
// the same.
func TestAdjoin(t *testing.T) {
	for _, c := range adjoinCases {
		t.Run(c.name, func(t *testing.T) {
			for _, names := range [][]string{nil, {"x", "y"}} {
				f := algebra.NewFunctionField(names, nil)
				var numbers []fraction
				for i, step := range c.steps {
					near := nearRoot(t, step.p, step.near)
					adj, err := f.Adjoin(context.Background(), overField(f, step.p), near, 16)
					require.NoError(t, err)
					g := adj.Field
					require.Equal(t, names, g.Names()[:len(names):len(names)])
					values := make([]fraction, len(names))
					for j := range values {
						values[j] = g.Variable(j)
					}
					for j, x := range numbers {
						y, err := f.Map(x, g, adj.Root, values)
						require.NoError(t, err)
						numbers[j] = y
					}
					if r, ok := f.Root(); ok {
						p := r.MinPoly()
						assert.True(t, g.IsZero(overField(g, p).Eval(adj.Root)), "the old root satisfies %v", p)
					}
					numbers = append(numbers, adj.New)
					f = g
					for j, x := range numbers {
						require.True(t, f.IsZero(overField(f, c.steps[j].p).Eval(x)), "number %d satisfies %v after step %d", j, c.steps[j].p, i)
						want := nearRoot(t, c.steps[j].p, c.steps[j].near)(200)
						require.True(t, f.Enclose(x, 200).Overlaps(want), "value of number %d after step %d", j, i)
					}
				}
				assert.Equal(t, c.degree, f.Degree())
				if r, ok := f.Root(); ok {
					assert.True(t, r.IsReal())
					assert.Equal(t, c.degree, r.MinPoly().Degree())
				}
			}
		})
	}
}

// TestAdjoinOverTheField adjoins square roots of elements of the field.
func TestAdjoinOverTheField(t *testing.T) {
	f := algebra.NewFunctionField(nil, nil)
	adj, err := f.Adjoin(context.Background(), overField(f, ints(-2, 0, 1)), nearRoot(t, ints(-2, 0, 1), "1.4"), 16)
	require.NoError(t, err)
	f = adj.Field
	sqrt2 := adj.New
	root := func(x fraction) (algebra.Adjunction, fraction) {
		t.Helper()
		p := algebra.NewPoly[fraction](f, f.Neg(x), f.Zero(), f.One())
		adj, err := f.Adjoin(context.Background(), p, func(prec uint) algebra.Ball { return f.Enclose(x, prec+16).Sqrt(prec) }, 16)
		require.NoError(t, err)
		image, err := f.Map(x, adj.Field, adj.Root, nil)
		require.NoError(t, err)
		return adj, image
	}
	// 3 + 2 sqrt 2 is the square of 1 + sqrt 2.
	x := f.Add(f.FromInt(3), f.Mul(f.FromInt(2), sqrt2))
	adj, _ = root(x)
	assert.Same(t, f, adj.Field, "the root is in the field")
	assert.True(t, f.Equal(adj.New, f.Add(f.One(), sqrt2)))
	// 1 + sqrt 2 is no square; its root has degree 4.
	adj, x = root(f.Add(f.One(), sqrt2))
	g := adj.Field
	assert.Equal(t, 4, g.Degree())
	assert.True(t, g.Equal(g.Mul(adj.New, adj.New), x))
	sign, ok := g.Sign(adj.New)
	assert.True(t, ok)
	assert.Equal(t, 1, sign)
}

// TestAdjoinRefuses: too high a degree, a number that is no root, and the end of
// the context are errors.
func TestAdjoinRefuses(t *testing.T) {
	f := algebra.NewFunctionField([]string{"x"}, nil)
	_, err := f.Adjoin(context.Background(), overField(f, ints(-2, 0, 0, 0, 0, 1)), nearRoot(t, ints(-2, 0, 0, 0, 0, 1), "1.1"), 4)
	require.Error(t, err)
	assert.Contains(t, err.Error(), "degree 5")
	_, err = f.Adjoin(context.Background(), overField(f, ints(-2, 0, 1)), nearRoot(t, ints(-3, 0, 1), "1.7"), 4)
	require.Error(t, err)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err = f.Adjoin(ctx, overField(f, ints(-2, 0, 1)), nearRoot(t, ints(-2, 0, 1), "1.4"), 4)
	require.ErrorIs(t, err, context.Canceled)
	// The end of a context in the middle.
	ctx, cancel = context.WithTimeout(context.Background(), 30*time.Millisecond)
	defer cancel()
	start := time.Now()
	for _, step := range []adjoinStep{{ints(-2, 0, 0, 0, 0, 1), "1.1"}, {ints(-3, 0, 0, 0, 0, 0, 0, 1), "1.17"}, {ints(-2, 0, 1), "1.4"}} {
		adj, err := f.Adjoin(ctx, overField(f, step.p), nearRoot(t, step.p, step.near), 70)
		if err != nil {
			require.ErrorIs(t, err, context.DeadlineExceeded)
			break
		}
		f = adj.Field
	}
	assert.Less(t, time.Since(start), 5*time.Second) // with room for a busy machine
}
