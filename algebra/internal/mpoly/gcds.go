package mpoly

import (
	"cmp"
	"context"
	"math/big"
	"slices"
)

// GCDs returns the greatest common divisor of all ps over Z, as [GCD] does; 0
// for none. The gcd of the two shortest is proven by division of the others or
// replaced by its gcd with a pseudo-random combination of those it fails to
// divide.
func GCDs(ctx context.Context, ps []Poly) (Poly, error) {
	var list []Poly
	n := 0
	for _, p := range ps {
		n = join(Poly{n: n}, p)
		if !p.IsZero() {
			list = append(list, p)
		}
	}
	if len(list) == 0 {
		return Poly{n: n}, ctx.Err()
	}
	slices.SortStableFunc(list, func(a, b Poly) int { return cmp.Compare(a.Len(), b.Len()) })
	if list[0].Len() == 1 {
		return gcdTerm(list), ctx.Err()
	}
	g := list[0].positive()
	rest := list[1:]
	for len(rest) > 0 {
		p := rest[0]
		if len(rest) < len(list)-1 && len(rest) > 1 {
			p = combination(rest)
		}
		var err error
		if g, err = GCD(ctx, g, p); err != nil {
			return Poly{}, err
		}
		if g.IsOne() {
			break
		}
		var open []Poly
		for _, p := range rest {
			_, ok, err := divide(ctx, p, g)
			if err != nil {
				return Poly{}, err
			}
			if !ok {
				open = append(open, p)
			}
		}
		if len(open) == len(rest) { // the combination vanished, or nearly so
			if g, err = GCD(ctx, g, rest[0]); err != nil {
				return Poly{}, err
			}
			open = open[1:]
		}
		rest = open
	}
	return g, ctx.Err()
}

// gcdTerm returns the gcd of polynomials the first of which has one term.
func gcdTerm(list []Poly) Poly {
	e, c := list[0].exp(0), list[0].Content()
	one := big.NewInt(1)
	for _, p := range list[1:] {
		if isUnit(e) && c.Cmp(one) == 0 {
			break
		}
		e = minMonomials(e, p.minExponents())
		if c.Cmp(one) != 0 {
			c = gcdInts(c, p.Content())
		}
	}
	return Constant(list[0].n, c).mulMonomial(e)
}

// combination returns a sum of small multiples of ps.
func combination(ps []Poly) Poly {
	random := points(5)
	f := fieldAt(0)
	sums := make([]Poly, len(ps))
	for i, p := range ps {
		sums[i] = p.MulInt(big.NewInt(int64(random.next(f)%1021) + 1))
	}
	for len(sums) > 1 {
		half := sums[:0]
		for i := 0; i+1 < len(sums); i += 2 {
			half = append(half, sums[i].Add(sums[i+1]))
		}
		if len(sums)%2 == 1 {
			half = append(half, sums[len(sums)-1])
		}
		sums = half
	}
	return sums[0]
}
