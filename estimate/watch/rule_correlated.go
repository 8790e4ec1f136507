package watch

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mathext"
)

const (
	// chanceLines is how many lines of all, by chance, exceed what independent forces do.
	chanceLines = 0.01

	// leastCoherence is the true coherence from which forces are said to depend on each other: with q = 2 it costs
	// 1/(1 - 0.3), that is four tenths more averages. boundSigma is how sure of it one has to be.
	leastCoherence = 0.3
	boundSigma     = 3.3

	// A run of lines that depend has leastRun of them; gaps of up to bridge are chance. A run of at most mainsRun around
	// a multiple of a mains frequency is hum, which the window spreads over so many lines.
	leastRun, bridge, mainsRun = 3, 2, 5

	// sameEdge is by how many lines the edges of a band may move before it is named anew, and renamed by how much the
	// average must have grown until then: what is found with few averages is the middle of a band. Scatter has then
	// fallen by a sixth, and a run of 10,000 blocks names its bands some twenty times at most.
	sameEdge = 3
	renamed  = 1.4

	// correlatedFrom is from how many averages on bands are named.
	correlatedFrom = 16
)

// correlatedBands are the bands that were named, in groups of forces.
type correlatedBands struct {
	groups []*bandGroup
	next   int // key of the next group
}

// A bandGroup is one event: bands in which the same forces depend on each other, hum apart.
type bandGroup struct {
	key    int
	mains  bool
	forces uint64
	looks  int // that found it, up to two
	absent int // looks since
	m      int // averages when the bands were named
	bands  []lineBand
}

// A lineBand is a run of lines in which forces depend on each other.
type lineBand struct {
	lo, hi int // lines of the model, both in it
	forces uint64
	peak   float64 // largest coherence, less what chance gives
}

func (b lineBand) like(o lineBand) bool {
	near := func(a, b int) bool { return a-b <= sameEdge && b-a <= sameEdge }
	return near(b.lo, o.lo) && near(b.hi, o.hi)
}

// correlations finds the bands in which the forces depend on each other, and keeps them in groups: bands that share a
// force are one group's. What a group said stands until its bands differ from that and the average has grown.
func (k *looker) correlations(dst []finding) []finding {
	c := &k.correlated
	if k.s.Averages < correlatedFrom || k.layout.q < 2 {
		return dst
	}
	bands := k.told(k.layout.dependent(nil, k.coherence, k.model.ne))
	found := make(map[*bandGroup]bool)
	for _, mains := range []bool{false, true} {
		var kind []lineBand
		for _, b := range bands {
			if k.hum(b) == mains {
				kind = append(kind, b)
			}
		}
		for _, g := range grouped(kind) {
			g.mains = mains
			known, anew := k.take(g)
			found[known] = true
			f := k.correlatedFinding(known)
			f.anew = anew
			dst = append(dst, f)
		}
	}
	c.groups = slices.DeleteFunc(c.groups, func(g *bandGroup) bool {
		g.absent++
		if found[g] {
			g.absent = 0
		}
		return g.absent >= awayLooks || g.looks < 2 && g.absent > 0
	})
	return dst
}

// told takes bands that began of late, which has been said, out of those that the average shows, and keeps what was
// said of the average there before.
func (k *looker) told(runs []lineBand) (bands []lineBand) {
	late := func(b lineBand) bool {
		lines := 0
		for n := b.lo; n <= b.hi; n++ {
			if k.locked.held[n] {
				lines++
			}
		}
		return 2*lines > b.hi-b.lo+1
	}
	for _, b := range runs {
		if !late(b) {
			bands = append(bands, b)
		}
	}
	for _, g := range k.correlated.groups {
		for _, b := range g.bands {
			if late(b) {
				bands = append(bands, b)
			}
		}
	}
	return bands
}

// grouped puts bands that share a force together.
func grouped(bands []lineBand) (groups []*bandGroup) {
	for _, b := range bands {
		one := &bandGroup{forces: b.forces, bands: []lineBand{b}}
		groups = slices.DeleteFunc(groups, func(g *bandGroup) bool {
			shares := g.forces&one.forces != 0
			if shares {
				one.forces |= g.forces
				one.bands = append(g.bands, one.bands...)
			}
			return shares
		})
		groups = append(groups, one)
	}
	for _, g := range groups {
		slices.SortFunc(g.bands, func(a, b lineBand) int { return a.lo - b.lo })
	}
	return groups
}

// take finds the group that is known of what is one now, and tells whether it is to be said anew.
func (k *looker) take(now *bandGroup) (known *bandGroup, anew bool) {
	c, m := &k.correlated, k.s.Averages
	for _, g := range c.groups {
		if g.mains == now.mains && g.forces&now.forces != 0 && (known == nil || g.forces == now.forces) {
			known = g
		}
	}
	memory := m
	if k.layout.memory > 0 {
		memory = min(m, k.layout.memory)
	}
	switch {
	case known == nil:
		known = now
		known.key, known.m = c.next, m
		c.next++
		c.groups = append(c.groups, known)
	case known.looks < 2:
		known.forces, known.bands, known.m = now.forces, now.bands, m
	case !sameBands(known.bands, now.bands) && float64(m-known.m) >= (renamed-1)*float64(min(known.m, memory)):
		known.forces, known.bands, known.m = now.forces, now.bands, m
		anew = true
	}
	known.looks = min(2, known.looks+1)
	return known, anew
}

