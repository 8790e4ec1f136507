package web

import (
	"slices"

	"shakerwatch/estimate/setup"
)

// SetupState is how far a setup check is.
type SetupState struct {
	Stage    setup.Stage // the present one, or the last one once Ended
	Waiting  bool        // for a person to say that the rig is as Stage wants it
	Part     float64     // 0 to 1 of the measurement of Stage, NaN when unknown
	Done     []setup.Stage
	Findings []setup.Finding // all so far
	Summary  string          // empty until the end
	Ended    bool
}

// setupDesk is what a hub has of a setup check.
type setupDesk struct {
	state    numbered
	findings numbered
	proceed  chan struct{} // has room for one
	armed    setup.Stage   // that a page can start
	isArmed  bool
}

// PublishSetup publishes how far a setup check is; pages show the check from the first call on. It
// keeps no hold of s's slices, and waits for no browser. It panics when s has a stage or a severity
// that does not exist.
func (h *Hub) PublishSetup(s SetupState) {
	s.check()
	state, findings := setupMessage(s), findingsMessage(s.Findings)
	h.mu.Lock()
	defer h.mu.Unlock()
	h.setup.arm(s)
	h.setup.state.set(state)
	if string(findings) != string(h.setup.findings.text) {
		h.setup.findings.set(findings)
	}
	h.wake()
}

// check panics when s cannot be shown.
func (s *SetupState) check() {
	stages := append([]setup.Stage{s.Stage}, s.Done...)
	for _, f := range s.Findings {
		stages = append(stages, f.Stage)
		if f.Severity < setup.Info || f.Severity > setup.Stop {
			panic("web: a finding has a severity that does not exist")
		}
	}
	for _, stage := range stages {
		if !slices.Contains(setup.Stages(), stage) {
			panic("web: a setup check has a stage that does not exist")
		}
	}
}

// arm lets a page start what s waits for. A start that nobody fetched is void once the check waits
// for something else, as when a person pressed Enter and another the button: it would start the next
// stage, whose instruction nobody has followed yet.
func (d *setupDesk) arm(s SetupState) {
	waiting := s.Waiting && !s.Ended
	if !waiting || s.Stage != d.armed {
		select {
		case <-d.proceed:
		default:
		}
	}
	d.armed, d.isArmed = s.Stage, waiting
}

// Proceed gives one value each time a page says that the rig is as the stage waited for wants it.
func (h *Hub) Proceed() <-chan struct{} { return h.setup.proceed }

// askMeasure hands a page's word on that the rig is as that stage wants it. A word on another stage
// comes from a page that is late; one that comes again, as from a double click, would start the next
// stage. It tells whether the word was taken; if not, pages are told again how the check stands.
func (h *Hub) askMeasure(stage setup.Stage) bool {
	h.mu.Lock()
	defer h.mu.Unlock()
	if h.setup.isArmed && h.setup.armed == stage && !h.finishing && h.ended == nil {
		h.setup.isArmed = false
		select {
		case h.setup.proceed <- struct{}{}:
			return true
		default: // the one before was not fetched yet
		}
	}
	if h.setup.state.number > 0 {
		h.setup.state.set(h.setup.state.text)
		h.wake()
	}
	return false
}
