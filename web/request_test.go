package web

import (
	"slices"
	"strings"
	"testing"

	"shakerwatch/estimate/setup"
)

var testShape = shape{lines: 801, responses: 14, forces: 2, pairs: [][2]int{{0, 1}}, spacingHz: 0.5}

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
		{"the whole band", `{"type":"select","response":3,"force":1,"pair":0,"coherence":[5,2],"from_hz":null,"to_hz":null}`,
			request{kind: selectView, view: view{response: 3, force: 1, shown: shown(5, 2), last: 800}}},
		{"a band, from the line below to the line above", `{"type":"select","from_hz":99.9,"to_hz":200.1}`,
			request{kind: selectView, view: view{shown: shown(), first: 199, last: 401}}},
		{"ends the wrong way round", `{"type":"select","from_hz":200,"to_hz":100}`,
			request{kind: selectView, view: view{shown: shown(), first: 400, last: 407}}},
		{"far outside", `{"type":"select","from_hz":-1e300,"to_hz":1e300}`,
			request{kind: selectView, view: view{shown: shown(), last: 800}}},
		{"nothing at the top", `{"type":"select","from_hz":1e9,"to_hz":1e9}`,
			request{kind: selectView, view: view{shown: shown(), first: 793, last: 800}}},
		{"events", `{"type":"events","after":17}`, request{kind: sendEvents, after: 17}},
		{"events from before the first", `{"type":"events","after":-5}`, request{kind: sendEvents}},
		{"finish", ` {"type":"finish"} `, request{kind: finishAndEnd}},
		{"measure", `{"type":"measure","stage":"low"}`, request{kind: startMeasuring, stage: setup.Low}},
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
		{"too many", `{"type":"select","coherence":[0,1,2,3,4,5,6]}`, "at most 6"},
		{"a stage that is not there", `{"type":"measure","stage":"full"}`, `unknown stage "full"`},
		{"a stage by its number", `{"type":"measure","stage":0}`, "number"},
		{"no stage", `{"type":"measure"}`, `unknown stage ""`},
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
		`{"type":"events","after":9223372036854775807}`,
		`{"type":"measure","stage":"muted"}`, `{"type":"measure","stage":"\u0000"}`, `{"type":"measure","stage":null}`,
		`{"type":"finish"}`, `{}`, `[]`, `null`, `{"type":`, "\x00\xff",
	} {
		f.Add([]byte(text), 801, 14, 2, 1)
		f.Add([]byte(text), 1, 1, 1, 0)
	}
	f.Fuzz(func(t *testing.T, text []byte, lines, responses, forces, pairCount int) {
		s := shape{
			lines: 1 + abs(lines)%3000, responses: 1 + abs(responses)%600, forces: 1 + abs(forces)%16,
			pairs: make([][2]int, abs(pairCount)%4), spacingHz: 0.5,
		}
		r, err := parseRequest(text, s)
		if err == nil && r.kind == startMeasuring && !slices.Contains(setup.Stages(), r.stage) {
			t.Fatalf("stage %d does not exist", r.stage)
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
		if v.response >= s.responses || v.force >= s.forces || v.pair > len(s.pairs) || v.grid().points() > maxPoints {
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
