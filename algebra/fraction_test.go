package algebra_test

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

type (
	fraction     = algebra.Fraction
	fractionPoly = algebra.Poly[algebra.Fraction]
	functions    = algebra.FunctionField
)

// rootOf returns the real root of largest value of a polynomial over Q.
func rootOf(t *testing.T, p ratPoly) algebra.Algebraic {
	t.Helper()
	var last algebra.Algebraic
	found := false
	for _, r := range algebraicRoots(t, p) {
		if r.IsReal() {
			last, found = r, true
		}
	}
	require.True(t, found)
	return last
}

// functionFields returns fields of every sort: without a root, with one of
// degree 2 to 4, with the root of an expression, with variables that have
// values, without variables.
func functionFields(t *testing.T) map[string]*functions {
	q, xy := algebra.NewFunctionField(nil, nil), algebra.NewFunctionField([]string{"x", "y"}, nil)
	pi := algebra.NewFunctionField([]string{"pi", "x"}, []func(uint) algebra.Ball{algebra.Pi, nil})
	sqrt2, plastic := rootOf(t, ints(-2, 0, 1)), rootOf(t, ints(-1, -1, 0, 1))
	x := xy.Variable(0)
	return map[string]*functions{
		"Q":                     q,
		"Q(x,y)":                xy,
		"Q(pi,x)":               pi,
		"Q(sqrt2)":              q.WithRoot(sqrt2),
		"Q(plastic)":            q.WithRoot(plastic),
		"Q(sqrt2+sqrt3)":        q.WithRoot(rootOf(t, ints(1, 0, -10, 0, 1))),
		"Q(sqrt2)(x,y)":         xy.WithRoot(sqrt2),
		"Q(plastic)(pi,x)":      pi.WithRoot(plastic),
		"Q(x,y)(sqrt(x^2+y))":   xy.WithSurd(xy.Add(xy.Mul(x, x), xy.Variable(1))),
		"Q(x,y)(sqrt(x^2-4x))":  xy.WithSurd(xy.Sub(xy.Mul(x, x), xy.Mul(xy.FromInt(4), x))),
		"Q(x,y)(sqrt(-2x(y+1))": xy.WithSurd(xy.Mul(xy.Mul(xy.FromInt(-2), x), xy.Add(xy.Variable(1), xy.One()))),
	}
}

// polynomialsIn generates polynomials in the root and the variables with a few
// terms of low degree.
func polynomialsIn(f *functions, coef algebratest.Generator[algebra.Rat], terms, degree int) algebratest.Generator[fraction] {
	return func(rng *rand.Rand) fraction {
		sum := f.Zero()
		for range rng.IntN(terms + 1) {
			y := f.FromRat(coef(rng))
			for range rng.IntN(degree + 1) {
				n := len(f.Names())
				if i := rng.IntN(n + 1); i < n {
					y = f.Mul(y, f.Variable(i))
				} else if f.Degree() > 1 {
					y = f.Mul(y, f.RootElement())
				}
			}
			sum = f.Add(sum, y)
		}
		return sum
	}
}

// fractionsIn generates quotients of polynomials with common factors now and then.
func fractionsIn(f *functions, coef algebratest.Generator[algebra.Rat]) algebratest.Generator[fraction] {
	gen := polynomialsIn(f, coef, 3, 2)
	return func(rng *rand.Rand) fraction {
		x := gen(rng)
		if rng.IntN(3) > 0 {
			inv, err := f.Inv(gen(rng))
			if err == nil {
				x = f.Mul(x, inv)
			}
		}
		return x
	}
}

func TestFunctionFieldLaws(t *testing.T) {
	for name, f := range functionFields(t) {
		t.Run(name, func(t *testing.T) {
			algebratest.TestField[fraction](t, f, fractionsIn(f, algebratest.SmallRats))
		})
	}
	for _, name := range []string{"Q", "Q(x,y)", "Q(sqrt2)"} {
		t.Run(name+", long coefficients", func(t *testing.T) {
			f := functionFields(t)[name]
			algebratest.TestField[fraction](t, f, fractionsIn(f, algebratest.Rats))
		})
	}
}

