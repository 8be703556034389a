package expr

import (
	"context"
	"errors"
	"math/big"
	"slices"
	"sync"

	"example.org/closedform/algebra"
)

// Bundle is several functions of one time that are evaluated together, so that
// the exponentials, sines and cosines they share are computed once. Bundles are
// immutable; methods may be called concurrently.
type Bundle struct {
	fs []Function
	at func(ctx context.Context, t *big.Rat, digits int) ([]string, error)
}

// NewBundle returns the bundle of the functions. It panics when their variables,
// origins or fields differ.
func NewBundle(fs ...Function) *Bundle {
	b := &Bundle{fs: append([]Function(nil), fs...)}
	if len(fs) == 0 {
		b.at = func(context.Context, *big.Rat, int) ([]string, error) { return nil, nil }
		return b
	}
	if fs[0].over().field() == nil {
		b.at = bundled[algebra.Rat](fs)
	} else {
		b.at = bundled[Constant](fs)
	}
	return b
}

func bundled[E any](fs []Function) func(context.Context, *big.Rat, int) ([]string, error) {
	var images []Image[E]
	first := fs[0].over().(*overField[E])
	for _, f := range fs {
		x, ok := f.over().(*overField[E])
		if !ok || f.variable != fs[0].variable || !first.sameOrigin(x) {
			panic("expr: bundle of functions in different times or over different fields")
		}
		images = append(images, x.base)
	}
	cache := &expansions[E]{}
	return func(ctx context.Context, t *big.Rat, digits int) ([]string, error) {
		return cache.digits(ctx, first.k, images, first.since(t), digits)
	}
}

// since returns t - t0.
func (f *overField[E]) since(t *big.Rat) E {
	return f.k.Sub(f.k.FromRat(algebra.RatFromBig(t)), f.origin)
}

// At returns the values of all functions at t as [Function.At] does.
func (b *Bundle) At(ctx context.Context, t *big.Rat, digits int) ([]string, error) {
	if t == nil {
		return nil, errNoTime
	}
	for _, f := range b.fs {
		if err := f.closed(); err != nil {
			return nil, err
		}
	}
	return b.at(ctx, t, digits)
}

// expansions keeps the expansions of some images by their precision, of which
// few occur: each is twice another.
type expansions[E any] struct {
	mu     sync.Mutex
	byPrec map[uint]*shared[*expansion]
}

func (c *expansions[E]) get(ctx context.Context, k algebra.Scalars[E], images []Image[E], prec uint) (*expansion, error) {
	c.mu.Lock()
	x, ok := c.byPrec[prec]
	if !ok {
		if c.byPrec == nil {
			c.byPrec = map[uint]*shared[*expansion]{}
		}
		x = &shared[*expansion]{}
		c.byPrec[prec] = x
	}
	c.mu.Unlock()
	return x.get(ctx, func(ctx context.Context) (*expansion, error) {
		return expand(ctx, k, images, prec)
	})
}

// errNoTime is the error of a time that is nil.
var errNoTime = Errorf(Syntax, Pos{}, "there is no time to evaluate at")

// mostPrecision is the working precision in bits where the search for digits
// gives up, and mostDigits the digits it has room for.
const (
	mostPrecision = 1 << 17
	mostDigits    = 30_000
)

// digits returns the values of the images at tau to so many significant digits,
// raising the precision until every one is certain.
func (c *expansions[E]) digits(ctx context.Context, k algebra.Scalars[E], images []Image[E], tau E, digits int) ([]string, error) {
	digits = max(digits, 1)
	if digits > mostDigits {
		return nil, Errorf(LimitExceeded, Pos{}, "%d digits, at most %d are given", digits, mostDigits)
	}
	out := make([]string, len(images))
	for i, f := range images {
		if f.IsZero() {
			out[i] = "0"
		}
	}
	least := (uint(digits)*10/3 + 127) &^ 63
	for prec := least; ; prec *= 2 {
		if prec > mostPrecision {
			return nil, Errorf(LimitExceeded, Pos{}, "the values at %s after the origin need more than %d bits of working precision", Quote(k.Text(tau)), mostPrecision)
		}
		if prec > least || k.IsZero(tau) {
			// Only a rational value can defy every precision: 0, or a number midway
			// between two decimals.
			for i, f := range images {
				if out[i] != "" || prec > 2*least {
					continue
				}
				if x, ok := rationalAt(ctx, f, tau); ok {
					out[i] = algebra.RatDecimal(x.Big(), digits)
				}
			}
		}
		if !slices.Contains(out, "") {
			return out, nil
		}
		balls, err := c.balls(ctx, k, images, tau, prec)
		if err != nil {
			return nil, err
		}
		for i, b := range balls {
			if out[i] != "" {
				continue
			}
			if s, ok := b.Decimal(digits); ok {
				out[i] = s
			}
		}
		if !slices.Contains(out, "") {
			return out, nil
		}
	}
}

// balls returns balls around the values of the images at tau.
func (c *expansions[E]) balls(ctx context.Context, k algebra.Scalars[E], images []Image[E], tau E, prec uint) ([]algebra.Ball, error) {
	if k.IsZero(tau) {
		out := make([]algebra.Ball, len(images))
		for i, f := range images {
			out[i] = k.Enclose(f.Initial(), prec)
		}
		return out, nil
	}
	x, err := c.get(ctx, k, images, prec)
	if err != nil {
		return nil, wrapCancel(err)
	}
	out, err := x.at(ctx, k.Enclose(tau, prec))
	return out, wrapCancel(err)
}

// wrapCancel turns the error of a context into an *Error of kind Cancelled.
func wrapCancel(err error) error {
	if _, typed := err.(*Error); typed {
		return err
	}
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return &Error{Kind: Cancelled, Message: err.Error(), Cause: err}
	}
	return err
}
