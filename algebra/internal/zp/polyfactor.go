package zp

import (
	"cmp"
	"context"
	"slices"
)

// DegreePart is the product of all monic irreducible factors of one degree.
type DegreePart struct {
	Degree int        // of every irreducible factor of P
	P      Poly       // monic
	frob   *frobenius // of a multiple of P
}

// Count returns the number of irreducible factors in the part.
func (d DegreePart) Count() int { return d.P.Degree() / d.Degree }

// IsSquareFree reports whether gcd(a, a') = 1.
func (f Field) IsSquareFree(a Poly) bool {
	return f.GCDPoly(a, f.DerivativePoly(a)).Degree() == 0
}

// DistinctDegree splits a square-free polynomial a of positive degree into
// the products of its monic irreducible factors of equal degree, ascending.
// It uses that x^(p^d) - x is the product of all monic irreducible
// polynomials of degree dividing d. Cost: deg^3 word products, the Frobenius
// map being kept as a matrix.
//
// Source: von zur Gathen and Gerhard, Modern Computer Algebra, section 14.2.
func (f Field) DistinctDegree(ctx context.Context, a Poly) ([]DegreePart, error) {
	rest := f.MonicPoly(a)
	var parts []DegreePart
	if rest.Degree() < 2 {
		return append(parts, DegreePart{1, rest, nil}), nil
	}
	frob, err := f.newFrobenius(ctx, rest)
	if err != nil {
		return nil, err
	}
	x := Poly{0, 1}
	power := x
	for d := 1; 2*d <= rest.Degree(); d++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		power = frob.apply(power)
		g := f.GCDPoly(rest, f.SubPoly(power, x))
		if g.Degree() > 0 {
			parts = append(parts, DegreePart{d, g, &frob})
			rest, _ = f.DivRemPoly(rest, g)
		}
	}
	if rest.Degree() > 0 {
		parts = append(parts, DegreePart{rest.Degree(), rest, &frob})
	}
	return parts, nil
}

// frobenius is the map h -> h^p modulo a monic polynomial m of degree n.
type frobenius struct {
	field Field
	// cols[i][j] is the coefficient of x^i in x^(p(n-1-j)) mod m, reversed in
	// j so that applying the map is a row of crossSum calls.
	cols [][]uint64
}

// newFrobenius tabulates x^(ip) modulo m for i below deg m >= 2.
func (f Field) newFrobenius(ctx context.Context, m Poly) (frobenius, error) {
	n := m.Degree()
	fr := frobenius{field: f, cols: make([][]uint64, n)}
	cells := make([]uint64, n*n)
	for i := range fr.cols {
		fr.cols[i] = cells[i*n : (i+1)*n]
	}
	set := func(i int, row Poly) {
		for j, c := range row {
			fr.cols[j][n-1-i] = c
		}
	}
	if f.P <= uint64(2*n) && f.P < 1<<20 {
		// Single steps row <- x row lead from x^(ip) to the next. An entry
		// gains less than P^2 a step, so P steps fit a word unreduced.
		red := newReducer(f.P)
		row := make(Poly, n)
		row[0] = 1
		for i := 0; i < n; i++ {
			if err := ctx.Err(); err != nil {
				return fr, err
			}
			set(i, row)
			for range f.P {
				top := red.mod(row[n-1])
				copy(row[1:], row)
				row[0] = 0
				if top != 0 {
					addRow(row, m[:n], f.P-top)
				}
			}
			for j := range row {
				row[j] = red.mod(row[j])
			}
		}
		return fr, nil
	}
	if f.lazy(2 * n) {
		ring := f.newQuotients(m)
		h := ring.powX(f.P)
		row := make([]uint64, n)
		row[0] = 1
		set(0, row)
		copy(row, h)
		for i := 1; i < n; i++ {
			if err := ctx.Err(); err != nil {
				return fr, err
			}
			set(i, row)
			if i < n-1 {
				ring.mul(row, row, h)
			}
		}
		return fr, nil
	}
	h := f.PowModPoly(Poly{0, 1}, f.P, m)
	row := Poly{1}
	for i := 0; i < n; i++ {
		if err := ctx.Err(); err != nil {
			return fr, err
		}
		set(i, row)
		row = f.MulModPoly(row, h, m)
	}
	return fr, nil
}

// apply returns h^p modulo m.
func (fr frobenius) apply(h Poly) Poly {
	n := len(fr.cols)
	r := make(Poly, n)
	if fr.field.lazy(n) {
		red := newReducer(fr.field.P)
		for i, col := range fr.cols {
			r[i] = red.mod(crossDot(h, col[n-len(h):]))
		}
		return trim(r)
	}
	for i, col := range fr.cols {
		r[i] = fr.field.crossSum(h, col[n-len(h):])
	}
	return trim(r)
}

