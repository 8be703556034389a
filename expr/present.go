package expr

import (
	"math"
	"math/big"
	"sort"

	"example.org/closedform/algebra"
)

// Node returns f as a tree: the polynomial part, exponentials, and damped
// sines and cosines with their coefficients in radicals, and sums over named
// roots where a factor of the denominator has degree 3 or more. Slowly decaying
// terms come first.
func (f Function) Node() Node {
	w := presenter{time: timeNode(f.variable, f.origin), variable: Sym(f.variable), origin: f.origin, root: "z"}
	if f.variable == "z" {
		w.root = "r"
	}
	var terms []Node
	for _, t := range f.free {
		terms = append(terms, Mul(Sym(t.Name), w.image(t.Image)))
	}
	return Add(append(terms, w.image(f.base))...)
}

// String writes f in the text form.
func (f Function) String() string { return f.Node().String() }

// LaTeX writes f as LaTeX for mathematics mode.
func (f Function) LaTeX() string { return LaTeX(f.Node()) }

// timeNode returns the variable minus the origin.
func timeNode(variable string, origin algebra.Rat) Node {
	switch origin.Sign() {
	case 0:
		return Sym(variable)
	case 1:
		return Sum{Terms: []Node{Sym(variable), Neg{X: Num(origin)}}}
	}
	return Sum{Terms: []Node{Sym(variable), Num(origin.Neg())}}
}

// presenter turns the local parts of images into trees.
type presenter struct {
	time     Node // t, or t - t0
	variable Node
	origin   algebra.Rat
	root     string // the name of roots
}

func (w presenter) image(f Image[algebra.Rat]) Node {
	order := make([]int, len(f.den))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return before(f.den[order[a]].p, f.den[order[b]].p) })
	var terms []Node
	for _, i := range order {
		switch f.den[i].p.Degree() {
		case 1:
			terms = append(terms, w.linear(f.local(i)))
		case 2:
			terms = append(terms, w.quadratic(f.local(i)))
		default:
			terms = append(terms, w.named(f, i))
		}
	}
	return Add(terms...)
}

// before orders factors for reading: degree 1 and 2 before the others, then by
// falling real part of the leading root, rising frequency, and the text.
func before(p, q algebra.Poly[algebra.Rat]) bool {
	if (p.Degree() > 2) != (q.Degree() > 2) {
		return q.Degree() > 2
	}
	if p.Degree() <= 2 {
		pr, pi := leadingRoot(p)
		qr, qi := leadingRoot(q)
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
		if c := p.Coef(i).Compare(q.Coef(i)); c != 0 {
			return c < 0
		}
	}
	return false
}

// leadingRoot approximates the root of largest real part of a polynomial of
// degree 1 or 2, for ordering only.
func leadingRoot(p algebra.Poly[algebra.Rat]) (re, im float64) {
	if p.Degree() == 1 {
		return p.Coef(0).Neg().Float64(), 0
	}
	h, d := algebra.Quadratic(p)
	if d.Sign() < 0 {
		return h.Float64(), math.Sqrt(-d.Float64())
	}
	re = h.Float64() + math.Sqrt(d.Float64())
	if math.IsNaN(re) { // beyond float64 on both sides
		re = math.Inf(-1)
	}
	return re, 0
}

// linear presents P(t) e^(at) with rational a.
func (w presenter) linear(part localPart[algebra.Rat]) Node {
	coefs := make([]algebra.Rat, len(part.c))
	for k, c := range part.c {
		coefs[k] = c.Add(algebra.Constant[algebra.Rat](algebra.Q, algebra.Rat{})).Coef(0)
	}
	p := algebra.NewPoly[algebra.Rat](algebra.Q, coefs...)
	rate := part.p.Coef(0).Neg()
	if rate.IsZero() { // in t itself
		return PolyNode(p.Translate(w.origin.Neg()), w.variable)
	}
	return w.scaled(p, w.exp(Num(rate)))
}

// exp returns e^(rate t), nothing for the rate 0.
func (w presenter) exp(rate Node) Node {
	if isNumber(rate, 0) {
		return Int(1)
	}
	return Apply("exp", Mul(rate, w.time))
}

// scaled returns P(t) times the factors, with the rational content of P in
// front.
func (w presenter) scaled(p algebra.Poly[algebra.Rat], factors ...Node) Node {
	content, prim := contentOf(p, w.time)
	return Mul(append([]Node{Num(content), prim}, factors...)...)
}

