package lattice

import (
	"context"
	"math"
	"math/big"
	"math/bits"
)

// wordLimit bounds the entries of the floating-point pass.
const wordLimit = 1 << 60

// guide improves the basis rows in place by a floating-point LLL pass when all
// entries stay below 2^60. It only applies unimodular row operations in exact
// word arithmetic, so the lattice is the same whatever the rounding; how far
// it gets is for the exact algorithm to find out. Inner products are formed
// exactly in two words before they are rounded.
//
// Source: Nguyen and Stehlé, An LLL algorithm with quadratic complexity, SIAM
// J. Comput. 39 (2009), figure 5, with double precision.
func guide(ctx context.Context, rows [][]*big.Int) error {
	n := len(rows)
	if n < 2 {
		return nil
	}
	g := &guided{rows: make([][]int64, n), r: make([][]float64, n), mu: make([][]float64, n)}
	for i, row := range rows {
		g.rows[i] = make([]int64, len(row))
		g.r[i], g.mu[i] = make([]float64, n), make([]float64, n)
		for j, x := range row {
			if x.BitLen() > 60 {
				return nil
			}
			g.rows[i][j] = x.Int64()
		}
	}
	if err := g.run(ctx); err != nil {
		return err
	}
	for i, row := range g.rows {
		for j, x := range row {
			rows[i][j].SetInt64(x)
		}
	}
	return nil
}

// guided is the state of the floating-point pass: the rows, r_ij = mu_ij
// |b*_j|^2 for j < i with r_ii = |b*_i|^2, and mu_ij.
type guided struct {
	rows  [][]int64
	r, mu [][]float64
}

// The constants of the pass are a little sharper than those of the exact
// algorithm, so that the latter usually finds nothing left to do.
const (
	guideDelta = 0.99
	guideEta   = 0.505
)

// run reduces as far as it can; it stops without harm on overflow or when the
// precision does not suffice.
func (g *guided) run(ctx context.Context) error {
	n := len(g.rows)
	g.r[0][0] = wordDot(g.rows[0], g.rows[0])
	for k, steps := 1, 0; k < n; steps++ {
		if err := ctx.Err(); err != nil {
			return err
		}
		if steps > 4000*n || !g.sizeReduce(k) {
			return nil
		}
		// s_j = |b_k|^2 - sum of the first j parts: insert b_k at the first
		// place, from the top, that does not satisfy the Lovász condition.
		s := make([]float64, k+1)
		s[0] = wordDot(g.rows[k], g.rows[k])
		for j := range k {
			s[j+1] = s[j] - g.mu[k][j]*g.r[k][j]
		}
		at := k
		for at > 0 && guideDelta*g.r[at-1][at-1] > s[at-1] {
			at--
		}
		if at == k {
			g.r[k][k] = s[k]
			if s[k] <= 0 {
				return nil
			}
			k++
			continue
		}
		row, r, mu := g.rows[k], g.r[k], g.mu[k]
		copy(g.rows[at+1:k+1], g.rows[at:k])
		copy(g.r[at+1:k+1], g.r[at:k])
		copy(g.mu[at+1:k+1], g.mu[at:k])
		g.rows[at], g.r[at], g.mu[at] = row, r, mu
		g.r[at][at] = s[at]
		k = at + 1
	}
	return nil
}

// sizeReduce makes |mu_kj| small for all j < k, leaving r and mu of row k up
// to date, and reports whether it succeeded.
func (g *guided) sizeReduce(k int) bool {
	x := make([]float64, k)
	for range 60 {
		worst := 0.0
		for j := range k {
			r := wordDot(g.rows[k], g.rows[j])
			for i := range j {
				r -= g.mu[j][i] * g.r[k][i]
			}
			g.r[k][j] = r
			g.mu[k][j] = r / g.r[j][j]
			x[j] = g.mu[k][j]
			worst = max(worst, math.Abs(x[j]))
		}
		if math.IsNaN(worst) || worst > 1<<60 {
			return false
		}
		if worst <= guideEta {
			return true
		}
		for j := k - 1; j >= 0; j-- {
			x[j] = math.RoundToEven(x[j])
			if x[j] == 0 {
				continue
			}
			for i := range j {
				x[i] -= x[j] * g.mu[j][i]
			}
		}
		if !g.combine(k, x) {
			return false
		}
	}
	return false
}

// combine subtracts the sum of x_j b_j from row k, or leaves the row alone and
// returns false when that may leave the word range.
func (g *guided) combine(k int, x []float64) bool {
	row := append([]int64(nil), g.rows[k]...)
	for j := len(x) - 1; j >= 0; j-- {
		if x[j] == 0 {
			continue
		}
		if math.Abs(x[j]) > 1<<60 {
			return false
		}
		c := int64(x[j])
		for i, y := range g.rows[j] {
			hi, lo := mulSigned(c, y)
			if hi != lo>>63 {
				return false
			}
			if lo >= wordLimit || lo <= -wordLimit {
				return false
			}
			row[i] -= lo
			if row[i] >= wordLimit || row[i] <= -wordLimit {
				return false
			}
		}
	}
	g.rows[k] = row
	return true
}

// mulSigned returns the two-word product of x and y.
func mulSigned(x, y int64) (hi, lo int64) {
	h, l := bits.Mul64(uint64(x), uint64(y))
	h -= uint64(x>>63)&uint64(y) + uint64(y>>63)&uint64(x)
	return int64(h), int64(l)
}

// wordDot returns the inner product, summed exactly and rounded once. The
// entries are below 2^60, so up to 64 products fit two words; the sum is
// folded to floating point after each such block.
func wordDot(x, y []int64) float64 {
	var total float64
	for len(x) > 0 {
		n := min(len(x), 64)
		var hi int64
		var lo uint64
		for i, a := range x[:n] {
			h, l := mulSigned(a, y[i])
			var c uint64
			lo, c = bits.Add64(lo, uint64(l), 0)
			hi += h + int64(c)
		}
		total += toFloat(hi, lo)
		x, y = x[n:], y[n:]
	}
	return total
}

// toFloat rounds hi 2^64 + lo; the magnitude is taken first so that small
// negative numbers keep their digits.
func toFloat(hi int64, lo uint64) float64 {
	if hi < 0 {
		var b uint64
		lo, b = bits.Sub64(0, lo, 0)
		h, _ := bits.Sub64(0, uint64(hi), b)
		return -(float64(h)*0x1p64 + float64(lo))
	}
	return float64(hi)*0x1p64 + float64(lo)
}
