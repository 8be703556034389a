package algebra

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// fixedTestWords returns w words that are often 0, 1, all ones, or near 2^63.
func fixedTestWords(rng *rand.Rand, w int) []uint64 {
	x := make([]uint64, w)
	for i := range x {
		switch rng.IntN(6) {
		case 0:
			x[i] = 0
		case 1:
			x[i] = math.MaxUint64
		case 2:
			x[i] = 1<<63 - uint64(rng.IntN(3)) + 1
		case 3:
			x[i] = uint64(rng.IntN(3))
		default:
			x[i] = rng.Uint64()
		}
	}
	return x
}

func TestRootsFixedMul(t *testing.T) {
	rng := rand.New(rand.NewPCG(41, 42))
	for w := 2; w <= maxWords; w++ {
		for range 2000 {
			x, y, z := fixedTestWords(rng, w), fixedTestWords(rng, w), make([]uint64, w)
			fixedMul(z, x, y)
			exact := new(big.Int).Mul(fixedBig(x), fixedBig(y))
			// exact/2^(64w) - z lies in [0, w+1).
			d := exact.Sub(exact, new(big.Int).Lsh(fixedBig(z), uint(64*w)))
			if d.Sign() < 0 || d.Cmp(new(big.Int).Lsh(big.NewInt(int64(w+1)), uint(64*w))) >= 0 {
				t.Fatalf("%x times %x is not %x", x, y, z)
			}
			if w == 2 {
				if h, l := fixedMul2(x[1], x[0], y[1], y[0]); h != z[1] || l != z[0] {
					t.Fatalf("fixedMul2 of %x and %x", x, y)
				}
			}
		}
	}
}

func TestRootsFixedConversions(t *testing.T) {
	rng := rand.New(rand.NewPCG(43, 44))
	for w := 2; w <= maxWords; w++ {
		half := new(big.Int).Lsh(intOne, uint(64*w-1))
		for range 500 {
			x := fixedTestWords(rng, w)
			m := fixedBig(x)
			if m.CmpAbs(half) > 0 {
				t.Fatalf("%x is %v", x, m)
			}
			y := make([]uint64, w)
			setFixed(y, m, 0)
			if fixedBig(y).Cmp(m) != 0 {
				t.Fatalf("%v comes back as %v", m, fixedBig(y))
			}
			s := rng.IntN(200) - 100
			if s < 0 || m.BitLen()+s < 64*w {
				setFixed(y, m, int64(s))
				want := new(big.Int).Lsh(m, uint(max(s, 0)))
				if fixedBig(y).Cmp(want.Quo(want, new(big.Int).Lsh(intOne, uint(max(-s, 0))))) != 0 {
					t.Fatalf("%v 2^%d is %v", m, s, fixedBig(y))
				}
			}
			copy(y, x)
			fixedHalve(y)
			if fixedBig(y).Cmp(new(big.Int).Rsh(m, 1)) != 0 {
				t.Fatalf("half of %v is %v", m, fixedBig(y))
			}
			f, _ := new(big.Float).SetPrec(2000).SetMantExp(new(big.Float).SetInt(m), -64*w).Float64()
			if g := fixedFloat(x); math.Abs(f-g) > math.Abs(f)*0x1p-50 {
				t.Fatalf("%x is %v, not %v", x, f, g)
			}
			if w == 2 {
				if g := fixedFloat2(x[1], x[0]); math.Abs(f-g) > math.Abs(f)*0x1p-50 {
					t.Fatalf("%x is %v, not %v", x, f, g)
				}
			}
			// x/4 + g, with g of any size.
			copy(y, x)
			fixedHalve(y)
			fixedHalve(y)
			g := math.Ldexp(rng.Float64()-0.5, -rng.IntN(64*w+10)-1)
			exact, _ := new(big.Float).SetMantExp(big.NewFloat(g), 64*w).Int(nil)
			exact.Add(exact, fixedBig(y))
			fixedAddFloat(y, g)
			if d := exact.Sub(exact, fixedBig(y)); d.CmpAbs(intOne) > 0 {
				t.Fatalf("%v is added with an error of %v units", g, d)
			}
		}
	}
}
