package algebra

import (
	"context"
	"math"
	"math/big"
	"math/cmplx"
)

// refine returns a disc around the root with the given number of proven bits.
func (r *RootSet) refine(ctx context.Context, x *isolatedRoot, prec uint) (rootDisc, error) {
	want := int64(prec)
	if x.first.bits() >= want {
		return x.first, ctx.Err()
	}
	busy := r.lock(x)
	select {
	case busy <- struct{}{}:
		defer func() { <-busy }()
	case <-ctx.Done():
		return rootDisc{}, ctx.Err()
	}
	d := x.first
	for i := 0; ; i++ {
		if d.bits() >= want {
			return d, ctx.Err()
		}
		reach := r.reach(x, d)
		if reach >= want+2 { // one step to the precision asked for, from the same disc always
			if x.lastBits == want {
				return x.last, ctx.Err()
			}
			d, err := r.newtonStep(ctx, x, d, want+2)
			if err == nil {
				x.last, x.lastBits = d, want
			}
			return d, err
		}
		if i == len(x.chain) {
			d, err := r.newtonStep(ctx, x, d, reach)
			if err != nil {
				return d, err
			}
			x.chain = append(x.chain, d)
		}
		d = x.chain[i]
	}
}

// lock returns the lock of x.
func (r *RootSet) lock(x *isolatedRoot) chan struct{} {
	r.mu.Lock()
	defer r.mu.Unlock()
	if x.busy == nil {
		x.busy = make(chan struct{}, 1)
	}
	return x.busy
}

// others returns a lower bound of the distance from d.at to the other roots.
func (x *isolatedRoot) others(d rootDisc) magnitude {
	return x.gap.subDown(d.rad).subDown(x.first.rad)
}

// newtonError bounds the distance of the Newton iterate of z = d.at to the root
// w. With e = z - w and S the sum of 1/(z-v) over the other roots v, p'/p at z
// is 1/e + S, so the iterate is off by e - e/(1+eS) = e eS/(1+eS). The distance
// of z to the other roots is at least D = others(d) >= (64n-2) d.rad, see
// isolateRoots, so that |eS| <= (n-1) |e|/D < 1/2 and the error is below
// 2 (n-1) d.rad^2 / D.
func (r *RootSet) newtonError(x *isolatedRoot, d rootDisc) magnitude {
	n := uint64(len(r.coeffs) - 1)
	return magUp(2*(n-1), 0).mulUp(d.rad.mulUp(d.rad)).quoUp(x.others(d))
}

// reach returns the largest k for which the error of the Newton iterate is
// proven to be below 2^-(k+1) |d.at|.
func (r *RootSet) reach(x *isolatedRoot, d rootDisc) int64 {
	q := r.newtonError(x, d).quoUp(d.at.absDown())
	if q.isZero() { // degree 1: the iterate is the root
		return math.MaxInt64
	}
	return -q.top() - 1
}

// newtonStep returns the disc around the Newton iterate of d.at of radius at
// most t = 2^-goal |d.at|, for goal at most reach.
func (r *RootSet) newtonStep(ctx context.Context, x *isolatedRoot, d rootDisc, goal int64) (rootDisc, error) {
	// Short steps in words, each of the bits that float64 has for p/p', are cheaper
	// than one in balls while they are few.
	for at, steps := d, 0; steps < 4 && r.source == nil; steps++ {
		next, ok := r.newtonInWords(x, at, min(goal, at.bits()+38))
		if !ok || next.bits() <= at.bits() {
			break
		}
		if at.bits()+38 >= goal {
			return next, ctx.Err()
		}
		at = next
	}
	return r.newtonInBalls(ctx, x, d, goal)
}

// newtonInWords is newtonStep for a step that gains few enough bits for p/p' to
// be found in float64, with p and p' from wordPoly; or ok is false.
func (r *RootSet) newtonInWords(x *isolatedRoot, d rootDisc, goal int64) (to rootDisc, ok bool) {
	z := d.at
	t := z.absDown().mulPow2(-goal)
	unit := t.top() - 6
	abs := z.absUp()
	exp, size := abs.top(), math.Ldexp(float64(abs.m), -32)
	if t.isZero() || goal-d.bits() > 40 {
		return to, false
	}
	left := r.newtonError(x, d).addUp(magUp(3, unit))
	var mem [2 * maxWords]uint64
	for w := 2; w <= maxWords; w++ {
		low := exp + 1 - 64*int64(w)
		if z.Re.exp < low && z.Re.man != nil || z.Im.exp < low && z.Im.man != nil {
			continue
		}
		at := wordPoint{mem[:w], mem[maxWords : maxWords+w], exp}
		setFixed(at.re, z.Re.mantissa(), z.Re.exp-low)
		setFixed(at.im, z.Im.mantissa(), z.Im.exp-low)
		p := r.wordPoly(newWordScale(exp, size, w))
		v, dv := p.eval(at, true)
		ev, ed := p.errors()
		// With the values v + e and v' + e', of true size, the quotient is off by at most
		// (|e| + |v e'/v'|) / (|v'| - |e'|), beside roundings to float64.
		val, slope := cmplx.Abs(v), cmplx.Abs(dv)
		den := slope*(1-0x1p-40) - ed
		if den <= 0 {
			continue
		}
		q := v / dv
		off := (ev+val*ed/slope)/den*(1+0x1p-20) + cmplx.Abs(q)*0x1p-46
		rad := left.addUp(magFloatUp(off).mulPow2(exp))
		if rad.cmp(t) > 0 {
			continue
		}
		// Rounding costs q 1/2 and z 1 unit in each part, below 3 in all.
		part := func(x Ball, q float64) Ball {
			m := new(big.Int)
			if s := x.exp - unit; s >= 0 {
				m.Lsh(x.mantissa(), uint(s))
			} else {
				m.Rsh(x.mantissa(), uint(-s))
			}
			s := big.NewInt(int64(math.RoundToEven(math.Ldexp(q, int(exp-unit)))))
			return ownBall(m.Sub(m, s), unit, magnitude{}, math.MaxUint)
		}
		to = rootDisc{ComplexBall{Re: part(z.Re, real(q))}, rad}
		if !z.isReal() {
			to.at.Im = part(z.Im, imag(q))
		}
		return to, true
	}
	return to, false
}

