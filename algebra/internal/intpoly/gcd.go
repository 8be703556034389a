package intpoly

import (
	"context"
	"math/big"
	"sync"

	"example.org/closedform/algebra/internal/zp"
)

// GCD returns the greatest common divisor of p and q over Z: the gcd of the
// contents times the primitive gcd with positive leading coefficient, nil
// when both are zero. Images modulo word primes are joined by the Chinese
// remainder theorem until the candidate stops changing; exact division of
// both arguments proves it. Cost: (coefficient words of the gcd) times
// deg p deg q word products.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, section 6.7.
func GCD(p, q Poly) Poly {
	g, _ := gcd(context.Background(), p, q) // never cancelled
	return g
}

// gcd is GCD with cancellation.
func gcd(ctx context.Context, p, q Poly) (Poly, error) {
	if len(p) == 0 || len(q) == 0 {
		if len(p) == 0 {
			p = q
		}
		c, pp := p.Primitive()
		return pp.Scale(c.Abs(c)), nil
	}
	cp, a := p.Primitive()
	cq, b := q.Primitive()
	c := new(big.Int).GCD(nil, nil, cp.Abs(cp), cq.Abs(cq))
	g, err := gcdPrimitive(ctx, a, b)
	if err != nil || c.IsInt64() && c.Int64() == 1 {
		return g, err
	}
	return g.Scale(c), nil
}

// gcdPrimitive returns the gcd of non-zero primitive polynomials.
func gcdPrimitive(ctx context.Context, p, q Poly) (Poly, error) {
	one := Poly{big.NewInt(1)}
	if len(p) == 1 || len(q) == 1 {
		return one, nil
	}
	// Each image is scaled to the leading coefficient lc, a multiple of the
	// true one, so that images of different primes fit together.
	lc := new(big.Int).GCD(nil, nil, new(big.Int).Abs(p.lead()), new(big.Int).Abs(q.lead()))
	var images *crt
	for i := 0; ; i++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		f := zp.NewField(gcdPrime(i))
		l := f.FromBig(lc)
		if l == 0 {
			continue
		}
		g := f.GCDPoly(reduce(p, f), reduce(q, f))
		if g.Degree() == 0 {
			return one, nil // the true gcd has at most the degree of an image
		}
		g = f.ScalePoly(g, l)
		if images != nil && len(g) > len(images.value) {
			continue // unlucky prime
		}
		if images == nil || len(g) < len(images.value) {
			images = newCRT(g, f)
			continue
		}
		if images.add(g, f) {
			continue // still changing
		}
		_, h := images.value.Primitive()
		if _, ok := DivExact(p, h); !ok {
			continue
		}
		if _, ok := DivExact(q, h); ok {
			return h, nil
		}
	}
}

// crt is a polynomial known modulo a product of primes, as the representative
// with coefficients of least absolute value.
type crt struct {
	value   Poly // all coefficients kept, the last one may be zero
	modulus *big.Int
}

// newCRT starts from one image.
func newCRT(g zp.Poly, f zp.Field) *crt {
	c := &crt{value: make(Poly, len(g)), modulus: new(big.Int).SetUint64(f.P)}
	for i, x := range g {
		c.value[i] = big.NewInt(f.Lift(x))
	}
	return c
}

// add joins an image modulo a new prime and reports whether the value changed.
func (c *crt) add(g zp.Poly, f zp.Field) (changed bool) {
	inv := f.Inv(f.FromBig(c.modulus))
	var t big.Int
	for i, x := range g {
		d := f.Mul(f.Sub(x, f.FromBig(c.value[i])), inv)
		if d != 0 {
			changed = true
			t.SetInt64(f.Lift(d))
			c.value[i] = new(big.Int).Add(c.value[i], t.Mul(&t, c.modulus))
		}
	}
	c.modulus = new(big.Int).Mul(c.modulus, t.SetUint64(f.P))
	return changed
}

// primeTable holds the primes below 2^62 from the top, found as needed.
var primeTable struct {
	sync.Mutex
	primes []uint64
}

// gcdPrime returns the i-th prime below 2^62, counted down from 0.
func gcdPrime(i int) uint64 {
	primeTable.Lock()
	defer primeTable.Unlock()
	for len(primeTable.primes) <= i {
		last := uint64(zp.MaxPrime)
		if n := len(primeTable.primes); n > 0 {
			last = primeTable.primes[n-1]
		}
		primeTable.primes = append(primeTable.primes, zp.PrimeBelow(last))
	}
	return primeTable.primes[i]
}