// TestFunctionFieldEmbedsQ: rational numbers behave as such.
func TestFunctionFieldEmbedsQ(t *testing.T) {
	for name, f := range functionFields(t) {
		rng := algebratest.Rand(t)
		for range 30 {
			a, b := algebratest.Rats(rng), algebratest.Rats(rng)
			x, y := f.FromRat(a), f.FromRat(b)
			sum, ok := f.Rational(f.Add(x, y))
			require.True(t, ok, name)
			require.True(t, sum.Equal(a.Add(b)), name)
			product, ok := f.Rational(f.Mul(x, y))
			require.True(t, ok, name)
			require.True(t, product.Equal(a.Mul(b)), name)
			sign, ok := f.Sign(x)
			require.True(t, ok, name)
			require.Equal(t, a.Sign(), sign, name)
			require.Equal(t, a.Compare(b) < 0, f.Compare(x, y) < 0, name)
		}
		if f.Degree() > 1 {
			_, ok := f.Rational(f.RootElement())
			assert.False(t, ok, name)
		}
		for i := range f.Names() {
			_, ok := f.Rational(f.Variable(i))
			assert.False(t, ok, name)
		}
	}
}

// TestFunctionFieldRoot: the root satisfies its polynomial, numbers have their
// signs, however near they are.
func TestFunctionFieldRoot(t *testing.T) {
	f := functionFields(t)["Q(sqrt2)(x,y)"]
	r := f.RootElement()
	assert.True(t, f.Equal(f.Mul(r, r), f.FromInt(2)))
	// The convergents p/q of sqrt 2 lie alternately below and above.
	p, q := big.NewInt(1), big.NewInt(1)
	for n := range 200 {
		x := f.Sub(f.Mul(r, f.FromRat(algebra.RatFromBigInt(q))), f.FromRat(algebra.RatFromBigInt(p)))
		sign, ok := f.Sign(x)
		require.True(t, ok)
		require.Equal(t, 1-2*(n%2), sign, "sqrt(2) - %s/%s", p, q)
		// 1/(q sqrt 2 - p) = +-(q sqrt 2 + p)
		inv, err := f.Inv(x)
		require.NoError(t, err)
		want := f.Add(f.Mul(r, f.FromRat(algebra.RatFromBigInt(q))), f.FromRat(algebra.RatFromBigInt(p)))
		if n%2 == 1 {
			want = f.Neg(want)
		}
		require.True(t, f.Equal(inv, want))
		p, q = new(big.Int).Add(p, new(big.Int).Lsh(q, 1)), new(big.Int).Add(p, q)
	}
	// (x - sqrt 2)(x + sqrt 2) = x^2 - 2, and so with quotients.
	x := f.Variable(0)
	product := f.Mul(f.Sub(x, r), f.Add(x, r))
	assert.True(t, f.Equal(product, f.Sub(f.Mul(x, x), f.FromInt(2))))
	inv, err := f.Inv(f.Sub(x, r))
	require.NoError(t, err)
	assert.True(t, f.Equal(f.Mul(product, inv), f.Add(x, r)))
	_, ok := f.Sign(x)
	assert.False(t, ok, "the sign of a variable")
	assert.False(t, f.IsNumber(x))
	assert.True(t, f.IsNumber(r))
}

// TestFunctionFieldEnclose compares enclosures with the arithmetic of balls.
func TestFunctionFieldEnclose(t *testing.T) {
	f := algebra.NewFunctionField([]string{"pi"}, []func(uint) algebra.Ball{algebra.Pi}).WithRoot(rootOf(t, ints(-1, -1, 0, 1)))
	gen := fractionsIn(f, algebratest.SmallRats)
	rng := algebratest.Rand(t)
	for range 60 {
		x, y := gen(rng), gen(rng)
		a, b := f.Enclose(x, 100), f.Enclose(y, 100)
		require.True(t, f.Enclose(f.Add(x, y), 100).Overlaps(a.Add(b, 100)))
		require.True(t, f.Enclose(f.Mul(x, y), 100).Overlaps(a.Mul(b, 100)))
		if sign, ok := f.Sign(x); true {
			require.True(t, ok)
			require.Equal(t, f.IsZero(x), sign == 0)
			require.Equal(t, -sign, func() int { s, _ := f.Sign(f.Neg(x)); return s }())
			if sign != 0 {
				require.GreaterOrEqual(t, a.RelPrec(), 90)
			}
		}
	}
	// From memory: 355/113 - pi = 2.6676418906...e-7.
	near := f.Sub(f.FromRat(algebra.NewRat(355, 113)), f.Variable(0))
	digits, ok := f.Enclose(near, 64).Decimal(10)
	require.True(t, ok)
	assert.Equal(t, "2.667641891e-7", digits)
}

