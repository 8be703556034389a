package algebra

import (
	"context"
	"fmt"
	"slices"

	"example.org/closedform/algebra/internal/mpoly"
)

// CharPoly returns det(s I - m). Rows that share a denominator are freed of it
// first, so that Berkowitz's algorithm meets polynomials where it can.
func (f *FunctionField) CharPoly(ctx context.Context, m Matrix[Fraction]) (Poly[Fraction], error) {
	return CharPoly(ctx, m)
}

// integral returns p times a common denominator as a polynomial in s, the root
// and the variables, s first.
func (f *FunctionField) integral(p Poly[Fraction]) mpoly.Poly {
	den := mpoly.ConstantWord(f.size(), 1)
	for _, c := range p.c {
		if !c.den.IsZero() {
			den = mul(den, quo(c.den, gcd(den, c.den)))
		}
	}
	to := make([]int, f.size())
	for i := range to {
		to[i] = i + 1
	}
	coefs := make([]mpoly.Poly, len(p.c))
	for i, c := range p.c {
		num := c.num
		if !den.IsOne() {
			num = mul(num, quo(den, f.denominator(c)))
		}
		coefs[i] = num.Rename(f.size()+1, to)
	}
	return mpoly.FromCoefficients(0, coefs)
}

// monic returns the monic multiple of a polynomial in s, the root and the
// variables.
func (f *FunctionField) monic(p mpoly.Poly) Poly[Fraction] {
	to := make([]int, f.size()+1)
	for i := range f.size() {
		to[i+1] = i
	}
	coefs := p.Coefficients(0)
	out := make([]Fraction, len(coefs))
	for i, c := range coefs {
		out[i] = Fraction{num: c.Rename(f.size(), to)}
	}
	return ownPoly[Fraction](f, out).Monic(f)
}

// gcdPoly returns the monic greatest common divisor: by modular evaluation of
// all variables, or Euclid's algorithm where the root a occurs.
func (f *FunctionField) gcdPoly(p, q Poly[Fraction]) Poly[Fraction] {
	if p.IsZero() {
		return q.Monic(f)
	}
	if q.IsZero() {
		return p.Monic(f)
	}
	a, b := f.integral(p), f.integral(q)
	if a.Uses(1) || b.Uses(1) {
		if !f.surd && f.coprimeModulo(p, q) {
			return Constant[Fraction](f, f.One())
		}
		return euclid[Fraction](f, p, q)
	}
	return f.monic(gcd(a, b))
}

// FactorPoly returns the monic irreducible factors of p over the field with
// their multiplicities, in a fixed order: the factors of an integer polynomial
// in all variables, and by Trager's method over the root a (B. Trager, Algebraic
// factoring and rational function integration, SYMSAC 1976).
func (f *FunctionField) FactorPoly(ctx context.Context, p Poly[Fraction]) ([]Factor[Fraction], error) {
	if p.Degree() < 1 {
		return nil, nil
	}
	q := f.integral(p)
	if q.Uses(1) {
		var out []Factor[Fraction]
		for _, part := range SquareFree[Fraction](f, p) {
			factors, err := f.trager(ctx, part.P)
			if err != nil {
				return nil, err
			}
			for _, g := range factors {
				out = append(out, Factor[Fraction]{P: g, Mult: part.Mult})
			}
		}
		f.sortFactors(out)
		return out, nil
	}
	_, factors, err := mpoly.FactorZ(ctx, q)
	if err != nil {
		return nil, err
	}
	var out []Factor[Fraction]
	for _, g := range factors {
		d := g.P.Degree(0)
		if d == 0 {
			continue
		}
		h := f.monic(g.P)
		split := []Poly[Fraction]{h}
		// An irreducible polynomial stays so over a root of coprime degree.
		if gcdInt(d, f.degree) > 1 {
			if split, err = f.trager(ctx, h); err != nil {
				return nil, err
			}
		}
		for _, h := range split {
			out = append(out, Factor[Fraction]{P: h, Mult: g.Mult})
		}
	}
	f.sortFactors(out)
	return out, nil
}

