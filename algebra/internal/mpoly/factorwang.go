package mpoly

import (
	"context"
	"math/big"
	"slices"

	"example.org/closedform/algebra/internal/intpoly"
)

// wangLift factors a polynomial p, primitive in its main variable x and over Z,
// by way of the factors over Z of its image at an integer point for the other
// variables. The image keeps the degree in x and the multiplicities of p.
//
// The factors of the image are lifted to a line through the point first, where
// they are put together to restrictions of true factors, in general one for
// one (Bertini); then the leading coefficients in x of the true factors are
// known, and so are the true factors after lifting, modulo as many primes as
// their coefficients ask for. They are checked by their images at the point and
// by division. That none is reducible is proven by the failure of all subsets
// on the line: a factor over Z has a restriction that is a product of local
// ones (uniqueness of Hensel lifting).
//
// Sources: Wang, An improved multivariate polynomial factoring algorithm,
// Math. Comp. 32 (1978), for the outline and the leading coefficients; von zur
// Gathen, Irreducibility of multivariate polynomials, J. Comput. System Sci. 31
// (1985), for the line.
type wangLift struct {
	p         Poly
	order     []int // the main variable, then the others as they are lifted
	table     *termTable
	degrees   []int // by columns
	rng       *points
	point     []int64
	image     []intpoly.Factor
	lead      *leadFactors
	leadValue []*big.Int // the factors of the leading coefficient at the point
}

// newWangLift prepares the factorisation of the polynomial with the given terms
// in the variable of the column main.
func newWangLift(t *termTable, main int) *wangLift {
	w := &wangLift{rng: new(points)}
	degrees := t.degrees()
	columns := make([]int, 0, t.width)
	columns = append(columns, main)
	for c := range degrees {
		if c != main {
			columns = append(columns, c)
		}
	}
	// The last variable costs no points.
	slices.SortStableFunc(columns[1:], func(i, j int) int { return degrees[i] - degrees[j] })
	w.table = t.permuted(columns)
	w.degrees = make([]int, t.width)
	for i, c := range columns {
		w.degrees[i] = degrees[c]
	}
	return w
}

// start chooses a point and reports whether the image there proves that p is
// irreducible.
func (w *wangLift) start(ctx context.Context, multiplicities []int) (irreducible bool, err error) {
	err = w.choosePoint(ctx, 0, multiplicities)
	return w.irreducible(), err
}

// factor returns the irreducible factors of p after start.
func (w *wangLift) factor(ctx context.Context, p Poly, multiplicities []int) ([]Factor, error) {
	w.p = p
	w.order = w.table.vars
	w.table = newTermTable(p, w.order, true)
	for attempt := 0; ; attempt++ {
		if attempt > 0 {
			if err := w.choosePoint(ctx, attempt, multiplicities); err != nil {
				return nil, err
			}
		}
		if w.irreducible() {
			return []Factor{{p, 1}}, nil
		}
		factors, err := w.lift(ctx, attempt)
		if factors != nil || err != nil {
			return factors, err
		}
	}
}

// irreducible reports whether the image is.
func (w *wangLift) irreducible() bool { return len(w.image) == 1 && w.image[0].Mult == 1 }

// Points are looked for until the image has at most fewFactors factors, or
// pointsTried good ones have been seen: then the line has to tell.
const (
	fewFactors  = 6
	pointsTried = 3
)

// choosePoint looks for a point whose image has few factors.
func (w *wangLift) choosePoint(ctx context.Context, attempt int, multiplicities []int) error {
	best := -1
	for good, tried := 0, 0; good < pointsTried; tried++ {
		if err := ctx.Err(); err != nil {
			return err
		}
		// Larger integers keep more of what is special about p out of the image.
		bound := 8 + 4*tried + 16*attempt
		point := make([]int64, w.table.width)
		for c := 1; c < len(point); c++ {
			point[c] = w.rng.small(bound)
		}
		image := w.table.integerImage(w.degrees, point)
		if image[len(image)-1].Sign() == 0 {
			continue
		}
		_, factors, err := intpoly.FactorZ(ctx, intpoly.Poly(image))
		if err != nil {
			return err
		}
		// The likely multiplicities may be wrong: they are not insisted on.
		if tried < 20*(attempt+1) && !sameMultiplicities(factors, multiplicities) {
			continue
		}
		good++
		if best < 0 || len(factors) < best {
			best = len(factors)
			w.point, w.image = point, factors
		}
		if w.irreducible() || best <= fewFactors {
			break
		}
	}
	return nil
}

// sameMultiplicities reports whether the degrees of the parts by multiplicity
// are the given ones.
func sameMultiplicities(factors []intpoly.Factor, multiplicities []int) bool {
	d := make([]int, len(multiplicities))
	for _, g := range factors {
		if g.Mult >= len(d) {
			return false
		}
		d[g.Mult] += g.P.Degree()
	}
	return slices.Equal(d, multiplicities)
}

// lift tries to find the factors from the image; nil when that fails, by bad
// luck or because the image's multiplicities are not those of p.
func (w *wangLift) lift(ctx context.Context, attempt int) ([]Factor, error) {
	first, err := w.liftLine(ctx, 8*attempt)
	if first == nil || err != nil {
		return nil, err
	}
	groups, err := first.recombine(ctx)
	if err != nil {
		return nil, err
	}
	if len(groups) == 1 && first.mult[groups[0][0]] == 1 {
		return []Factor{{w.p, 1}}, nil
	}
	if err := w.factorLead(ctx); err != nil {
		return nil, err
	}
	leads, err := w.distribute(ctx, first, groups)
	if leads == nil || err != nil {
		return nil, err
	}
	b := newGroupLift(w, groups, leads)
	limit := b.modulusBits()
	for i, failures := 8*attempt, 0; failures < 8; i++ {
		r := first
		if i > 8*attempt {
			if r, err = w.liftLine(ctx, i); err != nil {
				return nil, err
			}
		}
		if r == nil {
			failures++
			continue
		}
		ok, err := b.addPrime(ctx, r)
		if err != nil {
			return nil, err
		}
		if !ok {
			failures++
			continue
		}
		if b.stable() || b.modulus.BitLen() > limit {
			factors, err := b.factors(ctx)
			if factors != nil || err != nil {
				return factors, err
			}
		}
		if b.modulus.BitLen() > limit {
			return nil, nil
		}
	}
	return nil, nil
}

// liftLine lifts the factors of the image to a line modulo a prime.
func (w *wangLift) liftLine(ctx context.Context, prime int) (*lineFactors, error) {
	f := fieldAt(prime)
	image := make([][]uint64, len(w.image))
	mult := make([]int, len(w.image))
	for i, g := range w.image {
		mult[i] = g.Mult
		for _, c := range g.P {
			image[i] = append(image[i], f.fromBig(c))
		}
	}
	return liftLine(ctx, newLine(f, w.point, w.rng), w.table, w.table.coefficients(f), w.degrees, image, mult)
}

// factorLead factors the leading coefficient and evaluates the factors at the
// point.
func (w *wangLift) factorLead(ctx context.Context) error {
	if w.lead == nil {
		c := w.p.Coefficients(w.order[0])
		content, factors, err := FactorZ(ctx, c[len(c)-1])
		if err != nil {
			return err
		}
		w.lead = &leadFactors{content, factors}
	}
	w.leadValue = w.leadValue[:0]
	for _, l := range w.lead.factor {
		t := newTermTable(l.P, w.order, false)
		w.leadValue = append(w.leadValue, t.integerImage(t.degrees(), w.point)[0])
	}
	return nil
}
