package crosscheck

import (
	"context"
	"flag"
	"fmt"
	"math"
	"math/big"
	"os"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/mat"

	"example.org/closedform/examples/crosscheck/internal/chain10"
	"example.org/closedform/examples/crosscheck/internal/chain3"
	"example.org/closedform/linsys"
)

var updateSource = flag.Bool("source.update", false, "write the generated packages anew")

// cells returns the chain of n cells that exchange heat with their neighbours and,
// at its ends, with the surroundings: y' = A y from 1 in the first cell
// and 0 elsewhere, which takes all modes.
func cells(n int) (*linsys.Model, *mat.SymDense, error) {
	a, y0 := make([][]*big.Rat, n), make([]*big.Rat, n)
	sym := mat.NewSymDense(n, nil)
	for i := range n {
		y0[i] = new(big.Rat)
		a[i] = make([]*big.Rat, n)
		for j := range n {
			a[i][j] = new(big.Rat)
			switch i - j {
			case 0:
				a[i][j].SetInt64(-2)
			case 1, -1:
				a[i][j].SetInt64(1)
			}
			x, _ := a[i][j].Float64()
			sym.SetSym(min(i, j), max(i, j), x)
		}
	}
	y0[0].SetInt64(1)
	m, err := linsys.FromMatrix(nil, a, nil, y0)
	return m, sym, err
}

// generated is the packages written for the chains.
var generated = map[int]func(dst, times []float64){
	3: func(dst, times []float64) {
		for k, t := range times {
			s := chain3.Response(t)
			dst[3*k], dst[3*k+1], dst[3*k+2] = s.Y1, s.Y2, s.Y3
		}
	},
	10: func(dst, times []float64) {
		for k, t := range times {
			s := chain10.Response(t)
			d := dst[10*k:][:10]
			d[0], d[1], d[2], d[3], d[4], d[5], d[6], d[7], d[8], d[9] = s.Y1, s.Y2, s.Y3, s.Y4, s.Y5, s.Y6, s.Y7, s.Y8, s.Y9, s.Y10
		}
	},
}

// The generated packages are what the library writes.
func TestGeneratedPackages(t *testing.T) {
	for n := range generated {
		m, _, err := cells(n)
		require.NoError(t, err)
		r, err := m.ClosedForm(context.Background())
		require.NoError(t, err)
		name := fmt.Sprintf("chain%d", n)
		src, err := r.GoSource(context.Background(), linsys.GoOptions{Package: name})
		require.NoError(t, err)
		test, err := r.GoTest(context.Background(), linsys.GoOptions{Package: name})
		require.NoError(t, err)
		for file, want := range map[string][]byte{"response.go": src, "response_test.go": test} {
			path := "internal/" + name + "/" + file
			if *updateSource {
				require.NoError(t, os.WriteFile(path, want, 0o644))
			}
			got, err := os.ReadFile(path)
			require.NoError(t, err)
			require.Equal(t, string(want), string(got), path)
		}
	}
}

// ways evaluates the chain of n cells at all times in several ways.
func ways(tb testing.TB, n int, times []float64) (names []string, run []func(dst []float64)) {
	m, sym, err := cells(n)
	require.NoError(tb, err)
	r, err := m.ClosedForm(context.Background())
	require.NoError(tb, err)
	compiled, err := r.Float64(context.Background())
	require.NoError(tb, err)
	var eigen mat.EigenSym
	require.True(tb, eigen.Factorize(sym, true))
	rates := eigen.Values(nil)
	var v mat.Dense
	eigen.VectorsTo(&v)
	coefs := make([][]float64, n)
	for i := range coefs {
		coefs[i] = make([]float64, n)
		for j := range n {
			coefs[i][j] = v.At(i, j) * v.At(0, j)
		}
	}
	add := func(name string, f func(dst []float64)) {
		names, run = append(names, name), append(run, f)
	}
	e := make([]float64, n)
	add("hand", func(dst []float64) {
		for k, t := range times {
			for j, r := range rates {
				e[j] = math.Exp(r * t)
			}
			d := dst[k*n:][:n]
			for i, c := range coefs {
				sum := 0.0
				for j, x := range e {
					sum += c[j] * x
				}
				d[i] = sum
			}
		}
	})
	add("compiled", func(dst []float64) { compiled.EvalMany(dst, times) })
	if f := generated[n]; f != nil {
		add("generated", func(dst []float64) { f(dst, times) })
	}
	rows := make([][]float64, n)
	for i := range rows {
		rows[i] = mat.Row(nil, i, sym)
	}
	first := make([]float64, n)
	first[0] = 1
	add("integrator", func(dst []float64) {
		integrate(func(dy, y []float64) {
			for i, row := range rows {
				sum := 0.0
				for j, x := range y {
					sum += row[j] * x
				}
				dy[i] = sum
			}
		}, first, times, 1e-10, func(k int, y []float64) { copy(dst[k*n:], y) })
	})
	start := mat.NewVecDense(n, first)
	add("matrix-exponential", func(dst []float64) {
		var at, exp mat.Dense
		var y mat.VecDense
		for k, t := range times {
			at.Scale(t, sym)
			exp.Exp(&at)
			y.MulVec(&exp, start)
			copy(dst[k*n:], y.RawVector().Data)
		}
	})
	return names, run
}

func timesTo10() []float64 {
	times := make([]float64, 1000)
	for i := range times {
		times[i] = float64(i+1) / 100
	}
	return times
}

// All ways give the same values, as far as they claim.
func TestWaysAgree(t *testing.T) {
	times := timesTo10()
	for _, n := range []int{3, 10, 30} {
		names, run := ways(t, n, times)
		want := make([]float64, n*len(times))
		run[1](want)
		for w, f := range run {
			got := make([]float64, len(want))
			f(got)
			tolerance := 1e-13
			if names[w] == "integrator" {
				tolerance = 1e-9
			}
			require.InDeltaSlice(t, want, got, tolerance, "%s, n = %d", names[w], n)
		}
	}
}

// BenchmarkEvaluation takes all ways in turn at 1000 times in (0, 10] and reports
// the ratios of their shortest times to that of a loop over the same exponentials
// by hand.
func BenchmarkEvaluation(b *testing.B) {
	times := timesTo10()
	for _, n := range []int{3, 10, 30} {
		b.Run(fmt.Sprintf("n=%d", n), func(b *testing.B) {
			names, run := ways(b, n, times)
			dst := make([]float64, n*len(times))
			least := make([]time.Duration, len(run))
			for i := range least {
				least[i] = math.MaxInt64
			}
			for b.Loop() {
				for i, f := range run {
					start := time.Now()
					f(dst)
					least[i] = min(least[i], time.Since(start))
				}
			}
			b.ReportMetric(float64(least[0])/float64(len(times)), "hand-ns")
			for i := 1; i < len(run); i++ {
				b.ReportMetric(float64(least[i])/float64(least[0]), names[i]+"/hand")
			}
		})
	}
}
