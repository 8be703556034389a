package algebra

import (
	"context"
	"fmt"
	"math/big"
	"strings"

	"example.org/closedform/algebra/internal/mpoly"
)

// Fraction is an element of a [FunctionField]: N/D with N a polynomial over Z in
// the root a and the variables, D one in the variables alone, in lowest terms,
// the leading coefficient of D positive. The zero value is 0. Like other
// elements it is bare data; what a and the variables are the domain knows.
type Fraction struct {
	num mpoly.Poly
	den mpoly.Poly // the zero value stands for 1
}

// FunctionField is the field Q(a)(x1, ..., xn) of rational functions in n
// variables, where a is a real algebraic number or the square root of a
// polynomial in the variables, and may be absent. Variables
// may stand for real numbers that are independent over Q(a), such as pi; where
// all of them do, its elements can be enclosed and it is a field of [Scalars]
// in every respect.
//
// Operations whose operands are too large panic with a *[LimitError]; see
// [CatchLimit].
type FunctionField struct {
	names  []string
	values []func(prec uint) Ball
	root   Algebraic  // a, where it is a number
	surd   bool       // a is the square root of a polynomial in the variables
	mod    mpoly.Poly // minimal polynomial of a, monic over Z; 0 if absent
	degree int        // of mod, 1 if absent
}

// NewFunctionField returns Q(names...). values[i], unless nil, encloses the
// number that the i-th variable stands for with about the given bits; values
// itself may be nil.
func NewFunctionField(names []string, values []func(prec uint) Ball) *FunctionField {
	f := &FunctionField{names: append([]string(nil), names...), degree: 1}
	f.values = make([]func(uint) Ball, len(names))
	copy(f.values, values)
	return f
}

// WithRoot returns the field with a root of a monic irreducible polynomial over
// Z adjoined, in place of the one it has. It panics when a is not real or not
// an algebraic integer.
func (f *FunctionField) WithRoot(a Algebraic) *FunctionField {
	p := a.MinPoly()
	if !a.IsReal() || p.Degree() < 2 {
		panic("algebra: extension by a number that is not real and irrational")
	}
	out := &FunctionField{names: f.names, values: f.values, root: a, degree: p.Degree()}
	var terms []mpoly.Term
	for i := range p.Degree() + 1 {
		c := p.Coef(i)
		if !c.IsInt() {
			panic("algebra: extension by a number that is not an algebraic integer")
		}
		exp := make([]int, f.size())
		exp[0] = i
		terms = append(terms, mpoly.Term{Coef: c.Num(), Exp: exp})
	}
	out.mod = mpoly.FromTerms(f.size(), terms)
	return out
}

// WithSurd returns the field with the square root of a polynomial in the
// variables adjoined, in place of the root it has. It panics when x has a
// denominator or is free of variables; that x is no square is the caller's
// promise.
func (f *FunctionField) WithSurd(x Fraction) *FunctionField {
	if !x.den.IsZero() || x.num.Uses(0) || x.num.IsConstant() {
		panic("algebra: not the square root of a polynomial")
	}
	a := mpoly.Variable(f.size(), 0)
	return &FunctionField{names: f.names, values: f.values, surd: true, mod: a.Mul(a).Sub(x.num), degree: 2}
}

// size is the number of variables of the polynomials: the root comes first.
func (f *FunctionField) size() int { return len(f.names) + 1 }

// Names returns the names of the variables.
func (f *FunctionField) Names() []string { return append([]string(nil), f.names...) }

// Root returns a, if there is one and it is a number.
func (f *FunctionField) Root() (Algebraic, bool) { return f.root, f.degree > 1 && !f.surd }

// Surd returns the polynomial that a is the square root of, if it is one.
func (f *FunctionField) Surd() (Fraction, bool) {
	if !f.surd {
		return Fraction{}, false
	}
	return Fraction{num: f.mod.Coefficients(0)[0].Neg()}, true
}

// HasRoot tells whether a occurs in x.
func (x Fraction) HasRoot() bool { return x.num.Uses(0) }

