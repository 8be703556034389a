package expr

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
)

// style is how the elements of a field are written.
type style[E any] interface {
	// Node writes x.
	Node(x E) Node
	// expanded writes x term by term where it is a polynomial.
	expanded(x E) Node
	// Content returns the common factor that is taken out of a sum, without a
	// sign, 1 for zeros.
	Content(x ...E) E
	// above returns the numerator of a content.
	above(x E) E
	// Sign returns the sign of x where it is decided.
	Sign(x E) (int, bool)
	// weakSign is Sign for numbers that may be 0 as well: 1 says x >= 0.
	weakSign(x E) (int, bool)
	// typicalSign is a sign to expect where none is decided, never 0.
	typicalSign(x E) int
	// Compare is a total order of the elements.
	Compare(x, y E) int
	// approximate returns a number for the order of terms.
	approximate(x E) float64
	// sqrt returns c and a tree with sqrt(x) = c root, for an x that is not known to
	// be negative; up to the sign where that of c is open.
	sqrt(x E) (c E, root Node)
}

// styleOf returns the style of a field.
func styleOf[E any](k algebra.Scalars[E]) style[E] {
	if s, ok := any(k).(style[E]); ok {
		return s
	}
	return any(rationalStyle{}).(style[E])
}

// rationalStyle is the style of Q.
type rationalStyle struct{}

func (rationalStyle) expanded(x algebra.Rat) Node          { return Num(x) }
func (rationalStyle) Node(x algebra.Rat) Node              { return Num(x) }
func (rationalStyle) Content(x ...algebra.Rat) algebra.Rat { return contentOfRats(x...) }
func (rationalStyle) above(x algebra.Rat) algebra.Rat      { return algebra.RatFromBigInt(x.Num()) }
func (rationalStyle) Sign(x algebra.Rat) (int, bool)       { return x.Sign(), true }
func (rationalStyle) weakSign(x algebra.Rat) (int, bool)   { return x.Sign(), true }
func (rationalStyle) typicalSign(x algebra.Rat) int        { return x.Sign() }
func (rationalStyle) Compare(x, y algebra.Rat) int         { return x.Compare(y) }
func (rationalStyle) approximate(x algebra.Rat) float64    { return x.Float64() }
func (rationalStyle) sqrt(x algebra.Rat) (algebra.Rat, Node) {
	c, m := algebra.SqrtParts(x)
	return c, sqrtNode(m)
}

// contentOfRats returns the positive rational c such that the x/c are coprime
// integers, 1 when all are 0.
func contentOfRats(x ...algebra.Rat) algebra.Rat {
	num, den := new(big.Int), big.NewInt(1)
	var g big.Int
	for _, c := range x {
		num.GCD(nil, nil, num, c.Abs().Num())
		d := c.Den()
		g.GCD(nil, nil, den, d)
		den.Mul(den, d.Quo(d, &g))
	}
	if num.Sign() == 0 {
		return algebra.RatFromInt(1)
	}
	return algebra.RatFromFrac(num, den)
}

// above returns the numerator of x.
func (c *Constants) above(x Constant) Constant {
	num, _ := c.Parts(x)
	return num
}

// approximate returns x as a float64 where it is a number; what the assumptions
// say of it, or -1, where it is not.
func (c *Constants) approximate(x Constant) float64 {
	if c.IsNumber(x) {
		v, _ := c.Enclose(x, 60).Mid().Float64()
		return v
	}
	if sign, ok := c.Sign(x); ok {
		return float64(sign)
	}
	return -1
}

// typicalSign is the sign for symbols that all have the value 1/2.
func (c *Constants) typicalSign(x Constant) int {
	values := make([]Constant, len(c.formals))
	for i, f := range c.formals {
		values[i] = c.FromRat(algebra.NewRat(1, 2))
		if f.kind == piFormal {
			values[i] = c.Variable(i)
		}
	}
	if !x.HasRoot() {
		if y, err := c.Map(x, c.FunctionField, Constant{}, values); err == nil {
			if sign, ok := c.FunctionField.Sign(y); ok && sign != 0 {
				return sign
			}
		}
	}
	if c.Negative(x) {
		return -1
	}
	return 1
}

// sqrt takes the squares out of x.
func (c *Constants) sqrt(x Constant) (Constant, Node) {
	y, root := c.sqrtUpToSign(x)
	if sign, ok := c.Sign(y); ok && sign < 0 {
		y = c.Neg(y)
	}
	return y, root
}

