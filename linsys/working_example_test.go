package linsys_test

import (
	"context"
	"fmt"

	"example.org/closedform/linsys"
)

// The derivation of a response, step by step.
func ExampleResponse_Working() {
	model, _ := linsys.Read("x'' + 4*x = 8*cos(2*t); x(0) = 1; x'(0) = 0")
	response, _ := model.ClosedForm(context.Background())
	steps, err := response.Working(context.Background())
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, s := range steps {
		if s.Kind == "eigenvectors" || s.Kind == "trial" {
			fmt.Print(s)
			fmt.Println("  verified:", s.Verified[len(s.Verified)-1])
		}
	}
	fmt.Print(steps[2].LaTeX())
	// Output:
	// Eigenvectors
	//   For lambda_1:
	//     v_1 = [1; 2*i]
	//   For lambda_2:
	//     v_2 = [1; -2*i]
	//   With these vectors as columns of P, and the eigenvalues in the diagonal of J,
	//     A*P = P*J
	//     P = [1, 1; 2*i, -2*i]
	//     J = [2*i, 0; 0, -2*i]
	//   The inverse of P:
	//     P^(-1) = [1/2, -i/4; 1/2, i/4]
	//   verified: P J P^-1 = A
	// Trial form for the input
	//   The terms of the input with the frequency 2 and the rate 0 belong to the factor s^2 + 4. It divides the characteristic polynomial once: resonance, and the trial form is that of the input times t.
	//   The trial form:
	//     x_p(t) = t*(a*cos(2*t) + b*sin(2*t))
	//   Put into the equation, with the coefficients of like terms compared, it gives:
	//     a = 0
	//     b = 2
	//   verified: the coefficients of the power 1 agree
	// \paragraph{Eigenvalues}
	// The eigenvalues are the roots of the factors.
	// \begin{align*}
	// \lambda_{1} &= 2 i \\
	// \lambda_{2} &= -2 i
	// \end{align*}
}

// One equation for one state, with the derivatives of the inputs.
func ExampleResponse_Elimination() {
	model, _ := linsys.Read(`
		x' = -3*x + y + exp(-t)
		y' = x - 3*y + sin(t)
		x(0) = 1;  y(0) = 0
	`)
	response, _ := model.ClosedForm(context.Background())
	e, err := response.Elimination(context.Background(), "x")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(e.Equation, e.Inputs)
	fmt.Println(e.Explicit, e.Initial)
	// Output:
	// x'' + 6*x' + 8*x = f_1' + 3*f_1 + f_2 [f_1(t) = exp(-t) f_2(t) = sin(t)]
	// x'' + 6*x' + 8*x = sin(t) + 2*exp(-t) [x(0) = 1 x'(0) = -2]
}

// From a force to a displacement.
func ExampleResponse_TransferFunction() {
	model, _ := linsys.Read("m*x'' + c*x' + k*x = 0")
	response, _ := model.ClosedForm(context.Background())
	g, err := response.TransferFunction(context.Background(), 0, "x")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(g.Equation)
	// Output:
	// G(s) = 1/(m*s^2 + c*s + k)
}
