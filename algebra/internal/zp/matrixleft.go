package zp

import "context"

// The eliminations here are left-looking: a column is updated once, by dot
// products with all columns before it, so that every entry costs one
// reduction in place of one for each product. They hold over any localRing:
// the multipliers are quotients by a pivot that divides the whole column, so
// the transformations are elementary matrices of determinant 1 or -1 over
// the ring.

// hessenberg returns the columns, one after the other, of a Hessenberg matrix
// similar to the n x n matrix a, which it overwrites; entries of a column
// behind the subdiagonal are unset.
//
// It solves A L = L H for the columns of L, unit lower triangular, and H in
// turn: with l_0 = e_0,
//
//	A l_k = h_0k l_0 + ... + h_kk l_k + r,   r = h_(k+1,k) l_(k+1),
//
// where r starts at row k+1; a simultaneous swap of rows and columns moves a
// pivot there. Column k-1 of a makes room for l_k, so r is one product of
// the rows of a with (-h_1k, ..., -h_kk, l_k).
//
// Source: J. Wilkinson, The Algebraic Eigenvalue Problem, chapter 6,
// section 11 (direct reduction to Hessenberg form). Over a ring of integers
// modulo a prime power: X. Caruso, D. Roe, T. Vaccon, Characteristic
// polynomials of p-adic matrices.
func hessenberg(ctx context.Context, ring localRing, n int, a []uint64) ([]uint64, error) {
	h := make([]uint64, n*n+n)
	h, v := h[:n*n:n*n], h[n*n:]
	if isHessenberg(n, a) {
		for i := range n {
			for j := max(0, i-1); j < n; j++ {
				h[j*n+i] = a[i*n+j]
			}
		}
		return h, nil
	}
	if n > 0 {
		v[0] = ring.one()
	}
	for k := range n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		col := h[k*n : (k+1)*n]
		for i := range k + 1 {
			row := a[i*n : (i+1)*n]
			x := ring.dot(row[k:], v[k:])
			if i > 1 {
				x = ring.add(x, ring.dot(row[:i-1], v))
			}
			col[i] = x
			if i > 0 {
				v[i-1] = ring.neg(x)
			}
		}
		if k+1 == n {
			break
		}
		for i := k + 1; i < n; i++ {
			col[i] = ring.dot(a[i*n:(i+1)*n], v)
		}
		r := col[k+1:]
		pivot := ring.pivot(r)
		if pivot < 0 {
			clear(v)
			v[k+1] = ring.one()
			for i := k + 1; i < n; i++ {
				a[i*n+k] = v[i]
			}
			continue
		}
		if pivot > 0 {
			r[0], r[pivot] = r[pivot], r[0]
			i := k + 1 + pivot
			for j := range n {
				a[i*n+j], a[(k+1)*n+j] = a[(k+1)*n+j], a[i*n+j]
			}
			for j := range n {
				a[j*n+i], a[j*n+k+1] = a[j*n+k+1], a[j*n+i]
			}
		}
		copy(v[k+2:], r[1:])
		ring.divide(v[k+2:], r[0])
		v[k+1] = ring.one()
		for i := k + 1; i < n; i++ {
			a[i*n+k] = v[i]
		}
	}
	return h, nil
}

func isHessenberg(n int, a []uint64) bool {
	for i := n - 1; i > 1; i-- {
		for _, x := range a[i*n : i*n+i-1] {
			if x != 0 {
				return false
			}
		}
	}
	return true
}

