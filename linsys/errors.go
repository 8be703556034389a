package linsys

import (
	"context"
	"errors"

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
