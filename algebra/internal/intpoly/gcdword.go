package intpoly

import (
	"math/bits"

	"example.org/closedform/algebra/internal/word"
	"example.org/closedform/algebra/internal/zp"
)

// GCDWords is [GCD] for polynomials in words, at least one coefficient each,
// the last one not zero and none -2^63. ok is false when the image modulo one
// prime does not show a gcd in words, or its proof takes longer numbers: then
// GCD finds it.
//
// Source: as for [GCD].
func GCDWords(p, q []int64) (g []int64, ok bool) {
	cp, cq := wordsContent(p), wordsContent(q)
	// The leading coefficient of the primitive gcd divides that of the image.
	lc := word.GCD(word.Abs(p[len(p)-1])/cp, word.Abs(q[len(q)-1])/cq)
	f := zp.NewField(gcdPrime(0))
	l := lc % f.P
	if l == 0 || cp%f.P == 0 || cq%f.P == 0 {
		return nil, false
	}
	buf := make(zp.Poly, len(p)+len(q))
	image := f.GCDInPlace(reduceWords(buf[:len(p)], p, f), reduceWords(buf[len(p):], q, f))
	l = f.Mul(l, f.Inv(image.Lead()))
	g = make([]int64, len(image))
	for i, x := range image {
		g[i] = f.Lift(f.Mul(x, l))
	}
	c := int64(wordsContent(g))
	if g[len(g)-1] < 0 {
		c = -c
	}
	for i := range g {
		g[i] /= c
	}
	// An image of degree 0 proves itself, as the true gcd has at most its degree.
	if len(g) > 1 && !(wordsDivide(g, p) && wordsDivide(g, q)) {
		return nil, false
	}
	content := word.GCD(cp, cq)
	if bits.Len64(content)+wordsBits(g) > 63 {
		return nil, false
	}
	for i := range g {
		g[i] *= int64(content)
	}
	return g, true
}

// wordsContent returns the greatest common divisor of the coefficients.
func wordsContent(p []int64) uint64 {
	var c uint64
	for i := len(p) - 1; i >= 0 && c != 1; i-- { // the ends first, as in Content
		c = word.GCD(c, word.Abs(p[i]))
	}
	return c
}

// wordsBits returns the bit length of the largest coefficient.
func wordsBits(p []int64) int {
	var most uint64
	for _, x := range p {
		most |= word.Abs(x)
	}
	return bits.Len64(most)
}

// reduceWords is [reduceTo] from words.
func reduceWords(a zp.Poly, p []int64, f zp.Field) zp.Poly {
	for i, x := range p {
		a[i] = f.FromInt64(x)
	}
	n := len(a)
	for n > 0 && a[n-1] == 0 {
		n--
	}
	return a[:n]
}

// wordsDivide reports whether q, of degree at least 1, divides p and the
// products of coefficients of q and the quotient sum to words, as in
// [provenQuotient]: then p is their product because it is so modulo 2^64.
func wordsDivide(q, p []int64) bool {
	n, m := len(p)-len(q)+1, len(q)-1
	if n < 1 {
		return false
	}
	twos := bits.TrailingZeros64(uint64(q[m]))
	inv := int64(zp.InverseWord(uint64(q[m] >> twos)))
	r := append([]int64(nil), p...)
	var most uint64 // of the quotient
	for i := n - 1; i >= 0; i-- {
		if bits.TrailingZeros64(uint64(r[i+m])) < twos {
			return false
		}
		c := r[i+m] >> twos * inv
		most |= word.Abs(c)
		if c != 0 {
			for j, x := range q {
				r[i+j] -= c * x
			}
		}
	}
	for _, x := range r[:m] {
		if x != 0 {
			return false
		}
	}
	return bits.Len64(most)+wordsBits(q)+bits.Len(uint(min(n, len(q)))) <= 63
}
