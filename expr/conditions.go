package expr

import (
	"context"
	"slices"

	"example.org/closedform/algebra"
)

// Conditions collects what must not vanish: irreducible expressions in the
// symbols of a field and in cosines, sines and roots as they are written, without
// duplicates and without those that the assumptions of the field exclude.
type Conditions struct {
	k       *Constants
	factors []algebra.Fraction       // in the field of the display
	simple  []algebra.Poly[Constant] // polynomials whose roots must be distinct
	signs   []Constant               // what must not be negative
}

// NewConditions returns an empty list over a field, nil for Q.
func NewConditions(k *Constants) *Conditions { return &Conditions{k: k} }

// ImposeSigns enters what the square roots of the field take not to be negative.
func (l *Conditions) ImposeSigns() {
	if l.k != nil {
		l.signs = l.k.implied
	}
}

// Exclude enters what makes x vanish, if anything does.
func (l *Conditions) Exclude(ctx context.Context, x Constant) error {
	if l.k.IsNumber(x) {
		return nil
	}
	d := l.k.shown.get(l.k)
	num, _ := d.to.Parts(d.element(l.k.normalised(x)))
	return l.exclude(ctx, d, num)
}

// ExcludeDenominator enters what makes the denominator of x vanish.
func (l *Conditions) ExcludeDenominator(ctx context.Context, x Constant) error {
	if err := ctx.Err(); err != nil || l.k.IsNumber(x) {
		return err
	}
	d := l.k.shown.get(l.k)
	if !x.HasRoot() {
		// The numerator, which may be long, has a say only beside cosines and sines.
		if den := d.denominator(x); !d.isTrigonometric(den) {
			return l.exclude(ctx, d, den)
		}
	}
	_, den := d.to.Parts(d.element(x))
	return l.exclude(ctx, d, den)
}

func (l *Conditions) exclude(ctx context.Context, d *display, p algebra.Fraction) error {
	_, factors, err := d.to.Factors(ctx, p)
	if err != nil {
		return err
	}
	for _, f := range factors {
		x, err := d.to.Map(f.Base, l.k.FunctionField, Constant{}, d.values())
		if err != nil {
			return err
		}
		// In tan(b/2) the case b = pi does not show.
		if (d.isTrigonometric(f.Base) || !l.k.NotZero(x)) && !l.has(d, f.Base) {
			l.factors = append(l.factors, f.Base)
		}
	}
	return nil
}

func (l *Conditions) has(d *display, p algebra.Fraction) bool {
	return slices.ContainsFunc(l.factors, func(q algebra.Fraction) bool { return d.to.Equal(p, q) })
}

// normalised returns the multiple of x by a number of the field whose leading
// coefficient, as a polynomial in the variables, is rational.
func (c *Constants) normalised(x Constant) Constant {
	if !x.HasRoot() {
		return x
	}
	if _, symbolic := c.Surd(); symbolic {
		return x
	}
	var lead []algebra.Term
	for _, t := range x.Numerator() {
		order := -1
		if lead != nil {
			order = slices.Compare(lead[0].Exp[1:], t.Exp[1:])
		}
		if order < 0 {
			lead = nil
		}
		if order <= 0 {
			lead = append(lead, t)
		}
	}
	for i, t := range lead {
		lead[i].Exp = make([]int, len(t.Exp))
		lead[i].Exp[0] = t.Exp[0]
	}
	return c.quotient(x, c.FromTerms(lead))
}

// mostDiscriminant bounds the degree and the terms of a polynomial whose
// discriminant is taken, and shortCondition the terms of its factors as
// conditions.
const (
	mostDiscriminant = 4
	mostCoefficients = 16
	shortCondition   = 4
)

// excludeRepeated enters the repeated roots of a polynomial: the factors of its
// discriminant where these are short, the polynomial itself otherwise.
func (l *Conditions) excludeRepeated(ctx context.Context, p algebra.Poly[Constant]) error {
	symbolic, size := false, 0
	for i := range p.Degree() + 1 {
		symbolic = symbolic || !l.k.IsNumber(p.Coef(i))
		size += p.Coef(i).Size()
	}
	if !symbolic || slices.ContainsFunc(l.simple, p.Equal) {
		return nil
	}
	if isBinomial(l.k, p) { // s^n - a has repeated roots for a = 0 only
		return l.Exclude(ctx, p.Coef(0))
	}
	if p.Degree() <= mostDiscriminant && size <= mostCoefficients {
		of := NewConditions(l.k)
		if err := of.Exclude(ctx, resultant[Constant](l.k, p, p.Derivative())); err != nil {
			return err
		}
		long := func(x algebra.Fraction) bool { return len(x.Numerator()) > shortCondition }
		if !slices.ContainsFunc(of.factors, long) {
			*l = *l.Join(of)
			return nil
		}
	}
	l.simple = append(l.simple, p)
	return nil
}

