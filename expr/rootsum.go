package expr

import (
	"context"
	"errors"
	"slices"
	"strconv"

	"example.org/closedform/algebra"
)

// image converts a tree to the image of a function of t: terms of the
// elementary class, and sums over named roots.
func (env Env[E]) image(n Node) (Image[E], error) {
	env.Limits = env.Limits.WithDefaults()
	return env.sumImage(n, new(int))
}

// sumImage is image, with the orders of the sums over roots counted in order.
func (env Env[E]) sumImage(n Node, order *int) (Image[E], error) {
	if !hasRootSum(n) {
		f, err := env.Elementary(n)
		if err != nil {
			return Image[E]{}, err
		}
		return f.Image(), nil
	}
	switch v := n.(type) {
	case RootSum:
		return env.rootSum(v, order)
	case Neg:
		f, err := env.sumImage(v.X, order)
		if err != nil {
			return f, err
		}
		return f.Scale(env.K.FromInt(-1)), nil
	case Product:
		return env.multiple(v.Factors, order)
	case Quotient:
		if hasRootSum(v.Den) {
			break
		}
		f, err := env.sumImage(v.Num, order)
		if err != nil {
			return f, err
		}
		c, err := env.constant(v.Den)
		if err != nil {
			return f, err
		}
		inv, err := env.K.Inv(c)
		if err != nil {
			return f, Errorf(Singular, v.Den.Pos(), "division by zero: %s vanishes", Quote(v.Den.String()))
		}
		return f.Scale(inv), nil
	case Sum:
		sum := ZeroImage(env.K)
		for _, t := range v.Terms {
			f, err := env.sumImage(t, order)
			if err != nil {
				return f, err
			}
			sum = sum.Add(f)
			if sum.degree() > env.Limits.Degree+1 {
				return f, beyondOrder(env.Limits, t.Pos())
			}
		}
		return sum, nil
	}
	return Image[E]{}, Errorf(OutsideClass, n.Pos(), "a sum over named roots stands alone or in a sum")
}

// multiple returns the image of a sum over roots times constants.
func (env Env[E]) multiple(factors []Node, order *int) (Image[E], error) {
	c := env.K.One()
	var sum Node
	for _, f := range factors {
		if hasRootSum(f) {
			if sum != nil {
				return Image[E]{}, Errorf(OutsideClass, f.Pos(), "a product of sums over named roots")
			}
			sum = f
			continue
		}
		x, err := env.constant(f)
		if err != nil {
			return Image[E]{}, err
		}
		c = env.K.Mul(c, x)
	}
	f, err := env.sumImage(sum, order)
	return f.Scale(c), err
}

// constant reads a factor of a sum over roots.
func (env Env[E]) constant(n Node) (E, error) {
	x, err := env.Scalar(n)
	var e *Error
	if errors.As(err, &e) && e.Kind == OutsideClass && !isIrrational(err) {
		return x, Errorf(OutsideClass, n.Pos(), "a sum over named roots is multiplied by constants only")
	}
	return x, err
}

func beyondOrder(l Limits, at Pos) *Error {
	return Errorf(LimitExceeded, at, "the function satisfies no equation of order below %d, or is written with more roots than that", l.Degree+1)
}

func hasRootSum(n Node) bool {
	_, found := n.(RootSum)
	Children(n, func(c Node) bool {
		found = found || hasRootSum(c)
		return !found
	})
	return found
}

