package mpoly

import "context"

// skeleton is an image of h with the monomials it has, by ascending powers of
// x. Further images are sought among polynomials with these monomials.
type skeleton struct {
	stride int
	exps   []uint16 // stride a term: the exponents of x, v_1, ..., v_k
	coef   []uint64
	from   []int // the terms with x^e are from[e]..from[e+1]-1
}

// widest returns the largest number of terms with the same power of x.
func (s *skeleton) widest() int {
	most := 1
	for e := 1; e < len(s.from); e++ {
		most = max(most, s.from[e]-s.from[e-1])
	}
	return most
}

// newSkeleton returns the skeleton of the image h at level j in the form of
// [imager.interpolate].
func (m *imager) newSkeleton(j int, h []uint64) *skeleton {
	stride := len(m.dims)
	count := 0
	for _, c := range h {
		if c != 0 {
			count++
		}
	}
	s := &skeleton{stride: stride, exps: make([]uint16, 0, count*stride), coef: make([]uint64, 0, count)}
	size := m.dims[0] + 1
	s.from = make([]int, 1, size+1)
	for e := range size {
		for i := e; i < len(h); i += size {
			if h[i] == 0 {
				continue
			}
			s.coef = append(s.coef, h[i])
			s.exps = append(s.exps, uint16(e))
			rest := i / size
			for _, d := range m.dims[1 : j+1] {
				s.exps = append(s.exps, uint16(rest%(d+1)))
				rest /= d + 1
			}
			for range stride - 1 - j {
				s.exps = append(s.exps, 0)
			}
		}
		s.from = append(s.from, len(s.coef))
	}
	return s
}

// walker evaluates a chain, at one level, at v_i = r_i^s for s = 1, 2, ... and
// i < j, which leaves a polynomial in x and v_j.
type walker struct {
	value, ratio []uint64
	at           []int32 // the entry of the table the term belongs to
	table        []uint64
	width        int // of a row, which holds a polynomial in x
}

// newWalker returns the walker of c with the powers r[i] of r_i. The terms are
// those of the given level, j or, where there is no variable v_j, j-1.
func newWalker(f *field, c *chain, level, j int, r [][]uint64) *walker {
	l := &c.level[level]
	count := len(l.terms)
	w := &walker{width: c.degX + 1, at: make([]int32, count)}
	rows := 1
	if level == j {
		rows += int(c.degree(j))
	}
	mem := make([]uint64, 2*count+rows*w.width)
	w.value, w.ratio, w.table = mem[:count], mem[count:2*count], mem[2*count:]
	copy(w.value, l.coef)
	stride := c.k + 1
	for i, t := range l.terms {
		e := c.exps[int(t)*stride : int(t+1)*stride]
		w.ratio[i] = monomialValue(f, e[1:j], r)
		w.at[i] = int32(e[0])
		if level == j {
			w.at[i] += int32(int(e[j]) * w.width)
		}
	}
	return w
}

// monomialValue returns the product of r[i][e[i]].
func monomialValue(f *field, e []uint16, r [][]uint64) uint64 {
	x := f.one
	for i, d := range e {
		if d != 0 {
			x = f.times(x, r[i][d])
		}
	}
	return x
}

// step passes to the next s.
func (w *walker) step(f *field) {
	clear(w.table)
	for i, x := range w.value {
		x = f.times(x, w.ratio[i])
		w.value[i] = x
		t := &w.table[w.at[i]]
		*t = f.Add(*t, x)
	}
}

// image writes the polynomial in x for v_j with the given powers to a.
func (w *walker) image(f *field, a, powers []uint64) []uint64 {
	a = a[:w.width]
	copy(a, w.table)
	for v := 1; v*w.width < len(w.table); v++ {
		y := powers[v]
		for e, c := range w.table[v*w.width : (v+1)*w.width] {
			if c != 0 {
				a[e] = f.Add(a[e], f.times(c, y))
			}
		}
	}
	return trimmed(a)
}

