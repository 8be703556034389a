package mpoly

import (
	"context"
	"math/bits"
)

// seriesLift lifts coprime factors in F[x] of a polynomial at t = 0 to factors
// over the power series in t, with given leading coefficients:
//
//	A(x, t) = prod factor_i(x, t)^mult_i modulo t^n.
//
// Multiplicities need no square-free decomposition: the error of order k is
// divisible by prod factor_i(x, 0)^(mult_i - 1), and what is left of it is
// divided up as if all were 1. Buffers are used again by every lift.
//
// Source: Geddes, Czapor and Labahn, Algorithms for Computer Algebra, chapter
// 6 (linear lifting with several factors and imposed leading coefficients).
type seriesLift struct {
	f      *field
	mult   []int
	chain  []int      // the factor at each position of the product
	factor []series   // the factors
	part   []series   // part[m]: the product of the first m+1 of the chain
	share  [][]uint64 // inverses of mult_i times the other factors modulo factor i, t = 0
	lead   []uint64   // inverses of the leading coefficients at t = 0
	scale  []uint64
	bottom []uint64 // prod factor_i(x, 0)^(mult_i - 1), nil when that is 1
	unit   uint64   // the inverse of its leading coefficient
	delta  [][]uint64
	work   [4][]uint64
}

// series is a polynomial in x over the power series in t: row[k] is the
// coefficient of t^k, zero from row[size] on.
type series struct {
	row  [][]uint64
	size int
}

// newSeriesLift returns a lift of factors with the given degrees and
// multiplicities to a precision of up to n coefficients.
func newSeriesLift(f *field, degrees, mult []int, n int) *seriesLift {
	l := &seriesLift{f: f, mult: mult}
	d := 0
	for i, e := range degrees {
		l.factor = append(l.factor, series{newRows(n, e+1), 0})
		for range mult[i] {
			l.chain = append(l.chain, i)
			d += e
		}
	}
	for i := range l.work {
		l.work[i] = make([]uint64, 4*d+8)
	}
	l.share = newRows(len(degrees), d+1)
	l.delta = newRows(len(degrees), d+1)
	l.lead = make([]uint64, len(degrees))
	l.scale = make([]uint64, len(degrees))
	e := 0
	for m, i := range l.chain {
		l.delta[i] = l.delta[i][:degrees[i]]
		if e += degrees[i]; m == 0 {
			l.part = append(l.part, l.factor[i])
		} else {
			l.part = append(l.part, series{newRows(n, e+1), 0})
		}
	}
	return l
}

// newRows returns n rows of m zeros.
func newRows(n, m int) [][]uint64 {
	room := make([]uint64, n*m)
	rows := make([][]uint64, n)
	for i := range rows {
		rows[i], room = room[:m:m], room[m:]
	}
	return rows
}

// start prepares for factors set at t = 0, the inverses of their leading
// coefficients being in lead; ok is false when they are not coprime.
func (l *seriesLift) start() (ok bool) {
	f := l.f
	l.bottom, l.unit = nil, f.one
	for i := range l.factor {
		l.factor[i].size = 1
		for range l.mult[i] - 1 {
			if l.bottom == nil {
				l.bottom = []uint64{f.one}
			}
			l.bottom = f.product(l.bottom, l.factor[i].row[0])
			l.unit = f.times(l.unit, l.lead[i])
		}
	}
	for i := range l.factor {
		s, c := f.inverseModulo(l.work[2], trimmed(l.others(i)), l.factor[i].row[0])
		if c == 0 {
			return false
		}
		l.share[i] = append(l.share[i][:0], s...)
		l.scale[i] = c
	}
	f.reciprocals(l.scale)
	for i, s := range l.share {
		scaleBy(f, s, l.scale[i])
	}
	l.part[0].size = 1
	for m := 1; m < len(l.part); m++ {
		l.part[m].size = 0
		l.multiply(m, 0)
	}
	return true
}

// others returns mult_i times the product of the other factors modulo factor i.
func (l *seriesLift) others(i int) []uint64 {
	f := l.f
	g := l.factor[i].row[0]
	r := append(l.work[0][:0], f.fromWord(int64(l.mult[i])))
	for j := range l.factor {
		if j == i {
			continue
		}
		h, _ := f.reduce(append(l.work[1][:0], l.factor[j].row[0]...), g, l.lead[i])
		p := l.work[2][:len(r)+len(h)-1]
		f.productTo(p, r, h)
		p, _ = f.reduce(p, g, l.lead[i])
		r = append(r[:0], p...)
	}
	return r
}

