package algebra

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"slices"
	"sync"

	"example.org/closedform/algebra/internal/zp"
)

// ErrNotSquareFree reports a polynomial that has a multiple root where only
// simple ones are allowed.
var ErrNotSquareFree = errors.New("algebra: polynomial is not square-free")

// RootSet isolates the complex roots of a square-free polynomial with integer
// coefficients. It is safe for concurrent use; refinements are cached, and what
// a call returns does not depend on the calls before it.
//
// Order: real roots ascending, then pairs of conjugates, the one with positive
// imaginary part first, by real part; pairs whose real parts differ by less
// than 2^-100 of the larger modulus are ordered by |imaginary part|.
type RootSet struct {
	coeffs []*big.Int // without the root 0
	deriv  []*big.Int // of coeffs
	roots  []*isolatedRoot
	conj   []int
	real   int

	mu    sync.Mutex
	words []*wordPoly // of coeffs, as they were needed
}

// isolatedRoot is a root with its refinements. The lower root of a pair shares
// that of the upper one and mirrors it.
type isolatedRoot struct {
	busy     chan struct{} // a lock that can be waited for under a context
	gap      magnitude     // the other roots are at least this far from chain[0].at
	chain    []rootDisc    // each the longest Newton step from the one before
	last     rootDisc      // the latest step to a precision that was asked for
	lastBits int64         // that precision, or -1
}

// rootDisc is a disc of radius rad around the point at with exactly one root.
type rootDisc struct {
	at  ComplexBall
	rad magnitude
}

// bits returns the largest k with rad <= 2^-k |root|.
func (d rootDisc) bits() int64 {
	if d.rad.isZero() {
		return math.MaxInt64
	}
	q := d.rad.quoUp(d.at.absDown().subDown(d.rad))
	if q.isInf() {
		return math.MinInt64
	}
	return -q.top()
}

func (d rootDisc) conj() rootDisc { return rootDisc{d.at.Conj(), d.rad} }

// NewRootSet isolates the roots of sum coeffs[i] s^i; leading zeros are
// dropped. It returns [ErrNotSquareFree] if the polynomial has a multiple root
// and an error if its degree is below 1. The cost is O(n^2) operations per
// sweep of the simultaneous iteration, at a precision that is doubled until
// the roots separate.
//
// Method: simultaneous iteration of Ehrlich and Aberth in scaled floating-point
// numbers, then in ball arithmetic of growing precision; the discs of radius
// n |W_i| around the approximations z_i, for the Weierstrass corrections
// W_i = p(z_i) / (a_n prod_{j != i} (z_i - z_j)), contain all roots, and exactly
// one each if they are disjoint. Sources: O. Aberth, Iteration methods for
// finding all zeros of a polynomial simultaneously, Math. Comp. 27, 1973;
// D. A. Bini, Numerical computation of polynomial zeros by means of Aberth's
// method, Numer. Algorithms 13, 1996; B. T. Smith, Error bounds for zeros of a
// polynomial based upon Gerschgorin's theorems, J. ACM 17, 1970.
func NewRootSet(ctx context.Context, coeffs []*big.Int) (*RootSet, error) {
	c := slices.Clone(coeffs)
	for len(c) > 0 && c[len(c)-1].Sign() == 0 {
		c = c[:len(c)-1]
	}
	if len(c) < 2 {
		return nil, fmt.Errorf("algebra: roots of a polynomial of degree %d", len(c)-1)
	}
	for i := range c {
		c[i] = new(big.Int).Set(c[i])
	}
	r := &RootSet{coeffs: c}
	var reals, uppers []*isolatedRoot
	if c[0].Sign() == 0 {
		if c[1].Sign() == 0 {
			return nil, ErrNotSquareFree
		}
		r.coeffs = c[1:]
		reals = append(reals, newIsolatedRoot(rootDisc{}, infinite))
	}
	r.deriv = derivative(r.coeffs)
	if len(r.coeffs) > 1 {
		discs, gaps, err := isolateRoots(ctx, r.coeffs)
		if err != nil {
			return nil, err
		}
		for i, d := range discs {
			if d.at.isReal() {
				reals = append(reals, newIsolatedRoot(d, gaps[i]))
			} else if d.at.Im.man.Sign() > 0 {
				uppers = append(uppers, newIsolatedRoot(d, gaps[i]))
			}
		}
	}
	slices.SortFunc(reals, func(a, b *isolatedRoot) int { // disjoint intervals
		return comparePoints(a.chain[0].at.Re, b.chain[0].at.Re)
	})
	r.real = len(reals)
	for i, x := range reals {
		r.roots = append(r.roots, x)
		r.conj = append(r.conj, i)
	}
	uppers, err := r.sortPairs(ctx, uppers)
	if err != nil {
		return nil, err
	}
	for _, x := range uppers {
		i := len(r.roots)
		r.roots = append(r.roots, x, x)
		r.conj = append(r.conj, i+1, i)
	}
	return r, nil
}

