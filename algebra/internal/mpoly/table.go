package mpoly

import (
	"math/bits"
	"sync"
)

// monomialTable numbers packed monomials in the order of their arrival.
//
// Source: Goto and Kanada, Hashing lemmas on time complexities with
// applications to formula manipulation, SYMSAC 1976 (products by hashing).
type monomialTable struct {
	cells []int32  // the number of the key there, from 1; 0 for a free cell
	keys  []uint64 // by number
	bits  int      // of a key
	// The home of a key is key factor >> shift. When all keys there can be have
	// a cell of their own, the factor is 1: then cells are in the order of keys.
	factor uint64
	shift  uint
	// Room for what comes with a table.
	sorted, spare []keyed
	words         []int64
	longs         []accumulator
}

// tables keeps tables that are no longer used, for their memory.
var tables = sync.Pool{New: func() any { return new(monomialTable) }}

// newMonomialTable returns a table for keys of the given number of bits, about
// to hold some terms out of so many products.
func newMonomialTable(keyBits, terms, products int) *monomialTable {
	t := tables.Get().(*monomialTable)
	t.keys, t.bits, t.words, t.longs = t.keys[:0], keyBits, t.words[:0], t.longs[:0]
	if keyBits <= bits.Len(uint(products))+1 {
		t.free(keyBits)
		t.factor, t.shift = 1, 0
		return t
	}
	t.resize(bits.Len(uint(terms)) + 1)
	return t
}

// keptCells bounds the size of tables kept for later.
const keptCells = 1 << 18

// release gives the table up.
func (t *monomialTable) release() {
	if cap(t.cells) <= keptCells {
		tables.Put(t)
	}
}

// free gives the table 2^k free cells.
func (t *monomialTable) free(k int) {
	if cap(t.cells) < 1<<k {
		t.cells = make([]int32, 1<<k)
		return
	}
	t.cells = t.cells[:1<<k]
	clear(t.cells)
}

// resize gives the table 2^k cells and enters the keys again.
func (t *monomialTable) resize(k int) {
	t.free(k)
	t.factor, t.shift = 0x9e3779b97f4a7c15, uint(64-k)
	for i, key := range t.keys {
		*t.cell(key) = int32(i + 1)
	}
}

// cell returns the cell of the key, or the free one where it belongs.
func (t *monomialTable) cell(key uint64) *int32 {
	for i := key * t.factor >> t.shift; ; i++ {
		c := &t.cells[i&uint64(len(t.cells)-1)]
		if *c == 0 || t.keys[*c-1] == key {
			return c
		}
	}
}

// find returns the number of the key and whether it is new.
func (t *monomialTable) find(key uint64) (number int, fresh bool) {
	c := t.cell(key)
	if *c != 0 {
		return int(*c - 1), false
	}
	t.keys = append(t.keys, key)
	*c = int32(len(t.keys))
	if t.factor != 1 && 2*len(t.keys) > len(t.cells) {
		t.resize(bits.Len(uint(len(t.cells))) + 1)
	}
	return len(t.keys) - 1, true
}

// ascending returns all keys with their numbers, smallest key first, in memory
// of the table.
func (t *monomialTable) ascending() []keyed {
	sorted := t.sorted[:0]
	if t.factor == 1 {
		for key, number := range t.cells {
			if number != 0 {
				sorted = append(sorted, keyed{uint64(key), number - 1})
			}
		}
		t.sorted = sorted
		return sorted
	}
	for i, key := range t.keys {
		sorted = append(sorted, keyed{key, int32(i)})
	}
	if cap(t.spare) < len(sorted) {
		t.spare = make([]keyed, len(sorted))
	}
	t.sorted = sorted
	return sortKeyed(sorted, t.spare[:len(sorted)], t.bits)
}
