// Package roots writes the eigenvalues of a model as decimals.
package roots

import (
	"context"
	"fmt"
	"math"
	"math/big"

	"example.org/closedform/algebra"
	"example.org/closedform/linsys"
)

// Decimals returns the real and imaginary part of x, each to the number of
// significant digits, rounded to nearest; a part that is zero is "0".
func Decimals(ctx context.Context, z linsys.Eigenvalue, digits int) (re, im string, err error) {
	if x, ok := z.Algebraic(); ok {
		return algebraic(ctx, x, digits)
	}
	// The parts are 0, or have as many digits as one cares to enclose.
	for prec := uint(64 + 4*digits); prec <= mostPrecision; prec *= 2 {
		ball, err := z.Enclose(ctx, prec)
		if err != nil {
			return "", "", err
		}
		re, okRe := ball.Re.Decimal(digits)
		im, okIm := ball.Im.Decimal(digits)
		if okRe && okIm {
			return re, im, nil
		}
	}
	return "", "", fmt.Errorf("the digits of %s are not found with %d bits", z, mostPrecision)
}

// mostPrecision is where the search for digits ends.
const mostPrecision = 1 << 18

func algebraic(ctx context.Context, x algebra.Algebraic, digits int) (re, im string, err error) {
	exactRe, okRe, err := rationalRealPart(ctx, x)
	if err != nil {
		return "", "", err
	}
	exactIm, okIm := rationalImaginaryPart(x)
	part := func(exact algebra.Rat, ok bool, of func(algebra.ComplexBall) algebra.Ball) (string, error) {
		if ok {
			return algebra.RatDecimal(exact.Big(), digits), nil
		}
		return irrationalDecimal(ctx, x, digits, of)
	}
	re, err = part(exactRe, okRe, func(z algebra.ComplexBall) algebra.Ball { return z.Re })
	if err != nil {
		return "", "", err
	}
	im, err = part(exactIm, okIm, func(z algebra.ComplexBall) algebra.Ball { return z.Im })
	return re, im, err
}

// rationalRealPart returns the real part of x if it is rational.
//
// Let p be the minimal polynomial of x, of degree n > 1. If x has the rational
// real part c, its conjugate is 2c - x, so that p(2c - s) has the root x as well
// and is (-1)^n p(s): the roots lie symmetric about c, c is their mean, and p(s +
// c) = g(s^2). Given that, the real part is c exactly when x - c is imaginary,
// when the root (x - c)^2 of g is real and negative. The roots of g are distinct,
// which an enclosure of (x - c)^2 that meets a single one of them decides.
func rationalRealPart(ctx context.Context, x algebra.Algebraic) (algebra.Rat, bool, error) {
	if c, ok := x.Rational(); ok {
		return c, true, nil
	}
	if x.IsReal() {
		return algebra.Rat{}, false, nil
	}
	p := x.MinPoly()
	n := p.Degree()
	c := p.Coef(n - 1).Quo(algebra.RatFromInt(int64(-n)))
	if n == 2 {
		return c, true, nil
	}
	centred := p.Translate(c)
	var even []algebra.Rat
	for i := range n + 1 {
		if i%2 == 0 {
			even = append(even, centred.Coef(i))
		} else if !centred.Coef(i).IsZero() {
			return algebra.Rat{}, false, nil
		}
	}
	if n%2 == 1 {
		return algebra.Rat{}, false, nil
	}
	squares, err := algebra.AlgebraicRoots(ctx, algebra.NewPoly[algebra.Rat](algebra.Q, even...))
	if err != nil {
		return algebra.Rat{}, false, err
	}
	for prec := uint(64); ; prec *= 2 {
		if err := ctx.Err(); err != nil {
			return algebra.Rat{}, false, err
		}
		z, err := x.Enclose(ctx, prec)
		if err != nil {
			return algebra.Rat{}, false, err
		}
		z.Re = z.Re.Sub(algebra.BallFromRat(c.Big(), prec), prec)
		z = z.Sqr(prec)
		met, count := algebra.Algebraic{}, 0
		for _, y := range squares {
			w, err := y.Enclose(ctx, prec)
			if err != nil {
				return algebra.Rat{}, false, err
			}
			if w.Overlaps(z) {
				met, count = y, count+1
			}
		}
		if count == 1 {
			// A positive square would make x real.
			return c, met.IsReal(), nil
		}
	}
}

// rationalImaginaryPart returns the imaginary part of x if x is real, or of
// degree 2 with a rational imaginary part.
func rationalImaginaryPart(x algebra.Algebraic) (algebra.Rat, bool) {
	if x.IsReal() {
		return algebra.Rat{}, true
	}
	if x.MinPoly().Degree() == 2 {
		_, d := algebra.Quadratic(x.MinPoly())
		if w, ok := d.Neg().Sqrt(); ok {
			if x.Index() == 1 { // the upper one of the pair comes first
				w = w.Neg()
			}
			return w, true
		}
	}
	return algebra.Rat{}, false
}

// irrationalDecimal returns a part of x, which is not zero, to the number of
// significant digits.
//
// The enclosure is refined until it proves the digits. Only a rational part that
// lies half-way between two decimals resists for ever: the imaginary part 5/4 of
// a root of degree 4 to two digits. A relative width below 10^-(2 digits + 20) is
// taken for that case, and the part is rounded away from zero as such ties are.
func irrationalDecimal(ctx context.Context, x algebra.Algebraic, digits int, of func(algebra.ComplexBall) algebra.Ball) (string, error) {
	enough := int(math.Ceil((2*float64(digits) + 20) * math.Log2(10)))
	for prec := uint(digits)*10/3 + 32; ; prec *= 2 {
		if err := ctx.Err(); err != nil {
			return "", err
		}
		z, err := x.Enclose(ctx, prec)
		if err != nil {
			return "", err
		}
		b := of(z)
		if s, ok := b.Decimal(digits); ok {
			return s, nil
		}
		if sign, certain := b.Sign(); certain && b.RelPrec() > enough {
			lo, hi := b.Interval()
			if sign < 0 {
				hi = lo
			}
			end, _ := hi.Rat(new(big.Rat))
			return algebra.RatDecimal(end, digits), nil
		}
	}
}
