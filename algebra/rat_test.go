package algebra_test

import (
	"errors"
	"math"
	"math/big"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/algebra"
	"example.org/closedform/algebra/internal/algebratest"
)

// q returns the rational number that s reads as.
func q(s string) algebra.Rat {
	x, err := algebra.ParseRat(s)
	if err != nil {
		panic(s)
	}
	return x
}

// checkRat requires got to be want, in the one representation of its value.
func checkRat(t *testing.T, what string, got algebra.Rat, want *big.Rat) {
	t.Helper()
	if got.Big().Cmp(want) != 0 {
		t.Errorf("%s = %v, want %v", what, got, want.RatString())
	}
	if err := got.Check(); err != nil {
		t.Errorf("%s: %v", what, err)
	}
}

// borderInts returns 0, 1, 2, 3 and +-2^k + {-1, 0, 1} for the word borders.
func borderInts() []*big.Int {
	ns := []*big.Int{big.NewInt(0), big.NewInt(1), big.NewInt(-1), big.NewInt(2), big.NewInt(-3)}
	for _, k := range []uint{31, 62, 63, 64} {
		for d := int64(-1); d <= 1; d++ {
			n := new(big.Int).Lsh(big.NewInt(1), k)
			n.Add(n, big.NewInt(d))
			ns = append(ns, n, new(big.Int).Neg(n))
		}
	}
	return ns
}

// borderRats returns the quotients of the border integers that matter.
func borderRats() []*big.Rat {
	var out []*big.Rat
	seen := map[string]bool{}
	for _, a := range borderInts() {
		for _, b := range []string{"1", "2", "2147483648", "4611686018427387903", "9223372036854775807", "9223372036854775808", "18446744073709551617"} {
			d, _ := new(big.Int).SetString(b, 10)
			x := new(big.Rat).SetFrac(a, d)
			if !seen[x.String()] {
				seen[x.String()] = true
				out = append(out, x)
			}
		}
	}
	return out
}

func TestRatArithmeticAtWordBorders(t *testing.T) {
	bigs := borderRats()
	rats := make([]algebra.Rat, len(bigs))
	for i, x := range bigs {
		rats[i] = algebra.RatFromBig(x)
		checkRat(t, "RatFromBig", rats[i], x)
	}
	var want big.Rat
	for i, x := range rats {
		for j, y := range rats {
			bx, by := bigs[i], bigs[j]
			checkRat(t, x.String()+" + "+y.String(), x.Add(y), want.Add(bx, by))
			checkRat(t, x.String()+" - "+y.String(), x.Sub(y), want.Sub(bx, by))
			checkRat(t, x.String()+" * "+y.String(), x.Mul(y), want.Mul(bx, by))
			if by.Sign() != 0 {
				checkRat(t, x.String()+" / "+y.String(), x.Quo(y), want.Quo(bx, by))
			}
			if got, want := x.Compare(y), bx.Cmp(by); got != want || x.Equal(y) != (want == 0) {
				t.Errorf("Compare(%v, %v) = %d, Equal = %v, want %d", x, y, got, x.Equal(y), want)
			}
			if t.Failed() {
				return
			}
		}
		if x.Big().Cmp(bigs[i]) != 0 {
			t.Fatalf("the operand %v was changed to %v", bigs[i], x)
		}
	}
}

