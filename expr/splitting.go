package expr

import "example.org/closedform/algebra"

// split presents the part of a prime of degree 3 or more whose roots are radicals
// that read well: with h the mean of the roots, those of
//
//	u^n - a for n = 3, 4, 6        and     u^4 + b u^2 + c,     u = s - h,
//
// and of the factors of degree 4 of u^10 - a, which lie on a circle like the fifth
// roots of 1 or -1.
// Over a field with the radicals the prime falls into factors of degree 1 and 2,
// and its part into theirs, which are written like any others. It returns nil for
// other primes, where signs are not decided, and where the field cannot hold the
// radicals.
func (w presenter[E]) split(pp primePower[E], local func() localPart[E]) Node {
	k, p := w.k, pp.p
	n := p.Degree()
	h := k.Neg(exactQuo[E](k, p.Coef(n-1), int64(n)))
	q := p.Translate(h)
	inner := n - 1 // coefficients that are 0 between the first and the last
	for i := 1; i < n; i++ {
		if !k.IsZero(q.Coef(i)) {
			inner--
		}
	}
	var find func(*Constants, algebra.Poly[Constant]) ([]algebra.Poly[Constant], error)
	switch {
	case inner == n-1 && (n <= 4 || n == 6):
		find = splitBinomial
	case n == 4 && inner == 2 && !k.IsZero(q.Coef(2)):
		find = splitBiquadratic
	case n == 4 && w.isOfFifths(p):
		find, q, h = splitFifths, p, k.Zero()
	default:
		return nil
	}
	part := local()
	size := w.bits(p)
	for _, c := range part.c {
		size += w.bits(c)
	}
	if size > longCoefficient*n || n == 6 && size > shortOfSix {
		return nil
	}
	from, _ := any(k).(*Constants)
	field := from
	if from == nil {
		field = NewConstants()
	} else if from.Degree()*n > mostAlgebraic/2 {
		return nil // what is written would not be read in a moderate time
	}
	var out Node
	_, err := Grow(field, func(to *Constants) error {
		m, err := newMapping(from, to, nil)
		if err != nil {
			return err
		}
		move := imageMapper[E]{m: m}
		target, err := move.poly(q)
		if err != nil {
			return err
		}
		factors, err := find(to, target)
		if err != nil {
			return err
		}
		back, err := element(m, k.Neg(h))
		if err != nil {
			return err
		}
		v := presenter[Constant]{k: to, style: to, time: w.time, variable: w.variable, origin: to.Zero(), form: w.form}
		f := Image[Constant]{k: to}
		parts := map[*prime[Constant]]localPart[Constant]{}
		for _, g := range factors {
			of := localPart[Constant]{prime: newPrime[Constant](to, g.Translate(back))}
			for _, c := range part.c {
				moved, err := move.poly(c)
				if err != nil {
					return err
				}
				of.c = append(of.c, moved.Rem(to, of.p))
			}
			f.den = append(f.den, primePower[Constant]{of.prime, len(of.c)})
			parts[of.prime] = of
		}
		out = v.sum(f, func(i int) localPart[Constant] { return parts[f.den[i].prime] })
		return nil
	})
	if err != nil {
		return nil
	}
	return out
}

// shortOfSix is the size in bits up to which sixth roots are written: what is longer
// takes seconds to read, in a field of the degree 12.
const shortOfSix = 48

// splitBinomial returns the real factors of u^n - a.
func splitBinomial(c *Constants, p algebra.Poly[Constant]) ([]algebra.Poly[Constant], error) {
	n := p.Degree()
	a := c.Neg(p.Coef(0))
	sign, err := c.certainSign(a)
	if err != nil {
		return nil, err
	}
	size := a
	if sign < 0 {
		size = c.Neg(a)
	}
	root, err := c.NthRoot(size, n, Pos{})
	if err != nil {
		return nil, err
	}
	square := c.Mul(root, root)
	var out []algebra.Poly[Constant]
	first := int64(0) // the angles are first pi/n, (first + 2) pi/n, ...
	switch {
	case sign > 0 && n%2 == 0:
		out = append(out, algebra.NewPoly[Constant](c, c.Neg(square), c.Zero(), c.One()))
	case sign > 0:
		out = append(out, algebra.NewPoly[Constant](c, c.Neg(root), c.One()))
	default:
		first = -1
		if n%2 == 1 {
			out = append(out, algebra.NewPoly[Constant](c, root, c.One()))
		}
	}
	for j := first + 2; j < int64(n); j += 2 {
		cos, err := c.cosPi(algebra.NewRat(j, int64(n)), Pos{})
		if err != nil {
			return nil, err
		}
		out = append(out, algebra.NewPoly[Constant](c, square, c.Mul(c.FromInt(-2), c.Mul(root, cos)), c.One()))
	}
	return out, nil
}

// isOfFifths tells whether q divides u^10 - a for some a.
func (w presenter[E]) isOfFifths(q algebra.Poly[E]) bool {
	return algebra.Monomial[E](w.k, w.k.One(), 10).Rem(w.k, q).Degree() <= 0
}

// splitFifths returns the real factors of a q that divides u^10 - a.
func splitFifths(c *Constants, q algebra.Poly[Constant]) ([]algebra.Poly[Constant], error) {
	power := algebra.Monomial[Constant](c, c.One(), 10)
	all, err := splitBinomial(c, power.Sub(power.Rem(c, q)))
	if err != nil {
		return nil, err
	}
	var out []algebra.Poly[Constant]
	for _, g := range all {
		if q.Rem(c, g).IsZero() {
			out = append(out, g)
		}
	}
	return out, nil
}

// splitBiquadratic returns the real factors of u^4 + b u^2 + c, D = b^2 - 4c: over
// the square root of D as a product in u^2, and where D is negative as
// (u^2 + q)^2 - (2q - b) u^2 with q^2 = c.
func splitBiquadratic(k *Constants, p algebra.Poly[Constant]) ([]algebra.Poly[Constant], error) {
	b, c := coef[Constant](k, p, 2), p.Coef(0)
	d := k.Sub(k.Mul(b, b), k.Mul(k.FromInt(4), c))
	sign, err := k.certainSign(d)
	if err != nil {
		return nil, err
	}
	half := k.FromRat(algebra.NewRat(1, 2))
	if sign > 0 {
		r, err := k.NthRoot(d, 2, Pos{})
		if err != nil {
			return nil, err
		}
		return []algebra.Poly[Constant]{
			algebra.NewPoly[Constant](k, k.Mul(half, k.Sub(b, r)), k.Zero(), k.One()),
			algebra.NewPoly[Constant](k, k.Mul(half, k.Add(b, r)), k.Zero(), k.One()),
		}, nil
	}
	q, err := k.NthRoot(c, 2, Pos{})
	if err != nil {
		return nil, err
	}
	v, err := k.NthRoot(k.Sub(k.Mul(k.FromInt(2), q), b), 2, Pos{})
	if err != nil {
		return nil, err
	}
	return []algebra.Poly[Constant]{
		algebra.NewPoly[Constant](k, q, v, k.One()),
		algebra.NewPoly[Constant](k, q, k.Neg(v), k.One()),
	}, nil
}

// certainSign returns the sign of x, not 0, or an error where it is not decided.
func (c *Constants) certainSign(x Constant) (int, error) {
	sign, ok := c.Sign(x)
	if !ok || sign == 0 {
		return 0, Errorf(NeedsAssumption, Pos{}, "the sign of %s is open", Quote(c.Node(x).String()))
	}
	return sign, nil
}
