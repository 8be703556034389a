package intmat

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"
)

func BenchmarkDense(b *testing.B) {
	for _, n := range []int{10, 20, 30, 50, 80} {
		benchmarkAll(b, fmt.Sprintf("n=%d", n), random(rand.New(rand.NewPCG(19, 20)), n, n, 9))
	}
}

func BenchmarkTridiagonal(b *testing.B) {
	benchmarkAll(b, "n=100", tridiagonal(100))
}

// benchmarkAll times the package on a nonsingular matrix; Kernel gets all
// rows but the last, Solve one right-hand side.
func benchmarkAll(b *testing.B, name string, a [][]*big.Int) {
	rhs := random(rand.New(rand.NewPCG(21, 22)), len(a), 1, 9)
	for _, task := range []struct {
		name string
		run  func(context.Context) error
	}{
		{"CharPoly", func(ctx context.Context) error { _, err := CharPoly(ctx, a); return err }},
		{"Det", func(ctx context.Context) error { _, err := Det(ctx, a); return err }},
		{"Solve", func(ctx context.Context) error { _, _, err := Solve(ctx, a, rhs); return err }},
		{"Inverse", func(ctx context.Context) error { _, _, err := Inverse(ctx, a); return err }},
		{"Kernel", func(ctx context.Context) error { _, err := Kernel(ctx, a[:len(a)-1]); return err }},
		{"MinPoly", func(ctx context.Context) error { _, err := MinPoly(ctx, a); return err }},
	} {
		b.Run(task.name+"/"+name, func(b *testing.B) {
			for b.Loop() {
				if err := task.run(b.Context()); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
