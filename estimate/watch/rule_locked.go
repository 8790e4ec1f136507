package watch

import (
	"math"

	"shakerwatch/spectra/kernel"
)

const (
	// recentMemory is over how many blocks the recent dependence of the forces is averaged, recentFrom after how many it
	// is looked at, and recentEvery how often.
	recentMemory, recentFrom, recentEvery = 6, 8, 3

	// lockedRun is over how many lines the dependence is averaged besides: few blocks say little about one line, and what
	// a signal given to two drives does is wide.
	lockedRun = 16

	// While they come to be, bands grow with each look: they are said when they do so no more, with the mostLooks-th look
	// at the latest, and again when they became wider by muchWider.
	mostLooks, muchWider = 3, 1.5

	// awayRecent is after how many looks without it that ends: the last blocks are others by then.
	awayRecent = 3

	// leastRise is the share that must have gone, in the mean over these lines, of what the other forces left unexplained
	// of one in the average, and riseSigma how many standard deviations that is at least. What the structure does was
	// there before. Five of them are one false alarm in some 10,000 looks at a thousand lines if
	// normal, and two looks in a row are asked for; 9,000 healthy blocks of rigs drawn at random had none.
	leastRise, riseSigma = 0.3, 5

	// leastLeft bounds the share that is left: below is noise.
	leastLeft = 1e-3

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
	coherence []float64 // (line, force)
	rises     []float64 // by line, scratch: sums of the rise up to it
	scatter   []float64 // by line, scratch: sums of its variance up to it
	nows      []float64 // by line, scratch: sums of the coherence up to it
	risen     []uint64  // by line, scratch: forces whose coherence rose

	before []float64  // (line, force) coherence of the average, less what chance gives; NaN where unknown
	ne     float64    // averages that it is from
	held   []bool     // by line: before is from before it began
	bands  []lineBand // found last
	lines  int        // in them
	began  int        // blocks when they were found first
	looks  int        // that found some
	absent int        // looks since
	said   int        // lines when they were said, 0 if they were not
}

func newLocked(l *layout) *locked {
	n := l.cells.lines()
	return &locked{
		layout: l, gxx: make([]complex128, n*l.q*l.q), coherence: make([]float64, n*l.q), before: make([]float64, n*l.q),
		rises: make([]float64, n+1), scatter: make([]float64, n+1), nows: make([]float64, n+1), risen: make([]uint64, n), held: make([]bool, n),
		factor: lower{l.q, make([]complex128, l.q*l.q)}, column: make([]complex128, l.q),
	}
}

func (k *locked) forget() {
	clear(k.gxx)
	clear(k.held)
	k.weight, k.squares, k.blocks, k.bands = 0, 0, 0, k.bands[:0]
	k.looks, k.said, k.absent = 0, 0, 0
}

// learn takes the coherence of each force with the others, (line, force), in ne averages as what is known, but where
// they began to depend on each other since: there the average is about to follow.
func (k *locked) learn(coherence []float64, ne float64) {
	q := k.layout.q
	k.ne = ne
	for n, held := range k.held {
		for i := n * q; i < (n+1)*q && !held; i++ {
			k.before[i] = beyondChance(coherence[i], q, ne)
		}
	}
}

// beyondChance is a coherence with q - 1 other forces in ne averages less its mean by chance.
func beyondChance(coherence float64, q int, ne float64) float64 {
	bias := min(0.99, float64(q-1)/ne)
	return (coherence - bias) / (1 - bias)
}

// add takes a normal block, and tells whether it is time to look.
func (k *locked) add(lines []complex128) bool {
	const keep = 1 - 1./recentMemory
	l := k.layout
	if l.q < 2 {
		return false
	}
	for n := range l.cells.lines() {
		x := lines[(l.cells.first+n)*(l.q+l.p):][:l.q]
		addProducts(k.gxx[n*l.q*l.q:(n+1)*l.q*l.q], x, keep)
	}
	k.weight, k.squares = keep*k.weight+1, keep*keep*k.squares+1
	k.blocks++
	return k.blocks >= recentFrom && k.blocks%recentEvery == 0
}

