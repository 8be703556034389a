package algebra

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"
)

// rootsAllWays isolates by float64, by words and by balls.
func rootsAllWays(t *testing.T, c []*big.Int) map[string][]rootDisc {
	t.Helper()
	ctx := context.Background()
	n := len(c) - 1
	ways := make(map[string][]rootDisc)
	check := func(name string, discs []rootDisc, gaps []magnitude) {
		ways[name] = discs
		for i, d := range discs {
			if magUp(64*uint64(n), 0).mulDown(d.rad).cmp(gaps[i]) > 0 {
				t.Fatalf("%s: disc of radius %v with gap %v", name, d.rad.float(true), gaps[i].float(true))
			}
		}
	}
	if f := newFloatRoots(c); f != nil {
		if f.c != nil {
			if err := f.run(ctx, 30+n); err != nil {
				t.Fatal(err)
			}
			if discs, gaps, ok := f.certify(ctx); ok {
				check("float64", discs, gaps)
			}
		}
		discs, gaps, err := isolateInWords(ctx, newWordRoots(f))
		if err != nil {
			t.Fatal(err)
		}
		if discs != nil {
			check("words", discs, gaps)
		}
	}
	discs, gaps, err := isolateInBalls(ctx, c)
	if err != nil {
		t.Fatal(err)
	}
	upper := make([]rootDisc, 0, n)
	kept := gaps[:0]
	for i, d := range discs {
		if d.at.isReal() || d.at.Im.man.Sign() > 0 {
			upper, kept = append(upper, d), append(kept, gaps[i])
		}
	}
	check("balls", upper, kept)
	return ways
}

func TestRootsIsolatedAllWays(t *testing.T) {
	rng := rand.New(rand.NewPCG(49, 50))
	cases := map[string][]*big.Int{
		"Wilkinson": rootsWilkinson(20), "Mignotte": rootsMignotte(20, 10), "Mignotte 2": rootsMignotte(15, 1000000),
		"tridiagonal": rootsTridiagonal(30), "s^16+1": rootsBinomial(1, 16, 1), "s^9-5": rootsBinomial(3, 9, -5),
		"1000 bits": rootsRandom(rng, 20, 1000), "s^2+s+1": rootsInts(1, 1, 1), "s^3-2": rootsInts(-2, 0, 0, 1),
		"close": rootsProduct([]*big.Int{new(big.Int).Neg(rootsPow10(40)), rootsPow10(40)},
			[]*big.Int{new(big.Int).Add(rootsPow10(40), big.NewInt(1)), new(big.Int).Neg(rootsPow10(40))}, rootsInts(1, 0, 1)),
		"near axis": rootsProduct([]*big.Int{new(big.Int).Add(rootsPow10(60), big.NewInt(1)), new(big.Int).Mul(big.NewInt(-2), rootsPow10(60)), rootsPow10(60)}, rootsInts(-3, 1)),
		"cube":      rootsPerturbed(rootsProduct(rootsInts(-2, 0, 0, 1), rootsInts(-2, 0, 0, 1), rootsInts(-2, 0, 0, 1)), 30, 0),
		"sizes":     rootsProduct([]*big.Int{big.NewInt(-1), rootsPow10(20)}, rootsInts(2, 1, 1), []*big.Int{new(big.Int).Neg(rootsPow10(20)), big.NewInt(1)}),
	}
	for i := range 40 {
		cases["random "+string(rune('A'+i))] = rootsRandom(rng, 2+rng.IntN(15), 50)
	}
	counts := make(map[string]int)
	for name, c := range cases {
		ways := rootsAllWays(t, c)
		plain := ways["balls"]
		for way, discs := range ways {
			counts[way]++
			if len(discs) != len(plain) {
				t.Fatalf("%s by %s: %d discs, want %d", name, way, len(discs), len(plain))
			}
			// Every disc meets exactly one of the plain ones, and that is real if it is.
			for _, d := range discs {
				met := 0
				for _, e := range plain {
					if d.at.Sub(e.at, 64).absDown().cmp(d.rad.addUp(e.rad)) <= 0 {
						met++
						if d.at.isReal() != e.at.isReal() {
							t.Errorf("%s by %s: a root is real or not", name, way)
						}
					}
				}
				if met != 1 {
					t.Errorf("%s by %s: a disc meets %d discs", name, way, met)
				}
			}
		}
	}
	// Words give up on nothing here; float64 on the ill-conditioned ones.
	if counts["words"] != len(cases) || counts["float64"] < 40 || counts["float64"] == len(cases) {
		t.Errorf("isolated: %v of %d", counts, len(cases))
	}
}

