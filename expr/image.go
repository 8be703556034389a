package expr

import (
	"context"

	"example.org/closedform/algebra"
)

// Image is the Laplace image of an exponential polynomial over a field K, in
// its canonical form
//
//	F(s) = N(s) / (p1(s)^e1 ... pr(s)^er)
//
// in lowest terms, with monic irreducible pi and deg N below the degree of the
// denominator. Two exponential polynomials are the same function exactly when
// their images are equal.
type Image[E any] struct {
	k   algebra.Scalars[E]
	num algebra.Poly[E]
	den []primePower[E]
}

// prime is a monic irreducible polynomial together with its roots, which are
// isolated when first asked for and shared by all images that hold the prime.
type prime[E any] struct {
	p     algebra.Poly[E]
	roots shared[*algebra.RootSet]
}

func newPrime[E any](k algebra.Scalars[E], p algebra.Poly[E]) *prime[E] {
	return &prime[E]{p: p.Monic(k)}
}

// rootSet isolates the roots of the prime.
func (p *prime[E]) rootSet(ctx context.Context, k algebra.Scalars[E]) (*algebra.RootSet, error) {
	return p.roots.get(ctx, func(ctx context.Context) (*algebra.RootSet, error) { return k.Roots(ctx, p.p) })
}

type primePower[E any] struct {
	*prime[E]
	e int
}

// ZeroImage returns the image of the zero function.
func ZeroImage[E any](k algebra.Scalars[E]) Image[E] {
	return Image[E]{k: k}
}

// Denominator is a product of powers of irreducible polynomials that several
// images share.
type Denominator[E any] struct {
	k  algebra.Scalars[E]
	pp []primePower[E]
}

// NewDenominator returns the product of the factors, which must be irreducible
// and pairwise coprime.
func NewDenominator[E any](k algebra.Scalars[E], factors []algebra.Factor[E]) Denominator[E] {
	d := Denominator[E]{k: k}
	for _, f := range factors {
		d.pp = append(d.pp, primePower[E]{newPrime(k, f.P), f.Mult})
	}
	return d
}

// Denominator returns the denominator of the image.
func (f Image[E]) Denominator() Denominator[E] { return Denominator[E]{f.k, f.den} }

// Factors returns the irreducible factors with their exponents.
func (d Denominator[E]) Factors() []algebra.Factor[E] {
	out := make([]algebra.Factor[E], len(d.pp))
	for i, pp := range d.pp {
		out[i] = algebra.Factor[E]{P: pp.p, Mult: pp.e}
	}
	return out
}

// Roots isolates the roots of the i-th factor; they are isolated once for all
// images over d.
func (d Denominator[E]) Roots(ctx context.Context, i int) (*algebra.RootSet, error) {
	return d.pp[i].rootSet(ctx, d.k)
}

// Poly returns the product.
func (d Denominator[E]) Poly() algebra.Poly[E] {
	out := algebra.Constant[E](d.k, d.k.One())
	for _, pp := range d.pp {
		out = out.Mul(pp.p.Pow(pp.e))
	}
	return out
}

// Join returns the least common multiple of d and g.
func (d Denominator[E]) Join(g Denominator[E]) Denominator[E] {
	return d.merge(g, func(a, b int) int { return max(a, b) })
}

// Mul returns the product of d and g.
func (d Denominator[E]) Mul(g Denominator[E]) Denominator[E] {
	return d.merge(g, func(a, b int) int { return a + b })
}

func (d Denominator[E]) merge(g Denominator[E], exponent func(a, b int) int) Denominator[E] {
	out := Denominator[E]{k: d.k, pp: append([]primePower[E](nil), d.pp...)}
	for _, pp := range g.pp {
		if i := out.find(pp.p); i >= 0 {
			out.pp[i].e = exponent(out.pp[i].e, pp.e)
		} else {
			out.pp = append(out.pp, pp)
		}
	}
	return out
}

// Without returns d with the exponent of the irreducible polynomial p lowered
// by n.
func (d Denominator[E]) Without(p algebra.Poly[E], n int) Denominator[E] {
	out := Denominator[E]{k: d.k}
	for _, pp := range d.pp {
		if pp.p.Equal(p) {
			pp.e -= n
		}
		if pp.e > 0 {
			out.pp = append(out.pp, pp)
		}
	}
	return out
}