// Degree returns the degree of a over Q, 1 if there is none.
func (f *FunctionField) Degree() int { return f.degree }

// Variable returns the i-th variable, counted from 0.
func (f *FunctionField) Variable(i int) Fraction {
	return Fraction{num: mpoly.Variable(f.size(), i+1)}
}

// RootElement returns a. It panics when there is none.
func (f *FunctionField) RootElement() Fraction {
	if f.degree == 1 {
		panic("algebra: the field has no algebraic root")
	}
	return Fraction{num: mpoly.Variable(f.size(), 0)}
}

// LimitError is the panic value of operations on operands that are too large.
type LimitError struct{ What string }

func (e *LimitError) Error() string { return "algebra: " + e.What }

// CatchLimit, deferred, turns the panic of a *[LimitError] into an error.
func CatchLimit(err *error) {
	if r := recover(); r != nil {
		e, ok := r.(*LimitError)
		if !ok {
			panic(r)
		}
		*err = e
	}
}

// mostProducts bounds the products of terms in one multiplication: about half a
// second.
const mostProducts = 1 << 23

// mostTerms bounds the terms of a numerator or denominator.
const mostTerms = 20_000

func mul(p, q mpoly.Poly) mpoly.Poly {
	if n, m := p.Len(), q.Len(); n*m > mostProducts {
		panic(&LimitError{fmt.Sprintf("the product of two expressions of %d and %d terms", n, m)})
	}
	return bounded(p.Mul(q))
}

// bounded returns p if it keeps the limit on terms.
func bounded(p mpoly.Poly) mpoly.Poly {
	if n := p.Len(); n > mostTerms {
		panic(&LimitError{fmt.Sprintf("an expression of %d terms in the symbols, at most %d are taken", n, mostTerms)})
	}
	return p
}

func gcd(p, q mpoly.Poly) mpoly.Poly {
	g, err := mpoly.GCD(context.Background(), p, q)
	if err != nil {
		panic(&LimitError{err.Error()})
	}
	return g
}

func quo(p, q mpoly.Poly) mpoly.Poly {
	if q.IsOne() {
		return p
	}
	r, ok := p.DivExact(q)
	if !ok {
		panic("algebra: a polynomial that should divide another does not")
	}
	return r
}

// denominator returns D.
func (f *FunctionField) denominator(x Fraction) mpoly.Poly {
	if x.den.IsZero() {
		return mpoly.ConstantWord(f.size(), 1)
	}
	return x.den
}

// over returns num/den with a common factor of which is not known.
func (f *FunctionField) over(num, den mpoly.Poly) Fraction {
	if num.IsZero() {
		return Fraction{}
	}
	if den.IsZero() || den.IsOne() {
		return Fraction{num: num}
	}
	if g := f.contentGCD(num, den); !g.IsOne() {
		num, den = quo(num, g), quo(den, g)
	}
	return signed(num, den)
}

// signed returns num/den in lowest terms with the canonical sign.
func signed(num, den mpoly.Poly) Fraction {
	if den.LeadSign() < 0 {
		num, den = num.Neg(), den.Neg()
	}
	if den.IsOne() {
		return Fraction{num: num}
	}
	return Fraction{num: num, den: den}
}

// contentGCD returns the greatest common divisor free of a of p and q, with q
// free of a.
func (f *FunctionField) contentGCD(p, q mpoly.Poly) mpoly.Poly {
	if !p.Uses(0) {
		return gcd(p, q)
	}
	g := q
	for _, c := range p.Coefficients(0) {
		if g.IsOne() {
			break
		}
		if !c.IsZero() {
			g = gcd(g, c)
		}
	}
	return g
}

