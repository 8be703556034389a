// Package intmat is exact dense linear algebra over the integers:
// characteristic and minimal polynomials, determinants, linear systems and
// kernels.
//
// Every result is proven, not probable: modular images are combined under a
// bound on the answer, or the answer carries a certificate that is checked.
//
// Matrices are slices of rows. Functions leave arguments alone and results
// share no memory with them. A matrix of the wrong shape is a programming
// error and panics.
package intmat

import (
	"errors"
	"fmt"
	"math/big"
)

// ErrSingular reports a square matrix with determinant zero where a
// nonsingular one is needed.
var ErrSingular = errors.New("intmat: matrix is singular")

// mustBeSquare returns the order of a.
func mustBeSquare(a [][]*big.Int) int {
	for i, row := range a {
		if len(row) != len(a) {
			panic(fmt.Sprintf("intmat: row %d has %d entries, want %d", i, len(row), len(a)))
		}
	}
	return len(a)
}

// mustBeRectangular returns the number of columns of a, 0 when it has no rows.
func mustBeRectangular(a [][]*big.Int) int {
	if len(a) == 0 {
		return 0
	}
	for i, row := range a {
		if len(row) != len(a[0]) {
			panic(fmt.Sprintf("intmat: row %d has %d entries, want %d", i, len(row), len(a[0])))
		}
	}
	return len(a[0])
}

// submatrix returns the rows and columns of a with the given indices, entries
// shared with a.
func submatrix(a [][]*big.Int, rows, cols []int) [][]*big.Int {
	s := make([][]*big.Int, len(rows))
	for i, r := range rows {
		s[i] = make([]*big.Int, len(cols))
		for j, c := range cols {
			s[i][j] = a[r][c]
		}
	}
	return s
}
