package algebratest

import (
	"testing"

	"example.org/closedform/algebra"
)

// TestQuoRem checks p = q d + r with deg r < deg d, that q and r are the only
// such pair, and that operands stay.
func TestQuoRem[E any](t *testing.T, f algebra.Field[E], gen Generator[algebra.Poly[E]]) {
	t.Helper()
	rng := Rand(t)
	r := PolyRing[E]{f}
	for range rounds {
		p, d := gen(rng), gen(rng)
		if d.IsZero() {
			continue
		}
		check := unchanged(t, r, p, d)
		quo, rem := p.QuoRem(f, d)
		law(t, r, "q d + r = p", quo.Mul(d).Add(rem), p, p, d)
		if rem.Degree() >= d.Degree() {
			t.Fatalf("the remainder %v is not of lower degree than %v", rem, d)
		}
		law(t, r, "Rem", p.Rem(f, d), rem, p, d)
		want := r.Zero()
		if rem.IsZero() {
			want = quo
		}
		if e, ok := p.DivExact(f, d); ok != rem.IsZero() || !e.Equal(want) {
			t.Fatalf("DivExact(%v, %v) = %v, %v, want %v, %v", p, d, e, ok, want, rem.IsZero())
		}
		// Division undoes the multiplication of an arbitrary quotient.
		s := gen(rng)
		if e, ok := s.Mul(d).DivExact(f, d); !ok || !e.Equal(s) {
			t.Fatalf("DivExact(%v, %v) = %v, %v, want %v, true", s.Mul(d), d, e, ok, s)
		}
		quo, again := s.Mul(d).Add(rem).QuoRem(f, d)
		law(t, r, "(s d + r) / d = s", quo, s, s, d, rem)
		law(t, r, "(s d + r) mod d = r", again, rem, s, d, rem)
		check()
	}
}

// TestGCD checks the laws of greatest common divisors, Bezout's identity, and
// that operands stay.
func TestGCD[E any](t *testing.T, f algebra.Field[E], gen Generator[algebra.Poly[E]]) {
	t.Helper()
	rng := Rand(t)
	r := PolyRing[E]{f}
	zero := r.Zero()
	law(t, r, "gcd(0, 0) = 0", algebra.GCD(f, zero, zero), zero)
	for range rounds / 2 {
		p, q, d := related(r, gen, rng)
		check := unchanged(t, r, p, q, d)
		g := algebra.GCD(f, p, q)
		law(t, r, "gcd(p, q) = gcd(q, p)", algebra.GCD(f, q, p), g, p, q)
		law(t, r, "gcd(p, 0) = monic p", algebra.GCD(f, p, zero), p.Monic(f), p)
		law(t, r, "gcd(0, p) = monic p", algebra.GCD(f, zero, p), p.Monic(f), p)
		law(t, r, "gcd(p, p) = monic p", algebra.GCD(f, p, p), p.Monic(f), p)
		law(t, r, "gcd is monic", g.Monic(f), g, p, q)
		law(t, r, "gcd(p d, q d) = monic d gcd(p, q)", algebra.GCD(f, p.Mul(d), q.Mul(d)), d.Monic(f).Mul(g), p, q, d)
		law(t, r, "gcd(p + q d, q) = gcd(p, q)", algebra.GCD(f, p.Add(q.Mul(d)), q), g, p, q, d)
		testBezout(t, f, p, q, g)
		testBezout(t, f, p.Mul(d), q.Mul(d), d.Monic(f).Mul(g))
		check()
	}
}

func testBezout[E any](t *testing.T, f algebra.Field[E], p, q, want algebra.Poly[E]) {
	t.Helper()
	r := PolyRing[E]{f}
	g, u, v := algebra.ExtendedGCD(f, p, q)
	law(t, r, "ExtendedGCD", g, want, p, q)
	law(t, r, "u p + v q = g", u.Mul(p).Add(v.Mul(q)), g, p, q)
	if g.IsZero() {
		return
	}
	if u.Degree() >= max(1, q.Degree()-g.Degree()) || v.Degree() >= max(1, p.Degree()-g.Degree()) {
		t.Fatalf("cofactors %v, %v of %v and %v are too long", u, v, p, q)
	}
	if p.IsZero() || q.IsZero() {
		return
	}
	for _, x := range []algebra.Poly[E]{p, q} {
		if _, ok := x.DivExact(f, g); !ok {
			t.Fatalf("%v does not divide %v", g, x)
		}
	}
}

// TestSquareFree checks that the square-free decomposition multiplies back to
// the monic polynomial, and that its parts are monic, square-free, pairwise
// coprime and in ascending order of multiplicity.
func TestSquareFree[E any](t *testing.T, f algebra.Field[E], gen Generator[algebra.Poly[E]]) {
	t.Helper()
	rng := Rand(t)
	r := PolyRing[E]{f}
	for range rounds / 3 {
		a, b, c := related(r, gen, rng)
		p := a.Mul(b.Pow(2)).Mul(c.Pow(3))
		if p.IsZero() {
			continue
		}
		check := unchanged(t, r, p)
		product, last := r.One(), 0
		parts := algebra.SquareFree(f, p)
		for i, part := range parts {
			if part.Mult <= last || part.P.Degree() < 1 {
				t.Fatalf("part %d of %v is (%v)^%d after multiplicity %d", i, p, part.P, part.Mult, last)
			}
			last = part.Mult
			law(t, r, "monic part", part.P.Monic(f), part.P, p)
			law(t, r, "gcd(part, part')", algebra.GCD(f, part.P, part.P.Derivative()), r.One(), part.P)
			for _, other := range parts[:i] {
				law(t, r, "gcd of parts", algebra.GCD(f, part.P, other.P), r.One(), part.P, other.P)
			}
			product = product.Mul(part.P.Pow(part.Mult))
		}
		law(t, r, "product of the parts", product, p.Monic(f), p)
		check()
	}
}
