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
	early   bool   // the modulus may be too small
	radius  int    // 2^radius bounds the roots of l.f
	traces  [2]filter
}

// filter holds, for each modular factor, a number modulo 2^64 such that the sum
// over the members of a true factor is within slack of 0.
type filter struct {
	values []uint64
	slack  uint64 // noSlack when the modulus is too small for a bound
}

const noSlack = ^uint64(0)

// passes reports whether the sum may belong to a true factor.
func (t *filter) passes(sum uint64) bool { return t.slack == noSlack || sum+t.slack <= 2*t.slack }

// newSubsets prepares the search for factors of l.f, each lc times the product
// of some of the given monic factors modulo l.modulus > 2 l.bound.
func newSubsets(l *lift, factors []Poly, degrees *big.Int) *subsets {
	s := &subsets{l: l, degrees: degrees, f: l.f, factors: factors, radius: rootRadius(l.f)}
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

// scaleTraces sets the filters. With the first power sum of the roots of the
// modular factor i, up to sign its second coefficient, as t_i, the first value
// is floor(2^64 (lc t_i mod m) / m). For a true factor of degree d, lc times
// the sum of its t_i is congruent to an integer of size at most T = d lc R for
// a bound R of the roots, so the sum of the values is, modulo 2^64, within
// 2^64 T / m + len(factors) + 1 of 0. The second filter is the same for the
// squares of the roots and lc^2.
func (s *subsets) scaleTraces() {
	m := s.l.modulus
	lc := s.f.lead()
	scale := []*big.Int{lc, new(big.Int).Mul(lc, lc)}
	for e := range s.traces {
		t := new(big.Int).Mul(scale[e], big.NewInt(int64(s.f.Degree())))
		t.Lsh(t, uint(64+(e+1)*s.radius))
		t.Quo(t, m)
		t.Add(t, big.NewInt(int64(len(s.factors)+2)))
		s.traces[e] = filter{slack: noSlack}
		if t.BitLen() < 63 {
			s.traces[e] = filter{make([]uint64, len(s.factors)), t.Uint64()}
		}
	}
	var x, u big.Int
	for i, g := range s.factors {
		n := len(g)
		for e, f := range s.traces {
			if f.slack == noSlack {
				continue
			}
			x.Set(g[n-2])
			if e == 1 {
				x.Mul(&x, &x)
				if n > 2 {
					x.Sub(&x, u.Lsh(g[n-3], 1))
				}
			}
			x.Mul(&x, scale[e])
			x.Mod(&x, m)
			x.Lsh(&x, 64)
			f.values[i] = x.Quo(&x, m).Uint64()
		}
	}
}

// remove takes the picked factors out of the filters, for an unchanged leading
// coefficient.
func (t *filter) remove(in []bool) {
	var left []uint64
	for i, v := range t.values {
		if !in[i] {
			left = append(left, v)
		}
	}
	t.values = left
}

// rootRadius returns an e >= 0 such that all roots of f are at most 2^e in size.
//
// Source: Fujiwara, Über die obere Schranke des absoluten Betrages der Wurzeln
// einer algebraischen Gleichung, Tohoku Math. J. 10 (1916): they are at most
// 2 max |f_(n-i) / f_n|^(1/i).
func rootRadius(f Poly) int {
	n := f.Degree()
	e := 0
	for i := 1; i <= n; i++ {
		if f[n-i].Sign() != 0 {
			// The quotient is below 2^d.
			d := f[n-i].BitLen() - f[n].BitLen() + 1
			e = max(e, (d+i-1)/i+1)
		}
	}
	return e
}

// find looks for a set of the given size that gives a factor, removes its
// members and returns the factor, or returns nil.
func (s *subsets) find(ctx context.Context, size int) (Poly, error) {
	n := len(s.factors)
	pick := make([]int, size)
	sums := make([][2]uint64, size+1) // sums[k]: filter values of the first k picked
	first, second := &s.traces[0], &s.traces[1]
	extend := func(k int) {
		sums[k+1] = sums[k]
		if first.slack != noSlack {
			sums[k+1][0] += first.values[pick[k]]
		}
		if second.slack != noSlack {
			sums[k+1][1] += second.values[pick[k]]
		}
	}
	for k := range pick {
		pick[k] = k
		extend(k)
	}
	for count := 0; ; count++ {
		if count&0x3fff == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
		}
		if t := &sums[size]; first.passes(t[0]) && second.passes(t[1]) {
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
			extend(k)
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
	room := 0
	if s.early {
		room = earlyMargin
	}
	g := candidate(s.f, members, s.l.modulus, room)
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
	if s.early && len(pick) > 1 && !s.smallerTried(g) {
		return nil
	}
	var left []Poly
	for i, h := range s.factors {
		if !in[i] {
			left = append(left, h)
		}
	}
	same := s.f.lead().Cmp(other.lead()) == 0
	s.f, s.factors = other, left
	if !same {
		s.scaleTraces()
		return g
	}
	for e := range s.traces {
		s.traces[e].remove(in)
	}
	return g
}

// candidate returns the primitive part of lc(f) times the product of monic
// polynomials modulo m, or nil when its constant term shows that it is not a
// factor of f: with (lc(f)/lc(g)) g in place of a factor g, that term divides
// lc(f) f(0). With room > 0, also when its coefficients, before the content is
// taken out, are not 2^room times smaller than m/2.
func candidate(f Poly, members []Poly, m *big.Int, room int) Poly {
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
	if !isOne(f.lead()) {
		g = g.Scale(f.lead())
	}
	g = symmetric(g, m)
	if room > 0 && g.maxBits() >= m.BitLen()-1-room {
		return nil
	}
	return positive(g.primitivePart())
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
