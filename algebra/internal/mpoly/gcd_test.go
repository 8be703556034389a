package mpoly

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// mustGCD returns the gcd.
func mustGCD(t testing.TB, p, q Poly) Poly {
	t.Helper()
	g, err := GCD(context.Background(), p, q)
	require.NoError(t, err)
	return g
}

// requireGCD checks that g is the gcd of p and q: a common divisor whose
// cofactors have gcd 1.
func requireGCD(t *testing.T, g, p, q Poly) {
	t.Helper()
	requireCanonical(t, g)
	require.Equal(t, 1, g.LeadSign())
	a, ok := p.DivExact(g)
	require.True(t, ok)
	b, ok := q.DivExact(g)
	require.True(t, ok)
	require.True(t, mustGCD(t, a, b).IsOne())
}

// exactly returns a non-zero polynomial of k random terms of total degree up to
// deg each.
func exactly(r *rand.Rand, n, k, deg, bits int) Poly {
	for {
		terms := make([]Term, k)
		for i := range terms {
			e := make([]int, n)
			for range r.IntN(deg + 1) {
				e[r.IntN(n)]++
			}
			c := big.NewInt(r.Int64N(1<<min(bits, 62)) + 1)
			if bits > 62 {
				c.Lsh(c, uint(bits-62)).Add(c, big.NewInt(r.Int64N(1<<62)))
			}
			if r.IntN(2) == 0 {
				c.Neg(c)
			}
			terms[i] = Term{c, e}
		}
		if p := FromTerms(n, terms); !p.IsZero() {
			return p
		}
	}
}

func TestGCDLaws(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 1))
	for _, s := range []struct{ n, terms, deg, bits, trials int }{
		{1, 4, 6, 4, 40}, {1, 10, 60, 4, 5}, {2, 4, 5, 4, 60}, {2, 8, 8, 70, 20}, {3, 5, 6, 3, 60}, {3, 3, 4, 64, 20},
		{4, 5, 6, 3, 40}, {5, 6, 5, 3, 40}, {6, 8, 12, 4, 10}, {8, 8, 20, 4, 5}, {9, 4, 5, 200, 5}, {12, 5, 30, 3, 5},
	} {
		for range s.trials {
			g := exactly(r, s.n, 1+r.IntN(s.terms), s.deg, s.bits)
			a := exactly(r, s.n, 1+r.IntN(s.terms), s.deg, s.bits)
			b := exactly(r, s.n, 1+r.IntN(s.terms), s.deg, s.bits)
			p, q := a.Mul(g), b.Mul(g)
			h := mustGCD(t, p, q)
			requireGCD(t, h, p, q)
			_, ok := h.DivExact(g)
			require.True(t, ok)
			require.True(t, mustGCD(t, q, p).Equal(h))
			require.True(t, mustGCD(t, p.Neg(), q).Equal(h))
			require.True(t, mustGCD(t, p, p.Mul(b)).Equal(p.positive()))
			require.True(t, mustGCD(t, p, Poly{}).Equal(p.positive()))
			many, err := GCDs(context.Background(), []Poly{p, q, p.Add(q), Poly{}, q.Mul(a), p.Sub(q)})
			require.NoError(t, err)
			require.True(t, many.Equal(h))
		}
	}
}

// letters names the variables x_0, ..., x_5 of named inputs.
type letters struct{ x, y, z, u, v, w, one Poly }

func vars6() letters {
	f := func(i int) Poly { return Variable(6, i) }
	return letters{f(0), f(1), f(2), f(3), f(4), f(5), ConstantWord(6, 1)}
}

func sum(ps ...Poly) Poly {
	s := Poly{}
	for _, p := range ps {
		s = s.Add(p)
	}
	return s
}

func product(ps ...Poly) Poly {
	s := ConstantWord(ps[0].n, 1)
	for _, p := range ps {
		s = s.Mul(p)
	}
	return s
}

