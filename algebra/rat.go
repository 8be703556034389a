package algebra

import (
	"math"
	"math/big"
	"math/bits"
	"strings"

	"example.org/closedform/algebra/internal/word"
)

// Rat is an immutable rational number in lowest terms. The zero value is 0.
//
// Numerators and denominators of at most 63 bits are held inline; larger ones
// in a big.Rat. A value has one representation only: the inline one whenever
// it fits.
type Rat struct {
	_   [0]func() // not comparable with ==: use Equal
	num int64
	den int64 // 0 reads as 1
	big *big.Rat
}

// RatFromInt returns n.
func RatFromInt(n int64) Rat {
	if n == math.MinInt64 {
		return Rat{big: new(big.Rat).SetInt64(n)}
	}
	return Rat{num: n, den: 1}
}

// NewRat returns a/b. It panics when b is 0.
func NewRat(a, b int64) Rat {
	if b == 0 {
		panic(ErrDivisionByZero)
	}
	if a == math.MinInt64 || b == math.MinInt64 {
		return RatFromBig(big.NewRat(a, b))
	}
	if b < 0 {
		a, b = -a, -b
	}
	if g := int64(word.GCD(word.Abs(a), uint64(b))); g > 1 {
		a, b = a/g, b/g
	}
	return Rat{num: a, den: b}
}

// RatFromBig returns the value of x, which is copied.
func RatFromBig(x *big.Rat) Rat {
	return ownRat(new(big.Rat).Set(x))
}

// RatFromBigInt returns the value of n, which is copied.
func RatFromBigInt(n *big.Int) Rat {
	if fits63(n) {
		return Rat{num: n.Int64(), den: 1}
	}
	return ownRat(new(big.Rat).SetInt(n))
}

// RatFromFrac returns a/b. It panics when b is 0.
func RatFromFrac(a, b *big.Int) Rat {
	if b.Sign() == 0 {
		panic(ErrDivisionByZero)
	}
	if fits63(a) && fits63(b) {
		return NewRat(a.Int64(), b.Int64())
	}
	return ownRat(new(big.Rat).SetFrac(a, b))
}

// ownRat takes possession of x.
func ownRat(x *big.Rat) Rat {
	if fits63(x.Num()) && fits63(x.Denom()) {
		return Rat{num: x.Num().Int64(), den: x.Denom().Int64()}
	}
	return Rat{big: x}
}

// fits63 tells whether |n| < 2^63, so that n and -n are both inline values.
func fits63(n *big.Int) bool { return n.BitLen() <= 63 }

// ParseRat reads an integer, a fraction of integers or a decimal with an
// optional power of ten, exactly: "-3", "22/7", "0.35", "1.5e-3".
func ParseRat(s string) (Rat, error) {
	// big.Rat also reads other bases and huge exponents; neither is wanted.
	if len(s) == 0 || len(s) > 1<<16 {
		return Rat{}, ErrSyntax
	}
	mantissa, exponent, hasExp := strings.Cut(strings.ToLower(s), "e")
	for _, r := range mantissa {
		if (r < '0' || r > '9') && !strings.ContainsRune("+-./", r) {
			return Rat{}, ErrSyntax
		}
	}
	if hasExp && (len(strings.Trim(exponent, "+-")) > 5 || strings.ContainsAny(mantissa+exponent, "/_")) {
		return Rat{}, ErrSyntax
	}
	if num, den, isFrac := strings.Cut(mantissa, "/"); isFrac {
		// A leading zero must not be read as an octal prefix.
		a, ok1 := new(big.Int).SetString(num, 10)
		b, ok2 := new(big.Int).SetString(den, 10)
		if !ok1 || !ok2 || b.Sign() <= 0 {
			return Rat{}, ErrSyntax
		}
		return RatFromFrac(a, b), nil
	}
	x, ok := new(big.Rat).SetString(s)
	if !ok {
		return Rat{}, ErrSyntax
	}
	return ownRat(x), nil
}

func (x Rat) denom() int64 {
	if x.den == 0 {
		return 1
	}
	return x.den
}

// Big returns x as a new big.Rat.
func (x Rat) Big() *big.Rat {
	if x.big != nil {
		return new(big.Rat).Set(x.big)
	}
	return big.NewRat(x.num, x.denom())
}

// asBig returns x as a big.Rat for reading only.
func (x Rat) asBig() *big.Rat {
	if x.big != nil {
		return x.big
	}
	return big.NewRat(x.num, x.denom())
}

// Num returns the numerator, which carries the sign.
func (x Rat) Num() *big.Int {
	if x.big != nil {
		return new(big.Int).Set(x.big.Num())
	}
	return big.NewInt(x.num)
}

// Den returns the positive denominator.
func (x Rat) Den() *big.Int {
	if x.big != nil {
		return new(big.Int).Set(x.big.Denom())
	}
	return big.NewInt(x.denom())
}

// Add returns x + y.
func (x Rat) Add(y Rat) Rat {
	if x.big == nil && y.big == nil {
		a, b, c, d := x.num, x.denom(), y.num, y.denom()
		if b == 1 && d == 1 {
			if s := a + c; (s > a) == (c > 0) && s != math.MinInt64 {
				return Rat{num: s, den: 1}
			}
		} else if ad, ok := mul64(a, d); ok {
			if cb, ok := mul64(c, b); ok {
				if bd, ok := mul64(b, d); ok {
					if s := ad + cb; (s > ad) == (cb > 0) && s != math.MinInt64 {
						return NewRat(s, bd)
					}
				}
			}
		}
	}
	return ownRat(new(big.Rat).Add(x.asBig(), y.asBig()))
}

