package mpoly

import (
	"fmt"
	"iter"
	"math"
	"math/big"
	"math/bits"
)

// Poly is a polynomial in n variables over Z. It is immutable, and the zero
// value is the zero polynomial of any number of variables. Terms are sorted in
// descending lexicographic order with x_0 > x_1 > ...; a degree beyond 32767
// in a variable panics, so callers limit degrees.
type Poly struct {
	n    int
	exps []uint64 // wordsOf(n) words a term
	// Exactly one of the two holds the coefficients: words while all of them
	// satisfy |c| < 2^63, bigs otherwise.
	words []int64
	bigs  []*big.Int
}

// Term is the monomial x_0^Exp[0] x_1^Exp[1] ... with its coefficient.
type Term struct {
	Coef *big.Int
	Exp  []int
}

// fitsWord reports whether |c| < 2^63.
func fitsWord(c *big.Int) bool { return c.BitLen() < 64 }

// Constant returns the constant c as a polynomial in n variables.
func Constant(n int, c *big.Int) Poly {
	if c.Sign() == 0 {
		return Poly{n: n}
	}
	if fitsWord(c) {
		return ConstantWord(n, c.Int64())
	}
	return Poly{n: n, exps: make([]uint64, wordsOf(n)), bigs: []*big.Int{new(big.Int).Set(c)}}
}

// ConstantWord returns the constant c as a polynomial in n variables.
func ConstantWord(n int, c int64) Poly {
	switch c {
	case 0:
		return Poly{n: n}
	case math.MinInt64:
		return Constant(n, big.NewInt(c))
	}
	return Poly{n: n, exps: make([]uint64, wordsOf(n)), words: []int64{c}}
}

// Variable returns x_i as a polynomial in n variables, 0 <= i < n.
func Variable(n, i int) Poly {
	if i < 0 || i >= n {
		panic(fmt.Sprintf("mpoly: variable %d of %d", i, n))
	}
	e := make([]uint64, wordsOf(n))
	w, s := fieldOf(i)
	e[w] = 1 << s
	return Poly{n: n, exps: e, words: []int64{1}}
}

// FromTerms returns the sum of the terms, given in any order, as a polynomial
// in n variables. Each term has n exponents. Cost: one sort.
func FromTerms(n int, terms []Term) Poly {
	w := wordsOf(n)
	b := newBuilder(n, len(terms))
	e := make([]uint64, w)
	for _, t := range terms {
		if len(t.Exp) != n {
			panic(fmt.Sprintf("mpoly: %d exponents for %d variables", len(t.Exp), n))
		}
		clear(e)
		packExponents(e, t.Exp)
		b.addBig(e, new(big.Int).Set(t.Coef))
	}
	return b.sorted()
}

// Vars returns the number of variables n.
func (p Poly) Vars() int { return p.n }

// Len returns the number of terms.
func (p Poly) Len() int { return len(p.words) + len(p.bigs) }

// exp returns the packed monomial of term i.
func (p Poly) exp(i int) []uint64 {
	w := wordsOf(p.n)
	return p.exps[i*w : i*w+w : i*w+w]
}

// coef returns the coefficient of term i, which must not be modified.
func (p Poly) coef(i int) *big.Int {
	if p.bigs != nil {
		return p.bigs[i]
	}
	return big.NewInt(p.words[i])
}

// sign returns the sign of the coefficient of term i.
func (p Poly) sign(i int) int {
	if p.bigs != nil {
		return p.bigs[i].Sign()
	}
	if p.words[i] < 0 {
		return -1
	}
	return 1
}

// Term returns the i-th term in descending order.
func (p Poly) Term(i int) Term {
	e := p.exp(i)
	t := Term{Coef: new(big.Int).Set(p.coef(i)), Exp: make([]int, p.n)}
	for k := range t.Exp {
		t.Exp[k] = exponent(e, k)
	}
	return t
}

