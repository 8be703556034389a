package expr

import (
	"strings"

	"example.org/closedform/algebra"
)

// Precedence of a written piece, loosest first.
const (
	precSum = iota
	precNeg
	precProduct
	precPower
	precAtom
)

// piece is a written subtree and how tightly it holds together.
type piece struct {
	text string
	prec int
}

// notation is what a way of writing must say about each kind of node; the
// recursion, and where parentheses are needed, is the same for all of them.
// A new way of writing is one file with one notation.
type notation interface {
	number(x algebra.Rat) piece              // x >= 0
	decimal(mantissa, exponent string) piece // exponent of ten, "" for none
	symbol(name string) piece
	value(name string, order int, at string) piece // at is "" for the function itself
	// sum joins terms; minus[i] tells that term i is subtracted.
	sum(terms []string, minus []bool) string
	neg(x string) string
	product(factors []piece) string
	quotient(num, den piece) piece
	power(base, exp piece) piece
	root(base piece, order string) (piece, bool) // false where a power is written
	call(fn string, arg piece, exp string) piece // exp is "" or a whole exponent
	rootSum(v, poly string, body piece) piece
	matrix(cells [][]string) string // in parentheses of its own
	paren(x string) string
	exponent() notation // the notation inside an exponent
}

// write writes n in a notation.
func write(n Node, w notation) piece {
	at := func(x Node, least int) string {
		p := write(x, w)
		if p.prec < least {
			return w.paren(p.text)
		}
		return p.text
	}
	tight := func(x Node, least int) piece {
		p := write(x, w)
		if p.prec < least {
			return piece{w.paren(p.text), precAtom}
		}
		return p
	}
	switch v := n.(type) {
	case Number:
		if v.Val.Sign() < 0 {
			return piece{w.neg(write(Num(v.Val.Neg()), w).text), precNeg}
		}
		return w.number(v.Val)
	case Decimal:
		mantissa, exponent, _ := strings.Cut(v.Text, "e")
		return w.decimal(mantissa, exponent)
	case Symbol:
		return w.symbol(v.Name)
	case Value:
		arg := ""
		if v.At != nil {
			arg = write(v.At, w).text
		}
		return w.value(v.Name, v.Order, arg)
	case Sum:
		terms := make([]string, len(v.Terms))
		minus := make([]bool, len(v.Terms))
		for i, t := range v.Terms {
			switch u := t.(type) {
			case Neg:
				minus[i], t = true, u.X
			case Number:
				if u.Val.Sign() < 0 {
					minus[i], t = true, Num(u.Val.Neg())
				}
			}
			// A sum over roots reaches to the end, and may stand there as it is.
			least := precNeg + 1
			if _, ok := t.(RootSum); ok && i == len(v.Terms)-1 {
				least = precNeg
			}
			terms[i] = at(t, least)
		}
		return piece{w.sum(terms, minus), precSum}
	case Neg:
		return piece{w.neg(at(v.X, precNeg+1)), precNeg}
	case Product:
		factors := make([]piece, len(v.Factors))
		for i, f := range v.Factors {
			least := precPower
			if i == 0 {
				least = precProduct
			}
			factors[i] = tight(f, least)
		}
		return piece{w.product(factors), precProduct}
	case Quotient:
		return w.quotient(write(v.Num, w), write(v.Den, w))
	case Power:
		if x, ok := v.Exp.(Number); ok && x.Val.Sign() > 0 && x.Val.Num().IsInt64() && x.Val.Num().Int64() == 1 && !x.Val.IsInt() {
			if p, ok := w.root(write(v.Base, w), x.Val.Den().String()); ok {
				return p
			}
		}
		if f, ok := v.Base.(Call); ok && powered[f.Func] {
			if x, ok := v.Exp.(Number); ok && x.Val.IsInt() && x.Val.Sign() > 0 {
				return w.call(f.Func, writeArgument(f, w), write(v.Exp, w.exponent()).text)
			}
		}
		return w.power(write(v.Base, w), write(v.Exp, w.exponent()))
	case Call:
		if v.Func == "exp" {
			return w.call(v.Func, write(inOneFraction(v.Arg), w.exponent()), "")
		}
		return w.call(v.Func, writeArgument(v, w), "")
	case RootSum:
		return w.rootSum(v.Var, write(v.Poly, w).text, write(v.Body, w))
	case Matrix:
		return writeMatrix(v, w)
	}
	panic("expr: unknown node")
}

