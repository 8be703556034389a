package mpoly

import (
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// randomFactor returns a random primitive polynomial in n variables with about
// the given number of terms, of degree at most degree in each variable, and
// coefficients of up to size bits, often at the borders of words.
func randomFactor(rng *rand.Rand, n, terms, degree, size int) Poly {
	p := Poly{n: n}
	for range terms {
		e := make([]int, n)
		for i := range e {
			if rng.IntN(2) == 0 {
				e[i] = rng.IntN(degree + 1)
			}
		}
		c := new(big.Int).Lsh(big.NewInt(1), uint(rng.IntN(size)))
		switch rng.IntN(3) {
		case 0:
			c.Sub(c, big.NewInt(1))
		case 1:
			c.Sub(c, new(big.Int).SetUint64(rng.Uint64()>>(64-min(64, c.BitLen()-1)))).Abs(c)
		}
		c.Add(c, big.NewInt(1))
		if rng.IntN(2) == 0 {
			c.Neg(c)
		}
		p = p.Add(FromTerms(n, []Term{{c, e}}))
	}
	if p.IsZero() {
		return ConstantWord(n, 1)
	}
	_, p = p.splitContent()
	return p
}

// expand multiplies out.
func expand(n int, factors []Factor) Poly {
	p := ConstantWord(n, 1)
	for _, g := range factors {
		p = p.Mul(g.P.Pow(g.Mult))
	}
	return p
}

// refine checks that the factorisation of a product of polynomials is the union
// of their factorisations: factors are irreducible at least as far as those of
// smaller polynomials are.
func refine(t *testing.T, given []Factor, n int) {
	t.Helper()
	want := map[string]int{}
	for _, g := range given {
		for _, h := range checkFactors(t, g.P) {
			want[show(h.P)] += h.Mult * g.Mult
		}
	}
	got := map[string]int{}
	for _, h := range checkFactors(t, expand(n, given)) {
		got[show(h.P)] += h.Mult
	}
	require.Equal(t, want, got)
}

// show writes a polynomial down.
func show(p Poly) string {
	s := ""
	for t := range p.Terms() {
		s += fmt.Sprintf("%+d", t.Coef)
		for i, e := range t.Exp {
			if e > 0 {
				s += fmt.Sprintf("*x%d^%d", i, e)
			}
		}
	}
	return s
}

func TestFactorRandomProducts(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for round := range 300 {
		n := 2 + rng.IntN(5)
		var given []Factor
		for range 2 + rng.IntN(3) {
			size := []int{1, 3, 10, 33, 63, 66}[rng.IntN(6)]
			mult := 1
			if rng.IntN(3) == 0 {
				mult += rng.IntN(3)
			}
			given = append(given, Factor{randomFactor(rng, n, 2+rng.IntN(5), 1+rng.IntN(3), size), mult})
		}
		t.Run(fmt.Sprint(round), func(t *testing.T) { refine(t, given, n) })
	}
}
