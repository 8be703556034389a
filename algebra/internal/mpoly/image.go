package mpoly

import (
	"context"

	"example.org/closedform/algebra/internal/zp"
)

// imager computes images over a prime field of
//
//	h = gamma g / lc(g), g = gcd(p, q), gamma a multiple of lc(g),
//
// where leading coefficients are taken in x, as polynomials in v_1, ..., v_k.
// The scale makes images under different evaluations fit together.
type imager struct {
	ctx     context.Context
	f       *field
	p, q    *chain
	gamma   *chain // nil when gamma is a constant
	scale   uint64 // gamma when it is a constant
	dims    []int  // dims[0] = deg g in x, dims[j] bounds the degree of h in v_j
	random  points
	a, b, c []uint64 // room for images in one variable
	dense   []denseLevel
}

// denseLevel holds what interpolation in one variable v_j needs.
type denseLevel struct {
	nodes    []uint64
	powers   [][]uint64 // of each node
	lagrange [][]uint64
	values   []uint64
}

// outcome is the result of an attempt to get an image.
type outcome int

const (
	imageFound outcome = iota
	imageUnlucky
	imageLower // the degree of g in x is lower than thought; dims[0] is set
	imageCancelled
)

// maxUnlucky bounds the retries at one level before the level above retries.
const maxUnlucky = 8

// monomials returns the number of monomials in x, v_1, ..., v_j within dims,
// or limit if that is less.
func (m *imager) monomials(j, limit int) int {
	size := 1
	for _, d := range m.dims[:j+1] {
		if size > limit/(d+1) {
			return limit
		}
		size *= d + 1
	}
	return size
}

// power returns the largest exponent of v_j in any of the polynomials.
func (m *imager) power(j int) int {
	top := uint16(0)
	for _, c := range []*chain{m.p, m.q, m.gamma} {
		if c != nil {
			top = max(top, c.degree(j))
		}
	}
	return int(top)
}

// evaluate passes from level j to level j-1.
func (m *imager) evaluate(j int, powers []uint64) {
	m.p.evaluate(m.f, j, powers)
	m.q.evaluate(m.f, j, powers)
	if m.gamma != nil {
		m.gamma.evaluate(m.f, j, powers)
	}
}

// gcd writes the gcd of the polynomials a and b in x, which it destroys, to h,
// which has room for dims[0]+1 coefficients, and returns its leading
// coefficient.
func (m *imager) gcd(h, a, b []uint64) (lead uint64, res outcome) {
	if m.ctx.Err() != nil {
		return 0, imageCancelled
	}
	if len(a) == 0 && len(b) == 0 {
		return 0, imageUnlucky
	}
	g := m.f.GCDInPlace(zp.Poly(a), zp.Poly(b))
	switch d := len(g) - 1; {
	case d > m.dims[0]:
		return 0, imageUnlucky
	case d < m.dims[0]:
		m.dims[0] = d
		return 0, imageLower
	}
	copy(h, g)
	return g[len(g)-1], imageFound
}

// constant writes the image at level 0, without its scale, to h and returns the
// factor it is to be multiplied by as quotient of two elements.
func (m *imager) constant(h []uint64) (num, den uint64, res outcome) {
	num = m.scale
	if m.gamma != nil {
		num = m.gamma.level[0].coef[0]
	}
	if num == 0 {
		return 0, 0, imageUnlucky
	}
	den, res = m.gcd(h, m.p.univariate(m.a), m.q.univariate(m.b))
	return num, den, res
}

// interpolate writes the image at level j to h, the coefficient of
// x^e v_1^(i_1) ... v_j^(i_j) at e + (d_0+1) (i_1 + (d_1+1) (i_2 + ...)), by
// interpolation in v_j of images at level j-1.
//
// Source: Brown, On Euclid's algorithm and the computation of polynomial
// greatest common divisors, J. ACM 18 (1971), algorithm P.
func (m *imager) interpolate(j int, h []uint64) outcome {
	f := m.f
	size := m.dims[0] + 1
	if j == 0 {
		num, den, res := m.constant(h)
		if res == imageFound {
			scaleBy(f, h[:size], f.times(num, f.reciprocal(den)))
		}
		return res
	}
	for _, d := range m.dims[1:j] {
		size *= d + 1
	}
	l := &m.dense[j]
	count := m.dims[j] + 1
	if cap(l.values) < size*count {
		l.values = make([]uint64, size*count)
	}
	values := l.values[:size*count]
	res := imageUnlucky
	for try := 0; res == imageUnlucky; try++ {
		if try == maxUnlucky {
			return imageUnlucky
		}
		if try > 0 || len(l.nodes) != count {
			m.newNodes(j, count)
		}
		if j == 1 {
			res = m.constants(values, size)
			continue
		}
		for i, powers := range l.powers {
			m.evaluate(j, powers)
			if res = m.interpolate(j-1, values[i*size:(i+1)*size]); res != imageFound {
				break
			}
		}
	}
	if res != imageFound {
		return res
	}
	clear(h[:size*count])
	for i, row := range l.lagrange {
		for e, c := range row {
			if c == 0 {
				continue
			}
			to := h[e*size : (e+1)*size]
			for s, y := range values[i*size : (i+1)*size] {
				if y != 0 {
					to[s] = f.Add(to[s], f.times(y, c))
				}
			}
		}
	}
	return imageFound
}

// constants writes the images at level 0 for all nodes of v_1 to values: one
// inversion serves them all.
func (m *imager) constants(values []uint64, size int) outcome {
	f, l := m.f, &m.dense[1]
	factors := make([]uint64, 2*len(l.powers))
	nums, dens := factors[:len(l.powers)], factors[len(l.powers):]
	for i, powers := range l.powers {
		m.evaluate(1, powers)
		var res outcome
		nums[i], dens[i], res = m.constant(values[i*size : (i+1)*size])
		if res != imageFound {
			return res
		}
	}
	f.reciprocals(dens)
	for i := range nums {
		scaleBy(f, values[i*size:(i+1)*size], f.times(nums[i], dens[i]))
	}
	return imageFound
}

// scaleBy multiplies a by c.
func scaleBy(f *field, a []uint64, c uint64) {
	for i, x := range a {
		a[i] = f.times(x, c)
	}
}

// newNodes chooses count different values of v_j.
func (m *imager) newNodes(j, count int) {
	l := &m.dense[j]
	l.nodes = m.different(nil, count)
	l.lagrange = lagrange(m.f, l.nodes)
	l.powers = m.powersOf(l.nodes, m.power(j))
}

// different appends pseudo-random elements to nodes until there are count
// different ones.
func (m *imager) different(nodes []uint64, count int) []uint64 {
next:
	for len(nodes) < count {
		t := m.random.next(m.f)
		for _, x := range nodes {
			if x == t {
				continue next
			}
		}
		nodes = append(nodes, t)
	}
	return nodes
}

// powersOf returns the powers up to the given one of each node.
func (m *imager) powersOf(nodes []uint64, top int) [][]uint64 {
	mem := make([]uint64, len(nodes)*(top+1))
	r := make([][]uint64, len(nodes))
	for i, t := range nodes {
		r[i] = mem[i*(top+1) : (i+1)*(top+1)]
		m.f.powers(r[i], t)
	}
	return r
}
