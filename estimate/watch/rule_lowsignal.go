package watch

import (
	"math"

	"shakerwatch/spectra"
)

const (
	// lowSignalDB is how near to its noise a channel is low (the contract), and clearSignalDB how far from it that it
	// is no more.
	lowSignalDB, clearSignalDB = 10, 11.5

	// lowBandLines is the fewest lines in a band; the bands above double in width.
	lowBandLines = 16
)

// A lowSignal finds channels that are near to their measured noise, band by band.
type lowSignal struct {
	layout *layout
	noise  []float64 // (line of the grid, channel), nil without a measurement
	bands  [][2]int  // first line and the one behind the last
	low    []bool    // (channel, band) at the last look
}

func newLowSignal(l *layout, noise []float64) *lowSignal {
	s := &lowSignal{layout: l, noise: noise}
	for lo := l.cells.first; lo <= l.cells.last; {
		hi := max(2*lo, lo+lowBandLines)
		if hi+lowBandLines > l.cells.last {
			hi = l.cells.last + 1
		}
		s.bands = append(s.bands, [2]int{lo, hi})
		lo = hi
	}
	s.low = make([]bool, (l.q+l.p)*len(s.bands))
	return s
}

// find appends what it finds in an average.
func (l *lowSignal) find(dst []finding, s *spectra.Snapshot) []finding {
	if l.noise == nil {
		return dst
	}
	for ch := range l.layout.q + l.layout.p {
		f := finding{kind: LowSignal, key: ch, channels: []int{ch}}
		for n, band := range l.bands {
			low := &l.low[ch*len(l.bands)+n]
			ratio := l.ratio(s, ch, band)
			*low = ratio < lowSignalDB || *low && ratio < clearSignalDB
			if *low {
				f.bandsHz = append(f.bandsHz, [2]float64{float64(band[0]) * s.SpacingHz, float64(band[1]-1) * s.SpacingHz})
			}
		}
		if f.bandsHz != nil {
			dst = append(dst, f)
		}
	}
	return dst
}

// ratio is a channel's power over its noise in a band, dB; NaN where the noise is unknown or 0.
func (l *lowSignal) ratio(s *spectra.Snapshot, ch int, band [2]int) float64 {
	q, c := l.layout.q, l.layout.q+l.layout.p
	var signal, noise float64
	for k := band[0]; k < band[1]; k++ {
		if ch < q {
			signal += real(s.Gxx[(k*q+ch)*q+ch])
		} else {
			signal += s.Gyy[k*l.layout.p+ch-q]
		}
		noise += l.noise[k*c+ch]
	}
	if !(noise > 0) {
		return math.NaN()
	}
	return powerDB(signal / noise)
}
