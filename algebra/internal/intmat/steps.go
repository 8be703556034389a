package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/word"
)

// wordSteps returns the function giving the next digit of x for |b| < 2^62,
// entries that fit a word and row sums R up to 2^62. Then
// |r_(k+1)| <= |r_k|/p + R stays below 2^63, so the residual is known from
// its value modulo 2^64, where division by p is multiplication by its
// inverse.
func (l *lifter) wordSteps(b []*big.Int) func(context.Context) ([]uint64, error) {
	n, f := len(b), l.field
	r := make([]int64, n)
	for i, x := range b {
		r[i] = x.Int64()
	}
	residue := make([]uint64, n)
	return func(context.Context) ([]uint64, error) {
		for i, v := range r {
			residue[i] = residueOfWord(uint64(v), f.P)
		}
		x := l.inverse.MulVec(residue)
		for i := range r {
			r[i] = int64((uint64(r[i]) - word.Dot(l.a.e[i*n:(i+1)*n], x)) * l.pinv)
		}
		return x, nil
	}
}

// limbSteps is [lifter.wordSteps] with residuals modulo 2^(64 w), in two's
// complement, least limb first, for |b| and row sums below 2^(64 w - 2),
// where w limbs hold all entries.
func (l *lifter) limbSteps(b []*big.Int, w int) func(context.Context) ([]uint64, error) {
	n, f := len(b), l.field
	a := make([]uint64, 0, n*n*w)
	for i := range n {
		for j := range n {
			entry := l.a.at(i, j)
			a = append(a, entry[:min(w, len(entry))]...)
			sign := uint64(int64(entry[len(entry)-1]) >> 63)
			for k := len(entry); k < w; k++ {
				a = append(a, sign)
			}
		}
	}
	r := make([]uint64, 0, n*w)
	for _, x := range b {
		r = appendLimbs(r, x, w)
	}
	residue := make([]uint64, n)
	return func(ctx context.Context) ([]uint64, error) {
		for i := range residue {
			residue[i] = residueOfLimbs(r[i*w:(i+1)*w], f.P)
		}
		x := l.inverse.MulVec(residue)
		for i := range n {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			acc := r[i*w : (i+1)*w]
			row := a[i*n*w : (i+1)*n*w]
			for _, d := range x {
				subMulLimbs(acc, row[:w], d)
				row = row[w:]
			}
			divideLimbs(acc, f.P, l.pinv)
		}
		return x, nil
	}
}
