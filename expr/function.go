package expr

import (
	"context"
	"math/big"
	"slices"

	"example.org/closedform/algebra"
)

// Function is an exponential polynomial, an immutable function of one real
// variable held in its canonical form over a field: of rational numbers, or of
// numbers and symbols ([Constants]). It may be held in the local time t - t0 of
// an origin t0, and it may contain free constants, in which it is linear.
// Methods may be called concurrently.
type Function struct {
	variable string
	x        exact
}

// exact is what a Function is over some field; implemented by *overField.
type exact interface {
	field() *Constants // nil for Q
	isZero() bool
	constants() []string
	originNode() Node
	initial() Node
	// add and equal expect the same field and time; sameOrigin the same field.
	add(exact) exact
	equal(exact) bool
	sameOrigin(exact) bool
	scale(algebra.Rat) exact
	derivative() exact
	integral() exact
	timesT() exact
	timesExp(algebra.Rat) exact
	written(ctx context.Context, variable string, form Form) (Node, error)
	parameters() []string
	exclude(ctx context.Context, l *Conditions) error
	remarks() []string
	decimal(ctx context.Context, variable string, form Form) (Node, error)
	simplest(ctx context.Context) (exact, error)
	mapped(ctx context.Context, to *Constants, m *mapping) (exact, error)
	digits(ctx context.Context, t *big.Rat, digits int) (string, error)
	enclose(ctx context.Context, t *big.Rat, prec uint) (algebra.Ball, error)
}

// FreeTerm is the multiple of one free constant in a Function.
type FreeTerm[E any] struct {
	Name  string
	Image Image[E]
}

// overField is a function over a field.
type overField[E any] struct {
	k      algebra.Scalars[E]
	origin E
	base   Image[E]
	free   []FreeTerm[E]
	cache  *expansions[E]
}

// NewFunction returns the function base + sum of the free constants times their
// images, in the variable minus origin, over the field k, which is
// [algebra.Q] or of type [*Constants].
func NewFunction[E any](k algebra.Scalars[E], variable string, origin E, base Image[E], free ...FreeTerm[E]) Function {
	return Function{variable, newOverField(k, origin, base, free)}
}

func newOverField[E any](k algebra.Scalars[E], origin E, base Image[E], free []FreeTerm[E]) *overField[E] {
	if base.k == nil {
		base = ZeroImage(k)
	}
	f := &overField[E]{k: k, origin: origin, base: base, cache: &expansions[E]{}}
	for _, t := range free {
		if !t.Image.IsZero() {
			f.free = append(f.free, t)
		}
	}
	return f
}

// ParseFunction reads a function of t from text, such as "t^2*exp(-3*t)" or
// "sin(2*t + phi)": a sum of products of polynomials, exponentials, sines and
// cosines, and sums over named roots. Names without a meaning are symbols.
func ParseFunction(src string, limits Limits) (Function, error) {
	n, err := Parse(src, limits)
	if err != nil {
		return Function{}, err
	}
	return FunctionOf(n, "t", limits)
}

// FunctionOf converts a tree to a function of the variable. Where sums over named
// roots hold exp(z*(t - c)), the function is held in the local time of c.
func FunctionOf(n Node, variable string, limits Limits) (f Function, err error) {
	defer catchLimit(&err)
	if g, ok := sumByNumbers(n, variable, limits); ok {
		return g, nil
	}
	f, err = functionOf(n, variable, nil, limits)
	if err == nil || !hasRootSum(n) {
		return f, err
	}
	if origin := originIn(n, variable); origin != nil {
		if g, e := functionOf(n, variable, origin, limits); e == nil {
			return g, nil
		}
	}
	return f, err
}

// functionOf reads a tree in the local time of an origin, nil for 0.
func functionOf(n Node, variable string, origin Node, limits Limits) (Function, error) {
	x, err := readFunction[algebra.Rat](algebra.Q, NoNames, n, variable, origin, limits)
	if err == nil {
		return Function{variable, x}, nil
	}
	if !isIrrational(err) {
		return Function{}, err
	}
	var f Function
	_, err = Grow(NewConstants(namesIn(n, variable)...), func(k *Constants) error {
		x, err := readFunction[Constant](k, k.Lookup, n, variable, origin, limits)
		if err != nil {
			return err
		}
		y, err := x.simplest(context.Background())
		f = Function{variable, y}
		return err
	})
	return f, err
}

