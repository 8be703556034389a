// Bridge serves models to other programs: one JSON request a line on standard
// input, one JSON response a line on standard output, until the input ends.
//
//	{"id": 1, "model": "x' = -2 x\nx(0) = 1", "at": ["1/2"], "digits": 40}
//
// The fields of a request, all but model optional:
//
//	id      any JSON value, repeated in the response
//	model   the text of the model
//	at      times, as "1/2", "0.25" or plain JSON numbers; asks for values
//	digits  significant digits of values and roots, 1 to 10000, default 17
//	set     values of the free constants of a general solution, for values only
//	assume  relations such as "k > 0"
//	form    how formulas are written: an object with numbers (exact, mixed or
//	        decimal), their digits, amplitude (true for amplitude and phase) and
//	        steady_last (true for decaying terms first)
//	want    any of text, latex, mathml, go, modes, working; without it: text,
//	        latex, mathml, modes
//
// A response holds states, solution, steady, transient, proof and conditions,
// and what was asked for; a bad request gets {"error": {"kind", "message",
// "line", "column"}}, and the next line is served. The kinds are those of
// package expr, and "internal" for a fault of this program. Lines of white
// space are passed over.
package main

import (
	"flag"
	"fmt"
	"os"
	"time"
)

func main() {
	timeout := flag.Duration("timeout", time.Minute, "time limit of one request")
	flag.Parse()
	if flag.NArg() > 0 {
		fmt.Fprintln(os.Stderr, "bridge: takes no arguments; requests come on standard input, one a line")
		os.Exit(2)
	}
	s := server{timeout: *timeout, answer: answer}
	if err := s.serve(os.Stdin, os.Stdout); err != nil {
		fmt.Fprintln(os.Stderr, "bridge:", err)
		os.Exit(1)
	}
}