func gcdInt(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// sortFactors orders factors by degree, then by their coefficients from the
// highest on.
func (f *FunctionField) sortFactors(factors []Factor[Fraction]) {
	slices.SortStableFunc(factors, func(x, y Factor[Fraction]) int {
		if d := x.P.Degree() - y.P.Degree(); d != 0 {
			return d
		}
		for i := x.P.Degree(); i >= 0; i-- {
			if c := f.Compare(x.P.Coef(i), y.P.Coef(i)); c != 0 {
				return c
			}
		}
		return 0
	})
}

// Compare is a total order of the elements, by size for rational numbers.
func (f *FunctionField) Compare(x, y Fraction) int {
	a, ok := f.Rational(x)
	b, too := f.Rational(y)
	if ok && too {
		return a.Compare(b)
	}
	if c := f.denominator(x).Compare(f.denominator(y)); c != 0 {
		return c
	}
	return x.num.Compare(y.num)
}

// trager returns the monic irreducible factors of a square-free monic p. The
// norm of p(s - c a), for a c that leaves it square-free, has the factors'
// norms as its factors.
func (f *FunctionField) trager(ctx context.Context, p Poly[Fraction]) ([]Poly[Fraction], error) {
	if p.Degree() == 1 {
		return []Poly[Fraction]{p}, nil
	}
	if simple, err := f.irreducibleAt(ctx, p); err != nil || simple {
		return []Poly[Fraction]{p}, err
	}
	for c := int64(0); ; c = nextShift(c) {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		shift := f.Mul(f.FromInt(c), f.RootElement())
		norm, err := f.norm(ctx, p.Translate(f.Neg(shift)))
		if err != nil {
			return nil, err
		}
		_, factors, err := mpoly.FactorZ(ctx, norm)
		if err != nil {
			return nil, err
		}
		squareFree := true
		var norms []mpoly.Poly
		for _, g := range factors {
			if g.P.Degree(0) > 0 {
				squareFree = squareFree && g.Mult == 1
				norms = append(norms, g.P)
			}
		}
		if !squareFree {
			continue
		}
		if len(norms) == 1 {
			return []Poly[Fraction]{p}, nil
		}
		var out []Poly[Fraction]
		for _, n := range norms {
			out = append(out, euclid[Fraction](f, p, f.monic(n).Translate(shift)))
		}
		return out, nil
	}
}

// nextShift runs through 0, 1, -1, 2, -2, ...
func nextShift(c int64) int64 {
	if c > 0 {
		return -c
	}
	return 1 - c
}

// norm returns a multiple by a polynomial in the variables of the norm over the
// field without a of p, which is the determinant of the multiplication by p.
func (f *FunctionField) norm(ctx context.Context, p Poly[Fraction]) (mpoly.Poly, error) {
	// The field with s as one more variable knows the same root.
	ext := &FunctionField{names: append(append([]string(nil), f.names...), ""), degree: f.degree}
	to := make([]int, f.size())
	for i := range to {
		to[i] = i
	}
	ext.mod = f.mod.Rename(ext.size(), to)
	back := make([]int, ext.size()) // s is the last variable of ext, and first here
	for i := range f.size() {
		back[i] = i + 1
	}
	back[f.size()] = 0
	forth := make([]int, ext.size())
	for i, j := range back {
		forth[j] = i
	}
	q := f.integral(p).Rename(ext.size(), forth)
	chi, err := ext.multiplication(ctx, q)
	if err != nil {
		return mpoly.Poly{}, err
	}
	return chi.Coef(0).Rename(ext.size(), back), nil
}

// Roots isolates the complex roots of a square-free polynomial. It fails where
// a coefficient is not a number.
func (f *FunctionField) Roots(ctx context.Context, p Poly[Fraction]) (*RootSet, error) {
	rational := make([]Rat, len(p.c))
	for i, c := range p.c {
		r, ok := f.Rational(c)
		if !ok {
			rational = nil
			break
		}
		rational[i] = r
	}
	if rational != nil {
		return Q.Roots(ctx, NewPoly[Rat](Q, rational...))
	}
	for _, c := range p.c {
		if !f.IsNumber(c) {
			return nil, fmt.Errorf("algebra: the roots of a polynomial with the coefficient %s, which is not a number", f.Text(c))
		}
	}
	return NewRootSetOf(ctx, p.Degree(), func(ctx context.Context, prec uint) ([]Ball, error) {
		balls := make([]Ball, len(p.c))
		for i, c := range p.c {
			balls[i] = f.Enclose(c, prec)
		}
		return balls, ctx.Err()
	})
}

// Term is the term Coef a^Exp[0] x1^Exp[1] ... xn^Exp[n] of a polynomial in the
// root and the variables of a [FunctionField].
type Term = mpoly.Term

// Numerator returns the terms of N, in falling lexicographic order.
func (x Fraction) Numerator() []Term { return terms(x.num) }

// Denominator returns the terms of D, nil where D = 1.
func (x Fraction) Denominator() []Term { return terms(x.den) }

func terms(p mpoly.Poly) []Term {
	var out []Term
	for t := range p.Terms() {
		out = append(out, t)
	}
	return out
}

// FromTerms returns the sum of the terms. Exponents of a missing root must be 0.
func (f *FunctionField) FromTerms(terms []Term) Fraction {
	return Fraction{num: f.reduce(mpoly.FromTerms(f.size(), terms))}
}

// Uses tells whether the i-th variable occurs in x.
func (f *FunctionField) Uses(x Fraction, i int) bool { return x.num.Uses(i+1) || x.den.Uses(i+1) }

// DegreeIn returns the greater of the degrees of N and D in the i-th variable.
func (f *FunctionField) DegreeIn(x Fraction, i int) int {
	return max(x.num.Degree(i+1), x.den.Degree(i+1))
}

// Size returns the number of terms of N and D together.
func (x Fraction) Size() int { return x.num.Len() + x.den.Len() }

// BitLen returns about the bits of all integers in x together.
func (x Fraction) BitLen() int {
	return x.num.Len()*x.num.MaxBits() + x.den.Len()*x.den.MaxBits()
}

// Parts returns N and D as elements of the field.
func (f *FunctionField) Parts(x Fraction) (num, den Fraction) {
	return Fraction{num: x.num}, Fraction{num: f.denominator(x)}
}

// Content returns the greatest c, without a sign, such that the x/c are
// coprime: the gcd of the numerators over the lowest common denominator; 1 when
// all are 0. It is free of the root a.
func (f *FunctionField) Content(x ...Fraction) Fraction {
	var num mpoly.Poly
	den := mpoly.ConstantWord(f.size(), 1)
	for _, y := range x {
		if y.num.IsZero() {
			continue
		}
		for _, c := range y.num.Coefficients(0) {
			if !num.IsOne() && !c.IsZero() {
				num = gcd(num, c)
			}
		}
		if !y.den.IsZero() && !y.den.Equal(den) {
			den = mul(den, quo(y.den, gcd(den, y.den)))
		}
	}
	if num.IsZero() {
		return f.One()
	}
	return signed(num, den)
}

// Power is a power of an irreducible polynomial in the variables.
type Power struct {
	Base Fraction // primitive over Z, the leading coefficient positive
	Exp  int
}

// Factors returns x, which is free of the root a, as a rational number times
// powers of irreducible polynomials, those of the denominator with negative
// exponents. Zero has no factors.
func (f *FunctionField) Factors(ctx context.Context, x Fraction) (Rat, []Power, error) {
	c, out, err := f.factors(ctx, x.num, 1)
	if err != nil || x.den.IsZero() {
		return c, out, err
	}
	d, below, err := f.factors(ctx, x.den, -1)
	if err != nil {
		return c, nil, err
	}
	return c.Quo(d), append(out, below...), nil
}

func (f *FunctionField) factors(ctx context.Context, p mpoly.Poly, sign int) (Rat, []Power, error) {
	if p.IsZero() {
		return Rat{}, nil, nil
	}
	content, factors, err := mpoly.FactorZ(ctx, p)
	if err != nil {
		return Rat{}, nil, err
	}
	var out []Power
	for _, g := range factors {
		out = append(out, Power{Base: Fraction{num: g.P}, Exp: sign * g.Mult})
	}
	return RatFromBigInt(content), out, nil
}

// Cancelled returns x as a quotient without common factors over Q(a): the
// denominator of x itself is free of a, and may share such factors with the
// numerator. Elements of more than most terms are returned as they are.
func (f *FunctionField) Cancelled(x Fraction, most int) (num, den Fraction) {
	num, den = f.Parts(x)
	if !x.num.Uses(0) || x.Size() > most {
		return num, den
	}
	for i := range f.names {
		if !den.num.Uses(i + 1) {
			continue
		}
		p, q := f.inVariable(num, i), f.inVariable(den, i)
		g := euclid[Fraction](f, p, q)
		if g.Degree() < 1 {
			continue
		}
		p, _ = p.DivExact(f, g)
		q, _ = q.DivExact(f, g)
		a, ok := f.fromVariable(p, i)
		b, too := f.fromVariable(q, i)
		if ok && too {
			num, den = a, b
		}
	}
	return num, den
}

// inVariable returns a polynomial as one in the i-th variable.
func (f *FunctionField) inVariable(x Fraction, i int) Poly[Fraction] {
	parts := x.num.Coefficients(i + 1)
	c := make([]Fraction, len(parts))
	for j, p := range parts {
		c[j] = Fraction{num: p}
	}
	return ownPoly[Fraction](f, c)
}

// fromVariable is the inverse of inVariable, where all coefficients are
// polynomials up to a number.
func (f *FunctionField) fromVariable(p Poly[Fraction], i int) (Fraction, bool) {
	v := f.Variable(i)
	sum := f.Zero()
	for j := p.Degree(); j >= 0; j-- {
		sum = f.Add(f.Mul(sum, v), p.Coef(j))
	}
	return sum, sum.den.IsZero() || sum.den.IsConstant()
}

// Map returns x with the element root of the field g in place of a and values[i]
// in place of the i-th variable. It fails with ErrDivisionByZero where the
// denominator of x vanishes.
func (f *FunctionField) Map(x Fraction, g *FunctionField, root Fraction, values []Fraction) (Fraction, error) {
	m := newMapping(g, append([]Fraction{root}, values...))
	num := m.apply(x.num)
	if x.den.IsZero() {
		return num, nil
	}
	inv, err := g.Inv(m.apply(x.den))
	if err != nil {
		return Fraction{}, err
	}
	return g.Mul(num, inv), nil
}

// mapping substitutes elements of a field for the variables of polynomials.
type mapping struct {
	g      *FunctionField
	powers [][]Fraction
}

func newMapping(g *FunctionField, values []Fraction) *mapping {
	m := &mapping{g: g}
	for _, v := range values {
		m.powers = append(m.powers, []Fraction{g.One(), v})
	}
	return m
}

func (m *mapping) apply(p mpoly.Poly) Fraction {
	var parts []Fraction
	for t := range p.Terms() {
		y := m.g.FromRat(RatFromBigInt(t.Coef))
		for i, e := range t.Exp {
			if e == 0 {
				continue
			}
			for len(m.powers[i]) <= e {
				m.powers[i] = append(m.powers[i], m.g.Mul(m.powers[i][len(m.powers[i])-1], m.powers[i][1]))
			}
			y = m.g.Mul(y, m.powers[i][e])
		}
		parts = append(parts, y)
	}
	return m.g.Sum(parts)
}
