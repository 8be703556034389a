package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// CharPoly returns the coefficients of det(s I - A) for a square A, that of
// s^i at index i, monic of length n+1.
//
// The diagonal blocks of the block triangular form ([diagonalBlocks]) are
// treated one by one and their polynomials multiplied; that of a companion
// matrix is read off. Another block of order m takes its Hessenberg form
// modulo 2^64 and as many 62-bit primes as the proven bound on the
// coefficients asks for beside that: O(m^3) word operations for each of about
// m log2(1 + r) / 62 moduli, where r is the mean row norm. When all
// coefficients fit a signed word there are no primes and no blocks.
//
// Source: H. Cohen, A Course in Computational Algebraic Number Theory,
// section 2.2.4, with the bound derived at charPolyBits.
func CharPoly(ctx context.Context, a [][]*big.Int) ([]*big.Int, error) {
	return squareOf(a).charPoly(ctx)
}

// CharPolyWords is [CharPoly] for the matrix of order n with rows a.
func CharPolyWords(ctx context.Context, n int, a []int64) ([]*big.Int, error) {
	return squareOfWords(n, a).charPoly(ctx)
}

func (s *square) charPoly(ctx context.Context) ([]*big.Int, error) {
	if p := s.companionPoly(); p != nil {
		return p, ctx.Err()
	}
	bits := s.charPolyBits()
	if bits <= 63 {
		return s.wordCharPoly(ctx)
	}
	blocks := diagonalBlocks(s)
	if len(blocks) == 1 {
		return s.blockCharPoly(ctx, bits)
	}
	poly := []*big.Int{big.NewInt(1)}
	for _, index := range blocks {
		block := s.sub(index)
		factor, err := block.blockCharPoly(ctx, block.charPolyBits())
		if err != nil {
			return nil, err
		}
		if poly, err = mulPoly(ctx, poly, factor); err != nil {
			return nil, err
		}
	}
	return poly, ctx.Err()
}

// wordCharPoly is charPoly for coefficients in [-2^63, 2^63).
func (s *square) wordCharPoly(ctx context.Context) ([]*big.Int, error) {
	words, err := zp.CharPolyWord(ctx, s.n, s.low())
	if err != nil {
		return nil, err
	}
	return bigWords(words), ctx.Err()
}

// blockCharPoly is charPoly without the split into blocks, for coefficients
// of at most the given number of bits.
func (s *square) blockCharPoly(ctx context.Context, bits int) ([]*big.Int, error) {
	if p := s.companionPoly(); p != nil { // a block may be one
		return p, ctx.Err()
	}
	count := primesBeside(bits)
	if preferDivisionFree(s.n, count) {
		return berkowitz(ctx, s.bigs())
	}
	return s.modularCharPoly(ctx, count)
}

// modularCharPoly combines images modulo 2^64 and count primes.
func (s *square) modularCharPoly(ctx context.Context, count int) ([]*big.Int, error) {
	c := leadingCRT(count)
	images := make([][]uint64, count+1) // the last one is that modulo 2^64
	err := forEach(ctx, count+1, modularNanos(s.n, count, 0.9), func(ctx context.Context, i int) (err error) {
		if i == count {
			images[i], err = zp.CharPolyWord(ctx, s.n, s.low())
			return err
		}
		images[i], err = s.image(ctx, c.fields[i]).CharPoly(ctx)
		return err
	})
	if err != nil {
		return nil, err
	}
	return c.liftAll(ctx, images[:count], images[count])
}

// divisionFreeOrder bounds the order of matrices whose long entries go the
// division-free way, and divisionFreeWeight is the n^4 that one prime
// outweighs; BenchmarkDivisionFree compares.
var (
	divisionFreeOrder  = 16
	divisionFreeWeight = 64
)

// preferDivisionFree tells whether the O(n^4) products of the division-free
// way cost less than images modulo count primes.
func preferDivisionFree(n, count int) bool {
	return n <= divisionFreeOrder && count*divisionFreeWeight > n*n*n*n
}

// modularNanos estimates the time of an O(n^3) task modulo count primes.
func modularNanos(n, count int, perEntry float64) float64 {
	return perEntry * float64(n) * float64(n) * float64(n) * float64(count)
}

// mulPoly returns the product of two polynomials, constant terms first.
func mulPoly(ctx context.Context, p, q []*big.Int) ([]*big.Int, error) {
	prod := make([]*big.Int, len(p)+len(q)-1)
	for i := range prod {
		prod[i] = new(big.Int)
	}
	t := new(big.Int)
	for j, y := range q {
		if y.Sign() == 0 {
			continue
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		for i, x := range p {
			prod[i+j].Add(prod[i+j], t.Mul(x, y))
		}
	}
	return prod, nil
}
