package lattice

import (
	"context"
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// rng is SplitMix64 with a fixed seed for each test.
type rng uint64

func (s *rng) next() uint64 {
	*s += 0x9E3779B97F4A7C15
	z := uint64(*s)
	z = (z ^ z>>30) * 0xBF58476D1CE4E5B9
	z = (z ^ z>>27) * 0x94D049BB133111EB
	return z ^ z>>31
}

// entry returns an integer of at most b bits and random sign.
func (s *rng) entry(b uint) *big.Int {
	x := new(big.Int)
	for range b/64 + 1 {
		x.Lsh(x, 64).Or(x, new(big.Int).SetUint64(s.next()))
	}
	x.Rsh(x, uint(x.BitLen())-min(b, uint(x.BitLen())))
	if s.next()&1 == 1 {
		x.Neg(x)
	}
	return x
}

// requireReduced checks the LLL conditions with rational Gram-Schmidt.
func requireReduced(t *testing.T, r *Reduced) {
	t.Helper()
	n := len(r.Basis)
	star := make([][]*big.Rat, n)
	norm := make([]*big.Rat, n)
	half, prev := big.NewRat(1, 2), new(big.Rat)
	det := big.NewRat(1, 1)
	require.Zero(t, r.Det[0].Cmp(big.NewInt(1)))
	for i, row := range r.Basis {
		star[i] = make([]*big.Rat, len(row))
		for c, x := range row {
			star[i][c] = new(big.Rat).SetInt(x)
		}
		last := new(big.Rat)
		for j := range i {
			mu := new(big.Rat)
			for c, x := range row {
				mu.Add(mu, new(big.Rat).Mul(new(big.Rat).SetInt(x), star[j][c]))
			}
			mu.Quo(mu, norm[j])
			require.LessOrEqual(t, new(big.Rat).Abs(mu).Cmp(half), 0, "mu %d %d", i, j)
			for c := range row {
				star[i][c].Sub(star[i][c], new(big.Rat).Mul(mu, star[j][c]))
			}
			last = mu
		}
		norm[i] = new(big.Rat)
		for _, x := range star[i] {
			norm[i].Add(norm[i], new(big.Rat).Mul(x, x))
		}
		if i > 0 {
			need := new(big.Rat).Sub(big.NewRat(3, 4), new(big.Rat).Mul(last, last))
			require.GreaterOrEqual(t, norm[i].Cmp(need.Mul(need, prev)), 0, "Lovász %d", i)
		}
		prev = norm[i]
		det.Mul(det, norm[i])
		require.Zero(t, det.Cmp(new(big.Rat).SetInt(r.Det[i+1])), "Gram determinant %d", i+1)
	}
}

// gramDet returns the determinant of the Gram matrix by rational elimination.
func gramDet(rows [][]*big.Int) *big.Rat {
	n := len(rows)
	m := make([][]*big.Rat, n)
	for i := range m {
		m[i] = make([]*big.Rat, n)
		for j := range m[i] {
			m[i][j] = new(big.Rat).SetInt(dot(rows[i], rows[j]))
		}
	}
	d := big.NewRat(1, 1)
	for i := range m { // positive definite: no pivoting needed
		d.Mul(d, m[i][i])
		for k := i + 1; k < n; k++ {
			q := new(big.Rat).Quo(m[k][i], m[i][i])
			for j := i; j < n; j++ {
				m[k][j].Sub(m[k][j], new(big.Rat).Mul(q, m[i][j]))
			}
		}
	}
	return d
}

// requireInLattice solves x basis = v and fails unless x is integral.
func requireInLattice(t *testing.T, basis [][]*big.Int, v []*big.Int) {
	t.Helper()
	n := len(basis)
	m := make([][]*big.Rat, n) // Gram matrix, augmented with <b_i, v>
	for i := range m {
		m[i] = make([]*big.Rat, n+1)
		for j := range n {
			m[i][j] = new(big.Rat).SetInt(dot(basis[i], basis[j]))
		}
		m[i][n] = new(big.Rat).SetInt(dot(basis[i], v))
	}
	for i := range m {
		for k := range m {
			if k == i {
				continue
			}
			q := new(big.Rat).Quo(m[k][i], m[i][i])
			for j := i; j <= n; j++ {
				m[k][j].Sub(m[k][j], new(big.Rat).Mul(q, m[i][j]))
			}
		}
	}
	sum := make([]*big.Int, len(v))
	for c := range sum {
		sum[c] = new(big.Int)
	}
	for i := range m {
		x := new(big.Rat).Quo(m[i][n], m[i][i])
		require.True(t, x.IsInt(), "coordinate %d is %v", i, x)
		for c := range sum {
			sum[c].Add(sum[c], new(big.Int).Mul(x.Num(), basis[i][c]))
		}
	}
	for c := range sum {
		require.Zero(t, sum[c].Cmp(v[c]))
	}
}

func clone(rows [][]*big.Int) [][]*big.Int {
	out := make([][]*big.Int, len(rows))
	for i, r := range rows {
		for _, x := range r {
			out[i] = append(out[i], new(big.Int).Set(x))
		}
	}
	return out
}

func TestReduceIsProvenAndSpansTheSameLattice(t *testing.T) {
	s := rng(1)
	for _, c := range []struct {
		n, cols int
		bits    uint
	}{{1, 1, 3}, {1, 4, 200}, {2, 2, 10}, {3, 5, 58}, {6, 6, 30}, {6, 7, 64}, {5, 5, 300}, {12, 13, 40}} {
		in := make([][]*big.Int, c.n)
		for i := range in {
			for range c.cols {
				in[i] = append(in[i], s.entry(c.bits))
			}
		}
		orig := clone(in)
		r, err := Reduce(context.Background(), in)
		require.NoError(t, err)
		for i := range in {
			for j := range in[i] {
				require.Zero(t, in[i][j].Cmp(orig[i][j]), "argument changed")
			}
		}
		requireReduced(t, r)
		require.Zero(t, gramDet(in).Cmp(gramDet(r.Basis)))
		for _, v := range r.Basis {
			requireInLattice(t, in, v)
		}
	}
}

func TestReduceWordBorders(t *testing.T) {
	for _, b := range []uint{31, 59, 60, 61, 62, 63, 64} {
		for d := int64(-1); d <= 1; d++ {
			x := new(big.Int).Lsh(big.NewInt(1), b)
			x.Add(x, big.NewInt(d))
			in := [][]*big.Int{
				{x, big.NewInt(0), big.NewInt(1)},
				{new(big.Int).Neg(x), big.NewInt(1), big.NewInt(1)},
				{big.NewInt(1), big.NewInt(-1), new(big.Int).Sub(x, big.NewInt(3))},
			}
			r, err := Reduce(context.Background(), in)
			require.NoError(t, err)
			requireReduced(t, r)
			require.Zero(t, gramDet(in).Cmp(gramDet(r.Basis)))
		}
	}
}

// TestReduceFindsKnapsackRelation plants a short vector in a knapsack lattice.
func TestReduceFindsKnapsackRelation(t *testing.T) {
	s := rng(7)
	const n = 24
	in := make([][]*big.Int, n)
	last := new(big.Int)
	for i := range in {
		in[i] = make([]*big.Int, n+1)
		for j := range in[i] {
			in[i][j] = new(big.Int)
		}
		in[i][i].SetInt64(1)
		in[i][n] = s.entry(50)
		if i%2 == 0 && i < n-2 {
			last.Sub(last, in[i][n])
		}
	}
	in[n-2][n] = last // so that the vectors 0, 2, ..., n-2 sum to a 0/1 vector
	in[n-1][n].Abs(in[n-1][n])
	r, err := Reduce(context.Background(), in)
	require.NoError(t, err)
	requireReduced(t, r)
	k := r.Within(big.NewInt(n / 2))
	require.Positive(t, k)
	planted := make([]*big.Int, n+1)
	for j := range planted {
		planted[j] = new(big.Int)
		if j%2 == 0 && j < n {
			planted[j].SetInt64(1)
		}
	}
	requireInLattice(t, r.Basis[:k], planted)
	// The bound below the shortest vector leaves nothing.
	require.Zero(t, r.Within(big.NewInt(0)))
}

func TestGuideAgreesWithExact(t *testing.T) {
	s := rng(3)
	for range 20 {
		in := make([][]*big.Int, 5)
		for i := range in {
			for range 5 {
				in[i] = append(in[i], s.entry(20))
			}
		}
		a, err := reduceExact(context.Background(), clone(in))
		require.NoError(t, err)
		b, err := Reduce(context.Background(), in)
		require.NoError(t, err)
		requireReduced(t, a)
		requireReduced(t, b)
		require.Zero(t, a.Det[5].Cmp(b.Det[5]), "lattice determinant")
	}
}

func TestReduceRefusesDependentRows(t *testing.T) {
	row := []*big.Int{big.NewInt(2), big.NewInt(-3)}
	require.Panics(t, func() {
		_, _ = Reduce(context.Background(), [][]*big.Int{row, row})
	})
}

func TestReduceHonoursCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	s := rng(5)
	in := make([][]*big.Int, 10)
	for i := range in {
		for range 10 {
			in[i] = append(in[i], s.entry(100))
		}
	}
	_, err := Reduce(ctx, in)
	require.ErrorIs(t, err, context.Canceled)
}