// reduce returns p modulo the minimal polynomial of a.
func (f *FunctionField) reduce(p mpoly.Poly) mpoly.Poly {
	if p.Degree(0) < f.degree {
		return p
	}
	c := p.Coefficients(0)
	m := f.mod.Coefficients(0)
	for k := len(c) - 1; k >= f.degree; k-- {
		for j := range f.degree {
			if !m[j].IsZero() {
				c[k-f.degree+j] = c[k-f.degree+j].Sub(mul(c[k], m[j]))
			}
		}
	}
	return mpoly.FromCoefficients(0, c[:f.degree])
}

// invertsByNorm tells that Euclid's algorithm over the field lets expressions
// grow: there are variables.
func (f *FunctionField) invertsByNorm() bool { return len(f.names) > 0 }

func (f *FunctionField) Zero() Fraction { return Fraction{} }

func (f *FunctionField) One() Fraction { return f.FromInt(1) }

func (f *FunctionField) FromInt(n int64) Fraction {
	return Fraction{num: mpoly.ConstantWord(f.size(), n)}
}

// FromRat returns the image of a rational number.
func (f *FunctionField) FromRat(x Rat) Fraction {
	num := Fraction{num: mpoly.Constant(f.size(), x.Num())}
	if !x.IsInt() {
		num.den = mpoly.Constant(f.size(), x.Den())
	}
	return num
}

// Add returns x + y, with gcds of denominators only (P. Henrici, A subroutine
// for computations with rational numbers, J. ACM 3, 1956).
func (f *FunctionField) Add(x, y Fraction) Fraction {
	switch {
	case x.num.IsZero():
		return y
	case y.num.IsZero():
		return x
	case x.den.IsZero() && y.den.IsZero():
		return Fraction{num: bounded(x.num.Add(y.num))}
	case x.den.Equal(y.den):
		return f.over(bounded(x.num.Add(y.num)), x.den)
	}
	b, d := f.denominator(x), f.denominator(y)
	g := gcd(b, d)
	num := bounded(mul(x.num, quo(d, g)).Add(mul(y.num, quo(b, g))))
	if num.IsZero() {
		return Fraction{}
	}
	den := mul(b, quo(d, g))
	if !g.IsOne() {
		if h := f.contentGCD(num, g); !h.IsOne() {
			num, den = quo(num, h), quo(den, h)
		}
	}
	return signed(num, den)
}

// Sum returns the sum of the elements, added in pairs, so that operands stay
// short.
func (f *FunctionField) Sum(x []Fraction) Fraction {
	switch len(x) {
	case 0:
		return Fraction{}
	case 1:
		return x[0]
	}
	return f.Add(f.Sum(x[:len(x)/2]), f.Sum(x[len(x)/2:]))
}

func (f *FunctionField) Sub(x, y Fraction) Fraction { return f.Add(x, f.Neg(y)) }

func (f *FunctionField) Neg(x Fraction) Fraction { return Fraction{num: x.num.Neg(), den: x.den} }

// Mul returns x y.
func (f *FunctionField) Mul(x, y Fraction) Fraction {
	if x.num.IsZero() || y.num.IsZero() {
		return Fraction{}
	}
	if x.num.Uses(0) && y.num.Uses(0) {
		// The reduction modulo the minimal polynomial may bring in new content.
		num := f.reduce(mul(x.num, y.num))
		return f.over(num, mul(f.denominator(x), f.denominator(y)))
	}
	a, b, c, d := x.num, x.den, y.num, y.den
	if !d.IsZero() {
		g := f.contentGCD(a, d)
		a, d = quo(a, g), quo(d, g)
	}
	if !b.IsZero() {
		g := f.contentGCD(c, b)
		c, b = quo(c, g), quo(b, g)
	}
	num := mul(a, c)
	switch {
	case b.IsZero() && d.IsZero():
		return Fraction{num: num}
	case b.IsZero():
		return signed(num, d)
	case d.IsZero():
		return signed(num, b)
	}
	return signed(num, mul(b, d))
}

