package intmat

import "math"

// upper is the upper bound frac 2^exp of a nonnegative number. Bounds in
// floating point are proven when the factor slack makes up for the rounding.
type upper struct {
	frac float64
	exp  int
}

// slack covers the relative rounding error of sums of fewer than 2^10 terms
// and of a few operations more: (1 + 2^-53)^(2^11) < 1 + 2^-41. Longer sums
// get a factor for every 2^10 terms.
const slack = 1 + 0x1p-41

// times returns an upper bound of the product of u and x, for x.frac at most
// 2^500.
func (u upper) times(x upper) upper {
	f, e := u.frac*x.frac*slack, u.exp+x.exp
	if f > 0x1p500 {
		f, e = f*0x1p-500, e+500
	}
	return upper{f, e}
}

// bits returns the least b that the bound shows to have u < 2^b.
func (u upper) bits() int {
	if u.frac == 0 {
		return 0
	}
	_, e := math.Frexp(u.frac)
	return e + u.exp
}

// slack returns the factor for sums over a row.
func (s *square) slack() float64 {
	if s.n < 1<<10 {
		return slack
	}
	return math.Pow(slack, float64(1+s.n>>10))
}

// floatLimbs is the number of limbs whose squares can be summed in floating
// point without overflow; entries longer than that are bounded by powers of
// two.
const floatLimbs = 7

// absFloat returns the absolute value of the two's complement x, of at most
// floatLimbs limbs, with relative error below 2^-50.
func absFloat(x []uint64) float64 {
	if len(x) == 1 {
		return math.Abs(float64(int64(x[0])))
	}
	top := len(x) - 1
	negative := x[top]>>63 == 1
	var r float64
	carry, unit := uint64(1), 1.0
	for _, v := range x {
		if negative {
			v = ^v + carry
			if v != 0 {
				carry = 0
			}
		}
		r += float64(v) * unit
		unit *= 0x1p64
	}
	return r
}

// norm returns an upper bound of shift, 0 or 1, plus the Euclidean norm of the
// n entries from the given one on with the given step: a row or a column of s.
func (s *square) norm(first, step int, shift float64) upper {
	if s.w > floatLimbs {
		longest := 0
		for k := range s.n {
			i := (first + k*step) * s.w
			longest = max(longest, bitLen(s.e[i:i+s.w]))
		}
		if longest == 0 {
			return upper{shift, 0}
		}
		return upper{math.Sqrt(float64(s.n))*slack + 1, longest} // the shift is at most one such entry
	}
	var sum float64
	for k := range s.n {
		i := first + k*step
		var x float64
		if s.w == 1 {
			x = float64(int64(s.e[i]))
		} else {
			x = absFloat(s.e[i*s.w : (i+1)*s.w])
		}
		sum += x * x
	}
	return upper{(shift + math.Sqrt(sum)) * s.slack(), 0}
}

// rowProduct returns the product of the bounds norm of the rows.
func (s *square) rowProduct(shift float64) upper {
	p := upper{1, 0}
	for i := range s.n {
		p = p.times(s.norm(i*s.n, 1, shift))
	}
	return p
}

// columnProduct returns the product of the bounds norm of the columns.
func (s *square) columnProduct(shift float64) upper {
	p := upper{1, 0}
	for j := range s.n {
		p = p.times(s.norm(j, s.n, shift))
	}
	return p
}

// hadamardBits returns b with |det A| < 2^b: the product of the Euclidean
// norms of the rows, or of the columns, whichever is smaller. The minors of
// a nonsingular A have the same bound, as an integer row or column that is
// not zero has norm at least 1.
//
// Source: J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
// Theorem 16.6 (Hadamard's inequality).
func (s *square) hadamardBits() int {
	return min(s.rowProduct(0).bits(), s.columnProduct(0).bits())
}

// columnBits is [square.hadamardBits] from the columns alone. Replacing a
// column by a vector v of norm at least 1 multiplies that bound by at most
// the norm, so that it serves for Cramer's rule, too.
func (s *square) columnBits() int {
	return s.columnProduct(0).bits()
}

// charPolyBits returns b with |c| < 2^b for every coefficient c of the
// characteristic polynomial of A.
//
// The coefficient of s^(n-k) is, up to sign, the sum of the principal k x k
// minors. A row of such a minor is part of a row of A, so by Hadamard's
// inequality the minor on the index set S is at most the product of the row
// norms r_i over S, and the sum over all S at most the k-th elementary
// symmetric function of r_1, ..., r_n. That is a term of
//
//	(1 + r_1) (1 + r_2) ... (1 + r_n),
//
// and the same holds for columns; the smaller product is taken. The bound
// binom(n, k) rho^k from a spectral radius rho, estimated by Gershgorin's
// discs as the largest absolute row (or column) sum, never beats it by more
// than a factor n + 1, as r_i is at most the i-th row sum: its maximum over k
// is at least (1 + rho)^n / (n + 1).
func (s *square) charPolyBits() int {
	return min(s.rowProduct(1).bits(), s.columnProduct(1).bits())
}

// rowSumBits returns b such that every sum of absolute values of a row is
// below 2^b.
func (s *square) rowSumBits() int {
	best := 0
	for i := range s.n {
		var sum float64
		longest := 0
		for j := range s.n {
			if s.w > floatLimbs {
				longest = max(longest, bitLen(s.at(i, j)))
			} else {
				sum += absFloat(s.at(i, j))
			}
		}
		if s.w > floatLimbs {
			sum = float64(s.n)
		}
		_, e := math.Frexp(sum * s.slack())
		best = max(best, longest+e)
	}
	return best
}
