package mpoly

import (
	"fmt"
	"math/big"
)

// checkVariable panics unless x_i is a variable of p.
func (p Poly) checkVariable(i int) {
	if i < 0 || i >= p.n && !p.IsZero() {
		panic(fmt.Sprintf("mpoly: variable %d of %d", i, p.n))
	}
}

// Derivative returns the derivative in x_i.
func (p Poly) Derivative(i int) Poly {
	p.checkVariable(i)
	b := newBuilder(p.n, p.Len())
	at, s := fieldOf(i)
	e := make([]uint64, wordsOf(p.n))
	for k := range p.Len() {
		copy(e, p.exp(k))
		d := int64(e[at] >> s & fieldMask)
		if d == 0 {
			continue
		}
		e[at] -= 1 << s
		if p.bigs != nil {
			b.addBig(e, new(big.Int).Mul(p.bigs[k], big.NewInt(d)))
			continue
		}
		var c accumulator
		c.addProduct(p.words[k], d)
		c.appendTo(b, e)
	}
	return b.poly()
}

// Coefficients returns the c_k with p = sum c_k x_i^k, k = 0..Degree(i), free
// of x_i but in the same variables; nil for 0.
func (p Poly) Coefficients(i int) []Poly {
	p.checkVariable(i)
	if p.IsZero() {
		return nil
	}
	at, s := fieldOf(i)
	w := wordsOf(p.n)
	counts := make([]int, p.Degree(i)+1)
	for k := at; k < len(p.exps); k += w {
		counts[p.exps[k]>>s&fieldMask]++
	}
	parts := make([]builder, len(counts))
	for d, c := range counts {
		if c > 0 {
			parts[d] = *newBuilder(p.n, c)
		}
	}
	e := make([]uint64, w)
	for k := range p.Len() {
		copy(e, p.exp(k))
		d := e[at] >> s & fieldMask
		e[at] -= d << s
		parts[d].addTerm(e, p, k)
	}
	r := make([]Poly, len(parts))
	for d := range parts {
		parts[d].p.n = p.n
		r[d] = parts[d].poly()
	}
	return r
}

// FromCoefficients returns sum c_k x_i^k for c_k in equally many variables and
// free of x_i: the inverse of [Poly.Coefficients].
func FromCoefficients(i int, c []Poly) Poly {
	n, room := 0, 0
	for _, p := range c {
		n, room = join(Poly{n: n}, p), room+p.Len()
	}
	if room == 0 {
		return Poly{n: n}
	}
	b := newBuilder(n, room)
	at, s := fieldOf(i)
	e := make([]uint64, wordsOf(n))
	for k := len(c) - 1; k >= 0; k-- {
		if c[k].IsZero() {
			continue
		}
		checkDegree(k)
		for t := range c[k].Len() {
			copy(e, c[k].exp(t))
			if e[at]>>s&fieldMask != 0 {
				panic(fmt.Sprintf("mpoly: a coefficient is not free of x_%d", i))
			}
			e[at] |= uint64(k) << s
			b.addTerm(e, c[k], t)
		}
	}
	return b.sorted()
}
