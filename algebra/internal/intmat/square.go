package intmat

import (
	"context"
	"fmt"
	"math/big"
	"math/bits"

	"example.org/closedform/algebra/internal/zp"
)

// square is a square matrix of order n whose entries are w limbs each, in
// two's complement, least limb first, row after row. Machine words are the
// case w = 1.
type square struct {
	n, w int
	e    []uint64
}

// squareOf returns a copy of a, which must be square, with the least w that
// holds all entries.
func squareOf(a [][]*big.Int) *square {
	s := &square{n: mustBeSquare(a), w: 1}
	s.e = make([]uint64, 0, s.n*s.n)
	for _, row := range a {
		for _, x := range row {
			if !x.IsInt64() {
				return wideSquareOf(a)
			}
			s.e = append(s.e, uint64(x.Int64()))
		}
	}
	return s
}

// wideSquareOf is squareOf for any entries.
func wideSquareOf(a [][]*big.Int) *square {
	s := &square{n: len(a), w: limbsFor(a)}
	s.e = make([]uint64, 0, s.n*s.n*s.w)
	for _, row := range a {
		for _, x := range row {
			s.e = appendLimbs(s.e, x, s.w)
		}
	}
	return s
}

// squareOfWords returns a copy of the matrix of order n with rows a.
func squareOfWords(n int, a []int64) *square {
	if len(a) != n*n {
		panic(fmt.Sprintf("intmat: %d entries for a matrix of order %d", len(a), n))
	}
	s := &square{n: n, w: 1, e: make([]uint64, n*n)}
	for i, x := range a {
		s.e[i] = uint64(x)
	}
	return s
}

// limbsFor returns the least number of limbs, at least 1, that holds every
// entry of a with its sign.
func limbsFor(a [][]*big.Int) int {
	w := 1
	for _, row := range a {
		for _, x := range row {
			if w > 1 || !x.IsInt64() {
				w = max(w, x.BitLen()/64+1)
			}
		}
	}
	return w
}

// at returns the limbs of an entry, shared with s.
func (s *square) at(i, j int) []uint64 {
	k := (i*s.n + j) * s.w
	return s.e[k : k+s.w]
}

func (s *square) isZero(i, j int) bool {
	if s.w == 1 {
		return s.e[i*s.n+j] == 0
	}
	for _, x := range s.at(i, j) {
		if x != 0 {
			return false
		}
	}
	return true
}

// sub returns a copy of the rows and columns with the given indices.
func (s *square) sub(index []int) *square {
	t := &square{n: len(index), w: s.w, e: make([]uint64, 0, len(index)*len(index)*s.w)}
	for _, i := range index {
		for _, j := range index {
			t.e = append(t.e, s.at(i, j)...)
		}
	}
	return t
}

// low returns the entries modulo 2^64.
func (s *square) low() []uint64 {
	if s.w == 1 {
		return s.e
	}
	v := make([]uint64, s.n*s.n)
	for i := range v {
		v[i] = s.e[i*s.w]
	}
	return v
}

// image returns s over f. It stops early, with zeros for the rest, when ctx is
// done: whatever the caller does next reports that.
func (s *square) image(ctx context.Context, f zp.Field) *zp.Matrix {
	m := f.NewMatrix(s.n, s.n)
	for i := range s.n {
		if ctx.Err() != nil {
			break
		}
		row := m.Row(i)
		if s.w == 1 {
			for j, x := range s.e[i*s.n : (i+1)*s.n] {
				row[j] = residueOfWord(x, f.P)
			}
			continue
		}
		for j := range row {
			row[j] = residueOfLimbs(s.at(i, j), f.P)
		}
	}
	return m
}

// bitLen returns the bits of the absolute value of the two's complement x.
// It may be one too many when x is negative.
func bitLen(x []uint64) int {
	top := len(x) - 1
	sign := -(x[top] >> 63)
	for top > 0 && x[top] == sign {
		top--
	}
	if sign != 0 && x[top] == 0 { // a power of 2^64
		return 64*(top+1) + 1
	}
	if sign != 0 {
		return 64*top + bits.Len64(-x[top]) // |x| <= -x[top] 2^(64 top)
	}
	return 64*top + bits.Len64(x[top])
}

// bigs returns the entries as integers.
func (s *square) bigs() [][]*big.Int {
	out := newSlab(s.n*s.n, s.w)
	for i := range out.values {
		out.set(i, s.e[i*s.w:(i+1)*s.w])
	}
	return rowsOf(out.values, s.n, s.n)
}
