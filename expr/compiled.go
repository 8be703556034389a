package expr

import "math"

// Compiled is several functions as one flat program in float64: a sum of
// constants times tau^k e^(a tau), with cos(b tau) and sin(b tau), where tau = t -
// t0. Every constant is the float64 nearest to its exact value; rates and the
// origin t0 have a second one for what the first leaves. Compiled programs are
// immutable; methods may be called concurrently.
//
// Accuracy. [Compiled.Bound] returns proven bounds on the errors of
// [Compiled.Eval], for IEEE arithmetic and under these assumptions on package
// math, with u = 2^-53: Exp is within 2 ulp (a relative error of 4u; 2 units in
// the last place where the result is subnormal), and Sincos within 4u, and within
// 4u |x| for small x. The rounding of a product rate times time enters the results
// only in second order, about 9u^2 of the product, so that phases stay accurate up
// to arguments of 1e15 and more. Where rates nearly coincide and their terms
// cancel, they are replaced near the origin by their Taylor series around one
// common rate; see [Compile].
type Compiled struct {
	n                 int // functions
	origin, originLow float64
	parts             []compiledPart
	blocks            []compiledBlock
	tiles             []compiledTile
	runs              []compiledRun
	coefs             [][4]float64
	tails             []float64
}

// compiledPart is the chunk far; or, if |tau| <= until, the chunk near, which then
// stands for this part and all that follow before skip.
type compiledPart struct {
	until     float64
	near, far compiledChunk
	skip      int
}

// compiledChunk is the blocks from, ..., to-1. Their columns, the functions of time
// that constants multiply, are taken by fours, a tile each from the index tile on.
type compiledChunk struct{ from, to, tile int }

// compiledBlock is the columns (scale tau)^k e^(re tau) for k below powers, or that
// times cos(im tau) and sin(im tau) in turn if im is not 0. The scale is a power of
// two.
type compiledBlock struct {
	re, reLow, im, imLow float64
	scale                float64
	powers               int
	tail, order          int // the truncation error of a Taylor series; order 0 for none
}

// compiledTile is the constants of four columns, the runs from, ..., to-1 of
// functions with one that is not 0.
type compiledTile struct{ from, to int }

// compiledRun is the constants coefs[at:], for each of the functions row, ...,
// row+n-1.
type compiledRun struct{ row, n, at int }

// Len returns the number of functions.
func (c *Compiled) Len() int { return c.n }

// instant is tau = hi + lo up to the error of at most err.
type instant struct{ hi, lo, err float64 }

// since returns t - t0, by the exact difference of two numbers (D. E. Knuth, The
// Art of Computer Programming 2, section 4.2.2, theorems B and C).
func (c *Compiled) since(t float64) instant {
	if c.origin == 0 {
		return instant{hi: t}
	}
	hi := t - c.origin
	b := hi - t
	lo := (t - (hi - b)) - (c.origin + b) - c.originLow
	sum := hi + lo
	return instant{sum, lo - (sum - hi), unit*math.Abs(lo) + unit*unit*math.Abs(c.origin) + tiny}
}

// product returns p + e = (a + low) tau with the rounded product p.
func (tau instant) product(a, low float64) (p, e float64) {
	p = a * tau.hi
	return p, math.FMA(a, tau.lo, math.FMA(low, tau.hi, math.FMA(a, tau.hi, -p)))
}

// exp returns e^(re tau).
func (b *compiledBlock) exp(tau instant) float64 {
	p, e := tau.product(b.re, b.reLow)
	x := math.Exp(p)
	if x > 0 && x <= math.MaxFloat64 {
		x = math.FMA(x, e, x)
	}
	return x
}

// smallTurn is the angle up to which 1 + ie is e^(ie) to 2^-55.
const smallTurn = 0x1p-27

// sincos returns the sine and cosine of im tau.
func (b *compiledBlock) sincos(tau instant) (sin, cos float64) {
	p, e := tau.product(b.im, b.imLow)
	s, c := math.Sincos(p)
	if math.Abs(e) <= smallTurn {
		return math.FMA(c, e, s), math.FMA(-s, e, c)
	}
	x, y := math.Sincos(e)
	return float64(s*y) + float64(c*x), float64(c*y) - float64(s*x)
}

// Eval returns the values of all functions at t, in order, in dst if it is long
// enough, and then allocates nothing. Where a value or an exponential is beyond
// float64, so are the results (infinite or NaN) and their bounds; an exponential
// below float64 counts as 0. At a time that is not finite all results are NaN.
// The cost is one exponential or sine and cosine for each rate, and a product and
// a sum for each constant.
func (c *Compiled) Eval(dst []float64, t float64) []float64 {
	if len(dst) < c.n {
		dst = make([]float64, c.n)
	}
	dst = dst[:c.n]
	if t-t != 0 {
		for i := range dst {
			dst[i] = math.NaN()
		}
		return dst
	}
	clear(dst)
	tau := c.since(t)
	size := math.Abs(tau.hi)
	for i := 0; i < len(c.parts); {
		p := &c.parts[i]
		if size <= p.until {
			c.add(dst, &p.near, tau)
			i = p.skip
			continue
		}
		c.add(dst, &p.far, tau)
		i++
	}
	return dst
}