func TestRatUnaryAtWordBorders(t *testing.T) {
	for _, b := range borderRats() {
		x := algebra.RatFromBig(b)
		checkRat(t, "-"+x.String(), x.Neg(), new(big.Rat).Neg(b))
		checkRat(t, "|"+x.String()+"|", x.Abs(), new(big.Rat).Abs(b))
		assert.Equal(t, b.Sign(), x.Sign(), "sign of %v", x)
		assert.Equal(t, b.Sign() == 0, x.IsZero(), "IsZero of %v", x)
		assert.Equal(t, b.Cmp(big.NewRat(1, 1)) == 0, x.IsOne(), "IsOne of %v", x)
		assert.Equal(t, b.IsInt(), x.IsInt(), "IsInt of %v", x)
		assert.Zero(t, b.Num().Cmp(x.Num()), "numerator of %v", x)
		assert.Zero(t, b.Denom().Cmp(x.Den()), "denominator of %v", x)
		assert.Equal(t, max(b.Num().BitLen(), b.Denom().BitLen()), x.BitLen(), "BitLen of %v", x)
		f, _ := b.Float64()
		assert.Equal(t, f, x.Float64(), "Float64 of %v", x)
		assert.Equal(t, b.RatString(), x.String())
		n, ok := x.Int64()
		assert.Equal(t, b.IsInt() && b.Num().IsInt64(), ok, "Int64 of %v", x)
		if ok {
			assert.Equal(t, b.Num().Int64(), n)
		}
		if b.Sign() != 0 {
			checkRat(t, "1/"+x.String(), x.Inv(), new(big.Rat).Inv(b))
		}
	}
}

func TestRatConstructors(t *testing.T) {
	borders := []int64{0, 1, -1, 2, -6, 1 << 31, -1 << 31, math.MaxInt64, -math.MaxInt64, math.MinInt64}
	for _, a := range borders {
		checkRat(t, "RatFromInt", algebra.RatFromInt(a), big.NewRat(a, 1))
		checkRat(t, "RatFromBigInt", algebra.RatFromBigInt(big.NewInt(a)), big.NewRat(a, 1))
		for _, b := range borders {
			if b != 0 {
				checkRat(t, "NewRat", algebra.NewRat(a, b), big.NewRat(a, b))
				checkRat(t, "RatFromFrac", algebra.RatFromFrac(big.NewInt(a), big.NewInt(b)), big.NewRat(a, b))
			}
		}
	}
	checkRat(t, "the zero value", algebra.Rat{}, new(big.Rat))
	assert.True(t, algebra.RatFromInt(math.MaxInt64).IsInline())
	assert.False(t, algebra.RatFromInt(math.MinInt64).IsInline(), "its negative would not fit")
	assert.True(t, algebra.NewRat(math.MinInt64, math.MinInt64).IsOne())
	assert.True(t, algebra.NewRat(math.MinInt64, 2).IsInline())
}

func TestRatZeroValue(t *testing.T) {
	var zero algebra.Rat
	one := algebra.RatFromInt(1)
	assert.True(t, zero.Equal(algebra.RatFromInt(0)))
	assert.True(t, zero.Add(one).IsOne())
	assert.True(t, one.Sub(zero).IsOne())
	assert.True(t, zero.Mul(algebra.NewRat(3, 7)).IsZero())
	assert.True(t, zero.Neg().IsZero())
	assert.True(t, zero.IsInt())
	assert.Equal(t, "0", zero.String())
	assert.True(t, zero.Pow(0).IsOne())
}

func TestRatSharesNoMemory(t *testing.T) {
	for _, b := range []*big.Rat{big.NewRat(3, 7), new(big.Rat).SetFrac(new(big.Int).Lsh(big.NewInt(1), 70), big.NewInt(3))} {
		want := b.RatString()
		x := algebra.RatFromBig(b)
		n, d := new(big.Int).Set(b.Num()), new(big.Int).Set(b.Denom())
		y := algebra.RatFromFrac(n, d)
		z := algebra.RatFromBigInt(n)
		wantZ := n.String()
		b.SetInt64(5)
		n.SetInt64(5)
		d.SetInt64(5)
		x.Big().SetInt64(5)
		x.Num().SetInt64(5)
		x.Den().SetInt64(5)
		assert.Equal(t, want, x.String())
		assert.Equal(t, want, y.String())
		assert.Equal(t, wantZ, z.String())
	}
}

func TestRatDivisionByZeroPanics(t *testing.T) {
	var zero algebra.Rat
	for name, f := range map[string]func(){
		"NewRat":      func() { algebra.NewRat(1, 0) },
		"NewRat min":  func() { algebra.NewRat(math.MinInt64, 0) },
		"RatFromFrac": func() { algebra.RatFromFrac(big.NewInt(1), new(big.Int)) },
		"Inv":         func() { zero.Inv() },
		"Quo":         func() { algebra.RatFromInt(1).Quo(zero) },
		"Pow":         func() { zero.Pow(-1) },
	} {
		assert.PanicsWithError(t, algebra.ErrDivisionByZero.Error(), f, name)
	}
}

