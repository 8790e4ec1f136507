package estimate

import (
	"math"
	"math/cmplx"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// DrivingPoints are the driving points of the rig's forces.
func DrivingPoints(r *rig.Rig) []DrivingPoint {
	points := make([]DrivingPoint, len(r.Forces))
	for i, response := range r.DrivingPoints() {
		points[i] = DrivingPoint{Response: response, Sign: r.DrivingSign(i)}
	}
	return points
}

// ReciprocityPairs lists the pairs a < b of forces that both have a driving-point response. It is
// never nil.
func ReciprocityPairs(points []DrivingPoint) [][2]int {
	pairs := [][2]int{}
	for b := range points {
		for a := range b {
			if points[a].Response >= 0 && points[b].Response >= 0 {
				pairs = append(pairs, [2]int{a, b})
			}
		}
	}
	return pairs
}

// reciprocityError is |hab - hba| / (½ (|hab| + |hba|)), from 0 to 2, of two frequency responses that
// a linear, time-invariant structure without gyroscopic terms makes equal: the response at the
// point of force a to force b and the reverse, each with the sign of its driving point.
func reciprocityError(hab, hba complex128) float64 {
	return cmplx.Abs(hab-hba) / ((cmplx.Abs(hab) + cmplx.Abs(hba)) / 2)
}

// reciprocityEstimates fills the reciprocity errors of line k. H must be there already.
func (e *Estimates) reciprocityEstimates(s *spectra.Snapshot, k int) {
	p := e.Responses
	for n, pair := range e.ReciprocityPairs {
		a, b := e.points[pair[0]], e.points[pair[1]]
		silent := s.Gyy[k*p+a.Response] == 0 || s.Gyy[k*p+b.Response] == 0
		dst := &e.ReciprocityError[k*len(e.ReciprocityPairs)+n]
		if silent {
			*dst = math.NaN()
			continue
		}
		hab, hba := e.Sides(k, n)
		*dst = reciprocityError(hab, hba)
	}
}

// Sides are the two frequency responses that reciprocity compares at line k for pair number n, signs
// applied.
func (e *Estimates) Sides(k, n int) (hab, hba complex128) {
	pair := e.ReciprocityPairs[n]
	a, b := e.points[pair[0]], e.points[pair[1]]
	hab = complex(a.Sign, 0) * e.H[(k*e.Responses+a.Response)*e.Forces+pair[1]]
	hba = complex(b.Sign, 0) * e.H[(k*e.Responses+b.Response)*e.Forces+pair[0]]
	return hab, hba
}
