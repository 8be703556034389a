package algebra

import (
	"context"
	"math"
	"math/big"
	"math/cmplx"
)

// floatRoots is the iteration of [aberth] in float64: p(2^shift t) =
// 2^scale sum c[k] t^k, and z are approximations of the roots t.
type floatRoots struct {
	big          []*big.Int
	c            []float64 // each within 2^-53 of its absolute value
	shift, scale int64
	start, z     []complex128
}

// floatRange bounds log2 of the sizes of roots t, and floatCoeffRange those of
// c[k] t^k: products of n such numbers are formed with an exponent apart.
const (
	floatRange      = 200
	floatCoeffRange = 400
)

// newFloatRoots returns starting points for the roots, or nil if float64 does
// not hold the roots. It does not hold the coefficients if c is nil.
func newFloatRoots(p []*big.Int) *floatRoots {
	n := len(p) - 1
	f := &floatRoots{big: p, c: make([]float64, n+1), start: make([]complex128, 0, 2*n)}
	coeffs := make([]scaled, n+1)
	for i, x := range p {
		coeffs[i] = scaledInt(x, 0)
	}
	edges := newtonPolygon(coeffs)
	lo, hi := edges[0].slope, edges[len(edges)-1].slope
	mid := math.Round((lo + hi) / 2)
	f.shift = int64(mid)
	if hi-lo > 2*floatRange-8 {
		return nil
	}
	for _, e := range edges {
		f.start = e.points(f.start, mid)
	}
	f.z = append(f.start[n:n:2*n], f.start...)
	f.scale = math.MinInt64
	for i, x := range coeffs {
		if x.c != 0 {
			f.scale = max(f.scale, int64(x.e)+f.shift*int64(i))
		}
	}
	if max(hi-mid, mid-lo)*float64(n) > floatCoeffRange {
		f.c = nil
		return f
	}
	for i, x := range coeffs {
		f.c[i] = math.Ldexp(real(x.c), x.e+int(f.shift)*i-int(f.scale))
	}
	return f
}

// eval returns p and p' at z, and a bound of the error of p relative to the
// rounding unit 2^-53.
//
// With b_k = z b_{k+1} + c_k as computed, the product is off by at most 3u |z b_{k+1}|
// and the sum by u |b_k|, for u = 2^-53, and c_k was off by u |c_k|: the value is
// off by at most u times the sum of |z|^k (4|b_k| + |c_k|), which is formed with
// the sum of the absolute values of the parts for |b_k|.
// Source: N. J. Higham, Accuracy and Stability of Numerical Algorithms, 2nd
// edition, 2002, sections 3.6 and 5.1 (running error bound).
func (f *floatRoots) eval(z complex128) (p, dp complex128, bound float64) {
	x, y := real(z), imag(z)
	abs := math.Sqrt(x*x + y*y)
	var pr, pi, dr, di float64
	for k := len(f.c) - 1; k >= 0; k-- {
		c := f.c[k]
		dr, di = dr*x-di*y+pr, dr*y+di*x+pi
		pr, pi = pr*x-pi*y+c, pr*y+pi*x
		bound = bound*abs + (4*(math.Abs(pr)+math.Abs(pi)) + math.Abs(c))
	}
	return complex(pr, pi), complex(dr, di), bound
}

// run sweeps over the points until each is as good as rounding allows or the
// last step was so short that the next would be below the rounding. Nothing it
// finds is proven.
func (f *floatRoots) run(ctx context.Context, sweeps int) error {
	n := len(f.z)
	done := make([]bool, n)
	for left := n; left > 0 && sweeps > 0; sweeps-- {
		for i, z := range f.z {
			if done[i] {
				continue
			}
			if err := ctx.Err(); err != nil {
				return err
			}
			p, dp, bound := f.eval(z)
			if max(math.Abs(real(p)), math.Abs(imag(p))) <= bound*0x1p-54 {
				done[i] = true
				left--
				continue
			}
			s := reciprocalSum(f.z, i)
			w := p / (dp - p*s)
			abs := floatAbs(z)
			if size := floatAbs(w); !(size < 0x1p100) {
				w = z * complex(0.125, 0.0625) // a pole of the iteration, or an overflow
			} else if size*(floatAbs(s)+1/abs) < 0x1p-20 {
				done[i] = true
				left--
			}
			z -= w
			if size := floatAbs(z); !(size < 1<<floatRange && size > 1.0/(1<<floatRange)) {
				z = f.start[i] * complex(0.8, 0.6)
			}
			f.z[i] = z
		}
	}
	return nil
}

