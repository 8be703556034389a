package linsys

import (
	"context"
	"strings"

	"example.org/closedform/expr"
)

// GoOptions says how generated Go source is named and on which times it is
// examined.
type GoOptions struct {
	Package string // default "response"
	Func    string // default "Response"; the type of its result is FuncState, of its parameters FuncParams
	// From and To are the times between which the errors are bounded, Tolerance the
	// error that calls for another form; see [expr.GoOptions] for the defaults.
	From, To  float64
	Tolerance float64
}

// GoSource writes the response as Go source: a function of time that returns
// all states, one for many times and one for the derivatives, with no dependency
// but math, in the format of gofmt. Constants are the float64 values nearest to the
// exact ones; free constants become an array argument. The comments hold the model,
// the closed form, the exact values of constants where they are short, and proven
// bounds on the errors in an interval of time; see [expr.GoSource].
//
// The symbols of the model become the fields of a struct, the first argument,
// with a method Validate that names the condition that the parameters violate:
// those of the model and its assumptions. Conditions of the written formulas, as
// that two rates differ, do not bind the code. There are no bounds then.
func (r *Response) GoSource(ctx context.Context, opt GoOptions) (src []byte, err error) {
	defer catchLimit(&err)
	out := r.goOptions(opt)
	if len(r.Parameters()) > 0 {
		if out.Conditions, err = r.over.conditions(ctx); err != nil {
			return nil, wrapCancel(err)
		}
	}
	src, err = expr.GoSource(ctx, r.model.names, r.states, r.constants, out)
	return src, wrapCancel(err)
}

// GoTest writes a test of what GoSource writes with the same options: proven values
// of the states and their derivatives at some times, to be met within the stated
// bounds. It fails where the response holds symbols.
func (r *Response) GoTest(ctx context.Context, opt GoOptions) (src []byte, err error) {
	defer catchLimit(&err)
	src, err = expr.GoTest(ctx, r.model.names, r.states, r.constants, r.goOptions(opt))
	return src, wrapCancel(err)
}

func (r *Response) goOptions(opt GoOptions) expr.GoOptions {
	doc := strings.Split(strings.TrimRight(r.model.String(), "\n"), "\n")
	return expr.GoOptions{Package: opt.Package, Func: opt.Func, Doc: doc, From: opt.From, To: opt.To, Tolerance: opt.Tolerance}
}
