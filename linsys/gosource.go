package linsys

import (
	"context"
	"strings"

	"example.org/closedform/expr"
)

// GoOptions says how generated Go source is named.
type GoOptions struct {
	Package string // default "response"
	Func    string // default "Response"; the type of its result is FuncState
}

// GoSource writes the response as Go source: a function of time that returns
// all states, with no dependency but math, in the format of gofmt. Constants
// are the float64 values nearest to the exact ones; free constants become an
// array argument. The comments hold the model and the closed form.
func (r *Response) GoSource(ctx context.Context, opt GoOptions) ([]byte, error) {
	doc := strings.Split(strings.TrimRight(r.model.String(), "\n"), "\n")
	src, err := expr.GoSource(ctx, r.model.names, r.states, r.constants, expr.GoOptions{Package: opt.Package, Func: opt.Func, Doc: doc})
	return src, wrapCancel(err)
}