func TestRootsNewtonAllWays(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	ctx := context.Background()
	steps := 0
	for range 30 {
		r, err := NewRootSet(ctx, rootsRandom(rng, 2+rng.IntN(15), 50+100*rng.IntN(2)))
		if err != nil {
			t.Fatal(err)
		}
		for _, x := range r.roots {
			for _, goal := range []int64{30, 60, 66, min(r.reach(x, x.first), 90)} {
				if goal > r.reach(x, x.first) {
					continue
				}
				plain, err := r.newtonInBalls(ctx, x, x.first, goal)
				if err != nil {
					t.Fatal(err)
				}
				fast, ok := r.newtonInWords(x, x.first, goal)
				if !ok {
					continue
				}
				steps++
				limit := x.first.at.absDown().mulPow2(-goal)
				if fast.rad.cmp(limit) > 0 || fast.at.Sub(plain.at, 300).absDown().cmp(fast.rad.addUp(plain.rad)) > 0 {
					t.Fatalf("step to %d bits: %v and %v", goal, fast.at.Re.Mid(), plain.at.Re.Mid())
				}
			}
		}
	}
	if steps < 200 {
		t.Errorf("%d steps in words", steps)
	}
}

func TestRootsCertifyRoughFloats(t *testing.T) {
	// The roots are known: 1 ... a and k +- i for k = 1 ... b, and the points near them.
	rng := rand.New(rand.NewPCG(53, 54))
	certified := 0
	for range 600 {
		c := rootsWilkinson(1 + rng.Int64N(5))
		var exact []complex128
		for k := range len(c) - 1 {
			exact = append(exact, complex(float64(k+1), 0))
		}
		for k := range rng.Int64N(3) {
			c = rootsMul(c, rootsInts((k+1)*(k+1)+1, -2*(k+1), 1))
			exact = append(exact, complex(float64(k+1), 1), complex(float64(k+1), -1))
		}
		f := newFloatRoots(c)
		unit := complex(float64(int64(1)<<f.shift), 0)
		size := 1 / float64(int64(1)<<(6+rng.IntN(20))) // at times too far for a certificate
		for i, z := range exact {
			off := func() float64 { return size * (rng.Float64() - 0.5) }
			f.z[i] = z/unit + complex(off(), off())
		}
		discs, gaps, ok := f.certify(context.Background())
		if !ok {
			continue
		}
		certified++
		in := 0
		for i, d := range discs {
			near, far := 0, infinite
			for _, z := range exact {
				dist := d.at.Sub(ComplexBall{ballFromFloat64(real(z), 0), ballFromFloat64(imag(z), 0)}, 100)
				if dist.absDown().cmp(d.rad) <= 0 {
					near++
					if d.at.isReal() != (imag(z) == 0) {
						t.Fatalf("the root %v is real or not", z)
					}
				} else if b := dist.absUp(); b.cmp(far) < 0 {
					far = b
				}
			}
			if near != 1 || far.cmp(gaps[i]) < 0 {
				t.Fatalf("disc %d has %d roots, the next at %v, gap %v", i, near, far.float(true), gaps[i].float(true))
			}
			in += 2
			if d.at.isReal() {
				in--
			}
		}
		if in != len(exact) {
			t.Fatalf("%d roots of %d", in, len(exact))
		}
	}
	if certified < 100 || certified == 600 {
		t.Errorf("%d of 600 point sets certified", certified)
	}
}

func TestRootsSquaresAreRejectedByEveryWay(t *testing.T) {
	// Double roots that float64 cannot tell from close ones, and exact ones.
	for _, f := range [][]*big.Int{rootsInts(-1, 1), rootsInts(-2, 0, 1), rootsWilkinson(6), rootsTridiagonal(12)} {
		c := rootsProduct(f, f, rootsInts(7, 1))
		g := newFloatRoots(c)
		if err := g.run(context.Background(), 60); err != nil {
			t.Fatal(err)
		}
		if _, _, ok := g.certify(context.Background()); ok {
			t.Errorf("float64 proves the roots of %v to be simple", c)
		}
		if discs, _, err := isolateInWords(context.Background(), newWordRoots(g)); err != nil || discs != nil {
			t.Errorf("words prove the roots of %v to be simple (%v)", c, err)
		}
	}
}
