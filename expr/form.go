package expr

import (
	"context"
	"errors"
)

// Form says how [Function.Write] writes a function. The zero value is the exact form
// that String writes.
type Form struct {
	Numbers Numbers
	Digits  int // significant digits of decimals; default 6
	// Amplitude writes +-R e^(at) cos(bt - phi), |phi| < pi/2, in place of a cosine
	// and a sine. Exact forms leave terms with powers of the time, sums over roots, those
	// where symbols leave the sign of a coefficient open, and those where R would be
	// a root in a root.
	Amplitude bool
	// SteadyLast puts the terms that decay before those that do not.
	SteadyLast bool
}

// Numbers says which numbers are written as decimals.
type Numbers int

const (
	// ExactNumbers writes all numbers exactly.
	ExactNumbers Numbers = iota
	// DecimalNumbers writes decimals; numbers that they hold exactly have no zeros at
	// their end: 3, 0.25.
	DecimalNumbers
	// MixedNumbers writes a number exactly where that takes little effort to read,
	// and as a rounded decimal otherwise; where one is rounded, roots and cosines are
	// rounded too, and short fractions stay. Sums over named roots become
	// oscillations and exponentials in decimals. Every [Decimal] of the tree is
	// rounded, everything else is exact.
	MixedNumbers
)

// mostExactEffort is the effort up to which a mixed form writes numbers exactly, such as
// (13 - 3 sqrt(13))/13.
const mostExactEffort = 12

// Write returns f as a tree in the given form. Every digit of a decimal is proven, the
// last one rounded to nearest. Numbers that are 0 do not appear. Slowly decaying
// terms come first.
//
// For decimals all symbols must have values; free constants may stay. With wide
// limits on the search, an error of kind LimitExceeded says that a part of a
// coefficient could not be told from 0. A mixed form keeps what no decimal is found
// for: symbols, and sums over roots with symbols.
func (f Function) Write(ctx context.Context, form Form) (n Node, err error) {
	defer catchLimit(&err)
	if form.Digits < 1 {
		form.Digits = 6
	}
	if form.Digits > mostDigits {
		return nil, Errorf(LimitExceeded, Pos{}, "%d digits, at most %d are given", form.Digits, mostDigits)
	}
	names := f.Parameters()
	switch {
	case form.Numbers == DecimalNumbers && len(names) > 0:
		return nil, Errorf(NeedsAssumption, Pos{}, "the symbol %s has no value", names[0])
	case form.Numbers == DecimalNumbers:
		n, err = f.over().decimal(ctx, f.variable, form)
	default:
		n, err = f.over().written(ctx, f.variable, form)
	}
	return n, wrapCancel(err)
}

// Node returns f as a tree in the exact form: the polynomial part, exponentials, and
// damped sines and cosines with their coefficients in radicals; where a factor of
// the denominator has degree 3 or more also in cosines of fractions of pi, and where
// neither exists or reads well, sums over named roots. In place of a form that is
// beyond the limits on terms there is a symbol that says so, which does not read
// back.
func (f Function) Node() Node {
	n, err := f.Write(context.Background(), Form{})
	if err != nil {
		var e *Error
		if !errors.As(err, &e) || e.Kind != LimitExceeded {
			panic(err) // exact forms have no other errors
		}
		// No name that anything reads.
		return Sym("(too long to be written: " + e.Message + ")")
	}
	return n
}

// String writes f in the text form.
func (f Function) String() string { return f.Node().String() }

// LaTeX writes f as LaTeX for mathematics mode.
func (f Function) LaTeX() string { return LaTeX(f.Node()) }

// written returns f in an exact or mixed form.
func (f *overField[E]) written(ctx context.Context, variable string, form Form) (Node, error) {
	w := presenter[E]{k: f.k, style: styleOf(f.k), variable: Sym(variable), origin: f.origin, form: form}
	w.time = w.timeNode()
	var failed error
	var terms []Node
	// The free constants first, the base last.
	for i, m := range append(f.images()[1:], f.base) {
		if form.Numbers == MixedNumbers && len(f.parameters()) == 0 {
			d := f.decimals(ctx, variable, form)
			w.numeric = func(p int) Node {
				n, err := d.image((i+1)%(len(f.free)+1), p)
				failed = errors.Join(failed, err)
				return n
			}
		}
		n := w.image(m)
		if i < len(f.free) {
			n = timesName(Sym(f.free[i].Name), n)
		}
		terms = append(terms, n)
	}
	var limit *Error
	if failed != nil && (!errors.As(failed, &limit) || limit.Kind != LimitExceeded) {
		return nil, failed
	}
	n := Add(terms...)
	if form.Numbers == MixedNumbers {
		n = mixed(n, form.Digits)
	}
	return n, ctx.Err()
}

// timesName returns a name times a tree, as one quotient.
func timesName(name, n Node) Node {
	if q, ok := n.(Quotient); ok {
		return Div(Mul(name, q.Num), q.Den)
	}
	return Mul(name, n)
}
