package expr

import "strings"

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
	sign, ok := c.Sign(x)
	weak, decided := c.weakSign(x)
	if ok && (sign < 0 || sign == 0 && kind != notNegative) || decided && weak < 0 && kind == isPositive {
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