func (w presenter) power(i int) Node {
	if i == 0 {
		return Int(1)
	}
	return Pow(w.time, i)
}

// contentOf writes p, not zero, as a rational content times a primitive integer
// polynomial in v. Its leading coefficient is positive, unless its lowest one is
// and it reads better in ascending order: 1 - t.
func contentOf(p algebra.Poly[algebra.Rat], v Node) (content algebra.Rat, prim Node) {
	content = contentOfRats(p.Coefs()...)
	minus, ascending := writtenSign(p)
	if minus {
		content = content.Neg()
	}
	q := p.Scale(content.Inv())
	if !ascending {
		return content, PolyNode(q, v)
	}
	var terms []Node
	for i := range q.Degree() + 1 {
		switch c := q.Coef(i); {
		case c.IsZero():
		case i == 0:
			terms = append(terms, Num(c))
		default:
			terms = append(terms, Mul(Num(c), Pow(v, i)))
		}
	}
	return content, Add(terms...)
}

// contentOfRats returns the positive rational c such that the x/c are coprime
// integers, 1 when all are 0.
func contentOfRats(x ...algebra.Rat) algebra.Rat {
	num, den := new(big.Int), big.NewInt(1)
	var g big.Int
	for _, c := range x {
		num.GCD(nil, nil, num, c.Abs().Num())
		d := c.Den()
		g.GCD(nil, nil, den, d)
		den.Mul(den, d.Quo(d, &g))
	}
	if num.Sign() == 0 {
		return algebra.RatFromInt(1)
	}
	return algebra.RatFromFrac(num, den)
}

// quadratic presents the part of an irreducible p with the roots h +- sqrt(d):
// a damped oscillation for d < 0; two exponentials for d > 0, or a hyperbolic
// cosine or sine where one is enough.
func (w presenter) quadratic(part localPart[algebra.Rat]) Node {
	h, d := algebra.Quadratic(part.p)
	c, m := algebra.SqrtParts(d.Abs())
	// On the class of s, h + r with r^2 = d, c[k] is u[k] + v[k] r.
	u := make([]algebra.Rat, len(part.c))
	v := make([]algebra.Rat, len(part.c))
	for k, x := range part.c {
		x = x.Add(algebra.Constant[algebra.Rat](algebra.Q, algebra.Rat{}))
		u[k], v[k] = x.Coef(0).Add(x.Coef(1).Mul(h)), x.Coef(1)
	}
	// For d < 0, twice the real part of (u + v i w)(cos wt + i sin wt), and for
	// d > 0 the sum of (u +- v w) e^(+-wt), w = c sqrt(m).
	two := algebra.RatFromInt(2)
	a := algebra.NewPoly[algebra.Rat](algebra.Q, u...).Scale(two)
	b := algebra.NewPoly[algebra.Rat](algebra.Q, v...).Scale(two.Mul(c))
	root := sqrtNode(m)
	angle := Mul(Num(c), root, w.time)
	exp := w.exp(Num(h))
	cos, sin := Apply("cos", angle), Apply("sin", angle)
	if d.Sign() > 0 {
		if !a.IsZero() && !b.IsZero() {
			return Add(w.branch(h, u, v, c, m), w.branch(h, u, v, c.Neg(), m))
		}
		cos, sin = Apply("cosh", angle), Apply("sinh", angle)
	} else {
		b = b.Neg()
	}
	switch {
	case b.IsZero():
		return w.scaled(a, exp, cos)
	case a.IsZero():
		return w.scaled(b, root, exp, sin)
	case h.IsZero():
		return Add(w.scaled(a, cos), w.scaled(b, root, sin))
	}
	// A common content in front, unless it makes the parts longer.
	content := contentOfRats(append(a.Coefs(), b.Coefs()...)...)
	if minus, _ := writtenSign(a); minus {
		content = content.Neg()
	}
	inv := content.Inv()
	return shorter(
		Mul(Num(content), exp, Add(w.scaled(a.Scale(inv), cos), w.scaled(b.Scale(inv), root, sin))),
		Mul(exp, Add(w.scaled(a, cos), w.scaled(b, root, sin))),
	)
}

// shorter returns the tree with the shorter text, the first if both are equal.
func shorter(a, b Node) Node {
	if len(b.String()) < len(a.String()) {
		return b
	}
	return a
}

