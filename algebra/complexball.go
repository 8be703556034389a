package algebra

import "math/big"

// ComplexBall is a complex number known by balls around its real and its
// imaginary part, a rectangle. The zero value is exactly 0. As for [Ball],
// results contain the results for all numbers in the operands, and prec is the
// number of bits that midpoints are rounded to.
type ComplexBall struct {
	Re, Im Ball
}

func (z ComplexBall) isReal() bool { return z.Im.isZero() }

// Neg returns -z.
func (z ComplexBall) Neg() ComplexBall { return ComplexBall{z.Re.Neg(), z.Im.Neg()} }

// Conj returns the conjugate of z.
func (z ComplexBall) Conj() ComplexBall { return ComplexBall{z.Re, z.Im.Neg()} }

// Add returns z + w.
func (z ComplexBall) Add(w ComplexBall, prec uint) ComplexBall {
	return ComplexBall{z.Re.Add(w.Re, prec), z.Im.Add(w.Im, prec)}
}

// Sub returns z - w.
func (z ComplexBall) Sub(w ComplexBall, prec uint) ComplexBall {
	return ComplexBall{z.Re.Sub(w.Re, prec), z.Im.Sub(w.Im, prec)}
}

// Mul returns z w = (ac - bd) + (ad + bc) i for z = a + bi and w = c + di.
// An imaginary part that is exactly 0 stays so.
func (z ComplexBall) Mul(w ComplexBall, prec uint) ComplexBall {
	switch {
	case w.isReal():
		return z.mulReal(w.Re, prec)
	case z.isReal():
		return w.mulReal(z.Re, prec)
	}
	return ComplexBall{
		z.Re.Mul(w.Re, prec+2).Sub(z.Im.Mul(w.Im, prec+2), prec),
		z.Re.Mul(w.Im, prec+2).Add(z.Im.Mul(w.Re, prec+2), prec),
	}
}

// mulReal returns x z.
func (z ComplexBall) mulReal(x Ball, prec uint) ComplexBall {
	if z.isReal() {
		return ComplexBall{Re: z.Re.Mul(x, prec)}
	}
	return ComplexBall{z.Re.Mul(x, prec), z.Im.Mul(x, prec)}
}

// Sqr returns z^2 = (a+b)(a-b) + 2ab i for z = a + bi.
func (z ComplexBall) Sqr(prec uint) ComplexBall {
	if z.isReal() {
		return ComplexBall{Re: z.Re.Sqr(prec)}
	}
	return ComplexBall{
		z.Re.Add(z.Im, prec+2).Mul(z.Re.Sub(z.Im, prec+2), prec),
		z.Re.Mul(z.Im, prec).MulPow2(1),
	}
}

// Quo returns z / w = z conj(w) / |w|^2. If w may be 0 the result has infinite
// radii and never certifies anything.
func (z ComplexBall) Quo(w ComplexBall, prec uint) ComplexBall {
	d := w.Re
	if !w.isReal() {
		z = z.Mul(w.Conj(), prec+2)
		d = w.Re.Sqr(prec+2).Add(w.Im.Sqr(prec+2), prec+2)
	}
	if d.ContainsZero() {
		return ComplexBall{unknown(), unknown()}
	}
	if z.isReal() {
		return ComplexBall{Re: z.Re.Quo(d, prec)}
	}
	return ComplexBall{z.Re.Quo(d, prec), z.Im.Quo(d, prec)}
}

// Exp returns e^z = e^a (cos b + i sin b) for z = a + bi.
func (z ComplexBall) Exp(prec uint) ComplexBall {
	r := z.Re.Exp(prec + 2)
	if z.isReal() {
		return ComplexBall{Re: r.Round(prec)}
	}
	s, c := z.Im.SinCos(prec + 2)
	return ComplexBall{r.Mul(c, prec), r.Mul(s, prec)}
}

// ContainsZero reports whether 0 lies in z.
func (z ComplexBall) ContainsZero() bool { return z.Re.ContainsZero() && z.Im.ContainsZero() }

// Overlaps reports whether z and w may have a number in common; false is
// proven, see [Ball.Overlaps].
func (z ComplexBall) Overlaps(w ComplexBall) bool {
	return z.Re.Overlaps(w.Re) && z.Im.Overlaps(w.Im)
}

// AbsBounds returns lo and hi with lo <= |t| <= hi for every t in z, at about
// 30 bits.
func (z ComplexBall) AbsBounds() (lo, hi *big.Float) {
	return z.absDown().float(false), z.absUp().float(true)
}

// Abs returns a ball around the absolute values in z.
func (z ComplexBall) Abs(prec uint) Ball {
	if z.isReal() && z.Re.man != nil && !z.Re.ContainsZero() {
		if z.Re.man.Sign() < 0 {
			return z.Re.Neg().Round(prec)
		}
		return z.Re.Round(prec)
	}
	return z.Re.Sqr(prec+2).Add(z.Im.Sqr(prec+2), prec+2).Sqrt(prec)
}

func (z ComplexBall) absUp() magnitude {
	a, b := z.Re.absUp(), z.Im.absUp()
	if b.isZero() {
		return a
	}
	return a.mulUp(a).addUp(b.mulUp(b)).sqrtUp()
}

func (z ComplexBall) absDown() magnitude {
	a, b := z.Re.absDown(), z.Im.absDown()
	if a.cmp(b) < 0 {
		a, b = b, a
	}
	if b.isZero() {
		return a
	}
	return a.mulDown(a).addDown(b.mulDown(b)).sqrtDown()
}

// point returns the midpoint as an exact ball.
func (z ComplexBall) point() ComplexBall { return ComplexBall{z.Re.point(), z.Im.point()} }

// widen returns z with r added to both radii, the imaginary part of a real
// number left alone.
func (z ComplexBall) widen(r magnitude) ComplexBall {
	if z.isReal() {
		return ComplexBall{Re: z.Re.widen(r)}
	}
	return ComplexBall{z.Re.widen(r), z.Im.widen(r)}
}
