package expr

import "math"

// goConst is a constant of generated source: the float64 x nearest to an exact
// value, which it may be, with the exact value as a text if that is short.
type goConst struct {
	x     float64
	exact bool
	text  string // of the absolute value
}

func (n goConst) abs() goConst {
	n.x = math.Abs(n.x)
	return n
}

// isZero tells whether the exact value is known to be 0.
func (n goConst) isZero() bool { return n.exact && n.x == 0 }

// slip bounds |x - exact value|.
func (n goConst) slip() float64 {
	if n.exact {
		return 0
	}
	return unit*math.Abs(n.x) + tiny
}

// isPower tells whether a product with x is exact: x is a power of two or 0.
func (n goConst) isPower() bool {
	f, _ := math.Frexp(n.x)
	return n.exact && (f == 0 || math.Abs(f) == 0.5)
}

// goRate is a pair of conjugate rates, or a real one, with its index in the
// expansion of the images.
type goRate struct {
	re, im goConst
	index  int
	id     int // the number in the names of its exponential, sine and cosine
}

// goOp is an operation of generated source, to be followed by the error analysis.
type goOp struct {
	kind   goOpKind
	number goConst
	rate   *goRate
	args   []goOp
	minus  []bool  // which terms of a sum are subtracted
	until  float64 // of a branch: where |tau| is at most this, the first argument
	order  int     // of a rest
	scale  goConst // of a rest
}

type goOpKind int

const (
	goConstant goOpKind = iota
	goTime              // t - origin
	goExp
	goCos
	goSin
	goAdd
	goMultiply
	goLost    // what the source leaves out: the argument, at most that part of the smallest float64
	goUnknown // what the analysis does not follow
	goRest    // a truncation error, number.x |scale tau|^order e^(ct), c the rate
	goBranch
)

// goRange encloses the exact value of an operation for the times in an interval,
// and bounds the difference of the computed value.
type goRange struct{ lo, hi, err float64 }

// size bounds the computed and the exact values.
func (r goRange) size() float64 { return max(math.Abs(r.lo), math.Abs(r.hi)) + r.err }

// outward returns the range with ends moved by one float64, for bounds computed to
// nearest.
func outward(lo, hi, err float64) goRange {
	return goRange{math.Nextafter(lo, math.Inf(-1)), math.Nextafter(hi, math.Inf(1)), err}
}

// rounded adds the rounding error of the result.
func (r goRange) rounded() goRange {
	r.err += unit*r.size()*slack + tiny
	return r
}

func (r goRange) plus(s goRange) goRange { return outward(r.lo+s.lo, r.hi+s.hi, r.err+s.err) }

func (r goRange) negated() goRange { return goRange{-r.hi, -r.lo, r.err} }

// times is the product without its rounding.
func (r goRange) times(s goRange) goRange {
	a, b, c, d := r.lo*s.lo, r.lo*s.hi, r.hi*s.lo, r.hi*s.hi
	x, y := max(math.Abs(r.lo), math.Abs(r.hi)), max(math.Abs(s.lo), math.Abs(s.hi))
	return outward(min(a, b, c, d), max(a, b, c, d), (x*s.err+y*r.err+r.err*s.err)*slack)
}

// hull encloses both.
func (r goRange) hull(s goRange) goRange {
	return goRange{min(r.lo, s.lo), max(r.hi, s.hi), max(r.err, s.err)}
}

// goInterval is the range of the local time tau.
type goInterval struct{ tau goRange }

// rangeOf is the range of a constant.
func (n goConst) rangeOf() goRange {
	if n.exact {
		return goRange{n.x, n.x, 0}
	}
	e := n.slip()
	return outward(n.x-e, n.x+e, e)
}

// argument is the range of a rate times the time, as the source computes it.
func (v goInterval) argument(n goConst) goRange {
	p := n.rangeOf().times(v.tau)
	if n.isPower() {
		p.err += tiny
		return p
	}
	return p.rounded()
}

