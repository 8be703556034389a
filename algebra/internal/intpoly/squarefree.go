package intpoly

import (
	"context"
	"math/big"
)

// Factor is a polynomial together with its multiplicity.
type Factor struct {
	P    Poly
	Mult int
}

// SquareFree returns the primitive, square-free, pairwise coprime parts of
// p = content prod P^Mult with positive leading coefficients and ascending
// multiplicities; none for a constant. Cost: a few gcds.
//
// Source: Yun, On square-free decomposition algorithms, SYMSAC 1976.
func SquareFree(p Poly) []Factor {
	parts, _ := squareFree(context.Background(), p) // never cancelled
	return parts
}

// squareFree is SquareFree with cancellation.
func squareFree(ctx context.Context, p Poly) ([]Factor, error) {
	if len(p) < 2 {
		return nil, nil
	}
	_, p = p.Primitive()
	d := p.Derivative()
	g, err := gcd(ctx, p, d)
	if err != nil {
		return nil, err
	}
	if g.Degree() == 0 {
		return []Factor{{p, 1}}, nil
	}
	var parts []Factor
	c := quotient(p, g)
	w := Sub(quotient(d, g), c.Derivative())
	for i := 1; ; i++ {
		if len(w) == 0 { // all that is left has multiplicity i
			return append(parts, Factor{positive(c), i}), nil
		}
		a, err := gcd(ctx, c, w)
		if err != nil {
			return nil, err
		}
		if a.Degree() > 0 {
			parts = append(parts, Factor{a, i})
		}
		c = quotient(c, a)
		w = Sub(quotient(w, a), c.Derivative())
	}
}

// quotient returns p / q for a known divisor q.
func quotient(p, q Poly) Poly {
	if q.Degree() == 0 && q[0].IsInt64() && q[0].Int64() == 1 {
		return p
	}
	r, ok := DivExact(p, q)
	if !ok {
		panic("intpoly: a known divisor does not divide")
	}
	return r
}

// positive returns p or -p, whichever has a positive leading coefficient.
func positive(p Poly) Poly {
	if len(p) > 0 && p.lead().Sign() < 0 {
		return p.Scale(big.NewInt(-1))
	}
	return p
}
