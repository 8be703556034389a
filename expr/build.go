package expr

import "example.org/closedform/algebra"

// The constructors below build the trees of results: they drop zeros and ones,
// gather numbers, and put minus signs in front, but never reorder.

// Num returns the number x.
func Num(x algebra.Rat) Node { return Number{Val: x} }

// Int returns the number n.
func Int(n int64) Node { return Number{Val: algebra.RatFromInt(n)} }

// Sym returns the symbol name.
func Sym(name string) Node { return Symbol{Name: name} }

// Derivative returns the derivative of an unknown, the unknown itself for the
// order 0.
func Derivative(name string, order int) Node {
	if order == 0 {
		return Sym(name)
	}
	return Value{Name: name, Order: order}
}

// ValueAt returns the value of a derivative of an unknown at a time.
func ValueAt(name string, order int, at algebra.Rat) Node {
	return Value{Name: name, Order: order, At: Num(at)}
}

// Apply returns fn(arg) for a function of the vocabulary.
func Apply(fn string, arg Node) Node { return Call{Func: fn, Arg: arg} }

// Add returns the sum of the terms, without zeros and nested sums.
func Add(terms ...Node) Node {
	var out []Node
	for _, t := range terms {
		if s, ok := t.(Sum); ok {
			out = append(out, s.Terms...)
		} else if !isNumber(t, 0) {
			out = append(out, t)
		}
	}
	switch len(out) {
	case 0:
		return Int(0)
	case 1:
		return out[0]
	}
	return Sum{Terms: out}
}

// Negate returns -x, for a number or a negation without a Neg node.
func Negate(x Node) Node {
	switch v := x.(type) {
	case Number:
		return Num(v.Val.Neg())
	case Neg:
		return v.X
	}
	return Neg{X: x}
}

// Mul returns the product of the factors: numbers are gathered in front, with
// the surds that multiply them over their denominator, a sign goes outside, and
// a product of names alone becomes a single quotient, such as sqrt(3)*t/2.
func Mul(factors ...Node) Node {
	c := algebra.RatFromInt(1)
	var consts, rest []Node
	var gather func(f Node)
	gather = func(f Node) {
		switch v := f.(type) {
		case Number:
			c = c.Mul(v.Val)
		case Neg:
			c = c.Neg()
			gather(v.X)
		case Product:
			for _, g := range v.Factors {
				gather(g)
			}
		case Quotient:
			if d, ok := v.Den.(Number); ok && !d.Val.IsZero() {
				c = c.Quo(d.Val)
				gather(v.Num)
				return
			}
			num, top := splitNumber(v.Num)
			den, bottom := splitNumber(v.Den)
			c = c.Mul(num).Quo(den)
			if isNumber(bottom, 1) {
				if !isNumber(top, 1) {
					gather(top)
				}
				return
			}
			v = Quotient{Num: top, Den: bottom}
			f = v
			if last := len(rest) - 1; isNumber(v.Num, 1) && last >= 0 {
				if _, name := rest[last].(Symbol); name {
					rest[last] = Quotient{Num: rest[last], Den: v.Den}
					return
				}
			}
			rest = append(rest, f)
		default:
			if isConstant(f) {
				consts = append(consts, f)
			} else {
				rest = append(rest, f)
			}
		}
	}
	for _, f := range factors {
		gather(f)
	}
	factor, consts := joinSqrts(consts)
	c = c.Mul(factor)
	out := coefficient(c.Abs(), consts, rest)
	if c.Sign() < 0 {
		return Negate(out)
	}
	return out
}

// joinSqrts writes the product of square roots of numbers as c sqrt(m).
func joinSqrts(consts []Node) (algebra.Rat, []Node) {
	one := algebra.RatFromInt(1)
	radicand := one
	var others []Node
	count := 0
	for _, n := range consts {
		if f, ok := n.(Call); ok && f.Func == "sqrt" {
			if x, ok := f.Arg.(Number); ok && x.Val.Sign() > 0 {
				radicand = radicand.Mul(x.Val)
				count++
				continue
			}
		}
		others = append(others, n)
	}
	if count < 2 {
		return one, consts
	}
	c, m := algebra.SqrtParts(radicand)
	if root := sqrtNode(m); !isNumber(root, 1) {
		others = append([]Node{root}, others...)
	}
	return c, others
}

