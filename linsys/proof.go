package linsys

import (
	"context"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// Proof is the result of substituting a response into the model as it was
// read: the residual of every equation and of every side condition, reduced to
// normal form. It uses the images of the response, their values and derivatives
// at the origin, and nothing of how they were found.
type Proof struct {
	// Residuals holds left side minus right side of every equation, in the order
	// of the text; "0" when it vanishes identically.
	Residuals []string
	// Sides holds the same for every side condition.
	Sides []string
}

// Holds tells whether every residual is zero.
func (p Proof) Holds() bool {
	for _, list := range [][]string{p.Residuals, p.Sides} {
		for _, r := range list {
			if r != "0" {
				return false
			}
		}
	}
	return true
}

// Residual returns "0" when all residuals of the equations vanish, the first
// that does not otherwise.
func (p Proof) Residual() string { return firstNonzero(p.Residuals) }

// Side returns "0" when all residuals of the side conditions vanish, the first
// that does not otherwise.
func (p Proof) Side() string { return firstNonzero(p.Sides) }

func firstNonzero(residuals []string) string {
	for _, r := range residuals {
		if r != "0" {
			return r
		}
	}
	return "0"
}

// substitution is a solution of the model as the proof needs it: numerators of
// the unknowns over one common denominator d, and their derivatives at 0.
type substitution[E any] struct {
	k   algebra.Scalars[E]
	den expr.Denominator[E]
	d   algebra.Poly[E]
	num []algebra.Poly[E]
	at0 [][]E // at0[u][j] is the j-th derivative of the unknown u at 0
}

// substitute prepares the images of the unknowns for derivatives up to order
// top, over a denominator that the forcing's divides.
func substitute[E any](k algebra.Scalars[E], images []expr.Image[E], forcing expr.Denominator[E], top int) substitution[E] {
	s := substitution[E]{k: k, den: forcing}
	for _, y := range images {
		s.den = s.den.Join(y.Denominator())
	}
	s.d = s.den.Poly()
	deg := s.d.Degree()
	for _, y := range images {
		n := s.den.Numerator(y)
		// N/D = y(0)/s + y'(0)/s^2 + ..., a division of power series in 1/s.
		at0 := make([]E, top+1)
		for j := range at0 {
			x := k.Zero()
			if i := deg - 1 - j; i >= 0 && i <= n.Degree() {
				x = n.Coef(i)
			}
			for i := range j {
				if e := deg - (j - i); e >= 0 {
					x = k.Sub(x, k.Mul(s.d.Coef(e), at0[i]))
				}
			}
			at0[j] = x
		}
		s.num = append(s.num, n)
		s.at0 = append(s.at0, at0)
	}
	return s
}

// residual returns the numerator over d of the image of an equation's left side
// minus its right side. The image of u^(m) is s^m Y - s^(m-1) y(0) - ... -
// y^(m-1)(0).
func (s substitution[E]) residual(eq linear[E], homogeneous bool) algebra.Poly[E] {
	var terms []algebra.Multiple[E]
	var initial []E // coefficients of what the derivatives subtract
	for _, d := range eq.keys() {
		c := eq.coef[d]
		terms = append(terms, algebra.Multiple[E]{C: c, P: s.num[d.u], Shift: d.order})
		for len(initial) < d.order {
			initial = append(initial, s.k.Zero())
		}
		for j := range d.order {
			i := d.order - 1 - j
			initial[i] = s.k.Sub(initial[i], s.k.Mul(c, s.at0[d.u][j]))
		}
	}
	one := s.k.One()
	terms = append(terms, algebra.Multiple[E]{C: one, P: algebra.NewPoly[E](s.k, initial...).Mul(s.d)})
	if !homogeneous {
		terms = append(terms, algebra.Multiple[E]{C: one, P: s.den.Numerator(eq.rest.Image())})
	}
	return algebra.Combine[E](s.k, terms)
}

// side returns the residual of a side condition.
func (s substitution[E]) side(c linear[E], homogeneous bool) E {
	x := s.k.Zero()
	if !homogeneous {
		x = c.rest.Initial()
	}
	for _, d := range c.keys() {
		x = s.k.Add(x, s.k.Mul(c.coef[d], s.at0[d.u][d.order]))
	}
	return x
}

// prove substitutes the unknowns' images, and those of the multiples of the
// free constants, into the equations and conditions.
func prove[E any](ctx context.Context, k algebra.Scalars[E], eqs, conditions []linear[E], base []expr.Image[E], free [][]expr.Image[E]) (Proof, error) {
	var p Proof
	top := 0
	forcing := expr.NewDenominator[E](k, nil)
	for _, list := range [][]linear[E]{eqs, conditions} {
		for _, eq := range list {
			for d := range eq.coef {
				top = max(top, d.order)
			}
			forcing = forcing.Join(eq.rest.Image().Denominator())
		}
	}
	// The free constants multiply solutions of the homogeneous problem.
	parts := []substitution[E]{substitute(k, base, forcing, top)}
	for _, f := range free {
		parts = append(parts, substitute(k, f, expr.NewDenominator[E](k, nil), top))
	}
	verdict := func(residual func(s substitution[E], homogeneous bool) (string, bool)) (string, error) {
		for i, s := range parts {
			if err := ctx.Err(); err != nil {
				return "", wrapCancel(err)
			}
			if text, zero := residual(s, i > 0); !zero {
				return text, nil
			}
		}
		return "0", nil
	}
	p.Residuals = make([]string, len(eqs))
	err := expr.InParallel(len(eqs), func(i int) (err error) {
		defer catchLimit(&err)
		p.Residuals[i], err = verdict(func(s substitution[E], h bool) (string, bool) {
			r := s.residual(eqs[i], h)
			if r.IsZero() {
				return "0", true
			}
			return "(" + r.String() + ")/(" + s.d.String() + ")", false
		})
		return err
	})
	if err != nil {
		return p, err
	}
	for _, c := range conditions {
		v, err := verdict(func(s substitution[E], h bool) (string, bool) {
			x := s.side(c, h)
			return k.Text(x), k.IsZero(x)
		})
		if err != nil {
			return p, err
		}
		p.Sides = append(p.Sides, v)
	}
	return p, nil
}
