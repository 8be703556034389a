package expr

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
)

// Exp returns e^x. The error may be a growth.
func (c *Constants) Exp(x Constant, at Pos) (Constant, error) {
	if c.IsZero(x) {
		return c.One(), nil
	}
	coefs, _, err := c.combine(x, expFormal)
	if err != nil {
		return Constant{}, err
	}
	out := c.One()
	for i, n := range coefs {
		if n == 0 {
			continue
		}
		y, err := c.power(c.Variable(i), n)
		if err != nil {
			return Constant{}, err
		}
		out = c.Mul(out, y)
	}
	return out, nil
}

// Cos returns cos x. The error may be a growth. At a rational multiple of pi the
// sine is not taken into the field.
func (c *Constants) Cos(x Constant, at Pos) (Constant, error) {
	coefs, turns, err := c.combine(x, halfTangentFormal)
	if err != nil {
		return Constant{}, err
	}
	for _, n := range coefs {
		if n != 0 {
			cos, _, err := c.CosSin(x, at)
			return cos, err
		}
	}
	return c.cosPi(turns, at)
}

// Sin returns sin x. The error may be a growth. At a rational multiple of pi the
// cosine is not taken into the field.
func (c *Constants) Sin(x Constant, at Pos) (Constant, error) {
	coefs, turns, err := c.combine(x, halfTangentFormal)
	if err != nil {
		return Constant{}, err
	}
	for _, n := range coefs {
		if n != 0 {
			_, sin, err := c.CosSin(x, at)
			return sin, err
		}
	}
	return c.cosPi(algebra.NewRat(1, 2).Sub(turns), at)
}

// CosSin returns cos x and sin x. The error may be a growth.
func (c *Constants) CosSin(x Constant, at Pos) (cos, sin Constant, err error) {
	if c.IsZero(x) {
		return c.One(), c.Zero(), nil
	}
	coefs, turns, err := c.combine(x, halfTangentFormal)
	if err != nil {
		return cos, sin, err
	}
	if cos, sin, err = c.cosSinPi(turns, at); err != nil {
		return cos, sin, err
	}
	for i, n := range coefs {
		if n == 0 {
			continue
		}
		// cos b = (1 - u^2)/(1 + u^2), sin b = 2u/(1 + u^2)
		u := c.Variable(i)
		square := c.Mul(u, u)
		inv, err := c.Inv(c.Add(c.One(), square))
		if err != nil {
			return cos, sin, err
		}
		re := c.Mul(c.Sub(c.One(), square), inv)
		im := c.Mul(c.Mul(c.FromInt(2), u), inv)
		if n < 0 {
			n, im = -n, c.Neg(im)
		}
		for range n {
			cos, sin = c.Sub(c.Mul(cos, re), c.Mul(sin, im)), c.Add(c.Mul(cos, im), c.Mul(sin, re))
		}
	}
	return cos, sin, nil
}

// power returns x^n for an x that is not zero.
func (c *Constants) power(x Constant, n int64) (Constant, error) {
	if n < 0 {
		inv, err := c.Inv(x)
		if err != nil {
			return inv, err
		}
		x, n = inv, -n
	}
	out := c.One()
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			out = c.Mul(out, x)
		}
		if n > 1 {
			x = c.Mul(x, x)
		}
	}
	return out, nil
}

// mostMultiple bounds the multiples and the parts of another exponent or angle as
// which one is taken; beyond, as for the angles 0.7853 and 1.2341, it counts as
// independent.
const mostMultiple = 64

