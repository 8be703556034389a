package expr

import (
	"context"
	"sort"
	"strconv"
	"strings"

	"example.org/closedform/algebra"
)

// Decimal is a positive number written as a decimal, such as 0.36788 or 1.2e-7,
// exact or rounded to nearest in its last digit.
type Decimal struct {
	place
	Text string
}

func (n Decimal) String() string { return write(n, text{}).text }

// Val returns the number that is written.
func (n Decimal) Val() algebra.Rat {
	x, err := algebra.ParseRat(n.Text)
	if err != nil {
		panic(err) // the text is a number
	}
	return x
}

// decimalWriter writes the terms of a function over a field in decimals.
type decimalWriter[E any] struct {
	presenter[E]
	ctx    context.Context
	f      *overField[E]
	images []Image[E]
	prec   uint // of the balls
}

// decimals returns a writer of the images of f.
func (f *overField[E]) decimals(ctx context.Context, variable string, form Form) *decimalWriter[E] {
	w := &decimalWriter[E]{ctx: ctx, f: f, images: f.images()}
	w.presenter = presenter[E]{k: f.k, style: styleOf(f.k), variable: Sym(variable), origin: f.origin, form: form}
	w.time = w.timeNode()
	return w
}

// decimal returns f in decimals.
func (f *overField[E]) decimal(ctx context.Context, variable string, form Form) (Node, error) {
	w := f.decimals(ctx, variable, form)
	if !f.k.IsZero(f.origin) {
		at, err := w.element(f.origin)
		if err != nil {
			return nil, err
		}
		w.time = Add(w.variable, Negate(at))
	}
	var terms []Node
	for i, t := range f.free {
		n, err := w.image(i+1, allPrimes)
		if err != nil {
			return nil, err
		}
		terms = append(terms, Mul(Sym(t.Name), n))
	}
	n, err := w.image(0, allPrimes)
	if err != nil {
		return nil, err
	}
	return Add(append(terms, n)...), nil
}

// decimalTerm is (cos(t), sin(t)) times the exponential of a rate, polynomials in
// the time, the highest power last. A nil entry is 0.
type decimalTerm struct {
	re, im   decimalNumber
	zeroRe   bool
	real     bool
	cos, sin []*decimalNumber
}

// decimalNumber is an enclosed number, with its exact value where that is rational
// and known.
type decimalNumber struct {
	ball  algebra.Ball
	exact *algebra.Rat
}

// allPrimes stands for all primes of an image.
const allPrimes = -1

// image writes the i-th image, or the part of one prime.
func (w *decimalWriter[E]) image(i, prime int) (Node, error) {
	// Precision is raised until all numbers have their digits.
	for prec := uint(64 + 4*w.form.Digits); prec <= mostPrecision; prec *= 2 {
		n, ok, err := w.imageAt(i, prime, prec)
		if err != nil || ok {
			return n, err
		}
	}
	return nil, Errorf(LimitExceeded, Pos{}, "the digits of a coefficient are not found with %d bits", mostPrecision)
}

func (w *decimalWriter[E]) imageAt(i, prime int, prec uint) (n Node, ok bool, err error) {
	f := w.images[i]
	w.prec = prec
	x, err := w.f.cache.get(w.ctx, w.k, w.images, prec)
	if err != nil {
		return nil, false, err
	}
	type placed struct {
		re, im float64
		node   Node
	}
	var terms []placed
	next := 0
	for p := range f.den {
		part := f.local(p)
		roots, err := f.den[p].rootSet(w.ctx, f.k)
		if err != nil {
			return nil, false, err
		}
		for r := range roots.Len() {
			if roots.Conjugate(r) < r {
				continue
			}
			s := x.terms[i][next]
			next++
			if prime != allPrimes && prime != p {
				continue
			}
			t, err := w.term(part, roots, r, s, x.rates[s.rate])
			if err != nil {
				return nil, false, err
			}
			node, ok := w.write(t)
			if !ok {
				return nil, false, nil
			}
			re := 0.0
			if !t.zeroRe {
				re, _ = t.re.ball.Mid().Float64()
			}
			im, _ := t.im.ball.Mid().Float64()
			terms = append(terms, placed{re, im, node})
		}
	}
	sort.SliceStable(terms, func(a, b int) bool {
		if decays := terms[a].re < 0; w.form.SteadyLast && decays != (terms[b].re < 0) {
			return decays
		}
		if terms[a].re != terms[b].re {
			return terms[a].re > terms[b].re
		}
		return terms[a].im < terms[b].im
	})
	nodes := make([]Node, len(terms))
	for j, t := range terms {
		nodes[j] = t.node
	}
	return Add(nodes...), true, nil
}

