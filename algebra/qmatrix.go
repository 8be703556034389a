package algebra

import (
	"context"
	"errors"
	"math/big"

	"example.org/closedform/algebra/internal/intmat"
)

// qmatrix holds rational entries, row by row, in the form that [Matrix] keeps
// over [Rationals] and that integer algorithms take and give: integers over one
// common denominator d, flat machine words if all fit.
type qmatrix struct {
	w   []int64    // the numerators if every |w[i]| < 2^63; nil otherwise
	num []*big.Int // the numerators if w is nil
	den *big.Int   // d > 0
}

// qmatrixFromRats returns the entries over their least common denominator.
func qmatrixFromRats(e []Rat) *qmatrix {
	if w, ok := wordsOf(e); ok {
		return &qmatrix{w: w, den: big.NewInt(1)}
	}
	ints, d := clearDenominators(e)
	return newQMatrix(ints, d)
}

// newQMatrix returns the entries num[i]/den.
func newQMatrix(num []*big.Int, den *big.Int) *qmatrix {
	for _, x := range num {
		if !fits63(x) {
			return &qmatrix{num: num, den: den}
		}
	}
	w := make([]int64, len(num))
	for i, x := range num {
		w[i] = x.Int64()
	}
	return &qmatrix{w: w, den: den}
}

// rats returns the entries from index i up to j, without j.
func (q *qmatrix) rats(i, j int) []Rat {
	out := make([]Rat, j-i)
	for k := range out {
		out[k] = q.entry(i + k)
	}
	return out
}

func (q *qmatrix) entry(i int) Rat {
	switch {
	case q.w == nil:
		return RatFromFrac(q.num[i], q.den)
	case isOne(q.den):
		return Rat{num: q.w[i], den: 1}
	case fits63(q.den):
		return NewRat(q.w[i], q.den.Int64())
	}
	return RatFromFrac(big.NewInt(q.w[i]), q.den)
}

// overWords returns the numerators of a matrix over Q and their denominator, as
// words if they fit; for reading only.
func overWords(a Matrix[Rat]) (w []int64, d *big.Int, ok bool) {
	if a.q == nil {
		a.q = qmatrixFromRats(a.e)
	}
	return a.q.w, a.q.den, a.q.w != nil
}

// intRows returns the rows of the integer matrix d a and the denominator d.
func (a Matrix[E]) intRows() ([][]*big.Int, *big.Int) {
	q := a.q
	if q == nil {
		q = qmatrixFromRats(any(a.e).([]Rat))
	}
	num := q.num
	if q.w != nil {
		num = bigWords(q.w)
	}
	rows := make([][]*big.Int, a.m)
	for i := range rows {
		rows[i] = num[i*a.n : (i+1)*a.n : (i+1)*a.n]
	}
	return rows, new(big.Int).Set(q.den)
}

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
	if isOne(d) {
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
	var c []*big.Int
	var err error
	w, d, ok := overWords(a)
	if ok {
		c, err = words(ctx, a.n, w)
	} else {
		rows, _ := a.intRows()
		c, err = ints(ctx, rows)
	}
	if err != nil {
		return Poly[Rat]{}, err
	}
	return unscaled(c, d), nil
}

func (Rationals) det(ctx context.Context, a Matrix[Rat]) (Rat, error) {
	var x *big.Int
	var err error
	w, d, ok := overWords(a)
	if ok && isOne(d) {
		if x, ok, err := intmat.SmallDet(ctx, a.n, w); ok {
			return RatFromInt(x), err
		}
	}
	if ok {
		x, err = intmat.DetWords(ctx, a.n, w)
	} else {
		rows, _ := a.intRows()
		x, err = intmat.Det(ctx, rows)
	}
	if err != nil {
		return Rat{}, err
	}
	if isOne(d) {
		return RatFromBigInt(x), nil
	}
	return RatFromFrac(x, new(big.Int).Exp(d, big.NewInt(int64(a.n)), nil)), nil
}

func (Rationals) solve(ctx context.Context, a, b Matrix[Rat]) (Matrix[Rat], error) {
	// (da a) X' = (db b) gives X = X' da / db.
	bi, db := b.intRows()
	w, da, ok := overWords(a)
	if ok {
		num, den, err := intmat.SolveWords(ctx, a.n, w, bi)
		return overCommon(num, den, da, db, a.n, b.n, err)
	}
	ai, _ := a.intRows()
	num, den, err := intmat.Solve(ctx, ai, bi)
	return overCommon(num, den, da, db, a.n, b.n, err)
}

func (Rationals) inverse(ctx context.Context, a Matrix[Rat]) (Matrix[Rat], error) {
	w, d, ok := overWords(a)
	if ok && isOne(d) {
		if num, den, ok, err := intmat.SmallInverse(ctx, a.n, w); ok {
			if err != nil {
				return Matrix[Rat]{}, singularOr(err)
			}
			return Matrix[Rat]{ring: Q, m: a.n, n: a.n, q: &qmatrix{w: num, den: big.NewInt(den)}}, nil
		}
	}
	if ok {
		num, den, err := intmat.InverseWords(ctx, a.n, w)
		return overCommon(num, den, d, big.NewInt(1), a.n, a.n, err)
	}
	ints, _ := a.intRows()
	num, den, err := intmat.Inverse(ctx, ints)
	return overCommon(num, den, d, big.NewInt(1), a.n, a.n, err)
}

func (Rationals) kernel(ctx context.Context, a Matrix[Rat]) ([][]Rat, error) {
	if a.m == 0 { // no equations: every unit vector
		return Echelon[Rat]{Rows: ownMatrix[Rat](Q, 0, a.n, nil)}.Kernel(), nil
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
	if err != nil {
		return Matrix[Rat]{}, singularOr(err)
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
	return Matrix[Rat]{ring: Q, m: m, n: n, q: newQMatrix(entries, new(big.Int).Mul(den, q))}, nil
}

// singularOr returns err, or [ErrSingular] for that of package intmat.
func singularOr(err error) error {
	if errors.Is(err, intmat.ErrSingular) {
		return ErrSingular
	}
	return err
}
