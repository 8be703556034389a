package mpoly

import (
	"context"
	"math/big"
	"slices"
)

// modularProblem is a gcd to be found from images modulo primes. The
// polynomials are primitive over Z and have no monomial content, and vars are
// the variables either of them has.
type modularProblem struct {
	p, q  Poly
	vars  []int // vars[0] is x, the others are v_1, ..., v_k
	flip  bool  // x^deg p p(1/x) takes the place of p, x^deg q q(1/x) that of q
	gamma Poly  // gcd of the leading coefficients in x
	bound []int // bound[i] >= degree of the gcd in x_i
}

// chooseMain sets vars, flip and gamma. The best x has leading (or, from the
// other end, trailing) coefficients whose gcd is short, since that gcd is a
// factor of all that is interpolated.
func (m *modularProblem) chooseMain(ctx context.Context, used []int) error {
	var count [4][]int
	count[0], count[1] = m.p.endTerms()
	count[2], count[3] = m.q.endTerms()
	type choice struct{ terms, degree, i, end int }
	var best choice
	for _, i := range used {
		for end := range 2 {
			c := choice{min(count[end][i], count[2+end][i]), m.bound[i], i, end}
			if best.terms == 0 || c.terms < best.terms || c.terms == best.terms && c.degree > best.degree {
				best = c
			}
		}
	}
	m.flip = best.end == 1
	var err error
	m.gamma, err = GCD(ctx, m.p.endCoefficient(best.i, m.flip), m.q.endCoefficient(best.i, m.flip))
	if err != nil {
		return err
	}
	// High degrees come first, while there are few terms.
	m.vars = append(m.vars[:0], best.i)
	for _, i := range used {
		if i == best.i {
			continue
		}
		at := len(m.vars)
		for at > 1 && m.bound[m.vars[at-1]] < m.bound[i] {
			at--
		}
		m.vars = slices.Insert(m.vars, at, i)
	}
	return nil
}

// endTerms returns the numbers of terms of the leading and of the trailing
// coefficient, that of x_i^0, in each x_i.
func (p Poly) endTerms() (leading, trailing []int) {
	leading, trailing = make([]int, p.n), make([]int, p.n)
	w := wordsOf(p.n)
	for k, top := range p.maxExponents() {
		var high, low uint64 // a counter for each field
		flush := func() {
			for i := 4 * k; i < min(4*k+4, p.n); i++ {
				_, s := fieldOf(i)
				leading[i] += int(high >> s & 0xffff)
				trailing[i] += int(low >> s & 0xffff)
			}
			high, low = 0, 0
		}
		const ones = guards >> 15
		for t := k; t < len(p.exps); t += w {
			e := p.exps[t]
			// The guard of a field stays set unless the field is zero.
			high += (^((e ^ top | guards) - ones) & guards) >> 15
			low += (^((e | guards) - ones) & guards) >> 15
			if (high|low)&guards != 0 {
				flush()
			}
		}
		flush()
	}
	return leading, trailing
}

// endCoefficient returns the leading or the trailing coefficient in x_i.
func (p Poly) endCoefficient(i int, trailing bool) Poly {
	d := 0
	if !trailing {
		d = p.Degree(i)
	}
	b := newBuilder(p.n, 4)
	at, s := fieldOf(i)
	e := make([]uint64, wordsOf(p.n))
	for k := range p.Len() {
		copy(e, p.exp(k))
		if int(e[at]>>s&fieldMask) == d {
			e[at] -= uint64(d) << s
			b.addTerm(e, p, k)
		}
	}
	return b.poly()
}

// newImager returns the imager of the problem, without coefficients.
func (m *modularProblem) newImager(ctx context.Context) *imager {
	flipP, flipQ := 0, 0
	if m.flip {
		flipP, flipQ = m.p.Degree(m.vars[0]), m.q.Degree(m.vars[0])
	}
	im := &imager{ctx: ctx, p: newChain(m.p, m.vars, flipP), q: newChain(m.q, m.vars, flipQ)}
	if !m.gamma.IsConstant() {
		im.gamma = newChain(m.gamma, m.vars, 0)
	}
	im.dims = make([]int, len(m.vars))
	for j, i := range m.vars {
		im.dims[j] = m.bound[i]
		if j > 0 {
			im.dims[j] += m.gamma.Degree(i)
		}
	}
	size := im.p.degX + im.q.degX + 3
	im.a, im.b, im.c = make([]uint64, size), make([]uint64, size), make([]uint64, size)
	im.random = 1
	return im
}

