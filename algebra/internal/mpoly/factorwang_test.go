package mpoly

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"

	"example.org/closedform/algebra/internal/intpoly"
	"github.com/stretchr/testify/require"
)

// factorAt factors p, primitive in each variable, with x_main for main
// variable, by lifting, from the given point when there is one.
func factorAt(t *testing.T, p Poly, main int, point []int64) []Factor {
	t.Helper()
	ctx := context.Background()
	vars := make([]int, p.Vars())
	for i := range vars {
		vars[i] = i
	}
	r := newProbe(p, vars)
	multiplicities, ok := r.multiplicities(main)
	require.True(t, ok)
	w := newWangLift(r.t, main)
	_, err := w.start(ctx, multiplicities)
	require.NoError(t, err)
	if point != nil {
		w.point = point
		_, factors, err := intpoly.FactorZ(ctx, intpoly.Poly(w.table.integerImage(w.degrees, point)))
		require.NoError(t, err)
		w.image = factors
	}
	factors, err := w.factor(ctx, p, multiplicities)
	require.NoError(t, err)
	return factors
}

// requireSame compares factorisations in any order.
func requireSame(t *testing.T, want, got []Factor) {
	t.Helper()
	count := map[string]int{}
	for _, g := range want {
		count[show(g.P.positive())] += g.Mult
	}
	for _, g := range got {
		count[show(g.P.positive())] -= g.Mult
	}
	for s, c := range count {
		require.Zero(t, c, s)
	}
}

// TestFactorAllMainVariables compares the results of lifting in every variable.
func TestFactorAllMainVariables(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for range 60 {
		n := 2 + rng.IntN(4)
		p := ConstantWord(n, 1)
		for range 1 + rng.IntN(3) {
			// A constant and pure powers make it primitive in every variable.
			g := randomFactor(rng, n, 4, 2, []int{2, 20, 62, 90}[rng.IntN(4)]).Add(ConstantWord(n, 1+int64(rng.IntN(9))))
			for i := range n {
				g = g.Add(Variable(n, i).Pow(3).MulInt(big.NewInt(1 + int64(rng.IntN(5)))))
			}
			_, g = g.splitContent()
			p = p.Mul(g.Pow(1 + rng.IntN(2)))
		}
		want := checkFactors(t, p)
		for main := range n {
			requireSame(t, want, factorAt(t, p, main, nil))
		}
	}
}

// TestFactorBadPoints starts from points at which irreducible factors split:
// the local factors have to be put together.
func TestFactorBadPoints(t *testing.T) {
	for n := 3; n <= 5; n++ {
		p := signedRoots(n)
		point := []int64{0, 1, 4, 25, 100}[:n] // the images have 2^(n-1) linear factors
		requireSame(t, []Factor{{p, 1}}, factorAt(t, p, 0, point))
		q := p.Add(Variable(n, 0).MulInt(big.NewInt(3))).Sub(Variable(n, 1).Pow(2))
		f := factorAt(t, p.Mul(q), 0, point)
		requireSame(t, []Factor{{p, 1}, {q, 1}}, f)
		f = factorAt(t, p.Mul(p).Mul(q), 0, point)
		requireSame(t, []Factor{{p, 2}, {q, 1}}, f)
	}
}

// TestFactorWrongMultiplicities starts from points at which different factors
// have the same image, or a factor has multiple ones.
func TestFactorWrongMultiplicities(t *testing.T) {
	x, y, z := Variable(3, 0), Variable(3, 1), Variable(3, 2)
	g := x.Mul(x).Add(y).Add(ConstantWord(3, 1))
	h := x.Mul(x).Add(z).Add(ConstantWord(3, 1))
	k := x.Mul(x).Sub(y.Mul(x)).Add(z.Pow(3))
	p := g.Mul(h).Mul(k)
	requireSame(t, []Factor{{g, 1}, {h, 1}, {k, 1}}, factorAt(t, p, 0, []int64{0, 5, 5}))
	k = x.Mul(x).Sub(y).Add(z)
	p = g.Mul(k)
	requireSame(t, []Factor{{g, 1}, {k, 1}}, factorAt(t, p, 0, []int64{0, 5, 5}))
}

