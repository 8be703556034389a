package expr

import (
	"context"
	"slices"
	"strings"
)

// sumByNumbers reads the terms of a sum in groups by their algebraic numbers: each
// group may be rational, while a field for the numbers of all is large.
func sumByNumbers(n Node, variable string, limits Limits) (Function, bool) {
	terms := spread(nil, n, nil, variable)
	if len(terms) < 2 || len(terms) > mostSpread {
		return Function{}, false
	}
	if len(nestedIn(numbersIn(n))) > 0 {
		if f, ok := sumInGroups(terms, variable, limits, sameNested); ok {
			return f, true
		}
	}
	return sumInGroups(terms, variable, limits, shareNumber)
}

// mostSpread bounds the terms that are read in groups, and mostGroups the groups:
// each may take the work that a text may.
const (
	mostSpread = 1 << 10
	mostGroups = 16
)

// spread appends the terms of the product of factors and n to list, sums that the
// variable occurs in multiplied out.
func spread(list []Node, n Node, factors []Node, variable string) []Node {
	if len(list) > mostSpread {
		return list
	}
	switch v := n.(type) {
	case Neg:
		return spread(list, v.X, append(slices.Clip(factors), Int(-1)), variable)
	case Sum:
		if len(factors) == 0 || slices.Contains(Names(v), variable) {
			for _, t := range v.Terms {
				list = spread(list, t, factors, variable)
			}
			return list
		}
	case Product:
		for i, f := range v.Factors {
			if s, ok := f.(Sum); ok && slices.Contains(Names(s), variable) {
				others := slices.Concat(factors, v.Factors[:i], v.Factors[i+1:])
				return spread(list, s, others, variable)
			}
		}
	}
	return append(list, Mul(append(slices.Clip(factors), n)...))
}

// sumInGroups reads terms in groups of those whose numbers belong together.
func sumInGroups(all []Node, variable string, limits Limits, same func(a, b []string) bool) (Function, bool) {
	var plain []Node // the terms without such numbers
	var keys [][]string
	var groups [][]Node
	for _, t := range all {
		numbers := numbersIn(t)
		if len(numbers) == 0 {
			plain = append(plain, t)
			continue
		}
		terms := []Node{t}
		kept := 0
		for i := range groups { // join those that belong to t
			if same(keys[i], numbers) {
				numbers, terms = append(numbers, keys[i]...), append(terms, groups[i]...)
				continue
			}
			keys[kept], groups[kept] = keys[i], groups[i]
			kept++
		}
		keys, groups = append(keys[:kept], numbers), append(groups[:kept], terms)
	}
	if len(groups) == 0 || len(groups) > mostGroups || len(groups) == 1 && !slices.ContainsFunc(plain, hasRootSum) {
		return Function{}, false
	}
	sum, err := functionOf(Add(plain...), variable, nil, limits)
	if err != nil {
		return sum, false
	}
	for _, terms := range groups {
		f, err := functionOf(Add(terms...), variable, nil, limits)
		if err != nil {
			return f, false
		}
		if a, b := sum.x.field(), f.x.field(); a != nil && b != nil {
			if _, err := joined(a, b); err != nil {
				return f, false
			}
		}
		sum = sum.Add(f)
	}
	x, err := sum.x.simplest(context.Background())
	return Function{variable, x}, err == nil
}

// shareNumber tells whether two lists of numbers have one in common.
func shareNumber(a, b []string) bool {
	return slices.ContainsFunc(a, func(x string) bool { return slices.Contains(b, x) })
}

// sameNested is shareNumber for roots in roots, up to signs in them; without such on
// either side for all numbers. sqrt(2 - sqrt(2)) and sqrt(2 + sqrt(2)) are conjugates.
func sameNested(a, b []string) bool {
	x, y := nestedIn(a), nestedIn(b)
	if len(x)+len(y) == 0 {
		return shareNumber(a, b)
	}
	return shareNumber(x, y)
}

// nestedIn returns what the roots in roots among the numbers are made of.
func nestedIn(numbers []string) (out []string) {
	for _, s := range numbers {
		if strings.Contains(s, "sqrt(") || strings.Contains(s, "^(") {
			parts := strings.FieldsFunc(s, func(r rune) bool { return r == '+' || r == '-' || r == ' ' })
			slices.Sort(parts)
			out = append(out, strings.Join(parts, " "))
		}
	}
	return out
}

// numbersIn tells the algebraic numbers in a tree: radicands, and the fractions of pi
// whose cosines and sines occur.
func numbersIn(n Node) []string {
	var out []string
	note := func(s string) {
		if !slices.Contains(out, s) {
			out = append(out, s)
		}
	}
	var visit func(n Node)
	visit = func(n Node) {
		switch v := n.(type) {
		case Call:
			switch q, quotient := v.Arg.(Quotient); {
			case v.Func == "sqrt":
				note("sqrt " + v.Arg.String())
			case (v.Func == "cos" || v.Func == "sin") && quotient && isOnlyPi(q.Num):
				note("pi/" + q.Den.String())
			}
		case Power:
			switch e := v.Exp.(type) {
			case Number:
				if !e.Val.IsInt() {
					note(v.Base.String() + "^1/" + e.Val.Den().String())
				}
			case Quotient:
				note(v.Base.String() + "^1/" + e.Den.String())
			}
		}
		Children(n, func(c Node) bool {
			visit(c)
			return true
		})
	}
	visit(n)
	return out
}

// isOnlyPi tells whether n is a multiple of pi.
func isOnlyPi(n Node) bool {
	names := Names(n)
	return len(names) == 1 && names[0] == "pi"
}
