package mpoly

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// border holds coefficients around the word borders.
var border = func() []*big.Int {
	var b []*big.Int
	for _, c := range []int64{0, 1, -1, 2, -3} {
		b = append(b, big.NewInt(c))
	}
	for _, s := range []uint{31, 62, 63, 64} {
		for d := int64(-1); d <= 1; d++ {
			x := new(big.Int).Add(new(big.Int).Lsh(big.NewInt(1), s), big.NewInt(d))
			b = append(b, x, new(big.Int).Neg(x))
		}
	}
	return b
}()

// randomTerms returns up to k terms in n variables of degree at most deg each;
// wide selects coefficients at the word borders too.
func randomTerms(r *rand.Rand, n, k, deg int, wide bool) []Term {
	terms := make([]Term, r.IntN(k+1))
	for i := range terms {
		c := big.NewInt(r.Int64N(19) - 9)
		if wide && r.IntN(2) == 0 {
			c = border[r.IntN(len(border))]
		}
		e := make([]int, n)
		for j := range e {
			e[j] = r.IntN(deg + 1)
		}
		terms[i] = Term{c, e}
	}
	return terms
}

func randomPoly(r *rand.Rand, n, k, deg int, wide bool) Poly {
	return FromTerms(n, randomTerms(r, n, k, deg, wide))
}

// requireCanonical checks the invariants of the representation.
func requireCanonical(t *testing.T, p Poly) {
	t.Helper()
	require.False(t, len(p.words) > 0 && len(p.bigs) > 0)
	require.Equal(t, p.Len()*wordsOf(p.n), len(p.exps))
	small := true
	for i := range p.Len() {
		require.NotZero(t, p.coef(i).Sign())
		small = small && fitsWord(p.coef(i))
		if i > 0 {
			require.Positive(t, compareMonomials(p.exp(i-1), p.exp(i)))
		}
	}
	require.Equal(t, small, p.bigs == nil)
}

func key(e []int) string {
	s := make([]byte, 0, 2*len(e))
	for _, d := range e {
		s = append(s, byte(d>>8), byte(d))
	}
	return string(s)
}

// plainMul returns p q term by term.
func plainMul(n int, p, q Poly) Poly {
	sums := map[string]*Term{}
	for s := range p.Terms() {
		for t := range q.Terms() {
			e := make([]int, n)
			for i := range e {
				e[i] = s.Exp[i] + t.Exp[i]
			}
			k := key(e)
			if sums[k] == nil {
				sums[k] = &Term{new(big.Int), e}
			}
			sums[k].Coef.Add(sums[k].Coef, new(big.Int).Mul(s.Coef, t.Coef))
		}
	}
	var terms []Term
	for _, t := range sums {
		terms = append(terms, *t)
	}
	return FromTerms(n, terms)
}

var shapes = []struct{ n, deg int }{{0, 0}, {1, 6}, {2, 3}, {3, 40}, {4, 2}, {5, 3}, {6, 200}, {9, 2}, {13, 300}}

func TestRingLaws(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for _, s := range shapes {
		for trial := range 60 {
			wide := trial%2 == 1
			a := randomPoly(r, s.n, 9, s.deg, wide)
			b := randomPoly(r, s.n, 9, s.deg, wide)
			c := randomPoly(r, s.n, 9, s.deg, wide)
			for _, p := range []Poly{a, b, a.Add(b), a.Sub(b), a.Mul(b), a.Neg()} {
				requireCanonical(t, p)
			}
			require.True(t, a.Add(b).Equal(b.Add(a)))
			require.True(t, a.Add(b).Add(c).Equal(a.Add(b.Add(c))))
			require.True(t, a.Sub(b).Equal(a.Add(b.Neg())))
			require.True(t, a.Sub(a).IsZero())
			require.True(t, a.Mul(b).Equal(b.Mul(a)))
			require.True(t, a.Mul(b).Equal(plainMul(s.n, a, b)))
			require.True(t, a.Mul(b).Mul(c).Equal(a.Mul(b.Mul(c))))
			require.True(t, a.Mul(b.Add(c)).Equal(a.Mul(b).Add(a.Mul(c))))
			require.True(t, a.Mul(ConstantWord(s.n, 1)).Equal(a))
			require.True(t, a.Add(Poly{}).Equal(a))
			require.True(t, a.Mul(Poly{}).IsZero())
			require.True(t, a.Pow(3).Equal(a.Mul(a).Mul(a)))
			require.True(t, a.Pow(0).IsOne())
			require.Equal(t, a.Compare(b), -b.Compare(a))
		}
	}
}

func TestBorderCoefficients(t *testing.T) {
	x, y := Variable(2, 0), Variable(2, 1)
	for _, c := range border {
		for _, d := range border {
			p := x.MulInt(c).Add(y.MulInt(d))
			q := x.MulInt(d).Sub(y.MulInt(c)).Add(ConstantWord(2, 1))
			requireCanonical(t, p)
			requireCanonical(t, p.Mul(q))
			require.True(t, p.Mul(q).Equal(plainMul(2, p, q)))
			require.Zero(t, Constant(2, c).Add(Constant(2, d)).ConstantTerm().Cmp(new(big.Int).Add(c, d)))
			require.Zero(t, Constant(2, c).Mul(Constant(2, d)).Lead().Cmp(new(big.Int).Mul(c, d)))
			quo, ok := p.Mul(q).DivExact(q)
			require.True(t, ok)
			require.True(t, quo.Equal(p))
			g := new(big.Int).GCD(nil, nil, new(big.Int).Abs(c), new(big.Int).Abs(d))
			require.Zero(t, p.Content().Cmp(g))
			if g.Sign() > 0 {
				require.True(t, p.DivInt(g).MulInt(g).Equal(p))
			}
		}
	}
}

