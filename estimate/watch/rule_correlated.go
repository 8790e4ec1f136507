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
	// average must have grown until then: what is found with few averages is the middle of a band.
	sameEdge = 3
	renamed  = 1.5

	// correlatedFrom is from how many averages on bands are named.
	correlatedFrom = 16
)

// correlatedBands are the bands found so far, in groups that were found together.
type correlatedBands struct {
	groups []bandGroup
	next   int // key of the next group
}

type bandGroup struct {
	key   int
	mains bool
	m     int // averages when it was found
	bands []lineBand
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

func (b lineBand) overlaps(o lineBand) bool { return b.lo <= o.hi && o.lo <= b.hi }

// correlations finds the bands in which the forces depend on each other. Those that are new make a group of their
// own; a group is found again while one of its bands is.
func (k *looker) correlations(dst []finding) []finding {
	c := &k.correlated
	m := k.s.Averages
	if m < correlatedFrom {
		return dst
	}
	runs := k.layout.dependent(nil, k.coherence, k.model.ne)
	taken := make([]bool, len(runs))
	for n, r := range runs { // what began of late has been said
		taken[n] = slices.ContainsFunc(k.locked.bands, r.overlaps)
	}
	kept := c.groups[:0]
	for _, g := range c.groups {
		var again []lineBand
		for _, b := range g.bands {
			for n, r := range runs {
				if r.like(b) || r.overlaps(b) && float64(m) < renamed*float64(g.m) {
					taken[n] = true
					again = append(again, b)
					break
				}
			}
		}
		if again != nil {
			g.bands = again
			kept = append(kept, g)
		}
	}
	c.groups = kept
	for _, mains := range []bool{false, true} {
		g := bandGroup{key: c.next, mains: mains, m: m}
		for n, r := range runs {
			if !taken[n] && k.hum(r) == mains {
				g.bands = append(g.bands, r)
			}
		}
		if g.bands != nil {
			c.next++
			c.groups = append(c.groups, g)
		}
	}
	for _, g := range c.groups {
		dst = append(dst, k.correlatedFinding(g))
	}
	return dst
}

func (k *looker) correlatedFinding(g bandGroup) finding {
	f := finding{kind: ForcesCorrelated, key: g.key}
	if g.mains {
		f.cause = CauseMains
	}
	k.layout.describe(&f, g.bands)
	return f
}

// hum tells whether a run is so short and so near to a multiple of 50 or 60 Hz that it is hum.
func (k *looker) hum(r lineBand) bool {
	if r.hi-r.lo+1 > mainsRun {
		return false
	}
	lo := float64(k.layout.cells.first+r.lo) * k.layout.spacingHz
	hi := float64(k.layout.cells.first+r.hi) * k.layout.spacingHz
	for _, mainsHz := range []float64{50, 60} {
		near := math.Round((lo+hi)/2/mainsHz) * mainsHz
		if near > 0 && lo <= near && near <= hi {
			return true
		}
	}
	return false
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
	runs = runs[:0]
	for n := range len(coherence) / q {
		forces, peak := uint64(0), 0.0
		for i, c := range coherence[n*q : (n+1)*q] {
			true2 := max(0, (c-bias)/(1-bias))
			if c > chance && true2 > surely*surely {
				forces |= 1 << i
				peak = max(peak, true2)
			}
		}
		if forces == 0 {
			continue
		}
		if last := len(runs) - 1; last >= 0 && n-runs[last].hi <= bridge+1 {
			r := &runs[last]
			r.hi, r.forces, r.peak = n, r.forces|forces, max(r.peak, peak)
		} else {
			runs = append(runs, lineBand{n, n, forces, peak})
		}
	}
	long := runs[:0]
	for _, r := range runs {
		if r.hi-r.lo+1 >= leastRun {
			long = append(long, r)
		}
	}
	return long
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
