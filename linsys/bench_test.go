package linsys_test

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"

	"example.org/closedform/linsys"
)

// benchMatrix returns a dense matrix with entries in [-9, 9], a chain of
// identical members, or a compartment model with random exchange rates.
func benchMatrix(kind string, n int) [][]*big.Rat {
	r := rand.New(rand.NewPCG(5, uint64(n)))
	a := make([][]*big.Rat, n)
	for i := range a {
		a[i] = make([]*big.Rat, n)
		for j := range a[i] {
			x := int64(0)
			switch {
			case kind == "dense":
				x = r.Int64N(19) - 9
			case kind == "chain" && i == j:
				x = -2
			case kind == "chain" && (i == j+1 || j == i+1):
				x = 1
			case kind == "compartments" && i != j && r.IntN(4) == 0:
				x = 1 + r.Int64N(900)
			}
			a[i][j] = big.NewRat(x, 1)
		}
	}
	if kind == "compartments" {
		for j := range a {
			out := big.NewRat(-(1 + r.Int64N(99)), 1)
			for i := range a {
				if i != j {
					out.Sub(out, a[i][j])
				}
			}
			a[j][j] = out
		}
	}
	return a
}

// BenchmarkWholeJob takes y' = A y, y(0) = (1, ..., 1) to its proven closed form
// and 17 digits of all states at ten times.
func BenchmarkWholeJob(b *testing.B) {
	ctx := context.Background()
	for _, kind := range []string{"dense", "compartments", "chain"} {
		for _, n := range []int{2, 5, 10, 20, 30, 40} {
			ones := make([]*big.Rat, n)
			for i := range ones {
				ones[i] = big.NewRat(1, 1)
			}
			m, err := linsys.FromMatrix(nil, benchMatrix(kind, n), nil, ones)
			if err != nil {
				b.Fatal(err)
			}
			b.Run(fmt.Sprintf("kind=%s/n=%d", kind, n), func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					r, err := m.ClosedForm(ctx)
					if err != nil {
						b.Fatal(err)
					}
					for i := range 10 {
						if _, err := r.At(ctx, big.NewRat(int64(i+1), 10), 17); err != nil {
							b.Fatal(err)
						}
					}
				}
			})
		}
	}
}
