package expr

import (
	"errors"
	"testing"
)

func TestInParallel(t *testing.T) {
	for _, n := range []int{0, 1, parallelLeast - 1, parallelLeast, 101} {
		done := make([]int, n)
		if err := InParallel(n, func(i int) error { done[i]++; return nil }); err != nil {
			t.Fatal(err)
		}
		for i, d := range done {
			if d != 1 {
				t.Fatalf("n = %d: piece %d was done %d times", n, i, d)
			}
		}
	}
	first, second := errors.New("first"), errors.New("second")
	err := InParallel(100, func(i int) error {
		switch i {
		case 31:
			return first
		case 40:
			return second
		}
		return nil
	})
	if err != first {
		t.Fatalf("got %v, want the error of the least index", err)
	}
}
