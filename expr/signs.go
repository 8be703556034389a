package expr

import (
	"context"
	"slices"

	"example.org/closedform/algebra"
)

// Sign returns the sign of x, where it is a number or the assumptions decide it.
func (c *Constants) Sign(x Constant) (int, bool) { return c.signOf(x, false) }

// weakSign is Sign where x may be 0 as well: 1 says x >= 0.
func (c *Constants) weakSign(x Constant) (int, bool) { return c.signOf(x, true) }

// NotZero tells whether x is known not to vanish.
func (c *Constants) NotZero(x Constant) bool {
	if sign, ok := c.Sign(x); ok {
		return sign != 0
	}
	if x.HasRoot() {
		return false
	}
	_, factors, err := c.Factors(context.Background(), x)
	if err != nil {
		return false
	}
	for _, f := range factors {
		if f.Exp > 0 && !c.factorNotZero(f.Base) {
			return false
		}
	}
	return true
}

func (c *Constants) signOf(x Constant, weak bool) (int, bool) {
	if sign, ok := c.FunctionField.Sign(x); ok || c.IsNumber(x) {
		return sign, ok
	}
	if x.HasRoot() {
		num, den := c.Parts(x)
		s, ok := c.polynomialSign(num, weak, 0)
		t, too := c.signOf(den, false)
		return s * t, ok && too
	}
	if sign, ok := c.assumedSign(x); ok {
		return sign, true
	}
	r, factors, err := c.Factors(context.Background(), x)
	if err != nil {
		return 0, false
	}
	sign := r.Sign()
	for _, f := range factors {
		s, ok := c.polynomialSign(f.Base, weak, 0)
		switch {
		case f.Exp%2 == 0 && (weak || ok || c.factorNotZero(f.Base)):
		case !ok:
			return 0, false
		case f.Exp%2 != 0:
			sign *= s
		}
	}
	return sign, true
}

// assumedSign returns the sign of x where x is an assumed expression times a
// square.
func (c *Constants) assumedSign(x Constant) (int, bool) {
	for _, a := range c.assumed.list {
		if a.kind != isPositive || a.p.HasRoot() {
			continue
		}
		r, factors, err := c.Factors(context.Background(), c.quotient(x, a.p))
		if err != nil {
			continue
		}
		if !slices.ContainsFunc(factors, func(f algebra.Power) bool { return f.Exp%2 != 0 || !c.onlyIn(f.Base, a.p) }) {
			return r.Sign(), true
		}
	}
	return 0, false
}

// onlyIn tells whether p is a factor of an expression that does not vanish.
func (c *Constants) onlyIn(p, whole Constant) bool {
	_, factors, err := c.Factors(context.Background(), whole)
	return err == nil && slices.ContainsFunc(factors, func(f algebra.Power) bool { return c.Equal(f.Base, p) })
}

// factorNotZero tells whether an irreducible polynomial is known not to vanish.
func (c *Constants) factorNotZero(p Constant) bool {
	if sign, ok := c.polynomialSign(p, false, 0); ok {
		return sign != 0
	}
	for _, a := range c.assumed.list {
		// A product that does not vanish has no factor that does.
		if a.kind == notNegative || a.p.HasRoot() {
			continue
		}
		_, factors, err := c.Factors(context.Background(), a.p)
		if err != nil {
			continue
		}
		if slices.ContainsFunc(factors, func(f algebra.Power) bool { return c.Equal(f.Base, p) }) {
			return true
		}
	}
	return false
}

// mostSignDepth bounds the discriminants of discriminants.
const mostSignDepth = 3

