// Package watch holds the rules that judge each block before it is averaged, and the events that they
// raise.
//
// A rule is a function of the average, the block and its time, so a replay raises the same events as the
// live run. It may not know goroutines, HTTP or files.
//
// The caller goes through the blocks in order. For each: Judge it, enter the judgement in a Probation,
// average the blocks that this lets go, and whenever Wants says so of the number of averaged
// blocks, let the watch Learn the average before the next block is judged.
package watch

import (
	"math"
	"slices"
	"strings"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// Options are what a Watch can be given besides the rig.
type Options struct {
	// Noise are the one-sided densities of the noise, (line, channel), forces first, N²/Hz and
	// (m/s²)²/Hz; NaN or 0 where unknown. nil without a noise measurement. It must not change.
	Noise []float64

	// Each calls do(worker, item) for all items from 0 to items-1, on Workers workers at once, and returns
	// when all is done, like spectra.Workers.Each. nil is one after the other.
	Each    func(items int, do func(worker, item int))
	Workers int // at least 1 where Each is given
}

// A Watch judges blocks in the order of their index. It serves one goroutine at a time.
type Watch struct {
	layout *layout
	model  *model
	block  *block
	scan   *scan

	armed    bool
	learntAt int  // averages when it learnt last
	armAt    int  // averages at which it may arm
	began    bool // a block was judged
	first    int64
	firstS   float64

	subjects []subject
	looked   []finding // of the newest look at the average
	fresh    bool      // looked was not taken up yet
	found    []finding // scratch: of the block under work
	streak   streak
	diagnose *diagnosis

	twins  *twins
	looker *looker
}

// New makes a Watch over a rig.
func New(r *rig.Rig, o Options) *Watch {
	if o.Each == nil {
		o.Workers = 1
		o.Each = func(items int, do func(worker, item int)) {
			for item := range items {
				do(0, item)
			}
		}
	}
	l := newLayout(r)
	if o.Noise != nil && len(o.Noise) != r.Grid.Lines*(l.q+l.p) {
		panic("watch: one noise density a line and channel, please")
	}
	m := newModel(l)
	w := &Watch{
		layout: l,
		model:  m,
		block:  newBlock(l, m, o.Workers, o.Each),
		scan:   newScan(l, o.Workers, o.Each),
		armAt:  l.arm,
		twins:  newTwins(l),
		looker: newLooker(r, l, o.Noise),
	}
	w.block.levels.noise = o.Noise
	w.diagnose = newDiagnosis(l, w.block, w.scan)
	return w
}

// Wants tells whether the watch is to Learn the average when it holds m blocks: first when it can arm, then
// whenever the average grew by about an eighth. It depends on counts only.
func (w *Watch) Wants(m int) bool {
	if m < w.armAt {
		return false
	}
	known := w.learntAt
	if memory := w.layout.memory; memory > 0 {
		known = min(known, memory)
	}
	return m >= w.learntAt+max(1, known/8)
}

// Learn takes the average, of which it keeps no hold. While a fault that holds averaging stands, as it may with
// on_fault = "carry-on", nothing is learnt: the fault would become normal.
func (w *Watch) Learn(s *spectra.Snapshot) {
	again, afresh := w.armed, w.armAt > w.layout.arm
	w.learntAt = s.Averages
	if w.holds() {
		return
	}
	w.model.learn(s)
	w.armed = w.model.known
	if !w.armed {
		return
	}
	w.block.levels.learn(w.model, again)
	w.block.levels.adrift = afresh && !again
	w.scan.learn(w.model.v)
	w.looked = w.looker.look(w.looked[:0], w.model, s)
	copy(w.diagnose.driven, w.looker.driven)
	w.diagnose.perBlock = w.model.ne / float64(s.Averages)
	w.fresh = true
}

// StartOver forgets the average and all that was found; what stands ends without a word, as the
// operator's event says it all.
func (w *Watch) StartOver() {
	w.armed, w.began, w.fresh = false, false, false
	w.learntAt, w.armAt = 0, w.layout.arm
	w.subjects = w.subjects[:0]
	w.looker.forget()
	w.streak = streak{}
	w.scan.forget()
	w.diagnose.another = false
}

// Judge takes the evidence on the next block, appends the events that it raises or clears, and says
// what is to become of the block.
func (w *Watch) Judge(events []Event, e Evidence) ([]Event, Judgement) {
	if !w.began {
		w.began, w.first, w.firstS = true, e.Block, e.StartS
	}
	j := Judgement{Block: e.Block, From: e.Block + 1}
	w.found = w.looks(w.found[:0], e)
	for i := range w.found {
		j.Kind = w.found[i].kind
	}
	events = w.update(events, everyBlock, w.found, e, e.Block, true)
	if e.Lines != nil {
		w.found = w.twins.find(w.found[:0], e.Lines)
		// Only a block that holds it as a whole shows it.
		events = w.update(events, transformed, w.found, e, max(w.first, e.Block-int64(w.layout.overlap)), true)
	}
	if w.fresh {
		w.fresh = false
		events = w.update(events, average, w.looked, e, w.first, true)
	}
	j.Armed = w.armed
	if w.armed && e.Lines != nil {
		j.Compared = true
		events, j = w.compare(events, e, j)
	}
	j.Holds = w.holds()
	if j.Kind != "" {
		j.From = min(j.From, j.Block)
	}
	return events, j
}

// looks is what everyBlock rules find: channels at their limit and lost frames.
func (w *Watch) looks(dst []finding, e Evidence) []finding {
	if e.Lost.Frames > 0 {
		dst = append(dst, finding{kind: Gap})
	}
	var reached []int
	for ch, at := range e.AtLimit {
		if at {
			reached = append(reached, ch)
		}
	}
	if reached != nil {
		dst = append(dst, finding{kind: Overrange, channels: reached})
	}
	return dst
}

// compare judges a transformed block beside the average.
func (w *Watch) compare(events []Event, e Evidence, j Judgement) ([]Event, Judgement) {
	w.block.take(e.Lines)
	d := w.diagnose
	normal := d.read(e.Block)
	if w.risen() {
		return w.rearm(events, e), j
	}
	w.found = w.found[:0]
	if !normal {
		w.found = d.find(w.found, w)
		j.Kind, j.From = Disturbance, d.since-w.layout.reach()
		switch {
		case len(w.found) > 0:
			j.Kind = w.found[0].kind
		case slices.Contains(w.twins.dead, true):
			j.Kind = DeadChannel
		}
	}
	if d.single && !d.level {
		w.scan.keep(e.Block)
	}
	spoilt := w.streak.enter(e, d.since, w.timeOf(d.since, e), !normal, w.explained(), w.layout)
	for n := range w.found {
		w.streak.seen = union(w.streak.seen, w.found[n].channels)
	}
	if !normal {
		j.From = min(j.From, w.streak.from)
	}
	before := len(events)
	events = w.update(events, armed, w.found, e, d.since, d.fresh && d.steady)
	w.streak.named = w.streak.named || len(events) > before || w.busy()
	w.settle(events[before:])
	events = w.disturbed(events, e)
	switch {
	case normal && spoilt:
		j.Kind = Disturbance
	case normal:
		w.block.levels.follow()
		events = w.lately(events, e)
	}
	return events, j
}

// lately looks at how the forces depend on each other in the last normal blocks.
func (w *Watch) lately(events []Event, e Evidence) []Event {
	k := w.looker
	if !k.locked.add(e.Lines) { // without a taper, as the average is
		return events
	}
	w.found = k.locked.find(w.found[:0], w.diagnose.perBlock)
	return w.update(events, recent, w.found, e, max(w.first, e.Block-k.locked.since()), true)
}

// explained tells whether all that was found stands already.
func (w *Watch) explained() bool {
	for n := range w.found {
		if !w.stands(w.found[n].kind, w.found[n].key) {
			return false
		}
	}
	return len(w.found) > 0
}

// settle takes a new level as the one to expect.
func (w *Watch) settle(raised []Event) {
	for _, event := range raised {
		if event.Kind == LevelChanged {
			w.block.levels.accept()
		}
	}
}

// riseDB is by how much a level must rise over the average to show that the average was of no drive.
const riseDB = 20

// risen tells whether a drive began that the average has not seen.
func (w *Watch) risen() bool {
	if w.beforeDrive() == nil {
		return false
	}
	for _, db := range w.block.levels.db {
		if db >= riseDB {
			return true
		}
	}
	return false
}

// beforeDrive is the fault that stands when the average is of no drive; with one force alone it cannot be told
// from one that does not arrive.
func (w *Watch) beforeDrive() *subject {
	for i := range w.subjects {
		s := &w.subjects[i]
		if s.state == stands && (s.kind.name == NoDrive+atStart || s.kind.name == ForceNotReaching+atStart && w.layout.q == 1) {
			return s
		}
	}
	return nil
}

// rearm clears the fault and learns afresh. What was averaged without a drive is too small to matter.
func (w *Watch) rearm(events []Event, e Evidence) []Event {
	events = w.clear(events, w.beforeDrive(), e)
	w.armed = false
	w.armAt = w.learntAt + w.layout.arm
	w.scan.forget()
	w.streak = streak{}
	return events
}

// Standing appends a sentence for each event that stands, faults first, and for what happened that still
// matters.
func (w *Watch) Standing(dst []string) []string {
	for _, faults := range []bool{true, false} {
		for i := range kinds {
			for n := range w.subjects {
				s := &w.subjects[n]
				if s.kind != &kinds[i] || s.state != stands || s.isFault() != faults {
					continue
				}
				if text := s.kind.standing(w.said(s, Evidence{})); text != "" {
					dst = append(dst, w.worded(s.kind, text))
				}
			}
		}
	}
	return dst
}

// worded is a sentence as it is true for this run: with on_fault = "carry-on" averaging waits for no fault.
func (w *Watch) worded(k *kind, text string) string {
	if k.holds && !w.layout.hold {
		return strings.ReplaceAll(text, "averaging waits", "blocks are averaged all the same")
	}
	return text
}

// Faults tells whether a fault stands, which makes the verdict stop-and-look.
func (w *Watch) Faults() bool {
	for i := range w.subjects {
		if s := &w.subjects[i]; s.state == stands && s.isFault() {
			return true
		}
	}
	return false
}

// holds tells whether a fault stands with which nothing is averaged.
func (w *Watch) holds() bool {
	for i := range w.subjects {
		if s := &w.subjects[i]; s.state == stands && s.kind.holds {
			return true
		}
	}
	return false
}

// busy tells whether a fault stands that shows in single blocks: whoever mends it makes blocks abnormal.
func (w *Watch) busy() bool {
	for i := range w.subjects {
		if s := &w.subjects[i]; s.state == stands && s.kind.fault && s.kind.source != average {
			return true
		}
	}
	return false
}

// event is the kind as events carry it.
func (k *kind) event() Kind {
	name, _, _ := strings.Cut(string(k.name), " ")
	return Kind(name)
}

var unknown = math.NaN()
