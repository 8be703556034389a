package expr

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
)

// goSeries holds the Taylor series of close rates, as [Compile] plans them.
type goSeries[E any] struct {
	g     *goWriter[E]
	root  *rateGroup
	terms [][]goTerm // of each image
	done  int        // groups written
}

// series plans Taylor series for the images; nil if no terms cancel or the
// constants are beyond limits.
func (g *goWriter[E]) series(ctx context.Context, terms [][]goTerm) (*goSeries[E], error) {
	c := compiler[E]{ctx: ctx, k: g.k, images: g.images, out: &Compiled{n: len(g.images)}}
	err := c.round()
	s := &goSeries[E]{g: g, terms: terms}
	if err == nil {
		s.root = c.tree()
		err = c.plan(s.root)
	}
	var limit *Error
	if errors.As(err, &limit) && limit.Kind == LimitExceeded {
		return nil, nil
	}
	if err != nil {
		return nil, wrapCancel(err)
	}
	g.prune(s.root)
	if len(s.top()) == 0 {
		return nil, nil
	}
	return s, nil
}

// wideReach is how far beyond the examined times a series must hold for the source
// to do without those of the groups inside.
const wideReach = 64

// prune drops the series of single rates, and of groups inside one whose series
// holds for all times of interest.
func (g *goWriter[E]) prune(group *rateGroup) {
	if len(group.rates) == 1 {
		group.series = nil
	}
	if s := group.series; s != nil && 1/s.scale >= wideReach*g.reach() {
		group.children = nil
		return
	}
	for _, child := range group.children {
		g.prune(child)
	}
}

// reach returns the largest local time that is examined.
func (g *goWriter[E]) reach() float64 {
	return max(math.Abs(g.to-g.origin.x), math.Abs(g.from-g.origin.x))
}

// top returns the largest groups with a series.
func (s *goSeries[E]) top() []*rateGroup {
	if s.root.series != nil {
		return []*rateGroup{s.root}
	}
	return s.root.seriesGroups()
}

// plain returns the terms of an image at the rates that keep selects.
func (s *goSeries[E]) plain(image int, keep func(rate int) bool) []goTerm {
	var out []goTerm
	for _, t := range s.terms[image] {
		if keep(t.rate.index) {
			out = append(out, t)
		}
	}
	return out
}

// codes returns the expressions of the images, and the lines before them.
func (s *goSeries[E]) codes(images []int) (lines []string, out []goCode) {
	s.done = 0
	taken := map[int]bool{}
	sums := make([]*goSumCode, len(images))
	groups := s.top()
	for _, group := range groups {
		for _, r := range group.rates {
			taken[r] = true
		}
	}
	for i, image := range images {
		sums[i] = s.g.sum(s.plain(image, func(r int) bool { return !taken[r] }))
	}
	for _, group := range groups {
		lines = append(lines, s.group(group, images, sums)...)
	}
	for _, sum := range sums {
		out = append(out, sum.code())
	}
	return lines, out
}

// group writes the terms of a group with a series into an array, and adds its
// elements to the sums of the images.
func (s *goSeries[E]) group(group *rateGroup, images []int, sums []*goSumCode) []string {
	var used []int // places in images
	for i, image := range images {
		if len(s.plain(image, func(r int) bool { return slices.Contains(group.rates, r) })) > 0 {
			used = append(used, i)
		}
	}
	if len(used) == 0 {
		return nil
	}
	s.done++
	name := func(letter string) string { return fmt.Sprintf("%s%d", letter, s.done) }
	array, w, exp, cosine, sine := name("p"), name("w"), name("x"), name("y"), name("z")
	series := group.series
	center := &goRate{re: goConst{x: real(series.center), exact: true}, im: goConst{x: imag(series.center), exact: true}}
	scale := goConst{x: series.scale, exact: true}
	until := 1 / series.scale

	near := make([]goCode, len(used))
	x := goCode{w, goProductOp(scale.code().op, s.g.timeCode().op)}
	for j, i := range used {
		var sum goSumCode
		numbers := func(c []float64) []goConst {
			out := make([]goConst, len(c))
			for q, v := range c {
				out[q] = goConst{x: v}
			}
			return out
		}
		var sin []goConst
		if imag(series.center) != 0 {
			sin = numbers(series.sin[images[i]])
		}
		addWave(&sum, numbers(series.cos[images[i]]), sin, x, center, exp, cosine, sine)
		sum.addSilently(false, goOp{kind: goRest, number: goConst{x: series.tails[images[i]]}, order: series.order, scale: scale, rate: center})
		near[j] = sum.code()
	}

	farSums := make([]*goSumCode, len(used))
	inner := make([]int, len(used))
	plain := group.plainRates()
	for j, i := range used {
		inner[j] = images[i]
		farSums[j] = s.g.sum(s.plain(images[i], func(r int) bool { return slices.Contains(plain, r) }))
	}
	var deeper []string
	for _, child := range group.seriesGroups() {
		deeper = append(deeper, s.group(child, inner, farSums)...)
	}
	far := make([]goCode, len(used))
	for j := range far {
		far[j] = farSums[j].code()
	}

	kind := fmt.Sprintf("[%d]float64", len(used))
	lines := []string{
		fmt.Sprintf("var %s %s // the terms of %d close rates: a series where they cancel", array, kind, len(group.rates)),
		fmt.Sprintf("if math.Abs(%s) <= %s {", s.g.time, goFloat(until)),
	}
	text := codeTexts(near)
	if usesName(text, w) {
		lines = append(lines, fmt.Sprintf("%s := %s", w, timesText(scale.x, s.g.time)))
	}
	lines = append(lines, waveLines(text, s.g.time, center, exp, cosine, sine)...)
	lines = append(lines, assignCodes(array, kind, near)...)
	lines = append(lines, "} else {")
	lines = append(lines, deeper...)
	lines = append(lines, s.g.factors(codeTexts(far))...)
	lines = append(lines, assignCodes(array, kind, far)...)
	lines = append(lines, "}")
	for j, i := range used {
		sums[i].addCode(false, goCode{fmt.Sprintf("%s[%d]", array, j), goOp{kind: goBranch, until: until, args: []goOp{near[j].op, far[j].op}}})
	}
	return lines
}

func codeTexts(codes []goCode) string {
	var all []string
	for _, c := range codes {
		all = append(all, c.text)
	}
	return strings.Join(all, " ")
}

// assignCodes assigns an array.
func assignCodes(array, kind string, codes []goCode) []string {
	lines := []string{array + " = " + kind + "{"}
	for _, c := range codes {
		lines = append(lines, c.text+",")
	}
	return append(lines, "}")
}
