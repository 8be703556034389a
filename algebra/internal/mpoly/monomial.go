package mpoly

import (
	"fmt"
	"math/bits"
)

// A monomial of n variables takes wordsOf(n) words, x_0 in the highest 16 bits
// of the first. The top bit of each field stays clear: it takes the borrow of
// a comparison and the carry of a product.
const (
	maxDegree = 1<<15 - 1
	fieldMask = maxDegree
	guards    = 0x8000_8000_8000_8000
)

// wordsOf returns the number of words of a monomial of n variables.
func wordsOf(n int) int { return (n + 3) / 4 }

// fieldOf returns the word and the shift of the exponent of x_i.
func fieldOf(i int) (word int, shift uint) { return i / 4, uint(48 - i%4*16) }

// exponent returns the exponent of x_i in e.
func exponent(e []uint64, i int) int {
	w, s := fieldOf(i)
	return int(e[w] >> s & fieldMask)
}

// checkDegree panics when a degree does not fit its field.
func checkDegree(d int) {
	if d < 0 || d > maxDegree {
		panic(fmt.Sprintf("mpoly: exponent %d is outside 0..%d", d, maxDegree))
	}
}

// packExponents writes the packed form of x to e, which is zero.
func packExponents(e []uint64, x []int) {
	for i, d := range x {
		checkDegree(d)
		w, s := fieldOf(i)
		e[w] |= uint64(d) << s
	}
}

// compareMonomials orders monomials lexicographically.
func compareMonomials(a, b []uint64) int {
	for i, x := range a {
		if y := b[i]; x != y {
			if x < y {
				return -1
			}
			return 1
		}
	}
	return 0
}

// mulMonomials sets c to the product of a and b and panics when a degree gets
// too large.
func mulMonomials(c, a, b []uint64) {
	var over uint64
	for i, x := range a {
		c[i] = x + b[i]
		over |= c[i]
	}
	if over&guards != 0 {
		panic(fmt.Sprintf("mpoly: a degree of the product exceeds %d", maxDegree))
	}
}

// dividesMonomial reports whether b divides a.
func dividesMonomial(b, a []uint64) bool {
	for i, x := range a {
		if (x|guards-b[i])&guards != guards {
			return false
		}
	}
	return true
}

// selectGreater returns the mask of the fields in which a >= b.
func selectGreater(a, b uint64) uint64 {
	d := (a | guards - b) & guards
	return d - d>>15
}

// maxExponents returns the largest exponent of each variable, packed.
func (p Poly) maxExponents() []uint64 {
	w := wordsOf(p.n)
	m := make([]uint64, w)
	for i := 0; i < len(p.exps); i += w {
		for j := range m {
			a, b := p.exps[i+j], m[j]
			s := selectGreater(a, b)
			m[j] = a&s | b&^s
		}
	}
	return m
}

// minExponents returns the smallest exponent of each variable, packed; zeros
// for the zero polynomial.
func (p Poly) minExponents() []uint64 {
	w := wordsOf(p.n)
	m := make([]uint64, w)
	copy(m, p.exps)
	for i := w; w > 0 && i < len(p.exps); i += w {
		for j := range m {
			a, b := p.exps[i+j], m[j]
			s := selectGreater(a, b)
			m[j] = b&s | a&^s
		}
	}
	return m
}

// packing maps monomials to single words, keeping their order, by giving each
// variable just the bits it needs.
type packing struct {
	fields []packedField
	guard  uint64 // the bit above each field, when there is one
	bits   int    // all fields together
}

type packedField struct {
	word         int
	shift, place uint
}

// newPacking returns a packing for monomials that divide bound, with a clear
// bit above each field if guarded, and ok false when it needs more than a word.
func newPacking(n int, bound []uint64, guarded bool) (pk packing, ok bool) {
	extra := 0
	if guarded {
		extra = 1
	}
	used := 0
	pk.fields = make([]packedField, 0, n)
	for i := n - 1; i >= 0; i-- {
		d := exponent(bound, i)
		if d == 0 {
			continue
		}
		w, s := fieldOf(i)
		pk.fields = append(pk.fields, packedField{w, s, uint(used)})
		used += bits.Len(uint(d)) + extra
		if used > 64 {
			return packing{}, false
		}
		if guarded {
			pk.guard |= 1 << (used - 1)
		}
	}
	pk.bits = used
	return pk, true
}

// pack returns the packed monomials of exps, w words each, count in number.
func (pk packing) pack(exps []uint64, w, count int) []uint64 {
	r := make([]uint64, count)
	for i := range r {
		r[i] = pk.pack1(exps[i*w : i*w+w])
	}
	return r
}

// pack1 returns the packed monomial e.
func (pk packing) pack1(e []uint64) uint64 {
	var x uint64
	for _, f := range pk.fields {
		x |= e[f.word] >> f.shift & fieldMask << f.place
	}
	return x
}

// unpack is the inverse of pack. The fields are those of newPacking, last
// variable first.
func (pk packing) unpack(packed []uint64, w int) []uint64 {
	r := make([]uint64, w*len(packed))
	for i, x := range packed {
		e := r[i*w : i*w+w]
		for k, f := range pk.fields {
			v := x >> f.place
			if k+1 < len(pk.fields) {
				v &= 1<<(pk.fields[k+1].place-f.place) - 1
			}
			e[f.word] |= v << f.shift
		}
	}
	return r
}
