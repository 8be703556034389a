package algebra

import (
	"context"

	"example.org/closedform/algebra/internal/mpoly"
	"example.org/closedform/algebra/internal/zp"
)

// Properties of a polynomial over a FunctionField that hold for one of its
// specialisations hold for itself: to be square-free, irreducible, or coprime to another.

// squareFree returns the square-free decomposition. Most polynomials are
// square-free, which an image modulo a prime proves; the others go the general
// way.
func (f *FunctionField) squareFree(p Poly[Fraction]) []Factor[Fraction] {
	p = p.Monic(f)
	if f.surd || !f.squareFreeModulo(p) {
		return yun[Fraction](f, p)
	}
	return []Factor[Fraction]{{P: p, Mult: 1}}
}

// specialPrimes is the number of primes that are tried.
const specialPrimes = 40

// squareFreeModulo tells whether an image of a monic p modulo a word-size prime is
// square-free.
func (f *FunctionField) squareFreeModulo(p Poly[Fraction]) bool {
	field, images := f.imagesModulo(p)
	return images != nil && field.IsSquareFree(images[0])
}

// coprimeModulo tells whether images of p and q modulo a word-size prime, one of
// them monic, are coprime.
func (f *FunctionField) coprimeModulo(p, q Poly[Fraction]) bool {
	field, images := f.imagesModulo(p.Monic(f), q)
	return images != nil && len(field.GCDPoly(images[0], images[1])) == 1
}

// imagesModulo returns images of polynomials modulo a word-size prime, at a root
// of the minimal polynomial of a and at small integers for the variables; nil if
// there are none.
func (f *FunctionField) imagesModulo(polys ...Poly[Fraction]) (zp.Field, []zp.Poly) {
	prime := uint64(zp.MaxPrime)
next:
	for tries := range specialPrimes {
		prime = zp.PrimeBelow(prime)
		field := zp.NewField(prime)
		values := make([]uint64, f.size())
		for i := range values {
			values[i] = field.FromInt64(int64(1000003*(i+1) + 7919*tries))
		}
		if f.degree > 1 {
			root, ok := f.rootModulo(field)
			if !ok {
				continue
			}
			values[0] = root
		}
		var images []zp.Poly
		for _, p := range polys {
			image := make([]uint64, len(p.c))
			for i, c := range p.c {
				den := uint64(1)
				if !c.den.IsZero() {
					den = valueModulo(field, c.den, values)
				}
				if den == 0 {
					continue next
				}
				image[i] = field.Mul(valueModulo(field, c.num, values), field.Inv(den))
			}
			images = append(images, field.NewPoly(image...))
		}
		return field, images
	}
	return zp.Field{}, nil
}

// rootModulo returns a root of the minimal polynomial of a modulo a prime.
func (f *FunctionField) rootModulo(field zp.Field) (uint64, bool) {
	parts := f.mod.Coefficients(0)
	c := make([]uint64, len(parts))
	for i, x := range parts {
		c[i] = field.FromBig(x.ConstantTerm())
	}
	m := field.NewPoly(c...)
	if !field.IsSquareFree(m) {
		return 0, false
	}
	degrees, err := field.DistinctDegree(context.Background(), m)
	if err != nil {
		return 0, false
	}
	for _, d := range degrees {
		if d.Degree != 1 {
			continue
		}
		lines, err := field.EqualDegree(context.Background(), d.P, 1)
		if err != nil || len(lines) == 0 {
			return 0, false
		}
		return field.Neg(lines[0][0]), true
	}
	return 0, false
}

func valueModulo(field zp.Field, p mpoly.Poly, values []uint64) uint64 {
	sum := uint64(0)
	for t := range p.Terms() {
		x := field.FromBig(t.Coef)
		for i, e := range t.Exp {
			if e > 0 {
				x = field.Mul(x, field.Pow(values[i], uint64(e)))
			}
		}
		sum = field.Add(sum, x)
	}
	return sum
}

// irreducibleAt tells whether a monic p is irreducible because it is so with small
// integers for the variables, over Q(a).
func (f *FunctionField) irreducibleAt(ctx context.Context, p Poly[Fraction]) (bool, error) {
	if f.surd || len(f.names) == 0 {
		return false, nil
	}
	k := f.numbers()
	for _, start := range []int64{2, 3, 5} {
		values := make([]Fraction, len(f.names))
		for i := range values {
			values[i] = k.FromInt(start + int64(i)*start*start)
		}
		root := Fraction{}
		if k.degree > 1 {
			root = k.RootElement()
		}
		c := make([]Fraction, len(p.c))
		defined := true
		for i, x := range p.c {
			y, err := f.Map(x, k, root, values)
			if err != nil {
				defined = false
				break
			}
			c[i] = y
		}
		if !defined {
			continue
		}
		factors, err := k.FactorPoly(ctx, NewPoly[Fraction](k, c...))
		if err != nil {
			return false, err
		}
		if len(factors) == 1 && factors[0].Mult == 1 {
			return true, nil
		}
	}
	return false, nil
}