// combine writes x as a combination with small integer coefficients of the
// arguments of the formals of one kind, and for angles of a rational multiple of
// pi. Where that needs another formal, or finer ones, the error is a growth.
func (c *Constants) combine(x Constant, kind formalKind) (coefs []int64, turns algebra.Rat, err error) {
	var places []int
	var args []Constant
	for i, f := range c.formals {
		if f.kind == kind {
			places, args = append(places, i), append(args, f.arg)
		}
	}
	pi := c.index("pi")
	if kind == halfTangentFormal && pi >= 0 {
		places, args = append(places, pi), append(args, c.Variable(pi))
	}
	coefs = make([]int64, len(c.formals))
	r, ok := c.multiple(x, args)
	if !ok {
		r, ok = c.linear(x, args)
	}
	for j, i := range places {
		if ok && i != pi && !isSmall(r[j]) {
			ok = false
		}
	}
	if !ok {
		if kind == halfTangentFormal && pi >= 0 {
			x = c.withoutMultiple(x, pi)
		}
		if kind == halfTangentFormal && c.Negative(x) {
			x = c.Neg(x)
		}
		return nil, turns, &growth{c.with(formal{kind: kind, arg: x})}
	}
	var finer []formal
	for j, i := range places {
		if i == pi {
			turns = r[j]
			continue
		}
		if n, integer := r[j].Int64(); integer {
			coefs[i] = n
			continue
		}
		if finer == nil {
			finer = append(finer, c.formals...)
		}
		d := algebra.RatFromBigInt(r[j].Den())
		finer[i].arg = c.Mul(c.FromRat(d.Inv()), finer[i].arg)
	}
	if finer != nil {
		return nil, turns, &growth{c.refined(finer)}
	}
	return coefs, turns, nil
}

// isSmall tells whether numerator and denominator are at most mostMultiple.
func isSmall(r algebra.Rat) bool {
	n, okN := algebra.RatFromBigInt(r.Num()).Int64()
	d, okD := algebra.RatFromBigInt(r.Den()).Int64()
	return okN && okD && abs(n) <= mostMultiple && d <= mostMultiple
}

// multiple returns r with x = r[j] args[j], for one j, where a small r[j] does it.
func (c *Constants) multiple(x Constant, args []Constant) ([]algebra.Rat, bool) {
	for j, y := range args {
		if q, ok := c.Rational(c.quotient(x, y)); ok && isSmall(q) {
			r := make([]algebra.Rat, len(args))
			r[j] = q
			return r, true
		}
	}
	return nil, false
}

// withoutMultiple returns x without its term in pi alone.
func (c *Constants) withoutMultiple(x Constant, pi int) Constant {
	num, den := c.Parts(x)
	if _, constant := c.Rational(den); !constant {
		return x
	}
	for _, t := range num.Numerator() {
		degree := 0
		for _, e := range t.Exp {
			degree += e
		}
		if degree == 1 && t.Exp[pi+1] == 1 {
			return c.Sub(x, c.quotient(c.FromTerms([]algebra.Term{t}), den))
		}
	}
	return x
}

func (c *Constants) quotient(x, y Constant) Constant {
	inv, err := c.Inv(y)
	if err != nil {
		panic(err) // a denominator is not zero
	}
	return c.Mul(x, inv)
}

// refined returns the field whose formals have arguments that are fractions of
// the old ones: e^x is a power of the new e^(x/n), tan(b/2) the tangent of a
// multiple.
func (c *Constants) refined(finer []formal) *Constants {
	return c.rebuild(finer, func(g *Constants) ([]Constant, error) {
		values := make([]Constant, len(c.formals))
		for i, old := range c.formals {
			v := g.Variable(i)
			values[i] = v
			if old.kind != expFormal && old.kind != halfTangentFormal {
				continue
			}
			ratio, _ := c.linear(old.arg, []Constant{finer[i].arg})
			n, _ := ratio[0].Int64()
			if old.kind == expFormal {
				y, err := g.power(v, n)
				if err != nil {
					return nil, err
				}
				values[i] = y
				continue
			}
			// tan((n+1)b/2) from tan(nb/2) and tan(b/2)
			for range n - 1 {
				inv, err := g.Inv(g.Sub(g.One(), g.Mul(values[i], v)))
				if err != nil {
					return nil, err
				}
				values[i] = g.Mul(g.Add(values[i], v), inv)
			}
		}
		return values, nil
	})
}

