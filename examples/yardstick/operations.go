package main

import (
	"bytes"
	"cmp"
	"context"
	"fmt"
	"io"
	"math/big"
	"path/filepath"
	"slices"
	"strings"

	"example.org/closedform/algebra"
	"example.org/closedform/linsys"
)

type (
	poly   = algebra.Poly[algebra.Rat]
	matrix = algebra.Matrix[algebra.Rat]
)

// operation runs once and returns how to describe its result, which is not part
// of the time.
type operation func() (describe func() string, err error)

// operations prepares operations from the contents of an input.
var operations = map[string]func(ctx context.Context, data []byte) (operation, error){
	"charpoly": onMatrix(func(ctx context.Context, a matrix) (func() string, error) {
		p, err := algebra.Q.CharPoly(ctx, a)
		return func() string { return describePoly(p) }, err
	}),
	"minpoly": onMatrix(func(ctx context.Context, a matrix) (func() string, error) {
		p, err := algebra.MinPoly[algebra.Rat](ctx, algebra.Q, a)
		return func() string { return describePoly(p) }, err
	}),
	"det": onMatrix(func(ctx context.Context, a matrix) (func() string, error) {
		d, err := algebra.Det[algebra.Rat](ctx, algebra.Q, a)
		return func() string { return fmt.Sprintf("bits:%d", d.Num().BitLen()) }, err
	}),
	"inv": onMatrix(func(ctx context.Context, a matrix) (func() string, error) {
		x, err := algebra.Inverse[algebra.Rat](ctx, algebra.Q, a)
		return func() string { return describeInverse(ctx, a, x) }, err
	}),
	"solve_dixon": onMatrix(func(ctx context.Context, a matrix) (func() string, error) {
		x, err := algebra.Solve[algebra.Rat](ctx, algebra.Q, a, rightSide(a))
		return func() string { return fmt.Sprintf("ok:1,denbits:%d", x.At(0, 0).Den().BitLen()) }, err
	}),
	"solve":  prepareSolve,
	"factor": onPoly(factor),
	"sqfree": onPoly(func(_ context.Context, p poly) (func() string, error) {
		f := algebra.SquareFree[algebra.Rat](algebra.Q, p)
		return func() string { return describeFactors(f) }, nil
	}),
	"roots": prepareRoots,
	"gcd":   onPair(func(p, q poly) poly { return algebra.GCD[algebra.Rat](algebra.Q, p, q) }),
	"mul":   onPair(func(p, q poly) poly { return p.Mul(q) }),
}

// operationsOn returns the operations on a kind of input.
func operationsOn(file string) []string {
	switch filepath.Ext(file) {
	case ".mat":
		return []string{"charpoly", "minpoly", "det", "inv", "solve_dixon", "solve"}
	case ".poly":
		return []string{"factor", "sqfree", "roots"}
	case ".pair":
		if strings.HasPrefix(filepath.Base(file), "mul") {
			return []string{"mul"}
		}
		return []string{"gcd"}
	}
	return nil
}

func onMatrix(f func(ctx context.Context, a matrix) (func() string, error)) func(context.Context, []byte) (operation, error) {
	return func(ctx context.Context, data []byte) (operation, error) {
		a, err := readMatrix(data)
		return func() (func() string, error) { return f(ctx, a) }, err
	}
}

func onPoly(f func(ctx context.Context, p poly) (func() string, error)) func(context.Context, []byte) (operation, error) {
	return func(ctx context.Context, data []byte) (operation, error) {
		p, err := readPoly(bytes.NewReader(data))
		return func() (func() string, error) { return f(ctx, p) }, err
	}
}

func onPair(f func(p, q poly) poly) func(context.Context, []byte) (operation, error) {
	return func(_ context.Context, data []byte) (operation, error) {
		r := bytes.NewReader(data)
		p, err := readPoly(r)
		if err != nil {
			return nil, err
		}
		q, err := readPoly(r)
		return func() (func() string, error) {
			g := f(p, q)
			return func() string { return describePoly(g) }, nil
		}, err
	}
}

func factor(ctx context.Context, p poly) (func() string, error) {
	f, err := algebra.Q.FactorPoly(ctx, p)
	return func() string { return describeFactors(f) }, err
}

// prepareRoots isolates the roots of the square-free parts, which are found
// before.
func prepareRoots(ctx context.Context, data []byte) (operation, error) {
	p, err := readPoly(bytes.NewReader(data))
	if err != nil {
		return nil, err
	}
	parts := algebra.SquareFree[algebra.Rat](algebra.Q, p)
	return func() (func() string, error) {
		total, real := 0, 0
		for _, f := range parts {
			roots, err := algebra.Q.Roots(ctx, f.P)
			if err != nil {
				return nil, err
			}
			for i := range roots.Len() {
				if _, err := roots.Enclose(ctx, i, 64); err != nil {
					return nil, err
				}
			}
			total += roots.Len()
			real += roots.NumReal()
		}
		return func() string { return fmt.Sprintf("roots:%d,real:%d", total, real) }, nil
	}, nil
}

