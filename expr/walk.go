package expr

import "slices"

// Children calls visit for every child of n in source order, until it returns
// false.
func Children(n Node, visit func(Node) bool) {
	each := func(nodes ...Node) {
		for _, c := range nodes {
			if c != nil && !visit(c) {
				return
			}
		}
	}
	switch v := n.(type) {
	case Value:
		each(v.At)
	case Sum:
		each(v.Terms...)
	case Product:
		each(v.Factors...)
	case Quotient:
		each(v.Num, v.Den)
	case Power:
		each(v.Base, v.Exp)
	case Neg:
		each(v.X)
	case Call:
		each(v.Arg)
	case RootSum:
		each(v.Poly, v.Body)
	case Matrix:
		each(slices.Concat(v.Rows...)...)
	}
}
