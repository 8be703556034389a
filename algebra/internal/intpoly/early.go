package intpoly

import (
	"context"
	"math/big"
)

// Factors are often far smaller than their bound. So sets of few modular
// factors are tried on the way up, from moduli of earlyBits bits on, at most
// earlySets for each, and products stay candidates when they are 2^earlyMargin
// times smaller than chance would have them.
const (
	earlyBits   = 30
	earlySets   = 300
	earlyMargin = 8
)

// liftAndRecombine returns the irreducible factors of l.f, given the set of
// degrees they may have and the factors modulo the prime. What early factors
// leave has a smaller bound.
func liftAndRecombine(ctx context.Context, l *lift, degrees *big.Int) ([]Poly, error) {
	var found []Poly
	for {
		if len(l.factors) == 1 {
			return append(found, l.f), nil
		}
		s, err := l.raiseSearching(ctx, degrees)
		if err != nil {
			return nil, err
		}
		if s == nil {
			rest, err := recombine(ctx, l, degrees)
			return append(found, rest...), err
		}
		found = append(found, s.found...)
		if s.done() {
			return found, nil
		}
		l = &lift{f: s.f, field: l.field, bound: factorBound(s.f), exp: l.exp, modulus: l.modulus, factors: s.factors}
		if l.exp < l.sufficient() {
			l.restart()
		}
	}
}

// raiseSearching lifts to p^exp > 2 bound; it stops before that at the first
// modulus that gives factors and returns the search with them.
func (l *lift) raiseSearching(ctx context.Context, degrees *big.Int) (*subsets, error) {
	exp := l.sufficient()
	steps := l.steps(exp)
	for i := len(steps) - 1; i >= 0; i-- {
		if err := l.raise(ctx, steps[i]); err != nil {
			return nil, err
		}
		if steps[i] == exp || l.modulus.BitLen() < earlyBits {
			continue
		}
		s := newSubsets(l, l.factors, degrees)
		if err := s.searchEarly(ctx); err != nil {
			return nil, err
		}
		if len(s.found) > 0 {
			return s, nil
		}
	}
	return nil, nil
}

// searchEarly is search with a modulus that may be too small: what it finds are
// irreducible factors, but it may miss some.
func (s *subsets) searchEarly(ctx context.Context) error {
	s.early = true
	sets := 0
	for size := 1; 2*size <= len(s.factors); {
		n := 1
		for i := range size { // binomial coefficients, up to a little above the bound
			if n = n * (len(s.factors) - i) / (i + 1); n > earlySets {
				return nil
			}
		}
		if sets += n; sets > earlySets {
			return nil
		}
		g, err := s.find(ctx, size)
		if err != nil {
			return err
		}
		if g == nil {
			size++
		} else {
			s.found = append(s.found, g)
		}
	}
	return nil
}

// smallerTried reports whether a factor of g, a factor of l.f found with a set
// of several modular factors, would have been found before with fewer: whether
// multiples h lc(l.f)/lc(h) of factors h of g pass as candidates.
func (s *subsets) smallerTried(g Poly) bool {
	b := new(big.Int).Quo(s.l.f.lead(), g.lead())
	b.Mul(b, factorBound(g))
	return b.BitLen() < s.l.modulus.BitLen()-1-earlyMargin
}
