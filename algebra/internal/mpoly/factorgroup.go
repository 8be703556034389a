package mpoly

import (
	"context"
	"math/big"
	"slices"

	"example.org/closedform/algebra/internal/intpoly"
)

// groupLift collects, over several primes, the factors that belong to groups of
// local factors, with known leading coefficients in x.
type groupLift struct {
	w       *wangLift
	groups  [][]int
	leads   []Poly
	tables  []*termTable // of leads
	excess  *big.Int     // prod leads^mult / leading coefficient = excess / content
	content *big.Int
	modulus *big.Int
	terms   []crtTerms
	same    bool // the last prime changed nothing
	primes  int
}

// crtTerms is a polynomial in x, y_1, ..., y_n known modulo a product of
// primes: rows in ascending lexicographic order with coefficients of least
// absolute value, as words while there is one prime.
type crtTerms struct {
	row   [][]uint16
	word  []int64
	value []*big.Int
}

func newGroupLift(w *wangLift, groups [][]int, leads []Poly) *groupLift {
	b := &groupLift{w: w, groups: groups, leads: leads, modulus: big.NewInt(1)}
	b.content = w.lead.content
	b.excess = big.NewInt(1)
	for s, l := range leads {
		b.tables = append(b.tables, newTermTable(l, w.order, true))
		for range b.mult(s) {
			b.excess.Mul(b.excess, l.Content())
		}
	}
	b.terms = make([]crtTerms, len(groups))
	return b
}

func (b *groupLift) mult(s int) int { return b.w.image[b.groups[s][0]].Mult }

// modulusBits returns a number of bits that is enough for the coefficients of
// all factors times the integers in excess, with their signs: the product of
// the heights of the factors of p is at most 2^d times the height of p, d the
// sum of its degrees.
//
// Source: Bombieri and Gubler, Heights in Diophantine Geometry, lemma 1.6.11
// (Gelfond).
func (b *groupLift) modulusBits() int {
	n := b.w.p.MaxBits() + 2
	for _, d := range b.w.degrees {
		n += d
	}
	for _, l := range b.leads {
		n += l.Content().BitLen()
	}
	return n
}

// stable reports whether the coefficients look final: unchanged by the last
// prime, or well below the only one.
func (b *groupLift) stable() bool {
	if b.primes != 1 {
		return b.same
	}
	const limit = 1 << 60
	for _, t := range b.terms {
		for _, c := range t.word {
			if c > limit || c < -limit {
				return false
			}
		}
	}
	return true
}

// addPrime lifts the groups modulo the prime of a lifted line; ok is false when
// that fails.
func (b *groupLift) addPrime(ctx context.Context, r *lineFactors) (ok bool, err error) {
	w, f := b.w, r.line.f
	n := r.degree + 1
	rows := make([][][]uint64, len(b.groups))
	for s, group := range b.groups {
		t := b.tables[s]
		lead, err := r.line.restrict(ctx, t, t.coefficients(f), t.degrees(), min(t.lineDegree(), r.degree))
		if err != nil {
			return false, err
		}
		if lead[0][0] == 0 {
			return false, nil
		}
		rows[s] = r.scaled(ctx, lead[0], r.product(ctx, group, n), n)
	}
	var residues [][]sparseTerm
	if len(w.order) == 2 {
		residues = b.translated(ctx, r, rows)
	} else if residues, err = b.sparse(ctx, r, rows); residues == nil || err != nil {
		return false, err
	}
	if err := ctx.Err(); err != nil {
		return false, err
	}
	b.combine(f, residues)
	return true, nil
}

// sparseTerm is a term modulo P.
type sparseTerm struct {
	row []uint16
	c   uint64
}

// translated returns the terms for the case of one variable beside x, when the
// line is all there is.
func (b *groupLift) translated(ctx context.Context, r *lineFactors, rows [][][]uint64) [][]sparseTerm {
	f := r.line.f
	terms := make([][]sparseTerm, len(rows))
	back := f.Neg(r.line.point[1])
	for s, g := range rows {
		for i, row := range g[:len(g)-1] {
			row = trimmed(row)
			f.translate(ctx, row, back)
			for k, c := range row {
				if c != 0 {
					terms[s] = append(terms[s], sparseTerm{[]uint16{uint16(i), uint16(k)}, c})
				}
			}
		}
	}
	return terms
}

// sparse returns the terms by sparse lifting from a point of the line, nil for
// bad luck.
func (b *groupLift) sparse(ctx context.Context, r *lineFactors, rows [][][]uint64) ([][]sparseTerm, error) {
	w, f := b.w, r.line.f
	t := w.rng.next(f)
	l := &sparseLift{f: f, rng: w.rng, point: r.line.at(t), degrees: w.degrees}
	scale := f.times(f.fromBig(b.excess), f.reciprocal(f.fromBig(b.content)))
	c := w.table.coefficients(f)
	scaleBy(f, c, scale)
	l.p = levels(f, w.table, c, w.degrees, l.point)
	first := make([][]uint64, len(rows))
	for s, g := range rows {
		first[s] = make([]uint64, len(g))
		for i, row := range g {
			first[s][i] = f.evaluate(row, t)
		}
		table := b.tables[s]
		l.lead = append(l.lead, levels(f, table, table.coefficients(f), table.degrees(), l.point))
		l.mult = append(l.mult, b.mult(s))
	}
	known, err := l.run(ctx, first)
	if known == nil || err != nil {
		return nil, err
	}
	terms := make([][]sparseTerm, len(known))
	for s, k := range known {
		for i := range k.block {
			block := &k.block[i]
			for at, c := range block.c {
				row := append([]uint16{uint16(i)}, block.row(at)...)
				terms[s] = append(terms[s], sparseTerm{row, c})
			}
		}
		slices.SortFunc(terms[s], func(a, b sparseTerm) int { return slices.Compare(a.row, b.row) })
	}
	return terms, nil
}