// newtonInBalls is newtonStep for any step.
func (r *RootSet) newtonInBalls(ctx context.Context, x *isolatedRoot, d rootDisc, goal int64) (rootDisc, error) {
	z := d.at
	t := z.absDown().mulPow2(-goal)
	unit := t.top() - 6
	// p(z)/p'(z) is about as large as the old radius.
	gain := max(goal-d.bits(), 0)
	mid := uint(gain) + 16
	// The rounding errors of p are about 2^-prec sum |c_i| |z|^i: start with what
	// that asks for and correct by the bits found missing.
	sum, abs := magnitude{}, z.absUp()
	for i := len(r.coeffs) - 1; i >= 0; i-- {
		sum = sum.mulUp(abs).addUp(intMagUp(r.coeffs[i], 0))
	}
	precD := uint(gain) + 64
	var dp ComplexBall
	for {
		var err error
		if dp, err = r.value(ctx, z, precD, true); err != nil {
			return rootDisc{}, err
		}
		rel := dp.Re.rad.addUp(dp.Im.rad).quoUp(dp.absDown())
		if rel.isInf() {
			precD *= 2
		} else if miss := rel.mulUp(d.rad).top() - t.top() + 6; !rel.isZero() && miss > 0 {
			precD += uint(miss) + 4
		} else {
			break
		}
	}
	prec := uint(max(sum.quoUp(dp.absDown()).top()-t.top()+16, 64))
	for {
		p, err := r.value(ctx, z, prec, false)
		if err != nil {
			return rootDisc{}, err
		}
		q := p.Quo(dp, mid)
		to := z.Sub(q, uint(goal+64))
		rad := r.newtonError(x, d).addUp(to.Re.rad).addUp(to.Im.rad).addUp(magPow2(unit + 1))
		if rad.cmp(t) <= 0 {
			return rootDisc{ComplexBall{to.Re.cut(unit), to.Im.cut(unit)}, rad}, nil
		}
		prec += 16
		mid += 16
	}
}

// value returns p(z), or p'(z) if slope is set, for an exact z.
func (r *RootSet) value(ctx context.Context, z ComplexBall, prec uint, slope bool) (ComplexBall, error) {
	switch {
	case r.source != nil:
		return r.source.value(ctx, z, prec, slope)
	case slope:
		return hornerBall(ctx, r.derivative(), z, prec)
	}
	return hornerBall(ctx, r.coeffs, z, prec)
}

// wordPoly returns the polynomial for points of the given scale.
func (r *RootSet) wordPoly(s wordScale) *wordPoly {
	r.mu.Lock()
	defer r.mu.Unlock()
	for _, p := range r.words {
		if p.wordScale == s {
			return p
		}
	}
	p := newWordPoly(r.coeffs, s)
	r.words = append(r.words, p)
	return p
}

// cut returns the midpoint of x rounded down to a multiple of 2^unit.
func (x Ball) cut(unit int64) Ball {
	if x.man == nil || x.exp >= unit {
		return x.point()
	}
	return ownBall(new(big.Int).Rsh(x.man, uint(unit-x.exp)), unit, magnitude{}, math.MaxUint)
}

// derivative returns that of coeffs.
func (r *RootSet) derivative() []*big.Int {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.deriv == nil {
		r.deriv = derivative(r.coeffs)
	}
	return r.deriv
}

func derivative(c []*big.Int) []*big.Int {
	d := make([]*big.Int, len(c)-1)
	for i := range d {
		d[i] = new(big.Int).Mul(c[i+1], big.NewInt(int64(i+1)))
	}
	return d
}

// hornerBall returns sum c[i] z^i for an exact z. A rounding error e becomes
// e |z| in the next step: bounding it so, and not by the rectangles of
// ComplexBall.Mul, saves up to half a bit per step.
func hornerBall(ctx context.Context, c []*big.Int, z ComplexBall, prec uint) (ComplexBall, error) {
	var s ComplexBall
	var e magnitude
	abs := z.absUp()
	for i := len(c) - 1; i >= 0; i-- {
		if err := ctx.Err(); err != nil {
			return s, err
		}
		s = s.Mul(z, prec)
		if c[i].Sign() != 0 {
			s.Re = s.Re.Add(Ball{man: c[i]}, prec)
		}
		e = e.mulUp(abs).addUp(s.Re.rad).addUp(s.Im.rad)
		s = s.point()
	}
	if z.isReal() {
		return ComplexBall{Re: s.Re.widen(e)}, nil
	}
	return ComplexBall{s.Re.widen(e), s.Im.widen(e)}, nil
}