func TestWordDotIsExactlyRounded(t *testing.T) {
	s := rng(11)
	for _, n := range []int{1, 2, 63, 64, 65, 130} {
		x, y := make([]int64, n), make([]int64, n)
		want := new(big.Int)
		for i := range x {
			x[i], y[i] = s.entry(59).Int64(), s.entry(59).Int64()
			want.Add(want, new(big.Int).Mul(big.NewInt(x[i]), big.NewInt(y[i])))
		}
		w, _ := new(big.Float).SetInt(want).Float64()
		require.InEpsilon(t, w, wordDot(x, y), 1e-14)
	}
	require.Equal(t, -1.0, wordDot([]int64{1}, []int64{-1}))
	require.Equal(t, 0.0, wordDot([]int64{1 << 59, 1 << 59}, []int64{1 << 59, -1 << 59}))
}

func TestCombineStaysWithinWords(t *testing.T) {
	rows := func() [][]int64 { return [][]int64{{1 << 59, 1}, {3, -(1 << 59)}, {5, 7}} }
	g := &guided{rows: rows()}
	require.True(t, g.combine(2, []float64{1, -1}))
	require.Equal(t, []int64{5 - 1<<59 + 3, 7 - 1 - 1<<59}, g.rows[2])
	// A multiplier, a product and a sum beyond the limit leave the row alone.
	for _, x := range [][]float64{{0x1p61, 0}, {0, 0x1p30}, {0x1p20, 0}, {-2, 0}, {1, 2}} {
		g = &guided{rows: rows()}
		require.False(t, g.combine(2, x), "%v", x)
		require.Equal(t, rows(), g.rows)
	}
}

// TestReduceLargeKnapsack has more rows than double precision would carry by
// textbook Gram-Schmidt.
func TestReduceLargeKnapsack(t *testing.T) {
	s := rng(17)
	const n = 50
	in := make([][]*big.Int, n)
	for i := range in {
		in[i] = make([]*big.Int, n+1)
		for j := range in[i] {
			in[i][j] = new(big.Int)
		}
		in[i][i].SetInt64(1)
		in[i][n] = s.entry(58)
	}
	r, err := Reduce(context.Background(), in)
	require.NoError(t, err)
	for i := 1; i < n; i++ { // the Lovász condition implies |b*_i|^2 >= |b*_(i-1)|^2 / 2
		a := new(big.Int).Mul(r.Det[i+1], r.Det[i-1])
		b := new(big.Int).Mul(r.Det[i], r.Det[i])
		require.GreaterOrEqual(t, a.Lsh(a, 1).Cmp(b), 0)
	}
	want := big.NewInt(1) // det(I + c c^T) = 1 + |c|^2
	for i := range in {
		want.Add(want, new(big.Int).Mul(in[i][n], in[i][n]))
	}
	require.Zero(t, want.Cmp(r.Det[n]))
}
