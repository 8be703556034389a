package expr

import (
	"strconv"
	"strings"
	"unicode"

	"example.org/closedform/algebra"
)

// LaTeX writes n as LaTeX for mathematics mode; amsmath is enough to set it.
func LaTeX(n Node) string { return write(n, latex{}).text }

// LaTeXName writes the name of a quantity: Greek names as letters, trailing
// digits and what follows an underscore as subscripts, words upright. Whatever
// the name holds, the result is inert.
func LaTeXName(name string) string {
	base, sub := splitName(name)
	s := latexWord(lowerDigits(base))
	if sub != "" {
		parts := strings.Split(lowerDigits(sub), ",")
		for i := range parts {
			parts[i] = latexWord(parts[i])
		}
		s += "_{" + strings.Join(parts, ",") + "}"
	}
	return s
}

// splitName splits a name into what stands on the line and its subscript:
// trailing digits, and what follows the first underscore.
func splitName(name string) (base, sub string) {
	base, sub, _ = strings.Cut(name, "_")
	sub = strings.ReplaceAll(strings.Trim(sub, "_"), "_", ",")
	if i := len(strings.TrimRightFunc(base, isIndex)); sub != "" && i > 0 && i < len(base) { // x1_p
		base, sub = base[:i], base[i:]+","+sub
	}
	if sub == "" {
		base = strings.TrimRight(name, "_")
		if i := len(strings.TrimRightFunc(base, isIndex)); i > 0 {
			base, sub = base[:i], base[i:]
		}
	}
	if base == "" {
		return name, ""
	}
	return base, sub
}

// isIndex tells whether r is a digit or a subscript digit.
func isIndex(r rune) bool { return unicode.IsDigit(r) || r >= '₀' && r <= '₉' }

// lowerDigits puts digits in the place of subscript digits.
func lowerDigits(s string) string {
	return strings.Map(func(r rune) rune {
		if r >= '₀' && r <= '₉' {
			return '0' + r - '₀'
		}
		return r
	}, s)
}