// TestFactorHeights checks the bound of modulusBits on dense products.
func TestFactorHeights(t *testing.T) {
	for k := 1; k < 10; k++ {
		p := Variable(2, 0).Add(ConstantWord(2, 1)).Pow(k).Add(Variable(2, 1))
		q := Variable(2, 1).Sub(ConstantWord(2, 1)).Pow(k).Add(Variable(2, 0))
		pq := p.Mul(q)
		bits := pq.MaxBits() + pq.Degree(0) + pq.Degree(1)
		for _, g := range checkFactors(t, pq) {
			require.LessOrEqual(t, g.P.MaxBits(), bits)
		}
	}
}

func TestFactorDeterministic(t *testing.T) {
	p := signedSums(4).Mul(signedRoots(4)).Mul(differences(4))
	want := checkFactors(t, p)
	for range 3 {
		got := checkFactors(t, p)
		require.Len(t, got, len(want))
		for i := range got {
			require.True(t, got[i].P.Equal(want[i].P))
			require.Equal(t, want[i].Mult, got[i].Mult)
		}
	}
}

// TestFactorFalseGroups takes local factors for restrictions of true ones that
// are none: the proofs have to notice.
func TestFactorFalseGroups(t *testing.T) {
	ctx := context.Background()
	for n := 2; n <= 4; n++ {
		p := signedRoots(n)
		vars := []int{0, 1, 2, 3}[:n]
		w := newWangLift(newProbe(p, vars).t, 0)
		w.p, w.order = p, w.table.vars
		w.table = newTermTable(p, w.order, true)
		w.point = []int64{0, 1, 4, 25}[:n]
		var err error
		_, w.image, err = intpoly.FactorZ(ctx, intpoly.Poly(w.table.integerImage(w.degrees, w.point)))
		require.NoError(t, err)
		require.Len(t, w.image, 1<<(n-1))
		line, err := w.liftLine(ctx, 0)
		require.NoError(t, err)
		var groups [][]int
		for i := range w.image {
			require.False(t, line.isFactor(ctx, []int{i}))
			groups = append(groups, []int{i})
		}
		require.NoError(t, w.factorLead(ctx))
		leads, err := w.distribute(ctx, line, groups)
		require.NoError(t, err)
		b := newGroupLift(w, groups, leads)
		ok, err := b.addPrime(ctx, line)
		require.NoError(t, err)
		if ok {
			factors, err := b.factors(ctx)
			require.NoError(t, err)
			require.Nil(t, factors)
		}
	}
}

// TestFactorRemainders joins residues whose terms come and go.
func TestFactorRemainders(t *testing.T) {
	product := new(big.Int).SetUint64(fieldAt(0).P)
	product.Mul(product, new(big.Int).SetUint64(fieldAt(1).P))
	half := new(big.Int).Rsh(product, 1)
	values := []*big.Int{
		big.NewInt(5), big.NewInt(-1), new(big.Int).SetUint64(fieldAt(0).P), new(big.Int).SetUint64(fieldAt(1).P),
		new(big.Int).Neg(new(big.Int).SetUint64(fieldAt(0).P)), half, new(big.Int).Neg(half),
	}
	b := &groupLift{modulus: big.NewInt(1), terms: make([]crtTerms, 1)}
	for i := range 2 {
		f := fieldAt(i)
		var list []sparseTerm
		for k, v := range values {
			if c := f.fromBig(v); c != 0 {
				list = append(list, sparseTerm{[]uint16{uint16(k)}, c})
			}
		}
		b.combine(f, [][]sparseTerm{list})
		require.False(t, b.stable() && i == 0, "coefficients of the size of the prime")
	}
	require.Zero(t, b.modulus.Cmp(product))
	require.Len(t, b.terms[0].value, len(values))
	for k, v := range b.terms[0].value {
		require.Equal(t, []uint16{uint16(k)}, b.terms[0].row[k])
		require.Zero(t, v.Cmp(values[k]))
	}
}
