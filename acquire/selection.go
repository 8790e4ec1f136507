package acquire

import (
	"fmt"
)

// A Selection is a source of some channels of another source, in an order of its own. A frame in
// which one of these channels is not finite counts as lost; what the other channels hold does not
// matter.
type Selection struct {
	source   Source
	channels []int

	frames []float64 // of the source
	ready  []float64 // the part of frames that was not handed on yet
}

// selectionFrames is how many frames a Selection reads at a time at most.
const selectionFrames = 4096

// Select makes a Selection of the channels with the given indices, counted from 0. It panics when
// there are none or the source has no such channel.
func Select(source Source, channels []int) *Selection {
	for _, ch := range channels {
		if ch < 0 || ch >= source.Channels() {
			panic(fmt.Sprintf("acquire: no channel of index %d in %d", ch, source.Channels()))
		}
	}
	if len(channels) == 0 {
		panic("acquire: a selection of no channels")
	}
	return &Selection{
		source:   source,
		channels: channels,
		frames:   make([]float64, selectionFrames*source.Channels()),
	}
}

// RateHz is the source's rate.
func (s *Selection) RateHz() float64 { return s.source.RateHz() }

// Channels is the number of channels selected.
func (s *Selection) Channels() int { return len(s.channels) }

// Read keeps the contract of Source.
func (s *Selection) Read(dst []float64) (n int, err error) {
	wide := s.source.Channels()
	wanted := len(dst) / len(s.channels)
	if len(s.ready) == 0 {
		if err := s.fill(min(wanted, selectionFrames) * wide); err != nil {
			return 0, err
		}
	}
	if lost := s.lost(); lost > 0 {
		s.ready = s.ready[lost*wide:]
		return 0, &GapError{Frames: int64(lost)}
	}
	for len(s.ready) > 0 && n < wanted && s.finite(s.ready) {
		for i, ch := range s.channels {
			dst[n*len(s.channels)+i] = s.ready[ch]
		}
		s.ready = s.ready[wide:]
		n++
	}
	return n, nil
}

func (s *Selection) fill(samples int) error {
	n, err := s.source.Read(s.frames[:samples])
	s.ready = s.frames[:n*s.source.Channels()]
	return err
}

// lost is the number of lost frames at the head of those that are ready.
func (s *Selection) lost() int {
	wide := s.source.Channels()
	n := 0
	for n*wide < len(s.ready) && !s.finite(s.ready[n*wide:]) {
		n++
	}
	return n
}

// finite tells whether the selected channels of the first frame are.
func (s *Selection) finite(frame []float64) bool {
	for _, ch := range s.channels {
		// Inf - Inf and NaN - NaN are NaN, and NaN is not 0.
		if frame[ch]-frame[ch] != 0 {
			return false
		}
	}
	return true
}