// latexWord writes one part of a name.
func latexWord(w string) string {
	if greekWords[w] {
		return `\` + w
	}
	r := []rune(w)
	if len(r) == 1 {
		if name, ok := greekLetters[r[0]]; ok {
			return name
		}
		if r[0] < 0x80 && (unicode.IsLetter(r[0]) || unicode.IsDigit(r[0])) {
			return w
		}
	}
	if isDigits(w) {
		return w
	}
	var b strings.Builder
	b.WriteString(`\mathrm{`)
	for _, c := range r {
		switch {
		case c < 0x80 && (unicode.IsLetter(c) || unicode.IsDigit(c)):
			b.WriteRune(c)
		case greekLetters[c] != "":
			b.WriteString(greekLetters[c] + " ")
		case strings.ContainsRune("#$%&{}_", c):
			b.WriteString(`\` + string(c))
		case c == '\\':
			b.WriteString(`\backslash `)
		case c == '^' || c == '~':
			b.WriteString(`\text{\` + string(c) + `{}}`)
		case c > 0x80 && (unicode.IsLetter(c) || unicode.IsDigit(c)):
			b.WriteString(`\text{` + string(c) + `}`)
		case strings.ContainsRune("+-*/().,:;=<>!?'@[]| ", c):
			b.WriteRune(c)
		default:
			b.WriteByte('?')
		}
	}
	return b.String() + "}"
}

func isDigits(s string) bool {
	for _, r := range s {
		if r < '0' || r > '9' {
			return false
		}
	}
	return s != ""
}

var greekWords = map[string]bool{}

// greekLetters maps letters to their LaTeX names.
var greekLetters = map[rune]string{}

func init() {
	lower := strings.Fields("alpha beta gamma delta epsilon zeta eta theta iota kappa lambda mu nu xi omicron pi rho finalsigma sigma tau upsilon phi chi psi omega")
	for i, name := range lower {
		switch name {
		case "omicron":
			greekLetters['ο'] = "o"
			continue
		case "finalsigma":
			greekLetters['ς'] = `\varsigma`
			continue
		}
		greekWords[name] = true
		greekLetters['α'+rune(i)] = `\` + name
	}
	for r, name := range map[rune]string{
		'Γ': "Gamma", 'Δ': "Delta", 'Θ': "Theta", 'Λ': "Lambda", 'Ξ': "Xi", 'Π': "Pi",
		'Σ': "Sigma", 'Υ': "Upsilon", 'Φ': "Phi", 'Ψ': "Psi", 'Ω': "Omega",
	} {
		greekWords[name] = true
		greekLetters[r] = `\` + name
	}
}

// latex is the notation of LaTeX mathematics; inline fractions have a slash.
type latex struct{ inline bool }

func (latex) exponent() notation { return latex{inline: true} }

func (latex) paren(x string) string {
	if strings.Contains(x, `\frac`) || strings.Contains(x, `\sum`) {
		return `\left(` + x + `\right)`
	}
	return "(" + x + ")"
}

func (l latex) wrap(p piece, least int) string {
	if p.prec < least {
		return l.paren(p.text)
	}
	return p.text
}

func (l latex) number(x algebra.Rat) piece {
	if x.IsInt() {
		return piece{x.String(), precAtom}
	}
	if l.inline {
		return piece{x.String(), precProduct}
	}
	return piece{`\frac{` + x.Num().String() + "}{" + x.Den().String() + "}", precProduct}
}

func (latex) decimal(mantissa, exponent string) piece {
	if exponent == "" {
		return piece{mantissa, precAtom}
	}
	if mantissa != "1" {
		mantissa += ` \cdot `
	} else {
		mantissa = ""
	}
	return piece{mantissa + `10^{` + strings.TrimPrefix(exponent, "+") + "}", precProduct}
}

func (latex) symbol(name string) piece { return piece{LaTeXName(name), precAtom} }

func (l latex) value(name string, order int, at string) piece {
	s := LaTeXName(name)
	switch {
	case order > 3:
		s += "^{(" + strconv.Itoa(order) + ")}"
	case order > 0:
		s += strings.Repeat("'", order)
	}
	if at != "" {
		return piece{s + l.paren(at), precAtom}
	}
	if order > 0 {
		return piece{s, precPower} // it has a superscript already
	}
	return piece{s, precAtom}
}

func (latex) sum(terms []string, minus []bool) string { return text{}.sum(terms, minus) }

func (latex) neg(x string) string { return "-" + x }

func (latex) product(factors []piece) string {
	var b strings.Builder
	for i, f := range factors {
		if i > 0 {
			switch {
			case f.text[0] >= '0' && f.text[0] <= '9' || strings.HasPrefix(f.text, `\frac`):
				b.WriteString(` \cdot`)
			case strings.HasPrefix(factors[i-1].text, `\sqrt`) && !ownSpace(f.text):
				b.WriteString(` \,`) // the bar of a root ends before what follows
			case strings.HasPrefix(f.text, `\mathrm`) || strings.HasPrefix(factors[i-1].text, `\mathrm`):
				b.WriteString(` \,`) // names of several letters stand apart
			}
			b.WriteByte(' ')
		}
		b.WriteString(f.text)
	}
	return b.String()
}

// ownSpace tells whether a factor stands apart from a root before it by itself.
func ownSpace(text string) bool {
	for _, s := range []string{`\sqrt`, `\sin`, `\cos`, `\arctan`, `\left`, "("} {
		if strings.HasPrefix(text, s) {
			return true
		}
	}
	return false
}

func (l latex) quotient(num, den piece) piece {
	if l.inline {
		return piece{l.wrap(num, precProduct) + "/" + l.wrap(den, precAtom), precProduct}
	}
	return piece{`\frac{` + num.text + "}{" + den.text + "}", precProduct}
}

func (l latex) power(base, exp piece) piece {
	return piece{l.wrap(base, precAtom) + "^{" + exp.text + "}", precPower}
}

func (l latex) root(base piece, order string) (piece, bool) {
	if order == "2" {
		return piece{`\sqrt{` + base.text + "}", precAtom}, true
	}
	return piece{`\sqrt[` + order + "]{" + base.text + "}", precAtom}, true
}

func (l latex) call(fn string, arg piece, exp string) piece {
	switch fn {
	case "exp":
		return piece{"e^{" + arg.text + "}", precPower}
	case "sqrt":
		return piece{`\sqrt{` + arg.text + "}", precAtom}
	case "step":
		return piece{`\operatorname{step}` + l.paren(arg.text), precAtom}
	case "impulse":
		return piece{`\delta` + l.paren(arg.text), precAtom}
	case "atan":
		fn = "arctan"
	}
	if exp != "" {
		return piece{`\` + fn + "^{" + exp + "}" + l.paren(arg.text), precAtom}
	}
	return piece{`\` + fn + l.paren(arg.text), precAtom}
}

func (l latex) rootSum(v, poly string, body piece) piece {
	// A sum binds loosely, so that nothing behind it is taken for its body.
	return piece{`\sum_{` + LaTeXName(v) + `:\, ` + poly + ` = 0} ` + l.wrap(body, precProduct), precNeg}
}