// TestFunctionFieldMap: substitution is a homomorphism where it is defined.
func TestFunctionFieldMap(t *testing.T) {
	for _, name := range []string{"Q(x,y)", "Q(sqrt2)(x,y)"} {
		f := functionFields(t)[name]
		g := algebra.NewFunctionField([]string{"u"}, nil)
		root := fraction{}
		if r, ok := f.Root(); ok {
			g = g.WithRoot(r)
			root = g.RootElement()
		}
		u := g.Variable(0)
		values := []fraction{g.Add(g.Mul(u, u), g.FromInt(3)), g.Sub(u, g.FromRat(algebra.NewRat(1, 7)))}
		gen := fractionsIn(f, algebratest.SmallRats)
		rng := algebratest.Rand(t)
		to := func(x fraction) fraction {
			y, err := f.Map(x, g, root, values)
			require.NoError(t, err)
			return y
		}
		for range 40 {
			x, y := gen(rng), gen(rng)
			require.True(t, g.Equal(to(f.Add(x, y)), g.Add(to(x), to(y))), name)
			require.True(t, g.Equal(to(f.Mul(x, y)), g.Mul(to(x), to(y))), name)
		}
		// x - y vanishes at x = y.
		inv, err := f.Inv(f.Sub(f.Variable(0), f.Variable(1)))
		require.NoError(t, err)
		_, err = f.Map(inv, g, root, []fraction{u, u})
		require.ErrorIs(t, err, algebra.ErrDivisionByZero)
	}
}

// TestFunctionFieldFactors: an element is the product of its factors, which are
// polynomials and do not repeat.
func TestFunctionFieldFactors(t *testing.T) {
	f := functionFields(t)["Q(x,y)"]
	gen := fractionsIn(f, algebratest.SmallRats)
	rng := algebratest.Rand(t)
	for range 60 {
		x := f.Mul(gen(rng), f.Mul(gen(rng), gen(rng)))
		if f.IsZero(x) {
			continue
		}
		c, factors, err := f.Factors(context.Background(), x)
		require.NoError(t, err)
		product := f.FromRat(c)
		for i, p := range factors {
			require.NotZero(t, p.Exp)
			require.Nil(t, p.Base.Denominator())
			for _, q := range factors[:i] {
				require.False(t, f.Equal(p.Base, q.Base))
				require.False(t, f.Equal(p.Base, f.Neg(q.Base)))
			}
			base := p.Base
			if p.Exp < 0 {
				base, err = f.Inv(base)
				require.NoError(t, err)
			}
			for range max(p.Exp, -p.Exp) {
				product = f.Mul(product, base)
			}
		}
		require.True(t, f.Equal(product, x), "%s", f.Text(x))
	}
}

// checkFractionFactors checks that the factors multiply to the monic multiple
// of p, are monic, pairwise coprime and in the same order again.
func checkFractionFactors(t *testing.T, f *functions, p fractionPoly) []algebra.Factor[fraction] {
	t.Helper()
	factors, err := f.FactorPoly(context.Background(), p)
	require.NoError(t, err, "%v", p)
	product := algebra.Constant[fraction](f, f.One())
	for i, g := range factors {
		require.Positive(t, g.P.Degree())
		require.True(t, f.Equal(g.P.Lead(), f.One()), "%v is not monic", g.P)
		for _, h := range factors[:i] {
			require.Zero(t, algebra.GCD[fraction](f, g.P, h.P).Degree(), "%v and %v", g.P, h.P)
		}
		product = product.Mul(g.P.Pow(g.Mult))
	}
	if p.Degree() > 0 {
		require.True(t, product.Equal(p.Monic(f)), "the factors of %v are %v", p, factors)
	}
	again, err := f.FactorPoly(context.Background(), p)
	require.NoError(t, err)
	require.Equal(t, fmt.Sprint(factors), fmt.Sprint(again))
	return factors
}

// TestFunctionFieldFactorPoly factors products of random polynomials: at least
// as many factors, each of which is irreducible by itself.
func TestFunctionFieldFactorPoly(t *testing.T) {
	for _, name := range []string{"Q", "Q(x,y)", "Q(pi,x)", "Q(sqrt2)", "Q(plastic)", "Q(sqrt2)(x,y)", "Q(x,y)(sqrt(x^2+y))"} {
		t.Run(name, func(t *testing.T) {
			f := functionFields(t)[name]
			rng := algebratest.Rand(t)
			gen := algebratest.Polys[fraction](f, polynomialsIn(f, algebratest.SmallRats, 2, 1), 2)
			for range 12 {
				p := algebra.Constant[fraction](f, f.One())
				parts := 0
				for range 1 + rng.IntN(3) {
					g := gen(rng)
					if g.Degree() > 0 {
						m := 1 + rng.IntN(2)
						p, parts = p.Mul(g.Pow(m)), parts+m
					}
				}
				factors := checkFractionFactors(t, f, p)
				count := 0
				for _, g := range factors {
					count += g.Mult
					one, err := f.FactorPoly(context.Background(), g.P)
					require.NoError(t, err)
					require.Len(t, one, 1, "%v", g.P)
				}
				require.GreaterOrEqual(t, count, parts, "%v", p)
			}
		})
	}
}

