package expr

import (
	"slices"

	"example.org/closedform/algebra"
)

// mixer replaces the numbers of a tree that take more than mostExactEffort to read by
// decimals; where there is one, so it does with all roots, cosines and sines.
type mixer struct {
	digits   int
	rounding bool // there are decimals
}

// mixed returns a tree with decimals in place of long numbers.
func mixed(n Node, digits int) Node {
	out := mixer{digits: digits}.node(n)
	if holdsDecimal(out) {
		return mixer{digits: digits, rounding: true}.node(n)
	}
	return out
}

func holdsDecimal(n Node) bool {
	_, found := n.(Decimal)
	Children(n, func(c Node) bool {
		found = found || holdsDecimal(c)
		return !found
	})
	return found
}

// staysExact tells whether a number is written as it is.
func (m mixer) staysExact(n Node) bool {
	return effort(n) <= mostExactEffort && (!m.rounding || isPlain(n))
}

// isPlain tells whether neither roots nor functions occur in a number.
func isPlain(n Node) bool {
	switch v := n.(type) {
	case Call:
		return false
	case Power:
		if e, ok := v.Exp.(Number); !ok || !e.Val.IsInt() {
			return false
		}
	}
	plain := true
	Children(n, func(c Node) bool {
		plain = isPlain(c)
		return plain
	})
	return plain
}

func (m mixer) node(n Node) Node {
	if isNumeric(n) {
		return m.number(n)
	}
	switch v := n.(type) {
	case Neg:
		x := m.node(v.X)
		if s, ok := x.(Sum); ok {
			terms := make([]Node, len(s.Terms))
			for i, t := range s.Terms {
				terms[i] = signed(Negate(t))
			}
			return Sum{Terms: terms}
		}
		return Negate(x)
	case Product, Quotient:
		return m.product(n)
	case Sum:
		terms := make([]Node, len(v.Terms))
		for i, t := range v.Terms {
			terms[i] = m.node(t)
		}
		return Add(terms...)
	case Power:
		return Power{Base: m.node(v.Base), Exp: v.Exp}
	case Call:
		return Call{Func: v.Func, Arg: m.node(v.Arg)}
	}
	return n
}

// number writes a number, exactly if it is short.
func (m mixer) number(n Node) Node {
	if m.staysExact(n) {
		return n
	}
	if x, ok := n.(Number); ok {
		return decimalNode(algebra.RatDecimal(x.Val.Big(), m.digits), nil, m.digits)
	}
	for prec := uint(64 + 4*m.digits); prec <= mostPrecision; prec *= 2 {
		b, ok := encloseNode(n, prec)
		if !ok {
			return n
		}
		if s, ok := b.Decimal(m.digits); ok {
			return decimalNode(s, nil, m.digits)
		}
	}
	return n
}

// product gathers the numbers of a product of quotients in one.
func (m mixer) product(n Node) Node {
	above, below, rest := m.strip(n)
	number := Div(Mul(above...), Mul(below...))
	if spread, ok := m.distributed(n); ok {
		return m.node(spread)
	}
	if m.staysExact(number) {
		return m.inside(n)
	}
	return Mul(m.number(number), rest)
}

// distributed takes the number in front of a product into a sum in it, if that has
// decimals for coefficients: there is one number for each term then, not two.
func (m mixer) distributed(n Node) (Node, bool) {
	p, ok := n.(Product)
	if !ok {
		return n, false
	}
	var numbers, others []Node
	var sum *Sum
	for _, f := range p.Factors {
		if s, ok := f.(Sum); ok && sum == nil && !isNumeric(f) {
			sum = &s
		} else if isNumeric(f) {
			numbers = append(numbers, f)
		} else {
			others = append(others, f)
		}
	}
	if sum == nil || len(numbers) == 0 || !slices.ContainsFunc(sum.Terms, m.hasDecimalInFront) {
		return n, false
	}
	terms := make([]Node, len(sum.Terms))
	for i, t := range sum.Terms {
		terms[i] = Mul(append(slices.Clone(numbers), t)...)
	}
	return Mul(append(others, Sum{Terms: terms})...), true
}

