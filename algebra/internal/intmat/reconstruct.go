package intmat

import (
	"context"
	"math/big"
	"math/bits"
)

// reconstruct returns the fraction u/v with v t = u modulo m, |u| <= bound,
// 0 < v <= bound and u, v coprime, for 0 <= t < m and bound > 0. There is at
// most one when 2 bound^2 < m; ok is false when there is none.
//
// It is the first remainder r_i <= bound of Euclid's algorithm on m and t,
// with its cofactor: v_0 = 0, v_1 = 1, v_(i+1) = v_(i-1) - q_i v_i.
//
// Source: P. Wang, A p-adic algorithm for univariate partial fractions,
// section 3; J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
// Theorem 5.26.
func reconstruct(ctx context.Context, t, m, bound *big.Int) (u, v *big.Int, ok bool, err error) {
	e := newEuclid(m, t)
	for !e.atMost(bound) {
		if err := ctx.Err(); err != nil {
			return nil, nil, false, err
		}
		if room := min(e.bitLen()-bound.BitLen()-2, cofactorBits); room < 2 || !e.leap(room) {
			e.step()
		}
	}
	u, v = e.remainder(), e.cofactor()
	if v.Cmp(bound) > 0 {
		return nil, nil, false, nil
	}
	if e.odd {
		u.Neg(u)
	}
	// A common factor means the fraction does not represent t.
	w := new(big.Int).Abs(u)
	if w.GCD(nil, nil, w, v).Cmp(big.NewInt(1)) != 0 {
		return nil, nil, false, nil
	}
	return u, v, true, nil
}

// euclid is the state of Euclid's algorithm: consecutive remainders r0 > r1
// and the absolute values v0 <= v1 of their cofactors, whose signs alternate;
// odd tells whether that of v1 is negative.
type euclid struct {
	r0, r1, v0, v1 []uint64 // limbs
	odd            bool
}

func newEuclid(m, t *big.Int) *euclid {
	w := m.BitLen()/64 + 2
	e := &euclid{
		r0: appendLimbs(nil, m, w), r1: appendLimbs(nil, t, w),
		v0: make([]uint64, w), v1: make([]uint64, w),
	}
	e.v1[0] = 1
	return e
}

// bitLen returns that of r0.
func (e *euclid) bitLen() int {
	e.trim()
	top := len(e.r0) - 1
	return 64*top + bits.Len64(e.r0[top])
}

// trim cuts leading zeros common to r0 and r1; one limb is left.
func (e *euclid) trim() {
	k := len(e.r0)
	for k > 1 && e.r0[k-1] == 0 {
		k--
	}
	e.r0, e.r1 = e.r0[:k], e.r1[:k]
}

// atMost tells whether r1 <= bound.
func (e *euclid) atMost(bound *big.Int) bool {
	k := len(e.r1)
	for k > 0 && e.r1[k-1] == 0 {
		k--
	}
	if k == 0 {
		return true
	}
	length := 64*(k-1) + bits.Len64(e.r1[k-1])
	if length != bound.BitLen() {
		return length < bound.BitLen()
	}
	return bigLimbs(e.r1).Cmp(bound) <= 0
}

func (e *euclid) remainder() *big.Int { return bigLimbs(e.r1) }
func (e *euclid) cofactor() *big.Int  { return bigLimbs(e.v1) }

// bigLimbs returns the nonnegative integer with the given limbs.
func bigLimbs(x []uint64) *big.Int {
	words := make([]big.Word, 0, len(x)*wordsPerLimb)
	for _, v := range x {
		for h := range wordsPerLimb {
			words = append(words, big.Word(v>>(h*bits.UintSize)))
		}
	}
	return new(big.Int).SetBits(words)
}

// step is one division; r1 is not zero.
func (e *euclid) step() {
	q, r := new(big.Int).QuoRem(bigLimbs(e.r0), bigLimbs(e.r1), new(big.Int))
	v := q.Mul(q, bigLimbs(e.v1))
	v.Add(v, bigLimbs(e.v0))
	copy(e.r0, e.r1)
	copy(e.r1, appendLimbs(nil, r, len(e.r1)))
	e.v0, e.v1 = e.v1, appendLimbs(e.v0[:0], v, len(e.v0))
	e.odd = !e.odd
}