// Inv returns 1/x, or ErrDivisionByZero. Where x holds the root a, the
// denominator becomes the norm: by the theorem of Cayley and Hamilton for the
// multiplication by x, with the characteristic polynomial
// s^d + c1 s^(d-1) + ... + cd, 1/x = -(x^(d-1) + c1 x^(d-2) + ... + c(d-1))/cd.
func (f *FunctionField) Inv(x Fraction) (Fraction, error) {
	if x.num.IsZero() {
		return Fraction{}, ErrDivisionByZero
	}
	if !x.num.Uses(0) {
		return signed(f.denominator(x), x.num), nil
	}
	if p, ok := f.inRoot(x.num); ok && !f.surd {
		m, _ := f.inRoot(f.mod)
		u, err := inverseModulo(p, m)
		if err != nil {
			return Fraction{}, err
		}
		return f.Mul(f.fromRoot(u), Fraction{num: f.denominator(x)}), nil
	}
	chi, err := f.multiplication(context.Background(), x.num)
	if err != nil {
		return Fraction{}, err
	}
	d := f.degree
	sum := mpoly.ConstantWord(f.size(), 1)
	for i := 1; i < d; i++ {
		sum = f.reduce(mul(sum, x.num)).Add(chi.Coef(d - i))
	}
	return f.over(mul(sum.Neg(), f.denominator(x)), chi.Coef(0)), nil
}

// solvedInverse is the degree from which on inverses modulo a polynomial come from
// the linear equations for their coefficients, by p-adic lifting: the remainders of
// Euclid's algorithm grow too long then.
const solvedInverse = 6

// inverseModulo returns the inverse of p modulo an irreducible m.
func inverseModulo(p, m Poly[Rat]) (Poly[Rat], error) {
	d := m.Degree()
	if d < solvedInverse {
		_, u, _ := ExtendedGCD[Rat](Q, p, m)
		return u, nil
	}
	columns := make([]Poly[Rat], d)
	columns[0] = p.Rem(Q, m)
	for j := 1; j < d; j++ {
		columns[j] = columns[j-1].ShiftUp(1).Rem(Q, m)
	}
	at := func(i, j int) Rat {
		if i > columns[j].Degree() {
			return Rat{}
		}
		return columns[j].Coef(i)
	}
	one := func(i, _ int) Rat {
		if i == 0 {
			return RatFromInt(1)
		}
		return Rat{}
	}
	u, err := Solve[Rat](context.Background(), Q, MatrixFromFunc[Rat](Q, d, d, at), MatrixFromFunc[Rat](Q, d, 1, one))
	if err != nil {
		return Poly[Rat]{}, err
	}
	coefs := make([]Rat, d)
	for i := range coefs {
		coefs[i] = u.At(i, 0)
	}
	return NewPoly[Rat](Q, coefs...), nil
}

// inRoot returns a polynomial in a alone as one over Q.
func (f *FunctionField) inRoot(p mpoly.Poly) (Poly[Rat], bool) {
	for i := range f.names {
		if p.Uses(i + 1) {
			return Poly[Rat]{}, false
		}
	}
	parts := p.Coefficients(0)
	c := make([]Rat, len(parts))
	for i, q := range parts {
		c[i] = RatFromBigInt(q.ConstantTerm())
	}
	return NewPoly[Rat](Q, c...), true
}

// fromRoot is the inverse of inRoot, for degrees below that of a.
func (f *FunctionField) fromRoot(p Poly[Rat]) Fraction {
	ints, den := overZ(p)
	terms := make([]mpoly.Term, len(ints))
	for i, c := range ints {
		exp := make([]int, f.size())
		exp[0] = i
		terms[i] = mpoly.Term{Coef: c, Exp: exp}
	}
	return f.over(mpoly.FromTerms(f.size(), terms), mpoly.Constant(f.size(), den))
}

