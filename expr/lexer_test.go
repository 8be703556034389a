package expr

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
)

// tokens writes the tokens of a text, one blank between them.
func tokens(src string) string {
	l := newLexer(src)
	var out []string
	for {
		t := l.next()
		switch t.kind {
		case tokEnd:
			return strings.Join(out, " ")
		case tokBreak:
			out = append(out, "|")
		case tokNumber:
			out = append(out, "n:"+t.text)
		case tokPrimes, tokOp:
			out = append(out, t.text)
		case tokSuper:
			out = append(out, "^"+t.text)
		case tokName:
			out = append(out, t.text)
		case tokIllegal:
			return strings.Join(append(out, "illegal"), " ")
		}
	}
}

func TestTokens(t *testing.T) {
	for _, c := range []struct{ name, src, want string }{
		{"empty", "", ""},
		{"blanks", " \t\u00a0\u2009\u200b ", ""},
		{"names", "x _a k_12 α x₁ x2y", "x _a k_12 α x₁ x2y"},
		{"combining mark", "e\u0301t", "e\u0301t"},
		{"signs of units", "\u00b5 \u2126", "\u03bc \u03a9"},
		{"numbers", "0 12 0.35 .5 5. 1e3 1E-3 2e+4", "n:0 n:12 n:0.35 n:.5 n:5. n:1e3 n:1E-3 n:2e+4"},
		{"e without digits is a name", "2e 2e+t 2exp", "n:2 e n:2 e + t n:2 exp"},
		{"two points", "1.2.3", "illegal"},
		{"lone point", ".", "illegal"},
		{"primes", "x' x'' x′ x″ x‴ x⁗ x’ x\"", "x ' x '' x ' x '' x ''' x '''' x ' x ''"},
		{"mixed primes", "x'″", "x '''"},
		{"superscripts", "t² t³ t¹⁰", "t ^2 t ^3 t ^10"},
		{"minus signs", "−‐‑–-", "- - - - -"},
		{"product signs", "·⋅×∗∙*", "* * * * * *"},
		{"quotient signs", "÷∕⁄/", "/ / / /"},
		{"comment", "a # b = c\nd", "a | d"},
		{"comment at the end", "a # b", "a"},
		{"semicolon", "a;b", "a | b"},
		{"line ends", "a\r\nb\rc\nd\u2028e\u2029f\u0085g", "a | b | c | d | e | f | g"},
		{"comment before every line end", "#\r\na#\rb#\u2028c", "| a | b | c"},
		{"no break in parentheses", "(a\n b) c\nd", "( a b ) c | d"},
		{"semicolon in parentheses", "(a;b", "( a | b"},
		{"closing too many", ")\na", ") | a"},
		{"byte order mark", "\ufeffa", "a"},
		{"byte order mark inside", "a\ufeff", "a illegal"},
		{"NUL", "a\x00b", "a illegal"},
		{"invalid UTF-8", "a\xff", "a illegal"},
		{"replacement character", "\ufffd", "illegal"},
		{"relations", "a>=0 != <", "a > = n:0 ! = <"},
		{"digits of other scripts", "٣", "illegal"},
		{"superscript minus", "t⁻¹", "t illegal"},
	} {
		t.Run(c.name, func(t *testing.T) { assert.Equal(t, c.want, tokens(c.src)) })
	}
}

// Positions count lines and characters, whatever their bytes.
func TestTokenPositions(t *testing.T) {
	for _, c := range []struct {
		name, src    string
		line, column int // of the name q
	}{
		{"start", "q", 1, 1},
		{"after a mark", "\ufeffq", 1, 1},
		{"after Greek", "αβγ + q", 1, 7},
		{"after signs", "−·′² q", 1, 6},
		{"after a comment", "# αβγ\n q", 2, 2},
		{"after \\r\\n", "a\r\nb\r\nq", 3, 1},
		{"after \\r", "a\rb\r  q", 3, 3},
		{"after a separator", "a\u2028q", 2, 1},
		{"in parentheses", "(a +\n  q", 2, 3},
		{"after four bytes", "𝑥 q", 1, 3},
	} {
		t.Run(c.name, func(t *testing.T) {
			l := newLexer(c.src)
			tok := l.next()
			for tok.text != "q" && tok.kind != tokEnd {
				tok = l.next()
			}
			assert.Equal(t, Pos{c.line, c.column}, tok.at)
		})
	}
}
