package expr

import (
	"cmp"
	"errors"
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"

	"example.org/closedform/algebra"
)

// Constants is a field for the numbers of a model that are not all rational:
// Q(a)(x1, ..., xn), where a is a real algebraic number that square roots and
// other roots are written in, and every variable is a symbol, pi, or a formal
// constant such as e^k. It never changes; a field with more constants is a new
// one.
//
// Formal constants are chosen so that they are independent. The exponents of all
// e^x are combinations with integer coefficients of those of the variables, so
// that e^x e^y = e^(x+y) holds by itself. A variable for an angle b is the
// tangent of b/2, in which cos b and sin b are rational, so that
// cos^2 b + sin^2 b = 1 does.
type Constants struct {
	*algebra.FunctionField
	formals    []formal
	generators []generator
	table      [][]algebra.Rat // the powers of a in products of the generators
	assumed    Assumptions
	implied    []Constant // what square roots take not to be negative
	shown      *sharedDisplay
}

// Constant is an element of [Constants].
type Constant = algebra.Fraction

// formal is what a variable stands for.
type formal struct {
	kind formalKind
	name string   // of a symbol
	arg  Constant // the exponent x of e^x, the angle b of tan(b/2)
}

type formalKind int

const (
	symbolFormal formalKind = iota
	piFormal
	expFormal         // e^arg
	halfTangentFormal // tan(arg/2)
)

// generator is an algebraic number as it is written: a root, or the cosine of a
// rational multiple of pi. The products of powers g1^e1 ... gr^er with ei below
// the degrees are a basis of Q(a) over Q.
type generator struct {
	q      int         // the q-th root of arg, 0 for a cosine
	arg    Constant    // free of later generators
	angle  algebra.Rat // cos(angle pi)
	value  Constant
	degree int      // over the field of the generators before it
	scale  Constant // the root of the field over the value, for an arg with symbols
}

// mostAlgebraic bounds the degree of the algebraic numbers of a model.
const mostAlgebraic = 16

// NewConstants returns the field Q(names), the names in their natural order (k2
// before k10); the name pi stands for the number.
func NewConstants(names ...string) *Constants {
	names = slices.Clone(names)
	slices.SortFunc(names, compareNames)
	formals := make([]formal, len(names))
	for i, name := range names {
		formals[i] = formal{kind: symbolFormal, name: name}
		if name == "pi" {
			formals[i].kind = piFormal
		}
	}
	c := &Constants{formals: formals, shown: &sharedDisplay{}}
	c.FunctionField = c.build()
	return c
}

// build returns the function field of the formals, without a root. Formal
// constants have names that no symbol can have.
func (c *Constants) build() *algebra.FunctionField {
	names := make([]string, len(c.formals))
	values := make([]func(uint) algebra.Ball, len(c.formals))
	number := c.numbers()
	for i, f := range c.formals {
		switch f.kind {
		case symbolFormal:
			names[i] = f.name
		case piFormal:
			names[i], values[i] = "pi", algebra.Pi
		case expFormal:
			names[i] = fmt.Sprintf("exp#%d", i)
			if number[i] {
				values[i] = func(prec uint) algebra.Ball { return c.Enclose(f.arg, prec+16).Exp(prec) }
			}
		case halfTangentFormal:
			names[i] = fmt.Sprintf("tan#%d", i)
			if number[i] {
				values[i] = func(prec uint) algebra.Ball {
					sin, cos := c.Enclose(f.arg, prec+16).MulPow2(-1).SinCos(prec)
					return sin.Quo(cos, prec)
				}
			}
		}
	}
	return algebra.NewFunctionField(names, values)
}

// numbers tells which formals stand for numbers: pi, and functions of what is
// free of symbols.
func (c *Constants) numbers() []bool {
	number := make([]bool, len(c.formals))
	for i, f := range c.formals {
		number[i] = f.kind != symbolFormal
	}
	for changed := true; changed; {
		changed = false
		for i, f := range c.formals {
			if !number[i] || f.kind == piFormal {
				continue
			}
			parts := []Constant{f.arg}
			if f.arg.HasRoot() {
				if surd, ok := c.Surd(); ok {
					parts = append(parts, surd)
				}
			}
			for j := range c.formals {
				for _, x := range parts {
					if number[i] && !number[j] && c.Uses(x, j) {
						number[i], changed = false, true
					}
				}
			}
		}
	}
	return number
}

// growth is the error of a constant that is not in the field: it carries the
// field that has it.
type growth struct{ to *Constants }

func (g *growth) Error() string { return "expr: internal error: a constant outside the field" }

// mostGrowth bounds the constants that one text may bring in.
const mostGrowth = 64

