package expr

import "math"

// lanes is the number of times that EvalMany takes together.
const lanes = 16

// lane holds a number for each of several times.
type lane = [lanes]float64

// EvalMany returns the values at all times, those of times[k] at k Len(), ..., (k +
// 1) Len() - 1, in dst if it is long enough, and then allocates nothing. They are
// those of [Compiled.Eval], which is slower for each of many times.
func (c *Compiled) EvalMany(dst, times []float64) []float64 {
	n := c.n * len(times)
	if len(dst) < n {
		dst = make([]float64, n)
	}
	dst = dst[:n]
	for from := 0; from < len(times); from += lanes {
		some := times[from:min(from+lanes, len(times))]
		out := dst[from*c.n:][:len(some)*c.n]
		if c.evalTogether(out, some) {
			continue
		}
		for k, t := range some {
			c.Eval(out[k*c.n:][:c.n], t)
		}
	}
	return dst
}

// instants is instant for several times, without the errors.
type instants struct {
	n      int
	hi, lo lane
}

// evalTogether evaluates at up to lanes times that all take the same parts; it
// returns false for others.
func (c *Compiled) evalTogether(dst, times []float64) bool {
	var tau instants
	tau.n = len(times)
	least, most := math.Inf(1), 0.0
	for l, t := range times {
		if t-t != 0 {
			return false
		}
		at := c.since(t)
		tau.hi[l], tau.lo[l] = at.hi, at.lo
		size := math.Abs(at.hi)
		least, most = min(least, size), max(most, size)
	}
	for i := range c.parts {
		if until := c.parts[i].until; least <= until && until < most {
			return false
		}
	}
	clear(dst)
	for i := 0; i < len(c.parts); {
		p := &c.parts[i]
		if most <= p.until {
			c.addTogether(dst, &p.near, &tau)
			i = p.skip
			continue
		}
		c.addTogether(dst, &p.far, &tau)
		i++
	}
	return true
}

// addTogether is add at several times.
func (c *Compiled) addTogether(dst []float64, chunk *compiledChunk, tau *instants) {
	var four [4]lane
	n, tile := 0, chunk.tile
	push := func(x *lane) {
		four[n&3] = *x
		if n++; n&3 == 0 {
			c.addTiles(dst, tile, &four, tau.n)
			tile++
		}
	}
	blocks := c.blocks[chunk.from:chunk.to]
	for j := range blocks {
		b := &blocks[j]
		var u, v lane
		b.waves(&u, &v, tau)
		for k := 1; ; k++ {
			push(&u)
			if b.im != 0 {
				push(&v)
			}
			if k >= b.powers {
				break
			}
			for l := range tau.n {
				w := tau.hi[l] * b.scale
				u[l], v[l] = u[l]*w, v[l]*w
			}
		}
	}
	if n&3 != 0 {
		for n&3 != 0 {
			four[n&3] = lane{}
			n++
		}
		c.addTiles(dst, tile, &four, tau.n)
	}
}

// waves sets u and v to e^(re tau), times the cosine and sine of im tau where im is
// not 0.
func (b *compiledBlock) waves(u, v *lane, tau *instants) {
	for l := range tau.n {
		u[l] = 1
	}
	if b.re != 0 {
		for l := range tau.n {
			hi := tau.hi[l]
			p := b.re * hi
			x := math.Exp(p)
			if x > 0 && x <= math.MaxFloat64 { // the second part of the product, as in exp
				x = math.FMA(x, math.FMA(b.re, tau.lo[l], math.FMA(b.reLow, hi, math.FMA(b.re, hi, -p))), x)
			}
			u[l] = x
		}
	}
	if b.im != 0 {
		for l := range tau.n {
			if u[l] != 0 {
				sin, cos := b.sincos(instant{hi: tau.hi[l], lo: tau.lo[l]})
				u[l], v[l] = u[l]*cos, u[l]*sin
			}
		}
	}
}

// addTiles is addTile at n times.
func (c *Compiled) addTiles(dst []float64, tile int, four *[4]lane, n int) {
	sum := 0.0
	for l := range n {
		sum += (four[0][l] + four[1][l]) + (four[2][l] + four[3][l])
	}
	if !(sum <= math.MaxFloat64 && sum >= -math.MaxFloat64) {
		for l := range n {
			c.addTile(dst[l*c.n:][:c.n], tile, &[4]float64{four[0][l], four[1][l], four[2][l], four[3][l]})
		}
		return
	}
	runs := c.runs[c.tiles[tile].from:c.tiles[tile].to]
	for i := range runs {
		r := &runs[i]
		all := c.coefs[r.at:][:r.n]
		for l := range n {
			u0, u1, u2, u3 := four[0][l], four[1][l], four[2][l], four[3][l]
			y := dst[l*c.n+r.row:][:len(all)]
			for i := range all {
				a := &all[i]
				y[i] += (float64(a[0]*u0) + float64(a[1]*u1)) + (float64(a[2]*u2) + float64(a[3]*u3))
			}
		}
	}
}
