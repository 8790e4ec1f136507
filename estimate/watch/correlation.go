package watch

import (
	"math"
	"math/cmplx"
)

// A correlation is how alike the transforms of white noise are on lines d apart in blocks j hops apart:
//
//	|c(d, j)|² = |Σ_n w(n) w(n + j hop) e^{2πi d n/N}|² / (Σ w²)²
//
// For j = 0 and a Hann window that is 4/9 and 1/36 at d = 1 and 2.
type correlation struct {
	c2 [][]float64 // (hops, lines apart)
}

// maxApart is how far apart lines can be correlated that matter. With a rectangular window cut at an
// overlap the correlation falls as 1/d², and what is beyond 32 lines adds up to less than 1 %.
const maxApart = 32

// newCorrelation is that of a window's values at a hop; 0 is for blocks that never overlap.
func newCorrelation(window []float64, hop int) correlation {
	n := len(window)
	var whole float64
	for _, w := range window {
		whole += w * w
	}
	var c correlation
	for lag := 0; lag < n; lag += hop {
		row := make([]float64, min(maxApart, n/2))
		for d := range row {
			var sum complex128
			turn := cmplx.Rect(1, 2*math.Pi*float64(d)/float64(n))
			at := complex(1, 0)
			for m, w := range window[lag:] {
				sum += complex(window[m]*w, 0) * at
				at *= turn
			}
			row[d] = abs2(sum) / (whole * whole)
		}
		c.c2 = append(c.c2, row)
		if hop <= 0 || len(c.c2) == longest {
			break
		}
	}
	return c
}

// at is |c(d, j)|².
func (c correlation) at(d, j int) float64 {
	if j >= len(c.c2) || d >= len(c.c2[j]) {
		return 0
	}
	return c.c2[j][d]
}

// sum is the sum of |c|² over all pairs of lines in a window of so many, in blocks j hops apart.
func (c correlation) sum(lines, j int) float64 {
	s := float64(lines) * c.at(0, j)
	for d := 1; d < min(lines, maxApart); d++ {
		s += 2 * float64(lines-d) * c.at(d, j)
	}
	return s
}

// every is the correlation of each stride-th line with the others of that kind.
func (c correlation) every(stride int) (e correlation) {
	for _, row := range c.c2 {
		var kept []float64
		for d := 0; d < len(row); d += stride {
			kept = append(kept, row[d])
		}
		e.c2 = append(e.c2, kept)
	}
	return e
}

// perIndependent is how many neighbouring lines are worth one that is independent.
func (c correlation) perIndependent() float64 {
	s := c.at(0, 0)
	for d := 1; d < maxApart; d++ {
		s += 2 * c.at(d, 0)
	}
	return s
}
