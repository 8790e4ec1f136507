package web

import (
	"encoding/json"
	"fmt"
	"math"
	"testing"
	"time"

	"shakerwatch/estimate/watch"
)

type eventsMessage struct {
	Type    string
	Dropped int64
	Events  []struct {
		Number  int64
		AtMs    int64         `json:"at_ms"`
		TimeS   *float64      `json:"time_s"`
		BandsHz [][2]*float64 `json:"bands_hz"`
		watch.Event
	}
}

func readEvents(t *testing.T, text []byte) eventsMessage {
	t.Helper()
	var m eventsMessage
	if err := json.Unmarshal(text, &m); err != nil {
		t.Fatalf("%v in %.100s", err, text)
	}
	return m
}

func TestEventLogKeepsTheNewest(t *testing.T) {
	tests := []struct {
		name                        string
		events                      int
		after                       int64
		first, last, count, dropped int64
	}{
		{"all", 3, 0, 1, 3, 3, 0},
		{"those missed", 3, 1, 2, 3, 2, 0},
		{"just full", eventsKept, 0, 1, eventsKept, eventsKept, 0},
		{"more than fit", eventsKept + 7, 0, 8, eventsKept + 7, eventsKept, 7},
		{"missed more than fit", eventsKept + 7, 3, 8, eventsKept + 7, eventsKept, 7},
		{"missed some of many", 3*eventsKept + 7, 3*eventsKept + 5, 3*eventsKept + 6, 3*eventsKept + 7, 2, 2*eventsKept + 7},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			var l eventLog
			for i := range test.events {
				l.add(watch.Event{Text: fmt.Sprint(i + 1)}, time.Time{})
			}
			m := readEvents(t, l.message(test.after))
			if m.Type != "events" || m.Dropped != test.dropped || int64(len(m.Events)) != test.count {
				t.Fatalf("type %q, %d dropped, %d events", m.Type, m.Dropped, len(m.Events))
			}
			for i, e := range m.Events {
				if want := test.first + int64(i); e.Number != want || e.Text != fmt.Sprint(want) {
					t.Fatalf("event %d has number %d and text %s, want %d", i, e.Number, e.Text, want)
				}
			}
		})
	}
}

func TestEventLogHasNothingBehindTheNewest(t *testing.T) {
	var l eventLog
	if text := l.message(0); text != nil {
		t.Errorf("empty log: %s", text)
	}
	l.add(watch.Event{}, time.Time{})
	if text := l.message(1); text != nil {
		t.Errorf("behind the newest: %s", text)
	}
}

func TestEventLogWritesWhatIsUnknown(t *testing.T) {
	var l eventLog
	at := time.UnixMilli(1234567890123)
	l.add(watch.Event{TimeS: math.NaN(), BandsHz: [][2]float64{{1.5, math.Inf(1)}}, Edge: watch.Raised, Kind: watch.Gap, Channels: []string{}, Text: "a \"quoted\" <name>"}, at)
	e := readEvents(t, l.message(0)).Events[0]
	if e.TimeS != nil || *e.BandsHz[0][0] != 1.5 || e.BandsHz[0][1] != nil {
		t.Errorf("unknown numbers are not null: %+v", e)
	}
	if e.AtMs != at.UnixMilli() || e.Kind != watch.Gap || e.Event.Edge != watch.Raised || e.Text != "a \"quoted\" <name>" {
		t.Errorf("%+v", e)
	}
}
