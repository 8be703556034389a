package main

import (
	"context"

	"example.org/closedform/examples/internal/roots"
	"example.org/closedform/linsys"
)

// modes returns the factors of the characteristic polynomial with their roots.
func modes(ctx context.Context, list []linsys.Mode, digits int) ([]object, error) {
	out := []object{}
	for _, m := range list {
		eigenvalues := []object{}
		for _, x := range m.Roots {
			o := object{{"exact", x.String()}}
			if x.IsNumber() {
				re, im, err := roots.Decimals(ctx, x, digits)
				if err != nil {
					return nil, err
				}
				o.add("re", re)
				o.add("im", im)
			}
			eigenvalues = append(eigenvalues, o)
		}
		out = append(out, object{{"factor", m.Factor.String()}, {"multiplicity", m.Multiplicity}, {"roots", eigenvalues}})
	}
	return out, nil
}
