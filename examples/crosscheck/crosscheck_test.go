package crosscheck

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"math/rand"
	"testing"

	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/mat"

	"example.org/closedform/linsys"
)

// system is a model y' = A y + f, y(0) = y0 in both kinds of numbers.
type system struct {
	a  [][]*big.Rat
	y0 []*big.Rat
}

// randomRat returns a small fraction; 0, 1 and -1 are frequent.
func randomRat(r *rand.Rand) *big.Rat {
	switch r.Intn(5) {
	case 0:
		return big.NewRat(int64(r.Intn(3)-1), 1)
	case 1:
		return big.NewRat(int64(r.Intn(19)-9), int64(1+r.Intn(9)))
	}
	return big.NewRat(int64(r.Intn(13)-6), int64(1+r.Intn(3)))
}

func randomSystem(r *rand.Rand, n int) system {
	s := system{a: make([][]*big.Rat, n), y0: make([]*big.Rat, n)}
	for i := range n {
		s.y0[i] = randomRat(r)
		s.a[i] = make([]*big.Rat, n)
		for j := range n {
			s.a[i][j] = randomRat(r)
		}
	}
	return s
}

// conjugate replaces A by P A P^-1 with P a product of elementary integer
// matrices: the structure of the eigenvalues stays.
func (s system) conjugate(r *rand.Rand) {
	n := len(s.a)
	for range 3 * n {
		i, j := r.Intn(n), r.Intn(n)
		if i == j {
			continue
		}
		c := big.NewRat(int64(r.Intn(3)-1), 1)
		for k := range n { // row i += c row j
			s.a[i][k] = new(big.Rat).Add(s.a[i][k], new(big.Rat).Mul(c, s.a[j][k]))
		}
		for k := range n { // column j -= c column i
			s.a[k][j] = new(big.Rat).Sub(s.a[k][j], new(big.Rat).Mul(c, s.a[k][i]))
		}
	}
}

func float(x *big.Rat) float64 {
	f, _ := x.Float64()
	return f
}

// generators are the inputs 1, t, sin(2t), cos(2t), exp(-t/2) as the states of
// a system of their own, with matrix and initial values.
var (
	generatorText    = []string{"1", "t", "sin(2*t)", "cos(2*t)", "exp(-t/2)"}
	generatorInitial = []float64{1, 0, 0, 1, 1}
	generatorMatrix  = [][]float64{
		{0, 0, 0, 0, 0},
		{1, 0, 0, 0, 0},
		{0, 0, 0, 2, 0},
		{0, 0, -2, 0, 0},
		{0, 0, 0, 0, -0.5},
	}
)

// response returns y(t) by the exponential of the matrix of the system together
// with the generators of its inputs; b holds the coefficients of the inputs.
func (s system) response(b [][]float64, t float64) []float64 {
	n, g := len(s.a), len(generatorText)
	m := mat.NewDense(n+g, n+g, nil)
	v := mat.NewVecDense(n+g, nil)
	for i := range n {
		v.SetVec(i, float(s.y0[i]))
		for j := range n {
			m.Set(i, j, t*float(s.a[i][j]))
		}
		for j := range g {
			m.Set(i, n+j, t*b[i][j])
		}
	}
	for i := range g {
		v.SetVec(n+i, generatorInitial[i])
		for j := range g {
			m.Set(n+i, n+j, t*generatorMatrix[i][j])
		}
	}
	var e mat.Dense
	e.Exp(m)
	var y mat.VecDense
	y.MulVec(&e, v)
	out := make([]float64, n)
	for i := range out {
		out[i] = y.AtVec(i)
	}
	return out
}

// closedForm derives the response of the system with the inputs.
func (s system) closedForm(t *testing.T, f []string) *linsys.Response {
	t.Helper()
	m, err := linsys.FromMatrix(nil, s.a, f, s.y0)
	require.NoError(t, err)
	r, err := m.ClosedForm(context.Background())
	require.NoError(t, err)
	require.True(t, r.Proof().Holds())
	return r
}

// eigenvalues returns the eigenvalues with their multiplicities.
func eigenvalues(t *testing.T, r *linsys.Response) []complex128 {
	t.Helper()
	var out []complex128
	for _, m := range r.Modes() {
		for _, x := range m.Roots {
			z, err := x.Enclose(context.Background(), 80)
			require.NoError(t, err)
			re, _ := z.Re.Mid().Float64()
			im, _ := z.Im.Mid().Float64()
			for range m.Multiplicity {
				out = append(out, complex(re, im))
			}
		}
	}
	return out
}

// farthest pairs each of a with the nearest of b that is left, and returns the
// greatest distance.
func farthest(a, b []complex128) float64 {
	left := append([]complex128(nil), b...)
	worst := 0.0
	for _, x := range a {
		best := 0
		for i, y := range left {
			if cmplx.Abs(x-y) < cmplx.Abs(x-left[best]) {
				best = i
			}
		}
		worst = math.Max(worst, cmplx.Abs(x-left[best]))
		left = append(left[:best], left[best+1:]...)
	}
	return worst
}