// rootSum returns the image of a sum over the roots z of a square-free p of
// terms c(z) t^k e^(zt), or of terms c(z) t^k cos zt and c(z) t^k sin zt for an
// even p.
func (env Env[E]) rootSum(v RootSum, order *int) (Image[E], error) {
	k := env.K
	inner := env
	inner.Variable, inner.Local = v.Var, false
	lookup := env.Lookup
	inner.Lookup = func(s Symbol) (E, error) {
		if s.Name == env.Variable {
			return k.Zero(), Errorf(OutsideClass, s.Pos(), "%s in the polynomial of a sum over roots", env.Variable)
		}
		return lookup(s)
	}
	f, err := inner.Elementary(v.Poly)
	if err != nil {
		return Image[E]{}, err
	}
	p, ok := f.poly()
	if !ok || p.Degree() < 1 {
		return Image[E]{}, Errorf(OutsideClass, v.Poly.Pos(), "%s is not a polynomial in %s", Quote(v.Poly.String()), v.Var)
	}
	if *order += p.Degree(); *order > env.Limits.Degree+1 {
		return Image[E]{}, beyondOrder(env.Limits, v.Pos())
	}
	p = p.Monic(k)
	if algebra.GCD[E](k, p, p.Derivative()).Degree() > 0 {
		return Image[E]{}, Errorf(OutsideClass, v.Poly.Pos(), "the polynomial of a sum over roots has a multiple root")
	}
	l := algebra.NewExtension[E](k, p, v.Var)
	body, err := (rootBody[E]{env: env, l: l, root: v.Var, work: new(int)}).read(v.Body)
	if err != nil {
		return Image[E]{}, err
	}
	if slices.ContainsFunc(body, rootTerm[E].isWave) {
		if p, body, err = env.exponentials(v, p, body); err != nil {
			return Image[E]{}, err
		}
	}
	return env.sumOverRoots(v, p, body)
}

// sumOverRoots returns the image of the sum of terms c(z) t^k e^(zt) over the
// roots of a square-free p. With the k-th coefficient C, the image of the sum of
// C(z) e^(zt) is N/p, N = C p' mod p; a factor t is -d/ds.
func (env Env[E]) sumOverRoots(v RootSum, p algebra.Poly[E], terms []rootTerm[E]) (Image[E], error) {
	k := env.K
	factors, err := k.FactorPoly(context.Background(), p)
	if err != nil {
		return Image[E]{}, err
	}
	l := algebra.NewExtension[E](k, p, v.Var)
	dp := l.Reduce(p.Derivative())
	den := NewDenominator(k, factors)
	var byPower []algebra.Poly[E]
	for _, t := range terms {
		if t.exps != 1 {
			return Image[E]{}, Errorf(OutsideClass, v.Body.Pos(), "the terms of a sum over roots have the factor exp(%s*%s) once", v.Var, env.Variable)
		}
		if (t.n+1)*p.Degree() > env.Limits.Degree+1 {
			return Image[E]{}, beyondOrder(env.Limits, v.Body.Pos())
		}
		for len(byPower) <= t.n {
			byPower = append(byPower, l.Zero())
		}
		byPower[t.n] = byPower[t.n].Add(l.Mul(t.c, dp))
	}
	sum := ZeroImage(k)
	for n := len(byPower) - 1; n >= 0; n-- { // Horner's rule
		sum = sum.TimesT().Add(den.Image(byPower[n]))
	}
	return sum, nil
}

// exponentials takes a sum of cosines and sines over the roots w of an even P to
// one of exponentials over z = iw: with C even, C(w) cos wt contributes C(-iz)
// e^(zt) for both signs of w together, and w C(w) sin wt contributes -z C(-iz)
// e^(zt). What is odd cancels.
func (env Env[E]) exponentials(v RootSum, p algebra.Poly[E], terms []rootTerm[E]) (algebra.Poly[E], []rootTerm[E], error) {
	k := env.K
	for i := 1; i <= p.Degree(); i += 2 {
		if !k.IsZero(p.Coef(i)) {
			return p, nil, Errorf(OutsideClass, v.Poly.Pos(), "in a sum of cosines and sines over roots, %s has even powers of %s only", Quote(v.Poly.String()), v.Var)
		}
	}
	out := make([]rootTerm[E], len(terms))
	for i, t := range terms {
		switch {
		case t.exps != 0 || !t.isWave():
			return p, nil, Errorf(OutsideClass, v.Body.Pos(), "the terms of a sum over roots have one factor cos(%s*%s) or sin(%s*%s) each", v.Var, env.Variable, v.Var, env.Variable)
		case t.wave == "cos":
			out[i] = rootTerm[E]{n: t.n, exps: 1, c: turned(k, t.c, 0)}
		default:
			out[i] = rootTerm[E]{n: t.n, exps: 1, c: turned(k, t.c, 1).Neg()}
		}
	}
	return turned(k, p, 0).Monic(k), out, nil
}

