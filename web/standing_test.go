package web

import (
	"fmt"
	"strings"
	"testing"

	"shakerwatch/estimate/watch"
)

// story reads events as in "raised response-suspect 7 A,B; cleared gap 9".
func story(t *testing.T, text string) (events []watch.Event) {
	for _, part := range strings.Split(text, "; ") {
		words := strings.Fields(part)
		e := watch.Event{Edge: watch.Edge(words[0]), Kind: watch.Kind(words[1])}
		if _, err := fmt.Sscan(words[2], &e.SinceBlock); err != nil {
			t.Fatal(err)
		}
		if len(words) > 3 {
			e.Channels = strings.Split(words[3], ",")
		}
		events = append(events, e)
	}
	return events
}

func TestWhatStands(t *testing.T) {
	for _, test := range []struct{ name, story, want string }{
		{"raised", "raised dead-channel 3 A", "dead-channel A"},
		{"raised and cleared", "raised dead-channel 3 A; cleared dead-channel 3 A", ""},
		{"about no channel", "raised gap 3; raised overrange 3 A; cleared gap 3", "overrange A"},
		{"a channel that joined", "raised overrange 3 A; cleared overrange 3 A,B", ""},
		{"two of a kind at once", "raised response-suspect 3 A; raised response-suspect 3 B; cleared response-suspect 3 A", "response-suspect B"},
		{"the next of its kind", "raised gap 3; cleared gap 3; raised gap 9; cleared gap 3", "gap"},
		{"raised twice", "raised gap 3; raised gap 3; cleared gap 3", ""},
		{"what passes", "raised note 3; raised disturbance 4; raised level-changed 5 A; raised paused 6", ""},
		{"started over", "raised gap 3; raised force-lost 4 S1; raised started-over 5; raised dead-channel 6 A; cleared gap 3", "dead-channel A"},
		{"cleared without having been raised", "cleared gap 3", ""},
	} {
		t.Run(test.name, func(t *testing.T) {
			var s standing
			for _, e := range story(t, test.story) {
				s.take(e)
			}
			var list []string
			for _, e := range s.events {
				list = append(list, strings.TrimSpace(string(e.kind)+" "+strings.Join(e.channels, ",")))
			}
			if got := strings.Join(list, "; "); got != test.want {
				t.Errorf("%q stands, want %q", got, test.want)
			}
		})
	}
}

func TestWhatStandsIsBounded(t *testing.T) {
	var s standing
	for n := range 3 * mostStanding {
		s.take(watch.Event{Edge: watch.Raised, Kind: "gap", SinceBlock: int64(n)})
	}
	if len(s.events) != mostStanding {
		t.Errorf("%d events", len(s.events))
	}
}

func TestHumStandsByItself(t *testing.T) {
	var s standing
	band := watch.Event{Kind: watch.ForcesCorrelated, Edge: watch.Raised, Channels: []string{"S1", "S2"}}
	hum := band
	hum.Cause = watch.CauseMains
	s.take(band)
	s.take(hum)
	hum.Edge = watch.Cleared
	s.take(hum)
	if len(s.events) != 1 || s.events[0].cause != "" {
		t.Errorf("what stands when the hum is over: %+v", s.events)
	}
}
