package expr

import (
	"math"
	"math/big"
	"sort"
	"sync"

	"example.org/closedform/algebra"
)

// timeNode returns the variable minus the origin.
func (w presenter[E]) timeNode() Node {
	if w.k.IsZero(w.origin) {
		return w.variable
	}
	return Add(w.variable, signed(Negate(w.Node(w.origin))))
}

// freeName returns the first of the names that neither a symbol nor the variable
// has.
func (w presenter[E]) freeName(names ...string) string {
	c, _ := any(w.k).(*Constants)
	name := c.FreeName(names...)
	if v, ok := w.variable.(Symbol); ok && v.Name == name {
		return c.FreeName(names[1:]...)
	}
	return name
}

// presenter turns the local parts of images into trees.
type presenter[E any] struct {
	k algebra.Scalars[E]
	style[E]
	time     Node // t, or t - t0
	variable Node
	origin   E
	form     Form
	numeric  func(prime int) Node // in a mixed form, writes the part of a prime in decimals
}

func (w presenter[E]) image(f Image[E]) Node { return w.sum(f, f.local) }

// sum presents the sum of the parts of an image, which local returns.
func (w presenter[E]) sum(f Image[E], local func(i int) localPart[E]) Node {
	order := make([]int, len(f.den))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool {
		p, q := f.den[order[a]].p, f.den[order[b]].p
		if w.form.SteadyLast && w.decays(p) != w.decays(q) {
			return w.decays(p)
		}
		return w.before(p, q)
	})
	// The terms that decay and the others, which are one list unless a form keeps
	// them apart.
	var lists [2][]Node
	var chains [2][]chainTerm
	for _, i := range order {
		at := 0
		if w.form.SteadyLast && !w.decays(f.den[i].p) {
			at = 1
		}
		var n Node
		switch f.den[i].p.Degree() {
		case 1:
			n = w.linear(local(i))
		case 2:
			n = w.quadratic(local(i))
		default:
			var terms []chainTerm
			if n, terms = w.ofHighDegree(f, i); terms != nil {
				chains[at] = append(chains[at], terms...)
				continue
			}
		}
		if s, ok := n.(Sum); ok {
			lists[at] = append(lists[at], s.Terms...)
		} else {
			lists[at] = append(lists[at], n)
		}
	}
	for at := range chains {
		sort.SliceStable(chains[at], func(i, j int) bool { return chains[at][i].key < chains[at][j].key })
		for _, t := range chains[at] {
			lists[at] = append(lists[at], t.node)
		}
	}
	return Add(append(w.grouped(lists[0]), w.grouped(lists[1])...)...)
}

// ofHighDegree presents the part of a prime of degree 3 or more in the way of
// least effort: in radicals, in cosines of fractions of pi, as a sum over
// frequencies or over roots. Of a chain it returns the terms as well.
func (w presenter[E]) ofHighDegree(f Image[E], i int) (Node, []chainTerm) {
	part := sync.OnceValue(func() localPart[E] { return f.local(i) })
	best := w.frequencies(f, i, part)
	if best == nil {
		best = w.named(f, i, part)
	}
	if n := w.split(f.den[i], part); n != nil {
		best = easier(best, n)
	} else if terms := w.inCosines(f.den[i], part); terms != nil {
		nodes := make([]Node, len(terms))
		for j, t := range terms {
			nodes[j] = t.node
		}
		// Chains are written alike in all states, if that does not take much more.
		if n := Add(nodes...); effort(n) <= 2*effort(best) {
			return n, terms
		}
	}
	if w.numeric != nil && hasRootSum(best) {
		if n := w.numeric(i); n != nil {
			return n, nil
		}
	}
	return best, nil
}