func TestGCDHardInputs(t *testing.T) {
	l := vars6()
	word := func(c int64) Poly { return ConstantWord(6, c) }
	p0 := new(big.Int).SetUint64(fieldAt(0).P)
	p1 := new(big.Int).SetUint64(fieldAt(1).P)
	all := sum(l.x, l.y, l.z, l.u, l.v, l.w, l.one)
	// The leading coefficient in each variable vanishes at every point of a small grid.
	vanishing := word(1)
	for i := range int64(7) {
		vanishing = vanishing.Mul(l.y.Sub(word(i)))
	}
	cases := []struct {
		name    string
		g, a, b Poly
	}{
		{"linear factors of the sums of all variables (from memory)", all, all.Add(l.one), all.Sub(l.one)},
		{"dense powers", sum(l.x, l.y, l.one).Pow(6), sum(l.x, l.y.Neg(), l.one).Pow(4), sum(l.x, l.y, word(2)).Pow(4)},
		{"contents", product(sum(l.y, l.one), sum(l.z, l.one)), product(sum(l.y, word(2)), sum(l.x, l.z)), product(sum(l.z, word(2)), sum(l.x, l.y))},
		{"vanishing leading coefficient", sum(product(vanishing, l.x.Pow(2)), l.x, l.z, l.one), sum(l.x.Pow(2), l.y), sum(product(vanishing, l.x), l.z)},
		{"nowhere monic", sum(product(l.y, l.x), product(l.z, l.u), l.x.Mul(l.z), product(l.y, l.u, word(3))), sum(l.x.Mul(l.y), l.one), sum(l.x.Mul(l.u), l.z)},
		{"prime divides a leading coefficient", sum(l.x.Pow(2).MulInt(p0), l.y, l.z.Pow(2).MulInt(p1)), sum(l.x.MulInt(p1), l.one), sum(l.x.MulInt(p1), l.y)},
		{"prime divides all but one term", sum(l.x.MulInt(p0), l.y.MulInt(p0), l.one), sum(l.x, l.y), sum(l.x, l.z)},
		{"coprime modulo no prime in sight", l.one, sum(l.x.Pow(3), l.y), sum(l.x.Pow(3), l.y, Constant(6, new(big.Int).Mul(p0, p1)))},
		{"common divisor modulo a prime only", l.x.Add(l.y), sum(l.x.Pow(3), l.y, l.z), sum(l.x.Pow(3), l.y, l.z, Constant(6, p0))},
		{"one in many variables", l.one, all.Pow(2), all.Add(l.one).Pow(3)},
		{"integer contents", word(6).Mul(all), word(10).Mul(l.x.Add(l.one)), word(15).Mul(l.y)},
		{"monomials", product(l.x.Pow(3), l.y), product(l.z, sum(l.x, l.y)), product(l.x, sum(l.x, l.z))},
		{"factor in one variable only", l.w.Pow(5).Sub(l.one), sum(l.x, l.w), sum(l.y, l.w)},
		{"high degrees", sum(l.x.Pow(300), l.y.Pow(200), l.one), sum(l.x.Pow(100), l.y), sum(l.y.Pow(100), l.x.Neg())},
		{"missing terms at small points", product(sum(l.x.Pow(2), product(sum(l.y, l.one.Neg()), l.x), l.z), sum(l.u, l.v)), sum(l.x, l.z), sum(l.x, l.z, l.one)},
	}
	for _, c := range cases {
		p, q := c.a.Mul(c.g), c.b.Mul(c.g)
		h := mustGCD(t, p, q)
		requireGCD(t, h, p, q)
		_, ok := h.DivExact(c.g)
		require.True(t, ok, c.name)
		require.True(t, mustGCD(t, q, p).Equal(h), c.name)
	}
}

// TestGCDAgainstRemainders compares with the plain way, recursive primitive remainder
// sequences.
func TestGCDAgainstRemainders(t *testing.T) {
	r := rand.New(rand.NewPCG(12, 1))
	for range 60 {
		n := 1 + r.IntN(3)
		g, a, b := exactly(r, n, 3, 3, 3), exactly(r, n, 3, 2, 3), exactly(r, n, 3, 2, 3)
		p, q := a.Mul(g), b.Mul(g)
		require.True(t, mustGCD(t, p, q).Equal(plainGCD(p, q, 0)))
	}
}

// plainGCD is the gcd by primitive remainder sequences in x_i, ..., x_(n-1).
func plainGCD(p, q Poly, i int) Poly {
	if p.IsZero() || q.IsZero() {
		return p.Add(q).positive()
	}
	if i == p.n {
		return Constant(p.n, new(big.Int).GCD(nil, nil, p.Content(), q.Content()))
	}
	content := func(p Poly) Poly {
		c := Poly{}
		for _, x := range p.Coefficients(i) {
			c = plainGCD(c, x, i+1)
		}
		return c
	}
	cp, cq := content(p), content(q)
	a, _ := p.DivExact(cp)
	b, _ := q.DivExact(cq)
	for !b.IsZero() {
		for a.Degree(i) >= b.Degree(i) {
			la, lb := a.endCoefficient(i, false), b.endCoefficient(i, false)
			shift := Variable(p.n, i).Pow(a.Degree(i) - b.Degree(i))
			a = a.Mul(lb).Sub(b.Mul(la).Mul(shift))
			if a.IsZero() {
				break
			}
		}
		if !a.IsZero() {
			a, _ = a.DivExact(content(a))
		}
		a, b = b, a
	}
	return a.Mul(plainGCD(cp, cq, i+1)).positive()
}

func TestGCDCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := GCD(ctx, Variable(2, 0), Variable(2, 0))
	require.ErrorIs(t, err, context.Canceled)
	_, err = GCDs(ctx, []Poly{Variable(2, 0).Add(Variable(2, 1))})
	require.ErrorIs(t, err, context.Canceled)
}

// TestGCDInflated checks that a substitution of powers commutes with the gcd.
func TestGCDInflated(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 1))
	for range 20 {
		g, a, b := exactly(r, 4, 4, 4, 5), exactly(r, 4, 4, 4, 5), exactly(r, 4, 4, 4, 5)
		p, q := a.Mul(g), b.Mul(g)
		powers := make([]Poly, 4)
		for i := range powers {
			powers[i] = Variable(4, i).Pow(1 + r.IntN(700))
		}
		require.True(t, mustGCD(t, p.Compose(powers), q.Compose(powers)).Equal(mustGCD(t, p, q).Compose(powers)))
	}
}
