package mpoly

import (
	"context"
	"math/big"
)

// DivExact returns p / q when q divides p over Z, and ok false when it does
// not. It panics when q is zero. Degrees, the last terms and values at 1 and -1
// refuse most others at once. Cost: a sum for each product of a term of the
// quotient and one of q.
func (p Poly) DivExact(q Poly) (quo Poly, ok bool) {
	quo, ok, _ = divide(context.Background(), p, q)
	return quo, ok
}

// divide is DivExact with cancellation.
func divide(ctx context.Context, p, q Poly) (quo Poly, ok bool, err error) {
	n := join(p, q)
	if q.IsZero() {
		panic("mpoly: division by zero")
	}
	if p.IsZero() {
		return Poly{n: n}, true, nil
	}
	if !mayDivide(q, p) {
		return Poly{}, false, nil
	}
	if q.Len() == 1 {
		quo, ok = divTerm(p, q)
		return quo, ok, nil
	}
	degrees := p.maxExponents()
	over := q.maxExponents()
	for i, x := range degrees {
		if (x|guards-over[i])&guards != guards {
			return Poly{}, false, nil
		}
	}
	pk, packed := newPacking(n, degrees, true)
	if !packed {
		return divideByMerging(ctx, p, q)
	}
	if p.bigs == nil && q.bigs == nil {
		d := newDivision(ctx, pk, p, q, degrees, over)
		ok, err = d.words(p, q)
		d.table.release()
		if err != nil || !d.spilled {
			return d.result(n, ok), ok, err
		}
	}
	d := newDivision(ctx, pk, p, q, degrees, over)
	ok, err = d.bigs(p, q)
	d.table.release()
	return d.result(n, ok), ok, err
}

// mayDivide reports false only if q does not divide p: the first and the last
// terms and the values at (1, ..., 1) and (-1, ..., -1) of a divisor divide.
func mayDivide(q, p Poly) bool {
	a, b := p.Len()-1, q.Len()-1
	if !dividesMonomial(q.exp(0), p.exp(0)) || !dividesMonomial(q.exp(b), p.exp(a)) {
		return false
	}
	if p.bigs != nil || q.bigs != nil {
		return true
	}
	if p.words[0]%q.words[0] != 0 || p.words[a]%q.words[b] != 0 {
		return false
	}
	pe, po, ok := p.values()
	if !ok {
		return true
	}
	qe, qo, ok := q.values()
	return !ok || divides(qe, pe) && divides(qo, po)
}

// divides reports whether a divides b.
func divides(a, b int64) bool {
	if a == 0 {
		return b == 0
	}
	return b%a == 0
}

// values returns p(1, ..., 1) and p(-1, ..., -1) when the coefficients are far
// enough from the word border.
func (p Poly) values() (at1, atMinus1 int64, ok bool) {
	w := wordsOf(p.n)
	for i, c := range p.words {
		if c > 1<<40 || c < -1<<40 || i > 1<<20 {
			return 0, 0, false
		}
		at1 += c
		var odd uint64
		for _, x := range p.exps[i*w : i*w+w] {
			odd ^= x
		}
		odd ^= odd >> 32
		odd ^= odd >> 16
		if odd&1 != 0 {
			c = -c
		}
		atMinus1 += c
	}
	return at1, atMinus1, true
}

// divTerm returns p / q for q with a single term.
func divTerm(p, q Poly) (quo Poly, ok bool) {
	e := q.exp(0)
	for i := range p.Len() {
		if !dividesMonomial(e, p.exp(i)) {
			return Poly{}, false
		}
	}
	c := q.coef(0)
	if c.IsInt64() && p.bigs == nil {
		d := c.Int64()
		for _, x := range p.words {
			if x%d != 0 {
				return Poly{}, false
			}
		}
	} else {
		var r big.Int
		for i := range p.Len() {
			if r.Rem(p.coef(i), c).Sign() != 0 {
				return Poly{}, false
			}
		}
	}
	return p.divMonomial(e).DivInt(c), true
}

// divideByMerging is divide for monomials that do not fit a word.
func divideByMerging(ctx context.Context, p, q Poly) (quo Poly, ok bool, err error) {
	n := join(p, q)
	b := newBuilder(n, 8)
	e := make([]uint64, wordsOf(n))
	for !p.IsZero() {
		if err := ctx.Err(); err != nil {
			return Poly{}, false, err
		}
		if !dividesMonomial(q.exp(0), p.exp(0)) {
			return Poly{}, false, nil
		}
		for i, x := range p.exp(0) {
			e[i] = x - q.exp(0)[i]
		}
		c, r := new(big.Int).QuoRem(p.coef(0), q.coef(0), new(big.Int))
		if r.Sign() != 0 {
			return Poly{}, false, nil
		}
		b.addBig(e, c)
		p = p.Sub(q.mulTerm(Constant(n, c).mulMonomial(e), 0))
	}
	return b.poly(), true, nil
}

// DivInt returns p / c for a divisor c of all coefficients; that it is one is
// the caller's promise.
func (p Poly) DivInt(c *big.Int) Poly {
	if c.Sign() == 0 {
		panic("mpoly: division by zero")
	}
	if c.IsInt64() && c.Int64() == 1 {
		return p
	}
	r := p
	if p.bigs == nil && fitsWord(c) {
		d := c.Int64()
		r.words = make([]int64, len(p.words))
		for i, x := range p.words {
			r.words[i] = x / d
		}
		return r
	}
	r.words, r.bigs = nil, make([]*big.Int, p.Len())
	for i := range r.bigs {
		r.bigs[i] = new(big.Int).Quo(p.coef(i), c)
	}
	return canonical(r)
}
