package expr

import (
	"math/big"

	"example.org/closedform/algebra"
)

// scalarEval raises elements of the field k to powers, as far as these stay in
// the field: over Q, roots have values only where these are rational.
type scalarEval[E any] struct {
	k      algebra.Scalars[E]
	limits Limits
}

// pow returns x^e for a rational e.
func (s scalarEval[E]) pow(x E, e algebra.Rat, at Pos) (E, error) {
	n, isSmall := e.Int64()
	if e.IsInt() && !isSmall {
		return x, Errorf(LimitExceeded, at, "an exponent of %d bits", e.BitLen())
	}
	if !isSmall {
		return s.root(x, e, at)
	}
	if s.k.IsZero(x) {
		if n <= 0 {
			return x, Errorf(Singular, at, "0 to the power %s has no value", e)
		}
		return x, nil
	}
	if r, ok := s.k.Rational(x); ok {
		if size := int64(r.BitLen()) - 1; size > 0 && abs(n) > int64(s.limits.Bits)/size {
			return x, Errorf(LimitExceeded, at, "a power with more than %d bits", s.limits.Bits)
		}
		if r.Abs().IsOne() {
			n %= 2
		}
		return s.k.FromRat(r.Pow(int(n))), nil
	}
	if abs(n) > int64(s.limits.Degree) {
		return x, Errorf(LimitExceeded, at, "the exponent %d is beyond %d", n, s.limits.Degree)
	}
	y := s.k.One()
	for range abs(n) {
		y = s.k.Mul(y, x)
	}
	if n < 0 {
		return s.k.Inv(y)
	}
	return y, nil
}

// root returns x^(p/q), over Q where it is rational.
func (s scalarEval[E]) root(x E, e algebra.Rat, at Pos) (E, error) {
	q, small := algebra.RatFromBigInt(e.Den()).Int64()
	if !small || q > 64 {
		return x, Errorf(OutsideClass, at, "a root of the order %s", e.Den())
	}
	if m, ok := s.k.(constantMaker[E]); ok {
		y, err := m.NthRoot(x, int(q), at)
		if err != nil {
			return x, err
		}
		return s.pow(y, algebra.RatFromBigInt(e.Num()), at)
	}
	r, ok := s.k.Rational(x)
	if !ok {
		return x, irrational(at, "a root")
	}
	if r.Sign() < 0 {
		return x, Errorf(OutsideClass, at, "a fractional power of the negative number %s", r)
	}
	num, ok1 := exactRoot(r.Num(), int(q))
	den, ok2 := exactRoot(r.Den(), int(q))
	if !ok1 || !ok2 {
		return x, irrational(at, "(%s)^(%s)", r, e)
	}
	y := s.k.FromRat(algebra.RatFromFrac(num, den))
	return s.pow(y, algebra.RatFromBigInt(e.Num()), at)
}

// exactRoot returns the q-th root of n >= 0 if it is an integer.
func exactRoot(n *big.Int, q int) (*big.Int, bool) {
	x := algebra.IntRoot(n, q)
	return x, new(big.Int).Exp(x, big.NewInt(int64(q)), nil).Cmp(n) == 0
}

// abs returns |n|, and the largest int64 for the smallest.
func abs(n int64) int64 {
	if n < 0 {
		return max(-n, -(n + 1))
	}
	return n
}
