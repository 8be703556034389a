package expr

import (
	"strconv"
	"strings"
	"unicode"

	"example.org/closedform/algebra"
)

// MathML writes n as a math element of MathML Core.
func MathML(n Node) string {
	return `<math xmlns="http://www.w3.org/1998/Math/MathML"><mrow>` + write(n, mathml{}).text + "</mrow></math>"
}

// mathml is the notation of MathML Core; inline fractions have a slash.
type mathml struct{ inline bool }

func (mathml) exponent() notation { return mathml{inline: true} }

func (mathml) paren(x string) string {
	return "<mrow><mo>(</mo>" + x + "<mo>)</mo></mrow>"
}

func (m mathml) wrap(p piece, least int) string {
	if p.prec < least {
		return m.paren(p.text)
	}
	return p.text
}

func mrow(parts ...string) string { return "<mrow>" + strings.Join(parts, "") + "</mrow>" }

func (m mathml) number(x algebra.Rat) piece {
	num := "<mn>" + x.Num().String() + "</mn>"
	if x.IsInt() {
		return piece{num, precAtom}
	}
	return m.quotient(piece{num, precAtom}, piece{"<mn>" + x.Den().String() + "</mn>", precAtom})
}

func (m mathml) decimal(mantissa, exponent string) piece {
	n := piece{"<mn>" + mantissa + "</mn>", precAtom}
	if exponent == "" {
		return n
	}
	ten := m.power(piece{"<mn>10</mn>", precAtom}, piece{"<mn>" + strings.ReplaceAll(strings.TrimPrefix(exponent, "+"), "-", "−") + "</mn>", precAtom})
	if mantissa == "1" {
		return ten
	}
	return piece{n.text + "<mo>⋅</mo>" + ten.text, precProduct}
}

// markup escapes what has a meaning in MathML and HTML.
var markup = strings.NewReplacer("&", "&amp;", "<", "&lt;", ">", "&gt;", `"`, "&quot;", "'", "&#39;")

// escaped writes a word as text of an element. Characters that do not print,
// which XML forbids in part and which can turn the direction of writing, are
// replaced.
func escaped(word string) string {
	return markup.Replace(strings.Map(func(r rune) rune {
		if !unicode.IsPrint(r) {
			return unicode.ReplacementChar
		}
		return r
	}, word))
}

func (mathml) symbol(name string) piece {
	base, sub := splitName(name)
	s := "<mi>" + escaped(letterOf(lowerDigits(base))) + "</mi>"
	if sub != "" {
		s = "<msub>" + s + "<mi>" + escaped(letterOf(lowerDigits(sub))) + "</mi></msub>"
	}
	return piece{s, precAtom}
}

// letterOf returns the Greek letter that a word names, or the word.
func letterOf(word string) string {
	for r, name := range greekLetters {
		if name == `\`+word {
			return string(r)
		}
	}
	return word
}

func (m mathml) value(name string, order int, at string) piece {
	s := m.symbol(name).text
	switch {
	case order > 3:
		s = "<msup>" + s + "<mrow><mo>(</mo><mn>" + strconv.Itoa(order) + "</mn><mo>)</mo></mrow></msup>"
	case order > 0:
		s = "<msup>" + s + "<mo>" + strings.Repeat("′", order) + "</mo></msup>"
	}
	if at != "" {
		return piece{mrow(s, m.paren(at)), precAtom}
	}
	if order > 0 {
		return piece{s, precPower} // it has a superscript already
	}
	return piece{s, precAtom}
}

func (mathml) sum(terms []string, minus []bool) string {
	var b strings.Builder
	for i, t := range terms {
		switch {
		case i == 0 && minus[i]:
			b.WriteString(`<mo form="prefix">−</mo>`)
		case minus[i]:
			b.WriteString("<mo>−</mo>")
		case i > 0:
			b.WriteString("<mo>+</mo>")
		}
		b.WriteString(t)
	}
	return mrow(b.String())
}

func (mathml) neg(x string) string { return mrow(`<mo form="prefix">−</mo>`, x) }

func (mathml) product(factors []piece) string {
	var b strings.Builder
	for i, f := range factors {
		if i > 0 {
			switch {
			case strings.HasPrefix(f.text, "<mn>") || strings.HasPrefix(f.text, "<mfrac>"):
				b.WriteString("<mo>⋅</mo>")
			case strings.Contains(f.text, "<mo>\u2061</mo>") && strings.HasPrefix(f.text, "<mrow><mi>") || strings.HasPrefix(f.text, "<mrow><msup><mi>"):
				b.WriteString("<mo>\u2062</mo><mspace width=\"0.1667em\"></mspace>") // a function stands apart
			default:
				b.WriteString("<mo>\u2062</mo>") // invisible times
			}
		}
		b.WriteString(f.text)
	}
	return mrow(b.String())
}

func (m mathml) quotient(num, den piece) piece {
	if m.inline {
		return piece{mrow(m.wrap(num, precProduct), "<mo>/</mo>", m.wrap(den, precAtom)), precProduct}
	}
	return piece{"<mfrac>" + mrow(num.text) + mrow(den.text) + "</mfrac>", precProduct}
}

func (m mathml) power(base, exp piece) piece {
	if inner, ok := strings.CutPrefix(base.text, "<msub>"); ok && base.prec == precAtom {
		return piece{"<msubsup>" + strings.TrimSuffix(inner, "</msub>") + mrow(exp.text) + "</msubsup>", precPower}
	}
	return piece{"<msup>" + mrow(m.wrap(base, precAtom)) + mrow(exp.text) + "</msup>", precPower}
}

func (m mathml) root(base piece, order string) (piece, bool) {
	if order == "2" {
		return piece{"<msqrt>" + base.text + "</msqrt>", precAtom}, true
	}
	return piece{"<mroot>" + mrow(base.text) + "<mn>" + order + "</mn></mroot>", precAtom}, true
}

func (m mathml) call(fn string, arg piece, exp string) piece {
	switch fn {
	case "exp":
		return piece{"<msup><mi>e</mi>" + mrow(arg.text) + "</msup>", precPower}
	case "sqrt":
		return piece{"<msqrt>" + arg.text + "</msqrt>", precAtom}
	case "impulse":
		fn = "δ"
	case "atan":
		fn = "arctan"
	}
	name := "<mi>" + fn + "</mi>"
	if exp != "" {
		name = "<msup>" + name + exp + "</msup>"
	}
	return piece{mrow(name, "<mo>\u2061</mo>", m.paren(arg.text)), precAtom} // function application
}

func (m mathml) rootSum(v, poly string, body piece) piece {
	under := mrow(m.symbol(v).text, "<mo>:</mo>", poly, "<mo>=</mo><mn>0</mn>")
	return piece{mrow("<munder><mo>∑</mo>"+under+"</munder>", m.wrap(body, precProduct)), precNeg}
}
