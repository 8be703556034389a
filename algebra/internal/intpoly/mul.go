package intpoly

import (
	"math/big"
	"math/bits"
)

// useSchoolbook reports whether the schoolbook product measures faster than
// packing: for very short factors, and for moderate ones with coefficients of
// several words, where packing saves little.
func useSchoolbook(p, q Poly) bool {
	n := min(len(p), len(q))
	return n <= 2 || n <= 16 && p.maxBits()+q.maxBits() > 12*bits.UintSize
}

// Mul returns p q. Short products are formed coefficient by coefficient; long
// ones by Kronecker substitution, at the cost of one product of integers of
// (deg p + deg q)(bits of a result coefficient) bits.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, section 8.4.
func Mul(p, q Poly) Poly {
	if len(p) == 0 || len(q) == 0 {
		return nil
	}
	if useSchoolbook(p, q) {
		return mulSchoolbook(p, q)
	}
	return mulKronecker(p, q)
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

// mulKronecker returns p q, non-zero factors, from p(2^k) q(2^k) with k so
// large that every coefficient of the product is below 2^(k-1).
func mulKronecker(p, q Poly) Poly {
	slot := p.maxBits() + q.maxBits() + bits.Len(uint(min(len(p), len(q)))) + 1
	x := pack(p, slot)
	if len(p) == len(q) && &p[0] == &q[0] {
		x.Mul(x, x)
	} else {
		x.Mul(x, pack(q, slot))
	}
	return unpack(x, slot, len(p)+len(q)-1)
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

// unpack returns the polynomial of at most n coefficients in
// [-2^(slot-1), 2^(slot-1)) whose value at 2^slot is x.
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
	return trim(p)
}

// increment adds 1 to v in place and reports the carry out.
func increment(v []big.Word) bool {
	for j := range v {
		v[j]++
		if v[j] != 0 {
			return false
		}
	}
	return true
}
