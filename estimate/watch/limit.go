package watch

import "gonum.org/v1/gonum/mathext"

const (
	// falseAlarm is the chance with which one sum of a healthy block passes its limit. A block of a rig with 14
	// responses has some 10,000 sums, most of them overlapping, so that is one block in 10^8 by the
	// formula; what the formula does not know (leakage at narrow modes ties neighbouring lines together)
	// takes most of that distance.
	falseAlarm = 1e-12

	// leastMean is the mean of u that is abnormal at least: over many lines chance would allow less, but
	// a noise floor is not as steady as that.
	leastMean = 1.5

	// longest is how many blocks are summed at most.
	longest = 4
)

// limit is what the sum of u over a window of lines in the last blocks of the grid does not exceed in
// a healthy run. Each u is exponential with mean 1; their sum is taken as Gamma with the mean and the
// variance that it has,
//
//	Σ |c|² over all pairs of (line, block)  +  the share that comes from S,
//
// since all blocks are measured by the same S, itself known from few averages only: each pair of different
// (line, block) is tied by |c(d, 0)|²/(v + 1) besides.
func (c correlation) limit(lines, blocks int, v float64) float64 {
	return max(c.limitAt(falseAlarm, lines, blocks, v), leastMean*float64(lines*blocks))
}

// limitAt is what is exceeded at the given rate.
func (c correlation) limitAt(rate float64, lines, blocks int, v float64) float64 {
	mean := float64(lines * blocks)
	variance := 0.0
	for j := range blocks {
		pairs := float64(2 * (blocks - j))
		if j == 0 {
			pairs = float64(blocks)
		}
		variance += pairs * c.sum(lines, j)
	}
	variance += (float64(blocks*blocks)*c.sum(lines, 0) - mean) / (v + 1)
	shape := mean * mean / variance
	return mathext.GammaIncRegCompInv(shape, rate) * variance / mean
}
