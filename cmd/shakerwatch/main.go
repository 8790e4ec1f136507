// Command shakerwatch watches a vibration test with several shakers while it runs: how good the
// frequency responses are, how many averages are still needed, and what is wrong on the rig.
//
// It is the only place that knows every room.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"
)

// Exit statuses, a contract with whoever calls the program from a script.
const (
	exitDone     = 0
	exitFailed   = 1 // something failed while running
	exitUnusable = 2 // the command line, the rig file, the recording or the device is unusable
)

func main() {
	ctx, restore := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	go func() {
		<-ctx.Done()
		restore() // a second Ctrl-C cuts the waiting short
	}()
	os.Exit(run(ctx, os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

// run does what the arguments ask for and returns the exit status. It ends cleanly when ctx ends.
func run(ctx context.Context, args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	a := &app{stdin: stdin, stdout: stdout, stderr: stderr}
	err := a.dispatch(ctx, args)
	if err == nil {
		return exitDone
	}
	fmt.Fprintln(stderr, err)
	if unusable := (*unusableError)(nil); errors.As(err, &unusable) {
		return exitUnusable
	}
	return exitFailed
}

// An app is one call of the program.
type app struct {
	stdin          io.Reader
	stdout, stderr io.Writer
	options
}

// An unusableError says that the program can't begin with what it was given.
type unusableError struct{ cause error }

func (e *unusableError) Error() string { return e.cause.Error() }
func (e *unusableError) Unwrap() error { return e.cause }

// unusable marks an error as one of exit status 2.
func unusable(err error) error { return &unusableError{err} }

func unusablef(format string, args ...any) error { return unusable(fmt.Errorf(format, args...)) }

// commands are all there are. The demo has no name: it is what runs when none is given.
var commands = []struct {
	name, arguments, about string
	run                    func(*app, context.Context, []string) error
}{
	{"", "", "the demo: a simulated rig with two shakers, live", (*app).demo},
	{"live", "RIG.toml", "watch what the rig file's source captures", (*app).live},
	{"replay", "RIG.toml RECORDING", "run a recording through the same path as live capture", (*app).replay},
	{"devices", "", "list the sound devices", (*app).devices},
	{"check", "RIG.toml", "read the rig file and print what it resolves to, or every mistake in it", (*app).check},
}

// dispatch finds the command and runs it.
func (a *app) dispatch(ctx context.Context, args []string) error {
	args, err := a.parse(args)
	if err != nil {
		return err
	}
	if a.help {
		a.usage(a.stdout)
		return nil
	}
	name := ""
	if len(args) > 0 {
		name, args = args[0], args[1:]
	}
	for _, c := range commands {
		if c.name != name {
			continue
		}
		if err := a.allowed(name); err != nil {
			return err
		}
		if want := len(strings.Fields(c.arguments)); len(args) != want {
			return unusablef("%s: %d arguments: give %s", name, len(args), c.arguments)
		}
		return c.run(a, ctx, args)
	}
	return unusablef("%s: no such command: choose %s", name, commandNames())
}

func commandNames() string {
	var names []string
	for _, c := range commands {
		if c.name != "" {
			names = append(names, c.name)
		}
	}
	return strings.Join(names, ", ") + ", or none for the demo"
}
