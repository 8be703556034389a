package intpoly

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// wordNode is a [liftNode] for moduli of one word. The arithmetic is that of
// zp.Field with a power of the prime as modulus: it divides by monic
// polynomials only, which any modulus allows.
type wordNode struct {
	product     zp.Poly
	index       int // of the factor, in a leaf
	left, right *wordNode
	s, t        zp.Poly
}

// buildTree joins the two factors of least degree until one node is left.
func buildTree(field zp.Field, local []zp.Poly) *wordNode {
	queue := make([]*wordNode, len(local))
	for i, g := range local {
		queue[i] = &wordNode{product: g, index: i}
	}
	takeLeast := func() *wordNode {
		best := 0
		for i := range queue {
			if len(queue[i].product) < len(queue[best].product) {
				best = i
			}
		}
		node := queue[best]
		queue = append(queue[:best], queue[best+1:]...)
		return node
	}
	for len(queue) > 1 {
		a, b := takeLeast(), takeLeast()
		_, s, t := field.BezoutPoly(a.product, b.product)
		queue = append(queue, &wordNode{
			product: field.MulPoly(a.product, b.product), left: a, right: b, s: s, t: t,
		})
	}
	return queue[0]
}

// big returns the tree in the form for any modulus.
func (n *wordNode) big() *liftNode {
	if n == nil {
		return nil
	}
	return &liftNode{
		product: fromField(n.product), index: n.index, left: n.left.big(), right: n.right.big(),
		s: fromField(n.s), t: fromField(n.t),
	}
}

// leaves sets factors from the leaves below the node.
func (n *wordNode) leaves(factors []Poly) {
	if n.left == nil {
		factors[n.index] = fromField(n.product)
		return
	}
	n.left.leaves(factors)
	n.right.leaves(factors)
}

// fromField returns the polynomial with the residues of g as coefficients.
func fromField(g zp.Poly) Poly {
	p := make(Poly, len(g))
	cells := make([]big.Int, len(g))
	for i, c := range g {
		p[i] = cells[i].SetUint64(c)
	}
	return p
}

// wordStep is a [step] with all moduli below 2^62.
type wordStep struct{ m, gain, next zp.Field }

// wordStep returns the step from p^from to p^to, and whether p^to fits.
func (l *lift) wordStep(from, to int) (st wordStep, ok bool) {
	st = wordStep{zp.Field{P: 1}, zp.Field{P: 1}, zp.Field{P: 1}}
	for e := range to {
		if st.next.P > (zp.MaxPrime-1)/l.field.P {
			return st, false
		}
		st.next.P *= l.field.P
		if e < from {
			st.m.P *= l.field.P
		} else {
			st.gain.P *= l.field.P
		}
	}
	return st, true
}

// raiseProduct is [liftNode.raiseProduct].
func (n *wordNode) raiseProduct(ctx context.Context, product zp.Poly, st wordStep) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	n.product = product
	if n.left == nil {
		return nil
	}
	g, h := n.left.product, n.right.product
	s, t := residues(n.s, st.gain), residues(n.t, st.gain)
	e := st.over(st.next.SubPoly(product, st.next.MulPoly(g, h)))
	q, dh := st.gain.DivRemPoly(st.gain.MulPoly(s, e), residues(h, st.gain))
	dg := st.gain.AddPoly(st.gain.MulPoly(t, e), st.gain.MulPoly(q, residues(g, st.gain)))
	if err := n.left.raiseProduct(ctx, st.shifted(g, dg), st); err != nil {
		return err
	}
	return n.right.raiseProduct(ctx, st.shifted(h, dh), st)
}

// raiseBezout is [liftNode.raiseBezout].
func (n *wordNode) raiseBezout(ctx context.Context, st wordStep) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	if n.left == nil {
		return nil
	}
	g, h := residues(n.left.product, st.next), residues(n.right.product, st.next)
	b := st.next.AddPoly(st.next.MulPoly(n.s, g), st.next.MulPoly(n.t, h))
	b = st.over(st.next.SubPoly(zp.Poly{1}, b))
	c, ds := st.gain.DivRemPoly(st.gain.MulPoly(residues(n.s, st.gain), b), residues(h, st.gain))
	dt := st.gain.AddPoly(st.gain.MulPoly(residues(n.t, st.gain), b), st.gain.MulPoly(c, residues(g, st.gain)))
	n.s, n.t = st.shifted(n.s, ds), st.shifted(n.t, dt)
	if err := n.left.raiseBezout(ctx, st); err != nil {
		return err
	}
	return n.right.raiseBezout(ctx, st)
}

// over returns p / m for a multiple p of m modulo next, in place.
func (st wordStep) over(p zp.Poly) zp.Poly {
	for i, c := range p {
		p[i] = c / st.m.P
	}
	return p
}

// shifted returns p + m d, for p modulo m and d modulo gain.
func (st wordStep) shifted(p, d zp.Poly) zp.Poly {
	r := make(zp.Poly, max(len(p), len(d)))
	copy(r, p)
	for i, c := range d {
		r[i] += c * st.m.P
	}
	return r
}

// residues returns p, given modulo a multiple of the field's modulus, reduced.
func residues(p zp.Poly, f zp.Field) zp.Poly {
	for _, c := range p {
		if c >= f.P {
			return f.NewPoly(p...)
		}
	}
	return p
}
