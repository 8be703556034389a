// Command yardstick times one exact operation of the library on one input.
//
//	yardstick OP FILE     one operation; prints
//	                      op=OP input=NAME ns_per_op=MEDIAN detail=...
//	yardstick all DIR     a table of all operations on all inputs of a folder
//
// Inputs: .mat holds "m n" and then m*n integers, row by row; .poly holds a
// degree and then the coefficients from the constant one on; .pair holds two
// such polynomials. Operations:
//
//	.mat   charpoly minpoly det inv solve_dixon solve
//	.poly  factor sqfree roots (certified balls, 64 bits)
//	.pair  gcd mul
//
// solve_dixon solves A x = b with b[i] = (7 i mod 19) - 9. solve is the whole
// job on y' = A y, y(0) = (1, ..., 1): images, factors, roots, proof, and 17
// digits of every state at t = 1/10, 2/10, ..., 1.
//
// A measurement is one call to warm up, then batches of at least 20 ms until
// 0.35 s and 7 batches are done, or 6 s are spent; the figure is the median of
// the batches.
package main

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"
)

func main() {
	if len(os.Args) != 3 {
		fmt.Fprintln(os.Stderr, "usage: yardstick OP FILE, or yardstick all DIR")
		os.Exit(2)
	}
	var err error
	if os.Args[1] == "all" {
		err = table(os.Args[2])
	} else {
		err = one(os.Args[1], os.Args[2])
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "yardstick:", err)
		os.Exit(1)
	}
}

// one measures one operation and prints its line.
func one(op, file string) error {
	r, err := measure(op, file)
	if err != nil {
		return err
	}
	fmt.Printf("op=%s input=%s ns_per_op=%.0f detail=%s;min:%.0f;batches:%d\n",
		op, filepath.Base(file), r.median, r.detail, r.least, r.batches)
	return nil
}

// table measures every operation on every input of a folder.
func table(dir string) error {
	files, err := filepath.Glob(filepath.Join(dir, "*.*"))
	if err != nil {
		return err
	}
	slices.Sort(files)
	fmt.Printf("%-12s %-26s %14s  %s\n", "op", "input", "ns per op", "detail")
	for _, file := range files {
		for _, op := range operationsOn(file) {
			r, err := measure(op, file)
			if err != nil {
				return fmt.Errorf("%s %s: %w", op, filepath.Base(file), err)
			}
			fmt.Printf("%-12s %-26s %14.0f  %s\n", op, filepath.Base(file), r.median, r.detail)
		}
	}
	return nil
}

// figure is the outcome of a measurement, times in nanoseconds.
type figure struct {
	median, least float64
	batches       int
	detail        string
}

// measure prepares an operation, runs it and times it.
func measure(op, file string) (figure, error) {
	prepare, ok := operations[op]
	if !ok || !slices.Contains(operationsOn(file), op) {
		return figure{}, fmt.Errorf("no operation %q on %s; there are %s", op, filepath.Base(file), strings.Join(operationsOn(file), ", "))
	}
	data, err := os.ReadFile(file)
	if err != nil {
		return figure{}, err
	}
	run, err := prepare(context.Background(), data)
	if err != nil {
		return figure{}, err
	}
	detail, err := run()
	if err != nil {
		return figure{}, err
	}
	batch := func(n int) (time.Duration, error) {
		start := time.Now()
		for range n {
			if _, err := run(); err != nil {
				return 0, err
			}
		}
		return time.Since(start), nil
	}
	const least, enough, most, fewest = 20 * time.Millisecond, 350 * time.Millisecond, 6 * time.Second, 7
	size := 1
	for {
		d, err := batch(size)
		if err != nil {
			return figure{}, err
		}
		if d >= least {
			break
		}
		size = max(2*size, min(100*size, int(float64(size)*1.2*float64(least)/float64(d+1))))
	}
	var times []float64
	for spent := time.Duration(0); spent < most && (spent < enough || len(times) < fewest); {
		d, err := batch(size)
		if err != nil {
			return figure{}, err
		}
		spent += d
		times = append(times, float64(d)/float64(size))
	}
	slices.Sort(times)
	return figure{median: times[len(times)/2], least: times[0], batches: len(times), detail: detail()}, nil
}