// before orders factors for reading: degree 1 and 2 before the others, then by
// falling real part of the leading root, rising frequency, and the text.
func (w presenter[E]) before(p, q algebra.Poly[E]) bool {
	if (p.Degree() > 2) != (q.Degree() > 2) {
		return q.Degree() > 2
	}
	if p.Degree() <= 2 {
		pr, pi := w.leadingRoot(p)
		qr, qi := w.leadingRoot(q)
		if pr != qr {
			return pr > qr
		}
		if pi != qi {
			return pi < qi
		}
	} else if p.Degree() != q.Degree() {
		return p.Degree() < q.Degree()
	}
	for i := max(p.Degree(), q.Degree()); i >= 0; i-- {
		if c := w.Compare(p.Coef(i), q.Coef(i)); c != 0 {
			return c < 0
		}
	}
	return false
}

// decays tells whether the part of a prime decays, for ordering only: one of high
// degree is taken to, unless it is a vibration.
func (w presenter[E]) decays(p algebra.Poly[E]) bool {
	if p.Degree() > 2 {
		return !w.isVibration(p)
	}
	re, _ := w.leadingRoot(p)
	return re < 0
}

// leadingRoot approximates the root of largest real part of a polynomial of
// degree 1 or 2, for ordering only.
func (w presenter[E]) leadingRoot(p algebra.Poly[E]) (re, im float64) {
	if p.Degree() == 1 {
		return w.approximate(w.k.Neg(p.Coef(0))), 0
	}
	h, d := quadraticRoots(w.k, p)
	a, b := w.approximate(h), w.approximate(d)
	if b < 0 {
		return a, math.Sqrt(-b)
	}
	re = a + math.Sqrt(b)
	if math.IsNaN(re) { // beyond float64 on both sides
		re = math.Inf(-1)
	}
	return re, 0
}

// quadraticRoots returns h and d with h +- sqrt(d) the roots of the monic
// polynomial p of degree 2.
func quadraticRoots[E any](k algebra.Scalars[E], p algebra.Poly[E]) (h, d E) {
	h = k.Mul(p.Coef(1), k.FromRat(algebra.NewRat(-1, 2)))
	return h, k.Sub(k.Mul(h, h), p.Coef(0))
}

// coef returns the coefficient of s^i in p, which may be the zero value.
func coef[E any](k algebra.Ring[E], p algebra.Poly[E], i int) E {
	if i > p.Degree() {
		return k.Zero()
	}
	return p.Coef(i)
}

// linear presents P(t) e^(at) with a in the field.
func (w presenter[E]) linear(part localPart[E]) Node {
	coefs := make([]E, len(part.c))
	for i, c := range part.c {
		coefs[i] = coef(w.k, c, 0)
	}
	p := algebra.NewPoly[E](w.k, coefs...)
	rate := w.k.Neg(part.p.Coef(0))
	if w.k.IsZero(rate) { // in t itself
		return w.poly(p.Translate(w.k.Neg(w.origin)), w.variable)
	}
	return w.scaled(p, w.exp(w.Node(rate)))
}

// exp returns e^(rate t), nothing for the rate 0.
func (w presenter[E]) exp(rate Node) Node {
	if isNumber(rate, 0) {
		return Int(1)
	}
	return Apply("exp", w.perTime(rate))
}

// perTime returns a rate times the time, as one quotient.
func (w presenter[E]) perTime(rate Node) Node {
	switch v := rate.(type) {
	case Neg:
		return Negate(w.perTime(v.X))
	case Quotient:
		if _, number := v.Den.(Number); !number {
			return Div(Mul(v.Num, w.time), v.Den)
		}
	case Product:
		if c, ok := v.Factors[0].(Number); ok && !c.Val.IsInt() {
			top := append([]Node{Num(algebra.RatFromBigInt(c.Val.Num()))}, v.Factors[1:]...)
			return Quotient{Num: Mul(append(top, w.time)...), Den: Num(algebra.RatFromBigInt(c.Val.Den()))}
		}
	}
	return Mul(rate, w.time)
}

