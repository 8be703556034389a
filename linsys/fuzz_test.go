package linsys_test

import (
	"context"
	"errors"
	"math/big"
	"testing"
	"time"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// FuzzResponse takes model text to its response and proof: whatever the text,
// there is a proven response or a typed error.
func FuzzResponse(f *testing.F) {
	for _, src := range []string{
		"x' = -3*x + y; y' = x - 3*y + sin(t); x(0) = 1; y(0) = 0",
		"k = 0.35\nx'' + k*x' + 2x = t exp(-t)",
		"2*x'' + y'' = -2*x; x'' + y'' = -y; x(0) = 1; y(0) = 0; x'(0) = 0; y'(0) = 0",
		"x' + y' = 1; x' + y' = x; y(0) = 2",
		"y''' = 2*y + cos(t)^3",
		"x' = x^2", "x' = 1/t", "x(1) = 2; x' = t", "x'' + x = sin(t)*cosh(2t)", "",
	} {
		f.Add(src)
	}
	limits := expr.Limits{Nesting: 50, Text: 400, Terms: 60, Degree: 12, Bits: 400, States: 6}
	f.Fuzz(func(t *testing.T, src string) {
		ctx, cancel := context.WithTimeout(context.Background(), 20*time.Second)
		defer cancel()
		var e *linsys.Error
		m, err := linsys.ReadWith(src, limits)
		if err != nil {
			if !errors.As(err, &e) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		r, err := m.ClosedForm(ctx)
		if err != nil {
			if !errors.As(err, &e) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		if !r.Proof().Holds() {
			t.Fatalf("unproven: %v", r.Proof())
		}
		again, err := linsys.Read(m.String())
		if err != nil {
			t.Fatalf("the model's own text %q: %v", m, err)
		}
		if again.String() != m.String() {
			t.Fatalf("the model's text %q reads back as %q", m, again)
		}
		if len(r.Constants()) == 0 {
			for _, s := range r.States() {
				if _, err := r.State(s).At(ctx, big.NewRat(1, 2), 20); err != nil && !errors.As(err, &e) {
					t.Fatalf("value of %s: %v", s, err)
				}
			}
		}
	})
}
