package intmat

import (
	"bufio"
	"context"
	"fmt"
	"math/big"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// BenchmarkAnchors times the package on the matrices of the directory named
// by INTMAT_ANCHORS: files work/*.mat ("m n", then the entries by rows) and a
// table flint-3.tsv of operation, input and nanoseconds, to which the
// metric "ratio" compares. Without the variable there is nothing to time.
func BenchmarkAnchors(b *testing.B) {
	dir := os.Getenv("INTMAT_ANCHORS")
	if dir == "" {
		return
	}
	table, err := os.Open(filepath.Join(dir, "flint-3.tsv"))
	if err != nil {
		b.Fatal(err)
	}
	defer table.Close()
	for lines := bufio.NewScanner(table); lines.Scan(); {
		var op, input string
		var nanos float64
		_, err := fmt.Sscan(lines.Text(), &op, &input, &nanos)
		if err != nil || !strings.HasSuffix(input, ".mat") {
			continue
		}
		a := readMatrix(b, filepath.Join(dir, "work", input))
		rhs := make([][]*big.Int, len(a))
		for i := range rhs {
			rhs[i] = []*big.Int{big.NewInt(int64(7*i%19 - 9))}
		}
		run, ok := map[string]func(context.Context) error{
			"charpoly":    func(ctx context.Context) error { _, err := CharPoly(ctx, a); return err },
			"det":         func(ctx context.Context) error { _, err := Det(ctx, a); return err },
			"inv":         func(ctx context.Context) error { _, _, err := Inverse(ctx, a); return err },
			"solve_dixon": func(ctx context.Context) error { _, _, err := Solve(ctx, a, rhs); return err },
			"minpoly":     func(ctx context.Context) error { _, err := MinPoly(ctx, a); return err },
		}[op]
		if !ok {
			continue
		}
		b.Run(op+"/"+strings.TrimSuffix(input, ".mat"), func(b *testing.B) {
			for b.Loop() {
				if err := run(b.Context()); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/nanos, "ratio")
		})
	}
}

func readMatrix(b *testing.B, path string) [][]*big.Int {
	file, err := os.Open(path)
	if err != nil {
		b.Fatal(err)
	}
	defer file.Close()
	in := bufio.NewReader(file)
	var m, n int
	if _, err := fmt.Fscan(in, &m, &n); err != nil {
		b.Fatal(err)
	}
	a := zeros(m, n)
	for i := range a {
		for j := range a[i] {
			if _, err := fmt.Fscan(in, a[i][j]); err != nil {
				b.Fatal(err)
			}
		}
	}
	return a
}