// poly returns f as a polynomial in its variable, if it is one.
func (f Elementary[E]) poly() (algebra.Poly[E], bool) {
	var p algebra.Poly[E]
	for _, t := range f.terms {
		if !f.k.IsZero(t.a) || !f.k.IsZero(t.b) {
			return p, false
		}
		p = p.Add(algebra.Monomial[E](f.k, t.c, t.n))
	}
	return p, true
}

// rootTerm is c t^n e^(exps z t) with c in K[z]/(p), times the cosine or sine of
// zt that wave names.
type rootTerm[E any] struct {
	n, exps int
	wave    string
	c       algebra.Poly[E]
}

func (t rootTerm[E]) isWave() bool { return t.wave != "" }

// rootBody reads the body of a sum over roots as a sum of root terms.
type rootBody[E any] struct {
	env  Env[E]
	l    *algebra.Extension[E]
	root string
	work *int // spent so far
}

// spend counts work, in products of short numbers, and fails when there is too
// much.
func (r rootBody[E]) spend(units int, at Pos) error {
	if *r.work += units; *r.work > mostRootWork {
		return Errorf(LimitExceeded, at, "multiplying out the terms of a sum over roots takes more than %d steps", mostRootWork)
	}
	return nil
}

// mostRootWork bounds the work for the body of one sum over roots.
const mostRootWork = 1 << 21

// extent returns the number of the coefficients of terms, and the bits of the
// longest of them.
func (r rootBody[E]) extent(terms []rootTerm[E]) (coefs, bits int) {
	for _, t := range terms {
		coefs += t.c.Degree() + 1
		for i := range t.c.Degree() + 1 {
			bits = max(bits, bitLen(r.env.K, t.c.Coef(i)))
		}
	}
	return coefs, bits
}

func (r rootBody[E]) outside(n Node) error {
	return Errorf(OutsideClass, n.Pos(), "%s is not a sum of terms c(%s)*%s^k*exp(%s*%s)", Quote(n.String()), r.root, r.env.Variable, r.root, r.env.Variable)
}