// EqualDegree returns the monic irreducible factors, each of degree d, of the
// square-free product a of such factors, in the order of [ComparePoly]. The
// trial elements come from a generator with a constant seed. Expected cost:
// log(deg a / d) times d applications of the Frobenius map and log p products
// modulo a.
//
// Source: Cantor and Zassenhaus, A new algorithm for factoring polynomials
// over finite fields, Math. Comp. 36 (1981); von zur Gathen and Shoup, Computing
// Frobenius maps and factoring polynomials, Comput. Complexity 2 (1992), for
// the trace in place of the norm.
func (f Field) EqualDegree(ctx context.Context, a Poly, d int) ([]Poly, error) {
	return f.equalDegree(ctx, DegreePart{Degree: d, P: f.MonicPoly(a)})
}

func (f Field) equalDegree(ctx context.Context, part DegreePart) ([]Poly, error) {
	d := part.Degree
	if part.P.Degree() <= d {
		return []Poly{part.P}, nil
	}
	frob := part.frob
	if frob == nil && d > 1 {
		fr, err := f.newFrobenius(ctx, part.P)
		if err != nil {
			return nil, err
		}
		frob = &fr
	}
	rng := splitMix(0x9E3779B97F4A7C15)
	var out []Poly
	stack := []Poly{part.P}
	for len(stack) > 0 {
		g := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		if g.Degree() <= d {
			out = append(out, g)
			continue
		}
		for {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			h := f.splitEqual(g, d, frob, &rng)
			if h.Degree() > 0 && h.Degree() < g.Degree() {
				q, _ := f.DivRemPoly(g, h)
				stack = append(stack, h, q)
				break
			}
		}
	}
	slices.SortFunc(out, ComparePoly)
	return out, nil
}

// splitEqual returns gcd(g, s^((p-1)/2) - 1) for the trace s = t + t^p + ... +
// t^(p^(d-1)) of a random t, whose residue modulo each factor of g is a random
// element of the prime field: the factor divides the result with probability
// (p-1)/(2p).
func (f Field) splitEqual(g Poly, d int, frob *frobenius, rng *splitMix) Poly {
	t := make(Poly, g.Degree())
	for i := range t {
		t[i] = rng.next() % f.P
	}
	t = trim(t)
	if t.Degree() < 1 {
		return nil
	}
	trace, conj := t, t
	for i := 1; i < d; i++ {
		conj = f.RemPoly(frob.apply(conj), g)
		trace = f.AddPoly(trace, conj)
	}
	h := f.PowModPoly(trace, (f.P-1)/2, g)
	return f.GCDPoly(g, f.SubPoly(h, Poly{1}))
}

// FactorSquareFree returns the monic irreducible factors of the square-free
// polynomial a of positive degree, in the order of [ComparePoly].
func (f Field) FactorSquareFree(ctx context.Context, a Poly) ([]Poly, error) {
	parts, err := f.DistinctDegree(ctx, a)
	if err != nil {
		return nil, err
	}
	return f.FactorParts(ctx, parts)
}

// FactorParts returns the irreducible factors of a product given by its
// distinct-degree parts, in the order of [ComparePoly].
func (f Field) FactorParts(ctx context.Context, parts []DegreePart) ([]Poly, error) {
	var out []Poly
	for _, part := range parts {
		g, err := f.equalDegree(ctx, part)
		if err != nil {
			return nil, err
		}
		out = append(out, g...)
	}
	slices.SortFunc(out, ComparePoly)
	return out, nil
}

// ComparePoly orders polynomials by degree, then by coefficients from the top.
func ComparePoly(a, b Poly) int {
	if c := cmp.Compare(len(a), len(b)); c != 0 {
		return c
	}
	for i := len(a) - 1; i >= 0; i-- {
		if c := cmp.Compare(a[i], b[i]); c != 0 {
			return c
		}
	}
	return 0
}

// splitMix is the SplitMix64 generator.
//
// Source: Steele, Lea and Flood, Fast splittable pseudorandom number
// generators, OOPSLA 2014.
type splitMix uint64

func (s *splitMix) next() uint64 {
	*s += 0x9E3779B97F4A7C15
	z := uint64(*s)
	z = (z ^ z>>30) * 0xBF58476D1CE4E5B9
	z = (z ^ z>>27) * 0x94D049BB133111EB
	return z ^ z>>31
}
