package intmat

import (
	"context"
	"math/big"
	"math/bits"

	"example.org/closedform/algebra/internal/word"
)

// rowContents returns P and c with A = diag(c) P, where c_i > 0 is the content
// of row i, or a itself and nil when that would save no prime. Rows of
// fractions brought to one denominator have long contents, and every 62 bits
// of them are a prime less. Entries in words are left as they are, and so is a
// matrix whose first rows are primitive for the most part.
func rowContents(ctx context.Context, a [][]*big.Int) (primitive [][]*big.Int, c []*big.Int, err error) {
	if limbsFor(a) == 1 {
		return a, nil, nil
	}
	c = make([]*big.Int, len(a))
	saved, idle := 0, 0
	for i, row := range a {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		c[i] = content(row)
		if bits := c[i].BitLen() - 1; bits > 0 {
			saved += bits
		} else if idle++; 2*idle > i+2 {
			return a, nil, nil
		}
	}
	if saved < primeBits {
		return a, nil, nil
	}
	primitive = make([][]*big.Int, len(a))
	for i, row := range a {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		primitive[i] = make([]*big.Int, len(row))
		for j, x := range row {
			if x.Sign() != 0 {
				x = new(big.Int).Quo(x, c[i])
			}
			primitive[i][j] = x
		}
	}
	return primitive, c, nil
}

// content returns the greatest common divisor of v, 1 for zeros only.
func content(v []*big.Int) *big.Int {
	g := new(big.Int)
	for _, x := range v {
		switch {
		case x.Sign() == 0:
		case g.Sign() == 0:
			g.Abs(x)
		case g.IsUint64():
			g.SetUint64(contentWord(g.Uint64(), x))
		default:
			g.GCD(nil, nil, g, new(big.Int).Abs(x))
		}
	}
	if g.Sign() == 0 {
		g.SetInt64(1)
	}
	return g
}

// contentWord returns the greatest common divisor of g > 0 and x.
func contentWord(g uint64, x *big.Int) uint64 {
	if g == 1 {
		return 1
	}
	var r uint64
	for i := len(x.Bits()) - 1; i >= 0; i-- {
		_, r = bits.Div64(r, uint64(x.Bits()[i]), g)
	}
	return word.GCD(g, r)
}

// scaledColumns returns the numerators and the denominator, in lowest terms,
// of num/den diag(c)^(-1): the inverse of diag(c) P from that of P.
func scaledColumns(ctx context.Context, num [][]*big.Int, den *big.Int, c []*big.Int) ([][]*big.Int, *big.Int, error) {
	least := big.NewInt(1) // common multiple of c
	g := new(big.Int)
	for _, x := range c {
		g.GCD(nil, nil, least, x)
		least.Mul(least, g.Quo(x, g))
	}
	factors := make([]*big.Int, len(c))
	for j, x := range c {
		factors[j] = new(big.Int).Quo(least, x)
	}
	den = new(big.Int).Mul(den, least)
	out := make([]*big.Int, 0, len(c)*len(c))
	for _, row := range num {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		for j, x := range row {
			out = append(out, new(big.Int).Mul(x, factors[j]))
		}
	}
	cancel(out, den)
	return rowsOf(out, len(c), len(c)), den, ctx.Err()
}
