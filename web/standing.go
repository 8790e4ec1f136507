package web

import (
	"slices"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
)

// passing are the kinds that are raised only: they say that something happened and stand for nothing.
var passing = []watch.Kind{watch.Disturbance, watch.LevelChanged, "note", "paused", "resumed"}

// startedOver is the operator's event that ends all that stood, without a word on each.
const startedOver watch.Kind = "started-over"

// mostStanding bounds the list: more than that nobody can look at.
const mostStanding = 1000

// standing is what stands of the events: raised and not yet cleared, oldest first. It goes by the events
// alone.
type standing struct {
	events []standingEvent
}

type standingEvent struct {
	kind     watch.Kind
	cause    watch.Cause
	since    int64 // block
	channels []string
	bandsHz  [][2]estimate.Number // empty when it is broadband
}

// take follows one event and tells whether it changed what stands.
func (s *standing) take(e watch.Event) bool {
	if slices.Contains(passing, e.Kind) {
		return false
	}
	if e.Kind == startedOver {
		stood := len(s.events) > 0
		s.events = s.events[:0]
		return stood
	}
	i := slices.IndexFunc(s.events, func(other standingEvent) bool { return other.same(e) })
	switch {
	case e.Edge == watch.Raised && i < 0 && len(s.events) < mostStanding:
		s.events = append(s.events, standingEvent{e.Kind, e.Cause, e.SinceBlock, slices.Clone(e.Channels), bands(e)})
	case e.Edge == watch.Cleared && i >= 0:
		s.events = slices.Delete(s.events, i, i+1)
	default:
		return false
	}
	return true
}

// bands are those of e as numbers for a page.
func bands(e watch.Event) [][2]estimate.Number {
	list := make([][2]estimate.Number, len(e.BandsHz))
	for i, band := range e.BandsHz {
		list[i] = [2]estimate.Number{estimate.Number(band[0]), estimate.Number(band[1])}
	}
	return list
}

// same tells whether e is about s. Two of a kind can begin with the same block and accuse different
// channels; while one stands, more channels can join it. Hum and another dependence of the same forces
// stand side by side.
func (s standingEvent) same(e watch.Event) bool {
	hum := func(c watch.Cause) bool { return c == watch.CauseMains }
	if s.kind != e.Kind || s.since != e.SinceBlock || hum(s.cause) != hum(e.Cause) {
		return false
	}
	shared := func(name string) bool { return slices.Contains(e.Channels, name) }
	return len(s.channels) == 0 || len(e.Channels) == 0 || slices.ContainsFunc(s.channels, shared)
}
