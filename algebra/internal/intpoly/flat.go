package intpoly

import (
	"math/big"
	"math/bits"
	"slices"
)

// flat is a vector of integers of k words each, in two's complement, the
// lowest word first: the representation in which short products, exact
// quotients and reconstructions run without touching big.Int. Arithmetic is
// modulo B = 2^(k word size); callers prove that their results fit.
type flat struct {
	k int
	w []big.Word
}

// newFlat returns n zeros of k words.
func newFlat(n, k int) flat { return flat{k, make([]big.Word, n*k)} }

// at returns the words of coefficient i.
func (a flat) at(i int) []big.Word { return a.w[i*a.k : (i+1)*a.k : (i+1)*a.k] }

// toFlat returns the coefficients of p modulo B, from the top when reversed.
func toFlat(p Poly, k int, reversed bool) flat {
	a := newFlat(len(p), k)
	for i, c := range p {
		if reversed {
			i = len(p) - 1 - i
		}
		v := a.at(i)
		copy(v, c.Bits())
		if c.Sign() < 0 {
			negate(v)
		}
	}
	return a
}

// poly returns the polynomial with the coefficients of a, each read as a
// signed number, and takes over the memory of a.
func (a flat) poly() Poly { return trim(a.ints()) }

// ints is poly with leading zeros kept. One array of words and one of headers
// serve all coefficients, each confined to its part by its capacity.
func (a flat) ints() []*big.Int {
	n := len(a.w) / a.k
	cells := make([]big.Int, n)
	p := make([]*big.Int, n)
	for i := range p {
		v := a.at(i)
		p[i] = &cells[i]
		if negative(v) {
			negate(v)
			p[i].SetBits(v)
			p[i].Neg(p[i])
		} else {
			p[i].SetBits(v)
		}
	}
	return p
}

// bitLen returns the bit length of the largest coefficient, up to 1 too large
// for negative powers of two.
func (a flat) bitLen() int {
	most := 0
	for i := 0; i < len(a.w); i += a.k {
		v := a.w[i : i+a.k]
		var flip big.Word
		if negative(v) {
			flip = ^flip
		}
		j := a.k - 1
		for j > 0 && v[j] == flip {
			j--
		}
		most = max(most, j*bits.UintSize+bits.Len(uint(v[j]^flip))+int(flip&1))
	}
	return most
}

// negative reports whether v, in two's complement, is below zero.
func negative(v []big.Word) bool { return v[len(v)-1]>>(bits.UintSize-1) == 1 }

// isZero reports whether all words of v are zero.
func isZero(v []big.Word) bool {
	for _, w := range v {
		if w != 0 {
			return false
		}
	}
	return true
}

// negate sets v to -v.
func negate(v []big.Word) {
	for j := range v {
		v[j] = ^v[j]
	}
	increment(v)
}

// increment adds 1 to v and reports the carry out.
func increment(v []big.Word) bool {
	for j := range v {
		v[j]++
		if v[j] != 0 {
			return false
		}
	}
	return true
}

// trailingZeros returns the exponent of 2 in v, all bits for 0.
func trailingZeros(v []big.Word) int {
	for j, w := range v {
		if w != 0 {
			return j*bits.UintSize + bits.TrailingZeros(uint(w))
		}
	}
	return len(v) * bits.UintSize
}

// shiftRight divides v by 2^n, rounding down.
func shiftRight(v []big.Word, n int) {
	if n == 0 {
		return
	}
	var fill big.Word
	if negative(v) {
		fill = ^fill
	}
	skip, shift := n/bits.UintSize, uint(n%bits.UintSize)
	at := func(j int) big.Word {
		if j < len(v) {
			return v[j]
		}
		return fill
	}
	for j := range v {
		lo, hi := at(j+skip), at(j+skip+1)
		v[j] = lo>>shift | hi<<(bits.UintSize-shift) // 0 for shift 0
	}
}

