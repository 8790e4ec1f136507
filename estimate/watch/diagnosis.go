package watch

import "math"

// A diagnosis explains an abnormal block: who is abnormal names the kind.
type diagnosis struct {
	layout *layout
	block  *block
	scan   *scan

	level  bool  // a force is at another level than expected
	single bool  // the responses are normal in this block by itself
	since  int64 // first block that the readings take in
	fresh  bool  // what is abnormal is so in this block too
	steady bool  // and no less than in the block before

	at       int64   // the block
	perBlock float64 // averages that a block is worth
	follower *follower

	driven  []bool    // by force: a fit to its driving point can tell a passive force from it
	passive uint64    // forces that are driven in the average and only answer in this block, a bit each
	before  []float64 // (o, cell) sums of u of the block before, if another was abnormal
	another bool
	ratio   float64   // by which t was divided then
	without []float64 // (o, cell) scratch
	marks   []bool    // by cell, scratch
	bands   []bool    // by cell, scratch
	accused []int     // responses, scratch
}

const (
	// lostDB is the fall with which a force is lost, whatever else: less is a change of level, as the
	// structure still follows.
	lostDB = -20

	// lostDeadDB is by how much further a force must fall, or may rise, to be called by the other name once it has
	// one: near the limit either is right, but not both in turn.
	lostDeadDB = 4

	// leastShare is the share of the excess that leaving a force out must take away if that force is what does
	// not arrive, and deniedShare how much of it may be denied by responses that follow the force well.
	leastShare, deniedShare = 0.5, 0.5

	// broadShare is the share of the band that a fault of one sensor covers at least: on simulated rigs from 0.7
	// on, while a mode that changed and was seen at one sensor only covered 0.5 at most.
	broadShare = 0.5

	// fewShare is the share of the responses, one at least, that may have faults of their own at once.
	fewShare = 0.25
)

func newDiagnosis(l *layout, b *block, s *scan) *diagnosis {
	return &diagnosis{
		layout: l, block: b, scan: s, follower: newFollower(l),
		driven:  make([]bool, l.q),
		before:  make([]float64, l.p*l.cells.n),
		without: make([]float64, l.p*l.cells.n),
		marks:   make([]bool, l.cells.n),
		bands:   make([]bool, l.cells.n),
	}
}

// read looks at the block that was taken and tells whether it is normal.
func (d *diagnosis) read(block int64) (normal bool) {
	d.at = block
	d.block.sums(d.scan.now, 0)
	normal = d.scan.scan()
	d.single, d.since = d.scan.singly(), d.scan.since(block)
	d.level = false
	for i := range d.layout.q {
		d.level = d.level || d.block.levels.changed(i)
	}
	d.passives()
	d.fresh, d.steady = true, true
	normal = normal && !d.level && d.passive == 0
	if normal {
		d.another = false
	}
	return normal
}

// find appends what explains an abnormal block, beside what w knows already.
func (d *diagnosis) find(dst []finding, w *Watch) []finding {
	dead := w.twins.dead
	d.steady = d.lasting()
	copy(d.before, d.scan.now)
	d.another, d.ratio = true, d.block.ratio
	lost := d.lost(w)
	if lost|d.passive == 1<<d.layout.q-1 {
		return append(dst, d.noDrive())
	}
	for i := range d.layout.q {
		switch {
		case lost>>i&1 != 0:
			dst = append(dst, finding{kind: ForceLost, key: i, channels: []int{i}})
		case d.passive>>i&1 != 0:
			dst = append(dst, lostFollower(i))
		}
	}
	lost |= d.passive
	d.accuse(dead)
	if len(d.accused) == 0 {
		return d.levels(dst, lost)
	}
	d.fresh = d.anyFresh()
	dst = d.reaching(dst, lost, dead)
	return d.responses(dst, w)
}

// lost is the set of forces that collapsed, a bit each.
func (d *diagnosis) lost(w *Watch) (set uint64) {
	for i, db := range d.block.levels.db {
		limit := float64(lostDB)
		switch {
		case w.suspects(ForceLost, i):
			limit += lostDeadDB
		case w.suspects(ForceNotReaching, i):
			limit -= lostDeadDB
		}
		if db <= limit || math.IsNaN(db) || d.block.levels.changed(i) && d.block.levels.ofNoise[i] {
			set |= 1 << i
		}
	}
	return set
}

func (d *diagnosis) noDrive() finding {
	f := finding{kind: NoDrive}
	for i := range d.layout.q {
		f.channels = append(f.channels, i)
	}
	return f
}

// accuse lists the abnormal responses.
func (d *diagnosis) accuse(dead []bool) {
	d.accused = d.accused[:0]
	for o, r := range d.scan.result {
		if r.blocks > 0 && !dead[d.layout.q+o] {
			d.accused = append(d.accused, o)
		}
	}
}

func (d *diagnosis) anyFresh() bool {
	for _, o := range d.accused {
		if d.scan.result[o].fresh {
			return true
		}
	}
	return false
}

// dyingDB is by how much what rings after a knock falls in half a block, at least: a mode with a half-power bandwidth
// of one line falls by 8.7 π/2 = 13.6 dB. clearlyAbove is how many times above its mean the sum of u in a cell is that
// is looked at.
const dyingDB, clearlyAbove = 10, 3

