package expr

import (
	"errors"
	"fmt"
	"strings"
)

// Kind says what is wrong with an input, in words that programs may branch on.
type Kind string

// The kinds of errors. Every error that bad input can cause has one of them.
const (
	Syntax          Kind = "syntax"
	UnknownFunction Kind = "unknown function"
	Nonlinear       Kind = "nonlinear"
	TimeVarying     Kind = "time-varying coefficient"
	WrongShape      Kind = "not square / wrong shape"
	Singular        Kind = "singular"
	SideConditions  Kind = "missing or contradictory side condition"
	OutsideClass    Kind = "outside the class of inputs"
	NeedsAssumption Kind = "needs an assumption"
	LimitExceeded   Kind = "limit exceeded"
	Cancelled       Kind = "cancelled"
)

// Pos is a place in a text, counted from 1; the zero Pos is no place. Columns
// count characters, not bytes.
type Pos struct {
	Line, Column int
}

// IsValid tells whether p is a place.
func (p Pos) IsValid() bool { return p.Line > 0 }

// Error is the error of bad input: what kind, where, and what to do about it.
type Error struct {
	Kind    Kind
	Message string
	Pos     Pos   // of the term at fault; invalid when there is no text
	Cause   error // what lies beneath, if anything
}

// Errorf returns an *Error; the message is formatted as by fmt.Sprintf.
func Errorf(kind Kind, at Pos, format string, args ...any) *Error {
	return &Error{Kind: kind, Message: fmt.Sprintf(format, args...), Pos: at}
}

func (e *Error) Error() string {
	var b strings.Builder
	if e.Pos.IsValid() {
		fmt.Fprintf(&b, "line %d, column %d: ", e.Pos.Line, e.Pos.Column)
	}
	return b.String() + string(e.Kind) + ": " + e.Message
}

func (e *Error) Unwrap() error { return e.Cause }

// Quote shortens a piece of input for a message.
func Quote(s string) string {
	const most = 40
	r := []rune(s)
	if len(r) > most {
		s = string(r[:most-3]) + "..."
	}
	return fmt.Sprintf("%q", s)
}

// isIrrational tells whether a wider field may do what failed over Q.
func isIrrational(err error) bool { return errors.Is(err, ErrIrrational) }
