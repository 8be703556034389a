package expr

import "example.org/closedform/algebra"

// phase is a term n atan(x) in the argument of a sine or cosine.
type phase struct {
	n  int64
	of Node // x
}

// mostPhase bounds the multiples of an arc tangent.
const mostPhase = 64

// splitPhases takes the terms n atan(x) out of an argument.
func splitPhases(arg Node) (rest Node, phases []phase) {
	terms := flatTerms(arg, false)
	var others []Node
	for _, t := range terms {
		if p, ok := phaseOf(t); ok {
			phases = append(phases, p)
		} else {
			others = append(others, t)
		}
	}
	if phases == nil {
		return arg, nil
	}
	return Add(others...), phases
}

// flatTerms returns the terms of a sum, also those in parentheses.
func flatTerms(n Node, minus bool) []Node {
	switch v := n.(type) {
	case Sum:
		var out []Node
		for _, t := range v.Terms {
			out = append(out, flatTerms(t, minus)...)
		}
		return out
	case Neg:
		return flatTerms(v.X, !minus)
	}
	if minus {
		return []Node{Negate(n)}
	}
	return []Node{n}
}

// phaseOf reads n atan(x).
func phaseOf(n Node) (phase, bool) {
	switch v := n.(type) {
	case Neg:
		p, ok := phaseOf(v.X)
		p.n = -p.n
		return p, ok
	case Product:
		if c, ok := v.Factors[0].(Number); ok && len(v.Factors) == 2 {
			p, ok := phaseOf(v.Factors[1])
			m, small := c.Val.Int64()
			p.n *= m
			return p, ok && small && abs(m) <= mostPhase && abs(p.n) <= mostPhase
		}
	case Call:
		return phase{1, v.Arg}, v.Func == "atan"
	}
	return phase{}, false
}

// turn returns the cosine and sine of an angle plus a phase, by the addition
// formulas: cos(atan x) = 1/sqrt(1 + x^2), and sin(atan x) is x times that.
func (r elementaryReader[E]) turn(cos, sin E, p phase) (E, E, error) {
	k := r.env.K
	x, err := r.env.Scalar(p.of)
	if err != nil {
		return cos, sin, err
	}
	length, err := (scalarEval[E]{k, r.env.Limits}).root(k.Add(k.One(), k.Mul(x, x)), algebra.NewRat(1, 2), p.of.Pos())
	if err != nil {
		return cos, sin, err
	}
	re, err := k.Inv(length)
	if err != nil {
		return cos, sin, err
	}
	im := k.Mul(x, re)
	if p.n < 0 {
		im = k.Neg(im)
	}
	for range abs(p.n) {
		cos, sin = k.Sub(k.Mul(cos, re), k.Mul(sin, im)), k.Add(k.Mul(cos, im), k.Mul(sin, re))
	}
	return cos, sin, nil
}
