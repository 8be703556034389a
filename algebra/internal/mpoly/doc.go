// Package mpoly is arithmetic with sparse polynomials in several variables
// over the integers: products, exact quotients, substitution, greatest common
// divisors, square-free parts and factorisation into irreducible factors.
//
// The variables x_0, ..., x_(n-1) have no names. Terms are kept in descending
// lexicographic order; exponents are packed 16 bits each, so that comparing
// words compares monomials and adding words multiplies them.
package mpoly
