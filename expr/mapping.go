package expr

import (
	"context"
	"errors"
	"math/big"
	"slices"

	"example.org/closedform/algebra"
)

// mapping takes the elements of a field into another one: symbols to given
// values or to the symbols of the same name, constants to what they are there.
type mapping struct {
	to     *Constants
	d      *display   // of the field mapped from; nil for Q
	images []Constant // of the variables of the display
}

// newMapping returns the mapping from one field, nil for Q, into another. The
// error may be a growth.
func newMapping(from, to *Constants, values map[string]Constant) (*mapping, error) {
	m := &mapping{to: to}
	if from == nil {
		return m, nil
	}
	m.d = from.shown.get(from)
	m.images = make([]Constant, len(m.d.vars))
	for i, f := range from.formals {
		switch f.kind {
		case symbolFormal:
			x, ok := values[f.name]
			if !ok {
				j := to.index(f.name)
				if j < 0 {
					return nil, &growth{to.with(formal{kind: symbolFormal, name: f.name})}
				}
				x = to.Variable(j)
			}
			m.images[m.d.images[i]] = x
		case piFormal:
			x, err := to.Lookup(Symbol{Name: "pi"})
			if err != nil {
				return nil, err
			}
			m.images[m.d.images[i]] = x
		}
	}
	first := len(m.d.vars) - len(from.generators)
	for i, g := range from.generators {
		var x Constant
		var err error
		if g.q == 0 {
			x, err = to.cosPi(g.angle, Pos{})
		} else {
			if x, err = m.apply(g.arg); err == nil {
				x, err = to.NthRoot(x, g.q, Pos{})
			}
		}
		if err != nil {
			return nil, err
		}
		m.images[first+i] = x
	}
	for i, f := range from.formals {
		switch f.kind {
		case expFormal:
			x, err := m.apply(f.arg)
			if err != nil {
				return nil, err
			}
			if m.images[m.d.images[i]], err = to.Exp(x, Pos{}); err != nil {
				return nil, err
			}
		case halfTangentFormal:
			x, err := m.apply(f.arg)
			if err != nil {
				return nil, err
			}
			at := m.d.images[i]
			if m.images[at], m.images[at+1], err = to.CosSin(x, Pos{}); err != nil {
				return nil, err
			}
		}
	}
	return m, nil
}

// apply maps x. It fails with algebra.ErrDivisionByZero where the image of a
// denominator is zero.
func (m *mapping) apply(x Constant) (Constant, error) {
	if r, ok := m.d.from.Rational(x); ok {
		return m.to.FromRat(r), nil
	}
	return m.d.to.Map(m.d.element(x), m.to.FunctionField, Constant{}, m.images)
}

// element maps an element of Q or of a field of constants.
func element[E any](m *mapping, x E) (Constant, error) {
	if r, ok := any(x).(algebra.Rat); ok {
		return m.to.FromRat(r), nil
	}
	return m.apply(any(x).(Constant))
}

// imageMapper maps images and keeps the factors of the primes that they share.
type imageMapper[E any] struct {
	m       *mapping
	factors map[*prime[E]][]primePower[Constant]
}

func (c *imageMapper[E]) poly(p algebra.Poly[E]) (algebra.Poly[Constant], error) {
	coefs := make([]Constant, p.Degree()+1)
	for i := range coefs {
		var err error
		if coefs[i], err = element(c.m, p.Coef(i)); err != nil {
			return algebra.Poly[Constant]{}, err
		}
	}
	return algebra.NewPoly[Constant](c.m.to, coefs...), nil
}

func (c *imageMapper[E]) image(ctx context.Context, f Image[E]) (Image[Constant], error) {
	out := Denominator[Constant]{k: c.m.to}
	num, err := c.poly(f.num)
	if err != nil {
		return Image[Constant]{}, err
	}
	for _, pp := range f.den {
		factors, ok := c.factors[pp.prime]
		if !ok {
			p, err := c.poly(pp.p)
			if err != nil {
				return Image[Constant]{}, err
			}
			list, err := c.m.to.FactorPoly(ctx, p)
			if err != nil {
				return Image[Constant]{}, err
			}
			factors = NewDenominator[Constant](c.m.to, list).pp
			c.factors[pp.prime] = factors
		}
		for _, q := range factors {
			q.e *= pp.e
			out = out.Mul(Denominator[Constant]{k: c.m.to, pp: []primePower[Constant]{q}})
		}
	}
	return out.Image(num), nil
}

