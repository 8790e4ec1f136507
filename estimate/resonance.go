package estimate

import (
	"cmp"
	"math"
	"slices"

	"shakerwatch/spectra"
)

// A Resonance is a mode that the frequency responses show together.
type Resonance struct {
	FrequencyHz       float64 `json:"frequency_hz"`
	BandwidthHz       Number  `json:"bandwidth_hz"` // half-power bandwidth, freed of the window's widening; NaN when it cannot be had
	LinesPerBandwidth Number  `json:"lines_per_bandwidth"`
}

// maxResonances bounds the list: more are no list for a person. The most prominent are kept.
const maxResonances = 40

// A peak stands above the higher one of the valleys on its sides by some standard deviations of the difference. The
// extremes of 1000 lines of noise are some 4.6 apart in that measure: 2·3.24/√2, normal order statistics.
const (
	minProminence  = 6   // for a peak of S that needs no other evidence
	minWithMode    = 3.5 // for one that a fitted mode bears out
	minPowerHeight = 6   // for one of R, which needs that, too
)

// minEvidence is by what factor a fitted mode must explain more of H than its random error would. What noise explains
// has the mean 1 and is exponential for one frequency response, so that 15 is far out even where the errors
// of neighbouring lines are alike.
const minEvidence = 15

// Resonances finds the resonances in the band of a target, as maxima of two sums over all frequency
// responses, each divided by its mean in the band, which show every mode that any of them has:
//
//	S = Σ (|H|² - Var) and, where signals leak, R = Σ Gyy [Gxx^-1]_ii
//
// A maximum counts when it stands above the valleys that part it from higher lines by minProminence standard deviations,
// or by fewer when H bears it out: when a mode fitted to it explains minEvidence times as much as the random error would.
// The errors of responses to one force are taken as one, as those by leakage nearly are. S is
// blind to modes much narrower than a line, whose H drowns in leakage; R, the response's power over
// that of the force, sees them best. But R sees hum as well, so H must always bear it out.
// Frequency and bandwidth come from that fit, see modeFit.
type Resonances struct {
	List []Resonance // by frequency; overwritten by the next Update

	shape     spectra.Shape
	level     []float64 // (p,q) mean |H|²
	loudness  []float64 // (p,q) mean Gyy [Gxx^-1]_ii
	sum, sd   []float64 // (L) S and its standard deviation
	byForce   []float64 // (q) standard deviations of what S has of a force
	loud      []float64 // (L) R
	left      []int     // (line of the band) where a sum is lowest between a line and the next higher one on the left
	right     []int     // the same on the right
	stack     []int
	peaks     []peak
	fit       *modeFit
	kernel    *kernel
	spacingHz float64
}

// A peak is a maximum of S on its way to a Resonance. All in lines.
type peak struct {
	line       int
	prominence float64 // in standard deviations, not lines
	lo, hi     int     // its half-power lines or the valleys before them, see halfPower
	sure       bool    // needs no evidence
	centre     float64
	bandwidth  float64 // NaN when no mode fits
	evidence   float64 // how much more of H the mode explains than the random error would
}

// NewResonances makes Resonances for estimates of the given shape from blocks with the given window.
// leaks tells whether the signals run on beyond the blocks: it is true with random excitation, and false with bursts that
// have died out and periodic signals over whole periods, which leave bandwidths and peaks as they are.
func NewResonances(shape spectra.Shape, window spectra.Window, leaks bool) *Resonances {
	kn := newKernel(window, leaks)
	return &Resonances{
		List:  make([]Resonance, 0, maxResonances),
		shape: shape,
		level: make([]float64, shape.Responses*shape.Forces), loudness: make([]float64, shape.Responses*shape.Forces),
		loud: make([]float64, shape.Lines), byForce: make([]float64, shape.Forces),
		sum: make([]float64, shape.Lines), sd: make([]float64, shape.Lines),
		left: make([]int, shape.Lines), right: make([]int, shape.Lines),
		stack:  make([]int, 0, shape.Lines),
		peaks:  make([]peak, 0, shape.Lines),
		fit:    newModeFit(kn),
		kernel: kn,
	}
}

