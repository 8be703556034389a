package expr_test

import (
	"context"
	"fmt"
	"math/big"
	"math/rand"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

// floatBits is the precision of the independent arithmetic of these tests.
const floatBits = 320

func float(x *big.Rat) *big.Float { return new(big.Float).SetPrec(floatBits).SetRat(x) }

func floatInt(n int64) *big.Float { return float(big.NewRat(n, 1)) }

// floatOp returns a new value, as those of big.Float overwrite their receiver.
func floatOp(op func(z, x, y *big.Float) *big.Float, x, y *big.Float) *big.Float {
	return op(new(big.Float).SetPrec(floatBits), x, y)
}

func floatAdd(x, y *big.Float) *big.Float { return floatOp((*big.Float).Add, x, y) }
func floatSub(x, y *big.Float) *big.Float { return floatOp((*big.Float).Sub, x, y) }
func floatMul(x, y *big.Float) *big.Float { return floatOp((*big.Float).Mul, x, y) }
func floatQuo(x, y *big.Float) *big.Float { return floatOp((*big.Float).Quo, x, y) }

// floatPi is pi by Machin's formula, 16 atan(1/5) - 4 atan(1/239).
var floatPi = func() *big.Float {
	atan := func(n int64) *big.Float {
		sum, power := floatInt(0), floatQuo(floatInt(1), floatInt(n))
		for k := int64(0); k < 150; k++ {
			term := floatQuo(power, floatInt(2*k+1))
			if k%2 == 1 {
				term.Neg(term)
			}
			sum = floatAdd(sum, term)
			power = floatQuo(power, floatInt(n*n))
		}
		return sum
	}
	return floatSub(floatMul(floatInt(16), atan(5)), floatMul(floatInt(4), atan(239)))
}()

// floatSeries sums x^k/k! over all k with k mod step = first, with alternating
// signs for the step 2: e^x, cos x, sin x by plain summation.
func floatSeries(x *big.Float, first, step int) *big.Float {
	sum, term := floatInt(0), floatInt(1)
	for k := range 400 {
		if k > 0 {
			term = floatQuo(floatMul(term, x), floatInt(int64(k)))
		}
		if k%step != first%step {
			continue
		}
		if step == 2 && k/2%2 == 1 {
			sum = floatSub(sum, term)
		} else {
			sum = floatAdd(sum, term)
		}
	}
	return sum
}

func floatExp(x *big.Float) *big.Float { return floatSeries(x, 0, 1) }
func floatCos(x *big.Float) *big.Float { return floatSeries(x, 0, 2) }
func floatSin(x *big.Float) *big.Float { return floatSeries(x, 1, 2) }

// floatRoot is the q-th root by Newton's iteration.
func floatRoot(x *big.Float, q int) *big.Float {
	y := floatAdd(x, floatInt(1))
	for range 600 {
		power := floatInt(1)
		for range q - 1 {
			power = floatMul(power, y)
		}
		y = floatSub(y, floatQuo(floatSub(floatMul(power, y), x), floatMul(floatInt(int64(q)), power)))
	}
	return y
}

// known is a constant as text with its value by independent arithmetic.
type known struct {
	text  string
	value *big.Float
}

// knownConstants are constants with values; the sources are definitions.
func knownConstants() []known {
	rat := func(a, b int64) *big.Float { return float(big.NewRat(a, b)) }
	sqrt := func(x *big.Float) *big.Float { return floatRoot(x, 2) }
	piTimes := func(a, b int64) *big.Float { return floatMul(floatPi, rat(a, b)) }
	return []known{
		{"pi", floatPi},
		{"sqrt(2)", sqrt(rat(2, 1))},
		{"sqrt(3)", sqrt(rat(3, 1))},
		{"sqrt(8)", sqrt(rat(8, 1))},
		{"sqrt(4)", rat(2, 1)},
		{"sqrt(4/9)", rat(2, 3)},
		{"sqrt(1/2)", sqrt(rat(1, 2))},
		{"2^(1/3)", floatRoot(rat(2, 1), 3)},
		{"(27/4)^(1/3)", floatRoot(rat(27, 4), 3)},
		{"3^(1/4)", floatRoot(rat(3, 1), 4)},
		{"sqrt(2 + sqrt(3))", sqrt(floatAdd(rat(2, 1), sqrt(rat(3, 1))))},
		{"sqrt(5 - 2*sqrt(6))", sqrt(floatSub(rat(5, 1), floatMul(rat(2, 1), sqrt(rat(6, 1)))))},
		{"sqrt(2 + sqrt(2 + sqrt(2)))", sqrt(floatAdd(rat(2, 1), sqrt(floatAdd(rat(2, 1), sqrt(rat(2, 1))))))},
		{"cos(pi/5)", floatCos(piTimes(1, 5))},
		{"sin(2*pi/5)", floatSin(piTimes(2, 5))},
		{"cos(pi/7)", floatCos(piTimes(1, 7))},
		{"sin(3*pi/7)", floatSin(piTimes(3, 7))},
		{"cos(5*pi/8)", floatCos(piTimes(5, 8))},
		{"sin(-pi/9)", floatSin(piTimes(-1, 9))},
		{"cos(pi/12)", floatCos(piTimes(1, 12))},
		{"sin(11*pi/15)", floatSin(piTimes(11, 15))},
		{"exp(1)", floatExp(rat(1, 1))},
		{"exp(-7/3)", floatExp(rat(-7, 3))},
		{"exp(pi)", floatExp(floatPi)},
		{"exp(sqrt(2))", floatExp(sqrt(rat(2, 1)))},
		{"cos(1)", floatCos(rat(1, 1))},
		{"sin(-5/2)", floatSin(rat(-5, 2))},
		{"cos(1 + pi/3)", floatCos(floatAdd(rat(1, 1), piTimes(1, 3)))},
		{"sin(sqrt(2)/3)", floatSin(floatQuo(sqrt(rat(2, 1)), rat(3, 1)))},
		{"cosh(1)", floatQuo(floatAdd(floatExp(rat(1, 1)), floatExp(rat(-1, 1))), rat(2, 1))},
		{"sinh(pi)", floatQuo(floatSub(floatExp(floatPi), floatExp(floatMul(rat(-1, 1), floatPi))), rat(2, 1))},
		{"exp(exp(-1))", floatExp(floatExp(rat(-1, 1)))},
	}
}

// digitsOf returns f(t) to 40 digits in the form of big.Float.
func digitsOf(t *testing.T, f expr.Function, at *big.Rat) string {
	t.Helper()
	got, err := f.At(context.Background(), at, 40)
	require.NoError(t, err, "%s", f)
	x, _, err := big.ParseFloat(got, 10, floatBits, big.ToNearestEven)
	require.NoError(t, err)
	return x.Text('e', 39)
}

func TestKnownConstants(t *testing.T) {
	for _, c := range knownConstants() {
		f := function(t, c.text)
		assert.Equal(t, c.value.Text('e', 39), digitsOf(t, f, new(big.Rat)), c.text)
		requireEqual(t, f, function(t, f.String()), c.text)
	}
}

// TestRandomConstants puts the constants together and compares with the same
// operations on their values; the text of the result reads back.
func TestRandomConstants(t *testing.T) {
	rnd := rand.New(rand.NewSource(11))
	all := knownConstants()
	// Groups whose algebraic numbers stay of a low degree together.
	groups := [][]int{
		{0, 1, 2, 3, 4, 5, 6, 11, 21, 22, 25, 26},
		{0, 1, 7, 13, 23, 24, 27},
		{0, 15, 21, 29, 30}, {0, 7, 8, 22}, {10, 11, 19, 25}, {1, 9, 28, 31},
	}
	for range 60 {
		group := groups[rnd.Intn(len(groups))]
		pick := func() known { return all[group[rnd.Intn(len(group))]] }
		a := pick()
		for range 1 + rnd.Intn(4) {
			b := pick()
			switch rnd.Intn(5) {
			case 0:
				a = known{"(" + a.text + ") + (" + b.text + ")", floatAdd(a.value, b.value)}
			case 1:
				a = known{"(" + a.text + ") - 3/7*(" + b.text + ")", floatSub(a.value, floatMul(float(big.NewRat(3, 7)), b.value))}
			case 2:
				a = known{"(" + a.text + ")*(" + b.text + ")", floatMul(a.value, b.value)}
			case 3:
				a = known{"(" + a.text + ")/(" + b.text + ")", floatQuo(a.value, b.value)}
			case 4:
				a = known{"1/((" + a.text + ")^2 + 1)", floatQuo(floatInt(1), floatAdd(floatMul(a.value, a.value), floatInt(1)))}
			}
		}
		f := function(t, a.text)
		if small := a.value.MantExp(nil) < -200; small || a.value.Sign() == 0 {
			assert.True(t, f.IsZero(), "%s = %s", a.text, f)
			continue
		}
		assert.Equal(t, a.value.Text('e', 39), digitsOf(t, f, new(big.Rat)), a.text)
		requireEqual(t, f, function(t, f.String()), a.text)
	}
}

// TestTimeFunctionsOfConstants compares functions of time with the series.
func TestTimeFunctionsOfConstants(t *testing.T) {
	rat := func(a, b int64) *big.Float { return float(big.NewRat(a, b)) }
	sqrt2 := floatRoot(rat(2, 1), 2)
	for _, at := range []*big.Rat{new(big.Rat), big.NewRat(1, 1), big.NewRat(-7, 3), big.NewRat(25, 2)} {
		x := float(at)
		angle := floatAdd(floatQuo(floatMul(floatPi, x), rat(12, 1)), rat(1, 3))
		for text, want := range map[string]*big.Float{
			"exp(-sqrt(2)*t)":                 floatExp(floatMul(floatMul(rat(-1, 1), sqrt2), x)),
			"sin(2*pi*t/24 + 1/3)":            floatSin(angle),
			"2*sin(pi*t/12 + 1/3) - cos(1)*t": floatSub(floatMul(rat(2, 1), floatSin(angle)), floatMul(floatCos(rat(1, 1)), x)),
			"exp(-(t - 5)/4)*cos(sqrt(2)*t)":  floatMul(floatExp(floatQuo(floatSub(rat(5, 1), x), rat(4, 1))), floatCos(floatMul(sqrt2, x))),
			"t^2*exp(pi*t/5) + pi":            floatAdd(floatMul(floatMul(x, x), floatExp(floatQuo(floatMul(floatPi, x), rat(5, 1)))), floatPi),
		} {
			f := function(t, text)
			assert.Equal(t, want.Text('e', 39), digitsOf(t, f, at), "%s at %s", text, at.RatString())
		}
	}
}

// TestExactZeros: values that are 0 are "0" and not digits.
func TestExactZeros(t *testing.T) {
	for _, c := range []struct{ text, at string }{
		{"sin(pi*t)", "1"}, {"sin(pi*t)", "-17"}, {"cos(pi*t)", "1/2"}, {"sin(2*pi*t/24 + pi/6)", "10"},
		{"cos(pi*t) - sqrt(2)/2", "1/4"}, {"cos(pi*t/5) - (1 + sqrt(5))/4", "1"},
		{"cos(pi*t/7) - cos(pi*t/7)^3*4 + 3*cos(pi*t/7) - cos(pi/7) + cos(3*pi/7)", "1"},
		{"exp(t) - exp(1)", "1"}, {"exp(2*t) - exp(1)^2*exp(1)", "3/2"}, {"sin(t + 1) - sin(3)", "2"},
		{"t*sqrt(2) - 2", "0"}, {"sqrt(2)*t - sqrt(8)", "2"}, {"exp(sqrt(2)*t)*exp(-sqrt(8)) - 1", "2"},
		{"t^2 - 2*pi*t + pi^2", "0"}, {"exp(-pi*t) + cos(pi*t)", "1"},
	} {
		at, ok := new(big.Rat).SetString(c.at)
		require.True(t, ok)
		if c.text == "t*sqrt(2) - 2" || strings.HasPrefix(c.text, "t^2 - 2*pi") || strings.HasPrefix(c.text, "exp(-pi*t)") {
			got, err := function(t, c.text).At(context.Background(), at, 20)
			require.NoError(t, err)
			assert.NotEqual(t, "0", got, "%s is not 0 at %s", c.text, c.at)
			continue
		}
		got, err := function(t, c.text).At(context.Background(), at, 20)
		require.NoError(t, err, c.text)
		assert.Equal(t, "0", got, "%s at %s", c.text, c.at)
	}
}

// TestConstantIdentities: what is zero is recognised as zero.
func TestConstantIdentities(t *testing.T) {
	for _, zero := range []string{
		"sqrt(8) - 2*sqrt(2)", "sqrt(4) - 2", "sqrt(12)*sqrt(3) - 6", "sqrt(2)*sqrt(3) - sqrt(6)", "sqrt(1/2) - sqrt(2)/2",
		"sqrt(3 + 2*sqrt(2)) - 1 - sqrt(2)", "sqrt(5 + 2*sqrt(6)) - sqrt(2) - sqrt(3)",
		"sqrt(2 + sqrt(3)) - (sqrt(6) + sqrt(2))/2",
		"(2 + sqrt(5))^(1/3) - (1 + sqrt(5))/2", // from memory
		"(7 + 5*sqrt(2))^(1/3) - 1 - sqrt(2)",
		"2^(1/3)*4^(1/3) - 2", "16^(1/3) - 2*2^(1/3)", "(2^(1/3))^3 - 2", "4^(1/4) - sqrt(2)", "8^(2/3) - 4", "2^(3/2) - sqrt(8)",
		"cos(pi/5) - cos(2*pi/5) - 1/2", "cos(pi/7) - cos(2*pi/7) + cos(3*pi/7) - 1/2", "cos(pi/9)*cos(2*pi/9)*cos(4*pi/9) - 1/8",
		"sin(pi/10)*sin(3*pi/10) - 1/4", "cos(pi/12) - (sqrt(6) + sqrt(2))/4", "cos(pi/3) - 1/2", "sin(pi) - cos(pi/2)",
		"8*cos(pi/7)^3 - 4*cos(pi/7)^2 - 4*cos(pi/7) + 1",
		"sin(pi/5)^2 - (5 - sqrt(5))/8", "cos(100*pi/3) + 1/2",
		"exp(1)*exp(2) - exp(3)", "exp(1/2)^2 - exp(1)", "exp(a)*exp(b) - exp(a + b)", "exp(a)/exp(a/3)^3 - 1", "exp(pi)*exp(-pi) - 1",
		"exp(sqrt(2))^2 - exp(sqrt(8))", "exp(exp(a))*exp(-exp(a)) - 1", "exp(a*b/2)^4 - exp(2*a*b)",
		"sin(a)^2 + cos(a)^2 - 1", "sin(2*a) - 2*sin(a)*cos(a)", "cos(a + b) - cos(a)*cos(b) + sin(a)*sin(b)", "sin(a + pi/2) - cos(a)",
		"sin(a + 2*pi) - sin(a)", "cos(3*a) - 4*cos(a)^3 + 3*cos(a)", "cos(a)^2 - (1 + cos(2*a))/2", "sin(a/2)^2 - (1 - cos(a))/2",
		"sin(1 + pi/4) - sqrt(2)/2*(sin(1) + cos(1))", "cos(a*pi)^2 + sin(a*pi)^2 - 1", "cosh(a)^2 - sinh(a)^2 - 1", "cosh(1) - (exp(1) + exp(-1))/2",
		"(k^2 - 1)/(k - 1) - k - 1", "1/(1 + sqrt(2)) - sqrt(2) + 1", "1/(k + sqrt(2)) - (k - sqrt(2))/(k^2 - 2)",
		"(k^2 - 2)/(k - sqrt(2)) - k - sqrt(2)", "1/(2^(1/3) - 1) - 4^(1/3) - 2^(1/3) - 1", "(pi^2 - 4)/(pi - 2) - pi - 2",
		"(a^3 - b^3)/(a - b) - a^2 - a*b - b^2", "1/(1 + 1/(1 + 1/k)) - (k + 1)/(2*k + 1)",
		"sin(t + a)^2 + cos(t + a)^2 - 1", "sin(w*t + a) - sin(w*t)*cos(a) - cos(w*t)*sin(a)", "exp(-(t - 5)) - exp(5)*exp(-t)",
		"exp(sqrt(2)*t)*exp(-sqrt(3)*t) - exp((sqrt(2) - sqrt(3))*t)", "cos(pi*t)^2 - sin(pi*t)^2 - cos(2*pi*t)",
	} {
		f, err := expr.ParseFunction(zero, expr.Limits{})
		require.NoError(t, err, zero)
		assert.True(t, f.IsZero(), "%s = %s", zero, f)
		off := function(t, zero+" + 1/1000000007")
		assert.False(t, off.IsZero(), zero)
	}
	for _, nonzero := range []string{
		"sqrt(2) + sqrt(3) - 314626437/100000000", "pi - 355/113", "exp(pi) - pi - 20", "exp(pi*sqrt(163)) - 262537412640768744",
		"sqrt(a^2 + 1) - a", "sin(a)^2 - sin(b)^2", "cos(1)*pi - sin(1)*pi", "exp(a) - exp(b)", "pi^2 - 10", "sin(11) + 1",
		"2^(1/3) - 5/4", "cos(pi/7) - 9/10", "exp(1) - 2721/1001",
	} {
		f, err := expr.ParseFunction(nonzero, expr.Limits{})
		require.NoError(t, err, nonzero)
		assert.False(t, f.IsZero(), nonzero)
	}
}

// TestNearlyEqualConstants: signs of numbers that nearly coincide, after values
// by higher precision.
func TestNearlyEqualConstants(t *testing.T) {
	for text, want := range map[string]*big.Float{
		// From memory: Ramanujan's constant is 262537412640768743.99999999999925...
		"exp(pi*sqrt(163)) - 262537412640768744": floatSub(floatExp(floatMul(floatPi, floatRoot(floatInt(163), 2))), floatInt(262537412640768744)),
		"sqrt(2) - 1393/985":                     floatSub(floatRoot(floatInt(2), 2), float(big.NewRat(1393, 985))),
		"355/113 - pi":                           floatSub(float(big.NewRat(355, 113)), floatPi),
		"sqrt(2) + sqrt(3) - 14161/4501":         floatSub(floatAdd(floatRoot(floatInt(2), 2), floatRoot(floatInt(3), 2)), float(big.NewRat(14161, 4501))),
	} {
		assert.Equal(t, want.Text('e', 39), digitsOf(t, function(t, text), new(big.Rat)), text)
	}
	assert.True(t, strings.HasPrefix(digitsOf(t, function(t, "exp(pi*sqrt(163)) - 262537412640768744"), new(big.Rat)), "-7.499274028"))
	// (1 + sqrt(2))^n is nearly an integer: p = the integer next to it, and
	// (1 + sqrt(2))^n - p = -(1 - sqrt(2))^n exactly.
	p, q := big.NewInt(1), big.NewInt(1) // (1 + sqrt 2)^n = p + q sqrt 2
	for n := 1; n <= 120; n++ {
		if n%40 == 0 {
			twice := new(big.Int).Lsh(p, 1)
			f := function(t, fmt.Sprintf("(1 + sqrt(2))^%d - %s", n, twice))
			requireEqual(t, function(t, fmt.Sprintf("-(1 - sqrt(2))^%d", n)), f)
			got, err := f.At(context.Background(), new(big.Rat), 5)
			require.NoError(t, err)
			assert.True(t, strings.HasPrefix(got, "-"), got)
			// The square root of it is refused, that of its negative is not.
			_, err = expr.ParseFunction("sqrt("+f.String()+")", expr.Limits{})
			require.Error(t, err)
			root := function(t, fmt.Sprintf("sqrt(%s - (1 + sqrt(2))^%d)", twice, n))
			requireEqual(t, function(t, fmt.Sprintf("(sqrt(2) - 1)^%d", n/2)), root)
		}
		// (p + q sqrt 2)(1 + sqrt 2)
		p, q = new(big.Int).Add(p, new(big.Int).Lsh(q, 1)), new(big.Int).Add(p, q)
	}
}

// constantText is the text of a random function with pi, roots, phases and
// symbols.
func (g generator) constantText() string {
	pick := func(list ...string) string { return list[g.Intn(len(list))] }
	coefficient := func() string {
		return pick("2", "-1/3", "pi", "sqrt(2)", "k", "(k - 1)", "1/(k + 2)", "sqrt(3)/k", "exp(-1)", "cos(phi)", "sin(phi)", "exp(k)", "(pi + sqrt(2))", "sqrt(6)")
	}
	rate := func() string { return pick("-2", "-k", "-pi", "-sqrt(2)", "-k/2", "-(k + 1)", "-sqrt(3)") }
	angle := func() string {
		return pick("pi*t/12", "2*t", "w*t", "sqrt(2)*t", "pi*t/12 + phi", "w*t - phi", "t + 1", "2*pi*t + pi/4")
	}
	var terms []string
	for range 1 + g.Intn(3) {
		term := coefficient()
		switch g.Intn(5) {
		case 0:
			term += "*exp(" + rate() + "*t)"
		case 1:
			term += "*sin(" + angle() + ")"
		case 2:
			term += "*t*cos(" + angle() + ")"
		case 3:
			term += "*exp(" + rate() + "*t)*cos(" + angle() + ")"
		case 4:
			term += "*" + coefficient() + "*t^2"
		}
		terms = append(terms, term)
	}
	return strings.Join(terms, " + ")
}

// TestConstantRoundTrip: functions over fields of constants are a differential
// vector space, and their text reads back.
func TestConstantRoundTrip(t *testing.T) {
	g := newGenerator(21)
	for range 30 {
		src := g.constantText()
		f := function(t, src)
		requireEqual(t, f, function(t, f.String()), src)
		h := function(t, g.constantText())
		requireEqual(t, f.Add(h).Derivative(), f.Derivative().Add(h.Derivative()), src)
		requireEqual(t, f.Integral().Derivative(), f, src)
		requireEqual(t, f.TimesT().Derivative(), f.Derivative().TimesT().Add(f), src)
		require.True(t, f.Sub(f).IsZero())
		require.True(t, f.Add(h).Sub(h).Equal(f))
		require.NotEmpty(t, f.LaTeX())
	}
}

// TestConstantSubstitution: substituting numbers commutes with evaluation of the
// text with the numbers in it.
func TestConstantSubstitution(t *testing.T) {
	g := newGenerator(22)
	for range 40 {
		src := g.constantText()
		values := map[string]string{
			"k":   []string{"1", "3", "1/2", "sqrt(2)", "pi", "exp(1)"}[g.Intn(6)],
			"w":   []string{"2", "pi/12", "sqrt(2)", "sqrt(3)", "0"}[g.Intn(5)],
			"phi": []string{"0", "pi/4", "1", "pi", "-pi/3"}[g.Intn(5)],
		}
		nodes := map[string]expr.Node{}
		text := " " + src
		for name, v := range values {
			n, err := expr.Parse(v, expr.Limits{})
			require.NoError(t, err)
			nodes[name] = n
		}
		for _, name := range []string{"k", "w", "phi"} {
			for _, before := range " (/*-+" {
				for _, after := range " )/*-+" {
					text = strings.ReplaceAll(text, string(before)+name+string(after), string(before)+"("+values[name]+")"+string(after))
				}
			}
		}
		got, err := function(t, src).Substitute(context.Background(), nodes)
		require.NoError(t, err, "%s with %v", src, values)
		requireEqual(t, function(t, text), got, src, values)
		assert.Empty(t, got.Parameters(), src)
	}
}

// Square roots of u + v sqrt(m) that are sums of two square roots are read as these.
func TestDenestedRoots(t *testing.T) {
	for src, want := range map[string]string{
		"exp(sqrt(5 + 2*sqrt(6))*t)":  "exp((sqrt(2) + sqrt(3))*t)",
		"exp(sqrt(5 - 2*sqrt(6))*t)":  "exp((sqrt(3) - sqrt(2))*t)",
		"sqrt(3 + 2*sqrt(2))*t":       "(1 + sqrt(2))*t",
		"sqrt(7/2 - 3/2*sqrt(5))*t":   "(3 - sqrt(5))*t/2",
		"sqrt(12 + 4*sqrt(5))*exp(t)": "(sqrt(2) + sqrt(10))*exp(t)",
		"sqrt(2 + sqrt(2))*exp(t)":    "sqrt(2 + sqrt(2))*exp(t)",
	} {
		f := function(t, src)
		assert.Equal(t, want, f.String(), src)
		requireEqual(t, f, function(t, want))
	}
}

// No name of a symbol is taken for an algebraic number.
func TestSymbolsBesideRoots(t *testing.T) {
	for _, src := range []string{
		"exp(sqrt(2)*t) + exp(a*t)", "cos(sqrt(2)*t) + sin(a*t)", "cos(sqrt(a^2 + 1)*t) + cos(a*t)", "exp(sqrt(2))*t + exp(a)",
		"2*cos(sqrt(2)*t)*exp(-t) + t*cos(a*t)*exp(-t)", "x*exp(sqrt(3)*t) + root*exp(root*t)",
	} {
		f := function(t, src)
		requireEqual(t, f, function(t, f.String()), src)
		values := map[string]*big.Rat{"a": big.NewRat(5, 7), "x": big.NewRat(1, 3), "root": big.NewRat(2, 3)}
		want := src
		for name, x := range values {
			want = regexp.MustCompile(`\b`+name+`\b`).ReplaceAllString(want, "("+x.RatString()+")")
		}
		text := f.String()
		for name, x := range values {
			text = regexp.MustCompile(`\b`+name+`\b`).ReplaceAllString(text, "("+x.RatString()+")")
		}
		requireEqual(t, function(t, want), function(t, text), src)
	}
}

// Square roots of sums with pi or e beside a root are not denested, and exact roots
// are positive.
func TestRootsOfTranscendentals(t *testing.T) {
	for _, src := range []string{"sumroots(z, z^2 + 3 + 2*sqrt(2) + pi, exp(z*t))", "sumroots(z, z^2 + 2 + sqrt(3)*pi, exp(z*t))"} {
		assert.Contains(t, function(t, src).String(), "pi")
	}
	for src, want := range map[string]string{
		"cos(cos(1)*t)":   "cos(cos(1)*t)",
		"cos((pi - 4)*t)": "cos((4 - pi)*t)",
	} {
		f := function(t, src)
		assert.Equal(t, want, f.String())
		for _, form := range []expr.Form{{}, {Amplitude: true}, {Numbers: expr.DecimalNumbers, Digits: 30}} {
			requireValue(t, f, form)
		}
	}
	for _, src := range []string{
		"3*cos(cos(1)*t) + 4*sin(cos(1)*t)", "3*cos((pi - 4)*t) + 4*sin((pi - 4)*t)", "3*cos(1)*cos(t) + 4*cos(1)*sin(t)",
		"(pi - 4)*(3*cos(t) + 4*sin(t))", "(exp(1) - 3)*cos(2*t) + sin(2*t)", "10*cos(5*t) + 10*sqrt(2)*cos(5*t) + 7*exp(1)*sin(5*t)",
	} {
		for _, form := range []expr.Form{{}, {Amplitude: true}, {Numbers: expr.DecimalNumbers, Digits: 30}, {Numbers: expr.DecimalNumbers, Digits: 30, Amplitude: true}} {
			requireValue(t, function(t, src), form)
		}
	}
}

// requireValue asserts that a written form has the value of the function.
func requireValue(t *testing.T, f expr.Function, form expr.Form) {
	t.Helper()
	n, err := f.Write(context.Background(), form)
	require.NoError(t, err)
	g, err := expr.FunctionOf(n, "t", expr.Limits{})
	require.NoError(t, err, n.String())
	x := big.NewRat(7, 5)
	want, err := f.At(context.Background(), x, 24)
	require.NoError(t, err)
	got, err := g.At(context.Background(), x, 24)
	require.NoError(t, err)
	assert.Equal(t, want, got, "%s written %s", f, n)
}

// Roots multiply sums over named roots; functions without a common field differ.
func TestRootsBesideNamedRoots(t *testing.T) {
	f := function(t, "2^(1/3)*sumroots(z, z^3 - z - 1, exp(z*t))")
	requireEqual(t, f, function(t, f.String()))
	assert.False(t, function(t, "exp(2^(1/5)*t)").Equal(function(t, "exp(3^(1/5)*t)")))
	assert.False(t, function(t, "exp(sqrt(a + 1)*t)").Equal(function(t, "exp(sqrt(b)*t)")))
	// Conjugates of roots in roots are read together, apart from other ones.
	g := function(t, "sumroots(z, z^4 + 4*z^2 + 2, exp(z*t)) + sumroots(z, z^4 + 6*z^2 + 7, exp(z*t)) + sumroots(z, (z + 1)^4 + 6*(z + 1)^2 + 4, z*exp(z*t))")
	requireEqual(t, g, function(t, g.String()))
}