// isBinomial tells whether p = s^n + c.
func isBinomial(k *Constants, p algebra.Poly[Constant]) bool {
	for i := 1; i < p.Degree(); i++ {
		if !k.IsZero(p.Coef(i)) {
			return false
		}
	}
	return true
}

// Join returns the conditions of both lists, which are over the same field.
func (l *Conditions) Join(m *Conditions) *Conditions {
	if l.k == nil {
		return m
	}
	out := l.Without(m)
	out.signs = l.signs
	out.factors = append(slices.Clone(m.factors), out.factors...)
	out.simple = append(slices.Clone(m.simple), out.simple...)
	return out
}

// Broken returns a condition that a substitution violates, "" if there is none.
func (l *Conditions) Broken(s *Substitution) (string, error) {
	for _, p := range l.factors {
		x, err := l.k.shown.get(l.k).to.Map(p, s.m.to.FunctionField, Constant{}, s.m.images)
		if err != nil {
			return "", err
		}
		if s.m.to.IsZero(x) {
			r := l.k.unequal(p)
			return r.String(), nil
		}
	}
	for _, p := range l.signs {
		x, err := SubstituteScalar(s, p)
		if err != nil {
			return "", err
		}
		if sign, ok := s.m.to.Sign(x); ok && sign < 0 {
			return l.k.Node(p).String() + " >= 0", nil
		}
	}
	return "", nil
}

// SolveFor solves an equation for one of the symbols in which it is linear: the
// one that stands alone on a side, or else the first of the list whose
// coefficient is a number, or the first at all.
func SolveFor(eq Relation, symbols []string) (name string, value Node, err error) {
	best := ""
	_, err = Grow(NewConstants(symbols...), func(k *Constants) error {
		env := Env[Constant]{K: k, Lookup: k.Lookup}
		left, err := env.Scalar(eq.Left)
		if err != nil {
			return err
		}
		right, err := env.Scalar(eq.Right)
		if err != nil {
			return err
		}
		x := k.Sub(left, right)
		num, _ := k.Parts(x)
		alone := ""
		for _, side := range []Node{eq.Right, eq.Left} {
			if s, ok := side.(Symbol); ok && slices.Contains(symbols, s.Name) {
				alone = s.Name
			}
		}
		for i, f := range k.formals {
			if f.kind != symbolFormal || alone != "" && f.name != alone {
				continue
			}
			slope, rest, ok := k.linearIn(num, i)
			if !ok {
				continue
			}
			_, number := k.Rational(slope)
			if best != "" && !number {
				continue
			}
			best = f.name
			value = k.Node(k.quotient(k.Neg(rest), slope))
			if number {
				break
			}
		}
		if best == "" {
			return Errorf(OutsideClass, eq.Pos, "%s is not linear in a symbol of the response", Quote(eq.String()))
		}
		return nil
	})
	return best, value, err
}

// linearIn returns slope and rest with p = slope x + rest, x the i-th variable,
// neither of which holds x.
func (c *Constants) linearIn(p Constant, i int) (slope, rest Constant, ok bool) {
	var above, below []algebra.Term
	for _, t := range p.Numerator() {
		switch t.Exp[i+1] {
		case 0:
			below = append(below, t)
		case 1:
			t.Exp = slices.Clone(t.Exp)
			t.Exp[i+1] = 0
			above = append(above, t)
		default:
			return slope, rest, false
		}
	}
	slope, rest = c.FromTerms(above), c.FromTerms(below)
	for _, f := range c.formals {
		if f.arg.Size() > 0 && c.Uses(f.arg, i) {
			return slope, rest, false
		}
	}
	return slope, rest, len(above) > 0
}

// Without returns the conditions that the list m, over the same field, does not
// have.
func (l *Conditions) Without(m *Conditions) *Conditions {
	if l.k == nil || m.k == nil {
		return l
	}
	d := l.k.shown.get(l.k)
	out := &Conditions{k: l.k}
	if len(m.signs) == 0 {
		out.signs = l.signs
	}
	for _, p := range l.factors {
		if !m.has(d, p) {
			out.factors = append(out.factors, p)
		}
	}
	for _, p := range l.simple {
		if !slices.ContainsFunc(m.simple, p.Equal) {
			out.simple = append(out.simple, p)
		}
	}
	return out
}

