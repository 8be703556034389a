package mpoly

import (
	"math/big"
	"math/bits"
)

// fewTerms is the length up to which products are formed by merging.
const fewTerms = 2

// Mul returns p q. Cost: a sum for each product of terms, collected in a table,
// and one sort.
func (p Poly) Mul(q Poly) Poly {
	n := join(p, q)
	if p.IsZero() || q.IsZero() {
		return Poly{n: n}
	}
	if p.Len() > q.Len() {
		p, q = q, p
	}
	if p.Len() <= fewTerms {
		return mulRange(p, q, 0, p.Len())
	}
	bound := p.maxExponents()
	mulMonomials(bound, bound, q.maxExponents())
	pk, ok := newPacking(n, bound, false)
	if !ok {
		return mulRange(p, q, 0, p.Len())
	}
	w := wordsOf(n)
	a, b := pk.pack(p.exps, w, p.Len()), pk.pack(q.exps, w, q.Len())
	products := len(a) * len(b)
	if p.bigs == nil && q.bigs == nil && products <= fewProducts && p.MaxBits()+q.MaxBits()+bits.Len64(uint64(len(a))) <= 63 {
		return mulFew(n, pk, p.words, q.words, a, b)
	}
	t := newMonomialTable(pk.bits, min(products, 4*(len(a)+len(b))+products/8), products)
	defer t.release()
	r := Poly{n: n}
	var kept []keyed
	switch {
	case p.bigs != nil || q.bigs != nil:
		sums := mulBigs(t, p, q, a, b)
		kept = t.keep(func(i int32) bool { return sums[i].Sign() != 0 })
		r.bigs = make([]*big.Int, len(kept))
		for i, k := range kept {
			r.bigs[len(kept)-1-i] = &sums[k.number]
		}
	case p.MaxBits()+q.MaxBits()+bits.Len(uint(len(a))) <= 63:
		sums := mulWords(t, p.words, q.words, a, b)
		kept = t.keep(func(i int32) bool { return sums[i] != 0 })
		r.words = make([]int64, len(kept))
		for i, k := range kept {
			r.words[len(kept)-1-i] = sums[k.number]
		}
	default:
		sums := mulLongs(t, p.words, q.words, a, b)
		kept = t.keep(func(i int32) bool { return !sums[i].isZero() })
		c := &builder{Poly{words: make([]int64, 0, len(kept))}}
		for i := len(kept) - 1; i >= 0; i-- {
			sums[kept[i].number].appendTo(c, nil)
		}
		r.words, r.bigs = c.p.words, c.p.bigs
	}
	keys := make([]uint64, len(kept))
	for i, k := range kept {
		keys[len(kept)-1-i] = k.key
	}
	r.exps = pk.unpack(keys, w)
	return canonical(r)
}

// keep returns the keys with their numbers, smallest key first, leaving out
// those with a sum of 0.
func (t *monomialTable) keep(nonZero func(number int32) bool) []keyed {
	all := t.ascending()
	kept := all[:0]
	for _, k := range all {
		if nonZero(k.number) {
			kept = append(kept, k)
		}
	}
	return kept
}

// fewProducts is the number of products of terms up to which rows of them are
// merged one by one.
const fewProducts = 48

// mulFew returns the product of short polynomials whose result has coefficients
// in words.
func mulFew(n int, pk packing, p, q []int64, a, b []uint64) Poly {
	type term struct {
		key  uint64
		coef int64
	}
	var rooms [2][fewProducts]term
	var sum []term
	for i, x := range a {
		c := p[i]
		to := rooms[i%2][:0]
		k := 0
		for j, y := range b {
			t := term{x + y, c * q[j]}
			for k < len(sum) && sum[k].key > t.key {
				to = append(to, sum[k])
				k++
			}
			if k < len(sum) && sum[k].key == t.key {
				t.coef += sum[k].coef
				k++
			}
			if t.coef != 0 {
				to = append(to, t)
			}
		}
		sum = append(to, sum[k:]...)
	}
	if len(sum) == 0 {
		return Poly{n: n}
	}
	r := Poly{n: n, words: make([]int64, len(sum))}
	keys := make([]uint64, len(sum))
	for i, t := range sum {
		keys[i], r.words[i] = t.key, t.coef
	}
	r.exps = pk.unpack(keys, wordsOf(n))
	return r
}

// mulWords returns the sums of the products of terms, by their numbers in t,
// given that they are words.
func mulWords(t *monomialTable, p, q []int64, a, b []uint64) []int64 {
	sums := t.words
	for i, x := range a {
		c := p[i]
		for j, y := range b {
			k, fresh := t.find(x + y)
			if fresh {
				sums = append(sums, c*q[j])
			} else {
				sums[k] += c * q[j]
			}
		}
	}
	t.words = sums
	return sums
}

// mulLongs is mulWords with sums of three words.
func mulLongs(t *monomialTable, p, q []int64, a, b []uint64) []accumulator {
	sums := t.longs
	for i, x := range a {
		c := p[i]
		for j, y := range b {
			k, fresh := t.find(x + y)
			if fresh {
				sums = append(sums, accumulator{})
			}
			sums[k].addProduct(c, q[j])
		}
	}
	t.longs = sums
	return sums
}

// mulBigs is mulWords with sums of any length.
func mulBigs(t *monomialTable, p, q Poly, a, b []uint64) []big.Int {
	sums := make([]big.Int, 0, cap(t.keys))
	var product big.Int
	long := make([]*big.Int, len(b))
	for j := range long {
		long[j] = q.coef(j)
	}
	for i, x := range a {
		c := p.coef(i)
		for j, y := range b {
			k, fresh := t.find(x + y)
			if fresh {
				sums = append(sums, big.Int{})
			}
			sums[k].Add(&sums[k], product.Mul(c, long[j]))
		}
	}
	return sums
}

// mulRange returns the product of q and the terms lo..hi-1 of p, by halves.
func mulRange(p, q Poly, lo, hi int) Poly {
	if hi-lo == 1 {
		return q.mulTerm(p, lo)
	}
	mid := (lo + hi) / 2
	return mulRange(p, q, lo, mid).Add(mulRange(p, q, mid, hi))
}