func TestEigenvaluesAgree(t *testing.T) {
	r := rand.New(rand.NewSource(1))
	for n := 2; n <= 8; n++ {
		for range 6 {
			s := randomSystem(r, n)
			dense := mat.NewDense(n, n, nil)
			for i := range n {
				for j := range n {
					dense.Set(i, j, float(s.a[i][j]))
				}
			}
			var eigen mat.Eigen
			require.True(t, eigen.Factorize(dense, mat.EigenNone))
			exact := eigenvalues(t, s.closedForm(t, nil))
			require.Len(t, exact, n)
			// A k-fold eigenvalue is found to the k-th root of the rounding error.
			most := 1
			for _, m := range s.closedForm(t, nil).Modes() {
				most = max(most, m.Multiplicity)
			}
			tolerance := 100 * math.Pow(1e-14, 1/float64(most)) * (1 + mat.Norm(dense, 2))
			require.Less(t, farthest(exact, eigen.Values(nil)), tolerance, "n=%d, A=%v", n, s.a)
		}
	}
}

// checkResponse compares the response with the exponential of the matrix at
// some times.
func checkResponse(t *testing.T, s system, b [][]float64, f []string) {
	t.Helper()
	r := s.closedForm(t, f)
	for _, at := range []*big.Rat{new(big.Rat), big.NewRat(1, 7), big.NewRat(1, 1), big.NewRat(5, 2)} {
		want := s.response(b, float(at))
		scale := 1.0
		for _, y := range want {
			scale = math.Max(scale, math.Abs(y))
		}
		for i, name := range r.States() {
			ball, err := r.State(name).Enclose(context.Background(), at, 128)
			require.NoError(t, err)
			got, _ := ball.Mid().Float64()
			require.InDelta(t, want[i], got, 1e-9*scale, "%s at %s, A=%v, f=%v", name, at.RatString(), s.a, f)
		}
	}
}

// inputs returns random combinations of the generators, as coefficients and as
// text, with zeros among them.
func inputs(r *rand.Rand, n int) ([][]float64, []string) {
	b, f := make([][]float64, n), make([]string, n)
	for i := range n {
		b[i] = make([]float64, len(generatorText))
		f[i] = "0"
		for j, g := range generatorText {
			if r.Intn(2) == 0 {
				c := randomRat(r)
				b[i][j] = float(c)
				f[i] += fmt.Sprintf(" + (%s)*%s", c.RatString(), g)
			}
		}
	}
	return b, f
}

func noInputs(n int) [][]float64 {
	b := make([][]float64, n)
	for i := range b {
		b[i] = make([]float64, len(generatorText))
	}
	return b
}

func TestTransientAgreesWithMatrixExponential(t *testing.T) {
	r := rand.New(rand.NewSource(2))
	for n := 2; n <= 8; n++ {
		for range 4 {
			checkResponse(t, randomSystem(r, n), noInputs(n), nil)
		}
	}
}

func TestForcedResponseAgreesWithAugmentedExponential(t *testing.T) {
	r := rand.New(rand.NewSource(3))
	for n := 2; n <= 6; n++ {
		for range 4 {
			b, f := inputs(r, n)
			checkResponse(t, randomSystem(r, n), b, f)
		}
	}
}

// Jordan blocks for the rates of the generators, conjugated by integer
// matrices: defective and in resonance with every input.
func TestDefectiveResonantResponses(t *testing.T) {
	r := rand.New(rand.NewSource(4))
	rates := []*big.Rat{new(big.Rat), big.NewRat(-1, 2), big.NewRat(-2, 1)}
	for range 12 {
		n := 2 + r.Intn(4)
		s := randomSystem(r, n)
		rate := rates[r.Intn(len(rates))]
		for i := range n {
			for j := range n {
				s.a[i][j] = new(big.Rat)
			}
			s.a[i][i].Set(rate)
			if i > 0 && r.Intn(4) > 0 {
				s.a[i][i-1].SetInt64(1)
			}
		}
		s.conjugate(r)
		b, f := inputs(r, n)
		checkResponse(t, s, b, f)
	}
	// An undamped oscillator driven at its own frequency.
	s := system{
		a:  [][]*big.Rat{{new(big.Rat), big.NewRat(2, 1)}, {big.NewRat(-2, 1), new(big.Rat)}},
		y0: []*big.Rat{new(big.Rat), big.NewRat(1, 1)},
	}
	checkResponse(t, s, [][]float64{{0, 0, 0, 0, 0}, {0, 1, 3, -1, 0}}, []string{"0", "t + 3*sin(2*t) - cos(2*t)"})
}
