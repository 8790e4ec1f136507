package estimate

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// ChanceLevel is the probability with which a coherence that is truly 0 stays below its chance
// level. Common practice, no source.
const ChanceLevel = 0.95

// ChanceLevels are the coherences, 0 to 1, below which ChanceLevel of all values lie when there is no
// relation at all: one below says nothing, and so do 5 of 100 lines above. All are NaN unless n_e > q.
//
// Distributions of sample coherence of complex normal data: Goodman, AFFDL-TR-65-56, 1965.
type ChanceLevels struct {
	Multiple float64 // Beta(q, n_e-q): of a response with all forces
	Partial  float64 // Beta(1, n_e-q): of a response with one force, the others removed
	Force    float64 // Beta(q-1, n_e-q+1): of a force with the others; NaN with one force
}

// NewChanceLevels gives the chance levels with q forces and ne independent averages.
func NewChanceLevels(q int, ne float64) ChanceLevels {
	left := ne - float64(q)
	if !(left > 0) || math.IsInf(left, 1) {
		return ChanceLevels{math.NaN(), math.NaN(), math.NaN()}
	}
	c := ChanceLevels{
		Multiple: mathext.InvRegIncBeta(float64(q), left, ChanceLevel),
		Partial:  -math.Expm1(math.Log1p(-ChanceLevel) / left),
		Force:    math.NaN(),
	}
	if q > 1 {
		c.Force = mathext.InvRegIncBeta(float64(q-1), left+1, ChanceLevel)
	}
	return c
}
