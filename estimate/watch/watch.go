// Package watch holds the rules that judge each block before it is averaged, and the events that they
// raise.
//
// A rule is a function of what is known of a block, with the block's index and time as arguments,
// so a replay raises the same events as the live run. It may not know goroutines, HTTP or files.
package watch

import (
	"fmt"
	"slices"
	"strings"
)

// Evidence is what is known of one block when it is judged.
type Evidence struct {
	Block   int64
	StartS  float64 // source seconds at its first frame
	EndS    float64 // source seconds at its end
	Lost    Lost    // the first lost frames that the block touches
	AtLimit []bool  // by channel, forces first: reached its limit; nil when none did
}

// Lost is a stretch of lost frames.
type Lost struct {
	StartS float64 // source seconds at its first lost frame
	Frames int64   // 0 when nothing was lost
}

// A Watch judges blocks in the order of their index.
type Watch struct {
	names []string // by channel, forces first
	rules []rule
}

// A rule is one kind of event. It stands while consecutive blocks show it.
type rule struct {
	kind Kind
	// accused appends the channels that the block accuses and tells whether the block shows the kind.
	accused func(dst []int, e Evidence) ([]int, bool)
	// raised and cleared are the sentences, standing the reason given with the verdict meanwhile.
	raised, cleared func(e Evidence, names string) string
	standing        func(names string) string

	stands   bool
	since    int64
	channels []int // of the whole stretch, in the order of the rig
}

// New makes a Watch over channels with the given names, forces first.
func New(names []string) *Watch {
	return &Watch{names: names, rules: []rule{
		{
			kind:    Overrange,
			accused: atLimit,
			raised: func(e Evidence, names string) string {
				return fmt.Sprintf("%s reached the limit between %.3f s and %.3f s. Lower its gain or the drive; blocks with it are not averaged.", names, e.StartS, e.EndS)
			},
			cleared: func(e Evidence, names string) string {
				return fmt.Sprintf("%s stayed below the limit from %.3f s on.", names, e.StartS)
			},
			standing: func(names string) string {
				return names + " reached the limit: lower its gain or the drive; averaging waits"
			},
		},
		{
			kind:    Gap,
			accused: lost,
			raised: func(e Evidence, _ string) string {
				return fmt.Sprintf("%d frames were lost from %.3f s on. Blocks that touch them are not averaged; if it happens again, look at the interface's cable and at what else the computer does.", e.Lost.Frames, e.Lost.StartS)
			},
			cleared: func(e Evidence, _ string) string {
				return fmt.Sprintf("No frames were lost from %.3f s on.", e.StartS)
			},
			standing: func(string) string {
				return "frames were lost: averaging waits for the first block without a gap"
			},
		},
	}}
}

func atLimit(dst []int, e Evidence) ([]int, bool) {
	for ch, reached := range e.AtLimit {
		if reached {
			dst = append(dst, ch)
		}
	}
	return dst, len(dst) > 0
}

// lost accuses nobody: frames are lost on all channels together.
func lost(dst []int, e Evidence) ([]int, bool) { return dst, e.Lost.Frames > 0 }

// Judge takes the evidence on the next block and appends the events that it raises or clears.
func (w *Watch) Judge(events []Event, e Evidence) []Event {
	for i := range w.rules {
		r := &w.rules[i]
		accused, shown := r.accused(nil, e)
		switch {
		case shown && !r.stands:
			r.stands, r.since, r.channels = true, e.Block, accused
			events = append(events, w.event(r, e, Raised, r.raised(e, w.list(r.channels))))
		case shown:
			r.channels = union(r.channels, accused)
		case r.stands:
			r.stands = false
			events = append(events, w.event(r, e, Cleared, r.cleared(e, w.list(r.channels))))
		}
	}
	return events
}

// Standing appends a sentence for each event that stands.
func (w *Watch) Standing(dst []string) []string {
	for i := range w.rules {
		if r := &w.rules[i]; r.stands {
			dst = append(dst, r.standing(w.list(r.channels)))
		}
	}
	return dst
}

func (w *Watch) event(r *rule, e Evidence, edge Edge, text string) Event {
	channels := []string{}
	for _, ch := range r.channels {
		channels = append(channels, w.names[ch])
	}
	return Event{
		TimeS: e.EndS, Block: e.Block, SinceBlock: r.since, Edge: edge, Kind: r.kind,
		Channels: channels, BandsHz: [][2]float64{}, Text: text,
	}
}

func (w *Watch) list(channels []int) string {
	names := make([]string, len(channels))
	for i, ch := range channels {
		names[i] = w.names[ch]
	}
	return strings.Join(names, ", ")
}

// union merges two ascending lists.
func union(a, b []int) []int {
	merged := slices.Concat(a, b)
	slices.Sort(merged)
	return slices.Compact(merged)
}
