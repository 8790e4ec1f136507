package estimate

import (
	"cmp"
	"math"
	"slices"
)

// Bounds of one fit, which bound its cost, too.
const (
	maxFitFRFs  = 8  // frequency responses that show the mode best
	maxFitLines = 33 // of the lines around it; every so many of them where it is wide
	minFitReach = 4  // lines to each side
	maxTerms    = 5  // the mode, two neighbours, the rest as a constant and a slope
)

// A modeFit finds the centre x0 and the bandwidth B of a mode from the complex H around it: in all
// frequency responses at once, by least squares,
//
//	H(x) = a φ(x - x0; B) + b + c x
//
// with φ the mode as the window leaves it (kernel.mode) and a, b, c free in every frequency response. The
// straight line stands for modes further away; near ones have a φ of their own. For given x0 and B that is
// linear, so that only those two are searched for (variable projection: Golub and Pereyra, SIAM J. Numer. Anal. 10,
// 1973). Fitting the complex H and not |H|² uses the phase, needs no half-power points, which neighbours hide, and takes
// the widening by the window into account exactly where the force spectrum is flat over a few lines.
type modeFit struct {
	kernel      *kernel
	e           *Estimates
	level       []float64
	first, last int

	frfs  []int // of (p,q), those fitted
	order []int // (p,q) scratch
	lines int   // fitted
	x     [maxFitLines]float64
	y     [maxFitFRFs][maxFitLines]complex128 // H over the root of its level
	terms [maxTerms][maxFitLines]complex128   // orthonormal
	count int                                 // of terms, those that do not move with x0 and B first
}

func newModeFit(kn *kernel) *modeFit { return &modeFit{kernel: kn} }

// set takes what is to be fitted, of which it keeps hold until the next set.
func (f *modeFit) set(e *Estimates, level []float64, first, last int) {
	f.e, f.level, f.first, f.last = e, level, first, last
	f.order = slices.Grow(f.order[:0], len(level))
}

// peak fills centre and bandwidth of peaks[n]. With neighbours, those of the peaks beside it are known
// and used.
func (f *modeFit) peak(peaks []peak, n int, neighbours bool) {
	p := &peaks[n]
	apparent := float64(p.hi - p.lo)
	f.chooseFRFs(p.line)
	reach := max(minFitReach, int(math.Ceil(apparent)))
	lo, hi := p.line-reach, p.line+reach
	if !neighbours {
		lo, hi = beforeNeighbours(peaks, n, lo, hi)
	}
	f.chooseLines(p.line, max(lo, f.first), min(hi, f.last))
	f.count = 0
	f.addTerm(func(float64) complex128 { return 1 })
	f.addTerm(func(x float64) complex128 { return complex(x, 0) })
	if neighbours {
		f.addNeighbours(peaks, n, reach)
	}
	centre, bandwidth := f.search(float64(p.line), apparent)
	if !(math.Abs(centre-float64(p.line)) <= 1+apparent) {
		centre, bandwidth = float64(p.line), math.NaN()
	}
	p.centre, p.bandwidth = centre, bandwidth
	p.evidence = f.evidence(centre, bandwidth)
}

// beforeNeighbours ends the lines half-way to the peaks beside peaks[n], but leaves some.
func beforeNeighbours(peaks []peak, n, lo, hi int) (int, int) {
	line := peaks[n].line
	if n > 0 {
		lo = min(max(lo, (peaks[n-1].line+line)/2), line-2)
	}
	if n+1 < len(peaks) {
		hi = max(min(hi, (peaks[n+1].line+line+1)/2), line+2)
	}
	return lo, hi
}

// chooseFRFs takes those whose |H|² over level is highest at a line.
func (f *modeFit) chooseFRFs(line int) {
	h := f.e.H[line*len(f.level) : (line+1)*len(f.level)]
	f.order = f.order[:0]
	for n, level := range f.level {
		if level > 0 {
			f.order = append(f.order, n)
		}
	}
	slices.SortStableFunc(f.order, func(a, b int) int {
		return cmp.Compare(abs2(h[b])/f.level[b], abs2(h[a])/f.level[a])
	})
	f.frfs = f.order[:min(len(f.order), maxFitFRFs)]
}

// chooseLines takes lines lo to hi, or every so many of them, with H known.
func (f *modeFit) chooseLines(middle, lo, hi int) {
	stride := (hi - lo + maxFitLines) / maxFitLines
	lo += (middle - lo) % stride
	f.lines = 0
	for k := lo; k <= hi; k += stride {
		known := true
		for m, n := range f.frfs {
			h := f.e.H[k*len(f.level)+n] * complex(1/math.Sqrt(f.level[n]), 0)
			f.y[m][f.lines] = h
			known = known && abs2(h) < math.Inf(1)
		}
		if known {
			f.x[f.lines] = float64(k)
			f.lines++
		}
	}
}

