package intpoly

import (
	"math/bits"

	"example.org/closedform/algebra/internal/zp"
)

// squareFreeImage returns the square-free decomposition of a primitive p of
// positive degree with positive leading coefficient, or nil: it is found
// modulo one prime P that keeps the degree, lifted to coefficients of least
// absolute value, and returned only when the parts multiply up to p over Z.
// The parts are then square-free and coprime because they are modulo P.
func squareFreeImage(p Poly) []Factor {
	f := zp.NewField(gcdPrime(0))
	image := reduce(p, f)
	if len(image) < len(p) {
		return nil
	}
	lead := image.Lead()
	var parts []Factor
	for _, part := range f.SquareFreePoly(image) {
		if part.P.Degree() == 0 {
			continue
		}
		// lc(p) is a multiple of the true leading coefficient.
		a := newFlat(len(part.P), 64/bits.UintSize)
		for i, c := range f.ScalePoly(part.P, lead) {
			addWord(a.at(i), f.Lift(c))
		}
		q := a.poly()
		if len(q) != len(part.P) {
			return nil
		}
		parts = append(parts, Factor{positive(q.primitivePart()), part.Mult})
	}
	if !isProduct(p, parts) {
		return nil
	}
	return parts
}

// isProduct reports whether p is the product of the given powers. Both sides
// are compared modulo as many primes as their sizes ask for: the coefficients
// of a product are at most the product of the sums of absolute values.
func isProduct(p Poly, parts []Factor) bool {
	size := 0 // bits of a coefficient of the product
	for _, part := range parts {
		size += part.Mult * (part.P.maxBits() + bits.Len(uint(len(part.P))))
	}
	size = max(size, p.maxBits()) + 1
	buf := make(zp.Poly, len(p))
	for i, known := 0, 0; known < size; i++ {
		f := zp.NewField(gcdPrime(i))
		known += bits.Len64(f.P) - 1
		prod := zp.Poly{1}
		for _, part := range parts {
			power := reduce(part.P, f)
			for range part.Mult {
				prod = f.MulPoly(prod, power)
			}
		}
		want := reduceTo(buf, p, f)
		if len(prod) != len(want) {
			return false
		}
		for i, c := range want {
			if prod[i] != c {
				return false
			}
		}
	}
	return true
}