// hessenbergCharPoly returns the characteristic polynomial of the Hessenberg
// matrix with the given columns. With p_k that of the leading k x k block,
// expanding along the last column gives
//
//	p_k = (s - h_kk) p_(k-1) - sum_(i<k) h_ik (h_(i+1,i) ... h_(k,k-1)) p_(i-1).
//
// Row t of a table holds the coefficients of s^t in p_t, p_(t+1), ..., so
// that each new one is a dot product; it starts behind the leading zeros of
// the factors.
//
// Source: H. Cohen, A Course in Computational Algebraic Number Theory,
// Algorithm 2.2.9 (steps 5 to 7).
func hessenbergCharPoly(ctx context.Context, ring localRing, n int, h []uint64) ([]uint64, error) {
	m := n + 1
	table := make([]uint64, m*m+m)
	factors := table[m*m:]
	table[0] = ring.one()
	for k := range n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		first, chain := k, ring.one()
		factors[k] = ring.neg(h[k*n+k])
		for i := k - 1; i >= 0; i-- {
			if chain = ring.mul(chain, h[i*n+i+1]); chain == 0 {
				break
			}
			factors[i] = 0
			if c := h[k*n+i]; c != 0 {
				factors[i] = ring.neg(ring.mul(chain, c))
				first = i
			}
		}
		for t := range k + 1 {
			from := max(first, t)
			x := ring.dot(factors[from:k+1], table[t*m+from:])
			if t > 0 {
				x = ring.add(x, table[(t-1)*m+k])
			}
			table[t*m+k+1] = x
		}
		table[(k+1)*m+k+1] = ring.one()
	}
	poly := factors
	for t := range poly {
		poly[t] = table[t*m+n]
	}
	return poly, nil
}

// hessenbergDet returns the determinant of a Hessenberg matrix with rows a in
// O(n^2): the recurrence of [hessenbergCharPoly] at s = 0. A chain of zeros
// or few entries above the diagonal, as in banded matrices, costs less.
func hessenbergDet(ctx context.Context, ring localRing, n int, a []uint64) (uint64, error) {
	p := make([]uint64, n+1) // p_k(0), (-1)^k times the leading minor
	p[0] = ring.one()
	for k := range n {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		x, chain := ring.mul(a[k*n+k], p[k]), ring.one()
		first := 0 // no entries above this row
		for first < k && a[first*n+k] == 0 {
			first++
		}
		for i := k - 1; i >= first; i-- {
			if chain = ring.mul(chain, a[(i+1)*n+i]); chain == 0 {
				break
			}
			if c := a[i*n+k]; c != 0 {
				x = ring.add(x, ring.mul(ring.mul(chain, c), p[i]))
			}
		}
		p[k+1] = ring.neg(x)
	}
	if n%2 == 1 {
		return ring.neg(p[n]), nil
	}
	return p[n], nil
}

// determinant returns the determinant of the n x n matrix a, which it
// overwrites by its triangular factors, column by column, unless it has
// Hessenberg form.
//
// Source: G. Golub, C. Van Loan, Matrix Computations, section 3.2 (the
// left-looking, or jki, form of elimination).
func determinant(ctx context.Context, ring *matrixRing, n int, a []uint64) (uint64, error) {
	if isHessenberg(n, a) {
		return hessenbergDet(ctx, ring, n, a)
	}
	det := ring.one()
	u := make([]uint64, 2*n)
	u, col := u[:n], u[n:]
	start := make([]int, n) // zeros before the first multiplier of each row
	for i := range start {
		start[i] = n
	}
	for k := range n {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		for i := range k {
			x := a[i*n+k]
			if from := start[i]; from < i {
				x = ring.add(x, ring.dot(a[i*n+from:i*n+i], u[from:]))
			}
			u[i] = ring.neg(x)
		}
		for i := k; i < n; i++ {
			col[i] = a[i*n+k]
			if from := start[i]; from < k {
				col[i] = ring.add(col[i], ring.dot(a[i*n+from:i*n+k], u[from:]))
			}
		}
		pivot := ring.pivot(col[k:])
		if pivot < 0 {
			return 0, nil
		}
		if pivot > 0 {
			i := k + pivot
			col[i], col[k] = col[k], col[i]
			start[i], start[k] = start[k], start[i]
			for j := range n {
				a[i*n+j], a[k*n+j] = a[k*n+j], a[i*n+j]
			}
			det = ring.neg(det)
		}
		det = ring.mul(det, col[k])
		ring.divide(col[k+1:], col[k])
		for i := k + 1; i < n; i++ {
			if a[i*n+k] = col[i]; col[i] != 0 {
				start[i] = min(start[i], k)
			}
		}
	}
	return det, nil
}
