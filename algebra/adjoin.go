package algebra

import (
	"context"
	"fmt"
	"math/big"

	"example.org/closedform/algebra/internal/mpoly"
)

// Adjunction is the result of [FunctionField.Adjoin].
type Adjunction struct {
	Field *FunctionField
	// Root is the root of the old field in the new one, 0 if there was none.
	Root Fraction
	// New is the number that was adjoined.
	New Fraction
}

// Adjoin returns the field with one more real algebraic number b, the root of q
// that near encloses with about the given bits. The coefficients of q, which
// need be neither irreducible nor square-free, are numbers of Q(a). The new
// field has a primitive element c = b + k a, scaled to an algebraic integer, in
// place of a (H. Cohen, A Course in Computational Algebraic Number Theory,
// section 4.5): q is factored over Q(a), the norm of the shifted factor is the
// minimal polynomial of c, and a is the common root over Q(c) of its own minimal
// polynomial and of the factor's. Where b lies in the field, the field is
// returned as it is. It fails when the degree of the field would exceed most.
func (f *FunctionField) Adjoin(ctx context.Context, q Poly[Fraction], near func(prec uint) Ball, most int) (Adjunction, error) {
	if f.surd {
		return Adjunction{}, fmt.Errorf("algebra: an algebraic number beside the square root of an expression with symbols is not taken")
	}
	k := f.numbers()
	h, err := k.factorAt(ctx, f.narrow(k, q), near)
	if err != nil {
		return Adjunction{}, err
	}
	if h.Degree() == 1 {
		out := Adjunction{Field: f, New: f.Neg(k.widen(f, h.Coef(0)))}
		if f.degree > 1 {
			out.Root = f.RootElement()
		}
		return out, nil
	}
	if n := f.degree * h.Degree(); n > most {
		return Adjunction{}, fmt.Errorf("algebra: algebraic numbers of degree %d together, at most %d are taken", n, most)
	}
	for c := int64(0); ; c = nextShift(c) {
		if c == 0 && k.degree > 1 {
			continue
		}
		p, ok, err := k.shiftedNorm(ctx, h, c)
		if err != nil {
			return Adjunction{}, err
		}
		if !ok {
			continue
		}
		scale := RatFromBigInt(commonDenominator(p.Coefs()))
		coefs := p.Coefs()
		for i, power := len(coefs)-1, RatFromInt(1); i >= 0; i, power = i-1, power.Mul(scale) {
			coefs[i] = coefs[i].Mul(power)
		}
		p = NewPoly[Rat](Q, coefs...)
		shift := RatFromInt(c)
		primitive, err := realRoot(ctx, p, func(prec uint) Ball {
			b := near(prec)
			if k.degree > 1 {
				b = b.Add(k.value(0, prec).MulInt(big.NewInt(c), prec), prec)
			}
			return b.Mul(BallFromRat(scale.Big(), prec), prec)
		})
		if err != nil {
			return Adjunction{}, err
		}
		out := Adjunction{Field: f.WithRoot(primitive)}
		g := out.Field
		inv := g.FromRat(scale.Inv())
		out.New = g.Mul(inv, g.RootElement())
		if k.degree > 1 {
			out.Root = k.rootIn(h, g, out.New, shift)
			out.New = g.Sub(out.New, g.Mul(g.FromRat(shift), out.Root))
		}
		return out, nil
	}
}

// numbers returns the field Q(a) without the variables.
func (f *FunctionField) numbers() *FunctionField {
	k := NewFunctionField(nil, nil)
	if f.degree > 1 {
		k = k.WithRoot(f.root)
	}
	return k
}

// narrow returns a polynomial whose coefficients are numbers over k = Q(a).
func (f *FunctionField) narrow(k *FunctionField, p Poly[Fraction]) Poly[Fraction] {
	c := make([]Fraction, len(p.c))
	for i, x := range p.c {
		terms := x.Numerator()
		for j, t := range terms {
			terms[j].Exp = t.Exp[:1]
		}
		den := mpoly.ConstantWord(1, 1)
		if !x.den.IsZero() {
			den = mpoly.Constant(1, x.den.ConstantTerm())
		}
		c[i] = k.over(mpoly.FromTerms(1, terms), den)
	}
	return NewPoly[Fraction](k, c...)
}

// widen returns the element x of Q(a) in the field g with the same root.
func (f *FunctionField) widen(g *FunctionField, x Fraction) Fraction {
	root := Fraction{}
	if g.degree > 1 {
		root = g.RootElement()
	}
	y, err := f.Map(x, g, root, nil)
	if err != nil {
		panic(err) // a denominator in Z does not vanish
	}
	return y
}

