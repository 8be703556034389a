package mpoly

import (
	"context"
	"math/big"
)

// division is the exact division of packed polynomials. The remainder is kept
// in a table; its monomials are those of the dividend, which come in order, and
// others, which wait in a heap.
type division struct {
	ctx      context.Context
	pk       packing
	table    *monomialTable
	dividend []uint64
	divisor  []uint64
	room     uint64 // the largest quotient monomial in each variable
	next     int    // in the dividend
	waiting  []uint64
	quo      builder  // coefficients only
	keys     []uint64 // monomials of the quotient
	spilled  bool     // a coefficient does not fit a word
	work     int
}

// newDivision prepares the division of p by q; their degrees, packed, are no
// larger for q in any variable.
func newDivision(ctx context.Context, pk packing, p, q Poly, degrees, over []uint64) *division {
	w := wordsOf(p.n)
	d := &division{ctx: ctx, pk: pk, dividend: pk.pack(p.exps, w, p.Len()), divisor: pk.pack(q.exps, w, q.Len())}
	d.room = pk.pack1(degrees) - pk.pack1(over)
	d.keys = make([]uint64, 0, 16)
	d.quo.p.words = make([]int64, 0, 16)
	d.table = newMonomialTable(pk.bits, p.Len()+p.Len()/2, 4*p.Len())
	for _, key := range d.dividend {
		d.table.find(key)
	}
	return d
}

// top removes and returns the largest monomial not yet seen.
func (d *division) top() (key uint64, ok bool) {
	if len(d.waiting) > 0 && (d.next == len(d.dividend) || d.waiting[0] > d.dividend[d.next]) {
		return d.pop(), true
	}
	if d.next == len(d.dividend) {
		return 0, false
	}
	d.next++
	return d.dividend[d.next-1], true
}

// push adds a monomial to the heap.
func (d *division) push(key uint64) {
	h := append(d.waiting, key)
	i := len(h) - 1
	for i > 0 && h[(i-1)/2] < key {
		h[i] = h[(i-1)/2]
		i = (i - 1) / 2
	}
	h[i] = key
	d.waiting = h
}

// pop removes and returns the largest monomial of the heap.
func (d *division) pop() uint64 {
	h := d.waiting
	top, last := h[0], h[len(h)-1]
	h = h[:len(h)-1]
	d.waiting = h
	i := 0
	for 2*i+1 < len(h) {
		c := 2*i + 1
		if c+1 < len(h) && h[c+1] > h[c] {
			c++
		}
		if h[c] <= last {
			break
		}
		h[i] = h[c]
		i = c
	}
	if len(h) > 0 {
		h[i] = last
	}
	return top
}

// quotient returns the monomial key over the leading one of the divisor, and
// ok false when that is none or is too large to belong to a quotient.
func (d *division) quotient(key uint64) (m uint64, ok bool) {
	g := d.pk.guard
	m = key | g - d.divisor[0]
	if m&g != g {
		return 0, false
	}
	m &^= g
	return m, (d.room|g-m)&g == g
}

// checkEvery is the number of products between looks at the context.
const checkEvery = 1 << 15

// cancelled counts the products of one term and looks at the context at times.
func (d *division) cancelled() error {
	if d.work += len(d.divisor); d.work < checkEvery {
		return nil
	}
	d.work = 0
	return d.ctx.Err()
}

// words divides polynomials with coefficients in words. It gives up, spilled,
// when one of the quotient or of a remainder at its turn is longer.
func (d *division) words(p, q Poly) (ok bool, err error) {
	rem := d.table.longs
	defer func() { d.table.longs = rem }()
	for _, c := range p.words {
		rem = append(rem, accumulator{})
		rem[len(rem)-1].add(c)
	}
	lead := q.words[0]
	for {
		key, more := d.top()
		if !more {
			return true, nil
		}
		k, _ := d.table.find(key)
		s := &rem[k]
		if s.isZero() {
			continue
		}
		m, ok := d.quotient(key)
		if !ok {
			return false, nil
		}
		x, ok := s.word()
		if !ok {
			d.spilled = true
			return false, nil
		}
		if x%lead != 0 {
			return false, nil
		}
		c := x / lead
		d.keys = append(d.keys, m)
		d.quo.addWord(nil, c)
		for j := 1; j < len(d.divisor); j++ {
			to := m + d.divisor[j]
			k, fresh := d.table.find(to)
			if fresh {
				rem = append(rem, accumulator{})
				d.push(to)
			}
			rem[k].addProduct(-c, q.words[j])
		}
		if err := d.cancelled(); err != nil {
			return false, err
		}
	}
}

// bigs divides polynomials with any coefficients.
func (d *division) bigs(p, q Poly) (ok bool, err error) {
	rem := make([]big.Int, p.Len(), cap(d.table.keys))
	for i := range rem {
		rem[i].Set(p.coef(i))
	}
	long := make([]*big.Int, q.Len())
	for i := range long {
		long[i] = q.coef(i)
	}
	var product, r big.Int
	for {
		key, more := d.top()
		if !more {
			return true, nil
		}
		k, _ := d.table.find(key)
		if rem[k].Sign() == 0 {
			continue
		}
		m, ok := d.quotient(key)
		if !ok {
			return false, nil
		}
		c := new(big.Int)
		if c.QuoRem(&rem[k], long[0], &r); r.Sign() != 0 {
			return false, nil
		}
		d.keys = append(d.keys, m)
		d.quo.addBig(nil, c)
		for j := 1; j < len(d.divisor); j++ {
			to := m + d.divisor[j]
			k, fresh := d.table.find(to)
			if fresh {
				rem = append(rem, big.Int{})
				d.push(to)
			}
			rem[k].Sub(&rem[k], product.Mul(c, long[j]))
		}
		if err := d.cancelled(); err != nil {
			return false, err
		}
	}
}

// result returns the quotient in n variables, if it was found.
func (d *division) result(n int, ok bool) Poly {
	if !ok {
		return Poly{}
	}
	r := d.quo.p
	r.n = n
	// The monomials keep their fields; the clear bits above them do no harm.
	r.exps = d.pk.unpack(d.keys, wordsOf(n))
	return canonical(r)
}
