package expr

import (
	"strconv"

	"example.org/closedform/algebra"
)

// Equation is one statement of a model: Left = Right.
type Equation struct {
	Left, Right Node
	Pos         Pos
}

// String writes the equation in the text form.
func (e Equation) String() string { return e.Left.String() + " = " + e.Right.String() }

// Text is a parsed model: its equations in the order of the text, and the
// independent variable, t unless the text declares another.
type Text struct {
	Equations []Equation
	Variable  string
}

// Parse reads one expression: numbers (decimals are exact), names with primes,
// + - * / ^ and parentheses, exp sin cos sinh cosh sqrt step impulse, pi, and
// sumroots(z, p, b), the sum of b over the roots z of the polynomial p. The
// product sign may be left out after a number or a parenthesis. Typographic
// signs are read as well. Errors are of type *Error.
func Parse(src string, limits Limits) (Node, error) {
	p, err := newParser(src, limits)
	if err != nil {
		return nil, err
	}
	return guard(func() Node {
		p.skipBreaks()
		n := p.expr()
		p.skipBreaks()
		if p.tok.kind != tokEnd {
			p.unexpected("an operator")
		}
		return n
	})
}

// ParseModel reads the text of a model: equations, one to a line or separated
// by semicolons; # starts a comment; the line "independent tau" makes tau the
// independent variable. Errors are of type *Error.
func ParseModel(src string, limits Limits) (Text, error) {
	p, err := newParser(src, limits)
	if err != nil {
		return Text{}, err
	}
	return guard(func() Text {
		out := Text{Variable: "t"}
		declared := false
		for {
			p.skipBreaks()
			if p.tok.kind == tokEnd {
				return out
			}
			if p.tok.kind == tokName && p.tok.text == "independent" {
				word := p.tok
				p.step()
				if p.tok.kind == tokName {
					if declared {
						p.fail(Syntax, word.at, "the independent variable is declared twice")
					}
					if name := p.tok.text; functions[name] || name == "pi" || name == "π" || name == "sumroots" {
						p.fail(Syntax, p.tok.at, "%s has a meaning of its own and cannot be the independent variable", name)
					}
					declared = true
					out.Variable = p.tok.text
					p.step()
					p.endStatement()
					continue
				}
				p.fail(Syntax, p.tok.at, "after the word independent comes the name of the independent variable, as in: independent tau")
			}
			at := p.tok.at
			left := p.expr()
			if !p.isOp("=") {
				p.unexpected("= and the other side of the equation")
			}
			p.step()
			right := p.expr()
			out.Equations = append(out.Equations, Equation{Left: left, Right: right, Pos: at})
			if len(out.Equations) > p.limits.Terms {
				p.fail(LimitExceeded, at, "more than %d equations", p.limits.Terms)
			}
			p.endStatement()
		}
	})
}

// parser is a recursive-descent parser. Inside, errors travel as panics of
// type *Error, which guard turns back into values.
type parser struct {
	lex    *lexer
	tok    token
	depth  int
	limits Limits
	// quotients is the number of quotients inside one another in the tree read
	// last: a/b/c nests to the left, where depth does not see it.
	quotients int
}

func newParser(src string, limits Limits) (*parser, error) {
	limits = limits.WithDefaults()
	if len(src) > limits.Text {
		return nil, Errorf(LimitExceeded, Pos{1, 1}, "the text has %d bytes, at most %d are read", len(src), limits.Text)
	}
	return &parser{lex: newLexer(src), limits: limits}, nil
}

// guard runs a parse and returns the error it panicked with.
func guard[T any](f func() T) (out T, err error) {
	defer func() {
		switch e := recover().(type) {
		case nil:
		case *Error:
			var zero T
			out, err = zero, e
		default:
			panic(e)
		}
	}()
	return f(), nil
}

func (p *parser) fail(kind Kind, at Pos, format string, args ...any) {
	panic(Errorf(kind, at, format, args...))
}

func (p *parser) unexpected(want string) {
	if p.tok.kind == tokIllegal {
		p.fail(Syntax, p.tok.at, "%s", p.tok.text)
	}
	got := p.tok.text
	if p.tok.kind != tokEnd && got != "end of line" {
		got = Quote(got)
	}
	p.fail(Syntax, p.tok.at, "found %s where %s should stand", got, want)
}

func (p *parser) step() { p.tok = p.lex.next() }

func (p *parser) isOp(op string) bool { return p.tok.kind == tokOp && p.tok.text == op }

func (p *parser) skipBreaks() {
	if p.tok.at.Line == 0 {
		p.step()
	}
	for p.tok.kind == tokBreak {
		p.step()
	}
}

func (p *parser) endStatement() {
	if p.tok.kind != tokBreak && p.tok.kind != tokEnd {
		p.unexpected("the end of the statement")
	}
}

