package expr

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
)

// series is the local part of an image at one root L, in balls: the term is
// (c[0] + c[1] t + ...) e^(Lt) with the rate L at an index of the expansion.
type series struct {
	rate int
	c    []algebra.ComplexBall
}

// rate is an enclosed root with its powers. A paired one stands for its
// conjugate as well: the terms are twice the real parts.
type rate struct {
	at     algebra.ComplexBall
	powers *algebra.Powers
	paired bool
}

// expansion encloses the local parts of several images. Rates that they share
// are listed once.
type expansion struct {
	prec  uint
	rates []rate
	terms [][]series // of each image
}

// expand encloses the local parts of the images at all roots with about prec
// bits, without exact residues: N and D are evaluated at the enclosed roots,
// what denominators have in common only once.
func expand[E any](ctx context.Context, k algebra.Scalars[E], images []Image[E], prec uint) (*expansion, error) {
	x := expander[E]{expansion: &expansion{prec: prec}, ctx: ctx, k: k}
	for _, f := range images {
		x.degree = max(x.degree, f.degree())
	}
	dens := make([]*expandedDenominator[E], len(images))
	for i, f := range images {
		var err error
		if dens[i], err = x.denominator(f.den); err != nil {
			return nil, err
		}
	}
	x.terms = make([][]series, len(images))
	err := InParallel(len(images), func(i int) (err error) {
		x.terms[i], err = x.image(images[i], dens[i])
		return err
	})
	return x.expansion, err
}

type expander[E any] struct {
	*expansion
	ctx    context.Context
	k      algebra.Scalars[E]
	degree int // the highest of the polynomials to be evaluated
	primes []*expandedPrime[E]
	dens   []*expandedDenominator[E]
}

// expandedPrime is a prime with the indices of its rates.
type expandedPrime[E any] struct {
	*prime[E]
	rates []int
}

// expandedDenominator holds (s - L)^e/D as a series, inverted, at the rates of
// each prime of a denominator D.
type expandedDenominator[E any] struct {
	den    []primePower[E]
	primes []*expandedPrime[E]
	series [][][]algebra.ComplexBall // of each prime and rate
}

// prime returns the expansion of a prime.
func (x *expander[E]) prime(p *prime[E]) (*expandedPrime[E], error) {
	for _, q := range x.primes {
		if q.prime == p || q.p.Equal(p.p) {
			return q, nil
		}
	}
	q := &expandedPrime[E]{prime: p}
	roots, err := p.rootSet(x.ctx, x.k)
	if err != nil {
		return nil, err
	}
	first := len(x.rates)
	for r := range roots.Len() {
		if roots.Conjugate(r) < r {
			continue
		}
		at, err := roots.Enclose(x.ctx, r, x.prec)
		if err != nil {
			return nil, err
		}
		q.rates = append(q.rates, len(x.rates))
		x.rates = append(x.rates, rate{at: at, paired: roots.Conjugate(r) != r})
	}
	err = InParallel(len(q.rates), func(i int) error {
		r := &x.rates[first+i]
		r.powers = algebra.NewPowers(r.at, x.degree, x.prec)
		return x.ctx.Err()
	})
	if err != nil {
		return nil, err
	}
	x.primes = append(x.primes, q)
	return q, nil
}

// denominator returns the expansion of a denominator.
func (x *expander[E]) denominator(den []primePower[E]) (*expandedDenominator[E], error) {
next:
	for _, d := range x.dens {
		if len(d.den) != len(den) {
			continue
		}
		for j, pp := range den {
			if d.den[j].e != pp.e || d.den[j].prime != pp.prime {
				continue next
			}
		}
		return d, nil
	}
	d := &expandedDenominator[E]{den: den}
	for _, pp := range den {
		q, err := x.prime(pp.prime)
		if err != nil {
			return nil, err
		}
		d.primes = append(d.primes, q)
	}
	one := algebra.ComplexBall{Re: algebra.BallFromInt(big.NewInt(1))}
	for i, pp := range den {
		n := pp.e
		all := make([][]algebra.ComplexBall, len(d.primes[i].rates))
		err := InParallel(len(all), func(r int) error {
			// p(L + h) = h q(h), and the part at L is N/(q^e Q) h^-e.
			at := x.rates[d.primes[i].rates[r]].powers
			product := []algebra.ComplexBall{one}
			for j, other := range den {
				skip := 0
				if i == j {
					skip = 1
				}
				q := taylorAt(x.k, other.p, at, skip, n)
				product = mulBalls(product, powBalls(q, other.e, n, x.prec), n, x.prec)
			}
			all[r] = divBalls([]algebra.ComplexBall{one}, product, n, x.prec)
			return x.ctx.Err()
		})
		if err != nil {
			return nil, err
		}
		d.series = append(d.series, all)
	}
	x.dens = append(x.dens, d)
	return d, nil
}

