package mpoly

import "math/big"

// parts returns the coefficients of p != 0 as a polynomial in the variables
// whose fields the mask selects.
func (p Poly) parts(mask []uint64) []Poly {
	w := len(mask)
	bound := p.maxExponents()
	for k, x := range mask {
		bound[k] &= x
	}
	if isUnit(bound) {
		return []Poly{p}
	}
	pk, ok := newPacking(p.n, bound, false)
	if !ok {
		return p.partsOneByOne(bound)
	}
	n := p.Len()
	t := newMonomialTable(pk.bits, n, n)
	number := make([]int32, n)
	var counts []int
	for i, key := range pk.pack(p.exps, w, n) {
		k, fresh := t.find(key)
		if fresh {
			counts = append(counts, 0)
		}
		number[i] = int32(k)
		counts[k]++
	}
	t.release()
	r := make([]Poly, len(counts))
	exps := make([]uint64, n*w)
	var words []int64
	var bigs []*big.Int
	if p.bigs != nil {
		bigs = make([]*big.Int, n)
	} else {
		words = make([]int64, n)
	}
	for k, c := range counts {
		r[k] = Poly{n: p.n, exps: exps[: 0 : c*w]}
		exps = exps[c*w:]
		if bigs != nil {
			r[k].bigs, bigs = bigs[:0:c], bigs[c:]
		} else {
			r[k].words, words = words[:0:c], words[c:]
		}
	}
	// The order of terms is kept where the masked fields are equal.
	for i, k := range number {
		q := &r[k]
		for j, x := range p.exp(i) {
			q.exps = append(q.exps, x&^mask[j])
		}
		if p.bigs != nil {
			q.bigs = append(q.bigs, p.bigs[i])
		} else {
			q.words = append(q.words, p.words[i])
		}
	}
	for k := range r {
		r[k] = canonical(r[k])
	}
	return r
}

// partsOneByOne is parts for many variables of high degree, by one after the
// other of those in degrees.
func (p Poly) partsOneByOne(degrees []uint64) []Poly {
	r := []Poly{p}
	for i := range p.n {
		if exponent(degrees, i) == 0 {
			continue
		}
		var next []Poly
		for _, q := range r {
			for _, c := range q.Coefficients(i) {
				if !c.IsZero() {
					next = append(next, c)
				}
			}
		}
		r = next
	}
	return r
}
