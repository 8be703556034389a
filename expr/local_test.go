package expr

import (
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
)

// The local parts put together again are the function: c(L) t^k e^(Lt) summed
// over the roots has the image (-d/ds)^k (c p' mod p)/p.
func TestLocalPartsAddUp(t *testing.T) {
	for _, src := range []string{
		"1", "t^4", "exp(t)", "t^3*exp(-t/2) + 2*exp(-t/2) - t", "t^2*cos(3*t) + t*exp(-t)*sin(t) + sinh(t)",
		"sumroots(z, z^3 - z - 1, (t^2*z - 1/3)*exp(z*t)/(z^2 + 2)) + t",
		"sumroots(z, z^4 + z + 1, t*exp(z*t))", "t^5 + t^5*exp(t) + t^5*cos(t)",
	} {
		f, err := ParseFunction(src, Limits{})
		require.NoError(t, err, src)
		sum := ZeroImage[algebra.Rat](algebra.Q)
		for i, pp := range f.x.(*overField[algebra.Rat]).base.den {
			part := f.x.(*overField[algebra.Rat]).base.local(i)
			require.Len(t, part.c, pp.e)
			l := algebra.NewExtension[algebra.Rat](algebra.Q, pp.p, "z")
			den := NewDenominator[algebra.Rat](algebra.Q, []algebra.Factor[algebra.Rat]{{P: pp.p, Mult: 1}})
			for k, c := range part.c {
				g := den.Image(l.Mul(c, l.Reduce(pp.p.Derivative())))
				for range k {
					g = g.TimesT()
				}
				sum = sum.Add(g)
			}
			if pp.e == 1 {
				num, d := f.x.(*overField[algebra.Rat]).base.residueRatio(i)
				require.True(t, l.Mul(part.c[0], d).Equal(num), "the residue is N/D'")
			}
			require.True(t, f.x.(*overField[algebra.Rat]).base.ConstantCoefficient(l, pp.p).Equal(part.c[0]))
		}
		require.True(t, sum.Equal(f.x.(*overField[algebra.Rat]).base), src)
	}
	f, err := ParseFunction("exp(t)", Limits{})
	require.NoError(t, err)
	p := algebra.PolyFromInts(2, 1)
	l := algebra.NewExtension[algebra.Rat](algebra.Q, p, "z")
	require.True(t, f.x.(*overField[algebra.Rat]).base.ConstantCoefficient(l, p).IsZero(), "a rate that does not occur")
}
