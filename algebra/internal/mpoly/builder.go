package mpoly

import (
	"fmt"
	"math"
	"math/big"
	"math/bits"
	"slices"
)

// builder collects terms. Coefficients stay words until one does not fit.
type builder struct {
	p Poly
}

// newBuilder returns a builder with room for the given number of terms.
func newBuilder(n, room int) *builder {
	return &builder{Poly{n: n, exps: make([]uint64, 0, room*wordsOf(n)), words: make([]int64, 0, room)}}
}

// spill turns the coefficients into big ones.
func (b *builder) spill() {
	if b.p.bigs == nil {
		b.p.bigs = make([]*big.Int, len(b.p.words), cap(b.p.words)+1)
		for i, c := range b.p.words {
			b.p.bigs[i] = big.NewInt(c)
		}
		b.p.words = nil
	}
}

// addWord appends the term c e, where c may be 0 or -2^63.
func (b *builder) addWord(e []uint64, c int64) {
	switch {
	case c == 0:
	case b.p.bigs != nil || c == math.MinInt64:
		b.addBig(e, big.NewInt(c))
	default:
		b.p.exps = append(b.p.exps, e...)
		b.p.words = append(b.p.words, c)
	}
}

// addBig appends the term c e and keeps c unless it fits a word.
func (b *builder) addBig(e []uint64, c *big.Int) {
	if b.p.bigs == nil && fitsWord(c) {
		b.addWord(e, c.Int64())
		return
	}
	if c.Sign() == 0 {
		return
	}
	b.spill()
	b.p.exps = append(b.p.exps, e...)
	b.p.bigs = append(b.p.bigs, c)
}

// addTerm appends the coefficient of term i of q with the monomial e.
func (b *builder) addTerm(e []uint64, q Poly, i int) {
	if q.bigs != nil {
		b.addBig(e, q.bigs[i])
		return
	}
	b.addWord(e, q.words[i])
}

// poly returns the sum of the terms, which were added in descending order.
func (b *builder) poly() Poly { return canonical(b.p) }

// canonical returns p with the coefficients as words when they fit.
func canonical(p Poly) Poly {
	if p.Len() == 0 {
		return Poly{n: p.n}
	}
	if p.bigs == nil {
		return p
	}
	for _, c := range p.bigs {
		if !fitsWord(c) {
			return p
		}
	}
	p.words = make([]int64, len(p.bigs))
	for i, c := range p.bigs {
		p.words[i] = c.Int64()
	}
	p.bigs = nil
	return p
}

// sorted returns the sum of the terms, added in any order.
func (b *builder) sorted() Poly {
	p := b.p
	k := p.Len()
	ordered := true
	for i := 1; i < k && ordered; i++ {
		ordered = compareMonomials(p.exp(i-1), p.exp(i)) > 0
	}
	if ordered {
		return canonical(p)
	}
	order := make([]int32, k)
	for i := range order {
		order[i] = int32(i)
	}
	slices.SortStableFunc(order, func(i, j int32) int {
		return compareMonomials(p.exp(int(j)), p.exp(int(i)))
	})
	r := newBuilder(p.n, k)
	for i := 0; i < k; {
		at := int(order[i])
		j := i + 1
		for j < k && compareMonomials(p.exp(at), p.exp(int(order[j]))) == 0 {
			j++
		}
		if p.bigs == nil {
			var s accumulator
			for _, t := range order[i:j] {
				s.add(p.words[t])
			}
			s.appendTo(r, p.exp(at))
		} else {
			s := new(big.Int)
			for _, t := range order[i:j] {
				s.Add(s, p.bigs[t])
			}
			r.addBig(p.exp(at), s)
		}
		i = j
	}
	return r.poly()
}

// accumulator is a signed sum of three words, lowest first: room for 2^64
// products of words.
type accumulator struct{ w0, w1, w2 uint64 }

// add adds c.
func (s *accumulator) add(c int64) {
	var carry uint64
	top := uint64(c >> 63)
	s.w0, carry = bits.Add64(s.w0, uint64(c), 0)
	s.w1, carry = bits.Add64(s.w1, top, carry)
	s.w2 += top + carry
}

// addProduct adds a b.
func (s *accumulator) addProduct(a, b int64) {
	hi, lo := bits.Mul64(uint64(a), uint64(b))
	hi -= uint64(a>>63)&uint64(b) + uint64(b>>63)&uint64(a)
	var carry uint64
	s.w0, carry = bits.Add64(s.w0, lo, 0)
	s.w1, carry = bits.Add64(s.w1, hi, carry)
	s.w2 += uint64(int64(hi)>>63) + carry
}

// isZero reports whether the sum is 0.
func (s *accumulator) isZero() bool { return s.w0|s.w1|s.w2 == 0 }

// word returns the sum and whether its absolute value is below 2^63.
func (s *accumulator) word() (c int64, ok bool) {
	c = int64(s.w0)
	top := uint64(c >> 63)
	return c, s.w1 == top && s.w2 == top && c != math.MinInt64
}

// big returns the sum.
func (s *accumulator) big() *big.Int {
	w0, w1, w2 := s.w0, s.w1, s.w2
	negative := int64(w2) < 0
	if negative {
		var borrow uint64
		w0, borrow = bits.Sub64(0, w0, 0)
		w1, borrow = bits.Sub64(0, w1, borrow)
		w2, _ = bits.Sub64(0, w2, borrow)
	}
	r := new(big.Int).SetBits([]big.Word{big.Word(w0), big.Word(w1), big.Word(w2)})
	if negative {
		r.Neg(r)
	}
	return r
}

// appendTo appends the sum as coefficient of e.
func (s *accumulator) appendTo(b *builder, e []uint64) {
	if c, ok := s.word(); ok {
		b.addWord(e, c)
		return
	}
	b.addBig(e, s.big())
}

// join returns the number of variables of an operation on p and q.
func join(p, q Poly) int {
	switch {
	case p.n == q.n:
		return p.n
	case p.IsZero() && q.IsZero():
		return max(p.n, q.n)
	case q.IsZero():
		return p.n
	case p.IsZero():
		return q.n
	}
	panic(fmt.Sprintf("mpoly: operands in %d and %d variables", p.n, q.n))
}
