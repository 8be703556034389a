// Package expr holds the functions of time that linear models answer with:
// exponential polynomials, exact, in one canonical form. It reads them from
// text, does calculus on them, gives proven digits of their values, and writes
// them as text, LaTeX, MathML and Go source.
//
// # The one idea
//
// A sum of terms t^k e^(Lt), with coefficients in a field K and with the
// algebraic rates L closed under conjugation, is the same thing as a strictly
// proper rational function over K, its Laplace image. An [Image] is just that,
// in lowest terms and with the denominator factored:
//
//	F(s) = N(s) / (p1(s)^e1 ... pr(s)^er),  pi monic and irreducible over K
//
//	f(t) = sum over the roots L of all pi of the residue of F(s) e^(st) at s = L
//
// The form is unique, so that equality is a comparison of polynomials and every
// identity between exponentials, sines and cosines is found: sin(t)^2 + cos(t)^2
// is 1. Sums, derivatives, integrals, factors t and e^(at) are a line each.
// Radicals, sines and cosines, and roots that only a polynomial can name, are
// chosen when a function is written; its values need none of them, but balls
// around the roots of the pi.
//
// # What there is
//
// [Parse] and [ParseModel] read text into trees, [Node], and place every error
// in it. [Env.Elementary] takes a tree to a sum of elementary terms t^n e^(at)
// (c cos bt + s sin bt), [Elementary], and its method Image to the canonical
// form. A [Function] is an image with the name of its variable, over the rational
// numbers or over a field [Constants] of numbers and symbols; most users need no
// other type. [Function.At] gives digits, each of
// them proven, and a [Bundle] the values of several functions at once.
// [Function.Node] chooses the exact way a function is written, [Function.Write] any
// [Form]: of several ways the one that takes the least effort to read, which is
// measured by size, digits and nesting. [LaTeX], [MathML] and the String methods of
// nodes write any tree, and [GoSource] writes functions as a Go function.
//
// # The text form
//
// What String writes, Parse reads as the same tree or one that is written the
// same. ParseFunction reads the text of a function as the same function. What is
// beyond it are forms with two square roots of expressions in symbols.
//
//	model     = { [ equation | "independent" name ] ( newline | ";" ) }
//	equation  = expr "=" expr
//	expr      = [ sign ] term { sign term }
//	term      = factor { ( "*" | "/" ) factor | factor }
//	factor    = sign factor | primary [ "^" [ sign ] exponent | superscript ]
//	exponent  = primary [ "^" [ sign ] exponent ]
//	primary   = number | "(" expr ")" | call | value | "sumroots" "(" name "," expr "," expr ")"
//	call      = function [ "^" number | superscript ] "(" expr ")"
//	function  = "exp" | "sin" | "cos" | "sinh" | "cosh" | "sqrt" | "step" | "impulse" | "atan"
//	value     = name { "'" } [ "(" expr ")" ]
//
// Numbers are exact, 0.35 is 7/20 and 1e-3 is 1/1000. The sign of a product may
// be left out after a number, a fraction of two numbers or a parenthesis, and
// before a name or a parenthesis: 2x, 1/2 t, (t+1)exp(t). What then could be
// read in two ways, a/2x, is refused. Powers bind to the right and before signs.
// sin^2(t) is sin(t)^2. Between a name and the parenthesis of its argument there
// is no blank. Names are letters, digits, underscores and subscript digits, in
// any script; pi and π are the number. atan stands in the argument of sin and cos,
// whose phase it is. sumroots(z, p, b) is the sum of b over all roots z of the
// square-free polynomial p: of terms c(z) t^k e^(zt), or for a p with even powers only
// of terms c(z) t^k cos zt and c(z) t^k sin zt. Inside
// parentheses a newline is a blank, and # starts a comment. The typographic
// signs of documents (− · × ÷ ′ ″ ‴ ² ³) are read like those of the keyboard.
//
// # Errors and limits
//
// Bad input is an [*Error]: its Kind is for programs, its Pos, if valid, is the
// line and column (in characters) of the term at fault, its message says what
// to do. Of the kinds this package itself uses Syntax, UnknownFunction,
// OutsideClass, Singular, SideConditions (a free constant without a value),
// NeedsAssumption (a symbol without one), LimitExceeded and Cancelled. [Limits] bounds what a text may ask for, so that
// a slip such as 10^10^10 costs an error and not the machine. Work that can
// take long has a context, whose end is an Error of kind Cancelled.
//
// Coefficients and rates are numbers and symbols. pi, roots of numbers, a square
// root of an expression in symbols, and e^a, cos(b), sin(b) of constants are
// exact: numbers of a field that grows until it holds them ([Constants], [Grow]).
// step and impulse are read into trees, but not into functions.
//
// Nodes, images and functions are immutable, and safe for concurrent use.
// Names may hold anything: whatever they are, LaTeX, markup and Go source stay
// as harmless as before.
//
// # References
//
// The Laplace transform pairs are those of any handbook, such as Abramowitz and
// Stegun, Handbook of Mathematical Functions, section 29.3. That values are
// recognised as rational rests on the theorem of Lindemann and Weierstrass
// (Baker, Transcendental Number Theory, section 1.4, from memory). Values come
// from midpoint-radius arithmetic, for which see package algebra.
package expr
