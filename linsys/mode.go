package linsys

import (
	"context"
	"fmt"
	"slices"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// modes returns the modes with their roots where these are numbers.
func (a *answerOver[E]) modes(ctx context.Context, states []string) ([]Mode, error) {
	var out []Mode
	constants, _ := any(a.k).(*expr.Constants)
	s := expr.Sym(constants.FreeName("s", "z"))
	units := slices.DeleteFunc([]string{"i", "j", "iota"}, func(name string) bool { return slices.Contains(states, name) })
	unit := expr.Sym(constants.FreeName(append(units, "imaginary")...))
	for i, f := range a.solution.modes.Factors() {
		mode := Mode{Factor: expr.PolyNodeOf(a.k, f.P, s), Degree: f.P.Degree(), Multiplicity: f.Mult}
		symbolic := false
		if c, ok := any(a.k).(*expr.Constants); ok {
			for j := range f.P.Degree() + 1 {
				symbolic = symbolic || !c.IsNumber(any(f.P.Coef(j)).(expr.Constant))
			}
		}
		var roots *algebra.RootSet
		if !symbolic {
			var err error
			if roots, err = a.solution.modes.Roots(ctx, i); err != nil {
				return nil, wrapCancel(err)
			}
		}
		// Texts are made when they are asked for.
		var numbers []algebra.Algebraic
		if p, ok := any(f.P).(algebra.Poly[algebra.Rat]); ok {
			numbers = algebra.RootsIn(p, roots)
		}
		for j := range f.P.Degree() {
			r := Eigenvalue{roots: roots, index: j}
			switch {
			case numbers != nil:
				r.number = &numbers[j]
				r.text = numbers[j].String
			case f.P.Degree() <= 2:
				r.text = func() string { return expr.RootNodes(a.k, f.P, unit)[j].String() }
			default:
				r.text = func() string { return fmt.Sprintf("root(%d, %s)", j+1, mode.Factor) }
			}
			if numbers == nil && !symbolic {
				var err error
				if r.imaginary, err = algebra.IsImaginary(ctx, a.k, f.P, roots, j); err != nil {
					return nil, wrapCancel(err)
				}
			}
			mode.Roots = append(mode.Roots, r)
		}
		out = append(out, mode)
	}
	return out, nil
}

// Mode is an irreducible factor of the characteristic polynomial of a model.
type Mode struct {
	Factor       expr.Node // in s, or z if s is a symbol; monic, irreducible over the field of the model's numbers
	Degree       int
	Multiplicity int
	Roots        []Eigenvalue // the roots: real ones ascending, then conjugate pairs, where they are numbers
}

// Eigenvalue is a root of the factor of a mode.
type Eigenvalue struct {
	text      func() string
	roots     *algebra.RootSet
	index     int
	number    *algebra.Algebraic
	imaginary bool // the real part is exactly 0
}

// String writes the eigenvalue exactly: in radicals where its factor has degree
// 1 or 2, as root(k, p), the k-th root of p, otherwise.
func (e Eigenvalue) String() string { return e.text() }

// IsNumber tells whether the eigenvalue is free of symbols.
func (e Eigenvalue) IsNumber() bool { return e.roots != nil }

// IsReal tells whether the eigenvalue is known to be real.
func (e Eigenvalue) IsReal() bool { return e.roots != nil && e.index < e.roots.NumReal() }

// Algebraic returns the eigenvalue as an algebraic number, where its factor has
// rational coefficients.
func (e Eigenvalue) Algebraic() (algebra.Algebraic, bool) {
	if e.number == nil {
		return algebra.Algebraic{}, false
	}
	return *e.number, true
}

// Enclose returns a ball around the eigenvalue with about prec proven bits. It
// fails where the eigenvalue holds symbols.
func (e Eigenvalue) Enclose(ctx context.Context, prec uint) (algebra.ComplexBall, error) {
	switch {
	case e.number != nil:
		z, err := e.number.Enclose(ctx, prec)
		return z, wrapCancel(err)
	case e.roots == nil:
		return algebra.ComplexBall{}, expr.Errorf(expr.NeedsAssumption, expr.Pos{}, "the eigenvalue %s holds symbols", e)
	}
	z, err := e.roots.Enclose(ctx, e.index, prec)
	if e.imaginary {
		z.Re = algebra.Ball{}
	}
	return z, wrapCancel(err)
}