// image returns the terms of an image with the denominator d, prime by prime in
// the order of d.
func (x *expander[E]) image(f Image[E], d *expandedDenominator[E]) ([]series, error) {
	var out []series
	for i, pp := range f.den {
		n := pp.e
		for j, r := range d.primes[i].rates {
			if err := x.ctx.Err(); err != nil {
				return nil, err
			}
			g := mulBalls(taylorAt(x.k, f.num, x.rates[r].powers, 0, n), d.series[i][j], n, x.prec)
			c := make([]algebra.ComplexBall, n)
			fact := big.NewInt(1)
			for k := range c {
				if k > 1 {
					fact.Mul(fact, big.NewInt(int64(k)))
				}
				if n-1-k < len(g) {
					c[k] = divInt(g[n-1-k], fact, x.prec)
				}
			}
			out = append(out, series{rate: r, c: c})
		}
	}
	return out, nil
}

// at returns balls around the values of the images at t.
func (x *expansion) at(ctx context.Context, t algebra.Ball) ([]algebra.Ball, error) {
	prec := x.prec
	// The parts of e^(Lt), and of twice its conjugate for a pair: the sum is a dot
	// product of real numbers.
	re, im := make([]algebra.Ball, len(x.rates)), make([]algebra.Ball, len(x.rates))
	err := InParallel(len(x.rates), func(i int) error {
		r := x.rates[i]
		e := r.at.Re.Mul(t, prec).Exp(prec)
		if r.paired {
			e = e.MulPow2(1)
			sin, cos := r.at.Im.Mul(t, prec).SinCos(prec)
			re[i], im[i] = e.Mul(cos, prec), e.Mul(sin, prec).Neg()
		} else {
			re[i] = e
		}
		return ctx.Err()
	})
	if err != nil {
		return nil, err
	}
	out := make([]algebra.Ball, len(x.terms))
	err = InParallel(len(out), func(i int) error {
		coefs := make([]algebra.Ball, 0, 2*len(x.terms[i]))
		exps := make([]algebra.Ball, 0, 2*len(x.terms[i]))
		for _, s := range x.terms[i] {
			c := s.c[len(s.c)-1]
			for k := len(s.c) - 2; k >= 0; k-- {
				c = algebra.ComplexBall{Re: c.Re.Mul(t, prec), Im: c.Im.Mul(t, prec)}.Add(s.c[k], prec)
			}
			coefs, exps = append(coefs, c.Re), append(exps, re[s.rate])
			if x.rates[s.rate].paired {
				coefs, exps = append(coefs, c.Im), append(exps, im[s.rate])
			}
		}
		out[i] = algebra.Dot(coefs, exps, prec)
		return ctx.Err()
	})
	return out, err
}

func divInt(x algebra.ComplexBall, n *big.Int, prec uint) algebra.ComplexBall {
	if n.IsInt64() && n.Int64() == 1 {
		return x
	}
	b := algebra.BallFromInt(n)
	return algebra.ComplexBall{Re: x.Re.Quo(b, prec), Im: x.Im.Quo(b, prec)}
}

// taylorAt returns n coefficients of the expansion of p at an enclosed number,
// from the power skip on, or all if there are fewer.
func taylorAt[E any](k algebra.Scalars[E], p algebra.Poly[E], at *algebra.Powers, skip, n int) []algebra.ComplexBall {
	c := make([]algebra.ComplexBall, max(0, min(n, p.Degree()+1-skip)))
	for j := range c {
		c[j] = algebra.Taylor(k, p, j+skip, at)
	}
	return c
}