// Update finds the resonances of e within the band of t. There are none while the random errors are unknown. It
// allocates nothing, and panics when e has another shape.
func (r *Resonances) Update(e *Estimates, t Target) {
	if e.Shape != r.shape {
		panic("estimate: estimates have another shape")
	}
	r.List = r.List[:0]
	first, last := max(t.First, 0), min(t.Last, e.Lines-1)
	if last-first < 2 {
		return
	}
	r.spacingHz = e.FrequencyHz[1]
	r.peaks = r.peaks[:0]
	r.addUp(e, first, last)
	r.findPeaks(r.sum[first:last+1], first, minWithMode, minProminence, func(n, valley int) float64 {
		return (r.sum[n] - r.sum[valley]) / math.Hypot(r.sd[n], r.sd[valley])
	})
	if !r.kernel.none {
		// A quotient of two averages of n spectra varies by 2/n of its square at most.
		sd := math.Sqrt(2 / (e.EffectiveAverages - float64(e.Forces)))
		r.findPeaks(r.loud[first:last+1], first, minPowerHeight, math.Inf(1), func(n, valley int) float64 {
			return math.Log(r.loud[n]/r.loud[valley]) / (math.Sqrt2 * sd)
		})
	}
	r.keepBest()
	r.fit.set(e, r.level, first, last)
	// The second time, the neighbours are known and taken into account.
	for _, neighbours := range []bool{false, true} {
		for n := range r.peaks {
			r.fit.peak(r.peaks, n, neighbours)
		}
		r.peaks = slices.DeleteFunc(r.peaks, func(p peak) bool { return !p.sure && !(p.evidence > minEvidence) })
		r.dropTwins()
	}
	for _, p := range r.peaks {
		r.List = append(r.List, Resonance{
			FrequencyHz:       p.centre * r.spacingHz,
			BandwidthHz:       Number(p.bandwidth * r.spacingHz),
			LinesPerBandwidth: Number(p.bandwidth),
		})
	}
	slices.SortStableFunc(r.List, func(a, b Resonance) int { return cmp.Compare(a.FrequencyHz, b.FrequencyHz) })
}

// addUp fills levels and sums.
func (r *Resonances) addUp(e *Estimates, first, last int) {
	count := len(r.level)
	free := e.EffectiveAverages - float64(e.Forces)
	fill(r.level, 0)
	fill(r.loudness, 0)
	for k := first; k <= last; k++ {
		for n, h := range e.H[k*count : (k+1)*count] {
			if power := abs2(h); power < math.Inf(1) {
				r.level[n] += power / float64(last-first+1)
				r.loudness[n] += loudness(e, k*count+n, power, free) / float64(last-first+1)
			}
		}
	}
	for k := first; k <= last; k++ {
		var sum, variance, loud float64
		fill(r.byForce, 0)
		for n, h := range e.H[k*count : (k+1)*count] {
			if r.level[n] == 0 {
				continue // a silent response
			}
			power, err := abs2(h)/r.level[n], e.RandomError[k*count+n]
			noise := 2 * err * err * power
			sum += power - noise
			r.byForce[n%r.shape.Forces] += math.Sqrt(noise * (2*power + noise)) // of the square of a complex normal value
			loud += loudness(e, k*count+n, abs2(h), free) / r.loudness[n]
		}
		for _, sd := range r.byForce {
			variance += sd * sd
		}
		r.sum[k], r.sd[k], r.loud[k] = sum, math.Sqrt(variance), loud
		if math.IsNaN(sum + variance + loud) { // as on the line before: no maximum, and none of its flanks is lost
			r.sum[k], r.sd[k], r.loud[k] = r.before(k, first)
		}
	}
}

// before are the sums of the line before k, 0 where there is none.
func (r *Resonances) before(k, first int) (sum, sd, loud float64) {
	if k == first {
		return 0, 0, 0
	}
	return r.sum[k-1], r.sd[k-1], r.loud[k-1]
}

