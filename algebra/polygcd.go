package algebra

// GCD returns the monic greatest common divisor of p and q by Euclid's
// algorithm; over Q by the modular method on integer polynomials. The gcd of
// two zeros is zero.
func GCD[E any](f Field[E], p, q Poly[E]) Poly[E] {
	if g, ok := any(f).(polyGCDer[E]); ok {
		return g.gcdPoly(p, q)
	}
	return euclid(f, p, q)
}

func euclid[E any](f Field[E], p, q Poly[E]) Poly[E] {
	for !q.IsZero() {
		p, q = q, p.Rem(f, q).Monic(f)
	}
	return p.Monic(f)
}

// polyGCDer is the capability of a better gcd than Euclid's.
type polyGCDer[E any] interface {
	gcdPoly(p, q Poly[E]) Poly[E]
}

// ExtendedGCD returns the monic g = gcd(p, q) and u, v with u p + v q = g,
// deg u < max(1, deg q/g) and deg v < max(1, deg p/g).
func ExtendedGCD[E any](f Field[E], p, q Poly[E]) (g, u, v Poly[E]) {
	one := Constant[E](f, f.One())
	zero := Poly[E]{ring: f}
	r0, r1 := p, q
	u0, u1 := one, zero
	v0, v1 := zero, one
	for !r1.IsZero() {
		quo, rem := r0.QuoRem(f, r1)
		r0, r1 = r1, rem
		u0, u1 = u1, u0.Sub(quo.Mul(u1))
		v0, v1 = v1, v0.Sub(quo.Mul(v1))
		if !r1.IsZero() && !f.Equal(r1.Lead(), f.One()) {
			// Keeping the remainders monic curbs the growth of coefficients over Q.
			c := mustInv(f, r1.Lead())
			r1, u1, v1 = r1.Scale(c), u1.Scale(c), v1.Scale(c)
		}
	}
	if r0.IsZero() {
		return r0, u0, v0
	}
	c := mustInv(f, r0.Lead())
	return r0.Scale(c), u0.Scale(c), v0.Scale(c)
}

// squareFreer is the capability of a better square-free decomposition.
type squareFreer[E any] interface {
	squareFree(p Poly[E]) []Factor[E]
}

// SquareFree returns the square-free decomposition of p: monic, pairwise
// coprime, square-free factors in the order of their multiplicity (Yun, On
// square-free decomposition algorithms, 1976; characteristic 0).
func SquareFree[E any](f Field[E], p Poly[E]) []Factor[E] {
	if p.Degree() < 1 {
		return nil
	}
	if s, ok := any(f).(squareFreer[E]); ok {
		return s.squareFree(p)
	}
	return yun(f, p)
}

func yun[E any](f Field[E], p Poly[E]) []Factor[E] {
	p = p.Monic(f)
	dp := p.Derivative()
	g := GCD(f, p, dp)
	b, _ := p.DivExact(f, g)
	c, _ := dp.DivExact(f, g)
	var out []Factor[E]
	for i := 1; b.Degree() > 0; i++ {
		d := c.Sub(b.Derivative())
		a := GCD(f, b, d)
		if a.Degree() > 0 {
			out = append(out, Factor[E]{P: a, Mult: i})
		}
		b, _ = b.DivExact(f, a)
		c, _ = d.DivExact(f, a)
	}
	return out
}
