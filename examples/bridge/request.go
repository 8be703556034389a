package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"math/big"
	"sort"
	"strconv"
	"strings"
	"unicode/utf8"

	"example.org/closedform/algebra"
	"example.org/closedform/expr"
)

const (
	defaultDigits = 17
	mostDigits    = 10_000
)

// request is one request, read.
type request struct {
	id     json.RawMessage // nil if there is none
	model  string
	at     []moment // nil if values are not asked for
	digits int
	set    map[string]expr.Node
	assume []string
	form   expr.Form
	want   map[string]bool
}

// moment is a time with the text that it came in.
type moment struct {
	text string
	time *big.Rat
}

// wants are the words that want may hold, with those it stands for when absent.
var wants = map[string]bool{"text": true, "latex": true, "mathml": true, "modes": true, "go": false, "working": false}

func badRequest(format string, args ...any) error {
	return expr.Errorf(expr.Syntax, expr.Pos{}, format, args...)
}

// readRequest reads a line. With an error it returns the id if that could be
// read.
func readRequest(line []byte) (request, error) {
	req := request{digits: defaultDigits}
	if !utf8.Valid(line) {
		return req, badRequest("the request is not valid UTF-8")
	}
	var fields map[string]json.RawMessage
	if err := json.Unmarshal(line, &fields); err != nil || fields == nil {
		req.id = readID(line)
		return req, badRequest("a request is a JSON object on one line%s", jsonFault(err))
	}
	req.id = fields["id"]
	return req, req.read(fields)
}

// jsonFault says what is wrong with a JSON text.
func jsonFault(err error) string {
	var syntax *json.SyntaxError
	if errors.As(err, &syntax) {
		return ": " + err.Error() + " (byte " + strconv.FormatInt(syntax.Offset, 10) + ")"
	}
	return ""
}

// readID returns the id in the readable beginning of a broken request.
func readID(line []byte) json.RawMessage {
	d := json.NewDecoder(bytes.NewReader(line))
	if tok, err := d.Token(); err != nil || tok != json.Delim('{') {
		return nil
	}
	for d.More() {
		key, err := d.Token()
		if err != nil {
			return nil
		}
		var value json.RawMessage
		if err := d.Decode(&value); err != nil {
			return nil
		}
		if key == "id" {
			if !utf8.Valid(value) {
				return nil
			}
			return value
		}
	}
	return nil
}

// read reads the fields; null stands for an absent one.
func (req *request) read(fields map[string]json.RawMessage) error {
	names := make([]string, 0, len(fields))
	for name := range fields {
		names = append(names, name)
	}
	sort.Strings(names) // the first fault in the order of names is reported
	req.want = wants
	hasModel := false
	for _, name := range names {
		raw := fields[name]
		if string(raw) == "null" && name != "id" {
			continue
		}
		var err error
		switch name {
		case "id":
		case "model":
			hasModel = true
			err = unmarshal(name, raw, "a string with the text of a model", &req.model)
		case "at":
			err = req.readAt(raw)
		case "digits":
			err = req.readDigits(raw)
		case "set":
			err = req.readSet(raw)
		case "assume":
			err = req.readAssume(raw)
		case "form":
			err = req.readForm(raw)
		case "want":
			err = req.readWant(raw)
		default:
			err = badRequest("a request has no field %s; its fields are id, model, at, digits, set, assume, form, want", expr.Quote(name))
		}
		if err != nil {
			return err
		}
	}
	if !hasModel {
		return badRequest("the request has no model")
	}
	return nil
}

func unmarshal(name string, raw json.RawMessage, form string, to any) error {
	d := json.NewDecoder(bytes.NewReader(raw))
	d.UseNumber()
	if err := d.Decode(to); err != nil && err != io.EOF {
		return badRequest("%s is not %s", name, form)
	}
	return nil
}

// rational reads a number from a JSON string or a JSON number, exactly.
func rational(v any) (text string, x *big.Rat, ok bool) {
	switch v := v.(type) {
	case string:
		text = strings.TrimSpace(v)
	case json.Number:
		text = v.String()
	default:
		return "", nil, false
	}
	r, err := algebra.ParseRat(text)
	if err != nil {
		return text, nil, false
	}
	return text, r.Big(), true
}

func (req *request) readAt(raw json.RawMessage) error {
	var list []any
	if err := unmarshal("at", raw, "a list of times", &list); err != nil {
		return err
	}
	req.at = []moment{}
	for i, v := range list {
		text, t, ok := rational(v)
		if !ok {
			return badRequest("entry %d of at is not a time such as \"1/2\", \"3\" or \"0.25\"", i+1)
		}
		req.at = append(req.at, moment{text, t})
	}
	return nil
}