// Terms yields the terms in descending order.
func (p Poly) Terms() iter.Seq[Term] {
	return func(yield func(Term) bool) {
		for i := range p.Len() {
			if !yield(p.Term(i)) {
				return
			}
		}
	}
}

// IsZero reports whether p = 0.
func (p Poly) IsZero() bool { return p.Len() == 0 }

// IsOne reports whether p = 1.
func (p Poly) IsOne() bool { return len(p.words) == 1 && p.words[0] == 1 && isUnit(p.exps) }

// IsConstant reports whether p has no variable.
func (p Poly) IsConstant() bool { return p.Len() == 0 || p.Len() == 1 && isUnit(p.exps) }

// isUnit reports whether the monomial e is 1.
func isUnit(e []uint64) bool {
	for _, x := range e {
		if x != 0 {
			return false
		}
	}
	return true
}

// ConstantTerm returns p(0, ..., 0).
func (p Poly) ConstantTerm() *big.Int {
	if k := p.Len(); k > 0 && isUnit(p.exp(k-1)) {
		return new(big.Int).Set(p.coef(k - 1))
	}
	return new(big.Int)
}

// Lead returns the leading coefficient, 0 for 0.
func (p Poly) Lead() *big.Int {
	if p.IsZero() {
		return new(big.Int)
	}
	return new(big.Int).Set(p.coef(0))
}

// LeadSign returns the sign of the leading coefficient, 0 for 0.
func (p Poly) LeadSign() int {
	if p.IsZero() {
		return 0
	}
	return p.sign(0)
}

// Degree returns the degree in x_i, -1 for the zero polynomial.
func (p Poly) Degree(i int) int {
	if p.IsZero() {
		return -1
	}
	if i == 0 {
		return exponent(p.exps, 0)
	}
	w := wordsOf(p.n)
	at, s := fieldOf(i)
	var d uint64
	for k := at; k < len(p.exps); k += w {
		d = max(d, p.exps[k]>>s&fieldMask)
	}
	return int(d)
}

// TotalDegree returns the largest sum of the exponents of a term, -1 for 0.
func (p Poly) TotalDegree() int {
	d := -1
	for i := range p.Len() {
		s := 0
		for _, x := range p.exp(i) {
			s += int(x>>48) + int(x>>32&fieldMask) + int(x>>16&fieldMask) + int(x&fieldMask)
		}
		d = max(d, s)
	}
	return d
}

// Uses reports whether x_i occurs in p.
func (p Poly) Uses(i int) bool {
	w := wordsOf(p.n)
	at, s := fieldOf(i)
	for k := at; k < len(p.exps); k += w {
		if p.exps[k]>>s&fieldMask != 0 {
			return true
		}
	}
	return false
}

// MaxBits returns the bit length of the longest coefficient, 0 for 0.
func (p Poly) MaxBits() int {
	b := 0
	for _, c := range p.bigs {
		b = max(b, c.BitLen())
	}
	var m uint64
	for _, c := range p.words {
		m |= magnitude(c)
	}
	return max(b, bits.Len64(m))
}

// magnitude returns |c|.
func magnitude(c int64) uint64 {
	if c < 0 {
		return uint64(-c)
	}
	return uint64(c)
}

// Equal reports whether p = q.
func (p Poly) Equal(q Poly) bool { return p.Compare(q) == 0 }

// Compare is a total order of polynomials in equally many variables: it
// compares the terms from the first down, monomials before coefficients.
func (p Poly) Compare(q Poly) int {
	for i := range min(p.Len(), q.Len()) {
		if c := compareMonomials(p.exp(i), q.exp(i)); c != 0 {
			return c
		}
		if p.words != nil && q.words != nil {
			if a, b := p.words[i], q.words[i]; a != b {
				if a < b {
					return -1
				}
				return 1
			}
			continue
		}
		if c := p.coef(i).Cmp(q.coef(i)); c != 0 {
			return c
		}
	}
	switch {
	case p.Len() < q.Len():
		return -1
	case p.Len() > q.Len():
		return 1
	}
	return 0
}
