package algebra

import (
	"context"
	"math/big"
)

// Ring is a commutative ring given as a value: the elements are bare data of
// type E, and everything that can be done with them goes through the domain.
// Methods never modify their arguments, and results may be shared freely.
type Ring[E any] interface {
	Zero() E
	One() E
	// FromInt returns the image of n.
	FromInt(n int64) E
	Add(x, y E) E
	Sub(x, y E) E
	Neg(x E) E
	Mul(x, y E) E
	Equal(x, y E) bool
	IsZero(x E) bool
	// Text writes x so that it can stand alone in a line of text.
	Text(x E) string
}

// Field is a ring in which every element but zero has an inverse.
type Field[E any] interface {
	Ring[E]
	// Inv returns 1/x. It fails when x is zero and, in an extension whose
	// modulus turns out to be reducible, when x shares a factor with it.
	Inv(x E) (E, error)
}

// Scalars is a field of real numbers that a model's coefficients can live in:
// besides the field operations it can decompose polynomials into irreducible
// factors and enclose its elements in balls. A new field of coefficients is a
// new implementation of Scalars; the solver is written against it alone.
type Scalars[E any] interface {
	Field[E]
	// FromRat returns the image of a rational number.
	FromRat(x Rat) E
	// FactorPoly returns the monic irreducible factors of p with their
	// multiplicities, in a fixed order. The leading coefficient is dropped.
	FactorPoly(ctx context.Context, p Poly[E]) ([]Factor[E], error)
	// CharPoly returns det(s I - a).
	CharPoly(ctx context.Context, a Matrix[E]) (Poly[E], error)
	// Roots isolates the complex roots of a square-free polynomial.
	Roots(ctx context.Context, p Poly[E]) (*RootSet, error)
	// Enclose returns a ball around x with about prec proven bits.
	Enclose(x E, prec uint) Ball
	// Negative tells, for exactly one of x and -x when x is not zero, that it is
	// the one to be written with a minus sign.
	Negative(x E) bool
	// Rational returns the rational number that x is, if it is one.
	Rational(x E) (Rat, bool)
}

// Factor is a factor of a polynomial with its multiplicity.
type Factor[E any] struct {
	P    Poly[E]
	Mult int
}

// Rationals is the field Q as a domain value; its zero value is ready to use.
type Rationals struct{}

// Q is the field of rational numbers.
var Q = Rationals{}

func (Rationals) Zero() Rat                  { return Rat{} }
func (Rationals) One() Rat                   { return RatFromInt(1) }
func (Rationals) FromInt(n int64) Rat        { return RatFromInt(n) }
func (Rationals) FromRat(x Rat) Rat          { return x }
func (Rationals) Add(x, y Rat) Rat           { return x.Add(y) }
func (Rationals) Sub(x, y Rat) Rat           { return x.Sub(y) }
func (Rationals) Neg(x Rat) Rat              { return x.Neg() }
func (Rationals) Mul(x, y Rat) Rat           { return x.Mul(y) }
func (Rationals) Equal(x, y Rat) bool        { return x.Equal(y) }
func (Rationals) IsZero(x Rat) bool          { return x.IsZero() }
func (Rationals) Text(x Rat) string          { return x.String() }
func (Rationals) Rational(x Rat) (Rat, bool) { return x, true }
func (Rationals) Negative(x Rat) bool        { return x.Sign() < 0 }
func (Rationals) Enclose(x Rat, prec uint) Ball {
	return BallFromRat(x.Big(), prec)
}

// Inv returns 1/x, or ErrDivisionByZero.
func (Rationals) Inv(x Rat) (Rat, error) {
	if x.IsZero() {
		return Rat{}, ErrDivisionByZero
	}
	return x.Inv(), nil
}

// Roots isolates the complex roots of a square-free polynomial over Q.
func (Rationals) Roots(ctx context.Context, p Poly[Rat]) (*RootSet, error) {
	ints, _ := overZ(p)
	return NewRootSet(ctx, ints)
}

// clearDenominators returns the integers d*c[i] and the least common
// denominator d > 0 of the c[i].
func clearDenominators(c []Rat) ([]*big.Int, *big.Int) {
	if w, ok := wordsOf(c); ok {
		return bigWords(w), big.NewInt(1)
	}
	d := commonDenominator(c)
	out := make([]*big.Int, len(c))
	for i, x := range c {
		out[i] = x.Num()
		if !x.IsInt() {
			out[i].Mul(out[i], new(big.Int).Quo(d, x.Den()))
		} else if !isOne(d) {
			out[i].Mul(out[i], d)
		}
	}
	return out, d
}

// wordsOf returns the numbers as words if all are integers of at most 63 bits.
func wordsOf(c []Rat) ([]int64, bool) {
	for i := range c {
		if c[i].big != nil || c[i].denom() != 1 {
			return nil, false
		}
	}
	w := make([]int64, len(c))
	for i := range c {
		w[i] = c[i].num
	}
	return w, true
}

// commonDenominator returns the least common multiple of the denominators.
func commonDenominator(c []Rat) *big.Int {
	d := big.NewInt(1)
	var g big.Int
	for _, x := range c {
		if x.IsInt() {
			continue
		}
		den := x.Den()
		g.GCD(nil, nil, d, den)
		d.Mul(d, den.Quo(den, &g))
	}
	return d
}
