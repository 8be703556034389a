package algebra_test

import (
	"errors"
	"fmt"

	"example.org/closedform/algebra"
)

// Arithmetic in Q(sqrt 2): elements are bare polynomials in the root, and every
// operation goes through the field.
func ExampleExtension() {
	k := algebra.NewExtension(algebra.Q, algebra.PolyFromInts(-2, 0, 1), "r")
	x := k.Add(k.One(), k.Root()) // 1 + sqrt 2
	y, err := k.Inv(x)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(k.Text(k.Mul(x, x)))
	fmt.Println(k.Text(y))
	fmt.Println(k.Text(k.Mul(x, y)))

	// Polynomials and matrices take the field like any other.
	p := algebra.NewPoly(k, k.Neg(k.Root()), k.Zero(), k.One())
	fmt.Println(p)
	// Output:
	// (2*r + 3)
	// (r - 1)
	// 1
	// s^2 + (-r)
}

// A broken promise of irreducibility is found out when an inverse meets it.
func ExampleReducibleError() {
	k := algebra.NewExtension(algebra.Q, algebra.PolyFromInts(-4, 0, 1), "r")
	_, err := k.Inv(k.Add(k.Root(), k.FromInt(2)))
	var reducible *algebra.ReducibleError
	if errors.As(err, &reducible) {
		fmt.Println(reducible.Factor, "divides", reducible.Modulus)
	}
	// Output:
	// s + 2 divides s^2 - 4
}
