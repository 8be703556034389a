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
			re, im, err := roots.Decimals(ctx, x, digits)
			if err != nil {
				return nil, err
			}
			eigenvalues = append(eigenvalues, object{{"exact", x.String()}, {"re", re}, {"im", im}})
		}
		out = append(out, object{{"factor", m.Factor.String()}, {"multiplicity", m.Multiplicity}, {"roots", eigenvalues}})
	}
	return out, nil
}