func (req *request) readDigits(raw json.RawMessage) error {
	n, err := strconv.Atoi(string(raw))
	var tooBig *strconv.NumError
	switch {
	case errors.As(err, &tooBig) && tooBig.Err == strconv.ErrRange, err == nil && n > mostDigits:
		return expr.Errorf(expr.LimitExceeded, expr.Pos{}, "digits is %s, at most %d are given", raw, mostDigits)
	case err != nil || n < 1:
		return badRequest("digits is not a whole number from 1 to %d", mostDigits)
	}
	req.digits = n
	return nil
}

func (req *request) readSet(raw json.RawMessage) error {
	var values map[string]any
	if err := unmarshal("set", raw, "an object with a number or an expression for each name", &values); err != nil {
		return err
	}
	req.set = map[string]expr.Node{}
	names := make([]string, 0, len(values))
	for name := range values {
		names = append(names, name)
	}
	sort.Strings(names)
	for _, name := range names {
		if _, x, ok := rational(values[name]); ok {
			req.set[name] = expr.Num(algebra.RatFromBig(x))
			continue
		}
		text, ok := values[name].(string)
		if !ok {
			return badRequest("the value of %s in set is neither a number such as \"1/3\" nor an expression such as \"pi/4\"", expr.Quote(name))
		}
		n, err := expr.Parse(text, expr.Limits{})
		if err != nil {
			var e *expr.Error
			if errors.As(err, &e) {
				return expr.Errorf(e.Kind, expr.Pos{}, "the value of %s in set is neither a number nor an expression: %s", expr.Quote(name), e.Message)
			}
			return err
		}
		req.set[name] = n
	}
	return nil
}

func (req *request) readWant(raw json.RawMessage) error {
	var words []string
	if err := unmarshal("want", raw, "a list of strings", &words); err != nil {
		return err
	}
	req.want = map[string]bool{}
	for _, w := range words {
		if _, known := wants[w]; !known {
			return badRequest("want holds %s; it may hold text, latex, mathml, go, modes, working", expr.Quote(w))
		}
		req.want[w] = true
	}
	return nil
}

// numberWords are the words for the numbers of a form.
var numberWords = map[string]expr.Numbers{"exact": expr.ExactNumbers, "mixed": expr.MixedNumbers, "decimal": expr.DecimalNumbers}

// readForm reads how formulas are written.
func (req *request) readForm(raw json.RawMessage) error {
	form := struct {
		Numbers    string `json:"numbers"`
		Digits     int    `json:"digits"`
		Amplitude  bool   `json:"amplitude"`
		SteadyLast bool   `json:"steady_last"`
	}{Numbers: "exact", Digits: 6}
	d := json.NewDecoder(bytes.NewReader(raw))
	d.DisallowUnknownFields()
	if err := d.Decode(&form); err != nil {
		return badRequest("form is not an object with the fields numbers, digits, amplitude, steady_last")
	}
	numbers, known := numberWords[form.Numbers]
	if !known {
		return badRequest("numbers in form is %s; it may be exact, mixed or decimal", expr.Quote(form.Numbers))
	}
	if form.Digits < 1 {
		return badRequest("digits in form is not a whole number from 1 to %d", mostDigits)
	}
	if form.Digits > mostDigits {
		return expr.Errorf(expr.LimitExceeded, expr.Pos{}, "digits in form is %d, at most %d are given", form.Digits, mostDigits)
	}
	req.form = expr.Form{Numbers: numbers, Digits: form.Digits, Amplitude: form.Amplitude, SteadyLast: form.SteadyLast}
	return nil
}

// readAssume reads the assumptions, relations among symbols.
func (req *request) readAssume(raw json.RawMessage) error {
	if err := unmarshal("assume", raw, "a list of strings", &req.assume); err != nil {
		return err
	}
	for _, s := range req.assume {
		list, err := expr.ParseRelations(s, expr.Limits{})
		if err != nil {
			var e *expr.Error
			if errors.As(err, &e) {
				return expr.Errorf(expr.Syntax, expr.Pos{}, "in the assumption %s: %s", expr.Quote(s), e.Message)
			}
			return err
		}
		for _, r := range list {
			if r.Op == "=" {
				return badRequest("the assumption %s is not an inequality such as \"k > 0\", with one of < > <= >= !=", expr.Quote(s))
			}
		}
	}
	return nil
}
