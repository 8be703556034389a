package intmat

import (
	"context"
	"math/big"
	"slices"

	"example.org/closedform/algebra/internal/zp"
)

// Det returns the determinant of a square A, 1 when A is empty.
//
// A determinant that fits one or two signed words by Hadamard's bound is that
// modulo 2^64 or 2^128. Others are products over the diagonal blocks of the
// block triangular form; each block of order m is eliminated modulo 2^64 and
// enough 62-bit primes, O(m^3) word operations for each. The contents of rows
// longer than words are split off before; the determinant of a companion
// matrix is read off.
//
// Source: J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
// Algorithm 5.10 (small primes determinant).
func Det(ctx context.Context, a [][]*big.Int) (*big.Int, error) {
	a, contents, err := rowContents(ctx, a)
	if err != nil {
		return nil, err
	}
	det, err := squareOf(a).det(ctx)
	if err != nil {
		return nil, err
	}
	for _, c := range contents {
		det.Mul(det, c)
	}
	return det, nil
}

// DetWords is [Det] for the matrix of order n with rows a.
func DetWords(ctx context.Context, n int, a []int64) (*big.Int, error) {
	return squareOfWords(n, a).det(ctx)
}

// SmallDet is [DetWords] with the answer in a word; ok is false when Hadamard's
// bound does not promise that it fits.
func SmallDet(ctx context.Context, n int, a []int64) (det int64, ok bool, err error) {
	s := squareOfWords(n, a)
	if s.hadamardBits() > 63 {
		return 0, false, nil
	}
	d, err := zp.DetWordInPlace(ctx, n, s.e)
	return int64(d), true, err
}

func (s *square) det(ctx context.Context) (*big.Int, error) {
	if p := s.companionPoly(); p != nil {
		if s.n%2 == 1 {
			p[0].Neg(p[0])
		}
		return p[0], ctx.Err()
	}
	bits := s.hadamardBits()
	if bits <= 63 {
		d, err := zp.DetWordInPlace(ctx, s.n, slices.Clone(s.low()))
		if err != nil {
			return nil, err
		}
		return big.NewInt(int64(d)), ctx.Err()
	}
	if bits <= 127 {
		lo, hi, err := zp.DetWide(ctx, s.n, s.w, s.e)
		if err != nil {
			return nil, err
		}
		out := newSlab(1, 2)
		out.set(0, []uint64{lo, hi})
		return out.values[0], ctx.Err()
	}
	blocks := diagonalBlocks(s)
	if len(blocks) == 1 {
		return s.blockDet(ctx, bits)
	}
	det := big.NewInt(1)
	for _, index := range blocks {
		block := s.sub(index)
		d, err := block.blockDet(ctx, block.hadamardBits())
		if err != nil {
			return nil, err
		}
		if det.Mul(det, d); d.Sign() == 0 {
			return det, nil
		}
	}
	return det, ctx.Err()
}

// blockDet is det without the split into blocks, for a determinant of at
// most the given number of bits.
func (s *square) blockDet(ctx context.Context, bits int) (*big.Int, error) {
	count := primesBeside(bits)
	if preferDivisionFree(s.n, count) {
		p, err := berkowitz(ctx, s.bigs())
		if err != nil {
			return nil, err
		}
		if s.n%2 == 1 {
			p[0].Neg(p[0])
		}
		return p[0], nil
	}
	c := leadingCRT(count)
	images := make([][]uint64, count+1) // the last one is that modulo 2^64
	err := forEach(ctx, count+1, modularNanos(s.n, count, 0.4), func(ctx context.Context, i int) error {
		var d uint64
		var err error
		if i == count {
			d, err = zp.DetWordInPlace(ctx, s.n, slices.Clone(s.low()))
		} else {
			d, err = s.image(ctx, c.fields[i]).Det(ctx)
		}
		images[i] = []uint64{d}
		return err
	})
	if err != nil {
		return nil, err
	}
	out, err := c.liftAll(ctx, images[:count], images[count])
	if err != nil {
		return nil, err
	}
	return out[0], nil
}
