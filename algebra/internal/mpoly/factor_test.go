package mpoly

import (
	"context"
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// parse reads sums of terms like 3*x^2*y in the variables named by letters.
func parse(t testing.TB, names, s string) Poly {
	t.Helper()
	n := len(names)
	sum := Poly{n: n}
	for i := 0; i < len(s); {
		sign := int64(1)
		for i < len(s) && (s[i] == ' ' || s[i] == '+' || s[i] == '-') {
			if s[i] == '-' {
				sign = -sign
			}
			i++
		}
		term := ConstantWord(n, sign)
		for i < len(s) && s[i] != ' ' && s[i] != '+' && s[i] != '-' {
			if s[i] == '*' {
				i++
				continue
			}
			j := i
			if s[i] >= '0' && s[i] <= '9' {
				for j < len(s) && s[j] >= '0' && s[j] <= '9' {
					j++
				}
				c, _ := new(big.Int).SetString(s[i:j], 10)
				term = term.MulInt(c)
				i = j
				continue
			}
			v := -1
			for k := range names {
				if names[k] == s[i] {
					v = k
				}
			}
			require.GreaterOrEqual(t, v, 0, "unknown letter %q in %q", s[i], s)
			i++
			e := 1
			if i < len(s) && s[i] == '^' {
				e, i = 0, i+1
				for i < len(s) && s[i] >= '0' && s[i] <= '9' {
					e, i = 10*e+int(s[i]-'0'), i+1
				}
			}
			term = term.Mul(Variable(n, v).Pow(e))
		}
		sum = sum.Add(term)
	}
	return sum
}

// checkFactors checks everything about a factorisation but irreducibility.
func checkFactors(t testing.TB, p Poly) []Factor {
	t.Helper()
	content, factors, err := FactorZ(context.Background(), p)
	require.NoError(t, err)
	product := Constant(p.Vars(), content)
	for i, g := range factors {
		require.False(t, g.P.IsConstant())
		require.Equal(t, p.Vars(), g.P.Vars())
		require.Positive(t, g.P.LeadSign())
		require.Zero(t, g.P.Content().Cmp(big.NewInt(1)))
		require.Positive(t, g.Mult)
		for range g.Mult {
			product = product.Mul(g.P)
		}
		if i > 0 {
			a, b := factors[i-1].P, g.P
			require.True(t, a.TotalDegree() < b.TotalDegree() || a.TotalDegree() == b.TotalDegree() &&
				(a.Len() < b.Len() || a.Len() == b.Len() && a.Compare(b) < 0))
		}
	}
	require.True(t, product.Equal(p), "the product of the factors is another polynomial")
	return factors
}

func TestFactorSmall(t *testing.T) {
	const names = "xyzw"
	for _, c := range []struct {
		p     string
		count int
	}{
		{"x*y + z", 1},
		{"x*y + x*z", 2},
		{"x^2 - y^2", 2},
		{"x^2 - 2*y^2", 1},
		{"x^2 + 2*x*y + y^2 - 1", 2},
		{"x^4 - 2*x^2*y - 2*x^2*z + y^2 - 2*y*z + z^2", 1},
		{"x^4 + y^4", 1},
		{"x^4 + 4*y^4", 2},
		{"x^3 + y^3 + z^3 - 3*x*y*z", 2},
		{"x^2*y^2 - z^2*w^2", 2},
		{"x^2*y + x*y^2 + x^2*z + x*z^2 + y^2*z + y*z^2 + 2*x*y*z", 3},
	} {
		f := checkFactors(t, parse(t, names, c.p))
		count := 0
		for _, g := range f {
			count += g.Mult
		}
		require.Equal(t, c.count, count, c.p)
	}
}
