package web

import (
	"errors"
	"slices"
	"strings"
	"testing"
	"unicode"

	"shakerwatch/estimate/setup"
)

var testShape = shape{
	lines: 801, responses: 14, forces: 2, pairs: [][2]int{{0, 1}}, spacingHz: 0.5,
	parts: []string{"coherence", "map", ranking}, response: 9,
}

// choice is a view of testShape.
func choice(change func(*view)) request {
	v := testShape.whole()
	change(&v)
	return request{kind: selectView, view: v}
}

func shown(responses ...int) (list [maxShown]int) {
	for i := range list {
		list[i] = -1
		if i < len(responses) {
			list[i] = responses[i]
		}
	}
	return list
}

func TestParseRequest(t *testing.T) {
	tests := []struct {
		name, text string
		want       request
	}{
		{"nothing in particular", `{"type":"select"}`, choice(func(v *view) {})},
		{"the whole band", `{"type":"select","response":3,"force":1,"pair":0,"coherence":[5,2],"from_hz":null,"to_hz":null,"points":null,"parts":null}`,
			choice(func(v *view) { v.response, v.force, v.shown = 3, 1, shown(5, 2) })},
		{"a band, from the line below to the line above", `{"type":"select","from_hz":99.9,"to_hz":200.1}`,
			choice(func(v *view) { v.first, v.last = 199, 401 })},
		{"ends the wrong way round", `{"type":"select","from_hz":200,"to_hz":100}`,
			choice(func(v *view) { v.first, v.last = 400, 407 })},
		{"far outside", `{"type":"select","from_hz":-1e300,"to_hz":1e300}`, choice(func(v *view) {})},
		{"nothing at the top", `{"type":"select","from_hz":1e9,"to_hz":1e9}`,
			choice(func(v *view) { v.first, v.last = 793, 800 })},
		{"ratios of frequency", `{"type":"select","log":true}`, choice(func(v *view) { v.log = true })},
		{"a plot of 555 pixels", `{"type":"select","points":555}`, choice(func(v *view) { v.points = 600 })},
		{"no plot at all", `{"type":"select","points":0}`, choice(func(v *view) { v.points = leastPoints })},
		{"a wall of pixels", `{"type":"select","points":9999}`, choice(func(v *view) { v.points = testShape.mostPoints() })},
		{"some parts", `{"type":"select","parts":["ranking","coherence"]}`, choice(func(v *view) { v.parts = 0b101 })},
		{"no parts", `{"type":"select","parts":[]}`, choice(func(v *view) { v.parts = 0 })},
		{"events", `{"type":"events","after":17}`, request{kind: sendEvents, after: 17}},
		{"events from before the first", `{"type":"events","after":-5}`, request{kind: sendEvents}},
		{"finish", ` {"type":"finish"} `, request{kind: finishAndEnd}},
		{"measure", `{"type":"measure","stage":"low"}`, request{kind: startMeasuring, stage: setup.Low}},
		{"acknowledge", `{"type":"acknowledge","event":7}`, request{kind: acknowledge, event: 7}},
		{"acknowledge all before", `{"type":"acknowledge","event":7,"before":true}`, request{kind: acknowledge, event: 7, before: true}},
		{"reset all peaks", `{"type":"reset-peaks"}`, request{kind: resetPeaks, channel: -1}},
		{"reset one peak", `{"type":"reset-peaks","channel":15}`, request{kind: resetPeaks, channel: 15}},
		{"alive", `{"type":"alive"}`, request{kind: stillAlive}},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			got, err := parseRequest([]byte(test.text), testShape)
			if err != nil || got != test.want {
				t.Errorf("%+v, %v; want %+v", got, err, test.want)
			}
		})
	}
}

func TestParseRequestRefuses(t *testing.T) {
	tests := []struct{ name, text, want string }{
		{"no JSON", `select`, "invalid character"},
		{"nothing", ``, "EOF"},
		{"two", `{"type":"finish"}{"type":"finish"}`, "more than one"},
		{"an unknown type", `{"type":"stop the shakers"}`, "unknown type"},
		{"no type", `{}`, "unknown type"},
		{"an unknown field", `{"type":"finish","now":true}`, "unknown field"},
		{"a response that is not there", `{"type":"select","response":14}`, "response 14 of 14"},
		{"a negative response", `{"type":"select","response":-1}`, "response -1 of 14"},
		{"a force that is not there", `{"type":"select","force":2}`, "force 2 of 2"},
		{"a pair that is not there", `{"type":"select","pair":1}`, "pair 1 of 1"},
		{"a coherence that is not there", `{"type":"select","coherence":[0,99]}`, "coherence 99 of 14"},
		{"a part that is not there", `{"type":"select","parts":["coherence","weather"]}`, `unknown part "weather"`},
		{"too many", `{"type":"select","coherence":[0,1,2,3,4,5,6]}`, "at most 6"},
		{"a stage that is not there", `{"type":"measure","stage":"full"}`, `unknown stage "full"`},
		{"a stage by its number", `{"type":"measure","stage":0}`, "number"},
		{"no stage", `{"type":"measure"}`, `unknown stage ""`},
		{"a channel that is not there", `{"type":"reset-peaks","channel":16}`, "channel 16 of 16"},
		{"half an event", `{"type":"acknowledge","event":1.5}`, "number 1.5"},
		{"half an index", `{"type":"select","response":0.5}`, "number 0.5"},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			got, err := parseRequest([]byte(test.text), testShape)
			if err == nil || !strings.Contains(err.Error(), test.want) {
				t.Errorf("%+v, %v; want an error with %q", got, err, test.want)
			}
		})
	}
}

