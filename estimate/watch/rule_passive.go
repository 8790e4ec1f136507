package watch

import "math/cmplx"

// passiveForces is, by force, the share of it that only answers the motion at its driving point; 0 without one.
func (k *looker) passiveForces() []float64 {
	l, s := k.layout, k.s
	shares := make([]float64, l.q)
	for i, o := range l.driving {
		if o < 0 {
			continue
		}
		f := new(passive)
		for cell := range l.cells.n {
			lo, hi := l.cells.bounds(cell)
			var sum product
			for line := lo; line < hi; line++ {
				at := line*l.p + o
				sum.aa += s.Gyy[at]
				sum.xx += real(s.Gxx[(line*l.q+i)*l.q+i])
				sum.xa += complex(l.sign[i], 0) * cmplx.Conj(s.Gyx[at*l.q+i])
			}
			f.addCell(l.fraction(cell), sum)
		}
		shares[i] = f.share()
	}
	return shares
}

// followsShare: where the noise of a lost force hides what it follows, the shares are smaller, but then it adds little
// to what its driving point does. On simulated rigs such a force had from 0.45 on of the fit and of the coherence,
// and up to 0.2 of the partial coherence with its driving point; a driven one had 0, any, and from 0.75 on.
const followsShare = 0.3

// A force behind a heavy armature is passive for the most part even when it is driven, and its driving point follows what
// the other forces leave of it. If that is no drive of its own the fit explains it too, so it leaves no more than the
// others do, ownPart times, but for fitLeaves, what a fit of so few terms cannot do.
const ownPart, fitLeaves = 2, 0.03

// followers finds forces that only follow the others in the average: not driven, or with the stinger off, from
// the start. Correlated drives look alike to the coherence, but not to the fit.
func (k *looker) followers(dst []finding, passive []float64) []finding {
	for i, share := range passive {
		if k.layout.q < 2 || !(share > followsShare) {
			continue
		}
		o, coherence := k.layout.driving[i], k.meanCoherence(i)
		if onlyFollows(share, coherence, k.meanPartial(i, o)) {
			dst = append(dst, finding{kind: ForceLost + atStart, key: i, channels: []int{i}, about: []int{k.layout.q + o}})
		}
	}
	return dst
}

// onlyFollows judges by the share that the fit explains of a force, its coherence with the others, and its partial
// coherence with its driving point.
func onlyFollows(share, coherence, partial float64) bool {
	if partial < followsShare {
		return coherence > followsShare
	}
	return min(share, coherence) > passiveShare && 1-share < ownPart*(1-coherence)+fitLeaves
}

// meanCoherence is that of force i with the others over the band, less what chance gives: Beta(q - 1,
// n_e - q + 1) has the mean (q - 1)/n_e.
func (k *looker) meanCoherence(i int) float64 {
	q := k.layout.q
	var sum, lines float64
	for n := i; n < len(k.coherence); n += q {
		if c := k.coherence[n]; c == c {
			sum += c
			lines++
		}
	}
	chance := float64(q-1) / k.model.ne
	return (sum/lines - chance) / (1 - chance)
}