// mapped returns f over another field.
func (f *overField[E]) mapped(ctx context.Context, to *Constants, m *mapping) (exact, error) {
	c := &imageMapper[E]{m: m, factors: map[*prime[E]][]primePower[Constant]{}}
	origin, err := element(m, f.origin)
	if err != nil {
		return nil, err
	}
	base, err := c.image(ctx, f.base)
	if err != nil {
		return nil, err
	}
	var free []FreeTerm[Constant]
	for _, t := range f.free {
		img, err := c.image(ctx, t.Image)
		if err != nil {
			return nil, err
		}
		free = append(free, FreeTerm[Constant]{t.Name, img})
	}
	return newOverField[Constant](to, origin, base, free), nil
}

// joined returns a field that holds two fields, nil standing for Q.
func joined(a, b *Constants) (*Constants, error) {
	if a == nil {
		a, b = b, a
	}
	if a == nil {
		a = NewConstants()
	}
	return Grow(a, func(k *Constants) error {
		_, err := newMapping(b, k, nil)
		return err
	})
}

// simplest returns f over Q if it has rational coefficients only, and without
// algebraic numbers if these cancel.
func (f *overField[E]) simplest(ctx context.Context) (exact, error) {
	c, ok := any(f.k).(*Constants)
	if !ok {
		return f, nil
	}
	g := any(f).(*overField[Constant])
	if c.Degree() > 1 {
		h, err := g.withoutRoot(ctx, c)
		if err != nil || h != exact(g) {
			return h, err
		}
	}
	origin, ok := c.Rational(g.origin)
	if !ok {
		return f, nil
	}
	images := g.images()
	out := make([]Image[algebra.Rat], len(images))
	for i, m := range images {
		num, ok := c.rationalPoly(m.num)
		if !ok {
			return f, nil
		}
		den, ok := c.rationalPoly(m.Denominator().Poly())
		if !ok {
			return f, nil
		}
		factors, err := algebra.Q.FactorPoly(ctx, den)
		if err != nil {
			return nil, err
		}
		out[i] = NewDenominator[algebra.Rat](algebra.Q, factors).Image(num)
	}
	var free []FreeTerm[algebra.Rat]
	for i, t := range g.free {
		free = append(free, FreeTerm[algebra.Rat]{t.Name, out[i+1]})
	}
	return newOverField[algebra.Rat](algebra.Q, origin, out[0], free), nil
}

// withoutRoot returns f over the field without algebraic numbers if it holds
// none, f itself otherwise.
func (f *overField[E]) withoutRoot(ctx context.Context, c *Constants) (exact, error) {
	g := any(f).(*overField[Constant])
	plain, ok := c.WithoutRoot()
	if !ok || g.origin.HasRoot() {
		return f, nil
	}
	over := func(p algebra.Poly[Constant]) (algebra.Poly[Constant], bool) {
		coefs := p.Coefs()
		for _, x := range coefs {
			if x.HasRoot() {
				return p, false
			}
		}
		return algebra.NewPoly[Constant](plain, coefs...), true
	}
	images := g.images()
	for i, m := range images {
		num, ok := over(m.num)
		if !ok {
			return f, nil
		}
		den, ok := over(m.Denominator().Poly())
		if !ok {
			return f, nil
		}
		factors, err := plain.FactorPoly(ctx, den)
		if err != nil {
			return nil, err
		}
		images[i] = NewDenominator[Constant](plain, factors).Image(num)
	}
	var free []FreeTerm[Constant]
	for i, t := range g.free {
		free = append(free, FreeTerm[Constant]{t.Name, images[i+1]})
	}
	return newOverField[Constant](plain, g.origin, images[0], free).simplest(ctx)
}

