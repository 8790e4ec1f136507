package estimate

import "shakerwatch/spectra"

// Values from outside, see TestDifferentPeriodsOutsideValues and TestNoiseBound.
var (
	outsideH          = []complex128{2.1391299627038287 - 0.9839015942971899i, 0.39189420183630447 + 1.1612046758223626i}
	outsideError      = []float64{0.039129807198130015, 0.09482838958874595}
	outsideNoiseForce = []float64{0.0875, 0.075}
)

const (
	outsideNoiseResponse = 0.2109375
	outsideDistortion    = 0.34463857613373383
	outsideChance        = 2.3707578474672153

	boundOneTwo      = 15.977024852557667
	boundOne         = 2.3181184231766485
	boundTwo         = 1.5307319798906984
	boundFour        = 2.1622776601683786
	boundExponential = 1.4079905585696293
)

// typedPeriods are five random blocks of two periods, invented, with two forces and a response on
// line 1. H is [2-i, 0.5+i] but for noise and distortion.
func typedPeriods() *spectra.Snapshot {
	typed := [][][]complex128{
		{{3.25 + 1.125i, -1 + 1.875i, 5.5 - 1.25i}, {2.875 + 1i, -0.75 + 2.25i, 5 - 1.5i}},
		{{-2 + 1.75i, 1.125 - 3i, 1.5 + 6.5i}, {-1.75 + 2i, 0.875 - 3.125i, 0.75 + 6.25i}},
		{{1.125 - 3.75i, 2 + 1.25i, -2.125 - 6.125i}, {1.125 - 4.25i, 1.75 + 1i, -1.875 - 5.75i}},
		{{-3.25 - 0.875i, -2.125 - 1.75i, -6.375 - 2.625i}, {-3 - 0.875i, -1.75 - 2.125i, -6.25 - 1.875i}},
		{{2.25 + 2.75i, 3 - 0.875i, 9.75 + 7.25i}, {1.875 + 3.125i, 2.75 - 0.875i, 9.375 + 6.75i}},
	}
	m := madePeriodic{shape: spectra.Shape{Lines: 2, Forces: 2, Responses: 1}, blocks: len(typed), periods: 2}
	b := 0
	return m.snapshotOf(func() [][]complex128 {
		periods := make([][]complex128, 2)
		for n := range periods {
			periods[n] = append(make([]complex128, 3), typed[b][n]...) // line 0 is silent
		}
		b++
		return periods
	})
}