// subDot subtracts from acc the sum over i of a_i b_(n-1-i), where a and b hold
// n numbers of k words each: one coefficient of a product.
func subDot(acc, a, b []big.Word, k int) {
	switch k {
	case 1:
		s := acc[0]
		b = b[:len(a)]
		for i, x := range a {
			s -= x * b[len(b)-1-i]
		}
		acc[0] = s
	case 2:
		subDot2(acc, a, b)
	case 3:
		subDot3(acc, a, b)
	default:
		for i, j := 0, len(b)-k; j >= 0; i, j = i+k, j-k {
			subProduct(acc, a[i:i+k], b[j:j+k])
		}
	}
}

// subDot2 is subDot for two words.
func subDot2(acc, a, b []big.Word) {
	s0, s1 := uint(acc[0]), uint(acc[1])
	b = b[:len(a)]
	for i, j := 0, len(b)-2; i+1 < len(a) && j >= 0; i, j = i+2, j-2 {
		a0, a1, b0, b1 := uint(a[i]), uint(a[i+1]), uint(b[j]), uint(b[j+1])
		hi, lo := bits.Mul(a0, b0)
		hi += a0*b1 + a1*b0
		var c uint
		s0, c = bits.Sub(s0, lo, 0)
		s1, _ = bits.Sub(s1, hi, c)
	}
	acc[0], acc[1] = big.Word(s0), big.Word(s1)
}

// subDot3 is subDot for three words.
func subDot3(acc, a, b []big.Word) {
	s0, s1, s2 := uint(acc[0]), uint(acc[1]), uint(acc[2])
	b = b[:len(a)]
	for i, j := 0, len(b)-3; i+2 < len(a) && j >= 0; i, j = i+3, j-3 {
		a0, a1, a2 := uint(a[i]), uint(a[i+1]), uint(a[i+2])
		b0, b1, b2 := uint(b[j]), uint(b[j+1]), uint(b[j+2])
		h00, l00 := bits.Mul(a0, b0)
		h01, l01 := bits.Mul(a0, b1)
		h10, l10 := bits.Mul(a1, b0)
		top := h01 + h10 + a0*b2 + a1*b1 + a2*b0
		mid, c := bits.Add(l01, l10, 0)
		top += c
		mid, c = bits.Add(mid, h00, 0)
		top += c
		s0, c = bits.Sub(s0, l00, 0)
		s1, c = bits.Sub(s1, mid, c)
		s2, _ = bits.Sub(s2, top, c)
	}
	acc[0], acc[1], acc[2] = big.Word(s0), big.Word(s1), big.Word(s2)
}

// subProduct subtracts x y from acc, all of the same length.
func subProduct(acc, x, y []big.Word) {
	for i, a := range x {
		if a == 0 {
			continue
		}
		dst := acc[i:]
		src := y[:len(dst)]
		var carry uint
		for j, b := range src {
			hi, lo := bits.Mul(uint(a), uint(b))
			var c uint
			lo, c = bits.Add(lo, carry, 0)
			hi += c
			d, c := bits.Sub(uint(dst[j]), lo, 0)
			dst[j] = big.Word(d)
			carry = hi + c
		}
	}
}

// addWord adds x to v.
func addWord(v []big.Word, x int64) {
	lo, fill := uint64(x), big.Word(x>>63)
	var carry uint
	for j := range v {
		w := fill
		if j*bits.UintSize < 64 {
			w = big.Word(lo >> (j * bits.UintSize))
		}
		s, c := bits.Add(uint(v[j]), uint(w), carry)
		v[j], carry = big.Word(s), c
	}
}

// scaleWords multiplies v by x < 2^63.
func scaleWords(v []big.Word, x uint64) {
	minus := negative(v)
	if minus {
		negate(v)
	}
	if bits.UintSize == 64 {
		var carry uint
		for j := range v {
			hi, lo := bits.Mul(uint(v[j]), uint(x))
			s, c := bits.Add(lo, carry, 0)
			v[j], carry = big.Word(s), hi+c
		}
	} else {
		t, y := make([]big.Word, len(v)), make([]big.Word, len(v))
		addWord(y, int64(x))
		subProduct(t, v, y)
		negate(t)
		copy(v, t)
	}
	if minus {
		negate(v)
	}
}