// polynomialSign returns the sign of a polynomial where the assumptions decide
// it: every inequality q > 0 that is linear in a symbol makes q the variable in
// its place, and what is a sum of terms of one sign then has that sign. So has a
// quadratic polynomial with a negative discriminant. With weak set, p may be 0.
func (c *Constants) polynomialSign(p Constant, weak bool, depth int) (int, bool) {
	if sign, ok := c.FunctionField.Sign(p); ok {
		return sign, true
	}
	for _, a := range c.assumed.list {
		if a.kind == notZero || a.kind == notNegative && !weak || a.p.Size() != p.Size() {
			continue
		}
		if r, ok := c.Rational(c.quotient(a.p, p)); ok {
			return r.Sign(), true
		}
	}
	// What is known of single symbols may be enough, and the steps replace some of
	// it.
	known := c.knowledge(depth == 0)
	if _, symbolic := c.Surd(); !symbolic || !p.HasRoot() {
		if sign, ok := c.termwiseSign(p, &signKnowledge{c: c, state: known.plain, nonzero: known.plainNonzero}, weak); ok {
			return sign, true
		}
	}
	if q, ok := known.apply(p); ok {
		if sign, ok := c.termwiseSign(q, known, weak); ok {
			return sign, true
		}
	}
	if depth == mostSignDepth || p.HasRoot() {
		return 0, false
	}
	for i, f := range c.formals {
		if f.kind != symbolFormal {
			continue
		}
		a, b, e, ok := c.quadraticIn(p, i)
		if !ok {
			continue
		}
		d := c.Sub(c.Mul(b, b), c.Mul(c.FromInt(4), c.Mul(a, e)))
		if s, ok := c.polynomialSign(d, false, depth+1); ok && s < 0 {
			return c.polynomialSign(a, false, depth+1)
		}
	}
	return 0, false
}

// termwiseSign returns the sign that all terms of p have.
func (c *Constants) termwiseSign(p Constant, known *signKnowledge, weak bool) (int, bool) {
	// The coefficients are numbers of Q(a).
	type term struct{ coef, monomial []algebra.Term }
	var terms []term
next:
	for _, t := range p.Numerator() {
		for i := range terms {
			if slices.Equal(terms[i].monomial[0].Exp[1:], t.Exp[1:]) {
				terms[i].coef = append(terms[i].coef, t)
				continue next
			}
		}
		terms = append(terms, term{[]algebra.Term{t}, []algebra.Term{t}})
	}
	sign, strict := 0, false
	for _, t := range terms {
		for i, x := range t.coef {
			exp := make([]int, len(x.Exp))
			exp[0] = x.Exp[0]
			t.coef[i].Exp = exp
		}
		s, ok := c.FunctionField.Sign(c.FromTerms(t.coef))
		if !ok {
			return 0, false
		}
		nonzero := true
		for i, e := range t.monomial[0].Exp[1:] {
			if e == 0 {
				continue
			}
			nonzero = nonzero && (known.state[i] == isKnownPositive || e%2 == 0 && known.nonzero != nil && known.nonzero[i])
			if known.state[i] == isUnknown && e%2 == 1 {
				return 0, false
			}
		}
		if sign == 0 {
			sign = s
		}
		if s != sign {
			return 0, false
		}
		strict = strict || nonzero
	}
	return sign, strict || weak
}

// signKnowledge is what the assumptions say of the variables, after each step
// has put an expression in the place of one.
type signKnowledge struct {
	c     *Constants
	plain []int // before the steps
	// plainNonzero tells which symbols are assumed not to be 0; nonzero is that
	// where no step has replaced a symbol.
	plainNonzero, nonzero []bool
	state                 []int // after them
	steps                 []signStep
}

type signStep struct {
	i     int
	image Constant
}

const (
	isUnknown = iota
	isKnownNotNegative
	isKnownPositive
)