// Strings writes the conditions: "k1 != k2", "k != 0".
func (l *Conditions) Strings() []string {
	var out []string
	signed := map[string]bool{} // not negative, and not 0 either
	for _, p := range l.signs {
		signed[Relation{Left: l.k.Node(p), Right: Int(0), Op: "!="}.String()] = false
	}
	for _, p := range l.factors {
		s := l.k.unequal(p).String()
		if _, ok := signed[s]; ok {
			signed[s] = true
			continue
		}
		out = append(out, s)
	}
	for _, p := range l.simple {
		w := presenter[Constant]{k: l.k, style: l.k}
		p = p.Scale(w.inverse(w.Content(p.Coefs()...)))
		out = append(out, "the roots of "+w.poly(p, Sym(l.k.FreeName("s", "z"))).String()+" are distinct")
	}
	for _, p := range l.signs {
		n := l.k.Node(p)
		op := ">="
		if signed[Relation{Left: n, Right: Int(0), Op: "!="}.String()] {
			op = ">"
		}
		out = append(out, Relation{Left: n, Right: Int(0), Op: op}.String())
	}
	slices.Sort(out)
	return out
}

// unequal writes that p does not vanish: x != y where p is a difference of two
// terms, p != 0 otherwise.
func (c *Constants) unequal(p algebra.Fraction) Relation {
	n := c.shown.get(c).write(p)
	if neg, ok := n.(Neg); ok {
		n = neg.X
	}
	if s, ok := n.(Sum); ok && len(s.Terms) == 2 {
		left, right := s.Terms[0], Negate(s.Terms[1])
		if neg, ok := left.(Neg); ok {
			left, right = right, neg.X
			if neg, ok := left.(Neg); ok {
				left, right = neg.X, Negate(right)
			}
		}
		if _, name := left.(Symbol); name || !isNegated(right) {
			return Relation{Left: left, Right: right, Op: "!="}
		}
	}
	return Relation{Left: n, Right: Int(0), Op: "!="}
}

// Conditions returns what the written form of f divides by: the cases in which
// it does not hold, although the function it stands for may have a value. They
// are found in the coefficients of the exponentials, in lowest terms.
func (f Function) Conditions(ctx context.Context) (out *Conditions, err error) {
	defer catchLimit(&err)
	out = NewConditions(f.over().field())
	return out, wrapCancel(f.over().exclude(ctx, out))
}

func (f *overField[E]) exclude(ctx context.Context, l *Conditions) error {
	g, ok := any(f).(*overField[Constant])
	if !ok {
		return nil
	}
	for _, m := range g.images() {
		if err := m.exclude(ctx, l); err != nil {
			return err
		}
	}
	return nil
}

// exclude enters what the written form of an image over constants divides by.
func (f Image[E]) exclude(ctx context.Context, l *Conditions) error {
	m := any(f).(Image[Constant])
	k := l.k
	for i, pp := range m.den {
		if err := ctx.Err(); err != nil {
			return err
		}
		if pp.p.Degree() > 2 {
			w := presenter[Constant]{k: k, style: k}
			c, ok := w.chainOf(pp.p)
			if _, q, even := w.squares(pp.p); even && !ok {
				c, ok = w.chainOf(q)
			}
			if ok { // a + 2b cos(alpha): distinct unless b vanishes
				if err := l.Exclude(ctx, c.b); err != nil {
					return err
				}
			} else if err := l.excludeRepeated(ctx, pp.p); err != nil {
				return err
			}
			for j, other := range m.den {
				if j != i {
					if err := l.Exclude(ctx, resultant(k, pp.p, other.p)); err != nil {
						return err
					}
				}
			}
			continue
		}
		part := m.local(i)
		var written []Constant
		if pp.p.Degree() == 1 {
			for _, c := range part.c {
				written = append(written, coef[Constant](k, c, 0))
			}
		} else {
			q := presenter[Constant]{k: k, style: k}.quadraticPart(part)
			written = append(q.a.Coefs(), q.b.Coefs()...)
		}
		for _, x := range written {
			if err := l.ExcludeDenominator(ctx, x); err != nil {
				return err
			}
		}
	}
	return nil
}

// resultant returns the product of q over the roots of the monic polynomial p:
// the determinant of the multiplication by q modulo p.
func resultant[E any](k algebra.Scalars[E], p, q algebra.Poly[E]) E {
	n := p.Degree()
	columns := make([]algebra.Poly[E], n)
	columns[0] = q.Rem(k, p)
	for j := 1; j < n; j++ {
		columns[j] = columns[j-1].ShiftUp(1).Rem(k, p)
	}
	m := algebra.MatrixFromFunc[E](k, n, n, func(i, j int) E { return coef[E](k, columns[j], i) })
	chi, err := algebra.CharPoly(context.Background(), m)
	if err != nil {
		panic(err) // the context does not end
	}
	d := chi.Coef(0)
	if n%2 == 1 {
		d = k.Neg(d)
	}
	return d
}
