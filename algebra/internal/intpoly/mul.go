package intpoly

import (
	"math/big"
	"math/bits"
)

// kroneckerTwo is the size of a packed product, in words, from which two
// products of half the size measure faster than one.
var kroneckerTwo = 300

// Mul returns p q. Short products are formed coefficient by coefficient; long
// ones by Kronecker substitution, at the cost of one product of integers of
// (deg p + deg q)(bits of a result coefficient) bits, or two of half the size.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, section 8.4.
func Mul(p, q Poly) Poly {
	if len(p) == 0 || len(q) == 0 {
		return nil
	}
	n, bp, bq := min(len(p), len(q)), p.maxBits(), q.maxBits()
	size := bp + bq + bits.Len(uint(n)) // of a coefficient of the product
	k := wordsFor(size)
	switch {
	case bp <= bits.UintSize && bq <= bits.UintSize && k <= len(mulWordTerms) && n <= mulWordTerms[k-1]:
		return mulWord(p, q, k)
	case k <= len(mulFlatTerms) && n <= mulFlatTerms[k-1]:
		return mulFlat(p, q, k)
	case n <= 2 || n <= 16 && bp+bq > 12*bits.UintSize:
		return mulSchoolbook(p, q)
	case (len(p)+len(q))*k > kroneckerTwo:
		return mulKroneckerTwo(p, q, size+1)
	}
	return mulKronecker(p, q, size+1)
}

// mulSchoolbook returns p q, non-zero factors, in deg p deg q products.
func mulSchoolbook(p, q Poly) Poly {
	r := make(Poly, len(p)+len(q)-1)
	cells := make([]big.Int, len(r))
	for i := range r {
		r[i] = &cells[i]
	}
	var t big.Int
	for i, a := range p {
		if a.Sign() == 0 {
			continue
		}
		for j, b := range q {
			if b.Sign() != 0 {
				r[i+j].Add(r[i+j], t.Mul(a, b))
			}
		}
	}
	return r
}

// mulKronecker returns p q, non-zero factors, from p(2^slot) q(2^slot), with
// every coefficient of the product below 2^(slot-1) in size.
func mulKronecker(p, q Poly, slot int) Poly {
	x := pack(p, slot)
	if same(p, q) {
		x.Mul(x, x)
	} else {
		x.Mul(x, pack(q, slot))
	}
	return trim(unpack(x, slot, len(p)+len(q)-1))
}

// same reports whether p and q share their memory.
func same(p, q Poly) bool { return len(p) == len(q) && &p[0] == &q[0] }

// mulKroneckerTwo is mulKronecker from the values at 2^h and -2^h, 2h = slot or
// slot + 1: with p = e(s^2) + s o(s^2), these are e(2^slot) +- 2^h o(2^slot).
//
// Source: Harvey, Faster polynomial multiplication via multipoint Kronecker
// substitution, J. Symbolic Computation 44 (2009), section 3.1.
func mulKroneckerTwo(p, q Poly, slot int) Poly {
	h := (slot + 1) / 2
	plus, minus := packTwo(p, h)
	if same(p, q) {
		plus.Mul(plus, plus)
		minus.Mul(minus, minus)
	} else {
		plusQ, minusQ := packTwo(q, h)
		plus.Mul(plus, plusQ)
		minus.Mul(minus, minusQ)
	}
	n := len(p) + len(q) - 1
	even := new(big.Int).Add(plus, minus)
	odd := plus.Sub(plus, minus)
	r := make(Poly, n)
	for i, c := range unpack(even.Rsh(even, 1), 2*h, (n+1)/2) {
		r[2*i] = c
	}
	for i, c := range unpack(odd.Rsh(odd, uint(h+1)), 2*h, n/2) {
		r[2*i+1] = c
	}
	return trim(r)
}

// packTwo returns p(2^h) and p(-2^h).
func packTwo(p Poly, h int) (plus, minus *big.Int) {
	var parts [2]Poly
	for i, c := range p {
		parts[i%2] = append(parts[i%2], c)
	}
	even, odd := pack(parts[0], 2*h), pack(parts[1], 2*h)
	odd.Lsh(odd, uint(h))
	return new(big.Int).Add(even, odd), even.Sub(even, odd)
}

// pack returns p(2^slot). Every coefficient must be below 2^slot in size.
func pack(p Poly, slot int) *big.Int {
	size := (len(p)*slot)/bits.UintSize + 2
	words := make([]big.Word, 2*size)
	pos, neg := words[:size:size], words[size:]
	anyNeg := false
	for i, c := range p {
		dst := pos
		if c.Sign() < 0 {
			dst, anyNeg = neg, true
		}
		at, shift := i*slot/bits.UintSize, uint(i*slot%bits.UintSize)
		for _, w := range c.Bits() {
			dst[at] |= w << shift
			dst[at+1] |= w >> (bits.UintSize - shift) // 0 for shift 0
			at++
		}
	}
	x := new(big.Int).SetBits(pos)
	if anyNeg {
		x.Sub(x, new(big.Int).SetBits(neg))
	}
	return x
}

// unpack returns the polynomial of n coefficients in [-2^(slot-1), 2^(slot-1))
// whose value at 2^slot is x, leading zeros included.
func unpack(x *big.Int, slot, n int) Poly {
	words := x.Bits()
	flip := x.Sign() < 0
	width := (slot + bits.UintSize - 1) / bits.UintSize
	topBits := uint(slot - (width-1)*bits.UintSize) // 1..word size, in the top word
	mask := ^big.Word(0) >> (bits.UintSize - topBits)
	store := make([]big.Word, n*width)
	cells := make([]big.Int, n)
	p := make(Poly, n)
	carry := false
	at := func(i int) big.Word {
		if i < len(words) {
			return words[i]
		}
		return 0
	}
	for i := range p {
		v := store[i*width : (i+1)*width : (i+1)*width]
		from, shift := i*slot/bits.UintSize, uint(i*slot%bits.UintSize)
		for j := range v {
			v[j] = at(from+j)>>shift | at(from+j+1)<<(bits.UintSize-shift)
		}
		v[width-1] &= mask
		if carry {
			carry = increment(v)
			if v[width-1]&^mask != 0 {
				v[width-1] &= mask
				carry = true
			}
		}
		// A digit of the upper half stands for itself less 2^slot.
		negative := v[width-1]>>(topBits-1)&1 == 1
		if negative {
			carry = true
			for j := range v {
				v[j] = ^v[j]
			}
			v[width-1] &= mask
			increment(v)
		}
		p[i] = cells[i].SetBits(v)
		if negative != flip {
			p[i].Neg(p[i])
		}
	}
	return p
}
