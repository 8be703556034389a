package linsys

import (
	"context"
	"strings"

	"example.org/closedform/expr"
)

// GoOptions says how generated Go source is named.
type GoOptions struct {
	Package string // default "response"
	Func    string // default "Response"; the type of its result is FuncState, of its parameters FuncParams
}

// GoSource writes the response as Go source: a function of time that returns
// all states, with no dependency but math, in the format of gofmt. Constants
// are the float64 values nearest to the exact ones; free constants become an
// array argument. The comments hold the model and the closed form.
//
// The symbols of the model become the fields of a struct, the first argument,
// with a method Validate that names the condition that the parameters violate:
// those of the model and its assumptions. Conditions of the written formulas, as
// that two rates differ, do not bind the code; see [expr.GoSource].
func (r *Response) GoSource(ctx context.Context, opt GoOptions) (src []byte, err error) {
	defer catchLimit(&err)
	doc := strings.Split(strings.TrimRight(r.model.String(), "\n"), "\n")
	out := expr.GoOptions{Package: opt.Package, Func: opt.Func, Doc: doc}
	if len(r.Parameters()) > 0 {
		if out.Conditions, err = r.over.conditions(ctx); err != nil {
			return nil, wrapCancel(err)
		}
	}
	src, err = expr.GoSource(ctx, r.model.names, r.states, r.constants, out)
	return src, wrapCancel(err)
}
