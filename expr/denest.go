package expr

import (
	"math/big"
	"slices"

	"example.org/closedform/algebra"
)

// binomialSurd returns u, v, m with x = u + v sqrt(m), v not 0, where the algebraic
// numbers of the field are those of one square root.
func (c *Constants) binomialSurd(x Constant) (u, v, m algebra.Rat, ok bool) {
	if len(c.generators) != 1 || c.generators[0].q != 2 || !c.IsNumber(x) {
		return u, v, m, false
	}
	if _, symbolic := c.Surd(); symbolic {
		return u, v, m, false
	}
	if m, ok = c.Rational(c.generators[0].arg); !ok {
		return u, v, m, false
	}
	num, den := c.shown.get(c).to.Parts(c.shown.get(c).element(x))
	scale, ok := c.shown.get(c).to.Rational(den)
	if !ok {
		return u, v, m, false
	}
	at := len(c.formals) + 1 // the variable of the generator, behind the root
	for _, f := range c.formals {
		if f.kind == halfTangentFormal {
			at++
		}
	}
	for _, t := range num.Numerator() {
		for i, e := range t.Exp {
			if e > 0 && i != at || e > 1 { // pi, or e^a, which are numbers as well
				return u, v, m, false
			}
		}
		r := algebra.RatFromBigInt(t.Coef).Quo(scale)
		if t.Exp[at] == 0 {
			u = r
		} else {
			v = r
		}
	}
	return u, v, m, !v.IsZero()
}

// denested returns a and b with sqrt(u + v sqrt(m)) = sqrt(a) +- sqrt(b), a > b,
// the sign that of v: they are (u +- n)/2 where n^2 = u^2 - m v^2 has a rational
// root n.
func denested(u, v, m algebra.Rat) (a, b algebra.Rat, ok bool) {
	square := u.Mul(u).Sub(v.Mul(v).Mul(m))
	if square.Sign() <= 0 || u.Sign() <= 0 {
		return a, b, false
	}
	n, rest := algebra.SqrtParts(square)
	if rest.Cmp(big.NewInt(1)) != 0 {
		return a, b, false
	}
	half := algebra.NewRat(1, 2)
	return u.Add(n).Mul(half), u.Sub(n).Mul(half), true
}

// denestedNode writes sqrt(a) + sign sqrt(b).
func (c *Constants) denestedNode(a, b algebra.Rat, sign int) (Constant, Node) {
	p, m := algebra.SqrtParts(a)
	q, n := algebra.SqrtParts(b)
	content := contentOfRats(p, q)
	second := Mul(Num(q.Quo(content)), sqrtNode(n))
	if sign < 0 {
		second = Negate(second)
	}
	return c.FromRat(content), Sum{Terms: []Node{Mul(Num(p.Quo(content)), sqrtNode(m)), second}}
}

// monomialRoot writes the square root of a rational multiple of a power of one
// root of a rational number: the square root of 3 * 2^(2/3) is 108^(1/6).
func (c *Constants) monomialRoot(x Constant) (Node, bool) {
	if _, symbolic := c.Surd(); symbolic || !c.IsNumber(x) {
		return nil, false
	}
	d := c.shown.get(c)
	num, den := d.to.Parts(d.element(x))
	scale, ok := d.to.Rational(den)
	terms := num.Numerator()
	if !ok || len(terms) != 1 || terms[0].Coef.Sign() <= 0 {
		return nil, false
	}
	at := -1
	for i, e := range terms[0].Exp[1:] {
		if e > 0 {
			if at >= 0 || d.vars[i].generator == nil || d.vars[i].generator.q == 0 {
				return nil, false
			}
			at = i
		}
	}
	if at < 0 {
		return nil, false
	}
	g := d.vars[at].generator
	arg, ok := c.Rational(g.arg)
	if !ok || !arg.IsInt() {
		return nil, false
	}
	r := algebra.RatFromBigInt(terms[0].Coef).Quo(scale)
	return rootNode(r.Pow(g.q).Mul(arg.Pow(terms[0].Exp[at+1])), 2*g.q), true
}

// rootNode writes the q-th root of a positive rational number x.
func rootNode(x algebra.Rat, q int) Node {
	// (a/b)^(1/q) = (a b^(q-1))^(1/q)/b
	n := new(big.Int).Exp(x.Den(), big.NewInt(int64(q-1)), nil)
	outer, inner := powerParts(n.Mul(n, x.Num()), q)
	for p := 2; p <= q; p++ { // 4^(1/6) is 2^(1/3)
		for q%p == 0 {
			r, ok := exactRoot(inner, p)
			if !ok {
				break
			}
			inner, q = r, q/p
		}
	}
	var root Node
	switch {
	case q == 1:
		root = Num(algebra.RatFromBigInt(inner))
	case q == 2:
		root = sqrtNode(inner)
	default:
		base, e := perfectPower(inner) // 8^(1/4) is 2^(3/4)
		root = Power{Base: Num(algebra.RatFromBigInt(base)), Exp: Num(algebra.NewRat(int64(e), int64(q)))}
	}
	return Mul(Num(algebra.RatFromFrac(outer, x.Den())), root)
}

// surds writes a number that square roots of at least two rational numbers make as a
// sum of multiples of square roots: sqrt(2) + sqrt(3).
func (d *display) surds(num, den algebra.Fraction) (Node, bool) {
	scale, ok := d.to.Rational(den)
	if !ok {
		return nil, false
	}
	coefs := map[string]algebra.Rat{}
	var radicands []*big.Int
	used := map[int]bool{}
	for _, t := range num.Numerator() {
		x := algebra.RatFromInt(1)
		for i, e := range t.Exp[1:] {
			if e == 0 {
				continue
			}
			g := d.vars[i].generator
			if g == nil || g.q != 2 {
				return nil, false
			}
			arg, ok := d.from.Rational(g.arg)
			if !ok {
				return nil, false
			}
			used[i] = true
			x = x.Mul(arg.Pow(e))
		}
		outer, m := algebra.SqrtParts(x)
		key := m.String()
		if _, ok := coefs[key]; !ok {
			radicands = append(radicands, m)
		}
		coefs[key] = coefs[key].Add(outer.Mul(algebra.RatFromBigInt(t.Coef)).Quo(scale))
	}
	if len(used) < 2 {
		return nil, false
	}
	slices.SortFunc(radicands, (*big.Int).Cmp)
	var all []algebra.Rat
	plus := false
	for _, m := range radicands {
		x := coefs[m.String()]
		all, plus = append(all, x), plus || x.Sign() > 0
	}
	content := contentOfRats(all...)
	if !plus {
		content = content.Neg()
	}
	var first, rest []Node
	for i, m := range radicands {
		n := Mul(Num(all[i].Quo(content)), sqrtNode(m))
		if isNumber(n, 0) {
			continue
		}
		if n = signed(n); isNegated(n) {
			rest = append(rest, n)
		} else {
			first = append(first, n)
		}
	}
	return Mul(Num(content), Add(append(first, rest...)...)), true
}
