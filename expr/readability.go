package expr

import "example.org/closedform/algebra"

// effort measures what it takes to read a tree; of several ways to write a
// function the one of least effort is taken, the first among equals. It counts
//
//   - size: one for each name, function, fraction bar and sign,
//   - digits: one for each digit of a number, two from the fifth on,
//   - nesting: a root inside a root, and a fraction inside a fraction, count
//     twice with all they hold,
//   - search: a sum over the roots of a polynomial counts thrice with all it holds
//     and effortOfRoots, as its reader has to find these first.
func effort(n Node) int { return measure{}.of(n) }

const effortOfRoots = 20

// measure knows what surrounds the part that is measured.
type measure struct{ inRoot, inFraction bool }

func (m measure) of(n Node) int {
	switch v := n.(type) {
	case Number:
		cost := effortOfDigits(len(v.Val.Abs().Num().String()))
		if !v.Val.IsInt() {
			cost += 1 + effortOfDigits(len(v.Val.Den().String()))
		}
		return cost
	case Decimal:
		return len(v.Text)
	case Sum:
		cost := len(v.Terms) - 1
		for i, t := range v.Terms {
			if x, ok := t.(Neg); ok && i > 0 {
				t = x.X
			}
			cost += m.of(t)
		}
		return cost
	case Quotient:
		inner := measure{m.inRoot, true}
		return doubled(1+inner.of(v.Num)+inner.of(v.Den), m.inFraction)
	case Power:
		if x, ok := v.Exp.(Number); ok && !x.Val.IsInt() {
			return doubled(measure{true, m.inFraction}.of(v.Base)+m.of(v.Exp), m.inRoot)
		}
	case Call:
		if v.Func == "sqrt" {
			return doubled(1+measure{true, m.inFraction}.of(v.Arg), m.inRoot)
		}
	}
	cost := 1
	switch v := n.(type) {
	case RootSum:
		return 3 * (effortOfRoots + m.of(v.Poly) + m.of(v.Body))
	case Product, Power, Matrix:
		cost = 0
	case Value:
		cost += v.Order
	}
	Children(n, func(c Node) bool {
		cost += m.of(c)
		return true
	})
	return cost
}

func effortOfDigits(n int) int { return n + max(0, n-4) }

func doubled(cost int, twice bool) int {
	if twice {
		return 2 * cost
	}
	return cost
}

// easier returns the tree of less effort, the first if both take the same.
func easier(a, b Node) Node {
	if effort(b) < effort(a) {
		return b
	}
	return a
}

// effortOf sums the effort for the coefficients of a polynomial.
func (w presenter[E]) effortOf(p algebra.Poly[E]) int {
	cost := 0
	for _, c := range p.Coefs() {
		cost += effort(w.Node(c))
	}
	return cost
}
