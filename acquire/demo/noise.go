package demo

import (
	"math"
	"math/rand/v2"
)

// A floor is the noise of a transducer and its conditioner: white, and rising below a corner.
type floor struct {
	density  float64 // unit per root Hz, one-sided, where it is white
	rise     float64 // how many times more amplitude at 0 Hz, above 1
	cornerHz float64 // of the rise
}

// The floors stand about 70 and 75 dB below the full scale of the demo's rig file, over its band. Our
// own choice.
var (
	forceFloor    = floor{density: 4e-3, rise: 20, cornerHz: 1}   // N
	responseFloor = floor{density: 2.5e-3, rise: 20, cornerHz: 1} // m/s²
)

// sensorNoise draws the noise of one channel.
type sensorNoise struct {
	rng         *rand.Rand
	sigma       float64
	keep, share float64 // of the low-pass that makes the rise
	slow        float64
}

// newSensorNoise returns noise at rateHz that draws from rng, which it keeps.
func newSensorNoise(f floor, rateHz float64, rng *rand.Rand) sensorNoise {
	keep := math.Exp(-2 * math.Pi * f.cornerHz / rateHz)
	return sensorNoise{
		rng:   rng,
		sigma: f.density * math.Sqrt(rateHz/2),
		keep:  keep,
		share: (f.rise - 1) * (1 - keep),
	}
}

func (s *sensorNoise) next() float64 {
	white := s.sigma * s.rng.NormFloat64()
	s.slow = s.keep*s.slow + s.share*white
	return white + s.slow
}
