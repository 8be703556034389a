package intpoly

import (
	"math/big"
	"math/bits"
)

// mulFlatTerms bounds the terms of the shorter factor for which [mulFlat], with
// 1, 2, 3, ... words a coefficient, measures faster than packing.
var mulFlatTerms = []int{40, 60, 60, 6, 4, 4, 4, 4}

// mulWordTerms is the same for [mulWord].
var mulWordTerms = []int{40, 100, 100}

// mulFlat returns p q, non-zero factors, whose coefficients fit k words.
func mulFlat(p, q Poly, k int) Poly {
	a, b := toFlat(p, k, false), toFlat(q, k, false)
	r := newFlat(len(p)+len(q)-1, k)
	for i := range len(p) + len(q) - 1 {
		lo, hi := max(0, i-len(q)+1), min(i, len(p)-1)
		v := r.at(i)
		subDot(v, a.w[lo*k:(hi+1)*k], b.w[(i-hi)*k:(i-lo+1)*k], k)
		negate(v)
	}
	return r.poly()
}

// mulWord returns p q for non-zero factors with coefficients of one word and a
// sign each, and products that fit k <= 3 words.
func mulWord(p, q Poly, k int) Poly {
	var store [4 * wordBuffer]uint
	buf := store[:]
	if len(p)+len(q) > 2*wordBuffer {
		buf = make([]uint, 2*(len(p)+len(q)))
	}
	a, sa := buf[:len(p)], buf[len(p):2*len(p)]
	buf = buf[2*len(p):]
	b, sb := buf[:len(q)], buf[len(q):2*len(q)]
	split(a, sa, p, false)
	split(b, sb, q, true)
	r := newFlat(len(p)+len(q)-1, k)
	for i := range len(p) + len(q) - 1 {
		lo, hi := max(0, i-len(q)+1), min(i, len(p)-1)
		from := len(q) - 1 - (i - lo)
		crossWords(r.at(i), a[lo:hi+1], sa[lo:hi+1], b[from:], sb[from:])
	}
	return r.poly()
}

// wordBuffer is the number of terms of both factors served from the stack.
const wordBuffer = 32

// split sets a to the sizes and s to the signs, as 0 or -1, of the coefficients.
func split(a, s []uint, p Poly, reversed bool) {
	for i, c := range p {
		if reversed {
			i = len(p) - 1 - i
		}
		if w := c.Bits(); len(w) > 0 {
			a[i] = uint(w[0])
		}
		if c.Sign() < 0 {
			s[i] = ^uint(0)
		}
	}
}

// crossWords sets v, of at most three words, to the sum of the products of the
// numbers of sizes a_i, b_i and signs sa_i, sb_i, over the length of a.
func crossWords(v []big.Word, a, sa, b, sb []uint) {
	sa, b, sb = sa[:len(a)], b[:len(a)], sb[:len(a)]
	var s0, s1, s2 uint
	if len(v) == 1 {
		for i, x := range a {
			s := sa[i] ^ sb[i]
			s0 += (x*b[i] ^ s) - s
		}
		v[0] = big.Word(s0)
		return
	}
	for i, x := range a {
		hi, lo := bits.Mul(x, b[i])
		s := sa[i] ^ sb[i] // -t is ^t + 1
		var c uint
		s0, c = bits.Add(s0, lo^s, s&1)
		s1, c = bits.Add(s1, hi^s, c)
		s2 += s + c
	}
	v[0], v[1] = big.Word(s0), big.Word(s1)
	if len(v) > 2 {
		v[2] = big.Word(s2)
	}
}