// scaled returns P(t) times the factors, with the rational content of P in
// front.
func (w presenter[E]) scaled(p algebra.Poly[E], factors ...Node) Node {
	if p.Degree() == 0 {
		return Mul(append([]Node{w.Node(p.Coef(0))}, factors...)...)
	}
	content, prim := w.contentOf(p, w.time)
	whole := Mul(append([]Node{w.Node(content), prim}, factors...)...)
	// Or with what is above the bar in front only: c (qt/V + 1).
	top := w.above(content)
	inside := w.polyIn(p.Scale(w.inverse(top)), w.time, w.isAscending(p))
	return easier(whole, Mul(append([]Node{w.Node(top), inside}, factors...)...))
}

func (w presenter[E]) power(i int) Node {
	if i == 0 {
		return Int(1)
	}
	return Pow(w.time, i)
}

// poly writes a polynomial in v, highest power first.
func (w presenter[E]) poly(p algebra.Poly[E], v Node) Node {
	var terms []Node
	for i := p.Degree(); i >= 0; i-- {
		if c := p.Coef(i); !w.k.IsZero(c) {
			terms = append(terms, w.term(c, v, i))
		}
	}
	return Add(terms...)
}

func (w presenter[E]) term(c E, v Node, i int) Node {
	if i == 0 {
		return signed(w.Node(c))
	}
	return Mul(w.Node(c), Pow(v, i))
}

// contentOf writes p, not zero, as a content times a primitive polynomial in v.
// Its leading coefficient is positive, unless its lowest one is and it reads
// better in ascending order: 1 - t.
func (w presenter[E]) contentOf(p algebra.Poly[E], v Node) (content E, prim Node) {
	content = w.Content(p.Coefs()...)
	minus, ascending := w.writtenSign(p)
	if minus {
		content = w.k.Neg(content)
	}
	return content, w.polyIn(p.Scale(w.inverse(content)), v, ascending)
}

// isAscending tells whether p is written in ascending order.
func (w presenter[E]) isAscending(p algebra.Poly[E]) bool {
	_, ascending := w.writtenSign(p)
	return ascending
}

// polyIn writes a polynomial in v in either order.
func (w presenter[E]) polyIn(p algebra.Poly[E], v Node, ascending bool) Node {
	if !ascending {
		return w.poly(p, v)
	}
	var terms []Node
	for i := range p.Degree() + 1 {
		if c := p.Coef(i); !w.k.IsZero(c) {
			terms = append(terms, w.term(c, v, i))
		}
	}
	return Add(terms...)
}

func (w presenter[E]) inverse(x E) E {
	inv, err := w.k.Inv(x)
	if err != nil {
		panic(err) // contents and leading coefficients are not zero
	}
	return inv
}

// quadratic presents the part of an irreducible p with the roots h +- sqrt(d):
// a damped oscillation for d < 0; two exponentials for d > 0, or a hyperbolic
// cosine or sine where one is enough. Where the sign of d is open, hyperbolic
// functions of sqrt(d) t are right for either: cosh and sinh(sqrt(d) t)/sqrt(d)
// are entire functions of d.
func (w presenter[E]) quadratic(part localPart[E]) Node {
	q := w.quadraticPart(part)
	if n := w.amplitude(q); n != nil {
		return n
	}
	return w.evenAndOdd(q)
}

