// Gains reads a job file, a plant with a controller and a requirement sheet, and prints every
// loop gain k that meets the sheet on the true closed loop, with what ends each interval of
// such gains, and the recommended one with the figures that it reaches.
//
//	gains [-gain K] [-json] [-pictures DIR] [JOB]
//
// JOB is a file, or standard input if it is left out or "-". The exit status is 0 when a gain
// exists, 1 when none does, and 2 for bad input.
//
// A gain from a model is a proposal: try it with limits, guards and an emergency stop.
package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"math"
	"os"
	"os/signal"

	"github.com/polewright/polewright/spec"
)

// Exit statuses.
const (
	found    = 0
	none     = 1
	badInput = 2
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	os.Exit(run(ctx, os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

func run(ctx context.Context, args []string, in io.Reader, out, problems io.Writer) int {
	flags := flag.NewFlagSet("gains", flag.ContinueOnError)
	flags.SetOutput(problems)
	flags.Usage = func() {
		fmt.Fprintln(problems, "usage: gains [-gain K] [-json] [-pictures DIR] [JOB]")
		flags.PrintDefaults()
	}
	gain := flags.Float64("gain", math.NaN(), "a gain in use, to be judged")
	asJSON := flags.Bool("json", false, "print JSON for machines")
	pictures := flags.String("pictures", "", "write pictures of the locus and the step response into this folder")
	if err := flags.Parse(args); err != nil {
		if errors.Is(err, flag.ErrHelp) {
			return found
		}
		return badInput
	}
	name := "standard input"
	var data []byte
	var err error
	switch {
	case flags.NArg() > 1:
		fmt.Fprintf(problems, "gains: %d job files; expected one (options come before it)\n", flags.NArg())
		return badInput
	case flags.NArg() == 0 || flags.Arg(0) == "-":
		data, err = io.ReadAll(in)
	default:
		name = flags.Arg(0)
		data, err = os.ReadFile(name)
	}
	if err != nil {
		fmt.Fprintf(problems, "gains: %v; expected a job file that can be read\n", err)
		return badInput
	}
	given := false
	flags.Visit(func(f *flag.Flag) { given = given || f.Name == "gain" })
	if given && (math.IsNaN(*gain) || math.IsInf(*gain, 0)) {
		fmt.Fprintf(problems, "gains: -gain %v; expected a finite number\n", *gain)
		return badInput
	}
	j, err := readJob(name, data)
	if err != nil {
		fmt.Fprintf(problems, "gains: %v\n", err)
		return badInput
	}
	var options []spec.Option
	if given {
		options = append(options, spec.InUse(*gain))
		if *gain < 0 {
			options = append(options, spec.NegativeGains())
		}
	}
	design, err := j.sheet.Design(ctx, j.loops, options...)
	if err != nil {
		fmt.Fprintf(problems, "gains: %s: %v\n", name, err)
		return badInput
	}
	if *asJSON {
		err = printJSON(out, j, design)
	} else {
		err = printReport(out, j, design)
	}
	if err == nil && *pictures != "" {
		err = drawPictures(ctx, *pictures, j, design, problems)
	}
	if err != nil {
		fmt.Fprintf(problems, "gains: %v\n", err)
		return badInput
	}
	if !design.Feasible {
		return none
	}
	return found
}