// values returns the coefficients of the terms of s in the images of h for the
// values of v_j with the given powers, one row for each of these; s is taken to
// have all the monomials in x, v_1, ..., v_(j-1). Beyond the last variable
// there is one row, without evaluation.
//
// Source: Zippel, Probabilistic algorithms for sparse polynomials, EUROSAM
// 1979, with the evaluations at powers of his Interpolating polynomials from
// their values, J. Symbolic Comput. 9 (1990).
func (m *imager) values(j int, s *skeleton, powers [][]uint64) (rows []uint64, res outcome) {
	f := m.f
	level := min(j, m.p.k)
	terms, size := len(s.coef), m.dims[0]+1
	count := s.widest()
	rows = make([]uint64, len(powers)*terms)
	images := make([]uint64, len(powers)*count*size)
	factors := make([]uint64, 2*len(powers)*count)
	nums, dens := factors[:len(powers)*count], factors[len(powers)*count:]
	res = imageUnlucky
	var systems []*vandermonde
	for try := 0; res == imageUnlucky; try++ {
		if try == maxUnlucky {
			return nil, imageUnlucky
		}
		r := make([][]uint64, j-1)
		for i := range r {
			r[i] = make([]uint64, max(m.power(i+1), m.dims[i+1])+1)
			f.powers(r[i], m.random.next(f))
		}
		var ok bool
		if systems, ok = s.systems(m.ctx, f, j, r); !ok {
			if m.ctx.Err() != nil {
				return nil, imageCancelled
			}
			continue
		}
		walkers := [3]*walker{newWalker(f, m.p, level, j, r), newWalker(f, m.q, level, j, r)}
		if m.gamma != nil {
			walkers[2] = newWalker(f, m.gamma, level, j, r)
		}
		res = m.walk(walkers, images, nums, dens, powers)
	}
	if res != imageFound {
		return nil, res
	}
	f.reciprocals(dens)
	for i := range nums {
		scaleBy(f, images[i*size:(i+1)*size], f.times(nums[i], dens[i]))
	}
	for e, v := range systems {
		if v == nil {
			continue
		}
		v.solve(m.ctx, images[e:], len(powers), count*size, size, func(i, r int, c uint64) {
			rows[r*terms+s.from[e]+i] = c
		})
	}
	if m.ctx.Err() != nil {
		return nil, imageCancelled
	}
	return rows, imageFound
}

// systems returns the linear system for each power of x, nil where there is no
// term, and ok false when one is singular.
func (s *skeleton) systems(ctx context.Context, f *field, j int, r [][]uint64) (v []*vandermonde, ok bool) {
	v = make([]*vandermonde, len(s.from)-1)
	nodes := make([]uint64, len(s.coef))
	for i := range nodes {
		nodes[i] = monomialValue(f, s.exps[i*s.stride+1:i*s.stride+j], r)
	}
	for e := range v {
		if lo, hi := s.from[e], s.from[e+1]; lo < hi {
			if v[e], ok = newVandermonde(ctx, f, nodes[lo:hi]); !ok {
				return nil, false
			}
		}
	}
	return v, true
}

// walk writes the images in x at the points s = 1, 2, ... for each value of v_j
// to images, without their scale, which is nums/dens.
func (m *imager) walk(walkers [3]*walker, images, nums, dens []uint64, powers [][]uint64) outcome {
	f, size := m.f, m.dims[0]+1
	count := len(nums) / len(powers)
	for s := range count {
		for _, w := range walkers {
			if w != nil {
				w.step(f)
			}
		}
		for t, y := range powers {
			at := t*count + s
			nums[at] = m.scale
			if w := walkers[2]; w != nil {
				nums[at] = 0
				if g := w.image(f, m.c, y); len(g) > 0 {
					nums[at] = g[0]
				}
			}
			if nums[at] == 0 {
				return imageUnlucky
			}
			a, b := walkers[0].image(f, m.a, y), walkers[1].image(f, m.b, y)
			var res outcome
			if dens[at], res = m.gcd(images[at*size:(at+1)*size], a, b); res != imageFound {
				return res
			}
		}
	}
	return imageFound
}

// extend returns the skeleton at level j from that at level j-1, which is the
// image at v_j = alpha.
func (m *imager) extend(j int, s *skeleton, alpha uint64) (*skeleton, outcome) {
	f := m.f
	d := m.dims[j]
	if d == 0 {
		return s, imageFound
	}
	nodes := m.different([]uint64{alpha}, d+1)
	rows, res := m.values(j, s, m.powersOf(nodes[1:], m.power(j)))
	if res != imageFound {
		return nil, res
	}
	terms := len(s.coef)
	rows = append(append(make([]uint64, 0, terms+len(rows)), s.coef...), rows...)
	l := lagrange(f, nodes)
	t := &skeleton{stride: s.stride, from: make([]int, 1, len(s.from))}
	for e := 1; e < len(s.from); e++ {
		for i := s.from[e-1]; i < s.from[e]; i++ {
			for v := range d + 1 {
				var c uint64
				for r, row := range l {
					c = f.Add(c, f.times(row[v], rows[r*terms+i]))
				}
				if c == 0 {
					continue
				}
				t.coef = append(t.coef, c)
				t.exps = append(t.exps, s.exps[i*s.stride:(i+1)*s.stride]...)
				t.exps[len(t.exps)-s.stride+j] = uint16(v)
			}
		}
		t.from = append(t.from, len(t.coef))
	}
	return t, imageFound
}
