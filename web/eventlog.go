package web

import (
	"encoding/json"
	"strconv"
	"time"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
)

// eventsKept is how many events a page can still get; events.jsonl has them all.
const eventsKept = 500

// An eventLog numbers the events of a run from 1 and keeps the newest.
type eventLog struct {
	newest int64    // number of the newest event, 0 without
	texts  [][]byte // JSON of the newest ones, a ring: number n lies at (n-1) % eventsKept
}

// add numbers e, which happened at the given time on the wall, and keeps it.
func (l *eventLog) add(e watch.Event, at time.Time) {
	l.newest++
	text, err := json.Marshal(struct {
		Number int64 `json:"number"`
		AtMs   int64 `json:"at_ms"` // wall clock, Unix milliseconds
		watch.Event
		TimeS   estimate.Number      `json:"time_s"`
		BandsHz [][2]estimate.Number `json:"bands_hz"`
	}{l.newest, at.UnixMilli(), e, estimate.Number(e.TimeS), bands(e)})
	if err != nil {
		panic("web: an event has no JSON: " + err.Error()) // it holds nothing that could do that
	}
	if len(l.texts) < eventsKept {
		l.texts = append(l.texts, text)
		return
	}
	l.texts[(l.newest-1)%eventsKept] = text
}

// oldest is the number of the oldest event kept.
func (l *eventLog) oldest() int64 { return l.newest - int64(len(l.texts)) + 1 }

// message is the message with the events behind number after, and with how many older ones are no
// longer kept. It is nil when there is nothing behind after.
func (l *eventLog) message(after int64) []byte {
	if after >= l.newest {
		return nil
	}
	text := []byte(`{"type":"events","dropped":`)
	text = strconv.AppendInt(text, l.oldest()-1, 10)
	text = append(text, `,"events":[`...)
	from := max(after+1, l.oldest())
	for n := from; n <= l.newest; n++ {
		if n > from {
			text = append(text, ',')
		}
		text = append(text, l.texts[(n-1)%eventsKept]...)
	}
	return append(text, `]}`...)
}