// linear returns rational numbers r with x = r[0] args[0] + r[1] args[1] + ...;
// args that depend on those before them have the coefficient 0.
func (c *Constants) linear(x Constant, args []Constant) ([]algebra.Rat, bool) {
	all := append(append([]Constant(nil), args...), x)
	_, den := c.Parts(c.Content(all...))
	rows := map[string]int{}
	columns := make([]map[int]algebra.Rat, len(all))
	for j, y := range all {
		columns[j] = map[int]algebra.Rat{}
		z := c.Mul(y, den)
		scale := algebra.RatFromInt(1)
		if d := z.Denominator(); d != nil { // a number, as den is common
			scale = algebra.RatFromBigInt(d[0].Coef).Inv()
		}
		for _, t := range z.Numerator() {
			key := c.Text(c.FromTerms([]algebra.Term{{Coef: big.NewInt(1), Exp: t.Exp}}))
			if _, ok := rows[key]; !ok {
				rows[key] = len(rows)
			}
			columns[j][rows[key]] = algebra.RatFromBigInt(t.Coef).Mul(scale)
		}
	}
	m := algebra.MatrixFromFunc[algebra.Rat](algebra.Q, len(rows), len(all), func(i, j int) algebra.Rat { return columns[j][i] })
	ech, err := algebra.Reduce[algebra.Rat](context.Background(), algebra.Q, m)
	if err != nil {
		panic(err) // the context does not end
	}
	r := make([]algebra.Rat, len(args))
	for i, p := range ech.Pivots {
		if p == len(args) {
			return nil, false
		}
		r[p] = ech.Rows.At(i, len(args))
	}
	return r, true
}

// cosSinPi returns the cosine and sine of r pi.
func (c *Constants) cosSinPi(r algebra.Rat, at Pos) (cos, sin Constant, err error) {
	if cos, err = c.cosPi(r, at); err != nil {
		return cos, sin, err
	}
	sin, err = c.cosPi(algebra.NewRat(1, 2).Sub(r), at)
	return cos, sin, err
}

// cosPi returns cos(r pi): in radicals where the denominator of r is 8 or a
// product of 5, 3 and 4, as a named cosine otherwise.
func (c *Constants) cosPi(r algebra.Rat, at Pos) (Constant, error) {
	den, ok := algebra.RatFromBigInt(r.Den()).Int64()
	if !ok || den > 8*mostAlgebraic {
		return Constant{}, Errorf(LimitExceeded, at, "the cosine of pi*%s is an algebraic number of too high a degree", r)
	}
	// cos is even, has the period 2, and changes its sign under r -> 1 - r.
	num := new(big.Int).Mod(r.Num(), big.NewInt(2*den)).Int64()
	if num > den {
		num = 2*den - num
	}
	if 2*num > den {
		x, err := c.cosPi(algebra.NewRat(den-num, den), at)
		return c.Neg(x), err
	}
	r = algebra.NewRat(num, den)
	half := c.FromRat(algebra.NewRat(1, 2))
	switch {
	case num == 0:
		return c.One(), nil
	case den == 2:
		return c.Zero(), nil
	case den == 3:
		return half, nil
	case den == 4:
		return c.NthRoot(half, 2, at)
	case den == 5: // (sqrt(5) + 1)/4 and (sqrt(5) - 1)/4
		five, err := c.NthRoot(c.FromInt(5), 2, at)
		return c.Mul(c.FromRat(algebra.NewRat(1, 4)), c.Add(five, c.FromInt(3-2*num))), err
	case den == 6:
		return c.NthRoot(c.FromRat(algebra.NewRat(3, 4)), 2, at)
	case den == 8 || den == 10: // the half of an angle
		if x, ok := c.knownCosine(r); ok {
			return x, nil
		}
		double, err := c.cosPi(r.Mul(algebra.RatFromInt(2)), at)
		if err != nil {
			return double, err
		}
		return c.NthRoot(c.Mul(half, c.Add(c.One(), double)), 2, at)
	}
	// A sum of angles with smaller denominators; where the denominator is twice an
	// odd number, by the complement, whose denominator is that.
	turned := den%4 == 2
	if turned {
		r, den = algebra.NewRat(1, 2).Sub(r), den/2
	}
	a, b, ok := splitFraction(r, den)
	if !ok {
		if turned {
			r = algebra.NewRat(1, 2).Sub(r)
		}
		return c.cosine(r, at)
	}
	ca, sa, err := c.cosSinPi(a, at)
	if err != nil {
		return ca, err
	}
	cb, sb, err := c.cosSinPi(b, at)
	if turned {
		return c.Add(c.Mul(sa, cb), c.Mul(ca, sb)), err
	}
	return c.Sub(c.Mul(ca, cb), c.Mul(sa, sb)), err
}

