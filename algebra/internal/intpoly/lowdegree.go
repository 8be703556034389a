package intpoly

import (
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// factorQuadratic factors a primitive a s^2 + b s + c with a > 0 by its
// discriminant.
func factorQuadratic(f Poly) []Poly {
	a, b, c := f[2], f[1], f[0]
	d := new(big.Int).Mul(b, b)
	t := new(big.Int).Mul(a, c)
	d.Sub(d, t.Lsh(t, 2))
	root, ok := exactRoot(d, 2)
	if !ok {
		return []Poly{f}
	}
	// 2a s + b - root is a multiple of one factor.
	_, g := New(root.Sub(b, root), t.Lsh(a, 1)).Primitive()
	return []Poly{g, quotient(f, g)}
}

// cubicBits bounds the coefficients, in bits, for [factorCubic].
const cubicBits = 48

// factorCubic factors a primitive square-free cubic with positive leading
// coefficient and coefficients below 2^cubicBits: it is irreducible unless it
// has a rational root. A root times the leading coefficient is an integer of
// size at most |lc| + max |f_i| < 2^(cubicBits+1) (Cauchy), so it is known from
// its residue modulo a power above 2^(cubicBits+2) of a small prime. One is
// taken for which all roots are simple, so that each lifts in one way.
//
// Skipped primes divide the leading coefficient or the discriminant, which is
// below 2^(4 cubicBits + 6); the product of the primes below 2^8 is larger, so
// a power of the prime taken lies between 2^54 and 2^62.
//
// Source: Cohen, A Course in Computational Algebraic Number Theory, sections
// 3.5.1 and 3.5.2.
func factorCubic(f Poly) []Poly {
	var prime zp.Field
	var roots []uint64
	for tried, p := 0, uint64(5); tried < cubicPrimes; p = nextPrime(p) {
		field := zp.NewField(p)
		r, ok := simpleRoots(reduce(f, field), field)
		if !ok {
			continue
		}
		if len(r) == 0 {
			return []Poly{f}
		}
		if tried == 0 || len(r) < len(roots) {
			prime, roots = field, r
		}
		tried++
	}
	power := prime
	for power.P <= (zp.MaxPrime-1)/prime.P {
		power.P *= prime.P
	}
	a := reduce(f, power)
	for _, r := range roots {
		u := power.Lift(power.Mul(a.Lead(), newtonRoot(a, r, power)))
		_, g := Poly{big.NewInt(-u), f.lead()}.Primitive()
		if q, ok := divide(f, g); ok {
			return append([]Poly{g}, factorQuadratic(q)...)
		}
	}
	return []Poly{f}
}

// cubicPrimes is the number of primes tried for a cubic without roots.
const cubicPrimes = 3

// simpleRoots returns the roots of a cubic modulo a small prime, ok false when
// a root is multiple or the degree is lower.
func simpleRoots(a zp.Poly, f zp.Field) (roots []uint64, ok bool) {
	if len(a) < 4 {
		return nil, false
	}
	d := f.DerivativePoly(a)
	for x := range f.P {
		if (((a[3]*x+a[2])*x+a[1])*x+a[0])%f.P == 0 { // no overflow for small primes
			if f.EvalPoly(d, x) == 0 {
				return nil, false
			}
			roots = append(roots, x)
		}
	}
	return roots, true
}

// newtonRoot returns the root of a, modulo a prime power, that is the simple
// root r modulo the prime. The precision doubles with every step.
func newtonRoot(a zp.Poly, r uint64, f zp.Field) uint64 {
	d := f.DerivativePoly(a)
	for {
		v := f.EvalPoly(a, r)
		if v == 0 {
			return r
		}
		r = f.Sub(r, f.Mul(v, f.Inv(f.EvalPoly(d, r))))
	}
}
