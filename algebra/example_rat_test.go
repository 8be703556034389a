package algebra_test

import (
	"fmt"

	"example.org/closedform/algebra"
)

// Decimals are read exactly and stay exact.
func ExampleRat() {
	rate, err := algebra.ParseRat("0.35")
	if err != nil {
		fmt.Println(err)
		return
	}
	volume := algebra.NewRat(22, 7)
	fmt.Println(rate, "*", volume, "=", rate.Mul(volume))
	fmt.Println("2/3 - 0.35 =", algebra.NewRat(2, 3).Sub(rate))
	fmt.Println("2^-70 =", algebra.RatFromInt(2).Pow(-70))
	// Output:
	// 7/20 * 22/7 = 11/10
	// 2/3 - 0.35 = 19/60
	// 2^-70 = 1/1180591620717411303424
}

func ExampleParseRat() {
	for _, s := range []string{"-3", "6/4", "1.5e-3", "1/0"} {
		x, err := algebra.ParseRat(s)
		fmt.Println(x, err)
	}
	// Output:
	// -3 <nil>
	// 3/2 <nil>
	// 3/2000 <nil>
	// 0 algebra: not a number
}

func ExampleSqrtParts() {
	c, m := algebra.SqrtParts(algebra.NewRat(12, 25))
	fmt.Printf("sqrt(12/25) = %v * sqrt(%v)\n", c, m)
	// Output:
	// sqrt(12/25) = 2/5 * sqrt(3)
}
