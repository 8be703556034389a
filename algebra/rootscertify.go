package algebra

import (
	"context"
	"math"
	"math/big"
)

// isolateRoots returns a disc around every real root and every root above the
// axis of a polynomial with c[0] != 0, and lower bounds for the distances from
// the centres to the other roots: at least 64 n times the radius. Disjoint discs
// prove that the roots are simple; only if the first ones meet is that checked
// otherwise, to return [ErrNotSquareFree].
func isolateRoots(ctx context.Context, c []*big.Int) ([]rootDisc, []magnitude, error) {
	f := newFloatRoots(c)
	if f != nil && f.c != nil {
		if err := f.run(ctx, 30+len(c)); err != nil {
			return nil, nil, err
		}
		if discs, gaps, ok := f.certify(ctx); ok {
			return discs, gaps, nil
		}
	}
	if err := checkSquareFree(ctx, c); err != nil {
		return nil, nil, err
	}
	if f != nil {
		discs, gaps, err := isolateInWords(ctx, newWordRoots(f))
		if err != nil || discs != nil {
			return discs, gaps, err
		}
	}
	return isolateInBalls(ctx, c)
}

// isolateInWords is isolateRoots by wordRoots, or returns no discs if they are
// not enough.
func isolateInWords(ctx context.Context, r *wordRoots) ([]rootDisc, []magnitude, error) {
	settled, err := r.run(ctx)
	if err != nil || !settled {
		return nil, nil, err
	}
	discs, gaps, _ := r.certify(ctx)
	return discs, gaps, nil
}

// isolateInBalls is isolateRoots for a square-free polynomial, without limits.
// It returns the discs of roots below the axis as well.
func isolateInBalls(ctx context.Context, c []*big.Int) ([]rootDisc, []magnitude, error) {
	n := len(c) - 1
	it := newAberth(c)
	sweeps := 30 + 2*n
	prec, left := uint(64), uint(0)
	for {
		settled, err := it.run(ctx, sweeps)
		if err != nil {
			return nil, nil, err
		}
		discs, gaps, err := certifyRoots(ctx, c, it.at, prec+prec/2+64)
		if err != nil || discs != nil {
			return discs, gaps, err
		}
		// The points around a cluster of roots gain a bit or so in a sweep: more
		// precision does not help before they have used up what there is.
		if settled || left == 0 {
			prec = it.raise(2 * prec)
			left = prec
		}
		left -= min(left, uint(sweeps))
	}
}

// certifyRoots returns discs as isolateInBalls does, or none if the
// approximations z do not prove them.
//
// All roots lie in the union of the discs D_i of radius n |W_i| around z_i, and
// disjoint discs hold one each (Smith). A root w in a D_i that meets the real
// axis is real if the mirror image of D_i meets no other disc: the conjugate of
// w is a root in the mirror image, so none of another disc, and D_i has only
// one. If D_i does not meet the axis and its mirror image meets D_j alone,
// the conjugate of w is the root in D_j.
func certifyRoots(ctx context.Context, c []*big.Int, z []ComplexBall, prec uint) ([]rootDisc, []magnitude, error) {
	n := len(z)
	discs := make([]rootDisc, n)
	for i := range z {
		w, err := hornerBall(ctx, c, z[i], prec)
		if err != nil {
			return nil, nil, err
		}
		q := intMagDown(c[n], 0)
		for j := range z {
			if j != i {
				q = q.mulDown(z[i].Sub(z[j], 64).absDown())
			}
		}
		discs[i] = rootDisc{z[i], magUp(uint64(n), 0).mulUp(w.absUp()).quoUp(q)}
		if discs[i].rad.mulPow2(2).cmp(z[i].absDown()) > 0 {
			return nil, nil, nil // no bit of the root is certain
		}
	}
	// gap returns a lower bound of the distance from the centre of d to the disc e.
	gap := func(d, e rootDisc) magnitude {
		return d.at.Sub(e.at, 64).absDown().subDown(e.rad)
	}
	meets := func(d, e rootDisc) bool { return gap(d, e).cmp(d.rad) <= 0 }
	for i := range discs {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		for j := range i {
			if meets(discs[i], discs[j]) {
				return nil, nil, nil
			}
		}
	}
	var out []rootDisc
	for i, d := range discs {
		mirror, met := d.conj(), -1
		for j, e := range discs {
			if meets(mirror, e) {
				if met >= 0 {
					return nil, nil, nil
				}
				met = j
			}
		}
		switch axis := d.at.Im.absDown().cmp(d.rad) <= 0; {
		case axis && met == i:
			d.at.Im = Ball{}
			out = append(out, d)
		case axis || met == i:
			return nil, nil, nil
		case d.at.Im.man.Sign() > 0:
			out = append(out, d, d.conj())
		}
	}
	if len(out) != n {
		return nil, nil, nil
	}
	gaps := make([]magnitude, n)
	for i, d := range out {
		gaps[i] = infinite
		for j, e := range out {
			if g := gap(d, e); j != i && g.cmp(gaps[i]) < 0 {
				gaps[i] = g
			}
		}
		if magUp(64*uint64(n), 0).mulUp(d.rad).cmp(gaps[i]) > 0 {
			return nil, nil, nil
		}
	}
	return out, gaps, nil
}