func (p *parser) enter() {
	if p.depth++; p.depth > p.limits.Nesting {
		p.fail(LimitExceeded, p.tok.at, "the expression is nested more than %d deep", p.limits.Nesting)
	}
}

func (p *parser) leave() { p.depth-- }

// expr = ["+" | "-"] term { ("+" | "-") term }
func (p *parser) expr() Node {
	p.enter()
	defer p.leave()
	at := p.tok.at
	var terms []Node
	quotients := 0
	sign := p.sign()
	for {
		t := p.term()
		quotients = max(quotients, p.quotients)
		if sign < 0 {
			t = Neg{place{t.Pos()}, t}
		}
		terms = append(terms, t)
		if len(terms) > p.limits.Terms {
			p.fail(LimitExceeded, at, "a sum of more than %d terms", p.limits.Terms)
		}
		if !p.isOp("+") && !p.isOp("-") {
			break
		}
		sign = p.sign()
	}
	p.quotients = quotients
	if len(terms) == 1 {
		return terms[0]
	}
	return Sum{place{at}, terms}
}

// sign reads at most one sign; a second one is left for factor to accept or
// refuse.
func (p *parser) sign() int {
	switch {
	case p.isOp("-"):
		p.step()
		return -1
	case p.isOp("+"):
		p.step()
	}
	return 1
}

// term = factor { ("*" | "/") factor | factor }, the last form after a number,
// a parenthesis or a function only. A fraction of two numbers counts as a number.
func (p *parser) term() Node {
	at := p.tok.at
	first, juxt := p.factor()
	acc := []Node{first}
	quotients := p.quotients
	divided := false // acc ends in a quotient whose divisor is not in a fraction of numbers
	flat := func() Node {
		if len(acc) == 1 {
			return acc[0]
		}
		return Product{place{at}, acc}
	}
	for {
		switch {
		case p.isOp("*"):
			p.step()
			f, j := p.factor()
			acc, juxt, divided = append(acc, f), j, false
			quotients = max(quotients, p.quotients)
		case p.isOp("/"):
			numeric := len(acc) == 1 && isLiteral(acc[0])
			slash := p.tok.at
			p.step()
			f, j := p.factor()
			if quotients = max(quotients, p.quotients) + 1; quotients > p.limits.Nesting {
				p.fail(LimitExceeded, slash, "more than %d divisions one inside the other", p.limits.Nesting)
			}
			acc = []Node{Quotient{place{at}, flat(), f}}
			juxt, divided = j, !(numeric && isLiteral(f))
		case juxt && (p.tok.kind == tokName || p.isOp("(")):
			if divided {
				p.fail(Syntax, p.tok.at, "a/b c can be read in two ways: write (a/b)*c or a/(b*c)")
			}
			f, j := p.factor()
			acc, juxt = append(acc, f), j
			quotients = max(quotients, p.quotients)
		default:
			switch {
			case p.tok.kind == tokName || p.tok.kind == tokNumber || p.isOp("("):
				p.fail(Syntax, p.tok.at, "found %s after a complete term: is a * missing before it?", Quote(p.tok.text))
			case p.tok.kind == tokPrimes:
				p.fail(Syntax, p.tok.at, "a prime belongs directly after the name of a state")
			case p.tok.kind == tokIllegal:
				p.unexpected("")
			}
			p.quotients = quotients
			return flat()
		}
		if len(acc) > p.limits.Terms {
			p.fail(LimitExceeded, at, "a product of more than %d factors", p.limits.Terms)
		}
	}
}

func isLiteral(n Node) bool { _, ok := n.(Number); return ok }

// factor = ["-" | "+"] factor | power. The flag tells whether a product sign
// may be left out after it.
func (p *parser) factor() (Node, bool) {
	if p.isOp("-") || p.isOp("+") {
		p.enter()
		defer p.leave()
		at, minus := p.tok.at, p.isOp("-")
		p.step()
		x, juxt := p.factor()
		if minus {
			return Neg{place{at}, x}, juxt
		}
		return x, juxt
	}
	base, juxt := p.primary()
	return p.power(base), juxt
}

// power reads the exponent of base, if there is one: ^ binds to the right.
func (p *parser) power(base Node) Node {
	at := base.Pos()
	switch {
	case p.tok.kind == tokSuper:
		return Power{place{at}, base, p.superscript()}
	case p.isOp("^"):
		p.step()
		p.enter()
		defer p.leave()
		minusAt, minus := p.tok.at, p.isOp("-")
		if minus || p.isOp("+") {
			p.step()
		}
		quotients := p.quotients
		e, _ := p.primary()
		e = p.power(e)
		p.quotients = max(quotients, p.quotients)
		if minus {
			e = Neg{place{minusAt}, e}
		}
		return Power{place{at}, base, e}
	}
	return base
}

func (p *parser) superscript() Node {
	n := Number{place{p.tok.at}, p.rat(p.tok)}
	p.step()
	return n
}