func (c *Constants) sqrtUpToSign(x Constant) (Constant, Node) {
	if r, ok := c.Rational(x); ok {
		d, m := algebra.SqrtParts(r)
		return c.FromRat(d), sqrtNode(m)
	}
	if x.HasRoot() {
		return c.sqrtOfRoots(x)
	}
	r, factors, err := c.Factors(context.Background(), x)
	if err != nil {
		return c.One(), Apply("sqrt", c.Node(x))
	}
	outer, m := algebra.SqrtParts(r.Abs())
	y := c.FromRat(outer)
	inner := c.FromRat(algebra.RatFromBigInt(m))
	if r.Sign() < 0 {
		inner = c.Neg(inner)
	}
	below := c.One()
	for _, f := range factors {
		half := f.Exp / 2 // toward 0, so that k/m stays together
		z, err := c.power(f.Base, int64(half))
		if err != nil {
			panic(err) // factors are not zero
		}
		y = c.Mul(y, z)
		switch f.Exp % 2 {
		case 1:
			inner = c.Mul(inner, f.Base)
		case -1:
			below = c.Mul(below, f.Base)
		}
	}
	if len(inner.Numerator()) > 1 { // a sum under the root is not divided
		y, inner, below = c.quotient(y, below), c.Mul(inner, below), c.One()
	}
	switch {
	case c.Equal(below, c.One()) && c.Equal(inner, c.One()):
		return y, Int(1)
	case c.Equal(below, c.One()):
		return y, Apply("sqrt", c.expanded(inner))
	case c.Equal(inner, c.One()):
		return y, Div(Int(1), Apply("sqrt", c.expanded(below)))
	}
	return y, Apply("sqrt", Div(c.expanded(inner), c.expanded(below)))
}

// sqrtOfRoots is sqrt for an x that holds algebraic numbers.
func (c *Constants) sqrtOfRoots(x Constant) (Constant, Node) {
	if y, ok := c.exactSqrt(x); ok {
		return y, Int(1)
	}
	r := c.numericContent(x)
	rest := c.quotient(x, c.FromRat(r))
	if z, ok := c.exactSqrt(rest); ok {
		outer, inner := algebra.SqrtParts(r)
		return c.Mul(c.FromRat(outer), z), sqrtNode(inner)
	}
	for _, g := range c.generators { // of a root g of odd order q, g^q g^e is a square where g^e is none
		if a, ok := c.Rational(g.arg); ok && g.q%2 == 1 {
			if z, ok := c.exactSqrt(c.Mul(g.arg, rest)); ok {
				outer, inner := algebra.SqrtParts(r.Quo(a))
				return c.Mul(c.FromRat(outer), z), sqrtNode(inner)
			}
		}
	}
	if u, v, m, ok := c.binomialSurd(x); ok {
		if a, b, ok := denested(u, v, m); ok {
			return c.denestedNode(a, b, v.Sign())
		}
	}
	if n, ok := c.monomialRoot(x); ok {
		return c.One(), n
	}
	// All squares of the content leave the root, or those above the bar only, or none.
	outer, inner := algebra.SqrtParts(r)
	above, left := algebra.SqrtParts(algebra.RatFromBigInt(r.Num()))
	y, root := c.FromRat(outer), Apply("sqrt", c.Node(c.Mul(rest, c.FromRat(algebra.RatFromBigInt(inner)))))
	best := effort(Mul(Num(outer), root))
	for _, way := range []struct{ outer, inner algebra.Rat }{{above, algebra.RatFromFrac(left, r.Den())}, {algebra.RatFromInt(1), r}} {
		n := Apply("sqrt", c.Node(c.Mul(rest, c.FromRat(way.inner))))
		if cost := effort(Mul(Num(way.outer), n)); cost < best {
			y, root, best = c.FromRat(way.outer), n, cost
		}
	}
	return y, root
}

// exactSqrt returns the square root of x where it is in the field, without a sign
// where that is decided.
func (c *Constants) exactSqrt(x Constant) (Constant, bool) {
	p := algebra.NewPoly[Constant](c, c.Neg(x), c.Zero(), c.One())
	factors, err := c.FactorPoly(context.Background(), p)
	if err != nil || len(factors) != 2 {
		return x, false
	}
	y := factors[0].P.Coef(0)
	if sign, ok := c.Sign(y); ok && sign < 0 {
		y = c.Neg(y)
	}
	return y, true
}

// NodeOf writes an element of a field.
func NodeOf[E any](k algebra.Scalars[E], x E) Node { return styleOf(k).Node(x) }

// PolyNodeOf writes a polynomial over a field in v, highest power first.
func PolyNodeOf[E any](k algebra.Scalars[E], p algebra.Poly[E], v Node) Node {
	return presenter[E]{k: k, style: styleOf(k)}.poly(p, v)
}
