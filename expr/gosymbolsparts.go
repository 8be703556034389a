package expr

import (
	"context"
	"math"
	"slices"

	"example.org/closedform/algebra"
)

// goPart is the share of a group of primes in an image: the sum over j of
// coefs[j] in powers of s over q[0] ... q[j], where q[j] is the prime with the
// index seq[j]. Read from the last j to the first this is the numerator in
// Newton's basis, found by division by monic polynomials: no denominators come
// in.
type goPart struct {
	kind  goPartKind
	seq   []int
	coefs [][]Constant
	exact Image[Constant] // of goNumeric
}

type goPartKind int

const (
	goDivided goPartKind = iota // linear primes: divided differences of exp
	goPair                      // a quadratic prime: e^(ht) times cosh and sinh
	goCascade                   // others: the exponential of a block matrix
	goNumeric                   // one prime without symbols, written like a function without symbols
)

// goPrime is a prime of the images.
type goPrime struct {
	*prime[Constant]
	degree int
	mean   Constant               // of the roots
	moved  algebra.Poly[Constant] // p(s + mean)
	number bool                   // free of symbols
	roots  []algebra.ComplexBall  // of a prime without symbols
}

// goDecomposer takes images apart.
type goDecomposer struct {
	k      *Constants
	primes []goPrime
}

// enter returns the index of a prime.
func (w *goDecomposer) enter(ctx context.Context, p *prime[Constant]) (int, error) {
	if i := slices.IndexFunc(w.primes, func(q goPrime) bool { return q.p.Equal(p.p) }); i >= 0 {
		return i, nil
	}
	n := p.p.Degree()
	q := goPrime{prime: p, degree: n, number: true}
	q.mean = w.k.Mul(p.p.Coef(n-1), w.k.FromRat(algebra.NewRat(-1, int64(n))))
	q.moved = p.p.Translate(q.mean)
	for _, c := range p.p.Coefs() {
		q.number = q.number && w.k.IsNumber(c)
	}
	if q.number {
		set, err := p.rootSet(ctx, w.k)
		if err != nil {
			return 0, err
		}
		for i := range set.Len() {
			z, err := set.Enclose(ctx, i, 60)
			if err != nil {
				return 0, err
			}
			q.roots = append(q.roots, z)
		}
	}
	w.primes = append(w.primes, q)
	return len(w.primes) - 1, nil
}

// apart tells whether two primes are taken apart by partial fractions: they are
// free of symbols, and the distance of their roots is not small against the
// roots. Symbols may bring roots together whatever is assumed of them.
func (w *goDecomposer) apart(i, j int) bool {
	p, q := w.primes[i], w.primes[j]
	if !p.number || !q.number {
		return false
	}
	for _, x := range p.roots {
		for _, y := range q.roots {
			a, b := approximation(x), approximation(y)
			if !(cabs(a[0]-b[0], a[1]-b[1]) > max(cabs(a[0], a[1]), cabs(b[0], b[1]))/8) {
				return false
			}
		}
	}
	return true
}

func approximation(z algebra.ComplexBall) [2]float64 {
	re, _ := z.Re.Mid().Float64()
	im, _ := z.Im.Mid().Float64()
	return [2]float64{re, im}
}

func cabs(re, im float64) float64 { return math.Hypot(re, im) }

// parts takes an image apart.
func (w *goDecomposer) parts(ctx context.Context, f Image[Constant]) ([]goPart, error) {
	places := make([]int, len(f.den))
	for i, pp := range f.den {
		var err error
		if places[i], err = w.enter(ctx, pp.prime); err != nil {
			return nil, err
		}
	}
	// Groups are the connected components of what is not apart.
	group := make([]int, len(places))
	for i := range group {
		group[i] = i
		for j := range i {
			if a, b := group[i], group[j]; a != b && !w.apart(places[i], places[j]) {
				for l := range i + 1 {
					if group[l] == max(a, b) {
						group[l] = min(a, b)
					}
				}
			}
		}
	}
	var out []goPart
	for g := range group {
		if !slices.Contains(group, g) {
			continue
		}
		keep := func(p algebra.Poly[Constant]) bool { return group[f.Denominator().find(p)] == g }
		parts, _, err := Split(ctx, algebra.Scalars[Constant](w.k), []Image[Constant]{f}, keep)
		if err != nil {
			return nil, err
		}
		if parts[0].IsZero() {
			continue
		}
		list, err := w.group(ctx, parts[0])
		if err != nil {
			return nil, err
		}
		out = append(out, list...)
	}
	return out, nil
}

// mostCascade bounds the order of what is evaluated together.
const mostCascade = 24

