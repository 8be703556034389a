package algebra_test

import (
	"math/rand/v2"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

// densePoly returns a polynomial of the given degree with coefficients of the
// given number of bits.
func densePoly(rng *rand.Rand, deg, bits int) ratPoly {
	gen := algebratest.WideRats(bits)
	c := make([]algebra.Rat, deg+1)
	for i := range c {
		c[i] = gen(rng)
		if rng.IntN(2) == 0 {
			c[i] = c[i].Neg()
		}
	}
	return algebra.NewPoly(algebra.Q, c...)
}

func TestPolyIsARing(t *testing.T) {
	t.Run("over Q", func(t *testing.T) {
		r := algebratest.PolyRing[algebra.Rat]{R: algebra.Q}
		algebratest.TestRing(t, r, algebratest.Polys(algebra.Q, algebratest.Rats, 5))
	})
	t.Run("over Q, fast products", func(t *testing.T) {
		r := algebratest.PolyRing[algebra.Rat]{R: algebra.Q}
		algebratest.TestRing(t, r, algebratest.Polys(algebra.Q, algebratest.SmallRats, 20))
	})
	t.Run("over Q[s]", func(t *testing.T) {
		r := algebratest.PolyRing[algebra.Rat]{R: algebra.Q}
		gen := algebratest.Polys(r, algebratest.Polys(algebra.Q, algebratest.SmallRats, 2), 3)
		algebratest.TestRing(t, algebratest.PolyRing[ratPoly]{R: r}, gen)
	})
	for name, k := range numberFields() {
		t.Run("over "+name, func(t *testing.T) {
			gen := algebratest.Polys(k, algebratest.Elements(k, algebratest.SmallRats), 3)
			algebratest.TestRing(t, algebratest.PolyRing[ratPoly]{R: k}, gen)
		})
	}
}

func TestPolyQuoRem(t *testing.T) {
	t.Run("over Q", func(t *testing.T) {
		algebratest.TestQuoRem(t, algebra.Q, algebratest.Polys(algebra.Q, algebratest.Rats, 6))
	})
	t.Run("over Q, short coefficients", func(t *testing.T) {
		algebratest.TestQuoRem(t, algebra.Q, algebratest.Polys(algebra.Q, algebratest.SmallRats, 3))
	})
	t.Run("over Q(sqrt 2)", func(t *testing.T) {
		k := numberFields()["sqrt2"]
		algebratest.TestQuoRem(t, k, algebratest.Polys(k, algebratest.Elements(k, algebratest.SmallRats), 4))
	})
	t.Run("over a tower", func(t *testing.T) {
		k, l := tower()
		elements := algebratest.Elements(l, algebratest.Elements(k, algebratest.SmallRats))
		algebratest.TestQuoRem(t, l, algebratest.Polys[algebra.Poly[ratPoly]](l, elements, 2))
	})
}

// TestPolyDivExactKeepsZeros: a quotient with the factor s came back without it
// when the divisor's leading coefficient was even, and SquareFree never ended.
func TestPolyDivExactKeepsZeros(t *testing.T) {
	for _, want := range []ratPoly{ints(0, 1), ints(0, 0, 1), ints(0, -1, 2), ints(0, 0, 3, 0, 5)} {
		for _, d := range []ratPoly{ints(3, 2), ints(-3, 4), ints(3, -169, 56), ints(2, 3), ints(0, 1)} {
			got, ok := want.Mul(d).DivExact(algebra.Q, d)
			assert.True(t, ok)
			wantPoly(t, "quotient", got, want)
		}
	}
}

func TestPolyDivisionByZeroPanics(t *testing.T) {
	var zero ratPoly
	for _, f := range []func(){
		func() { ints(1, 2).QuoRem(algebra.Q, zero) },
		func() { ints(1, 2).Rem(algebra.Q, ints()) },
		func() { zero.DivExact(algebra.Q, zero) },
	} {
		assert.PanicsWithError(t, algebra.ErrDivisionByZero.Error(), f)
	}
}

func TestPolyMonicOverAReducibleModulusPanics(t *testing.T) {
	k := algebra.NewExtension(algebra.Q, ints(-1, 0, 1), "e")
	p := algebra.NewPoly(k, k.One(), k.Sub(k.Root(), k.One()))
	assert.Panics(t, func() { p.Monic(k) })
}

// TestPolyMulFastAgainstPlain compares the product over Q by integers with the
// schoolbook product, around the length from which it is used.
func TestPolyMulFastAgainstPlain(t *testing.T) {
	rng := algebratest.Rand(t)
	for _, m := range []int{0, 1, 6, 7, 8, 15, 40} {
		for _, n := range []int{0, 1, 6, 7, 8, 31} {
			for _, gen := range []algebratest.Generator[algebra.Rat]{algebratest.Rats, algebratest.SmallRats, algebratest.WideRats(300)} {
				c, d := make([]algebra.Rat, m+1), make([]algebra.Rat, n+1)
				for i := range c {
					c[i] = gen(rng)
				}
				for i := range d {
					d[i] = gen(rng)
				}
				c[m], d[n] = algebra.RatFromInt(-1), algebra.NewRat(2, 3)
				fast := algebra.NewPoly(algebra.Q, c...).Mul(algebra.NewPoly(algebra.Q, d...))
				plain := algebra.NewPoly[algebra.Rat](plainQ, c...).Mul(algebra.NewPoly[algebra.Rat](plainQ, d...))
				wantPoly(t, "product", fast, plain)
				require.Equal(t, m+n, fast.Degree())
				for i, x := range fast.Coefs() {
					require.NoError(t, x.Check(), "coefficient %d", i)
				}
			}
		}
	}
}

// compose returns p(d) by Horner's rule.
func compose[E any](p, d algebra.Poly[E]) algebra.Poly[E] {
	y := algebra.NewPoly(d.Ring())
	for i := p.Degree(); i >= 0; i-- {
		y = y.Mul(d).Add(algebra.Constant(d.Ring(), p.Coef(i)))
	}
	return y
}

func testPolyOperations[E any](t *testing.T, r algebra.Ring[E], coef algebratest.Generator[E]) {
	rng := algebratest.Rand(t)
	gen := algebratest.Polys(r, coef, 4)
	for range 40 {
		p, d, a, b := gen(rng), gen(rng), coef(rng), coef(rng)
		s := algebra.Monomial(r, r.One(), 1)
		wantPoly(t, "p(s + a)", p.Translate(a), compose(p, s.Add(algebra.Constant(r, a))))
		wantPoly(t, "p(s + a - a)", p.Translate(a).Translate(r.Neg(a)), p)
		wantPoly(t, "(p q)'", p.Mul(d).Derivative(), p.Derivative().Mul(d).Add(p.Mul(d.Derivative())))
		wantPoly(t, "p(q)'", compose(p, d).Derivative(), compose(p.Derivative(), d).Mul(d.Derivative()))
		wantPoly(t, "s^3 p", p.ShiftUp(3), p.Mul(algebra.Monomial(r, r.One(), 3)))
		wantPoly(t, "s^0 p", p.ShiftUp(0), p)
		wantPoly(t, "a p", p.Scale(a), p.Mul(algebra.Constant(r, a)))
		wantPoly(t, "a s^2", algebra.Monomial(r, a, 2), algebra.NewPoly(r, r.Zero(), r.Zero(), a))
		wantPoly(t, "p(s) with its coefficients", algebra.NewPoly(r, p.Coefs()...), p)
		if x, y := p.Mul(d).Eval(a), r.Mul(p.Eval(a), d.Eval(a)); !r.Equal(x, y) {
			t.Errorf("(p q)(a) = %s, p(a) q(a) = %s for p = %v, q = %v, a = %s", r.Text(x), r.Text(y), p, d, r.Text(a))
		}
		if x, y := p.Translate(a).Eval(b), p.Eval(r.Add(a, b)); !r.Equal(x, y) {
			t.Errorf("p(s + a) at b is %s, p(a + b) = %s for p = %v", r.Text(x), r.Text(y), p)
		}
		power := algebra.Constant(r, r.One())
		for n := range 6 {
			wantPoly(t, "power", p.Pow(n), power)
			power = power.Mul(p)
		}
	}
}

func TestPolyOperations(t *testing.T) {
	t.Run("over Q", func(t *testing.T) { testPolyOperations[algebra.Rat](t, algebra.Q, algebratest.Rats) })
	t.Run("over Q(p)", func(t *testing.T) {
		k := numberFields()["plastic"]
		testPolyOperations[ratPoly](t, k, algebratest.Elements(k, algebratest.SmallRats))
	})
}

func TestPolyNormalForm(t *testing.T) {
	zero := algebra.Rat{}
	p := algebra.NewPoly(algebra.Q, q("1"), q("2"), zero, zero)
	assert.Equal(t, 1, p.Degree())
	assert.Equal(t, -1, algebra.NewPoly(algebra.Q, zero, zero).Degree())
	assert.Equal(t, -1, algebra.Monomial(algebra.Q, zero, 5).Degree())
	assert.Equal(t, -1, algebra.Constant(algebra.Q, zero).Degree())
	assert.Equal(t, -1, p.Scale(zero).Degree())
	assert.Equal(t, 0, ints(1, 2, 3).Sub(ints(0, 2, 3)).Degree())
	assert.False(t, p.Equal(ints(1, 2, 3)) || ints(1, 2, 3).Equal(p))
	assert.False(t, p.Equal(ints(1, 3)))
	assert.Equal(t, algebra.Ring[algebra.Rat](algebra.Q), p.Ring())
	for _, i := range []int{-1, 2, 1 << 40} {
		assert.True(t, p.Coef(i).IsZero(), "coefficient %d", i)
	}
	assert.Equal(t, "2", p.Lead().String())
	assert.Panics(t, func() { ints().Lead() })
}

func TestPolyZeroValue(t *testing.T) {
	var zero ratPoly
	p := ints(1, 2)
	assert.Nil(t, zero.Ring())
	assert.Equal(t, -1, zero.Degree())
	assert.True(t, zero.IsZero() && zero.Equal(ints()) && ints().Equal(zero))
	wantPoly(t, "0 + p", zero.Add(p), p)
	wantPoly(t, "p + 0", p.Add(zero), p)
	wantPoly(t, "0 - p", zero.Sub(p), p.Neg())
	wantPoly(t, "0 p", zero.Mul(p), zero)
	wantPoly(t, "p 0", p.Mul(zero), zero)
	wantPoly(t, "-0", zero.Neg(), zero)
	wantPoly(t, "2 0", zero.Scale(q("2")), zero)
	wantPoly(t, "0'", zero.Derivative(), zero)
	wantPoly(t, "s^2 0", zero.ShiftUp(2), zero)
	wantPoly(t, "0(s+1)", zero.Translate(q("1")), zero)
	wantPoly(t, "monic 0", zero.Monic(algebra.Q), zero)
	assert.Equal(t, "0", zero.String())
	quo, rem := zero.QuoRem(algebra.Q, p)
	assert.True(t, quo.IsZero() && rem.IsZero())
}

// TestPolyZeroValueTakesTheRing: a result that is zero because the zero value
// took part knew no ring, so that Eval and Pow of it panicked.
func TestPolyZeroValueTakesTheRing(t *testing.T) {
	var zero ratPoly
	p := ints(1, 2)
	for name, z := range map[string]ratPoly{
		"0 p": zero.Mul(p), "p 0": p.Mul(zero), "0 + 0": zero.Add(ints()), "0 rem p": zero.Rem(algebra.Q, p),
	} {
		if assert.NotNil(t, z.Ring(), name) {
			assert.True(t, z.Eval(q("3")).IsZero(), name)
			assert.True(t, z.Pow(0).Lead().IsOne(), name)
		}
	}
}

func TestPolySharesNoMemory(t *testing.T) {
	c := []algebra.Rat{q("1"), q("2")}
	p := algebra.NewPoly(algebra.Q, c...)
	c[0] = q("7")
	p.Coefs()[1] = q("7")
	wantPoly(t, "polynomial", p, ints(1, 2))
}

func TestPolyFormat(t *testing.T) {
	k := numberFields()["sqrt2"]
	r, one := k.Root(), k.One()
	for _, c := range []struct{ got, want string }{
		{ints().Format("s"), "0"},
		{ints(1).Format("s"), "1"},
		{ints(-1).Format("s"), "-1"},
		{ints(0, 1).Format("s"), "s"},
		{ints(0, -1).Format("x"), "-x"},
		{ints(-1, 1).Format("s"), "s - 1"},
		{ints(1, -1).Format("s"), "-s + 1"},
		{ints(0, 0, 0, 1).Format("lambda"), "lambda^3"},
		{ints(3, 0, -2, 0, 1).String(), "s^4 - 2*s^2 + 3"},
		{algebra.NewPoly(algebra.Q, q("-1/2"), q("3"), q("1")).String(), "s^2 + 3*s - 1/2"},
		{algebra.NewPoly(algebra.Q, q("0"), q("-1/2")).String(), "-1/2*s"},
		{algebra.NewPoly(k, r, one, k.Neg(one), k.FromInt(-3), k.Add(r, one)).String(), "(r + 1)*s^4 - 3*s^3 - s^2 + s + (r)"},
		{algebra.NewPoly(k, k.Neg(r), k.Neg(r)).String(), "(-r)*s + (-r)"},
	} {
		assert.Equal(t, c.want, c.got)
	}
}

func TestReplaceBy(t *testing.T) {
	k := numberFields()["sqrt2"]
	p := ints(1, 0, 3)
	lifted := algebra.ReplaceBy(p, algebra.Ring[ratPoly](k), k.FromBase)
	assert.Equal(t, "3*s^2 + 1", lifted.String())
	half := algebra.ReplaceBy(p, algebra.Ring[algebra.Rat](algebra.Q), func(x algebra.Rat) algebra.Rat {
		if x.IsOne() {
			return x
		}
		return algebra.Rat{}
	})
	wantPoly(t, "the images of coefficients may vanish", half, ints(1))
}

func BenchmarkPolyMul(b *testing.B) {
	for _, deg := range []int{4, 16, 64, 256} {
		for _, bits := range []int{16, 64} {
			b.Run("ring=Q/deg="+strconv.Itoa(deg)+"/bits="+strconv.Itoa(bits), func(b *testing.B) {
				rng := algebratest.Rand(b)
				p, d := densePoly(rng, deg, bits), densePoly(rng, deg, bits)
				b.ReportAllocs()
				for b.Loop() {
					p.Mul(d)
				}
			})
		}
	}
}
