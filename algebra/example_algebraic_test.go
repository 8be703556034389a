package algebra_test

import (
	"context"
	"fmt"

	"example.org/closedform/algebra"
)

// The roots of a cubic: one of them real, the others a conjugate pair. A digit
// is printed when the enclosure proves it.
func ExampleAlgebraicRoots() {
	ctx := context.Background()
	p := algebra.PolyFromInts(-5, -2, 0, 1) // s^3 - 2 s - 5
	roots, err := algebra.AlgebraicRoots(ctx, p)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, x := range roots {
		z, err := x.Enclose(ctx, 160)
		if err != nil {
			fmt.Println(err)
			return
		}
		re, ok := z.Re.Decimal(40)
		im, ok2 := z.Im.Decimal(20)
		fmt.Println(x, "=", re, im, ok && ok2)
	}
	// Output:
	// root(1, z^3 - 2*z - 5) = 2.094551481542326591482386540579302963857 0 true
	// root(2, z^3 - 2*z - 5) = -1.047275740771163295741193270289651481929 1.1359398890889281862 true
	// root(3, z^3 - 2*z - 5) = -1.047275740771163295741193270289651481929 -1.1359398890889281862 true
}

// Roots of quadratics are written with radicals.
func ExampleAlgebraic_String() {
	ctx := context.Background()
	for _, p := range []algebra.Poly[algebra.Rat]{
		algebra.PolyFromInts(-1, -1, 1),
		algebra.PolyFromInts(13, 4, 1),
	} {
		roots, err := algebra.AlgebraicRoots(ctx, p)
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Println(roots[0], "and", roots[1])
	}
	// Output:
	// 1/2 - sqrt(5)/2 and 1/2 + sqrt(5)/2
	// -2 + 3*i and -2 - 3*i
}
