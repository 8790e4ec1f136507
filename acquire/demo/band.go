package demo

import (
	"math"

	"gonum.org/v1/gonum/dsp/window"
	"gonum.org/v1/gonum/floats"
)

// A band describes the noise of a drive: flat from 0 Hz to passHz and gone above stopHz.
type band struct {
	rateHz float64 // of the sub samples
	every  int     // sub samples between two white ones; rateHz / every is at least 2 stopHz
	passHz float64 // as flat as the window's ripple, 0.001 dB
	stopHz float64 // 92 dB down
	rms    float64 // A
}

const (
	// passRatio and stopRatio bound the edge of the drives, per max_frequency. The stop lies at half
	// the lowest rate that a rig may have, so nothing aliases.
	passRatio = 1.0
	stopRatio = 1.28
)

// driveBand is the band of drives for frames at rateHz of sub sub samples and max_frequency topHz.
// The white samples lie as many whole frames apart as the stop allows, so the cost does not grow
// with the rate.
func driveBand(rateHz, topHz float64, sub int, rms float64) band {
	stopHz := stopRatio * topHz
	// 1e-9: a rate of exactly twice the stop may compute to a little less
	frames := max(1, int(rateHz/(2*stopHz)+1e-9))
	return band{rateHz: rateHz * float64(sub), every: sub * frames, passHz: passRatio * topHz, stopHz: stopHz, rms: rms}
}

// dividing returns the band with white samples as close together as it takes for a whole number of
// them to fill a period, given in frames of sub sub samples.
func (b band) dividing(period, sub int) band {
	frames := b.every / sub
	for period%frames != 0 {
		frames--
	}
	b.every = frames * sub
	return b
}

// lowPass returns the impulse response of the interpolator, a multiple of b.every long, scaled so that white
// noise of unit variance leaves with b.rms.
//
// A sinc cut by a 4-term Blackman-Harris window, whose main lobe is 8 lines wide with side lobes at
// -92 dB (Harris, doi:10.1109/PROC.1978.10837): its width is the width of the filter's edge.
func lowPass(b band) []float64 {
	each := int(math.Ceil(8 * b.rateHz / (b.stopHz - b.passHz) / float64(b.every)))
	taps := make([]float64, each*b.every)
	cut := (b.passHz + b.stopHz) / b.rateHz // twice the edge's middle, in cycles a sub sample
	for i := range taps {
		x := math.Pi * cut * (float64(i) - float64(len(taps)-1)/2)
		taps[i] = 1
		if x != 0 {
			taps[i] = math.Sin(x) / x
		}
	}
	window.BlackmanHarris(taps)
	floats.Scale(b.rms*math.Sqrt(float64(b.every))/floats.Norm(taps, 2), taps)
	return taps
}
