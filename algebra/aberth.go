package algebra

import (
	"context"
	"math"
	"math/big"
	"math/cmplx"
	"slices"
)

// scaled is the complex number c 2^e without a proven error: the plain
// companion of ComplexBall for approximations, with relative precision 2^-53
// and exponents that do not overflow. A c other than 0 lies within 2^+-scaledSlack.
type scaled struct {
	c complex128
	e int
}

const scaledSlack = 64

func newScaled(c complex128, e int) scaled {
	m := max(math.Abs(real(c)), math.Abs(imag(c)))
	if m > 0x1p-64 && m < 0x1p64 {
		return scaled{c, e}
	}
	if m == 0 {
		return scaled{}
	}
	_, k := math.Frexp(m)
	return scaled{complex(math.Ldexp(real(c), -k), math.Ldexp(imag(c), -k)), e + k}
}

func (x scaled) add(y scaled) scaled {
	if x.e < y.e && x.c != 0 || y.c == 0 {
		x, y = y, x
	}
	if x.c == 0 || x.e == y.e {
		return newScaled(x.c+y.c, y.e)
	}
	d := x.e - y.e
	if d > 4*scaledSlack {
		return x
	}
	return newScaled(x.c+y.c*complex(math.Ldexp(1, -d), 0), x.e)
}

func (x scaled) neg() scaled         { return scaled{-x.c, x.e} }
func (x scaled) sub(y scaled) scaled { return x.add(y.neg()) }
func (x scaled) mul(y scaled) scaled { return newScaled(x.c*y.c, x.e+y.e) }
func (x scaled) quo(y scaled) scaled { return newScaled(x.c/y.c, x.e-y.e) }
func (x scaled) abs() scaled         { return newScaled(complex(cmplx.Abs(x.c), 0), x.e) }

// size returns about log2 |x|, a very small number for 0.
func (x scaled) size() int {
	if x.c == 0 {
		return math.MinInt / 2
	}
	_, k := math.Frexp(cmplx.Abs(x.c))
	return x.e + k
}

// ball returns x exactly.
func (x scaled) ball() ComplexBall {
	part := func(f float64) Ball {
		return BallFromFloat(big.NewFloat(f)).MulPow2(int64(x.e))
	}
	return ComplexBall{part(real(x.c)), part(imag(x.c))}
}

// scaledInt returns m 2^e.
func scaledInt(m *big.Int, e int64) scaled {
	w := m.Bits()
	var f float64
	for i := len(w) - 1; i >= max(len(w)-3, 0); i-- {
		f = f*0x1p32*float64(uint64(1)<<(wordBits-32)) + float64(w[i])
	}
	if m.Sign() < 0 {
		f = -f
	}
	return newScaled(complex(f, 0), int(e)+wordBits*max(len(w)-3, 0))
}

const wordBits = 32 << (^big.Word(0) >> 63)

// scaled returns the midpoint of z.
func (z ComplexBall) scaled() scaled {
	im := scaledInt(z.Im.mantissa(), z.Im.exp)
	return scaledInt(z.Re.mantissa(), z.Re.exp).add(scaled{complex(0, real(im.c)), im.e})
}

// aberth is the simultaneous iteration of Ehrlich and Aberth for the roots of
// sum c[i] s^i: z_i -= N/(1 - N S) for the Newton correction N = p(z_i)/p'(z_i)
// and S the sum of 1/(z_i - z_j). It works in scaled numbers while prec is 0,
// then on the exact points at, with p evaluated in balls of that precision.
// Nothing it finds is proven. Source: [NewRootSet].
type aberth struct {
	c, deriv []*big.Int
	float    []scaled // c
	start, z []scaled
	at       []ComplexBall
	prec     uint
}

// newtonEdge is an edge of the Newton polygon of sum c_i s^i, the upper hull of
// the points (i, log2 |c_i|): it stands for to-from roots of modulus about
// 2^slope. Source: Bini 1996, section 3.
type newtonEdge struct {
	from, to int
	slope    float64
	turn     float64 // of the first starting point, in radians
}