// TestFunctionFieldFactorPolyNamed: polynomials whose factors are known, by the
// degrees with multiplicity.
func TestFunctionFieldFactorPolyNamed(t *testing.T) {
	fields := functionFields(t)
	s := func(f *functions, c ...fraction) fractionPoly { return algebra.NewPoly[fraction](f, c...) }
	q2, q23, xy, q2xy := fields["Q(sqrt2)"], fields["Q(sqrt2+sqrt3)"], fields["Q(x,y)"], fields["Q(sqrt2)(x,y)"]
	surd := fields["Q(x,y)(sqrt(x^2-4x))"]
	n := func(f *functions, c ...int64) fractionPoly {
		out := make([]fraction, len(c))
		for i, x := range c {
			out[i] = f.FromInt(x)
		}
		return s(f, out...)
	}
	x, y := xy.Variable(0), xy.Variable(1)
	for _, c := range []struct {
		name    string
		f       *functions
		p       fractionPoly
		degrees []int
	}{
		{"s^2 - 2 over Q(sqrt 2)", q2, n(q2, -2, 0, 1), []int{1, 1}},
		{"s^2 - 3 over Q(sqrt 2)", q2, n(q2, -3, 0, 1), []int{2}},
		{"s^4 + 1 over Q(sqrt 2)", q2, n(q2, 1, 0, 0, 0, 1), []int{2, 2}},
		{"s^4 - 2 over Q(sqrt 2)", q2, n(q2, -2, 0, 0, 0, 1), []int{2, 2}},
		{"s^8 - 16 over Q(sqrt 2)", q2, n(q2, -16, 0, 0, 0, 0, 0, 0, 0, 1), []int{1, 1, 2, 2, 2}},
		{"s^4 - 10 s^2 + 1, the field's own polynomial", q23, n(q23, 1, 0, -10, 0, 1), []int{1, 1, 1, 1}},
		{"s^4 - 5 s^2 + 6 over Q(sqrt 2 + sqrt 3)", q23, n(q23, 6, 0, -5, 0, 1), []int{1, 1, 1, 1}},
		{"s^6 - 1", q23, n(q23, -1, 0, 0, 0, 0, 0, 1), []int{1, 1, 2, 2}},
		{"s^12 - 1 over Q(sqrt 2 + sqrt 3)", q23, n(q23, -1, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 1), []int{1, 1, 2, 2, 2, 2, 2}},
		{"s^2 - x^2", xy, s(xy, xy.Neg(xy.Mul(x, x)), xy.Zero(), xy.One()), []int{1, 1}},
		{"s^2 - x", xy, s(xy, xy.Neg(x), xy.Zero(), xy.One()), []int{2}},
		{"s^2 + (x + y) s + x y", xy, s(xy, xy.Mul(x, y), xy.Add(x, y), xy.One()), []int{1, 1}},
		{"s^4 + 4 x^4 (S. Germain)", xy, s(xy, xy.Mul(xy.FromInt(4), xy.Mul(xy.Mul(x, x), xy.Mul(x, x))), xy.Zero(), xy.Zero(), xy.Zero(), xy.One()), []int{2, 2}},
		{"s^4 + x^4", xy, s(xy, xy.Mul(xy.Mul(x, x), xy.Mul(x, x)), xy.Zero(), xy.Zero(), xy.Zero(), xy.One()), []int{4}},
		{"x s^2 - y", xy, s(xy, xy.Neg(y), xy.Zero(), x), []int{2}},
		{"s^2 - 2 x^2 over Q(sqrt 2)(x, y)", q2xy, s(q2xy, q2xy.Mul(q2xy.FromInt(-2), q2xy.Mul(x, x)), q2xy.Zero(), q2xy.One()), []int{1, 1}},
		{"s^4 + x^4 over Q(sqrt 2)(x, y)", q2xy, s(q2xy, xy.Mul(xy.Mul(x, x), xy.Mul(x, x)), xy.Zero(), xy.Zero(), xy.Zero(), xy.One()), []int{2, 2}},
		{"s^2 + x s + x, whose discriminant the surd is", surd, s(surd, x, x, surd.One()), []int{1, 1}},
		{"s^2 - x over a surd", surd, s(surd, surd.Neg(x), surd.Zero(), surd.One()), []int{2}},
	} {
		t.Run(c.name, func(t *testing.T) {
			var degrees []int
			for _, g := range checkFractionFactors(t, c.f, c.p) {
				for range g.Mult {
					degrees = append(degrees, g.P.Degree())
				}
			}
			assert.Equal(t, c.degrees, degrees)
		})
	}
}