func TestRatPow(t *testing.T) {
	for _, s := range []string{"0", "1", "-1", "2", "-2/3", "9223372036854775807", "-1/9223372036854775808"} {
		x := q(s)
		want := big.NewRat(1, 1)
		for n := range 9 {
			checkRat(t, s+" to a power", x.Pow(n), want)
			if !x.IsZero() {
				checkRat(t, s+" to a negative power", x.Pow(-n), new(big.Rat).Inv(want))
			}
			want.Mul(want, x.Big())
		}
	}
	assert.True(t, algebra.RatFromInt(-1).Pow(math.MinInt).IsOne())
	assert.True(t, algebra.RatFromInt(-1).Pow(math.MaxInt).Neg().IsOne())
}

func TestRatSqrt(t *testing.T) {
	for _, b := range borderRats() {
		x := algebra.RatFromBig(b)
		r, ok := x.Mul(x).Sqrt()
		require.True(t, ok, "the square of %v", x)
		checkRat(t, "root of a square", r, new(big.Rat).Abs(b))
	}
	for _, s := range []string{"2", "-1", "-4", "1/2", "4/3", "3/4", "8", "9223372036854775807", "18446744073709551617"} {
		_, ok := q(s).Sqrt()
		assert.False(t, ok, s)
	}
}

func TestParseRat(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"0", "0"}, {"-0", "0"}, {"+7", "7"}, {"-3", "-3"}, {"007", "7"}, {"010", "10"},
		{"22/7", "22/7"}, {"-22/7", "-22/7"}, {"6/4", "3/2"}, {"010/011", "10/11"}, {"0/5", "0"},
		{"0.35", "7/20"}, {"-0.5", "-1/2"}, {".5", "1/2"}, {"1.", "1"}, {"1.50", "3/2"},
		{"1.5e-3", "3/2000"}, {"1E3", "1000"}, {"2e+2", "200"}, {"0e9", "0"}, {"12.5e1", "125"},
		{"9223372036854775807", "9223372036854775807"}, {"-9223372036854775808", "-9223372036854775808"},
		{"9223372036854775808/9223372036854775807", "9223372036854775808/9223372036854775807"},
		{"18446744073709551616/2", "9223372036854775808"}, {"0.00000000000000000001", "1/100000000000000000000"},
	} {
		x, err := algebra.ParseRat(c.text)
		if assert.NoError(t, err, c.text) {
			assert.Equal(t, c.want, x.String(), c.text)
			assert.NoError(t, x.Check(), c.text)
		}
	}
	x, err := algebra.ParseRat("1e99999") // the largest exponent
	require.NoError(t, err)
	assert.Equal(t, 332190, x.BitLen()) // 1 + floor(99999 log2(10))
	for _, text := range []string{
		"", " ", "1 ", " 1", "-", "+", ".", "/", "1/", "/1", "1/0", "0/0", "1/-2", "1/2/3", "1.5/2", "1/1.5", "1e2/3", "1/2e3",
		"++1", "+-1", "1-2", "1..2", "1.5.2", "e", "e5", "1e", "1e+", "1e+-5", "1e5e5", "1e5.5", "1e100000", "1e-100000", "1e9999999999",
		"0x10", "0b1", "0o7", "1p3", "1_000", "1e1_0", "1__0", "Inf", "NaN", "inf", "1i", "½", "١", "1e٣", "1\x00", "1/ 2", "−1",
		strings.Repeat("1", 1<<16+1),
	} {
		_, err := algebra.ParseRat(text)
		assert.ErrorIs(t, err, algebra.ErrSyntax, "%.40q", text)
	}
}

