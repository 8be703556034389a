package intpoly

import (
	"fmt"
	"math/big"
	"math/bits"
	"testing"

	"github.com/stretchr/testify/require"
)

func requireSame(t *testing.T, want, got Poly, msg ...any) {
	t.Helper()
	if compare(want, got) != 0 {
		require.Fail(t, fmt.Sprintf("polynomials differ:\n%v\n%v", want, got), msg...)
	}
	require.True(t, len(got) == 0 || got[len(got)-1].Sign() != 0, "leading zero")
}

// borders are integers at the edges of machine words.
func borders() []*big.Int {
	out := []*big.Int{big.NewInt(0), big.NewInt(1), big.NewInt(-1)}
	for _, e := range []uint{31, 62, 63, 64, 127, 128} {
		x := new(big.Int).Lsh(big.NewInt(1), e)
		for d := int64(-1); d <= 1; d++ {
			y := new(big.Int).Add(x, big.NewInt(d))
			out = append(out, y, new(big.Int).Neg(y))
		}
	}
	return out
}

// samples are polynomials of many shapes, zero included.
func samples() []Poly {
	b := borders()
	out := []Poly{nil, ints(1), ints(-1), ints(0, 1), ints(0, 0, -1), New(b...), New(b[3:]...)}
	s := rng(99)
	for _, n := range []int{1, 2, 3, 4, 7, 17, 40} {
		for _, bits := range []int{1, 31, 63, 64, 65, 200, 900} {
			p := make(Poly, n)
			for i := range p {
				p[i] = s.integer(bits)
				if s.next()%3 == 0 {
					p[i] = b[s.next()%uint64(len(b))]
				}
			}
			out = append(out, New(p...))
		}
	}
	return out
}

func TestNewCopiesAndTrims(t *testing.T) {
	x := big.NewInt(5)
	p := New(x, big.NewInt(0))
	require.Zero(t, p.Degree())
	x.SetInt64(7)
	require.Zero(t, p[0].Cmp(big.NewInt(5)))
	require.Equal(t, -1, New().Degree())
	require.Equal(t, -1, New(big.NewInt(0)).Degree())
}

func TestContentAndPrimitive(t *testing.T) {
	require.Zero(t, Poly(nil).Content().Sign())
	for _, p := range samples() {
		c, pp := p.Primitive()
		requireSame(t, p, pp.Scale(c))
		require.Zero(t, p.Content().Cmp(new(big.Int).Abs(c)))
		if len(p) > 0 {
			require.Positive(t, pp.lead().Sign())
			require.Zero(t, pp.Content().Cmp(big.NewInt(1)))
			require.Equal(t, p.lead().Sign(), c.Sign())
		}
	}
	c, pp := ints(6, 0, -9).Primitive()
	require.Zero(t, c.Cmp(big.NewInt(-3)))
	requireSame(t, ints(-2, 0, 3), pp)
}

func TestRingLaws(t *testing.T) {
	ps := samples()
	for i, p := range ps {
		q, r := ps[(7*i+3)%len(ps)], ps[(11*i+5)%len(ps)]
		requireSame(t, Add(p, q), Add(q, p))
		requireSame(t, Mul(p, q), Mul(q, p))
		requireSame(t, Mul(p, Add(q, r)), Add(Mul(p, q), Mul(p, r)))
		requireSame(t, Mul(p, Mul(q, r)), Mul(Mul(p, q), r))
		requireSame(t, nil, Sub(p, p))
		requireSame(t, p, Add(Sub(p, q), q))
		requireSame(t, p, Mul(p, ints(1)))
		requireSame(t, nil, Mul(p, nil))
		requireSame(t, Mul(p, ints(-3)), p.Scale(big.NewInt(-3)))
		requireSame(t, nil, p.Scale(new(big.Int)))
		// Leibniz.
		requireSame(t, Mul(p, q).Derivative(), Add(Mul(p.Derivative(), q), Mul(p, q.Derivative())))
	}
}

