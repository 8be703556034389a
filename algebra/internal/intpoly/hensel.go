package intpoly

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// lift is a factorisation f = lc(f) prod factors modulo p^exp into monic
// factors with coefficients in [0, p^exp), refined on demand.
type lift struct {
	f         Poly
	field     zp.Field
	bound     *big.Int // for (lc(f)/lc(g)) g over factors g of degree <= deg(f)/2
	exp       int
	bezoutExp int      // the Bezout coefficients of the tree hold modulo p^bezoutExp
	modulus   *big.Int // p^exp
	factors   []Poly
	words     *wordNode // the tree while the modulus fits a word
	root      *liftNode // the tree afterwards; none until factors given without one are raised
}

// liftNode is a node of the factor tree: product = left right and
// s left + t right = 1, modulo the present power of p. A leaf has no children
// and is one of the factors.
type liftNode struct {
	product     Poly
	index       int // of the factor, in a leaf
	left, right *liftNode
	s, t        Poly
}

// newLift returns the monic irreducible factors of f modulo a prime, f
// square-free there, lifted to p^exp > 2 bound.
func newLift(ctx context.Context, f Poly, field zp.Field, local []zp.Poly, bound *big.Int) (*lift, error) {
	l := &lift{f: f, field: field, bound: bound}
	l.start(local)
	return l, l.raise(ctx, l.sufficient())
}

// start sets the factors to those modulo the prime.
func (l *lift) start(local []zp.Poly) {
	l.exp, l.bezoutExp, l.modulus = 1, 1, new(big.Int).SetUint64(l.field.P)
	l.root, l.words = nil, buildTree(l.field, local)
	l.factors = make([]Poly, len(local))
	l.words.leaves(l.factors)
}

// sufficient returns the least exp with p^exp > 2 bound.
func (l *lift) sufficient() int {
	p := new(big.Int).SetUint64(l.field.P)
	power := new(big.Int).Set(p)
	need := new(big.Int).Lsh(l.bound, 1)
	exp := 1
	for power.Cmp(need) <= 0 {
		power.Mul(power, p)
		exp++
	}
	return exp
}

// steps returns the exponents passed on the way from the present one to exp,
// the last first: they at most double and are chosen from the top, so that the
// last step, the dearest, is not longer than needed.
func (l *lift) steps(exp int) []int {
	var steps []int
	for e := exp; e > l.exp; e = (e + 1) / 2 {
		steps = append(steps, e)
	}
	return steps
}

// raise lifts to p^exp, exp at least the present one. The Bezout coefficients
// follow one step behind.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, algorithm 15.17.
func (l *lift) raise(ctx context.Context, exp int) error {
	if l.root == nil && l.words == nil {
		l.restart()
	}
	steps := l.steps(exp)
	for i := len(steps) - 1; i >= 0; i-- {
		if l.words != nil {
			ok, err := l.raiseWords(ctx, steps[i])
			if err != nil {
				return err
			}
			if ok {
				continue
			}
			l.root, l.words = l.words.big(), nil
		}
		gain := steps[i] - l.exp
		for l.bezoutExp < gain {
			to := min(2*l.bezoutExp, gain)
			if err := l.root.raiseBezout(ctx, l.step(l.bezoutExp, to)); err != nil {
				return err
			}
			l.bezoutExp = to
		}
		s := l.step(l.exp, steps[i])
		inv := new(big.Int).ModInverse(l.f.lead(), s.next)
		monic := reduceBy(l.f.Scale(inv), s.next)
		if err := l.root.raiseProduct(ctx, monic, s); err != nil {
			return err
		}
		l.exp, l.modulus = steps[i], s.next
	}
	l.factors = make([]Poly, len(l.factors))
	if l.words != nil {
		l.words.leaves(l.factors)
	} else {
		l.root.leaves(l.factors)
	}
	return nil
}

// restart goes back to the factors modulo the prime.
func (l *lift) restart() {
	local := make([]zp.Poly, len(l.factors))
	for i, g := range l.factors {
		local[i] = reduce(g, l.field)
	}
	l.start(local)
}

// raiseWords takes a step to p^exp, unless p^exp is too large for one word.
func (l *lift) raiseWords(ctx context.Context, exp int) (ok bool, err error) {
	st, ok := l.wordStep(l.exp, exp)
	if !ok {
		return false, nil
	}
	for gain := exp - l.exp; l.bezoutExp < gain; {
		to := min(2*l.bezoutExp, gain)
		bezout, _ := l.wordStep(l.bezoutExp, to)
		if err := l.words.raiseBezout(ctx, bezout); err != nil {
			return false, err
		}
		l.bezoutExp = to
	}
	monic := st.next.MonicPoly(reduce(l.f, st.next))
	if err := l.words.raiseProduct(ctx, monic, st); err != nil {
		return false, err
	}
	l.exp, l.modulus = exp, new(big.Int).SetUint64(st.next.P)
	return true, nil
}

// step is a step from modulus m to next = m gain, where gain divides m.
type step struct{ m, gain, next *big.Int }

