package intpoly

import (
	"context"
	"fmt"
	"math/big"
	"slices"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
)

// requireFactored factors p, checks product, order and shape of the factors,
// and returns them.
func requireFactored(t *testing.T, p Poly) []Factor {
	t.Helper()
	c, factors, err := FactorZ(context.Background(), p)
	require.NoError(t, err)
	prod := New(c)
	for i, f := range factors {
		require.Positive(t, f.Mult)
		require.Positive(t, f.P.Degree())
		require.Positive(t, f.P.lead().Sign())
		require.Zero(t, f.P.Content().Cmp(big.NewInt(1)))
		if i > 0 {
			require.Negative(t, compare(factors[i-1].P, f.P))
		}
		for range f.Mult {
			prod = Mul(prod, f.P)
		}
	}
	requireSame(t, p, prod)
	return factors
}

// shape writes degree^multiplicity for each factor.
func shape(factors []Factor) string {
	s := ""
	for _, f := range factors {
		s += fmt.Sprintf("%d^%d ", f.P.Degree(), f.Mult)
	}
	return s
}

// eisenstein returns a polynomial that is irreducible by Eisenstein's
// criterion at 7, translated by a.
func eisenstein(seed uint64, degree, bits int, a int64) Poly {
	p := randomPoly(seed, degree, bits).Scale(big.NewInt(7))
	p[0] = new(big.Int).Sub(p[0], new(big.Int).Mod(p[0], big.NewInt(49)))
	p[0] = new(big.Int).Add(p[0], big.NewInt(7))
	p[degree] = big.NewInt(int64(seed%5) + 1)
	_, p = p.Primitive()
	return translate(p, a)
}

func TestFactorConstants(t *testing.T) {
	for _, x := range borders() {
		p := New(x)
		c, f, err := FactorZ(context.Background(), p)
		require.NoError(t, err)
		require.Empty(t, f)
		require.Zero(t, c.Cmp(x))
	}
}

func TestFactorNamedInputs(t *testing.T) {
	ones := func(n int) (s string) {
		for range n {
			s += "1^1 "
		}
		return s
	}
	for _, c := range []struct {
		name string
		p    Poly
		want string
	}{
		{"s", ints(0, 1), "1^1 "},
		{"-4 s^5", ints(0, 0, 0, 0, 0, -4), "1^5 "},
		{"s^2-1", ints(-1, 0, 1), "1^1 1^1 "},
		{"s^2+1", ints(1, 0, 1), "2^1 "},
		{"s^2-2", ints(-2, 0, 1), "2^1 "},
		{"s^4+4, Sophie Germain", ints(4, 0, 0, 0, 1), "2^1 2^1 "},
		{"s^4+1, reducible modulo every prime", ints(1, 0, 0, 0, 1), "4^1 "},
		{"s^4-10s^2+1", ints(1, 0, -10, 0, 1), "4^1 "},
		{"Knuth 4.6.2 (from memory)", ints(-5, 2, 8, -3, -3, 0, 1, 0, 1), "8^1 "},
		{"Wilkinson 20", wilkinson(20), ones(20)},
		{"Wilkinson 40", wilkinson(40), ones(40)},
		{"Wilkinson 20 disturbed in s^19", Sub(wilkinson(20).Scale(new(big.Int).Lsh(big.NewInt(1), 23)),
			Mul(powerMinus(19, 0), ints(1))), "20^1 "},
		{"SD8", swinnertonDyer(2, 3, 5), "8^1 "},
		{"SD16", swinnertonDyer(2, 3, 5, 7), "16^1 "},
		{"SD32", swinnertonDyer(2, 3, 5, 7, 11), "32^1 "},
		{"SD32 translated", translate(swinnertonDyer(2, 3, 5, 7, 11), 1), "32^1 "},
		{"SD64", swinnertonDyer(2, 3, 5, 7, 11, 13), "64^1 "},
		{"SD64 translated", translate(swinnertonDyer(2, 3, 5, 7, 11, 13), -3), "64^1 "},
		{"two SD32", Mul(translate(swinnertonDyer(2, 3, 5, 7, 11), 1), translate(swinnertonDyer(2, 3, 5, 7, 13), 2)), "32^1 32^1 "},
		{"SD16 four times", product([]Poly{
			translate(swinnertonDyer(2, 3, 5, 7), 1), translate(swinnertonDyer(2, 3, 5, 11), 2),
			translate(swinnertonDyer(2, 3, 5, 7), 3), translate(swinnertonDyer(2, 3, 5, 13), 4)}), "16^1 16^1 16^1 16^1 "},
		{"s^105-1", powerMinus(105, 1), "1^1 2^1 4^1 6^1 8^1 12^1 24^1 48^1 "},
		{"s^64-1", powerMinus(64, 1), "1^1 1^1 2^1 4^1 8^1 16^1 32^1 "},
		{"s^30-2", powerMinus(30, 2), "30^1 "},
		{"s^30-64", powerMinus(30, 64), "5^1 5^1 10^1 10^1 "},
		{"cyclotomic 105", cyclotomic(105), "48^1 "},
		{"cyclotomic 210", cyclotomic(210), "48^1 "},
		{"tridiagonal 100", tridiagonal(100), "50^1 50^1 "},
		{"Mignotte 20", Add(powerMinus(20, 0), Mul(ints(-1, 100), ints(-1, 100)).Scale(big.NewInt(-2))), "20^1 "},
		{"repeated", product([]Poly{ints(1, 1), ints(1, 1), ints(1, 1), ints(1, 0, 1), ints(1, 0, 1), ints(-3, 2)}), "1^3 1^1 2^2 "},
	} {
		t.Run(c.name, func(t *testing.T) {
			require.Equal(t, c.want, shape(requireFactored(t, c.p)))
		})
	}
}

