package algebra

import (
	"strconv"
	"strings"
)

// Poly is an immutable polynomial c0 + c1 s + ... + cn s^n over a ring. The
// zero value is the zero polynomial of any ring; its degree is -1.
//
// Binary operations expect both operands over the same ring, which is the
// caller's promise.
type Poly[E any] struct {
	ring Ring[E]
	c    []E    // no leading zero; never modified once the Poly is returned
	q    *qpoly // over Rationals, in place of c
}

// NewPoly returns the polynomial with the coefficient c[i] at s^i.
func NewPoly[E any](r Ring[E], c ...E) Poly[E] {
	return ownPoly(r, append([]E(nil), c...))
}

// ownPoly takes possession of c and establishes the normal form.
func ownPoly[E any](r Ring[E], c []E) Poly[E] {
	if _, ok := any(r).(Rationals); ok {
		return Poly[E]{ring: r, q: qFromRats(any(c).([]Rat))}
	}
	n := len(c)
	for n > 0 && r.IsZero(c[n-1]) {
		n--
	}
	return Poly[E]{ring: r, c: c[:n:n]}
}

// over returns the polynomial with the given form over Q in the ring of p.
func (p Poly[E]) over(q *qpoly) Poly[E] { return Poly[E]{ring: p.ring, q: q} }

// flat tells whether the operands are held in the form for Q.
func flat[E any](p, q Poly[E]) bool { return p.q != nil || q.q != nil }

// Constant returns the polynomial x.
func Constant[E any](r Ring[E], x E) Poly[E] { return ownPoly(r, []E{x}) }

// Monomial returns x s^n.
func Monomial[E any](r Ring[E], x E, n int) Poly[E] {
	c := make([]E, n+1)
	for i := range c {
		c[i] = r.Zero()
	}
	c[n] = x
	return ownPoly(r, c)
}

// PolyFromInts returns the polynomial over Q with these integer coefficients,
// the constant one first.
func PolyFromInts(c ...int64) Poly[Rat] {
	out := make([]Rat, len(c))
	for i, n := range c {
		out[i] = RatFromInt(n)
	}
	return Poly[Rat]{ring: Q, q: qFromRats(out)}
}

// Ring returns the ring of the coefficients, nil for the zero value.
func (p Poly[E]) Ring() Ring[E] { return p.ring }

// Degree returns the degree, -1 for the zero polynomial.
func (p Poly[E]) Degree() int { return len(p.c) + p.q.length() - 1 }

// IsZero tells whether p = 0.
func (p Poly[E]) IsZero() bool { return len(p.c) == 0 && p.q == nil }

// Coef returns the coefficient of s^i, zero beyond the degree. It panics on the
// zero value, which has no ring to take a zero from.
func (p Poly[E]) Coef(i int) E {
	if i < 0 || i > p.Degree() {
		return p.ring.Zero()
	}
	if p.q != nil {
		return any(p.q.coef(i)).(E)
	}
	return p.c[i]
}

// Lead returns the leading coefficient. It panics when p = 0.
func (p Poly[E]) Lead() E {
	if p.IsZero() {
		panic("algebra: leading coefficient of the zero polynomial")
	}
	return p.Coef(p.Degree())
}

// Coefs returns a copy of the coefficients, the constant one first.
func (p Poly[E]) Coefs() []E {
	if p.q != nil {
		return any(p.q.rats()).([]E)
	}
	return append([]E(nil), p.c...)
}

// Equal tells whether p = q.
func (p Poly[E]) Equal(q Poly[E]) bool {
	if p.q != nil && q.q != nil {
		return p.q.equal(q.q)
	}
	if p.Degree() != q.Degree() {
		return false
	}
	if flat(p, q) { // over Q in two guises of the domain
		for i := range p.Degree() + 1 {
			if !p.ring.Equal(p.Coef(i), q.Coef(i)) {
				return false
			}
		}
		return true
	}
	if len(p.c) != len(q.c) {
		return false
	}
	for i := range p.c {
		if !p.ring.Equal(p.c[i], q.c[i]) {
			return false
		}
	}
	return true
}