// term decides exactly which numbers of the part of one root are 0.
func (w *decimalWriter[E]) term(part localPart[E], roots *algebra.RootSet, r int, s series, rate rate) (decimalTerm, error) {
	t := decimalTerm{re: decimalNumber{ball: rate.at.Re}, im: decimalNumber{ball: rate.at.Im}, real: !rate.paired}
	k := w.k
	degree := part.p.Degree()
	if degree <= 2 {
		mean := k.Neg(exactQuo[E](k, part.p.Coef(degree-1), int64(degree)))
		if degree == 1 || !t.real {
			t.zeroRe = k.IsZero(mean)
			t.re.exact = w.rational(mean)
		}
	} else if !t.real && w.doubtful(rate.at.Re) {
		var err error
		if t.zeroRe, err = algebra.IsImaginary(w.ctx, k, part.p, roots, r); err != nil {
			return t, err
		}
	}
	// Coefficients and frequency of the parts that have exact ones.
	var cosines, sines []*algebra.Rat
	switch {
	case degree == 1:
		for _, c := range part.c {
			cosines = append(cosines, w.rational(coef(k, c, 0)))
		}
	case degree == 2 && !t.real:
		q := w.quadraticPart(part)
		for i := range part.c {
			cosines = append(cosines, w.rational(coef(k, q.a, i)))
		}
		if isNumber(q.root, 1) {
			t.im.exact = w.rational(q.c)
			for i := range part.c {
				sines = append(sines, w.rational(coef(k, q.b, i)))
			}
		}
	}
	exact := func(list []*algebra.Rat, i int) *algebra.Rat {
		if i < len(list) {
			return list[i]
		}
		return nil
	}
	constant := func(c algebra.Poly[E]) *algebra.Rat {
		if c.Degree() > 0 {
			return nil
		}
		return w.rational(coef(k, c, 0))
	}
	for i, c := range s.c {
		if part.c[i].IsZero() {
			t.cos, t.sin = append(t.cos, nil), append(t.sin, nil)
			continue
		}
		whole := constant(part.c[i])
		if t.real {
			if whole == nil {
				whole = exact(cosines, i)
			}
			t.cos, t.sin = append(t.cos, &decimalNumber{c.Re, whole}), append(t.sin, nil)
			continue
		}
		if whole != nil {
			twice := whole.Mul(algebra.RatFromInt(2))
			t.cos, t.sin = append(t.cos, &decimalNumber{c.Re.MulPow2(1), &twice}), append(t.sin, nil)
			continue
		}
		u := &decimalNumber{c.Re.MulPow2(1), exact(cosines, i)}
		v := &decimalNumber{c.Im.MulPow2(1).Neg(), exact(sines, i)}
		if degree == 2 { // c(s) = x + y s is (x + y h) + y (s - h)
			mean := k.Neg(exactQuo[E](k, part.p.Coef(1), 2))
			if k.IsZero(k.Add(coef(k, part.c[i], 0), k.Mul(coef(k, part.c[i], 1), mean))) {
				u = nil
			}
			if k.IsZero(coef(k, part.c[i], 1)) {
				v = nil
			}
		}
		if u != nil && w.doubtful(u.ball) {
			zero, err := w.imaginary(part, roots, r, part.c[i])
			if err != nil {
				return t, err
			}
			if zero {
				u = nil
			}
		}
		if v != nil && w.doubtful(v.ball) {
			zero, err := w.isReal(part, roots, r, part.c[i])
			if err != nil {
				return t, err
			}
			if zero {
				v = nil
			}
		}
		t.cos, t.sin = append(t.cos, u), append(t.sin, v)
	}
	return t, nil
}

