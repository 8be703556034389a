package mpoly

import (
	"math/big"
	"math/bits"
	"sync"

	"example.org/closedform/algebra/internal/zp"
)

// field is a prime field whose elements x are kept as x 2^64 modulo p.
//
// Source: Montgomery, Modular multiplication without trial division, Math.
// Comp. 44 (1985).
type field struct {
	zp.Field
	inverse uint64 // inverse p = 1 modulo 2^64
	one     uint64 // 2^64 modulo p
	square  uint64 // 2^128 modulo p
}

// fieldTable holds the fields of the primes below 2^62 from the top, made as
// needed.
var fieldTable struct {
	sync.Mutex
	fields []*field
}

// fieldAt returns the field of the i-th prime below 2^62, counted down from 0.
func fieldAt(i int) *field {
	fieldTable.Lock()
	defer fieldTable.Unlock()
	for len(fieldTable.fields) <= i {
		last := uint64(zp.MaxPrime)
		if k := len(fieldTable.fields); k > 0 {
			last = fieldTable.fields[k-1].P
		}
		p := zp.PrimeBelow(last)
		f := &field{Field: zp.NewField(p), inverse: zp.InverseWord(p)}
		f.one = -p % p
		f.square = f.Field.Mul(f.one, f.one)
		fieldTable.fields = append(fieldTable.fields, f)
	}
	return fieldTable.fields[i]
}

// times returns x y.
func (f *field) times(x, y uint64) uint64 {
	hi, lo := bits.Mul64(x, y)
	t, _ := bits.Mul64(lo*f.inverse, f.P)
	r := hi - t
	if hi < t {
		r += f.P
	}
	return r
}

// fromWord returns c as an element of the field.
func (f *field) fromWord(c int64) uint64 {
	x := magnitude(c)
	if x >= f.P {
		x %= f.P
	}
	x = f.times(x, f.square)
	if c < 0 {
		return f.Neg(x)
	}
	return x
}

// fromBig returns c as an element of the field.
func (f *field) fromBig(c *big.Int) uint64 { return f.times(f.FromBig(c), f.square) }

// coef returns the coefficient of term i of p as an element of the field.
func (f *field) coef(p Poly, i int) uint64 {
	if p.bigs != nil {
		return f.fromBig(p.bigs[i])
	}
	return f.fromWord(p.words[i])
}

// residue returns the residue x stands for.
func (f *field) residue(x uint64) uint64 { return f.times(x, 1) }

// reciprocal returns 1/x for x != 0.
func (f *field) reciprocal(x uint64) uint64 {
	return f.times(f.Inv(f.residue(x)), f.square)
}

// reciprocals replaces the elements of a, none of them 0, by their inverses, at
// the cost of one inversion.
func (f *field) reciprocals(a []uint64) {
	before := make([]uint64, len(a))
	product := f.one
	for i, x := range a {
		before[i] = product
		product = f.times(product, x)
	}
	inv := f.reciprocal(product)
	for i := len(a) - 1; i >= 0; i-- {
		a[i], inv = f.times(inv, before[i]), f.times(inv, a[i])
	}
}

// powers fills t with 1, x, x^2, ...
func (f *field) powers(t []uint64, x uint64) {
	y := f.one
	for i := range t {
		t[i] = y
		y = f.times(y, x)
	}
}

// points is a source of pseudo-random elements.
//
// Source: Steele, Lea and Flood, Fast splittable pseudorandom number
// generators, OOPSLA 2014 (SplitMix64).
type points uint64

// next returns a non-zero element of f.
func (s *points) next(f *field) uint64 {
	for {
		*s += 0x9e3779b97f4a7c15
		z := uint64(*s)
		z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
		z = (z ^ z>>27) * 0x94d049bb133111eb
		if z = (z ^ z>>31) >> 2; z != 0 && z < f.P {
			return z
		}
	}
}
