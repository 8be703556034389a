package mpoly

import (
	"context"
	"fmt"
	"math/big"
	"sync/atomic"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
)

// signedSums returns the product of x_0 + e_1 x_1 + ... + e_(n-1) x_(n-1) over
// all signs e, a polynomial in the squares.
func signedSums(n int) Poly {
	p := ConstantWord(n, 1)
	for signs := range 1 << (n - 1) {
		q := Variable(n, 0)
		for i := 1; i < n; i++ {
			if signs>>(i-1)&1 == 0 {
				q = q.Add(Variable(n, i))
			} else {
				q = q.Sub(Variable(n, i))
			}
		}
		p = p.Mul(q)
	}
	return p
}

// signedRoots returns the product of x_0 + e_1 sqrt(x_1) + ... over all signs,
// the polynomial of Swinnerton-Dyer with parameters, which is irreducible.
func signedRoots(n int) Poly {
	p := signedSums(n)
	var terms []Term
	for t := range p.Terms() {
		for i := 1; i < n; i++ {
			t.Exp[i] /= 2
		}
		terms = append(terms, t)
	}
	return FromTerms(n, terms)
}

// differences returns prod (x_i - x_j), i < j, the determinant of Vandermonde.
func differences(n int) Poly {
	p := ConstantWord(n, 1)
	for i := range n {
		for j := i + 1; j < n; j++ {
			p = p.Mul(Variable(n, i).Sub(Variable(n, j)))
		}
	}
	return p
}

func TestFactorNamed(t *testing.T) {
	for n := 2; n <= 4; n++ {
		f := checkFactors(t, signedSums(n))
		require.Len(t, f, 1<<(n-1))
		for _, g := range f {
			require.Equal(t, 1, g.P.TotalDegree())
		}
	}
	for n := 2; n <= 4; n++ {
		require.Len(t, checkFactors(t, signedRoots(n)), 1, "Swinnerton-Dyer with %d parameters", n-1)
	}
	for n := 4; n <= 6; n++ {
		require.Len(t, checkFactors(t, differences(n)), n*(n-1)/2)
	}
}

// divisors returns the number of divisors.
func divisors(n int) int {
	c := 0
	for d := 1; d <= n; d++ {
		if n%d == 0 {
			c++
		}
	}
	return c
}

func TestFactorBinomials(t *testing.T) {
	x, y, z := Variable(3, 0), Variable(3, 1), Variable(3, 2)
	for n := 1; n <= 24; n++ {
		// The homogeneous cyclotomic polynomials of order d | n.
		require.Len(t, checkFactors(t, x.Pow(n).Sub(y.Pow(n))), divisors(n), "x^%d - y^%d", n, n)
		// Not homogeneous, with three variables.
		p := x.Pow(n).Sub(y.Pow(n).Mul(z.Pow(2 * n)))
		require.Len(t, checkFactors(t, p), divisors(n), "x^%d - y^%d z^%d", n, n, 2*n)
	}
	require.Len(t, checkFactors(t, x.Pow(8).Sub(y.Pow(8).MulInt(big.NewInt(16)))), 4) // 2 is a square modulo x^4+1
	for _, n := range []int{3, 5, 7, 12} {
		require.Len(t, checkFactors(t, x.Pow(n).Sub(y.Mul(z))), 1)
	}
}

// TestFactorSplitImages takes irreducible polynomials many or all of whose
// images at small points split.
func TestFactorSplitImages(t *testing.T) {
	const names = "xyzw"
	for _, c := range []string{
		"x^4 + y^4",
		"x^4 - 10*x^2*y^2 + y^4", // sqrt 2 + sqrt 3
		"x^4 + y^4 + z^4 - 2*x^2*y^2 - 2*y^2*z^2 + w", // Heron's formula, spoilt by w
		"x^2 - y^2 - z^2 - w^2",                       // a square minus a sum of three
		"x^2 - y^3 + z^2",
		"x^6 - 2*x^3*y^3 - 3*x^3*z^3 + y^6 + 5*z^6 + 1",
		"x^2*y^2 + x^2*z^2 + y^2*z^2 - x*y*z*w",
		"x^2 - y*z", "x^3 - y^2*z", "x^4 - y*z^3",
		"x^2 - w^3 + w",
	} {
		f := checkFactors(t, parse(t, names, c))
		require.Len(t, f, 1, c)
		require.Equal(t, 1, f[0].Mult, c)
	}
}

