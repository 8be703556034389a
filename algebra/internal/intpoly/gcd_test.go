package intpoly

import (
	"context"
	"math/big"
	"testing"

	"github.com/stretchr/testify/require"
)

// gcdPlain is the gcd by the primitive polynomial remainder sequence.
func gcdPlain(p, q Poly) Poly {
	cp, p := p.Primitive()
	cq, q := q.Primitive()
	c := new(big.Int).GCD(nil, nil, cp.Abs(cp), cq.Abs(cq))
	for len(q) > 0 {
		r := p
		for len(r) >= len(q) {
			shifted := append(make(Poly, 0, len(r)), q.Scale(r.lead())...)
			for len(shifted) < len(r) {
				shifted = append(Poly{new(big.Int)}, shifted...)
			}
			r = Sub(r.Scale(q.lead()), shifted)
		}
		_, r = r.Primitive()
		p, q = q, r
	}
	return p.Scale(c)
}

func TestGCDAgainstRemainderSequence(t *testing.T) {
	ps := samples()
	for i, p := range ps {
		q, g := ps[(7*i+1)%len(ps)], ps[(5*i+4)%len(ps)]
		if len(p)+len(q)+len(g) > 50 {
			continue // the plain way is slow
		}
		a, b := Mul(p, g), Mul(q, g)
		got := GCD(a, b)
		requireSame(t, gcdPlain(a, b), got)
		requireSame(t, got, GCD(b, a))
	}
}

func TestGCDLaws(t *testing.T) {
	requireSame(t, nil, GCD(nil, nil))
	requireSame(t, ints(2, 4), GCD(nil, ints(-2, -4)))
	requireSame(t, ints(2, 4), GCD(ints(-2, -4), nil))
	requireSame(t, ints(6), GCD(ints(12), ints(-18, 6)))
	requireSame(t, ints(1), GCD(ints(1, 1), ints(2, 1)))
	s := rng(4)
	for range 40 {
		degree := int(s.next()%30) + 1
		bits := int(s.next()%150) + 1
		g := randomPoly(s.next(), degree, bits)
		p := Mul(g, randomPoly(s.next(), 20, bits))
		q := Mul(g, randomPoly(s.next(), 15, bits))
		h := GCD(p, q)
		require.Positive(t, h.lead().Sign())
		a, ok := DivExact(p, h)
		require.True(t, ok)
		b, ok := DivExact(q, h)
		require.True(t, ok)
		_, ok = DivExact(h, g)
		require.True(t, ok, "a common divisor divides the gcd")
		requireSame(t, ints(1), GCD(a, b))
	}
}

func TestGCDWithUnluckyPrimes(t *testing.T) {
	p0, p1 := gcdPrime(0), gcdPrime(1)
	m := new(big.Int).SetUint64(p0)
	// s + p0 and s are different, yet equal modulo p0.
	a, b := New(m, big.NewInt(1)), ints(0, 1)
	g := ints(3, 0, 7)
	requireSame(t, g, GCD(Mul(a, g), Mul(b, g)))
	// The same modulo the second prime.
	a = New(new(big.Int).SetUint64(p1), big.NewInt(1))
	requireSame(t, g, GCD(Mul(a, g), Mul(b, g)))
	// Leading coefficients that vanish modulo the first prime.
	h := New(big.NewInt(5), m)
	requireSame(t, h, GCD(Mul(h, ints(1, 1)), Mul(h, ints(2, 1))))
	// One that vanishes in one argument only.
	requireSame(t, ints(1, 1), GCD(Mul(h, ints(1, 1)), Mul(ints(1, 1), ints(2, 1))))
}

func TestSquareFree(t *testing.T) {
	require.Empty(t, SquareFree(nil))
	require.Empty(t, SquareFree(ints(-4)))
	s := rng(8)
	for range 30 {
		p, want := ints(int64(s.next()%20)-30), map[int]Poly{}
		for _, m := range []int{1, 2, 3, 7} {
			if s.next()%4 == 0 {
				continue
			}
			_, g := randomPoly(s.next(), int(s.next()%4)+1, 20).Primitive()
			want[m] = g
			for range m {
				p = Mul(p, g)
			}
		}
		last := 0
		c, back := p.Primitive()
		prod := ints(1)
		for _, f := range SquareFree(p) {
			require.Greater(t, f.Mult, last, "ascending")
			last = f.Mult
			require.NotNil(t, want[f.Mult])
			requireSame(t, want[f.Mult], f.P)
			requireSame(t, ints(1), GCD(f.P, f.P.Derivative()))
			for range f.Mult {
				prod = Mul(prod, f.P)
			}
		}
		requireSame(t, back, prod)
		requireSame(t, p, prod.Scale(c))
	}
}

func TestSquareFreeOfPowers(t *testing.T) {
	p := product([]Poly{ints(0, 1), ints(0, 1), ints(-1, 1), ints(-1, 1), ints(-1, 1)})
	f := SquareFree(p)
	require.Len(t, f, 2)
	requireSame(t, ints(0, 1), f[0].P)
	require.Equal(t, 2, f[0].Mult)
	requireSame(t, ints(-1, 1), f[1].P)
	require.Equal(t, 3, f[1].Mult)
}

func TestGCDHonoursCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := gcd(ctx, ints(1, 1), ints(2, 3, 1))
	require.ErrorIs(t, err, context.Canceled)
}