// writtenSign tells whether p, not zero, is written with a minus sign in front,
// or in ascending order to avoid it.
func writtenSign(p algebra.Poly[algebra.Rat]) (minus, ascending bool) {
	if p.Lead().Sign() > 0 {
		return false, false
	}
	low := 0
	for p.Coef(low).IsZero() {
		low++
	}
	ascending = p.Coef(low).Sign() > 0
	return !ascending, ascending
}

// branch presents (sum of (u[k] + v[k] r) t^k) e^((h + r) t) with r = c sqrt(m).
func (w presenter) branch(h algebra.Rat, u, v []algebra.Rat, c algebra.Rat, m *big.Int) Node {
	exp := w.exp(surdNode(h, c, m))
	if len(u) == 1 {
		return Mul(surdNode(u[0], v[0].Mul(c), m), exp)
	}
	var terms []Node
	for k := len(u) - 1; k >= 0; k-- {
		terms = append(terms, Mul(surdNode(u[k], v[k].Mul(c), m), w.power(k)))
	}
	return Mul(Add(terms...), exp)
}

func sqrtNode(m *big.Int) Node {
	if m.IsInt64() && m.Int64() == 1 {
		return Int(1)
	}
	return Apply("sqrt", Num(algebra.RatFromBigInt(m)))
}

// surdNode returns a + b sqrt(m) over a common denominator.
func surdNode(a, b algebra.Rat, m *big.Int) Node {
	switch {
	case b.IsZero():
		return Num(a)
	case a.IsZero():
		return Mul(Num(b), sqrtNode(m))
	}
	content := contentOfRats(a, b)
	if a.Sign() < 0 && b.Sign() < 0 {
		content = content.Neg()
	}
	a, b = a.Quo(content), b.Quo(content)
	return Mul(Num(content), Sum{Terms: []Node{Num(a), Mul(Num(b), sqrtNode(m))}})
}

// named presents the part of a prime of degree 3 or more as a sum over its
// roots.
func (w presenter) named(f Image[algebra.Rat], i int) Node {
	pp := f.den[i]
	z := Sym(w.root)
	poly := PolyNode(primitive(pp.p), z)
	exp := Apply("exp", Mul(z, w.time))
	if pp.e == 1 {
		num, den := f.residueRatio(i)
		if len(f.den) > 1 && pp.p.Degree() <= mostDegreeAlone {
			// The part of this factor alone, which does not know of the others: it
			// reads the same in a response and in its transient part.
			den = pp.p.Derivative()
			num = f.local(i).c[0].Mul(den).Rem(algebra.Q, pp.p)
		}
		return w.ratio(poly, num, den, exp)
	}
	part := f.local(i)
	var terms []Node
	for k := len(part.c) - 1; k >= 0; k-- {
		if !part.c[k].IsZero() {
			content, prim := contentOf(part.c[k], z)
			terms = append(terms, Mul(Num(content), prim, w.power(k)))
		}
	}
	return RootSum{Var: w.root, Poly: poly, Body: Mul(Add(terms...), exp)}
}

// mostDegreeAlone is the degree up to which the part of a factor alone is
// written: beyond, its coefficients are much longer than those of a ratio.
const mostDegreeAlone = 8

// ratio presents the sum over the roots of num/den times an exponential.
func (w presenter) ratio(poly Node, num, den algebra.Poly[algebra.Rat], exp Node) Node {
	z := Sym(w.root)
	g := algebra.GCD[algebra.Rat](algebra.Q, num, den)
	num, _ = num.DivExact(algebra.Q, g)
	den, _ = den.DivExact(algebra.Q, g)
	cn, n := contentOf(num, z)
	cd, d := contentOf(den, z)
	c := cn.Quo(cd)
	top := Mul(Num(algebra.RatFromBigInt(c.Abs().Num())), n, exp)
	bottom := Mul(Num(algebra.RatFromBigInt(c.Den())), d)
	var sum Node = RootSum{Var: w.root, Poly: poly, Body: Div(top, bottom)}
	if c.Sign() < 0 {
		sum = Neg{X: sum}
	}
	return sum
}

// primitive returns the integer multiple of p with coprime coefficients and a
// positive leading one.
func primitive(p algebra.Poly[algebra.Rat]) algebra.Poly[algebra.Rat] {
	return p.Scale(contentOfRats(p.Coefs()...).Inv())
}
