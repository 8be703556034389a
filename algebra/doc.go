// Package algebra is exact computation with the numbers, polynomials and
// matrices that linear models are made of: rational numbers, algebraic numbers,
// polynomials in one variable, matrices, and the fields they live in. It knows
// nothing of time, differential equations or ways of writing a result.
//
// # An example
//
// The rates of y' = A y are the eigenvalues of A. Take A with the rows (0, 1)
// and (1, 1). [Rationals.CharPoly] returns its characteristic polynomial
// s^2 - s - 1, and [Rationals.FactorPoly] finds that it is irreducible over Q.
// [AlgebraicRoots] returns its roots as numbers that can be compared, written
// exactly (1/2 - sqrt(5)/2 and 1/2 + sqrt(5)/2) and enclosed in balls of any
// precision, from which [Ball.Decimal] takes the digits that are proven. An
// eigenvector is found without a radical in the field Q[s]/(s^2 - s - 1): an
// [Extension], over which [Kernel] works as it does over Q.
//
// # Vocabulary
//
// Polynomials are sums of c_i s^i; coefficients are listed from c_0 on. The
// zero polynomial has degree -1. Monic means leading coefficient 1. Factors
// are monic, and the leading coefficient of the product is left aside. Matrices
// are m x n, m rows by n columns, listed row by row and indexed from 0; I is
// the identity. Roots are ordered: real ones ascending, then conjugate pairs,
// the upper one first. A ball is a number with a proven bound of its error.
//
// # Domains are values
//
// A ring is a value of type [Ring], a field one of type [Field]: [Q] is the
// field of rational numbers, [NewExtension] makes the field K[s]/(p) of a field
// K, and of that another one if need be; [NewFunctionField] makes Q(a)(x1, ...,
// xn), the rational functions in named variables, some of which may stand for
// numbers such as pi, over a real algebraic number a. Elements are bare data
// ([Rat], [Poly], [Fraction]), and the domain adds, multiplies and inverts them. A [Poly] or
// [Matrix] carries the ring of its entries; that two operands have the same one
// is the caller's promise. Functions that divide take a Field. [Scalars] is
// what a field must offer beyond that to hold the coefficients of a model.
//
// Where a field has better methods than the generic ones, the generic functions
// use them: products, gcds and linear systems over Q go through integers and
// word-size primes, with the same results.
//
// # Values
//
// Every value is immutable and safe for concurrent use. Operations leave their
// operands alone, constructors copy what they are given, accessors return
// copies. Numbers, polynomials and matrices are compared by Equal; == does not
// compile. The zero values of [Rat], [Poly], [Matrix] and [Ball] are 0, the zero
// polynomial of any ring, the 0 x 0 matrix and the exact 0. The same input gives
// the same output in every run.
//
// # Failure
//
// Whatever may depend on data is an error: [ErrSyntax] for text that is no
// number, [ErrSingular], [ErrNotSquareFree], [ErrDivisionByZero] from the Inv
// of a field, and [ReducibleError] from an extension whose modulus was not
// irreducible after all. Factors, roots, characteristic polynomials and
// elimination take a [context.Context] first, for they may take long, and return
// its error soon after it is cancelled.
//
// A panic is a fault of the calling program: operands that do not fit
// (a [ShapeError]), an index out of range, division by a zero [Rat] or [Poly]
// (ErrDivisionByZero), the leading coefficient or the ring of a zero polynomial
// that has none, an extension by a constant, [Quadratic] of another degree,
// the order of numbers that are not real, root parts of a number that is not
// positive.
//
// # Limits
//
// Polynomials are dense and in one variable, save for the numerators and
// denominators of a [FunctionField], which are sparse and in several; fields have
// characteristic 0. Over fields other than Q elimination is plain and
// coefficients may grow; operations of a FunctionField on too large operands
// panic with a *[LimitError], which [CatchLimit] turns into an error. Otherwise
// memory is the only bound on the size of
// numbers, save for text: [ParseRat] reads up to 65536 bytes and exponents of
// up to five digits. [SqrtParts] finds the squares of primes below 2^16.
//
// # References
//
// Square-free decomposition: D. Yun, On square-free decomposition algorithms,
// SYMSAC 1976. Gcds and factors over Q: J. von zur Gathen, J. Gerhard, Modern
// Computer Algebra, chapters 6 and 15 (modular gcd, Hensel lifting); D. Cantor,
// H. Zassenhaus, A new algorithm for factoring polynomials over finite fields,
// Math. Comp. 36 (1981); H. Zassenhaus, On Hensel factorization I, J. Number
// Theory 1 (1969); M. van Hoeij, Factoring polynomials and the knapsack
// problem, J. Number Theory 95 (2002), with the lattice reduction of
// A. Lenstra, H. Lenstra, L. Lovász, Factoring polynomials with rational
// coefficients, Math. Ann. 261 (1982). Characteristic polynomials:
// S. Berkowitz, On computing the determinant in small parallel time using a
// small number of processors, Information Processing Letters 18 (1984); over Q
// by Hessenberg forms modulo primes, H. Cohen, A Course in Computational
// Algebraic Number Theory, section 2.2.4. Linear systems over Q: J. Dixon,
// Exact solution of linear equations using p-adic expansions, Numerische
// Mathematik 40 (1982). Roots: O. Aberth, Iteration methods for finding all
// zeros of a polynomial simultaneously, Math. Comp. 27 (1973), certified by
// B. Smith, Error bounds for zeros of a polynomial based upon Gerschgorin's
// theorems, J. ACM 17 (1970). Several variables: W. Brown, On Euclid's algorithm
// and the computation of polynomial greatest common divisors, J. ACM 18 (1971);
// R. Zippel, Probabilistic algorithms for sparse polynomials, EUROSAM 1979;
// P. Wang, An improved multivariate polynomial factoring algorithm, Math.
// Comp. 32 (1978). Algebraic numbers: B. Trager, Algebraic factoring and rational
// function integration, SYMSAC 1976. Balls: J. van der Hoeven, Ball arithmetic,
// Logical Approaches to Barriers in Computing and Complexity, 2010.
package algebra
