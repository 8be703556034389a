package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// lifter solves systems with one matrix A that is nonsingular modulo a prime
// p, by p-adic lifting: with C the inverse of A modulo p and r_0 = b,
//
//	x_k = C r_k mod p,   r_(k+1) = (r_k - A x_k) / p
//
// give the digits of the solution x = x_0 + x_1 p + x_2 p^2 + ...
//
// Source: J. Dixon, Exact solution of linear equations using p-adic
// expansions, Numerische Mathematik 40.
type lifter struct {
	a       *square
	field   zp.Field
	inverse *zp.Multiplier
	norm    *big.Int // bound for the absolute row sums of A
	minors  *big.Int // bound for det A from the norms of its columns
	pinv    uint64   // inverse of p modulo 2^64
}

// newLifter takes the inverse of a modulo the prime of field.
func newLifter(a *square, field zp.Field, inverse *zp.Matrix) *lifter {
	one := big.NewInt(1)
	return &lifter{
		a:       a,
		field:   field,
		inverse: inverse.Multiplier(),
		norm:    new(big.Int).Lsh(one, uint(a.rowSumBits())),
		minors:  new(big.Int).Lsh(one, uint(a.columnBits())),
		pinv:    zp.InverseWord(field.P),
	}
}

// column returns num and den > 0 with A num = den b and no factor common to
// den and all of num. The hint, a divisor of det A, is a likely denominator.
//
// A candidate num = den x modulo p^k satisfies A num = den b modulo p^k, so
// it is the solution as soon as norm max|num| + den max|b| < p^k: both sides
// agree modulo p^k and differ by less. The steps tried before Cramer's rule
// and Hadamard's inequality guarantee success cost little and often succeed.
//
// Source: S. Cabay, Exact solution of linear equations (the stopping rule).
func (l *lifter) column(ctx context.Context, b []*big.Int, hint *big.Int) (num []*big.Int, den *big.Int, err error) {
	beta := maxAbs(b)
	sum, sq := new(big.Int), new(big.Int)
	for _, x := range b {
		sum.Add(sum, sq.Mul(x, x))
	}
	// |numerator| <= minors |b|_2 by Cramer's rule, |det A| <= minors.
	top := new(big.Int).Mul(l.minors, sum.Add(sum.Sqrt(sum), big.NewInt(1)))
	need := new(big.Int).Mul(top, top)
	need.Lsh(need, 1)
	sq.Add(l.norm, beta)
	if sq.Mul(sq, top).Cmp(need) > 0 {
		need.Set(sq)
	}

	var step func(context.Context) ([]uint64, error)
	if l.a.w == 1 && l.norm.BitLen() <= 63 && beta.BitLen() <= 62 {
		step = l.wordSteps(b)
	} else {
		step = l.limbSteps(b, (max(beta.BitLen(), l.norm.BitLen())+65)/64)
	}
	p := new(big.Int).SetUint64(l.field.P)
	power := big.NewInt(1)
	var digits [][]uint64
	for k, try := 1, 1; ; k++ {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		x, err := step(ctx)
		if err != nil {
			return nil, nil, err
		}
		digits = append(digits, x)
		power.Mul(power, p)
		last := power.Cmp(need) > 0
		if k < try && !last {
			continue
		}
		try = k + 1 + k/5
		num, den, ok, err := l.attempt(ctx, digits, power, beta, hint, last)
		if err != nil || ok {
			return num, den, err
		}
		if last {
			panic("intmat: p-adic solution beyond its proven bound")
		}
	}
}

// attempt looks for num = den x from the digits of x modulo power. With
// strict it succeeds whenever power exceeds twice the square of the bounds
// on numerators and denominators; without, it also takes longer numerators
// over the denominator known so far.
func (l *lifter) attempt(ctx context.Context, digits [][]uint64, power, beta, hint *big.Int, strict bool) (num []*big.Int, den *big.Int, ok bool, err error) {
	p := new(big.Int).SetUint64(l.field.P)
	half := new(big.Int).Rsh(power, 1)
	bound := new(big.Int).Sqrt(half)
	limit := bound
	if !strict {
		limit = new(big.Int).Add(l.norm, big.NewInt(1))
		limit.Quo(power, limit) // a chance hit fails the final comparison
		limit.Rsh(limit, 1)
	}
	den = new(big.Int).Set(hint)
	num = make([]*big.Int, l.a.n)
	w := new(big.Int)
	for i := range num {
		x := new(big.Int)
		for k := len(digits) - 1; k >= 0; k-- {
			x.Mul(x, p)
			x.Add(x, w.SetUint64(digits[k][i]))
		}
		x.Mul(x, den)
		x.Mod(x, power)
		if x.Cmp(half) > 0 {
			x.Sub(x, power)
		}
		if x.CmpAbs(limit) > 0 {
			if x.Sign() < 0 {
				x.Add(x, power)
			}
			u, v, ok, err := reconstruct(ctx, x, power, bound)
			if err != nil || !ok {
				return nil, nil, false, err
			}
			x = u
			den.Mul(den, v)
			for _, y := range num[:i] {
				y.Mul(y, v)
			}
		}
		num[i] = x
		if err := ctx.Err(); err != nil {
			return nil, nil, false, err
		}
	}
	total := maxAbs(num)
	total.Mul(total, l.norm)
	total.Add(total, w.Mul(den, beta))
	if total.Cmp(power) >= 0 {
		return nil, nil, false, nil
	}
	cancel(num, den)
	return num, den, true, nil
}

// cancel divides num and den in place by their greatest common divisor.
func cancel(num []*big.Int, den *big.Int) {
	one := big.NewInt(1)
	g, q, r := new(big.Int).Set(den), new(big.Int), new(big.Int)
	for _, x := range num {
		if g.Cmp(one) == 0 {
			return
		}
		// A division shows most often that g stays as it is.
		if q.QuoRem(x, g, r); r.Sign() != 0 {
			g.GCD(nil, nil, g, r.Abs(r))
		}
	}
	if g.Cmp(one) == 0 {
		return
	}
	den.Quo(den, g)
	for _, x := range num {
		x.Quo(x, g)
	}
}

// maxAbs returns the largest absolute value in v, 0 for an empty v.
func maxAbs(v []*big.Int) *big.Int {
	best := new(big.Int)
	for _, x := range v {
		if x.CmpAbs(best) > 0 {
			best.Abs(x)
		}
	}
	return best
}
