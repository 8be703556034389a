package mpoly

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
)

// TestMulPaths compares every way to form a product with the plain one.
func TestMulPaths(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 1))
	for _, terms := range []int{1, 2, 3, 7, 8, 30} {
		for _, bits := range []int{1, 29, 30, 31, 32, 60, 62, 63, 64, 130} {
			for _, s := range []struct{ n, deg int }{{1, 3}, {1, 3000}, {3, 4}, {5, 30}, {8, 100}, {9, 400}} {
				p, q := exactly(r, s.n, terms, s.deg, bits), exactly(r, s.n, 1+r.IntN(terms), s.deg, bits)
				u := p.Mul(q)
				requireCanonical(t, u)
				require.True(t, u.Equal(plainMul(s.n, p, q)), "%d terms, %d bits", terms, bits)
				require.True(t, u.Equal(mulRange(p, q, 0, p.Len())))
				// Terms that cancel.
				require.True(t, p.Add(q).Mul(p.Sub(q)).Equal(p.Mul(p).Sub(q.Mul(q))))
				quo, ok := u.DivExact(q)
				require.True(t, ok)
				requireCanonical(t, quo)
				require.True(t, quo.Equal(p))
				quo, ok, err := divideByMerging(context.Background(), u, q)
				require.NoError(t, err)
				require.True(t, ok && quo.Equal(p))
			}
		}
	}
}

// TestDivExactRefuses checks that neighbours of a multiple are no multiples.
func TestDivExactRefuses(t *testing.T) {
	r := rand.New(rand.NewPCG(22, 1))
	for _, bits := range []int{2, 62, 64} {
		for range 60 {
			n := 1 + r.IntN(6)
			p, q := exactly(r, n, 9, 6, bits), exactly(r, n, 9, 6, bits)
			if q.Len() < 2 {
				continue
			}
			u := p.Mul(q)
			// A polynomial with two terms or more divides no monomial.
			for i := range min(u.Len(), 20) {
				x := Poly{n: n, exps: u.exp(i), words: []int64{1}}
				_, ok := u.Add(x).DivExact(q)
				require.False(t, ok)
			}
			// u/2 is no polynomial over Z unless all coefficients are even.
			even := new(big.Int).And(u.Content(), big.NewInt(1)).Sign() == 0
			_, ok := u.DivExact(ConstantWord(n, 2))
			require.Equal(t, even, ok)
			_, ok = u.DivExact(q.MulInt(big.NewInt(2)))
			require.Equal(t, new(big.Int).And(p.Content(), big.NewInt(1)).Sign() == 0, ok)
		}
	}
}

// TestAccumulator compares sums of three words with big ones.
func TestAccumulator(t *testing.T) {
	words := []int64{0, 1, -1, 1<<31 - 1, -1 << 31, 1 << 62, -1 << 62, 1<<63 - 1, -1<<63 + 1}
	for _, a := range words {
		for _, b := range words {
			var s accumulator
			want := new(big.Int)
			for range 5 {
				s.addProduct(a, b)
				s.add(a)
				want.Add(want, new(big.Int).Mul(big.NewInt(a), big.NewInt(b)))
				want.Add(want, big.NewInt(a))
				require.Zero(t, s.big().Cmp(want))
				c, ok := s.word()
				require.Equal(t, fitsWord(want), ok)
				if ok {
					require.Equal(t, want.Int64(), c)
				}
			}
			s.addProduct(-a, b) // |a| < 2^63
			require.Zero(t, s.big().Cmp(want.Sub(want, new(big.Int).Mul(big.NewInt(a), big.NewInt(b)))))
		}
	}
}

