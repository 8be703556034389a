package intpoly

import (
	"math/big"
	"math/bits"
	"testing"

	"github.com/stretchr/testify/require"
)

// wordSize is the size of a word in bits.
const wordSize = bits.UintSize

// signed returns the number that v stands for.
func signed(v []big.Word) *big.Int {
	x := new(big.Int).SetBits(append([]big.Word(nil), v...))
	if negative(v) {
		x.Sub(x, new(big.Int).Lsh(big.NewInt(1), uint(len(v)*wordSize)))
	}
	return x
}

// wrap returns x modulo 2^(k words) as a signed number.
func wrap(x *big.Int, k int) *big.Int {
	return signed(toFlat(Poly{new(big.Int).Rem(x, new(big.Int).Lsh(big.NewInt(1), uint(k*wordSize)))}, k, false).w)
}

func requireInt(t *testing.T, want, got *big.Int) {
	t.Helper()
	require.Zero(t, want.Cmp(got), "want %v, got %v", want, got)
}

func TestFlatWordsAgainstInt(t *testing.T) {
	b := borders()
	for k := 1; k <= 5; k++ {
		for _, x := range b {
			for _, y := range b {
				if x.BitLen() >= k*wordSize || y.BitLen() >= k*wordSize {
					continue
				}
				a, c := toFlat(Poly{x}, k, false), toFlat(Poly{y}, k, false)
				requireInt(t, x, signed(a.w))
				require.GreaterOrEqual(t, a.bitLen(), x.BitLen())
				require.LessOrEqual(t, a.bitLen(), x.BitLen()+1)
				acc := toFlat(Poly{y}, k, false).w
				subDot(acc, a.w, c.w, k)
				requireInt(t, wrap(new(big.Int).Sub(y, new(big.Int).Mul(x, y)), k), signed(acc))
				if y.IsInt64() {
					addWord(a.w, y.Int64())
					requireInt(t, wrap(new(big.Int).Add(x, y), k), signed(a.w))
				}
				if y.IsInt64() && y.Sign() > 0 {
					v := toFlat(Poly{x}, k, false).w
					scaleWords(v, y.Uint64())
					requireInt(t, wrap(new(big.Int).Mul(x, y), k), signed(v))
				}
			}
			if x.BitLen() >= k*wordSize {
				continue
			}
			v := toFlat(Poly{x}, k, false).w
			if x.Sign() != 0 {
				require.Equal(t, int(x.TrailingZeroBits()), trailingZeros(v))
			}
			for _, n := range []int{0, 1, 31, wordSize - 1, wordSize, wordSize + 1, k*wordSize - 1} {
				s := append([]big.Word(nil), v...)
				shiftRight(s, n)
				requireInt(t, new(big.Int).Rsh(x, uint(n)), signed(s))
			}
			if x.Bit(0) == 1 {
				acc := make([]big.Word, k)
				subProduct(acc, v, inverseOf(v))
				requireInt(t, big.NewInt(-1), signed(acc))
			}
		}
	}
}

// TestDivFlatIsSchoolbook covers odd and even ends and sizes at the borders.
func TestDivFlatIsSchoolbook(t *testing.T) {
	ps := samples()
	exact, refused := 0, 0
	for _, p := range ps {
		for _, q := range ps {
			if len(p) == 0 || len(q) == 0 || len(p)+len(q) > 40 || len(q)%2 == 0 && len(p) > 8 {
				continue
			}
			f := Mul(p, q)
			quo, ok, decided := divFlat(f, q)
			if decided {
				require.True(t, ok)
				requireSame(t, p, quo)
				require.True(t, isDivisor(f, q))
				exact++
			}
			for _, g := range []Poly{Add(f, ints(0, 1)), f.Scale(big.NewInt(3)), Add(f, Poly{big.NewInt(2)})} {
				if len(g) < len(q) {
					continue
				}
				want, wantOK := divSchoolbook(g, q)
				quo, ok, decided := divFlat(g, q)
				if decided {
					require.Equal(t, wantOK, ok, "%v / %v", g, q)
					if ok {
						requireSame(t, want, quo)
					} else {
						refused++
					}
				}
			}
		}
	}
	require.Greater(t, exact, 300)
	require.Greater(t, refused, 300)
}

func TestDivFlatWithLargeQuotient(t *testing.T) {
	// (s^200-1)/(s-1)^2-like quotients: coefficients far above those of p.
	p := product([]Poly{powerMinus(7, 1), powerMinus(11, 1), powerMinus(13, 1), powerMinus(17, 1)})
	q := product([]Poly{ints(-1, 1), ints(-1, 1), ints(-1, 1), ints(-1, 1)})
	quo, ok, decided := divFlat(p, q)
	require.True(t, ok && decided)
	requireSame(t, p, Mul(quo, q))
	// A quotient of two words from words: the cube of a cyclotomic product.
	big1 := product([]Poly{ints(1, 2, 2), ints(2, 3, 2), ints(2, -3, 2)})
	for range 3 {
		big1 = Mul(big1, big1)
	}
	quo, ok, decided = divFlat(Mul(big1, ints(2, 1, 2)), ints(2, 1, 2))
	require.True(t, ok && decided)
	requireSame(t, big1, quo)
}