// exp is the range of math.Exp, within 4u of its result and 2 units in the last
// place below the normal numbers.
func (v goInterval) exp(n goConst) goRange {
	if n.x == 0 {
		// The source leaves out e^(re tau) with |re| below the least float64.
		d := n.slip() * v.tau.size()
		return outward(1-2*d, 1+2*d, 2*d)
	}
	p := v.argument(n)
	lo, hi := math.Exp(p.lo)*(1-8*unit), math.Exp(p.hi)*(1+8*unit)
	if hi > math.MaxFloat64/4 {
		return goRange{max(0, lo), hi, math.Inf(1)} // the computed one may overflow
	}
	return outward(max(0, lo-4*tiny), hi+4*tiny, hi*(math.Expm1(p.err)*(1+4*unit)+4*unit)*slack+4*tiny)
}

// turn is the range of a sine or cosine, within 4u.
func (v goInterval) turn(n goConst, f func(float64) float64, most func(size float64) float64) goRange {
	p := v.argument(n)
	mid := p.lo/2 + p.hi/2
	reach := (p.hi-p.lo)/2*slack + 4*unit*(1+math.Abs(mid))
	y := f(mid)
	r := goRange{max(-1, y-reach), min(1, y+reach), min(2+8*unit, p.err+4*unit*most(p.size()))}
	if !(reach < 1) {
		r.lo, r.hi = -1, 1
	}
	return r
}

// rangeOf follows an operation for the times of an interval.
func (o goOp) rangeOf(v goInterval) goRange {
	switch o.kind {
	case goConstant:
		return o.number.rangeOf()
	case goTime:
		return v.tau
	case goExp:
		return v.exp(o.rate.re)
	case goCos:
		return v.turn(o.rate.im, math.Cos, func(float64) float64 { return 1 })
	case goSin:
		return v.turn(o.rate.im, math.Sin, func(size float64) float64 { return min(1, size) })
	case goAdd:
		return o.sum(v)
	case goMultiply:
		return o.product(v)
	case goLost:
		e := o.args[0].rangeOf(v).size()*tiny + tiny
		return goRange{-e, e, e}
	case goRest:
		e := v.exp(o.rate.re).size() * o.number.x
		w := v.tau.size() * o.scale.x * slack
		for range o.order {
			e = e*w + tiny
		}
		e *= slack
		return goRange{-e, e, e}
	case goBranch:
		return o.branch(v)
	}
	return goRange{math.Inf(-1), math.Inf(1), math.Inf(1)}
}

// sum follows a sum from left to right. Terms that the source does not hold add
// no rounding.
func (o goOp) sum(v goInterval) goRange {
	var r goRange
	first := true
	for i, a := range o.args {
		s := a.rangeOf(v)
		if o.minus[i] {
			s = s.negated()
		}
		silent := a.kind == goLost || a.kind == goRest || a.kind == goUnknown
		r = r.plus(s)
		if !silent && !first {
			r = r.rounded()
		}
		first = first && silent
	}
	return r
}

// product follows a product from left to right. Factors that are left out, and
// powers of two, add no rounding.
func (o goOp) product(v goInterval) goRange {
	r := o.args[0].rangeOf(v)
	one := func(a goOp) bool { return a.kind == goConstant && a.number.exact && math.Abs(a.number.x) == 1 }
	exact, same := o.args[0].unrounded(), one(o.args[0])
	for _, a := range o.args[1:] {
		r = r.times(a.rangeOf(v))
		switch {
		case same || one(a):
		case exact || a.unrounded():
			r.err += tiny // of what is below the normal numbers
		default:
			r = r.rounded()
		}
		exact, same = exact && a.unrounded(), same && one(a)
	}
	return r
}

// unrounded tells whether a product with the operation is exact.
func (o goOp) unrounded() bool {
	return o.kind == goConstant && o.number.isPower() || o.kind == goExp && o.rate.re.x == 0
}

// branch follows both sides, each for the times that get there.
func (o goOp) branch(v goInterval) goRange {
	most, least := o.until*(1+8*unit)+v.tau.err, o.until*(1-8*unit)-v.tau.err
	var out goRange
	found := false
	add := func(side goOp, lo, hi float64) {
		if lo > hi {
			return
		}
		r := side.rangeOf(goInterval{goRange{lo, hi, v.tau.err}})
		if found {
			r = r.hull(out)
		}
		out, found = r, true
	}
	add(o.args[0], max(v.tau.lo, -most), min(v.tau.hi, most))
	add(o.args[1], max(v.tau.lo, least), v.tau.hi)
	add(o.args[1], v.tau.lo, min(v.tau.hi, -least))
	return out
}
