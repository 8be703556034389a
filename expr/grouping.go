package expr

import "slices"

// grouped takes coefficients that several terms share, up to the sign, out of them,
// where the first of these stands: a/(a - b) e^(-bt) - a/(a - b) e^(-at) becomes
// a/(a - b) (e^(-bt) - e^(-at)). Oscillations are not mixed with what does not
// oscillate, but for constants.
func (w presenter[E]) grouped(terms []Node) []Node {
	type splitted struct {
		coefficient, wave Node
		minus             bool
		key               string
	}
	type group struct {
		splitted // the first term
		waves    []Node
		at       []int
	}
	parts := make([]splitted, len(terms))
	monotonic := map[string]bool{} // coefficients of terms that do not oscillate
	for i, t := range terms {
		p := &parts[i]
		p.coefficient, p.wave, p.minus = w.splitTerm(t)
		p.key = p.coefficient.String()
		if !isOne(p.wave) && !oscillates(p.wave) {
			monotonic[p.key] = true
		}
	}
	groups := map[string]*group{}
	var order []*group
	for i, p := range parts {
		key := p.key
		if oscillates(p.wave) || isOne(p.wave) && !monotonic[key] {
			key += " oscillating"
		}
		g := groups[key]
		if g == nil {
			g = &group{splitted: p}
			groups[key] = g
			order = append(order, g)
		}
		if p.minus != g.minus {
			p.wave = signed(Negate(p.wave))
		}
		g.waves, g.at = append(g.waves, p.wave), append(g.at, i)
	}
	out := slices.Clone(terms)
	for _, g := range order {
		switch {
		case len(g.waves) == 1, isNumber(g.coefficient, 1):
			continue
		case effort(g.coefficient) < shortCoefficient && !slices.ContainsFunc(g.waves, isOne):
			continue
		}
		n := Mul(g.coefficient, Sum{Terms: g.waves})
		if g.minus {
			n = Negate(n)
		}
		for _, i := range g.at {
			out[i] = Int(0)
		}
		out[g.at[0]] = n
	}
	return out
}

// shortCoefficient is the effort from which on a coefficient is taken out; shorter
// ones are where that leaves a 1: 2 - 2 e^(-t) becomes 2 (1 - e^(-t)).
const shortCoefficient = 3

func isOne(n Node) bool {
	if neg, ok := n.(Neg); ok {
		n = neg.X
	}
	return isNumber(n, 1)
}

// oscillates tells whether sines or cosines occur in a tree.
func oscillates(n Node) bool {
	if f, ok := n.(Call); ok && (f.Func == "cos" || f.Func == "sin") {
		return true
	}
	found := false
	Children(n, func(c Node) bool {
		found = oscillates(c)
		return !found
	})
	return found
}

// splitTerm returns what is constant in a term, the function of the time that it
// multiplies, and whether the term is negative.
func (w presenter[E]) splitTerm(n Node) (coefficient, wave Node, minus bool) {
	switch v := n.(type) {
	case Neg:
		coefficient, wave, minus = w.splitTerm(v.X)
		return coefficient, wave, !minus
	case Number:
		if v.Val.Sign() < 0 {
			return Num(v.Val.Neg()), Int(1), true
		}
	case Product:
		var constants, waves []Node
		for _, f := range v.Factors {
			if w.isConstantInTime(f) {
				constants = append(constants, f)
			} else {
				waves = append(waves, f)
			}
		}
		if len(constants) > 0 && len(waves) > 0 {
			return product(constants), product(waves), false
		}
	}
	if w.isConstantInTime(n) {
		return n, Int(1), false
	}
	return Int(1), n, false
}

// isConstantInTime tells whether the variable does not occur in a tree.
func (w presenter[E]) isConstantInTime(n Node) bool {
	if s, ok := n.(Symbol); ok {
		v, isName := w.variable.(Symbol)
		return !isName || s.Name != v.Name
	}
	constant := true
	Children(n, func(c Node) bool {
		constant = w.isConstantInTime(c)
		return constant
	})
	return constant
}