// evenAndOdd presents a quadratic part by its even and its odd function.
func (w presenter[E]) evenAndOdd(q quadraticPart[E]) Node {
	angle := w.perTime(w.times(q.c, q.root))
	exp := w.exp(w.Node(q.h))
	cos, sin := Apply("cos", angle), Apply("sin", angle)
	root := q.root
	if q.sign > 0 {
		if q.decided && !q.a.IsZero() && !q.b.IsZero() {
			return Add(w.branch(q, q.c), w.branch(q, w.k.Neg(q.c)))
		}
		cos, sin = Apply("cosh", angle), Apply("sinh", angle)
	}
	// odd is b(t) root sin wt, or with 1/root, and other factors.
	odd := func(b algebra.Poly[E], factors ...Node) Node {
		if !q.over {
			return w.scaled(b, append([]Node{root}, factors...)...)
		}
		content, prim := w.contentOf(b, w.time)
		if b.Degree() == 0 {
			content, prim = b.Coef(0), Int(1)
		}
		n := w.Node(content)
		if last := len(factors) - 1; isNumber(n, 1) && isNumber(prim, 1) && (last == 0 || isNumber(factors[0], 1)) {
			factors[last] = Div(factors[last], root)
			return Mul(factors...)
		}
		return Mul(append([]Node{Div(n, root), prim}, factors...)...)
	}
	switch {
	case q.b.IsZero():
		return w.scaled(q.a, exp, cos)
	case q.a.IsZero():
		return odd(q.b, exp, sin)
	case w.k.IsZero(q.h):
		return Add(w.scaled(q.a, cos), odd(q.b, sin))
	}
	// A common content in front, unless it makes the parts longer.
	content := w.Content(append(q.a.Coefs(), q.b.Coefs()...)...)
	if minus, _ := w.writtenSign(q.a); minus {
		content = w.k.Neg(content)
	}
	inv := w.inverse(content)
	sign := w.k.One()
	if minus, _ := w.writtenSign(q.a); minus {
		sign = w.k.Neg(sign)
	}
	return easier(
		Mul(w.Node(content), exp, Add(w.scaled(q.a.Scale(inv), cos), odd(q.b.Scale(inv), sin))),
		Mul(w.Node(sign), exp, Add(w.scaled(q.a.Scale(sign), cos), odd(q.b.Scale(sign), sin))),
	)
}

// quadraticPart is the part of a prime with the roots h +- sqrt(d) in the
// coefficients in which it is written, d = +-(c root)^2: with w = c root,
//
//	e^(ht) (a(t) cos wt + b(t) root sin wt)          for the sign -1
//	e^(ht) (a(t) cosh wt + b(t) root sinh wt)        for the sign 1
//
// and 1/root in place of root where over is set; or for d > 0 the sum of
// (u + v r) e^((h + r) t) over r = +-w. Where the sign of d is not decided, either
// sign will do: both are even functions of w.
type quadraticPart[E any] struct {
	h, c    E
	root    Node
	square  E // of root
	sign    int
	decided bool
	over    bool
	u, v    []E
	a, b    algebra.Poly[E]
}

func (w presenter[E]) quadraticPart(part localPart[E]) quadraticPart[E] {
	k := w.k
	h, d := quadraticRoots(k, part.p)
	q := quadraticPart[E]{h: h}
	q.sign, q.decided = w.weakSign(d)
	if !q.decided {
		q.sign = w.typicalSign(d)
	}
	size := d
	if q.sign < 0 {
		size = k.Neg(d)
	}
	q.c, q.root = w.sqrt(size)
	q.square = k.Mul(size, w.inverse(k.Mul(q.c, q.c)))
	// On the class of s, h + r with r^2 = d, c[k] is u[k] + v[k] r.
	q.u, q.v = make([]E, len(part.c)), make([]E, len(part.c))
	for i, x := range part.c {
		q.v[i] = coef(k, x, 1)
		q.u[i] = k.Add(coef(k, x, 0), k.Mul(q.v[i], h))
	}
	// For d < 0, twice the real part of (u + v i w)(cos wt + i sin wt), and for
	// d > 0 the sum of (u +- v w) e^(+-wt).
	two := k.FromInt(2)
	q.a = algebra.NewPoly[E](k, q.u...).Scale(two)
	q.b = algebra.NewPoly[E](k, q.v...).Scale(k.Mul(two, q.c))
	if q.sign < 0 {
		q.b = q.b.Neg()
	}
	// b root = (b root^2)/root
	_, number := k.Rational(q.square)
	if over := q.b.Scale(q.square); !number && w.simpler(over, q.b) {
		q.b, q.over = over, true
	}
	return q
}

// simpler tells whether the coefficients of p take less effort than those of q;
// of long ones the size decides.
func (w presenter[E]) simpler(p, q algebra.Poly[E]) bool {
	if a, b := w.bits(p), w.bits(q); max(a, b) > longCoefficient {
		return a < b
	}
	return w.effortOf(p) < w.effortOf(q)
}

// longCoefficient is the size in bits of what counts as long.
const longCoefficient = 400

