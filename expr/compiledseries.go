package expr

import (
	"math"
	"math/big"
	"math/cmplx"

	"example.org/closedform/algebra"
)

// rateSeries is the Taylor series of a group of rates around the rate center, in
// the time w = scale tau, |w| <= 1.
type rateSeries struct {
	center   complex128
	scale    float64        // a power of two
	b        [][]complex128 // of each function: about the coefficients of w^q
	order    int
	cos, sin [][]float64 // the first of them, rounded
	tails    []float64   // the rest is at most tails |w|^order e^(ct)
}

// seriesTerms is the most terms of a Taylor series, cancellation the factor from
// which on one is used, atUnitTime that at the time 1, and seriesReach the largest
// |L - c| |t|.
const (
	seriesTerms  = 48
	cancellation = 1 << 10
	atUnitTime   = 1 << 30
	seriesReach  = 2
)

// plan gives a series to the groups whose terms cancel.
func (c *compiler[E]) plan(g *rateGroup) error {
	for _, child := range g.children {
		if err := c.plan(child); err != nil {
			return err
		}
	}
	if err := c.ctx.Err(); err != nil {
		return err
	}
	if s := c.estimateSeries(g); s != nil {
		return c.roundSeries(g, s)
	}
	return nil
}

// amplitudes returns z of the terms z t^k e^(Lt), L in the upper half plane.
func (c *compiler[E]) amplitudes(t compilerTerm) []complex128 {
	z := make([]complex128, len(t.cos))
	for k := range z {
		z[k] = complex(t.cos[k], 0)
		if t.sin != nil {
			z[k] = complex(t.cos[k], -t.sin[k])
		}
		if c.rates[t.rate].im < 0 {
			z[k] = cmplx.Conj(z[k])
		}
	}
	return z
}

// estimateSeries returns the series of a group if its terms cancel, with b in
// float64, otherwise nil. They are weighed at the time 1/|c|, or where the series
// ends if that is earlier; before that at the times 1/|L| of all rates L of the
// program, and with a higher mark at the time 1, the unit that the model was stated
// in.
func (c *compiler[E]) estimateSeries(g *rateGroup) *rateSeries {
	s := &rateSeries{}
	flat := false
	for _, r := range g.rates {
		l := c.rates[r].at()
		s.center += l / complex(float64(len(g.rates)), 0)
		flat = flat || imag(l) <= g.gap || len(g.rates) == 1
	}
	if flat {
		// A rate near its own conjugate: all are taken around a real one.
		s.center = complex(real(s.center), 0)
	}
	spread := 0.0
	shifts := map[int]complex128{}
	for _, r := range g.rates {
		l := c.rates[r]
		low := complex(l.reLow, math.Copysign(1, l.im)*l.imLow)
		shifts[r] = l.at() - s.center + low
		spread = max(spread, cmplx.Abs(shifts[r]))
	}
	if !(spread > 0x1p-900 && spread < 0x1p900) {
		return nil
	}
	_, e := math.Frexp(seriesReach / spread)
	s.scale = math.Ldexp(1, 1-e)
	weights := map[float64]float64{min(1, s.scale/cmplx.Abs(s.center)): cancellation}
	if s.scale < 1 {
		weights[s.scale] = atUnitTime
	}
	for _, r := range c.rates {
		if w := s.scale / cmplx.Abs(r.at()); w < 1 {
			weights[w] = cancellation
		}
	}
	s.b = make([][]complex128, len(c.terms))
	cancels := false
	for i, terms := range c.terms {
		s.b[i] = make([]complex128, seriesTerms)
		for _, t := range terms {
			shift, ok := shifts[t.rate]
			if !ok {
				continue
			}
			for k, z := range c.amplitudes(t) {
				z *= complex(math.Pow(s.scale, -float64(k)), 0)
				for q := k; q < seriesTerms; q++ {
					s.b[i][q] += z
					z *= shift / complex(s.scale*float64(q-k+1), 0)
				}
			}
		}
		if flat {
			for q, z := range s.b[i] {
				s.b[i][q] = complex(real(z), 0)
			}
		}
		for w, factor := range weights {
			if cancels {
				break
			}
			parts := c.size(g, i, w/s.scale)
			cancels = parts <= math.MaxFloat64 && parts >= factor*sizeAt(s.b[i], w)
		}
	}
	if !cancels {
		return nil
	}
	return s
}

// sizeAt returns the sum of |b[q]| w^q.
func sizeAt(b []complex128, w float64) float64 {
	sum := 0.0
	for q := len(b) - 1; q >= 0; q-- {
		sum = sum*w + cmplx.Abs(b[q])
	}
	return sum
}

// size returns the sum of the sizes of the terms of a group in a function at the
// time t, without the exponential, as they are evaluated without a series of the
// group itself.
func (c *compiler[E]) size(g *rateGroup, function int, t float64) float64 {
	sum := 0.0
	for _, child := range g.children {
		if s := child.series; s != nil && t*s.scale <= 1 {
			sum += sizeAt(s.b[function], t*s.scale)
		} else {
			sum += c.size(child, function, t)
		}
	}
	if len(g.rates) == 1 {
		for _, term := range c.terms[function] {
			if term.rate == g.rates[0] {
				sum += sizeAt(c.amplitudes(term), t)
			}
		}
	}
	return sum
}

