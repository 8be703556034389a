package intpoly

import (
	"context"
	"fmt"
	"testing"
)

func BenchmarkFactorZ(b *testing.B) {
	for _, c := range []struct {
		name string
		p    Poly
	}{
		{"SD16", swinnertonDyer(2, 3, 5, 7)},
		{"SD32", swinnertonDyer(2, 3, 5, 7, 11)},
		{"SD32shifted", translate(swinnertonDyer(2, 3, 5, 7, 11), 1)},
		{"SD64shifted", translate(swinnertonDyer(2, 3, 5, 7, 11, 13), 1)},
		{"Wilkinson20", wilkinson(20)},
		{"x^105-1", powerMinus(105, 1)},
		{"x^30-2", powerMinus(30, 2)},
		{"cyclotomic210", cyclotomic(210)},
		{"dense50", randomPoly(1, 50, 7)},
		{"tenCubics", product(randomPolys(2, 10, 3, 7))},
		{"thirtyFactors", product(randomPolys(3, 30, 4, 7))},
		{"charpoly80", characteristic(4, 80)},
		{"tridiagonal100", tridiagonal(100)},
	} {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				if _, _, err := FactorZ(context.Background(), c.p); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkMul(b *testing.B) {
	for _, c := range []struct {
		name         string
		degree, bits int
	}{{"5x16", 5, 16}, {"30x64", 30, 64}, {"50x512", 50, 512}, {"200x32", 200, 32}} {
		p, q := randomPoly(1, c.degree, c.bits), randomPoly(2, c.degree, c.bits)
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				Mul(p, q)
			}
		})
	}
}

func BenchmarkGCD(b *testing.B) {
	for _, c := range []struct {
		name                 string
		common, degree, bits int
	}{{"5of10x16", 5, 10, 16}, {"20of40x100", 20, 40, 100}, {"50of100x64", 50, 100, 64}} {
		g := randomPoly(1, c.common, c.bits)
		p := Mul(g, randomPoly(2, c.degree-c.common, c.bits))
		q := Mul(g, randomPoly(3, c.degree-c.common, c.bits))
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				GCD(p, q)
			}
		})
	}
}

// BenchmarkMulWays calibrates mulWordTerms, mulFlatTerms and kroneckerTwo: each
// way at several lengths for products of k words a coefficient.
func BenchmarkMulWays(b *testing.B) {
	for _, k := range []int{1, 2, 3, 4, 5, 6, 8, 16} {
		for _, n := range []int{4, 8, 12, 16, 20, 40, 60, 100, 200} {
			size := min((k*wordSize-12)/2, wordSize*k/2)
			p, q := randomPoly(1, n-1, size), randomPoly(2, n-1, size)
			ways := map[string]func(){
				"flat": func() { mulFlat(p, q, k) },
				"one":  func() { mulPacked(p, q) },
				"two":  func() { mulPackedTwo(p, q) },
			}
			if k < 3 {
				ways["word"] = func() { mulWord(p, q, k) }
			}
			for _, way := range []string{"word", "flat", "one", "two"} {
				if f := ways[way]; f != nil {
					b.Run(fmt.Sprintf("k=%d/n=%d/%s", k, n, way), func(b *testing.B) {
						for b.Loop() {
							f()
						}
					})
				}
			}
		}
	}
}

// BenchmarkDivWays calibrates flatWords.
func BenchmarkDivWays(b *testing.B) {
	for _, k := range []int{1, 2, 4, 8, 12, 16, 24} {
		q := randomPoly(1, 20, k*wordSize/2-8)
		p := Mul(q, randomPoly(2, 20, k*wordSize/2-8))
		b.Run(fmt.Sprintf("k=%d/flat", k), func(b *testing.B) {
			for b.Loop() {
				divFlat(p, q)
			}
		})
		b.Run(fmt.Sprintf("k=%d/ints", k), func(b *testing.B) {
			for b.Loop() {
				divSchoolbook(p, q)
			}
		})
	}
}