// TestFactorLeadingCoefficients takes leading coefficients in every variable
// that factor, share factors and vanish at small points.
func TestFactorLeadingCoefficients(t *testing.T) {
	const names = "xyz"
	vanishing := ConstantWord(3, 1)
	for k := int64(-9); k <= 9; k++ {
		vanishing = vanishing.Mul(Variable(3, 1).Sub(ConstantWord(3, k)))
	}
	x, z := Variable(3, 0), Variable(3, 2)
	g := vanishing.Mul(x.Mul(x)).Add(z.Mul(z)).Add(ConstantWord(3, 7))
	h := vanishing.Mul(x.Mul(x).Mul(z)).Add(z.Pow(3)).Sub(x)
	require.Len(t, checkFactors(t, g.Mul(h)), 2)
	for _, c := range [][]string{
		{"6*y*x^2 + z*x^2 + 3*z^2 + y", "10*y*x^2 + 15*z*y*x^2 + z^3 + 2*y^2", "4*z*y^2*x^3 + z^2*y + 1"},
		{"y^2*x^2 + z*x + 1", "y*z*x^2 + y*x + 1", "y*z^2*x^2 + z + 5*y^2"},
		{"12*x^2 + 5*y^2 + z^2", "18*x^2 + 7*y^2 + z", "27*x^2*y^2 + z^2 - 2"},
		{"x^2*y + x*y^2 + 1", "x^2*z + x*z^2 + 1", "y^2*z + y*z^2 + 1"},
		{"y*x^2 - z^2*x^2 + y^2 + 1", "y*x^2 - z^2*x^2 + z + 1"},
	} {
		p := ConstantWord(3, 1)
		for i, s := range c {
			p = p.Mul(parse(t, names, s).Pow(1 + i%2))
		}
		require.Len(t, checkFactors(t, p), len(c), "%v", c)
	}
}

// TestFactorLargeCoefficients needs several primes.
func TestFactorLargeCoefficients(t *testing.T) {
	for _, size := range []int{31, 60, 61, 62, 63, 64, 128, 500} {
		c := new(big.Int).Lsh(big.NewInt(1), uint(size))
		x, y, z := Variable(3, 0), Variable(3, 1), Variable(3, 2)
		one := ConstantWord(3, 1)
		g := x.Pow(2).MulInt(c).Add(y.Mul(z)).Add(one)
		h := x.Pow(2).Mul(y).Sub(z.Mul(z).MulInt(c.Sub(c, big.NewInt(1)))).Add(x)
		k := y.Pow(2).Mul(z).Sub(z.Mul(x.Pow(2)).MulInt(c.Add(c, big.NewInt(2)))).Sub(y)
		f := checkFactors(t, g.Mul(h).Mul(h).Mul(k).MulInt(big.NewInt(-30)))
		require.Len(t, f, 3, fmt.Sprint(size))
	}
}

func TestFactorTrivial(t *testing.T) {
	for _, c := range []int64{0, 1, -1, 6, -1 << 62} {
		content, f, err := FactorZ(context.Background(), ConstantWord(3, c))
		require.NoError(t, err)
		require.Empty(t, f)
		require.Zero(t, content.Cmp(big.NewInt(c)))
	}
	p := Variable(3, 2).Pow(3).Mul(Variable(3, 0)).MulInt(big.NewInt(-5))
	require.Len(t, checkFactors(t, p), 2)
	require.Len(t, checkFactors(t, Variable(3, 1).Pow(2).Sub(ConstantWord(3, 1))), 2)
}

func TestFactorCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, _, err := FactorZ(ctx, Variable(2, 0))
	require.ErrorIs(t, err, context.Canceled)
	_, err = SquareFree(ctx, Variable(2, 0))
	require.ErrorIs(t, err, context.Canceled)

	p := signedSums(6) // takes a second
	ctx, cancel = context.WithTimeout(context.Background(), 20*time.Millisecond)
	defer cancel()
	start := time.Now()
	_, _, err = FactorZ(ctx, p)
	require.ErrorIs(t, err, context.DeadlineExceeded)
	require.Less(t, time.Since(start), 5*time.Second)
}

// countdown is a context that is cancelled when it has been asked often enough.
type countdown struct {
	context.Context
	left atomic.Int64
}

func (c *countdown) Err() error {
	if c.left.Add(-1) < 0 {
		return context.Canceled
	}
	return nil
}

// TestFactorCancelledAnywhere stops at all stages.
func TestFactorCancelledAnywhere(t *testing.T) {
	x, y, z := Variable(3, 0), Variable(3, 1), Variable(3, 2)
	one := ConstantWord(3, 1)
	for name, p := range map[string]Poly{
		"content": differences(4),
		"lift":    signedSums(4),
		"lead":    y.Mul(x.Pow(2)).Add(z).Add(one).Pow(2).Mul(z.Mul(x.Pow(2)).Add(y.Pow(3)).Sub(one)),
		"long":    x.Pow(2).Sub(y.Pow(150).Mul(z.Pow(2))).Add(one).Mul(x.Pow(2).Add(y.Pow(149).Mul(z)).Add(x)),
	} {
		finished := false
		for k := int64(0); !finished; k += 1 + k/16 {
			ctx := &countdown{Context: context.Background()}
			ctx.left.Store(k)
			_, f, err := FactorZ(ctx, p)
			finished = err == nil
			if !finished {
				require.ErrorIs(t, err, context.Canceled, name)
				require.Empty(t, f)
			}
			ctx.left.Store(k)
			_, err = SquareFree(ctx, p)
			require.True(t, err == nil || err == context.Canceled, name)
		}
	}
}

// TestFactorManyVariables has more variables than a word has bits.
func TestFactorManyVariables(t *testing.T) {
	const n = 70
	sum, mix := ConstantWord(n, 1), ConstantWord(n, 3)
	for i := range n / 2 {
		sum = sum.Add(Variable(n, 2*i).Mul(Variable(n, 2*i+1).Pow(1 + i%3)))
		mix = mix.Sub(Variable(n, i).Pow(2).Mul(Variable(n, n-1-i)))
	}
	// The content of the last factors in x_0 has x_64 only, and the other way round.
	low, high := Variable(n, 64).Add(ConstantWord(n, 1)), Variable(n, 0).Sub(ConstantWord(n, 5))
	require.Len(t, checkFactors(t, sum), 1)
	require.Len(t, checkFactors(t, low.Mul(high)), 2)
	require.Len(t, checkFactors(t, sum.Mul(mix)), 2)
	require.Len(t, checkFactors(t, mix.Mul(low).Mul(high)), 3)
	vars := make([]int, n)
	for i := range vars {
		vars[i] = i
	}
	require.True(t, newProbe(mix, vars).primitive(0))
	require.False(t, newProbe(mix.Mul(low), vars).primitive(0))
}

// TestFactorHighDegree is about degrees far beyond the typical ones.
func TestFactorHighDegree(t *testing.T) {
	x, y, one := Variable(2, 0), Variable(2, 1), ConstantWord(2, 1)
	p := x.Mul(x).Add(y.Pow(300)).Add(one)
	q := x.Mul(x).Mul(y).Sub(y.Pow(299)).Add(x)
	require.Len(t, checkFactors(t, p.Mul(q)), 2)
	require.Len(t, checkFactors(t, x.Pow(2).Sub(y.Pow(20001)).Add(one)), 1)
}
