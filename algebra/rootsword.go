package algebra

import (
	"context"
	"math"
	"math/big"
	"math/cmplx"
)

// wordRoots is the iteration of [aberth] with the values of p in fixed-point
// numbers, of as many words for each point as it takes to tell them from noise,
// and the corrections in float64. The points are also kept as float64 pairs,
// z = 2^shift (hi + lo).
type wordRoots struct {
	big   []*big.Int
	shift int64
	start []complex128
	pts   []wordPoint
	z     []rootPoint
	words []int // for p at the points
	polys map[wordScale]*wordPoly
}

func newWordRoots(f *floatRoots) *wordRoots {
	n := len(f.z)
	r := &wordRoots{big: f.big, shift: f.shift, start: f.start, pts: make([]wordPoint, n), z: make([]rootPoint, n),
		words: make([]int, n), polys: make(map[wordScale]*wordPoly)}
	mem := make([]uint64, 2*n*maxWords)
	for i, z := range f.z {
		m := mem[2*i*maxWords : 2*(i+1)*maxWords]
		r.pts[i] = wordPoint{re: m[:maxWords], im: m[maxWords:]}
		r.pts[i].set(z, r.shift)
		r.z[i] = rootPoint{hi: z}
		r.words[i] = 2
	}
	return r
}

// set makes p the point 2^shift z, at full length.
func (p *wordPoint) set(z complex128, shift int64) {
	_, e := math.Frexp(floatAbs(z) * (1 + 0x1p-40))
	p.exp = int64(e) + shift
	clear(p.re)
	clear(p.im)
	fixedAddFloat(p.re, math.Ldexp(real(z), -e-1))
	fixedAddFloat(p.im, math.Ldexp(imag(z), -e-1))
}

// top returns the first w words of p, which are a point near p: rounding goes
// down, so that a modulus of at most 2^exp - 2^-40 stays below 2^exp.
func (p *wordPoint) top(w int) wordPoint {
	return wordPoint{p.re[len(p.re)-w:], p.im[len(p.im)-w:], p.exp}
}

// float returns p/2^shift within 2^-99 of 2^exp.
func (p *wordPoint) float(shift int64) rootPoint {
	part := func(x []uint64) (hi, lo float64) {
		a, b := x[len(x)-1], x[len(x)-2]
		e := int(p.exp-shift) + 1 - 64
		return math.Ldexp(float64(int64(a&^0x7ff)), e), math.Ldexp(float64(a&0x7ff)+float64(b)*0x1p-64, e)
	}
	a, b := part(p.re)
	c, d := part(p.im)
	return rootPoint{complex(a, c), complex(b, d)}
}

// poly returns p for point i.
func (r *wordRoots) poly(i int) *wordPoly {
	exp := r.pts[i].exp
	s := newWordScale(exp, math.Ldexp(floatAbs(r.z[i].hi), int(r.shift-exp)), r.words[i])
	p := r.polys[s]
	if p == nil {
		p = newWordPoly(r.big, s)
		r.polys[s] = p
	}
	return p
}

// step returns the correction of z_i in units of 2^shift, and whether the point
// is good to 2^-66 and far closer to its root than to other points already. ok is
// false if maxWords words do not tell the correction from noise.
func (r *wordRoots) step(i int) (w complex128, good, ok bool) {
	p := &r.pts[i]
	s := r.reciprocalSum(i)
	unit := math.Ldexp(1, int(p.exp-r.shift))
	near := max(floatAbs(s)*unit*0x1p24, 0x1p66) * float64(len(r.z))
	s *= complex(unit, 0)
	for ; ; r.words[i]++ {
		t := r.poly(i)
		v, d := t.eval(p.top(t.w), true)
		ev, ed := t.errors()
		abs, slope := cmplx.Abs(v), cmplx.Abs(d) // squares would underflow
		if slope > 64*ed && (abs+ev)*near < slope {
			return 0, true, true
		}
		d -= v * s
		if abs > 64*ev && cmplx.Abs(d) > 64*(ed+ev*cmplx.Abs(s)) {
			return complex(unit, 0) * v / d, false, true
		}
		if r.words[i] == maxWords {
			return 0, false, false
		}
	}
}

