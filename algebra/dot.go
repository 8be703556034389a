package algebra

import (
	"math/big"
	"math/bits"
)

// accumulator adds products of integers on the scale 2^e, below which they are
// cut off, and counts the cuts.
type accumulator struct {
	e      int64
	sum, t big.Int
	cuts   uint64
}

// newAccumulator returns an accumulator for n terms below 2^top that keeps prec
// bits of the largest.
func newAccumulator(top int64, n int, prec uint) *accumulator {
	return &accumulator{e: top - int64(prec) - int64(bits.Len(uint(n))) - 2}
}

// add adds x y 2^e.
func (s *accumulator) add(x, y *big.Int, e int64) {
	shift := e - s.e
	if int64(x.BitLen()+y.BitLen())+shift <= 0 { // below the scale altogether
		s.cuts++
		return
	}
	s.t.Mul(x, y)
	if shift >= 0 {
		s.t.Lsh(&s.t, uint(shift))
	} else {
		s.t.Rsh(&s.t, uint(-shift))
		s.cuts++
	}
	s.sum.Add(&s.sum, &s.t)
}

// ball returns the sum with the radius r and the cuts: each is less than a unit.
func (s *accumulator) ball(r magnitude, prec uint) Ball {
	if s.cuts > 0 {
		r = r.addUp(magUp(s.cuts, s.e))
	}
	return ownBall(new(big.Int).Set(&s.sum), s.e, r, prec)
}

// Dot returns the sum of the products a[i] b[i], rounded once. Both slices have
// the same length.
func Dot(a, b []Ball, prec uint) Ball {
	var r magnitude
	top, any := int64(0), false
	for i := range a {
		x, y := a[i], b[i]
		if x.rad.isInf() || y.rad.isInf() {
			return unknown()
		}
		if !x.rad.isZero() || !y.rad.isZero() {
			r = r.addUp(x.midUp().mulUp(y.rad)).addUp(y.midUp().mulUp(x.rad)).addUp(x.rad.mulUp(y.rad))
		}
		if x.man != nil && y.man != nil {
			if t := x.top() + y.top(); !any || t > top {
				top, any = t, true
			}
		}
	}
	if !any {
		return Ball{rad: r}
	}
	s := newAccumulator(top, len(a), prec)
	for i := range a {
		if a[i].man != nil && b[i].man != nil {
			s.add(a[i].man, b[i].man, a[i].exp+b[i].exp)
		}
	}
	return s.ball(r, prec)
}

// dotInts returns the sum of the products n[i] x[i], rounded once.
func dotInts(n []*big.Int, x []Ball, prec uint) Ball {
	var r magnitude
	top, any := int64(0), false
	for i, m := range n {
		if m.Sign() == 0 {
			continue
		}
		if x[i].rad.isInf() {
			return unknown()
		}
		if !x[i].rad.isZero() {
			r = r.addUp(intMagUp(m, 0).mulUp(x[i].rad))
		}
		if x[i].man != nil {
			if t := int64(m.BitLen()) + x[i].top(); !any || t > top {
				top, any = t, true
			}
		}
	}
	if !any {
		return Ball{rad: r}
	}
	s := newAccumulator(top, len(n), prec)
	for i, m := range n {
		if m.Sign() != 0 && x[i].man != nil {
			s.add(m, x[i].man, x[i].exp)
		}
	}
	return s.ball(r, prec)
}

// Powers holds the powers 1, z, z^2, ... of an enclosed complex number, for the
// evaluation of many polynomials at it.
type Powers struct {
	prec   uint
	re, im []Ball
	real   bool
}

// NewPowers returns the powers of z up to the n-th with prec bits.
func NewPowers(z ComplexBall, n int, prec uint) *Powers {
	p := &Powers{prec: prec, real: z.isReal()}
	w := ComplexBall{Re: BallFromInt(big.NewInt(1))}
	for k := range n + 1 {
		if k > 0 {
			w = w.Mul(z, prec)
		}
		p.re, p.im = append(p.re, w.Re), append(p.im, w.Im)
	}
	return p
}

// Taylor returns the coefficient of (s - z)^j in the expansion of p at z, the
// sum over k of binomial(k, j) p[k] z^(k-j). The degree of p must not exceed
// that of the powers.
func Taylor[E any](k Scalars[E], p Poly[E], j int, z *Powers) ComplexBall {
	n := p.Degree() - j + 1
	if n <= 0 {
		return ComplexBall{}
	}
	if p.q == nil {
		balls := make([]Ball, n)
		binomial := big.NewInt(1)
		for i := range balls {
			balls[i] = k.Enclose(p.Coef(i+j), z.prec).MulInt(binomial, z.prec)
			nextBinomial(binomial, i+j, j)
		}
		return z.dot(func(x []Ball) Ball { return Dot(balls, x, z.prec) }, n)
	}
	ints := p.q.ints()[j:]
	if j > 0 {
		binomial := big.NewInt(1)
		scaled := make([]*big.Int, n)
		for i := range scaled {
			scaled[i] = new(big.Int).Mul(binomial, ints[i])
			nextBinomial(binomial, i+j, j)
		}
		ints = scaled
	}
	v := z.dot(func(x []Ball) Ball { return dotInts(ints, x, z.prec) }, n)
	if p.q.den != nil {
		d := BallFromInt(p.q.den)
		v = ComplexBall{Re: v.Re.Quo(d, z.prec), Im: v.Im.Quo(d, z.prec)}
	}
	return v
}

// nextBinomial turns binomial(k, j) into binomial(k+1, j).
func nextBinomial(b *big.Int, k, j int) {
	b.Mul(b, big.NewInt(int64(k+1)))
	b.Quo(b, big.NewInt(int64(k+1-j)))
}

// dot applies a dot product to the real and the imaginary parts of n powers.
func (z *Powers) dot(f func([]Ball) Ball, n int) ComplexBall {
	v := ComplexBall{Re: f(z.re[:n])}
	if !z.real {
		v.Im = f(z.im[:n])
	}
	return v
}