// times returns x root as one quotient.
func (w presenter[E]) times(x E, root Node) Node {
	switch n := w.Node(x).(type) {
	case Neg:
		if q, ok := n.X.(Quotient); ok {
			return Negate(Div(Mul(q.Num, root), q.Den))
		}
		return Mul(n, root)
	case Quotient:
		return Div(Mul(n.Num, root), n.Den)
	default:
		return Mul(n, root)
	}
}

// writtenSign tells whether p, not zero, is written with a minus sign in front,
// or in ascending order to avoid it.
func (w presenter[E]) writtenSign(p algebra.Poly[E]) (minus, ascending bool) {
	if !w.k.Negative(p.Lead()) {
		return false, false
	}
	low := 0
	for w.k.IsZero(p.Coef(low)) {
		low++
	}
	ascending = !w.k.Negative(p.Coef(low))
	return !ascending, ascending
}

// branch presents (sum of (u[k] + v[k] r) t^k) e^((h + r) t) with r = c root.
func (w presenter[E]) branch(q quadraticPart[E], c E) Node {
	exp := w.exp(w.surd(q.h, c, q.root))
	coefficient := func(i int) Node {
		v := w.k.Mul(q.v[i], c)
		if q.over {
			return w.surd(q.u[i], w.k.Mul(v, q.square), Div(Int(1), q.root))
		}
		return w.surd(q.u[i], v, q.root)
	}
	if len(q.u) == 1 {
		return Mul(coefficient(0), exp)
	}
	var terms []Node
	for i := len(q.u) - 1; i >= 0; i-- {
		terms = append(terms, Mul(coefficient(i), w.power(i)))
	}
	return Mul(Add(terms...), exp)
}

func sqrtNode(m *big.Int) Node {
	if m.IsInt64() && m.Int64() == 1 {
		return Int(1)
	}
	return Apply("sqrt", Num(algebra.RatFromBigInt(m)))
}

// surd returns a + b root over a common denominator.
func (w presenter[E]) surd(a, b E, root Node) Node {
	switch {
	case w.k.IsZero(b):
		return w.Node(a)
	case w.k.IsZero(a):
		return Mul(w.Node(b), root)
	}
	content := w.Content(a, b)
	if w.k.Negative(a) && (w.k.Negative(b) || w.isBelowZero(a, b, root)) {
		content = w.k.Neg(content)
	}
	inv := w.inverse(content)
	first, second := signed(w.Node(w.k.Mul(a, inv))), signed(Mul(w.Node(w.k.Mul(b, inv)), root))
	if isRoot(root) && isNegated(first) && !isNegated(second) {
		first, second = second, first // but not of a complex number
	}
	return Mul(w.Node(content), Add(first, second))
}

// isRoot tells whether a tree is the root of a number or a power of one.
func isRoot(n Node) bool {
	switch n.(type) {
	case Call, Power:
		return true
	}
	return false
}

// isBelowZero tells whether a + b root is known to be negative, so that it is written
// as -(|a| - |b| root).
func (w presenter[E]) isBelowZero(a, b E, root Node) bool {
	x, ok := encloseNode(Add(w.Node(a), Mul(w.Node(b), root)), 64)
	if !ok {
		return false
	}
	sign, _ := x.Sign()
	return sign < 0
}

// named presents the part of a prime of degree 3 or more as a sum over its
// roots.
func (w presenter[E]) named(f Image[E], i int, local func() localPart[E]) Node {
	pp := f.den[i]
	root := w.freeName("z", "r", "q")
	z := Sym(root)
	poly := w.poly(w.primitive(pp.p), z)
	exp := Apply("exp", Mul(z, w.time))
	if pp.e == 1 {
		num, den := w.residue(f, i, local)
		minus, body := w.fraction(num, den, z, exp)
		return sumOverRoots(root, poly, body, minus)
	}
	part := local()
	var terms []Node
	for k := len(part.c) - 1; k >= 0; k-- {
		if !part.c[k].IsZero() {
			content, prim := w.contentOf(part.c[k], z)
			terms = append(terms, Mul(w.Node(content), prim, w.power(k)))
		}
	}
	return sumOverRoots(root, poly, Mul(Add(terms...), exp), false)
}