// loudness is Gyy [Gxx^-1]_ii at a place in H, which random error, H and coherence contain: see
// HVariance. Without noise, where they no longer do, it is |H|².
func loudness(e *Estimates, at int, power, free float64) float64 {
	noise := 1 - e.MultipleCoherence[at/e.Forces]
	if noise == 0 {
		return power
	}
	err := e.RandomError[at]
	return 2 * err * err * power * free / noise
}

// findPeaks adds to peaks the maxima of s that count and are not there yet; s[0] is line first. prominence
// gives a maximum's standard deviations above its valley from the lines of both, atLeast how many
// it needs, and sure how many are enough by themselves.
func (r *Resonances) findPeaks(s []float64, first int, atLeast, sure float64, prominence func(n, valley int) float64) {
	r.lowest(r.left, s, 1)
	r.lowest(r.right, s, -1)
	known := r.peaks
	for n := 1; n < len(s)-1; n++ {
		if !(s[n] > s[n-1] && s[n] >= s[n+1]) {
			continue
		}
		valley := r.left[n]
		if s[r.right[n]] > s[valley] {
			valley = r.right[n]
		}
		above := prominence(first+n, first+valley)
		if !(above > atLeast) {
			continue
		}
		lo, hi := halfPower(s, n)
		p := peak{line: first + n, prominence: above, lo: first + lo, hi: first + hi, sure: above > sure}
		if !slices.ContainsFunc(known, func(other peak) bool {
			return p.line >= other.lo && p.line <= other.hi || other.line >= p.lo && other.line <= p.hi
		}) {
			r.peaks = append(r.peaks, p)
		}
	}
}

// dropTwins leaves one of two neighbours that turn out to be the same mode, the more prominent one.
func (r *Resonances) dropTwins() {
	for n := 0; n+1 < len(r.peaks); {
		a, b := r.peaks[n], r.peaks[n+1]
		if !(math.Abs(a.centre-b.centre) < twinShare*max(a.bandwidth, b.bandwidth)) {
			n++
			continue
		}
		if a.prominence > b.prominence {
			n++
		}
		r.peaks = slices.Delete(r.peaks, n, n+1)
		n = max(n-1, 0)
	}
}

// twinShare is how near, in bandwidths, two maxima are taken for one mode: two modes as near as that have
// one maximum.
const twinShare = 0.5

// keepBest leaves the most prominent peaks, by line.
func (r *Resonances) keepBest() {
	if len(r.peaks) > maxResonances {
		slices.SortStableFunc(r.peaks, func(a, b peak) int { return cmp.Compare(b.prominence, a.prominence) })
		r.peaks = r.peaks[:maxResonances]
	}
	slices.SortFunc(r.peaks, func(a, b peak) int { return a.line - b.line })
}

// lowest writes into dst, for each value of s, the index of the lowest one between it and the next higher one (or the
// end) in the direction from which it is walked: step 1 looks to the left, -1 to the right.
//
// The stack holds values that fall from bottom to top: those that can still be the next higher one.
func (r *Resonances) lowest(dst []int, s []float64, step int) {
	r.stack = r.stack[:0]
	n := 0
	if step < 0 {
		n = len(s) - 1
	}
	for range s {
		dst[n] = n
		for len(r.stack) > 0 {
			top := r.stack[len(r.stack)-1]
			if s[top] > s[n] {
				break
			}
			if s[dst[top]] < s[dst[n]] {
				dst[n] = dst[top]
			}
			r.stack = r.stack[:len(r.stack)-1]
		}
		r.stack = append(r.stack, n)
		n += step
	}
}

// halfPower are the first indices on both sides of maximum n at which s is no more than half of it, or
// rises again for good: above what noise would do. It stays within s.
func halfPower(s []float64, n int) (lo, hi int) {
	lo, hi = n, n
	for low := s[n]; lo > 0 && s[lo] > s[n]/2 && s[lo] < risen*low; lo-- {
		low = min(low, s[lo])
	}
	for low := s[n]; hi < len(s)-1 && s[hi] > s[n]/2 && s[hi] < risen*low; hi++ {
		low = min(low, s[hi])
	}
	return lo, hi
}

// risen is by what factor S must have risen from a valley to belong to the next mode.
const risen = 1.3
