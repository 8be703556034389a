package mpoly

import (
	"math/big"
	"math/bits"
)

// Add returns p + q. Cost: one merge.
func (p Poly) Add(q Poly) Poly { return merge(p, q, false) }

// Sub returns p - q. Cost: one merge.
func (p Poly) Sub(q Poly) Poly { return merge(p, q, true) }

// merge returns p + q or p - q.
func merge(p, q Poly, minus bool) Poly {
	n := join(p, q)
	switch {
	case q.IsZero():
		p.n = n
		return p
	case p.IsZero():
		if minus {
			return q.Neg()
		}
		return q
	}
	b := newBuilder(n, p.Len()+q.Len())
	i, j := 0, 0
	for i < p.Len() && j < q.Len() {
		e, f := p.exp(i), q.exp(j)
		switch c := compareMonomials(e, f); {
		case c > 0:
			b.addTerm(e, p, i)
			i++
		case c < 0:
			b.addSigned(f, q, j, minus)
			j++
		default:
			if p.bigs == nil && q.bigs == nil {
				s := accumulator{}
				s.add(p.words[i])
				if minus {
					s.add(-q.words[j])
				} else {
					s.add(q.words[j])
				}
				s.appendTo(b, e)
			} else if minus {
				b.addBig(e, new(big.Int).Sub(p.coef(i), q.coef(j)))
			} else {
				b.addBig(e, new(big.Int).Add(p.coef(i), q.coef(j)))
			}
			i, j = i+1, j+1
		}
	}
	for ; i < p.Len(); i++ {
		b.addTerm(p.exp(i), p, i)
	}
	for ; j < q.Len(); j++ {
		b.addSigned(q.exp(j), q, j, minus)
	}
	return b.poly()
}

// addSigned appends the term i of q, negated if minus.
func (b *builder) addSigned(e []uint64, q Poly, i int, minus bool) {
	switch {
	case !minus:
		b.addTerm(e, q, i)
	case q.bigs != nil:
		b.addBig(e, new(big.Int).Neg(q.bigs[i]))
	default:
		b.addWord(e, -q.words[i])
	}
}

// Neg returns -p.
func (p Poly) Neg() Poly {
	r := p // the monomials are shared: nothing modifies them
	if p.bigs != nil {
		r.bigs = make([]*big.Int, len(p.bigs))
		for i, c := range p.bigs {
			r.bigs[i] = new(big.Int).Neg(c)
		}
		return r
	}
	r.words = make([]int64, len(p.words))
	for i, c := range p.words {
		r.words[i] = -c
	}
	return r
}

// MulInt returns c p.
func (p Poly) MulInt(c *big.Int) Poly {
	if c.Sign() == 0 || p.IsZero() {
		return Poly{n: p.n}
	}
	if p.bigs == nil && fitsWord(c) {
		return p.mulWord(c.Int64())
	}
	r := Poly{n: p.n, exps: p.exps, bigs: make([]*big.Int, p.Len())}
	for i := range r.bigs {
		r.bigs[i] = new(big.Int).Mul(p.coef(i), c)
	}
	return canonical(r)
}

// mulWord returns c p for |c| < 2^63 and p with coefficients in words.
func (p Poly) mulWord(c int64) Poly {
	if c == 1 {
		return p
	}
	if p.MaxBits()+bits.Len64(magnitude(c)) > 63 {
		r := Poly{n: p.n, exps: p.exps, bigs: make([]*big.Int, p.Len())}
		m := big.NewInt(c)
		for i, x := range p.words {
			v := big.NewInt(x)
			r.bigs[i] = v.Mul(v, m)
		}
		return canonical(r)
	}
	r := Poly{n: p.n, exps: p.exps, words: make([]int64, len(p.words))}
	for i, x := range p.words {
		r.words[i] = x * c
	}
	return r
}

// mulTerm returns p times the term i of q.
func (p Poly) mulTerm(q Poly, i int) Poly {
	var r Poly
	if p.bigs == nil && q.bigs == nil {
		r = p.mulWord(q.words[i])
	} else {
		r = p.MulInt(q.coef(i))
	}
	e := q.exp(i)
	if isUnit(e) {
		return r
	}
	w := wordsOf(p.n)
	exps := make([]uint64, len(r.exps))
	for k := 0; k < len(exps); k += w {
		mulMonomials(exps[k:k+w], r.exps[k:k+w], e)
	}
	r.exps = exps
	return r
}

// Pow returns p^k for k >= 0, by repeated products with p: for sparse
// polynomials these have fewer term products than repeated squares.
func (p Poly) Pow(k int) Poly {
	if k < 0 {
		panic("mpoly: negative power")
	}
	if k == 0 {
		return ConstantWord(p.n, 1)
	}
	r := p
	for range k - 1 {
		r = r.Mul(p)
	}
	return r
}
