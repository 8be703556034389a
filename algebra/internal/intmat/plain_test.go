package intmat

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/require"
)

// The plain algorithms here are the yardstick for the package.

func ints(rows ...[]int64) [][]*big.Int {
	m := make([][]*big.Int, len(rows))
	for i, row := range rows {
		m[i] = make([]*big.Int, len(row))
		for j, x := range row {
			m[i][j] = big.NewInt(x)
		}
	}
	return m
}

func zeros(rows, cols int) [][]*big.Int {
	m := make([][]*big.Int, rows)
	for i := range m {
		m[i] = make([]*big.Int, cols)
		for j := range m[i] {
			m[i][j] = new(big.Int)
		}
	}
	return m
}

func identity(n int) [][]*big.Int {
	m := zeros(n, n)
	for i := range m {
		m[i][i].SetInt64(1)
	}
	return m
}

func copyOf(a [][]*big.Int) [][]*big.Int {
	m := make([][]*big.Int, len(a))
	for i, row := range a {
		m[i] = make([]*big.Int, len(row))
		for j, x := range row {
			m[i][j] = new(big.Int).Set(x)
		}
	}
	return m
}

func random(r *rand.Rand, rows, cols int, size int64) [][]*big.Int {
	m := zeros(rows, cols)
	for i := range m {
		for j := range m[i] {
			m[i][j].SetInt64(r.Int64N(2*size+1) - size)
		}
	}
	return m
}

// borders are entries at the edges of words, and beyond.
func borders() []*big.Int {
	var out []*big.Int
	for _, e := range []uint{31, 32, 61, 62, 63, 64, 128} {
		for _, d := range []int64{-1, 0, 1} {
			x := new(big.Int).Lsh(big.NewInt(1), e)
			x.Add(x, big.NewInt(d))
			out = append(out, x, new(big.Int).Neg(x))
		}
	}
	return append(out, new(big.Int), big.NewInt(1), big.NewInt(-1))
}

func randomBorders(r *rand.Rand, rows, cols int) [][]*big.Int {
	b := borders()
	m := zeros(rows, cols)
	for i := range m {
		for j := range m[i] {
			m[i][j].Set(b[r.IntN(len(b))])
		}
	}
	return m
}

// tridiagonal returns the n x n matrix with 1, -2, 1 along its diagonals.
func tridiagonal(n int) [][]*big.Int {
	m := zeros(n, n)
	for i := range n {
		m[i][i].SetInt64(-2)
		if i > 0 {
			m[i][i-1].SetInt64(1)
			m[i-1][i].SetInt64(1)
		}
	}
	return m
}

func plainMul(a, b [][]*big.Int) [][]*big.Int {
	cols := 0
	if len(b) > 0 {
		cols = len(b[0])
	}
	m := zeros(len(a), cols)
	t := new(big.Int)
	for i := range a {
		for k, x := range a[i] {
			for j := range cols {
				m[i][j].Add(m[i][j], t.Mul(x, b[k][j]))
			}
		}
	}
	return m
}

// plainCharPoly is the method of Faddeev and Le Verrier: M_1 = I,
// c_(n-k) = -tr(A M_k)/k, M_(k+1) = A M_k + c_(n-k) I.
func plainCharPoly(a [][]*big.Int) []*big.Int {
	n := len(a)
	c := make([]*big.Int, n+1)
	c[n] = big.NewInt(1)
	m := identity(n)
	for k := 1; k <= n; k++ {
		m = plainMul(a, m)
		tr := new(big.Int)
		for i := range m {
			tr.Sub(tr, m[i][i])
		}
		c[n-k] = tr.Quo(tr, big.NewInt(int64(k)))
		for i := range m {
			m[i][i].Add(m[i][i], tr)
		}
	}
	return c
}

// plainDet is the fraction-free elimination of Bareiss.
func plainDet(a [][]*big.Int) *big.Int {
	m, n := copyOf(a), len(a)
	prev, sign := big.NewInt(1), int64(1)
	t := new(big.Int)
	for k := range n {
		p := k
		for p < n && m[p][k].Sign() == 0 {
			p++
		}
		if p == n {
			return new(big.Int)
		}
		if p != k {
			m[p], m[k] = m[k], m[p]
			sign = -sign
		}
		for i := k + 1; i < n; i++ {
			for j := k + 1; j < n; j++ {
				m[i][j].Mul(m[i][j], m[k][k])
				m[i][j].Sub(m[i][j], t.Mul(m[i][k], m[k][j]))
				m[i][j].Quo(m[i][j], prev)
			}
		}
		prev = m[k][k]
	}
	return new(big.Int).Mul(prev, big.NewInt(sign))
}