func TestParseCommand(t *testing.T) {
	long := strings.Repeat("ö", maxNote)
	tests := []struct {
		name, text string
		want       Command
		refused    string // part of what the person is told
	}{
		{"pause", `{"type":"pause"}`, Command{Kind: Pause}, ""},
		{"resume", `{"type":"resume","text":"ignored"}`, Command{Kind: Resume}, ""},
		{"start over", `{"type":"start-over"}`, Command{Kind: StartOver}, ""},
		{"break", `{"type":"break","fault":"detach","target":"S2"}`, Command{Kind: Break, Fault: "detach", Target: "S2"}, ""},
		{"mend", `{"type":"mend","fault":"detach","target":"S2"}`, Command{Kind: Mend, Fault: "detach", Target: "S2"}, ""},
		{"a note", `{"type":"note","text":"  hatch \u2018open\u2019 <b>  "}`, Command{Kind: Note, Text: "hatch ‘open’ <b>"}, ""},
		{"the longest note", `{"type":"note","text":"` + long + `"}`, Command{Kind: Note, Text: long}, ""},
		{"a longer note", `{"type":"note","text":"` + long + `o"}`, Command{}, "at most 300 characters"},
		{"an empty note", `{"type":"note","text":" \t "}`, Command{}, "says nothing"},
		{"no note", `{"type":"note"}`, Command{}, "says nothing"},
		{"a note of two lines", `{"type":"note","text":"one\ntwo"}`, Command{}, "cannot be seen"},
		{"a note that turns the writing direction", `{"type":"note","text":"one\u202etwo"}`, Command{}, "cannot be seen"},
		{"a note with a bell", `{"type":"note","text":"one\u0007"}`, Command{}, "cannot be seen"},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			r, err := parseRequest([]byte(test.text), testShape)
			var told refusal
			switch {
			case test.refused != "":
				if !errors.As(err, &told) || !strings.Contains(err.Error(), test.refused) {
					t.Errorf("%+v, %v; want it refused with %q", r.command, err, test.refused)
				}
			case err != nil || r.command == nil || *r.command != test.want || !r.controls():
				t.Errorf("%+v, %v; want %+v", r.command, err, test.want)
			}
		})
	}
}

func TestPairDoesNotMatterWithoutPairs(t *testing.T) {
	s := testShape
	s.pairs = nil
	got, err := parseRequest([]byte(`{"type":"select","pair":3}`), s)
	if err != nil || got.view.pair != 0 {
		t.Errorf("pair %d, %v", got.view.pair, err)
	}
}

// Whatever a page sends, what comes out of it can be shown.
func FuzzParseRequest(f *testing.F) {
	for _, text := range []string{
		`{"type":"select","response":3,"force":1,"pair":0,"coherence":[5,2],"from_hz":100,"to_hz":null}`,
		`{"type":"select","from_hz":1e308,"to_hz":-1e308}`,
		`{"type":"select","log":true,"to_hz":0,"points":-9223372036854775808,"parts":["map","ranking","map"]}`,
		`{"type":"events","after":9223372036854775807}`,
		`{"type":"measure","stage":"muted"}`, `{"type":"measure","stage":"\u0000"}`, `{"type":"measure","stage":null}`,
		`{"type":"pause"}`, `{"type":"note","text":"\ud800 \u202e"}`, `{"type":"break","fault":"detach","target":"\u0000"}`,
		`{"type":"acknowledge","event":-9223372036854775808,"before":true}`, `{"type":"reset-peaks","channel":-1}`,
		`{"type":"finish"}`, `{}`, `[]`, `null`, `{"type":`, "\x00\xff",
	} {
		f.Add([]byte(text), 801, 14, 2, 1)
		f.Add([]byte(text), 1, 1, 1, 0)
	}
	f.Fuzz(func(t *testing.T, text []byte, lines, responses, forces, pairCount int) {
		s := shape{
			lines: 1 + abs(lines)%3000, responses: 1 + abs(responses)%600, forces: 1 + abs(forces)%16,
			pairs: make([][2]int, abs(pairCount)%4), spacingHz: 0.5,
			parts: testShape.parts,
		}
		r, err := parseRequest(text, s)
		if err == nil && r.kind == startMeasuring && !slices.Contains(setup.Stages(), r.stage) {
			t.Fatalf("stage %d does not exist", r.stage)
		}
		if err == nil && (r.kind == string(Note)) != (r.command != nil && r.command.Text != "") {
			t.Fatalf("%q with command %+v", r.kind, r.command)
		}
		if err == nil && r.kind == resetPeaks && (r.channel < -1 || r.channel >= s.forces+s.responses) {
			t.Fatalf("channel %d of %+v", r.channel, s)
		}
		if err == nil && r.command != nil && strings.ContainsFunc(r.command.Text, unicode.IsControl) {
			t.Fatalf("note %q", r.command.Text)
		}
		if err != nil || r.kind != selectView {
			return
		}
		v := r.view
		if v.first < 0 || v.last < v.first || v.last >= s.lines {
			t.Fatalf("band of lines %d to %d of %d", v.first, v.last, s.lines)
		}
		if v.last-v.first+1 < min(minLines, s.lines) {
			t.Fatalf("band of lines %d to %d is too narrow", v.first, v.last)
		}
		if v.response >= s.responses || v.force >= s.forces || v.pair > len(s.pairs) || newGrid(v.span()).points() > mostPoints || v.parts > s.allParts() {
			t.Fatalf("%+v of %+v", v, s)
		}
		for _, o := range v.shown {
			if o < -1 || o >= s.responses {
				t.Fatalf("%+v of %+v", v, s)
			}
		}
	})
}

func abs(n int) int {
	if n < 0 {
		return -(n + 1)
	}
	return n
}
