package algebra_test

import (
	"testing"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

type (
	ratPoly = algebra.Poly[algebra.Rat]
	number  = algebra.Extension[algebra.Rat]
)

// ints returns the polynomial over Q with these coefficients, the constant one
// first.
func ints(c ...int64) ratPoly { return algebra.PolyFromInts(c...) }

// plainQ is Q without its fast methods.
var plainQ = algebratest.Plain[algebra.Rat]{Field: algebra.Q}

// numberFields returns extensions of Q by a root of an irreducible polynomial.
func numberFields() map[string]*number {
	return map[string]*number{
		"sqrt2":    algebra.NewExtension(algebra.Q, ints(-2, 0, 1), "r"),
		"gauss":    algebra.NewExtension(algebra.Q, ints(1, 0, 1), "i"),
		"plastic":  algebra.NewExtension(algebra.Q, ints(-1, -1, 0, 1), "p"), // discriminant -23
		"quintic":  algebra.NewExtension(algebra.Q, ints(-1, -1, 0, 0, 0, 1), "z"),
		"notMonic": algebra.NewExtension(algebra.Q, ints(-3, 0, 2), "w"),
		"linear":   algebra.NewExtension(algebra.Q, ints(-3, 2), "l"),
	}
}

// tower returns Q(sqrt 2)(cube root of sqrt 2).
func tower() (*number, *algebra.Extension[ratPoly]) {
	k := numberFields()["sqrt2"]
	zero := k.Zero()
	p := algebra.NewPoly(k, k.Neg(k.Root()), zero, zero, k.One())
	return k, algebra.NewExtension(k, p, "c")
}

func ratMatrix(m, n int, entries ...int64) algebra.Matrix[algebra.Rat] {
	e := make([]algebra.Rat, len(entries))
	for i, x := range entries {
		e[i] = algebra.RatFromInt(x)
	}
	return algebra.NewMatrix(algebra.Q, m, n, e...)
}

// wantPoly requires two polynomials to be equal.
func wantPoly[E any](t *testing.T, what string, got, want algebra.Poly[E]) {
	t.Helper()
	if !got.Equal(want) || !want.Equal(got) {
		t.Errorf("%s = %v, want %v", what, got, want)
	}
}

// wantMatrix requires two matrices to be equal.
func wantMatrix[E any](t *testing.T, what string, got, want algebra.Matrix[E]) {
	t.Helper()
	if !got.Equal(want) || !want.Equal(got) {
		t.Errorf("%s = %v, want %v", what, got, want)
	}
}
