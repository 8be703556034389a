package expr

import (
	"math"
	"math/big"
	"sort"

	"example.org/closedform/algebra"
)

// Chains of identical elements have the rates a + 2b cos(alpha) with alpha running
// over fractions of pi, and vibrating ones, undamped or with one damping for all,
// the frequencies 2 sqrt(b) sin(alpha/2), where a = -2b: the eigenvalues of
// tridiagonal matrices with constant diagonals (Yueh, Eigenvalues of several
// tridiagonal matrices, Applied Mathematics E-Notes 5, 2005, from memory).

// mostCosines is the degree up to which such roots are looked for.
const mostCosines = 6

// chain is a polynomial whose roots are a + 2b cos(alpha), b > 0 where its sign is
// known.
type chain[E any] struct {
	a, b   E
	angles []algebra.Rat             // alpha/pi, rising
	poly   algebra.Poly[algebra.Rat] // with the roots 2cos(alpha)
}

// chainOf recognises the roots of q, monic and irreducible: for the n with
// phi(n) = 2 deg q those of q must be a + b x for the roots x = 2cos(2 pi j/n),
// j prime to n, where mean and variance leave two choices for a and b.
func (w presenter[E]) chainOf(q algebra.Poly[E]) (chain[E], bool) {
	k, d := w.k, q.Degree()
	if d < 3 || d > mostCosines {
		return chain[E]{}, false
	}
	mean, variance := moments(k, q)
	if sign, ok := w.Sign(variance); ok && sign <= 0 {
		return chain[E]{}, false
	}
	for n := int64(7); n <= int64(8*d*d); n++ {
		if n%4 == 2 { // the roots of n/2 with the other sign
			continue
		}
		units := unitsBelowHalf(n)
		if len(units) != d {
			continue
		}
		psi := cosinePolynomial(n)
		m, v := moments[algebra.Rat](algebra.Q, psi)
		b, root := w.sqrt(k.Mul(variance, k.FromRat(v.Inv())))
		if !isNumber(root, 1) {
			continue
		}
		for range 2 {
			a := k.Sub(mean, k.Mul(b, k.FromRat(m)))
			if scaledRoots(k, psi, a, b).Equal(q) {
				return w.rising(a, b, n, units, psi), true
			}
			b = k.Neg(b)
		}
	}
	return chain[E]{}, false
}

// rising returns a chain with b not negative: cos(pi - alpha) = -cos(alpha).
func (w presenter[E]) rising(a, b E, n int64, units []int64, psi algebra.Poly[algebra.Rat]) chain[E] {
	c := chain[E]{a: a, b: b, poly: psi}
	minus := w.k.Negative(b)
	if minus {
		c.b = w.k.Neg(b)
		c.poly = scaledRoots[algebra.Rat](algebra.Q, psi, algebra.Rat{}, algebra.RatFromInt(-1))
	}
	for _, j := range units {
		angle := algebra.NewRat(2*j, n)
		if minus {
			angle = algebra.RatFromInt(1).Sub(angle)
		}
		c.angles = append(c.angles, angle)
	}
	sort.Slice(c.angles, func(i, j int) bool { return c.angles[i].Compare(c.angles[j]) < 0 })
	return c
}

// moments returns the mean of the roots of a monic p and the mean of their squares
// less its square.
func moments[E any](k algebra.Scalars[E], p algebra.Poly[E]) (mean, variance E) {
	d := p.Degree()
	sum := k.Neg(p.Coef(d - 1))
	squares := k.Sub(k.Mul(sum, sum), k.Mul(k.FromInt(2), p.Coef(d-2)))
	mean = exactQuo[E](k, sum, int64(d))
	return mean, k.Sub(exactQuo[E](k, squares, int64(d)), k.Mul(mean, mean))
}

// scaledRoots returns the monic polynomial with the roots a + b x for the roots x
// of psi.
func scaledRoots[E any](k algebra.Scalars[E], psi algebra.Poly[algebra.Rat], a, b E) algebra.Poly[E] {
	d := psi.Degree()
	c := make([]E, d+1)
	power := k.One()
	for i := d; i >= 0; i-- {
		c[i] = k.Mul(k.FromRat(psi.Coef(i)), power)
		power = k.Mul(power, b)
	}
	return algebra.NewPoly[E](k, c...).Translate(k.Neg(a))
}

// unitsBelowHalf returns the j < n/2 that are prime to n.
func unitsBelowHalf(n int64) []int64 {
	var out []int64
	for j := int64(1); 2*j < n; j++ {
		a, b := n, j
		for b != 0 {
			a, b = b, a%b
		}
		if a == 1 {
			out = append(out, j)
		}
	}
	return out
}

