package algebra

import (
	"context"
	"fmt"
)

// Extension is the simple extension K[s]/(p) of a field K by a root of the
// irreducible polynomial p. Its elements are polynomials over K of degree less
// than deg p; the class of s is the root.
type Extension[E any] struct {
	base Field[E]
	p    Poly[E]
	name string
}

// NewExtension returns K[s]/(p). The irreducibility of p is the caller's
// promise; if it is broken, Inv reports the factor it meets. The root is
// called name in texts. It panics when deg p < 1.
func NewExtension[E any](k Field[E], p Poly[E], name string) *Extension[E] {
	if p.Degree() < 1 {
		panic("algebra: extension by a constant polynomial")
	}
	return &Extension[E]{base: k, p: p.Monic(k), name: name}
}

// Modulus returns the monic defining polynomial.
func (x *Extension[E]) Modulus() Poly[E] { return x.p }

// Root returns the class of s.
func (x *Extension[E]) Root() Poly[E] {
	return x.Reduce(Monomial[E](x.base, x.base.One(), 1))
}

// Reduce returns the class of a polynomial over K.
func (x *Extension[E]) Reduce(a Poly[E]) Poly[E] {
	if a.Degree() < x.p.Degree() {
		return a
	}
	return a.Rem(x.base, x.p)
}

// FromBase returns the class of an element of K.
func (x *Extension[E]) FromBase(a E) Poly[E] { return Constant[E](x.base, a) }

func (x *Extension[E]) Zero() Poly[E]            { return Poly[E]{ring: x.base} }
func (x *Extension[E]) One() Poly[E]             { return x.FromBase(x.base.One()) }
func (x *Extension[E]) FromInt(n int64) Poly[E]  { return x.FromBase(x.base.FromInt(n)) }
func (x *Extension[E]) Add(a, b Poly[E]) Poly[E] { return a.Add(b) }
func (x *Extension[E]) Sub(a, b Poly[E]) Poly[E] { return a.Sub(b) }
func (x *Extension[E]) Neg(a Poly[E]) Poly[E]    { return a.Neg() }
func (x *Extension[E]) Mul(a, b Poly[E]) Poly[E] { return x.Reduce(a.Mul(b)) }
func (x *Extension[E]) Equal(a, b Poly[E]) bool  { return a.Equal(b) }
func (x *Extension[E]) IsZero(a Poly[E]) bool    { return a.IsZero() }
func (x *Extension[E]) Text(a Poly[E]) string {
	if a.Degree() < 1 {
		return a.Format(x.name)
	}
	return "(" + a.Format(x.name) + ")"
}

// ReducibleError reports that the modulus of an extension is not irreducible.
type ReducibleError struct {
	Modulus, Factor string
}

func (e *ReducibleError) Error() string {
	return fmt.Sprintf("algebra: the modulus %s has the factor %s", e.Modulus, e.Factor)
}

// Inv returns 1/a by the extended Euclidean algorithm, or a *ReducibleError.
func (x *Extension[E]) Inv(a Poly[E]) (Poly[E], error) {
	if a.IsZero() {
		return a, ErrDivisionByZero
	}
	if n, ok := any(x.base).(normInverter); ok && n.invertsByNorm() {
		return x.invByNorm(a)
	}
	g, u, _ := ExtendedGCD(x.base, a, x.p)
	if g.Degree() > 0 {
		return Poly[E]{}, &ReducibleError{Modulus: x.p.String(), Factor: g.String()}
	}
	return x.Reduce(u), nil
}

// normInverter marks fields in which remainders grow, so that inverses are found
// from the norm.
type normInverter interface{ invertsByNorm() bool }

// invByNorm returns 1/a from the characteristic polynomial of the multiplication
// by a, s^d + c1 s^(d-1) + ... + cd, as -(a^(d-1) + c1 a^(d-2) + ... + c(d-1))/cd
// by the theorem of Cayley and Hamilton.
func (x *Extension[E]) invByNorm(a Poly[E]) (Poly[E], error) {
	d := x.p.Degree()
	columns := make([]Poly[E], d)
	columns[0] = a
	for j := 1; j < d; j++ {
		columns[j] = x.Reduce(columns[j-1].ShiftUp(1))
	}
	chi, err := CharPoly(context.Background(), MatrixFromFunc[E](x.base, d, d, func(i, j int) E {
		if i > columns[j].Degree() {
			return x.base.Zero()
		}
		return columns[j].Coef(i)
	}))
	if err != nil {
		return Poly[E]{}, err
	}
	if x.base.IsZero(chi.Coef(0)) {
		return Poly[E]{}, &ReducibleError{Modulus: x.p.String(), Factor: GCD(x.base, a, x.p).String()}
	}
	sum := x.One()
	for i := 1; i < d; i++ {
		sum = x.Mul(sum, a).Add(x.FromBase(chi.Coef(d - i)))
	}
	return sum.Scale(x.base.Neg(mustInv(x.base, chi.Coef(0)))), nil
}

// Trace returns the trace of a over K, the sum over the roots r of the modulus
// of a(r).
func (x *Extension[E]) Trace(a Poly[E]) E {
	// Newton's identities give the power sums of the roots.
	d := x.p.Degree()
	k := x.base
	sums := make([]E, d)
	t := k.Zero()
	for i := range d {
		if i == 0 {
			sums[0] = k.FromInt(int64(d))
		} else {
			s := k.Mul(k.FromInt(int64(i)), x.p.Coef(d-i))
			for j := 1; j < i; j++ {
				s = k.Add(s, k.Mul(x.p.Coef(d-j), sums[i-j]))
			}
			sums[i] = k.Neg(s)
		}
		if i <= a.Degree() {
			t = k.Add(t, k.Mul(a.Coef(i), sums[i]))
		}
	}
	return t
}