// find returns the index of the prime p, -1 if it is not there.
func (d Denominator[E]) find(p algebra.Poly[E]) int {
	for i := range d.pp {
		if d.pp[i].p.Equal(p) {
			return i
		}
	}
	return -1
}

// Exponent returns the exponent of the irreducible polynomial p.
func (d Denominator[E]) Exponent(p algebra.Poly[E]) int {
	if i := d.find(p); i >= 0 {
		return d.pp[i].e
	}
	return 0
}

// cofactor returns d/g for a g that divides d.
func (d Denominator[E]) cofactor(g Denominator[E]) algebra.Poly[E] {
	out := algebra.Constant[E](d.k, d.k.One())
	for _, pp := range d.pp {
		if e := pp.e - g.Exponent(pp.p); e > 0 {
			out = out.Mul(pp.p.Pow(e))
		}
	}
	return out
}

// Numerator returns the numerator of f over the denominator d, which that of f
// must divide.
func (d Denominator[E]) Numerator(f Image[E]) algebra.Poly[E] {
	return f.num.Mul(d.cofactor(f.Denominator()))
}

// Image returns num/d in lowest terms. The degree of num must be below that of
// d.
func (d Denominator[E]) Image(num algebra.Poly[E]) Image[E] { return newImage(d.k, num, d.pp) }

// newImage establishes the canonical form.
func newImage[E any](k algebra.Scalars[E], num algebra.Poly[E], den []primePower[E]) Image[E] {
	if num.IsZero() {
		return ZeroImage(k)
	}
	var out []primePower[E]
	for _, pp := range den {
		for pp.e > 0 {
			q, ok := num.DivExact(k, pp.p)
			if !ok {
				break
			}
			num = q
			pp.e--
		}
		if pp.e > 0 {
			out = append(out, pp)
		}
	}
	return Image[E]{k: k, num: num, den: out}
}

// Numerator returns N.
func (f Image[E]) Numerator() algebra.Poly[E] { return f.num }

// IsZero tells whether f is the zero function.
func (f Image[E]) IsZero() bool { return f.num.IsZero() }

// Equal tells whether f and g are the same function.
func (f Image[E]) Equal(g Image[E]) bool {
	if len(f.den) != len(g.den) || !f.num.Equal(g.num) {
		return false
	}
	for _, pp := range f.den {
		if g.Denominator().Exponent(pp.p) != pp.e {
			return false
		}
	}
	return true
}

// Add returns the image of f + g.
func (f Image[E]) Add(g Image[E]) Image[E] {
	if f.IsZero() {
		return g
	}
	if g.IsZero() {
		return f
	}
	// Only a prime with the same exponent in both can cancel.
	df, dg := f.Denominator(), g.Denominator()
	d := df.Join(dg)
	var shared, apart []primePower[E]
	for _, pp := range d.pp {
		if df.Exponent(pp.p) == dg.Exponent(pp.p) {
			shared = append(shared, pp)
		} else {
			apart = append(apart, pp)
		}
	}
	sum := newImage(f.k, d.Numerator(f).Add(d.Numerator(g)), shared)
	if !sum.IsZero() {
		sum.den = append(sum.den, apart...)
	}
	return sum
}

// Scale returns the image of x f.
func (f Image[E]) Scale(x E) Image[E] {
	if f.IsZero() || f.k.IsZero(x) {
		return ZeroImage(f.k)
	}
	return Image[E]{k: f.k, num: f.num.Scale(x), den: f.den}
}

// Sub returns the image of f - g.
func (f Image[E]) Sub(g Image[E]) Image[E] {
	if g.IsZero() {
		return f
	}
	return f.Add(g.Scale(g.k.FromInt(-1)))
}

// degree returns the degree of the denominator.
func (f Image[E]) degree() int {
	n := 0
	for _, pp := range f.den {
		n += pp.e * pp.p.Degree()
	}
	return n
}