// newtonPolygon returns the edges from the smallest roots on; c[0] is not 0.
func newtonPolygon(c []scaled) []newtonEdge {
	n := len(c) - 1
	logs := make([]float64, n+1)
	hull := make([]int, 0, n+1)
	terms := 0
	for i, x := range c {
		if x.c == 0 {
			continue
		}
		terms++
		logs[i] = math.Log2(math.Abs(real(x.c))) + float64(x.e)
		for len(hull) > 1 {
			a, b := hull[len(hull)-2], hull[len(hull)-1]
			if (logs[b]-logs[a])*float64(i-a) > (logs[i]-logs[a])*float64(b-a) {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, i)
	}
	edges := make([]newtonEdge, 0, len(hull)-1)
	for k := 1; k < len(hull); k++ {
		i, j := hull[k-1], hull[k]
		e := newtonEdge{i, j, (logs[i] - logs[j]) / float64(j-i), 2*math.Pi*float64(k)/float64(n) + 0.7}
		if terms == 2 { // the points are the roots
			e.turn = 0
			if real(c[0].c) > 0 == (real(c[n].c) > 0) {
				e.turn = math.Pi / float64(n)
			}
		}
		edges = append(edges, e)
	}
	return edges
}

// points appends equally spaced points on the circle of radius 2^(slope-shift) to z.
func (e newtonEdge) points(z []complex128, shift float64) []complex128 {
	r := math.Exp2(e.slope - shift)
	for t := range e.to - e.from {
		z = append(z, cmplx.Rect(r, 2*math.Pi*float64(t)/float64(e.to-e.from)+e.turn))
	}
	return z
}

// newAberth starts from points that the Newton polygon suggests.
func newAberth(c []*big.Int) *aberth {
	n := len(c) - 1
	it := &aberth{c: c, deriv: derivative(c), float: make([]scaled, n+1), at: make([]ComplexBall, n)}
	for i := range c {
		it.float[i] = scaledInt(c[i], 0)
	}
	for _, e := range newtonPolygon(it.float) {
		whole := math.Trunc(e.slope)
		for _, z := range e.points(nil, whole) {
			it.start = append(it.start, newScaled(z, int(whole)))
		}
	}
	it.z = slices.Clone(it.start)
	for i, z := range it.z {
		it.at[i] = z.ball()
	}
	return it
}

// run sweeps over the points, at most the given number of times, until all of
// them are as good as the precision allows, and reports whether they are.
func (it *aberth) run(ctx context.Context, sweeps int) (settled bool, err error) {
	done := make([]bool, len(it.z))
	bits := 53
	if it.prec > 0 {
		bits = int(it.prec)
	}
	for range sweeps {
		busy := false
		for i := range it.z {
			if done[i] {
				continue
			}
			if err := ctx.Err(); err != nil {
				return false, err
			}
			p, dp, ok, err := it.eval(ctx, i)
			if err != nil {
				return false, err
			}
			if done[i] = ok; ok {
				continue
			}
			var s scaled
			for j := range it.z {
				if d := it.diff(i, j); d.c != 0 {
					s = s.add(scaled{1, 0}.quo(d))
				}
			}
			step := it.z[i].mul(scaled{0.125 + 0.0625i, 0}) // away from a pole of the iteration
			if d := dp.sub(p.mul(s)); d.c != 0 {
				step = p.quo(d)
			}
			if it.prec == 0 {
				it.z[i] = it.z[i].sub(step)
				it.at[i] = it.z[i].ball()
			} else {
				it.at[i] = it.at[i].Sub(step.ball(), it.prec).point()
				it.z[i] = it.at[i].scaled()
			}
			done[i] = step.size() < it.z[i].size()-bits+2
			busy = true
		}
		if !busy {
			return true, nil
		}
	}
	return false, nil
}

// eval returns p and p' at point i, and whether p vanishes as far as the
// precision can tell.
func (it *aberth) eval(ctx context.Context, i int) (p, dp scaled, zero bool, err error) {
	if it.prec > 0 {
		b, err := hornerBall(ctx, it.c, it.at[i], it.prec)
		if err != nil || b.ContainsZero() {
			return p, dp, true, err
		}
		db, err := hornerBall(ctx, it.deriv, it.at[i], it.prec)
		return b.scaled(), db.scaled(), false, err
	}
	z, abs := it.z[i], it.z[i].abs()
	var sum scaled
	for k := len(it.float) - 1; k >= 0; k-- {
		dp = dp.mul(z).add(p)
		p = p.mul(z).add(it.float[k])
		sum = sum.mul(abs).add(it.float[k].abs())
	}
	return p, dp, p.c == 0 || p.size() < sum.size()-51, nil
}

// diff returns z_i - z_j.
func (it *aberth) diff(i, j int) scaled {
	d := it.z[i].sub(it.z[j])
	if it.prec > 0 && i != j && d.size() < it.z[i].size()-20 {
		return it.at[i].Sub(it.at[j], 64).scaled()
	}
	return d
}

// condition returns about the number of bits that rounding costs at point i:
// the log2 of sum |c_k| |z|^k / (|z p'(z)|), with p'(z) from the other points.
func (it *aberth) condition(i int) int {
	abs := it.z[i].abs()
	var sum scaled
	for k := len(it.float) - 1; k >= 0; k-- {
		sum = sum.mul(abs).add(it.float[k].abs())
	}
	q := it.float[len(it.float)-1].mul(abs)
	for j := range it.z {
		if d := it.diff(i, j); d.c != 0 {
			q = q.mul(d)
		}
	}
	return sum.size() - q.size()
}

// raise goes on with at least the given precision, with more if the points
// seem to need it, and returns it. Points with few good bits start again:
// leaving a region where p is all noise takes longer. Points that are equal
// would stay so and are moved apart by half of their bits.
func (it *aberth) raise(prec uint) uint {
	old := max(it.prec, 53)
	worst := 0
	var again []int
	for i := range it.z {
		k := it.condition(i)
		worst = max(worst, k)
		if int(old)-k < 12 {
			again = append(again, i)
		}
	}
	for _, i := range again {
		it.z[i] = it.start[i]
		it.at[i] = it.start[i].ball()
	}
	if len(again) > 0 { // noise hides how bad it is
		worst *= 2
	}
	it.prec = max(prec, uint(min(worst+64, 16*int(old))))
	for j := range it.z {
		for i := range j {
			if it.diff(i, j).c == 0 {
				step := it.at[j].mulReal(Ball{man: big.NewInt(int64(j)), exp: -int64(old / 2)}, it.prec)
				it.at[j] = it.at[j].Add(step, it.prec).point()
				it.z[j] = it.at[j].scaled()
			}
		}
	}
	return it.prec
}