// group takes the share of a group apart.
func (w *goDecomposer) group(ctx context.Context, f Image[Constant]) ([]goPart, error) {
	if f.degree() > mostCascade {
		return nil, Errorf(OutsideClass, Pos{}, "Go source with symbols where %d rates may coincide with each other; up to %d are covered", f.degree(), mostCascade)
	}
	if first, err := w.enter(ctx, f.den[0].prime); err != nil {
		return nil, err
	} else if p := w.primes[first]; len(f.den) == 1 && p.number && p.degree > 1 {
		return w.numeric(f, first), nil
	}
	var order goOrder
	order.w, order.f = w, f
	for _, pp := range f.den {
		i, err := w.enter(ctx, pp.prime)
		if err != nil {
			return nil, err
		}
		order.left = append(order.left, goMultiple{i, pp.e})
	}
	// The first of equal orders starts with the latest primes, so that the
	// sequences of several images start alike.
	slices.SortFunc(order.left, func(a, b goMultiple) int { return b.prime - a.prime })
	if err := order.search(ctx); err != nil {
		return nil, err
	}
	part := goPart{kind: goDivided, seq: order.best.seq, coefs: order.best.coefs}
	slices.Reverse(part.seq)
	slices.Reverse(part.coefs)
	for _, i := range part.seq {
		if w.primes[i].degree > 1 {
			part.kind = goCascade
		}
	}
	if part.kind == goCascade && len(part.seq) == 1 && w.primes[part.seq[0]].degree == 2 {
		part.kind = goPair
	}
	return []goPart{part}, nil
}

// numeric returns the share of a prime without symbols: as one function of time
// where its numerator is free of symbols too, by powers of s otherwise.
func (w *goDecomposer) numeric(f Image[Constant], place int) []goPart {
	one := w.k.One()
	symbolic := false
	for _, c := range f.num.Coefs() {
		symbolic = symbolic || !w.k.IsNumber(c)
	}
	part := goPart{kind: goNumeric, seq: []int{place}}
	if !symbolic {
		part.exact, part.coefs = f, [][]Constant{{one}}
		return []goPart{part}
	}
	var out []goPart
	for i, c := range f.num.Coefs() {
		if !w.k.IsZero(c) {
			p := part
			p.exact, p.coefs = f.Denominator().Image(algebra.Monomial[Constant](w.k, one, i)), [][]Constant{{c}}
			out = append(out, p)
		}
	}
	return out
}

// goOrder searches for the order of the primes in which the numerator is
// shortest: q[0] is divided by first.
type goOrder struct {
	w     *goDecomposer
	f     Image[Constant]
	left  []goMultiple
	now   goExpansion
	best  goExpansion
	found bool
	all   bool // all orders are tried, not only the best next step
}

type goMultiple struct{ prime, e int }

// goExpansion is a numerator in the Newton basis of a sequence of primes, with
// the terms of either sign that it is written with.
type goExpansion struct {
	seq         []int
	coefs       [][]Constant
	plus, minus int
	divisors    int
}

// cost prefers short expansions and those whose terms have one sign: they are
// free of cancellation where the symbols are positive.
func (x goExpansion) cost() int { return x.plus + x.minus + 3*min(x.plus, x.minus) + x.divisors }

// mostOrders is the number of orders up to which all are tried.
const mostOrders = 150

func (o *goOrder) search(ctx context.Context) error {
	orders, n := 1.0, 0
	for _, m := range o.left {
		for i := range m.e {
			n++
			orders *= float64(n) / float64(i+1)
		}
	}
	o.all = orders <= mostOrders
	return o.step(ctx, o.f.num)
}

func (o *goOrder) step(ctx context.Context, num algebra.Poly[Constant]) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	if num.IsZero() || o.found && o.now.cost() >= o.best.cost() && o.all {
		if num.IsZero() && (!o.found || o.now.cost() < o.best.cost()) {
			o.found = true
			o.best = o.now
			// What remains divides nothing but has its place in the sequence.
			o.best.seq, o.best.coefs = slices.Clone(o.now.seq), slices.Clone(o.now.coefs)
			for _, m := range o.left {
				for range m.e {
					o.best.seq = append(o.best.seq, m.prime)
					o.best.coefs = append(o.best.coefs, nil)
				}
			}
		}
		return nil
	}
	type choice struct {
		i    int
		quo  algebra.Poly[Constant]
		next goExpansion
	}
	var choices []choice
	for i, m := range o.left {
		if m.e == 0 {
			continue
		}
		quo, next := o.divide(num, m.prime)
		choices = append(choices, choice{i, quo, next})
	}
	if !o.all {
		best := choices[0]
		for _, c := range choices[1:] {
			if c.next.cost() < best.next.cost() {
				best = c
			}
		}
		choices = []choice{best}
	}
	before := o.now
	for _, c := range choices {
		o.now = c.next
		o.left[c.i].e--
		err := o.step(ctx, c.quo)
		o.left[c.i].e++
		if err != nil {
			return err
		}
	}
	o.now = before
	return nil
}

// divide takes the remainder modulo a prime off the numerator.
func (o *goOrder) divide(num algebra.Poly[Constant], prime int) (algebra.Poly[Constant], goExpansion) {
	p := o.w.primes[prime]
	quo, rem := num.QuoRem(o.w.k, p.p)
	next := o.now
	next.seq = append(slices.Clone(next.seq), prime)
	var coefs []Constant
	if !rem.IsZero() {
		coefs = rem.Coefs()
	}
	next.coefs = append(slices.Clone(next.coefs), coefs)
	for _, c := range coefs {
		for _, t := range c.Numerator() {
			if t.Coef.Sign() < 0 {
				next.minus++
			} else {
				next.plus++
			}
		}
		next.divisors += max(0, len(c.Denominator())-1)
	}
	return quo, next
}