// cofactorBits bounds the cofactors of a leap.
const cofactorBits = 31

// leap does as many divisions as the leading 64 bits prove, with cofactors
// below 2^room, and reports whether there were any. The cofactors a, b of a
// remainder r_i = +-(a r0 - b r1) and those of the next one fulfil
// r_i >= r0/(2 b'), so the new r0 is above r0 2^(-room-1).
//
// Leading parts x of r0 and y of r1 give the quotient of the full numbers as
// long as y_(i+1) >= b_(i+1) and y_i - y_(i+1) >= b_i + b_(i+1).
//
// Source: D. Knuth, The Art of Computer Programming, vol. 2, section 4.5.2,
// Algorithm L; the condition is G. Collins's, from T. Jebelean, A
// double-digit Lehmer-Euclid algorithm for finding the GCD of long integers,
// section 2.
func (e *euclid) leap(room int) bool {
	top := len(e.r0) - 1
	if top == 0 {
		return false
	}
	shift := bits.LeadingZeros64(e.r0[top])
	x := e.r0[top]<<shift | e.r0[top-1]>>(64-shift)
	y := e.r1[top]<<shift | e.r1[top-1]>>(64-shift)
	limit := uint64(1) << room
	var a0, b0, a1, b1 uint64 = 1, 0, 0, 1
	steps := 0
	for y != 0 {
		q, r := x/y, x%y
		if q >= limit {
			break
		}
		a2, b2 := a0+q*a1, b0+q*b1
		if b2 >= limit || r < b2 || y-r < b1+b2 {
			break
		}
		x, y = y, r
		a0, b0, a1, b1 = a1, b1, a2, b2
		steps++
	}
	if steps == 0 {
		return false
	}
	// After an even number of steps r0' = a0 r0 - b0 r1, r1' = b1 r1 - a1 r0.
	if steps%2 == 0 {
		differences(e.r0, e.r1, a0, b0, a1, b1)
	} else {
		differences(e.r1, e.r0, b0, a0, b1, a1)
		e.r0, e.r1 = e.r1, e.r0
		e.odd = !e.odd
	}
	sums(e.v0, e.v1, a0, b0, a1, b1)
	return true
}

// differences sets x to a x - b y and y to d y - c x, both nonnegative, with
// factors below 2^32.
func differences(x, y []uint64, a, b, c, d uint64) {
	var s, t int64 // signed carries below 2^33
	y = y[:len(x)]
	for i, u := range x {
		v := y[i]
		x[i], s = difference(u, v, a, b, s)
		y[i], t = difference(v, u, d, c, t)
	}
}

// difference returns a u - b v + s as the low limb and a signed carry.
func difference(u, v, a, b uint64, s int64) (uint64, int64) {
	h0, l0 := bits.Mul64(u, a)
	h1, l1 := bits.Mul64(v, b)
	lo, c := bits.Sub64(l0, l1, 0)
	hi, _ := bits.Sub64(h0, h1, c)
	lo, c = bits.Add64(lo, uint64(s), 0)
	hi, _ = bits.Add64(hi, uint64(s>>63), c)
	return lo, int64(hi)
}

// sums sets x to a x + b y and y to c x + d y, with factors below 2^32; the
// sums fit the length of x.
func sums(x, y []uint64, a, b, c, d uint64) {
	var s, t uint64
	y = y[:len(x)]
	for i, u := range x {
		v := y[i]
		x[i], s = sum(u, v, a, b, s)
		y[i], t = sum(u, v, c, d, t)
	}
}

// sum returns a u + b v + s as the low limb and the carry.
func sum(u, v, a, b, s uint64) (lo, hi uint64) {
	h0, l0 := bits.Mul64(u, a)
	h1, l1 := bits.Mul64(v, b)
	lo, c := bits.Add64(l0, l1, 0)
	hi = h0 + h1 + c
	lo, c = bits.Add64(lo, s, 0)
	return lo, hi + c
}
