// Package estimate says what an averaged measurement is worth: frequency responses, coherences,
// conditioning of the forces, reciprocity, random error, averages needed and the verdict. All are
// pure functions of a spectra.Snapshot.
//
// It knows forces, responses and driving points. It may not know goroutines, HTTP or files.
//
// The letters are those of package spectra; besides, M is the number of blocks averaged, n_e the
// number of independent averages that they are worth, and g2 a multiple coherence. What cannot be
// known is NaN.
package estimate

import (
	"math"
	"slices"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// A DrivingPoint tells which response is measured where a force enters the structure.
type DrivingPoint struct {
	Response int     // index of the response; negative when there is none
	Sign     float64 // -1 when force and response have opposite axis signs, else 1
}

// Estimates are all estimates of one snapshot. Arrays lie line by line, like those of the
// snapshot; L, p, q and K are the numbers of lines, responses, forces and reciprocity pairs.
//
// All but the principal forces is NaN while M < q and where Gxx has no inverse, coherences with responses
// while M <= q too, errors and radii while n_e <= q; all three also at a silent response, whose H is 0.
type Estimates struct {
	spectra.Shape
	FrequencyHz []float64 // (L)

	H                 []complex128 // (L,p,q) frequency responses by Method's estimator, m/s²/N
	MultipleCoherence []float64    // (L,p) by H1, in [0, 1]
	PartialCoherence  []float64    // (L,p,q) by H1, in [0, 1]
	RandomError       []float64    // (L,p,q) relative standard deviation of |H|
	ConfidenceRadius  []float64    // (L,p,q) of the region around H that holds the truth, m/s²/N

	ForceCondition    []float64 // (L) of Gxx scaled to a unit diagonal: correlation alone
	ForceConditionRaw []float64 // (L) of Gxx: correlation and level differences
	ForceCoherence    []float64 // (L,q) of each force with all the others, in [0, 1]
	PrincipalForces   []float64 // (L,q) eigenvalues of Gxx, largest first, N²/Hz

	ReciprocityPairs [][2]int  // (K) pairs of forces a < b that both have a driving point
	ReciprocityError []float64 // (L,K) see reciprocityError

	Averages          int     // M
	EffectiveAverages float64 // n_e
	Chance            ChanceLevels

	Method Method // as given to New, with its defaults

	points   []DrivingPoint // (q)
	forces   *forceLine
	h2       *h2Line           // nil unless it is the estimator
	hv       *hvLine           // nil unless it is the estimator
	periods  *differentPeriods // nil unless the average has periods
	row      []complex128      // (q) scratch
	variance []float64         // (p,q) complex variance of H at the line at hand
}

// ShapeOf is the shape of the snapshots of a rig.
func ShapeOf(r *rig.Rig) spectra.Shape {
	return spectra.Shape{Lines: r.Grid.Lines, Forces: len(r.Forces), Responses: len(r.Responses)}
}

// AveragingOf is how a rig's blocks are averaged: the cross-densities of its driving points are kept for
// the error of reciprocity, those of all responses for H2.
func AveragingOf(r *rig.Rig) spectra.Averaging {
	a := spectra.Averaging{
		Memory:  r.Analysis.Memory,
		Halves:  r.Analysis.Averaging == "linear",
		Periods: r.Periodic.KeepPeriods,
	}
	points := r.DrivingPoints()
	for n := range r.Responses {
		for o := range n {
			if r.Analysis.Estimator == "h2" || slices.Contains(points, o) && slices.Contains(points, n) {
				a.Pairs = append(a.Pairs, [2]int{o, n})
			}
		}
	}
	return a
}

// New makes Estimates for snapshots of the given shape, of which and of whose noise densities it
// keeps hold: they must not change. It panics when m does not go with shape.
func New(shape spectra.Shape, m Method) *Estimates {
	m = m.checked(shape)
	l, p, q := shape.Lines, shape.Responses, shape.Forces
	pairs := ReciprocityPairs(m.Points)
	e := &Estimates{
		Shape:             shape,
		FrequencyHz:       make([]float64, l),
		H:                 make([]complex128, l*p*q),
		MultipleCoherence: make([]float64, l*p),
		PartialCoherence:  make([]float64, l*p*q),
		RandomError:       make([]float64, l*p*q),
		ConfidenceRadius:  make([]float64, l*p*q),
		ForceCondition:    make([]float64, l),
		ForceConditionRaw: make([]float64, l),
		ForceCoherence:    make([]float64, l*q),
		PrincipalForces:   make([]float64, l*q),
		ReciprocityPairs:  pairs,
		ReciprocityError:  make([]float64, l*len(pairs)),
		Method:            m,
		points:            m.Points,
		forces:            newForceLine(q),
		row:               make([]complex128, q),
		variance:          make([]float64, p*q),
	}
	switch m.Estimator {
	case H2:
		e.h2 = newH2Line(q, m.Averaging.Pairs)
	case HV:
		e.hv = newHVLine(q)
	}
	if m.Averaging.Periods > 0 {
		e.periods = newDifferentPeriods(q)
	}
	return e
}

// Update fills e with the estimates of s. It allocates nothing, and panics when s has another shape.
func (e *Estimates) Update(s *spectra.Snapshot) {
	if s.Shape != e.Shape {
		panic("estimate: snapshot has another shape")
	}
	if e.h2 != nil && len(s.GyyPairs) != e.Lines*len(e.Method.Averaging.Pairs) || e.periods != nil && s.Periods == 0 {
		panic("estimate: snapshot is averaged in another way")
	}
	e.Averages, e.EffectiveAverages = s.Averages, s.EffectiveAverages
	e.Chance = NewChanceLevels(e.Forces, e.EffectiveAverages)
	region := RegionFactor(e.Forces, e.EffectiveAverages, e.Method.Level, e.Method.Simultaneous)
	for k := range e.Lines {
		e.FrequencyHz[k] = s.FrequencyHz(k)
		e.forceEstimates(s, k)
		for o := range e.Responses {
			e.responseEstimates(s, k, o)
		}
		e.chosenEstimates(s, k)
		e.errorEstimates(k, region)
		e.reciprocityEstimates(s, k)
	}
}

// forceEstimates fills what depends on the forces alone, and e.forces for the rest of line k.
func (e *Estimates) forceEstimates(s *spectra.Snapshot, k int) {
	q := e.Forces
	f := e.forces
	f.factor(s.Gxx[k*q*q : (k+1)*q*q])
	f.principalTo(e.PrincipalForces[k*q : (k+1)*q])

	coherence := e.ForceCoherence[k*q : (k+1)*q]
	if !e.solvable() {
		e.ForceCondition[k], e.ForceConditionRaw[k] = math.NaN(), math.NaN()
		fill(coherence, math.NaN())
		return
	}
	e.ForceCondition[k] = f.condition()
	e.ForceConditionRaw[k] = f.conditionRaw()
	for i := range coherence {
		coherence[i] = f.coherence(i)
	}
}

// solvable tells whether the line at hand can have frequency responses.
func (e *Estimates) solvable() bool { return e.Averages >= e.Forces && e.forces.regular }

// responseEstimates fills the estimates of response o at line k by H1.
func (e *Estimates) responseEstimates(s *spectra.Snapshot, k, o int) {
	q := e.Forces
	at := k*e.Responses + o
	h := e.H[at*q : (at+1)*q]
	partial := e.PartialCoherence[at*q : (at+1)*q]
	variance := e.variance[o*q : (o+1)*q]
	gyy := s.Gyy[at]

	e.MultipleCoherence[at] = math.NaN()
	fill(partial, math.NaN())
	fill(variance, math.NaN())
	if !e.solvable() {
		fill(h, complex(math.NaN(), math.NaN()))
		return
	}
	explained := e.forces.solve(h, s.Gyx[at*q:(at+1)*q], e.row)
	if e.Averages <= q || gyy == 0 {
		return
	}
	g2 := MultipleCoherence(explained, gyy)
	e.MultipleCoherence[at] = g2
	for i, inverse := range e.forces.inverses {
		partial[i] = PartialCoherence(h[i], gyy, g2, inverse)
		variance[i] = HVariance(gyy, g2, inverse, q, e.EffectiveAverages)
	}
}

// chosenEstimates replaces H of line k where it is not to be by H1, and its variance where another one
// than HVariance is known.
func (e *Estimates) chosenEstimates(s *spectra.Snapshot, k int) {
	switch {
	case !e.solvable():
	case e.periods != nil:
		h := e.H[k*len(e.variance) : (k+1)*len(e.variance)]
		e.periods.hTo(h, s, k)
		e.periods.varianceTo(e.variance, h, s, k)
	case e.h2 != nil:
		e.byH2(s, k)
	case e.hv != nil:
		e.byHV(s, k)
	}
}

// errorEstimates fills the errors of line k, H being there already; region is the RegionFactor.
func (e *Estimates) errorEstimates(k int, region float64) {
	from := k * len(e.variance)
	for n, variance := range e.variance {
		e.RandomError[from+n] = RelativeError(variance, e.H[from+n])
		e.ConfidenceRadius[from+n] = math.Sqrt(variance * region)
	}
}

func fill[T any](dst []T, v T) {
	for i := range dst {
		dst[i] = v
	}
}
