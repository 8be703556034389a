package intpoly

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
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
	p = positive(p.primitivePart())
	if isSquareFree(p) {
		return []Factor{{p, 1}}, nil
	}
	if parts := squareFreeImage(p); parts != nil {
		return parts, nil
	}
	return squareFreeYun(ctx, p)
}

// certificatePrime is the largest prime below 2^31: half as dear as a longer
// one, and dividing the discriminant of few polynomials.
const certificatePrime = 1<<31 - 1

// isSquareFree reports whether p, of positive degree, is proven square-free by
// being so, with its degree, modulo one prime.
func isSquareFree(p Poly) bool {
	f := zp.NewField(certificatePrime)
	buf := make(zp.Poly, 2*len(p))
	a := reduceTo(buf[:len(p)], p, f)
	return len(a) == len(p) && f.GCDInPlace(a, f.DerivativeTo(buf[len(p):], a)).Degree() == 0
}

// squareFreeYun is Yun's algorithm over Z for a primitive p of positive degree
// with positive leading coefficient.
func squareFreeYun(ctx context.Context, p Poly) ([]Factor, error) {
	d := p.Derivative()
	content, pp := d.Primitive()
	var over [2]Poly
	if _, err := gcdPrimitive(ctx, p, pp, &over); err != nil {
		return nil, err
	}
	var parts []Factor
	c := over[0]
	w := Sub(over[1].Scale(content), c.Derivative())
	for i := 1; ; i++ {
		if len(w) == 0 { // all that is left has multiplicity i
			return append(parts, Factor{positive(c), i}), nil
		}
		content, pp = w.Primitive()
		a, err := gcdPrimitive(ctx, c, pp, &over)
		if err != nil {
			return nil, err
		}
		c = over[0]
		if a.Degree() > 0 {
			parts = append(parts, Factor{a, i})
		}
		w = Sub(over[1].Scale(content), c.Derivative())
	}
}

// quotient returns p / q for a known divisor q.
func quotient(p, q Poly) Poly {
	if q.Degree() == 0 && isOne(q[0]) {
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