// solve returns the gcd, primitive up to sign.
func (m *modularProblem) solve(ctx context.Context) (Poly, error) {
	im := m.newImager(ctx)
	for prime := 0; ; {
		s, res := m.firstImage(im, prime)
		prime++
		switch res {
		case imageCancelled:
			return Poly{}, ctx.Err()
		case imageFound:
		default:
			continue
		}
		if im.dims[0] == 0 {
			// The gcd has no x after all: p and q share a content only.
			return m.contentGCD(ctx, m.p, m.q)
		}
		m.bound[m.vars[0]] = im.dims[0]
		g, ok, err := m.lift(ctx, im, s, &prime)
		if ok || err != nil {
			return g, err
		}
	}
}

// lift finds the integers behind the coefficients of s from further primes,
// counted on in prime; ok is false when s turns out to lack monomials.
func (m *modularProblem) lift(ctx context.Context, im *imager, s *skeleton, prime *int) (g Poly, ok bool, err error) {
	values := newLifting(im.f, s.coef)
	changed, final := true, values.final
	for range m.primeLimit() {
		if final {
			// Values that only looked final get another chance.
			g, ok, err := m.prove(ctx, m.candidate(s, im.dims[0], values))
			if ok || err != nil || !changed {
				return g, ok, err
			}
		}
		im.load(m, *prime)
		*prime++
		c, res := im.again(s)
		switch res {
		case imageCancelled:
			return Poly{}, false, ctx.Err()
		case imageLower:
			return Poly{}, false, nil
		case imageFound:
			changed, final = values.add(im.f, c)
		}
	}
	return Poly{}, false, nil
}

// primeLimit returns a number of primes that is enough for any coefficient of
// h: a factor of degrees d_i of a polynomial has coefficients at most
// 2^(sum d_i) (number of terms)^(1/2) times larger.
//
// Source: Mahler, On some inequalities for polynomials in several variables, J.
// London Math. Soc. 37 (1962).
func (m *modularProblem) primeLimit() int {
	b := 128 + m.p.MaxBits() + m.gamma.MaxBits()
	for _, i := range m.vars {
		b += 2 * (m.p.Degree(i) + m.gamma.Degree(i))
	}
	return b/60 + 2
}

// load reduces the polynomials modulo the prime of the given number.
func (im *imager) load(m *modularProblem, prime int) {
	im.f = fieldAt(prime)
	im.p.load(im.f, m.p)
	im.q.load(im.f, m.q)
	if im.gamma != nil {
		im.gamma.load(im.f, m.gamma)
	} else {
		im.scale = im.f.coef(m.gamma, 0)
	}
	im.dense = make([]denseLevel, len(m.vars))
}

// firstImage returns an image modulo the prime of the given number, variable by
// variable.
func (m *modularProblem) firstImage(im *imager, prime int) (s *skeleton, res outcome) {
	im.load(m, prime)
	k := len(m.vars) - 1
	if im.monomials(k, denseLimit) <= max(4*(im.dims[0]+1), 32) {
		s, res = im.denseSkeleton(k)
		return s, res
	}
	alpha := make([]uint64, k+1)
	powers := make([][]uint64, k+1)
	for j := 1; j <= k; j++ {
		alpha[j] = im.random.next(im.f)
		powers[j] = make([]uint64, im.power(j)+1)
		im.f.powers(powers[j], alpha[j])
	}
	first := 1
	if im.monomials(1, denseLimit) == denseLimit {
		first = 0
	}
	for j := first; j <= k; j++ {
		if s != nil && im.dims[j] == 0 {
			continue
		}
		for i := k; i > j; i-- {
			im.evaluate(i, powers[i])
		}
		if s == nil || im.isDense(j-1, s) && im.monomials(j, denseLimit) < denseLimit {
			s, res = im.denseSkeleton(j)
		} else {
			s, res = im.extend(j, s, alpha[j])
		}
		if res != imageFound {
			return nil, res
		}
	}
	return s, imageFound
}

// denseLimit bounds the coefficients of an image of which all are interpolated.
const denseLimit = 1 << 22

// isDense reports whether further images at level j, of which s is one, are
// better found by interpolation of all monomials.
func (im *imager) isDense(j int, s *skeleton) bool {
	size := im.monomials(j, denseLimit)
	return size < denseLimit && size/(im.dims[0]+1) <= 2*s.widest()
}

// denseSkeleton returns the image at level j from interpolation.
func (im *imager) denseSkeleton(j int) (*skeleton, outcome) {
	h := make([]uint64, im.monomials(j, denseLimit))
	if res := im.interpolate(j, h); res != imageFound {
		return nil, res
	}
	return im.newSkeleton(j, h), imageFound
}

