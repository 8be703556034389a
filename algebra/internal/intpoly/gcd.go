package intpoly

import (
	"context"
	"math/big"
	"math/bits"
	"sync"

	"example.org/closedform/algebra/internal/zp"
)

// GCD returns the greatest common divisor of p and q over Z: the gcd of the
// contents times the primitive gcd with positive leading coefficient, nil
// when both are zero. Images modulo word primes are joined by the Chinese
// remainder theorem until the candidate looks final; exact division of
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
	g, err := gcdPrimitive(ctx, a, b, nil)
	if err != nil || isOne(cp) || isOne(cq) {
		return g, err
	}
	c := new(big.Int).GCD(nil, nil, cp.Abs(cp), cq.Abs(cq))
	if isOne(c) {
		return g, nil
	}
	return g.Scale(c), nil
}

// gcdPrimitive returns the gcd g of non-zero primitive polynomials, and p/g and
// q/g in over unless that is nil.
func gcdPrimitive(ctx context.Context, p, q Poly, over *[2]Poly) (g Poly, err error) {
	if over != nil {
		*over = [2]Poly{p, q}
	}
	if len(p) == 1 || len(q) == 1 {
		return one(), nil
	}
	// Each image is scaled to the leading coefficient lc, a multiple of the
	// true one, so that images of different primes fit together.
	lc := p.lead()
	if !isOne(lc) {
		lc = q.lead()
	}
	if !isOne(lc) {
		lc = new(big.Int).GCD(nil, nil, new(big.Int).Abs(p.lead()), new(big.Int).Abs(q.lead()))
	}
	buf := make(zp.Poly, len(p)+len(q))
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
		g := f.GCDInPlace(reduceTo(buf[:len(p)], p, f), reduceTo(buf[len(p):], q, f))
		if g.Degree() == 0 {
			return one(), nil // the true gcd has at most the degree of an image
		}
		if images != nil && len(g) > images.n {
			continue // unlucky prime
		}
		g = f.ScalePoly(g, f.Mul(l, f.Inv(g.Lead())))
		if images == nil || len(g) < images.n {
			images = &crt{n: len(g)}
		}
		if !images.add(g, f) {
			continue // still changing
		}
		h := positive(images.poly().primitivePart())
		if over == nil {
			if isDivisor(p, h) && isDivisor(q, h) {
				return h, nil
			}
			continue
		}
		if overP, ok := divide(p, h); ok {
			if overQ, ok := divide(q, h); ok {
				*over = [2]Poly{overP, overQ}
				return h, nil
			}
		}
	}
}

// crt is a polynomial of n coefficients known modulo a product of primes, as
// the representative with coefficients of least absolute value. Coefficient i
// is kept as
//
//	digits[0][i] + P_0 (digits[1][i] + P_1 (digits[2][i] + ...))
//
// with digits of least absolute value, so that the value is final when further
// digits are zero.
//
// Source: Knuth, The Art of Computer Programming 2, section 4.3.2 (Garner).
type crt struct {
	n      int
	primes []zp.Field
	digits [][]int64
}

// crtMargin is the number of bits by which all coefficients have to stay below
// half the modulus to look final: a wrong value passes with a chance of 2^-8
// for each coefficient.
const crtMargin = 8

// add joins an image modulo a new prime and reports whether the value looks
// final.
func (c *crt) add(g zp.Poly, f zp.Field) (final bool) {
	digits := make([]int64, c.n)
	inv := uint64(1)
	for _, p := range c.primes {
		inv = f.Mul(inv, f.FromInt64(int64(p.P)))
	}
	if inv != 1 {
		inv = f.Inv(inv)
	}
	var most uint64
	for i, x := range g {
		var known uint64
		for j := len(c.primes) - 1; j >= 0; j-- {
			known = f.Add(f.Mul(known, c.primes[j].P%f.P), f.FromInt64(c.digits[j][i]))
		}
		x = f.Sub(x, known)
		if inv != 1 {
			x = f.Mul(x, inv)
		}
		digits[i] = f.Lift(x)
		most = max(most, uint64(max(digits[i], -digits[i])))
	}
	if most != 0 || len(c.primes) == 0 {
		c.primes, c.digits = append(c.primes, f), append(c.digits, digits)
	}
	return most < f.P>>(crtMargin+1)
}

// poly returns the present value.
func (c *crt) poly() Poly {
	k := (64*len(c.primes) + bits.UintSize - 1) / bits.UintSize // primes are below 2^62
	a := newFlat(c.n, k)
	last := len(c.primes) - 1
	for i := range c.n {
		v := a.at(i)
		addWord(v, c.digits[last][i])
		for j := last - 1; j >= 0; j-- {
			scaleWords(v, c.primes[j].P)
			addWord(v, c.digits[j][i])
		}
	}
	return a.poly()
}

// primeTable holds the primes below 2^62 from the top, found as needed.
var primeTable struct {
	sync.RWMutex
	primes []uint64
}

// gcdPrime returns the i-th prime below 2^62, counted down from 0.
func gcdPrime(i int) uint64 {
	primeTable.RLock()
	if i < len(primeTable.primes) {
		p := primeTable.primes[i]
		primeTable.RUnlock()
		return p
	}
	primeTable.RUnlock()
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
