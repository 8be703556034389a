package intmat

import (
	"context"
	"math"
	"math/big"
	"math/bits"
	"sync"

	"example.org/closedform/algebra/internal/zp"
)

// crt recovers integers from residues modulo distinct primes p_i with product
// P and, when given, modulo 2^64.
//
// With M_i = P/p_i and d_i = r_i / M_i mod p_i, an integer with the residues
// r_i is
//
//	sum_i d_i M_i - q P,   q near sum_i d_i/p_i,
//
// for q rounded to the nearest integer the one of least absolute value. The
// word v modulo 2^64 adds the multiple t P with t = (v - it)/P modulo 2^64.
//
// Source: J. von zur Gathen, J. Gerhard, Modern Computer Algebra, Algorithm
// 5.4 (Lagrange's formula); D. Bernstein, J. Sorenson, Modular exponentiation
// via the explicit Chinese remainder theorem, section 2 (the quotient q).
type crt struct {
	fields    []zp.Field
	product   []uint64 // limbs of P
	cofactors []uint64 // limbs of M_0, M_1, ..., as many for each as primes
	weights   []uint64 // 1/M_i mod p_i
	quotients []uint64 // floor(2^64 weights_i / p_i)
	inverse   uint64   // 1/P modulo 2^64
}

// newCRT prepares for distinct primes of the sequence.
func newCRT(fields []zp.Field) *crt {
	k := len(fields)
	c := &crt{fields: fields, cofactors: make([]uint64, k*k), weights: make([]uint64, k), quotients: make([]uint64, k)}
	c.product = append(make([]uint64, 0, k+1), 1)
	for i, f := range fields {
		if i > 0 {
			c.product = append(c.product, 0)
		}
		var carry uint64
		for j, x := range c.product {
			hi, lo := bits.Mul64(x, f.P)
			var up uint64
			c.product[j], up = bits.Add64(lo, carry, 0)
			carry = hi + up
		}
	}
	c.inverse = zp.InverseWord(c.product[0])
	for i, f := range fields {
		cofactor := c.cofactors[i*k : (i+1)*k]
		var rest uint64
		for j := k - 1; j >= 0; j-- {
			cofactor[j], rest = bits.Div64(rest, c.product[j], f.P)
		}
		for j := k - 1; j >= 0; j-- {
			_, rest = bits.Div64(rest, cofactor[j], f.P)
		}
		c.weights[i] = f.Inv(rest)
		c.quotients[i], _ = bits.Div64(c.weights[i], 0, f.P)
	}
	return c
}

// sequences caches the first values of newCRT for leading primes of the
// sequence: a pure function, so the cache never changes an answer.
var sequences [33]struct {
	sync.Once
	crt *crt
}

// leadingCRT returns newCRT of the first count primes.
func leadingCRT(count int) *crt {
	build := func() *crt {
		fields := make([]zp.Field, count)
		for i := range fields {
			fields[i] = zp.NewField(prime(i))
		}
		return newCRT(fields)
	}
	if count >= len(sequences) {
		return build()
	}
	s := &sequences[count]
	s.Do(func() { s.crt = build() })
	return s.crt
}

// lift writes to x, one limb longer than there are primes, the two's
// complement of the integer with residues images[i][j] modulo prime i. The
// answer is exact for integers of absolute value below P/4.
func (c *crt) lift(x []uint64, images [][]uint64, j int) {
	fraction := c.sum(x, images, j)
	subMulLimbs(x, c.product, uint64(math.RoundToEven(fraction)))
}

// liftBeside is lift with the residue word modulo 2^64. It is exact for
// integers of absolute value below (2^63 - 4) P: an error of one in q keeps
// the integer found before within 2 P, so that the outcome is less than
// 2^64 P away from the answer and congruent to it.
func (c *crt) liftBeside(x []uint64, images [][]uint64, j int, word uint64) {
	fraction := c.sum(x, images, j)
	subMulLimbs(x, c.product, uint64(fraction))
	t := (word - x[0]) * c.inverse
	if int64(t) < 0 {
		subMulLimbs(x, c.product, -t)
	} else {
		addMulLimbs(x, c.product, t)
	}
}

// sum writes sum_i d_i M_i to x and returns an approximation of the sum of
// d_i/p_i, with error below 2^-40 for fewer than 2^10 primes and below 1/4
// for fewer than 2^30.
func (c *crt) sum(x []uint64, images [][]uint64, j int) float64 {
	clear(x)
	k := len(c.fields)
	var fraction float64
	for i, f := range c.fields {
		r := images[i][j]
		if r == 0 {
			continue
		}
		h, _ := bits.Mul64(r, c.quotients[i])
		d := r*c.weights[i] - h*f.P
		if d >= f.P {
			d -= f.P
		}
		addMulLimbs(x, c.cofactors[i*k:(i+1)*k], d)
		fraction += float64(d) / float64(f.P)
	}
	return fraction
}

// liftAll lifts all coordinates, beside the residues words modulo 2^64 unless
// that is nil.
func (c *crt) liftAll(ctx context.Context, images [][]uint64, words []uint64) ([]*big.Int, error) {
	count := len(words)
	if words == nil {
		count = len(images[0])
	}
	w := len(c.fields) + 1
	out := newSlab(count, w)
	x := make([]uint64, w)
	for j := range count {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if words == nil {
			c.lift(x, images, j)
		} else {
			c.liftBeside(x, images, j, words[j])
		}
		out.set(j, x)
	}
	return out.values, nil
}
