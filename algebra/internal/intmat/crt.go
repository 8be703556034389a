package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// crt recovers integers from residues modulo distinct primes through mixed
// radix digits.
//
// Source: D. Knuth, The Art of Computer Programming, vol. 2, section 4.3.2
// (Garner's algorithm).
type crt struct {
	fields  []zp.Field
	inverse []uint64 // inverse[i]: of the product of the primes before, modulo prime i
	modulus *big.Int
	half    *big.Int
}

// newCRT prepares for distinct primes from (2^61, 2^62).
func newCRT(fields []zp.Field) *crt {
	c := &crt{fields: fields, inverse: make([]uint64, len(fields)), modulus: big.NewInt(1)}
	for i, f := range fields {
		c.inverse[i] = f.Inv(f.FromBig(c.modulus))
		c.modulus.Mul(c.modulus, new(big.Int).SetUint64(f.P))
	}
	c.half = new(big.Int).Rsh(c.modulus, 1)
	return c
}

// lift returns the integer of least absolute value with the given residues.
func (c *crt) lift(ctx context.Context, residues []uint64) (*big.Int, error) {
	digits := make([]uint64, len(residues))
	for i, f := range c.fields {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		var acc uint64
		for j := i - 1; j >= 0; j-- {
			d := digits[j]
			if d >= f.P { // primes are within a factor two of each other
				d -= f.P
			}
			q := c.fields[j].P
			if q >= f.P {
				q -= f.P
			}
			acc = f.Add(f.Mul(acc, q), d)
		}
		digits[i] = f.Mul(f.Sub(residues[i], acc), c.inverse[i])
	}
	x, w := new(big.Int), new(big.Int)
	for i := len(digits) - 1; i >= 0; i-- {
		x.Mul(x, w.SetUint64(c.fields[i].P))
		x.Add(x, w.SetUint64(digits[i]))
	}
	if x.Cmp(c.half) > 0 {
		x.Sub(x, c.modulus)
	}
	return x, nil
}

// liftAll lifts coordinate by coordinate: images[i] holds the residues modulo
// prime i.
func (c *crt) liftAll(ctx context.Context, images [][]uint64) ([]*big.Int, error) {
	out := make([]*big.Int, len(images[0]))
	column := make([]uint64, len(images))
	for j := range out {
		for i, image := range images {
			column[i] = image[j]
		}
		var err error
		if out[j], err = c.lift(ctx, column); err != nil {
			return nil, err
		}
	}
	return out, nil
}