// splitNumber takes the number out of a product, 1 if there is none.
func splitNumber(n Node) (algebra.Rat, Node) {
	one := algebra.RatFromInt(1)
	switch v := n.(type) {
	case Number:
		if !v.Val.IsZero() {
			return v.Val, Int(1)
		}
	case Neg:
		c, rest := splitNumber(v.X)
		return c.Neg(), rest
	case Product:
		if x, ok := v.Factors[0].(Number); ok && !x.Val.IsZero() {
			return x.Val, product(v.Factors[1:])
		}
	}
	return one, n
}

// coefficient returns c consts rest for c >= 0.
func coefficient(c algebra.Rat, consts, rest []Node) Node {
	if c.IsZero() || len(consts)+len(rest) == 0 {
		return Num(c)
	}
	num, den := algebra.RatFromBigInt(c.Num()), algebra.RatFromBigInt(c.Den())
	top := consts
	if !num.IsOne() {
		top = append([]Node{Num(num)}, consts...)
	}
	if len(rest) > 0 {
		if q, ok := rest[0].(Quotient); ok { // one fraction for numbers and names
			if !isNumber(q.Num, 1) || len(top) == 0 {
				top = append(top, factorsOf(q.Num)...)
			}
			bottom := factorsOf(q.Den)
			if !den.IsOne() {
				bottom = append([]Node{Num(den)}, bottom...)
			}
			return product(append([]Node{Quotient{Num: product(top), Den: product(bottom)}}, rest[1:]...))
		}
	}
	switch {
	case den.IsOne():
		return product(append(top, rest...))
	case namesOnly(rest):
		return Quotient{Num: product(append(top, rest...)), Den: Num(den)}
	case len(consts) == 0:
		return product(append([]Node{Num(c)}, rest...))
	}
	return product(append([]Node{Quotient{Num: product(top), Den: Num(den)}}, rest...))
}

func factorsOf(n Node) []Node {
	if p, ok := n.(Product); ok {
		return p.Factors
	}
	return []Node{n}
}

func product(factors []Node) Node {
	if len(factors) == 1 {
		return factors[0]
	}
	return Product{Factors: factors}
}

// isConstant tells whether no name occurs in n.
func isConstant(n Node) bool {
	switch n.(type) {
	case Symbol, Value, RootSum:
		return false
	}
	constant := true
	Children(n, func(c Node) bool {
		constant = isConstant(c)
		return constant
	})
	return constant
}

// namesOnly tells whether the factors are names and powers of names.
func namesOnly(factors []Node) bool {
	for _, f := range factors {
		if p, ok := f.(Power); ok {
			f = p.Base
		}
		if _, ok := f.(Symbol); !ok {
			return false
		}
	}
	return true
}

// Div returns num/den.
func Div(num, den Node) Node {
	if d, ok := den.(Number); ok && !d.Val.IsZero() {
		return Mul(num, Num(d.Val.Inv()))
	}
	if q, ok := num.(Quotient); ok {
		return Div(q.Num, Mul(q.Den, den))
	}
	if q, ok := den.(Quotient); ok {
		if isNumber(q.Num, 1) {
			return Mul(num, q.Den)
		}
		return Div(Mul(num, q.Den), q.Num)
	}
	if n, ok := num.(Neg); ok {
		return Negate(Div(n.X, den))
	}
	return Quotient{Num: num, Den: den}
}

// Pow returns base^n for n >= 1.
func Pow(base Node, n int) Node {
	if n == 1 {
		return base
	}
	return Power{Base: base, Exp: Int(int64(n))}
}

// isNumber tells whether x is the number n.
func isNumber(x Node, n int64) bool {
	v, ok := x.(Number)
	return ok && v.Val.Equal(algebra.RatFromInt(n))
}

// signedNum returns c with its sign as a Neg, so that sums print differences.
func signedNum(c algebra.Rat) Node {
	if c.Sign() < 0 {
		return Neg{X: Num(c.Neg())}
	}
	return Num(c)
}
