package watch

import (
	"fmt"
	"slices"
)

// A subject is one thing that may be wrong: a kind and what it is about. It goes from pending to standing when it was
// found often enough in a row, and is cleared after it stayed away for long enough.
type subject struct {
	kind   *kind
	state  state
	count  int // findings in a row, then blocks in a row without one
	since  int64
	sinceS float64
	finding
}

type state int

const (
	pending state = iota
	stands
	over
)

// isFault: a reciprocity that is off by something local is a matter of where things sit.
func (s *subject) isFault() bool { return s.kind.fault && s.cause != CauseLocal }

// update takes up what a source found and appends the events. since is the first block that holds
// what is raised now; ripe tells whether the block is one to raise on.
func (w *Watch) update(events []Event, from source, found []finding, e Evidence, since int64, ripe bool) []Event {
	for n := range found {
		events = w.renew(events, &found[n], e)
		w.enter(&found[n], since, e)
	}
	for i := range w.subjects {
		s := &w.subjects[i]
		if s.kind.source != from || s.state == over {
			continue
		}
		if !hasFinding(found, s) {
			events = w.miss(events, s, e)
		}
	}
	for i := range kinds { // in the order of the table
		for n := range w.subjects {
			if s := &w.subjects[n]; s.kind == &kinds[i] && s.kind.source == from && s.state == pending {
				events = w.promote(events, s, found, e, ripe)
			}
		}
	}
	w.subjects = slices.DeleteFunc(w.subjects, func(s subject) bool { return s.state == over })
	return events
}

func hasFinding(found []finding, s *subject) bool {
	for n := range found {
		if found[n].kind == s.kind.name && found[n].key == s.key {
			return true
		}
	}
	return false
}

// enter takes one finding up, as a new subject or as one more of one that is known.
func (w *Watch) enter(f *finding, since int64, e Evidence) {
	for i := range w.subjects {
		s := &w.subjects[i]
		if s.kind.name != f.kind || s.key != f.key {
			continue
		}
		switch {
		case s.state == stands && s.kind.away == 0:
			continue // raised only: what stands is a memory of an earlier one
		case s.state == stands:
			s.count = 0
			if s.kind.name != ForcesCorrelated+ofLate { // who began is who began first
				s.channels = union(s.channels, f.channels)
			}
		case f.alike(&s.finding):
			s.count++
			s.finding = *f
		default:
			s.count, s.finding = 1, *f
		}
		return
	}
	k := kindOf(f.kind)
	count := 1
	if k.rings { // the sums of several blocks show it in all of these
		count = w.layout.spanned(e.Block, since)
	}
	w.subjects = append(w.subjects, subject{kind: k, count: count, since: since, sinceS: w.timeOf(since, e), finding: *f})
}

// renew clears what stands and is to be said anew, so that it is raised with the same block.
func (w *Watch) renew(events []Event, f *finding, e Evidence) []Event {
	if !f.anew {
		return events
	}
	for i := range w.subjects {
		s := &w.subjects[i]
		if s.kind.name != f.kind || s.key != f.key || s.state != stands {
			continue
		}
		events = w.clear(events, s, e)
		s.state, s.count, s.finding = pending, s.kind.hold(w.layout.overlap), *f
	}
	return events
}

// levelAlike is how much two blocks of one level may differ, dB.
const levelAlike = 1.5

// alike tells whether f goes on with what g said. A level that is on its way is at no new level yet. Who changed besides
// the one that did most may be near the limit.
func (f *finding) alike(g *finding) bool {
	if f.kind != LevelChanged {
		return true
	}
	shared := slices.ContainsFunc(f.channels, func(ch int) bool { return slices.Contains(g.channels, ch) })
	return f.value-g.value < levelAlike && g.value-f.value < levelAlike && shared
}

// miss notes that a subject was not found.
func (w *Watch) miss(events []Event, s *subject, e Evidence) []Event {
	if s.state == pending {
		s.state = over
		return events
	}
	if s.kind.away == 0 {
		return events
	}
	s.count++
	away := s.kind.away
	if s.kind.source == transformed {
		away = max(away, w.layout.overlap+2) // as long as blocks that hold a part of it are abnormal
	}
	if s.count >= away {
		events = w.clear(events, s, e)
	}
	return events
}

func (w *Watch) clear(events []Event, s *subject, e Evidence) []Event {
	s.state = over
	said := w.said(s, e)
	text := s.kind.cleared(said)
	if s.kind.source == armed && s.kind.name != NoDrive && w.stands(NoDrive, 0) {
		text = fmt.Sprintf("%s: no shaker drives the structure now, so this shows no more.", said.names)
	}
	return append(events, w.event(s, e, Cleared, text))
}

