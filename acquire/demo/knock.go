package demo

import "math"

// knockS is how long a hammer with a medium tip touches a structure. Common practice, no source.
const knockS = 3e-3

// A knock's force is half a sine of the given impulse: J pi/(2 T) sin(pi t/T) for 0 <= t <= T.
func knockForce(impulseNS, t float64) float64 {
	if t < 0 || t > knockS {
		return 0
	}
	return impulseNS * math.Pi / (2 * knockS) * math.Sin(math.Pi*t/knockS)
}

// strike puts the force of a knock in the frame that begins so many frames behind its onset into dst.
func strike(dst []float64, impulseNS float64, frames int64, rateHz float64) {
	for k := range dst {
		t := (float64(frames) + float64(k+1)/float64(len(dst))) / rateHz
		dst[k] = knockForce(impulseNS, t)
	}
}