// inverseOf returns 1/v modulo B for an odd v.
func inverseOf(v []big.Word) []big.Word {
	inv := make([]big.Word, len(v))
	inv[0] = v[0] // correct to 3 bits; each Newton step doubles that
	t := make([]big.Word, len(v))
	for known := 3; known < len(v)*bits.UintSize; known *= 2 {
		// inv <- inv (2 - v inv)
		clear(t)
		t[0] = 2
		subProduct(t, v, inv)
		negate(t)
		next := make([]big.Word, len(v))
		subProduct(next, inv, t)
		inv = next
	}
	return inv
}

// wordsFor returns the number of words that hold signed numbers of the given
// bit length.
func wordsFor(bitLen int) int { return bitLen/bits.UintSize + 1 }

// flatWords bounds the size of coefficients, in words, for which flat
// arithmetic measures faster than big.Int.
var flatWords = 10

// divFlat returns p / q when q divides p over Z, deg p >= deg q >= 0, ok false
// when it does not, and decided false when the method does not apply.
func divFlat(p, q Poly) (quo Poly, ok, decided bool) {
	a, reversed, ok, decided := provenQuotient(p, q)
	if !ok {
		return nil, false, decided
	}
	c := a.ints()
	if reversed {
		slices.Reverse(c)
	}
	return trim(c), true, true
}

// provenQuotient is divFlat with the quotient, reversed or not, as words. It
// is formed modulo B and has to leave no remainder modulo B. It is the quotient
// over Z when p and the product of q and the quotient are both below B/2 in
// size. A quotient over Z has coefficients of at most 2^(deg) norm2(p)
// (Mignotte), so a number of words that decides is known; fewer decide, too,
// against a divisor with an odd leading coefficient, because the quotient
// modulo B is unique then.
//
// Source: Jebelean, An algorithm for exact division, J. Symbolic Computation
// 15 (1993), for the idea.
func provenQuotient(p, q Poly) (a flat, reversed, ok, decided bool) {
	reversed = q.lead().Bit(0) == 0 && q[0].Bit(0) == 1
	unique := q.lead().Bit(0) == 1 || reversed
	bp, bq := p.maxBits(), q.maxBits()
	n := len(p) - len(q) + 1
	terms := bits.Len(uint(min(n, len(q))))
	most := (n - 1) + bp + bits.Len(uint(len(p)))/2 + 1
	k := wordsFor(bp + terms + 4)
	last := max(k, wordsFor(most+bq+terms+1))
	for ; k <= flatWords; k = last {
		a, ok = quotientFlat(toFlat(p, k, reversed), toFlat(q, k, reversed))
		if ok && a.bitLen()+bq+terms < k*bits.UintSize {
			return a, reversed, true, true
		}
		if k == last || unique && !ok {
			return a, reversed, false, true
		}
	}
	return flat{}, false, false, false
}

// quotientFlat divides a by b from the top, taking what is left of a for
// numbers below B/2 in size where it divides by a power of two. It reports
// whether the remainder is zero modulo B.
func quotientFlat(a, b flat) (quo flat, exact bool) {
	k := a.k
	n, m := len(a.w)/k, len(b.w)/k
	lead := append([]big.Word(nil), b.at(m-1)...)
	twos := trailingZeros(lead)
	shiftRight(lead, twos)
	unit := lead[0] == 1 && isZero(lead[1:])
	var inv []big.Word
	if !unit {
		inv = inverseOf(lead)
	}
	quo = newFlat(n-m+1, k)
	acc := make([]big.Word, k)
	for i := n - 1; i >= 0; i-- {
		// What the known part of the quotient leaves of a_i.
		lo, hi := max(0, i-m+1), min(i, n-m)
		copy(acc, a.at(i))
		if i >= m-1 {
			lo = i - m + 2
		}
		if lo <= hi {
			subDot(acc, quo.w[lo*k:(hi+1)*k], b.w[(i-hi)*k:(i-lo+1)*k], k)
		}
		if i < m-1 {
			if !isZero(acc) {
				return quo, false
			}
			continue
		}
		if twos > 0 {
			if trailingZeros(acc) < twos {
				return quo, false
			}
			shiftRight(acc, twos)
		}
		v := quo.at(i - m + 1)
		if unit {
			copy(v, acc)
			continue
		}
		subProduct(v, acc, inv)
		negate(v)
	}
	return quo, true
}
