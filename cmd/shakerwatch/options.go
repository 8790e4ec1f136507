package main

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"github.com/spf13/pflag"

	"shakerwatch/estimate"
)

// options are the flags of all commands together.
type options struct {
	out      string
	replace  bool
	listen   string
	headless bool
	blocks   int64
	pace     float64
	only     string
	noise    string
	record   string
	noRecord bool
	reopen   bool
	setup    bool
	encoding string
	help     bool

	excitation   string
	faults       []string
	confidence   float64
	simultaneous bool

	flags *pflag.FlagSet
}

const defaultListen = "127.0.0.1:8765"

// parse reads flags, which may stand before, between or behind the arguments, and returns the
// arguments.
func (o *options) parse(args []string) ([]string, error) {
	f := pflag.NewFlagSet("shakerwatch", pflag.ContinueOnError)
	f.SetOutput(io.Discard)
	f.SortFlags = false
	f.StringVar(&o.out, "out", "", "write results to this folder")
	f.BoolVar(&o.replace, "replace", false, "replace the results that the folder holds")
	f.StringVar(&o.listen, "listen", defaultListen, "address of the dashboard")
	f.BoolVar(&o.headless, "headless", false, "no dashboard")
	f.Int64Var(&o.blocks, "blocks", 0, "end after so many averaged blocks")
	f.Float64Var(&o.pace, "pace", 1, "replay so many times as fast as real time; 0 is as fast as the machine goes\n(default 1, or 0 with --headless)")
	f.StringVar(&o.only, "only", "", "replay: average exactly the blocks that this summary.json lists")
	f.StringVar(&o.noise, "noise", "", "noise measurement of this rig, noise.npz of a setup check")
	f.StringVar(&o.excitation, "excitation", "random", "demo: drive the simulated shakers with random, burst or periodic signals")
	f.StringArrayVar(&o.faults, "fault", nil, "simulated rig: something that breaks, such as detach@60s-90s:S2; may be given several times\n(--fault list prints all kinds)")
	f.Float64Var(&o.confidence, "confidence", estimate.DefaultLevel, "probability with which a confidence region holds the true frequency response")
	f.BoolVar(&o.simultaneous, "simultaneous", false, "confidence regions hold for all forces of a response at once")
	f.StringVar(&o.record, "record", "", "live: record to this WAV file (with --out, to recording.wav there)")
	f.BoolVar(&o.noRecord, "no-record", false, "live: do not record")
	f.BoolVar(&o.reopen, "reopen", false, "live, sound card: wait for a device that went away")
	f.BoolVar(&o.setup, "setup", false, "live: check the setup, stage by stage, instead of a run")
	f.StringVar(&o.encoding, "encoding", "", "live, pipe: samples on standard input are s16, s24, s32, f32 or f64")
	f.BoolVarP(&o.help, "help", "h", false, "print this")
	o.flags = f
	if err := f.Parse(args); err != nil {
		return nil, unusablef("command line: %w: see shakerwatch --help", err)
	}
	return f.Args(), o.checkValues()
}

func (o *options) checkValues() error {
	f := o.flags
	switch {
	case f.Changed("blocks") && o.blocks < 1:
		return unusablef("--blocks %d: choose 1 or more", o.blocks)
	case !(o.pace >= 0) || math.IsInf(o.pace, 0):
		return unusablef("--pace %v: choose 0 or more", o.pace)
	case !slices.Contains([]string{"random", "burst", "periodic"}, o.excitation):
		return unusablef("--excitation %s: choose random, burst or periodic", o.excitation)
	case !(o.confidence > 0 && o.confidence < 1):
		return unusablef("--confidence %v: choose a probability between 0 and 1, such as 0.95", o.confidence)
	case o.replace && o.out == "" && o.record == "":
		return unusablef("--replace: there is nothing to replace without --out DIR: add it")
	case f.Changed("out") && o.out == "":
		return unusablef("--out: the folder has no name: give one")
	case f.Changed("record") && (o.noRecord || o.record == ""):
		return unusablef("--record: a file that is recorded to needs a name, and no --no-record: give one of them")
	case o.setup && f.Changed("noise"):
		return unusablef("--noise: a setup check measures it anew: leave it out")
	case o.setup && (f.Changed("record") || o.noRecord):
		return unusablef("--setup: nothing is recorded during a setup check: leave --record and --no-record out")
	}
	return nil
}

// allowedFlags are the flags of each command.
var allowedFlags = map[string][]string{
	"":        {"out", "replace", "listen", "headless", "blocks", "noise", "confidence", "simultaneous", "excitation", "fault"},
	"live":    {"out", "replace", "listen", "headless", "blocks", "noise", "confidence", "simultaneous", "record", "no-record", "reopen", "setup", "encoding", "fault"},
	"replay":  {"out", "replace", "listen", "headless", "blocks", "noise", "confidence", "simultaneous", "pace", "only"},
	"check":   {},
	"devices": {},
}

// allowed refuses flags that the command does not have.
func (o *options) allowed(command string) error {
	var wrong []string
	o.flags.Visit(func(f *pflag.Flag) {
		for _, name := range allowedFlags[command] {
			if f.Name == name {
				return
			}
		}
		wrong = append(wrong, "--"+f.Name)
	})
	if wrong == nil {
		return nil
	}
	if command == "" {
		command = "the demo"
	}
	return unusablef("%s: %s has no such flag: leave it out", strings.Join(wrong, ", "), command)
}

// usage prints the commands and flags.
func (a *app) usage(w io.Writer) {
	fmt.Fprintln(w, "shakerwatch watches a vibration test with several shakers while it runs.")
	fmt.Fprintln(w)
	for _, c := range commands {
		fmt.Fprintf(w, "  %-38s %s\n", strings.TrimSpace("shakerwatch "+c.name+" "+c.arguments), c.about)
	}
	fmt.Fprintf(w, "\n%s", a.flags.FlagUsages())
	fmt.Fprintln(w, "\nIt only watches and is no protective system. Shakers, amplifiers and hung structures can injure:")
	fmt.Fprintln(w, "start low, keep clear, keep the emergency stop in reach; local rules and qualified people decide.")
}