// sameBands tells whether each band of one list has its like in the other.
func sameBands(a, b []lineBand) bool {
	in := func(list []lineBand) func(lineBand) bool {
		return func(b lineBand) bool { return !slices.ContainsFunc(list, b.like) }
	}
	return !slices.ContainsFunc(a, in(b)) && !slices.ContainsFunc(b, in(a))
}

func (k *looker) correlatedFinding(g *bandGroup) finding {
	f := finding{kind: ForcesCorrelated, key: g.key}
	if g.mains {
		f.cause = CauseMains
	}
	k.layout.describe(&f, g.bands)
	return f
}

// hum tells whether a run is so short and so near to a multiple of 50 or 60 Hz that it is hum, and no middle of a
// wider band: beside it the forces do not depend on each other.
func (k *looker) hum(r lineBand) bool {
	if r.hi-r.lo+1 > mainsRun {
		return false
	}
	lo := float64(k.layout.cells.first+r.lo) * k.layout.spacingHz
	hi := float64(k.layout.cells.first+r.hi) * k.layout.spacingHz
	for _, mainsHz := range []float64{50, 60} {
		near := math.Round((lo+hi)/2/mainsHz) * mainsHz
		if near > 0 && lo <= near && near <= hi {
			return k.beside(r) < leastCoherence
		}
	}
	return false
}

// beside is the mean coherence, less what chance gives, of the forces that a run concerns on as many lines on either side
// as hum can cover, those next to the run left out.
func (k *looker) beside(r lineBand) float64 {
	q := k.layout.q
	var sum, count float64
	for d := 2; d < 2+mainsRun; d++ {
		for _, n := range []int{r.lo - d, r.hi + d} {
			for i := range q {
				if n < 0 || n >= len(k.model.regular) || r.forces>>i&1 == 0 || math.IsNaN(k.coherence[n*q+i]) {
					continue
				}
				sum += beyondChance(k.coherence[n*q+i], q, k.model.ne)
				count++
			}
		}
	}
	return sum / max(1, count)
}

// dependent puts into runs, and returns, the bands in which forces depend on each other, by the coherence, (line, force), of each with the others
// in ne averages. A line counts when that is beyond chance, Beta(q - 1, n_e - q + 1), and surely above
// leastCoherence: Fisher's z = atanh γ, less 3.3 of its standard deviations 1/sqrt(2 (n_e - q + 1)).
func (l *layout) dependent(runs []lineBand, coherence []float64, ne float64) []lineBand {
	q := l.q
	if q < 2 || ne <= float64(q) {
		return runs[:0]
	}
	free := ne - float64(q) + 1
	chance := mathext.InvRegIncBeta(float64(q-1), free, 1-chanceLines/float64(len(coherence)))
	bias := float64(q-1) / ne
	surely := math.Tanh(math.Atanh(math.Sqrt(leastCoherence)) + boundSigma/math.Sqrt(2*free))
	depends := func(n, i int) bool {
		c := coherence[n*q+i]
		true2 := max(0, (c-bias)/(1-bias))
		return c > chance && true2 > surely*surely
	}
	runs = runs[:0]
	for n := range len(coherence) / q {
		any := false
		for i := range q {
			any = any || depends(n, i)
		}
		if !any {
			continue
		}
		if last := len(runs) - 1; last >= 0 && n-runs[last].hi <= bridge+1 {
			runs[last].hi = n
		} else {
			runs = append(runs, lineBand{lo: n, hi: n})
		}
	}
	long := runs[:0]
	for _, r := range runs {
		if r.hi-r.lo+1 >= leastRun {
			r = l.concerned(r, coherence, depends)
			r.peak = (r.peak - bias) / (1 - bias)
			long = append(long, r)
		}
	}
	return long
}

// concerned fills in which forces a run is about and its largest coherence. Two are concerned at least, those with the most
// coherence, as no force depends on itself; others where they depend on half of its lines.
func (l *layout) concerned(r lineBand, coherence []float64, depends func(n, i int) bool) lineBand {
	q := l.q
	first, second := -1, -1
	sums := make([]float64, q)
	for i := range q {
		lines := 0
		for n := r.lo; n <= r.hi; n++ {
			if c := coherence[n*q+i]; c == c {
				sums[i] += c
			}
			if depends(n, i) {
				r.peak = max(r.peak, coherence[n*q+i])
				lines++
			}
		}
		if 2*lines >= r.hi-r.lo+1 {
			r.forces |= 1 << i
		}
		switch {
		case first < 0 || sums[i] > sums[first]:
			first, second = i, first
		case second < 0 || sums[i] > sums[second]:
			second = i
		}
	}
	r.forces |= 1<<first | 1<<second
	return r
}

// describe fills a finding about bands: where they lie, whom they concern and how strong they are.
func (l *layout) describe(f *finding, bands []lineBand) {
	var forces uint64
	for _, b := range bands {
		lo, hi := float64(l.cells.first+b.lo), float64(l.cells.first+b.hi)
		f.bandsHz = append(f.bandsHz, [2]float64{lo * l.spacingHz, hi * l.spacingHz})
		f.value = max(f.value, b.peak)
		forces |= b.forces
	}
	for i := range l.q {
		if forces>>i&1 != 0 {
			f.channels = append(f.channels, i)
		}
	}
}
