// Command bench measures the whole job from samples to averaged matrices beside NumPy and beside C
// with FFTW, in turns, on the same recording.
//
// It knows the arithmetic of spectra as its users do. It may not know sources, estimates or the
// dashboard.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"runtime"
	"syscall"
	"time"

	"github.com/spf13/pflag"
)

const help = `bench measures the whole job from samples to averaged matrices: window, transform of all channels of a block, sums of
Gxx, Gyx and Gyy, scaled to one-sided densities; blocks overlap by half, lines to 0.39 of the block (the band to rate/2.56).

Three contestants do it on the same recording of made-up noise, each in a process of its own that has the recording, frame by
frame, in memory. They take turns, so that all suffer alike from what else the machine does, and a ratio is the median of
the ratios in each round. Before that, the program in C and the one for NumPy are tried in several ways, of which the
fastest one is kept.

  shakerwatch  cutter, engine and average of this project, one worker a core, cutting beside them as in a measurement
  NumPy        with_numpy.py of this folder: its transform of all channels, then products (tried: by row, and by BLAS)
  C            limit.c of this folder with FFTW, one thread a core: what the machine can do (tried: both orders of samples
               and of lines, groups of channels, blocks together, how threads wait)

A sample counts once, although two blocks hold it: channel samples are channels times blocks times half a block. The peak
memory of each holds the recording. Exit status 1: results differ by more than 1e-9 of an array's largest value, or
speed misses its aim on two cores.

It needs Debian's gcc, libc6-dev, libfftw3-dev and python3-numpy; NumPy uses the BLAS that is installed, best
libopenblas0-pthread, for which the products of a line are too small to share among threads.
A recording takes up to 512 MiB below the folder for temporary files (TMPDIR) and in each contestant.

The cost and the latency of a live measurement are measured by two tests:

  go test ./cmd/shakerwatch -run 'TestLoad|TestLatency' -v -timeout 15m -args -load 60s

Usage: bench [flags]
`

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	if len(os.Args) > 1 && os.Args[1] == programWord {
		exit(program(os.Args[2:], os.Stdin, os.Stdout))
	}
	exit(run(ctx, os.Args[1:], os.Stdout))
}

func exit(err error) {
	if err != nil && !errors.Is(err, pflag.ErrHelp) {
		fmt.Fprintf(os.Stderr, "bench: %v\n", err)
		os.Exit(1)
	}
	os.Exit(0)
}

// options are what the command line says.
type options struct {
	one    size // Forces 0: all sizes
	rounds int
	turn   time.Duration // of a contestant in a round
	cores  int
	python string
}

func parse(args []string) (options, error) {
	var o options
	f := pflag.NewFlagSet("bench", pflag.ContinueOnError)
	f.Usage = func() { fmt.Fprint(os.Stderr, help+f.FlagUsages()) }
	f.IntVar(&o.one.Forces, "forces", 0, "forces of the only size to measure (with --responses and --block)")
	f.IntVar(&o.one.Responses, "responses", 0, "responses of it")
	f.IntVar(&o.one.Block, "block", 0, "frames in a block of it, even")
	f.IntVar(&o.rounds, "rounds", 7, "turns that each contestant takes")
	f.DurationVar(&o.turn, "turn", 400*time.Millisecond, "how long a turn takes")
	f.IntVar(&o.cores, "cores", runtime.NumCPU(), "threads of each contestant")
	f.StringVar(&o.python, "python", "/usr/bin/python3", "the Python that has NumPy: Debian's")
	if err := f.Parse(args); err != nil {
		return o, err
	}
	if f.NArg() > 0 {
		return o, fmt.Errorf("%q: no argument is expected here: leave it out", f.Arg(0))
	}
	if o.rounds < 1 || o.turn <= 0 || o.cores < 1 {
		return o, errors.New("--rounds, --turn and --cores: choose values above 0")
	}
	if o.one != (size{}) {
		return o, o.one.check()
	}
	return o, nil
}

// run measures what the arguments ask for and prints it.
func run(ctx context.Context, args []string, stdout io.Writer) error {
	o, err := parse(args)
	if err != nil {
		return err
	}
	if err := lookForTools(ctx, o.python); err != nil {
		return err
	}
	dir, err := os.MkdirTemp("", "shakerwatch-bench-")
	if err != nil {
		return err
	}
	defer os.RemoveAll(dir)
	sizes := standardSizes
	if o.one.Forces > 0 {
		sizes = []size{o.one}
	}
	var missed []error
	for n, s := range sizes {
		b := bench{options: o, size: s, dir: dir}
		r, err := b.measure(ctx)
		if err != nil {
			return fmt.Errorf("%v: %w", s, err)
		}
		if n == 0 {
			printHead(stdout, r)
		}
		printResult(stdout, r)
		missed = append(missed, r.disagreement(), r.miss())
	}
	return errors.Join(missed...)
}
