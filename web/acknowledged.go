package web

import (
	"slices"
	"strconv"
)

// An acknowledgement says that a person has seen an event. All pages share them, and they concern
// nobody but people: what a fault does to the average, it does all the same.
type acknowledged struct {
	numbers []int64 // ascending, of events that are still kept
	message numbered
}

// add acknowledges event n, with before every one up to n. It tells whether that changed anything.
func (a *acknowledged) add(n int64, before bool, l *eventLog) bool {
	if n < l.oldest() || n > l.newest {
		return false
	}
	first := n
	if before {
		first = l.oldest()
	}
	changed := false
	for ; first <= n; first++ {
		if at, found := slices.BinarySearch(a.numbers, first); !found {
			a.numbers = slices.Insert(a.numbers, at, first)
			changed = true
		}
	}
	if changed {
		a.write(l)
	}
	return changed
}

// write makes the message, without events that are no longer kept.
func (a *acknowledged) write(l *eventLog) {
	a.numbers = slices.DeleteFunc(a.numbers, func(n int64) bool { return n < l.oldest() })
	text := []byte(`{"type":"acknowledged","events":[`)
	for i, n := range a.numbers {
		if i > 0 {
			text = append(text, ',')
		}
		text = strconv.AppendInt(text, n, 10)
	}
	a.message.set(append(text, `]}`...))
}

// askAcknowledge notes that a person has seen event n, with before everything up to it. It returns why
// not, empty when it was noted or known.
func (h *Hub) askAcknowledge(n int64, before bool) (refusal string) {
	h.mu.Lock()
	defer h.mu.Unlock()
	if h.acknowledged.add(n, before, &h.events) {
		h.wake()
	} else if n < h.events.oldest() || n > h.events.newest {
		return "That event is no longer in the list."
	}
	return ""
}
