package algebra

import "math/big"

// Root returns a ball around the q-th root of x, q >= 2: of a positive number,
// or of any where q is odd. It is the whole line where x holds numbers that have
// no root.
func (x Ball) Root(q int, prec uint) Ball {
	if q == 2 {
		return x.Sqrt(prec)
	}
	if x.rad.isInf() {
		return unknown()
	}
	lo, hi, e := x.endpoints()
	if lo.Sign() < 0 {
		if q%2 == 1 && hi.Sign() <= 0 {
			return x.Neg().Root(q, prec).Neg()
		}
		return unknown()
	}
	// With m the number in units of 2^e, the root is (m 2^(e + q k))^(1/q) 2^-k.
	k := int64(prec) + 2
	if n := e + int64(lo.BitLen()); n < 0 {
		k += -n / int64(q)
	}
	shift := e + int64(q)*k
	down := new(big.Int)
	up := new(big.Int)
	if shift >= 0 {
		down.Lsh(lo, uint(shift))
		up.Lsh(hi, uint(shift))
	} else {
		down.Rsh(lo, uint(-shift))
		up.Rsh(hi, uint(-shift))
		up.Add(up, big.NewInt(1))
	}
	a := IntRoot(down, q)
	b := IntRoot(up, q)
	b.Add(b, big.NewInt(1))
	left := ownBall(a, -k, magnitude{}, prec)
	return left.Union(ownBall(b, -k, magnitude{}, prec), prec)
}

// IntRoot returns the greatest integer whose q-th power is at most n, for n >= 0
// and q >= 1, by Newton's iteration from above.
func IntRoot(n *big.Int, q int) *big.Int {
	if n.Sign() == 0 || q == 1 {
		return new(big.Int).Set(n)
	}
	if q == 2 {
		return new(big.Int).Sqrt(n)
	}
	bq, b1 := big.NewInt(int64(q)), big.NewInt(int64(q-1))
	x := new(big.Int).Lsh(big.NewInt(1), uint(n.BitLen()/q+1))
	for {
		y := new(big.Int).Exp(x, b1, nil)
		y.Quo(n, y)
		y.Add(y, new(big.Int).Mul(b1, x))
		y.Quo(y, bq)
		if y.Cmp(x) >= 0 {
			return x
		}
		x = y
	}
}
