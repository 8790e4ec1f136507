package watch

import (
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// A looker finds what is wrong in the average itself. It alone sees what was wrong from the first block on,
// which beside the average is normal.
type looker struct {
	layout *layout
	model  *model
	s      *spectra.Snapshot // only while it looks
	pairs  [][2]int          // pairs of forces with driving points
	cross  []int             // by pair: where its driving points' cross-density is kept, -1 where it is not
	turned []bool            // by pair: kept as (b, a)
	driven []bool            // by force, see diagnosis

	correlated correlatedBands
	locked     *locked
	low        *lowSignal
	column     []complex128 // scratch
	other      []complex128 // scratch
	coherence  []float64    // (line, force), NaN where unknown
}

func newLooker(r *rig.Rig, l *layout, noise []float64) *looker {
	k := &looker{
		layout: l,
		pairs:  estimate.ReciprocityPairs(estimate.DrivingPoints(r)),
		driven: make([]bool, l.q),
		locked: newLocked(l),
		low:    newLowSignal(l, noise),
		column: make([]complex128, l.q),
		other:  make([]complex128, l.q),
	}
	k.coherence = make([]float64, l.cells.lines()*l.q)
	kept := estimate.AveragingOf(r).Pairs
	for _, pair := range k.pairs {
		a, b := l.driving[pair[0]], l.driving[pair[1]]
		at, turned := -1, false
		for n, have := range kept {
			if have == [2]int{a, b} || have == [2]int{b, a} {
				at, turned = n, have != [2]int{a, b}
			}
		}
		k.cross, k.turned = append(k.cross, at), append(k.turned, turned)
	}
	return k
}

// look appends what it finds in an average that was just learnt.
func (k *looker) look(dst []finding, m *model, s *spectra.Snapshot) []finding {
	k.model, k.s = m, s
	defer func() { k.s = nil }()
	k.forceCoherence()
	passive := k.passiveForces()
	for i := range k.driven {
		k.driven[i] = passive[i] < drivenShare
	}
	dst = k.followers(dst, passive)
	dst = k.unreached(dst)
	dst = k.polarities(dst)
	dst = k.reciprocities(dst)
	k.locked.learn(k.coherence, m.ne)
	dst = k.correlations(dst)
	return k.low.find(dst, s)
}

// forget drops what it knows of earlier averages.
func (k *looker) forget() {
	k.correlated.groups = k.correlated.groups[:0]
	k.locked.forget()
	clear(k.low.low)
}

// residual is S of response o on line n of the model, and NaN where unknown.
func (k *looker) residual(n, o int) float64 {
	weight := float64(k.model.weight[n*k.layout.rows+o])
	if weight == 0 {
		return unknown
	}
	return k.layout.density / (weight * k.model.v)
}

// inverse is [Gxx^-1]_ii on line n of the model.
func (k *looker) inverse(n, i int) float64 {
	return k.model.factor(n).inverseOwn(k.column, i)
}

// forceCoherence fills the coherence of each force with all the others, 1 - 1/(Gxx_ii [Gxx^-1]_ii).
func (k *looker) forceCoherence() {
	q := k.layout.q
	for n, regular := range k.model.regular {
		for i := range q {
			at := n*q + i
			k.coherence[at] = unknown
			if regular {
				k.coherence[at] = max(0, 1-1/(k.model.gxx[at]*k.inverse(n, i)))
			}
		}
	}
}