// Add returns p + q.
func (p Poly[E]) Add(q Poly[E]) Poly[E] {
	if p.ring == nil {
		return q
	}
	if flat(p, q) {
		return p.over(p.q.add(q.q))
	}
	if len(p.c) < len(q.c) {
		p, q = q, p
	}
	if len(q.c) == 0 {
		return p
	}
	c := append([]E(nil), p.c...)
	for i := range q.c {
		c[i] = p.ring.Add(c[i], q.c[i])
	}
	return ownPoly(p.ring, c)
}

// Sub returns p - q.
func (p Poly[E]) Sub(q Poly[E]) Poly[E] { return p.Add(q.Neg()) }

// Neg returns -p.
func (p Poly[E]) Neg() Poly[E] {
	if p.q != nil {
		return p.over(p.q.neg())
	}
	c := make([]E, len(p.c))
	for i := range p.c {
		c[i] = p.ring.Neg(p.c[i])
	}
	return Poly[E]{ring: p.ring, c: c}
}

// Scale returns x p.
func (p Poly[E]) Scale(x E) Poly[E] {
	if p.q != nil {
		return p.over(p.q.scale(any(x).(Rat)))
	}
	c := make([]E, len(p.c))
	for i := range p.c {
		c[i] = p.ring.Mul(p.c[i], x)
	}
	if p.ring == nil {
		return p
	}
	return ownPoly(p.ring, c)
}

// Mul returns p q by the schoolbook method, in (deg p + 1)(deg q + 1)
// multiplications; over Q by the product of integer polynomials.
func (p Poly[E]) Mul(q Poly[E]) Poly[E] {
	if p.ring == nil {
		p.ring = q.ring
	}
	if flat(p, q) {
		return p.over(p.q.mul(q.q))
	}
	if len(p.c) == 0 || len(q.c) == 0 {
		return Poly[E]{ring: p.ring}
	}
	return ownPoly(p.ring, mulSchoolbook(p.ring, p.c, q.c))
}

func mulSchoolbook[E any](r Ring[E], p, q []E) []E {
	c := make([]E, len(p)+len(q)-1)
	for i := range c {
		c[i] = r.Zero()
	}
	for i, x := range p {
		if r.IsZero(x) {
			continue
		}
		for j, y := range q {
			c[i+j] = r.Add(c[i+j], r.Mul(x, y))
		}
	}
	return c
}

// Pow returns p^n for n >= 0. The zero polynomial to the power 0 must have a
// ring.
func (p Poly[E]) Pow(n int) Poly[E] {
	r := Constant(p.ring, p.ring.One())
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			r = r.Mul(p)
		}
		if n > 1 {
			p = p.Mul(p)
		}
	}
	return r
}

// ShiftUp returns s^n p.
func (p Poly[E]) ShiftUp(n int) Poly[E] {
	if p.IsZero() || n == 0 {
		return p
	}
	if p.q != nil {
		return p.over(p.q.shiftUp(n))
	}
	c := make([]E, n, n+len(p.c))
	for i := range c {
		c[i] = p.ring.Zero()
	}
	return Poly[E]{ring: p.ring, c: append(c, p.c...)}
}

// Derivative returns dp/ds.
func (p Poly[E]) Derivative() Poly[E] {
	if p.q != nil {
		return p.over(p.q.derivative())
	}
	if len(p.c) < 2 {
		return Poly[E]{ring: p.ring}
	}
	c := make([]E, len(p.c)-1)
	for i := range c {
		c[i] = p.ring.Mul(p.ring.FromInt(int64(i+1)), p.c[i+1])
	}
	return ownPoly(p.ring, c)
}

// Eval returns p(x) by Horner's rule.
func (p Poly[E]) Eval(x E) E {
	if p.q != nil {
		return any(p.q.eval(any(x).(Rat))).(E)
	}
	y := p.ring.Zero()
	for i := len(p.c) - 1; i >= 0; i-- {
		y = p.ring.Add(p.ring.Mul(y, x), p.c[i])
	}
	return y
}

// Translate returns p(s + a), by repeated synthetic division.
func (p Poly[E]) Translate(a E) Poly[E] {
	if p.Degree() < 1 || p.ring.IsZero(a) {
		return p
	}
	if p.q != nil {
		return p.over(p.q.translate(any(a).(Rat)))
	}
	c := append([]E(nil), p.c...)
	for i := 0; i < len(c)-1; i++ {
		for j := len(c) - 2; j >= i; j-- {
			c[j] = p.ring.Add(c[j], p.ring.Mul(a, c[j+1]))
		}
	}
	return ownPoly(p.ring, c)
}