// rat reads the value of a number token, within the limit on bits.
func (p *parser) rat(t token) algebra.Rat {
	if 3*len(t.text) > p.limits.Bits {
		p.fail(LimitExceeded, t.at, "a number of %d digits", len(t.text))
	}
	for i := range t.text {
		if t.text[i] != 'e' && t.text[i] != 'E' {
			continue
		}
		e, err := strconv.Atoi(t.text[i+1:])
		if most := p.limits.Bits / 4; err != nil || e > most || e < -most {
			p.fail(LimitExceeded, t.at, "the power of ten in %s is out of range", Quote(t.text))
		}
	}
	x, err := algebra.ParseRat(t.text)
	if err != nil {
		p.fail(Syntax, t.at, "%s is not a number", Quote(t.text))
	}
	return x
}

func (p *parser) primary() (n Node, juxt bool) {
	t := p.tok
	p.quotients = 0
	switch {
	case t.kind == tokNumber:
		p.step()
		return Number{place{t.at}, p.rat(t)}, true
	case p.isOp("("):
		p.step()
		n := p.expr()
		p.closeParen(t.at)
		return n, true
	case t.kind == tokName:
		n := p.name()
		return n, isCall(n)
	case p.isOp("=") || p.isOp(")"):
		p.fail(Syntax, t.at, "found %s where an expression should stand", Quote(t.text))
	}
	p.unexpected("an expression")
	return nil, false
}

// isCall tells whether n ends with the parenthesis of a function, after which a
// product sign may be left out.
func isCall(n Node) bool {
	if pow, ok := n.(Power); ok {
		n = pow.Base
	}
	_, ok := n.(Call)
	return ok
}

func (p *parser) closeParen(open Pos) {
	if p.tok.kind == tokIllegal {
		p.unexpected("")
	}
	switch {
	case p.tok.kind == tokEnd || p.tok.kind == tokBreak || p.isOp("="):
		p.fail(Syntax, open, "this parenthesis is not closed")
	case !p.isOp(")"):
		p.fail(Syntax, p.tok.at, "found %s where the parenthesis opened at line %d, column %d should close", Quote(p.tok.text), open.Line, open.Column)
	}
	p.step()
}

// name reads what begins with a name: a function, a state with its primes, a
// value at a time, or a symbol.
func (p *parser) name() Node {
	t := p.tok
	p.step()
	switch {
	case t.text == "π":
		t.text = "pi"
	case t.text == "sumroots" && p.isOp("("):
		return p.rootSum(t)
	case functions[t.text]:
		return p.call(t)
	}
	order := 0
	if p.tok.kind == tokPrimes {
		order = len(p.tok.text)
		if order > p.limits.Degree {
			p.fail(LimitExceeded, p.tok.at, "a derivative of order %d", order)
		}
		p.step()
	}
	if p.isOp("(") {
		if p.tok.spaced {
			p.fail(Syntax, p.tok.at, "found \"(\" after the name %s: write %s*(...) for a product, %s(...) for a value", t.text, t.text, t.text)
		}
		open := p.tok.at
		p.step()
		arg := p.expr()
		p.closeParen(open)
		return Value{place{t.at}, t.text, order, arg}
	}
	if order > 0 {
		return Value{place{t.at}, t.text, order, nil}
	}
	return Symbol{place{t.at}, t.text}
}

// call reads the argument of a function, after a power of the function if one
// is written: sin^2(t) is sin(t)^2.
func (p *parser) call(fn token) Node {
	var exponent Node
	if p.tok.kind == tokSuper {
		exponent = p.superscript()
	} else if p.isOp("^") {
		p.step()
		if p.tok.kind != tokNumber {
			p.unexpected("a whole number (for an inverse function there is no notation)")
		}
		exponent = p.superscript()
	}
	if !p.isOp("(") {
		p.unexpected("the argument of " + fn.text + " in parentheses")
	}
	open := p.tok.at
	p.step()
	arg := p.expr()
	if p.isOp(",") {
		p.fail(Syntax, p.tok.at, "%s takes one argument", fn.text)
	}
	p.closeParen(open)
	var n Node = Call{place{fn.at}, fn.text, arg}
	if exponent != nil {
		n = Power{place{fn.at}, n, exponent}
	}
	return n
}

// rootSum reads sumroots(z, p, b).
func (p *parser) rootSum(fn token) Node {
	open := p.tok.at
	p.step()
	if p.tok.kind != tokName {
		p.unexpected("the name of the root")
	}
	v := p.tok.text
	comma := func() {
		if !p.isOp(",") {
			p.unexpected("a comma: sumroots(z, p, b) has three arguments")
		}
		p.step()
	}
	p.step()
	comma()
	poly := p.expr()
	quotients := p.quotients
	comma()
	body := p.expr()
	p.quotients = max(quotients, p.quotients)
	p.closeParen(open)
	return RootSum{place{fn.at}, v, poly, body}
}
