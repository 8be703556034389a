package main

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"time"

	"example.org/closedform/expr"
)

// longestLine is the most bytes a request may have.
const longestLine = 16 << 20

// grace is how long a request may outlive its time limit before its work is
// abandoned: cancellation is prompt where a context is looked at.
const grace = 2 * time.Second

// kindInternal is the kind of errors that no input should cause.
const kindInternal = "internal"

// server reads requests and writes responses.
type server struct {
	timeout time.Duration
	answer  func(context.Context, request) (object, error)
}

// serve answers the requests of r on w, one at a time, until r ends.
func (s server) serve(r io.Reader, w io.Writer) error {
	in := bufio.NewReaderSize(r, 1<<16)
	for {
		line, long, err := readLine(in)
		if err != nil && err != io.EOF {
			return err
		}
		if long || len(bytes.TrimSpace(line)) > 0 {
			out, encodeErr := encode(s.respond(line, long))
			if encodeErr != nil {
				return encodeErr
			}
			// One write a response: nothing is left in a buffer.
			if _, writeErr := w.Write(append(out, '\n')); writeErr != nil {
				return writeErr
			}
		}
		if err == io.EOF {
			return nil
		}
	}
}

// readLine returns the next line without its end. Of a line that is too long it
// returns the beginning.
func readLine(in *bufio.Reader) (line []byte, long bool, err error) {
	for {
		part, err := in.ReadSlice('\n')
		if len(line)+len(part) > longestLine+1 {
			long = true
			part = part[:max(0, longestLine-len(line))]
		}
		line = append(line, part...)
		if err != bufio.ErrBufferFull {
			return bytes.TrimSuffix(line, []byte("\n")), long, err
		}
	}
}

// respond returns the response to a line.
func (s server) respond(line []byte, long bool) object {
	line = bytes.TrimPrefix(line, []byte("\ufeff"))
	if long {
		err := expr.Errorf(expr.LimitExceeded, expr.Pos{}, "the request has more than %d bytes", longestLine)
		return failure(readID(line), err)
	}
	req, err := readRequest(line)
	if err != nil {
		return failure(req.id, err)
	}
	out, err := s.compute(req)
	if err != nil {
		return failure(req.id, err)
	}
	return append(identified(req.id), out...)
}

// compute answers a request under the time limit; a panic becomes an error.
func (s server) compute(req request) (object, error) {
	ctx, cancel := context.WithTimeout(context.Background(), s.timeout)
	defer cancel()
	type result struct {
		out object
		err error
	}
	done := make(chan result, 1)
	go func() {
		var r result
		defer func() {
			if x := recover(); x != nil {
				r = result{err: fmt.Errorf("a panic while serving the request: %v", x)}
			}
			done <- r
		}()
		r.out, r.err = s.answer(ctx, req)
	}()
	late := time.NewTimer(s.timeout + grace)
	defer late.Stop()
	select {
	case r := <-done:
		return r.out, r.err
	case <-late.C:
		return nil, context.DeadlineExceeded
	}
}

// identified returns an object with the id, if there is one.
func identified(id json.RawMessage) object {
	var o object
	if id != nil {
		o.add("id", id)
	}
	return o
}

// failure returns an error response.
func failure(id json.RawMessage, err error) object {
	var known *expr.Error
	kind, message, at := kindInternal, err.Error(), expr.Pos{}
	switch {
	case errors.As(err, &known):
		kind, message, at = string(known.Kind), known.Message, known.Pos
	case errors.Is(err, context.DeadlineExceeded), errors.Is(err, context.Canceled):
		kind = string(expr.Cancelled)
	}
	if kind == string(expr.Cancelled) {
		message = "the time limit is up: " + message
	}
	var e object
	e.add("kind", kind)
	e.add("message", message)
	if at.IsValid() {
		e.add("line", at.Line)
		e.add("column", at.Column)
	}
	o := identified(id)
	o.add("error", e)
	return o
}
