package expr

import (
	"context"
	"math"
	"math/big"
	"math/cmplx"
	"slices"
	"sort"

	"example.org/closedform/algebra"
)

// Compile returns the functions as one program in float64. Exponentials, sines and
// cosines are shared. Free constants and symbols must have values; a constant
// beyond the range of float64 is an error of kind LimitExceeded. It panics when the
// variables, origins or fields of the functions differ.
//
// Rates are joined in order of their distances to a tree of groups. A group whose
// terms cancel by a factor of 2^10 or more gets a Taylor series around its mean c,
//
//	sum of z t^k e^(Lt) = e^(ct) sum over q of t^q b(q),  b(q) = sum of z (L - c)^(q-k)/(q-k)!
//
// for |t| up to about 1/max|L - c|, with b(q) rounded once from its exact value: no
// terms cancel. It is the Taylor method for divided differences of the exponential
// (A. McCurdy, K. C. Ng, B. N. Parlett, Accurate computation of divided differences
// of the exponential function, Math. Comp. 43, 1984, section 4).
func Compile(ctx context.Context, fs ...Function) (c *Compiled, err error) {
	defer catchLimit(&err)
	for _, f := range fs {
		if err := f.closed(); err != nil {
			return nil, err
		}
	}
	switch {
	case len(fs) == 0:
		return &Compiled{}, nil
	case fs[0].over().field() == nil:
		c, err = compile[algebra.Rat](ctx, fs)
	default:
		c, err = compile[Constant](ctx, fs)
	}
	return c, wrapCancel(err)
}

// compiler holds the constants of the program in the making.
type compiler[E any] struct {
	ctx    context.Context
	k      algebra.Scalars[E]
	images []Image[E]
	cache  expansions[E]
	prec   uint // at which all constants were certain
	rates  []compilerRate
	terms  [][]compilerTerm // of each image, as in expansion
	out    *Compiled
}

// compilerRate is a rate, rounded; of a pair, the one that the expansion lists.
type compilerRate struct {
	re, reLow, im, imLow float64
	done                 bool
}

// compilerTerm is the rounded coefficients of t^k e^(re t) cos(im t) and of t^k
// e^(re t) sin(im t).
type compilerTerm struct {
	rate     int
	cos, sin []float64
	done     bool
}

func compile[E any](ctx context.Context, fs []Function) (*Compiled, error) {
	c := compiler[E]{ctx: ctx, out: &Compiled{n: len(fs)}}
	first := fs[0].over().(*overField[E])
	c.k = first.k
	for _, f := range fs {
		x, ok := f.over().(*overField[E])
		if !ok || f.variable != fs[0].variable || !first.sameOrigin(x) {
			panic("expr: program of functions in different times or over different fields")
		}
		c.images = append(c.images, x.base)
	}
	if err := c.round(); err != nil {
		return nil, err
	}
	if !c.k.IsZero(first.origin) {
		ok := false
		for prec := uint(128); !ok; prec *= 2 {
			if prec > mostPrecision {
				return nil, errRounding
			}
			c.out.origin, c.out.originLow, ok = roundTwice(c.k.Enclose(first.origin, prec), prec)
		}
		if err := finite([]float64{c.out.origin}); err != nil {
			return nil, err
		}
	}
	g := c.tree()
	if err := c.plan(g); err != nil {
		return nil, err
	}
	c.emit(g)
	return c.out, nil
}

// roundTwice returns the float64 nearest to the number in the ball, and one near
// to the rest, to 2^-106 of the number together.
func roundTwice(b algebra.Ball, prec uint) (hi, lo float64, ok bool) {
	if hi, ok = roundBall(b, 0, prec); !ok || hi == 0 || math.IsInf(hi, 0) {
		return hi, 0, ok
	}
	rest := b.Sub(algebra.BallFromFloat(big.NewFloat(hi)), prec)
	if r, _ := rest.Rad().Float64(); r > 0x1p-112*math.Abs(hi) {
		return hi, 0, false
	}
	if !rest.ContainsZero() {
		lo, _ = rest.Mid().Float64()
	}
	return hi, lo, true
}