// rationalPoly returns a polynomial with rational coefficients over Q.
func (c *Constants) rationalPoly(p algebra.Poly[Constant]) (algebra.Poly[algebra.Rat], bool) {
	coefs := make([]algebra.Rat, p.Degree()+1)
	for i := range coefs {
		r, ok := c.Rational(p.Coef(i))
		if !ok {
			return algebra.Poly[algebra.Rat]{}, false
		}
		coefs[i] = r
	}
	return algebra.NewPoly[algebra.Rat](algebra.Q, coefs...), true
}

// With returns f with values for free constants and symbols; names that f does
// not contain are ignored. See [Function.Substitute].
func (f Function) With(values map[string]*big.Rat) (Function, error) {
	nodes := make(map[string]Node, len(values))
	for name, v := range values {
		if v == nil {
			return Function{}, Errorf(Syntax, Pos{}, "%s has the value nil", Quote(name))
		}
		nodes[name] = Num(algebra.RatFromBig(v))
	}
	return f.Substitute(context.Background(), nodes)
}

// Substitute returns f with values for free constants and symbols, numbers or
// expressions in other symbols. It goes through the canonical form and so is
// right where the written formula is not, as for two rates that become equal.
// Where a coefficient of the model has no value, the error says so.
func (f Function) Substitute(ctx context.Context, values map[string]Node) (out Function, err error) {
	defer catchLimit(&err)
	x := f.over()
	relevant := map[string]Node{}
	for _, list := range [][]string{x.constants(), x.parameters()} {
		for _, name := range list {
			if v, ok := values[name]; ok {
				relevant[name] = v
			}
		}
	}
	for name, v := range relevant {
		if v == nil {
			return f, Errorf(Syntax, Pos{}, "%s has the value nil", Quote(name))
		}
		if slices.Contains(Names(v), f.variable) {
			return f, Errorf(OutsideClass, Pos{}, "the value of %s depends on %s", Quote(name), f.variable)
		}
	}
	if len(relevant) == 0 {
		return f, nil
	}
	_, err = Grow(NewConstants(), func(k *Constants) error {
		s, err := NewSubstitution(x.field(), k, relevant)
		if err != nil {
			return err
		}
		y, err := x.mapped(ctx, k, s.m)
		if err != nil {
			return s.explain(err)
		}
		y = y.(*overField[Constant]).fix(s.values)
		y, err = y.simplest(ctx)
		out = f.with(y)
		return err
	})
	return out, wrapCancel(err)
}

// fix gives free constants values.
func (f *overField[E]) fix(values map[string]E) exact {
	base := f.base
	var free []FreeTerm[E]
	for _, t := range f.free {
		if v, ok := values[t.Name]; ok {
			base = base.Add(t.Image.Scale(v))
		} else {
			free = append(free, t)
		}
	}
	return newOverField(f.k, f.origin, base, free)
}

// Substitution is a mapping between fields of constants that gives symbols
// values.
type Substitution struct {
	m      *mapping
	values map[string]Constant
}

// NewSubstitution returns the substitution of the values, whose names are
// symbols of to, from one field, nil for Q, into another. The error may ask for
// a larger field; see [Grow].
func NewSubstitution(from, to *Constants, values map[string]Node) (*Substitution, error) {
	s := &Substitution{values: map[string]Constant{}}
	for name, n := range values {
		for _, inner := range namesIn(n, "") {
			if inner != "pi" && to.index(inner) < 0 {
				return nil, &growth{to.with(formal{kind: symbolFormal, name: inner})}
			}
		}
		env := Env[Constant]{K: to, Lookup: to.Lookup}
		x, err := env.Scalar(n)
		if err != nil {
			return nil, err
		}
		s.values[name] = x
	}
	var err error
	s.m, err = newMapping(from, to, s.values)
	return s, s.explain(err)
}

// Value returns the value of a name.
func (s *Substitution) Value(name string) (Constant, bool) {
	x, ok := s.values[name]
	return x, ok
}

