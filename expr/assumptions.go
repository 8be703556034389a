package expr

import (
	"context"
	"strings"

	"example.org/closedform/algebra"
)

// Assumptions are inequalities between expressions in the symbols of a field,
// such as k > 0 or k1 > k2, that results may rely on.
type Assumptions struct {
	list []assumption
}

// assumption says that p is positive, not negative, or not zero.
type assumption struct {
	p    Constant
	kind assumptionKind
}

type assumptionKind int

const (
	isPositive assumptionKind = iota
	notNegative
	notZero
)

func (a Assumptions) mapped(to func(Constant) Constant) Assumptions {
	var out Assumptions
	for _, x := range a.list {
		out.list = append(out.list, assumption{to(x.p), x.kind})
	}
	return out
}

// Relation is a relation between two expressions, as in k1 > k2.
type Relation struct {
	Left, Right Node
	Op          string // > >= < <= != =
	Pos         Pos
}

func (r Relation) String() string { return r.Left.String() + " " + r.Op + " " + r.Right.String() }

// relationSigns are the signs of relations, longer ones first.
var relationSigns = []struct{ written, op string }{
	{">=", ">="}, {"<=", "<="}, {"!=", "!="}, {"≥", ">="}, {"≤", "<="}, {"≠", "!="}, {">", ">"}, {"<", "<"}, {"=", "="},
}

// ParseRelations reads relations such as "k > 0", "k1 > k2 > 0" or "a != b",
// several of them separated by commas.
func ParseRelations(src string, limits Limits) ([]Relation, error) {
	var out []Relation
	column := 1
	for _, part := range strings.Split(src, ",") {
		var sides []Node
		var ops []string
		rest, at := part, column
		for {
			cut, sign := len(rest), ""
			op := ""
			for _, s := range relationSigns {
				if i := strings.Index(rest, s.written); i >= 0 && i < cut {
					cut, sign, op = i, s.written, s.op
				}
			}
			n, err := Parse(rest[:cut], limits)
			if err != nil {
				if e, ok := err.(*Error); ok && e.Pos.IsValid() {
					moved := *e
					moved.Pos.Column += at - 1
					return nil, &moved
				}
				return nil, err
			}
			sides = append(sides, n)
			if sign == "" {
				break
			}
			ops = append(ops, op)
			at += len([]rune(rest[:cut+len(sign)]))
			rest = rest[cut+len(sign):]
		}
		if len(ops) == 0 {
			return nil, Errorf(Syntax, Pos{1, column}, "%s is no relation such as k > 0", Quote(strings.TrimSpace(part)))
		}
		for i, op := range ops {
			out = append(out, Relation{Left: sides[i], Right: sides[i+1], Op: op, Pos: Pos{1, column}})
		}
		column += len([]rune(part)) + 1
	}
	return out, nil
}

// Assuming returns the field with one more assumption: that x is positive for
// the sign >, not negative for >=, not zero for !=. An assumption that cannot
// hold is an error.
func (c *Constants) assuming(x Constant, kind assumptionKind, at Pos) (*Constants, error) {
	if sign, ok := c.Sign(x); ok && (sign < 0 || sign == 0 && kind != notNegative) {
		return nil, Errorf(NeedsAssumption, at, "the assumption cannot hold")
	}
	out := *c
	out.shown = &sharedDisplay{}
	num, den := c.Parts(x)
	out.assumed.list = append(append([]assumption(nil), c.assumed.list...), assumption{c.Mul(num, den), kind})
	return &out, nil
}

// Assume returns the field with a relation among its symbols assumed.
func (c *Constants) Assume(r Relation, limits Limits) (*Constants, error) {
	var out *Constants
	grown, err := Grow(c, func(k *Constants) error {
		env := Env[Constant]{K: k, Lookup: k.Lookup, Limits: limits}
		left, err := env.Scalar(r.Left)
		if err != nil {
			return err
		}
		right, err := env.Scalar(r.Right)
		if err != nil {
			return err
		}
		x := k.Sub(left, right)
		switch r.Op {
		case ">":
			out, err = k.assuming(x, isPositive, r.Pos)
		case ">=":
			out, err = k.assuming(x, notNegative, r.Pos)
		case "<":
			out, err = k.assuming(k.Neg(x), isPositive, r.Pos)
		case "<=":
			out, err = k.assuming(k.Neg(x), notNegative, r.Pos)
		case "!=":
			out, err = k.assuming(x, notZero, r.Pos)
		default:
			err = Errorf(Syntax, r.Pos, "an assumption is an inequality; equations belong to the model")
		}
		return err
	})
	if err != nil {
		return grown, err
	}
	return out, nil
}

// Sign returns the sign of x, where it is a number or the assumptions decide it.
func (c *Constants) Sign(x Constant) (int, bool) {
	if sign, ok := c.FunctionField.Sign(x); ok || c.IsNumber(x) {
		return sign, ok
	}
	return c.signOf(x, false)
}