// roundSeries gives the group the series with correctly rounded coefficients,
// unless too many are needed.
func (c *compiler[E]) roundSeries(g *rateGroup, s *rateSeries) error {
	_, e := math.Frexp(s.scale)
	shift := int64(1 - e) // w = tau / 2^shift
	for prec := c.prec; prec <= mostPrecision; prec *= 2 {
		x, err := c.cache.get(c.ctx, c.k, c.images, prec)
		if err != nil {
			return err
		}
		center := algebra.ComplexBall{Re: algebra.BallFromFloat(big.NewFloat(real(s.center))), Im: algebra.BallFromFloat(big.NewFloat(imag(s.center)))}
		steps := map[int]algebra.ComplexBall{} // 2^shift (L - c)
		reach := map[int]float64{}
		for _, r := range g.rates {
			l := x.rates[r].at
			if c.rates[r].im < 0 {
				l = l.Conj()
			}
			d := l.Sub(center, prec)
			steps[r] = algebra.ComplexBall{Re: d.Re.MulPow2(shift), Im: d.Im.MulPow2(shift)}
			reach[r] = math.Hypot(mostFloat(steps[r].Re), mostFloat(steps[r].Im)) * (1 + 1e-12)
		}
		balls := make([][]algebra.ComplexBall, len(c.images))
		err = InParallel(len(balls), func(i int) error {
			balls[i] = c.seriesBalls(x.terms[i], x.rates, steps, shift, prec)
			for q, b := range balls[i] {
				u, _ := b.Re.Mid().Float64()
				v, _ := b.Im.Mid().Float64()
				if imag(s.center) == 0 {
					v = 0
				}
				s.b[i][q] = complex(u, v)
			}
			return c.ctx.Err()
		})
		if err != nil {
			return err
		}
		s.order = c.seriesOrder(s, reach)
		if s.order > seriesTerms {
			return nil
		}
		if s.round(balls, prec) {
			s.tails = c.seriesTails(s, reach, s.order)
			g.series = s
			return nil
		}
	}
	return errRounding
}

// mostFloat returns an upper bound of the size of the numbers in a ball.
func mostFloat(b algebra.Ball) float64 {
	lo, hi := b.Interval()
	x, _ := lo.Float64()
	y, _ := hi.Float64()
	return max(math.Abs(x), math.Abs(y)) * (1 + 1e-12)
}

// seriesBalls encloses the coefficients of a function's series.
func (c *compiler[E]) seriesBalls(terms []series, rates []rate, steps map[int]algebra.ComplexBall, shift int64, prec uint) []algebra.ComplexBall {
	b := make([]algebra.ComplexBall, seriesTerms)
	for _, t := range terms {
		step, ok := steps[t.rate]
		if !ok {
			continue
		}
		for k, z := range t.c {
			double := int64(k) * shift
			if rates[t.rate].paired {
				double++
			}
			z = algebra.ComplexBall{Re: z.Re.MulPow2(double), Im: z.Im.MulPow2(double)}
			if c.rates[t.rate].im < 0 {
				z = z.Conj()
			}
			for q := k; q < seriesTerms; q++ {
				b[q] = b[q].Add(z, prec)
				z = divInt(z.Mul(step, prec), big.NewInt(int64(q-k+1)), prec)
			}
		}
	}
	return b
}

// seriesOrder returns the number of terms that leaves a rest of 2^-56 of the size
// of every function.
func (c *compiler[E]) seriesOrder(s *rateSeries, reach map[int]float64) int {
	least := 1
	for _, terms := range c.terms {
		for _, t := range terms {
			if _, ok := reach[t.rate]; ok {
				least = max(least, len(t.cos))
			}
		}
	}
	for n := least; n <= seriesTerms; n++ {
		enough := true
		for i, rest := range c.seriesTails(s, reach, n) {
			enough = enough && rest <= 0x1p-56*sizeAt(s.b[i], 1)
		}
		if enough {
			return n
		}
	}
	return seriesTerms + 1
}

// seriesTails bounds the rests after n terms over |w|^n e^(ct), by
//
//	sum of x^m/m! over m >= n <= x^n/n! e^x
func (c *compiler[E]) seriesTails(s *rateSeries, reach map[int]float64, n int) []float64 {
	tails := make([]float64, len(c.terms))
	for i, terms := range c.terms {
		for _, t := range terms {
			x, ok := reach[t.rate]
			if !ok {
				continue
			}
			for k, z := range c.amplitudes(t) {
				rest := cmplx.Abs(z) * math.Pow(s.scale, -float64(k)) * math.Exp(x) * 1.01
				for m := 1; m <= n-k; m++ {
					rest *= x / float64(m)
				}
				tails[i] += rest
			}
		}
	}
	return tails
}

// round rounds the coefficients, if they are certain.
func (s *rateSeries) round(balls [][]algebra.ComplexBall, prec uint) bool {
	s.cos, s.sin = make([][]float64, len(balls)), make([][]float64, len(balls))
	for i, b := range balls {
		for q := range s.order {
			u, ok := roundBall(b[q].Re, 0, prec)
			if !ok {
				return false
			}
			s.cos[i] = append(s.cos[i], u)
			if imag(s.center) != 0 {
				v, ok := roundBall(b[q].Im, 0, prec)
				if !ok {
					return false
				}
				s.sin[i] = append(s.sin[i], -v+0)
			}
		}
	}
	return true
}

// block returns the block of a series, having written its truncation error.
func (s *rateSeries) block(out *Compiled) columns {
	b := compiledBlock{re: real(s.center), im: imag(s.center), scale: s.scale, tail: len(out.tails), order: s.order}
	out.tails = append(out.tails, s.tails...)
	return columns{b, s.cos, s.sin}
}