// run sweeps over the points until all of them are good or the next step would
// be below 2^-56 of the distance to the other points, or gives up. Nothing it
// finds is proven.
func (r *wordRoots) run(ctx context.Context) (settled bool, err error) {
	n := len(r.z)
	done := make([]bool, n)
	left := n
	for sweeps := 64*maxWords + 2*n; left > 0 && sweeps > 0; sweeps-- {
		for i := range r.z {
			if done[i] {
				continue
			}
			if err := ctx.Err(); err != nil {
				return false, err
			}
			w, good, ok := r.step(i)
			if !ok {
				return false, nil
			}
			p, z := &r.pts[i], r.z[i].hi
			size := floatAbs(w)
			if !(size < 0x1p100) {
				w = z * complex(0.125, 0.0625)
			} else if good || size*(floatAbs(r.reciprocalSum(i))+1/floatAbs(z)) < 0x1p-28 {
				done[i] = true
				left--
			}
			if good {
				continue
			}
			z -= w
			e := int(p.exp - r.shift)
			if size >= 0.0625*math.Ldexp(1, e) {
				if size := floatAbs(z); !(size < 1<<floatRange && size > 1.0/(1<<floatRange)) {
					z = r.start[i] * complex(0.8, 0.6)
				}
				p.set(z, r.shift)
				r.z[i] = rootPoint{hi: z}
				continue
			}
			p.normalize(floatAbs(z), r.shift)
			e = int(p.exp - r.shift)
			fixedAddFloat(p.re, -math.Ldexp(real(w), -e-1))
			fixedAddFloat(p.im, -math.Ldexp(imag(w), -e-1))
			r.z[i] = p.float(r.shift)
		}
	}
	return left == 0, nil
}

// normalize adapts the exponent to a point of modulus size 2^shift that is going
// to take the place of p, at most 2^(exp-4) away.
func (p *wordPoint) normalize(size float64, shift int64) {
	_, e := math.Frexp(size * (1 + 0x1p-40))
	s := max(int64(e)+shift-p.exp, -1) // after which |p| is below 3/4 2^exp, if it was raised
	if s < 0 && size*(1+0x1p-40) >= 0.25*math.Ldexp(1, int(p.exp-shift)) {
		s = 0 // either exponent will do
	}
	if s == 0 {
		return
	}
	for _, x := range [][]uint64{p.re, p.im} {
		if s > 0 { // by 1 at most
			fixedHalve(x)
			continue
		}
		for i := len(x) - 1; i >= 0; i-- {
			lo := uint64(0)
			if i > 0 {
				lo = x[i-1]
			}
			x[i] = x[i]<<-s | lo>>(64+s)
		}
	}
	p.exp += s
}

// reciprocalSum is that of float64, for points that may be close.
func (r *wordRoots) reciprocalSum(i int) complex128 {
	p := r.z[i]
	hx, hy, lx, ly := real(p.hi), imag(p.hi), real(p.lo), imag(p.lo)
	near := (hx*hx + hy*hy) * 0x1p-120
	var sr, si float64
	for j := range r.z {
		q := &r.z[j]
		dx := (hx - real(q.hi)) + (lx - real(q.lo))
		dy := (hy - imag(q.hi)) + (ly - imag(q.lo))
		d := dx*dx + dy*dy
		if d < near {
			if j == i {
				continue
			}
			c := r.exactly(i, j, false)
			dx, dy = real(c), imag(c)
			if d = dx*dx + dy*dy; d == 0 {
				continue
			}
		}
		d = 1 / d
		sr += dx * d
		si -= dy * d
	}
	return complex(sr, si)
}

