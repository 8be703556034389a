// Package linsys derives the response of linear time-invariant models
//
//	y' = A y + f(t)
//
// in closed form, exactly, and proves it.
//
// A model is read from the equations as they stand on paper ([Read]), or built
// from matrices ([FromMatrix], [FromMatrices]). Equations may be of any order
// and implicit in the highest derivatives; algebraic relations between the
// states are allowed. The input f is a sum of products of polynomials,
// exponentials, sines and cosines. Coefficients and data are numbers, read exactly
// (0.35 is 7/20), pi and roots among them, and symbols: names without a value.
//
// [Model.ClosedForm] returns a [Response]: every state as an [expr.Function],
// the transient part (complementary function) and the steady part (particular
// integral) apart, the modes, and the [Proof]. A response is proven before it
// is returned: substituted into the equations as they were read, it leaves the
// residual zero, exactly; so does the particular integral.
//
// Outside the class are nonlinear models, coefficients that depend on time,
// inputs such as 1/t or exp(t^2). They get an [Error] whose kind and place say
// what is at fault. Switched inputs and boundary conditions get one as well, of
// kind [expr.OutsideClass].
//
// # Symbols
//
// A response with symbols is right identically in them: the images it is held in
// have no exceptional cases but those of the model, such as a mass that is 0. The
// formulas it is written in may have: [Response.Conditions] returns both kinds.
// [Response.With] and [Response.Substitute] give symbols values, numbers or
// expressions, through the images, and so are right where a formula is not;
// [Response.When] presents an excluded case afresh. [Model.Assume] takes
// inequalities that spare conditions and choose real forms; where the sign of a
// square root's argument stays open, the form that is written holds for either,
// and [Response.Remarks] says so.
//
// # Method
//
// With the model reduced to first order, (s I - A) Y(s) = y0 + F(s) is solved
// for the Laplace image Y of the response over the coefficient field: the
// characteristic polynomial of A times the denominator of F is a denominator of
// Y, and its numerator comes from one synthetic division by s I - A, a
// matrix-vector product for each degree. The denominator is factored; that is
// all that is needed for evaluation, modes and proof. Radicals, sines and
// cosines are a matter of writing the result.
package linsys
