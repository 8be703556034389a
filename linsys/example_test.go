package linsys_test

import (
	"context"
	"fmt"
	"math/big"
	"strings"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// A model in, a proven closed form out.
func Example() {
	ctx := context.Background()
	model, err := linsys.Read(`
		x' = -3x + y             # two coupled rooms, one heated
		y' = x - 3y + sin(t)
		x(0) = 1;  y(0) = 0
	`)
	if err != nil {
		fmt.Println(err)
		return
	}
	response, err := model.ClosedForm(ctx)
	if err != nil {
		fmt.Println(err)
		return
	}
	x := response.State("x")
	fmt.Println(x)
	fmt.Println(x.LaTeX())
	digits, err := x.At(ctx, big.NewRat(1, 2), 40)
	fmt.Println(digits, err)
	fmt.Println("proven:", response.Proof().Holds())
	// Output:
	// -6/85*cos(t) + 7/85*sin(t) + 3/5*exp(-2*t) + 8/17*exp(-4*t)
	// -\frac{6}{85} \cos(t) + \frac{7}{85} \sin(t) + \frac{3}{5} e^{-2 t} + \frac{8}{17} e^{-4 t}
	// 0.2619499556246500092040825662119988491843 <nil>
	// proven: true
}

// Without side conditions the response is the general solution.
func ExampleModel_ClosedForm_general() {
	model, _ := linsys.Read("x'' + 2*x' + 5*x = 10")
	response, _ := model.ClosedForm(context.Background())
	fmt.Println(response.State("x"))
	// Output:
	// C1*exp(-t)*cos(2*t) + 1/2*C2*exp(-t)*sin(2*t) + 2
}

// Resonance: the input has the frequency of the model.
func ExampleResponse_Steady() {
	model, _ := linsys.Read("x'' + 4*x = 8*cos(2*t); x(0) = 1; x'(0) = 0")
	response, _ := model.ClosedForm(context.Background())
	fmt.Println("transient:", response.Transient("x"))
	fmt.Println("steady:   ", response.Steady("x"))
	// Output:
	// transient: cos(2*t)
	// steady:    2*t*sin(2*t)
}

// Values of all states at one time, every digit proven.
func ExampleResponse_At() {
	model, _ := linsys.Read(`
		a' = -a/2            # a chain of two tanks
		b' = a/2 - b/3
		a(0) = 1;  b(0) = 0
	`)
	response, _ := model.ClosedForm(context.Background())
	for _, t := range []int64{0, 1, 1000} {
		values, err := response.At(context.Background(), big.NewRat(t, 1), 20)
		fmt.Println(response.States(), values, err)
	}
	// Output:
	// [a b] [1.0000000000000000000 0] <nil>
	// [a b] [0.60653065971263342360 0.33000195258346748047] <nil>
	// [a b] [7.1245764067412855315e-218 5.1557749681686946211e-145] <nil>
}

// Free constants of a general solution get values one by one or together.
func ExampleResponse_With() {
	model, _ := linsys.Read("x'' = -4*x")
	general, _ := model.ClosedForm(context.Background())
	fmt.Println(general.State("x"), general.Constants())
	special, _ := general.With(map[string]*big.Rat{"C1": big.NewRat(3, 1), "C2": big.NewRat(0, 1)})
	fmt.Println(special.State("x"))
	// Output:
	// C1*cos(2*t) + 1/2*C2*sin(2*t) [C1 C2]
	// 3*cos(2*t)
}

// Names without a value are symbols. The formula holds under conditions, and an
// excluded case has a formula of its own.
func ExampleResponse_When() {
	ctx := context.Background()
	model, _ := linsys.Read(`
		depot' = -ka*depot              # a dose is absorbed and eliminated
		body'  = ka*depot - ke*body
		depot(0) = D;  body(0) = 0
	`)
	response, _ := model.ClosedForm(ctx)
	_, conditions, _ := response.Conditions(ctx)
	fmt.Println(response.State("body"), conditions)
	equal, _ := response.When(ctx, "ka = ke")
	fmt.Println(equal.State("body"))
	// Output:
	// D*ka/(ka - ke)*(exp(-ke*t) - exp(-ka*t)) [ka != ke]
	// D*ke*t*exp(-ke*t)
}

// Assumptions choose real forms and spare conditions.
func ExampleModel_Assume() {
	ctx := context.Background()
	model, _ := linsys.Read("m*q'' + k*q = F; q(0) = 0; q'(0) = 0")
	response, _ := model.ClosedForm(ctx)
	of, formula, _ := response.Conditions(ctx)
	fmt.Println(response.State("q"), of, formula)
	model, _ = model.Assume("m > 0, k > 0")
	response, _ = model.ClosedForm(ctx)
	of, formula, _ = response.Conditions(ctx)
	fmt.Println(response.State("q"), of, formula)
	// Output:
	// F/k*(1 - cos(sqrt(k/m)*t)) [m != 0] [k != 0]
	// F/k*(1 - cos(sqrt(k/m)*t)) [] []
}

// Symbols get values later, numbers or expressions.
func ExampleResponse_Substitute() {
	ctx := context.Background()
	model, _ := linsys.Read("T' = -T/tau + A*sin(2*pi*t/24 + phi)/tau; T(0) = 0")
	response, _ := model.ClosedForm(ctx)
	phase, _ := expr.Parse("pi/2", expr.Limits{})
	special, _ := response.Substitute(ctx, map[string]expr.Node{"phi": phase, "tau": expr.Int(6)})
	fmt.Println(special.State("T"))
	special, _ = special.With(map[string]*big.Rat{"A": big.NewRat(5, 1)})
	values, _ := special.At(ctx, big.NewRat(12, 1), 20)
	fmt.Println(values)
	// Output:
	// 4*A/(pi^2 + 4)*cos(pi*t/12) + 2*pi*A/(pi^2 + 4)*sin(pi*t/12) - 4*A/(pi^2 + 4)*exp(-t/6)
	// [-1.6371559712942356070]
}

// Second-order models come from their stiffness, damping and mass matrices.
func ExampleFromMatrices() {
	rats := func(x ...int64) []*big.Rat {
		row := make([]*big.Rat, len(x))
		for i := range x {
			row[i] = big.NewRat(x[i], 1)
		}
		return row
	}
	stiffness := [][]*big.Rat{rats(3, -1), rats(-1, 3)}
	damping := [][]*big.Rat{rats(0, 0), rats(0, 0)}
	mass := [][]*big.Rat{rats(1, 0), rats(0, 1)}
	model, err := linsys.FromMatrices([]string{"u", "v"}, [][][]*big.Rat{stiffness, damping, mass}, nil,
		[][]*big.Rat{rats(1, 0), rats(0, 0)})
	if err != nil {
		fmt.Println(err)
		return
	}
	response, _ := model.ClosedForm(context.Background())
	for _, m := range response.Modes() {
		fmt.Println(m.Factor, m.Roots)
	}
	fmt.Println("u =", response.State("u"))
	// Output:
	// s^2 + 2 [sqrt(2)*i -sqrt(2)*i]
	// s^2 + 4 [2*i -2*i]
	// u = 1/2*(cos(sqrt(2)*t) + cos(2*t))
}

// Matrices may hold symbols.
func ExampleFromTextMatrices() {
	model, err := linsys.FromTextMatrices([]string{"x", "y"},
		[][][]string{{{"k", "0"}, {"-k", "2*k"}}, {{"1", "0"}, {"0", "1"}}}, nil, [][]string{{"A", "0"}})
	if err != nil {
		fmt.Println(err)
		return
	}
	response, _ := model.ClosedForm(context.Background())
	fmt.Println(response.State("y"))
	// Output:
	// A*exp(-k*t) - A*exp(-2*k*t)
}

// Where no radicals exist, roots are named by their polynomial.
func ExampleResponse_Modes() {
	model, _ := linsys.Read("y''' = y' + y; y(0) = 0; y'(0) = 0; y''(0) = 1")
	response, _ := model.ClosedForm(context.Background())
	for _, m := range response.Modes() {
		for _, root := range m.Roots {
			z, _ := root.Enclose(context.Background(), 100)
			re, _ := z.Re.Decimal(20)
			fmt.Println(root, "has the real part", re)
		}
	}
	fmt.Println("y =", response.State("y"))
	// Output:
	// root(1, z^3 - z - 1) has the real part 1.3247179572447460260
	// root(2, z^3 - z - 1) has the real part -0.66235897862237301298
	// root(3, z^3 - z - 1) has the real part -0.66235897862237301298
	// y = sumroots(z, z^3 - z - 1, z*exp(z*t)/(2*z + 3))
}

// The response as a Go function.
func ExampleResponse_GoSource() {
	model, _ := linsys.Read("x'' + 2*x' + 5*x = 0; x(0) = 1; x'(0) = -1")
	response, _ := model.ClosedForm(context.Background())
	src, _ := response.GoSource(context.Background(), linsys.GoOptions{Package: "plant"})
	fmt.Print(string(src))
	// Output:
	// // Package plant evaluates a closed-form response.
	// //
	// //	x'' + 2*x' + 5*x = 0
	// //	x(0) = 1
	// //	x'(0) = -1
	// package plant
	//
	// import "math"
	//
	// // ResponseState holds the values of the states at one time.
	// type ResponseState struct {
	// 	X float64 // x
	// }
	//
	// // Response returns the states at the time t:
	// //
	// //	x = exp(-t)*cos(2*t)
	// //
	// // Error: for 0 <= t <= 5 every value differs from the exact one by at most
	// //
	// //	X  1.1e-15, or 1.1e-15 of its largest value there
	// //
	// // given that math.Exp is within 2 units in the last place, and math.Sin, math.Cos and
	// // math.Sincos within 4 units of 2^-53.
	// func Response(t float64) ResponseState {
	// 	e1 := math.Exp(-t)
	// 	c1 := math.Cos(2 * t)
	// 	return ResponseState{
	// 		X: e1 * c1,
	// 	}
	// }
	//
	// // ResponseValues returns the states at all times, in dst as far as it has room.
	// func ResponseValues(dst []ResponseState, times []float64) []ResponseState {
	// 	dst = dst[:0]
	// 	for _, t := range times {
	// 		dst = append(dst, Response(t))
	// 	}
	// 	return dst
	// }
	//
	// // ResponseRates returns the derivatives of the states at the time t.
	// //
	// // Error: for 0 <= t <= 5 every value differs from the exact one by at most
	// //
	// //	X  1.9e-15, or 1.4e-15 of its largest value there
	// //
	// // given the same of package math as for Response.
	// func ResponseRates(t float64) ResponseState {
	// 	e1 := math.Exp(-t)
	// 	s1, c1 := math.Sincos(2 * t)
	// 	return ResponseState{
	// 		X: e1 * (-c1 - 2*s1),
	// 	}
	// }
}

// With symbols the function takes its parameters from a struct. The formulas
// divide by ka - ke; the code is right, and accurate, for equal rates as well.
func ExampleResponse_GoSource_symbols() {
	model, _ := linsys.Read("x' = -ka*x; y' = ka*x - ke*y; x(0) = 1; y(0) = 0")
	response, _ := model.ClosedForm(context.Background())
	src, _ := response.GoSource(context.Background(), linsys.GoOptions{Func: "Oral"})
	_, rest, _ := strings.Cut(string(src), "// OralParams")
	params, _, _ := strings.Cut(rest, "// Validate")
	_, rest, _ = strings.Cut(rest, "// Oral returns")
	code, _, _ := strings.Cut(rest, "\n\n")
	fmt.Print("// OralParams", params, "// Oral returns", code)
	// Output:
	// // OralParams holds the parameters of the response.
	// type OralParams struct {
	// 	Ka float64 // ka
	// 	Ke float64 // ke
	// }
	//
	// // Oral returns the states at the time t for parameters that are valid:
	// //
	// //	x = exp(-ka*t)
	// //	y = ka/(ka - ke)*(exp(-ke*t) - exp(-ka*t))
	// //
	// // Where rates of these formulas coincide, or nearly do, the code still holds and
	// // needs no case distinction.
	// func Oral(p OralParams, t float64) OralState {
	// 	rate1 := -p.Ka
	// 	rate2 := -p.Ke
	// 	diff1 := oralDivided(t, rate1, rate2)
	// 	return OralState{
	// 		X: diff1[0],
	// 		Y: p.Ka * diff1[1],
	// 	}
	// }
}

// Errors say what is wrong, and where.
func ExampleRead_error() {
	_, err := linsys.Read("x' = -x + y\ny' = x*y")
	fmt.Println(err)
	// Output:
	// line 2, column 6: nonlinear: "x*y" is not linear in the states
}
