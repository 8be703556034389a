package expr

import (
	"fmt"
	"math"
	"strings"
)

// file assembles the source.
func (g *goWriter[E]) file(fs []Function) string {
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	state := g.opt.Func + "State"
	goHead(line, g.opt)
	if g.values.math || g.slopes.math {
		line("import \"math\"\n")
	}
	line("// %s holds the values of the states at one time.", state)
	fields := goNames(g.names)
	goStruct(line, state, fields, g.names)
	line("// %s returns the states at the time %s:", g.opt.Func, inert(g.variable))
	line("//")
	goFormulas(line, g.names, fs)
	arg, pass := "", ""
	if n := len(g.constants); n > 0 {
		line("//\n// c holds the constants %s.", inert(strings.Join(g.constants, ", ")))
		arg, pass = fmt.Sprintf(", c [%d]float64", n), ", c"
	}
	g.statement(line, &g.values, fields)
	g.function(line, g.opt.Func, arg, fields, &g.values)

	dst, times, t := g.local("dst"), g.local("times"), g.local("t")
	line("\n// %sValues returns the states at all times, in %s as far as it has room.", g.opt.Func, dst)
	line("func %sValues(%s []%s, %s []float64%s) []%s {", g.opt.Func, dst, state, times, arg, state)
	line("%s = %s[:0]", dst, dst)
	line("for _, %s := range %s {", t, times)
	line("%s = append(%s, %s(%s%s))", dst, dst, g.opt.Func, t, pass)
	line("}\nreturn %s\n}", dst)

	line("\n// %sRates returns the derivatives of the states at the time %s.", g.opt.Func, inert(g.variable))
	g.statement(line, &g.slopes, fields)
	g.function(line, g.opt.Func+"Rates", arg, fields, &g.slopes)
	return b.String()
}

// local returns a name of a variable that does not hide the function.
func (g *goWriter[E]) local(name string) string {
	if name == g.opt.Func {
		return name + "_"
	}
	return name
}

// function writes a function of time.
func (g *goWriter[E]) function(line func(string, ...any), name, arg string, fields []string, r *goRoutine) {
	state := g.opt.Func + "State"
	all := strings.Join(append(r.lines, r.exprs...), "\n")
	switch {
	case !usesName(all, g.time):
		line("func %s(_ float64%s) %s {", name, arg, state) // all states are constant
	case g.time == "t":
		line("func %s(t float64%s) %s {", name, arg, state)
	default:
		line("func %s(t float64%s) %s {", name, arg, state)
		line("tau := t - %s", goFloat(g.origin.x))
	}
	if g.time != "t" && usesName(all, g.time) {
		all += " " + goFloat(g.origin.x)
	}
	for _, l := range g.exactValues(all) {
		line("// %s", l)
	}
	for _, l := range r.lines {
		line("%s", l)
	}
	line("return %s{", state)
	for i, f := range fields {
		line("%s: %s,", f, r.exprs[i])
	}
	line("}\n}")
}

// exactValues lists the exact values of the constants that occur in a text.
func (g *goWriter[E]) exactValues(all string) []string {
	var list []string
	seen := map[string]bool{}
	for _, n := range g.numbers {
		x := goFloat(math.Abs(n.x))
		s := x + " is " + n.text
		if n.text != "" && !seen[s] && usesNumber(all, x) {
			seen[s] = true
			list = append(list, s)
		}
	}
	if len(list) == 0 {
		return nil
	}
	return wrap(strings.Join(list, ", ")+".", 92)
}

// usesNumber tells whether a constant occurs in an expression.
func usesNumber(src, number string) bool {
	part := func(i int) bool {
		return i >= 0 && i < len(src) && (isNamePart(rune(src[i])) || src[i] == '.')
	}
	for at := 0; ; {
		i := strings.Index(src[at:], number)
		if i < 0 {
			return false
		}
		start := at + i
		if !part(start-1) && !part(start+len(number)) {
			return true
		}
		at = start + 1
	}
}
