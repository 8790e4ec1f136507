package estimate

import (
	"math"
	"math/cmplx"
	"slices"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// A Target says when the averaging is enough and on which lines that is judged.
type Target struct {
	RandomError float64 // relative standard deviation of |H| that is good enough
	Share       float64 // of the lines of interest of every frequency response
	DepthDB     float64 // lines of interest: |H| no more than this below its own maximum in the band
	First, Last int     // the band: lines First to Last

	Lines  LineCorrelation // of the window
	Memory *Memory         // of exponential averaging; nil without

	Settling int // averages from which a result is judged; 0 is SettlingAverages
}

// NewTarget is the rig file's target, its band narrowed to the lines that can be judged: 0 Hz and
// the lines that the window smears it into never are.
func NewTarget(r *rig.Rig) Target {
	first := int(math.Ceil(r.Analysis.MinFrequencyHz / r.Grid.SpacingHz * (1 - 1e-9)))
	return Target{
		RandomError: r.Target.RandomError,
		Share:       r.Target.Share,
		DepthDB:     r.Target.DepthDB,
		First:       max(first, spectra.Window(r.Analysis.Window).Smear()+1),
		Last:        r.Grid.Lines - 1,
		Lines:       NewLineCorrelation(spectra.Window(r.Analysis.Window)),
		Memory:      memoryOf(r),
		Settling:    SettlingOf(r),
	}
}

// floors writes, for each frequency response of (p,q), the smallest |H| with which a line is one of interest into
// floor, and the line of the maximum that it goes by into highest. Both are resized and returned.
func (t Target) floors(floor []float64, highest []int, e *Estimates) ([]float64, []int) {
	count := e.Responses * e.Forces
	floor = slices.Grow(floor[:0], count)[:count]
	highest = slices.Grow(highest[:0], count)[:count]
	fill(floor, 0)
	fill(highest, min(t.First, e.Lines-1))
	for k := t.First; k <= t.Last; k++ {
		for n, h := range e.H[k*count : (k+1)*count] {
			if size := cmplx.Abs(h); size > floor[n] {
				floor[n], highest[n] = size, k
			}
		}
	}
	depth := math.Pow(10, -t.DepthDB/20)
	for n := range floor {
		floor[n] *= depth
	}
	return floor, highest
}

// Progress is how far the averaging has come towards a target.
type Progress struct {
	Errors []float64 // (p,q) each frequency response's error, NaN where unknown
	Worst  int       // index into Errors of the one that is furthest from the target

	// AveragesNeeded is the predicted total of averaged blocks that meets the target, NaN when
	// unknown and when exponential averaging can't reach it.
	AveragesNeeded Number

	// AveragesRange holds, from first to second, what will finally have been needed in nine of ten cases; an end
	// is NaN when unknown or out of reach. It closes in on AveragesNeeded as that is reached.
	AveragesRange [2]Number

	// BeyondMemory is the n_e that the target needs when exponential averaging can't reach it, else 0.
	BeyondMemory float64

	Met bool

	floor      []float64 // (p,q), see Target.floors
	highest    []int     // (p,q)
	ofInterest []float64 // scratch
}

// Update fills p with the progress of e towards t.
//
// A frequency response's error is the smallest that t.Share of its lines of interest do not exceed.
// A line whose H is unknown counts as one of interest, and an unknown error as one that exceeds.
func (p *Progress) Update(e *Estimates, t Target) {
	count := e.Responses * e.Forces
	p.Errors = slices.Grow(p.Errors[:0], count)[:count]
	p.floor, p.highest = t.floors(p.floor, p.highest, e)
	p.Worst, p.Met = 0, true
	for n := range p.Errors {
		p.frf(e, t, n)
		p.Met = p.Met && p.Errors[n] <= t.RandomError
		if worse(p.Errors[n], p.Errors[p.Worst]) {
			p.Worst = n
		}
	}
	err := p.Errors[p.Worst]
	needed := averagesFor(err, t.RandomError, e)
	p.AveragesNeeded = Number(blocksFor(needed, e, t))
	p.BeyondMemory = 0
	switch {
	case p.Met, math.IsNaN(needed):
		p.AveragesRange = [2]Number{p.AveragesNeeded, p.AveragesNeeded}
		return
	case t.Memory != nil && math.IsNaN(float64(p.AveragesNeeded)):
		p.BeyondMemory = needed
	}
	edge := p.frf(e, t, p.Worst)
	variance := p.uncertainty(p.ofInterest, err, t, e.EffectiveAverages-float64(e.Forces), edge)
	p.AveragesRange = averagesRange(err, variance, e, t)
}

// worse tells whether error a is further from any target than b; unknown is furthest.
func worse(a, b float64) bool {
	return a > b || math.IsNaN(a) && !math.IsNaN(b)
}

// frf fills ofInterest and the error of frequency response n of (p,q).
func (p *Progress) frf(e *Estimates, t Target, n int) edgeLines {
	stride := e.Responses * e.Forces
	floor := p.floor[n]
	p.ofInterest = p.ofInterest[:0]
	edge := edgeLines{floorErr: e.RandomError[p.highest[n]*stride+n]}
	for k := t.First; k <= t.Last; k++ {
		size, err := cmplx.Abs(e.H[k*stride+n]), e.RandomError[k*stride+n]
		edge.add(size/floor, err)
		if size < floor {
			continue
		}
		if math.IsNaN(err) {
			err = math.Inf(1)
		}
		p.ofInterest = append(p.ofInterest, err)
	}
	p.Errors[n] = shareQuantile(p.ofInterest, t.Share)
	return edge
}

// shareQuantile is the smallest value that the given share of values do not exceed, NaN when that is
// infinite or there are no values. It sorts values.
func shareQuantile(values []float64, share float64) float64 {
	if len(values) == 0 {
		return math.NaN()
	}
	slices.Sort(values)
	v := values[shareRank(len(values), share)-1]
	if math.IsInf(v, 1) {
		return math.NaN()
	}
	return v
}

// shareRank is the number of values of count, at least 1, that a share is at least.
// A share such as 0.9 of 10 is 9 lines, whatever the rounding of the product.
func shareRank(count int, share float64) int {
	return max(int(math.Ceil(share*float64(count)-1e-9)), 1)
}

// averagesFor predicts the number of independent averages with which err will have fallen to target: the
// variance falls with n_e - q. NaN when unknown.
func averagesFor(err, target float64, e *Estimates) float64 {
	q, ne := float64(e.Forces), e.EffectiveAverages
	if !(ne > q) {
		return math.NaN()
	}
	ratio := err / target
	return q + (ne-q)*ratio*ratio
}

// blocksFor is the total of averaged blocks worth the given number of independent averages: a block goes on being
// worth n_e/M averages, unless a memory fades. NaN when unknown or never.
func blocksFor(averages float64, e *Estimates, t Target) float64 {
	if t.Memory != nil {
		return t.Memory.BlocksFor(averages)
	}
	blocks := math.Ceil(averages * float64(e.Averages) / e.EffectiveAverages)
	if !(blocks < maxBlocks) {
		return math.NaN()
	}
	return blocks
}

// maxBlocks is a number of averages that no test reaches; a prediction beyond it says no more than
// "unknown".
const maxBlocks = 1e12