// promote raises a subject whose time has come, unless another kind explains it.
func (w *Watch) promote(events []Event, s *subject, found []finding, e Evidence, ripe bool) []Event {
	if s.count < s.kind.hold(w.layout.overlap) {
		return events
	}
	if s.kind.lasts && w.streak.length <= w.layout.overlap {
		return events // a knock is in as many blocks as overlap,
	}
	if s.kind.rings && !ripe {
		return events // and then rings and dies away
	}
	for _, by := range s.kind.explainedBy {
		if w.explains(by, s, found) {
			return events
		}
	}
	if s.kind.source == armed {
		s.since, s.sinceS = w.streak.first, w.streak.firstS
	}
	s.state, s.count = stands, 0
	events = append(events, w.event(s, e, Raised, s.kind.raised(w.said(s, e))))
	if s.kind.away == 0 {
		w.remember(s)
	}
	return events
}

// remember keeps what is raised only when it still matters, and then only the newest of each kind about
// the same channels.
func (w *Watch) remember(s *subject) {
	if s.kind.standing(w.said(s, Evidence{})) == "" {
		s.state = over
	}
	for i := range w.subjects {
		o := &w.subjects[i]
		if o != s && o.kind == s.kind && o.state == stands && slices.Equal(o.channels, s.channels) {
			o.state = over
		}
	}
}

// explains tells whether a kind that stands, or was found in the same block, makes s follow from it. What a
// channel by itself shows, such as to be constant, counts as soon as it was found.
func (w *Watch) explains(by Kind, s *subject, found []finding) bool {
	for n := range w.subjects {
		o := &w.subjects[n]
		sure := o.state == stands || by == DeadChannel || by == TwinChannels
		if o.kind.name == by && o != s && sure && w.concerns(&o.finding, &s.finding) {
			return true
		}
	}
	for n := range found {
		if found[n].kind == by && w.concerns(&found[n], &s.finding) {
			return true
		}
	}
	return false
}

// concerns tells whether what explains other things explains s. A dead channel or a twin explains what rests on
// that channel, or anything if it is a force; a reversed channel only a sign that is wrong.
func (w *Watch) concerns(by, s *finding) bool {
	switch by.kind {
	case PolaritySuspect:
		return s.cause == CausePolarity && slices.Contains(s.channels, by.channels[0])
	case DeadChannel, TwinChannels:
		for _, ch := range by.channels {
			if ch < w.layout.q || slices.Contains(s.channels, ch) || slices.Contains(s.about, ch) {
				return true
			}
		}
		return false
	}
	return true
}

// stands tells whether a subject stands that can be cleared.
func (w *Watch) stands(k Kind, key int) bool {
	for i := range w.subjects {
		if s := &w.subjects[i]; s.kind.name == k && s.key == key && s.state == stands && s.kind.away > 0 {
			return true
		}
	}
	return false
}

// suspects tells whether a subject stands or may be about to.
func (w *Watch) suspects(k Kind, key int) bool {
	for i := range w.subjects {
		if s := &w.subjects[i]; s.kind.name == k && s.key == key && s.state != over {
			return true
		}
	}
	return false
}

// said gathers what the sentences of s need.
func (w *Watch) said(s *subject, e Evidence) said {
	var names []string
	for _, ch := range s.channels {
		names = append(names, w.layout.names[ch])
	}
	out := said{finding: &s.finding, names: list(names), sinceS: s.sinceS, e: e}
	if len(s.channels) > 0 {
		out.points = "point " + w.layout.points[s.channels[0]]
	}
	return out
}

func (w *Watch) event(s *subject, e Evidence, edge Edge, text string) Event {
	channels := []string{}
	for _, ch := range s.channels {
		channels = append(channels, w.layout.names[ch])
	}
	bands := [][2]float64{}
	bands = append(bands, s.bandsHz...)
	return Event{
		TimeS: e.EndS, Block: e.Block, SinceBlock: s.since, Edge: edge, Kind: s.kind.event(),
		Channels: channels, BandsHz: bands, Text: w.worded(s.kind, text), Cause: s.cause,
	}
}

// union merges two ascending lists.
func union(a, b []int) []int {
	if slices.Equal(a, b) {
		return a
	}
	merged := slices.Concat(a, b)
	slices.Sort(merged)
	return slices.Compact(merged)
}