// knowledge gathers the inequalities; with exponentials set, e^x > 1 for x > 0 as
// well.
func (c *Constants) knowledge(exponentials bool) *signKnowledge {
	k := &signKnowledge{c: c, state: make([]int, len(c.formals))}
	for i, f := range c.formals {
		if f.kind == expFormal || f.kind == piFormal {
			k.state[i] = isKnownPositive
		}
	}
	level := map[assumptionKind]int{isPositive: isKnownPositive, notNegative: isKnownNotNegative}
	var known []assumption
	k.plainNonzero = make([]bool, len(c.formals))
	for _, a := range c.assumed.list {
		i := c.plainVariable(a.p)
		if a.kind == notZero {
			if i >= 0 {
				k.plainNonzero[i] = true
			}
			continue
		}
		if i >= 0 {
			k.state[i] = max(k.state[i], level[a.kind])
		} else {
			known = append(known, a)
		}
	}
	k.plain = slices.Clone(k.state)
	replaced := map[int]bool{}
	for _, a := range known {
		p, ok := k.apply(a.p)
		if !ok {
			continue
		}
		if i, image := c.solvedFor(p, k.state, replaced); i >= 0 {
			replaced[i] = true
			k.state[i] = level[a.kind]
			k.steps = append(k.steps, signStep{i, image})
		}
	}
	if exponentials {
		for i, f := range c.formals {
			if f.kind != expFormal {
				continue
			}
			if num, den := c.Parts(f.arg); c.Equal(den, c.One()) || c.IsNumber(den) {
				if s, ok := c.polynomialSign(num, false, 1); ok && s > 0 {
					k.steps = append(k.steps, signStep{i, c.Add(c.One(), c.Variable(i))})
				}
			}
		}
	}
	return k
}

// apply puts the steps' expressions into p.
func (k *signKnowledge) apply(p Constant) (Constant, bool) {
	c := k.c
	root := Constant{}
	if c.Degree() > 1 {
		if _, symbolic := c.Surd(); symbolic && p.HasRoot() {
			return p, false
		}
		root = c.RootElement()
	}
	for _, s := range k.steps {
		values := make([]Constant, len(c.formals))
		for j := range values {
			values[j] = c.Variable(j)
		}
		values[s.i] = s.image
		q, err := c.Map(p, c.FunctionField, root, values)
		if err != nil {
			return p, false
		}
		p = q
	}
	_, symbolic := c.Surd()
	return p, !symbolic || !p.HasRoot()
}

// plainVariable returns the index of the variable that p is a positive multiple
// of, or -1.
func (c *Constants) plainVariable(p Constant) int {
	t := p.Numerator()
	if len(t) != 1 || t[0].Coef.Sign() <= 0 {
		return -1
	}
	at := -1
	for i, e := range t[0].Exp {
		switch {
		case e == 1 && i > 0 && at < 0:
			at = i - 1
		case e != 0:
			return -1
		}
	}
	return at
}

// solvedFor returns a symbol x that p = m x + r, m a number, is linear in, and
// (x - r)/m, its value with x in place of p; -1 if there is none. One of which
// nothing is known is preferred, one that is replaced already is not taken.
func (c *Constants) solvedFor(p Constant, state []int, replaced map[int]bool) (int, Constant) {
	best, image := -1, p
	for i, f := range c.formals {
		if f.kind != symbolFormal || replaced[i] || best >= 0 && state[best] <= state[i] {
			continue
		}
		slope, rest, ok := c.linearIn(p, i)
		if !ok {
			continue
		}
		if m, ok := c.Rational(slope); ok {
			best, image = i, c.Mul(c.FromRat(m.Inv()), c.Sub(c.Variable(i), rest))
		}
	}
	return best, image
}

// quadraticIn returns a, b, e with p = a x^2 + b x + e, x the i-th variable.
func (c *Constants) quadraticIn(p Constant, i int) (a, b, e Constant, ok bool) {
	parts := make([][]algebra.Term, 3)
	for _, t := range p.Numerator() {
		n := t.Exp[i+1]
		if n > 2 {
			return a, b, e, false
		}
		t.Exp = slices.Clone(t.Exp)
		t.Exp[i+1] = 0
		parts[n] = append(parts[n], t)
	}
	return c.FromTerms(parts[2]), c.FromTerms(parts[1]), c.FromTerms(parts[0]), len(parts[2]) > 0
}
