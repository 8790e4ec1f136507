// Command scenarios breaks simulated rigs in every way that the simulation knows, and says how well the watch does: on
// structures drawn at random, with each fault many times, against healthy runs.
//
// It knows the simulation and the pipeline as a user of both, and which words count as right for which fault. It may not
// know how the watch comes to them. Seeds from 1 to 999 are for whoever tunes the watch; what is reported comes from 1000
// and up.
package main

import (
	"context"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"time"
)

// Exit statuses.
const (
	exitMet      = 0
	exitMissed   = 1 // some aim is not met
	exitUnusable = 2 // the command line, or a run that could not be played
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	os.Exit(run(ctx, os.Args[1:], os.Stdout, os.Stderr))
}

// reportFrom is the first seed that nobody tunes on.
const reportFrom = 1000

// parallel runs at a time; each has a worker of its own.
const parallel = 2

func run(ctx context.Context, args []string, stdout, stderr io.Writer) int {
	flags := flag.NewFlagSet("scenarios", flag.ContinueOnError)
	flags.SetOutput(stderr)
	from := flags.Uint64("from", reportFrom, "first `seed`; 1 to 999 are for tuning")
	runs := flags.Int("runs", 20, "runs of each scenario; the healthy ones of the first setting are five times as many")
	again := flags.Int("again", 2, "runs of each scenario that are played again to compare the bits")
	only := flags.String("only", "", "scenarios whose `name`, as the table has it, contains this")
	analysis := flags.String("analysis", "", "scenarios whose analysis, as the table has it, contains this")
	verbose := flags.Bool("v", false, "print each run with its events")
	list := flags.Bool("list", false, "print the names of the scenarios")
	if err := flags.Parse(args); err != nil {
		return exitUnusable
	}
	s := &suite{from: *from, runs: *runs, again: *again, workers: parallel}
	for _, c := range scenarios() {
		if strings.Contains(c.name, *only) && strings.Contains(c.setting.name, *analysis) {
			s.scenarios = append(s.scenarios, c)
		}
	}
	switch {
	case flags.NArg() > 0 || *runs < 1 || s.scenarios == nil:
		fmt.Fprintln(stderr, "scenarios: no such scenario, or no runs: see -list and -h")
		return exitUnusable
	case *list:
		for i := range s.scenarios {
			fmt.Fprintln(stdout, &s.scenarios[i])
		}
		return exitMet
	}
	fmt.Fprintf(stdout, "Seeds from %d on, %d runs of each scenario.\n", *from, *runs)
	s.done = progress(stdout, stderr, *verbose)
	tallies, err := s.play(ctx)
	if err != nil {
		fmt.Fprintln(stderr, "scenarios:", err)
		return exitUnusable
	}
	return conclude(stdout, stderr, tallies)
}

// conclude prints the table and the aims that are not met.
func conclude(stdout, stderr io.Writer, tallies []*tally) int {
	if err := report(stdout, tallies); err != nil {
		fmt.Fprintln(stderr, "scenarios:", err)
		return exitUnusable
	}
	list := missed(tallies)
	for _, text := range list {
		fmt.Fprintln(stdout, "\nnot met:", text)
	}
	if list != nil {
		return exitMissed
	}
	fmt.Fprintln(stdout, "\nall aims are met")
	return exitMet
}

// progressShare is how much of the work passes between two lines of progress, in parts of the whole.
const progressShare = 50

// progress prints where the suite stands, and with verbose each run.
func progress(stdout, stderr io.Writer, verbose bool) func(t *tally, o *outcome, ended, of int) {
	began, told := time.Now(), -1
	return func(_ *tally, o *outcome, ended, of int) {
		if verbose {
			o.tell(stdout)
		}
		if now := ended * progressShare / of; now != told {
			told = now
			fmt.Fprintf(stderr, "%d of %d runs, %s\n", ended, of, time.Since(began).Round(time.Second))
		}
	}
}
