package demo

import (
	"math"
	"math/rand/v2"
)

// flutterHz is how fast the contact of a loose sensor comes and goes. Our own choice.
const flutterHz = 5

// A flutter is what a loose sensor makes of its signal: a gain that wanders, and a rattle that is the louder
// the louder the signal. No model of a contact; it looks alike in a recording.
type flutter struct {
	rng        *rand.Rand
	share      float64
	keep, draw float64 // of the gain's low-pass, which leaves unit variance
	slow       float64
}

// newFlutter returns a flutter that draws from rng, which it keeps.
func newFlutter(share, rateHz float64, rng *rand.Rand) *flutter {
	keep := math.Exp(-2 * math.Pi * flutterHz / rateHz)
	return &flutter{rng: rng, share: share, keep: keep, draw: math.Sqrt(1 - keep*keep), slow: rng.NormFloat64()}
}

// of is the signal for a motion.
func (f *flutter) of(value float64) float64 {
	f.slow = f.keep*f.slow + f.draw*f.rng.NormFloat64()
	gain := max(0, 1+f.share*f.slow)
	rattle := f.share * f.rng.NormFloat64()
	return value * (gain + rattle)
}