// add adds the columns of a chunk times their constants.
func (c *Compiled) add(dst []float64, chunk *compiledChunk, tau instant) {
	var four [4]float64
	n, tile := 0, chunk.tile
	blocks := c.blocks[chunk.from:chunk.to]
	for j := range blocks {
		b := &blocks[j]
		u := 1.0
		if b.re != 0 {
			// As in exp, which the compiler does not inline.
			u = math.Exp(b.re * tau.hi)
			if u > 0 && u <= math.MaxFloat64 {
				_, e := tau.product(b.re, b.reLow)
				u = math.FMA(u, e, u)
			}
			if b.im == 0 && b.powers == 1 {
				four[n&3] = u
				if n++; n&3 == 0 {
					c.addTile(dst, tile, &four)
					tile++
				}
				continue
			}
		}
		var v float64
		if b.im != 0 && u != 0 {
			sin, cos := b.sincos(tau)
			u, v = u*cos, u*sin
		}
		for k := 1; ; k++ {
			four[n&3] = u
			if n++; n&3 == 0 {
				c.addTile(dst, tile, &four)
				tile++
			}
			if b.im != 0 {
				four[n&3] = v
				if n++; n&3 == 0 {
					c.addTile(dst, tile, &four)
					tile++
				}
			}
			if k >= b.powers {
				break
			}
			w := tau.hi * b.scale
			u, v = u*w, v*w
		}
	}
	if n&3 != 0 {
		clear(four[n&3:])
		c.addTile(dst, tile, &four)
	}
}

// addTile adds four columns times their constants. The conversions keep products
// and sums from being fused, so that the result is the same everywhere and in Bound.
func (c *Compiled) addTile(dst []float64, tile int, four *[4]float64) {
	u0, u1, u2, u3 := four[0], four[1], four[2], four[3]
	finite := (u0+u1)+(u2+u3) <= math.MaxFloat64 && (u0+u1)+(u2+u3) >= -math.MaxFloat64
	runs := c.runs[c.tiles[tile].from:c.tiles[tile].to]
	for i := range runs {
		r := &runs[i]
		all := c.coefs[r.at:][:r.n]
		y := dst[r.row:][:len(all)]
		if !finite {
			for i := range all {
				y[i] += fourTerms(&all[i], four)
			}
			continue
		}
		for i := range all {
			a := &all[i]
			y[i] += (float64(a[0]*u0) + float64(a[1]*u1)) + (float64(a[2]*u2) + float64(a[3]*u3))
		}
	}
}

// fourTerms returns the sum of four columns times their constants, where those that
// are 0 count as 0 even for columns that are not finite.
func fourTerms(a, four *[4]float64) float64 {
	var p [4]float64
	for k, x := range a {
		if x != 0 {
			p[k] = float64(x * four[k])
		}
	}
	return (p[0] + p[1]) + (p[2] + p[3])
}

const (
	unit  = 0x1p-53
	tiny  = math.SmallestNonzeroFloat64
	slack = 1.001 // for the rounding of the bounds themselves
)

// Bound returns for each function a bound on |Eval - exact value| at t, in dst if
// it is long enough: the errors of the stored constants, of the exponentials,
// sines and cosines, of products and of sums, by running error analysis (N. J.
// Higham, Accuracy and Stability of Numerical Algorithms, section 3.3). It is +Inf
// where nothing is known. The cost is that of three to five calls of
// Eval.
func (c *Compiled) Bound(dst []float64, t float64) []float64 {
	if len(dst) < c.n {
		dst = make([]float64, c.n)
	}
	dst = dst[:c.n]
	if t-t != 0 {
		for i := range dst {
			dst[i] = math.Inf(1)
		}
		return dst
	}
	clear(dst)
	sums := make([]float64, c.n)
	tau := c.since(t)
	for i := 0; i < len(c.parts); {
		p := &c.parts[i]
		if math.Abs(tau.hi) <= p.until {
			c.addBound(dst, sums, &p.near, tau)
			i = p.skip
			continue
		}
		c.addBound(dst, sums, &p.far, tau)
		i++
	}
	for i, e := range dst {
		if dst[i] = e*slack + tiny; !(dst[i] <= math.MaxFloat64) {
			dst[i] = math.Inf(1)
		}
	}
	return dst
}

// estimate is a computed number with a bound on its error.
type estimate struct{ x, err float64 }

// times returns the product with another one, rounded.
func (a estimate) times(b estimate) estimate {
	x := a.x * b.x
	return estimate{x, a.err*(math.Abs(b.x)+b.err) + math.Abs(a.x)*b.err + unit*math.Abs(x) + tiny}
}

