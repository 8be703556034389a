package algebra

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
)

// Decimal returns the decimal number with the given number of significant
// digits, at least 1, that is nearest to every number in x, ties away from
// zero, or false if x does not prove it. The notation is that of [RatDecimal].
func (x Ball) Decimal(digits int) (string, bool) {
	checkDigits(digits)
	if x.isZero() {
		return "0", true
	}
	if _, certain := x.Sign(); !certain {
		return "", false
	}
	lo, hi, e := x.endpoints()
	neg := lo.Sign() < 0
	if neg {
		lo, hi = hi.Neg(hi), lo.Neg(lo)
	}
	if max(e, -e) <= 1<<14 {
		return intervalDecimal(neg, lo, hi, e, digits)
	}
	// y = |x| 10^s has about as many digits before the point; both of its ends
	// are at least 10^(digits-1) for the right s.
	if neg {
		x = x.Neg()
	}
	low := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(digits)-1), nil)
	wp := uint(max(x.man.BitLen(), low.BitLen())) + 128
	exp10 := int64(float64(x.top())*math.Log10(2)) + 1
	for ; ; exp10-- {
		s := int64(digits) - 1 - exp10
		lo, hi, e = x.Mul(pow10(s, wp), wp).endpoints()
		if lo.Sign() <= 0 {
			return "", false
		}
		if scaledFloor(lo, e, 0).Cmp(low) >= 0 {
			break
		}
	}
	// Twice the value plus 1, halved and rounded down, rounds to nearest.
	a, b := scaledFloor(lo, e, 1), scaledFloor(hi, e, 1)
	a.Rsh(a.Add(a, intOne), 1)
	b.Rsh(b.Add(b, intOne), 1)
	if a.Cmp(b) != 0 {
		return "", false
	}
	return formatDecimal(neg, a.String(), exp10, digits), true
}

// intervalDecimal returns the decimal that all numbers from lo 2^e to hi 2^e,
// lo > 0, round to, for an e whose power can be written out.
func intervalDecimal(neg bool, lo, hi *big.Int, e int64, digits int) (string, bool) {
	low := new(big.Int).Lsh(power10(digits-1), 1)
	exp10 := int64(math.Floor(float64(int64(lo.BitLen())+e)*math.Log10(2) + 1e-6)) // never too low
	for {
		// Twice the value at the place of the last digit: plus 1 and halved, it is
		// rounded to nearest.
		s := int64(digits) - 1 - exp10
		a := twiceScaled(lo, e, s)
		if a.Cmp(low) < 0 {
			exp10--
			continue
		}
		b := a
		if lo.Cmp(hi) != 0 {
			b = twiceScaled(hi, e, s)
		}
		a.Rsh(a.Add(a, intOne), 1)
		if b != a {
			b.Rsh(b.Add(b, intOne), 1)
		}
		if a.Cmp(b) != 0 {
			return "", false
		}
		return formatDecimal(neg, a.String(), exp10, digits), true
	}
}

// twiceScaled returns floor(2 n 2^e 10^s) for n >= 0.
func twiceScaled(n *big.Int, e, s int64) *big.Int {
	// 10^s = 5^s 2^s; for a negative s, floor(floor(x)/5^-s) = floor(x/5^-s).
	if s >= 0 {
		return scaledFloor(new(big.Int).Mul(n, power5(int(s))), e+s, 1)
	}
	x := scaledFloor(n, e+s, 1)
	return x.Quo(x, power5(int(-s)))
}

// smallPowers5 and smallPowers10 hold the powers that most decimals need.
var smallPowers5, smallPowers10 = func() (five, ten [64]*big.Int) {
	for i := range five {
		five[i] = new(big.Int).Exp(big.NewInt(5), big.NewInt(int64(i)), nil)
		ten[i] = new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(i)), nil)
	}
	return five, ten
}()

// power5 returns 5^n and power10 returns 10^n, for reading only.
func power5(n int) *big.Int {
	if n < len(smallPowers5) {
		return smallPowers5[n]
	}
	return new(big.Int).Exp(big.NewInt(5), big.NewInt(int64(n)), nil)
}

func power10(n int) *big.Int {
	if n < len(smallPowers10) {
		return smallPowers10[n]
	}
	return new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(n)), nil)
}

// pow10 returns a ball around 10^n.
func pow10(n int64, prec uint) Ball {
	b := Ball{man: big.NewInt(10)}
	if n < 0 {
		b = Ball{man: intOne}.Quo(b, prec)
	}
	r := Ball{man: intOne}
	for k := uint64(max(n, -n)); k > 0; k >>= 1 {
		if k&1 == 1 {
			r = r.Mul(b, prec)
		}
		b = b.Sqr(prec)
	}
	return r
}

// RatDecimal returns the decimal number with the given number of significant
// digits, at least 1, that is nearest to x, ties away from zero. A number
// d.dd... 10^E is written out, like "12.06984053743" or "-0.0002107984", for
// E in [-5, 21), else like "5.075958897549e-435" or "1.50e+21". Trailing zeros
// are kept; zeros also fill an integer of more than the given number of digits.
// Zero is "0". It panics if digits is not positive.
func RatDecimal(x *big.Rat, digits int) string {
	checkDigits(digits)
	if x.Sign() == 0 {
		return "0"
	}
	n := new(big.Int).Abs(x.Num())
	l := float64(n.BitLen() - x.Denom().BitLen())
	exp10 := int64(math.Floor((l + 1) * math.Log10(2))) // log2 |x| is below l + 1
	ten := big.NewInt(10)
	low := new(big.Int).Exp(ten, big.NewInt(int64(digits)-1), nil)
	var num, den *big.Int
	for ; ; exp10-- {
		s := int64(digits) - 1 - exp10
		p := new(big.Int).Exp(ten, big.NewInt(max(s, -s)), nil)
		num, den = n, x.Denom()
		if s >= 0 {
			num = p.Mul(p, n)
		} else {
			den = p.Mul(p, den)
		}
		if num.Cmp(new(big.Int).Mul(low, den)) >= 0 {
			break
		}
	}
	q, r := new(big.Int).QuoRem(num, den, new(big.Int))
	if r.Lsh(r, 1).Cmp(den) >= 0 {
		q.Add(q, intOne)
	}
	return formatDecimal(x.Sign() < 0, q.String(), exp10, digits)
}

func checkDigits(digits int) {
	if digits < 1 {
		panic(fmt.Sprintf("algebra: %d digits asked for", digits))
	}
}

// formatDecimal writes d.dd... 10^exp10. The digits may be one too many, after
// rounding up to a power of ten.
func formatDecimal(neg bool, d string, exp10 int64, digits int) string {
	exp10 += int64(len(d) - digits)
	d = d[:digits]
	var b strings.Builder
	if neg {
		b.WriteByte('-')
	}
	switch e := int(exp10); {
	case exp10 < -5 || exp10 >= 21:
		b.WriteString(d[:1])
		if digits > 1 {
			b.WriteString("." + d[1:])
		}
		b.WriteByte('e')
		if exp10 > 0 {
			b.WriteByte('+')
		}
		b.WriteString(strconv.FormatInt(exp10, 10))
	case e < 0:
		b.WriteString("0." + strings.Repeat("0", -e-1) + d)
	case e+1 >= digits:
		b.WriteString(d + strings.Repeat("0", e+1-digits))
	default:
		b.WriteString(d[:e+1] + "." + d[e+1:])
	}
	return b.String()
}