// splitFraction writes r, with the denominator d, as a sum of fractions with
// smaller coprime denominators, if d is not a power of a prime.
func splitFraction(r algebra.Rat, d int64) (a, b algebra.Rat, ok bool) {
	p := int64(2)
	for d%p != 0 {
		p++
	}
	power := p
	for d%(power*p) == 0 {
		power *= p
	}
	other := d / power
	if other == 1 {
		return a, b, false
	}
	// n/(power other) = u/power + v/other with u other + v power = n
	n := r.Num()
	u := new(big.Int).ModInverse(big.NewInt(other), big.NewInt(power))
	u.Mul(u, n)
	u.Mod(u, big.NewInt(power))
	a = algebra.RatFromFrac(u, big.NewInt(power))
	return a, r.Sub(a), true
}

// cosine returns cos(r pi) for 0 < r < 1/2 as a number of its own, a root of
// T_q(y) - (-1)^p, r = p/q, with the Chebyshev polynomial T_q; by the square of
// the sine where that is in the field.
func (c *Constants) cosine(r algebra.Rat, at Pos) (Constant, error) {
	if x, ok := c.knownCosine(r); ok {
		return x, nil
	}
	if sin, ok := c.knownCosine(algebra.NewRat(1, 2).Sub(r)); ok {
		p := algebra.NewPoly[Constant](c, c.Sub(c.Mul(sin, sin), c.One()), c.Zero(), c.One())
		return c.algebraic(p, cosPiBall(r), generator{angle: r}, at)
	}
	q, _ := algebra.RatFromBigInt(r.Den()).Int64()
	before, chebyshev := algebra.PolyFromInts(1), algebra.PolyFromInts(0, 1)
	for range q - 1 {
		before, chebyshev = chebyshev, algebra.PolyFromInts(0, 2).Mul(chebyshev).Sub(before)
	}
	sign := int64(1)
	if new(big.Int).And(r.Num(), big.NewInt(1)).Sign() != 0 {
		sign = -1
	}
	p, err := algebra.FactorAt(context.Background(), chebyshev.Sub(algebra.PolyFromInts(sign)), cosPiBall(r))
	if err != nil {
		return Constant{}, err
	}
	return c.algebraic(c.overConstants(p), cosPiBall(r), generator{angle: r}, at)
}

// knownCosine returns cos(r pi) where a cosine that the field was made for gives
// it: that of a part of the angle, or of the angle to pi.
func (c *Constants) knownCosine(r algebra.Rat) (Constant, bool) {
	for _, g := range c.generators {
		if g.q > 0 {
			continue
		}
		if n, ok := multipleOfTurn(r, g.angle); ok {
			return c.chebyshev(n, g.value), true
		}
		if n, ok := multipleOfTurn(algebra.RatFromInt(1).Sub(r), g.angle); ok {
			return c.Neg(c.chebyshev(n, g.value)), true
		}
	}
	return Constant{}, false
}

