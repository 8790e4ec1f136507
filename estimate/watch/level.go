package watch

import (
	"math"
	"slices"
)

// levels are those of a block's forces against what is expected of them.
type levels struct {
	layout *layout
	noise  []float64 // (line of the grid, channel) densities, nil without a noise measurement

	db      []float64 // by force: level against the expected one
	moved   []bool    // by force: that differs too much to be chance
	ofNoise []bool    // by force: within 10 dB of its noise
	ratio   float64   // highest power ratio of a force against the average
	ref     []float64 // by force: expected level, dB against the average
	limit   float64   // dB by which a level differs from the expected one that changed

	// adrift: the next block says what is expected, as the average holds blocks without a drive.
	adrift bool

	groups []float64 // scratch
	shifts []float64 // scratch: of all lines
}

const (
	// levelStep is the smallest change of level that is a change, and levelScatters the number of standard
	// deviations that it is at least: with few averages the scatter has long tails.
	levelStep     = 2
	levelScatters = 7

	// stillMoved is the share of that from which a level that had changed in the block before still has: one near the
	// limit is not to come and go.
	stillMoved = 0.6

	// levelGroup is how many lines give one value of a force's level; the level is the median over these,
	// so that hum and a single resonance have no say.
	levelGroup = 64

	// levelFollows is the weight with which the expected level follows a normal block: a drive that drifts
	// by a few dB over many blocks did not change.
	levelFollows = 1. / 16
)

func newLevels(l *layout) levels {
	n := l.cells.lines()
	return levels{
		layout:  l,
		db:      make([]float64, l.q),
		moved:   make([]bool, l.q),
		ofNoise: make([]bool, l.q),
		ref:     make([]float64, l.q),
		groups:  make([]float64, max(1, n/levelGroup)),
		shifts:  make([]float64, n),
	}
}

// take measures a block.
func (l *levels) take(m *model, lines []complex128) {
	l.ratio = 0
	for i := range l.db {
		relative := l.median(lines, i, m.gxx[i:], l.layout.q)
		if l.adrift {
			l.ref[i] = powerDB(relative)
		}
		l.db[i] = powerDB(relative) - l.ref[i]
		limit := l.limit
		if l.moved[i] {
			limit *= stillMoved
		}
		l.moved[i] = !(math.Abs(l.db[i]) <= limit)
		l.ratio = max(l.ratio, relative)
		l.ofNoise[i] = false
		if l.noise != nil {
			c := l.layout.q + l.layout.p
			over := l.median(lines, i, l.noise[min(l.layout.cells.first*c+i, len(l.noise)):], c)
			l.ofNoise[i] = over < 10
		}
	}
	l.adrift = false
}

// median is the median over groups of lines of a force's mean power relative to the densities at every so many
// places.
func (l *levels) median(lines []complex128, i int, densities []float64, every int) float64 {
	first, total, c := l.layout.cells.first, l.layout.cells.lines(), l.layout.q+l.layout.p
	groups, stride := len(l.groups), l.layout.cells.stride
	for g := range l.groups {
		var sum float64
		lo, hi := g*total/groups, (g+1)*total/groups
		lo = (lo + stride - 1) / stride * stride
		for n := lo; n < hi; n += stride {
			if d := densities[n*every]; d > 0 {
				sum += abs2(lines[(first+n)*c+i]) / d
			}
		}
		l.groups[g] = sum / float64((hi-lo+stride-1)/stride)
	}
	slices.Sort(l.groups)
	middle := (l.groups[groups/2] + l.groups[(groups-1)/2]) / 2
	return middle * l.layout.density
}

// learn prepares for a new average. The expected level stays what it was in N².
func (l *levels) learn(m *model, again bool) {
	variance := l.layout.tied / float64(max(1, l.layout.cells.lines()))
	scatter := 1.25 * 10 / math.Ln10 * math.Sqrt(variance) // 1.25: a median of normal values
	l.limit = max(levelStep, levelScatters*scatter)
	for i := range l.ref {
		if !again {
			l.ref[i] = powerDB(m.ne / (m.ne - 1)) // the mean of 1/Gxx from n_e averages
			continue
		}
		shifts := l.shifts[:0]
		for n := range m.regular {
			before, now := m.previous[n*l.layout.q+i], m.gxx[n*l.layout.q+i]
			if before > 0 && now > 0 {
				shifts = append(shifts, before/now)
			}
		}
		if len(shifts) > 0 {
			slices.Sort(shifts)
			l.ref[i] += powerDB(shifts[len(shifts)/2])
		}
	}
}

// follow lets the expected levels follow a normal block.
func (l *levels) follow() {
	for i, db := range l.db {
		l.ref[i] += levelFollows * db
	}
}

// accept takes the levels of the block that changed as those to expect, also of forces that were taken along a little.
func (l *levels) accept() {
	for i, db := range l.db {
		if !math.IsNaN(db) && !math.IsInf(db, 0) {
			l.ref[i] += db
		}
	}
}

// changed tells whether force i is at another level than expected.
func (l *levels) changed(i int) bool { return l.moved[i] }

func powerDB(ratio float64) float64 { return 10 * math.Log10(ratio) }
