package watch

const (
	// recentMemory is over how many blocks the recent dependence of the forces is averaged, recentFrom after how many it
	// is looked at, and recentEvery how often.
	recentMemory, recentFrom, recentEvery = 8, 8, 4

	// lockedRun is how many lines in a row have to depend on each other: what a resonance does is in the average from
	// the start, and narrower.
	lockedRun = 16

	// ofLate marks the twin of forces-correlated that is found in the last blocks.
	ofLate Kind = " of late"
)

// A locked finds forces that begin to depend on each other while a run goes on, long before the average shows it: drives
// that were given the same signal.
type locked struct {
	layout    *layout
	gxx       []complex128 // (line, i, j), j <= i, exponentially weighted
	weight    float64
	squares   float64
	blocks    int
	factor    lower
	column    []complex128
	coherence []float64
	runs      []lineBand // scratch
	bands     []lineBand // found last
}

func newLocked(l *layout) *locked {
	n := l.cells.lines()
	return &locked{
		layout: l, gxx: make([]complex128, n*l.q*l.q), coherence: make([]float64, n*l.q),
		factor: lower{l.q, make([]complex128, l.q*l.q)}, column: make([]complex128, l.q),
	}
}

func (k *locked) forget() {
	clear(k.gxx)
	k.weight, k.squares, k.blocks, k.bands = 0, 0, 0, k.bands[:0]
}

// add takes a normal block, and tells whether it is time to look.
func (k *locked) add(lines []complex128) bool {
	const keep = 1 - 1./recentMemory
	l := k.layout
	for n := range l.cells.lines() {
		x := lines[(l.cells.first+n)*(l.q+l.p):][:l.q]
		addProducts(k.gxx[n*l.q*l.q:(n+1)*l.q*l.q], x, keep)
	}
	k.weight, k.squares = keep*k.weight+1, keep*keep*k.squares+1
	k.blocks++
	return l.q > 1 && k.blocks >= recentFrom && k.blocks%recentEvery == 0
}

// find appends what it finds, less what is known already. perBlock is how many averages a block is worth.
func (k *locked) find(dst []finding, perBlock float64, known []bandGroup) []finding {
	q := k.layout.q
	for n := range k.coherence {
		k.coherence[n] = unknown
	}
	for n := range k.layout.cells.lines() {
		g := k.gxx[n*q*q : (n+1)*q*q]
		// What is locked as a whole has no inverse; it depends as much as can be.
		regular := k.factor.factor(g)
		for i := range q {
			at := n*q + i
			k.coherence[at] = 1
			if regular {
				k.coherence[at] = max(0, 1-1/(real(g[i*q+i])*k.factor.inverseOwn(k.column, i)))
			}
		}
	}
	k.runs = k.layout.dependent(k.runs, k.coherence, perBlock*k.weight*k.weight/k.squares)
	k.bands = k.bands[:0]
	for _, r := range k.runs {
		if r.hi-r.lo+1 >= lockedRun && !inGroups(r, known) {
			k.bands = append(k.bands, r)
		}
	}
	if len(k.bands) == 0 {
		return dst
	}
	f := finding{kind: ForcesCorrelated + ofLate}
	k.layout.describe(&f, k.bands)
	return append(dst, f)
}

func inGroups(r lineBand, groups []bandGroup) bool {
	for _, g := range groups {
		for _, b := range g.bands {
			if b.overlaps(r) {
				return true
			}
		}
	}
	return false
}
