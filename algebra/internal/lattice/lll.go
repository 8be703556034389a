// Package lattice reduces bases of integer lattices.
package lattice

import (
	"context"
	"math/big"
)

// Reduced is an LLL-reduced basis together with its exact Gram determinants.
type Reduced struct {
	// Basis holds the basis vectors b_1, ..., b_n as rows.
	Basis [][]*big.Int
	// Det holds d_0 = 1, d_1, ..., d_n, where d_i is the determinant of the
	// Gram matrix of the first i vectors, so that the i-th Gram-Schmidt
	// vector has squared length d_i / d_(i-1).
	Det []*big.Int
}

// Reduce returns an LLL-reduced basis of the lattice spanned by the rows of
// basis, which must be linearly independent: for the Gram-Schmidt vectors b*_i
// and coefficients mu_ij,
//
//	|mu_ij| <= 1/2 for j < i,  |b*_i|^2 >= (3/4 - mu_(i,i-1)^2) |b*_(i-1)|^2.
//
// All of it is established in integers; a floating-point pass on word-size
// entries only shortens the way. It panics on dependent rows. Cost of the
// exact part: n^4 log B operations on integers of n log B bits for n rows with
// entries below B; after a successful floating-point pass, n^3 operations.
//
// Source: Lenstra, Lenstra and Lovász, Factoring polynomials with rational
// coefficients, Math. Ann. 261 (1982); the integral form is Cohen, A Course in
// Computational Algebraic Number Theory, algorithm 2.6.7.
func Reduce(ctx context.Context, basis [][]*big.Int) (*Reduced, error) {
	rows := make([][]*big.Int, len(basis))
	for i, r := range basis {
		rows[i] = make([]*big.Int, len(r))
		for j, x := range r {
			rows[i][j] = new(big.Int).Set(x)
		}
	}
	if err := guide(ctx, rows); err != nil {
		return nil, err
	}
	return reduceExact(ctx, rows)
}

// integral is the state of the integral algorithm: det as in Reduced and
// lambda_ij = d_j mu_ij for j < i (from 0, so lambda[i][j] = d_(j+1) mu_ij).
type integral struct {
	rows   [][]*big.Int
	det    []*big.Int
	lambda [][]*big.Int
}

// reduceExact reduces rows in place.
func reduceExact(ctx context.Context, rows [][]*big.Int) (*Reduced, error) {
	n := len(rows)
	s := &integral{rows: rows, det: make([]*big.Int, n+1), lambda: make([][]*big.Int, n)}
	s.det[0] = big.NewInt(1)
	known := 0 // rows whose Gram-Schmidt data are up to date
	for k := 0; k < n; {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if k == known {
			s.orthogonalise(k)
			known++
		}
		if k == 0 {
			k++
			continue
		}
		s.sizeReduce(k, k-1)
		if s.mustSwap(k) {
			s.swap(k, known)
			k = max(k-1, 0)
			if k == 0 {
				k = 1
			}
			continue
		}
		for l := k - 2; l >= 0; l-- {
			s.sizeReduce(k, l)
		}
		k++
	}
	return &Reduced{Basis: rows, Det: s.det}, nil
}

// orthogonalise computes lambda_k and d_(k+1) from the rows up to k, without
// fractions.
func (s *integral) orthogonalise(k int) {
	s.lambda[k] = make([]*big.Int, k)
	var t big.Int
	for j := 0; j <= k; j++ {
		u := dot(s.rows[k], s.rows[j])
		for i := 0; i < j; i++ {
			// u <- (d_(i+1) u - lambda_ki lambda_ji) / d_i, exactly.
			u.Mul(u, s.det[i+1])
			lj := s.lambda[k][i]
			if j < k {
				lj = s.lambda[j][i]
			}
			u.Sub(u, t.Mul(s.lambda[k][i], lj))
			u.Quo(u, s.det[i])
		}
		if j < k {
			s.lambda[k][j] = u
		} else {
			s.det[k+1] = u
		}
	}
	if s.det[k+1].Sign() == 0 {
		panic("lattice: rows are linearly dependent")
	}
}

