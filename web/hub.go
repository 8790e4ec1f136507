package web

import (
	"crypto/rand"
	"slices"
	"sync"
	"time"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
)

// A Hub takes what a run publishes and has it ready for browsers. It has no goroutine of its own: what
// is published is kept, only the newest of each kind but events, and whoever serves a browser
// fetches it when that browser is ready. So nothing that a browser does or leaves can make a
// publisher wait.
//
// All methods may be called from several goroutines.
type Hub struct {
	description []byte
	shape       shape
	first       view // of a page that has not chosen yet
	channels    int
	results     results
	finish      chan struct{} // closed when a page asked to finish
	now         func() time.Time

	mu        sync.Mutex // guards what follows; held for moments only
	levels    numbered
	run       numbered
	finishing bool
	ended     *string
	events    eventLog
	setup     setupDesk

	standing     standing
	markings     markings
	held         held
	acknowledged acknowledged
	commands     commandDesk

	wakes map[chan struct{}]bool // one for each browser, each with room for one
}

// numbered is the newest message of a kind and how many there were.
type numbered struct {
	text   []byte // read-only
	number int64
}

func (n *numbered) set(text []byte) { n.text, n.number = text, n.number+1 }

// A Run is what a hub must know before anything is published.
type Run struct {
	Rig   *rig.Rig // only read
	Kind  string   // of source: "demo", "soundcard", "pipe", or "recording" for a replay
	Saves bool     // results will be saved when the run ends
	Level float64  // probability of the confidence regions; 0 is estimate.DefaultLevel

	// Fixed says that the blocks to be averaged are given, so that pages can't pause or start over.
	Fixed bool

	// Faults are what pages can break, of a simulated rig.
	Faults []Fault
}

// NewHub makes the hub of a run.
func NewHub(run Run) *Hub {
	r := run.Rig
	if run.Level == 0 {
		run.Level = estimate.DefaultLevel
	}
	list := estimate.ReciprocityPairs(estimate.DrivingPoints(r))
	target := estimate.NewTarget(r)
	shown := plots(r, target, run.Level)
	q, p := len(r.Forces), len(r.Responses)
	h := &Hub{
		description: mustMarshal(describe(run, rand.Text(), list)),
		shape: shape{
			lines: r.Grid.Lines, responses: p, forces: q, pairs: list, spacingHz: r.Grid.SpacingHz,
			parts: partsOf(shown), response: max(r.DrivingPoints()[0], 0),
		},
		channels: q + p,
		finish:   make(chan struct{}),
		now:      time.Now,
		wakes:    make(map[chan struct{}]bool),
		setup:    setupDesk{proceed: make(chan struct{}, 1)},
		markings: newMarkings(p, estimate.NewTarget(r)),
		held:     newHeld(q + p),
		commands: newCommandDesk(run),
	}
	h.first = h.shape.whole()
	h.results.ready(newNames(r, list), h.shape, shown, target)
	if r.Analysis.Excitation == "periodic" {
		h.results.scatter = newScatter(h.shape)
		h.results.curver.scatter = h.results.scatter
	}
	return h
}

// Refresh publishes how the run stands, with the estimates as of then, and returns the former
// estimates, which the hub no longer reads; nil the first time. The hub keeps e, and reads it until
// the next Refresh has returned; with e nil it keeps the estimates that it has.
//
// It is meant to be called at most ten times a second. It waits for no browser, but for the end of
// a message that is just being made from the former estimates: some milliseconds. It panics when
// e is of another rig.
func (h *Hub) Refresh(st Status, e *estimate.Estimates) (spare *estimate.Estimates) {
	if e != nil && !h.shape.fits(e) {
		panic("web: the estimates are of another rig")
	}
	spare = h.results.set(st, e)
	h.mu.Lock()
	h.commands.paused = st.Paused
	if e != nil {
		h.markings.judge(e)
		h.markings.write(h.standing)
	}
	h.wake()
	h.mu.Unlock()
	return spare
}

// fits tells whether e has the shape.
func (s shape) fits(e *estimate.Estimates) bool {
	return e.Lines == s.lines && e.Forces == s.forces && e.Responses == s.responses &&
		slices.Equal(e.ReciprocityPairs, s.pairs)
}

// PublishLevels publishes the channel levels. It keeps no hold of l's slices, and panics when they
// have not one element a channel.
func (h *Hub) PublishLevels(l Levels) {
	if len(l.RMS) != h.channels || len(l.Peak) != h.channels {
		panic("web: one level a channel, please")
	}
	text := levelsMessage(l)
	h.mu.Lock()
	h.levels.set(text)
	h.held.take(l.Peak)
	h.wake()
	h.mu.Unlock()
}

// PublishEvent publishes an event. The newest are kept for browsers that come later or were slow.
func (h *Hub) PublishEvent(e watch.Event) {
	h.mu.Lock()
	h.events.add(e, h.now())
	if h.standing.take(e) {
		h.markings.write(h.standing)
	}
	h.wake()
	h.mu.Unlock()
}

// Ended publishes that the run has ended, and how: one sentence. Pages stay and can still choose what
// they show.
func (h *Hub) Ended(text string) {
	h.mu.Lock()
	h.ended = &text
	h.run.set(runMessage(h.finishing, h.ended))
	h.wake()
	h.mu.Unlock()
}

// Finish is closed when a page asked, and confirmed, to finish the run and save its results.
func (h *Hub) Finish() <-chan struct{} { return h.finish }

// askFinish closes the channel of Finish, once.
func (h *Hub) askFinish() {
	h.mu.Lock()
	defer h.mu.Unlock()
	if h.finishing {
		return
	}
	h.finishing = true
	close(h.finish)
	h.run.set(runMessage(h.finishing, h.ended))
	h.wake()
}

// wake tells every browser that there is news. h.mu is held.
func (h *Hub) wake() {
	for ch := range h.wakes {
		select {
		case ch <- struct{}{}:
		default: // it has not yet seen to the news before
		}
	}
}

// join has wake told of all news from now on, until leave. It returns the number of the newest command,
// which is no news to a page that has only just come.
func (h *Hub) join(wake chan struct{}) (asked int64) {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.wakes[wake] = true
	return h.commands.asked.number
}

func (h *Hub) leave(wake chan struct{}) {
	h.mu.Lock()
	delete(h.wakes, wake)
	h.mu.Unlock()
}