// weakSign is Sign where x may be 0 as well, and even powers are not negative.
func (c *Constants) weakSign(x Constant) (int, bool) {
	if sign, ok := c.FunctionField.Sign(x); ok || c.IsNumber(x) {
		return sign, ok
	}
	return c.signOf(x, true)
}

func (c *Constants) signOf(x Constant, weak bool) (int, bool) {
	if t := x.Numerator(); c.hasRoot(t) {
		return 0, false
	}
	r, factors, err := c.Factors(context.Background(), x)
	if err != nil {
		return 0, false
	}
	sign := r.Sign()
	for _, f := range factors {
		s, ok := c.factorSign(f.Base, weak)
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

// NotZero tells whether x is known not to vanish.
func (c *Constants) NotZero(x Constant) bool {
	if sign, ok := c.FunctionField.Sign(x); ok {
		return sign != 0
	}
	if c.hasRoot(x.Numerator()) {
		return false
	}
	_, factors, err := c.Factors(context.Background(), x)
	if err != nil || c.IsZero(x) {
		return false
	}
	for _, f := range factors {
		if f.Exp > 0 && !c.factorNotZero(f.Base) {
			return false
		}
	}
	return true
}

func (c *Constants) hasRoot(terms []algebra.Term) bool {
	for _, t := range terms {
		if t.Exp[0] > 0 {
			return true
		}
	}
	return false
}

// factorNotZero tells whether an irreducible polynomial is known not to vanish.
func (c *Constants) factorNotZero(p Constant) bool {
	if sign, ok := c.factorSign(p, false); ok {
		return sign != 0
	}
	for _, a := range c.assumed.list {
		// A product that does not vanish has no factor that does.
		if a.kind == notNegative || c.hasRoot(a.p.Numerator()) {
			continue
		}
		_, factors, err := c.Factors(context.Background(), a.p)
		if err != nil {
			continue
		}
		for _, f := range factors {
			if c.Equal(f.Base, p) {
				return true
			}
		}
	}
	return false
}

// factorSign returns the sign of an irreducible polynomial where the
// assumptions decide it: every assumption p > 0 that is linear in a variable
// makes p the variable in its place, and what is a sum of terms of one sign
// then has that sign. With weak set, p may be 0 as well.
func (c *Constants) factorSign(p Constant, weak bool) (int, bool) {
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
	positive := make([]bool, len(c.formals))
	for i, f := range c.formals {
		positive[i] = f.kind == expFormal || f.kind == piFormal
	}
	for _, a := range c.assumed.list {
		if i := c.plainVariable(a.p); i >= 0 && a.kind == isPositive {
			positive[i] = true
		}
	}
	var known []Constant
	for _, a := range c.assumed.list {
		if a.kind == isPositive && c.plainVariable(a.p) < 0 {
			known = append(known, a.p)
		}
	}
	for len(known) > 0 {
		i, image := c.solvedFor(known[0])
		known = known[1:]
		if i < 0 {
			continue
		}
		values := make([]Constant, len(c.formals))
		for j := range values {
			values[j] = c.Variable(j)
		}
		values[i] = image
		for j, q := range append(known, p) {
			q, err := c.Map(q, c.FunctionField, c.rootOrZero(), values)
			switch {
			case err != nil:
				return 0, false
			case j < len(known):
				known[j] = q
			default:
				p = q
			}
		}
		positive[i] = true
	}
	sign, strict := 0, false
	for _, t := range p.Numerator() {
		s, nonzero := t.Coef.Sign(), true
		for i, e := range t.Exp {
			if e == 0 {
				continue
			}
			if i == 0 || !positive[i-1] {
				nonzero = false
				if i == 0 || e%2 == 1 {
					return 0, false
				}
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

func (c *Constants) rootOrZero() Constant {
	if c.Degree() > 1 {
		return c.RootElement()
	}
	return Constant{}
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

// solvedFor returns a variable x that p = m x + r, m a positive number, is
// linear in, and (x - r)/m, its value with x in place of p; -1 if there is none.
func (c *Constants) solvedFor(p Constant) (int, Constant) {
	if c.hasRoot(p.Numerator()) {
		return -1, p
	}
next:
	for i, f := range c.formals {
		if f.kind != symbolFormal {
			continue
		}
		var m algebra.Rat
		rest := p
		for _, t := range p.Numerator() {
			if t.Exp[i+1] == 0 {
				continue
			}
			for j, e := range t.Exp {
				if j == i+1 && e > 1 || j != i+1 && e > 0 {
					continue next
				}
			}
			m = algebra.RatFromBigInt(t.Coef)
			rest = c.Sub(rest, c.FromTerms([]algebra.Term{t}))
		}
		if m.Sign() > 0 {
			return i, c.Mul(c.FromRat(m.Inv()), c.Sub(c.Variable(i), rest))
		}
	}
	return -1, p
}
