package intpoly

import (
	"cmp"
	"context"
	"math/big"
	"slices"

	"example.org/closedform/algebra/internal/lattice"
)

// columnBits is the size of the modulus of one lattice column: entries then
// stay within the word arithmetic of the lattice reduction.
const columnBits = 48

// minColumnBits is the least size worth a lattice reduction.
const minColumnBits = 8

// knapsackLattice is a lattice that contains, for every factor g over Z of
// f, the vector of weight times the 0/1 indicators of the modular factors in
// g, followed by one short entry for each column added so far.
type knapsackLattice struct {
	l      *lift
	count  int          // r, the number of modular factors
	weight int64        // of the indicators, about the size of the other entries
	rows   [][]*big.Int // a basis
	added  int          // columns added
	used   []int        // digits of the coefficient of s^i used so far, from p^0 on
}

// knapsack returns the irreducible factors of l.f like subsets.search, for many
// modular factors. The vectors of true factors are short in a lattice built
// from the coefficients of f g_j'/g_j, which add up when modular factors g_j
// are multiplied. After reduction all of them are combinations of the first
// basis vectors, the others are dropped, and modular factors on which all
// remaining vectors agree belong to the same irreducible factors. When few
// classes remain, subsets of them are searched; when the classes are as many
// as the basis vectors, each of them should be an irreducible factor, and is
// if all of them divide f: there are no more irreducible factors than classes.
//
// Source: van Hoeij, Factoring polynomials and the knapsack problem, J. Number
// Theory 95 (2002); the logarithmic derivatives are from Hart, van Hoeij and
// Novocin, Practical polynomial factoring in polynomial time, ISSAC 2011.
func knapsack(ctx context.Context, l *lift, degrees *big.Int) ([]Poly, error) {
	k := newKnapsackLattice(l)
	bounds, err := logDerivativeBound(ctx, l.f)
	if err != nil {
		return nil, err
	}
	order := make([]int, len(bounds))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return bounds[a].Cmp(bounds[b]) })
	for {
		columns, err := logDerivatives(ctx, l)
		if err != nil {
			return nil, err
		}
		for _, i := range order {
			added, err := k.add(ctx, columns, i, bounds[i])
			if err != nil {
				return nil, err
			}
			if !added {
				continue
			}
			classes := k.classes()
			switch {
			case len(classes) == 1:
				return []Poly{l.f}, nil
			case len(classes) <= searchUpTo:
				products := make([]Poly, len(classes))
				for i, members := range classes {
					products[i] = productMod(members, l.modulus)
				}
				s := newSubsets(l, products, degrees)
				err := s.search(ctx, 0)
				return s.found, err
			case len(classes) == len(k.rows):
				if factors := classFactors(l, classes); factors != nil {
					return factors, nil
				}
			}
		}
		// Higher digits tell apart whatever is not an integer.
		if err := l.raise(ctx, 2*l.exp); err != nil {
			return nil, err
		}
	}
}

// newKnapsackLattice returns the lattice of all indicator vectors.
func newKnapsackLattice(l *lift) *knapsackLattice {
	r := len(l.factors)
	k := &knapsackLattice{l: l, count: r, weight: int64(r+1) / 2,
		rows: make([][]*big.Int, r), used: make([]int, l.f.Degree())}
	for i := range k.rows {
		k.rows[i] = make([]*big.Int, r)
		for j := range k.rows[i] {
			k.rows[i][j] = new(big.Int)
		}
		k.rows[i][i].SetInt64(k.weight)
	}
	return k
}

// logDerivatives returns f g_j'/g_j modulo the lift's modulus for every j.
func logDerivatives(ctx context.Context, l *lift) ([]Poly, error) {
	f := reduceBy(l.f, l.modulus)
	out := make([]Poly, len(l.factors))
	for j, g := range l.factors {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		q, _ := divRemMonic(f, g, l.modulus)
		out[j] = reduceBy(Mul(q, g.Derivative()), l.modulus)
	}
	return out, nil
}

