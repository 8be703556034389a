package algebra_test

import (
	"context"
	"fmt"

	"example.org/closedform/algebra"
)

// Rational functions in named variables are kept in lowest terms, so that zero
// is recognised: (k^2 - 1)/(k - 1) - k - 1 = 0.
func ExampleFunctionField() {
	f := algebra.NewFunctionField([]string{"k"}, nil)
	k := f.Variable(0)
	one := f.One()
	inv, _ := f.Inv(f.Sub(k, one))
	q := f.Mul(f.Sub(f.Mul(k, k), one), inv)
	fmt.Println(f.Text(q), f.IsZero(f.Sub(f.Sub(q, k), one)))
	// Output:
	// k + 1 true
}

// The characteristic polynomial of a matrix with symbols factors over them.
func ExampleFunctionField_FactorPoly() {
	f := algebra.NewFunctionField([]string{"a", "b"}, nil)
	a, b := f.Variable(0), f.Variable(1)
	m := algebra.NewMatrix[algebra.Fraction](f, 2, 2, a, b, b, a)
	p, _ := f.CharPoly(context.Background(), m)
	factors, _ := f.FactorPoly(context.Background(), p)
	for _, g := range factors {
		fmt.Println(g.P)
	}
	// Output:
	// s - a - b
	// s - a + b
}

// Two square roots need one primitive element; a third that they express needs
// none.
func ExampleFunctionField_Adjoin() {
	ctx := context.Background()
	f := algebra.NewFunctionField(nil, nil)
	adjoinRoot := func(n int64) algebra.Fraction {
		p := algebra.NewPoly[algebra.Fraction](f, f.FromInt(-n), f.Zero(), f.One())
		near := func(prec uint) algebra.Ball { return f.Enclose(f.FromInt(n), prec).Sqrt(prec) }
		adj, err := f.Adjoin(ctx, p, near, 16)
		if err != nil {
			panic(err)
		}
		f = adj.Field
		return adj.New
	}
	for _, n := range []int64{2, 3, 6} {
		root := adjoinRoot(n)
		fmt.Println(n, f.Degree(), f.Text(f.Mul(root, root)))
	}
	// Output:
	// 2 2 2
	// 3 4 3
	// 6 4 6
}
