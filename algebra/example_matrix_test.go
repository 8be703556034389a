package algebra_test

import (
	"context"
	"errors"
	"fmt"

	"example.org/closedform/algebra"
)

// The characteristic polynomial of a matrix, which the matrix satisfies.
func ExampleRationals_CharPoly() {
	ctx := context.Background()
	r := func(n int64) algebra.Rat { return algebra.RatFromInt(n) }
	a := algebra.NewMatrix(algebra.Q, 3, 3,
		r(-2), r(1), r(0),
		r(1), r(-2), r(1),
		r(0), r(1), r(-2),
	)
	p, err := algebra.Q.CharPoly(ctx, a)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(p)
	value, _ := a.EvalPoly(context.Background(), p)
	fmt.Println(value.IsZero())
	// Output:
	// s^3 + 6*s^2 + 10*s + 4
	// true
}

func ExampleSolve() {
	ctx := context.Background()
	half := algebra.NewRat(1, 2)
	one, two := algebra.RatFromInt(1), algebra.RatFromInt(2)
	a := algebra.NewMatrix(algebra.Q, 2, 2, one, half, two, half)
	b := algebra.NewMatrix(algebra.Q, 2, 1, one, one)
	x, err := algebra.Solve(ctx, algebra.Q, a, b)
	fmt.Println(x, err)

	_, err = algebra.Inverse(ctx, algebra.Q, a.Sub(a))
	fmt.Println(errors.Is(err, algebra.ErrSingular))
	// Output:
	// [[0], [2]] <nil>
	// true
}

func ExampleKernel() {
	ctx := context.Background()
	r := func(n int64) algebra.Rat { return algebra.RatFromInt(n) }
	a := algebra.NewMatrix(algebra.Q, 2, 3, r(1), r(2), r(3), r(4), r(5), r(6))
	basis, err := algebra.Kernel(ctx, algebra.Q, a)
	fmt.Println(basis[0], err)
	// Output:
	// [1 -2 1] <nil>
}
