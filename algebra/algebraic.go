package algebra

import (
	"context"
	"fmt"
)

// Algebraic is an algebraic number: a root of an irreducible polynomial over Q,
// told apart from the others by its place in the order of the roots (real ones
// ascending, then conjugate pairs, the upper one first). Two algebraic numbers
// are equal exactly when polynomial and place are.
type Algebraic struct {
	p     Poly[Rat]
	roots *RootSet
	i     int
}

// AlgebraicRoots returns the roots of an irreducible polynomial over Q. The
// irreducibility is the caller's promise.
func AlgebraicRoots(ctx context.Context, p Poly[Rat]) ([]Algebraic, error) {
	roots, err := Q.Roots(ctx, p)
	if err != nil {
		return nil, err
	}
	return RootsIn(p, roots), nil
}

// RootsIn is AlgebraicRoots for a polynomial whose roots are isolated already.
func RootsIn(p Poly[Rat], roots *RootSet) []Algebraic {
	out := make([]Algebraic, roots.Len())
	for i := range out {
		out[i] = Algebraic{p: p.Monic(Q), roots: roots, i: i}
	}
	return out
}

// MinPoly returns the monic minimal polynomial.
func (x Algebraic) MinPoly() Poly[Rat] { return x.p }

// Index returns the place of x among the roots of its polynomial, from 0.
func (x Algebraic) Index() int { return x.i }

// IsReal tells whether x is a real number.
func (x Algebraic) IsReal() bool { return x.i < x.roots.NumReal() }

// Rational returns the rational number that x is, if it is one.
func (x Algebraic) Rational() (Rat, bool) {
	if x.p.Degree() == 1 {
		return x.p.Coef(0).Neg(), true
	}
	return Rat{}, false
}

// Conj returns the complex conjugate.
func (x Algebraic) Conj() Algebraic {
	x.i = x.roots.Conjugate(x.i)
	return x
}

// Enclose returns a ball around x with about prec proven bits. The imaginary
// part of a real number is exactly 0, conjugates are exact mirror images.
func (x Algebraic) Enclose(ctx context.Context, prec uint) (ComplexBall, error) {
	if r, ok := x.Rational(); ok {
		return ComplexBall{Re: BallFromRat(r.Big(), prec)}, nil
	}
	return x.roots.Enclose(ctx, x.i, prec)
}

// Equal tells whether x = y.
func (x Algebraic) Equal(y Algebraic) bool { return x.i == y.i && x.p.Equal(y.p) }

// Compare returns -1, 0 or 1 as x is less than, equal to or greater than y. It
// panics when one of them is not real. Unequal numbers are told apart by
// refining their enclosures.
func (x Algebraic) Compare(ctx context.Context, y Algebraic) (int, error) {
	if !x.IsReal() || !y.IsReal() {
		panic("algebra: order of numbers that are not real")
	}
	if x.Equal(y) {
		return 0, nil
	}
	for prec := uint(64); ; prec *= 2 {
		a, err := x.Enclose(ctx, prec)
		if err != nil {
			return 0, err
		}
		b, err := y.Enclose(ctx, prec)
		if err != nil {
			return 0, err
		}
		if sign, certain := a.Re.Sub(b.Re, prec).Sign(); certain && sign != 0 {
			return sign, nil
		}
	}
}

// Sign returns the sign of a real algebraic number.
func (x Algebraic) Sign(ctx context.Context) (int, error) {
	if x.p.Degree() == 1 {
		return x.p.Coef(0).Neg().Sign(), nil
	}
	return x.Compare(ctx, Algebraic{p: PolyFromInts(0, 1), roots: x.roots, i: 0})
}

// String writes x exactly: a rational number, a number h + c*sqrt(m) (with i =
// sqrt(-1) for complex ones), or root(k, p), the k-th root of p from 1 on.
func (x Algebraic) String() string {
	if r, ok := x.Rational(); ok {
		return r.String()
	}
	if x.p.Degree() > 2 {
		return fmt.Sprintf("root(%d, %s)", x.i+1, x.p.Format("z"))
	}
	h, d := Quadratic(x.p)
	c, m := SqrtParts(d.Abs())
	minus := x.i == 0 // of two real roots the lesser comes first
	radical := ""
	if d.Sign() < 0 {
		minus = x.i == 1
		radical = "i"
		if isOne(m) {
			m = nil
		} else {
			radical = "*i"
		}
	}
	if m != nil {
		radical = "sqrt(" + m.String() + ")" + radical
	}
	if num := RatFromBigInt(c.Num()); !num.IsOne() {
		radical = num.String() + "*" + radical
	}
	if den := c.Den(); !isOne(den) {
		radical += "/" + den.String()
	}
	switch {
	case h.IsZero() && minus:
		return "-" + radical
	case h.IsZero():
		return radical
	case minus:
		return h.String() + " - " + radical
	}
	return h.String() + " + " + radical
}