// floatAbs returns |z| for a z whose square does not overflow or underflow.
func floatAbs(z complex128) float64 { return math.Sqrt(real(z)*real(z) + imag(z)*imag(z)) }

// reciprocalSum returns the sum of 1/(z_i - z_j) over the z_j other than z_i.
func reciprocalSum(z []complex128, i int) complex128 {
	x, y := real(z[i]), imag(z[i])
	var sr, si float64
	for _, w := range z {
		dx, dy := x-real(w), y-imag(w)
		if d := dx*dx + dy*dy; d != 0 {
			d = 1 / d
			sr += dx * d
			si -= dy * d
		}
	}
	return complex(sr, si)
}

// certify returns what isolateRoots does, or ok = false if float64 does not
// prove it or ctx is done.
func (f *floatRoots) certify(ctx context.Context) (discs []rootDisc, gaps []magnitude, ok bool) {
	order, reals, ok := matchConjugates(f.z, nil)
	if !ok {
		return nil, nil, false
	}
	pts := make([]rootPoint, len(f.z))
	for k, i := range order {
		switch z := f.z[i]; {
		case k < reals:
			pts[k].hi = complex(real(z), 0)
		case (k-reals)%2 == 0:
			// At most 64 bits after the point of the modulus, for wordPoly.
			grid := floatAbs(z) * 0x1p-8
			_, e := math.Frexp(grid)
			big := math.Ldexp(1, e)
			x, y := real(z), imag(z)
			if math.Abs(x) < grid {
				x = (x + big) - big
			}
			if math.Abs(y) < grid {
				y = (y + big) - big
			}
			pts[k].hi = complex(x, y)
		default:
			pts[k].hi = cmplx.Conj(pts[k-1].hi)
		}
	}
	values := make([]magnitude, len(pts))
	for k := range pts {
		if k > reals && (k-reals)%2 == 1 {
			continue
		}
		if ctx.Err() != nil {
			return nil, nil, false
		}
		p, _, bound := f.eval(pts[k].hi)
		// The bound was itself rounded, at most 4n+8 times, and what underflows is
		// below 2^-1074 times n numbers of at most 2^floatCoeffRange.
		v := (cmplx.Abs(p) + bound*0x1p-53) * (1 + 0x1p-20) // p may be far below bound
		if !(bound > 0x1p-500 && v < 0x1p500) {
			return nil, nil, false
		}
		values[k] = magFloatUp(v).mulPow2(f.scale)
	}
	rads, gaps, ok := certifyPoints(ctx, pts, reals, values, intMagDown(f.big[len(f.big)-1], 0), f.shift, nil)
	if !ok {
		return nil, nil, false
	}
	discs = make([]rootDisc, len(rads))
	for k := range discs {
		i := k
		if k >= reals {
			i = 2*k - reals
		}
		z := pts[i].hi
		discs[k] = rootDisc{ComplexBall{ballFromFloat64(real(z), f.shift), ballFromFloat64(imag(z), f.shift)}, rads[k]}
	}
	return discs, gaps, true
}

// ballFromFloat64 returns f 2^e exactly.
func ballFromFloat64(f float64, e int64) Ball {
	if f == 0 {
		return Ball{}
	}
	frac, k := math.Frexp(f)
	return Ball{man: big.NewInt(int64(frac * 0x1p53)), exp: e + int64(k) - 53}
}