// plainKernel reduces over the rationals.
func plainKernel(a [][]*big.Int, n int) [][]*big.Int {
	m := make([][]*big.Rat, len(a))
	for i, row := range a {
		m[i] = make([]*big.Rat, n)
		for j, x := range row {
			m[i][j] = new(big.Rat).SetInt(x)
		}
	}
	var pivots []int
	var basis [][]*big.Int
	t := new(big.Rat)
	for c := range n {
		k := len(pivots)
		p := k
		for p < len(m) && m[p][c].Sign() == 0 {
			p++
		}
		if p < len(m) {
			m[p], m[k] = m[k], m[p]
			inv := new(big.Rat).Inv(m[k][c])
			for j := range n {
				m[k][j].Mul(m[k][j], inv)
			}
			for i := range m {
				if i == k {
					continue
				}
				f := new(big.Rat).Set(m[i][c])
				for j := range n {
					m[i][j].Sub(m[i][j], t.Mul(f, m[k][j]))
				}
			}
			pivots = append(pivots, c)
			continue
		}
		den := big.NewInt(1)
		for i := range pivots {
			d := m[i][c].Denom()
			g := new(big.Int).GCD(nil, nil, den, d)
			den.Mul(den, new(big.Int).Quo(d, g))
		}
		v := zeros(1, n)[0]
		v[c].Set(den)
		for i, q := range pivots {
			x := new(big.Rat).Mul(m[i][c], new(big.Rat).SetInt(den))
			v[q].Neg(x.Num())
		}
		basis = append(basis, v)
	}
	return basis
}

// plainMinPoly looks for the least k with A^k dependent on the powers before:
// the first kernel vector of the matrix with columns I, A, A^2, ...
func plainMinPoly(a [][]*big.Int) []*big.Int {
	n := len(a)
	powers := make([][]*big.Int, n*n)
	m := identity(n)
	for range n + 1 {
		for i := range n {
			for j := range n {
				powers[i*n+j] = append(powers[i*n+j], m[i][j])
			}
		}
		m = plainMul(a, m)
	}
	v := plainKernel(powers, n+1)[0]
	for v[len(v)-1].Sign() == 0 {
		v = v[:len(v)-1]
	}
	return v
}

// evalMatrix returns p(A).
func evalMatrix(p []*big.Int, a [][]*big.Int) [][]*big.Int {
	r := zeros(len(a), len(a))
	for i := len(p) - 1; i >= 0; i-- {
		r = plainMul(r, a)
		for j := range r {
			r[j][j].Add(r[j][j], p[i])
		}
	}
	return r
}

func requireSameVec(t *testing.T, want, got []*big.Int) {
	t.Helper()
	require.Len(t, got, len(want))
	for i := range want {
		require.Zero(t, want[i].Cmp(got[i]), "index %d: want %v, got %v", i, want[i], got[i])
	}
}

func requireSame(t *testing.T, want, got [][]*big.Int) {
	t.Helper()
	require.Len(t, got, len(want))
	for i := range want {
		requireSameVec(t, want[i], got[i])
	}
}

// samples are square matrices of many kinds.
func samples() [][][]*big.Int {
	r := rand.New(rand.NewPCG(1, 2))
	out := [][][]*big.Int{
		{},
		ints([]int64{0}),
		ints([]int64{-7}),
		ints([]int64{1, 2}, []int64{2, 4}),
		ints([]int64{0, 1}, []int64{-1, 0}),
		ints([]int64{1, 2, 3}, []int64{4, 5, 6}, []int64{7, 8, 9}),
		identity(6), zeros(7, 7), tridiagonal(12),
	}
	for n := 1; n <= 12; n++ {
		out = append(out, random(r, n, n, 9), random(r, n, n, 1), randomBorders(r, n, n))
		low := random(r, n, max(1, n/2), 3) // rank at most n/2
		out = append(out, plainMul(low, random(r, max(1, n/2), n, 3)))
		sparse := random(r, n, n, 9)
		for i := range sparse {
			for j := range sparse {
				if r.IntN(3) > 0 {
					sparse[i][j].SetInt64(0)
				}
			}
		}
		out = append(out, sparse)
		upper := random(r, n, n, 4)
		for i := range upper {
			for j := range i {
				upper[i][j].SetInt64(0)
			}
		}
		out = append(out, upper)
	}
	for _, x := range borders() {
		out = append(out, [][]*big.Int{{x}}, plainMul(identity(5), ints(
			[]int64{1, 0, 2, 0, 1}, []int64{0, 1, 1, 0, 0}, []int64{1, 1, 1, 1, 1},
			[]int64{0, 0, 1, 2, 0}, []int64{1, 0, 0, 0, 1})))
		last := out[len(out)-1]
		last[2][3], last[4][1] = x, new(big.Int).Neg(x)
	}
	return out
}
