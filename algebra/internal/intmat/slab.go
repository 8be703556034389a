package intmat

import (
	"math/big"
	"math/bits"
)

// slab holds integers of at most a fixed number of limbs in one piece of
// memory. The words of each are cut to their capacity, so a value that grows
// moves out and never touches its neighbour.
type slab struct {
	values []*big.Int
	words  []big.Word
	size   int // words of each value
}

const wordsPerLimb = 64 / bits.UintSize

// newSlab returns count zeros with room for the given number of limbs.
func newSlab(count, limbs int) *slab {
	s := &slab{values: make([]*big.Int, count), size: limbs * wordsPerLimb}
	ints := make([]big.Int, count)
	for i := range ints {
		s.values[i] = &ints[i]
	}
	s.words = make([]big.Word, count*s.size)
	return s
}

// set gives value i, not set before, the two's complement x.
func (s *slab) set(i int, x []uint64) {
	words := s.words[i*s.size : (i+1)*s.size : (i+1)*s.size]
	negative := x[len(x)-1]>>63 == 1
	carry := uint64(1)
	for k, v := range x {
		if negative {
			v, carry = bits.Add64(^v, 0, carry)
		}
		for h := range wordsPerLimb {
			words[k*wordsPerLimb+h] = big.Word(v >> (h * bits.UintSize))
		}
	}
	s.values[i].SetBits(words)
	if negative {
		s.values[i].Neg(s.values[i])
	}
}

// bigWords returns signed words as integers.
func bigWords(v []uint64) []*big.Int {
	s := newSlab(len(v), 1)
	for i := range v {
		s.set(i, v[i:i+1])
	}
	return s.values
}

// rowsOf cuts a list into rows of k, sharing memory.
func rowsOf(v []*big.Int, rows, k int) [][]*big.Int {
	m := make([][]*big.Int, rows)
	for i := range m {
		m[i] = v[i*k : (i+1)*k : (i+1)*k]
	}
	return m
}
