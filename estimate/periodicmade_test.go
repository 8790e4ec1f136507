package estimate

import (
	"math/rand/v2"

	"shakerwatch/spectra"
)

// A madePeriodic is a test measurement with periodic excitation. Everything is drawn directly as
// transforms, the same distribution on every line, so the truth is known.
type madePeriodic struct {
	shape           spectra.Shape
	blocks, periods int          // M and K
	h               []complex128 // (p,q) the truth
	mix             []complex128 // (q,q) true forces are mix times unit white noise, new for each block

	// Standard deviations: of the noise on every force and on every response, new for each period,
	// and of the distortion of every response, new for each block.
	noiseForce, noiseResponse, distortion float64
}

// randomPeriodic is a measurement with a random structure.
func randomPeriodic(rng *rand.Rand, lines, q, p, blocks, periods int) madePeriodic {
	m := randomMade(rng, lines, q, p, blocks)
	return madePeriodic{
		shape: m.shape, blocks: blocks, periods: periods,
		h: m.h, mix: m.mix,
		noiseForce: 0.1, noiseResponse: 0.1,
	}
}

// block draws the periods of one random block, each (line, channel), forces first.
func (m madePeriodic) block(rng *rand.Rand) [][]complex128 {
	q, p, channels := m.shape.Forces, m.shape.Responses, m.shape.Channels()
	periods := make([][]complex128, m.periods)
	for n := range periods {
		periods[n] = make([]complex128, m.shape.Lines*channels)
		draw(rng, periods[n])
		for at := range periods[n] {
			sd := m.noiseForce
			if at%channels >= q {
				sd = m.noiseResponse
			}
			periods[n][at] *= complex(sd, 0)
		}
	}
	unit, truth, bend := make([]complex128, q), make([]complex128, channels), make([]complex128, p)
	for k := range m.shape.Lines {
		draw(rng, unit)
		draw(rng, bend)
		multiply(truth[:q], m.mix, unit)
		multiply(truth[q:], m.h, truth[:q])
		for o := range p {
			truth[q+o] += complex(m.distortion, 0) * bend[o]
		}
		for _, lines := range periods {
			for ch, v := range truth {
				lines[k*channels+ch] += v
			}
		}
	}
	return periods
}

// multiply writes the matrix a, row by row, times x into dst.
func multiply(dst, a, x []complex128) {
	for i := range dst {
		dst[i] = 0
		for j, v := range x {
			dst[i] += a[i*len(x)+j] * v
		}
	}
}

// snapshot draws all blocks and averages them.
func (m madePeriodic) snapshot(rng *rand.Rand) *spectra.Snapshot {
	return m.snapshotOf(func() [][]complex128 { return m.block(rng) })
}

// snapshotOf averages m.blocks blocks with spectra.Average, as next gives their periods, which it
// overwrites.
func (m madePeriodic) snapshotOf(next func() [][]complex128) *spectra.Snapshot {
	averaging := spectra.Averaging{Periods: m.periods}
	if m.periods == 1 {
		averaging.Periods = 0 // blocks without periods
	}
	// With this window and rate the density is the mean product, but for 0 Hz, where it is half.
	window := spectra.Rectangular.Values(2 * m.shape.Lines)
	average := spectra.NewAverage(m.shape, window, 0, 1, 1/float64(m.shape.Lines), averaging)
	mean := make([]complex128, m.shape.Lines*m.shape.Channels())
	for b := range m.blocks {
		periods := next()
		for at := range mean {
			mean[at] = 0
			for _, lines := range periods {
				mean[at] += lines[at] / complex(float64(m.periods), 0)
			}
			for _, lines := range periods {
				lines[at] -= mean[at]
			}
		}
		average.Sum([][]complex128{mean}, 0, m.shape.Lines)
		if averaging.Periods > 0 {
			average.SumScatter(periods, 0, m.shape.Lines)
		}
		average.Count(int64(b))
	}
	s := spectra.NewSnapshot(m.shape, averaging)
	average.SnapshotTo(s)
	return s
}

// periodicOf gives the estimates of s, which has periods, from products of different ones.
func periodicOf(s *spectra.Snapshot) *Estimates {
	e := New(s.Shape, Method{Points: noPoints(s.Forces), Averaging: s.Averaging})
	e.Update(s)
	return e
}

// dipping is the mix of q equal forces of which the combination that drives a resonance is
// smaller by the factor dip: force cells see less where the structure gives way.
func dipping(q int, dip float64) []complex128 {
	mix := make([]complex128, q*q)
	for i := range q {
		for j := range q {
			mix[i*q+j] = complex((dip-1)/float64(q), 0)
		}
		mix[i*q+i]++
	}
	return mix
}