func TestRatTextRoundTrip(t *testing.T) {
	for _, b := range borderRats() {
		x := algebra.RatFromBig(b)
		text, err := x.MarshalText()
		require.NoError(t, err)
		y := algebra.RatFromInt(99)
		require.NoError(t, y.UnmarshalText(text))
		checkRat(t, "round trip", y, b)
		z, err := algebra.ParseRat(x.String())
		require.NoError(t, err)
		checkRat(t, "round trip of String", z, b)
	}
	x := algebra.RatFromInt(5)
	require.ErrorIs(t, x.UnmarshalText([]byte("five")), algebra.ErrSyntax)
	checkRat(t, "the target of refused text", x, big.NewRat(5, 1))
}

// FuzzRat compares arithmetic with math/big on the fractions a/b and c/d, which
// powers of two carry across the borders of words.
func FuzzRat(f *testing.F) {
	f.Add(int64(0), int64(1), int64(-1), int64(2), uint8(0))
	f.Add(int64(math.MaxInt64), int64(1), int64(1), int64(1), uint8(1))
	f.Add(int64(math.MinInt64), int64(-1), int64(math.MinInt64), int64(3), uint8(64))
	f.Add(int64(1)<<62, int64(3), int64(-1)<<62, int64(3), uint8(0x11))
	f.Fuzz(func(t *testing.T, a, b, c, d int64, shift uint8) {
		if b == 0 || d == 0 {
			return
		}
		bx, by := big.NewRat(a, b), big.NewRat(c, d)
		bx.Mul(bx, new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(shift&15))))
		by.Quo(by, new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(shift>>4))))
		x, y := algebra.RatFromBig(bx), algebra.RatFromBig(by)
		check := func(op string, got algebra.Rat, want *big.Rat) {
			if got.Big().Cmp(want) != 0 || got.Check() != nil {
				t.Fatalf("%v %s %v = %v (%v), want %v", x, op, y, got, got.Check(), want)
			}
		}
		check("+", x.Add(y), new(big.Rat).Add(bx, by))
		check("-", x.Sub(y), new(big.Rat).Sub(bx, by))
		check("*", x.Mul(y), new(big.Rat).Mul(bx, by))
		if by.Sign() != 0 {
			check("/", x.Quo(y), new(big.Rat).Quo(bx, by))
		}
		if x.Compare(y) != bx.Cmp(by) {
			t.Fatalf("Compare(%v, %v) = %d, want %d", x, y, x.Compare(y), bx.Cmp(by))
		}
		z, err := algebra.ParseRat(x.String())
		if err != nil || !z.Equal(x) {
			t.Fatalf("%v reads as %v, %v", x, z, err)
		}
	})
}

// FuzzParseRat checks that text is refused with ErrSyntax or read as math/big
// reads it.
func FuzzParseRat(f *testing.F) {
	for _, s := range []string{"-3", "22/7", "0.35", "1.5e-3", "1e1_0", "0x1p-2", "010/8", "1/-2"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		x, err := algebra.ParseRat(s)
		if err != nil {
			if !errors.Is(err, algebra.ErrSyntax) {
				t.Fatalf("%q is refused with %v", s, err)
			}
			return
		}
		if strings.Trim(s, "0123456789+-./eE") != "" {
			t.Fatalf("%q is read as %v", s, x)
		}
		if len(s) < 100 && !strings.Contains(s, "/") {
			if want, ok := new(big.Rat).SetString(s); !ok || want.Cmp(x.Big()) != 0 {
				t.Fatalf("%q is read as %v, want %v", s, x, want)
			}
		}
	})
}

func TestRatRandomAgainstBig(t *testing.T) {
	rng := algebratest.Rand(t)
	for range 2000 {
		x, y := algebratest.Rats(rng), algebratest.Rats(rng)
		checkRat(t, "sum", x.Add(y), new(big.Rat).Add(x.Big(), y.Big()))
		checkRat(t, "product", x.Mul(y), new(big.Rat).Mul(x.Big(), y.Big()))
	}
}

func BenchmarkRatAdd(b *testing.B) {
	for _, bits := range []int{8, 30, 60, 256} {
		b.Run("bits="+strconv.Itoa(bits), func(b *testing.B) {
			rng, gen := algebratest.Rand(b), algebratest.WideRats(bits)
			x, y := gen(rng), gen(rng)
			b.ReportAllocs()
			for b.Loop() {
				x.Add(y)
			}
		})
	}
}