// sizeReduce subtracts the multiple of row l < k from row k that makes
// |mu_kl| <= 1/2.
func (s *integral) sizeReduce(k, l int) {
	d, lam := s.det[l+1], s.lambda[k][l]
	twice := new(big.Int).Lsh(lam, 1)
	if twice.CmpAbs(d) <= 0 {
		return
	}
	// q = floor((2 lambda + d) / 2d), the nearest integer to lambda / d.
	q := twice.Add(twice, d)
	q.Div(q, new(big.Int).Lsh(d, 1))
	var t big.Int
	for i, x := range s.rows[l] {
		if x.Sign() != 0 {
			s.rows[k][i].Sub(s.rows[k][i], t.Mul(q, x))
		}
	}
	lam.Sub(lam, t.Mul(q, d))
	for i := 0; i < l; i++ {
		s.lambda[k][i].Sub(s.lambda[k][i], t.Mul(q, s.lambda[l][i]))
	}
}

// mustSwap reports whether rows k-1 and k fail the Lovász condition with the
// constant 3/4: 4 (d_(k+1) d_(k-1) + lambda^2) < 3 d_k^2.
func (s *integral) mustSwap(k int) bool {
	var a, b, t big.Int
	a.Mul(s.det[k+1], s.det[k-1])
	a.Add(&a, t.Mul(s.lambda[k][k-1], s.lambda[k][k-1]))
	a.Lsh(&a, 2)
	b.Mul(s.det[k], s.det[k])
	b.Mul(&b, t.SetInt64(3))
	return a.Cmp(&b) < 0
}

// swap exchanges rows k-1 and k and updates the data of the known rows.
func (s *integral) swap(k, known int) {
	s.rows[k-1], s.rows[k] = s.rows[k], s.rows[k-1]
	for j := 0; j < k-1; j++ {
		s.lambda[k-1][j], s.lambda[k][j] = s.lambda[k][j], s.lambda[k-1][j]
	}
	lam := s.lambda[k][k-1]
	var t big.Int
	b := new(big.Int).Mul(s.det[k-1], s.det[k+1])
	b.Add(b, t.Mul(lam, lam))
	b.Quo(b, s.det[k])
	for i := k + 1; i < known; i++ {
		old := s.lambda[i][k]
		// lambda_ik <- (d_(k+1) lambda_(i,k-1) - lambda old) / d_k
		x := new(big.Int).Mul(s.det[k+1], s.lambda[i][k-1])
		x.Sub(x, t.Mul(lam, old))
		x.Quo(x, s.det[k])
		// lambda_(i,k-1) <- (b old + lambda lambda_ik) / d_(k+1)
		y := new(big.Int).Mul(b, old)
		y.Add(y, t.Mul(lam, x))
		y.Quo(y, s.det[k+1])
		s.lambda[i][k], s.lambda[i][k-1] = x, y
	}
	s.det[k] = b
}

// dot returns the inner product of x and y.
func dot(x, y []*big.Int) *big.Int {
	r := new(big.Int)
	var t big.Int
	for i := range x {
		if x[i].Sign() != 0 && y[i].Sign() != 0 {
			r.Add(r, t.Mul(x[i], y[i]))
		}
	}
	return r
}

// Within returns the largest k such that the k-th Gram-Schmidt vector has
// squared length at most bound, 0 when there is none: every lattice vector of
// squared length at most bound is an integer combination of the first k basis
// vectors.
//
// Source: van Hoeij, Factoring polynomials and the knapsack problem, J. Number
// Theory 95 (2002), lemma 2.
func (r *Reduced) Within(bound *big.Int) int {
	var t big.Int
	for k := len(r.Basis); k > 0; k-- {
		if r.Det[k].Cmp(t.Mul(bound, r.Det[k-1])) <= 0 {
			return k
		}
	}
	return 0
}