// add extends the lattice by the coefficient of s^i of the logarithmic
// derivatives, which for a true factor is at most deg(f) bound in size,
// reduces it and drops the vectors that no factor needs. It reports false,
// changing nothing, when the precision leaves too few unused digits above the
// bound.
//
// With p^drop >= 2 deg(f) bound, the digits of the coefficients c_j from drop
// on, taken to the nearest, are c_j / p^drop up to 1/2; so for a true factor
// their sum is, modulo p^keep, at most (1 + r) / 2 in size.
func (k *knapsackLattice) add(ctx context.Context, columns []Poly, i int, bound *big.Int) (bool, error) {
	p := new(big.Int).SetUint64(k.l.field.P)
	least := new(big.Int).Mul(bound, big.NewInt(int64(2*k.l.f.Degree())))
	low, drop := big.NewInt(1), 0
	for low.Cmp(least) < 0 || drop < k.used[i] {
		low.Mul(low, p)
		drop++
	}
	high, end := big.NewInt(1), drop
	for ; end < k.l.exp; end++ {
		next := new(big.Int).Mul(high, p)
		if next.BitLen() > columnBits {
			break
		}
		high = next
	}
	if high.BitLen() < minColumnBits {
		return false, nil
	}
	k.used[i] = end
	both := new(big.Int).Mul(low, high)
	digits := make([]*big.Int, k.count)
	for j, c := range columns {
		digits[j] = new(big.Int)
		if i < len(c) {
			x := symmetricInt(c[i], both)
			x.Sub(x, symmetricInt(x, low))
			digits[j].Quo(x, low)
		}
	}
	weight := big.NewInt(k.weight)
	var t big.Int
	width := k.count + k.added
	modulusRow := make([]*big.Int, width+1)
	for j := range width {
		modulusRow[j] = new(big.Int)
	}
	modulusRow[width] = high
	rows := [][]*big.Int{modulusRow}
	for _, row := range k.rows {
		sum := new(big.Int)
		for j, d := range digits {
			sum.Add(sum, t.Mul(t.Quo(row[j], weight), d))
		}
		rows = append(rows, append(slices.Clone(row), symmetricInt(sum, high)))
	}
	reduced, err := lattice.Reduce(ctx, rows)
	if err != nil {
		return false, err
	}
	k.added++
	k.rows = reduced.Basis[:reduced.Within(k.shortness())]
	return true, nil
}

// shortness returns an upper bound for the squared lengths of the vectors of
// true factors, rounded up.
func (k *knapsackLattice) shortness() *big.Int {
	r, s := int64(k.count), int64(k.added)
	return big.NewInt(r*k.weight*k.weight + s*((r+1)*(r+1)/4+1))
}

// classes groups the modular factors on which all basis vectors agree, in the
// order of their first members.
func (k *knapsackLattice) classes() [][]Poly {
	var out [][]Poly
	var heads []int
	for j := range k.count {
		at := slices.IndexFunc(heads, func(h int) bool {
			return !slices.ContainsFunc(k.rows, func(row []*big.Int) bool {
				return row[h].Cmp(row[j]) != 0
			})
		})
		if at < 0 {
			at = len(heads)
			heads, out = append(heads, j), append(out, nil)
		}
		out[at] = append(out[at], k.l.factors[j])
	}
	return out
}

// classFactors returns the polynomials over Z that belong to the classes, or
// nil unless all of them divide l.f. The class of largest degree, for which
// the modulus may be too small, is what the others leave.
func classFactors(l *lift, classes [][]Poly) []Poly {
	degree := func(members []Poly) (d int) {
		for _, g := range members {
			d += g.Degree()
		}
		return d
	}
	classes = slices.Clone(classes)
	slices.SortStableFunc(classes, func(a, b []Poly) int { return cmp.Compare(degree(a), degree(b)) })
	rest := l.f
	var out []Poly
	for _, members := range classes[:len(classes)-1] {
		g := candidate(rest, members, l.modulus, 0)
		if g == nil {
			return nil
		}
		q, ok := DivExact(rest, g)
		if !ok {
			return nil
		}
		out, rest = append(out, g), q
	}
	return append(out, rest)
}
