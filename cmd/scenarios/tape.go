package main

import (
	"errors"
	"fmt"
	"io"

	"shakerwatch/acquire"
)

// A tape is so many frames of a source, to be played any number of times.
type tape struct {
	rateHz   float64
	channels int
	parts    []part
}

// A part is frames in a row, or a stretch of lost ones.
type part struct {
	samples []float64
	lost    int64
}

// tapeFrames is how many frames are asked of a source at a time.
const tapeFrames = 1024

// record takes so many frames, lost ones among them, from a source that does not end before.
func record(s acquire.Source, frames int64) (*tape, error) {
	t := &tape{rateHz: s.RateHz(), channels: s.Channels()}
	buf := make([]float64, tapeFrames*t.channels)
	samples := make([]float64, 0, int(frames)*t.channels)
	for frames > 0 {
		n, err := s.Read(buf[:min(frames, tapeFrames)*int64(t.channels)])
		if gap, ok := errors.AsType[*acquire.GapError](err); ok {
			t.parts = append(t.parts, part{samples: samples}, part{lost: min(gap.Frames, frames)})
			samples = samples[len(samples):]
			frames -= min(gap.Frames, frames)
			continue
		}
		if err != nil {
			return nil, fmt.Errorf("record: %w", err)
		}
		samples = append(samples, buf[:n*t.channels]...)
		frames -= int64(n)
	}
	t.parts = append(t.parts, part{samples: samples})
	return t, nil
}

// play is the tape from its beginning. Any number may play at once.
func (t *tape) play() acquire.Source { return &player{tape: t} }

// A player is a source that plays a tape.
type player struct {
	*tape
	part, at int
}

func (p *player) RateHz() float64 { return p.rateHz }
func (p *player) Channels() int   { return p.channels }

func (p *player) Read(dst []float64) (int, error) {
	for p.part < len(p.parts) {
		now := &p.parts[p.part]
		if now.lost > 0 {
			p.part++
			return 0, &acquire.GapError{Frames: now.lost}
		}
		if p.at == len(now.samples) {
			p.part, p.at = p.part+1, 0
			continue
		}
		n := copy(dst, now.samples[p.at:])
		p.at += n
		return n / p.channels, nil
	}
	return 0, io.EOF
}
