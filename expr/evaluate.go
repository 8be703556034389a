package expr

import (
	"context"
	"math/big"

	"example.org/closedform/algebra"
)

// series is the local part of an image at one root L, in balls: the term is
// (c[0] + c[1] t + ...) e^(Lt), twice its real part when paired stands for the
// conjugate as well.
type series struct {
	rate   algebra.ComplexBall
	c      []algebra.ComplexBall
	paired bool
}

// expand encloses the local parts of f at all roots with about prec bits,
// without exact residues: N and D are evaluated at the enclosed roots.
func (f Image[E]) expand(ctx context.Context, prec uint) ([]series, error) {
	num := enclosePoly(f.k, f.num, prec)
	dens := make([][]algebra.ComplexBall, len(f.den))
	for i, pp := range f.den {
		dens[i] = enclosePoly(f.k, pp.p, prec)
	}
	var out []series
	for i, pp := range f.den {
		roots, err := pp.rootSet(ctx, f.k)
		if err != nil {
			return nil, err
		}
		for r := range roots.Len() {
			if roots.Conjugate(r) < r {
				continue
			}
			at, err := roots.Enclose(ctx, r, prec)
			if err != nil {
				return nil, err
			}
			// p(L + h) = h q(h), and the part at L is N/(q^e Q) h^-e.
			n := pp.e
			d := []algebra.ComplexBall{complexInt(1)}
			for j, other := range f.den {
				q := taylorAt(dens[j], at, n+1, prec)
				if i == j {
					q = q[1:]
				}
				d = mulBalls(d, powBalls(q, other.e, n, prec), n, prec)
			}
			g := divBalls(taylorAt(num, at, n, prec), d, n, prec)
			c := make([]algebra.ComplexBall, n)
			fact := big.NewInt(1)
			for k := range c {
				if k > 1 {
					fact.Mul(fact, big.NewInt(int64(k)))
				}
				c[k] = divInt(g[n-1-k], fact, prec)
			}
			out = append(out, series{rate: at, c: c, paired: roots.Conjugate(r) != r})
		}
	}
	return out, nil
}

func complexInt(n int64) algebra.ComplexBall {
	return algebra.ComplexBall{Re: algebra.BallFromInt(big.NewInt(n))}
}

func divInt(x algebra.ComplexBall, n *big.Int, prec uint) algebra.ComplexBall {
	if n.IsInt64() && n.Int64() == 1 {
		return x
	}
	b := algebra.BallFromInt(n)
	return algebra.ComplexBall{Re: x.Re.Quo(b, prec), Im: x.Im.Quo(b, prec)}
}

func enclosePoly[E any](k algebra.Scalars[E], p algebra.Poly[E], prec uint) []algebra.ComplexBall {
	out := make([]algebra.ComplexBall, p.Degree()+1)
	for i := range out {
		out[i] = algebra.ComplexBall{Re: k.Enclose(p.Coef(i), prec)}
	}
	return out
}

// taylorAt returns the first n coefficients of the expansion of p at x, or all
// if there are fewer, by repeated synthetic division.
func taylorAt(p []algebra.ComplexBall, x algebra.ComplexBall, n int, prec uint) []algebra.ComplexBall {
	c := append([]algebra.ComplexBall(nil), p...)
	for i := 0; i < n && i < len(c)-1; i++ {
		for j := len(c) - 2; j >= i; j-- {
			c[j] = c[j].Add(x.Mul(c[j+1], prec), prec)
		}
	}
	return c[:min(n, len(c))]
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
	out := []algebra.ComplexBall{complexInt(1)}
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

// encloseSum returns a ball around the sum of the terms at t.
func encloseSum(terms []series, t algebra.Ball, prec uint) algebra.Ball {
	sum := algebra.Ball{}
	for _, s := range terms {
		c := s.c[len(s.c)-1]
		for k := len(s.c) - 2; k >= 0; k-- {
			c = algebra.ComplexBall{Re: c.Re.Mul(t, prec), Im: c.Im.Mul(t, prec)}.Add(s.c[k], prec)
		}
		e := s.rate.Re.Mul(t, prec).Exp(prec)
		if !s.paired {
			sum = sum.Add(c.Re.Mul(e, prec), prec)
			continue
		}
		sin, cos := s.rate.Im.Mul(t, prec).SinCos(prec)
		re := c.Re.Mul(cos, prec).Sub(c.Im.Mul(sin, prec), prec)
		sum = sum.Add(re.Mul(e, prec).Mul(algebra.BallFromInt(big.NewInt(2)), prec), prec)
	}
	return sum
}

// rationalAt returns f(t) if it is a rational number that needs no digits: at 0
// it is the limit of s F(s); at another rational t, by the theorem of Lindemann
// and Weierstrass, it is rational exactly when the coefficients of all e^(Lt)
// with L not 0 vanish at t, and then is the value of the polynomial part.
func (f Image[E]) rationalAt(t algebra.Rat) (algebra.Rat, bool) {
	if t.IsZero() || f.IsZero() {
		return f.k.Rational(f.Initial())
	}
	for _, pp := range f.den {
		// A simple root has the coefficient N/D', which is not zero.
		if pp.e == 1 && !isS(f.k, pp.p) {
			return algebra.Rat{}, false
		}
	}
	value := f.k.Zero()
	for i, pp := range f.den {
		part := f.local(i)
		sum := part.c[pp.e-1]
		for j := pp.e - 2; j >= 0; j-- {
			sum = sum.Scale(f.k.FromRat(t)).Add(part.c[j])
		}
		if isS(f.k, pp.p) {
			if !sum.IsZero() {
				value = sum.Coef(0)
			}
		} else if !sum.IsZero() {
			return algebra.Rat{}, false
		}
	}
	return f.k.Rational(value)
}

// isS tells whether p is the polynomial s.
func isS[E any](k algebra.Scalars[E], p algebra.Poly[E]) bool {
	return p.Degree() == 1 && k.IsZero(p.Coef(0))
}