// again returns the coefficients of a further image with the monomials of s.
func (im *imager) again(s *skeleton) ([]uint64, outcome) {
	k := im.p.k
	if !im.isDense(k, s) {
		return im.values(k+1, s, [][]uint64{{im.f.one}})
	}
	h := make([]uint64, im.monomials(k, denseLimit))
	if res := im.interpolate(k, h); res != imageFound {
		return nil, res
	}
	c := make([]uint64, len(s.coef))
	for i := range c {
		at := 0
		for j := k; j >= 0; j-- {
			at = at*(im.dims[j]+1) + int(s.exps[i*s.stride+j])
		}
		c[i] = h[at]
	}
	return c, imageFound
}

// candidate returns the polynomial with the monomials of s and the coefficients
// found, without integer content.
func (m *modularProblem) candidate(s *skeleton, degX int, values *lifting) Poly {
	b := newBuilder(m.p.n, len(s.coef))
	e := make([]uint64, wordsOf(m.p.n))
	for i := range s.coef {
		clear(e)
		for j, v := range m.vars {
			d := int(s.exps[i*s.stride+j])
			if j == 0 && m.flip {
				d = degX - d
			}
			checkDegree(d)
			w, t := fieldOf(v)
			e[w] |= uint64(d) << t
		}
		values.appendTo(b, e, i)
	}
	h := b.sorted()
	return h.DivInt(h.Content())
}

// prove returns the gcd of p and q, primitive up to sign, when h, primitive
// over Z, is a polynomial free of x times a divisor of both p and q, and has the
// degree in x that bounds that of the gcd.
func (m *modularProblem) prove(ctx context.Context, h Poly) (g Poly, ok bool, err error) {
	if h.Degree(m.vars[0]) != m.bound[m.vars[0]] {
		return Poly{}, false, nil
	}
	if !reached(m.bound, h.maxExponents()) && !m.gamma.IsConstant() {
		c, err := GCDs(ctx, append(h.Coefficients(m.vars[0]), m.gamma))
		if err != nil {
			return Poly{}, false, err
		}
		if !c.IsConstant() {
			if h, ok = h.DivExact(c); !ok {
				return Poly{}, false, nil
			}
		}
	}
	overP, ok, err := divide(ctx, m.p, h)
	if !ok || err != nil {
		return Poly{}, false, err
	}
	overQ, ok, err := divide(ctx, m.q, h)
	if !ok || err != nil {
		return Poly{}, false, err
	}
	if reached(m.bound, h.maxExponents()) {
		return h, true, nil
	}
	// The cofactors may share a content: no more, as h has the full degree in x.
	c, err := m.contentGCD(ctx, overP, overQ)
	return h.Mul(c), true, err
}

// contentGCD returns the gcd of p and q given that it is free of x.
func (m *modularProblem) contentGCD(ctx context.Context, p, q Poly) (Poly, error) {
	return GCDs(ctx, append(p.Coefficients(m.vars[0]), q.Coefficients(m.vars[0])...))
}

// lifting holds integers known modulo a product of primes, as representatives
// of least absolute value.
type lifting struct {
	words   []int64 // while there is one prime
	values  []*big.Int
	modulus *big.Int
	final   bool
}

// liftMargin is the number of bits by which all values have to stay below half
// the modulus to look final.
const liftMargin = 8

// newLifting returns the integers with the given residues.
func newLifting(f *field, residues []uint64) *lifting {
	l := &lifting{words: make([]int64, len(residues)), modulus: new(big.Int).SetUint64(f.P)}
	var most uint64
	for i, x := range residues {
		l.words[i] = f.Lift(f.residue(x))
		most = max(most, magnitude(l.words[i]))
	}
	l.final = most < f.P>>(liftMargin+1)
	return l
}

// add joins the residues modulo a further prime and reports whether the values
// changed and whether they look final.
//
// Source: Knuth, The Art of Computer Programming 2, section 4.3.2 (Garner).
func (l *lifting) add(f *field, residues []uint64) (changed, final bool) {
	if l.values == nil {
		l.values = make([]*big.Int, len(l.words))
		for i, x := range l.words {
			l.values[i] = big.NewInt(x)
		}
	}
	inv := f.reciprocal(f.fromBig(l.modulus))
	var most uint64
	var t big.Int
	for i, x := range residues {
		d := f.Lift(f.residue(f.times(f.Sub(x, f.fromBig(l.values[i])), inv)))
		if d != 0 {
			most = max(most, magnitude(d))
			l.values[i].Add(l.values[i], t.Mul(l.modulus, t.SetInt64(d)))
		}
	}
	l.modulus.Mul(l.modulus, t.SetUint64(f.P))
	return most != 0, most < f.P>>(liftMargin+1)
}

// appendTo appends the i-th value as coefficient of e.
func (l *lifting) appendTo(b *builder, e []uint64, i int) {
	if l.values != nil {
		b.addBig(e, new(big.Int).Set(l.values[i]))
		return
	}
	b.addWord(e, l.words[i])
}