// rootPoint is the point hi + lo; between two of them the distance is found
// with few errors even if they are close.
type rootPoint struct{ hi, lo complex128 }

// matchConjugates pairs each point with the one nearest to its conjugate, or
// itself. The order has the indices of those that match themselves, which are
// near the real axis, then of pairs, the one with positive imaginary part
// first. ok is false if the points do not pair up. Unless it is nil, exactly
// tells z_i minus z_j, or minus the conjugate of z_j, where float64 does not.
func matchConjugates(z []complex128, exactly func(i, j int, mirror bool) complex128) (order []int, reals int, ok bool) {
	n := len(z)
	order = make([]int, 0, n)
	mate := make([]int, n)
	for i := range mate {
		mate[i] = -1
	}
	for i, p := range z {
		if mate[i] >= 0 {
			continue
		}
		x, y := real(p), -imag(p)
		best, at := math.Inf(1), i
		near := 0.0
		if exactly != nil {
			near = (x*x + y*y) * 0x1p-80
		}
		for j, q := range z {
			dx, dy := x-real(q), y-imag(q)
			d := dx*dx + dy*dy
			if d < near {
				c := exactly(i, j, true)
				d = real(c)*real(c) + imag(c)*imag(c)
			}
			if d < best {
				best, at = d, j
			}
		}
		if mate[at] >= 0 {
			return nil, 0, false
		}
		mate[i], mate[at] = at, i
		if at == i {
			order = append(order, i)
		}
	}
	reals = len(order)
	for i, j := range mate {
		if j <= i {
			continue
		}
		if !(imag(z[i]) > 0 && imag(z[j]) < 0 || imag(z[i]) < 0 && imag(z[j]) > 0) {
			return nil, 0, false
		}
		if imag(z[i]) < 0 {
			i, j = j, i
		}
		order = append(order, i, j)
	}
	return order, reals, true
}

// certifyPoints returns radii of discs around the reals and the upper points of
// pairs that hold one root each, and gaps as isolateRoots does, or ok = false,
// also when ctx is done. The points are 2^shift t, t in pts: first reals real
// ones, then pairs of exact conjugates. |p| at a point is at most its value, the
// leading coefficient of p is at least lead in absolute value. The values of
// lower points are not used. A point may be off
// by 2^-98 of its modulus as long as its conjugate is off likewise, if exactly,
// which may be nil, tells the distance of close ones.
//
// All roots lie in the union of the discs of radius n |W_i|, see NewRootSet,
// and disjoint discs hold one each. The discs of conjugate points are mirror
// images. The one root in a disc around a real point is real, for its conjugate
// lies there as well; a disc around an upper point does not meet the axis, where
// it would meet its mirror image.
//
// The squares of distances, between 2^-900 and 2^404, are relatively off by less
// than 2^-33 if the distances are at least 2^-58 of the moduli, and their
// product by less than 1/200 for n < 2^24.
func certifyPoints(ctx context.Context, pts []rootPoint, reals int, values []magnitude, lead magnitude, shift int64, exactly func(i, j int) complex128) (rads, gaps []magnitude, ok bool) {
	n := len(pts)
	rads = make([]magnitude, 0, reals+(n-reals)/2)
	gaps = make([]magnitude, 0, cap(rads))
	if n >= 1<<24 {
		return nil, nil, false
	}
	for i := range pts {
		if i > reals && (i-reals)%2 == 1 {
			continue
		}
		if ctx.Err() != nil {
			return nil, nil, false
		}
		p := &pts[i]
		hx, hy, lx, ly := real(p.hi), imag(p.hi), real(p.lo), imag(p.lo)
		size := hx*hx + hy*hy
		least, near := 4*size, size*0x1p-116
		prod, e := 1.0, 0
		for j := range pts {
			q := &pts[j]
			dx := (hx - real(q.hi)) + (lx - real(q.lo))
			dy := (hy - imag(q.hi)) + (ly - imag(q.lo))
			d := dx*dx + dy*dy
			if d < near {
				if j == i {
					continue
				}
				if exactly == nil {
					return nil, nil, false
				}
				c := exactly(i, j)
				d = real(c)*real(c) + imag(c)*imag(c)
			}
			least = min(least, d)
			prod *= d
			if prod < 0x1p-100 || prod > 0x1p100 {
				f, k := math.Frexp(prod)
				prod, e = f, e+k
			}
		}
		if !(least > size*0x1p-1000 && least > 0x1p-900 && size < 0x1p402) {
			return nil, nil, false
		}
		if e%2 != 0 {
			prod, e = 2*prod, e-1
		}
		den := magFloatDown(0.99 * math.Sqrt(prod)).mulPow2(int64(e/2) + shift*int64(n-1)).mulDown(lead)
		rad := magUp(uint64(n), 0).mulUp(values[i]).quoUp(den)
		// The roots in the other discs, of radius below least/64, are so far away:
		gap := magFloatDown(0.98 * math.Sqrt(least)).mulPow2(shift)
		if magUp(64*uint64(n), 0).mulUp(rad).cmp(gap.mulPow2(-1)) > 0 ||
			rad.mulPow2(2).cmp(magFloatDown(0.99*math.Sqrt(size)).mulPow2(shift)) > 0 {
			return nil, nil, false
		}
		rads = append(rads, rad)
		gaps = append(gaps, gap)
	}
	return rads, gaps, true
}