// multipleOfTurn returns an n with cos(r pi) = cos(n a pi), if there is one.
func multipleOfTurn(r, a algebra.Rat) (n int, ok bool) {
	two := algebra.RatFromInt(2)
	sum := algebra.Rat{}
	for n = 1; ; n++ {
		if sum = sum.Add(a); sum.Compare(two) >= 0 {
			sum = sum.Sub(two)
		}
		switch {
		case sum.Equal(r), two.Sub(sum).Equal(r):
			return n, true
		case sum.IsZero():
			return 0, false
		}
	}
}

// chebyshev returns T_n(x): cos(nb) for x = cos(b).
func (c *Constants) chebyshev(n int, x Constant) Constant {
	before, value := c.One(), x
	for range n - 1 {
		before, value = value, c.Sub(c.Mul(c.FromInt(2), c.Mul(x, value)), before)
	}
	return value
}

// cosPiBall encloses cos(r pi).
func cosPiBall(r algebra.Rat) func(prec uint) algebra.Ball {
	return func(prec uint) algebra.Ball {
		_, cos := algebra.Pi(prec).Mul(algebra.BallFromRat(r.Big(), prec), prec).SinCos(prec)
		return cos
	}
}

// overConstants returns a polynomial over Q as one over c.
func (c *Constants) overConstants(p algebra.Poly[algebra.Rat]) algebra.Poly[Constant] {
	coefs := make([]Constant, p.Degree()+1)
	for i := range coefs {
		coefs[i] = c.FromRat(p.Coef(i))
	}
	return algebra.NewPoly[Constant](c, coefs...)
}

// algebraic returns the root of p that near encloses. The error is a growth
// where it is not in the field.
func (c *Constants) algebraic(p algebra.Poly[Constant], near func(prec uint) algebra.Ball, g generator, at Pos) (Constant, error) {
	adj, err := c.Adjoin(context.Background(), p, near, mostAlgebraic)
	if err != nil {
		return Constant{}, Errorf(LimitExceeded, at, "%s", err)
	}
	if adj.Field == c.FunctionField {
		return adj.New, nil
	}
	return Constant{}, &growth{c.adjoin(g, adj)}
}

// NthRoot returns the positive q-th root of a number x >= 0.
// The error may be a growth.
func (c *Constants) NthRoot(x Constant, q int, at Pos) (Constant, error) {
	for i := range c.formals {
		if c.Uses(x, i) {
			return c.surd(x, q, at)
		}
	}
	sign, _ := c.Sign(x)
	switch {
	case sign == 0:
		return c.Zero(), nil
	case sign < 0:
		return Constant{}, Errorf(OutsideClass, at, "a fractional power of the negative number %s", Quote(c.Node(x).String()))
	}
	// (a/b)^(1/q) = (a b^(q-1))^(1/q)/b, without the q-th powers in it
	r := c.numericContent(x)
	rest := c.quotient(x, c.FromRat(r))
	b := r.Den()
	n := r.Num()
	n.Mul(n, new(big.Int).Exp(b, big.NewInt(int64(q-1)), nil))
	outer, inner := powerParts(n, q)
	scale := c.FromRat(algebra.RatFromFrac(outer, b))
	x = c.Mul(c.FromRat(algebra.RatFromBigInt(inner)), rest)
	if c.Equal(x, c.One()) {
		return scale, nil
	}
	if base, e := perfectPower(inner); e > 1 && c.Equal(rest, c.One()) { // 36^(1/3) is (6^(1/3))^2
		y, err := c.NthRoot(c.FromRat(algebra.RatFromBigInt(base)), q, at)
		if err != nil {
			return y, err
		}
		y, err = c.power(y, int64(e))
		return c.Mul(scale, y), err
	}
	if u, v, m, ok := c.binomialSurd(x); ok && q == 2 {
		if a, b, ok := denested(u, v, m); ok {
			y, err := c.NthRoot(c.FromRat(a), 2, at)
			if err != nil {
				return y, err
			}
			z, err := c.NthRoot(c.FromRat(b), 2, at)
			if v.Sign() < 0 {
				z = c.Neg(z)
			}
			return c.Mul(scale, c.Add(y, z)), err
		}
	}
	coefs := make([]Constant, q+1)
	coefs[0], coefs[q] = c.Neg(x), c.One()
	near := func(prec uint) algebra.Ball { return c.Enclose(x, prec+16).Root(q, prec) }
	y, err := c.algebraic(algebra.NewPoly[Constant](c, coefs...), near, generator{q: q, arg: x}, at)
	return c.Mul(scale, y), err
}

