package main

import (
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
)

// written is a file that was written.
type written struct {
	name        string
	overwritten bool
}

// write writes the files of the report into a folder.
func (r *report) write(dir string) ([]written, error) {
	page, err := r.html()
	if err != nil {
		return nil, err
	}
	type file struct {
		name string
		data []byte
	}
	files := []file{
		{"report.html", []byte(page)},
		{"report.tex", []byte(r.latex())},
		{"response.go", r.goSource},
	}
	for i, c := range r.curves {
		data, err := c.pdf(i + 1)
		if err != nil {
			return nil, err
		}
		files = append(files, file{fmt.Sprintf("plot-%d.pdf", i+1), data})
	}
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return nil, err
	}
	var out []written
	for _, f := range files {
		path := filepath.Join(dir, f.name)
		_, err := os.Stat(path)
		if err := os.WriteFile(path, f.data, 0o644); err != nil {
			return out, err
		}
		out = append(out, written{f.name, err == nil})
	}
	return out, nil
}

// proofText says what was proven.
func (r *report) proofText() string {
	p := r.response.Proof()
	if !p.Holds() {
		return fmt.Sprintf("The proof does not hold. Residual of the equations: %s; of the side conditions: %s.", p.Residual(), p.Side())
	}
	s := "The response was substituted into the equation as it was read. The residual, left side minus right side, is exactly 0"
	if n := len(p.Residuals); n != 1 {
		s = fmt.Sprintf("The response was substituted into the %d equations as they were read. The residual, left side minus right side, is exactly 0 in every one", n)
	}
	if len(p.Sides) > 0 {
		s += fmt.Sprintf(", and the %s exactly", count(len(p.Sides), "side condition is met", "side conditions are met"))
	}
	return s + ". The check shares with the derivation the exact arithmetic, the reading of the equations and the transform of the inputs, and nothing of how the response was found."
}

func count(n int, one, more string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, more)
}

// summary prints what was found and where it is.
func (r *report) summary(w io.Writer, dir string, files []written) error {
	var b strings.Builder
	line := func(name, format string, args ...any) {
		fmt.Fprintf(&b, "%-10s "+format+"\n", append([]any{name}, args...)...)
	}
	names := r.response.States()
	order := 0
	for _, m := range r.response.Modes() {
		order += m.Multiplicity * m.Degree
	}
	line("model", "%s", r.src.name)
	line("states", "%d (%s), order %d", len(names), some(names, 8), order)
	const mostModes = 6
	label := "modes"
	for i, m := range r.modes {
		if i == mostModes {
			line("", "and %d more", len(r.modes)-mostModes)
			break
		}
		s := m.decimal() + m.symbolic
		if m.sigma != 0 {
			s += ", time constant " + m.timeConstant()
		}
		if m.omega > 0 {
			s += ", damping ratio " + m.damping() + ", period " + m.period()
		}
		if m.multiplicity > 1 {
			s += fmt.Sprintf(", multiplicity %d", m.multiplicity)
		}
		line(label, "%s (%s)", s, m.remark())
		label = ""
	}
	if r.response.Proof().Holds() {
		line("proof", "holds: all residuals are exactly 0")
	} else {
		line("proof", "does not hold")
	}
	switch {
	case len(r.response.Parameters()) > 0:
		line("values", "none: the symbols %s have none", some(r.response.Parameters(), 8))
		for _, c := range r.conditions {
			line("holds for", "%s", c)
		}
	case r.general():
		line("values", "none: without side conditions the solution is general, with %s", some(r.response.Constants(), 8))
	default:
		end := r.values[len(r.values)-1]
		largest, at := -1.0, 0
		for i, v := range end.values {
			if x, _ := strconv.ParseFloat(v, 64); math.Abs(x) > largest {
				largest, at = math.Abs(x), i
			}
		}
		line("range", "%s from %s to %s, %s", r.response.Model().Variable(), timeText(r.window.from), timeText(r.window.to), r.window.why)
		line("at the end", "largest in size: %s = %s", names[at], end.values[at])
	}
	var list, old []string
	for _, f := range files {
		list = append(list, f.name)
		if f.overwritten {
			old = append(old, f.name)
		}
	}
	line("written", "%s: %s", dir, some(list, 8))
	if len(old) > 0 {
		line("", "overwritten: %s", some(old, 8))
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// some lists the first names.
func some(names []string, most int) string {
	if len(names) > most {
		return strings.Join(names[:most], ", ") + fmt.Sprintf(" and %d more", len(names)-most)
	}
	return strings.Join(names, ", ")
}
