package algebra_test

import (
	"context"
	"fmt"

	"example.org/closedform/algebra"
)

// Coefficients are given from the constant one on.
func ExamplePoly() {
	p := algebra.PolyFromInts(-2, 0, 1) // s^2 - 2
	q := algebra.NewPoly(algebra.Q, algebra.NewRat(1, 2), algebra.RatFromInt(1))
	fmt.Println(p.Mul(q))
	quo, rem := p.QuoRem(algebra.Q, q)
	fmt.Printf("%v = (%v) (%v) + %v\n", p, quo, q, rem)
	fmt.Println(q.Translate(algebra.RatFromInt(3)).Format("t"))
	// Output:
	// s^3 + 1/2*s^2 - 2*s - 1
	// s^2 - 2 = (s - 1/2) (s + 1/2) + -7/4
	// t + 7/2
}

// The factors are monic; the leading coefficient is left to the caller.
func ExampleRationals_FactorPoly() {
	p := algebra.PolyFromInts(-4, 0, 0, 0, -3, 0, 0, 0, 1).Mul(algebra.PolyFromInts(3, 6))
	factors, err := algebra.Q.FactorPoly(context.Background(), p)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(p.Lead())
	for _, f := range factors {
		fmt.Printf("(%v)^%d\n", f.P, f.Mult)
	}
	// Output:
	// 6
	// (s + 1/2)^1
	// (s^2 - 2)^1
	// (s^2 + 2)^1
	// (s^4 + 1)^1
}

func ExampleGCD() {
	p := algebra.PolyFromInts(-1, 0, 0, 0, 1) // s^4 - 1
	q := algebra.PolyFromInts(2, 3, 1)        // (s + 1)(s + 2)
	g, u, v := algebra.ExtendedGCD(algebra.Q, p, q)
	fmt.Println(algebra.GCD(algebra.Q, p, q))
	fmt.Println(u.Mul(p).Add(v.Mul(q)).Equal(g))
	// Output:
	// s + 1
	// true
}

func ExampleSquareFree() {
	p := algebra.PolyFromInts(1, 1).Pow(3).Mul(algebra.PolyFromInts(-2, 0, 1))
	for _, f := range algebra.SquareFree(algebra.Q, p) {
		fmt.Printf("(%v)^%d\n", f.P, f.Mult)
	}
	// Output:
	// (s^2 - 2)^1
	// (s + 1)^3
}