// strip returns the numbers of a product above and below the bar, and what is left.
func (m mixer) strip(n Node) (above, below []Node, rest Node) {
	if isNumeric(n) {
		return []Node{n}, nil, Int(1)
	}
	switch v := n.(type) {
	case Neg:
		above, below, rest = m.strip(v.X)
		return above, below, Negate(rest)
	case Product:
		var factors []Node
		for _, f := range v.Factors {
			a, b, r := m.strip(f)
			above, below, factors = append(above, a...), append(below, b...), append(factors, r)
		}
		return above, below, Mul(factors...)
	case Quotient:
		above, below, num := m.strip(v.Num)
		b, a, den := m.strip(v.Den)
		return append(above, a...), append(below, b...), Div(num, den)
	}
	return nil, nil, m.node(n)
}

// hasDecimalInFront tells whether the coefficient of a term becomes a decimal.
func (m mixer) hasDecimalInFront(term Node) bool {
	if isNumeric(term) {
		return !m.staysExact(term)
	}
	above, below, _ := m.strip(term)
	return !m.staysExact(Div(Mul(above...), Mul(below...)))
}

// inside writes the factors of a product whose numbers stay as they are.
func (m mixer) inside(n Node) Node {
	if isNumeric(n) {
		return n
	}
	switch v := n.(type) {
	case Neg:
		return Neg{X: m.inside(v.X)}
	case Product:
		factors := make([]Node, len(v.Factors))
		for i, f := range v.Factors {
			factors[i] = m.inside(f)
		}
		return Product{Factors: factors}
	case Quotient:
		return Quotient{Num: m.inside(v.Num), Den: m.inside(v.Den)}
	}
	return m.node(n)
}

// isNumeric tells whether a tree is a number: no name but pi occurs in it.
func isNumeric(n Node) bool {
	switch v := n.(type) {
	case Symbol:
		return v.Name == "pi"
	case Value, RootSum, Matrix:
		return false
	}
	numeric := true
	Children(n, func(c Node) bool {
		numeric = isNumeric(c)
		return numeric
	})
	return numeric
}

// encloseNode returns a ball around a number.
func encloseNode(n Node, prec uint) (out algebra.Ball, ok bool) {
	one := algebra.BallFromRat(algebra.RatFromInt(1).Big(), prec)
	switch v := n.(type) {
	case Number:
		return algebra.BallFromRat(v.Val.Big(), prec), true
	case Symbol:
		return algebra.Pi(prec), v.Name == "pi"
	case Neg:
		x, ok := encloseNode(v.X, prec)
		return x.Neg(), ok
	case Sum:
		for _, t := range v.Terms {
			x, ok := encloseNode(t, prec)
			if !ok {
				return out, false
			}
			out = out.Add(x, prec)
		}
		return out, true
	case Product:
		out = one
		for _, f := range v.Factors {
			x, ok := encloseNode(f, prec)
			if !ok {
				return out, false
			}
			out = out.Mul(x, prec)
		}
		return out, true
	case Quotient:
		x, ok1 := encloseNode(v.Num, prec)
		y, ok2 := encloseNode(v.Den, prec)
		if !ok1 || !ok2 || y.ContainsZero() {
			return out, false
		}
		return x.Quo(y, prec), true
	case Power:
		x, ok1 := encloseNode(v.Base, prec)
		e, ok2 := v.Exp.(Number)
		if !ok1 || !ok2 {
			return out, false
		}
		num, ok1 := algebra.RatFromBigInt(e.Val.Num()).Int64()
		den, ok2 := algebra.RatFromBigInt(e.Val.Den()).Int64()
		if sign, certain := x.Sign(); !ok1 || !ok2 || num < 0 || den > 1 && (!certain || sign < 0) {
			return out, false
		}
		if den > 1 {
			x = x.Root(int(den), prec)
		}
		out = one
		for range num {
			out = out.Mul(x, prec)
		}
		return out, true
	case Call:
		x, ok := encloseNode(v.Arg, prec)
		if !ok {
			return out, false
		}
		switch v.Func {
		case "exp":
			return x.Exp(prec), true
		case "cos", "sin":
			sin, cos := x.SinCos(prec)
			if v.Func == "cos" {
				return cos, true
			}
			return sin, true
		case "atan":
			return algebra.Atan2(x, one, prec), true
		case "sqrt":
			if sign, certain := x.Sign(); !certain || sign < 0 {
				return out, false
			}
			return x.Sqrt(prec), true
		}
	}
	return out, false
}
