package algebra

import (
	"math"
	"math/big"
)

// Atan2 returns a ball around the angle of the vector (x, y), in (-pi, pi], with
// about prec proven bits: with an approximation b of the angle a,
// sin(a - b) = (y cos b - x sin b)/|(x, y)|, which corrects b to the third order.
// It is the whole line where the balls may hold the origin.
func Atan2(y, x Ball, prec uint) Ball {
	work := prec + 32
	length := x.Sqr(work).Add(y.Sqr(work), work).Sqrt(work)
	if length.ContainsZero() || x.rad.isInf() || y.rad.isInf() {
		return unknown()
	}
	u, _ := x.Quo(length, 64).Mid().Float64()
	v, _ := y.Quo(length, 64).Mid().Float64()
	b := BallFromFloat(big.NewFloat(math.Atan2(v, u)))
	for bits := uint(48); ; bits *= 3 {
		sin, cos := b.SinCos(work)
		d := y.Mul(cos, work).Sub(x.Mul(sin, work), work).Quo(length, work)
		if bits >= work {
			// |asin(d) - d| <= |d|^3/4 for |d| <= 1/2
			if d.absUp().cmp(magPow2(-1)) > 0 {
				return unknown()
			}
			m := d.absUp()
			return b.Add(d, work).widen(m.mulUp(m).mulUp(m)).Round(prec)
		}
		b = b.Add(d, work).point()
	}
}