// slotFor is the size of a coefficient of p q with its sign.
func slotFor(p, q Poly) int {
	return p.maxBits() + q.maxBits() + bits.Len(uint(min(len(p), len(q)))) + 1
}

func mulPacked(p, q Poly) Poly    { return mulKronecker(p, q, slotFor(p, q)) }
func mulPackedTwo(p, q Poly) Poly { return mulKroneckerTwo(p, q, slotFor(p, q)) }

func TestMulKroneckerIsSchoolbook(t *testing.T) {
	ps := samples()
	for _, p := range ps {
		for _, q := range ps {
			if len(p) > 0 && len(q) > 0 {
				requireSame(t, mulSchoolbook(p, q), mulPacked(p, q))
				requireSame(t, mulSchoolbook(p, q), mulPackedTwo(p, q))
			}
		}
		if len(p) > 0 {
			requireSame(t, mulSchoolbook(p, p), Mul(p, p))
		}
	}
	// Extremal sums: every product coefficient at the edge of its slot.
	for _, bits := range []uint{1, 15, 31, 32, 63, 64} {
		m := new(big.Int).Sub(new(big.Int).Lsh(big.NewInt(1), bits), big.NewInt(1))
		for _, n := range []int{4, 7, 8, 16, 33} {
			p, q := make(Poly, n), make(Poly, n)
			for i := range p {
				p[i], q[i] = m, new(big.Int).Neg(m)
			}
			requireSame(t, mulSchoolbook(p, q), mulPacked(p, q))
			requireSame(t, mulSchoolbook(p, q), mulPackedTwo(p, q))
			requireSame(t, mulSchoolbook(q, q), mulPacked(q, q))
			requireSame(t, mulSchoolbook(q, q), mulPackedTwo(q, q))
		}
	}
}

func TestArgumentsStayUntouched(t *testing.T) {
	ps := samples()
	for i, p := range ps {
		q := ps[(5*i+1)%len(ps)]
		cp, cq := New(p...), New(q...)
		Add(p, q)
		Sub(p, q)
		Mul(p, q)
		p.Primitive()
		p.Derivative()
		p.Scale(big.NewInt(3))
		GCD(p, q)
		if len(q) > 0 {
			DivExact(p, q)
		}
		SquareFree(p)
		requireSame(t, cp, p)
		requireSame(t, cq, q)
	}
}

func TestDivExact(t *testing.T) {
	ps := samples()
	for i, p := range ps {
		q := ps[(3*i+2)%len(ps)]
		if len(q) == 0 {
			continue
		}
		quo, ok := DivExact(Mul(p, q), q)
		require.True(t, ok)
		requireSame(t, p, quo)
		if q.Degree() > 0 {
			_, ok = DivExact(Add(Mul(p, q), ints(1)), q)
			require.False(t, ok)
		}
	}
	_, ok := DivExact(ints(0, 1), ints(2))
	require.False(t, ok)
	_, ok = DivExact(ints(1), ints(1, 1))
	require.False(t, ok)
	_, ok = DivExact(ints(0, 0, 1), ints(0, 2))
	require.False(t, ok, "divides over Q only")
	_, ok = DivExact(ints(1, 1), ints(0, 1))
	require.False(t, ok)
	// A multiple of the prime of the filter changes nothing modulo it.
	p := Add(Mul(ints(1, 1), ints(3, 0, 1)), New(new(big.Int).SetUint64(gcdPrime(0))))
	_, ok = DivExact(p, ints(1, 1))
	require.False(t, ok)
	require.Panics(t, func() { DivExact(ints(1), nil) })
}

func TestDivExactWithVanishingLead(t *testing.T) {
	// The leading coefficient of the divisor is 0 modulo the filter's prime.
	q := New(big.NewInt(1), new(big.Int).SetUint64(gcdPrime(0)))
	quo, ok := DivExact(Mul(q, ints(-1, 5)), q)
	require.True(t, ok)
	requireSame(t, ints(-1, 5), quo)
}