// Monic returns p divided by its leading coefficient; the zero polynomial
// stays. It panics when the leading coefficient has no inverse.
func (p Poly[E]) Monic(f Field[E]) Poly[E] {
	if p.q != nil {
		return p.over(p.q.monic())
	}
	if len(p.c) == 0 || f.Equal(p.Lead(), f.One()) {
		return p
	}
	return p.Scale(mustInv(f, p.Lead()))
}

// mustInv inverts where the caller knows that an inverse exists.
func mustInv[E any](f Field[E], x E) E {
	y, err := f.Inv(x)
	if err != nil {
		panic(err)
	}
	return y
}

// QuoRem returns q and r with p = q d + r and deg r < deg d, in
// (deg p - deg d + 1) deg d multiplications. It panics when d = 0.
func (p Poly[E]) QuoRem(f Field[E], d Poly[E]) (q, r Poly[E]) {
	if d.IsZero() {
		panic(ErrDivisionByZero)
	}
	if flat(p, d) {
		quo, rem := p.q.quoRem(d.q)
		return d.over(quo), d.over(rem)
	}
	n := len(p.c) - len(d.c)
	if n < 0 {
		return Poly[E]{ring: f}, Poly[E]{ring: f, c: p.c}
	}
	rem := append([]E(nil), p.c...)
	quo := make([]E, n+1)
	monic := f.Equal(d.Lead(), f.One())
	var inv E
	if !monic {
		inv = mustInv(f, d.Lead())
	}
	for k := n; k >= 0; k-- {
		x := rem[k+len(d.c)-1]
		if !monic {
			x = f.Mul(x, inv)
		}
		quo[k] = x
		if f.IsZero(x) {
			continue
		}
		for j := 0; j < len(d.c)-1; j++ {
			rem[k+j] = f.Sub(rem[k+j], f.Mul(x, d.c[j]))
		}
	}
	return ownPoly[E](f, quo), ownPoly[E](f, rem[:len(d.c)-1])
}

// Rem returns p modulo d.
func (p Poly[E]) Rem(f Field[E], d Poly[E]) Poly[E] {
	_, r := p.QuoRem(f, d)
	return r
}

// DivExact returns p/d and true if d divides p, 0 and false otherwise.
func (p Poly[E]) DivExact(f Field[E], d Poly[E]) (Poly[E], bool) {
	if flat(p, d) && !d.IsZero() {
		q, ok := p.q.divExact(d.q)
		return d.over(q), ok
	}
	q, r := p.QuoRem(f, d)
	if !r.IsZero() {
		return Poly[E]{ring: d.ring}, false
	}
	return q, true
}

// ReplaceBy returns p with every coefficient x replaced by g(x), over the ring r.
func ReplaceBy[E, F any](p Poly[E], r Ring[F], g func(E) F) Poly[F] {
	c := make([]F, p.Degree()+1)
	for i := range c {
		c[i] = g(p.Coef(i))
	}
	return ownPoly(r, c)
}

// Format writes p in the variable v, highest power first, with the domain's
// own text for the coefficients: "s^2 + 3*s - 1/2".
func (p Poly[E]) Format(v string) string {
	if p.IsZero() {
		return "0"
	}
	var b strings.Builder
	for i := p.Degree(); i >= 0; i-- {
		c := p.Coef(i)
		if p.ring.IsZero(c) {
			continue
		}
		x := p.ring.Text(c)
		neg := strings.HasPrefix(x, "-")
		switch {
		case neg && b.Len() == 0:
			b.WriteString("-")
		case neg:
			b.WriteString(" - ")
		case b.Len() > 0:
			b.WriteString(" + ")
		}
		x = strings.TrimPrefix(x, "-")
		power := v
		if i > 1 {
			power = v + "^" + strconv.Itoa(i)
		}
		switch {
		case i == 0:
			b.WriteString(x)
		case x == "1":
			b.WriteString(power)
		default:
			b.WriteString(x + "*" + power)
		}
	}
	return b.String()
}

// String writes p in the variable s.
func (p Poly[E]) String() string { return p.Format("s") }
