package algebra

import (
	"math/big"
	"math/bits"
)

// ballWords is the product or the sum of midpoints of up to two words, as an
// absolute value of four words, on the way to a midpoint of two.
type ballWords [4]uint64

// twoWords returns |m| if it has at most two words of 64 bits.
func twoWords(m *big.Int) (hi, lo uint64, ok bool) {
	w := m.Bits()
	if wordBits != 64 || len(w) > 2 {
		return 0, 0, false
	}
	if len(w) > 1 {
		hi = uint64(w[1])
	}
	if len(w) > 0 {
		lo = uint64(w[0])
	}
	return hi, lo, true
}

// mulInWords returns m n 2^e +- r with the midpoint rounded to prec <= 128 bits,
// or ok = false if m or n is too long.
func mulInWords(m, n *big.Int, e int64, r magnitude, prec uint) (z Ball, ok bool) {
	a1, a0, ok := twoWords(m)
	if !ok {
		return z, false
	}
	b1, b0, ok := twoWords(n)
	if !ok {
		return z, false
	}
	var p ballWords
	var h, l, c uint64
	p[1], p[0] = bits.Mul64(a0, b0)
	h, l = bits.Mul64(a1, b0)
	p[1], c = bits.Add64(p[1], l, 0)
	p[2] = h + c
	h, l = bits.Mul64(a0, b1)
	p[1], c = bits.Add64(p[1], l, 0)
	p[2], c = bits.Add64(p[2], h, c)
	p[3] = c
	h, l = bits.Mul64(a1, b1)
	p[2], c = bits.Add64(p[2], l, 0)
	p[3] += h + c
	return p.ball(m.Sign() != n.Sign(), e, r, prec), true
}

// addInWords returns m 2^shift + n times 2^e +- r with the midpoint rounded to
// prec <= 128 bits, or ok = false if m or n is too long or shift above 127.
func addInWords(m, n *big.Int, shift, e int64, r magnitude, prec uint) (z Ball, ok bool) {
	if shift > 127 {
		return z, false
	}
	a1, a0, ok := twoWords(m)
	if !ok {
		return z, false
	}
	b1, b0, ok := twoWords(n)
	if !ok {
		return z, false
	}
	s := uint(shift) & 63 // a shift by 64 gives 0
	p := ballWords{a0 << s, a1<<s | a0>>(64-s), a1 >> (64 - s)}
	if shift >= 64 {
		p = ballWords{0, p[0], p[1], p[2]}
	}
	neg := m.Sign() < 0
	var c uint64
	if neg == (n.Sign() < 0) {
		p[0], c = bits.Add64(p[0], b0, 0)
		p[1], c = bits.Add64(p[1], b1, c)
		p[2], c = bits.Add64(p[2], 0, c)
		p[3] += c
		return p.ball(neg, e, r, prec), true
	}
	p[0], c = bits.Sub64(p[0], b0, 0)
	p[1], c = bits.Sub64(p[1], b1, c)
	p[2], c = bits.Sub64(p[2], 0, c)
	p[3], c = bits.Sub64(p[3], 0, c)
	if c != 0 {
		neg = !neg
		fixedNeg(p[:])
	}
	return p.ball(neg, e, r, prec), true
}

// ball returns p 2^e +- r, or its negative, with the midpoint rounded towards 0
// to prec <= 128 bits.
func (p *ballWords) ball(neg bool, e int64, r magnitude, prec uint) Ball {
	n := 0
	for i := 3; i >= 0; i-- {
		if p[i] != 0 {
			n = 64*i + bits.Len64(p[i])
			break
		}
	}
	if r.isInf() {
		return unknown()
	}
	if n == 0 {
		return Ball{rad: r}
	}
	lo, hi := p[0], p[1]
	if s := n - int(prec); s > 0 {
		k, t := s/64, uint(s%64)
		var lost uint64
		for i := range k {
			lost |= p[i]
		}
		word := func(i int) uint64 {
			if i > 3 {
				return 0
			}
			return p[i]
		}
		lost |= p[k] << 1 << (63 - t) // the low t bits
		lo = word(k)>>t | word(k+1)<<(64-t)
		hi = word(k+1)>>t | word(k+2)<<(64-t)
		e += int64(s)
		if lost != 0 {
			if r = r.addUp(magPow2(e)); r.isInf() { // less than a unit
				return unknown()
			}
		}
	}
	mem := new(struct {
		m big.Int
		w [2]big.Word
	})
	mem.w[0], mem.w[1] = big.Word(lo), big.Word(hi)
	m := mem.m.SetBits(mem.w[:])
	if neg {
		m.Neg(m)
	}
	return Ball{m, e, r}
}