// lasting tells whether what is abnormal is as much so as in the block before, as a fault is and the ringing
// after a knock is not: by the mean change of |r|² in the cells that were clearly abnormal then, in dB.
func (d *diagnosis) lasting() bool {
	if !d.another {
		return true
	}
	n, v := d.layout.cells.n, d.block.model.v
	lines := d.layout.cells.perCell()
	above := func(u float64) float64 { return math.Expm1(max(0.1, u/lines-1) / v) }
	var change, cells float64
	for o, r := range d.scan.result {
		if r.blocks == 0 {
			continue
		}
		for c := o * n; c < (o+1)*n; c++ {
			if d.before[c] > clearlyAbove*lines {
				change += powerDB(above(d.scan.now[c]) / above(d.before[c]))
				cells++
			}
		}
	}
	change += cells * powerDB(d.block.ratio/d.ratio)
	return change >= -cells*dyingDB*min(1, 2/float64(d.layout.overlap))
}

// reaching finds the forces that the structure does not follow, and leaves in accused what remains
// without them.
func (d *diagnosis) reaching(dst []finding, lost uint64, dead []bool) []finding {
	var mask uint64
	if lost != 0 && d.idle(lost) {
		mask = lost
		d.leaveOut(mask, dead)
	}
	for range d.layout.q {
		if len(d.accused) == 0 {
			break
		}
		i := d.unreached(mask | lost)
		if i < 0 {
			break
		}
		mask |= 1 << i
		dst = append(dst, finding{kind: ForceNotReaching, key: i, channels: []int{i}})
		d.leaveOut(mask, dead)
	}
	return dst
}

// leaveOut reads the block anew with some forces left out of the prediction.
func (d *diagnosis) leaveOut(forces uint64, dead []bool) {
	d.block.sums(d.scan.now, forces)
	d.scan.scan()
	d.accuse(dead)
}

// idle tells whether what is still measured of lost forces does not arrive: whether leaving them out explains most of the
// excess of more responses than it denies. A cell that hangs on the shaker's side of a stinger that came off measures its
// own inertia. A response with a fault of its own has but one say.
func (d *diagnosis) idle(lost uint64) bool {
	explained := 0
	d.block.sums(d.without, lost)
	for o, r := range d.scan.result {
		switch left := max(0, d.excess(o)); {
		case r.blocks > 0 && left <= (1-leastShare)*r.excess:
			explained++
		case left > max(0, r.excess):
			explained--
		}
	}
	return explained > 0
}

// unreached is the force, other than those left out already, which explains most of the excess by not arriving, or
// -1. Responses that follow the force speak against that.
func (d *diagnosis) unreached(without uint64) int {
	var total float64
	for _, o := range d.accused {
		total += max(0, d.scan.result[o].excess)
	}
	best, found := leastShare*total, -1
	for i := range d.layout.q {
		if without>>i&1 != 0 {
			continue
		}
		d.block.sums(d.without, without|1<<i)
		gained, denied := 0.0, 0.0
		for o, r := range d.scan.result {
			left := max(0, d.excess(o))
			if r.blocks > 0 {
				gained += max(0, r.excess) - left
			} else {
				denied += left
			}
		}
		if gained >= best && denied <= deniedShare*gained && gained > 0 {
			best, found = gained, i
		}
	}
	return found
}

// excess of response o with the forces left out last.
func (d *diagnosis) excess(o int) float64 {
	n := d.layout.cells.n
	sum := -float64(d.layout.cells.judged(n, true))
	for _, u := range d.without[o*n : (o+1)*n] {
		sum += u
	}
	return sum
}

// responses explains the abnormal responses that no force explains: a few that are abnormal over a broad
// band are at fault themselves, else it is the structure.
func (d *diagnosis) responses(dst []finding, w *Watch) []finding {
	q, p := d.layout.q, d.layout.p
	few, broad := 0, true
	f := finding{kind: StructureChanged}
	clear(d.bands)
	for _, o := range d.accused {
		if w.stands(ResponseSuspect, o) {
			dst = append(dst, finding{kind: ResponseSuspect, key: o, channels: []int{q + o}})
			continue
		}
		few++
		broad = d.scan.mark(d.marks, o) >= broadShare && broad
		f.channels = append(f.channels, q+o)
		for c, set := range d.marks {
			d.bands[c] = d.bands[c] || set
		}
	}
	switch {
	case few == 0:
	case broad && few <= max(1, int(fewShare*float64(p))) && (few < p || p == 1):
		for _, ch := range f.channels {
			dst = append(dst, finding{kind: ResponseSuspect, key: ch - q, channels: []int{ch}})
		}
	default:
		f.bandsHz = d.layout.bandsOf(d.bands)
		dst = append(dst, f)
	}
	return dst
}

// bandsOf are the runs of marked cells in Hz; none when they are most of the band.
func (l *layout) bandsOf(marked []bool) [][2]float64 {
	var bands [][2]float64
	count := 0
	for c, set := range marked {
		if !set {
			continue
		}
		count++
		lo, hi := l.cells.bounds(c)
		from, to := float64(lo)*l.spacingHz, float64(hi-1)*l.spacingHz
		if c > 0 && marked[c-1] {
			bands[len(bands)-1][1] = to
		} else {
			bands = append(bands, [2]float64{from, to})
		}
	}
	if count > len(marked)/2 {
		return nil
	}
	return bands
}
