package mpoly

import (
	"context"
	"slices"
)

// SquareFree returns the square-free decomposition p = content prod P^Mult:
// primitive, square-free, pairwise coprime polynomials of positive leading
// coefficient and ascending, different multiplicities; none for a constant.
// The only error is ctx.Err(). Cost: two evaluations when p is square-free,
// else a few greatest common divisors.
//
// Source: Yun, On square-free decomposition algorithms, SYMSAC 1976.
func SquareFree(ctx context.Context, p Poly) ([]Factor, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if p.IsConstant() {
		return nil, nil
	}
	_, p = p.splitContent()
	low := p.minExponents()
	p = p.divMonomial(low)
	var parts []Factor
	for i := range p.n {
		if e := exponent(low, i); e > 0 {
			parts = append(parts, Factor{Variable(p.n, i), e})
		}
	}
	more, err := squareFreeUsed(ctx, p)
	if err != nil {
		return nil, err
	}
	return joinMultiplicities(append(parts, more...)), nil
}

// joinMultiplicities multiplies coprime parts of equal multiplicity and sorts.
func joinMultiplicities(parts []Factor) []Factor {
	slices.SortStableFunc(parts, func(a, b Factor) int { return a.Mult - b.Mult })
	var joined []Factor
	for _, g := range parts {
		if k := len(joined) - 1; k >= 0 && joined[k].Mult == g.Mult {
			joined[k].P = joined[k].P.Mul(g.P)
			continue
		}
		joined = append(joined, g)
	}
	return joined
}

// squareFreeUsed is SquareFree, but for joined multiplicities, for a primitive
// polynomial that is divisible by no variable.
func squareFreeUsed(ctx context.Context, p Poly) ([]Factor, error) {
	if p.IsConstant() {
		return nil, nil
	}
	top := p.maxExponents()
	var vars []int
	for i := range p.n {
		if exponent(top, i) > 0 {
			vars = append(vars, i)
		}
	}
	r := newProbe(p, vars)
	column := r.mainVariable()
	main := vars[column]
	if !r.primitive(column) {
		content, err := contentIn(ctx, p, main)
		if err != nil {
			return nil, err
		}
		if !content.IsConstant() {
			parts, err := SquareFree(ctx, content)
			if err != nil {
				return nil, err
			}
			if p, err = quotient(ctx, p, content); err != nil {
				return nil, err
			}
			more, err := squareFreePrimitive(ctx, p, main)
			if err != nil {
				return nil, err
			}
			return append(parts, more...), nil
		}
	}
	if m, ok := r.multiplicities(column); ok && len(m) == 2 {
		return []Factor{{p, 1}}, nil
	}
	return squareFreePrimitive(ctx, p, main)
}

// squareFreePrimitive is Yun's algorithm for p primitive over Z and in x_main.
func squareFreePrimitive(ctx context.Context, p Poly, main int) ([]Factor, error) {
	d := p.Derivative(main)
	g, err := GCD(ctx, p, d)
	if err != nil {
		return nil, err
	}
	c, w, err := quotients(ctx, p, d, g)
	if err != nil {
		return nil, err
	}
	var parts []Factor
	w = w.Sub(c.Derivative(main))
	for i := 1; !c.IsConstant(); i++ {
		if w.IsZero() { // all that is left has multiplicity i
			return append(parts, Factor{c, i}), nil
		}
		a, err := GCD(ctx, c, w)
		if err != nil {
			return nil, err
		}
		if c, w, err = quotients(ctx, c, w, a); err != nil {
			return nil, err
		}
		if !a.IsConstant() {
			parts = append(parts, Factor{a, i})
		}
		w = w.Sub(c.Derivative(main))
	}
	return parts, nil
}

// quotients returns p / g and q / g for a known common divisor g.
func quotients(ctx context.Context, p, q, g Poly) (pg, qg Poly, err error) {
	if pg, err = quotient(ctx, p, g); err == nil {
		qg, err = quotient(ctx, q, g)
	}
	return pg, qg, err
}