func readFunction[E any](k algebra.Scalars[E], lookup func(Symbol) (E, error), n Node, variable string, origin Node, limits Limits) (*overField[E], error) {
	env := Env[E]{K: k, Lookup: lookup, Limits: limits, Origin: k.Zero()}
	if origin != nil {
		var err error
		if env.Origin, err = env.Scalar(origin); err != nil {
			return nil, err
		}
		env.Local = true
	}
	env.Variable = variable
	img, err := env.image(n)
	if err != nil {
		return nil, err
	}
	return newOverField(k, env.Origin, img, nil), nil
}

// originIn returns c where a sum over roots holds the time as a sum t - c, nil if
// none does.
func originIn(n Node, variable string) Node {
	var origin Node
	var visit func(n Node, inside bool)
	visit = func(n Node, inside bool) {
		if _, ok := n.(RootSum); ok {
			inside = true
		}
		if s, ok := n.(Sum); ok && inside && origin == nil {
			if t, ok := s.Terms[0].(Symbol); ok && t.Name == variable && len(s.Terms) == 2 {
				origin = Negate(s.Terms[1])
			}
		}
		Children(n, func(c Node) bool {
			visit(c, inside)
			return true
		})
	}
	visit(n, false)
	return origin
}

// NoNames is the Lookup of an Env over Q: no name has a rational value.
func NoNames(s Symbol) (algebra.Rat, error) {
	return algebra.Rat{}, irrational(s.Pos(), "%s", s.Name)
}

// Names returns the names in a tree, in order of appearance.
func Names(n Node) []string { return namesIn(n, "") }

// namesIn returns the names in a tree but that of the variable and of the roots
// of sums, in order of appearance.
func namesIn(n Node, variable string) []string {
	var names []string
	bound := map[string]bool{variable: true}
	var visit func(n Node)
	visit = func(n Node) {
		switch v := n.(type) {
		case Symbol:
			if !bound[v.Name] {
				bound[v.Name] = true
				names = append(names, v.Name)
			}
		case RootSum:
			if !bound[v.Var] {
				bound[v.Var] = true
				defer delete(bound, v.Var)
			}
		}
		Children(n, func(c Node) bool {
			visit(c)
			return true
		})
	}
	visit(n)
	return names
}

// over returns f in its field, the zero function over Q for the zero value.
func (f Function) over() exact {
	if f.x == nil {
		return newOverField[algebra.Rat](algebra.Q, algebra.Rat{}, Image[algebra.Rat]{}, nil)
	}
	return f.x
}

func (f Function) with(x exact) Function { return Function{f.variable, x} }

// Variable returns the name of the independent variable.
func (f Function) Variable() string { return f.variable }

// Origin returns t0, the origin of the local time.
func (f Function) Origin() Node { return f.over().originNode() }

// Constants returns the names of the free constants in f.
func (f Function) Constants() []string { return f.over().constants() }

// Parameters returns the names of the symbols in f.
func (f Function) Parameters() []string { return f.over().parameters() }

// IsZero tells whether f is the zero function.
func (f Function) IsZero() bool { return f.over().isZero() }

// Initial returns f at its origin, without the free constants.
func (f Function) Initial() Node { return f.over().initial() }

// Add returns f + g. Functions over different fields are taken to one that holds
// both, functions with different origins to the origin 0. It panics when the
// variables differ, where a sum over named roots has another origin than 0, and where
// the algebraic numbers of both are beyond the limit.
func (f Function) Add(g Function) Function {
	x, y, ok := f.together(g)
	if f.variable != g.variable || !ok {
		panic("expr: sum of functions in different times")
	}
	return f.with(x.add(y))
}

// Scale returns x f.
func (f Function) Scale(x *big.Rat) Function { return f.with(f.over().scale(algebra.RatFromBig(x))) }

// Sub returns f - g; see Add.
func (f Function) Sub(g Function) Function { return f.Add(g.Scale(big.NewRat(-1, 1))) }

