package linsys

import (
	"context"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

// particular returns the particular integral that the trial forms of the
// method of undetermined coefficients give, from the images y of any one
// solution: the part of y with the rates of the inputs. At resonance that part
// holds a solution of the homogeneous equation as well, and is freed of it: the
// constant coefficients w(L) of e^(Lt) are reduced by the generalised
// eigenvectors of L to zeros in as many components.
func (sv *solver[E]) particular(ctx context.Context, y []expr.Image[E]) ([]expr.Image[E], error) {
	k := sv.k
	out, _, err := expr.Split(ctx, k, y, func(p algebra.Poly[E]) bool { return sv.inputs.Exponent(p) > 0 })
	if err != nil {
		return nil, wrapCancel(err)
	}
	excess := zeroVec[E](k, len(y))
	resonant := false
	for _, f := range sv.inputs.Factors() {
		mult := sv.modes.Exponent(f.P)
		if mult == 0 {
			continue
		}
		resonant = true
		// Generalised eigenvectors over L = K[s]/(p).
		l := algebra.NewExtension[E](k, f.P, "z")
		lift := func(m algebra.Matrix[E]) algebra.Matrix[algebra.Poly[E]] {
			rows, cols := m.Dims()
			return algebra.MatrixFromFunc[algebra.Poly[E]](l, rows, cols, func(i, j int) algebra.Poly[E] { return l.FromBase(m.At(i, j)) })
		}
		shifted := lift(sv.a).Sub(algebra.Identity[algebra.Poly[E]](l, len(y)).Scale(l.Root()))
		power, err := shifted.Pow(ctx, mult)
		if err != nil {
			return nil, wrapCancel(err)
		}
		vectors, err := echelonKernel[algebra.Poly[E]](ctx, l, power.Above(lift(sv.constraintMatrix())))
		if err != nil {
			return nil, wrapCancel(err)
		}
		w := make([]algebra.Poly[E], len(y))
		for i := range y {
			w[i] = out[i].ConstantCoefficient(l, f.P)
		}
		for _, v := range vectors {
			p := 0
			for v[p].IsZero() {
				p++
			}
			c := w[p]
			if c.IsZero() {
				continue
			}
			for i := range w {
				x := l.Mul(c, v[i])
				w[i] = w[i].Sub(x)
				// The solution sum over L of x e^(At) has the initial value Tr x.
				excess[i] = k.Add(excess[i], l.Trace(x))
			}
		}
	}
	if !resonant {
		return out, nil
	}
	h, err := sv.images(ctx, excess, true)
	if err != nil {
		return nil, err
	}
	for i := range out {
		out[i] = out[i].Sub(h[i])
	}
	return out, nil
}
