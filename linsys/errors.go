package linsys

import (
	"context"
	"errors"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Error is the error of bad input: a kind, a message, and the place in the text.
type Error = expr.Error

// wrapCancel turns the error of a context into an *Error of kind Cancelled.
func wrapCancel(err error) error {
	if _, typed := err.(*Error); typed {
		return err
	}
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return &Error{Kind: expr.Cancelled, Message: err.Error(), Cause: err}
	}
	return err
}

// catchLimit, deferred, turns the panic of an operation on too large operands
// into an error of kind LimitExceeded.
func catchLimit(err *error) {
	if r := recover(); r != nil {
		e, ok := r.(*algebra.LimitError)
		if !ok {
			panic(r)
		}
		*err = &Error{Kind: expr.LimitExceeded, Message: e.What, Cause: e}
	}
}
