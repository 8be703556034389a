package linsys

import (
	"context"

	"example.org/closedform/expr"
)

// Compiled is the states of a response as a program in float64; see
// [expr.Compiled] for its accuracy.
type Compiled = expr.Compiled

// Float64 compiles the states to a program that evaluates all of them in float64,
// in the order of [Response.States], without allocating, with a proven bound on the
// error at every time. Every constant is the float64 nearest to its exact value.
// Symbols and free constants must have values; see [Response.With].
func (r *Response) Float64(ctx context.Context) (c *Compiled, err error) {
	defer catchLimit(&err)
	c, err = expr.Compile(ctx, r.states...)
	return c, wrapCancel(err)
}