// Equal tells whether f and g are the same function, in the same variable. Sums
// over named roots are compared in the same origin only. It panics where the algebraic
// numbers of both are beyond the limit together, and neither symbols nor values tell
// the functions apart.
func (f Function) Equal(g Function) bool {
	if f.variable != g.variable || f.differs(g) {
		return false
	}
	x, y, ok := f.together(g)
	return f.variable == g.variable && ok && x.equal(y)
}

// together returns f and g over one field and with one origin, if they have that.
func (f Function) together(g Function) (x, y exact, ok bool) {
	x, y = f.overOneField(g)
	if x.sameOrigin(y) {
		return x, y, true
	}
	if len(x.constants())+len(y.constants()) > 0 {
		return x, y, false
	}
	a, err := functionOf(f.Node(), f.variable, nil, Limits{})
	if err != nil {
		return x, y, false
	}
	b, err := functionOf(g.Node(), g.variable, nil, Limits{})
	if err != nil {
		return x, y, false
	}
	x, y = a.overOneField(b)
	return x, y, true
}

// differs tells whether functions that no common field holds are told apart by their
// symbols or values.
func (f Function) differs(g Function) bool {
	a, b := f.over().field(), g.over().field()
	if a == nil || b == nil || a == b {
		return false
	}
	if _, err := joined(a, b); err == nil {
		return false
	}
	if !slices.Equal(f.Parameters(), g.Parameters()) || !slices.Equal(f.Constants(), g.Constants()) {
		return true
	}
	const prec = 256
	x, err := f.Enclose(context.Background(), big.NewRat(1, 3), prec)
	if err != nil {
		return false
	}
	y, err := g.Enclose(context.Background(), big.NewRat(1, 3), prec)
	return err == nil && !x.Overlaps(y)
}

// overOneField returns f and g over one field.
func (f Function) overOneField(g Function) (x, y exact) {
	x, y = f.over(), g.over()
	a, b := x.field(), y.field()
	if a == b || a != nil && b != nil && a.FunctionField == b.FunctionField {
		return x, y
	}
	k, err := joined(a, b)
	if err == nil {
		ctx := context.Background()
		if x, err = embed(ctx, x, k); err == nil {
			y, err = embed(ctx, y, k)
		}
	}
	if err != nil {
		panic(err) // the algebraic numbers of both together are beyond the limit
	}
	return x, y
}

// embed returns x over a field that holds its own.
func embed(ctx context.Context, x exact, k *Constants) (exact, error) {
	m, err := newMapping(x.field(), k, nil)
	if err != nil {
		return nil, err
	}
	return x.mapped(ctx, k, m)
}

// Derivative returns df/dt.
func (f Function) Derivative() Function { return f.with(f.over().derivative()) }

// Integral returns the integral of f from the origin to t.
func (f Function) Integral() Function { return f.with(f.over().integral()) }

// TimesT returns t f(t).
func (f Function) TimesT() Function { return f.with(f.over().timesT()) }

// TimesExp returns e^(a (t - t0)) f(t), t0 the origin.
func (f Function) TimesExp(a *big.Rat) Function {
	return f.with(f.over().timesExp(algebra.RatFromBig(a)))
}

// At returns f(t) to the given number of significant digits, every one proven
// and the last one rounded to nearest: "0.36787944", "12.069840", "5.0759e-435".
// The value 0 is "0". The working precision is raised until the digits are
// certain; values that are rational are recognised as such, so that it ends.
// Up to 30,000 digits are given; fewer than one counts as one. Free constants
// and symbols must have values.
func (f Function) At(ctx context.Context, t *big.Rat, digits int) (string, error) {
	if t == nil {
		return "", errNoTime
	}
	if err := f.closed(); err != nil {
		return "", err
	}
	return f.over().digits(ctx, t, digits)
}

// Enclose returns a ball around f(t), computed with the working precision prec
// in bits.
func (f Function) Enclose(ctx context.Context, t *big.Rat, prec uint) (algebra.Ball, error) {
	if t == nil {
		return algebra.Ball{}, errNoTime
	}
	if err := f.closed(); err != nil {
		return algebra.Ball{}, err
	}
	return f.over().enclose(ctx, t, prec)
}

