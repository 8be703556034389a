package algebra_test

import (
	"errors"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

var _ algebra.Field[ratPoly] = (*number)(nil)

// testExtension checks the field laws, the root, and the trace against the
// matrix of the multiplication.
func testExtension[E any](t *testing.T, k algebra.Field[E], x *algebra.Extension[E], coef algebratest.Generator[E]) {
	gen := algebratest.Elements(x, coef)
	algebratest.TestField[algebra.Poly[E]](t, x, gen)

	r := x.Root()
	p := algebra.ReplaceBy(x.Modulus(), algebra.Ring[algebra.Poly[E]](x), x.FromBase)
	assert.True(t, x.IsZero(p.Eval(r)), "%v at its root is %v", x.Modulus(), p.Eval(r))
	assert.True(t, k.Equal(x.Modulus().Lead(), k.One()))

	rng := algebratest.Rand(t)
	d := x.Modulus().Degree()
	for range 10 {
		a, b, c := gen(rng), gen(rng), coef(rng)
		require.Less(t, x.Mul(a, b).Degree(), d)
		trace := k.Zero()
		power := x.One()
		for i := range d {
			trace = k.Add(trace, x.Mul(a, power).Coef(i)) // the diagonal entry of the multiplication by a
			power = x.Mul(power, r)
		}
		require.True(t, k.Equal(x.Trace(a), trace), "the trace of %v is %s, want %s", a, k.Text(x.Trace(a)), k.Text(trace))
		sum := k.Add(x.Trace(a), k.Mul(c, x.Trace(b)))
		require.True(t, k.Equal(x.Trace(x.Add(a, b.Scale(c))), sum), "the trace is not linear at %v and %v", a, b)
		wantPoly(t, "a class", x.Reduce(a.Add(b.Mul(x.Modulus()))), a)
	}
}

func TestExtension(t *testing.T) {
	for name, x := range numberFields() {
		t.Run(name, func(t *testing.T) { testExtension(t, algebra.Q, x, algebratest.SmallRats) })
	}
	t.Run("sqrt2, long coefficients", func(t *testing.T) {
		testExtension(t, algebra.Q, numberFields()["sqrt2"], algebratest.Rats)
	})
	t.Run("tower", func(t *testing.T) {
		k, l := tower()
		testExtension(t, k, l, algebratest.Elements(k, algebratest.SmallRats))
	})
	t.Run("tower of three", func(t *testing.T) {
		k, l := tower()
		// t^2 + 1 stays irreducible over the real field.
		m := algebra.NewExtension(l, algebra.NewPoly[algebra.Poly[ratPoly]](l, l.One(), l.Zero(), l.One()), "i")
		gen := algebratest.Elements(l, algebratest.Elements(k, algebratest.SmallRats))
		algebratest.TestRing(t, m, algebratest.Elements(m, gen))
	})
}

// TestExtensionTowerContainsItsBase: the sixth power of the cube root of
// sqrt 2 is 2.
func TestExtensionTowerContainsItsBase(t *testing.T) {
	_, l := tower()
	power := l.One()
	for range 6 {
		power = l.Mul(power, l.Root())
	}
	wantPoly(t, "sixth power", power, l.FromInt(2))
	inv, err := l.Inv(l.Root())
	require.NoError(t, err)
	assert.Equal(t, "((1/2*r)*c^2)", l.Text(inv))
}

func TestExtensionReducibleModulus(t *testing.T) {
	x := algebra.NewExtension(algebra.Q, ints(-1, 0, 1), "e") // (s - 1)(s + 1)
	_, err := x.Inv(x.Sub(x.Root(), x.One()))
	var reducible *algebra.ReducibleError
	require.ErrorAs(t, err, &reducible)
	assert.Equal(t, algebra.ReducibleError{Modulus: "s^2 - 1", Factor: "s - 1"}, *reducible)
	assert.EqualError(t, err, "algebra: the modulus s^2 - 1 has the factor s - 1")
	y, err := x.Inv(x.Root())
	require.NoError(t, err)
	wantPoly(t, "1/e", y, x.Root())
	_, err = x.Inv(x.Zero())
	assert.True(t, errors.Is(err, algebra.ErrDivisionByZero))

	a := algebra.NewMatrix[ratPoly](x, 1, 1, x.Sub(x.Root(), x.One()))
	_, err = algebra.Inverse(t.Context(), x, a)
	require.ErrorAs(t, err, &reducible)
}

func TestExtensionText(t *testing.T) {
	k := numberFields()["sqrt2"]
	assert.Equal(t, "0", k.Text(k.Zero()))
	assert.Equal(t, "-1/2", k.Text(k.FromBase(q("-1/2"))))
	assert.Equal(t, "(r)", k.Text(k.Root()))
	assert.Equal(t, "(-r + 1/2)", k.Text(algebra.NewPoly(algebra.Q, q("1/2"), q("-1"))))
}

func TestExtensionByAConstantPanics(t *testing.T) {
	for _, p := range []ratPoly{{}, ints(), ints(3)} {
		assert.Panics(t, func() { algebra.NewExtension(algebra.Q, p, "c") })
	}
}
