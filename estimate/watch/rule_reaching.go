package watch

// reachedShare is the mean partial coherence of a force and its driving-point response, less what chance
// gives, below which the force does not arrive. A healthy driving point has more than ten times as much, and
// chance alone stays within a fifth of it from a hundred lines on.
const reachedShare = 0.05

// unreached finds the forces that their driving points do not follow in the average. When that is all of
// several, none is driven; one alone may be either.
func (k *looker) unreached(dst []finding) []finding {
	before := len(dst)
	for i, o := range k.layout.driving {
		if o >= 0 && k.meanPartial(i, o) < reachedShare {
			dst = append(dst, finding{kind: ForceNotReaching + atStart, key: i, channels: []int{i}, about: []int{k.layout.q + o}})
		}
	}
	if q := k.layout.q; q > 1 && len(dst)-before == q {
		f := finding{kind: NoDrive + atStart}
		for i := range q {
			f.channels = append(f.channels, i)
		}
		return append(dst[:before], f)
	}
	return dst
}

// meanPartial is the mean partial coherence of force i and response o over the band, |H|²/(|H|² + Gyy (1 -
// g2) [Gxx^-1]_ii), less the mean 1/(v + 1) of Beta(1, v) that chance gives.
func (k *looker) meanPartial(i, o int) float64 {
	var sum, lines float64
	for n := range k.model.regular {
		s := k.residual(n, o)
		if s != s {
			continue
		}
		h2 := abs2(k.model.at(n, o, i))
		sum += h2 / (h2 + s*k.model.v/k.model.ne*k.inverse(n, i))
		lines++
	}
	chance := 1 / (k.model.v + 1)
	return (sum/lines - chance) / (1 - chance)
}
