package web

import (
	"math"
	"slices"
)

// held are the highest peaks since they were last reset, by channel; NaN before the first levels.
type held struct {
	peaks   []float64
	message numbered
}

func newHeld(channels int) held {
	return held{peaks: slices.Repeat([]float64{math.NaN()}, channels)}
}

// take follows the peaks of one stretch.
func (p *held) take(peaks []float64) {
	changed := p.message.number == 0
	for i, peak := range peaks {
		if !(p.peaks[i] >= peak) && !math.IsNaN(peak) {
			p.peaks[i] = peak
			changed = true
		}
	}
	if changed {
		p.write()
	}
}

// reset forgets the peaks of one channel, with a negative one of all.
func (p *held) reset(channel int) {
	for i := range p.peaks {
		if channel < 0 || channel == i {
			p.peaks[i] = math.NaN()
		}
	}
	p.write()
}

func (p *held) write() {
	text := appendNumbers([]byte(`{"type":"held","peak":`), len(p.peaks), func(i int) float64 { return p.peaks[i] })
	p.message.set(append(text, '}'))
}

// askResetPeaks forgets the held peak of one channel, with a negative one of all.
func (h *Hub) askResetPeaks(channel int) {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.held.reset(channel)
	h.wake()
}
