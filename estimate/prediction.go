package estimate

import (
	"math"
	"sort"
)

// uncertainty is the variance of ln err², err being the share's quantile of sorted, the errors of a frequency response's
// lines of interest.
//
// A line's squared error has a scatter of its own: of the residual, with free = n_e - q complex degrees of freedom, and of
// |H|². In logs that is
//
//	s² = 1/free + 4 err².
//
// The quantile is an order statistic of values with that scatter, taken as normal. Where p_k is the probability that
// line k lies below it and g_k its density there, its variance is Σ p_k (1 - p_k) / (Σ g_k)² (David and Nagaraja,
// Order Statistics, 3rd ed., 2003, for independent values that are not alike), times what the likeness of neighbouring lines
// adds, and with the variance of the number of lines of interest on top.
func (p *Progress) uncertainty(sorted []float64, err float64, t Target, free float64, edge edgeLines) float64 {
	s := math.Sqrt(1/free + 4*err*err)
	from := sort.SearchFloat64s(sorted, err*math.Exp(-farScatter*s/2))
	to := sort.SearchFloat64s(sorted, err*math.Exp(farScatter*s/2))
	var density, mixed float64
	for _, v := range sorted[from:to] {
		z := 2 * math.Log(err/v) / s
		below := math.Erfc(-z/math.Sqrt2) / 2
		mixed += below * (1 - below)
		density += math.Exp(-z*z/2) / (s * math.Sqrt(2*math.Pi))
	}
	alike := 1.0
	for j, c := range t.Lines {
		alike += 2 * max(0, 1-float64(j+1)/(4*mixed)) * c // 4 Σ p (1-p) lines are involved
	}
	return (mixed*alike + t.Share*t.Share*edge.variance()) / (density * density)
}

// farScatter is from how many s away a line does not matter.
const farScatter = 4

// edgeLines are the lines whose |H| is near the smallest that is of interest. Those are the ones with the largest errors,
// and which of them count hangs on the random errors of the maximum and of each.
type edgeLines struct {
	floorErr float64 // relative error of the maximum's |H|
	lines    float64 // within a factor e^½ of the smallest |H| of interest, to both sides
	scatter  float64 // of their ln |H|², added up
}

// add counts a line whose |H| is ratio times the smallest of interest.
func (l *edgeLines) add(ratio, err float64) {
	if ratio > edgeLow && ratio < 1/edgeLow && err < 1 {
		l.lines++
		l.scatter += 2 * err
	}
}

const edgeLow = 0.6065306597126334 // e^-½

// variance is that of the number of lines of interest. Per unit of ln |H|² there is half of lines; the
// probabilities p to count, of normal scatter s on a straight stretch of lines, have ∫ p (1 - p) = s/√π.
func (l *edgeLines) variance() float64 {
	common := l.lines / 2 * 2 * l.floorErr
	return common*common + l.scatter/2/math.Sqrt(math.Pi)
}

// averagesRange is the 90 % range of the total of averaged blocks that will have been needed when the target is met,
// err being the worst error, above the target, and variance the uncertainty of ln err².
//
// The final errors contain the present data as the share f = (n_e - q) / (n_e - q at the end) of theirs, so of the
// present variance the share 1 - f is still to be seen, nothing at last.
//
// Scatter lifts a high quantile of the lines and the worst of several frequency responses, and should do so less and less; but
// simulated, the plain prediction has no bias to speak of from a quarter of the way (its median is 0.97 to 1.06 of what is
// finally needed), and corrections for both made it worse. So there are none.
func averagesRange(err, variance float64, e *Estimates, t Target) [2]Number {
	free := e.EffectiveAverages - float64(e.Forces)
	plain := 2 * math.Log(err/t.RandomError) // ln of the final n_e - q over the present one
	sd := ninetyPercent * math.Sqrt(variance)
	ends := [2]Number{Number(math.NaN()), Number(math.NaN())}
	if math.IsNaN(sd) {
		return ends
	}
	for n, sd := range []float64{-sd, sd} {
		lo, hi := max(min(plain, plain+sd), 0), max(plain, plain+sd)
		for range bisections { // of x = plain + sd √(1-f), f = e^-x
			middle := (lo + hi) / 2
			if middle < plain+sd*math.Sqrt(1-math.Exp(-middle)) {
				lo = middle
			} else {
				hi = middle
			}
		}
		ends[n] = Number(blocksFor(float64(e.Forces)+free*math.Exp(hi), e, t))
	}
	return ends
}

// bisections are enough for a range to within a block in a million.
const bisections = 40

// ninetyPercent is the 95 % point of the normal distribution, scipy.stats.norm.ppf(0.95).
const ninetyPercent = 1.6448536269514722
