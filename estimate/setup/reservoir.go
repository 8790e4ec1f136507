package setup

import (
	"math"
	"math/rand/v2"
)

const (
	// keptFrames is how many frames a reservoir keeps: 4 MB for 512 channels. What a gain leaves of a
	// pair is then known to sqrt(2/1024), 4 %.
	keptFrames = 1024

	// minKept is the number of frames from which pairs are compared, where that is 18 %.
	minKept = 64

	// twinResidual is the share of a channel's power that the best gain leaves when another carries the
	// same signal: less than -40 dB. Two sensors side by side do not agree that well over a band: 5 %
	// of transverse sensitivity and 1 % of tolerance, which are common, leave more where the
	// structure bends. Our own choice; what can look alike is said in the text.
	twinResidual = 1e-4

	// residualFloor is what rounding leaves of a signal that is the same but for a gain.
	residualFloor = 1e-15
)

// A reservoir keeps a random choice of all frames it has seen, each frame with the same chance
// (Vitter, ACM Trans. Math. Softw. 11, 1985, algorithm R). The choice is random, but always the
// same, so that neither mains nor a periodic drive can be in step with it.
type reservoir struct {
	channels int
	seen     uint64
	frames   []float64 // up to keptFrames of them, channel fastest
	source   *rand.PCG
	random   *rand.Rand
}

func newReservoir(channels int) *reservoir {
	source := rand.NewPCG(1, 2)
	return &reservoir{
		channels: channels,
		frames:   make([]float64, 0, keptFrames*channels),
		source:   source,
		random:   rand.New(source),
	}
}

func (r *reservoir) reset() {
	r.seen, r.frames = 0, r.frames[:0]
	r.source.Seed(1, 2)
}

func (r *reservoir) add(frames []float64) {
	n := r.channels
	for ; len(frames) > 0; frames = frames[n:] {
		r.seen++
		if r.seen <= keptFrames {
			r.frames = append(r.frames, frames[:n]...)
			continue
		}
		if slot := r.random.Uint64N(r.seen); slot < keptFrames {
			copy(r.frames[int(slot)*n:], frames[:n])
		}
	}
}

// A Twin is a pair of channels that carry the same signal but for a gain, an offset and a little
// noise.
type Twin struct {
	A, B       int     // channels, A < B
	ResidualDB float64 // power that the best gain leaves, against the channel's own; -150 at the least
	Opposite   bool    // the gain is negative
}

// Twins lists the pairs of channels of which one is the other times a gain, down to 40 dB. Identical
// channels are among them, constant ones are not. It lists none from fewer than 64 frames.
//
// With r the correlation of two channels without their means, the best gain leaves the share 1 - r²
// of either's power (Bendat and Piersol, Random Data, 4th ed., 2010, linear regression).
func (t *Tally) Twins() []Twin {
	columns := t.kept.columns()
	var twins []Twin
	for a, x := range columns {
		for b := a + 1; b < len(columns); b++ {
			if x == nil || columns[b] == nil {
				continue
			}
			r := dot(x, columns[b])
			if residual := 1 - r*r; residual < twinResidual {
				db := 10 * math.Log10(max(residual, residualFloor))
				twins = append(twins, Twin{A: a, B: b, ResidualDB: db, Opposite: r < 0})
			}
		}
	}
	return twins
}

// columns are the kept samples channel by channel, without their mean and scaled to a unit sum of
// squares; nil for a channel that is constant or not finite. It is empty when there are too few.
func (r *reservoir) columns() [][]float64 {
	count := len(r.frames) / r.channels
	if count < minKept {
		return nil
	}
	columns := make([][]float64, r.channels)
	for ch := range columns {
		x := make([]float64, count)
		for i := range x {
			x[i] = r.frames[i*r.channels+ch] - r.frames[ch]
		}
		mean := 0.0
		for _, v := range x {
			mean += v / float64(count)
		}
		for i := range x {
			x[i] -= mean
		}
		length := math.Sqrt(dot(x, x))
		if !(length > 0) || math.IsInf(length, 1) {
			continue
		}
		for i := range x {
			x[i] /= length
		}
		columns[ch] = x
	}
	return columns
}

func dot(a, b []float64) float64 {
	var sum float64
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}
