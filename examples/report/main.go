// Report derives the response of a model and writes what goes with it into a
// folder: report.html, report.tex with its plots, and response.go.
//
//	report [-o DIR] [-model FILE] [-from T] [-to T] [-assume RELATIONS]
//
// The model comes from the file, or else from standard input if something is
// piped in, or else it is the built-in one, a refrigerated container. With
// "-model -" standard input is waited for.
package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"math/big"
	"os"
	"os/signal"

	"example.org/closedform/algebra"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := run(ctx, os.Args[1:], os.Stdin, os.Stdout, os.Stderr); err != nil {
		if errors.Is(err, flag.ErrHelp) {
			return
		}
		fmt.Fprintln(os.Stderr, "report:", err)
		stop()
		os.Exit(1)
	}
}

// run is the program.
func run(ctx context.Context, args []string, stdin *os.File, stdout, stderr io.Writer) error {
	flags := flag.NewFlagSet("report", flag.ContinueOnError)
	flags.SetOutput(stderr)
	dir := flags.String("o", "report-out", "`folder` to write to; it is created")
	file := flags.String("model", "", "`file` with the model, - for standard input")
	var from, to rationalFlag
	flags.Var(&from, "from", "start of plots and values, a `time` such as 0 or 1/2; default the time of the side conditions")
	flags.Var(&to, "to", "end of plots and values, a `time`; default from the modes")
	var assume []string
	flags.Func("assume", "`relations` that the symbols satisfy, such as \"k1 > k2 > 0\"; may be repeated", func(s string) error {
		assume = append(assume, s)
		return nil
	})
	if err := flags.Parse(args); err != nil {
		return err
	}
	if flags.NArg() > 0 {
		return fmt.Errorf("what is %q? The model is given with -model", flags.Arg(0))
	}
	src, err := readSource(*file, stdin, stderr)
	if err != nil {
		return err
	}
	rep, err := derive(ctx, src, from.value, to.value, assume...)
	if err != nil {
		return src.explain(err)
	}
	files, err := rep.write(*dir)
	if err != nil {
		return err
	}
	return rep.summary(stdout, *dir, files)
}

// rationalFlag is a flag with an exact number.
type rationalFlag struct{ value *big.Rat }

func (f *rationalFlag) String() string {
	if f.value == nil {
		return ""
	}
	return f.value.RatString()
}

func (f *rationalFlag) Set(s string) error {
	x, err := algebra.ParseRat(s)
	if err != nil {
		return errors.New("not a number such as 12, 0.5 or 1/3")
	}
	f.value = x.Big()
	return nil
}