// primitive returns a multiple of p without a content.
func (w presenter[E]) primitive(p algebra.Poly[E]) algebra.Poly[E] {
	return p.Scale(w.inverse(w.Content(p.Coefs()...)))
}

// residue returns the residue at the roots of the i-th prime, a simple one, as a
// ratio.
func (w presenter[E]) residue(f Image[E], i int, local func() localPart[E]) (num, den algebra.Poly[E]) {
	p := f.den[i].p
	if _, symbols := any(w.k).(*Constants); symbols || p.Degree() > mostDegreeAlone {
		return f.residueRatio(i)
	}
	// The part of this factor alone, which does not know of the others: it reads
	// the same in a response and in its transient part.
	den = p.Derivative()
	if len(f.den) == 1 {
		num = f.num
	} else {
		num = local().c[0].Mul(den).Rem(w.k, p)
	}
	if w.bits(p)+w.bits(num) > mostRatioBits {
		return num, den
	}
	c := local().c[0]
	best := w.effortOfRatio(num, den)
	// The remainders of Euclid's algorithm for p and c are c times polynomials: one
	// of these ratios has the least degrees.
	before, r := p, c
	skip, t := algebra.Poly[E]{}, algebra.Constant[E](w.k, w.k.One())
	for !r.IsZero() {
		if cost := w.effortOfRatio(r, t); cost < best {
			num, den, best = r, t, cost
		}
		q, rest := before.QuoRem(w.k, r)
		before, r, skip, t = r, rest, t, skip.Sub(q.Mul(t))
	}
	return num, den
}

// mostRatioBits is the size of prime and numerator up to which other ratios are
// looked at: those of longer ones have longer coefficients.
const mostRatioBits = 96

// bits returns the bits of the coefficients of p.
func (w presenter[E]) bits(p algebra.Poly[E]) (n int) {
	for _, c := range p.Coefs() {
		n += bitLen(w.k, c)
	}
	return n
}

// effortOfRatio measures a ratio of polynomials in lowest terms.
func (w presenter[E]) effortOfRatio(num, den algebra.Poly[E]) int {
	z := Sym("z")
	_, n := w.fraction(num, den, z, Int(1))
	return effort(n)
}

// mostDegreeAlone is the degree up to which the part of a factor alone is
// written: beyond, its coefficients are much longer than those of a ratio.
const mostDegreeAlone = 8

// sumOverRoots returns a sum over roots, negated where minus is set or the body is
// a negation.
func sumOverRoots(root string, poly, body Node, minus bool) Node {
	if n, ok := body.(Neg); ok {
		body, minus = n.X, !minus
	}
	sum := RootSum{Var: root, Poly: poly, Body: body}
	if minus {
		return Neg{X: sum}
	}
	return sum
}

// fraction writes num/den in z times a factor, in lowest terms and up to the sign.
func (w presenter[E]) fraction(num, den algebra.Poly[E], z, factor Node) (minus bool, n Node) {
	g := algebra.GCD[E](w.k, num, den)
	num, _ = num.DivExact(w.k, g)
	den, _ = den.DivExact(w.k, g)
	cn, above := w.contentOf(num, z)
	cd, below := w.contentOf(den, z)
	c := w.Node(w.k.Mul(cn, w.inverse(cd)))
	if neg, ok := c.(Neg); ok {
		c, minus = neg.X, true
	} else if x, ok := c.(Number); ok && x.Val.Sign() < 0 {
		c, minus = Num(x.Val.Neg()), true
	}
	top, bottom := c, Node(Int(1))
	switch v := c.(type) {
	case Quotient:
		top, bottom = v.Num, v.Den
	case Number:
		top, bottom = Num(algebra.RatFromBigInt(v.Val.Num())), Num(algebra.RatFromBigInt(v.Val.Den()))
	}
	return minus, Div(Mul(top, above, factor), Mul(bottom, below))
}
