package intpoly

import (
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// asWords returns the coefficients of p as words, ok false when they do not
// fit.
func asWords(p Poly) (w []int64, ok bool) {
	for _, c := range p {
		if c.BitLen() > 63 {
			return nil, false
		}
		w = append(w, c.Int64())
	}
	return w, len(w) > 0
}

// requireWordsGCD compares GCDWords with GCD and reports whether it found one.
func requireWordsGCD(t *testing.T, p, q Poly) bool {
	t.Helper()
	a, ok := asWords(p)
	b, okb := asWords(q)
	if !ok || !okb {
		return false
	}
	beforeA, beforeB := append([]int64{}, a...), append([]int64{}, b...)
	g, ok := GCDWords(a, b)
	require.Equal(t, beforeA, a)
	require.Equal(t, beforeB, b)
	if ok {
		requireSame(t, GCD(p, q), ints(g...))
	}
	return ok
}

func TestGCDWordsAgainstGCD(t *testing.T) {
	s := rng(14)
	found, refused := 0, 0
	for range 2000 {
		bits := 1 + int(s.next()%22)
		g := randomPoly(s.next(), int(s.next()%6), bits)
		p := Mul(g, randomPoly(s.next(), int(s.next()%6), bits))
		q := Mul(g, randomPoly(s.next(), int(s.next()%6), 1+int(s.next()%40)))
		if s.next()%3 == 0 {
			c := new(big.Int).SetUint64(1 + s.next()%12)
			p, q = p.Scale(c), q.Scale(new(big.Int).Neg(c))
		}
		if _, ok := asWords(q); !ok || len(p) == 0 || len(q) == 0 {
			continue
		}
		if requireWordsGCD(t, p, q) {
			found++
		} else {
			refused++
		}
	}
	require.Greater(t, found, 1000)
	require.Less(t, refused, found/10)
	for _, p := range samples() {
		requireWordsGCD(t, p, p.Derivative())
		requireWordsGCD(t, p, p)
	}
}

func TestGCDWordsAtTheBorders(t *testing.T) {
	found := 0
	for _, x := range borders() {
		for _, y := range borders() {
			for _, pair := range [][2]Poly{
				{New(x, y), New(y, x)},
				{New(x, y), New(x, y)},
				{New(x, big.NewInt(1)), New(y, big.NewInt(1))},
				{New(big.NewInt(1), x), New(big.NewInt(1), y)},
				{New(x), New(y)},
				{Mul(New(x, big.NewInt(2)), ints(1, 1)), Mul(New(y, big.NewInt(2)), ints(1, 1))},
			} {
				if requireWordsGCD(t, pair[0], pair[1]) {
					found++
				}
			}
		}
	}
	require.Greater(t, found, 500)
}

// Numbers that vanish modulo the prime, and factors that agree modulo it.
func TestGCDWordsWithUnluckyPrimes(t *testing.T) {
	m := new(big.Int).SetUint64(gcdPrime(0))
	h := New(big.NewInt(5), m)
	for _, pair := range [][2]Poly{
		{New(m, big.NewInt(1)), ints(0, 1)},
		{h, h},
		{h, ints(5, 1)},
		{New(m, m), New(m, m)},
		{New(m), ints(2, 2)},
		{New(m, new(big.Int), m), ints(3, 0, 3)},
	} {
		requireWordsGCD(t, pair[0], pair[1])
		requireWordsGCD(t, pair[1], pair[0])
	}
	_, ok := GCDWords([]int64{int64(gcdPrime(0)), 1}, []int64{0, 1})
	require.False(t, ok, "s + p and s agree modulo p only")
}
