package algebra

import "context"

// IsImaginary tells whether the real part of the j-th root z of an irreducible p over
// a real field is 0. Then p is even or odd, for it divides p(-s); with -z also
// -conj(z) is a root, and it is z where the balls of no other roots meet it.
func IsImaginary[E any](ctx context.Context, k Scalars[E], p Poly[E], roots *RootSet, j int) (bool, error) {
	for i := p.Degree() - 1; i >= 0; i -= 2 {
		if !k.IsZero(p.Coef(i)) {
			return false, nil
		}
	}
	for prec := uint(64); ; prec *= 2 {
		z, err := roots.Enclose(ctx, j, prec)
		if err != nil {
			return false, err
		}
		mirror := z.Conj().Neg()
		met, last := 0, 0
		for i := range roots.Len() {
			y, err := roots.Enclose(ctx, i, prec)
			if err != nil {
				return false, err
			}
			if y.Overlaps(mirror) {
				met, last = met+1, i
			}
		}
		if met == 1 {
			return last == j, nil
		}
	}
}
