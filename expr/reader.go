package expr

import (
	"errors"
	"fmt"

	"example.org/closedform/algebra"
)

// Env is what a tree is read against: the field its numbers live in, the
// independent variable, and the values of the names.
type Env[E any] struct {
	K        algebra.Scalars[E]
	Variable string
	// Lookup returns the value of a name, or an *Error that says why it has none.
	Lookup func(Symbol) (E, error)
	Limits Limits
	// Local tells that functions are read in the local time variable - Origin.
	Local  bool
	Origin E
}

// Elementary converts a tree to a sum of elementary terms. The error, of type
// *Error, names the term that is outside the class.
func (env Env[E]) Elementary(n Node) (Elementary[E], error) {
	c := elementaryReader[E]{env: env, work: new(int)}
	c.env.Limits = env.Limits.WithDefaults()
	f, err := c.read(n)
	if err != nil {
		return f, err
	}
	if order := f.order(); order > c.env.Limits.Degree+1 {
		return f, Errorf(LimitExceeded, n.Pos(), "the input satisfies no equation of order below %d, which is beyond %d", order, c.env.Limits.Degree)
	}
	if size, most := f.size(), sizeFactor*c.env.Limits.Bits; size > most {
		return f, Errorf(LimitExceeded, n.Pos(), "the numbers of the input have more than %d bits together", most)
	}
	return f, nil
}

// sizeFactor times the limit on the bits of one number is the limit on the bits
// of an input: of its coefficients, and of its rates as often as they occur in
// the denominator of the image.
const sizeFactor = 4

// elementaryReader converts trees.
type elementaryReader[E any] struct {
	env  Env[E]
	work *int // spent so far
}

// mostWork bounds the expansion of one tree. The unit is one product of two
// short numbers; every word of a longer one costs another.
const mostWork = 1 << 18

// spend counts work, and fails when there is too much.
func (r elementaryReader[E]) spend(units int, at Pos) error {
	if *r.work += units; *r.work > mostWork {
		return Errorf(LimitExceeded, at, "multiplying out takes more than %d steps: the expression has too many terms or too large numbers", mostWork)
	}
	return nil
}

// widest returns the words of the longest number in f, at least 1.
func (f Elementary[E]) widest() int {
	bits := 0
	for _, t := range f.terms {
		bits = max(bits, bitLen(f.k, t.a), bitLen(f.k, t.b), bitLen(f.k, t.c), bitLen(f.k, t.s))
	}
	return 1 + bits/64
}

// within returns f if it keeps the limits on terms, powers of t and bits.
func (r elementaryReader[E]) within(f Elementary[E], at Pos) (Elementary[E], error) {
	l := r.env.Limits
	if len(f.terms) > l.Terms {
		return f, Errorf(LimitExceeded, at, "an expression of more than %d terms", l.Terms)
	}
	for _, t := range f.terms {
		if t.n > l.Degree {
			return f, Errorf(LimitExceeded, at, "the power %d of %s is beyond %d", t.n, r.env.Variable, l.Degree)
		}
		if bits := max(bitLen(f.k, t.a), bitLen(f.k, t.b), bitLen(f.k, t.c), bitLen(f.k, t.s)); bits > l.Bits {
			return f, Errorf(LimitExceeded, at, "a number of %d bits", bits)
		}
	}
	return f, nil
}

func (r elementaryReader[E]) constant(x E) Elementary[E] {
	acc := newGather(r.env.K)
	acc.add(elementaryTerm[E]{0, r.env.K.Zero(), r.env.K.Zero(), x, r.env.K.Zero()})
	return acc.sum()
}

func (r elementaryReader[E]) read(n Node) (Elementary[E], error) {
	k := r.env.K
	zero := Elementary[E]{k: k}
	switch v := n.(type) {
	case Number:
		return r.constant(k.FromRat(v.Val)), nil
	case Decimal:
		return r.constant(k.FromRat(v.Val())), nil
	case Symbol:
		if v.Name == r.env.Variable {
			t := Elementary[E]{k: k, terms: []elementaryTerm[E]{{1, k.Zero(), k.Zero(), k.One(), k.Zero()}}}
			if r.env.Local {
				t = t.Add(r.constant(r.env.Origin))
			}
			return t, nil
		}
		x, err := r.env.Lookup(v)
		if err != nil {
			return zero, err
		}
		return r.constant(x), nil
	case Value:
		if v.At != nil && v.Order == 0 {
			return zero, Errorf(UnknownFunction, v.Pos(), "%s is neither a function of the vocabulary (exp, sin, cos, sinh, cosh, sqrt, atan, step, impulse) nor a state", Quote(v.Name))
		}
		return zero, Errorf(Syntax, v.Pos(), "%s stands where no derivative or value of a state can", v)
	case Neg:
		x, err := r.read(v.X)
		return x.scaleIf(err, k.FromInt(-1))
	case Sum:
		acc := newGather(k)
		for _, t := range v.Terms {
			x, err := r.read(t)
			if err != nil {
				return zero, err
			}
			if err := r.spend(len(x.terms)*x.widest(), t.Pos()); err != nil {
				return zero, err
			}
			for _, u := range x.terms {
				sum := acc.add(u)
				if bits := max(bitLen(k, sum.c), bitLen(k, sum.s)); bits > r.env.Limits.Bits {
					return zero, Errorf(LimitExceeded, t.Pos(), "a number of %d bits", bits)
				} else if err := r.spend(bits/64, t.Pos()); err != nil {
					return zero, err
				}
			}
		}
		return r.within(acc.sum(), v.Pos())
	case Product:
		out := r.constant(k.One())
		for _, f := range v.Factors {
			x, err := r.read(f)
			if err != nil {
				return zero, err
			}
			if out, err = r.mul(out, x, f.Pos()); err != nil {
				return zero, err
			}
		}
		return out, nil
	case Quotient:
		x, err := r.read(v.Num)
		if err != nil {
			return zero, err
		}
		y, err := r.read(v.Den)
		if err != nil {
			return zero, err
		}
		inv, err := r.invert(y, v.Den)
		if err != nil {
			return zero, err
		}
		return r.mul(x, inv, v.Pos())
	case Power:
		return r.power(v)
	case Call:
		return r.call(v)
	case RootSum:
		return zero, Errorf(OutsideClass, v.Pos(), "a sum over named roots is a result, not an input")
	case Matrix:
		return zero, Errorf(OutsideClass, v.Pos(), "a matrix has no value that is a number")
	}
	panic("expr: unknown node")
}

