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
	}
}

// Progress is how far the averaging has come towards a target.
type Progress struct {
	Errors []float64 // (p,q) each frequency response's error, NaN where unknown
	Worst  int       // index into Errors of the one that is furthest from the target

	// AveragesNeeded is the predicted total of averaged blocks that meets the target, NaN when
	// unknown.
	AveragesNeeded Number
	Met            bool

	ofInterest []float64 // scratch
}

// Update fills p with the progress of e towards t.
//
// A frequency response's error is the smallest that t.Share of its lines of interest do not exceed.
// A line whose H is unknown counts as one of interest, and an unknown error as one that exceeds.
func (p *Progress) Update(e *Estimates, t Target) {
	count := e.Responses * e.Forces
	p.Errors = slices.Grow(p.Errors[:0], count)[:count]
	p.Worst, p.Met = 0, true
	p.AveragesNeeded = 0
	for n := range p.Errors {
		err := p.frfError(e, t, n)
		p.Errors[n] = err
		p.Met = p.Met && err <= t.RandomError
		if worse(err, p.Errors[p.Worst]) {
			p.Worst = n
		}
	}
	p.AveragesNeeded = Number(averagesNeeded(p.Errors[p.Worst], t.RandomError, e))
}

// worse tells whether error a is further from any target than b; unknown is furthest.
func worse(a, b float64) bool {
	return a > b || math.IsNaN(a) && !math.IsNaN(b)
}

// frfError is the error of frequency response n of (p,q).
func (p *Progress) frfError(e *Estimates, t Target, n int) float64 {
	stride := e.Responses * e.Forces
	highest := 0.0
	for k := t.First; k <= t.Last; k++ {
		if size := cmplx.Abs(e.H[k*stride+n]); size > highest {
			highest = size
		}
	}
	floor := highest * math.Pow(10, -t.DepthDB/20)
	p.ofInterest = p.ofInterest[:0]
	for k := t.First; k <= t.Last; k++ {
		if cmplx.Abs(e.H[k*stride+n]) < floor {
			continue
		}
		err := e.RandomError[k*stride+n]
		if math.IsNaN(err) {
			err = math.Inf(1)
		}
		p.ofInterest = append(p.ofInterest, err)
	}
	return shareQuantile(p.ofInterest, t.Share)
}

// shareQuantile is the smallest value that the given share of values do not exceed, NaN when that is
// infinite or there are no values. It sorts values.
func shareQuantile(values []float64, share float64) float64 {
	if len(values) == 0 {
		return math.NaN()
	}
	slices.Sort(values)
	// A share such as 0.9 of 10 is 9 lines, whatever the rounding of the product.
	rank := int(math.Ceil(share*float64(len(values)) - 1e-9))
	v := values[max(rank, 1)-1]
	if math.IsInf(v, 1) {
		return math.NaN()
	}
	return v
}

// averagesNeeded predicts the number of blocks after which err will have fallen to target: the
// variance falls with n_e - q, and a block goes on being worth n_e/M averages.
func averagesNeeded(err, target float64, e *Estimates) float64 {
	q, ne := float64(e.Forces), e.EffectiveAverages
	if !(ne > q) {
		return math.NaN()
	}
	ratio := err / target
	needed := q + (ne-q)*ratio*ratio
	blocks := math.Ceil(needed * float64(e.Averages) / ne)
	if !(blocks < maxBlocks) {
		return math.NaN()
	}
	return blocks
}

// maxBlocks is a number of averages that no test reaches; a prediction beyond it says no more than
// "unknown".
const maxBlocks = 1e12