// combine joins the terms modulo a new prime with those known by Chinese
// remaindering.
func (b *groupLift) combine(f *field, terms [][]sparseTerm) {
	b.primes++
	b.same = true
	if b.primes == 1 {
		b.same = false
		b.modulus.SetUint64(f.P)
		for s, list := range terms {
			t := &b.terms[s]
			for _, x := range list {
				t.row = append(t.row, x.row)
				t.word = append(t.word, f.Lift(f.residue(x.c)))
			}
		}
		return
	}
	inverse := f.reciprocal(f.fromBig(b.modulus))
	next := new(big.Int).Mul(b.modulus, new(big.Int).SetUint64(f.P))
	for s := range terms {
		b.terms[s] = b.join(f, &b.terms[s], terms[s], inverse)
	}
	b.modulus = next
}

// join returns the terms that are those of t modulo the modulus and those of
// list modulo P, given the inverse of the modulus modulo P.
func (b *groupLift) join(f *field, t *crtTerms, list []sparseTerm, inverse uint64) crtTerms {
	if t.value == nil {
		for _, c := range t.word {
			t.value = append(t.value, big.NewInt(c))
		}
	}
	var r crtTerms
	for i, k := 0, 0; i < len(t.row) || k < len(list); {
		order := 1
		switch {
		case k == len(list):
			order = -1
		case i < len(t.row):
			order = slices.Compare(t.row[i], list[k].row)
		}
		v, c := new(big.Int), uint64(0)
		var row []uint16
		if order <= 0 {
			v, row = t.value[i], t.row[i]
			i++
		}
		if order >= 0 {
			c, row = list[k].c, list[k].row
			k++
		}
		d := f.Lift(f.residue(f.times(f.Sub(c, f.fromBig(v)), inverse)))
		if d != 0 {
			b.same = false
			step := new(big.Int).Mul(b.modulus, big.NewInt(d))
			v = step.Add(step, v)
		}
		if v.Sign() != 0 {
			r.row = append(r.row, row)
			r.value = append(r.value, v)
		}
	}
	return r
}

// factors returns the primitive parts of the collected polynomials if their
// images at the point are the products of the local factors in the groups and
// their product with multiplicities is p, up to the sign, else nil.
func (b *groupLift) factors(ctx context.Context) ([]Factor, error) {
	rest := b.w.p
	var factors []Factor
	for s := range b.groups {
		g := b.polynomial(s)
		if !b.hasImage(g, s) {
			return nil, nil
		}
		for range b.mult(s) {
			q, ok, err := divide(ctx, rest, g)
			if !ok || err != nil {
				return nil, err
			}
			rest = q
		}
		factors = append(factors, Factor{g, b.mult(s)})
	}
	if !rest.IsConstant() {
		return nil, nil
	}
	return factors, nil
}

// hasImage reports whether the image of g at the point is, up to a constant, the
// product of the local factors in group s: then the refuted subsets prove that
// g is irreducible.
func (b *groupLift) hasImage(g Poly, s int) bool {
	w := b.w
	t := newTermTable(g, w.order, false)
	_, image := intpoly.New(t.integerImage(t.degrees(), w.point)...).Primitive()
	product := intpoly.New(big.NewInt(1))
	for _, i := range b.groups[s] {
		product = intpoly.Mul(product, w.image[i].P)
	}
	return slices.EqualFunc(image, product, func(x, y *big.Int) bool { return x.Cmp(y) == 0 })
}

// polynomial returns the primitive part of the collected polynomial s.
func (b *groupLift) polynomial(s int) Poly {
	w, t, lead := b.w, b.terms[s], b.leads[s]
	n := w.p.n
	sum := newBuilder(n, len(t.row)+lead.Len())
	e := make([]uint64, wordsOf(n))
	for i, row := range t.row {
		clear(e)
		for c, v := range w.order {
			at, shift := fieldOf(v)
			e[at] |= uint64(row[c]) << shift
		}
		if t.value != nil {
			sum.addBig(e, t.value[i])
		} else {
			sum.addWord(e, t.word[i])
		}
	}
	d := 0
	for _, i := range b.groups[s] {
		d += w.image[i].P.Degree()
	}
	at, shift := fieldOf(w.order[0])
	for i := range lead.Len() {
		copy(e, lead.exp(i))
		e[at] |= uint64(d) << shift
		sum.addTerm(e, lead, i)
	}
	_, g := sum.sorted().splitContent()
	return g
}
