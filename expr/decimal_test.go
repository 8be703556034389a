package expr_test

import (
	"context"
	"math/big"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

func TestDecimal(t *testing.T) {
	for _, c := range []struct{ src, want, amplitude string }{
		{"0", "0", "0"},
		{"3*exp(-2*t) + 1/3", "0.33333 + 3*exp(-2*t)", ""},
		{"exp(-t/4)*t^2/8 - t", "-t + 0.125*t^2*exp(-0.25*t)", ""},
		{"cos(sqrt(2)*t) + sin(sqrt(2)*t)", "cos(1.4142*t) + 1.0000*sin(1.4142*t)", "1.4142*cos(1.4142*t - 0.78540)"},
		{"exp(-t)*(3*cos(2*t) - 4*sin(2*t))", "exp(-t)*(3*cos(2*t) - 4*sin(2*t))", "5.0000*exp(-t)*cos(2*t + 0.92730)"},
		{"pi*sin(pi*t)", "3.1416*sin(3.1416*t)", ""},
		{"1e-9*exp(-1e12*t)", "1e-9*exp(-1000000000000*t)", ""},
		// Sums over roots become terms like the others; the coefficients 1/5 of the
		// roots of unity are real.
		{"sumroots(z, z^3 - z - 1, exp(z*t)/(3*z^2 - 1))", "0.23449*exp(1.3247*t) - exp(-0.66236*t)*(0.23449*cos(0.56228*t) + 0.82867*sin(0.56228*t))", ""},
		{"sumroots(z, z^4 + z^3 + z^2 + z + 1, exp(z*t))", "2*exp(0.30902*t)*cos(0.95106*t) + 2*exp(-0.80902*t)*cos(0.58779*t)", ""},
		{"sumroots(z, z^4 + 4*z^2 + 2, z*exp(z*t))", "-1.5307*sin(0.76537*t) - 3.6955*sin(1.8478*t)", ""},
	} {
		f := function(t, c.src)
		n, err := f.Write(context.Background(), expr.Form{Numbers: expr.DecimalNumbers, Digits: 5})
		require.NoError(t, err)
		assert.Equal(t, c.want, n.String(), c.src)
		back, err := expr.FunctionOf(n, "t", expr.Limits{})
		require.NoError(t, err)
		reread, err := expr.ParseFunction(n.String(), expr.Limits{})
		require.NoError(t, err)
		assert.True(t, back.Equal(reread), "%s", n)
		if c.amplitude != "" {
			n, err := f.Write(context.Background(), expr.Form{Numbers: expr.DecimalNumbers, Digits: 5, Amplitude: true})
			require.NoError(t, err)
			assert.Equal(t, c.amplitude, n.String(), c.src)
		}
		mathmlText(t, expr.MathML(n))
		requireBalanced(t, expr.LaTeX(n))
	}
}

// The formula in many digits has the values of the function.
func TestDecimalValues(t *testing.T) {
	for _, src := range []string{
		"t^3*exp(-t/7)*sin(3*t) - cos(t/3)/9", "sumroots(z, z^5 - 3*z + 1, (z + 2)*exp(z*t)/(z^2 + 5))",
		"sqrt(3)*exp(-pi*t)*cos(sqrt(5)*t) + exp(-2)*sin(t + 1)", "sumroots(z, z^4 + 10*z^2 + 1, (z^3 + 1)*exp(z*t))",
	} {
		f := function(t, src)
		for _, form := range []expr.Form{{Numbers: expr.DecimalNumbers, Digits: 40}, {Numbers: expr.DecimalNumbers, Digits: 40, Amplitude: true}} {
			n, err := f.Write(context.Background(), form)
			require.NoError(t, err)
			g, err := expr.FunctionOf(n, "t", expr.Limits{})
			require.NoError(t, err)
			for _, x := range []*big.Rat{big.NewRat(1, 3), big.NewRat(2, 1)} {
				want, err := f.At(context.Background(), x, 30)
				require.NoError(t, err)
				got, err := g.At(context.Background(), x, 30)
				require.NoError(t, err)
				assert.Equal(t, want, got, "%s at %v, written %s", src, x, n)
			}
		}
	}
}

func TestDecimalErrors(t *testing.T) {
	f := function(t, "k*exp(-t)")
	_, err := f.Write(context.Background(), expr.Form{Numbers: expr.DecimalNumbers})
	assert.Equal(t, expr.NeedsAssumption, faultOf(t, err).kind)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err = function(t, "sumroots(z, z^5 - z - 1, exp(z*t))").Write(ctx, expr.Form{Numbers: expr.DecimalNumbers})
	assert.Equal(t, expr.Cancelled, faultOf(t, err).kind)
	_, err = function(t, "exp(-t/3)").Write(context.Background(), expr.Form{Numbers: expr.DecimalNumbers, Digits: 1 << 30})
	assert.Equal(t, expr.LimitExceeded, faultOf(t, err).kind)
	assert.Equal(t, `1.2 \cdot 10^{-7}`, expr.LaTeX(expr.Decimal{Text: "1.2e-7"}))
	assert.True(t, strings.Contains(expr.MathML(expr.Decimal{Text: "1.2e-7"}), "<mn>−7</mn>"))
}

// A phase that is exactly 0 or a quarter turn is no phase.
func TestDecimalOfOneOscillation(t *testing.T) {
	for src, want := range map[string]string{"exp(-t)*sin(2*t)/2": "0.5*exp(-t)*sin(2*t)", "exp(-t)*cos(2*t)/2": "0.5*exp(-t)*cos(2*t)"} {
		n, err := function(t, src).Write(context.Background(), expr.Form{Numbers: expr.DecimalNumbers, Amplitude: true})
		require.NoError(t, err)
		assert.Equal(t, want, n.String())
	}
}
