package algebratest

import "example.org/closedform/algebra"

// Plain is a field stripped of every capability beyond the field operations, so
// that the generic algorithms run where the field has faster ones.
type Plain[E any] struct{ algebra.Field[E] }

// PolyRing is the ring of polynomials over R as a domain.
type PolyRing[E any] struct{ R algebra.Ring[E] }

// Zero returns 0.
func (p PolyRing[E]) Zero() algebra.Poly[E] { return algebra.NewPoly(p.R) }

// One returns 1.
func (p PolyRing[E]) One() algebra.Poly[E] { return algebra.Constant(p.R, p.R.One()) }

// FromInt returns the constant n.
func (p PolyRing[E]) FromInt(n int64) algebra.Poly[E] {
	return algebra.Constant(p.R, p.R.FromInt(n))
}

// Add returns x + y.
func (PolyRing[E]) Add(x, y algebra.Poly[E]) algebra.Poly[E] { return x.Add(y) }

// Sub returns x - y.
func (PolyRing[E]) Sub(x, y algebra.Poly[E]) algebra.Poly[E] { return x.Sub(y) }

// Neg returns -x.
func (PolyRing[E]) Neg(x algebra.Poly[E]) algebra.Poly[E] { return x.Neg() }

// Mul returns x y.
func (PolyRing[E]) Mul(x, y algebra.Poly[E]) algebra.Poly[E] { return x.Mul(y) }

// Equal tells whether x = y.
func (PolyRing[E]) Equal(x, y algebra.Poly[E]) bool { return x.Equal(y) }

// IsZero tells whether x = 0.
func (PolyRing[E]) IsZero(x algebra.Poly[E]) bool { return x.IsZero() }

// Text writes x in brackets.
func (PolyRing[E]) Text(x algebra.Poly[E]) string { return "[" + x.String() + "]" }

// FailingInv is a field whose Inv fails after a number of calls.
type FailingInv[E any] struct {
	algebra.Field[E]
	left *int
	err  error
}

// NewFailingInv returns f with an Inv that works n times and then returns err.
func NewFailingInv[E any](f algebra.Field[E], n int, err error) FailingInv[E] {
	return FailingInv[E]{Field: f, left: &n, err: err}
}

// Inv returns 1/x, or the error once the allowance is used up.
func (f FailingInv[E]) Inv(x E) (E, error) {
	if *f.left == 0 {
		var zero E
		return zero, f.err
	}
	*f.left--
	return f.Field.Inv(x)
}
