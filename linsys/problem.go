package linsys

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

func (p *problemOver[E]) originNode() expr.Node { return expr.NodeOf(p.k, p.origin) }

// elements calls visit for the numbers of the problem.
func (p *problemOver[E]) elements(visit func(E)) {
	visit(p.origin)
	for _, list := range [][]linear[E]{p.equations, p.conditions} {
		for _, l := range list {
			for _, d := range l.keys() {
				visit(l.coef[d])
			}
			l.rest.Elements(visit)
		}
	}
}

func (p *problemOver[E]) parameters() []string {
	c, ok := any(p).(*problemOver[expr.Constant])
	if !ok {
		return nil
	}
	var all []expr.Constant
	c.elements(func(x expr.Constant) { all = append(all, x) })
	return c.k.(*expr.Constants).SymbolsIn(all...)
}

// simplest returns the problem over Q if all its numbers are rational, and
// without algebraic numbers if it holds none.
func simplest(p *problemOver[expr.Constant]) problem {
	rational, plain := true, true
	p.elements(func(x expr.Constant) {
		_, ok := p.k.Rational(x)
		rational = rational && ok
		plain = plain && !x.HasRoot()
	})
	if !rational {
		c := p.k.(*expr.Constants)
		if k, ok := c.WithoutRoot(); ok && plain && c.Degree() > 1 {
			out, _ := mapProblem[expr.Constant, expr.Constant](p, k, func(x expr.Constant) (expr.Constant, error) { return x, nil })
			return out
		}
		return p
	}
	to := func(x expr.Constant) (algebra.Rat, error) {
		r, _ := p.k.Rational(x)
		return r, nil
	}
	out, _ := mapProblem[expr.Constant, algebra.Rat](p, algebra.Q, to)
	return out
}

// mapProblem returns the problem over another field.
func mapProblem[E, F any](p *problemOver[E], k algebra.Scalars[F], to func(E) (F, error)) (*problemOver[F], error) {
	out := &problemOver[F]{k: k}
	var err error
	if out.origin, err = to(p.origin); err != nil {
		return nil, err
	}
	mapList := func(list []linear[E]) ([]linear[F], error) {
		var mapped []linear[F]
		for _, l := range list {
			m := linear[F]{coef: map[derivative]F{}, pos: l.pos}
			for d, c := range l.coef {
				x, err := to(c)
				if err != nil {
					return nil, err
				}
				if !k.IsZero(x) {
					m.coef[d] = x
				}
			}
			if m.rest, err = expr.MapElementary(l.rest, k, to); err != nil {
				return nil, err
			}
			mapped = append(mapped, m)
		}
		return mapped, nil
	}
	if out.equations, err = mapList(p.equations); err != nil {
		return nil, err
	}
	out.conditions, err = mapList(p.conditions)
	return out, err
}

// answer is a solved problem over some field; implemented by *answerOver.
type answer interface {
	functions(variable string, constants []string) (states, transient, steady []expr.Function)
	constants() int
	modes(ctx context.Context, states []string) ([]Mode, error)
	asProblem() problem
	proofs() []Proof
	conditions(ctx context.Context) (*expr.Conditions, error)
	substitute(ctx context.Context, m *Model, names []string, values map[string]expr.Node) (answer, []string, error)
}

// answerOver is a solved problem over the field of E.
type answerOver[E any] struct {
	*problemOver[E]
	*solution[E]
}

func (p *problemOver[E]) solve(ctx context.Context, m *Model) (_ answer, err error) {
	defer catchLimit(&err)
	sol, err := solve(ctx, p.k, m.names, p.equations, p.conditions)
	if err != nil {
		return nil, err
	}
	return &answerOver[E]{p, sol}, nil
}

func (a *answerOver[E]) functions(variable string, constants []string) (states, transient, steady []expr.Function) {
	function := func(base []expr.Image[E], free [][]expr.Image[E]) []expr.Function {
		out := make([]expr.Function, len(base))
		for u := range out {
			var terms []expr.FreeTerm[E]
			for i, f := range free {
				terms = append(terms, expr.FreeTerm[E]{Name: constants[i], Image: f[u]})
			}
			out[u] = expr.NewFunction(a.k, variable, a.origin, base[u], terms...)
		}
		return out
	}
	return function(a.base, a.free), function(a.complementary, a.free), function(a.particular, nil)
}

func (a *answerOver[E]) asProblem() problem { return a.problemOver }

func (a *answerOver[E]) constants() int { return len(a.free) }

func (a *answerOver[E]) proofs() []Proof { return []Proof{a.proof, a.partProof} }

