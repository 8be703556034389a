package expr

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"slices"
	"sort"
	"strconv"
	"strings"

	"example.org/closedform/algebra"
)

// span returns the default interval of local times, from 0; see [GoOptions].
func (g *goWriter[E]) span() float64 {
	slowest, longest, growth := math.Inf(1), math.Inf(1), 0.0
	for _, r := range g.rates {
		re, im := r.re.x, math.Abs(r.im.x)
		if re != 0 {
			slowest = min(slowest, math.Abs(re))
		}
		if re == 0 && im != 0 {
			longest = min(longest, im)
		}
		growth = max(growth, re)
	}
	span := 0.0
	if slowest <= math.MaxFloat64 {
		span = 5 / slowest
	}
	if longest <= math.MaxFloat64 {
		span = max(span, 20*math.Pi/longest)
	}
	if growth > 0 {
		span = min(span, 20/growth)
	}
	if span == 0 {
		span = 10
	}
	// Rounded up to one digit, within what float64 holds comfortably.
	span = min(max(span, 1e-100), 1e100)
	power := int(math.Floor(math.Log10(span)))
	digit := int(math.Ceil(span / math.Pow(10, float64(power)) * (1 - 1e-9)))
	span, _ = strconv.ParseFloat(fmt.Sprintf("%de%d", digit, power), 64)
	return span
}

// sizes bounds the largest values of images between two times from below, by
// enclosures at some of them.
func (g *goWriter[E]) sizes(ctx context.Context, images []int) ([]float64, error) {
	out := make([]float64, len(images))
	var times []float64
	const steps = 16
	for j := range steps + 1 {
		times = append(times, min(g.to, g.from+(g.to-g.from)*(float64(j)/steps)))
	}
	for j := 5; j < 20; j += 2 {
		times = append(times, min(g.to, g.from+math.Ldexp(g.to-g.from, -j)))
	}
	for prec := uint(128); prec <= 2048; prec *= 2 {
		x, err := g.cache.get(ctx, g.k, g.images, prec)
		if err != nil {
			return nil, wrapCancel(err)
		}
		origin := algebra.Ball{}
		if len(g.fs) > 0 {
			origin = g.k.Enclose(g.fs[0].origin, prec)
		}
		for _, t := range times {
			values, err := x.at(ctx, ballOf(t).Sub(origin, prec))
			if err != nil {
				return nil, wrapCancel(err)
			}
			for i, image := range images {
				out[i] = max(out[i], leastFloat(values[image]))
			}
		}
		certain := true
		for i, image := range images {
			certain = certain && (out[i] > 0 || g.images[image].IsZero())
		}
		if certain {
			break
		}
	}
	return out, nil
}

func ballOf(x float64) algebra.Ball { return algebra.BallFromFloat(big.NewFloat(x)) }

// leastFloat returns a lower bound of the size of the numbers in a ball.
func leastFloat(b algebra.Ball) float64 {
	lo, hi := b.Interval()
	x, _ := lo.Float64()
	y, _ := hi.Float64()
	switch {
	case x > 0:
		return min(x, math.MaxFloat64) * (1 - 1e-12)
	case y < 0:
		return min(-y, math.MaxFloat64) * (1 - 1e-12)
	}
	return 0
}

// intervals cuts the times into pieces: even ones, and ones that shrink towards
// the origin as far as the fastest rate asks for.
func (g *goWriter[E]) intervals() []goInterval {
	const even = 64
	cuts := []float64{g.from, g.to}
	add := func(t float64) {
		if t > g.from && t < g.to {
			cuts = append(cuts, t)
		}
	}
	length := g.to - g.from
	for j := 1; j < even; j++ {
		add(g.from + length*(float64(j)/even))
	}
	fastest := 0.0
	for _, r := range g.rates {
		fastest = max(fastest, math.Hypot(r.re.x, r.im.x))
	}
	reach := g.reach()
	least := max(0.05/max(fastest, 1/reach), reach*0x1p-60)
	for x := reach; x > least; x *= 0.85 {
		add(g.origin.x + x)
		add(g.origin.x - x)
	}
	add(g.origin.x)
	sort.Float64s(cuts)
	var out []goInterval
	origin := g.origin.rangeOf()
	for i := range len(cuts) - 1 {
		if cuts[i] == cuts[i+1] && g.from < g.to {
			continue
		}
		tau := goRange{cuts[i], cuts[i+1], 0}
		if !g.origin.isZero() {
			tau = tau.plus(origin.negated()).rounded()
		}
		out = append(out, goInterval{tau})
	}
	return out
}