// cosinePolynomial returns the monic polynomial with the roots 2cos(2 pi j/n), j
// prime to n: with x^m + 1/x^m as a polynomial in x + 1/x it comes from the
// cyclotomic polynomial of n (Lehmer, A note on trigonometric algebraic numbers,
// 1933, from memory).
func cosinePolynomial(n int64) algebra.Poly[algebra.Rat] {
	cyclotomic := map[int64]algebra.Poly[algebra.Rat]{}
	one := algebra.PolyFromInts(1)
	for d := int64(1); d <= n; d++ {
		if n%d != 0 {
			continue
		}
		p := algebra.Monomial[algebra.Rat](algebra.Q, algebra.RatFromInt(1), int(d)).Sub(one)
		for e, q := range cyclotomic {
			if d%e == 0 {
				p, _ = p.DivExact(algebra.Q, q)
			}
		}
		cyclotomic[d] = p
	}
	p := cyclotomic[n]
	d := p.Degree() / 2
	sum := algebra.Constant[algebra.Rat](algebra.Q, p.Coef(d))
	before, c := algebra.PolyFromInts(2), algebra.PolyFromInts(0, 1)
	for m := 1; m <= d; m++ {
		sum = sum.Add(c.Scale(p.Coef(d + m)))
		before, c = c, algebra.PolyFromInts(0, 1).Mul(c).Sub(before)
	}
	return sum
}

// inCosine returns the coefficients of p(a + b x) in x = 2cos(alpha).
func (c chain[E]) inCosine(k algebra.Scalars[E], p algebra.Poly[E]) []E {
	out := p.Translate(c.a).Coefs()
	power := k.One()
	for i := range out {
		out[i] = k.Mul(out[i], power)
		power = k.Mul(power, c.b)
	}
	return out
}

// cosineCoefs returns the g with p(a + b x) = g[0] + sum over m of g[m] 2cos(m alpha)
// for x = 2cos(alpha).
func (c chain[E]) cosineCoefs(k algebra.Scalars[E], p algebra.Poly[E]) []E {
	in := c.inCosine(k, p)
	g := make([]E, len(in))
	for i := range g {
		g[i] = k.Zero()
	}
	// x^n is the sum of binomial(n, j) 2cos((n - 2j) alpha), taken for one of j and n - j.
	for n, x := range in {
		binomial := int64(1)
		for j := 0; 2*j <= n; j++ {
			g[n-2*j] = k.Add(g[n-2*j], k.Mul(x, k.FromInt(binomial)))
			binomial = binomial * int64(n-j) / int64(j+1)
		}
	}
	return g
}

// turns are coefficients of cosines of multiples of pi, by the multiple in [0, 1/2).
type turns[E any] struct {
	k     algebra.Scalars[E]
	rest  E // what has no cosine
	order []algebra.Rat
	coefs map[string]E
}

func newTurns[E any](k algebra.Scalars[E]) *turns[E] {
	return &turns[E]{k: k, rest: k.Zero(), coefs: map[string]E{}}
}

// add adds x cos(r pi).
func (t *turns[E]) add(x E, r algebra.Rat) {
	r, minus := reducedTurn(r)
	if minus {
		x = t.k.Neg(x)
	}
	switch {
	case r.IsZero():
		t.rest = t.k.Add(t.rest, x)
		return
	case r.Equal(algebra.NewRat(1, 2)):
		return
	case r.Equal(algebra.NewRat(1, 3)):
		t.rest = t.k.Add(t.rest, exactQuo[E](t.k, x, 2))
		return
	}
	key := r.String()
	old, ok := t.coefs[key]
	if !ok {
		t.order, old = append(t.order, r), t.k.Zero()
	}
	t.coefs[key] = t.k.Add(old, x)
}

// reducedTurn returns the q in [0, 1/2] with cos(r pi) = +-cos(q pi), and whether
// the sign is minus.
func reducedTurn(r algebra.Rat) (q algebra.Rat, minus bool) {
	den := r.Den()
	period := new(big.Int).Lsh(den, 1)
	r = algebra.RatFromFrac(new(big.Int).Mod(r.Num(), period), den)
	if r.Compare(algebra.RatFromInt(1)) > 0 {
		r = algebra.RatFromInt(2).Sub(r)
	}
	if r.Compare(algebra.NewRat(1, 2)) > 0 {
		return algebra.RatFromInt(1).Sub(r), true
	}
	return r, false
}

