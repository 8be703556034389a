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

// BenchmarkWordSolve calibrates wordSolveOrder and wordSolveColumns: powers modulo 2^64 beside
// p-adic lifting. The matrices have ones below the diagonal, which keeps the
// determinant in a word.
func BenchmarkWordSolve(b *testing.B) {
	for n := 10; n <= 60; n += 10 {
		a := tridiagonal(n)
		a[0][n-1].SetInt64(3)
		for _, k := range []int{1, 2, 4} {
			s, rhs := squareOf(a), random(rand.New(rand.NewPCG(21, 22)), n, k, 9)
			var cols []uint64
			for j := range k {
				for i := range n {
					cols = append(cols, uint64(rhs[i][j].Int64()))
				}
			}
			b.Run(fmt.Sprintf("powers/n=%d,k=%d", n, k), func(b *testing.B) {
				for b.Loop() {
					if _, _, err := s.wordSolution(b.Context(), cols, k); err != nil {
						b.Fatal(err)
					}
				}
			})
			b.Run(fmt.Sprintf("lifting/n=%d,k=%d", n, k), func(b *testing.B) {
				for b.Loop() {
					l, err := findLifter(b.Context(), s)
					if err != nil {
						b.Fatal(err)
					}
					if _, _, err := l.columns(b.Context(), rhs, k); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// BenchmarkDivisionFree calibrates divisionFreeOrder: Berkowitz's algorithm
// beside images modulo primes, for entries of many words.
func BenchmarkDivisionFree(b *testing.B) {
	for _, n := range []int{2, 4, 8, 16} {
		for _, words := range []int{4, 64, 512} {
			a := random(rand.New(rand.NewPCG(23, 24)), n, n, 1<<61)
			for _, row := range a {
				for _, x := range row {
					x.Lsh(x, uint(64*words)).Sub(x, big.NewInt(1))
				}
			}
			s := squareOf(a)
			name := fmt.Sprintf("n=%d,words=%d", n, words)
			b.Run("berkowitz/"+name, func(b *testing.B) {
				for b.Loop() {
					if _, err := berkowitz(b.Context(), a); err != nil {
						b.Fatal(err)
					}
				}
			})
			b.Run("primes/"+name, func(b *testing.B) {
				for b.Loop() {
					if _, err := s.modularCharPoly(b.Context(), primesBeside(s.charPolyBits())); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
