package expr

import "example.org/closedform/algebra"

// Node is an expression tree. The set of node types is closed: Number, Decimal,
// Symbol, Value, Sum, Product, Quotient, Power, Neg, Call, RootSum and Matrix. Trees are
// immutable and may share parts.
type Node interface {
	// Pos returns the place of the node in the text it was read from.
	Pos() Pos
	// String writes the node in the text form that Parse reads.
	String() string
	isNode()
}

type place struct{ at Pos }

func (p place) Pos() Pos { return p.at }
func (place) isNode()    {}

// Number is a non-negative or negative rational number.
type Number struct {
	place
	Val algebra.Rat
}

// Symbol is a name: an unknown, a parameter, a defined quantity, the
// independent variable, or pi.
type Symbol struct {
	place
	Name string
}

// Value is a derivative of an unknown, x” with Order 2, or its value at a
// time, x'(0) with At the time.
type Value struct {
	place
	Name  string
	Order int
	At    Node // nil for the function itself
}

// Sum is the sum of its terms; a term that is a Neg prints as a difference.
type Sum struct {
	place
	Terms []Node
}

// Product is the product of its factors.
type Product struct {
	place
	Factors []Node
}

// Quotient is Num/Den.
type Quotient struct {
	place
	Num, Den Node
}

// Power is Base^Exp.
type Power struct {
	place
	Base, Exp Node
}

// Neg is -X.
type Neg struct {
	place
	X Node
}

// Call is a function of the fixed vocabulary applied to its argument: exp, sin,
// cos, sinh, cosh, sqrt, step, impulse, and atan in the phase of sines and cosines.
type Call struct {
	place
	Func string
	Arg  Node
}

// RootSum is the sum of Body over all roots Var of the square-free polynomial
// Poly in Var: the closed form where no radicals exist.
type RootSum struct {
	place
	Var  string
	Poly Node
	Body Node
}

// functions is the vocabulary of Call.
var functions = map[string]bool{
	"exp": true, "sin": true, "cos": true, "sinh": true, "cosh": true,
	"sqrt": true, "step": true, "impulse": true, "atan": true,
}
