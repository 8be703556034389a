package mpoly

import (
	"fmt"
	"math/big"
)

// Evaluate returns p with x_i = x, in the same variables.
func (p Poly) Evaluate(i int, x *big.Int) Poly {
	p.checkVariable(i)
	if !p.Uses(i) {
		return p
	}
	at, s := fieldOf(i)
	powers := []*big.Int{big.NewInt(1)}
	b := newBuilder(p.n, p.Len())
	e := make([]uint64, wordsOf(p.n))
	for k := range p.Len() {
		copy(e, p.exp(k))
		d := e[at] >> s & fieldMask
		e[at] -= d << s
		for uint64(len(powers)) <= d {
			powers = append(powers, new(big.Int).Mul(powers[len(powers)-1], x))
		}
		if p.bigs == nil && fitsWord(powers[d]) {
			var c accumulator
			c.addProduct(p.words[k], powers[d].Int64())
			c.appendTo(b, e)
			continue
		}
		b.addBig(e, new(big.Int).Mul(p.coef(k), powers[d]))
	}
	return b.sorted()
}

// Compose returns p with x_i = values[i], in the variables of the values, which
// must agree. Cost: Horner's rule in each variable.
func (p Poly) Compose(values []Poly) Poly {
	if len(values) != p.n && !p.IsZero() {
		panic(fmt.Sprintf("mpoly: %d values for %d variables", len(values), p.n))
	}
	n := 0
	for _, v := range values {
		n = join(Poly{n: n}, v)
	}
	return p.compose(values, n, 0)
}

// compose is Compose for p free of the variables before x_i.
func (p Poly) compose(values []Poly, n, i int) Poly {
	if p.IsConstant() {
		return Constant(n, p.ConstantTerm())
	}
	for !p.Uses(i) {
		i++
	}
	c := p.Coefficients(i)
	r := Poly{n: n}
	for k := len(c) - 1; k >= 0; k-- {
		r = r.Mul(values[i]).Add(c[k].compose(values, n, i+1))
	}
	return r
}

// Rename returns p with x_to[i] of n variables in place of x_i. Variables of p
// that do not occur need no valid target; targets may coincide.
func (p Poly) Rename(n int, to []int) Poly {
	if len(to) != p.n && !p.IsZero() {
		panic(fmt.Sprintf("mpoly: %d targets for %d variables", len(to), p.n))
	}
	b := newBuilder(n, p.Len())
	e := make([]uint64, wordsOf(n))
	for k := range p.Len() {
		clear(e)
		for i, t := range to {
			d := exponent(p.exp(k), i)
			if d == 0 {
				continue
			}
			if t < 0 || t >= n {
				panic(fmt.Sprintf("mpoly: variable %d of %d", t, n))
			}
			w, s := fieldOf(t)
			checkDegree(int(e[w]>>s&fieldMask) + d)
			e[w] += uint64(d) << s
		}
		b.addTerm(e, p, k)
	}
	return b.sorted()
}