func TestFactorCyclotomicProducts(t *testing.T) {
	for n := 1; n <= 60; n++ {
		factors := requireFactored(t, powerMinus(n, 1))
		divisors := 0
		for d := 1; d <= n; d++ {
			if n%d == 0 {
				divisors++
				require.True(t, slices.ContainsFunc(factors, func(f Factor) bool {
					return compare(f.P, cyclotomic(d)) == 0
				}))
			}
		}
		require.Len(t, factors, divisors)
	}
}

// TestFactorEveryTinyPolynomial compares with a search for divisors.
func TestFactorEveryTinyPolynomial(t *testing.T) {
	// Coefficients in -1..1 and degree 4 or 5: a proper factor of degree at
	// most 2 has coefficients of at most norm + 1 < 4 (Mignotte).
	var divisors []Poly
	for a := int64(-3); a <= 3; a++ {
		for b := int64(-3); b <= 3; b++ {
			for c := int64(0); c <= 3; c++ {
				if p := ints(a, b, c); p.Degree() > 0 {
					divisors = append(divisors, p)
				}
			}
		}
	}
	for code := range 3 * 3 * 3 * 3 * 3 * 2 {
		p := make([]int64, 6)
		x := code
		for i := range 5 {
			p[i] = int64(x%3) - 1
			x /= 3
		}
		p[5] = int64(x)
		f := ints(p...)
		if f.Degree() < 4 {
			continue
		}
		reducible := slices.ContainsFunc(divisors, func(g Poly) bool {
			_, ok := DivExact(f, g)
			return ok
		})
		factors := requireFactored(t, f)
		require.Equal(t, reducible, len(factors) > 1 || factors[0].Mult > 1, "%v", f)
	}
}