// TestParts checks that the parts of a polynomial add up.
func TestParts(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 1))
	for _, s := range []struct{ n, deg int }{{2, 5}, {5, 8}, {9, 3000}} {
		for range 20 {
			p := exactly(r, s.n, 12, s.deg, 70)
			mask := make([]uint64, wordsOf(s.n))
			var x []int
			for i := range s.n {
				if r.IntN(2) == 0 {
					w, shift := fieldOf(i)
					mask[w] |= fieldMask << shift
					x = append(x, i)
				}
			}
			total := 0
			for _, c := range p.parts(mask) {
				requireCanonical(t, c)
				total += c.Len()
				for _, i := range x {
					require.False(t, c.Uses(i))
				}
			}
			require.Equal(t, p.Len(), total)
			if len(x) > 0 {
				require.Len(t, p.partsOneByOne(p.maxExponents()), p.Len())
			}
		}
	}
}

// TestImagesAgree compares the images of dense and of sparse interpolation.
func TestImagesAgree(t *testing.T) {
	r := rand.New(rand.NewPCG(24, 1))
	for range 20 {
		g, a, b := exactly(r, 4, 8, 5, 6), exactly(r, 4, 6, 4, 6), exactly(r, 4, 6, 4, 6)
		p, q := g.Mul(a), g.Mul(b)
		h := mustGCD(t, p, q)
		vars := []int{0, 1, 2, 3}
		if h.Degree(0) < 1 || h.minExponents()[0] != 0 {
			continue
		}
		gamma := mustGCD(t, p.endCoefficient(0, false), q.endCoefficient(0, false))
		m := &modularProblem{p: p, q: q, vars: vars, gamma: gamma, bound: []int{h.Degree(0), h.Degree(1), h.Degree(2), h.Degree(3)}}
		im := m.newImager(context.Background())
		im.load(m, 0)
		dense, res := im.denseSkeleton(3)
		require.Equal(t, imageFound, res)
		sparse, res := im.values(4, dense, [][]uint64{{im.f.one}})
		require.Equal(t, imageFound, res)
		require.Equal(t, dense.coef, sparse)
		first, res := m.firstImage(im, 0)
		require.Equal(t, imageFound, res)
		require.Len(t, first.coef, len(dense.coef))
		// gamma h = lc(h) image: the images are multiples of the gcd.
		want := gamma.Mul(h)
		got := m.candidate(dense, im.dims[0], newLifting(im.f, dense.coef)).Mul(h.endCoefficient(0, false))
		c := got.Content()
		require.True(t, got.DivInt(c).positive().Equal(want.DivInt(want.Content()).positive()))
	}
}

func TestGCDCancelledOnTheWay(t *testing.T) {
	r := rand.New(rand.NewPCG(25, 1))
	g, a, b := exactly(r, 6, 250, 20, 20), exactly(r, 6, 250, 20, 20), exactly(r, 6, 250, 20, 20)
	p, q := a.Mul(g), b.Mul(g)
	for _, after := range []time.Duration{5 * time.Millisecond, 20 * time.Millisecond} {
		t.Run(fmt.Sprint(after), func(t *testing.T) {
			ctx, cancel := context.WithTimeout(context.Background(), after)
			defer cancel()
			start := time.Now()
			_, err := GCD(ctx, p, q)
			require.ErrorIs(t, err, context.DeadlineExceeded)
			// The promise is 100 ms; the race detector and a busy machine get a factor.
			require.Less(t, time.Since(start)-after, 5*time.Second)
		})
	}
}

// TestEndTerms compares with the coefficients themselves, also beyond the range
// of a counter.
func TestEndTerms(t *testing.T) {
	r := rand.New(rand.NewPCG(26, 1))
	polys := []Poly{exactly(r, 5, 30, 6, 3), exactly(r, 1, 5, 9, 3), exactly(r, 9, 40, 3, 3)}
	long := newBuilder(2, 70000)
	for i := 299; i >= 0; i-- {
		for j := 299; j >= 0; j-- {
			long.addWord([]uint64{uint64(i)<<48 | uint64(j)<<32}, 1)
		}
	}
	polys = append(polys, long.poly(), FromCoefficients(1, []Poly{long.poly().Rename(3, []int{0, 2})}))
	for _, p := range polys {
		leading, trailing := p.endTerms()
		for i := range p.n {
			require.Equal(t, p.endCoefficient(i, false).Len(), leading[i])
			require.Equal(t, p.endCoefficient(i, true).Len(), trailing[i])
		}
	}
}
