package soundcard

import (
	"context"
	"fmt"
	"io"
	"time"

	"shakerwatch/acquire"
)

// A Source captures from a sound device. Samples are fractions of full scale that went through a
// float32, which holds 24-bit samples exactly.
//
// What the device says it lost, and what is missing by the clock for more than 0.1 s, comes as a gap,
// as long as the clock says. It takes some tenths of a second to be known, and the frames of this time
// are in the gap, too, since it is not known where among them others are missing; so is a second more
// if the reader had stayed away before. A slow drift between the clocks of device and computer is no
// gap.
//
// A Source serves one goroutine at a time, but for Close.
type Source struct {
	label    string
	rateHz   float64
	channels int

	ctx    context.Context // ends with the cause that Read gives
	end    context.CancelCauseFunc
	reader *reader

	gaps  gapFinder
	held  held
	lost  int64 // to be reported before what is in held
	read  int64 // frames handed out
	err   error // what Read says once held is empty
	timer *time.Timer

	start  time.Time
	last   time.Time // when frames were last read
	queued int       // frames that the card had in store then
}

const (
	// silence of an open device means that it is lost. Sound servers hand out frames several times a
	// second, and a busy machine may be late by some tenths.
	silence = 1500 * time.Millisecond

	// firstSilence is allowed before the first frames: a sound server wakes a device first, which
	// took up to 2 s where it was tried.
	firstSilence = 5 * time.Second

	// silence is counted in ticks, so that a program that was stopped, or a computer that slept,
	// does not take its own absence for that of the device.
	tick = 100 * time.Millisecond

	// longestRead: as much is read at once, so that what is held back has room for more.
	longestRead = 100 * time.Millisecond

	// releaseTime is how long Close waits.
	releaseTime = 2 * time.Second

	// heldTime is how much can be held back: the end of a store, what it takes a doubt to settle, and
	// as much again.
	heldTime = storeEnd + 2*settleTime
)

// newSource starts the reader of a card.
func newSource(ctx context.Context, c card, label string, rateHz float64, channels int) *Source {
	s := &Source{
		label: label, rateHz: rateHz, channels: channels,
		reader: newReader(c, rateHz, channels),
		gaps:   gapFinder{rateHz: rateHz},
		held:   newHeld(max(1, int(heldTime.Seconds()*rateHz)) * channels),
		start:  time.Now(),
		timer:  time.NewTimer(0),
	}
	s.ctx, s.end = context.WithCancelCause(ctx)
	go s.reader.run(s.ctx)
	return s
}

// Device is the host API and the name of the device.
func (s *Source) Device() string { return s.label }

// RateHz is the rate that Open was told.
func (s *Source) RateHz() float64 { return s.rateHz }

// Channels is the number of channels that Open was told.
func (s *Source) Channels() int { return s.channels }

// Read is that of acquire.Source; it panics when len(dst) is not a positive multiple of Channels().
// It waits until dst is full, a gap comes or the source ends, and allocates only for the latter two.
//
// A device that gives nothing for 1.5 s (5 s at first) or breaks ends it with ErrLost, Close with
// io.EOF.
func (s *Source) Read(dst []float64) (n int, err error) {
	if len(dst) == 0 || len(dst)%s.channels != 0 {
		panic("soundcard: length of dst is not a positive multiple of the channels")
	}
	for {
		if s.lost == 0 {
			k := s.held.take(dst[n*s.channels:]) / s.channels
			n += k
			s.read += int64(k)
		}
		switch {
		case n*s.channels == len(dst), n > 0 && (s.lost > 0 || s.err != nil):
			return n, nil
		case s.lost > 0:
			gap := &acquire.GapError{Frames: s.lost}
			s.lost = 0
			return 0, gap
		case s.err != nil:
			return 0, s.err
		}
		s.advance()
	}
}

// advance has frames read, or ends the source. There is room, since all that may be taken was.
func (s *Source) advance() {
	a := s.fetch(s.held.room(s.channels * max(1, int(s.rateHz*longestRead.Seconds()))))
	if a.frames > 0 {
		s.last, s.queued = a.at, a.queued
		before := s.held.kept / s.channels
		s.held.keep(a.frames * s.channels)
		f := s.gaps.observe(a.at.Sub(s.start), a.frames, a.queued, before, a.overflow)
		if f.hold > 0 && len(s.held.room(1)) == 0 { // still catching up: what is known now must do
			f = s.gaps.settle(before)
		}
		s.apply(f, a.frames)
	}
	if a.err != nil {
		s.end(fmt.Errorf("%w: %q, after frame %d: %w: check its cable and power, and the sound server if there is one",
			ErrLost, s.label, s.read+int64((s.held.free+s.held.kept)/s.channels), a.err))
		s.err = context.Cause(s.ctx)
		s.apply(s.gaps.settle(s.held.kept/s.channels), 0)
	}
}

// apply does what was found about the frames that are held back, of which the last ones are new.
func (s *Source) apply(f finding, last int) {
	if f.drop {
		s.held.drop(last * s.channels)
	}
	s.lost += f.lost
	s.held.release(f.hold * s.channels)
}

// fetch asks the reader and waits for its answer, as long as a device may be silent.
func (s *Source) fetch(dst []float32) answer {
	select {
	case s.reader.ask <- dst:
	case <-s.ctx.Done():
		return answer{err: context.Cause(s.ctx)}
	}
	limit := silence
	if s.last.IsZero() {
		limit = firstSilence
	}
	for quiet := time.Duration(0); quiet < limit; quiet += tick {
		s.timer.Reset(tick)
		select {
		case a := <-s.reader.answers:
			return a
		case <-s.ctx.Done():
			return answer{err: context.Cause(s.ctx)}
		case <-s.timer.C:
		}
	}
	return answer{err: fmt.Errorf("it gave nothing for %v", limit)}
}

// begin waits for the first frames.
func (s *Source) begin() error {
	if s.last.IsZero() && s.err == nil {
		s.advance()
	}
	return s.err
}

// Close ends the source and gives the device back. It may be called from any goroutine, also while
// another waits in Read, and more than once.
//
// It waits no longer than 2 s. A sound server that hangs can keep the device's own functions for
// most of a minute, and one that was killed for good: Close then returns an error, and the rest is
// done if they ever return. The program may end before that. Until then a device that was plugged
// in meanwhile is not found.
func (s *Source) Close() error {
	s.end(io.EOF)
	late := time.NewTimer(releaseTime)
	defer late.Stop()
	select {
	case <-s.reader.released:
	case <-late.C:
		return fmt.Errorf("no end within %v: sound device %q: see whether the sound server hangs", releaseTime, s.label)
	}
	if err := s.reader.broken; err != nil {
		return fmt.Errorf("no orderly end: sound device %q: %w: start the program again before relying on it", s.label, err)
	}
	return nil
}