// Grow calls read with the field k and, when read meets a constant that is not
// in it, again with one that has it. It returns the last field and the error of
// read.
func Grow(k *Constants, read func(k *Constants) error) (*Constants, error) {
	for range mostGrowth {
		err := read(k)
		var g *growth
		if !errors.As(err, &g) {
			return k, err
		}
		k = g.to
	}
	return k, Errorf(LimitExceeded, Pos{}, "more than %d constants such as exp(a), cos(b) or sqrt(c)", mostGrowth)
}

// Lookup returns the value of a name of the field.
func (c *Constants) Lookup(s Symbol) (Constant, error) {
	switch strings.ToLower(s.Name) {
	case "nan", "inf", "infinity":
		return Constant{}, Errorf(OutsideClass, s.Pos(), "%s is not a number", s.Name)
	}
	if i := c.index(s.Name); i >= 0 {
		return c.Variable(i), nil
	}
	if s.Name == "pi" {
		return Constant{}, &growth{c.with(formal{kind: piFormal})}
	}
	return Constant{}, Errorf(OutsideClass, s.Pos(), "the name %s has no value", Quote(s.Name))
}

func (c *Constants) index(name string) int {
	return slices.IndexFunc(c.formals, func(f formal) bool {
		return f.kind == symbolFormal && f.name == name || f.kind == piFormal && name == "pi"
	})
}

// Symbols returns the names of the symbols.
func (c *Constants) Symbols() []string {
	var out []string
	for _, f := range c.formals {
		if f.kind == symbolFormal {
			out = append(out, f.name)
		}
	}
	return out
}

// FreeName returns the first of the names that no symbol has, with digits if it
// must be.
func (c *Constants) FreeName(names ...string) string {
	for n := 1; ; n++ {
		for _, name := range names {
			if n > 1 {
				name = fmt.Sprintf("%s%d", name, n)
			}
			if c == nil || c.index(name) < 0 {
				return name
			}
		}
	}
}

// SymbolsIn returns the names of the symbols that occur in the elements, those
// in the arguments of formal constants included.
func (c *Constants) SymbolsIn(elements ...Constant) []string {
	used := make([]bool, len(c.formals))
	var visit func(x Constant)
	visit = func(x Constant) {
		if surd, ok := c.Surd(); ok && x.HasRoot() {
			visit(surd)
		}
		for i, f := range c.formals {
			if !used[i] && c.Uses(x, i) {
				used[i] = true
				if f.kind == expFormal || f.kind == halfTangentFormal {
					visit(f.arg)
				}
			}
		}
	}
	for _, x := range elements {
		visit(x)
	}
	var out []string
	for i, f := range c.formals {
		if used[i] && f.kind == symbolFormal {
			out = append(out, f.name)
		}
	}
	return out
}

// with returns the field with one more formal, whose argument is in c.
func (c *Constants) with(f formal) *Constants {
	at := len(c.formals)
	if f.kind == symbolFormal || f.kind == piFormal {
		at = 0
		for at < len(c.formals) && c.formals[at].kind <= piFormal && compareNames(c.formals[at].text(), f.text()) < 0 {
			at++
		}
	}
	return c.rebuild(slices.Insert(slices.Clone(c.formals), at, f), func(g *Constants) ([]Constant, error) {
		values := make([]Constant, len(c.formals))
		for i := range values {
			values[i] = g.Variable(i)
			if i >= at {
				values[i] = g.Variable(i + 1)
			}
		}
		return values, nil
	})
}

// text returns the name of a symbol or of pi.
func (f formal) text() string {
	if f.kind == piFormal {
		return "pi"
	}
	return f.name
}

// compareNames orders names by their letters, and by the values of the numbers
// in them.
func compareNames(a, b string) int {
	whole := strings.Compare(a, b)
	for a != "" && b != "" {
		x, restA := leadingNumber(a)
		y, restB := leadingNumber(b)
		if x != "" && y != "" {
			if c := cmp.Or(cmp.Compare(len(x), len(y)), strings.Compare(x, y)); c != 0 {
				return c
			}
			a, b = restA, restB
			continue
		}
		r, n := utf8.DecodeRuneInString(a)
		s, m := utf8.DecodeRuneInString(b)
		if r != s {
			return cmp.Compare(r, s)
		}
		a, b = a[n:], b[m:]
	}
	return cmp.Or(cmp.Compare(len(a), len(b)), whole)
}

// leadingNumber returns the digits that a text begins with, without zeros in
// front of others, and the rest.
func leadingNumber(s string) (digits, rest string) {
	rest = strings.TrimLeft(s, "0123456789")
	digits = s[:len(s)-len(rest)]
	if n := strings.TrimLeft(digits, "0"); n != "" {
		return n, rest
	}
	return digits, rest
}

