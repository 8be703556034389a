package mpoly

import "math/bits"

// probe is a polynomial seen at a random point modulo P: enough to prove, in
// most cases, that it has no content and no multiple factors.
type probe struct {
	f       *field
	t       *termTable
	degrees []int
	value   []uint64   // of the terms
	inverse [][]uint64 // powers of the inverses of the coordinates, by variable
	used    []uint64   // the variables of each term, as bits modulo 64
}

// newProbe evaluates the terms of p, columns standing for the variables vars;
// others it uses are replaced by 1, which must not make terms alike.
func newProbe(p Poly, vars []int) *probe {
	t := newTermTable(p, vars, false)
	r := &probe{f: fieldAt(0), t: t, degrees: t.degrees()}
	rng := points(5)
	point := make([]uint64, len(vars))
	for i := range point {
		point[i] = rng.next(r.f)
	}
	powers := r.f.powerTable(point, r.degrees)
	r.f.reciprocals(point)
	r.inverse = r.f.powerTable(point, r.degrees)
	r.value = t.coefficients(r.f)
	r.used = make([]uint64, t.rows())
	for i := range r.value {
		row := t.row(i)
		r.value[i] = r.f.times(r.value[i], r.f.monomial(row, powers))
		for k, e := range row {
			if e > 0 {
				r.used[i] |= 1 << (k % 64)
			}
		}
	}
	return r
}

// variables returns a set, as bits modulo 64, of variables that includes those
// of the content in the variable of the column main.
func (r *probe) variables(main int) uint64 {
	all := make([]uint64, r.degrees[main]+1)
	some := make([]bool, len(all))
	for i, u := range r.used {
		e := r.t.row(i)[main]
		all[e] |= u
		some[e] = true
	}
	set := ^uint64(0)
	for e, u := range all {
		if some[e] {
			set &= u
		}
	}
	if len(r.degrees) <= 64 {
		set &^= 1 << main
	}
	return set
}

// primitive reports whether p is proven free of content in the variable of the column main. The content
// divides all coefficients in the variable of the column main; it is free of y if their images in F[y]
// are coprime and one of them has the full degree.
func (r *probe) primitive(main int) bool {
	set := r.variables(main)
	for set != 0 {
		y := bits.TrailingZeros64(set)
		set &^= 1 << y
		for ; y < len(r.degrees); y += 64 {
			if y != main && !r.freeOf(main, y) {
				return false
			}
		}
	}
	return true
}

// freeOf reports whether the content in the variable of the column main is proven to be free of y.
func (r *probe) freeOf(main, y int) bool {
	f := r.f
	rows := newRows(r.degrees[main]+1, r.degrees[y]+1)
	degree := make([]int, len(rows))
	for i := range degree {
		degree[i] = -1
	}
	for i, v := range r.value {
		row := r.t.row(i)
		a, e := rows[row[main]], int(row[y])
		a[e] = f.Add(a[e], f.times(v, r.inverse[y][e]))
		degree[row[main]] = max(degree[row[main]], e)
	}
	full := false
	var g []uint64
	for i, a := range rows {
		if degree[i] < 0 {
			continue
		}
		full = full || a[degree[i]] != 0
		if g = f.gcd(g, a); len(g) == 1 && full {
			return true
		}
	}
	return len(g) == 1 && full
}

// multiplicities returns the degrees in the variable of the column main of the parts of p by
// multiplicity, at the index of the multiplicity, for p primitive in the variable of the column main.
// They are proven when all is of multiplicity 1, else probable; ok is false
// when the image has a lower degree.
func (r *probe) multiplicities(main int) (degrees []int, ok bool) {
	f := r.f
	image := make([]uint64, r.degrees[main]+1)
	for i, v := range r.value {
		e := r.t.row(i)[main]
		image[e] = f.Add(image[e], f.times(v, r.inverse[main][e]))
	}
	if image[len(image)-1] == 0 {
		return nil, false
	}
	degrees = []int{0}
	for len(image) > 1 { // image = prod a_m^m, m >= 1
		g := f.gcd(image, f.derivative(image)) // prod a_m^(m-1)
		radical := len(image) - len(g)
		degrees = append(degrees, radical)
		image = g
	}
	for m := 1; m+1 < len(degrees); m++ {
		degrees[m] -= degrees[m+1] // those of multiplicity at least m+1
	}
	return degrees, true
}

// derivative returns the derivative of a.
func (f *field) derivative(a []uint64) []uint64 {
	if len(a) == 0 {
		return nil
	}
	d := make([]uint64, len(a)-1)
	k := uint64(0)
	for i := range d {
		k = f.Add(k, f.one)
		d[i] = f.times(a[i+1], k)
	}
	return d
}