func newIsolatedRoot(d rootDisc, gap magnitude) *isolatedRoot {
	return &isolatedRoot{busy: make(chan struct{}, 1), gap: gap, chain: []rootDisc{d}, lastBits: -1}
}

// comparePoints compares the midpoints of x and y.
func comparePoints(x, y Ball) int {
	sign, _ := x.point().Sub(y.point(), 32).Sign()
	return sign
}

// sortPairs orders the upper roots of pairs as [RootSet] says. Only those that
// their isolating discs do not order are refined.
func (r *RootSet) sortPairs(ctx context.Context, uppers []*isolatedRoot) ([]*isolatedRoot, error) {
	slices.SortStableFunc(uppers, func(a, b *isolatedRoot) int {
		return comparePoints(a.chain[0].at.Re, b.chain[0].at.Re)
	})
	// Farther apart than this, discs settle the order of their roots, and so they
	// do for all discs before and after.
	var rad magnitude
	size := int64(math.MinInt64)
	for _, u := range uppers {
		if d := u.chain[0]; rad.cmp(d.rad) < 0 {
			rad = d.rad
		}
		size = max(size, u.chain[0].at.absUp().top())
	}
	far := rad.mulPow2(1).addUp(magPow2(size - 60))
	for i := 0; i < len(uppers); {
		j := i + 1
		for j < len(uppers) && uppers[j].chain[0].at.Re.Sub(uppers[j-1].chain[0].at.Re, 64).absDown().cmp(far) <= 0 {
			j++
		}
		if j > i+1 {
			if err := r.sortClosePairs(ctx, uppers[i:j]); err != nil {
				return nil, err
			}
		}
		i = j
	}
	return uppers, nil
}

// sortClosePairs is sortPairs with all roots refined to 128 bits.
func (r *RootSet) sortClosePairs(ctx context.Context, uppers []*isolatedRoot) error {
	type pair struct {
		root *isolatedRoot
		at   ComplexBall
	}
	pairs := make([]pair, len(uppers))
	for i, u := range uppers {
		d, err := r.refine(ctx, u, 128)
		if err != nil {
			return err
		}
		pairs[i] = pair{u, d.at}
	}
	slices.SortStableFunc(pairs, func(a, b pair) int { return comparePoints(a.at.Re, b.at.Re) })
	for i := 0; i < len(pairs); {
		j := i + 1
		for ; j < len(pairs); j++ {
			a, b := pairs[j-1].at, pairs[j].at
			size := max(a.absUp().top(), b.absUp().top())
			if magPow2(size-100).cmp(b.Re.Sub(a.Re, 64).absDown()) < 0 {
				break
			}
		}
		slices.SortStableFunc(pairs[i:j], func(a, b pair) int { return comparePoints(a.at.Im, b.at.Im) })
		i = j
	}
	for i, p := range pairs {
		uppers[i] = p.root
	}
	return nil
}

// Len returns the number of roots, the degree of the polynomial.
func (r *RootSet) Len() int { return len(r.roots) }

// NumReal returns the number of real roots; they come first.
func (r *RootSet) NumReal() int { return r.real }

// Conjugate returns the index of the conjugate of root i: i itself if it is real.
func (r *RootSet) Conjugate(i int) int { return r.conj[i] }