// rebuild returns a field with other formals, whose arguments are in c, under
// the images of the old variables.
func (c *Constants) rebuild(formals []formal, images func(g *Constants) ([]Constant, error)) *Constants {
	g := &Constants{formals: formals, shown: &sharedDisplay{}}
	g.FunctionField = g.placeholder(c)
	values, err := images(g)
	if err != nil {
		panic(err) // the images of variables are not zero
	}
	g.carry(c, values)
	return g
}

// placeholder is the field of the formals of g over the root of c, before the
// arguments are known.
func (g *Constants) placeholder(c *Constants) *algebra.FunctionField {
	f := algebra.NewFunctionField(make([]string, len(g.formals)), nil)
	if root, ok := c.Root(); ok {
		f = f.WithRoot(root)
	}
	return f
}

// implying returns the field in which x is not negative.
func (c *Constants) implying(x Constant) *Constants {
	g := *c
	g.shown = &sharedDisplay{}
	g.implied = append(slices.Clone(c.implied), x)
	g.assumed.list = append(slices.Clone(c.assumed.list), assumption{x, notNegative})
	return &g
}

// WithoutRoot returns the field without its algebraic numbers, in which elements
// that hold none are the same, and whether the formal constants allow it.
func (c *Constants) WithoutRoot() (*Constants, bool) {
	for _, f := range c.formals {
		if f.arg.HasRoot() {
			return nil, false
		}
	}
	if slices.ContainsFunc(c.assumed.list, func(a assumption) bool { return a.p.HasRoot() }) {
		return nil, false
	}
	g := *c
	g.shown = &sharedDisplay{}
	g.generators, g.table = nil, nil
	g.FunctionField = g.build()
	return &g, true
}

// withSurd returns the field with the square root of a polynomial x in symbols;
// the generator is the square root of x/den^2.
func (c *Constants) withSurd(x, den Constant) *Constants {
	g := *c
	g.shown = &sharedDisplay{}
	g.FunctionField = c.WithSurd(x)
	arg := c.quotient(c.quotient(x, den), den)
	g.generators = []generator{{q: 2, arg: arg, value: g.quotient(g.RootElement(), den), degree: 2, scale: den}}
	return &g
}

// carry maps what c knows into g, given the images of the variables.
func (g *Constants) carry(c *Constants, values []Constant) {
	surd, isSurd := c.Surd()
	if isSurd {
		x, err := c.Map(surd, g.FunctionField, Constant{}, values)
		if err != nil {
			panic(err) // a polynomial has no denominator
		}
		g.FunctionField = g.FunctionField.WithSurd(x)
		surd = x
	}
	root := Constant{}
	if c.Degree() > 1 {
		root = g.RootElement()
	}
	place := g.FunctionField
	to := func(x Constant) Constant {
		y, err := c.Map(x, place, root, values)
		if err != nil {
			panic(err) // an embedding has no zero divisors
		}
		return y
	}
	g.take(c, to)
	g.table = c.table
	g.FunctionField = g.build()
	if root, ok := c.Root(); ok {
		g.FunctionField = g.FunctionField.WithRoot(root)
	}
	if isSurd {
		g.FunctionField = g.FunctionField.WithSurd(surd)
	}
}

// take maps the formals of g, and the generators and assumptions of c into g.
func (g *Constants) take(c *Constants, to func(Constant) Constant) {
	for i, f := range g.formals {
		g.formals[i].arg = to(f.arg)
	}
	for _, h := range c.generators {
		h.arg, h.value, h.scale = to(h.arg), to(h.value), to(h.scale)
		g.generators = append(g.generators, h)
	}
	g.assumed = c.assumed.mapped(to)
	for _, x := range c.implied {
		g.implied = append(g.implied, to(x))
	}
}

// adjoin returns the field with one more algebraic number.
func (c *Constants) adjoin(h generator, adj algebra.Adjunction) *Constants {
	g := &Constants{formals: slices.Clone(c.formals), shown: &sharedDisplay{}}
	values := make([]Constant, len(c.formals))
	for i := range values {
		values[i] = adj.Field.Variable(i)
	}
	to := func(x Constant) Constant {
		y, err := c.Map(x, adj.Field, adj.Root, values)
		if err != nil {
			panic(err) // an embedding has no zero divisors
		}
		return y
	}
	g.take(c, to)
	h.arg, h.value = to(h.arg), adj.New
	h.degree = adj.Field.Degree() / c.Degree()
	g.generators = append(g.generators, h)
	g.FunctionField = adj.Field
	root, _ := adj.Field.Root()
	g.FunctionField = g.build().WithRoot(root)
	g.table = g.powersInGenerators()
	return g
}