// bound bounds |computed - exact| for the operations over all intervals.
func (g *goWriter[E]) bound(ctx context.Context, ops []goOp) ([]float64, error) {
	out := make([]float64, len(ops))
	for _, v := range g.intervals() {
		if err := ctx.Err(); err != nil {
			return nil, wrapCancel(err)
		}
		for i, op := range ops {
			e := op.rangeOf(v).err
			if !(e <= math.MaxFloat64) {
				e = math.Inf(1)
			}
			out[i] = max(out[i], e*slack)
		}
	}
	return out, nil
}

// upward writes a positive number in two digits, rounded up.
func upward(x float64) string {
	for y := x; ; y *= 1.01 {
		s := strconv.FormatFloat(y, 'e', 1, 64)
		if z, _ := strconv.ParseFloat(s, 64); z >= x {
			return s
		}
		if y < 1e-300 {
			y += 1e-323
		}
	}
}

// within tells whether a bound meets the tolerance.
func (g *goWriter[E]) within(bound, size float64) bool {
	return bound == 0 || bound <= g.opt.Tolerance*size
}

// statement writes the bounds on the errors of a routine.
func (g *goWriter[E]) statement(line func(string, ...any), r *goRoutine, fields []string) {
	if len(fields) == 0 {
		return
	}
	if len(g.constants) > 0 && slices.Max(r.bounds) == 0 {
		line("//\n// Nothing is said of the errors, which the terms of the constants make.")
		return
	}
	intro := fmt.Sprintf("Error: for %s <= %s <= %s every value differs from the exact one by at most", goFloat(g.from), inert(g.variable), goFloat(g.to))
	line("//")
	for _, l := range wrap(intro, 84) {
		line("// %s", l)
	}
	line("//")
	width := 0
	for _, f := range fields {
		width = max(width, len([]rune(f)))
	}
	var beyond []string
	for i, f := range fields {
		pad := strings.Repeat(" ", width-len([]rune(f)))
		switch b := r.bounds[i]; {
		case b == 0:
			line("//\t%s%s  0", f, pad)
		case math.IsInf(b, 1):
			line("//\t%s%s  (no bound is known)", f, pad)
		case r.sizes[i] > 0 && b/r.sizes[i] > 0x1p-900 && b/r.sizes[i] <= math.MaxFloat64:
			line("//\t%s%s  %s, or %s of its largest value there", f, pad, upward(b), upward(b/r.sizes[i]*slack))
		default:
			line("//\t%s%s  %s", f, pad, upward(b))
		}
		if b := r.bounds[i]; !g.within(b, r.sizes[i]) && b <= math.MaxFloat64 {
			beyond = append(beyond, f)
		}
	}
	line("//")
	text := "given that math.Exp is within 2 units in the last place, and math.Sin, math.Cos and math.Sincos within 4 units of 2^-53."
	switch {
	case !r.math:
		text = ""
	case r == &g.slopes && g.values.math:
		text = "given the same of package math as for " + g.opt.Func + "."
	}
	if len(g.constants) > 0 {
		text += " That is for constants that are all 0; nothing is said of their terms."
	}
	if len(beyond) > 0 {
		text += fmt.Sprintf(" The tolerance of %g of the largest value is not met for %s: terms cancel, and no better form was found.", g.opt.Tolerance, strings.Join(beyond, ", "))
	}
	for _, l := range wrap(strings.TrimSpace(text), 84) {
		line("// %s", l)
	}
}