// zero returns 0, for the zero value of Image as well.
func (f Image[E]) zero() E {
	if f.k == nil {
		var x E
		return x
	}
	return f.k.Zero()
}

// Initial returns f(0), the limit of s F(s) for large s.
func (f Image[E]) Initial() E {
	if f.IsZero() || f.num.Degree() < f.degree()-1 {
		return f.zero()
	}
	return f.num.Lead()
}

// Derivative returns the image of df/dt, s F(s) - f(0).
func (f Image[E]) Derivative() Image[E] {
	if f.IsZero() {
		return f
	}
	num := f.num.ShiftUp(1).Sub(f.Denominator().Poly().Scale(f.Initial()))
	return newImage(f.k, num, f.den)
}

// Integral returns the image of the integral of f from 0 to t, F(s)/s.
func (f Image[E]) Integral() Image[E] {
	if f.IsZero() {
		return f
	}
	s := newPrime(f.k, algebra.Monomial[E](f.k, f.k.One(), 1))
	return f.Denominator().Mul(Denominator[E]{f.k, []primePower[E]{{s, 1}}}).Image(f.num)
}

// TimesT returns the image of t f(t), -dF/ds.
func (f Image[E]) TimesT() Image[E] {
	if f.IsZero() {
		return f
	}
	// With the radical r = p1 ... pr of the denominator,
	// -F' = (N sum(ei pi' r/pi) - N' r) / (D r).
	one := algebra.Constant[E](f.k, f.k.One())
	radical := one
	for _, pp := range f.den {
		radical = radical.Mul(pp.p)
	}
	var sum algebra.Poly[E]
	den := make([]primePower[E], len(f.den))
	for i, pp := range f.den {
		cof, _ := radical.DivExact(f.k, pp.p)
		sum = sum.Add(cof.Mul(pp.p.Derivative()).Scale(f.k.FromInt(int64(pp.e))))
		den[i] = primePower[E]{pp.prime, pp.e + 1}
	}
	return newImage(f.k, f.num.Mul(sum).Sub(f.num.Derivative().Mul(radical)), den)
}

// TimesExp returns the image of e^(at) f(t), F(s - a).
func (f Image[E]) TimesExp(a E) Image[E] {
	if f.IsZero() || f.k.IsZero(a) {
		return f
	}
	minus := f.k.Neg(a)
	den := make([]primePower[E], len(f.den))
	for i, pp := range f.den {
		den[i] = primePower[E]{newPrime(f.k, pp.p.Translate(minus)), pp.e}
	}
	return Image[E]{k: f.k, num: f.num.Translate(minus), den: den}
}

// Split returns the parts of the images by the factors of their denominators:
// those that keep selects make up the parts, the others the rests, image = part
// + rest.
func Split[E any](ctx context.Context, k algebra.Scalars[E], images []Image[E], keep func(p algebra.Poly[E]) bool) (parts, rests []Image[E], err error) {
	all := Denominator[E]{k: k}
	for _, f := range images {
		all = all.Join(f.Denominator())
	}
	in, out := Denominator[E]{k: k}, Denominator[E]{k: k}
	for _, pp := range all.pp {
		if keep(pp.p) {
			in.pp = append(in.pp, pp)
		} else {
			out.pp = append(out.pp, pp)
		}
	}
	parts, rests = make([]Image[E], len(images)), make([]Image[E], len(images))
	if len(in.pp) == 0 || len(out.pp) == 0 {
		for i, f := range images {
			parts[i], rests[i] = ZeroImage(k), f
			if len(out.pp) == 0 {
				parts[i], rests[i] = f, ZeroImage(k)
			}
		}
		return parts, rests, nil
	}
	// N/(P Q) = A/P + B/Q with A = N/Q mod P.
	p, q := in.Poly(), out.Poly()
	inv := mustInvert(algebra.NewExtension[E](k, p, "z"), q.Rem(k, p))
	for i, f := range images {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		n := all.Numerator(f)
		a := n.Rem(k, p).Mul(inv).Rem(k, p)
		b, _ := n.Sub(a.Mul(q)).DivExact(k, p)
		parts[i], rests[i] = in.Image(a), out.Image(b)
	}
	return parts, rests, nil
}