// writeArgument writes the argument of a function; a number in a sine, cosine or arc
// tangent has no bar: sin(pi/13).
func writeArgument(f Call, w notation) piece {
	if f.Func != "sqrt" && isNumeric(f.Arg) {
		w = w.exponent()
	}
	return write(f.Arg, w)
}

// inOneFraction writes -2t/5 in place of -(2/5)t in the argument of an exponential,
// where fractions have no bars.
func inOneFraction(n Node) Node {
	switch v := n.(type) {
	case Neg:
		return Neg{X: inOneFraction(v.X)}
	case Sum:
		terms := make([]Node, len(v.Terms))
		for i, t := range v.Terms {
			terms[i] = inOneFraction(t)
		}
		return Sum{Terms: terms}
	case Product:
		if x, ok := v.Factors[0].(Number); ok && !x.Val.IsInt() && x.Val.Sign() > 0 {
			top := append([]Node{Num(algebra.RatFromBigInt(x.Val.Num()))}, v.Factors[1:]...)
			return Quotient{Num: Mul(top...), Den: Num(algebra.RatFromBigInt(x.Val.Den()))}
		}
	}
	return n
}

// powered are the functions whose powers are written at the name: sin^2(x).
var powered = map[string]bool{"sin": true, "cos": true, "sinh": true, "cosh": true}

// text is the notation that Parse reads.
type text struct{}

func (text) paren(x string) string { return "(" + x + ")" }

func (t text) exponent() notation { return t }

func (t text) wrap(p piece, least int) string {
	if p.prec < least {
		return t.paren(p.text)
	}
	return p.text
}

func (text) number(x algebra.Rat) piece {
	if x.IsInt() {
		return piece{x.String(), precAtom}
	}
	return piece{x.String(), precProduct}
}

func (text) decimal(mantissa, exponent string) piece {
	if exponent != "" {
		mantissa += "e" + exponent
	}
	return piece{mantissa, precAtom}
}

func (text) symbol(name string) piece { return piece{name, precAtom} }

func (t text) value(name string, order int, at string) piece {
	s := name + strings.Repeat("'", order)
	if at != "" {
		s += t.paren(at)
	}
	return piece{s, precAtom}
}

func (text) sum(terms []string, minus []bool) string {
	var b strings.Builder
	for i, t := range terms {
		switch {
		case i == 0 && minus[i]:
			b.WriteString("-")
		case minus[i]:
			b.WriteString(" - ")
		case i > 0:
			b.WriteString(" + ")
		}
		b.WriteString(t)
	}
	return b.String()
}

func (text) neg(x string) string { return "-" + x }

func (text) product(factors []piece) string {
	s := make([]string, len(factors))
	for i, f := range factors {
		s[i] = f.text
	}
	return strings.Join(s, "*")
}

func (t text) quotient(num, den piece) piece {
	return piece{t.wrap(num, precProduct) + "/" + t.wrap(den, precPower), precProduct}
}

func (t text) power(base, exp piece) piece {
	return piece{t.wrap(base, precAtom) + "^" + t.wrap(exp, precAtom), precPower}
}

func (text) root(piece, string) (piece, bool) { return piece{}, false }

func (t text) call(fn string, arg piece, exp string) piece {
	if exp != "" {
		return piece{fn + t.paren(arg.text) + "^" + exp, precPower}
	}
	return piece{fn + t.paren(arg.text), precAtom}
}

func (text) rootSum(v, poly string, body piece) piece {
	return piece{"sumroots(" + v + ", " + poly + ", " + body.text + ")", precAtom}
}

func (n Number) String() string   { return write(n, text{}).text }
func (n Symbol) String() string   { return write(n, text{}).text }
func (n Value) String() string    { return write(n, text{}).text }
func (n Sum) String() string      { return write(n, text{}).text }
func (n Product) String() string  { return write(n, text{}).text }
func (n Quotient) String() string { return write(n, text{}).text }
func (n Power) String() string    { return write(n, text{}).text }
func (n Neg) String() string      { return write(n, text{}).text }
func (n Call) String() string     { return write(n, text{}).text }
func (n RootSum) String() string  { return write(n, text{}).text }
