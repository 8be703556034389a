package expr

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

type tokenKind int

const (
	tokEnd     tokenKind = iota
	tokBreak             // end of a statement: newline or ;
	tokNumber            // unsigned decimal or integer
	tokName              // identifier
	tokPrimes            // run of primes; text holds one ' for each
	tokSuper             // superscript integer; text holds its digits
	tokOp                // one of + - * / ^ ( ) , = < > !
	tokIllegal           // text holds the message
)

type token struct {
	kind   tokenKind
	text   string
	at     Pos
	spaced bool // preceded by white space
}

// lexer cuts a text into tokens, one at a time, so that its memory does not
// grow with the text.
type lexer struct {
	src       string
	off       int
	line, col int
	depth     int // of parentheses: newlines inside do not end a statement
}

func newLexer(src string) *lexer {
	return &lexer{src: strings.TrimPrefix(src, "\ufeff"), line: 1, col: 1}
}

// signs maps the signs found in pasted documents to the ASCII ones.
var signs = map[rune]rune{
	'\u2212': '-', '\u2010': '-', '\u2011': '-', '\u2013': '-',
	'\u00b7': '*', '\u22c5': '*', '\u00d7': '*', '\u2217': '*', '\u2219': '*',
	'\u00f7': '/', '\u2215': '/', '\u2044': '/',
}

var superscripts = map[rune]byte{
	'⁰': '0', '¹': '1', '²': '2', '³': '3', '⁴': '4',
	'⁵': '5', '⁶': '6', '⁷': '7', '⁸': '8', '⁹': '9',
}

func primeCount(r rune) int {
	switch r {
	case '\'', '\u2032', '\u2019', '\u02b9':
		return 1
	case '\u2033', '\u201d', '"':
		return 2
	case '\u2034':
		return 3
	case '\u2057':
		return 4
	}
	return 0
}

func (l *lexer) peek() (rune, int) {
	if l.off >= len(l.src) {
		return -1, 0
	}
	return utf8.DecodeRuneInString(l.src[l.off:])
}

func (l *lexer) advance() {
	r, size := l.peek()
	ends := l.endsLine(r)
	l.off += size
	if ends {
		l.line, l.col = l.line+1, 1
	} else {
		l.col++
	}
}

// endsLine tells whether the character r at hand ends a line: \n, a \r that no
// \n follows, and the separators of Unicode.
func (l *lexer) endsLine(r rune) bool {
	switch r {
	case '\n', '\u0085', '\u2028', '\u2029':
		return true
	case '\r':
		return !strings.HasPrefix(l.src[l.off+1:], "\n")
	}
	return false
}

// lookalikes maps the signs of units that keyboards and documents put in the
// place of Greek letters to these: micro and ohm.
var lookalikes = strings.NewReplacer("\u00b5", "\u03bc", "\u2126", "\u03a9")

func isNameStart(r rune) bool { return r == '_' || unicode.IsLetter(r) }

func isNamePart(r rune) bool {
	return isNameStart(r) || unicode.IsDigit(r) || unicode.Is(unicode.Mn, r) || (r >= '₀' && r <= '₉')
}

func (l *lexer) next() token {
	spaced := false
	for {
		r, _ := l.peek()
		switch {
		case r == '#':
			for r != -1 && !l.endsLine(r) {
				l.advance()
				r, _ = l.peek()
			}
		case l.depth == 0 && l.endsLine(r):
			t := token{kind: tokBreak, text: "end of line", at: Pos{l.line, l.col}}
			l.advance()
			return t
		case r != -1 && (unicode.IsSpace(r) || r == '\u200b' || r == '\u2009'):
			l.advance()
			spaced = true
		default:
			t := l.scan()
			t.spaced = spaced
			return t
		}
	}
}

func (l *lexer) scan() token {
	at := Pos{l.line, l.col}
	start := l.off
	r, size := l.peek()
	switch {
	case r == -1:
		return token{kind: tokEnd, text: "end of text", at: at}
	case r == utf8.RuneError && size <= 1:
		l.advance()
		return token{kind: tokIllegal, text: "the text is not valid UTF-8", at: at}
	case r == ';':
		l.advance()
		return token{kind: tokBreak, text: ";", at: at}
	case isDigit(r) || r == '.':
		return l.number(at)
	case isNameStart(r):
		for isNamePart(r) {
			l.advance()
			r, _ = l.peek()
		}
		return token{kind: tokName, text: lookalikes.Replace(l.src[start:l.off]), at: at}
	case primeCount(r) > 0:
		n := 0
		for primeCount(r) > 0 {
			n += primeCount(r)
			l.advance()
			r, _ = l.peek()
		}
		return token{kind: tokPrimes, text: strings.Repeat("'", n), at: at}
	case superscripts[r] != 0:
		var b strings.Builder
		for superscripts[r] != 0 {
			b.WriteByte(superscripts[r])
			l.advance()
			r, _ = l.peek()
		}
		return token{kind: tokSuper, text: b.String(), at: at}
	}
	l.advance()
	if s, ok := signs[r]; ok {
		r = s
	}
	if r < utf8.RuneSelf && strings.ContainsRune("+-*/^(),=<>!", r) {
		switch r {
		case '(':
			l.depth++
		case ')':
			l.depth = max(0, l.depth-1)
		}
		return token{kind: tokOp, text: string(r), at: at}
	}
	return token{kind: tokIllegal, text: "the character " + Quote(string(r)) + " has no meaning here", at: at}
}

func isDigit(r rune) bool { return r >= '0' && r <= '9' }

// number scans digits with an optional fraction and power of ten. An e that no
// digit follows is the start of a name: 2exp(t).
func (l *lexer) number(at Pos) token {
	start := l.off
	digits := 0
	for r, _ := l.peek(); isDigit(r) || r == '.'; r, _ = l.peek() {
		if isDigit(r) {
			digits++
		} else if strings.Contains(l.src[start:l.off], ".") {
			return token{kind: tokIllegal, text: "a number has one decimal point", at: Pos{l.line, l.col}}
		}
		l.advance()
	}
	if digits == 0 {
		return token{kind: tokIllegal, text: "a point without digits", at: at}
	}
	rest := l.src[l.off:]
	if len(rest) > 1 && (rest[0] == 'e' || rest[0] == 'E') {
		i := 1
		if rest[i] == '+' || rest[i] == '-' {
			i++
		}
		j := i
		for j < len(rest) && isDigit(rune(rest[j])) {
			j++
		}
		if j > i {
			for range j {
				l.advance()
			}
		}
	}
	return token{kind: tokNumber, text: l.src[start:l.off], at: at}
}
