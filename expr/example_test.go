package expr_test

import (
	"context"
	"errors"
	"fmt"
	"math/big"

	"example.org/closedform/expr"
)

// A function of time, its calculus and its values.
func Example() {
	f, err := expr.ParseFunction("2*exp(-t/2)*sin(3*t) + t", expr.Limits{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println("f    =", f)
	fmt.Println("f'   =", f.Derivative())
	fmt.Println("area =", f.Integral())
	digits, err := f.At(context.Background(), big.NewRat(1, 3), 40)
	fmt.Println("f(1/3) =", digits, err)
	// Output:
	// f    = t + 2*exp(-t/2)*sin(3*t)
	// f'   = 1 + exp(-t/2)*(6*cos(3*t) - sin(3*t))
	// area = t^2/2 + 24/37 - 4/37*exp(-t/2)*(6*cos(3*t) + sin(3*t))
	// f(1/3) = 1.757912954664517224803607609196211751277 <nil>
}

// The canonical form makes equal functions equal, however they are written.
func ExampleParseFunction() {
	for _, src := range []string{
		"sin(t)^2 + cos(t)^2",
		"(exp(t) - 2*exp(-t))^2",
		"4*sin(t)*sin(2*t)*sin(3*t)",
	} {
		f, err := expr.ParseFunction(src, expr.Limits{})
		fmt.Println(f, err)
	}
	// Output:
	// 1 <nil>
	// exp(2*t) - 4*(1 - exp(-2*t)) <nil>
	// sin(2*t) + sin(4*t) - sin(6*t) <nil>
}

// Errors have a kind for programs, and a place and a message for people.
func ExampleParseFunction_error() {
	_, err := expr.ParseFunction("2*exp(-t) + 3/(1 + t)", expr.Limits{})
	var e *expr.Error
	if errors.As(err, &e) {
		fmt.Println(e.Kind)
		fmt.Println(e.Pos.Line, e.Pos.Column)
	}
	_, err = expr.ParseFunction("(1 + t", expr.Limits{})
	fmt.Println(err)
	// Output:
	// outside the class of inputs
	// 1 16
	// line 1, column 1: syntax: this parenthesis is not closed
}

// Where nearly everything cancels, the digits are still right, and an exact
// zero is seen to be one.
func ExampleFunction_At() {
	ctx := context.Background()
	f, _ := expr.ParseFunction("exp(-t) - 1 + t - t^2/2", expr.Limits{})
	fmt.Println(f.At(ctx, big.NewRat(1, 1000), 20))
	g, _ := expr.ParseFunction("(t - 1)*exp(-t)", expr.Limits{})
	fmt.Println(g.At(ctx, big.NewRat(1, 1), 20))
	h, _ := expr.ParseFunction("exp(-t)", expr.Limits{})
	fmt.Println(h.At(ctx, big.NewRat(1000, 1), 20))
	// Output:
	// -1.6662500833194464283e-10 <nil>
	// 0 <nil>
	// 5.0759588975494567653e-435 <nil>
}

func ExampleFunction_LaTeX() {
	f, _ := expr.ParseFunction("t^2*exp(-t/2)/3 - sin(2*t)/4", expr.Limits{})
	fmt.Println(f.LaTeX())
	// Output:
	// -\frac{1}{4} \sin(2 t) + \frac{1}{3} t^{2} e^{-t/2}
}

// Roots that no radical can write are named by their polynomial; calculus and
// digits are as before.
func ExampleFunction_Derivative_namedRoots() {
	f, _ := expr.ParseFunction("sumroots(z, z^3 - z - 1, exp(z*t)/(3*z^2 - 1))", expr.Limits{})
	fmt.Println(f.Derivative())
	residual := f.Derivative().Derivative().Derivative().Sub(f.Derivative()).Sub(f)
	fmt.Println("f''' - f' - f =", residual)
	fmt.Println(f.At(context.Background(), big.NewRat(1, 1), 30))
	// Output:
	// sumroots(z, z^3 - z - 1, z*exp(z*t)/(3*z^2 - 1))
	// f''' - f' - f = 0
	// 0.551844828419412410162729740423 <nil>
}

// A tree of any kind can be written in every notation.
func ExampleParse() {
	n, err := expr.Parse("−k₁·x + sqrt(2)/2·sin²(ω·t)", expr.Limits{})
	fmt.Println(n, err)
	fmt.Println(expr.LaTeX(n))
	// Output:
	// -k₁*x + sqrt(2)/2*sin(ω*t)^2 <nil>
	// -k_{1} x + \frac{\sqrt{2}}{2} \sin^{2}(\omega t)
}

func ExampleParseModel() {
	text, err := expr.ParseModel(`
		x″ + 0.4 x′ + 4 x = sin(3t)   # a machine on springs
		x(0) = 1; x′(0) = 0
	`, expr.Limits{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, e := range text.Equations {
		fmt.Println(e)
	}
	// Output:
	// x'' + 2/5*x' + 4*x = sin(3*t)
	// x(0) = 1
	// x'(0) = 0
}

func ExampleGoSource() {
	f, _ := expr.ParseFunction("1 - exp(-t/5)*cos(2*t)", expr.Limits{})
	src, err := expr.GoSource(context.Background(), []string{"level"}, []expr.Function{f}, nil, expr.GoOptions{Package: "tank", Func: "Level"})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Print(string(src))
	// Output:
	// // Package tank evaluates a closed-form response.
	// package tank
	//
	// import "math"
	//
	// // LevelState holds the values of the states at one time.
	// type LevelState struct {
	// 	Level float64 // level
	// }
	//
	// // Level returns the states at the time t:
	// //
	// //	level = 1 - exp(-t/5)*cos(2*t)
	// //
	// // Error: for 0 <= t <= 30 every value differs from the exact one by at most
	// //
	// //	Level  1.1e-15, or 6.7e-16 of its largest value there
	// //
	// // given that math.Exp is within 2 units in the last place, and math.Sin, math.Cos and
	// // math.Sincos within 4 units of 2^-53.
	// func Level(t float64) LevelState {
	// 	e2 := math.Exp(-0.2 * t)
	// 	c2 := math.Cos(2 * t)
	// 	return LevelState{
	// 		Level: 1 - e2*c2,
	// 	}
	// }
	//
	// // LevelValues returns the states at all times, in dst as far as it has room.
	// func LevelValues(dst []LevelState, times []float64) []LevelState {
	// 	dst = dst[:0]
	// 	for _, t := range times {
	// 		dst = append(dst, Level(t))
	// 	}
	// 	return dst
	// }
	//
	// // LevelRates returns the derivatives of the states at the time t.
	// //
	// // Error: for 0 <= t <= 30 every value differs from the exact one by at most
	// //
	// //	Level  2.3e-15, or 1.5e-15 of its largest value there
	// //
	// // given the same of package math as for Level.
	// func LevelRates(t float64) LevelState {
	// 	e2 := math.Exp(-0.2 * t)
	// 	s2, c2 := math.Sincos(2 * t)
	// 	return LevelState{
	// 		Level: e2 * (0.2*c2 + 2*s2),
	// 	}
	// }
}

func ExampleLaTeXName() {
	for _, name := range []string{"x", "k_12", "omega0", "T_out", "temp", `\input{x}`} {
		fmt.Println(expr.LaTeXName(name))
	}
	// Output:
	// x
	// k_{12}
	// \omega_{0}
	// T_{\mathrm{out}}
	// \mathrm{temp}
	// \mathrm{\backslash input\{x\}}
}
