package mpoly

import (
	"context"
	"fmt"
	"math/rand/v2"
	"testing"
)

// namedPoly is an input with a name.
type namedPoly struct {
	name string
	p    Poly
}

func benchFactor(b *testing.B, inputs []namedPoly) {
	for _, c := range inputs {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				if _, _, err := FactorZ(context.Background(), c.p); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkFactorZ(b *testing.B) {
	var inputs []namedPoly
	for _, n := range []int{2, 3, 5, 8} {
		for _, terms := range []int{5, 15, 40} {
			for _, count := range []int{1, 2, 4} {
				rng := rand.New(rand.NewPCG(7, uint64(n*terms*count)))
				p := ConstantWord(n, 1)
				for range count {
					p = p.Mul(randomFactor(rng, n, terms, 3, 10))
				}
				if p.Len() > 20000 {
					continue
				}
				name := fmt.Sprintf("vars=%d/terms=%d/factors=%d", n, terms, count)
				inputs = append(inputs, namedPoly{name, p})
			}
		}
	}
	x, y := Variable(2, 0), Variable(2, 1)
	inputs = append(inputs,
		namedPoly{"differences=5", differences(5)},
		namedPoly{"differences=6", differences(6)},
		namedPoly{"signedSums=4", signedSums(4)},
		namedPoly{"signedRoots=5", signedRoots(5)},
		namedPoly{"x^24-y^24", x.Pow(24).Sub(y.Pow(24))},
	)
	benchFactor(b, inputs)
}
