package acquire

import (
	"context"
	"errors"
	"time"
)

// A Pacer is a source that hands on each frame of another no earlier than it would have been
// captured.
type Pacer struct {
	source Source
	ctx    context.Context
	factor float64
	start  time.Time // when the first frame was asked for
	frames int64     // read or lost since then
	err    error     // that ended it
}

// Pace makes a Pacer that runs factor times as fast as real time, factor > 0. When ctx ends, its
// Read waits no more and returns the context's error.
func Pace(ctx context.Context, source Source, factor float64) *Pacer {
	if !(factor > 0) {
		panic("acquire: pace of no speed")
	}
	return &Pacer{source: source, ctx: ctx, factor: factor}
}

// RateHz is the source's rate: pace changes when frames come, not what they are.
func (p *Pacer) RateHz() float64 { return p.source.RateHz() }

// Channels is the source's number of channels.
func (p *Pacer) Channels() int { return p.source.Channels() }

// Read keeps the contract of Source.
func (p *Pacer) Read(dst []float64) (n int, err error) {
	if p.err != nil {
		return 0, p.err
	}
	if p.start.IsZero() {
		p.start = time.Now()
	}
	n, err = p.source.Read(dst)
	if err == nil {
		p.frames += int64(n)
	} else if gap, ok := errors.AsType[*GapError](err); ok {
		p.frames += gap.Frames
	} else {
		p.err = err
		return 0, err
	}
	if !p.wait() {
		p.err = context.Cause(p.ctx)
		return 0, p.err
	}
	return n, err
}

// wait returns when the frames so far are due, or false when the context has ended.
func (p *Pacer) wait() bool {
	due := p.start.Add(time.Duration(float64(p.frames) / p.RateHz() / p.factor * float64(time.Second)))
	timer := time.NewTimer(time.Until(due))
	defer timer.Stop()
	select {
	case <-p.ctx.Done():
		return false
	case <-timer.C:
		return true
	}
}