// Enclose returns a rectangle around root i and no other root, with radii of
// at most 2^-prec |root|. The imaginary part of a real root is exactly 0, the
// enclosures of conjugates are exact mirrors, and the root 0 is exact.
//
// Cost: one evaluation of the polynomial for each doubling of the precision,
// O(n) products of about prec bits plus the bits the condition of the root takes.
func (r *RootSet) Enclose(ctx context.Context, i int, prec uint) (ComplexBall, error) {
	d, err := r.refine(ctx, r.roots[i], prec)
	if err != nil {
		return ComplexBall{}, err
	}
	z := d.at.widen(d.rad)
	if r.conj[i] < i {
		z = z.Conj()
	}
	return z, nil
}

// refine returns a disc around the root with the given number of proven bits.
func (r *RootSet) refine(ctx context.Context, x *isolatedRoot, prec uint) (rootDisc, error) {
	select {
	case x.busy <- struct{}{}:
		defer func() { <-x.busy }()
	case <-ctx.Done():
		return rootDisc{}, ctx.Err()
	}
	want := int64(prec)
	for i := 0; ; i++ {
		d := x.chain[i]
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
		if i+1 == len(x.chain) {
			d, err := r.newtonStep(ctx, x, d, reach)
			if err != nil {
				return d, err
			}
			x.chain = append(x.chain, d)
		}
	}
}

// others returns a lower bound of the distance from d.at to the other roots.
func (x *isolatedRoot) others(d rootDisc) magnitude {
	return x.gap.subDown(d.rad).subDown(x.chain[0].rad)
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
	if d, ok := r.newtonInWords(x, d, goal); ok {
		return d, ctx.Err()
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
		val, slope := floatAbs(v), floatAbs(dv)
		den := slope*(1-0x1p-40) - ed
		if den <= 0 {
			continue
		}
		q := v / dv
		off := (ev+val*ed/slope)/den*(1+0x1p-20) + floatAbs(q)*0x1p-46
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
		if dp, err = hornerBall(ctx, r.deriv, z, precD); err != nil {
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
		p, err := hornerBall(ctx, r.coeffs, z, prec)
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

// checkSquareFree returns ErrNotSquareFree if p and p' have a common factor,
// which is so exactly if their resultant is 0. A prime q that does not divide
// the leading coefficient divides the resultant exactly if p and p' have a
// common factor modulo q; by Hadamard's inequality the resultant is below
// |p|^(n-1) |p'|^n in Euclidean norms, and 0 if enough primes divide it.
func checkSquareFree(ctx context.Context, c []*big.Int) error {
	n := len(c) - 1
	norm := 0 // |p|, |p'| < 2^norm
	for _, x := range c {
		norm = max(norm, x.BitLen())
	}
	norm += (3*new(big.Int).SetInt64(int64(n+1)).BitLen() + 1) / 2
	const primeBits = 61 // every prime used is above 2^61
	left := norm*(2*n-1)/primeBits + 1
	for q := topPrime(); left > 0; q = zp.PrimeBelow(q) {
		if err := ctx.Err(); err != nil {
			return err
		}
		f := zp.NewField(q)
		a, b := make([]uint64, n+1), make([]uint64, n)
		for i, x := range c {
			a[i] = f.FromBig(x)
			if i > 0 {
				b[i-1] = f.Mul(a[i], uint64(i))
			}
		}
		if a[n] == 0 {
			continue
		}
		if zpGCDDegree(f, a, b) == 0 {
			return nil
		}
		left--
	}
	return ErrNotSquareFree
}

// topPrime is the largest prime zp can use.
var topPrime = sync.OnceValue(func() uint64 { return zp.PrimeBelow(zp.MaxPrime) })

// zpGCDDegree returns the degree of the greatest common divisor of a and b
// modulo a prime, destroying both. The last entry of each is not 0.
func zpGCDDegree(f zp.Field, a, b []uint64) int {
	for len(b) > 0 {
		inv := f.Inv(b[len(b)-1])
		for len(a) >= len(b) {
			if t := a[len(a)-1]; t != 0 {
				t = f.Mul(t, inv)
				s := a[len(a)-len(b):]
				for i, y := range b {
					s[i] = f.Sub(s[i], f.Mul(t, y))
				}
			}
			a = a[:len(a)-1]
		}
		for len(a) > 0 && a[len(a)-1] == 0 {
			a = a[:len(a)-1]
		}
		a, b = b, a
	}
	return len(a) - 1
}
