package monitor

import (
	"math"
	"time"

	"shakerwatch/acquire/rig"
	"shakerwatch/web"
)

// A meter looks at every sample as it was captured: it finds those at the limit and keeps the levels
// of each tenth of a second.
type meter struct {
	volts   []float64 // (channel) at digital full scale
	limit   []float64 // (channel) volts at which a sample counts as clipped
	nominal []float64 // (channel) volts of the limit itself

	window  int // frames in a stretch of levels
	frames  int // of it so far
	squares []float64
	peaks   []float64
	levels  web.Levels
	last    time.Time // when levels were given on
	publish func(web.Levels)
}

// clipShare is how near to its limit a sample counts as having reached it: one step of a 16 bit
// converter below.
const clipShare = 1 - 0x1p-15

// levelsPerSecond is how often levels are given on, in source time and at most in real time.
const levelsPerSecond = 10

func newMeter(r *rig.Rig, publish func(web.Levels)) *meter {
	m := &meter{
		window:  max(1, int(r.Source.RateHz/levelsPerSecond)),
		publish: publish,
	}
	for _, ch := range r.Channels() {
		m.volts = append(m.volts, ch.FullScaleV)
		m.limit = append(m.limit, ch.LimitV*clipShare)
		m.nominal = append(m.nominal, ch.LimitV)
	}
	n := len(m.volts)
	m.squares, m.peaks = make([]float64, n), make([]float64, n)
	m.levels = web.Levels{RMS: make([]float64, n), Peak: make([]float64, n)}
	return m
}

// add takes whole frames, the first of which is at the given source frame, and marks the samples
// that reached their channel's limit.
func (m *meter) add(frames []float64, at int64, atLimit []marks) {
	n := len(m.volts)
	for ; len(frames) > 0; frames = frames[n:] {
		for ch, v := range frames[:n] {
			volts := math.Abs(v * m.volts[ch])
			if volts >= m.limit[ch] {
				atLimit[ch].add(at, at+1)
			}
			m.squares[ch] += volts * volts
			if volts > m.peaks[ch] {
				m.peaks[ch] = volts
			}
		}
		at++
		m.frames++
	}
}

// show gives the levels on when a tenth of a second is full. timeS is the source time now, filled
// how much of the next block is here.
func (m *meter) show(timeS, filled float64) {
	if m.publish == nil || m.frames < m.window {
		return
	}
	if now := time.Now(); now.Sub(m.last) >= time.Second/levelsPerSecond {
		m.last = now
		m.levels.TimeS, m.levels.Block = timeS, filled
		for ch, limit := range m.nominal {
			m.levels.RMS[ch] = math.Sqrt(m.squares[ch]/float64(m.frames)) / limit
			m.levels.Peak[ch] = m.peaks[ch] / limit
		}
		m.publish(m.levels)
		clear(m.squares)
		clear(m.peaks)
		m.frames = 0
	}
}