// conditions returns what must not vanish for the model to be the one that was
// solved: the denominators of its coefficients, and the determinants of the
// highest derivatives and of the side conditions.
func (a *answerOver[E]) conditions(ctx context.Context) (*expr.Conditions, error) {
	s, ok := any(a).(*answerOver[expr.Constant])
	if !ok {
		return expr.NewConditions(nil), nil
	}
	list := expr.NewConditions(s.problemOver.k.(*expr.Constants))
	list.ImposeSigns()
	enter := func(f func(context.Context, expr.Constant) error, elements []expr.Constant) error {
		for _, x := range elements {
			if err := f(ctx, x); err != nil {
				return wrapCancel(err)
			}
		}
		return nil
	}
	var coefs []expr.Constant
	s.elements(func(x expr.Constant) { coefs = append(coefs, x) })
	if err := enter(list.ExcludeDenominator, append(coefs, s.divided...)); err != nil {
		return nil, err
	}
	return list, enter(list.Exclude, s.nonzero)
}

// substitute solves the problem with values for symbols and free constants. The
// free constants of the answer are those of a without values; their names are
// returned.
func (a *answerOver[E]) substitute(ctx context.Context, m *Model, names []string, values map[string]expr.Node) (out answer, left []string, err error) {
	defer catchLimit(&err)
	from, _ := any(a.problemOver.k).(*expr.Constants)
	limits, err := a.conditions(ctx)
	if err != nil {
		return nil, nil, err
	}
	_, err = expr.Grow(expr.NewConstants(), func(k *expr.Constants) error {
		s, err := expr.NewSubstitution(from, k, values)
		if err != nil {
			return err
		}
		if broken, err := limits.Broken(s); err != nil {
			return err
		} else if broken != "" {
			return expr.Errorf(expr.Singular, expr.Pos{}, "the values violate the condition %s of the model", broken)
		}
		to := func(x E) (expr.Constant, error) { return expr.SubstituteScalar(s, x) }
		if k, err = s.Field(); err != nil {
			return err
		}
		p, err := mapProblem[E, expr.Constant](a.problemOver, k, to)
		if err != nil {
			return err
		}
		var over problem = p
		if s.IsRational(names) {
			over = simplest(p)
		}
		switch p := over.(type) {
		case *problemOver[algebra.Rat]:
			rational := func(x expr.Constant) (algebra.Rat, bool) { return k.Rational(x) }
			out, left, err = substituted(ctx, a, p, m, s, names, rational)
		case *problemOver[expr.Constant]:
			out, left, err = substituted(ctx, a, p, m, s, names, func(x expr.Constant) (expr.Constant, bool) { return x, true })
		}
		return err
	})
	return out, left, err
}

// substituted solves the problem p, which came from that of a by the
// substitution s. The free constants keep their meaning where the images of a
// have values; the excluded cases of a general solution have constants of their
// own.
func substituted[E, F any](ctx context.Context, a *answerOver[E], p *problemOver[F], m *Model, s *expr.Substitution, names []string, to func(expr.Constant) (F, bool)) (answer, []string, error) {
	sol, err := solve(ctx, p.k, m.names, p.equations, p.conditions)
	if err != nil {
		return nil, nil, err
	}
	out := &answerOver[F]{p, sol}
	if len(a.free) == 0 {
		return out, nil, nil
	}
	images := func(list []expr.Image[E]) ([]expr.Image[F], error) {
		return expr.SubstituteImages(ctx, s, list, p.k, to)
	}
	base, err := images(a.base)
	if err != nil {
		return out, names[:len(sol.free)], nil
	}
	var free [][]expr.Image[F]
	for _, f := range a.free {
		h, err := images(f)
		if err != nil {
			return out, names[:len(sol.free)], nil
		}
		free = append(free, h)
	}
	var left []string
	var open [][]expr.Image[F]
	for i, name := range names {
		v, given := s.Value(name)
		if !given {
			left, open = append(left, name), append(open, free[i])
			continue
		}
		x, _ := to(v) // in the field, as it was chosen
		for u := range base {
			base[u] = base[u].Add(free[i][u].Scale(x))
		}
	}
	sol.base, sol.free = base, open
	for u := range base {
		sol.complementary[u] = base[u].Sub(sol.particular[u])
	}
	sol.proof, err = prove(ctx, p.k, p.equations, p.conditions, sol.base, sol.free)
	return out, left, err
}

// rationals turns numbers into trees.
func rationals(values map[string]*big.Rat) (map[string]expr.Node, error) {
	out := map[string]expr.Node{}
	for name, v := range values {
		if v == nil {
			return nil, expr.Errorf(expr.Syntax, expr.Pos{}, "%s has the value nil", expr.Quote(name))
		}
		out[name] = expr.Num(algebra.RatFromBig(v))
	}
	return out, nil
}