func TestFactorProductsOfIrreducibles(t *testing.T) {
	s := rng(21)
	for range 60 {
		p := New(s.integer(int(s.next()%90) + 1))
		var want []Factor
		for range s.next()%6 + 1 {
			g := eisenstein(s.next()%1000+1, int(s.next()%8)+1, int(s.next()%80)+3, int64(s.next()%9)-4)
			g = positive(g)
			if slices.ContainsFunc(want, func(f Factor) bool { return compare(f.P, g) == 0 }) {
				continue
			}
			m := int(s.next()%3) + 1
			want = append(want, Factor{g, m})
			for range m {
				p = Mul(p, g)
			}
		}
		if len(p) == 0 {
			continue
		}
		slices.SortFunc(want, func(a, b Factor) int { return compare(a.P, b.P) })
		got := requireFactored(t, p)
		require.Len(t, got, len(want))
		for i := range got {
			requireSame(t, want[i].P, got[i].P)
			require.Equal(t, want[i].Mult, got[i].Mult)
		}
	}
}

func TestFactorManySmallFactors(t *testing.T) {
	var ps []Poly
	for i := range 30 {
		ps = append(ps, eisenstein(uint64(i+1), 3+i%2, 9, int64(i%5)-2))
	}
	require.Len(t, requireFactored(t, product(ps)), 30)
}

func TestFactorIsDeterministic(t *testing.T) {
	p := product(randomPolys(5, 8, 5, 40))
	first := requireFactored(t, p)
	for range 3 {
		again := requireFactored(t, p)
		require.Len(t, again, len(first))
		for i := range first {
			requireSame(t, first[i].P, again[i].P)
		}
	}
}

func TestFactorDegreesAtWordBorders(t *testing.T) {
	for _, x := range borders() {
		// (s - x)(x s - 1)(s^2 - x s + x): the last has no root unless x^2-4x is a square.
		p := Mul(New(new(big.Int).Neg(x), big.NewInt(1)), New(big.NewInt(-1), x))
		p = Mul(p, New(x, new(big.Int).Neg(x), big.NewInt(1)))
		factors := requireFactored(t, p)
		degree := 0
		for _, f := range factors {
			degree += f.P.Degree() * f.Mult
		}
		require.Equal(t, p.Degree(), degree)
		if x.BitLen() > 10 {
			require.Equal(t, "1^1 1^1 2^1 ", shape(factors))
		}
	}
}

func TestFactorCharacteristicPolynomials(t *testing.T) {
	for _, n := range []int{10, 40, 80} {
		a, b := characteristic(uint64(n), n), characteristic(uint64(n+1), n/2)
		requireFactored(t, a)
		factors := requireFactored(t, Mul(a, Mul(b, b)))
		require.True(t, slices.ContainsFunc(factors, func(f Factor) bool { return f.Mult == 2 }))
	}
}

func TestFactorHonoursCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, _, err := FactorZ(ctx, ints(1, 2, 3))
	require.ErrorIs(t, err, context.Canceled)

	p := translate(swinnertonDyer(2, 3, 5, 7, 11, 13, 17), 1)
	for _, wait := range []time.Duration{time.Millisecond, 20 * time.Millisecond, 100 * time.Millisecond} {
		ctx, cancel := context.WithTimeout(context.Background(), wait)
		start := time.Now()
		_, _, err := FactorZ(ctx, p)
		took := time.Since(start)
		cancel()
		if err != nil {
			require.ErrorIs(t, err, context.DeadlineExceeded)
			require.Less(t, took, wait+2*time.Second) // 100 ms, with room for a busy machine and the race detector
		}
	}
}

func TestPrimeChoiceProvesIrreducibility(t *testing.T) {
	// The group of a random polynomial is the symmetric group: the degrees
	// modulo a few primes mostly leave no room for a factor.
	proven := 0
	for seed := uint64(1); seed <= 20; seed++ {
		c, err := choosePrime(context.Background(), eisenstein(seed, 12, 20, 0))
		require.NoError(t, err)
		if c.irreducible() {
			proven++
		}
	}
	require.GreaterOrEqual(t, proven, 12)
	// Those of a Swinnerton-Dyer polynomial always do.
	c, err := choosePrime(context.Background(), swinnertonDyer(2, 3, 5))
	require.NoError(t, err)
	require.False(t, c.irreducible())
}