// multiply sets the coefficient k of part m from the factors known.
func (l *seriesLift) multiply(m, k int) {
	f := l.f
	a, b := &l.part[m-1], &l.factor[l.chain[m]]
	part := &l.part[m]
	row := part.row[k]
	from, to := max(0, k-b.size+1), min(k, a.size-1)
	zero := true
	p := f.P
	for i := range row {
		var hi, lo uint64
		for j := from; j <= to; j++ {
			u, v := a.row[j], b.row[k-j]
			for c := max(0, i-len(v)+1); c <= min(i, len(u)-1); c++ {
				h, x := bits.Mul64(u[c], v[i-c])
				var carry uint64
				lo, carry = bits.Add64(lo, x, 0)
				hi += h + carry
				if hi >= p {
					hi -= p
				}
			}
		}
		row[i] = f.redc(hi, lo)
		zero = zero && row[i] == 0
	}
	if !zero {
		part.size = k + 1
	}
}

// lift computes the factors modulo t^n from rows a[k], the coefficients of
// t^k of A. The leading coefficients of the factors, whose product with
// multiplicities is that of A, are set beforehand, and start has been called.
// It reports whether there are such factors; not, when ctx is done.
func (l *seriesLift) lift(ctx context.Context, a [][]uint64, n int) bool {
	f := l.f
	top := len(l.part) - 1
	for k := 1; k < n; k++ {
		if ctx.Err() != nil {
			return false
		}
		for i := range l.factor {
			g := l.factor[i].row[k]
			clear(g[:len(g)-1])
			if g[len(g)-1] != 0 {
				l.factor[i].size = k + 1
			}
		}
		l.part[0].size = l.factor[l.chain[0]].size
		for m := 1; m <= top; m++ {
			l.multiply(m, k)
		}
		row := l.part[top].row[k]
		e := l.work[0][:len(row)-1]
		zero := true
		for i := range e {
			e[i] = f.Sub(a[k][i], row[i])
			zero = zero && e[i] == 0
		}
		if zero {
			continue
		}
		if l.bottom != nil {
			r, q := f.reduce(e, l.bottom, l.unit)
			if len(trimmed(r)) > 0 {
				return false
			}
			e = q
		}
		for i := range l.factor {
			l.correct(i, k, e)
		}
		l.update(k)
	}
	return true
}

// correct adds to the coefficient k of factor i its share of the error e.
func (l *seriesLift) correct(i, k int, e []uint64) {
	f := l.f
	g := l.factor[i].row[0]
	r, _ := f.reduce(append(l.work[1][:0], e...), g, l.lead[i])
	d := l.delta[i]
	clear(d)
	if len(r) > 0 {
		p := l.work[2][:len(r)+len(l.share[i])-1]
		f.productTo(p, r, l.share[i])
		p, _ = f.reduce(p, g, l.lead[i])
		copy(d, p)
	}
	copy(l.factor[i].row[k], d)
	for _, c := range d {
		if c != 0 {
			l.factor[i].size = k + 1
			break
		}
	}
}

// update adds to the coefficients k of the partial products what the changes
// delta of the factors make.
func (l *seriesLift) update(k int) {
	f := l.f
	change := l.delta[l.chain[0]]
	l.part[0].size = l.factor[l.chain[0]].size
	for m := 1; m < len(l.part)-1; m++ {
		i := l.chain[m]
		part := &l.part[m]
		row := part.row[k]
		next := l.work[m%2][:len(row)]
		for j := range row {
			s := f.coefficient(dotSum{}, change, l.factor[i].row[0], j)
			s = f.coefficient(s, l.part[m-1].row[0], l.delta[i], j)
			next[j] = f.redc(s.hi, s.lo)
			if row[j] = f.Add(row[j], next[j]); row[j] != 0 {
				part.size = k + 1
			}
		}
		change = next
	}
}

// degree returns the largest degree in t of the factors, lifted modulo t^n.
func (l *seriesLift) degree() int {
	d := 0
	for _, g := range l.factor {
		d = max(d, g.size-1)
	}
	return d
}
