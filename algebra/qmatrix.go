package algebra

import (
	"context"
	"errors"
	"math/big"

	"example.org/closedform/algebra/internal/intmat"
)

// Matrices over Q are handed to integer algorithms as d*a, with d the least
// common denominator of the entries of a.

// CharPoly returns det(s I - a): with d the common denominator of the entries,
// d^n det(s I - a) is the characteristic polynomial of the integer matrix d*a
// at d*s, which is found modulo primes.
func (Rationals) CharPoly(ctx context.Context, a Matrix[Rat]) (Poly[Rat], error) {
	a.mustBeSquare("characteristic polynomial")
	return spectral(ctx, a, intmat.CharPolyWords, intmat.CharPoly)
}

// unscaled returns the monic polynomial whose roots are those of the monic c
// divided by d: the coefficient of s^k of the multiple by d^n is d^k c[k].
func unscaled(c []*big.Int, d *big.Int) Poly[Rat] {
	if d.IsInt64() && d.Int64() == 1 {
		return overQ(c)
	}
	out := make([]*big.Int, len(c))
	scale := big.NewInt(1)
	for k := range c {
		out[k] = new(big.Int).Mul(c[k], scale)
		scale = new(big.Int).Mul(scale, d)
	}
	return overQ(out)
}

func (Rationals) minPoly(ctx context.Context, a Matrix[Rat]) (Poly[Rat], error) {
	return spectral(ctx, a, intmat.MinPolyWords, intmat.MinPoly)
}

// spectral returns a polynomial of a that two functions give for integer
// matrices, one of them for entries in words.
func spectral(ctx context.Context, a Matrix[Rat],
	words func(context.Context, int, []int64) ([]*big.Int, error),
	ints func(context.Context, [][]*big.Int) ([]*big.Int, error),
) (Poly[Rat], error) {
	d := big.NewInt(1)
	var c []*big.Int
	var err error
	if w, ok := wordsOf(a.entries()); ok {
		c, err = words(ctx, a.n, w)
	} else {
		var rows [][]*big.Int
		rows, d = a.intRows()
		c, err = ints(ctx, rows)
	}
	if err != nil {
		return Poly[Rat]{}, err
	}
	return unscaled(c, d), nil
}

func (Rationals) det(ctx context.Context, a Matrix[Rat]) (Rat, error) {
	if w, ok := wordsOf(a.entries()); ok {
		x, err := intmat.DetWords(ctx, a.n, w)
		if err != nil {
			return Rat{}, err
		}
		return RatFromBigInt(x), nil
	}
	ints, d := a.intRows()
	x, err := intmat.Det(ctx, ints)
	if err != nil {
		return Rat{}, err
	}
	return RatFromFrac(x, d.Exp(d, big.NewInt(int64(a.n)), nil)), nil
}

func (Rationals) solve(ctx context.Context, a, b Matrix[Rat]) (Matrix[Rat], error) {
	// (da a) X' = (db b) gives X = X' da / db.
	bi, db := b.intRows()
	if w, ok := wordsOf(a.entries()); ok {
		num, den, err := intmat.SolveWords(ctx, a.n, w, bi)
		return overCommon(num, den, big.NewInt(1), db, a.n, b.n, err)
	}
	ai, da := a.intRows()
	num, den, err := intmat.Solve(ctx, ai, bi)
	return overCommon(num, den, da, db, a.n, b.n, err)
}

func (Rationals) inverse(ctx context.Context, a Matrix[Rat]) (Matrix[Rat], error) {
	if w, ok := wordsOf(a.entries()); ok {
		num, den, err := intmat.InverseWords(ctx, a.n, w)
		return overCommon(num, den, big.NewInt(1), big.NewInt(1), a.n, a.n, err)
	}
	ints, d := a.intRows()
	num, den, err := intmat.Inverse(ctx, ints)
	return overCommon(num, den, d, big.NewInt(1), a.n, a.n, err)
}

func (Rationals) kernel(ctx context.Context, a Matrix[Rat]) ([][]Rat, error) {
	if a.m == 0 { // no equations: every unit vector
		return Echelon[Rat]{Rows: Matrix[Rat]{ring: Q, n: a.n}}.Kernel(), nil
	}
	rows, _ := a.intRows()
	vectors, err := intmat.Kernel(ctx, rows)
	if err != nil {
		return nil, err
	}
	var out [][]Rat
	for _, v := range vectors {
		// The free column is the last one that is not 0, and gets the entry 1.
		free := len(v) - 1
		for v[free].Sign() == 0 {
			free--
		}
		x := make([]Rat, len(v))
		for i := range x {
			x[i] = RatFromFrac(v[i], v[free])
		}
		out = append(out, x)
	}
	return out, nil
}

// overCommon returns the m x n matrix num*p/(den*q).
func overCommon(num [][]*big.Int, den, p, q *big.Int, m, n int, err error) (Matrix[Rat], error) {
	if errors.Is(err, intmat.ErrSingular) {
		return Matrix[Rat]{}, ErrSingular
	}
	if err != nil {
		return Matrix[Rat]{}, err
	}
	entries := make([]*big.Int, 0, m*n)
	for _, row := range num {
		for _, x := range row {
			if !isOne(p) {
				x = new(big.Int).Mul(x, p)
			}
			entries = append(entries, x)
		}
	}
	return Matrix[Rat]{ring: Q, m: m, n: n, q: &qmatrix{num: entries, den: new(big.Int).Mul(den, q)}}, nil
}