// prepareSolve sets up the whole job.
func prepareSolve(ctx context.Context, data []byte) (operation, error) {
	a, err := readMatrix(data)
	if err != nil {
		return nil, err
	}
	n, _ := a.Dims()
	rows := make([][]*big.Rat, n)
	ones := make([]*big.Rat, n)
	for i := range rows {
		ones[i] = big.NewRat(1, 1)
		for _, x := range a.Row(i) {
			rows[i] = append(rows[i], x.Big())
		}
	}
	model, err := linsys.FromMatrix(nil, rows, nil, ones)
	if err != nil {
		return nil, err
	}
	times := make([]*big.Rat, 10)
	for i := range times {
		times[i] = big.NewRat(int64(i+1), 10)
	}
	return func() (func() string, error) {
		response, err := model.ClosedForm(ctx)
		if err != nil {
			return nil, err
		}
		if !response.Proof().Holds() {
			return nil, fmt.Errorf("unproven: %s", response.Proof().Residual())
		}
		for _, t := range times {
			if _, err := response.At(ctx, t, 17); err != nil {
				return nil, err
			}
		}
		return func() string {
			degrees, real := 0, 0
			for _, m := range response.Modes() {
				degrees += m.Multiplicity * m.Degree
				for _, z := range m.Roots {
					if z.IsReal() {
						real++
					}
				}
			}
			return fmt.Sprintf("deg:%d,factors:%d,real:%d,proven:1", degrees, len(response.Modes()), real)
		}, nil
	}, nil
}

func rightSide(a matrix) matrix {
	n, _ := a.Dims()
	return algebra.MatrixFromFunc[algebra.Rat](algebra.Q, n, 1, func(i, _ int) algebra.Rat {
		return algebra.RatFromInt(int64(7*i%19 - 9))
	})
}

// describePoly gives the degree and the bits of the largest coefficient of the
// primitive integer multiple of p.
func describePoly(p poly) string {
	scale := big.NewInt(1)
	var g big.Int
	for _, c := range p.Coefs() {
		d := c.Den()
		g.GCD(nil, nil, scale, d)
		scale.Mul(scale, d.Quo(d, &g))
	}
	bits := 0
	for _, c := range p.Coefs() {
		bits = max(bits, c.Mul(algebra.RatFromBigInt(scale)).Num().BitLen())
	}
	return fmt.Sprintf("deg:%d,bits:%d", p.Degree(), bits)
}

// describeFactors lists degree^multiplicity, by multiplicity and then degree.
func describeFactors(factors []algebra.Factor[algebra.Rat]) string {
	sorted := slices.Clone(factors)
	slices.SortStableFunc(sorted, func(x, y algebra.Factor[algebra.Rat]) int {
		return cmp.Or(cmp.Compare(x.Mult, y.Mult), cmp.Compare(x.P.Degree(), y.P.Degree()))
	})
	s := make([]string, len(sorted))
	for i, f := range sorted {
		s[i] = fmt.Sprintf("%d^%d", f.P.Degree(), f.Mult)
	}
	return fmt.Sprintf("factors:%d:%s", len(factors), strings.Join(s, ","))
}

// adjugateMost is the size up to which the reference describes an inverse as
// adjugate over determinant, and beyond which in lowest terms.
const adjugateMost = 12

// describeInverse gives the bits of the denominator of the inverse x of a, and
// of the largest numerator over it.
func describeInverse(ctx context.Context, a, x matrix) string {
	m, n := x.Dims()
	den := big.NewInt(1)
	if n <= adjugateMost {
		d, err := algebra.Det[algebra.Rat](ctx, algebra.Q, a)
		if err != nil {
			return err.Error()
		}
		den = d.Num()
	} else {
		var g big.Int
		for i := range m {
			for j := range n {
				d := x.At(i, j).Den()
				g.GCD(nil, nil, den, d)
				den.Mul(den, d.Quo(d, &g))
			}
		}
	}
	bits := 0
	for i := range m {
		for j := range n {
			bits = max(bits, x.At(i, j).Mul(algebra.RatFromBigInt(den)).Num().BitLen())
		}
	}
	return fmt.Sprintf("ok:1,denbits:%d,bits:%d", den.BitLen(), bits)
}

func readMatrix(data []byte) (matrix, error) {
	r := bytes.NewReader(data)
	var m, n int
	if _, err := fmt.Fscan(r, &m, &n); err != nil {
		return matrix{}, err
	}
	if m < 0 || n < 0 || m > 1000 || n > 1000 {
		return matrix{}, fmt.Errorf("a %d x %d matrix", m, n)
	}
	entries := make([]algebra.Rat, m*n)
	for i := range entries {
		x, err := readInt(r)
		if err != nil {
			return matrix{}, err
		}
		entries[i] = x
	}
	return algebra.NewMatrix[algebra.Rat](algebra.Q, m, n, entries...), nil
}

func readPoly(r io.Reader) (poly, error) {
	var d int
	if _, err := fmt.Fscan(r, &d); err != nil {
		return poly{}, err
	}
	if d < 0 || d > 100_000 {
		return poly{}, fmt.Errorf("a polynomial of degree %d", d)
	}
	c := make([]algebra.Rat, d+1)
	for i := range c {
		x, err := readInt(r)
		if err != nil {
			return poly{}, err
		}
		c[i] = x
	}
	return algebra.NewPoly[algebra.Rat](algebra.Q, c...), nil
}

func readInt(r io.Reader) (algebra.Rat, error) {
	var s string
	if _, err := fmt.Fscan(r, &s); err != nil {
		return algebra.Rat{}, err
	}
	x, err := algebra.ParseRat(s)
	if err != nil || !x.IsInt() {
		return algebra.Rat{}, fmt.Errorf("%q is not an integer", s)
	}
	return x, nil
}
