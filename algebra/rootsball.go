package algebra

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"math/bits"
	"sync"
)

// ErrRootsTooClose reports a polynomial whose coefficients, known by balls, do
// not tell its roots apart at 2^20 bits: one with a multiple root, or as good as that.
var ErrRootsTooClose = errors.New("algebra: roots are not told apart by 2^20 bits")

const maxRootBits = 1 << 20

// NewRootSetOf isolates the roots of the square-free polynomial sum a[i] s^i of
// degree n with real coefficients. coef returns balls around a[0], ..., a[n]
// with about prec proven bits each, the same ones for the same prec. It may be
// called at any time while the RootSet lives, and concurrently.
//
// That a[n] is not 0 and that there is no multiple root is the caller's
// promise. What balls cannot tell gives [ErrRootsTooClose] in the end, after
// a long time. An a[0] that is 0 must be known to be: the ball is exact.
//
// The cost is that of [NewRootSet] for the midpoints of the balls, for each
// doubling of the precision from 64 bits on until discs certify the roots.
//
// Method: the roots of the polynomial of the midpoints are the approximations
// z_i; the discs of radius n |W_i| around them contain all roots, and exactly
// one each if they are disjoint, for W_i = p(z_i) / (a_n prod_{j != i} (z_i - z_j))
// with p(z_i) and a_n from the balls. The one root in a disc around a real z_i is
// real: its conjugate lies there as well. Source: B. T. Smith, Error bounds for
// zeros of a polynomial based upon Gerschgorin's theorems, J. ACM 17, 1970.
func NewRootSetOf(ctx context.Context, n int, coef func(ctx context.Context, prec uint) ([]Ball, error)) (*RootSet, error) {
	if n < 1 {
		return nil, fmt.Errorf("algebra: roots of a polynomial of degree %d", n)
	}
	for prec := uint(64); prec <= maxRootBits; prec *= 2 {
		s := &ballSource{degree: n, coef: coef}
		b, err := s.balls(ctx, prec)
		if err != nil {
			return nil, err
		}
		r, err := s.isolate(ctx, b, prec)
		if err != nil || r != nil {
			return r, err
		}
	}
	return nil, ErrRootsTooClose
}

// isolate returns the roots of the polynomial with coefficients in b, or nil if
// b does not tell them apart.
func (s *ballSource) isolate(ctx context.Context, b []Ball, prec uint) (*RootSet, error) {
	if b[len(b)-1].isZero() {
		return nil, errors.New("algebra: the leading coefficient is 0")
	}
	var reals []*isolatedRoot
	if b[0].isZero() {
		if b[1].isZero() {
			return nil, ErrNotSquareFree
		}
		b, s.skip = b[1:], 1
		reals = append(reals, newIsolatedRoot(rootDisc{}, infinite))
	}
	if b[0].ContainsZero() || b[len(b)-1].ContainsZero() {
		return nil, ctx.Err()
	}
	p, err := newBallPoly(b)
	if err != nil {
		return nil, err
	}
	s.exp = p.exp
	r := &RootSet{coeffs: p.c, source: s}
	var discs []rootDisc
	var gaps []magnitude
	if len(b) > 1 {
		if discs, gaps, err = p.isolate(ctx, prec); err != nil || discs == nil {
			return nil, err
		}
	}
	if err := r.arrange(ctx, reals, discs, gaps); err != nil {
		return nil, err
	}
	return r, ctx.Err()
}

// ballSource gives the values of a polynomial whose coefficients are known to
// any precision.
type ballSource struct {
	degree int
	coef   func(ctx context.Context, prec uint) ([]Ball, error)
	skip   int   // 1 if the root 0 is divided off
	exp    int64 // values are in units of 2^exp

	mu    sync.Mutex
	cache map[uint]ballPoly // by precision
}

const maxCachedPolys = 16

func (s *ballSource) balls(ctx context.Context, prec uint) ([]Ball, error) {
	b, err := s.coef(ctx, prec)
	if err == nil {
		err = ctx.Err()
	}
	if err == nil && len(b) != s.degree+1 {
		err = fmt.Errorf("algebra: %d coefficients of a polynomial of degree %d", len(b), s.degree)
	}
	return b, err
}