// exactly returns z_i - z_j, or z_i minus the conjugate of z_j, from the words,
// relatively within 2^-48 if it is above 2^-800 of z_i.
func (r *wordRoots) exactly(i, j int, mirror bool) complex128 {
	p, q := &r.pts[i], &r.pts[j]
	exp := max(p.exp, q.exp)
	var x, y [maxWords]uint64
	part := func(a, b []uint64, add bool) float64 {
		copy(x[:], a)
		copy(y[:], b)
		for e := p.exp; e < exp; e++ {
			fixedHalve(x[:])
		}
		for e := q.exp; e < exp; e++ {
			fixedHalve(y[:])
		}
		if add {
			fixedNeg(y[:])
		}
		// The difference of numbers in [-1/2, 1/2) may be anything in (-1, 1).
		fixedHalve(x[:])
		fixedHalve(y[:])
		fixedSub(x[:], x[:], y[:])
		return math.Ldexp(fixedFloat(x[:]), int(exp-r.shift)+2)
	}
	if max(exp-p.exp, exp-q.exp) > 32 {
		return r.z[i].hi - r.z[j].hi
	}
	return complex(part(p.re, q.re, false), part(p.im, q.im, mirror))
}

// certify is that of floatRoots.
func (r *wordRoots) certify(ctx context.Context) (discs []rootDisc, gaps []magnitude, ok bool) {
	n := len(r.z)
	his := make([]complex128, n)
	for i, z := range r.z { // the sign of an imaginary part may be far down
		p := &r.pts[i]
		his[i] = complex(real(z.hi), math.Ldexp(fixedFloat(p.im), int(p.exp-r.shift)+1))
	}
	order, reals, ok := matchConjugates(his, r.exactly)
	if !ok {
		return nil, nil, false
	}
	pts := make([]rootPoint, n)
	values := make([]magnitude, n)
	for k, i := range order {
		z := r.z[i]
		if k >= reals && (k-reals)%2 == 1 {
			pts[k] = rootPoint{cmplx.Conj(pts[k-1].hi), cmplx.Conj(pts[k-1].lo)}
			continue
		}
		if k < reals {
			z = rootPoint{complex(real(z.hi), 0), complex(real(z.lo), 0)}
			clear(r.pts[i].im)
		}
		pts[k] = z
		if ctx.Err() != nil {
			return nil, nil, false
		}
		values[k] = r.value(i)
		p := &r.pts[i]
		rest := maxWords - r.words[i]
		clear(p.re[:rest])
		clear(p.im[:rest])
	}
	rads, gaps, ok := certifyPoints(ctx, pts, reals, values, intMagDown(r.big[n], 0), r.shift, func(k, l int) complex128 {
		mirror := l > reals && (l-reals)%2 == 1
		if mirror {
			l--
		}
		return r.exactly(order[k], order[l], mirror)
	})
	if !ok {
		return nil, nil, false
	}
	discs = make([]rootDisc, len(rads))
	for k := range discs {
		i := order[k]
		if k >= reals {
			i = order[2*k-reals]
		}
		p := r.pts[i].top(r.words[i])
		unit := p.exp + 1 - 64*int64(r.words[i])
		discs[k] = rootDisc{ComplexBall{fixedBall(p.re, unit), fixedBall(p.im, unit)}, rads[k]}
	}
	return discs, gaps, true
}

// value returns an upper bound of |p| at the point, with one more word if the
// bound would spoil the 66th bit of the root.
func (r *wordRoots) value(i int) magnitude {
	for ; ; r.words[i]++ {
		p := &r.pts[i]
		t := r.poly(i)
		v, d := t.eval(p.top(t.w), true)
		ev, _ := t.errors()
		if cmplx.Abs(d) > ev*0x1p68*float64(len(r.z)) || r.words[i] == maxWords {
			return magFloatUp((cmplx.Abs(v) + ev) * (1 + 0x1p-20)).mulPow2(t.scale)
		}
	}
}

// fixedBall returns X 2^unit.
func fixedBall(x []uint64, unit int64) Ball {
	return ownBall(fixedBig(x), unit, magnitude{}, math.MaxUint)
}
