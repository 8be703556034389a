package algebra

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/mpoly"
)

// Negative tells, for one of x and -x, that it is to be written with a minus
// sign: the sign of the number where it is one, that of the leading coefficient
// of the numerator otherwise.
func (f *FunctionField) Negative(x Fraction) bool {
	if sign, ok := f.Sign(x); ok {
		return sign < 0
	}
	return x.num.LeadSign() < 0
}

// IsNumber tells whether x is free of variables that have no value.
func (f *FunctionField) IsNumber(x Fraction) bool {
	root := f.surd && x.num.Uses(0)
	for i, v := range f.values {
		if v == nil && (x.num.Uses(i+1) || x.den.Uses(i+1) || root && f.mod.Uses(i+1)) {
			return false
		}
	}
	return true
}

// Sign returns the sign of x, if x is a number.
func (f *FunctionField) Sign(x Fraction) (int, bool) {
	if r, ok := f.Rational(x); ok {
		return r.Sign(), true
	}
	if !f.IsNumber(x) {
		return 0, false
	}
	for prec := uint(64); prec <= mostEnclosing; prec *= 2 {
		if sign, certain := f.enclose(x, prec).Sign(); certain {
			return sign, true
		}
	}
	return 0, false
}

// mostEnclosing is the precision in bits where the enclosure of an element ends.
const mostEnclosing = 1 << 16

// Enclose returns a ball around x with about prec proven bits. Variables without
// a value make it the whole line.
func (f *FunctionField) Enclose(x Fraction, prec uint) Ball {
	if r, ok := f.Rational(x); ok {
		return BallFromRat(r.Big(), prec)
	}
	if !f.IsNumber(x) {
		return unknown()
	}
	var b Ball
	for work := prec + 32; work <= max(mostEnclosing, 4*prec); work *= 2 {
		if b = f.enclose(x, work); b.RelPrec() >= int(prec) {
			break
		}
	}
	return b.Round(prec)
}

// enclose evaluates x with the working precision prec.
func (f *FunctionField) enclose(x Fraction, prec uint) Ball {
	values := make([][]Ball, f.size()) // powers
	power := func(i, e int) Ball {
		if values[i] == nil {
			values[i] = []Ball{BallFromInt(big.NewInt(1))}
		}
		for len(values[i]) <= e {
			if len(values[i]) == 1 {
				values[i] = append(values[i], f.value(i, prec))
			} else {
				values[i] = append(values[i], values[i][len(values[i])-1].Mul(values[i][1], prec))
			}
		}
		return values[i][e]
	}
	eval := func(p mpoly.Poly) Ball {
		var sum Ball
		for t := range p.Terms() {
			b := BallFromInt(t.Coef)
			for i, e := range t.Exp {
				if e > 0 {
					b = b.Mul(power(i, e), prec)
				}
			}
			sum = sum.Add(b, prec)
		}
		return sum
	}
	b := eval(x.num)
	if !x.den.IsZero() {
		b = b.Quo(eval(x.den), prec)
	}
	return b
}

// value encloses the i-th variable of the polynomials.
func (f *FunctionField) value(i int, prec uint) Ball {
	if i > 0 {
		return f.values[i-1](prec)
	}
	if d, ok := f.Surd(); ok {
		return f.enclose(d, prec).Sqrt(prec)
	}
	z, err := f.root.Enclose(context.Background(), prec)
	if err != nil {
		panic(err) // the context does not end
	}
	return z.Re
}