// poly returns the polynomial with coefficients of at least about prec bits.
func (s *ballSource) poly(ctx context.Context, prec uint) (ballPoly, error) {
	// Steps of a 16th or less let several roots share what is cached.
	step := uint(1) << max(6, bits.Len(prec)-5)
	prec = (prec + step - 1) &^ (step - 1)
	s.mu.Lock()
	p, ok := s.cache[prec]
	s.mu.Unlock()
	if ok {
		return p, nil
	}
	b, err := s.balls(ctx, prec)
	if err != nil {
		return p, err
	}
	if p, err = newBallPoly(b[s.skip:]); err != nil {
		return p, err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.cache == nil || len(s.cache) >= maxCachedPolys {
		s.cache = make(map[uint]ballPoly)
	}
	s.cache[prec] = p
	return p, nil
}

// value returns p(z), or p'(z) if slope is set, for an exact z, off by about
// 2^-prec sum |a_i| |z|^i, or the like for p'.
func (s *ballSource) value(ctx context.Context, z ComplexBall, prec uint, slope bool) (ComplexBall, error) {
	abs := z.absUp()
	for ask := prec + 4; ask <= 4*prec+maxRootBits; {
		p, err := s.poly(ctx, ask)
		if err != nil {
			return ComplexBall{}, err
		}
		if slope {
			p = p.derivative()
		}
		size, off := p.bounds(abs)
		miss := uint(0)
		switch {
		case off.isInf() || size.isZero() && !off.isZero():
			miss = ask
		case !off.isZero():
			miss = uint(max(off.top()-size.top()+int64(prec), 0))
		}
		if miss == 0 {
			v, err := hornerBall(ctx, p.c, z, prec)
			v = v.widen(off)
			shift := p.exp - s.exp
			return ComplexBall{v.Re.MulPow2(shift), v.Im.MulPow2(shift)}, err
		}
		ask += max(miss, ask/8) + 4
	}
	return ComplexBall{}, fmt.Errorf("algebra: coefficients with fewer than the %d bits asked for", prec)
}

// ballPoly is the polynomial sum (c[i] + e[i]) s^i 2^exp with unknown e[i] of
// at most err[i] in absolute value.
type ballPoly struct {
	c   []*big.Int
	err []magnitude
	exp int64
}

// newBallPoly returns the polynomial with coefficients in b.
func newBallPoly(b []Ball) (ballPoly, error) {
	const widest = 1 << 26 // bits of an integer
	p := ballPoly{c: make([]*big.Int, len(b)), err: make([]magnitude, len(b))}
	first, top := true, int64(0)
	for _, x := range b {
		if x.man == nil {
			continue
		}
		if first {
			p.exp, top, first = x.exp, x.top(), false
		}
		p.exp, top = min(p.exp, x.exp), max(top, x.top())
	}
	if top-p.exp > widest {
		return p, errors.New("algebra: coefficients of too different sizes")
	}
	for i, x := range b {
		p.c[i] = new(big.Int)
		if x.man != nil {
			p.c[i].Lsh(x.man, uint(x.exp-p.exp))
		}
		p.err[i] = x.rad.mulPow2(-p.exp)
	}
	return p, nil
}

func (p ballPoly) derivative() ballPoly {
	d := ballPoly{derivative(p.c), make([]magnitude, len(p.c)-1), p.exp}
	for i := range d.err {
		d.err[i] = p.err[i+1].mulUp(magUp(uint64(i+1), 0))
	}
	return d
}

// exact tells whether the polynomial is known exactly.
func (p ballPoly) exact() bool {
	for _, e := range p.err {
		if !e.isZero() {
			return false
		}
	}
	return true
}

// bounds returns sum |c_i| x^i and sum |e_i| x^i rounded up.
func (p ballPoly) bounds(x magnitude) (size, off magnitude) {
	for i := len(p.c) - 1; i >= 0; i-- {
		size = size.mulUp(x).addUp(intMagUp(p.c[i], 0))
		off = off.mulUp(x).addUp(p.err[i])
	}
	return size, off
}

// isolate returns discs and gaps as isolateRoots does, or none if the
// polynomial is not known well enough. c[0] and the leading coefficient are not 0.
func (p ballPoly) isolate(ctx context.Context, prec uint) ([]rootDisc, []magnitude, error) {
	// The iteration gains a bit or so in a sweep around a cluster, for nothing if
	// that is a multiple root.
	if prec > 256 {
		if ok, err := p.squareFree(ctx, prec); err != nil || !ok {
			return nil, nil, err
		}
	}
	m, err := NewRootSet(ctx, p.c)
	if errors.Is(err, ErrNotSquareFree) && !p.exact() {
		return nil, nil, nil
	} else if err != nil {
		return nil, nil, err
	}
	z := make([]ComplexBall, len(m.roots))
	for i, x := range m.roots {
		d, err := m.refine(ctx, x, prec)
		if err != nil {
			return nil, nil, err
		}
		z[i] = d.at
	}
	return p.certify(ctx, z, m.real, prec)
}

// certify returns discs around the points z, which are first reals real ones,
// then upper ones of pairs, and gaps as isolateRoots does, or none if the
// points and their conjugates do not prove them.
//
// If every disc has a radius of at most 1/(128n) of the distance from its centre
// to any other centre, the discs are disjoint and the roots in the others are
// at least half of that distance away.
func (p ballPoly) certify(ctx context.Context, z []ComplexBall, reals int, prec uint) ([]rootDisc, []magnitude, error) {
	n := len(p.c) - 1
	lead := intMagDown(p.c[n], 0).subDown(p.err[n])
	discs, gaps := make([]rootDisc, len(z)), make([]magnitude, len(z))
	for i, at := range z {
		w, err := hornerBall(ctx, p.c, at, prec+prec/2+64)
		if err != nil {
			return nil, nil, err
		}
		_, off := p.bounds(at.absUp())
		q, least := lead, infinite
		away := func(from ComplexBall) {
			d := at.Sub(from, 64).absDown()
			q = q.mulDown(d)
			if d.cmp(least) < 0 {
				least = d
			}
		}
		for j, other := range z {
			if j != i {
				away(other)
			}
			if j >= reals {
				away(other.Conj())
			}
		}
		rad := magUp(uint64(n), 0).mulUp(w.absUp().addUp(off)).quoUp(q)
		gaps[i] = least.mulPow2(-1)
		if magUp(64*uint64(n), 0).mulUp(rad).cmp(gaps[i]) > 0 || rad.mulPow2(2).cmp(at.absDown()) > 0 {
			return nil, nil, nil
		}
		discs[i] = rootDisc{at, rad}
	}
	return discs, gaps, nil
}

// squareFree reports whether p is proven to have no multiple root: the
// determinant of the Bezoutian of p and p', the matrix of the coefficients of
// (p(x) p'(y) - p(y) p'(x)) / (x - y), is not 0. It is the resultant up to sign
// and a power of the leading coefficient, which is not 0.
//
// Cost: n^3/3 products of balls of prec bits, by Gaussian elimination with pivots.
func (p ballPoly) squareFree(ctx context.Context, prec uint) (bool, error) {
	n := len(p.c) - 1
	a, d := make([]Ball, n+1), make([]Ball, n+1)
	for i, c := range p.c {
		a[i] = ownBall(new(big.Int).Set(c), 0, p.err[i], prec)
		if i > 0 {
			d[i-1] = a[i].MulInt(big.NewInt(int64(i)), prec)
		}
	}
	m := make([][]Ball, n)
	for i := range m {
		m[i] = make([]Ball, n)
		for j := range m[i] {
			if err := ctx.Err(); err != nil {
				return false, err
			}
			x := a[j+1].Mul(d[i], prec).Sub(a[i].Mul(d[j+1], prec), prec)
			if i > 0 && j+1 < n {
				x = x.Add(m[i-1][j+1], prec)
			}
			m[i][j] = x
		}
	}
	for k := range m {
		best := k
		for i := k + 1; i < n; i++ {
			if m[i][k].absDown().cmp(m[best][k].absDown()) > 0 {
				best = i
			}
		}
		m[k], m[best] = m[best], m[k]
		if m[k][k].ContainsZero() {
			return false, nil
		}
		for i := k + 1; i < n; i++ {
			if m[i][k].isZero() {
				continue
			}
			f := m[i][k].Quo(m[k][k], prec)
			for j := k + 1; j < n; j++ {
				if err := ctx.Err(); err != nil {
					return false, err
				}
				m[i][j] = m[i][j].Sub(f.Mul(m[k][j], prec), prec)
			}
		}
	}
	return true, nil
}