// step returns the step from p^from to p^to.
func (l *lift) step(from, to int) step {
	p := new(big.Int).SetUint64(l.field.P)
	m := new(big.Int).Exp(p, big.NewInt(int64(from)), nil)
	gain := new(big.Int).Exp(p, big.NewInt(int64(to-from)), nil)
	return step{m, gain, new(big.Int).Mul(m, gain)}
}

// leaves sets factors from the leaves below the node.
func (n *liftNode) leaves(factors []Poly) {
	if n.left == nil {
		factors[n.index] = n.product
		return
	}
	n.left.leaves(factors)
	n.right.leaves(factors)
}

// raiseProduct refines the children's products given the node's own. The
// corrections are multiples of m, so they are computed modulo gain only.
//
// Source: von zur Gathen and Gerhard, algorithm 15.10, steps 1 and 2.
func (n *liftNode) raiseProduct(ctx context.Context, product Poly, st step) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	n.product = product
	if n.left == nil {
		return nil
	}
	g, h := n.left.product, n.right.product
	s, t := reduceBy(n.s, st.gain), reduceBy(n.t, st.gain)
	e := overModulus(Sub(product, Mul(g, h)), st)
	q, dh := divRemMonic(reduceBy(Mul(s, e), st.gain), reduceBy(h, st.gain), st.gain)
	dg := reduceBy(Add(Mul(t, e), Mul(q, reduceBy(g, st.gain))), st.gain)
	if err := n.left.raiseProduct(ctx, Add(g, dg.Scale(st.m)), st); err != nil {
		return err
	}
	return n.right.raiseProduct(ctx, Add(h, dh.Scale(st.m)), st)
}

// raiseBezout refines s and t of the node and those below it.
//
// Source: von zur Gathen and Gerhard, algorithm 15.10, steps 3 and 4.
func (n *liftNode) raiseBezout(ctx context.Context, st step) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	if n.left == nil {
		return nil
	}
	g, h := reduceBy(n.left.product, st.next), reduceBy(n.right.product, st.next)
	b := Sub(Add(Mul(n.s, g), Mul(n.t, h)), Poly{big.NewInt(1)})
	b = overModulus(b, st)
	c, ds := divRemMonic(reduceBy(Mul(n.s, b), st.gain), reduceBy(h, st.gain), st.gain)
	dt := reduceBy(Add(Mul(n.t, b), Mul(c, g)), st.gain)
	n.s = reduceBy(Sub(n.s, ds.Scale(st.m)), st.next)
	n.t = reduceBy(Sub(n.t, dt.Scale(st.m)), st.next)
	if err := n.left.raiseBezout(ctx, st); err != nil {
		return err
	}
	return n.right.raiseBezout(ctx, st)
}

// overModulus returns p / m modulo gain for a multiple p of m modulo next.
func overModulus(p Poly, st step) Poly {
	r := make(Poly, len(p))
	for i, c := range p {
		r[i] = new(big.Int).Quo(c, st.m)
		r[i].Mod(r[i], st.gain)
	}
	return trim(r)
}

// reduceBy returns p with coefficients in [0, m).
func reduceBy(p Poly, m *big.Int) Poly {
	r := make(Poly, len(p))
	for i, c := range p {
		if c.Sign() >= 0 && c.Cmp(m) < 0 {
			r[i] = c
		} else {
			r[i] = new(big.Int).Mod(c, m)
		}
	}
	return trim(r)
}

// symmetric returns p with coefficients in (-m/2, m/2].
func symmetric(p Poly, m *big.Int) Poly {
	r := make(Poly, len(p))
	for i, c := range p {
		r[i] = symmetricInt(c, m)
	}
	return trim(r)
}

// symmetricInt returns the residue of x modulo m in (-m/2, m/2].
func symmetricInt(x, m *big.Int) *big.Int {
	r := new(big.Int).Mod(x, m)
	if twice := new(big.Int).Lsh(r, 1); twice.Cmp(m) > 0 {
		r.Sub(r, m)
	}
	return r
}

// divRemMonic returns a = q b + r modulo m for a monic b, coefficients in
// [0, m), one reduction for a coefficient.
func divRemMonic(a, b Poly, m *big.Int) (q, r Poly) {
	na, nb := len(a), len(b)
	if na < nb {
		return nil, a
	}
	q = make(Poly, na-nb+1)
	var acc, t big.Int
	for k := na - nb; k >= 0; k-- {
		acc.Set(a[k+nb-1])
		for j := k + 1; j <= min(k+nb-1, na-nb); j++ {
			acc.Sub(&acc, t.Mul(q[j], b[k+nb-1-j]))
		}
		q[k] = new(big.Int).Mod(&acc, m)
	}
	r = make(Poly, nb-1)
	for k := range r {
		acc.Set(a[k])
		for j := max(0, k-nb+1); j <= min(k, na-nb); j++ {
			acc.Sub(&acc, t.Mul(q[j], b[k-j]))
		}
		r[k] = new(big.Int).Mod(&acc, m)
	}
	return trim(q), trim(r)
}
