package mpoly

import (
	"slices"

	"example.org/closedform/algebra/internal/zp"
)

// maxProbes bounds the evaluations tried for a degree bound.
const maxProbes = 4

// prober finds bounds of the degrees of a gcd in the variables vars, those that
// both polynomials have; others are those that one of them has.
type prober struct {
	f            *field
	vars, others []int
	powers       [][]uint64 // by variable, of its value
}

// degreeBounds returns, by variable, upper bounds of the degrees of gcd(p, q) in
// vars for non-zero p and q of degrees dp and dq, packed. The bound in x_i is
// the degree of the gcd of images in x_i, all other variables being replaced by
// elements of a large prime field such that the leading coefficient of p or q
// does not vanish: then that of the gcd does not either. Nearly always the
// bounds are the degrees. Cost: the terms of p and q times the variables, and
// one gcd in one variable for each of vars.
func degreeBounds(p, q Poly, dp, dq []uint64, vars, others []int) []int {
	bound := make([]int, p.n)
	b := &prober{vars: vars, others: others, powers: make([][]uint64, p.n)}
	for _, i := range vars {
		bound[i] = min(exponent(dp, i), exponent(dq, i))
	}
	random := points(3)
	open := vars
	for try := 0; len(open) > 0 && try < maxProbes; try++ {
		b.f = fieldAt(try)
		b.choose(dp, dq, &random)
		u, v := b.images(p, dp), b.images(q, dq)
		var failed []int
		for k, i := range vars {
			if try > 0 && !slices.Contains(open, i) {
				continue
			}
			x, y := trimmed(u[k]), trimmed(v[k])
			if len(x) == len(u[k]) || len(y) == len(v[k]) {
				bound[i] = len(b.f.GCDInPlace(zp.Poly(x), zp.Poly(y))) - 1
				continue
			}
			failed = append(failed, i)
		}
		open = failed
	}
	return bound
}

// choose takes values for all variables.
func (b *prober) choose(dp, dq []uint64, random *points) {
	size := 0
	for _, list := range [2][]int{b.vars, b.others} {
		for _, i := range list {
			size += max(exponent(dp, i), exponent(dq, i)) + 1
		}
	}
	mem := make([]uint64, size)
	for _, list := range [2][]int{b.vars, b.others} {
		for _, i := range list {
			d := max(exponent(dp, i), exponent(dq, i)) + 1
			b.powers[i], mem = mem[:d:d], mem[d:]
			b.f.powers(b.powers[i], random.next(b.f))
		}
	}
}

// images returns, for each of vars, the image of p in that variable divided by
// its value: with the values t_k,
//
//	p(t_1, ..., t_k z, ...),
//
// whose gcds have the same degrees. So the value of each term is needed once.
func (b *prober) images(p Poly, degrees []uint64) [][]uint64 {
	f := b.f
	images := make([][]uint64, len(b.vars))
	size := 0
	for _, i := range b.vars {
		size += exponent(degrees, i) + 1
	}
	mem := make([]uint64, size)
	for k, i := range b.vars {
		d := exponent(degrees, i) + 1
		images[k], mem = mem[:d:d], mem[d:]
	}
	w := wordsOf(p.n)
	var few [16]int
	exps := few[:]
	if len(b.vars) > len(few) {
		exps = make([]int, len(b.vars))
	}
	exps = exps[:len(b.vars)]
	for t := range p.Len() {
		e := p.exps[t*w : t*w+w]
		x := f.coef(p, t)
		for _, i := range b.others {
			if d := exponent(e, i); d != 0 {
				x = f.times(x, b.powers[i][d])
			}
		}
		for k, i := range b.vars {
			d := exponent(e, i)
			exps[k] = d
			if d != 0 {
				x = f.times(x, b.powers[i][d])
			}
		}
		for k, d := range exps {
			images[k][d] = f.Add(images[k][d], x)
		}
	}
	return images
}