// addNeighbours adds a term for the nearest peak on each side that reaches into the lines of the fit.
func (f *modeFit) addNeighbours(peaks []peak, n, reach int) {
	for _, other := range []int{n - 1, n + 1} {
		if other < 0 || other >= len(peaks) {
			continue
		}
		o := peaks[other]
		far := math.Abs(o.centre - float64(peaks[n].line))
		if far < 0.5 || !(far < float64(reach)+neighbourBandwidths*o.bandwidth) {
			continue // one and the same; or a straight line will do
		}
		f.addTerm(func(x float64) complex128 { return f.kernel.mode(x-o.centre, o.bandwidth) })
	}
}

// neighbourBandwidths is how far, in its own bandwidths, a mode's flank is no straight line.
const neighbourBandwidths = 2

// addTerm adds a term that stays; one that the others make up already is left out.
func (f *modeFit) addTerm(term func(x float64) complex128) {
	if f.orthonormal(f.count, term) {
		f.count++
	}
}

// orthonormal puts a term, less what the first count terms explain of it, into terms[count].
func (f *modeFit) orthonormal(count int, term func(x float64) complex128) bool {
	t := f.terms[count][:f.lines]
	var before float64
	for i := range t {
		t[i] = term(f.x[i])
		before += abs2(t[i])
	}
	for _, other := range f.terms[:count] {
		share := inner(other[:f.lines], t)
		for i := range t {
			t[i] -= share * other[i]
		}
	}
	var left float64
	for _, v := range t {
		left += abs2(v)
	}
	if !(left > 1e-12*before) {
		return false
	}
	scale := complex(1/math.Sqrt(left), 0)
	for i := range t {
		t[i] *= scale
	}
	return true
}

// inner is Σ a* b.
func inner(a, b []complex128) complex128 {
	var sum complex128
	for i, v := range a {
		sum += complex(
			real(v)*real(b[i])+imag(v)*imag(b[i]),
			real(v)*imag(b[i])-imag(v)*real(b[i]),
		)
	}
	return sum
}

// explained is how much of Σ |H|² a mode explains beyond the terms that stay: least squares is to have
// most of it.
func (f *modeFit) explained(centre, bandwidth float64) float64 {
	if !f.orthonormal(f.count, func(x float64) complex128 { return f.kernel.mode(x-centre, bandwidth) }) {
		return 0
	}
	var sum float64
	for m := range f.frfs {
		sum += abs2(inner(f.terms[f.count][:f.lines], f.y[m][:f.lines]))
	}
	return sum
}

// evidence is what a mode explains over what random errors would on the average, were they independent from
// line to line. NaN where either is unknown.
func (f *modeFit) evidence(centre, bandwidth float64) float64 {
	if math.IsNaN(bandwidth) {
		return math.NaN()
	}
	explained := f.explained(centre, bandwidth)
	var noise float64
	for i, t := range f.terms[f.count][:f.lines] {
		for m, n := range f.frfs {
			err := f.e.RandomError[int(f.x[i])*len(f.level)+n]
			noise += abs2(t) * 2 * err * err * abs2(f.y[m][i])
		}
	}
	return explained / noise
}

// minFitBandwidth is the narrowest bandwidth that is looked for, in lines: narrower modes look all
// the same.
const minFitBandwidth = 0.05

// search is a search by ever smaller steps along centre and ln bandwidth, from the best point of a coarse grid. The
// result is good to 1 % of the bandwidth. NaN where the lines are too few to tell.
func (f *modeFit) search(line, apparent float64) (centre, bandwidth float64) {
	if f.lines < f.count+2 {
		return line, math.NaN()
	}
	best := math.Inf(-1)
	try := func(c, logB float64) bool {
		b := math.Exp(logB)
		if b < minFitBandwidth || math.Abs(c-line) > 2+apparent {
			return false
		}
		v := f.explained(c, b)
		if v > best {
			best, centre, bandwidth = v, c, b
			return true
		}
		return false
	}
	for _, share := range []float64{0.1, 0.25, 0.5, 0.8, 1.2} {
		for _, offset := range []float64{-0.4, 0, 0.4} {
			try(line+offset*apparent/2, math.Log(max(share*apparent, minFitBandwidth)))
		}
	}
	stepC, stepB := 0.1*apparent, 0.35
	for stepB > 0.01 {
		c, b := centre, math.Log(bandwidth)
		moved := try(c-stepC, b) || try(c+stepC, b)
		moved = try(centre, b-stepB) || try(centre, b+stepB) || moved
		if !moved {
			stepC, stepB = stepC/2, stepB/2
		}
	}
	return centre, bandwidth
}
