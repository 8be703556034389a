package mpoly

import (
	"math/bits"
	"slices"
)

// chain is a polynomial in x, v_1, ..., v_k over a prime field together with
// room for its images under evaluation of v_k, of v_k and v_(k-1), and so on.
// Which terms coincide does not depend on the points, so it is found once.
type chain struct {
	k       int
	exps    []uint16 // k+1 a term: those of x, v_1, ..., v_k
	degX    int
	degrees []uint16     // in x, v_1, ..., v_k
	order   []int32      // the terms of the given polynomial, ascending in x, v_1, ..., v_k
	level   []chainLevel // level j has the variables x, v_1, ..., v_j
}

// chainLevel is the image at one level. Terms whose coefficient happens to be
// zero stay.
type chainLevel struct {
	terms []int32 // a term of the polynomial with these exponents
	start []int32 // term i comes from the terms start[i]..start[i+1]-1 of the next level
	coef  []uint64
}

// newChain returns the chain of p with x = x_vars[0] and v_i = x_vars[i], without
// coefficients. The powers of x are counted down from flip when that is
// positive.
func newChain(p Poly, vars []int, flip int) *chain {
	k, n := len(vars)-1, p.Len()
	stride := k + 1
	raw := make([]uint16, (2*n+1)*stride)
	c := &chain{k: k, exps: raw[n*stride : 2*n*stride], degrees: raw[2*n*stride:], level: make([]chainLevel, stride)}
	raw = raw[:n*stride]
	w := wordsOf(p.n)
	for j, v := range vars {
		at, s := fieldOf(v)
		for i, e := j, at; e < len(p.exps); i, e = i+stride, e+w {
			raw[i] = uint16(p.exps[e] >> s & fieldMask)
		}
	}
	if flip > 0 {
		for i := 0; i < len(raw); i += stride {
			raw[i] = uint16(flip) - raw[i]
		}
	}
	c.order = sortRows(raw, stride)
	ints := make([]int32, 2*n+(2*n+1)*k)
	terms, diff := ints[:n], ints[n:2*n] // diff: the first column unlike the term before
	ints = ints[2*n:]
	for i, t := range c.order {
		row := c.exps[i*stride : (i+1)*stride]
		copy(row, raw[int(t)*stride:(int(t)+1)*stride])
		terms[i] = int32(i)
		for j, d := range row {
			c.degrees[j] = max(c.degrees[j], d)
		}
		if i > 0 {
			d := 0
			for last := c.exps[(i-1)*stride : i*stride]; d < k && row[d] == last[d]; {
				d++
			}
			diff[i] = int32(d)
		}
	}
	c.degX = int(c.degrees[0])
	total := 0
	for j := k; ; j-- {
		c.level[j].terms = terms
		total += len(terms)
		if j == 0 {
			break
		}
		up, start := ints[:0:n], ints[n:n:2*n+1]
		ints = ints[2*n+1:]
		for i, t := range terms {
			if i == 0 || int(diff[t]) < j {
				up, start = append(up, t), append(start, int32(i))
			}
		}
		c.level[j-1].start = append(start, int32(len(terms)))
		terms = up
	}
	coefs := make([]uint64, total)
	for j := range c.level {
		m := len(c.level[j].terms)
		c.level[j].coef, coefs = coefs[:m:m], coefs[m:]
	}
	return c
}

// sortRows returns the order of the rows of a table with the given number of
// columns that makes them ascend.
func sortRows(table []uint16, stride int) []int32 {
	n := len(table) / stride
	order := make([]int32, n)
	for i := range order {
		order[i] = int32(i)
	}
	widths := make([]uint16, stride)
	for i := 0; i < len(table); i += stride {
		for j := range widths {
			widths[j] |= table[i+j]
		}
	}
	total := 0
	for _, x := range widths {
		total += bits.Len16(x)
	}
	if total > 64 {
		slices.SortFunc(order, func(a, b int32) int {
			return slices.Compare(table[int(a)*stride:int(a+1)*stride], table[int(b)*stride:int(b+1)*stride])
		})
		return order
	}
	mem := make([]keyed, 2*n)
	keys := mem[:n]
	ordered := true
	for i := range keys {
		var key uint64
		for j, x := range table[i*stride : (i+1)*stride] {
			key = key<<bits.Len16(widths[j]) | uint64(x)
		}
		keys[i] = keyed{key, int32(i)}
		ordered = ordered && (i == 0 || keys[i-1].key < key)
	}
	if ordered {
		return order
	}
	for i, k := range sortKeyed(keys, mem[n:], total) {
		order[i] = k.number
	}
	return order
}

// load sets the coefficients to those of p modulo the characteristic of f.
func (c *chain) load(f *field, p Poly) {
	coef := c.level[c.k].coef
	for i, t := range c.order {
		coef[i] = f.coef(p, int(t))
	}
}

// evaluate sets level j-1 to the image of level j under v_j = t.
func (c *chain) evaluate(f *field, j int, powers []uint64) {
	from, to := &c.level[j], &c.level[j-1]
	stride := c.k + 1
	for i := range to.coef {
		var sum uint64
		for r := to.start[i]; r < to.start[i+1]; r++ {
			e := c.exps[int(from.terms[r])*stride+j]
			if e == 0 {
				sum = f.Add(sum, from.coef[r])
			} else {
				sum = f.Add(sum, f.times(from.coef[r], powers[e]))
			}
		}
		to.coef[i] = sum
	}
}

// univariate writes level 0, a polynomial in x, to a, which has room for it,
// and returns it without leading zeros.
func (c *chain) univariate(a []uint64) []uint64 {
	a = a[:c.degX+1]
	clear(a)
	stride := c.k + 1
	l := &c.level[0]
	for i, t := range l.terms {
		a[c.exps[int(t)*stride]] = l.coef[i]
	}
	return trimmed(a)
}

// trimmed cuts leading zeros off.
func trimmed(a []uint64) []uint64 {
	for len(a) > 0 && a[len(a)-1] == 0 {
		a = a[:len(a)-1]
	}
	return a
}

// degree returns the degree in v_j.
func (c *chain) degree(j int) uint16 { return c.degrees[j] }
