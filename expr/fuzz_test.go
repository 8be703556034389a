package expr_test

import (
	"context"
	"errors"
	"math/big"
	"strconv"
	"strings"
	"testing"
	"time"

	"example.org/closedform/expr"
)

var fuzzSeeds = []string{
	"", "0", "-1/2", "2x", "a/2x", "1.5e-3", "x''(1/2)", "x‴ − α·β² ÷ 3", "sin^2(t)", "2^3^-2", "--+-a", "(a)(b)c",
	"sumroots(z, z^3 - z - 1, exp(z*t)/(3*z^2-1))", "t^2*exp(-3*t)*cos(2t) + sinh(t)^2", "1/t", "exp(t^2)", "0^0", "sqrt(4/9)*t",
	"exp(t)^(-9223372036854775808)", "1e4611686018427387904", "\\input{x}", "<script>", "a\r\nb\u2028c", "x\u0301₁", "\ufeff# c\n1",
	"sumroots(z, z^2 + 2*z, (z+1)*t*exp(z*t))", "sumroots(z, (z^3 - 2)*(z+1), z*exp(z*t)/(z^2+5))", "1/2/3*t", "(1+t+exp(t))^7", "((1))", "4^(1/2)",
}

// small keeps the machine out of the search: what takes long is of no interest.
var small = expr.Limits{Nesting: 40, Text: 300, Terms: 60, Degree: 14, Bits: 300}

// FuzzParse reads any text: there is a tree whose text reads back to the same
// text and which every notation can write, or a typed error with a place.
func FuzzParse(f *testing.F) {
	for _, src := range fuzzSeeds {
		f.Add(src)
	}
	f.Fuzz(func(t *testing.T, src string) {
		start := time.Now()
		_, _ = expr.ParseModel(src, small)
		n, err := expr.Parse(src, small)
		if err != nil {
			var e *expr.Error
			if !errors.As(err, &e) || !e.Pos.IsValid() || len(e.Error()) > 1000 {
				t.Fatalf("error %v", err)
			}
			return
		}
		text := n.String()
		back, err := expr.Parse(text, expr.Limits{})
		if err != nil {
			t.Fatalf("%q is written %q: %v", src, text, err)
		}
		if back.String() != text {
			t.Fatalf("%q is written %q, then %q", src, text, back)
		}
		requireBalanced(t, expr.LaTeX(n))
		mathmlText(t, expr.MathML(n))
		if d := time.Since(start); d > 5*time.Second {
			t.Fatalf("%q takes %v", src, d)
		}
	})
}

// FuzzFunction takes text to a function: its text is the same function, and its
// value agrees with that of an enclosure.
func FuzzFunction(f *testing.F) {
	for _, src := range fuzzSeeds {
		f.Add(src)
	}
	f.Fuzz(func(t *testing.T, src string) {
		start := time.Now()
		var e *expr.Error
		g, err := expr.ParseFunction(src, small)
		if err != nil {
			if !errors.As(err, &e) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		text := g.String()
		back, err := expr.ParseFunction(text, expr.Limits{})
		if err != nil {
			t.Fatalf("%q is written %q: %v", src, text, err)
		}
		if !back.Equal(g) || back.String() != text {
			t.Fatalf("%q is written %q, then %q", src, text, back)
		}
		if !g.Integral().Derivative().Equal(g) {
			t.Fatalf("%q: the derivative of the integral is another function", src)
		}
		values := map[string]*big.Rat{}
		for i, name := range g.Parameters() {
			values[name] = big.NewRat(int64(2*i+1), 3)
		}
		if g, err = g.With(values); err != nil {
			if !errors.As(err, &e) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		ctx, cancel := context.WithTimeout(context.Background(), 20*time.Second)
		defer cancel()
		for _, x := range []*big.Rat{new(big.Rat), big.NewRat(1, 2), big.NewRat(-3, 1)} {
			s, err := g.At(ctx, x, 15)
			if errors.As(err, &e) && e.Kind == expr.LimitExceeded {
				continue
			}
			if err != nil {
				t.Fatalf("%q at %v: %v", src, x, err)
			}
			if exponent(s) > 1000 {
				continue // too long for a rational
			}
			v, ok := new(big.Rat).SetString(s)
			if !ok {
				t.Fatalf("%q at %v is %q", src, x, s)
			}
			b, err := g.Enclose(ctx, x, 200)
			if err != nil {
				t.Fatalf("%q at %v: %v", src, x, err)
			}
			lo, hi := b.Interval()
			v64, _ := v.Float64()
			l64, _ := lo.Float64()
			h64, _ := hi.Float64()
			if slack := 1e-13 * (abs64(v64) + abs64(h64-l64)); v64 < l64-slack || v64 > h64+slack {
				t.Fatalf("%q at %v is %s, outside [%g, %g]", src, x, s, l64, h64)
			}
		}
		if d := time.Since(start); d > 10*time.Second {
			t.Fatalf("%q takes %v", src, d)
		}
	})
}

// exponent returns the size of the power of ten in a decimal number.
func exponent(s string) int {
	_, e, _ := strings.Cut(s, "e")
	n, err := strconv.Atoi(e)
	if e != "" && err != nil {
		return 1 << 30
	}
	return max(n, -n)
}

func abs64(x float64) float64 { return max(x, -x) }