// round rounds all rates and coefficients, raising the precision until every one
// is certain.
func (c *compiler[E]) round() error {
	for c.prec = 128; c.prec <= mostPrecision; c.prec *= 2 {
		x, err := c.cache.get(c.ctx, c.k, c.images, c.prec)
		if err != nil {
			return err
		}
		if c.rates == nil {
			c.rates = make([]compilerRate, len(x.rates))
			if err := c.exactTerms(x); err != nil {
				return err
			}
		}
		all := true
		for i, r := range x.rates {
			s := &c.rates[i]
			if s.done {
				continue
			}
			var okRe, okIm bool
			s.re, s.reLow, okRe = roundTwice(r.at.Re, c.prec)
			s.im, s.imLow, okIm = roundTwice(r.at.Im, c.prec)
			s.done = okRe && okIm
			all = all && s.done
			if err := finite([]float64{s.re, s.im}); err != nil {
				return err
			}
		}
		for i := range c.terms {
			for j := range c.terms[i] {
				t := &c.terms[i][j]
				if !t.done {
					t.roundTo(x.terms[i][j].c, x.rates[t.rate].paired, c.prec)
				}
				all = all && t.done
				if err := finite(append(t.cos, t.sin...)); err != nil {
					return err
				}
			}
		}
		if all {
			return nil
		}
	}
	return errRounding
}

// exactTerms lists the terms, with the coefficients of rates in the field, which
// are exact.
func (c *compiler[E]) exactTerms(x *expansion) error {
	g := goWriter[E]{k: c.k}
	c.terms = make([][]compilerTerm, len(c.images))
	for i, f := range c.images {
		c.terms[i] = make([]compilerTerm, len(x.terms[i]))
		for j, s := range x.terms[i] {
			c.terms[i][j].rate = s.rate
		}
		next := 0
		for d, pp := range f.den {
			roots, err := pp.rootSet(c.ctx, c.k)
			if err != nil {
				return err
			}
			if pp.p.Degree() > 1 {
				for r := range roots.Len() {
					if roots.Conjugate(r) >= r {
						next++
					}
				}
				continue
			}
			t := &c.terms[i][next]
			next++
			for _, a := range f.local(d).c {
				y, err := g.float(coef[E](c.k, a, 0))
				if err != nil {
					return err
				}
				t.cos = append(t.cos, y)
			}
			t.done = true
		}
	}
	return nil
}

// roundTo rounds the coefficients: those of a pair are those of twice the real
// part of c e^(Lt).
func (t *compilerTerm) roundTo(c []algebra.ComplexBall, paired bool, prec uint) {
	t.cos, t.sin, t.done = nil, nil, true
	for _, z := range c {
		double := int64(0)
		if paired {
			double = 1
			v, ok := roundBall(z.Im, 1, prec)
			t.sin, t.done = append(t.sin, -v+0), t.done && ok
		}
		u, ok := roundBall(z.Re, double, prec)
		t.cos, t.done = append(t.cos, u), t.done && ok
	}
}

// rateGroup is a node of the tree of rates, joined by the distance gap.
type rateGroup struct {
	rates    []int
	children []*rateGroup
	gap      float64
	series   *rateSeries
}

// at returns the rate in the upper half plane.
func (r compilerRate) at() complex128 { return complex(r.re, math.Abs(r.im)) }

// tree joins rates in order of their distances (single linkage, by Kruskal's
// algorithm) and returns the root.
func (c *compiler[E]) tree() *rateGroup {
	type link struct {
		a, b int
		gap  float64
	}
	var links []link
	groups := make([]*rateGroup, len(c.rates)) // of each rate
	for a := range c.rates {
		groups[a] = &rateGroup{rates: []int{a}}
		for b := range a {
			links = append(links, link{a, b, cmplx.Abs(c.rates[a].at() - c.rates[b].at())})
		}
	}
	sort.SliceStable(links, func(i, j int) bool { return links[i].gap < links[j].gap })
	for _, l := range links {
		x, y := groups[l.b], groups[l.a]
		if x == y {
			continue
		}
		joined := &rateGroup{rates: slices.Sorted(slices.Values(append(slices.Clone(x.rates), y.rates...))), children: []*rateGroup{x, y}, gap: l.gap}
		for _, r := range joined.rates {
			groups[r] = joined
		}
	}
	if len(groups) == 0 {
		return &rateGroup{}
	}
	return groups[0]
}