// doubtful tells whether a number may be 0, and is not found to be anything else
// with a precision that is enough for most.
func (w *decimalWriter[E]) doubtful(b algebra.Ball) bool {
	return w.prec >= 256 && b.ContainsZero()
}

// imaginary tells whether c(z) is imaginary, for the r-th root z of the prime of a
// part: its square is real and negative.
func (w *decimalWriter[E]) imaginary(part localPart[E], roots *algebra.RootSet, r int, c algebra.Poly[E]) (bool, error) {
	real, sign, err := w.realValue(part, roots, r, c.Mul(c).Rem(w.k, part.p))
	return real && sign < 0, err
}

// isReal tells whether c(z) is real, for the r-th root z of the prime of a part.
func (w *decimalWriter[E]) isReal(part localPart[E], roots *algebra.RootSet, r int, c algebra.Poly[E]) (bool, error) {
	real, _, err := w.realValue(part, roots, r, c)
	return real, err
}

// realValue tells whether c(z) is real, and its sign: it is a root of the
// characteristic polynomial of the multiplication by c modulo the prime, and the
// one that its ball meets alone.
func (w *decimalWriter[E]) realValue(part localPart[E], roots *algebra.RootSet, r int, c algebra.Poly[E]) (real bool, sign int, err error) {
	k, n := w.k, part.p.Degree()
	columns := make([]algebra.Poly[E], n)
	columns[0] = c
	for j := 1; j < n; j++ {
		columns[j] = columns[j-1].ShiftUp(1).Rem(k, part.p)
	}
	chi, err := k.CharPoly(w.ctx, algebra.MatrixFromFunc[E](k, n, n, func(i, j int) E { return coef[E](k, columns[j], i) }))
	if err != nil {
		return false, 0, err
	}
	radical := algebra.Constant[E](k, k.One())
	for _, f := range algebra.SquareFree[E](k, chi) {
		radical = radical.Mul(f.P)
	}
	values, err := k.Roots(w.ctx, radical)
	if err != nil {
		return false, 0, err
	}
	for prec := uint(64); ; prec *= 2 {
		z, err := roots.Enclose(w.ctx, r, prec)
		if err != nil {
			return false, 0, err
		}
		y := algebra.Taylor(k, c, 0, algebra.NewPowers(z, n, prec))
		met, last := 0, algebra.ComplexBall{}
		index := 0
		for i := range values.Len() {
			x, err := values.Enclose(w.ctx, i, prec)
			if err != nil {
				return false, 0, err
			}
			if x.Overlaps(y) {
				met, last, index = met+1, x, i
			}
		}
		if met == 1 {
			sign, certain := last.Re.Sign()
			if index >= values.NumReal() || certain {
				return index < values.NumReal(), sign, nil
			}
		}
	}
}

// rational returns x if it is a rational number.
func (w *decimalWriter[E]) rational(x E) *algebra.Rat {
	if r, ok := w.k.Rational(x); ok {
		return &r
	}
	return nil
}