func (f Elementary[E]) scaleIf(err error, x E) (Elementary[E], error) {
	if err != nil {
		return f, err
	}
	return f.Scale(x), nil
}

func (r elementaryReader[E]) mul(x, y Elementary[E], at Pos) (Elementary[E], error) {
	if err := r.spend(len(x.terms)*len(y.terms)*max(x.widest(), y.widest()), at); err != nil {
		return x, err
	}
	return r.within(x.Mul(y), at)
}

// invert returns 1/x for a constant or a pure exponential.
func (r elementaryReader[E]) invert(x Elementary[E], n Node) (Elementary[E], error) {
	k := r.env.K
	if x.IsZero() {
		return x, Errorf(Singular, n.Pos(), "division by zero: %s vanishes", Quote(n.String()))
	}
	if len(x.terms) != 1 || x.terms[0].n > 0 || !k.IsZero(x.terms[0].b) {
		return x, Errorf(OutsideClass, n.Pos(), "division by %s, which depends on %s and is not a pure exponential: inputs are sums of products of polynomials, exponentials, sines and cosines", Quote(n.String()), r.env.Variable)
	}
	t := x.terms[0]
	inv, err := k.Inv(t.c)
	if err != nil {
		return x, err
	}
	t.c, t.a = inv, k.Neg(t.a)
	return Elementary[E]{k: k, terms: []elementaryTerm[E]{t}}, nil
}

func (r elementaryReader[E]) power(v Power) (Elementary[E], error) {
	k := r.env.K
	zero := Elementary[E]{k: k}
	if s, ok := v.Base.(Symbol); ok && s.Name == "e" {
		if _, number := v.Exp.(Number); !number {
			return zero, Errorf(OutsideClass, s.Pos(), "the exponential is written exp(...), e is a name like any other")
		}
	}
	exponent, err := r.read(v.Exp)
	if err != nil {
		return zero, err
	}
	base, err := r.read(v.Base)
	if err != nil {
		return zero, err
	}
	e, isConst := exponent.Constant()
	if !isConst {
		return zero, Errorf(OutsideClass, v.Exp.Pos(), "an exponent that depends on %s: exponentials are written exp(...)", r.env.Variable)
	}
	q, rational := k.Rational(e)
	if !rational {
		return zero, Errorf(OutsideClass, v.Exp.Pos(), "the exponent %s is not a rational number", Quote(v.Exp.String()))
	}
	if x, ok := base.Constant(); ok {
		y, err := scalarEval[E]{k, r.env.Limits}.pow(x, q, v.Pos())
		if err != nil {
			return zero, err
		}
		return r.constant(y), r.spend(1+bitLen(k, y)/64, v.Pos())
	}
	n, ok := q.Int64()
	switch {
	case !ok && q.IsInt() || abs(n) > int64(r.env.Limits.Degree):
		return zero, Errorf(LimitExceeded, v.Pos(), "the exponent %s is beyond %d", q, r.env.Limits.Degree)
	case !ok:
		return zero, Errorf(OutsideClass, v.Pos(), "a fractional power of a function of %s", r.env.Variable)
	case n < 0:
		if base, err = r.invert(base, v.Base); err != nil {
			return zero, err
		}
		n = -n
	}
	out := r.constant(k.One())
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			if out, err = r.mul(out, base, v.Pos()); err != nil {
				return zero, err
			}
		}
		if n > 1 {
			if base, err = r.mul(base, base, v.Pos()); err != nil {
				return zero, err
			}
		}
	}
	return out, nil
}

