package algebra

import (
	"errors"
	"fmt"
)

var (
	// ErrDivisionByZero reports a division by the zero of a domain.
	ErrDivisionByZero = errors.New("algebra: division by zero")
	// ErrSingular reports a matrix without an inverse.
	ErrSingular = errors.New("algebra: singular matrix")
	// ErrSyntax reports text that is not a number.
	ErrSyntax = errors.New("algebra: not a number")
)

// ShapeError is the panic value of matrix operations whose operands do not fit.
type ShapeError struct {
	Op     string
	R1, C1 int // shape of the first operand
	R2, C2 int // shape of the second
}

func (e ShapeError) Error() string {
	return fmt.Sprintf("algebra: %s of a %d x %d and a %d x %d matrix", e.Op, e.R1, e.C1, e.R2, e.C2)
}