// emit writes the program of a group.
func (c *compiler[E]) emit(g *rateGroup) {
	at := len(c.out.parts)
	if g.series != nil {
		c.out.parts = append(c.out.parts, compiledPart{until: 1 / g.series.scale, near: c.chunk(g.series.block(c.out))})
	}
	var plain []columns
	for _, rate := range g.plainRates() {
		plain = append(plain, c.columns(rate))
	}
	if len(plain) > 0 {
		c.out.parts = append(c.out.parts, compiledPart{until: -1, far: c.chunk(plain...)})
	}
	for _, child := range g.seriesGroups() {
		c.emit(child)
	}
	if g.series != nil {
		c.out.parts[at].skip = len(c.out.parts)
	}
}

// plainRates returns the rates below g that are in no group below g with a series.
func (g *rateGroup) plainRates() []int {
	var out []int
	if len(g.children) == 0 {
		out = append(out, g.rates...)
	}
	for _, child := range g.children {
		if child.series == nil {
			out = append(out, child.plainRates()...)
		}
	}
	slices.Sort(out)
	return out
}

// seriesGroups returns the largest groups below g with a series.
func (g *rateGroup) seriesGroups() []*rateGroup {
	var out []*rateGroup
	for _, child := range g.children {
		if child.series != nil {
			out = append(out, child)
		} else {
			out = append(out, child.seriesGroups()...)
		}
	}
	return out
}

// columns is a block with the coefficients of each function.
type columns struct {
	block    compiledBlock
	cos, sin [][]float64
}

// columns returns the terms of a rate.
func (c *compiler[E]) columns(rate int) columns {
	r := c.rates[rate]
	out := columns{compiledBlock{re: r.re, reLow: r.reLow, im: r.im, imLow: r.imLow, scale: 1}, make([][]float64, c.out.n), make([][]float64, c.out.n)}
	for i := range c.terms {
		for _, t := range c.terms[i] {
			if t.rate == rate {
				out.cos[i], out.sin[i] = t.cos, t.sin
			}
		}
	}
	return out
}

// chunk writes the blocks and the tiles of their columns.
func (c *compiler[E]) chunk(list ...columns) compiledChunk {
	out := compiledChunk{from: len(c.out.blocks), tile: len(c.out.tiles)}
	var all [][]float64 // each column's coefficients
	for _, l := range list {
		b := l.block
		for i := range l.cos {
			b.powers = max(b.powers, len(l.cos[i]), len(l.sin[i]))
		}
		c.out.blocks = append(c.out.blocks, b)
		for k := range b.powers {
			for _, x := range [][][]float64{l.cos, l.sin} {
				column := make([]float64, c.out.n)
				for i := range column {
					if k < len(x[i]) {
						column[i] = x[i][k]
					}
				}
				all = append(all, column)
				if b.im == 0 {
					break
				}
			}
		}
	}
	out.to = len(c.out.blocks)
	for len(all)%4 != 0 {
		all = append(all, make([]float64, c.out.n))
	}
	for ; len(all) > 0; all = all[4:] {
		c.tile(all[:4])
	}
	return out
}

// tile writes the constants of four columns.
func (c *compiler[E]) tile(four [][]float64) {
	t := compiledTile{from: len(c.out.runs)}
	open := false
	for i := range c.out.n {
		if four[0][i] == 0 && four[1][i] == 0 && four[2][i] == 0 && four[3][i] == 0 {
			open = false
			continue
		}
		if !open {
			c.out.runs = append(c.out.runs, compiledRun{row: i, at: len(c.out.coefs)})
			open = true
		}
		c.out.runs[len(c.out.runs)-1].n++
		c.out.coefs = append(c.out.coefs, [4]float64{four[0][i], four[1][i], four[2][i], four[3][i]})
	}
	t.to = len(c.out.runs)
	c.out.tiles = append(c.out.tiles, t)
}
