// Package algebratest holds the laws that every domain of package algebra must
// obey, as test suites, and generators of test values.
//
// A new domain costs one line:
//
//	algebratest.TestField(t, f, gen)
//
// Values are random but the same in every run; a failing test prints its seed,
// and -algebra.seed=N runs with another one.
package algebratest