func TestFractionPolyLaws(t *testing.T) {
	for _, name := range []string{"Q(x,y)", "Q(sqrt2)", "Q(plastic)", "Q(x,y)(sqrt(x^2+y))"} {
		t.Run(name, func(t *testing.T) {
			f := functionFields(t)[name]
			gen := algebratest.Polys[fraction](f, polynomialsIn(f, algebratest.SmallRats, 2, 1), 2)
			algebratest.TestQuoRem[fraction](t, f, gen)
			algebratest.TestGCD[fraction](t, f, gen)
			algebratest.TestSquareFree[fraction](t, f, algebratest.Polys[fraction](f, polynomialsIn(f, algebratest.SmallRats, 1, 1), 1))
		})
	}
}

// TestFunctionFieldLimits: a product of long expressions is refused with a
// *LimitError, which CatchLimit turns into an error.
func TestFunctionFieldLimits(t *testing.T) {
	names := make([]string, 12)
	for i := range names {
		names[i] = fmt.Sprintf("x%d", i)
	}
	f := algebra.NewFunctionField(names, nil)
	power := func() (err error) {
		defer algebra.CatchLimit(&err)
		sum := f.One()
		for i := range names {
			sum = f.Add(sum, f.Variable(i))
		}
		for range 6 {
			sum = f.Mul(sum, sum)
		}
		return nil
	}
	var limit *algebra.LimitError
	require.ErrorAs(t, power(), &limit)
	assert.NotEmpty(t, limit.What)
	assert.PanicsWithValue(t, "other", func() {
		var err error
		defer algebra.CatchLimit(&err)
		panic("other")
	})
}

func TestFractionText(t *testing.T) {
	f := functionFields(t)["Q(sqrt2)(x,y)"]
	x, y, r := f.Variable(0), f.Variable(1), f.RootElement()
	inv, err := f.Inv(f.Sub(x, y))
	require.NoError(t, err)
	for want, z := range map[string]fraction{
		"0":         f.Zero(),
		"1/2":       f.FromRat(algebra.NewRat(1, 2)),
		"x":         x,
		"1/(x - y)": inv,
	} {
		assert.Equal(t, want, f.Text(z))
	}
	one := f.Sub(f.Mul(f.Add(x, r), inv), f.Mul(f.Add(y, r), inv))
	assert.Equal(t, "1", f.Text(one), "(x + a)/(x - y) - (y + a)/(x - y)")
	assert.Panics(t, func() { functionFields(t)["Q"].RootElement() })
	assert.Panics(t, func() { functionFields(t)["Q"].WithRoot(rootOf(t, ints(-3, 1))) }, "a rational root")
	assert.Panics(t, func() { functionFields(t)["Q"].WithRoot(rootOf(t, ints(-1, 0, 2))) }, "no algebraic integer")
}

// Inverses in fields of a high degree come from linear equations, in those of a low
// one from Euclid's algorithm: both are inverses.
func TestInverseOfRoots(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 3))
	for _, degree := range []int{2, 3, 5, 6, 7, 9, 12} {
		p := algebra.Monomial[algebra.Rat](algebra.Q, algebra.RatFromInt(1), degree).Sub(algebra.PolyFromInts(2, 4)) // Eisenstein
		roots, err := algebra.Q.Roots(context.Background(), p)
		require.NoError(t, err)
		near := func(prec uint) algebra.Ball {
			z, err := roots.Enclose(context.Background(), 0, prec)
			require.NoError(t, err)
			return z.Re
		}
		f := algebra.NewFunctionField(nil, nil)
		coefs := make([]algebra.Fraction, degree+1)
		for i := range coefs {
			coefs[i] = f.FromRat(p.Coef(i))
		}
		adj, err := f.Adjoin(context.Background(), algebra.NewPoly[algebra.Fraction](f, coefs...), near, degree)
		require.NoError(t, err)
		k := adj.Field
		for range 20 {
			x := k.Zero()
			for range degree {
				x = k.Add(k.Mul(x, adj.New), k.FromRat(algebra.NewRat(r.Int64N(19)-9, 1+r.Int64N(5))))
			}
			if k.IsZero(x) {
				continue
			}
			inv, err := k.Inv(x)
			require.NoError(t, err)
			require.True(t, k.Equal(k.Mul(x, inv), k.One()), "degree %d: %s", degree, k.Text(x))
		}
	}
}