// turnsNode writes the sum, sines in place of cosines where sine is set.
func (w presenter[E]) turnsNode(t *turns[E], sine bool) Node {
	elements := []E{t.rest}
	for _, r := range t.order {
		elements = append(elements, t.coefs[r.String()])
	}
	content := w.Content(elements...)
	for _, x := range elements {
		if !w.k.IsZero(x) {
			if w.k.Negative(x) {
				content = w.k.Neg(content)
			}
			break
		}
	}
	inv := w.inverse(content)
	var terms []Node
	if x := w.k.Mul(inv, t.rest); !w.k.IsZero(x) {
		terms = append(terms, signed(w.Node(x)))
	}
	sort.Slice(t.order, func(i, j int) bool { return t.order[i].Compare(t.order[j]) < 0 })
	for _, r := range t.order {
		if x := w.k.Mul(inv, t.coefs[r.String()]); !w.k.IsZero(x) {
			terms = append(terms, Mul(w.Node(x), turnNode(r, sine)))
		}
	}
	return Mul(w.Node(content), Add(terms...))
}

// turnNode writes cos(r pi), as a sine where sine is set, for 0 < r < 1/2.
func turnNode(r algebra.Rat, sine bool) Node {
	switch {
	case r.Equal(algebra.NewRat(1, 4)):
		return Mul(Num(algebra.NewRat(1, 2)), Apply("sqrt", Int(2)))
	case r.Equal(algebra.NewRat(1, 6)):
		return Mul(Num(algebra.NewRat(1, 2)), Apply("sqrt", Int(3)))
	}
	fn := "cos"
	if sine {
		fn, r = "sin", algebra.NewRat(1, 2).Sub(r)
	}
	return Apply(fn, Mul(Num(r), Sym("pi")))
}

// inCosines presents the part of a simple prime whose roots are those of a chain,
// or square roots of them. It returns nil for other primes.
func (w presenter[E]) inCosines(pp primePower[E], local func() localPart[E]) []chainTerm {
	if pp.e != 1 || pp.p.Degree() > 2*mostCosines {
		return nil
	}
	if c, ok := w.chainOf(pp.p); ok {
		return w.relaxing(local(), c)
	}
	if h, q, ok := w.squares(pp.p); ok {
		if c, ok := w.chainOf(q); ok {
			return w.vibrating(local(), c, h)
		}
	}
	return nil
}

// squares returns h and q with p(s) = q((s - h)^2), if there are such.
func (w presenter[E]) squares(p algebra.Poly[E]) (h E, q algebra.Poly[E], ok bool) {
	n := p.Degree()
	h = w.k.Neg(exactQuo[E](w.k, p.Coef(n-1), int64(n)))
	u := p.Translate(h)
	var c []E
	for i := range n + 1 {
		switch x := u.Coef(i); {
		case i%2 == 0:
			c = append(c, x)
		case !w.k.IsZero(x):
			return h, q, false
		}
	}
	return h, algebra.NewPoly[E](w.k, c...), n%2 == 0
}

// chainTerm is the term of one root of a chain, with a key for the order among
// those of several chains.
type chainTerm struct {
	key  float64
	node Node
}

// relaxing presents the terms c(L) e^(Lt) of the roots L of a chain.
func (w presenter[E]) relaxing(part localPart[E], c chain[E]) []chainTerm {
	coefficient := w.coefficients(c, part.c[0])
	sines := w.k.IsZero(w.k.Add(c.a, w.k.Mul(w.k.FromInt(2), c.b)))
	var terms []chainTerm
	for _, alpha := range c.angles {
		var rate Node
		if sines { // a + 2b cos(alpha) = -4b sin^2(alpha/2)
			rate = w.times(w.k.Mul(w.k.FromInt(-4), c.b), Pow(halfSine(alpha), 2))
		} else {
			sum := newTurns(w.k)
			sum.rest = c.a
			sum.add(w.k.Mul(w.k.FromInt(2), c.b), alpha)
			rate = w.turnsNode(sum, false)
		}
		key := -w.approximate(c.a) - 2*math.Abs(w.approximate(c.b))*math.Cos(math.Pi*alpha.Float64())
		terms = append(terms, chainTerm{key, Mul(coefficient(alpha), w.exp(rate))})
	}
	return terms
}

// halfSine writes sin(alpha/2).
func halfSine(alpha algebra.Rat) Node {
	return Apply("sin", Mul(Num(alpha.Mul(algebra.NewRat(1, 2))), Sym("pi")))
}