// write writes a term, if the balls have the digits.
func (w *decimalWriter[E]) write(t decimalTerm) (Node, bool) {
	exp := Node(Int(1))
	if !t.zeroRe {
		rate, ok := w.number(t.re)
		if !ok {
			return nil, false
		}
		exp = Apply("exp", Mul(rate, w.time))
	}
	cos, ok := w.polynomial(t.cos)
	if !ok {
		return nil, false
	}
	if t.real {
		return Mul(cos, exp), true
	}
	sin, ok := w.polynomial(t.sin)
	if !ok {
		return nil, false
	}
	frequency, ok := w.number(t.im)
	if !ok {
		return nil, false
	}
	angle := Mul(frequency, w.time)
	if w.form.Amplitude && len(t.cos) == 1 && t.cos[0] != nil && t.sin[0] != nil {
		prec := uint(64 + 8*w.form.Digits)
		a, b := t.cos[0].ball, t.sin[0].ball
		r, ok := w.number(decimalNumber{ball: a.Sqr(prec).Add(b.Sqr(prec), prec).Sqrt(prec)})
		if !ok {
			return nil, false
		}
		sign, certain := a.Sign()
		if !certain {
			return nil, false
		}
		if sign < 0 {
			a, b = a.Neg(), b.Neg()
		}
		phase, ok := w.number(decimalNumber{ball: algebra.Atan2(b, a, prec)})
		if !ok {
			return nil, false
		}
		n := Mul(r, exp, Apply("cos", Add(angle, Negate(phase))))
		if sign < 0 {
			n = Negate(n)
		}
		return n, true
	}
	c, s := Mul(cos, Apply("cos", angle)), Mul(sin, Apply("sin", angle))
	switch {
	case isNumber(exp, 1):
		return Add(c, s), true
	case isNumber(cos, 0):
		return Mul(sin, exp, Apply("sin", angle)), true
	case isNumber(sin, 0):
		return Mul(cos, exp, Apply("cos", angle)), true
	}
	if neg, ok := c.(Neg); ok {
		return Neg{X: Mul(exp, Add(neg.X, Negate(s)))}, true
	}
	return Mul(exp, Add(c, s)), true
}

// polynomial writes a polynomial in the time, highest power first.
func (w *decimalWriter[E]) polynomial(c []*decimalNumber) (Node, bool) {
	var terms []Node
	for i := len(c) - 1; i >= 0; i-- {
		if c[i] == nil {
			continue
		}
		n, ok := w.number(*c[i])
		if !ok {
			return nil, false
		}
		terms = append(terms, Mul(n, w.power(i)))
	}
	return Add(terms...), true
}

// number writes a number, if its ball determines the digits.
func (w *decimalWriter[E]) number(x decimalNumber) (Node, bool) {
	if n := x.exact; n != nil && w.form.Numbers == MixedNumbers && effort(Num(*n)) <= mostExactEffort {
		return signedNum(*n), true
	}
	if x.exact != nil {
		return decimalNode(algebra.RatDecimal(x.exact.Big(), w.form.Digits), x.exact, w.form.Digits), true
	}
	s, ok := x.ball.Decimal(w.form.Digits)
	if !ok {
		return nil, false
	}
	return decimalNode(s, nil, w.form.Digits), true
}

// element writes an element of the field.
func (w *decimalWriter[E]) element(x E) (Node, error) {
	for prec := uint(64 + 4*w.form.Digits); prec <= mostPrecision; prec *= 2 {
		if n, ok := w.number(decimalNumber{w.k.Enclose(x, prec), w.rational(x)}); ok {
			return n, nil
		}
	}
	return nil, errRounding
}

// decimalNode writes a decimal of the given number of digits. Where it is the exact
// value that is written, it has no zeros at its end: 3 for 3.00000, 0.25 for
// 0.250000. Zeros that no digits stand for become a power of ten: 1.2e7.
func decimalNode(s string, exact *algebra.Rat, digits int) Node {
	minus := strings.HasPrefix(s, "-")
	s = strings.TrimPrefix(s, "-")
	var n Node
	x, err := algebra.ParseRat(s)
	isExact := err == nil && exact != nil && x.Equal(exact.Abs())
	switch {
	case isExact && x.IsInt() && !strings.Contains(s, "e"):
		n = Num(x)
	case isExact:
		n = Decimal{Text: trimZeros(s)}
	case !strings.ContainsAny(s, ".e") && len(s) > digits:
		mantissa := s[:1]
		if digits > 1 {
			mantissa += "." + s[1:digits]
		}
		n = Decimal{Text: mantissa + "e" + strconv.Itoa(len(s)-1)}
	default:
		n = Decimal{Text: s}
	}
	if minus {
		n = Neg{X: n}
	}
	return n
}

// trimZeros drops the zeros at the end of the digits behind the point.
func trimZeros(s string) string {
	mantissa, exponent, hasExponent := strings.Cut(s, "e")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	if hasExponent {
		return mantissa + "e" + exponent
	}
	return mantissa
}
