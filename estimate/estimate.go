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
type Estimates struct {
	spectra.Shape
	FrequencyHz []float64 // (L)

	H                 []complex128 // (L,p,q) frequency responses by H1, m/s²/N
	MultipleCoherence []float64    // (L,p) in [0, 1]
	RandomError       []float64    // (L,p,q) relative standard deviation of |H|

	ForceCondition    []float64 // (L) of Gxx scaled to a unit diagonal: correlation alone
	ForceConditionRaw []float64 // (L) of Gxx: correlation and level differences
	ForceCoherence    []float64 // (L,q) of each force with all the others, in [0, 1]
	PrincipalForces   []float64 // (L,q) eigenvalues of Gxx, largest first, N²/Hz

	ReciprocityPairs [][2]int  // (K) pairs of forces a < b that both have a driving point
	ReciprocityError []float64 // (L,K) see reciprocityError

	Averages          int     // M
	EffectiveAverages float64 // n_e

	points []DrivingPoint // (q)
	forces *forceLine
	row    []complex128 // (q) scratch
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

// New makes Estimates for snapshots of the given shape. It panics when points has not one element a
// force.
func New(shape spectra.Shape, points []DrivingPoint) *Estimates {
	if len(points) != shape.Forces {
		panic("estimate: one driving point a force, please")
	}
	l, p, q := shape.Lines, shape.Responses, shape.Forces
	pairs := ReciprocityPairs(points)
	return &Estimates{
		Shape:             shape,
		FrequencyHz:       make([]float64, l),
		H:                 make([]complex128, l*p*q),
		MultipleCoherence: make([]float64, l*p),
		RandomError:       make([]float64, l*p*q),
		ForceCondition:    make([]float64, l),
		ForceConditionRaw: make([]float64, l),
		ForceCoherence:    make([]float64, l*q),
		PrincipalForces:   make([]float64, l*q),
		ReciprocityPairs:  pairs,
		ReciprocityError:  make([]float64, l*len(pairs)),
		points:            points,
		forces:            newForceLine(q),
		row:               make([]complex128, q),
	}
}

// Update fills e with the estimates of s. It allocates nothing, and panics when s has another shape.
func (e *Estimates) Update(s *spectra.Snapshot) {
	if s.Shape != e.Shape {
		panic("estimate: snapshot has another shape")
	}
	e.Averages, e.EffectiveAverages = s.Averages, s.EffectiveAverages
	for k := range e.Lines {
		e.FrequencyHz[k] = s.FrequencyHz(k)
		e.forceEstimates(s, k)
		for o := range e.Responses {
			e.responseEstimates(s, k, o)
		}
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
	if e.Averages < q || !f.regular {
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

// responseEstimates fills the estimates of response o at line k.
func (e *Estimates) responseEstimates(s *spectra.Snapshot, k, o int) {
	q := e.Forces
	at := k*e.Responses + o
	h := e.H[at*q : (at+1)*q]
	randomError := e.RandomError[at*q : (at+1)*q]
	gyy := s.Gyy[at]

	e.MultipleCoherence[at] = math.NaN()
	fill(randomError, math.NaN())
	if e.Averages < q || !e.forces.regular {
		fill(h, complex(math.NaN(), math.NaN()))
		return
	}
	explained := e.forces.solve(h, s.Gyx[at*q:(at+1)*q], e.row)
	if e.Averages <= q || gyy == 0 {
		return
	}
	g2 := MultipleCoherence(explained, gyy)
	e.MultipleCoherence[at] = g2
	if !(e.EffectiveAverages > float64(q)) {
		return
	}
	for i := range randomError {
		variance := HVariance(gyy, g2, e.forces.inverse(i), q, e.EffectiveAverages)
		randomError[i] = RelativeError(variance, h[i])
	}
}

func fill[T any](dst []T, v T) {
	for i := range dst {
		dst[i] = v
	}
}
