package web

import (
	"slices"
	"time"
)

// A CommandKind is what a page has the run do.
type CommandKind string

// The kinds.
const (
	Pause     CommandKind = "pause"      // average no more blocks until Resume
	Resume    CommandKind = "resume"     // go on averaging
	StartOver CommandKind = "start-over" // forget what was averaged and begin anew
	Note      CommandKind = "note"       // enter Text in the list of events
	Break     CommandKind = "break"      // of the simulated rig: Fault at Target
	Mend      CommandKind = "mend"       // take that back
)

// A Command is what a page has the run do. Whoever takes it publishes what came of it: Status.Paused,
// and an event that says so.
type Command struct {
	Kind   CommandKind
	Text   string // of a Note, 1 to 300 characters, all of which can be seen
	Fault  string // of Break and Mend: Code of one of Run.Faults
	Target string // of Break and Mend: one of its Targets, empty where it has none
}

// A Fault is something that a page can break on the simulated rig, to see what the watch does.
type Fault struct {
	Code    string   `json:"code"`
	Name    string   `json:"name"`    // as a person reads it, such as "stinger off"
	Targets []string `json:"targets"` // where; empty where nothing is to be chosen
	Once    bool     `json:"once"`    // it happens and is over: nothing to mend
	Expect  string   `json:"expect"`  // what the watch will say and where to look; empty for nothing special
}

// commandsWaiting is how many commands may wait to be taken: far more than people give in the time
// that a run needs for one.
const commandsWaiting = 16

// commandDesk is what a hub has of the commands of all pages.
type commandDesk struct {
	queue  chan Command
	faults []Fault
	fixed  bool // the blocks are given: the average is nobody's to change
	paused bool // as the run says

	asked    numbered    // the newest command that was taken
	broken   numbered    // what is broken
	standing [][2]string // code and target of what is broken
}

func newCommandDesk(run Run) commandDesk {
	return commandDesk{queue: make(chan Command, commandsWaiting), faults: run.Faults, fixed: run.Fixed}
}

// Commands gives what pages have the run do, in the order in which they asked. Commands that are not
// fetched are refused to the pages after a while, and hold nobody up.
func (h *Hub) Commands() <-chan Command { return h.commands.queue }

// askCommand hands a page's command on. It returns why it was refused, empty when it was taken.
func (h *Hub) askCommand(c Command) (refusal string) {
	h.mu.Lock()
	defer h.mu.Unlock()
	switch {
	case h.ended != nil:
		return "The run has ended."
	case h.finishing:
		return "The run is finishing."
	case h.setup.state.number > 0:
		return "This is a setup check: nothing is averaged."
	}
	if refusal := h.commands.take(c, h.now()); refusal != "" {
		return refusal
	}
	h.wake()
	return ""
}

// take queues a command, unless it makes no sense or too many wait.
func (d *commandDesk) take(c Command, at time.Time) (refusal string) {
	switch c.Kind {
	case Pause, Resume, StartOver:
		if d.fixed {
			return "This run averages the blocks it was given: they cannot be changed."
		}
		if c.Kind == Pause && d.paused {
			return "The average is paused already."
		}
		if c.Kind == Resume && !d.paused {
			return "The average is not paused."
		}
	case Break, Mend:
		if refusal := d.checkFault(c); refusal != "" {
			return refusal
		}
	}
	select {
	case d.queue <- c:
	default:
		return "The program is busy with what was asked before. Try again in a moment."
	}
	d.tell(c, at)
	return ""
}

func (d *commandDesk) checkFault(c Command) (refusal string) {
	i := slices.IndexFunc(d.faults, func(f Fault) bool { return f.Code == c.Fault })
	if i < 0 || !d.faults[i].at(c.Target) {
		return "The simulated rig has nothing of that kind to break."
	}
	broken := slices.Contains(d.standing, [2]string{c.Fault, c.Target})
	switch {
	case c.Kind == Break && broken:
		return "That is broken already."
	case c.Kind == Mend && !broken:
		return "That is not broken."
	}
	return ""
}

// at tells whether f can happen there.
func (f Fault) at(target string) bool {
	return slices.Contains(f.Targets, target) || len(f.Targets) == 0 && target == ""
}

// tell has all pages see what was asked.
func (d *commandDesk) tell(c Command, at time.Time) {
	d.asked.set(mustMarshal(struct {
		Type   string      `json:"type"` // "asked"
		Kind   CommandKind `json:"kind"`
		Fault  string      `json:"fault"`
		Target string      `json:"target"`
		AtMs   int64       `json:"at_ms"` // wall clock, Unix milliseconds
	}{"asked", c.Kind, c.Fault, c.Target, at.UnixMilli()}))

	part := [2]string{c.Fault, c.Target}
	i := slices.IndexFunc(d.faults, func(f Fault) bool { return f.Code == c.Fault })
	switch {
	case c.Kind == Break && !d.faults[i].Once:
		d.standing = append(d.standing, part)
	case c.Kind == Mend:
		d.standing = slices.DeleteFunc(d.standing, func(other [2]string) bool { return other == part })
	default:
		return
	}
	d.broken.set(mustMarshal(struct {
		Type   string      `json:"type"`   // "broken"
		Faults [][2]string `json:"faults"` // code and target
	}{"broken", append([][2]string{}, d.standing...)}))
}
