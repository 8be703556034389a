package intmat

import "math/big"

// normBits is the number of fraction bits of a rounded norm.
const normBits = 16

// ceilNorm returns the least integer at least 2^normBits sqrt(squares).
func ceilNorm(squares *big.Int) *big.Int {
	scaled := new(big.Int).Lsh(squares, 2*normBits)
	r := new(big.Int).Sqrt(scaled)
	if new(big.Int).Mul(r, r).Cmp(scaled) < 0 {
		r.Add(r, big.NewInt(1))
	}
	return r
}

// squaredNorms returns the sums of squares of the rows and of the columns of
// a square matrix.
func squaredNorms(a [][]*big.Int) (rows, cols []*big.Int) {
	rows, cols = make([]*big.Int, len(a)), make([]*big.Int, len(a))
	for i := range a {
		rows[i], cols[i] = new(big.Int), new(big.Int)
	}
	sq := new(big.Int)
	for i, row := range a {
		for j, x := range row {
			if x.Sign() != 0 {
				sq.Mul(x, x)
				rows[i].Add(rows[i], sq)
				cols[j].Add(cols[j], sq)
			}
		}
	}
	return rows, cols
}

// shiftedNormProduct returns an integer not below the product of c + r_i,
// where r_i are the norms with the given squares.
func shiftedNormProduct(squares []*big.Int, c int64) *big.Int {
	shift := big.NewInt(c << normBits)
	prod := big.NewInt(1)
	for _, s := range squares {
		prod.Mul(prod, new(big.Int).Add(ceilNorm(s), shift))
	}
	prod.Rsh(prod, uint(normBits*len(squares)))
	return prod.Add(prod, big.NewInt(1))
}

// hadamardBound returns B with |det A| <= B: the product of the Euclidean
// norms of the rows, or of the columns, whichever is smaller.
//
// Source: J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
// Theorem 16.6 (Hadamard's inequality).
func hadamardBound(a [][]*big.Int) *big.Int {
	rows, cols := squaredNorms(a)
	return smaller(shiftedNormProduct(rows, 0), shiftedNormProduct(cols, 0))
}

// charPolyBound returns B with |c| <= B for every coefficient c of the
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
func charPolyBound(a [][]*big.Int) *big.Int {
	rows, cols := squaredNorms(a)
	return smaller(shiftedNormProduct(rows, 1), shiftedNormProduct(cols, 1))
}

// maxRowSum returns the largest sum of absolute values of a row of a.
func maxRowSum(a [][]*big.Int) *big.Int {
	best, sum, abs := new(big.Int), new(big.Int), new(big.Int)
	for _, row := range a {
		sum.SetInt64(0)
		for _, x := range row {
			sum.Add(sum, abs.Abs(x))
		}
		if sum.Cmp(best) > 0 {
			best.Set(sum)
		}
	}
	return best
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

func smaller(x, y *big.Int) *big.Int {
	if x.Cmp(y) <= 0 {
		return x
	}
	return y
}
