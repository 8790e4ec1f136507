package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"sync"

	"shakerwatch/acquire"
	"shakerwatch/acquire/pipe"
	"shakerwatch/acquire/rig"
	"shakerwatch/acquire/soundcard"
	"shakerwatch/acquire/wav"
)

// An input is a live source with what the commands need to know of its kind.
type input struct {
	measurement
	encoding wav.Encoding        // in which a recording loses nothing
	drive    func(share float64) // sets the drive; nil where somebody else does
	warnings func() []string     // what to say in the end; nil is nothing
}

// live watches the rig file's source.
func (a *app) live(ctx context.Context, args []string) error {
	r, err := rig.Read(args[0])
	if err != nil {
		return unusable(err)
	}
	in, err := a.openInput(ctx, r)
	if err != nil {
		return unusable(err)
	}
	if in.interrupt != nil {
		defer in.interrupt()
		defer context.AfterFunc(ctx, in.interrupt)()
	}
	if a.setup {
		return a.checkSetup(ctx, in)
	}
	err = a.measure(ctx, a.recorded(in))
	if in.warnings != nil {
		for _, w := range in.warnings() {
			fmt.Fprintf(a.stderr, "warning: %s\n", w)
		}
	}
	return err
}

// openInput opens the source of a rig file's kind.
func (a *app) openInput(ctx context.Context, r *rig.Rig) (*input, error) {
	if err := a.kindFlags(r.Source.Kind); err != nil {
		return nil, err
	}
	switch r.Source.Kind {
	case "demo":
		return a.simulated(r)
	case "pipe":
		return a.openPipe(r)
	default:
		return a.openSoundcard(ctx, r)
	}
}

// kindFlags refuses flags that belong to another kind of source.
func (a *app) kindFlags(kind string) error {
	for _, f := range []struct{ name, kind string }{{"encoding", "pipe"}, {"reopen", "soundcard"}, {"fault", "demo"}} {
		if a.flags.Changed(f.name) && kind != f.kind {
			return fmt.Errorf("--%s: it belongs to source kind %q, not to %q: leave it out", f.name, f.kind, kind)
		}
	}
	return nil
}

// asItComes leaves the pace to the source.
func asItComes(_ context.Context, s acquire.Source) acquire.Source { return s }

func (a *app) openPipe(r *rig.Rig) (*input, error) {
	if a.encoding == "" {
		return nil, fmt.Errorf("--encoding: it is missing: say how samples stand in the stream, s16, s24, s32, f32 or f64")
	}
	encoding, err := pipe.ParseEncoding(a.encoding)
	if err != nil {
		return nil, fmt.Errorf("--encoding: %w", err)
	}
	stdin, err := pipe.Closable(os.Stdin)
	if err != nil {
		return nil, err
	}
	source := pipe.New(stdin, r.Source.RateHz, r.Source.Channels, encoding)
	in := &input{
		measurement: measurement{
			rig: r, kind: "pipe", stream: source, pace: asItComes, live: !isFile(stdin),
			interrupt: sync.OnceFunc(func() { stdin.Close() }),
		},
		encoding: wav.Float64,
		warnings: func() []string {
			if n := source.Leftover(); n > 0 {
				return []string{fmt.Sprintf("standard input ended %d bytes into a frame: they are left out", n)}
			}
			return nil
		},
	}
	if encoding.FitsFloat32() {
		in.encoding = wav.Float32
	}
	return in, nil
}

// isFile tells whether standard input is a file on a disk, which can wait for the arithmetic as a
// recording can.
func isFile(stdin *os.File) bool {
	info, err := stdin.Stat()
	return err == nil && info.Mode().IsRegular()
}

func (a *app) openSoundcard(ctx context.Context, r *rig.Rig) (*input, error) {
	var source interface {
		acquire.Source
		io.Closer
	}
	var err error
	if a.reopen {
		source, err = soundcard.OpenReopening(ctx, r.Source.Device, r.Source.RateHz, r.Source.Channels, a.logger())
	} else {
		source, err = soundcard.Open(r.Source.Device, r.Source.RateHz, r.Source.Channels)
	}
	if err != nil {
		return nil, fmt.Errorf("%s: source kind \"soundcard\": %w", r.Path, err)
	}
	return &input{
		measurement: measurement{
			rig: r, kind: "soundcard", stream: source, pace: asItComes, live: true,
			interrupt: sync.OnceFunc(func() { source.Close() }),
		},
		encoding: wav.Float32,
	}, nil
}
