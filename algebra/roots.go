package algebra

import (
	"cmp"
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
// coefficients, or with real ones known by balls. It is safe for concurrent use;
// refinements are cached, and what a call returns does not depend on the calls
// before it.
//
// Order: real roots ascending, then pairs of conjugates, the one with positive
// imaginary part first, by real part; pairs whose real parts differ by less
// than 2^-100 of the larger modulus are ordered by |imaginary part|.
type RootSet struct {
	coeffs []*big.Int      // without the root 0; only about the true ones if there is a source
	source *ballSource     // of a polynomial known by balls
	roots  []*isolatedRoot // the real ones, then the upper ones of pairs
	real   int

	mu    sync.Mutex
	deriv []*big.Int  // of coeffs, once it is needed
	words []*wordPoly // of coeffs, likewise
}

// isolatedRoot is a root with its refinements. The lower root of a pair mirrors
// the upper one.
type isolatedRoot struct {
	first    rootDisc
	gap      magnitude     // the other roots are at least this far from first.at
	busy     chan struct{} // a lock of what follows that can be waited for under a context
	chain    []rootDisc    // each the longest Newton step from the one before, or from first
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
// sweep of the simultaneous iteration, in float64 if that separates the roots,
// else at the precision that each root asks for.
//
// Method: simultaneous iteration of Ehrlich and Aberth in float64, then in
// fixed-point numbers of more and more words, in the end in ball arithmetic;
// the discs of radius n |W_i| around the approximations z_i, for the
// Weierstrass corrections W_i = p(z_i) / (a_n prod_{j != i} (z_i - z_j)), contain all roots, and exactly
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
	if len(c) == 2 {
		return linearRootSet(c), nil
	}
	r := &RootSet{coeffs: cloneInts(make([]big.Int, len(c)), c)}
	var reals []*isolatedRoot
	if c[0].Sign() == 0 {
		if c[1].Sign() == 0 {
			return nil, ErrNotSquareFree
		}
		r.coeffs = r.coeffs[1:]
		reals = append(reals, newIsolatedRoot(rootDisc{}, infinite))
	}
	discs, gaps, err := isolateRoots(ctx, r.coeffs)
	if err != nil {
		return nil, err
	}
	if err := r.arrange(ctx, reals, discs, gaps); err != nil {
		return nil, err
	}
	return r, ctx.Err()
}

// arrange puts the roots in order: reals and those in discs around real and
// upper points.
func (r *RootSet) arrange(ctx context.Context, reals []*isolatedRoot, discs []rootDisc, gaps []magnitude) error {
	var uppers []*isolatedRoot
	for i, d := range discs {
		if d.at.isReal() {
			reals = append(reals, newIsolatedRoot(d, gaps[i]))
		} else if d.at.Im.man.Sign() > 0 {
			uppers = append(uppers, newIsolatedRoot(d, gaps[i]))
		}
	}
	slices.SortFunc(reals, func(a, b *isolatedRoot) int { // disjoint intervals
		return comparePoints(a.first.at.Re, b.first.at.Re)
	})
	r.real = len(reals)
	if err := r.sortPairs(ctx, uppers); err != nil {
		return err
	}
	r.roots = append(reals, uppers...)
	return nil
}

// linearRootSet is NewRootSet for degree 1, in one piece of memory.
func linearRootSet(c []*big.Int) *RootSet {
	s := new(struct {
		RootSet
		root  isolatedRoot
		roots [1]*isolatedRoot
		ints  [2]big.Int
	})
	s.root = isolatedRoot{gap: infinite, lastBits: -1}
	if c[0].Sign() != 0 {
		x := Ball{man: new(big.Int).Neg(c[0])}
		switch d := c[1]; {
		case d.CmpAbs(intOne) != 0:
			x = x.Quo(Ball{man: d}, 96)
		case d.Sign() < 0:
			x.man.Neg(x.man)
		}
		s.root.first = rootDisc{ComplexBall{Re: x.point()}, x.rad}
	}
	s.roots[0] = &s.root
	s.RootSet.roots = s.roots[:]
	s.RootSet.coeffs = cloneInts(s.ints[:], c)
	s.RootSet.real = 1
	return &s.RootSet
}

// cloneInts returns copies of c, kept in mem.
func cloneInts(mem []big.Int, c []*big.Int) []*big.Int {
	total := 0
	for _, x := range c {
		total += len(x.Bits())
	}
	words := make([]big.Word, 0, total)
	for i, x := range c {
		n := len(words)
		words = append(words, x.Bits()...)
		mem[i].SetBits(words[n:len(words):len(words)])
		if x.Sign() < 0 {
			mem[i].Neg(&mem[i])
		}
		c[i] = &mem[i]
	}
	return c
}

func newIsolatedRoot(d rootDisc, gap magnitude) *isolatedRoot {
	return &isolatedRoot{first: d, gap: gap, lastBits: -1}
}

// comparePoints compares the midpoints of x and y.
func comparePoints(x, y Ball) int {
	sx, sy := x.mantissa().Sign(), y.mantissa().Sign()
	if sx != sy || sx == 0 {
		return cmp.Compare(sx, sy)
	}
	if c := x.midDown().cmp(y.midDown()); c != 0 {
		return c * sx
	}
	sign, _ := x.point().Sub(y.point(), 32).Sign()
	return sign
}

// sortPairs orders the upper roots of pairs as [RootSet] says. Only those that
// their isolating discs do not order are refined.
func (r *RootSet) sortPairs(ctx context.Context, uppers []*isolatedRoot) error {
	slices.SortStableFunc(uppers, func(a, b *isolatedRoot) int {
		return comparePoints(a.first.at.Re, b.first.at.Re)
	})
	// Farther apart than this, discs settle the order of their roots, and so they
	// do for all discs before and after.
	var rad magnitude
	size := int64(math.MinInt64)
	for _, u := range uppers {
		if d := u.first; rad.cmp(d.rad) < 0 {
			rad = d.rad
		}
		size = max(size, u.first.at.absUp().top())
	}
	far := rad.mulPow2(1).addUp(magPow2(size - 60))
	for i := 0; i < len(uppers); {
		j := i + 1
		for j < len(uppers) && uppers[j].first.at.Re.Sub(uppers[j-1].first.at.Re, 64).absDown().cmp(far) <= 0 {
			j++
		}
		if j > i+1 {
			if err := r.sortClosePairs(ctx, uppers[i:j]); err != nil {
				return err
			}
		}
		i = j
	}
	return nil
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
func (r *RootSet) Len() int { return 2*len(r.roots) - r.real }

// NumReal returns the number of real roots; they come first.
func (r *RootSet) NumReal() int { return r.real }

// Conjugate returns the index of the conjugate of root i: i itself if it is real.
func (r *RootSet) Conjugate(i int) int {
	if i < r.real {
		return i
	}
	return r.real + ((i - r.real) ^ 1)
}

// Enclose returns a rectangle around root i and no other root, with radii of
// at most 2^-prec |root|. The imaginary part of a real root is exactly 0, the
// enclosures of conjugates are exact mirrors, and the root 0 is exact.
//
// Cost: one evaluation of the polynomial for each doubling of the precision,
// O(n) products of about prec bits plus the bits the condition of the root takes.
func (r *RootSet) Enclose(ctx context.Context, i int, prec uint) (ComplexBall, error) {
	k := i
	if i >= r.real {
		k = r.real + (i-r.real)/2
	}
	d, err := r.refine(ctx, r.roots[k], prec)
	if err != nil {
		return ComplexBall{}, err
	}
	z := d.at.widen(d.rad)
	if r.Conjugate(i) < i {
		z = z.Conj()
	}
	return z, nil
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
