package web

import (
	"testing"
	"time"

	"shakerwatch/estimate/watch"
)

func TestAcknowledgedEvents(t *testing.T) {
	for _, test := range []struct {
		name   string
		events int
		asked  []int64 // negative: with all before
		want   string
		refuse bool // the last one
	}{
		{"one", 3, []int64{2}, "[2]", false},
		{"in any order", 5, []int64{4, 2, 5}, "[2,4,5]", false},
		{"twice", 3, []int64{2, 2}, "[2]", false},
		{"all before", 5, []int64{4, -4}, "[1,2,3,4]", false},
		{"the future", 3, []int64{1, 4}, "[1]", true},
		{"nothing", 3, []int64{1, 0}, "[1]", true},
		{"one that is no longer kept", eventsKept + 2, []int64{5, 2}, "[5]", true},
		{"all before, of those kept", eventsKept + 2, []int64{-4}, "[3,4]", false},
	} {
		t.Run(test.name, func(t *testing.T) {
			h := NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo"})
			for range test.events {
				h.PublishEvent(watch.Event{})
			}
			no := ""
			for _, n := range test.asked {
				no = h.askAcknowledge(max(n, -n), n < 0)
			}
			if got, want := string(h.acknowledged.message.text), `{"type":"acknowledged","events":`+test.want+`}`; got != want {
				t.Errorf("%s, want %s", got, want)
			}
			if (no != "") != test.refuse {
				t.Errorf("the last one was answered with %q", no)
			}
		})
	}
}

// However many events are acknowledged, those that are no longer kept are forgotten.
func TestAcknowledgedDoesNotGrow(t *testing.T) {
	var l eventLog
	var a acknowledged
	for n := range int64(3 * eventsKept) {
		l.add(watch.Event{}, time.Time{})
		a.add(n+1, false, &l)
	}
	if len(a.numbers) != eventsKept {
		t.Errorf("%d numbers are kept, want %d", len(a.numbers), eventsKept)
	}
}
