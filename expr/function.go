package expr

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
)

// Function is an exponential polynomial with rational coefficients, an
// immutable function of one real variable held in its canonical form. It may be
// held in the local time t - t0 of an origin t0, and it may contain free
// constants, in which it is linear. Methods may be called concurrently.
type Function struct {
	variable string
	origin   algebra.Rat
	base     Image[algebra.Rat]
	free     []FreeTerm
	cache    *expansions
}

// FreeTerm is the multiple of one free constant in a Function.
type FreeTerm struct {
	Name  string
	Image Image[algebra.Rat]
}

// NewFunction returns the function base + sum of the free constants times their
// images, in the variable minus origin.
func NewFunction(variable string, origin algebra.Rat, base Image[algebra.Rat], free ...FreeTerm) Function {
	f := Function{variable: variable, origin: origin, base: base, cache: &expansions{}}
	for _, t := range free {
		if !t.Image.IsZero() {
			f.free = append(f.free, t)
		}
	}
	return f
}

// ParseFunction reads a function of t from text, such as "t^2*exp(-3*t)" or
// "sin(2*t)^2": a sum of products of polynomials, exponentials, sines and
// cosines with rational coefficients and rates, and sums over named roots.
func ParseFunction(src string, limits Limits) (Function, error) {
	n, err := Parse(src, limits)
	if err != nil {
		return Function{}, err
	}
	return FunctionOf(n, "t", limits)
}

// FunctionOf converts a tree to a function of the variable.
func FunctionOf(n Node, variable string, limits Limits) (Function, error) {
	env := Env[algebra.Rat]{K: algebra.Q, Variable: variable, Limits: limits, Lookup: NoNames}
	img, err := env.image(n)
	if err != nil {
		return Function{}, err
	}
	return NewFunction(variable, algebra.Rat{}, img), nil
}

// NoNames is the Lookup of an Env in which no name has a rational value.
func NoNames(s Symbol) (algebra.Rat, error) {
	return algebra.Rat{}, outsideQ(s)
}

// outsideQ is the error of a name where a rational number must stand.
func outsideQ(s Symbol) *Error {
	switch s.Name {
	case "pi":
		return Errorf(OutsideClass, s.Pos(), "pi is not covered: coefficients and data are rational numbers")
	case "e":
		return Errorf(OutsideClass, s.Pos(), "the name e has no value; the exponential is written exp(...)")
	}
	return Errorf(OutsideClass, s.Pos(), "the name %s has no value: symbols are not covered, coefficients and data are rational numbers", Quote(s.Name))
}

// Variable returns the name of the independent variable.
func (f Function) Variable() string { return f.variable }

// Origin returns t0, the origin of the local time.
func (f Function) Origin() *big.Rat { return f.origin.Big() }

// Constants returns the names of the free constants in f.
func (f Function) Constants() []string {
	names := make([]string, len(f.free))
	for i, t := range f.free {
		names[i] = t.Name
	}
	return names
}

// IsZero tells whether f is the zero function.
func (f Function) IsZero() bool { return f.base.IsZero() && len(f.free) == 0 }

// Initial returns f at its origin, without the free constants.
func (f Function) Initial() *big.Rat { return f.base.Initial().Big() }

// apply returns the function with g applied to every image.
func (f Function) apply(g func(Image[algebra.Rat]) Image[algebra.Rat]) Function {
	free := make([]FreeTerm, len(f.free))
	for i, t := range f.free {
		free[i] = FreeTerm{t.Name, g(t.Image)}
	}
	return NewFunction(f.variable, f.origin, g(f.base), free...)
}

// Add returns f + g. It panics when the variables or the origins differ.
func (f Function) Add(g Function) Function {
	if f.variable != g.variable || !f.origin.Equal(g.origin) {
		panic("expr: sum of functions in different times")
	}
	free := append([]FreeTerm(nil), f.free...)
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
	return NewFunction(f.variable, f.origin, f.base.Add(g.base), free...)
}

// Scale returns x f.
func (f Function) Scale(x *big.Rat) Function {
	r := algebra.RatFromBig(x)
	return f.apply(func(m Image[algebra.Rat]) Image[algebra.Rat] { return m.Scale(r) })
}

// Sub returns f - g. It panics when the variables or the origins differ.
func (f Function) Sub(g Function) Function { return f.Add(g.Scale(big.NewRat(-1, 1))) }

// Equal tells whether f and g are the same function, in the same variable and
// with the same origin.
func (f Function) Equal(g Function) bool {
	return f.variable == g.variable && f.origin.Equal(g.origin) && f.Sub(g).IsZero()
}

// Derivative returns df/dt.
func (f Function) Derivative() Function { return f.apply(Image[algebra.Rat].Derivative) }

// Integral returns the integral of f from the origin to t.
func (f Function) Integral() Function { return f.apply(Image[algebra.Rat].Integral) }

// TimesT returns t f(t).
func (f Function) TimesT() Function {
	return f.apply(func(m Image[algebra.Rat]) Image[algebra.Rat] {
		return m.TimesT().Add(m.Scale(f.origin))
	})
}

// TimesExp returns e^(a (t - t0)) f(t), t0 the origin.
func (f Function) TimesExp(a *big.Rat) Function {
	r := algebra.RatFromBig(a)
	return f.apply(func(m Image[algebra.Rat]) Image[algebra.Rat] { return m.TimesExp(r) })
}

// With returns f with values for free constants; names that f does not contain
// are ignored.
func (f Function) With(values map[string]*big.Rat) Function {
	base := f.base
	var free []FreeTerm
	for _, t := range f.free {
		if v, ok := values[t.Name]; ok {
			base = base.Add(t.Image.Scale(algebra.RatFromBig(v)))
		} else {
			free = append(free, t)
		}
	}
	return NewFunction(f.variable, f.origin, base, free...)
}

// At returns f(t) to the given number of significant digits, every one proven
// and the last one rounded to nearest: "0.36787944", "12.069840", "5.0759e-435".
// The value 0 is "0". The working precision is raised until the digits are
// certain; values that are rational are recognised as such, so that it ends.
// Up to 30,000 digits are given; fewer than one counts as one.
func (f Function) At(ctx context.Context, t *big.Rat, digits int) (string, error) {
	if t == nil {
		return "", errNoTime
	}
	if err := f.noFree(); err != nil {
		return "", err
	}
	values, err := f.cache.digits(ctx, []Image[algebra.Rat]{f.base}, algebra.RatFromBig(t).Sub(f.origin), digits)
	if err != nil {
		return "", err
	}
	return values[0], nil
}

// Enclose returns a ball around f(t), computed with the working precision prec
// in bits.
func (f Function) Enclose(ctx context.Context, t *big.Rat, prec uint) (algebra.Ball, error) {
	if t == nil {
		return algebra.Ball{}, errNoTime
	}
	if err := f.noFree(); err != nil {
		return algebra.Ball{}, err
	}
	if f.base.IsZero() {
		return algebra.Ball{}, nil
	}
	balls, err := f.cache.balls(ctx, []Image[algebra.Rat]{f.base}, algebra.RatFromBig(t).Sub(f.origin), prec)
	if err != nil {
		return algebra.Ball{}, err
	}
	return balls[0], nil
}

func (f Function) noFree() error {
	if len(f.free) > 0 {
		return Errorf(SideConditions, Pos{}, "the free constant %s has no value", f.free[0].Name)
	}
	return nil
}