func TestDivExact(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 1))
	for _, s := range shapes {
		for trial := range 60 {
			p := randomPoly(r, s.n, 12, s.deg, trial%2 == 1)
			q := randomPoly(r, s.n, 12, s.deg, trial%3 == 1)
			if q.IsZero() {
				continue
			}
			quo, ok := p.Mul(q).DivExact(q)
			require.True(t, ok)
			require.True(t, quo.Equal(p))
			requireCanonical(t, quo)
			// A quotient found is one.
			if quo, ok := p.DivExact(q); ok {
				require.True(t, quo.Mul(q).Equal(p))
			}
			// pq + r with r a proper divisor's remainder is no multiple: q does not divide 1.
			if !q.IsConstant() {
				_, ok = p.Mul(q).Add(ConstantWord(s.n, 1)).DivExact(q)
				require.False(t, ok)
			} else if q.Content().Cmp(big.NewInt(1)) != 0 {
				_, ok = p.Mul(q).Add(ConstantWord(s.n, 1)).DivExact(q)
				require.False(t, ok)
			}
		}
	}
}

func TestAccessors(t *testing.T) {
	p := FromTerms(3, []Term{{big.NewInt(2), []int{1, 0, 5}}, {big.NewInt(-4), []int{3, 0, 1}}, {big.NewInt(6), []int{1, 0, 5}}})
	require.Equal(t, 2, p.Len())
	require.Equal(t, 3, p.Vars())
	require.Equal(t, -1, p.LeadSign())
	require.Zero(t, p.Lead().Cmp(big.NewInt(-4)))
	require.Equal(t, []int{3, 0, 1}, p.Term(0).Exp)
	require.Equal(t, []int{3, 0, 5}, []int{p.Degree(0), p.Degree(1), p.Degree(2)})
	require.Equal(t, 6, p.TotalDegree())
	require.Equal(t, []int{1, 0, 1}, p.Monomial())
	require.True(t, p.Uses(0) && !p.Uses(1) && p.Uses(2))
	require.Equal(t, 4, p.MaxBits())
	require.Zero(t, p.Content().Cmp(big.NewInt(4)))
	require.Zero(t, p.ConstantTerm().Sign())
	require.Equal(t, -1, Poly{}.TotalDegree())
	require.Equal(t, -1, Poly{}.Degree(0))
	require.Panics(t, func() { Variable(1, 0).Pow(32767).Mul(Variable(1, 0)) })
	require.Panics(t, func() { Variable(2, 0).Add(Variable(3, 0)) })
	require.Panics(t, func() { Variable(2, 2) })
	require.Panics(t, func() { Variable(2, 0).Pow(-1) })
	require.Panics(t, func() { Variable(2, 0).DivExact(Poly{}) })
	require.Panics(t, func() { Variable(2, 0).Derivative(2) })
	require.Panics(t, func() { FromTerms(2, []Term{{big.NewInt(1), []int{1}}}) })
	require.Panics(t, func() { FromTerms(1, []Term{{big.NewInt(1), []int{1 << 15}}}) })
	require.Panics(t, func() { FromCoefficients(0, []Poly{Variable(2, 0)}) })
	for term := range p.Terms() {
		require.Equal(t, p.Term(0).Exp, term.Exp)
		require.Zero(t, p.Lead().Cmp(term.Coef))
		break
	}
	require.Zero(t, ConstantWord(3, math.MinInt64).Lead().Cmp(big.NewInt(math.MinInt64)))
	requireCanonical(t, ConstantWord(3, math.MinInt64))
}

func TestSubstitutionLaws(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 1))
	for _, s := range []struct{ n, deg int }{{1, 6}, {2, 3}, {5, 3}, {6, 2}} {
		for trial := range 30 {
			wide := trial%2 == 1
			a := randomPoly(r, s.n, 8, s.deg, wide)
			b := randomPoly(r, s.n, 8, s.deg, wide)
			i := r.IntN(s.n)
			if !a.IsZero() {
				back := FromCoefficients(i, a.Coefficients(i))
				requireCanonical(t, back)
				require.True(t, back.Equal(a))
				require.Len(t, a.Coefficients(i), a.Degree(i)+1)
			}
			// Derivative is a derivation.
			require.True(t, a.Mul(b).Derivative(i).Equal(a.Derivative(i).Mul(b).Add(a.Mul(b.Derivative(i)))))
			// Evaluate and Compose are homomorphisms.
			x := border[r.IntN(len(border))]
			require.True(t, a.Mul(b).Evaluate(i, x).Equal(a.Evaluate(i, x).Mul(b.Evaluate(i, x))))
			require.False(t, a.Evaluate(i, x).Uses(i))
			values := make([]Poly, s.n)
			for j := range values {
				values[j] = randomPoly(r, 3, 3, 1, false)
				values[j].n = 3
			}
			require.True(t, a.Mul(b).Compose(values).Equal(a.Compose(values).Mul(b.Compose(values))))
			for j := range values {
				values[j] = Variable(s.n, j)
			}
			values[i] = Constant(s.n, x)
			require.True(t, a.Compose(values).Equal(a.Evaluate(i, x)))
			// Rename by a permutation and back.
			to := r.Perm(s.n + 2)[:s.n]
			back := make([]int, s.n+2)
			for j, k := range to {
				back[k] = j
			}
			require.True(t, a.Rename(s.n+2, to).Rename(s.n, back).Equal(a))
			if s.n == 2 {
				require.True(t, a.Rename(1, []int{0, 0}).Equal(a.Compose([]Poly{Variable(1, 0), Variable(1, 0)})))
			}
		}
	}
}
