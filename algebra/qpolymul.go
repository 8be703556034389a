package algebra

import (
	"math/big"
	"math/bits"

	"example.org/closedform/algebra/internal/intpoly"
)

// mul returns p q: on words while the products and their sums fit one or two,
// by the integer product otherwise.
func (p *qpoly) mul(q *qpoly) *qpoly {
	if p == nil || q == nil {
		return nil
	}
	den := mulDen(p.den, q.den)
	if p.w != nil && q.w != nil {
		short := min(len(p.w), len(q.w))
		if size := maxBits(p.w) + maxBits(q.w) + bits.Len(uint(short)); size <= 63 && short <= wordProductMost {
			return mulWords(p.w, q.w).over(den)
		} else if size <= 126 && short <= wideProductMost {
			return newQBig(mulWide(p.w, q.w), den)
		}
	}
	return newQBig(intpoly.Mul(p.ints(), q.ints()), den)
}

// Lengths of the shorter factor up to which the schoolbook kernels on words are
// used; see BenchmarkPolyMul.
var (
	wordProductMost = 400
	wideProductMost = 100
)

// mulWords returns the product by the schoolbook method, the sums fitting a word.
func mulWords(a, b []int64) *qpoly {
	if len(a) > len(b) {
		a, b = b, a
	}
	p := zeroWords(len(a) + len(b) - 1)
	for i, x := range a {
		if x == 0 {
			continue
		}
		row := p.w[i : i+len(b)]
		for j, y := range b {
			row[j] += x * y
		}
	}
	return p
}

// zeroWords returns n zero coefficients to be filled in; a short polynomial is
// one allocation.
func zeroWords(n int) *qpoly {
	if n <= 12 {
		p := &struct {
			q   qpoly
			buf [12]int64
		}{}
		p.q.w = p.buf[:n:n]
		return &p.q
	}
	return &qpoly{w: make([]int64, n)}
}

// over returns p/den for a p whose leading coefficient is not zero.
func (p *qpoly) over(den *big.Int) *qpoly {
	if den == nil {
		return p
	}
	return newQ(p.w, den)
}

// mulWide is mulWords with sums of two words. The values of the result share a
// backing array, each limited to its own part.
func mulWide(a, b []int64) intpoly.Poly {
	n := len(a) + len(b) - 1
	vals := make([]big.Int, n)
	words := make([]big.Word, 2*n)
	out := make(intpoly.Poly, n)
	for k := range out {
		var hi, lo uint64
		for i := max(0, k-len(b)+1); i <= min(k, len(a)-1); i++ {
			x, y := a[i], b[k-i]
			h, l := bits.Mul64(uint64(x), uint64(y))
			// The unsigned product exceeds the signed one by 2^64 times the other
			// factor for each negative one.
			h -= uint64(x>>63)&uint64(y) + uint64(y>>63)&uint64(x)
			var carry uint64
			lo, carry = bits.Add64(lo, l, 0)
			hi, _ = bits.Add64(hi, h, carry)
		}
		negative := int64(hi) < 0
		if negative {
			var borrow uint64
			lo, borrow = bits.Sub64(0, lo, 0)
			hi, _ = bits.Sub64(0, hi, borrow)
		}
		slot := words[2*k : 2*k+2 : 2*k+2]
		slot[0], slot[1] = big.Word(lo), big.Word(hi)
		vals[k].SetBits(slot)
		if negative {
			vals[k].Neg(&vals[k])
		}
		out[k] = &vals[k]
	}
	return out
}
