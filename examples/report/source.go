package main

import (
	_ "embed"
	"errors"
	"fmt"
	"io"
	"os"
	"strings"
	"time"

	"example.org/closedform/expr"
)

//go:embed container.model
var container string

// source is the text of a model and where it came from.
type source struct {
	name string
	text string
}

// patience is how long a pipe without -model may stay silent. A program that is
// started with a pipe that nobody writes to must not hang for ever.
const patience = 5 * time.Second

// readSource finds the model.
func readSource(file string, stdin *os.File, stderr io.Writer) (source, error) {
	builtIn := source{"the built-in model (refrigerated container)", container}
	switch {
	case file == "-":
		text, err := io.ReadAll(stdin)
		return source{"standard input", string(text)}, err
	case file != "":
		text, err := os.ReadFile(file)
		return source{file, string(text)}, err
	}
	info, err := stdin.Stat()
	if err != nil || info.Mode()&os.ModeCharDevice != 0 {
		return builtIn, nil // a terminal, /dev/null, or no input at all
	}
	type result struct {
		text []byte
		err  error
	}
	first, rest := make(chan result, 1), make(chan result, 1)
	go func() {
		begin := make([]byte, 1)
		n, err := stdin.Read(begin)
		first <- result{begin[:n], err}
		if err == nil {
			text, err := io.ReadAll(stdin)
			rest <- result{append(begin[:n], text...), err}
		}
	}()
	select {
	case r := <-first:
		if r.err == io.EOF {
			return builtIn, nil
		} else if r.err != nil {
			return source{}, r.err
		}
	case <-time.After(patience):
		fmt.Fprintf(stderr, "report: nothing came on standard input for %s; taking the built-in model (-model - waits)\n", patience)
		return builtIn, nil
	}
	r := <-rest
	if strings.TrimSpace(string(r.text)) == "" {
		return builtIn, r.err
	}
	return source{"standard input", string(r.text)}, r.err
}

// notes returns the comment at the top of the model.
func (s source) notes() string {
	var lines []string
	for line := range strings.Lines(s.text) {
		note, ok := strings.CutPrefix(strings.TrimSpace(line), "#")
		if !ok {
			break
		}
		lines = append(lines, strings.TrimSpace(note))
	}
	return strings.TrimSpace(strings.Join(lines, " "))
}

// explain adds the line at fault, with a caret under the place, to the error of
// a bad model.
func (s source) explain(err error) error {
	var e *expr.Error
	if !errors.As(err, &e) {
		return err
	}
	if !e.Pos.IsValid() {
		return fmt.Errorf("%s: %s: %s", s.name, e.Kind, e.Message)
	}
	head := fmt.Sprintf("%s, line %d, column %d: %s: %s", s.name, e.Pos.Line, e.Pos.Column, e.Kind, e.Message)
	lines := strings.Split(strings.TrimPrefix(s.text, "\ufeff"), "\n")
	if e.Pos.Line > len(lines) {
		return errors.New(head)
	}
	line := []rune(strings.TrimRight(lines[e.Pos.Line-1], "\r"))
	indent := make([]rune, 0, e.Pos.Column)
	for i := range e.Pos.Column - 1 {
		if i < len(line) && line[i] == '\t' {
			indent = append(indent, '\t')
		} else {
			indent = append(indent, ' ')
		}
	}
	return fmt.Errorf("%s\n    %s\n    %s^", head, string(line), string(indent))
}