func (r rootBody[E]) read(n Node) ([]rootTerm[E], error) {
	_, isCall := n.(Call)
	if _, isPower := n.(Power); (isCall || isPower) && !r.mentions(n) {
		x, err := r.env.Scalar(n)
		if err != nil {
			return nil, err
		}
		return []rootTerm[E]{{c: r.l.FromBase(x)}}, nil
	}
	switch v := n.(type) {
	case Number:
		return []rootTerm[E]{{c: r.l.FromBase(r.env.K.FromRat(v.Val))}}, nil
	case Symbol:
		switch v.Name {
		case r.root:
			return []rootTerm[E]{{c: r.l.Root()}}, nil
		case r.env.Variable:
			t := []rootTerm[E]{{n: 1, c: r.l.One()}}
			if r.env.Local && !r.env.K.IsZero(r.env.Origin) {
				t = append(t, rootTerm[E]{c: r.l.FromBase(r.env.Origin)})
			}
			return t, nil
		}
		x, err := r.env.Lookup(v)
		if err != nil {
			return nil, err
		}
		return []rootTerm[E]{{c: r.l.FromBase(x)}}, nil
	case Neg:
		return r.readProduct([]Node{Int(-1), v.X})
	case Sum:
		var out []rootTerm[E]
		for _, t := range v.Terms {
			x, err := r.read(t)
			if err != nil {
				return nil, err
			}
			out = r.collect(append(out, x...))
		}
		return out, nil
	case Product:
		return r.readProduct(v.Factors)
	case Quotient:
		num, err := r.read(v.Num)
		if err != nil {
			return nil, err
		}
		den, err := r.read(v.Den)
		if err != nil {
			return nil, err
		}
		if len(den) == 0 {
			return nil, Errorf(Singular, v.Den.Pos(), "the denominator %s vanishes at the roots", Quote(v.Den.String()))
		}
		if len(den) != 1 || den[0].n > 0 || den[0].exps != 0 || den[0].isWave() {
			return nil, r.outside(v.Den)
		}
		// The remainders in Euclid's algorithm grow by the length of its
		// operands with every step.
		n, bits := r.extent(den)
		if err := r.spend(n*r.l.Modulus().Degree()*(1+n*bits/64), v.Den.Pos()); err != nil {
			return nil, err
		}
		inv, err := r.l.Inv(den[0].c)
		if err != nil {
			return nil, Errorf(Singular, v.Den.Pos(), "the denominator %s vanishes at a root", Quote(v.Den.String()))
		}
		return r.product(num, []rootTerm[E]{{c: inv}}, v.Pos())
	case Power:
		e, ok := v.Exp.(Number)
		m, small := e.Val.Int64()
		if !ok || !small || m < 0 || m > int64(r.env.Limits.Degree) {
			return nil, r.outside(n)
		}
		base, err := r.read(v.Base)
		if err != nil {
			return nil, err
		}
		out := []rootTerm[E]{{c: r.l.One()}}
		for range m {
			if out, err = r.product(out, base, v.Pos()); err != nil {
				return nil, err
			}
		}
		return out, nil
	case Call:
		arg, err := r.read(v.Arg)
		if err != nil {
			return nil, err
		}
		isRate := len(arg) == 1 && arg[0].n == 1 && arg[0].exps == 0 && arg[0].c.Equal(r.l.Root())
		if r.l.Root().IsZero() {
			isRate = len(arg) == 0
		}
		switch {
		case v.Func == "exp" && isRate:
			return []rootTerm[E]{{exps: 1, c: r.l.One()}}, nil
		case (v.Func == "cos" || v.Func == "sin") && isRate:
			return []rootTerm[E]{{wave: v.Func, c: r.l.One()}}, nil
		}
		return nil, r.outside(n)
	}
	return nil, r.outside(n)
}

// mentions tells whether the root or the time occurs in n.
func (r rootBody[E]) mentions(n Node) bool {
	return slices.ContainsFunc(Names(n), func(name string) bool { return name == r.root || name == r.env.Variable })
}

func (r rootBody[E]) readProduct(factors []Node) ([]rootTerm[E], error) {
	out := []rootTerm[E]{{c: r.l.One()}}
	for _, f := range factors {
		x, err := r.read(f)
		if err != nil {
			return nil, err
		}
		if out, err = r.product(out, x, f.Pos()); err != nil {
			return nil, err
		}
	}
	return out, nil
}

func (r rootBody[E]) product(a, b []rootTerm[E], at Pos) ([]rootTerm[E], error) {
	na, ba := r.extent(a)
	nb, bb := r.extent(b)
	if err := r.spend(na*nb*(1+max(ba, bb)/64), at); err != nil {
		return nil, err
	}
	var out []rootTerm[E]
	for _, x := range a {
		for _, y := range b {
			if x.isWave() && y.isWave() {
				return nil, Errorf(OutsideClass, at, "the terms of a sum over roots have one cosine or sine")
			}
			out = append(out, rootTerm[E]{x.n + y.n, x.exps + y.exps, x.wave + y.wave, r.l.Mul(x.c, y.c)})
		}
	}
	return r.collect(out), nil
}

// collect merges like terms and drops zeros.
func (r rootBody[E]) collect(terms []rootTerm[E]) []rootTerm[E] {
	index := map[string]int{}
	var out []rootTerm[E]
	for _, t := range terms {
		key := strconv.Itoa(t.n) + "|" + strconv.Itoa(t.exps) + "|" + t.wave
		if i, ok := index[key]; ok {
			out[i].c = out[i].c.Add(t.c)
			continue
		}
		index[key] = len(out)
		out = append(out, t)
	}
	kept := out[:0]
	for _, t := range out {
		if !t.c.IsZero() {
			kept = append(kept, t)
		}
	}
	return kept
}
