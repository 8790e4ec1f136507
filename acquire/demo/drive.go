package demo

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/dsp/window"
	"gonum.org/v1/gonum/floats"
)

// A drive makes the current of a shaker.
type drive interface {
	// next puts the current of the next frame's sub samples into dst, in A.
	next(dst []float64)
}

// A noiseDrive is band-limited Gaussian noise, flat from 0 Hz to passHz and gone above stopHz: white
// noise at a low rate, interpolated to the rate of the sub samples.
type noiseDrive struct {
	rng    *rand.Rand
	phases [][]float64 // for each sub sample between two white ones, the weights of the last white ones, oldest first
	phase  int         // of the next sub sample
	white  []float64   // the last white samples twice over, so that any run of them is contiguous
	at     int         // where the oldest white sample lies
}

// band describes the noise of a drive.
type band struct {
	rateHz float64 // of the sub samples
	every  int     // sub samples between two white ones; rateHz / every is at least 2 stopHz
	passHz float64 // as flat as the window's ripple, 0.001 dB
	stopHz float64 // 92 dB down
	rms    float64 // A
}

// newNoiseDrive returns a drive that draws from rng, which it keeps.
func newNoiseDrive(b band, rng *rand.Rand) *noiseDrive {
	taps := lowPass(b)
	each := len(taps) / b.every
	d := &noiseDrive{rng: rng, white: make([]float64, 2*each)}
	for p := range b.every {
		weights := make([]float64, each)
		for i := range weights {
			weights[each-1-i] = taps[p+i*b.every]
		}
		d.phases = append(d.phases, weights)
	}
	for range each {
		d.draw()
	}
	return d
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

func (d *noiseDrive) draw() {
	v := d.rng.NormFloat64()
	half := len(d.white) / 2
	d.white[d.at], d.white[d.at+half] = v, v
	d.at = (d.at + 1) % half
}

func (d *noiseDrive) next(dst []float64) {
	half := len(d.white) / 2
	for i := range dst {
		if d.phase == 0 {
			d.draw()
		}
		dst[i] = floats.Dot(d.phases[d.phase], d.white[d.at:d.at+half])
		d.phase = (d.phase + 1) % len(d.phases)
	}
}
