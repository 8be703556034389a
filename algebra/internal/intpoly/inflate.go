package intpoly

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// exponentGCD returns the gcd of the exponents of p, of positive degree with a
// non-zero constant term.
func exponentGCD(p Poly) int {
	n := 0
	for i := p.Degree(); i > 0 && n != 1; i-- {
		if p[i].Sign() != 0 {
			a, b := n, i
			for b != 0 {
				a, b = b, a%b
			}
			n = a
		}
	}
	return n
}

// deflate returns g with g(s^n) = p.
func deflate(p Poly, n int) Poly {
	if n == 1 {
		return p
	}
	g := make(Poly, p.Degree()/n+1)
	for i := range g {
		g[i] = p[i*n]
	}
	return g
}

// inflate returns p(s^n).
func inflate(p Poly, n int) Poly {
	zero := new(big.Int)
	g := make(Poly, p.Degree()*n+1)
	for i := range g {
		g[i] = zero
		if i%n == 0 {
			g[i] = p[i/n]
		}
	}
	return g
}

// inflateFactors returns the irreducible factors of h(s^l) for each
// irreducible h, none of them a multiple of s, and a prime l.
func inflateFactors(ctx context.Context, factors []Poly, l int) ([]Poly, error) {
	var out []Poly
	for _, h := range factors {
		inflated := inflate(h, l)
		irreducible, err := staysIrreducible(ctx, h, l)
		if err != nil {
			return nil, err
		}
		if irreducible {
			out = append(out, inflated)
			continue
		}
		g, err := factorDense(ctx, inflated)
		if err != nil {
			return nil, err
		}
		out = append(out, g...)
	}
	return out, nil
}

// inflationPrimes is the number of primes tried for a proof that an inflated
// polynomial is irreducible; when it is, a good part of all primes give one,
// about 1 - 1/l for each modular factor if these were independent.
const inflationPrimes = 6

// staysIrreducible reports whether h(s^l), for an irreducible h with root a
// and a prime l, is proven irreducible by a not being an l-th power: s^l - a
// is irreducible over Q(a) exactly when a is no l-th power there. Were it one,
// then so would be its norm, and its image in every residue field modulo a
// prime p that leaves h square-free of the same degree; when p = 1 mod l, an
// element of a finite field is an l-th power if and only if its norm to the
// prime field is.
//
// Source: Lang, Algebra, chapter VI, theorem 9.1; the local conditions are
// immediate.
func staysIrreducible(ctx context.Context, h Poly, l int) (bool, error) {
	if h.Degree()*l < 3 {
		return false, nil // quadratic: the discriminant decides
	}
	// The norm of a is (-1)^d h(0)/lc; times lc^l it is the integer
	// (-1)^d h(0) lc^(l-1).
	norm := new(big.Int).Exp(h.lead(), big.NewInt(int64(l-1)), nil)
	norm.Mul(norm, h[0])
	if h.Degree()%2 == 1 {
		norm.Neg(norm)
	}
	if _, ok := exactRoot(norm, l); !ok {
		return true, nil
	}
	tried := 0
	for p := uint64(3); tried < inflationPrimes; p = nextPrime(p) {
		if err := ctx.Err(); err != nil {
			return false, err
		}
		if p%uint64(l) != 1 {
			continue
		}
		f := zp.NewField(p)
		g := reduce(h, f)
		if g.Degree() < h.Degree() || g[0] == 0 || !f.IsSquareFree(g) {
			continue
		}
		tried++
		factors, err := f.FactorSquareFree(ctx, g)
		if err != nil {
			return false, err
		}
		for _, q := range factors {
			n := q[0]
			if q.Degree()%2 == 1 {
				n = f.Neg(n)
			}
			if f.Pow(n, (p-1)/uint64(l)) != 1 {
				return true, nil
			}
		}
	}
	return false, nil
}

// exactRoot returns the integer r with r^n = x for a prime n, if there is one;
// r >= 0 when n is 2.
func exactRoot(x *big.Int, n int) (*big.Int, bool) {
	if n == 2 {
		if x.Sign() < 0 {
			return nil, false
		}
		r := new(big.Int).Sqrt(x)
		return r, new(big.Int).Mul(r, r).Cmp(x) == 0
	}
	if x.Sign() == 0 {
		return new(big.Int), true
	}
	abs := new(big.Int).Abs(x)
	// Newton's iteration for the floor of the root, from above.
	e := big.NewInt(int64(n))
	e1 := big.NewInt(int64(n - 1))
	r := new(big.Int).Lsh(big.NewInt(1), uint(abs.BitLen()/n+1))
	for {
		next := new(big.Int).Exp(r, e1, nil)
		next.Quo(abs, next)
		next.Add(next, new(big.Int).Mul(r, e1))
		next.Quo(next, e)
		if next.Cmp(r) >= 0 {
			break
		}
		r = next
	}
	if new(big.Int).Exp(r, e, nil).Cmp(abs) != 0 {
		return nil, false
	}
	if x.Sign() < 0 {
		r.Neg(r)
	}
	return r, true
}