// argumentError bounds the error of p + e in product: the dropped product of the
// low parts, the error of the low parts and two rounding errors of 2u |p| and 3u
// |p| times u.
func (tau instant) argumentError(a, p float64) float64 {
	return 9*unit*unit*math.Abs(p) + math.Abs(a)*tau.err + 4*tiny*(1+math.Abs(tau.hi))
}

// estimateExp returns e^(re tau).
func (b *compiledBlock) estimateExp(tau instant) estimate {
	if b.re == 0 {
		return estimate{1, tiny * math.Abs(tau.hi)}
	}
	x := b.exp(tau)
	e := tau.argumentError(b.re, b.re*tau.hi)
	if !(e < 0.5) {
		return estimate{x, math.Inf(1)}
	}
	// 4u of Exp, u of the last sum; e^d - 1 < 1.3 d for d < 1/2.
	return estimate{x, x*(6*unit+1.3*e) + 4*tiny}
}

// estimateSincos returns the sine and cosine of im tau.
func (b *compiledBlock) estimateSincos(tau instant) (sin, cos estimate) {
	sin.x, cos.x = b.sincos(tau)
	p, e := tau.product(b.im, b.imLow)
	d := tau.argumentError(b.im, p)
	if math.Abs(e) <= smallTurn {
		// 4u of Sincos, u of the last sum, e^2/2 <= u/4 for the rest.
		sin.err, cos.err = 6*unit*min(1, math.Abs(p))+d, 6*unit+d
	} else {
		sin.err, cos.err = 20*unit+d, 20*unit+d
	}
	sin.err, cos.err = min(sin.err, 2), min(cos.err, 2)
	return sin, cos
}

// vanishing bounds (scale |tau|)^k e^(re tau) where the exponential is below
// float64.
func (b *compiledBlock) vanishing(tau instant, k int) float64 {
	p := b.re * tau.hi * (1 - 1e-12)
	if e := tau.argumentError(b.re, p); e <= math.MaxFloat64 {
		p += e
	}
	if k > 0 {
		l := float64(k) * math.Log(math.Abs(tau.hi*b.scale))
		p += l + 1e-9*(1+math.Abs(l))
	}
	return math.Exp(p)*slack + 4*tiny
}

// addBound adds the columns of a chunk to the sums as add does, and bounds on the
// errors to dst.
func (c *Compiled) addBound(dst, sums []float64, chunk *compiledChunk, tau instant) {
	var four [4]estimate
	n, tile := 0, chunk.tile
	push := func(a estimate) {
		four[n&3] = a
		if n++; n&3 == 0 {
			c.boundTile(dst, sums, tile, &four)
			tile++
		}
	}
	for j := chunk.from; j < chunk.to; j++ {
		b := &c.blocks[j]
		exp := b.estimateExp(tau)
		w := estimate{tau.hi * b.scale, (math.Abs(tau.lo)+tau.err)*b.scale + tiny}
		u, v := exp, estimate{}
		if b.im != 0 && exp.x != 0 {
			sin, cos := b.estimateSincos(tau)
			u, v = exp.times(cos), exp.times(sin)
		}
		for k := range b.powers {
			if k > 0 {
				u, v = u.times(w), v.times(w)
			}
			if exp.x == 0 {
				u = estimate{0, b.vanishing(tau, k)}
				v = u
			}
			push(u)
			if b.im != 0 {
				push(v)
			}
		}
		if b.order == 0 {
			continue
		}
		rest := b.vanishing(tau, b.order)
		if exp.x != 0 {
			rest = exp.x + exp.err
			for range b.order {
				rest = rest*(math.Abs(w.x)+w.err) + tiny
			}
		}
		for i, a := range c.tails[b.tail : b.tail+c.n] {
			dst[i] += a*rest + tiny
		}
	}
	for n&3 != 0 {
		push(estimate{})
	}
}

// boundTile adds four columns: for each the error of the column and 3u of the term,
// for the roundings of the constant, of the product and of the sum of two, and what
// underflow adds; u of the sum of all and of the running sum.
func (c *Compiled) boundTile(dst, sums []float64, tile int, four *[4]estimate) {
	var x, per, fixed [4]float64
	for k, e := range four {
		size := math.Abs(e.x) + e.err
		x[k], per[k], fixed[k] = e.x, e.err+3*unit*size, 4*tiny+tiny*size
	}
	for _, r := range c.runs[c.tiles[tile].from:c.tiles[tile].to] {
		for i := range r.n {
			a := &c.coefs[r.at+i]
			term := fourTerms(a, &x)
			sum := sums[r.row+i] + term
			sums[r.row+i] = sum
			e := unit * (math.Abs(term) + math.Abs(sum))
			for k, z := range a {
				if z != 0 {
					e += math.Abs(z)*per[k] + fixed[k]
				}
			}
			dst[r.row+i] += e
		}
	}
}
