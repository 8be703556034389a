package linsys

import (
	"context"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// mostInverted is the largest order of a system for which P^-1 is written.
const mostInverted = 4

// vectorStep finds chains of generalised eigenvectors for every factor; where
// all factors have degree 1 or 2, it gathers them in P with A P = P J.
func (d *derivation[E]) vectorStep(ctx context.Context) error {
	n := len(d.sv.states)
	if n == 0 {
		return nil
	}
	if d.groups == nil { // the eigenvalues are too long to be written
		return nil
	}
	for _, g := range d.groups {
		var err error
		if g.chains, err = d.chainsOf(ctx, g); err != nil {
			return err
		}
	}
	title, defective, plain := "Eigenvectors", false, true
	for _, g := range d.groups {
		plain = plain && g.values != nil
		for _, c := range g.chains {
			defective = defective || len(c) > 1
		}
	}
	if defective {
		title = "Eigenvectors and Jordan chains"
	}
	s := d.step("eigenvectors", title)
	if d.symbolic() {
		s.add(say("The symbols are taken to be general: what stands in a denominator or under a root, and differences of eigenvalues, are not zero."))
	}
	if defective {
		s.add(say("Some eigenvalue has fewer independent eigenvectors than its multiplicity. Chains of generalised eigenvectors take their place: each vector of a chain is mapped to the one before it.").
			show(equation(expr.Mul(minus(expr.Sym(d.a), expr.Mul(expr.Sym(d.lambda), expr.Sym(d.identity))), expr.Sym(d.v+"_2")), expr.Sym(d.v+"_1"))))
	}
	count := 0
	for _, g := range d.groups {
		if err := d.verifyChains(s, g); err != nil {
			return err
		}
		count = d.showChains(s, g, count, n)
	}
	if !plain {
		return nil
	}
	return d.transformation(ctx, s, n)
}

// symbolic tells whether A holds symbols.
func (d *derivation[E]) symbolic() bool {
	c, ok := any(d.k).(*expr.Constants)
	if !ok {
		return false
	}
	n := len(d.sv.states)
	for i := range n {
		for j := range n {
			if !c.IsNumber(any(d.sv.a.At(i, j)).(expr.Constant)) {
				return true
			}
		}
	}
	return false
}

// chainsOf returns the Jordan chains of the roots of a factor.
func (d *derivation[E]) chainsOf(ctx context.Context, g *rootGroup[E]) ([][]lvector[E], error) {
	if g.mult == 1 && g.p.Degree() > 2 {
		v, err := d.adjugateColumn(ctx, g)
		return [][]lvector[E]{{v}}, err
	}
	n := len(d.sv.states)
	b := d.shifted(g)
	// kernels[k] spans the kernel of b^(k+1).
	var kernels [][]lvector[E]
	power := b
	for {
		vectors, err := echelonKernel[algebra.Poly[E]](ctx, g.l, power)
		if err != nil {
			return nil, err
		}
		var list []lvector[E]
		for _, v := range vectors {
			list = append(list, v)
		}
		kernels = append(kernels, list)
		if len(list) >= g.mult {
			break
		}
		if len(kernels) > n {
			return nil, errRemainder
		}
		power = power.Mul(b)
	}
	var chains [][]lvector[E]
	for k := len(kernels) - 1; k >= 0; k-- {
		// What is in the kernel of b^k, or at this place of a longer chain, starts
		// no new chain.
		var known []lvector[E]
		if k > 0 {
			known = append(known, kernels[k-1]...)
		}
		for _, c := range chains {
			known = append(known, c[k])
		}
		rank, err := d.rank(ctx, g, known)
		if err != nil {
			return nil, err
		}
		for _, v := range kernels[k] {
			more, err := d.rank(ctx, g, append(known[:len(known):len(known)], v))
			if err != nil {
				return nil, err
			}
			if more == rank {
				continue
			}
			rank, known = more, append(known, v)
			chain := make([]lvector[E], k+1)
			chain[k] = v
			for i := k - 1; i >= 0; i-- {
				chain[i] = b.MulVec(chain[i+1])
			}
			chains = append(chains, chain)
		}
	}
	for i, c := range chains {
		if chains[i] = d.readable(g, c); len(c) == 1 {
			chains[i] = d.shortest(g, chains[i][0])
		}
	}
	return chains, nil
}

// lift returns a matrix over K[s]/(p).
func (d *derivation[E]) lift(g *rootGroup[E], m algebra.Matrix[E]) algebra.Matrix[algebra.Poly[E]] {
	rows, cols := m.Dims()
	return algebra.MatrixFromFunc[algebra.Poly[E]](g.l, rows, cols, func(i, j int) algebra.Poly[E] { return g.l.FromBase(m.At(i, j)) })
}

// shifted returns A - z I.
func (d *derivation[E]) shifted(g *rootGroup[E]) algebra.Matrix[algebra.Poly[E]] {
	return d.lift(g, d.sv.a).Sub(algebra.Identity[algebra.Poly[E]](g.l, len(d.sv.states)).Scale(g.l.Root()))
}

func (d *derivation[E]) rank(ctx context.Context, g *rootGroup[E], vectors []lvector[E]) (int, error) {
	if len(vectors) == 0 {
		return 0, nil
	}
	m := algebra.MatrixFromFunc[algebra.Poly[E]](g.l, len(vectors), len(vectors[0]), func(i, j int) algebra.Poly[E] { return vectors[i][j] })
	ech, err := algebra.Reduce[algebra.Poly[E]](ctx, g.l, m)
	return len(ech.Pivots), err
}

// adjugateColumn returns a column of the adjugate of z I - A at a simple root z:
// (s I - A) N(s) = chi(s) e holds for a column N, and chi(z) = 0. Its entries are
// shorter than those that elimination gives.
func (d *derivation[E]) adjugateColumn(ctx context.Context, g *rootGroup[E]) (lvector[E], error) {
	n := len(d.sv.states)
	var best lvector[E]
	size := 0
	for j := range n {
		rhs := make([]algebra.Poly[E], n)
		for i := range rhs {
			rhs[i] = algebra.NewPoly[E](d.k)
		}
		rhs[j] = d.sv.chi
		quo, _, err := algebra.DivideResolvent(ctx, d.sv.a, rhs)
		if err != nil {
			return nil, err
		}
		v := make(lvector[E], n)
		zero := true
		for i := range v {
			v[i] = g.l.Reduce(quo[i])
			zero = zero && v[i].IsZero()
		}
		if zero {
			continue
		}
		v = d.readable(g, []lvector[E]{v})[0]
		if t := d.textSize(v); best == nil || t < size {
			best, size = v, t
		}
	}
	return best, nil
}

// readable divides a chain by the common content of its entries, so that those
// over Q are integers.
func (d *derivation[E]) readable(g *rootGroup[E], chain []lvector[E]) []lvector[E] {
	var all []E
	negative := false
	for i := len(chain) - 1; i >= 0; i-- {
		for _, x := range chain[i] {
			if len(all) == 0 && !x.IsZero() {
				negative = d.k.Negative(x.Lead())
			}
			all = append(all, x.Coefs()...)
		}
	}
	c := expr.ContentOf(d.k, all...)
	if negative {
		c = d.k.Neg(c)
	}
	inv, err := d.k.Inv(c)
	if err != nil {
		return chain
	}
	out := make([]lvector[E], len(chain))
	for i, v := range chain {
		for _, x := range v {
			out[i] = append(out[i], x.Scale(inv))
		}
	}
	return out
}

// shortest returns the multiple of an eigenvector that is shortest among those
// with a component 1, and the vector itself.
func (d *derivation[E]) shortest(g *rootGroup[E], v lvector[E]) []lvector[E] {
	best := []lvector[E]{v}
	if g.p.Degree() == 1 {
		return best
	}
	size := d.textSize(v)
	for _, pivot := range v {
		if pivot.Degree() < 1 {
			continue
		}
		inv, err := g.l.Inv(pivot)
		if err != nil {
			continue
		}
		w := make(lvector[E], len(v))
		for i := range w {
			w[i] = g.l.Mul(inv, v[i])
		}
		c := d.readable(g, []lvector[E]{w})
		if t := d.textSize(c[0]); t < size {
			best, size = c, t
		}
	}
	return best
}

// textSize is the length of a vector as it is written in the root z.
func (d *derivation[E]) textSize(v lvector[E]) int {
	n := 0
	for _, x := range v {
		n += len(expr.PolyNodeOf(d.k, x, expr.Sym("z")).String())
	}
	return n
}

// verifyChains checks the equations of the chains over K[s]/(p), and that the
// chains hold as many vectors as the root's multiplicity.
func (d *derivation[E]) verifyChains(s *Step, g *rootGroup[E]) error {
	b := d.shifted(g)
	total := 0
	for _, c := range g.chains {
		total += len(c)
		for i, v := range c {
			w := b.MulVec(v)
			holds := true
			zero := true
			for j := range w {
				zero = zero && v[j].IsZero()
				if i > 0 {
					w[j] = w[j].Sub(c[i-1][j])
				}
				holds = holds && w[j].IsZero()
			}
			if err := s.verify(holds && !zero, "vector %d of a chain for %s", i+1, g.names[0]); err != nil {
				return err
			}
		}
	}
	return s.verify(total == g.mult, "the vectors for %s are as many as its multiplicity", g.names[0])
}

// showChains writes the chains of a group and returns the number of vectors so
// far; a conjugate root has its vectors after those of the root.
func (d *derivation[E]) showChains(s *Step, g *rootGroup[E], count, n int) int {
	if g.values == nil {
		z := expr.Sym(g.names[0])
		p := say("For each root %v:", z)
		for _, c := range g.chains {
			for _, v := range c {
				count++
				entries := make([]expr.Node, n)
				for i, x := range v {
					entries[i] = expr.PolyNodeOf(d.k, x, z)
				}
				p = p.show(equation(expr.Sym(indexed(d.v, count, n)), expr.Col(entries...)))
			}
		}
		s.add(p)
		return count
	}
	for r, name := range g.names {
		p := say("For %v:", expr.Sym(name))
		for _, c := range g.chains {
			for _, v := range c {
				count++
				p = p.show(equation(expr.Sym(indexed(d.v, count, n)), d.column(g, v, r)))
			}
		}
		s.add(p)
	}
	return count
}

// column writes a vector at the r-th root of a factor of degree 1 or 2.
func (d *derivation[E]) column(g *rootGroup[E], v lvector[E], r int) expr.Node {
	entries := make([]expr.Node, len(v))
	for i := range v {
		entries[i] = d.valueAt(g, v[i], r)
	}
	return expr.Col(entries...)
}

func (d *derivation[E]) valueAt(g *rootGroup[E], x algebra.Poly[E], r int) expr.Node {
	if x.IsZero() {
		return expr.Int(0)
	}
	return expr.RootValues(d.k, g.p, x, expr.Sym(d.unit))[r]
}

// transformation gathers the chains in P, with J the matrix of the chains, and
// decouples the equations.
func (d *derivation[E]) transformation(ctx context.Context, s *Step, n int) error {
	var columns []expr.Node // those of P
	j := make([][]expr.Node, n)
	for i := range j {
		j[i] = make([]expr.Node, n)
		for k := range j[i] {
			j[i][k] = expr.Int(0)
		}
	}
	diagonal := true
	for _, g := range d.groups {
		for r := range g.names {
			for _, c := range g.chains {
				for i, v := range c {
					m := len(columns)
					j[m][m] = g.values[r]
					if i > 0 {
						j[m-1][m] = expr.Int(1)
						diagonal = false
					}
					columns = append(columns, d.column(g, v, r))
				}
			}
		}
	}
	if len(columns) != n {
		return s.verify(false, "%d vectors for the order %d", len(columns), n)
	}
	entry := func(i, k int) expr.Node { return columns[k].(expr.Matrix).Rows[i][0] }
	a, p, jordan := expr.Sym(d.a), expr.Sym(d.p), expr.Sym(d.j)
	words := "With these vectors as columns of %v, and the eigenvalues in the diagonal of %v,"
	if !diagonal {
		words = "With these vectors as columns of %v, and the eigenvalues in the diagonal of the Jordan matrix %v,"
	}
	s.add(say(words, p, jordan).show(
		equation(expr.Mul(a, p), expr.Mul(p, jordan)),
		equation(p, expr.Mat(n, n, entry)),
		equation(jordan, expr.Mat(n, n, func(i, k int) expr.Node { return j[i][k] })),
	))
	// The columns of A P - P J are the equations of the chains, which hold.
	if err := s.verify(true, "%s %s = %s %s, column by column", d.a, d.p, d.p, d.j); err != nil {
		return err
	}
	if n > mostInverted {
		return nil
	}
	if err := d.invert(ctx, s); err != nil {
		return err
	}
	var rows [][]expr.Node
	for _, g := range d.groups {
		for r := range g.names {
			for _, w := range g.dual {
				row := make([]expr.Node, n)
				for i := range row {
					row[i] = d.valueAt(g, w[i], r)
				}
				rows = append(rows, row)
			}
		}
	}
	inverse := expr.Pow(p, -1)
	s.add(say("The inverse of %v:", p).show(equation(inverse, expr.Mat(n, n, func(i, k int) expr.Node { return rows[i][k] }))))
	d.decouple(rows, j, diagonal)
	return nil
}

// invert finds the rows of P^-1 that belong to each factor, the left
// generalised eigenvectors dual to its chains, and verifies P P^-1 = I and
// P J P^-1 = A: summed over the roots, both are traces from K[s]/(p) to K.
func (d *derivation[E]) invert(ctx context.Context, s *Step) error {
	n := len(d.sv.states)
	k := d.k
	identity := algebra.Identity[E](k, n)
	sumI, sumA := identity.Scale(k.Zero()), identity.Scale(k.Zero())
	for _, g := range d.groups {
		power, err := d.shifted(g).Pow(ctx, g.mult)
		if err != nil {
			return err
		}
		left, err := echelonKernel[algebra.Poly[E]](ctx, g.l, power.Transpose())
		if err != nil {
			return err
		}
		m := g.mult
		if err := s.verify(len(left) == m, "%d left vectors for %s", m, g.names[0]); err != nil {
			return err
		}
		var right []lvector[E]
		next := make([]int, 0, m) // the place of the vector before, -1 for none
		for _, c := range g.chains {
			for i, v := range c {
				before := -1
				if i > 0 {
					before = len(right) - 1
				}
				right, next = append(right, v), append(next, before)
			}
		}
		u := algebra.MatrixFromFunc[algebra.Poly[E]](g.l, m, n, func(i, j int) algebra.Poly[E] { return left[i][j] })
		v := algebra.MatrixFromFunc[algebra.Poly[E]](g.l, n, m, func(i, j int) algebra.Poly[E] { return right[j][i] })
		w, err := algebra.Solve[algebra.Poly[E]](ctx, g.l, u.Mul(v), u)
		if err != nil {
			return err
		}
		g.dual = nil
		for i := range m {
			g.dual = append(g.dual, w.Row(i))
		}
		block := algebra.MatrixFromFunc[algebra.Poly[E]](g.l, m, m, func(i, j int) algebra.Poly[E] {
			switch {
			case i == j:
				return g.l.Root()
			case next[j] == i:
				return g.l.One()
			}
			return g.l.Zero()
		})
		trace := func(x algebra.Matrix[algebra.Poly[E]]) algebra.Matrix[E] {
			return algebra.MatrixFromFunc[E](k, n, n, func(i, j int) E { return g.l.Trace(x.At(i, j)) })
		}
		sumI = sumI.Add(trace(v.Mul(w)))
		sumA = sumA.Add(trace(v.Mul(block).Mul(w)))
	}
	if err := s.verify(sumI.Equal(identity), "%s %s^-1 = %s", d.p, d.p, d.identity); err != nil {
		return err
	}
	return s.verify(sumA.Equal(d.sv.a), "%s %s %s^-1 = %s", d.p, d.j, d.p, d.a)
}

// decouple writes the equations in the coordinates of the chains, w = P^-1 y,
// which hold because P J P^-1 = A.
func (d *derivation[E]) decouple(rows, j [][]expr.Node, diagonal bool) {
	n := len(rows)
	w := d.name("w", "c", "h")
	var formulas []expr.Equation
	for i := range n {
		var terms []expr.Node
		for m := i; m < n; m++ {
			terms = append(terms, expr.Mul(j[i][m], expr.Sym(indexed(w, m+1, n))))
		}
		for m, f := range d.sv.f {
			if !f.IsZero() {
				terms = append(terms, expr.Mul(rows[i][m], at(indexed(d.f, m+1, n), 0, d.t())))
			}
		}
		formulas = append(formulas, equation(expr.Derivative(indexed(w, i+1, n), 1), expr.Add(terms...)))
	}
	s := d.step("decoupling", "Decoupled equations")
	words := "In the coordinates %v each equation stands alone:"
	if !diagonal {
		words = "In the coordinates %v the equations can be solved one after another, from the last:"
	}
	s.add(say(words, expr.Sym(w)).
		show(equation(expr.Sym(d.y), expr.Mul(expr.Sym(d.p), expr.Sym(w)))).show(formulas...))
	s.Verified = append(s.Verified, d.p+" "+d.j+" "+d.p+"^-1 = "+d.a)
}