// vibrating presents the terms c(L) e^(Lt) of the roots L = h +- i w, -w^2 those of
// a chain: with c(L) = e(y) + (L - h) o(y), y = (L - h)^2, the two signs make
//
//	e^(ht) (2 e(y) cos wt - 2 w o(y) sin wt).
//
// It returns nil where w is not a multiple of a sine: the other frequencies are
// square roots that no field of a moderate degree holds together.
func (w presenter[E]) vibrating(part localPart[E], c chain[E], h E) []chainTerm {
	k := w.k
	two := k.FromInt(2)
	if !k.IsZero(k.Add(c.a, k.Mul(two, c.b))) {
		return nil
	}
	local := part.c[0].Translate(h)
	var even, odd []E
	for i := range local.Degree() + 1 {
		if x := k.Mul(two, local.Coef(i)); i%2 == 0 {
			even = append(even, x)
		} else {
			odd = append(odd, k.Neg(x))
		}
	}
	scale, root := w.sqrt(c.b) // w = 2 sqrt(b) sin(alpha/2)
	scale = k.Mul(two, scale)
	cosine := w.coefficients(c, algebra.NewPoly[E](k, even...))
	sine := w.sineCoefficients(c, algebra.NewPoly[E](k, odd...), scale)
	exp := w.exp(w.Node(h))
	var terms []chainTerm
	for _, alpha := range c.angles {
		angle := w.perTime(Mul(w.times(scale, root), halfSine(alpha)))
		var pair []Node
		for _, t := range []Node{Mul(cosine(alpha), Apply("cos", angle)), Mul(root, sine(alpha), Apply("sin", angle))} {
			if !isZeroProduct(t) {
				pair = append(pair, t)
			}
		}
		key := math.Sqrt(math.Abs(w.approximate(c.b))) * math.Sin(math.Pi/2*alpha.Float64())
		terms = append(terms, chainTerm{key, Mul(exp, Add(pair...))})
	}
	return terms
}

// coefficients returns what writes p(a + 2b cos(alpha)) for an angle: as a product
// of two sines or cosines where it is one, as a sum of cosines otherwise.
func (w presenter[E]) coefficients(c chain[E], p algebra.Poly[E]) func(alpha algebra.Rat) Node {
	if f, ok := w.productOf(c, p); ok {
		return func(alpha algebra.Rat) Node { return w.productNode(f, alpha, 0) }
	}
	g := c.cosineCoefs(w.k, p)
	return func(alpha algebra.Rat) Node { return w.turnsNode(c.coefficient(w.k, g, alpha), false) }
}

// sineCoefficients returns what writes scale sin(alpha/2) p(a + 2b cos(alpha)).
func (w presenter[E]) sineCoefficients(c chain[E], p algebra.Poly[E], scale E) func(alpha algebra.Rat) Node {
	if f, ok := w.productOf(c, p); ok {
		f.factor = w.k.Mul(scale, f.factor)
		return func(alpha algebra.Rat) Node { return w.productNode(f, alpha, 1) }
	}
	g := c.cosineCoefs(w.k, p)
	return func(alpha algebra.Rat) Node {
		return w.turnsNode(c.sineCoefficient(w.k, g, alpha, scale), true)
	}
}

// coefficient returns g[0] + sum over m of g[m] 2cos(m alpha).
func (c chain[E]) coefficient(k algebra.Scalars[E], g []E, alpha algebra.Rat) *turns[E] {
	sum := newTurns(k)
	for m, x := range g {
		if m > 0 {
			x = k.Mul(k.FromInt(2), x)
		}
		sum.add(x, alpha.Mul(algebra.RatFromInt(int64(m))))
	}
	return sum
}

// sineCoefficient returns scale sin(alpha/2) (g[0] + sum over m of g[m] 2cos(m alpha)),
// by 2 sin(alpha/2) cos(m alpha) = sin((m + 1/2) alpha) - sin((m - 1/2) alpha).
func (c chain[E]) sineCoefficient(k algebra.Scalars[E], g []E, alpha algebra.Rat, scale E) *turns[E] {
	sum := newTurns(k)
	half := algebra.NewRat(1, 2)
	addSine := func(x E, r algebra.Rat) { sum.add(x, half.Sub(r)) }
	for m, x := range g {
		x = k.Mul(scale, x)
		addSine(x, alpha.Mul(half.Add(algebra.RatFromInt(int64(m)))))
		if m > 0 {
			addSine(k.Neg(x), alpha.Mul(algebra.RatFromInt(int64(m)).Sub(half)))
		}
	}
	return sum
}

// isZeroProduct tells whether a product built by Mul is 0.
func isZeroProduct(n Node) bool {
	if neg, ok := n.(Neg); ok {
		n = neg.X
	}
	return isNumber(n, 0)
}
