package mpoly

import (
	"math"
	"math/big"
	"slices"
)

// termTable is a polynomial with its exponents unpacked and its variables in
// another order.
type termTable struct {
	p     Poly
	vars  []int // the variable of each column
	width int
	exp   []uint16 // a row of exponents for each row of the table
	term  []int32  // the term of p of each row
}

// newTermTable returns the terms of p with columns for the variables listed in
// order. Rows are in descending lexicographic order of the
// columns if sorted, otherwise in the order of p. Other variables are replaced
// by 1, which must not make terms alike.
func newTermTable(p Poly, order []int, sorted bool) *termTable {
	w, k := len(order), p.Len()
	t := &termTable{p: p, vars: order, width: w, exp: make([]uint16, w*k), term: make([]int32, k)}
	words := wordsOf(p.n)
	for c, v := range order {
		at, s := fieldOf(v)
		for i := range k {
			t.exp[i*w+c] = uint16(p.exps[i*words+at] >> s & fieldMask)
		}
	}
	for i := range t.term {
		t.term[i] = int32(i)
	}
	if !sorted {
		return t
	}
	slices.SortFunc(t.term, func(i, j int32) int {
		return slices.Compare(t.row(int(j)), t.row(int(i)))
	})
	exp := make([]uint16, 0, w*k)
	for _, i := range t.term {
		exp = append(exp, t.row(int(i))...)
	}
	t.exp = exp
	return t
}

// permuted returns t with the columns in another order.
func (t *termTable) permuted(columns []int) *termTable {
	r := &termTable{p: t.p, width: t.width, exp: make([]uint16, len(t.exp)), term: t.term}
	for i, c := range columns {
		r.vars = append(r.vars, t.vars[c])
		for k := 0; k < len(t.exp); k += t.width {
			r.exp[k+i] = t.exp[k+c]
		}
	}
	return r
}

func (t *termTable) row(i int) []uint16 { return t.exp[i*t.width : i*t.width+t.width] }

func (t *termTable) rows() int { return len(t.term) }

// degrees returns the degree in each column.
func (t *termTable) degrees() []int {
	d := make([]int, t.width)
	for i := range t.rows() {
		for c, e := range t.row(i) {
			d[c] = max(d[c], int(e))
		}
	}
	return d
}

// lineDegree returns the total degree in the columns from 1 on.
func (t *termTable) lineDegree() int {
	d := 0
	for i := range t.rows() {
		s := 0
		for _, e := range t.row(i)[1:] {
			s += int(e)
		}
		d = max(d, s)
	}
	return d
}

// coefficients returns the coefficients of the rows modulo P.
func (t *termTable) coefficients(f *field) []uint64 {
	c := make([]uint64, t.rows())
	for i, k := range t.term {
		if t.p.bigs != nil {
			c[i] = f.fromBig(t.p.bigs[k])
		} else {
			c[i] = f.fromWord(t.p.words[k])
		}
	}
	return c
}

// powerTable returns the powers of the values up to the given degrees.
func (f *field) powerTable(values []uint64, degrees []int) [][]uint64 {
	total := len(degrees)
	for _, d := range degrees {
		total += d
	}
	room := make([]uint64, total)
	table := make([][]uint64, len(degrees))
	for c, d := range degrees {
		table[c], room = room[:d+1:d+1], room[d+1:]
		f.powers(table[c], values[c])
	}
	return table
}

// evaluate multiplies the entries of c, one for each row, by the values of the
// monomials of the rows without their first column, given the powers of the
// values. Sorted neighbours share the powers of their common columns.
func (t *termTable) evaluate(f *field, powers [][]uint64, c []uint64) {
	w := t.width
	partial := make([]uint64, w+1) // partial[i]: the value of the columns before i
	partial[1] = f.one
	var last []uint16
	for i := range c {
		row := t.exp[i*w : i*w+w]
		from := 1
		if last != nil {
			for from < w && row[from] == last[from] {
				from++
			}
		}
		for k := from; k < w; k++ {
			if e := row[k]; e == 0 {
				partial[k+1] = partial[k]
			} else {
				partial[k+1] = f.times(partial[k], powers[k][e])
			}
		}
		last = row
		c[i] = f.times(c[i], partial[w])
	}
}

// integerImage returns the coefficients, by powers of the first column, of the
// polynomial at small integers for the other columns.
func (t *termTable) integerImage(degrees []int, point []int64) []*big.Int {
	image := make([]*big.Int, degrees[0]+1)
	if t.p.bigs == nil {
		if c, ok := t.wordImage(degrees, point); ok {
			for i, x := range c {
				image[i] = big.NewInt(x)
			}
			return image
		}
	}
	for i := range image {
		image[i] = new(big.Int)
	}
	powers := make([][]*big.Int, t.width)
	for k := 1; k < t.width; k++ {
		powers[k] = make([]*big.Int, degrees[k]+1) // those needed
	}
	v, u := new(big.Int), new(big.Int)
	for i, k := range t.term {
		v.Set(t.p.coef(int(k)))
		row := t.row(i)
		for j := 1; j < len(row); j++ {
			e := row[j]
			if e == 0 {
				continue
			}
			if powers[j][e] == nil {
				powers[j][e] = new(big.Int).Exp(big.NewInt(point[j]), big.NewInt(int64(e)), nil)
			}
			u.Mul(v, powers[j][e])
			u, v = v, u
		}
		image[row[0]].Add(image[row[0]], v)
	}
	return image
}

// wordImage is integerImage in words, ok false when the sum of the absolute
// values of all terms might exceed 2^62.
func (t *termTable) wordImage(degrees []int, point []int64) (image []int64, ok bool) {
	powers := make([][]int64, t.width)
	sizes := make([][]float64, t.width)
	for k := 1; k < t.width; k++ {
		powers[k] = make([]int64, degrees[k]+1)
		sizes[k] = make([]float64, degrees[k]+1)
		x, y := int64(1), 1.0
		for i := range powers[k] {
			powers[k][i], sizes[k][i] = x, y
			x, y = x*point[k], y*math.Abs(float64(point[k]))
		}
	}
	image = make([]int64, degrees[0]+1)
	size := 0.0
	for i, k := range t.term {
		v := t.p.words[k]
		s := math.Abs(float64(v))
		row := t.row(i)
		for j := 1; j < len(row); j++ {
			if e := row[j]; e > 0 {
				v *= powers[j][e]
				s *= sizes[j][e]
			}
		}
		size += s
		image[row[0]] += v
	}
	return image, size < 1<<62
}

// small returns a pseudo-random integer of absolute value from 1 to bound, for
// bound < 2^32.
func (s *points) small(bound int) int64 {
	v := s.next(fieldAt(0)) % uint64(2*bound)
	x := int64(v/2) + 1
	if v&1 == 1 {
		return -x
	}
	return x
}