func mulBalls(a, b []algebra.ComplexBall, n int, prec uint) []algebra.ComplexBall {
	out := make([]algebra.ComplexBall, min(n, len(a)+len(b)-1))
	for i := range a {
		for j := 0; j < len(b) && i+j < len(out); j++ {
			out[i+j] = out[i+j].Add(a[i].Mul(b[j], prec), prec)
		}
	}
	return out
}

func powBalls(a []algebra.ComplexBall, e, n int, prec uint) []algebra.ComplexBall {
	out := []algebra.ComplexBall{{Re: algebra.BallFromInt(big.NewInt(1))}}
	for ; e > 0; e >>= 1 {
		if e&1 == 1 {
			out = mulBalls(out, a, n, prec)
		}
		if e > 1 {
			a = mulBalls(a, a, n, prec)
		}
	}
	return out
}

func divBalls(a, b []algebra.ComplexBall, n int, prec uint) []algebra.ComplexBall {
	out := make([]algebra.ComplexBall, n)
	for i := range out {
		var x algebra.ComplexBall
		if i < len(a) {
			x = a[i]
		}
		for j := 1; j <= i && j < len(b); j++ {
			x = x.Sub(b[j].Mul(out[i-j], prec), prec)
		}
		out[i] = x.Quo(b[0], prec)
	}
	return out
}

// rationalAt returns f(t) if it is a rational number: the limit of s F(s) at 0,
// and elsewhere what is known of the field.
func rationalAt[E any](ctx context.Context, f Image[E], t E) (algebra.Rat, bool) {
	if f.IsZero() {
		return algebra.Rat{}, true
	}
	if f.k.IsZero(t) {
		return f.k.Rational(f.Initial())
	}
	switch f := any(f).(type) {
	case Image[algebra.Rat]:
		return rationalOverQ(f, any(t).(algebra.Rat))
	case Image[Constant]:
		return any(f.k).(*Constants).rationalValue(ctx, f, any(t).(Constant))
	}
	return algebra.Rat{}, false
}

// rationalOverQ uses that f(t) at a rational t is rational, by the theorem of
// Lindemann and Weierstrass, exactly when the coefficients of all e^(Lt) with L
// not 0 vanish at t, and then is the value of the polynomial part.
func rationalOverQ(f Image[algebra.Rat], t algebra.Rat) (algebra.Rat, bool) {
	for _, pp := range f.den {
		// A simple root has the coefficient N/D', which is not zero.
		if pp.e == 1 && !isS(f.k, pp.p) {
			return algebra.Rat{}, false
		}
	}
	value := algebra.Rat{}
	for i, pp := range f.den {
		part := f.local(i)
		sum := part.c[pp.e-1]
		for j := pp.e - 2; j >= 0; j-- {
			sum = sum.Scale(t).Add(part.c[j])
		}
		if isS(f.k, pp.p) {
			if !sum.IsZero() {
				value = sum.Coef(0)
			}
		} else if !sum.IsZero() {
			return algebra.Rat{}, false
		}
	}
	return value, true
}

// rationalValue evaluates the written form at t exactly: e^x, cos x and sin x
// become constants, which are algebraic at the rational multiples of pi.
func (c *Constants) rationalValue(ctx context.Context, f Image[Constant], t Constant) (x algebra.Rat, ok bool) {
	for _, pp := range f.den {
		if pp.p.Degree() > 2 {
			return x, false
		}
	}
	tau := c.Node(t)
	w := presenter[Constant]{k: c, style: c, variable: tau, time: tau, origin: c.Zero()}
	n := w.image(f)
	_, err := Grow(c, func(k *Constants) error {
		env := Env[Constant]{K: k, Lookup: k.Lookup}
		v, err := env.Scalar(n)
		if err == nil {
			x, ok = k.Rational(v)
		}
		return err
	})
	return x, ok && err == nil
}

// isS tells whether p is the polynomial s.
func isS[E any](k algebra.Scalars[E], p algebra.Poly[E]) bool {
	return p.Degree() == 1 && k.IsZero(p.Coef(0))
}
