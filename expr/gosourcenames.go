package expr

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"
)

// goHead writes the comment and the clause of the package.
func goHead(line func(string, ...any), opt GoOptions) {
	line("// Package %s evaluates a closed-form response.", opt.Package)
	for i, d := range opt.Doc {
		if i == 0 {
			line("//")
		}
		line("//\t%s", inert(d))
	}
	line("package %s\n", opt.Package)
}

// goStruct writes a type with a field for each name.
func goStruct(line func(string, ...any), name string, fields, names []string) {
	line("type %s struct {", name)
	for i, f := range fields {
		line("%s float64 // %s", f, inert(names[i]))
	}
	line("}\n")
}

// goFormulas writes the functions as comments.
func goFormulas(line func(string, ...any), names []string, fs []Function) {
	for i, f := range fs {
		formula, err := writtenFormula(f)
		switch {
		case err != nil:
			formula = "(a formula too long to be written)"
		case len(formula) > mostComment:
			formula = fmt.Sprintf("(a formula of %d characters)", len(formula))
		}
		for j, l := range wrap(inert(names[i]+" = "+formula), 96) {
			if j > 0 {
				l = "    " + l
			}
			line("//\t%s", l)
		}
	}
}

// writtenFormula writes f, unless the work with symbols grows beyond limits.
func writtenFormula(f Function) (s string, err error) {
	defer catchLimit(&err)
	return f.String(), nil
}

// inert keeps a text on its line: what does not print is escaped, and so is the
// plus sign of what could be taken for a build constraint.
func inert(s string) string {
	s = strings.ReplaceAll(s, "+build", `\+build`)
	var b strings.Builder
	for _, r := range s {
		if unicode.IsPrint(r) {
			b.WriteRune(r)
		} else {
			b.WriteString(strings.Trim(strconv.QuoteRune(r), "'"))
		}
	}
	return b.String()
}

// wrap breaks a text at blanks into lines of about the given width.
func wrap(s string, width int) []string {
	var lines []string
	for len(s) > width {
		i := strings.LastIndex(s[:width], " ")
		if i <= 0 {
			if i = strings.Index(s[width:], " "); i < 0 {
				break
			}
			i += width
		}
		lines = append(lines, s[:i])
		s = s[i+1:]
	}
	return append(lines, s)
}

// goNames turns names into exported Go identifiers without collisions, other
// than the taken ones.
func goNames(names []string, taken ...string) []string {
	used := map[string]bool{}
	for _, id := range taken {
		used[id] = true
	}
	out := make([]string, len(names))
	for i, name := range names {
		var b strings.Builder
		upper := true
		for _, r := range name {
			switch {
			case !unicode.IsLetter(r) && !unicode.IsDigit(r):
				upper = true
			case upper:
				b.WriteRune(unicode.ToUpper(r))
				upper = false
			default:
				b.WriteRune(r)
			}
		}
		id := b.String()
		if first := []rune(id + "0")[0]; !unicode.IsUpper(first) {
			id = "X" + id
		}
		for n := 2; used[id]; n++ {
			id = fmt.Sprintf("%s_%d", strings.TrimRight(id, "_0123456789"), n)
		}
		used[id] = true
		out[i] = id
	}
	return out
}