// Field returns the field mapped to with the assumptions of the one mapped from.
// Values that contradict an assumption are an error.
func (s *Substitution) Field() (*Constants, error) {
	out := s.m.to
	if s.m.d == nil {
		return out, nil
	}
	for _, a := range s.m.d.from.assumed.list {
		x, err := s.m.apply(a.p)
		if err != nil {
			return nil, s.explain(err)
		}
		next, err := out.assuming(x, a.kind, Pos{})
		if err != nil {
			sign := map[assumptionKind]string{isPositive: ">", notNegative: ">=", notZero: "!="}[a.kind]
			return nil, Errorf(NeedsAssumption, Pos{}, "the values contradict the assumption %s %s 0", s.m.d.from.Node(a.p), sign)
		}
		if _, number := out.Rational(x); !number {
			out = next
		}
	}
	return out, nil
}

// IsRational tells whether the values of the names, where they are given, are
// rational numbers.
func (s *Substitution) IsRational(names []string) bool {
	for _, name := range names {
		if x, ok := s.values[name]; ok {
			if _, rational := s.m.to.Rational(x); !rational {
				return false
			}
		}
	}
	return true
}

// explain turns a division by zero into an *Error.
func (s *Substitution) explain(err error) error {
	if errors.Is(err, algebra.ErrDivisionByZero) {
		return Errorf(Singular, Pos{}, "a coefficient has no value there: its denominator vanishes")
	}
	return err
}

// SubstituteScalar maps an element.
func SubstituteScalar[E any](s *Substitution, x E) (Constant, error) {
	y, err := element(s.m, x)
	return y, s.explain(err)
}

// SubstituteImages maps images into the field k, to which to takes the elements.
func SubstituteImages[E, F any](ctx context.Context, s *Substitution, list []Image[E], k algebra.Scalars[F], to func(Constant) (F, bool)) ([]Image[F], error) {
	c := &imageMapper[E]{m: s.m, factors: map[*prime[E]][]primePower[Constant]{}}
	out := make([]Image[F], len(list))
	poly := func(p algebra.Poly[Constant]) (algebra.Poly[F], error) {
		coefs := make([]F, p.Degree()+1)
		for i := range coefs {
			var ok bool
			if coefs[i], ok = to(p.Coef(i)); !ok {
				return algebra.Poly[F]{}, Errorf(OutsideClass, Pos{}, "a number outside the field")
			}
		}
		return algebra.NewPoly[F](k, coefs...), nil
	}
	for i, f := range list {
		m, err := c.image(ctx, f)
		if err != nil {
			return nil, s.explain(err)
		}
		num, err := poly(m.num)
		if err != nil {
			return nil, err
		}
		den, err := poly(m.Denominator().Poly())
		if err != nil {
			return nil, err
		}
		factors, err := k.FactorPoly(ctx, den)
		if err != nil {
			return nil, err
		}
		out[i] = NewDenominator(k, factors).Image(num)
	}
	return out, nil
}

// MapElementary returns f over another field.
func MapElementary[E, F any](f Elementary[E], k algebra.Scalars[F], to func(E) (F, error)) (Elementary[F], error) {
	acc := newGather(k)
	for _, t := range f.terms {
		u := elementaryTerm[F]{n: t.n}
		for _, p := range []struct {
			from E
			to   *F
		}{{t.a, &u.a}, {t.b, &u.b}, {t.c, &u.c}, {t.s, &u.s}} {
			y, err := to(p.from)
			if err != nil {
				return Elementary[F]{}, err
			}
			*p.to = y
		}
		acc.add(u)
	}
	return acc.sum(), nil
}

// catchLimit, deferred, turns the panic of an operation on too large operands
// into an error of kind LimitExceeded.
func catchLimit(err *error) {
	if r := recover(); r != nil {
		e, ok := r.(*algebra.LimitError)
		if !ok {
			panic(r)
		}
		*err = &Error{Kind: LimitExceeded, Message: e.What, Cause: e}
	}
}
