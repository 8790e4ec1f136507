package soundcard

import (
	"context"
	"errors"
	"io"
	"log/slog"
	"math"
	"sync"
	"time"

	"shakerwatch/acquire"
)

// A Reopening is a source that outlives its device: when it is lost, Read waits until it is back, and
// reports the frames of that time as one gap.
//
// It serves one goroutine at a time, but for Close.
type Reopening struct {
	rateHz   float64
	channels int
	open     func(context.Context) (*Source, error)
	log      *slog.Logger
	ctx      context.Context // ends with the cause that Read gives
	end      context.CancelCauseFunc
	err      error // what every later Read says

	mu     sync.Mutex // of source, which Close needs too
	source *Source
}

// retryInterval is how long to wait between two tries: short beside the time that it takes to plug
// something in, long beside what a try costs, some tenths of a second where there are many devices.
const retryInterval = time.Second

// Keys of what is logged.
const (
	logDevice = "device"
	logCause  = "cause"
	logFrames = "lost_frames"
)

// OpenReopening does what Open does, and again each time the device was lost: about once a second
// until it is there. Without a name it sticks to the device that was the default at first. What
// happens is logged; log may be nil. When ctx ends, Read returns its cause, 2 s later at most.
func OpenReopening(ctx context.Context, device string, rateHz float64, channels int, log *slog.Logger) (*Reopening, error) {
	return reopening(ctx, rateHz, channels, log, func(ctx context.Context) (*Source, error) {
		s, err := open(ctx, device, rateHz, channels)
		if err == nil && device == "" {
			device = s.Device()
		}
		return s, err
	})
}

func reopening(ctx context.Context, rateHz float64, channels int, log *slog.Logger, open func(context.Context) (*Source, error)) (*Reopening, error) {
	if log == nil {
		log = slog.New(slog.DiscardHandler)
	}
	r := &Reopening{rateHz: rateHz, channels: channels, open: open, log: log}
	r.ctx, r.end = context.WithCancelCause(ctx)
	source, err := open(r.ctx)
	if err != nil {
		r.end(err)
		return nil, err
	}
	r.source = source
	return r, nil
}

// RateHz is the rate that OpenReopening was told.
func (r *Reopening) RateHz() float64 { return r.rateHz }

// Channels is the number of channels that OpenReopening was told.
func (r *Reopening) Channels() int { return r.channels }

// Read is that of acquire.Source, as that of Source, but for a lost device.
//
// The gap is as long as the computer's clock says, which stands still while the computer sleeps.
func (r *Reopening) Read(dst []float64) (n int, err error) {
	if r.err != nil {
		return 0, r.err
	}
	old := r.source
	n, err = old.Read(dst)
	if errors.Is(err, ErrLost) {
		err = r.again(old, err)
	}
	var gap *acquire.GapError
	if err != nil && !errors.As(err, &gap) {
		r.err = err
	}
	return n, err
}

// again waits until the device is back, and returns the gap or what ended the waiting.
func (r *Reopening) again(old *Source, lost error) error {
	r.log.Warn("sound device lost, waiting for it", logDevice, old.label, logCause, lost)
	if err := old.Close(); err != nil {
		r.log.Warn("lost sound device does not end", logDevice, old.label, logCause, err)
	}
	next, err := r.retry()
	if err != nil {
		return err
	}
	r.mu.Lock()
	r.source = next
	r.mu.Unlock()
	if r.ctx.Err() != nil { // Close may have seen the old one only
		next.Close()
		return context.Cause(r.ctx)
	}
	gap := &acquire.GapError{Frames: between(old, next)}
	r.log.Info("sound device back", logDevice, next.label, logFrames, gap.Frames)
	return gap
}

// retry tries until frames come.
func (r *Reopening) retry() (*Source, error) {
	wait := time.NewTimer(0)
	defer wait.Stop()
	for {
		select {
		case <-wait.C:
		case <-r.ctx.Done():
			return nil, context.Cause(r.ctx)
		}
		next, err := r.try()
		if err == nil {
			if err = next.begin(); err == nil {
				return next, nil
			}
			next.Close()
		}
		r.log.Debug("sound device not back yet", logCause, err)
		wait.Reset(retryInterval)
	}
}

// try opens the device, but waits no longer than ctx. A sound server that hangs can keep open for
// half a minute; what comes of it then gives the device back by itself, since its context has ended.
func (r *Reopening) try() (*Source, error) {
	type result struct {
		source *Source
		err    error
	}
	tried := make(chan result, 1) // nobody may be there to take it
	go func() {
		s, err := r.open(r.ctx)
		tried <- result{s, err}
	}()
	select {
	case got := <-tried:
		return got.source, got.err
	case <-r.ctx.Done():
		return nil, context.Cause(r.ctx)
	}
}

// between is the number of frames captured, had the device not been lost, between the last of old
// and the first of next.
func between(old, next *Source) int64 {
	last := old.last
	if last.IsZero() {
		last = old.start
	}
	frames := next.last.Sub(last).Seconds()*next.rateHz + float64(old.queued) - float64(next.queued+next.held.free/next.channels)
	return max(1, int64(math.Round(frames)))
}

// Close ends the source and gives the device back; see Source.Close.
func (r *Reopening) Close() error {
	r.end(io.EOF)
	r.mu.Lock()
	source := r.source
	r.mu.Unlock()
	return source.Close()
}