// find appends what it finds. perBlock is how many averages a block is worth.
func (k *locked) find(dst []finding, perBlock float64) []finding {
	ne := perBlock * k.weight * k.weight / k.squares
	if q := float64(k.layout.q); ne < q+1 || k.ne < q+1 || len(k.risen) < lockedRun {
		return dst
	}
	k.recent(ne)
	clear(k.risen)
	for i := range k.layout.q {
		k.rise(i, ne)
	}
	k.runs()
	if len(k.bands) == 0 {
		k.absent++
		if k.absent >= awayRecent {
			k.looks, k.said = 0, 0
			clear(k.held)
		}
		return dst
	}
	k.absent = 0
	for _, b := range k.bands {
		for n := b.lo; n <= b.hi; n++ {
			k.held[n] = true
		}
	}
	ripe, anew := k.grown()
	if !ripe {
		return dst
	}
	f := finding{kind: ForcesCorrelated + ofLate, anew: anew}
	k.layout.describe(&f, k.bands)
	return append(dst, f)
}

// since is how many blocks before the newest one that begins which was found last.
func (k *locked) since() int64 { return int64(k.blocks - k.began + recentFrom - 1) }

// grown tells whether the bands are to be said, and whether they differ from what was said so much that it is to be
// anew.
func (k *locked) grown() (ripe, anew bool) {
	lines := 0
	for _, b := range k.bands {
		lines += b.hi - b.lo + 1
	}
	if k.looks == 0 {
		k.began = k.blocks
	}
	last := k.lines
	k.lines = lines
	k.looks++
	switch {
	case k.said == 0 && (k.looks < 2 || k.looks < mostLooks && float64(lines) > renamed*float64(last)):
		return false, false
	case k.said > 0 && float64(lines) <= muchWider*float64(k.said):
		return true, false
	}
	anew = k.said > 0
	k.said = lines
	return true, anew
}

// recent fills the coherence of each force with the others in the last blocks, which are worth ne averages, less what
// chance gives.
func (k *locked) recent(ne float64) {
	q := k.layout.q
	for n := range k.risen {
		g := k.gxx[n*q*q : (n+1)*q*q]
		// What is locked as a whole has no inverse; it depends as much as can be.
		regular := k.factor.factor(g)
		for i := range q {
			c := 1.0
			if regular {
				c = max(0, 1-1/(real(g[i*q+i])*k.factor.inverseOwn(k.column, i)))
			}
			k.coherence[n*q+i] = beyondChance(c, q, ne)
		}
	}
}

// rise marks the lines around which the coherence of force i rose, by
//
//	ln (1 - c_before) - ln (1 - c_now)
//
// whose variance is (2 c + (q - 1)/n_e)/n_e for each of the two: Fisher's z = atanh γ has 1/(2 n_e), and what q - 1 forces
// explain by chance (q - 1)/n_e².
func (k *locked) rise(i int, ne float64) {
	q, lines := k.layout.q, len(k.risen)
	chance := float64(q-1) * (1/(ne*ne) + 1/(k.ne*k.ne))
	least := -math.Log(1-leastRise) * lockedRun
	rises := k.rises[1:]
	for n := range lines {
		rises[n] = max(leastLeft, 1-k.before[n*q+i]) / max(leastLeft, 1-k.coherence[n*q+i])
	}
	kernel.Logarithms(rises)
	for n := range lines {
		now, before := k.coherence[n*q+i], k.before[n*q+i]
		rise, variance := 0.0, 0.0
		if before == before {
			rise = rises[n]
			variance = 2*max(0, before)*(1/ne+1/k.ne) + chance
		}
		k.rises[n+1], k.scatter[n+1], k.nows[n+1] = k.rises[n]+rise, k.scatter[n]+variance, k.nows[n]+now
	}
	for n := range lines {
		lo := min(max(0, n-lockedRun/2), lines-lockedRun)
		hi := lo + lockedRun
		rise := k.rises[hi] - k.rises[lo]
		if rise > least && k.nows[hi]-k.nows[lo] > leastCoherence*lockedRun &&
			rise > riseSigma*math.Sqrt(k.layout.tied*(k.scatter[hi]-k.scatter[lo])) {
			k.risen[n] |= 1 << i
		}
	}
}

// runs gathers the marked lines in bands. Those shorter than half of what was averaged over barely came up to the limit.
func (k *locked) runs() {
	k.bands = k.bands[:0]
	for n := 0; n < len(k.risen); n++ {
		if k.risen[n] == 0 {
			continue
		}
		lo, hi := n, n
		for ; n < len(k.risen) && n-hi <= lockedRun; n++ {
			if k.risen[n] != 0 {
				hi = n
			}
		}
		n = hi
		if hi-lo+1 < lockedRun/2 {
			continue
		}
		k.bands = append(k.bands, k.layout.concerned(lineBand{lo: lo, hi: hi}, k.coherence, func(n, i int) bool { return k.risen[n]>>i&1 != 0 }))
	}
}
