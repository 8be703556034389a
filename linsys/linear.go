package linsys

import (
	"sort"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// derivative is u^(order) of the unknown with the index u.
type derivative struct {
	u, order int
}

// linear is the expression sum c u^(k) + rest(t); as an equation it is set to 0.
type linear[E any] struct {
	coef map[derivative]E // no zeros
	rest expr.Elementary[E]
	pos  expr.Pos
}

// keys returns the derivatives that occur, in a fixed order.
func (l linear[E]) keys() []derivative {
	keys := make([]derivative, 0, len(l.coef))
	for d := range l.coef {
		keys = append(keys, d)
	}
	sort.Slice(keys, func(i, j int) bool {
		if keys[i].u != keys[j].u {
			return keys[i].u < keys[j].u
		}
		return keys[i].order < keys[j].order
	})
	return keys
}

// add returns l + x m.
func (l linear[E]) add(k algebra.Scalars[E], x E, m linear[E]) linear[E] {
	out := linear[E]{coef: map[derivative]E{}, rest: l.rest.Add(m.rest.Scale(x)), pos: l.pos}
	for d, c := range l.coef {
		out.coef[d] = c
	}
	for d, c := range m.coef {
		c = k.Mul(x, c)
		if old, ok := out.coef[d]; ok {
			c = k.Add(old, c)
		}
		if k.IsZero(c) {
			delete(out.coef, d)
		} else {
			out.coef[d] = c
		}
	}
	return out
}

// derivative returns the derivative of l with respect to time.
func (l linear[E]) derivative() linear[E] {
	out := linear[E]{coef: map[derivative]E{}, rest: l.rest.Derivative(), pos: l.pos}
	for d, c := range l.coef {
		out.coef[derivative{d.u, d.order + 1}] = c
	}
	return out
}

// linearReader converts trees to linear forms in the unknowns. unknown tells
// whether a node is a derivative of an unknown, and which.
type linearReader[E any] struct {
	env     expr.Env[E]
	unknown func(expr.Node) (derivative, bool)
}

// occurs tells whether an unknown occurs in n.
func (r linearReader[E]) occurs(n expr.Node) bool {
	if _, ok := r.unknown(n); ok {
		return true
	}
	found := false
	expr.Children(n, func(c expr.Node) bool {
		found = found || r.occurs(c)
		return !found
	})
	return found
}

func (r linearReader[E]) read(n expr.Node) (linear[E], error) {
	k := r.env.K
	if d, ok := r.unknown(n); ok {
		return linear[E]{coef: map[derivative]E{d: k.One()}, rest: expr.ZeroElementary(k), pos: n.Pos()}, nil
	}
	if !r.occurs(n) {
		f, err := r.env.Elementary(n)
		return linear[E]{coef: map[derivative]E{}, rest: f, pos: n.Pos()}, err
	}
	switch v := n.(type) {
	case expr.Value:
		// Not an unknown, so not a function that anybody knows.
		_, err := r.env.Elementary(n)
		return linear[E]{}, err
	case expr.Neg:
		x, err := r.read(v.X)
		if err != nil {
			return x, err
		}
		return r.scale(x, k.FromInt(-1)), nil
	case expr.Sum:
		out := linear[E]{coef: map[derivative]E{}, rest: expr.ZeroElementary(k), pos: n.Pos()}
		for _, t := range v.Terms {
			x, err := r.read(t)
			if err != nil {
				return x, err
			}
			out = out.add(k, k.One(), x)
		}
		return out, nil
	case expr.Product:
		return r.product(v)
	case expr.Quotient:
		if r.occurs(v.Den) {
			return linear[E]{}, r.nonlinear(v)
		}
		x, err := r.read(v.Num)
		if err != nil {
			return x, err
		}
		c, err := r.constant(v.Den)
		if err != nil {
			return x, err
		}
		if k.IsZero(c) {
			return x, expr.Errorf(expr.Singular, v.Den.Pos(), "division by zero")
		}
		inv, err := k.Inv(c)
		return r.scale(x, inv), err
	case expr.Power:
		if !r.occurs(v.Exp) {
			if c, err := r.constant(v.Exp); err == nil && k.Equal(c, k.One()) {
				return r.read(v.Base)
			}
		}
	}
	return linear[E]{}, r.nonlinear(n)
}

func (r linearReader[E]) nonlinear(n expr.Node) error {
	return expr.Errorf(expr.Nonlinear, n.Pos(), "%s is not linear in the states", expr.Quote(n.String()))
}

func (r linearReader[E]) scale(l linear[E], x E) linear[E] {
	zero := linear[E]{coef: map[derivative]E{}, rest: expr.ZeroElementary(r.env.K), pos: l.pos}
	return zero.add(r.env.K, x, l)
}

// product reads a product in which exactly one factor may hold unknowns.
func (r linearReader[E]) product(v expr.Product) (linear[E], error) {
	k := r.env.K
	var out linear[E]
	found := false
	c := k.One()
	for _, f := range v.Factors {
		if r.occurs(f) {
			if found {
				return out, r.nonlinear(v)
			}
			found = true
			var err error
			if out, err = r.read(f); err != nil {
				return out, err
			}
			continue
		}
		x, err := r.constant(f)
		if err != nil {
			return out, err
		}
		c = k.Mul(c, x)
	}
	return r.scale(out, c), nil
}

// constant reads a coefficient of an unknown, which must not depend on time.
func (r linearReader[E]) constant(n expr.Node) (E, error) {
	f, err := r.env.Elementary(n)
	if err != nil {
		// What is outside the class of inputs is no coefficient either, but if it
		// is so for its dependence on time, that is the fault to name.
		if e, ok := err.(*expr.Error); ok && e.Kind == expr.OutsideClass && r.dependsOnTime(n) {
			return r.env.K.Zero(), r.timeVarying(n)
		}
		return r.env.K.Zero(), err
	}
	c, ok := f.Constant()
	if !ok {
		return c, r.timeVarying(n)
	}
	return c, nil
}

func (r linearReader[E]) timeVarying(n expr.Node) error {
	return expr.Errorf(expr.TimeVarying, n.Pos(), "the coefficient %s depends on %s: models have constant coefficients", expr.Quote(n.String()), r.env.Variable)
}

func (r linearReader[E]) dependsOnTime(n expr.Node) bool {
	if s, ok := n.(expr.Symbol); ok {
		return s.Name == r.env.Variable
	}
	found := false
	expr.Children(n, func(c expr.Node) bool {
		found = found || r.dependsOnTime(c)
		return !found
	})
	return found
}