func (r elementaryReader[E]) call(v Call) (Elementary[E], error) {
	k := r.env.K
	zero := Elementary[E]{k: k}
	switch v.Func {
	case "step", "impulse":
		return zero, Errorf(OutsideClass, v.Pos(), "switched inputs (%s) are not covered", v.Func)
	case "atan":
		return zero, Errorf(OutsideClass, v.Pos(), "atan stands in the phase of a sine or cosine only, as in cos(%s - atan(2))", r.env.Variable)
	case "sqrt":
		return r.power(Power{v.place, v.Arg, Num(algebra.NewRat(1, 2))})
	}
	turned, phases := v.Arg, []phase(nil)
	if v.Func == "cos" || v.Func == "sin" {
		turned, phases = splitPhases(v.Arg)
	}
	arg, err := r.read(turned)
	if err != nil {
		return zero, err
	}
	// The argument must be b t + a.
	slope, rest := k.Zero(), k.Zero()
	for _, t := range arg.terms {
		switch {
		case t.n == 1 && k.IsZero(t.a) && k.IsZero(t.b):
			slope = t.c
		case arg.isConstant(t):
			rest = t.c
		default:
			return zero, Errorf(OutsideClass, v.Pos(), "the argument of %s is not of the form b*%s + a: inputs are sums of products of polynomials, exponentials, sines and cosines", v.Func, r.env.Variable)
		}
	}
	acc := newGather(k)
	o := k.Zero()
	switch v.Func {
	case "exp":
		e, err := expIn(k, rest, v.Pos())
		if err != nil {
			return zero, err
		}
		acc.add(elementaryTerm[E]{0, slope, o, e, o})
	case "cos", "sin":
		if m, ok := k.(constantMaker[E]); ok && k.IsZero(slope) && phases == nil {
			value := m.Cos
			if v.Func == "sin" {
				value = m.Sin
			}
			x, err := value(rest, v.Pos())
			if err != nil {
				return zero, err
			}
			return r.constant(x), nil
		}
		cos, sin, err := cosSinIn(k, rest, v.Pos())
		if err != nil {
			return zero, err
		}
		for _, p := range phases {
			if cos, sin, err = r.turn(cos, sin, p); err != nil {
				return zero, err
			}
		}
		if v.Func == "cos" {
			acc.add(elementaryTerm[E]{0, o, slope, cos, k.Neg(sin)})
		} else {
			acc.add(elementaryTerm[E]{0, o, slope, sin, cos})
		}
	case "cosh", "sinh":
		e, err := expIn(k, rest, v.Pos())
		if err != nil {
			return zero, err
		}
		inv, err := k.Inv(e)
		if err != nil {
			return zero, err
		}
		half, err := k.Inv(k.FromInt(2))
		if err != nil {
			return zero, err
		}
		if v.Func == "sinh" {
			inv = k.Neg(inv)
		}
		acc.add(elementaryTerm[E]{0, slope, o, k.Mul(half, e), o})
		acc.add(elementaryTerm[E]{0, k.Neg(slope), o, k.Mul(half, inv), o})
	default:
		return zero, Errorf(UnknownFunction, v.Pos(), "%s", Quote(v.Func))
	}
	return acc.sum(), nil
}

// constantMaker is the capability of a field to hold the values of functions at
// constants.
type constantMaker[E any] interface {
	Exp(x E, at Pos) (E, error)
	Cos(x E, at Pos) (E, error)
	Sin(x E, at Pos) (E, error)
	CosSin(x E, at Pos) (cos, sin E, err error)
	NthRoot(x E, q int, at Pos) (E, error)
}

// ErrIrrational is the cause of errors over Q that a wider field does not have.
var ErrIrrational = errors.New("expr: not a rational number")

// expIn returns e^x in the field.
func expIn[E any](k algebra.Scalars[E], x E, at Pos) (E, error) {
	if k.IsZero(x) {
		return k.One(), nil
	}
	if m, ok := k.(constantMaker[E]); ok {
		return m.Exp(x, at)
	}
	return x, irrational(at, "exp(%s)", k.Text(x))
}

// cosSinIn returns cos x and sin x in the field.
func cosSinIn[E any](k algebra.Scalars[E], x E, at Pos) (cos, sin E, err error) {
	if k.IsZero(x) {
		return k.One(), k.Zero(), nil
	}
	if m, ok := k.(constantMaker[E]); ok {
		return m.CosSin(x, at)
	}
	return x, x, irrational(at, "cos(%s)", k.Text(x))
}

func irrational(at Pos, format string, args ...any) error {
	e := Errorf(OutsideClass, at, "%s is not a rational number", fmt.Sprintf(format, args...))
	e.Cause = ErrIrrational
	return e
}

// Scalar reads a tree that does not depend on the variable.
func (env Env[E]) Scalar(n Node) (E, error) {
	f, err := env.Elementary(n)
	if err != nil {
		return env.K.Zero(), err
	}
	x, ok := f.Constant()
	if !ok {
		return x, Errorf(OutsideClass, n.Pos(), "%s depends on %s where a constant must stand", Quote(n.String()), env.Variable)
	}
	return x, nil
}
