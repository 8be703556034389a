package expr

import "example.org/closedform/algebra"

// cosineProduct is factor times the product of the sines, or of the cosines, of
// (v + u) alpha/2 and (v - u) alpha/2, over sin^2(alpha/2) where over is set.
type cosineProduct[E any] struct {
	factor E
	u, v   int
	sines  bool
	over   bool
}

// productOf writes p(a + 2b cos(alpha)) as such a product, if it is one for all
// angles of a chain: by
//
//	4 sin((v + u) alpha/2) sin((v - u) alpha/2) = 2cos(u alpha) - 2cos(v alpha)
//
// and with a plus for cosines, p or p sin^2(alpha/2) is a multiple of one of the
// few sums on the right, modulo the polynomial of 2cos(alpha). So are the motions of
// a chain that is let go at one place: products of the shapes of a mode at two
// places.
func (w presenter[E]) productOf(c chain[E], p algebra.Poly[E]) (cosineProduct[E], bool) {
	k, d := w.k, c.poly.Degree()
	if p.IsZero() {
		return cosineProduct[E]{}, false
	}
	modulus := make([]E, d+1)
	for i := range modulus {
		modulus[i] = k.FromRat(c.poly.Coef(i))
	}
	mod := algebra.NewPoly[E](k, modulus...)
	// p in x = 2cos(alpha), and times sin^2(alpha/2) = (2 - x)/4.
	plain := algebra.NewPoly[E](k, c.inCosine(k, p)...).Rem(k, mod)
	quarter := k.FromRat(algebra.NewRat(1, 4))
	over := plain.Mul(algebra.NewPoly[E](k, k.FromInt(2), k.FromInt(-1))).Scale(quarter).Rem(k, mod)
	// 2cos(m alpha) modulo the polynomial; the angles have the denominator period/2.
	period := int(c.angles[0].Den().Int64())
	chebyshev := []algebra.Poly[algebra.Rat]{algebra.PolyFromInts(2), algebra.PolyFromInts(0, 1)}
	for m := 2; m <= period; m++ {
		next := algebra.PolyFromInts(0, 1).Mul(chebyshev[m-1]).Sub(chebyshev[m-2])
		chebyshev = append(chebyshev, next.Rem(algebra.Q, c.poly))
	}
	four := k.FromInt(4)
	for _, way := range []struct {
		of   algebra.Poly[E]
		over bool
	}{{plain, false}, {over, true}} {
		for v := 1; v <= period; v++ {
			for u := range v {
				for _, sines := range []bool{true, false} {
					sum := chebyshev[u].Add(chebyshev[v])
					if sines {
						sum = chebyshev[u].Sub(chebyshev[v])
					}
					if x, ok := multipleOfPoly(k, way.of, sum); ok {
						return cosineProduct[E]{factor: k.Mul(four, x), u: u, v: v, sines: sines, over: way.over}, true
					}
				}
			}
		}
	}
	return cosineProduct[E]{}, false
}

// multipleOfPoly returns x with p = x q.
func multipleOfPoly[E any](k algebra.Scalars[E], p algebra.Poly[E], q algebra.Poly[algebra.Rat]) (x E, ok bool) {
	if p.Degree() != q.Degree() || p.IsZero() {
		return x, false
	}
	x = k.Mul(p.Lead(), k.FromRat(q.Lead().Inv()))
	for i := range p.Degree() {
		if !k.Equal(p.Coef(i), k.Mul(x, k.FromRat(q.Coef(i)))) {
			return x, false
		}
	}
	return x, true
}

// productNode writes the product at an angle, times sin(alpha/2)^sines.
func (w presenter[E]) productNode(f cosineProduct[E], alpha algebra.Rat, sines int) Node {
	half := alpha.Mul(algebra.NewRat(1, 2))
	if f.over {
		sines -= 2
	}
	var above []Node
	for _, n := range []int{f.v + f.u, f.v - f.u} {
		r := half.Mul(algebra.RatFromInt(int64(n)))
		if f.sines { // as the cosine of the complement
			r = algebra.NewRat(1, 2).Sub(r)
		}
		q, minus := reducedTurn(r)
		if minus {
			f.factor = w.k.Neg(f.factor)
		}
		above = append(above, w.exactTurn(&f.factor, q, f.sines)...)
	}
	if len(above) == 2 && above[0].String() == above[1].String() {
		above = []Node{Pow(above[0], 2)}
	}
	// Sines of alpha/2 cancel where they can.
	for sines < 0 {
		i := indexOf(above, halfSine(alpha))
		if i < 0 {
			break
		}
		above = append(above[:i:i], above[i+1:]...)
		sines++
	}
	switch {
	case sines > 0:
		above = append(above, halfSine(alpha))
	case sines < 0:
		return Div(Mul(append([]Node{w.Node(f.factor)}, above...)...), Pow(halfSine(alpha), -sines))
	}
	return Mul(append([]Node{w.Node(f.factor)}, above...)...)
}

// exactTurn writes cos(q pi), or takes it into the factor where it is rational.
func (w presenter[E]) exactTurn(factor *E, q algebra.Rat, sine bool) []Node {
	switch {
	case q.IsZero():
		return nil
	case q.Equal(algebra.NewRat(1, 2)):
		*factor = w.k.Zero()
		return nil
	case q.Equal(algebra.NewRat(1, 3)):
		*factor = exactQuo[E](w.k, *factor, 2)
		return nil
	}
	return []Node{turnNode(q, sine)}
}

func indexOf(list []Node, n Node) int {
	for i, x := range list {
		if x.String() == n.String() {
			return i
		}
	}
	return -1
}
