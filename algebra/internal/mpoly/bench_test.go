package mpoly

import (
	"context"
	"fmt"
	"math/rand/v2"
	"testing"
)

// sizes are the axes of the benchmarks: variables, terms of the gcd and of the
// cofactors, total degree.
var sizes = []struct{ n, terms, deg int }{
	{1, 3, 4}, {2, 3, 3}, {3, 5, 4}, {4, 10, 6}, {6, 5, 8}, {6, 14, 12}, {8, 14, 20},
}

func benchPair(n, terms, deg int) (g, a, b Poly) {
	r := rand.New(rand.NewPCG(uint64(n), uint64(terms)))
	return exactly(r, n, terms, deg, 4), exactly(r, n, terms, deg, 4), exactly(r, n, terms, deg, 4)
}

func BenchmarkGCD(b *testing.B) {
	for _, s := range sizes {
		g, p, q := benchPair(s.n, s.terms, s.deg)
		for _, kind := range []string{"common", "coprime", "divisor"} {
			u, v := p.Mul(g), q.Mul(g)
			switch kind {
			case "coprime":
				u, v = p.Mul(g), q.Mul(q)
			case "divisor":
				v = g
			}
			b.Run(fmt.Sprintf("%s/n=%d/terms=%d", kind, s.n, s.terms), func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := GCD(context.Background(), u, v); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

func BenchmarkGCDDense(b *testing.B) {
	for _, d := range []int{2, 4, 8} {
		x := Variable(3, 0).Add(Variable(3, 1).mulWord(2)).Sub(Variable(3, 2).mulWord(3))
		one := ConstantWord(3, 1)
		g := x.Add(one).Pow(d).Add(Variable(3, 1))
		u, v := g.Mul(x.Sub(one).Pow(d).Add(one)), g.Mul(x.Sub(Variable(3, 2)).Pow(d).Sub(one))
		b.Run(fmt.Sprintf("n=3/degree=%d", d), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := GCD(context.Background(), u, v); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkMul(b *testing.B) {
	for _, s := range sizes {
		_, p, q := benchPair(s.n, s.terms, s.deg)
		b.Run(fmt.Sprintf("n=%d/terms=%d", s.n, s.terms), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				p.Mul(q)
			}
		})
	}
}

func BenchmarkDivExact(b *testing.B) {
	for _, s := range sizes {
		_, p, q := benchPair(s.n, s.terms, s.deg)
		u := p.Mul(q)
		b.Run(fmt.Sprintf("n=%d/terms=%d", s.n, s.terms), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				u.DivExact(q)
			}
		})
	}
}
