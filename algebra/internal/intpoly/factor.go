package intpoly

import (
	"context"
	"math/big"
	"slices"

	"example.org/closedform/algebra/internal/zp"
)

// FactorZ returns the factorisation of p over Z,
//
//	p = content prod factors[i].P^factors[i].Mult,
//
// with irreducible, primitive, pairwise different factors of positive leading
// coefficient, ordered by degree, then by coefficients from the top, and a
// content carrying the sign. Constants have no factors; the zero polynomial
// has content 0. The result is proven: the factors are exact divisors, and
// each is irreducible by an exhaustive search or a lattice argument under
// rigorous bounds. The only error is ctx.Err().
func FactorZ(ctx context.Context, p Poly) (content *big.Int, factors []Factor, err error) {
	if err := ctx.Err(); err != nil {
		return nil, nil, err
	}
	content, p = p.Primitive()
	if len(p) < 2 {
		return content, nil, nil
	}
	low := 0
	for p[low].Sign() == 0 {
		low++
	}
	if low > 0 {
		factors = append(factors, Factor{New(big.NewInt(0), big.NewInt(1)), low})
		p = p[low:]
	}
	parts, err := squareFree(ctx, p)
	if err != nil {
		return nil, nil, err
	}
	for _, part := range parts {
		irreducible, err := factorSquareFree(ctx, part.P)
		if err != nil {
			return nil, nil, err
		}
		for _, g := range irreducible {
			factors = append(factors, Factor{g, part.Mult})
		}
	}
	slices.SortFunc(factors, func(a, b Factor) int { return compare(a.P, b.P) })
	return content, factors, nil
}

// factorSquareFree factors a primitive square-free polynomial with positive
// leading coefficient, positive degree and non-zero constant term. A
// polynomial g(s^n) is factored by way of g: irreducible factors are inflated
// by one prime divisor of n at a time.
func factorSquareFree(ctx context.Context, f Poly) ([]Poly, error) {
	n := exponentGCD(f)
	factors, err := factorDense(ctx, deflate(f, n))
	if err != nil {
		return nil, err
	}
	for l := 2; n > 1; l++ {
		for n%l == 0 {
			n /= l
			if factors, err = inflateFactors(ctx, factors, l); err != nil {
				return nil, err
			}
		}
	}
	return factors, nil
}

// factorDense factors a polynomial as factorSquareFree does, without a look at
// its exponents: low degrees by their roots, others modulo a well chosen prime,
// by Hensel lifting and recombination.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, chapter 15.
func factorDense(ctx context.Context, f Poly) ([]Poly, error) {
	if f.Degree() < 2 {
		return []Poly{f}, nil
	}
	if f.Degree() == 2 {
		return factorQuadratic(f), nil
	}
	if f.Degree() == 3 && f.maxBits() <= cubicBits {
		return factorCubic(f), nil
	}
	return factorLifting(ctx, f)
}

// factorLifting is factorDense without the special ways of low degree.
func factorLifting(ctx context.Context, f Poly) ([]Poly, error) {
	choice, err := choosePrime(ctx, f)
	if err != nil {
		return nil, err
	}
	if choice.irreducible() {
		return []Poly{f}, nil
	}
	local, err := choice.field.FactorParts(ctx, choice.parts)
	if err != nil {
		return nil, err
	}
	l := &lift{f: f, field: choice.field, bound: factorBound(f)}
	l.start(local)
	return liftAndRecombine(ctx, l, choice.degrees)
}

// primeChoice is the outcome of looking at a polynomial modulo a few primes.
type primeChoice struct {
	field   zp.Field        // the prime with the fewest modular factors
	parts   []zp.DegreePart // the polynomial modulo that prime
	degrees *big.Int        // bit d: the primes leave room for a factor of degree d
	degree  int             // of the polynomial
}

// irreducible reports whether no proper factor has a possible degree.
func (c *primeChoice) irreducible() bool {
	t := new(big.Int).SetBit(c.degrees, 0, 0)
	t.SetBit(t, c.degree, 0)
	return t.Sign() == 0
}

// The search among primes ends when this many good ones have been seen, or
// have in a row neither narrowed the degrees nor given fewer factors.
const (
	maxPrimes  = 14
	idlePrimes = 4
)

// choosePrime factors f by degrees modulo small primes that keep its degree
// and square-freeness. The degrees of true factors are sums of degrees of
// modular factors for each of them.
func choosePrime(ctx context.Context, f Poly) (*primeChoice, error) {
	n := f.Degree()
	c := &primeChoice{degree: n}
	fewest := 0
	for good, idle, p := 0, 0, uint64(3); ; p = nextPrime(p) {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		field := zp.NewField(p)
		g := reduce(f, field)
		if g.Degree() < n || !field.IsSquareFree(g) {
			continue
		}
		good++
		parts, err := field.DistinctDegree(ctx, g)
		if err != nil {
			return nil, err
		}
		count, sums := degreeSums(parts)
		idle++
		if c.degrees == nil {
			c.degrees = sums
		} else {
			both := new(big.Int).And(sums, c.degrees)
			if both.Cmp(c.degrees) != 0 {
				idle = 0
			}
			c.degrees = both
		}
		if fewest == 0 || count < fewest {
			c.field, c.parts, fewest = field, parts, count
			idle = 0
		}
		if c.irreducible() || good >= maxPrimes || idle >= idlePrimes {
			return c, nil
		}
	}
}

// degreeSums returns the number of irreducible factors and the set of degrees
// of all their products, as bits.
func degreeSums(parts []zp.DegreePart) (count int, sums *big.Int) {
	sums = big.NewInt(1)
	for _, part := range parts {
		for range part.Count() {
			count++
			sums.Or(sums, new(big.Int).Lsh(sums, uint(part.Degree)))
		}
	}
	return count, sums
}

// nextPrime returns the smallest prime above p, for small odd p.
func nextPrime(p uint64) uint64 {
	for p += 2; ; p += 2 {
		prime := true
		for d := uint64(3); d*d <= p; d += 2 {
			if p%d == 0 {
				prime = false
				break
			}
		}
		if prime {
			return p
		}
	}
}
