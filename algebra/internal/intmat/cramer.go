package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// cramer solves A x = b by images of det A and of det(A) A^(-1) b modulo
// primes that do not divide det A. By Cramer's rule and Hadamard's inequality
// all of these are below 2^bits in absolute value, which says how many primes
// suffice. Candidates are tried after 1, 2, 4, ... primes: from
//
//	A num = den b modulo M,   |A num| + |den b| < M
//
// it follows that A num = den b; and den is not zero, as it is a unit modulo
// every prime. With b the identity nil stands for it. rhsBits bounds the
// entries of b. It returns [ErrSingular] when the product of the primes
// dividing det A exceeds its bound.
//
// Source: S. Cabay, Exact solution of linear equations (the stopping rule);
// J. von zur Gathen, J. Gerhard, Modern Computer Algebra, section 5.5.
func (s *square) cramer(ctx context.Context, b [][]*big.Int, k, bits, rhsBits int) (num [][]*big.Int, den *big.Int, err error) {
	var fields []zp.Field
	var nums, dets [][]uint64
	total := primesFor(bits)
	for used, batch := 0, 1; ; batch = min(len(fields), total-len(fields)) {
		batch = max(batch, 1)
		newNums, newDets := make([][]uint64, batch), make([][]uint64, batch)
		newFields := make([]zp.Field, batch)
		err := forEach(ctx, batch, modularNanos(s.n, batch, 1.5), func(ctx context.Context, i int) (err error) {
			newFields[i] = zp.NewField(prime(used + i))
			newNums[i], newDets[i], err = s.cramerImage(ctx, newFields[i], b)
			return err
		})
		if err != nil {
			return nil, nil, err
		}
		used += batch
		for i, image := range newNums {
			if image != nil {
				fields = append(fields, newFields[i])
				nums, dets = append(nums, image), append(dets, newDets[i])
			}
		}
		if used-len(fields) > bits/primeBits {
			return nil, nil, ErrSingular
		}
		if len(fields) == 0 {
			continue
		}
		var c *crt
		if len(fields) == used {
			c = leadingCRT(used)
		} else {
			c = newCRT(fields)
		}
		num, den, err := s.cramerLift(ctx, c, nums, dets, k, rhsBits, len(fields) >= total)
		if err != nil || num != nil {
			return num, den, err
		}
	}
}

// cramerImage returns det(A) A^(-1) b by rows and det A over f, nil when that
// is zero.
func (s *square) cramerImage(ctx context.Context, f zp.Field, b [][]*big.Int) (num, det []uint64, err error) {
	x, d, err := s.image(ctx, f).InverseDet(ctx)
	if err != nil || x == nil {
		return nil, nil, err
	}
	if b != nil {
		if x, err = x.Mul(ctx, f.MatrixFromBig(b)); err != nil {
			return nil, nil, err
		}
	}
	return x.Scaled(d), []uint64{d}, nil
}

// cramerLift combines images; num is nil when the outcome is not proven, as
// it is when sure is set.
func (s *square) cramerLift(ctx context.Context, c *crt, nums, dets [][]uint64, k, rhsBits int, sure bool) (num [][]*big.Int, den *big.Int, err error) {
	x := make([]uint64, len(c.fields)+1)
	c.lift(x, dets, 0)
	room := primeBits*len(c.fields) - 2 // 2^room < M/2
	if !sure && bitLen(x)+rhsBits > room {
		return nil, nil, nil
	}
	last := newSlab(1, len(x))
	last.set(0, x)
	den = last.values[0]
	out := newSlab(s.n*k, len(x))
	normBits := s.rowSumBits()
	for j := range out.values {
		if j%64 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, nil, err
			}
		}
		c.lift(x, nums, j)
		if !sure && bitLen(x)+normBits > room {
			return nil, nil, nil
		}
		out.set(j, x)
	}
	if den.Sign() < 0 {
		den.Neg(den)
		for _, v := range out.values {
			v.Neg(v)
		}
	}
	cancel(out.values, den)
	return rowsOf(out.values, s.n, k), den, nil
}