// closed returns an error if a name in f has no value.
func (f Function) closed() error {
	if names := f.Constants(); len(names) > 0 {
		return Errorf(SideConditions, Pos{}, "the free constant %s has no value", names[0])
	}
	if names := f.Parameters(); len(names) > 0 {
		return Errorf(NeedsAssumption, Pos{}, "the symbol %s has no value", names[0])
	}
	return nil
}

func (f *overField[E]) field() *Constants {
	c, _ := any(f.k).(*Constants)
	return c
}

func (f *overField[E]) isZero() bool { return f.base.IsZero() && len(f.free) == 0 }

func (f *overField[E]) constants() []string {
	names := make([]string, len(f.free))
	for i, t := range f.free {
		names[i] = t.Name
	}
	return names
}

func (f *overField[E]) originNode() Node { return styleOf(f.k).Node(f.origin) }

func (f *overField[E]) initial() Node { return styleOf(f.k).Node(f.base.Initial()) }

// images returns all images of f, the base first.
func (f *overField[E]) images() []Image[E] {
	out := []Image[E]{f.base}
	for _, t := range f.free {
		out = append(out, t.Image)
	}
	return out
}

func (f *overField[E]) parameters() []string {
	c, ok := any(f.k).(*Constants)
	if !ok {
		return nil
	}
	all := []Constant{any(f.origin).(Constant)}
	for _, m := range f.images() {
		m := any(m).(Image[Constant])
		all = append(all, m.num.Coefs()...)
		for _, pp := range m.den {
			all = append(all, pp.p.Coefs()...)
		}
	}
	return c.SymbolsIn(all...)
}

// apply returns the function with g applied to every image.
func (f *overField[E]) apply(g func(Image[E]) Image[E]) exact {
	free := make([]FreeTerm[E], len(f.free))
	for i, t := range f.free {
		free[i] = FreeTerm[E]{t.Name, g(t.Image)}
	}
	return newOverField(f.k, f.origin, g(f.base), free)
}

func (f *overField[E]) sameOrigin(other exact) bool {
	return f.k.Equal(f.origin, other.(*overField[E]).origin)
}

func (f *overField[E]) add(other exact) exact {
	g := other.(*overField[E])
	free := append([]FreeTerm[E](nil), f.free...)
next:
	for _, t := range g.free {
		for i := range free {
			if free[i].Name == t.Name {
				free[i].Image = free[i].Image.Add(t.Image)
				continue next
			}
		}
		free = append(free, t)
	}
	return newOverField(f.k, f.origin, f.base.Add(g.base), free)
}

func (f *overField[E]) equal(other exact) bool {
	return f.add(other.scale(algebra.RatFromInt(-1))).isZero()
}

func (f *overField[E]) scale(x algebra.Rat) exact {
	return f.apply(func(m Image[E]) Image[E] { return m.Scale(f.k.FromRat(x)) })
}

func (f *overField[E]) derivative() exact { return f.apply(Image[E].Derivative) }

func (f *overField[E]) integral() exact { return f.apply(Image[E].Integral) }

func (f *overField[E]) timesT() exact {
	return f.apply(func(m Image[E]) Image[E] { return m.TimesT().Add(m.Scale(f.origin)) })
}

func (f *overField[E]) timesExp(a algebra.Rat) exact {
	return f.apply(func(m Image[E]) Image[E] { return m.TimesExp(f.k.FromRat(a)) })
}

func (f *overField[E]) digits(ctx context.Context, t *big.Rat, digits int) (string, error) {
	values, err := f.cache.digits(ctx, f.k, []Image[E]{f.base}, f.k.Sub(f.k.FromRat(algebra.RatFromBig(t)), f.origin), digits)
	if err != nil {
		return "", err
	}
	return values[0], nil
}

func (f *overField[E]) enclose(ctx context.Context, t *big.Rat, prec uint) (algebra.Ball, error) {
	if f.base.IsZero() {
		return algebra.Ball{}, nil
	}
	balls, err := f.cache.balls(ctx, f.k, []Image[E]{f.base}, f.k.Sub(f.k.FromRat(algebra.RatFromBig(t)), f.origin), prec)
	if err != nil {
		return algebra.Ball{}, err
	}
	return balls[0], nil
}
