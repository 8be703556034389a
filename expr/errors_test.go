package expr_test

import (
	"errors"
	"io"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/expr"
)

func TestError(t *testing.T) {
	err := expr.Errorf(expr.Syntax, expr.Pos{Line: 2, Column: 7}, "found %q", "x")
	assert.EqualError(t, err, `line 2, column 7: syntax: found "x"`)
	assert.EqualError(t, expr.Errorf(expr.Singular, expr.Pos{}, "no place"), "singular: no place")
	assert.ErrorIs(t, error(&expr.Error{Kind: expr.Cancelled, Cause: io.EOF}), io.EOF)
	assert.NoError(t, errors.Unwrap(err))
	assert.False(t, expr.Pos{}.IsValid())
}

func TestQuote(t *testing.T) {
	assert.Equal(t, `"a\nb"`, expr.Quote("a\nb"))
	assert.Equal(t, `"`+strings.Repeat("α", 40)+`"`, expr.Quote(strings.Repeat("α", 40)))
	assert.Equal(t, `"`+strings.Repeat("α", 37)+`..."`, expr.Quote(strings.Repeat("α", 41)))
	assert.True(t, utf8.ValidString(expr.Quote("\xff\xfe")))
}

func TestLimits(t *testing.T) {
	d := expr.Limits{}.WithDefaults()
	assert.Equal(t, d, d.WithDefaults())
	assert.Equal(t, 7, expr.Limits{Degree: 7}.WithDefaults().Degree)
	for _, x := range []int{d.Nesting, d.Text, d.Terms, d.Degree, d.Bits, d.States} {
		assert.Positive(t, x)
	}
}
