package expr

import (
	"strconv"

	"example.org/closedform/algebra"
)

// Elementary is a sum of terms t^n e^(at) (c cos bt + s sin bt) with a, b, c, s
// in a real field K: the class of inputs, closed under sums and products. It is
// the stage between a tree and its image.
type Elementary[E any] struct {
	k     algebra.Scalars[E]
	terms []elementaryTerm[E]
}

// elementaryTerm is t^n e^(at) (c cos bt + s sin bt), b not negative, s = 0
// when b = 0, c and s not both 0.
type elementaryTerm[E any] struct {
	n    int
	a, b E
	c, s E
}

// order returns the degree of the denominator of the image, which is the order
// of the least homogeneous equation that f satisfies.
func (f Elementary[E]) order() int {
	order := 0
	for _, g := range f.byRate() {
		top := 0
		for _, t := range g {
			top = max(top, t.n)
		}
		if f.k.IsZero(g[0].b) {
			order += top + 1
		} else {
			order += 2 * (top + 1)
		}
	}
	return order
}

// byRate returns the terms in groups of equal a and b.
func (f Elementary[E]) byRate() [][]elementaryTerm[E] {
	index := map[string]int{}
	var groups [][]elementaryTerm[E]
	for _, t := range f.terms {
		key := f.k.Text(t.a) + "|" + f.k.Text(t.b)
		i, ok := index[key]
		if !ok {
			i = len(groups)
			index[key] = i
			groups = append(groups, nil)
		}
		groups[i] = append(groups[i], t)
	}
	return groups
}

// size estimates the bits of the image.
func (f Elementary[E]) size() int {
	size := 0
	for _, g := range f.byRate() {
		top := 0
		for _, t := range g {
			top = max(top, t.n)
			size += bitLen(f.k, t.c) + bitLen(f.k, t.s)
		}
		size += (top + 1) * (bitLen(f.k, g[0].a) + bitLen(f.k, g[0].b))
	}
	return size
}

// bitLen returns the size of x.
func bitLen[E any](_ algebra.Scalars[E], x E) int {
	if s, ok := any(x).(interface{ BitLen() int }); ok {
		return s.BitLen()
	}
	return 0
}

// ZeroElementary returns the zero function.
func ZeroElementary[E any](k algebra.Scalars[E]) Elementary[E] { return Elementary[E]{k: k} }

// IsZero tells whether f is the zero function.
func (f Elementary[E]) IsZero() bool { return len(f.terms) == 0 }

// Constant returns the value of f if f does not depend on t.
func (f Elementary[E]) Constant() (E, bool) {
	switch {
	case len(f.terms) == 0:
		return f.k.Zero(), true
	case len(f.terms) == 1 && f.isConstant(f.terms[0]):
		return f.terms[0].c, true
	}
	return f.k.Zero(), false
}

func (f Elementary[E]) isConstant(t elementaryTerm[E]) bool {
	return t.n == 0 && f.k.IsZero(t.a) && f.k.IsZero(t.b)
}

// gather is a sum under construction: terms of the same n, a, b are merged,
// in the order of their first appearance.
type gather[E any] struct {
	k     algebra.Scalars[E]
	index map[string]int
	terms []elementaryTerm[E]
}

func newGather[E any](k algebra.Scalars[E]) *gather[E] {
	return &gather[E]{k: k, index: map[string]int{}}
}

// add adds t, and returns the term that it has become part of.
func (g *gather[E]) add(t elementaryTerm[E]) elementaryTerm[E] {
	if g.k.Negative(t.b) {
		t.b, t.s = g.k.Neg(t.b), g.k.Neg(t.s)
	}
	if g.k.IsZero(t.b) {
		t.s = g.k.Zero()
	}
	key := g.k.Text(t.a) + "|" + g.k.Text(t.b) + "|" + strconv.Itoa(t.n)
	if i, ok := g.index[key]; ok {
		g.terms[i].c = g.k.Add(g.terms[i].c, t.c)
		g.terms[i].s = g.k.Add(g.terms[i].s, t.s)
		return g.terms[i]
	}
	g.index[key] = len(g.terms)
	g.terms = append(g.terms, t)
	return t
}

func (g *gather[E]) sum() Elementary[E] {
	out := g.terms[:0]
	for _, t := range g.terms {
		if !g.k.IsZero(t.c) || !g.k.IsZero(t.s) {
			out = append(out, t)
		}
	}
	return Elementary[E]{k: g.k, terms: out}
}

// Elements calls visit for the coefficients and rates of all terms.
func (f Elementary[E]) Elements(visit func(E)) {
	for _, t := range f.terms {
		visit(t.a)
		visit(t.b)
		visit(t.c)
		visit(t.s)
	}
}

// Add returns f + g.
func (f Elementary[E]) Add(g Elementary[E]) Elementary[E] {
	acc := newGather(f.k)
	for _, t := range f.terms {
		acc.add(t)
	}
	for _, t := range g.terms {
		acc.add(t)
	}
	return acc.sum()
}

// Scale returns x f.
func (f Elementary[E]) Scale(x E) Elementary[E] {
	acc := newGather(f.k)
	for _, t := range f.terms {
		t.c, t.s = f.k.Mul(x, t.c), f.k.Mul(x, t.s)
		acc.add(t)
	}
	return acc.sum()
}