// factorAt returns the irreducible factor of q that has the enclosed root.
func (f *FunctionField) factorAt(ctx context.Context, q Poly[Fraction], near func(prec uint) Ball) (Poly[Fraction], error) {
	factors, err := f.FactorPoly(ctx, q)
	if err != nil {
		return Poly[Fraction]{}, err
	}
	for prec := uint(64); ; prec *= 2 {
		if err := ctx.Err(); err != nil {
			return Poly[Fraction]{}, err
		}
		x := near(prec)
		var left []Poly[Fraction]
		for _, g := range factors {
			var y Ball
			for i := g.P.Degree(); i >= 0; i-- {
				y = y.Mul(x, prec).Add(f.Enclose(g.P.Coef(i), prec), prec)
			}
			if y.ContainsZero() {
				left = append(left, g.P)
			}
		}
		switch {
		case len(left) == 1:
			return left[0], nil
		case len(left) == 0:
			return Poly[Fraction]{}, fmt.Errorf("algebra: the number to be adjoined is not a root of its polynomial")
		}
	}
}

// FactorAt returns the monic irreducible factor over Q of p that has the root
// which near encloses with about the given bits.
func FactorAt(ctx context.Context, p Poly[Rat], near func(prec uint) Ball) (Poly[Rat], error) {
	k := NewFunctionField(nil, nil)
	c := make([]Fraction, p.Degree()+1)
	for i := range c {
		c[i] = k.FromRat(p.Coef(i))
	}
	f, err := k.factorAt(ctx, NewPoly[Fraction](k, c...), near)
	if err != nil {
		return Poly[Rat]{}, err
	}
	return k.rationalPoly(f), nil
}

// shiftedNorm returns the norm over Q of h(s - c a), and whether it is
// square-free; it is irreducible then, as h is.
func (f *FunctionField) shiftedNorm(ctx context.Context, h Poly[Fraction], c int64) (Poly[Rat], bool, error) {
	if f.degree == 1 {
		return f.rationalPoly(h), true, nil
	}
	moved := h.Translate(f.Mul(f.FromInt(-c), f.RootElement()))
	norm, err := f.norm(ctx, moved)
	if err != nil {
		return Poly[Rat]{}, false, err
	}
	n := f.rationalPoly(f.monic(norm))
	parts := SquareFree[Rat](Q, n)
	return n, len(parts) == 1 && parts[0].Mult == 1, ctx.Err()
}

// rationalPoly returns a polynomial whose coefficients are rational numbers.
func (f *FunctionField) rationalPoly(p Poly[Fraction]) Poly[Rat] {
	c := make([]Rat, len(p.c))
	for i, x := range p.c {
		r, ok := f.Rational(x)
		if !ok {
			panic("algebra: a coefficient that should be rational is not")
		}
		c[i] = r
	}
	return NewPoly[Rat](Q, c...)
}

// realRoot returns the root of an irreducible polynomial that near encloses.
func realRoot(ctx context.Context, p Poly[Rat], near func(prec uint) Ball) (Algebraic, error) {
	roots, err := AlgebraicRoots(ctx, p)
	if err != nil {
		return Algebraic{}, err
	}
	for prec := uint(64); ; prec *= 2 {
		x := near(prec)
		var left []Algebraic
		for _, r := range roots {
			if !r.IsReal() {
				continue
			}
			z, err := r.Enclose(ctx, prec)
			if err != nil {
				return Algebraic{}, err
			}
			if z.Re.Overlaps(x) {
				left = append(left, r)
			}
		}
		switch len(left) {
		case 1:
			return left[0], nil
		case 0:
			return Algebraic{}, fmt.Errorf("algebra: an enclosed number is not a root of its polynomial")
		}
	}
}

// rootIn returns the root a of f in the field g, where c = b + k a and b is a
// root of the irreducible polynomial h over Q(a): the polynomials m(x), minimal
// for a, and h(c - k x) with x in place of a have a in common, and nothing else.
func (f *FunctionField) rootIn(h Poly[Fraction], g *FunctionField, c Fraction, k Rat) Fraction {
	line := NewPoly[Fraction](g, c, g.FromRat(k.Neg())) // c - k x
	power := Constant[Fraction](g, g.One())
	sum := Poly[Fraction]{ring: g}
	for i := range h.Degree() + 1 {
		if i > 0 {
			power = power.Mul(line)
		}
		// The coefficient as a polynomial in x.
		y := h.Coef(i)
		den := f.denominator(y).ConstantTerm()
		var coefs []Fraction
		for _, t := range y.num.Coefficients(0) {
			coefs = append(coefs, g.FromRat(RatFromFrac(t.ConstantTerm(), den)))
		}
		sum = sum.Add(power.Mul(NewPoly[Fraction](g, coefs...)))
	}
	var m []Fraction
	for _, t := range f.mod.Coefficients(0) {
		m = append(m, g.FromRat(RatFromBigInt(t.ConstantTerm())))
	}
	common := euclid[Fraction](g, NewPoly[Fraction](g, m...), sum)
	if common.Degree() != 1 {
		panic("algebra: a primitive element that is none")
	}
	return g.Neg(common.Coef(0))
}