// multiplication returns the characteristic polynomial of the multiplication by
// p modulo the minimal polynomial of a, over the polynomials in the variables.
func (f *FunctionField) multiplication(ctx context.Context, p mpoly.Poly) (Poly[mpoly.Poly], error) {
	r := polynomials{f.size()}
	d := f.degree
	columns := make([][]mpoly.Poly, d)
	power := f.reduce(p)
	for j := range columns {
		columns[j] = make([]mpoly.Poly, d)
		copy(columns[j], power.Coefficients(0))
		if j < d-1 {
			power = f.reduce(power.Mul(mpoly.Variable(f.size(), 0)))
		}
	}
	m := MatrixFromFunc[mpoly.Poly](r, d, d, func(i, j int) mpoly.Poly { return columns[j][i] })
	return CharPoly(ctx, m)
}

// polynomials is the ring of integer polynomials in n variables.
type polynomials struct{ n int }

func (r polynomials) Zero() mpoly.Poly               { return mpoly.Poly{} }
func (r polynomials) One() mpoly.Poly                { return r.FromInt(1) }
func (r polynomials) FromInt(n int64) mpoly.Poly     { return mpoly.ConstantWord(r.n, n) }
func (r polynomials) Add(x, y mpoly.Poly) mpoly.Poly { return x.Add(y) }
func (r polynomials) Sub(x, y mpoly.Poly) mpoly.Poly { return x.Sub(y) }
func (r polynomials) Neg(x mpoly.Poly) mpoly.Poly    { return x.Neg() }
func (r polynomials) Mul(x, y mpoly.Poly) mpoly.Poly { return mul(x, y) }
func (r polynomials) Equal(x, y mpoly.Poly) bool     { return x.Equal(y) }
func (r polynomials) IsZero(x mpoly.Poly) bool       { return x.IsZero() }
func (r polynomials) Text(x mpoly.Poly) string       { return polyText(x, nil) }

func (f *FunctionField) Equal(x, y Fraction) bool {
	return x.num.Equal(y.num) && x.den.Equal(y.den)
}

func (f *FunctionField) IsZero(x Fraction) bool { return x.num.IsZero() }

// Rational returns the rational number that x is, if it is one.
func (f *FunctionField) Rational(x Fraction) (Rat, bool) {
	if x.num.IsZero() {
		return Rat{}, true
	}
	if !x.num.IsConstant() || !x.den.IsZero() && !x.den.IsConstant() {
		return Rat{}, false
	}
	if x.den.IsZero() {
		return RatFromBigInt(x.num.ConstantTerm()), true
	}
	return RatFromFrac(x.num.ConstantTerm(), x.den.ConstantTerm()), true
}

// Text writes x with the names of the variables and the root as #, which no variable
// should be called: elements are equal exactly when their texts are.
func (f *FunctionField) Text(x Fraction) string {
	names := append([]string{"#"}, f.names...)
	num := polyText(x.num, names)
	if x.den.IsZero() {
		return num
	}
	if x.num.Len() > 1 {
		num = "(" + num + ")"
	}
	den := polyText(x.den, names)
	if x.den.Len() > 1 || strings.Contains(den, "*") {
		den = "(" + den + ")"
	}
	return num + "/" + den
}

// polyText writes a polynomial with names for its variables, x0, x1, ... by
// default.
func polyText(p mpoly.Poly, names []string) string {
	if p.IsZero() {
		return "0"
	}
	var b strings.Builder
	for t := range p.Terms() {
		c := t.Coef
		switch {
		case b.Len() == 0 && c.Sign() < 0:
			b.WriteString("-")
		case c.Sign() < 0:
			b.WriteString(" - ")
		case b.Len() > 0:
			b.WriteString(" + ")
		}
		var factors []string
		if c = new(big.Int).Abs(c); !isOne(c) {
			factors = append(factors, c.String())
		}
		for i, e := range t.Exp {
			name := fmt.Sprintf("x%d", i)
			if names != nil {
				name = names[i]
			}
			switch {
			case e == 1:
				factors = append(factors, name)
			case e > 1:
				factors = append(factors, fmt.Sprintf("%s^%d", name, e))
			}
		}
		if len(factors) == 0 {
			factors = []string{"1"}
		}
		b.WriteString(strings.Join(factors, "*"))
	}
	return b.String()
}