// Sub returns x - y.
func (x Rat) Sub(y Rat) Rat { return x.Add(y.Neg()) }

// Neg returns -x.
func (x Rat) Neg() Rat {
	if x.big != nil {
		return Rat{big: new(big.Rat).Neg(x.big)}
	}
	return Rat{num: -x.num, den: x.den}
}

// Mul returns x y.
func (x Rat) Mul(y Rat) Rat {
	if x.big == nil && y.big == nil {
		a, b, c, d := x.num, x.denom(), y.num, y.denom()
		if b != 1 || d != 1 {
			// Cross-cancelling first keeps the products small and in lowest terms.
			if g := int64(word.GCD(word.Abs(a), uint64(d))); g > 1 {
				a, d = a/g, d/g
			}
			if g := int64(word.GCD(word.Abs(c), uint64(b))); g > 1 {
				c, b = c/g, b/g
			}
		}
		if n, ok := mul64(a, c); ok {
			if m, ok := mul64(b, d); ok {
				return Rat{num: n, den: m}
			}
		}
	}
	return ownRat(new(big.Rat).Mul(x.asBig(), y.asBig()))
}

// Inv returns 1/x. It panics when x is 0.
func (x Rat) Inv() Rat {
	if x.IsZero() {
		panic(ErrDivisionByZero)
	}
	if x.big != nil {
		return ownRat(new(big.Rat).Inv(x.big))
	}
	if x.num < 0 {
		return Rat{num: -x.denom(), den: -x.num}
	}
	return Rat{num: x.denom(), den: x.num}
}

// Quo returns x/y. It panics when y is 0.
func (x Rat) Quo(y Rat) Rat { return x.Mul(y.Inv()) }

// Pow returns x^n. A negative n inverts, and panics when x is 0.
func (x Rat) Pow(n int) Rat {
	if n < 0 {
		x = x.Inv()
	}
	r := RatFromInt(1)
	for m := word.Abs(int64(n)); m > 0; m >>= 1 {
		if m&1 == 1 {
			r = r.Mul(x)
		}
		if m > 1 {
			x = x.Mul(x)
		}
	}
	return r
}

// Sign returns -1, 0 or 1.
func (x Rat) Sign() int {
	if x.big != nil {
		return x.big.Sign()
	}
	switch {
	case x.num < 0:
		return -1
	case x.num > 0:
		return 1
	}
	return 0
}

// IsZero tells whether x = 0.
func (x Rat) IsZero() bool { return x.big == nil && x.num == 0 }

// IsOne tells whether x = 1.
func (x Rat) IsOne() bool { return x.big == nil && x.num == 1 && x.denom() == 1 }

// IsInt tells whether x is an integer.
func (x Rat) IsInt() bool {
	if x.big != nil {
		return x.big.IsInt()
	}
	return x.denom() == 1
}

// Int64 returns x if it is an integer that fits.
func (x Rat) Int64() (int64, bool) {
	if x.big == nil && x.denom() == 1 {
		return x.num, true
	}
	if x.big != nil && x.big.IsInt() && x.big.Num().IsInt64() { // -2^63
		return x.big.Num().Int64(), true
	}
	return 0, false
}

// Abs returns |x|.
func (x Rat) Abs() Rat {
	if x.Sign() < 0 {
		return x.Neg()
	}
	return x
}

// Equal tells whether x = y.
func (x Rat) Equal(y Rat) bool { return x.Compare(y) == 0 }

// Compare returns -1, 0 or 1 as x is less than, equal to or greater than y.
func (x Rat) Compare(y Rat) int {
	if x.big == nil && y.big == nil && x.denom() == y.denom() {
		switch {
		case x.num < y.num:
			return -1
		case x.num > y.num:
			return 1
		}
		return 0
	}
	return x.asBig().Cmp(y.asBig())
}

// BitLen returns the larger of the bit lengths of numerator and denominator.
func (x Rat) BitLen() int {
	if x.big != nil {
		return max(x.big.Num().BitLen(), x.big.Denom().BitLen())
	}
	return max(bits.Len64(word.Abs(x.num)), bits.Len64(uint64(x.denom())))
}

// Sqrt returns the non-negative rational square root of x, if it has one.
func (x Rat) Sqrt() (Rat, bool) {
	if x.Sign() < 0 {
		return Rat{}, false
	}
	n, d := x.Num(), x.Den()
	rn, rd := new(big.Int).Sqrt(n), new(big.Int).Sqrt(d)
	if new(big.Int).Mul(rn, rn).Cmp(n) != 0 || new(big.Int).Mul(rd, rd).Cmp(d) != 0 {
		return Rat{}, false
	}
	return RatFromFrac(rn, rd), true
}

// Float64 returns the float64 nearest to x.
func (x Rat) Float64() float64 {
	f, _ := x.asBig().Float64()
	return f
}

// String returns the shortest exact form, "-3" or "22/7".
func (x Rat) String() string { return x.asBig().RatString() }

// MarshalText implements encoding.TextMarshaler with the form of String.
func (x Rat) MarshalText() ([]byte, error) { return []byte(x.String()), nil }

// UnmarshalText implements encoding.TextUnmarshaler with the grammar of ParseRat.
func (x *Rat) UnmarshalText(text []byte) error {
	v, err := ParseRat(string(text))
	if err == nil {
		*x = v
	}
	return err
}

// mul64 returns x*y if its absolute value is below 2^63.
func mul64(x, y int64) (int64, bool) {
	hi, lo := bits.Mul64(word.Abs(x), word.Abs(y))
	if hi != 0 || lo > math.MaxInt64 {
		return 0, false
	}
	if (x < 0) != (y < 0) {
		return -int64(lo), true
	}
	return int64(lo), true
}