// Mul returns f g, by the product formulas for sines and cosines.
func (f Elementary[E]) Mul(g Elementary[E]) Elementary[E] {
	k := f.k
	acc := newGather(k)
	half, err := k.Inv(k.FromInt(2))
	if err != nil {
		panic(err) // the field has characteristic 0
	}
	for _, x := range f.terms {
		for _, y := range g.terms {
			n, a := x.n+y.n, k.Add(x.a, y.a)
			cc, ss := k.Mul(x.c, y.c), k.Mul(x.s, y.s)
			if k.IsZero(x.b) && k.IsZero(y.b) {
				acc.add(elementaryTerm[E]{n, a, k.Zero(), cc, k.Zero()})
				continue
			}
			sc, cs := k.Mul(x.s, y.c), k.Mul(x.c, y.s)
			acc.add(elementaryTerm[E]{n, a, k.Sub(x.b, y.b), k.Mul(half, k.Add(cc, ss)), k.Mul(half, k.Sub(sc, cs))})
			acc.add(elementaryTerm[E]{n, a, k.Add(x.b, y.b), k.Mul(half, k.Sub(cc, ss)), k.Mul(half, k.Add(sc, cs))})
		}
	}
	return acc.sum()
}

// Derivative returns df/dt.
func (f Elementary[E]) Derivative() Elementary[E] {
	k := f.k
	acc := newGather(k)
	for _, t := range f.terms {
		u := t
		u.c = k.Add(k.Mul(t.a, t.c), k.Mul(t.b, t.s))
		u.s = k.Sub(k.Mul(t.a, t.s), k.Mul(t.b, t.c))
		acc.add(u)
		if t.n > 0 {
			n := k.FromInt(int64(t.n))
			acc.add(elementaryTerm[E]{t.n - 1, t.a, t.b, k.Mul(n, t.c), k.Mul(n, t.s)})
		}
	}
	return acc.sum()
}

// Initial returns f(0).
func (f Elementary[E]) Initial() E {
	x := f.k.Zero()
	for _, t := range f.terms {
		if t.n == 0 {
			x = f.k.Add(x, t.c)
		}
	}
	return x
}

// Shift returns f(t + c), the function in the local time of an origin c. The
// constants e^(ac), cos(bc), sin(bc) that come in must be in the field.
func (f Elementary[E]) Shift(c E) (Elementary[E], error) {
	k := f.k
	if k.IsZero(c) {
		return f, nil
	}
	acc := newGather(k)
	for _, t := range f.terms {
		if !k.IsZero(t.a) {
			e, err := expIn(k, k.Mul(t.a, c), Pos{})
			if err != nil {
				return f, err
			}
			t.c, t.s = k.Mul(e, t.c), k.Mul(e, t.s)
		}
		if !k.IsZero(t.b) {
			cos, sin, err := cosSinIn(k, k.Mul(t.b, c), Pos{})
			if err != nil {
				return f, err
			}
			t.c, t.s = k.Add(k.Mul(t.c, cos), k.Mul(t.s, sin)), k.Sub(k.Mul(t.s, cos), k.Mul(t.c, sin))
		}
		// t^n becomes (t + c)^n.
		p := algebra.NewPoly[E](k, c, k.One()).Pow(t.n)
		for i := 0; i <= t.n; i++ {
			u := t
			u.n, u.c, u.s = i, k.Mul(t.c, p.Coef(i)), k.Mul(t.s, p.Coef(i))
			acc.add(u)
		}
	}
	return acc.sum(), nil
}

// Image returns the Laplace image of f.
func (f Elementary[E]) Image() Image[E] {
	// Terms of one rate share a denominator; the others are coprime, and adding
	// them in pairs keeps the products balanced.
	groups := f.byRate()
	if len(groups) == 0 {
		return ZeroImage(f.k)
	}
	sums := make([]Image[E], len(groups))
	for i, g := range groups {
		sums[i] = imageOfRate(f.k, g)
	}
	for len(sums) > 1 {
		half := (len(sums) + 1) / 2
		for i := range len(sums) / 2 {
			sums[i] = sums[i].Add(sums[half+i])
		}
		sums = sums[:half]
	}
	return sums[0]
}

// imageOfRate returns the image of terms with the same a and b. With r = s - a,
// t^n e^(at) (c cos bt + s sin bt) has the image
//
//	n! Re((c - i s) (r + ib)^(n+1)) / (r^2 + b^2)^(n+1)
//
// where Re treats r as real.
func imageOfRate[E any](k algebra.Scalars[E], group []elementaryTerm[E]) Image[E] {
	top := 0
	for _, t := range group {
		top = max(top, t.n)
	}
	cos, sin := make([]E, top+1), make([]E, top+1)
	for n := range cos {
		cos[n], sin[n] = k.Zero(), k.Zero()
	}
	for _, t := range group {
		cos[t.n], sin[t.n] = t.c, t.s
	}
	fact := k.One()
	for n := range cos {
		if n > 1 {
			fact = k.Mul(fact, k.FromInt(int64(n)))
		}
		cos[n], sin[n] = k.Mul(fact, cos[n]), k.Mul(fact, sin[n])
	}
	a, b := group[0].a, group[0].b
	var num, den algebra.Poly[E]
	if k.IsZero(b) {
		c := make([]E, top+1)
		for n := range cos {
			c[top-n] = cos[n]
		}
		num, den = algebra.NewPoly[E](k, c...), algebra.NewPoly[E](k, k.Zero(), k.One())
	} else {
		den = algebra.NewPoly[E](k, k.Mul(b, b), k.Zero(), k.One())
		re, im := algebra.Constant[E](k, k.One()), algebra.Poly[E]{} // (r + ib)^n
		for n := range cos {
			re, im = re.ShiftUp(1).Sub(im.Scale(b)), im.ShiftUp(1).Add(re.Scale(b))
			num = num.Mul(den).Add(re.Scale(cos[n])).Add(im.Scale(sin[n]))
		}
	}
	minus := k.Neg(a)
	return newImage(k, num.Translate(minus), []primePower[E]{{newPrime(k, den.Translate(minus)), top + 1}})
}