// surd returns the square root of an expression in symbols. Squares and
// denominators leave the root.
func (c *Constants) surd(x Constant, q int, at Pos) (Constant, error) {
	outside := func(why string) error {
		return Errorf(OutsideClass, at, "the root of %s: %s; give it a name and write the expression as a power of that", Quote(c.Node(x).String()), why)
	}
	if q != 2 {
		return Constant{}, outside("of expressions with symbols square roots are taken")
	}
	if x.HasRoot() {
		return Constant{}, outside("roots of roots with symbols are not taken")
	}
	r, factors, err := c.Factors(context.Background(), x)
	if err != nil {
		return Constant{}, err
	}
	outer, inner, den := c.One(), c.One(), c.One()
	for _, f := range factors {
		half, err := c.power(f.Base, int64(f.Exp>>1))
		if err != nil {
			return Constant{}, err
		}
		if f.Exp&1 == 1 {
			inner = c.Mul(inner, f.Base)
			if f.Exp < 0 {
				den = c.Mul(den, f.Base)
			}
		}
		// The root of p^(2k) q is |p|^k sqrt(q), k odd: p is taken not to be negative,
		// which becomes a condition.
		if f.Exp>>1&1 == 1 {
			switch sign, ok := c.weakSign(f.Base); {
			case ok && sign < 0:
				half = c.Neg(half)
			case !ok:
				return Constant{}, &growth{c.implying(f.Base)}
			}
		}
		outer = c.Mul(outer, half)
	}
	number, m := algebra.SqrtParts(r.Abs())
	outer = c.Mul(outer, c.FromRat(number))
	inner = c.Mul(inner, c.FromRat(algebra.RatFromBigInt(m)))
	if r.Sign() < 0 {
		inner = c.Neg(inner)
	}
	if _, rational := c.Rational(inner); rational {
		root, err := c.NthRoot(inner, 2, at)
		return c.Mul(outer, root), err
	}
	old, ok := c.Surd()
	switch {
	case ok && c.Equal(old, inner):
		return c.Mul(outer, c.RootElement()), nil
	case c.Degree() > 1:
		return Constant{}, outside("one square root with symbols is taken, and no other roots beside it")
	}
	return Constant{}, &growth{c.withSurd(inner, den)}
}

// perfectPower returns n = base^e with the largest e, for n > 1.
func perfectPower(n *big.Int) (base *big.Int, e int) {
	base, e = n, 1
	for p := 2; p < base.BitLen(); p++ {
		for {
			r, ok := exactRoot(base, p)
			if !ok {
				break
			}
			base, e = r, e*p
		}
	}
	return base, e
}

// powerParts returns n = outer^q inner with an inner that is not divisible by
// the q-th power of a prime below 2^12.
func powerParts(n *big.Int, q int) (outer, inner *big.Int) {
	if q == 2 {
		c, m := algebra.SqrtParts(algebra.RatFromBigInt(n))
		return c.Num(), m
	}
	outer, inner = big.NewInt(1), new(big.Int).Set(n)
	if r, ok := exactRoot(inner, q); ok {
		return r, big.NewInt(1)
	}
	var quo, rem big.Int
	for p := int64(2); p < 1<<12; p++ {
		bp := big.NewInt(p)
		pq := new(big.Int).Exp(bp, big.NewInt(int64(q)), nil)
		if pq.Cmp(inner) > 0 {
			break
		}
		for {
			quo.QuoRem(inner, pq, &rem)
			if rem.Sign() != 0 {
				break
			}
			inner.Set(&quo)
			outer.Mul(outer, bp)
		}
	}
	return outer, inner
}
