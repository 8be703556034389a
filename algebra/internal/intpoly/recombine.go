package intpoly

import (
	"context"
	"math/big"
)

// searchUpTo is the number of modular factors up to which all subsets are
// tried, whatever that takes: at most 2^(searchUpTo-1) word additions, which
// measures below one lattice reduction.
const searchUpTo = 14

// searchBudget is the number of subsets tried first with more modular factors:
// it finds the products of few of them in about a millisecond.
const searchBudget = 1 << 18

// recombine returns the irreducible factors of l.f, given the set of degrees
// they may have.
func recombine(ctx context.Context, l *lift, degrees *big.Int) ([]Poly, error) {
	s := newSubsets(l, l.factors, degrees)
	if err := s.search(ctx, searchBudget); err != nil || s.done() {
		return s.found, err
	}
	if len(s.found) > 0 {
		// The bound holds for the factors of what is left, too.
		l = &lift{f: s.f, field: l.field, bound: l.bound, exp: l.exp, modulus: l.modulus, factors: s.factors}
	}
	rest, err := knapsack(ctx, l, degrees)
	return append(s.found, rest...), err
}

// subsets is the state of the search for sets of modular factors whose product
// is a factor over Z.
type subsets struct {
	l       *lift
	degrees *big.Int
	found   []Poly // irreducible factors
	f       Poly   // what is left of l.f, constant when done
	factors []Poly // the monic modular factors of f, or products of some
	traces  []uint64
	slack   uint64 // the traces of a true factor sum to at most this, cyclically
}

// newSubsets prepares the search for factors of l.f, each lc times the product
// of some of the given monic factors modulo l.modulus > 2 l.bound.
func newSubsets(l *lift, factors []Poly, degrees *big.Int) *subsets {
	s := &subsets{l: l, degrees: degrees, f: l.f, factors: factors}
	s.scaleTraces()
	return s
}

// done reports whether all irreducible factors have been found.
func (s *subsets) done() bool { return s.f.Degree() == 0 }

// search tries sets of 1, 2, 3, ... factors. A set that gives a factor over Z
// gives an irreducible one because no smaller set inside it did. When no set
// is left, what remains of f is irreducible; with more than searchUpTo
// factors, the search ends unfinished rather than to exceed the budget.
//
// Source: Zassenhaus, On Hensel factorization I, J. Number Theory 1 (1969);
// the filters are from Abbott, Shoup and Zimmermann, Factorization in Z[x]:
// the searching phase, ISSAC 2000.
func (s *subsets) search(ctx context.Context, budget int64) error {
	for size := 1; 2*size <= len(s.factors); {
		if n := int64(len(s.factors)); n > searchUpTo {
			sets := new(big.Int).Binomial(n, int64(size))
			if sets.Cmp(big.NewInt(budget)) > 0 {
				return nil
			}
			budget -= sets.Int64()
		}
		g, err := s.find(ctx, size)
		if err != nil {
			return err
		}
		if g == nil {
			size++
			continue
		}
		s.found = append(s.found, g)
	}
	if !s.done() {
		s.found = append(s.found, s.f)
		s.f = Poly{big.NewInt(1)}
	}
	return nil
}

// scaleTraces sets traces[i] = floor(2^64 (lc t_i mod m) / m), t_i the second
// coefficient of factor i. For a true factor of degree d, lc times the sum of
// its t_i is congruent to an integer of size at most T = norm2(l.f) +
// d |lc(l.f)|, so the sum of its scaled traces is, modulo 2^64, within
// 2^64 T / m + len(factors) + 1 of 0.
func (s *subsets) scaleTraces() {
	m := s.l.modulus
	lc := s.f.lead()
	s.traces = make([]uint64, len(s.factors))
	var x big.Int
	for i, g := range s.factors {
		x.Mul(g[len(g)-2], lc)
		x.Mod(&x, m)
		x.Lsh(&x, 64)
		s.traces[i] = x.Quo(&x, m).Uint64()
	}
	t := new(big.Int).Mul(s.l.f.lead(), big.NewInt(int64(s.l.f.Degree())))
	t.Add(t, norm2(s.l.f))
	t.Lsh(t, 64)
	t.Quo(t, m)
	t.Add(t, big.NewInt(int64(len(s.factors)+2)))
	s.slack = ^uint64(0)
	if t.BitLen() < 63 {
		s.slack = t.Uint64()
	}
}

// find looks for a set of the given size that gives a factor, removes its
// members and returns the factor, or returns nil.
func (s *subsets) find(ctx context.Context, size int) (Poly, error) {
	n := len(s.factors)
	pick := make([]int, size)
	sums := make([]uint64, size+1) // sums[k]: traces of the first k picked
	for k := range pick {
		pick[k] = k
		sums[k+1] = sums[k] + s.traces[k]
	}
	for count := 0; ; count++ {
		if count&0x3fff == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
		}
		if t := sums[size]; s.slack == ^uint64(0) || t+s.slack <= 2*s.slack {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if g := s.try(pick); g != nil {
				return g, nil
			}
		}
		k := size - 1
		for k >= 0 && pick[k] == n-size+k {
			k--
		}
		// With just half of the factors every set has its complement tried:
		// fix the first member.
		if k < 0 || k == 0 && 2*size == n {
			return nil, nil
		}
		pick[k]++
		for ; k < size; k++ {
			if k > 0 && pick[k] <= pick[k-1] {
				pick[k] = pick[k-1] + 1
			}
			sums[k+1] = sums[k] + s.traces[pick[k]]
			if k+1 < size {
				pick[k+1] = pick[k]
			}
		}
	}
}

// try tests a set; on success it updates the state and returns the factor.
func (s *subsets) try(pick []int) Poly {
	in := make([]bool, len(s.factors))
	degree := 0
	for _, i := range pick {
		in[i] = true
		degree += s.factors[i].Degree()
	}
	rest := s.f.Degree() - degree
	if s.degrees.Bit(degree) == 0 {
		return nil
	}
	// The bound is for the side of lower degree.
	side := degree <= rest
	var members []Poly
	for i, g := range s.factors {
		if in[i] == side {
			members = append(members, g)
		}
	}
	g := candidate(s.f, members, s.l.modulus)
	if g == nil {
		return nil
	}
	other, ok := DivExact(s.f, g)
	if !ok {
		return nil
	}
	if !side {
		g, other = other, g
	}
	var left []Poly
	for i, h := range s.factors {
		if !in[i] {
			left = append(left, h)
		}
	}
	s.f, s.factors = other, left
	s.scaleTraces()
	return g
}

// candidate returns the primitive part of lc(f) times the product of monic
// polynomials modulo m, or nil when its constant term shows that it is not a
// factor of f: with (lc(f)/lc(g)) g in place of a factor g, that term divides
// lc(f) f(0).
func candidate(f Poly, members []Poly, m *big.Int) Poly {
	c := new(big.Int).Set(f.lead())
	for _, g := range members {
		c.Mul(c, g[0])
		c.Mod(c, m)
	}
	c = symmetricInt(c, m)
	if !divides(c, new(big.Int).Mul(f.lead(), f[0])) {
		return nil
	}
	g := productMod(members, m)
	_, g = symmetric(g.Scale(f.lead()), m).Primitive()
	return g
}

// productMod returns the product modulo m, by halves.
func productMod(ps []Poly, m *big.Int) Poly {
	switch len(ps) {
	case 0:
		return Poly{big.NewInt(1)}
	case 1:
		return ps[0]
	}
	half := len(ps) / 2
	return reduceBy(Mul(productMod(ps[:half], m), productMod(ps[half:], m)), m)
}
