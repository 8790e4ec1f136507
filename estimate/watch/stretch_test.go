package watch

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"
	"testing"
)

// tell runs blocks that are not transformed through a watch over S1, A10z and A11z, one character a block: '.' nothing,
// 'g' a gap, 'a' and 'b' A10z and A11z at the limit, 'c' both, 'x' a gap and A10z. It returns what
// happened in short.
func tell(blocks string) []string {
	w := New(newSimulated(1, simOptions{q: 1, p: 2}).rig, Options{})
	var story []string
	for k, c := range blocks {
		e := Evidence{Block: int64(k), StartS: float64(k), EndS: float64(k + 2)}
		switch c {
		case 'g', 'x':
			e.Lost = Lost{StartS: float64(k) + 0.5, Frames: 12}
		}
		switch c {
		case 'a', 'x':
			e.AtLimit = []bool{false, true, false}
		case 'b':
			e.AtLimit = []bool{false, false, true}
		case 'c':
			e.AtLimit = []bool{false, true, true}
		}
		events, j := w.Judge(nil, e)
		if j.Normal() != (c == '.') || j.Armed || j.Holds {
			story = append(story, fmt.Sprintf("%d %+v", k, j))
		}
		for _, event := range events {
			story = append(story, fmt.Sprintf("%d %s %s since %d %v", event.Block, event.Kind, event.Edge, event.SinceBlock, event.Channels))
		}
	}
	return story
}

func TestStretches(t *testing.T) {
	for _, test := range []struct {
		blocks string
		want   []string
	}{
		{"......", nil},
		{"..gg.", []string{"2 gap raised since 2 []", "4 gap cleared since 2 []"}},
		{"..gg", []string{"2 gap raised since 2 []"}}, // what stands at the end stays open
		{"a.", []string{"0 overrange raised since 0 [A10z]", "1 overrange cleared since 0 [A10z]"}},
		{".ab.", []string{"1 overrange raised since 1 [A10z]", "3 overrange cleared since 1 [A10z A11z]"}},
		{".c.", []string{"1 overrange raised since 1 [A10z A11z]", "2 overrange cleared since 1 [A10z A11z]"}},
		{"a.a.", []string{
			"0 overrange raised since 0 [A10z]", "1 overrange cleared since 0 [A10z]",
			"2 overrange raised since 2 [A10z]", "3 overrange cleared since 2 [A10z]"}},
		{".xg.", []string{
			"1 overrange raised since 1 [A10z]", "1 gap raised since 1 []",
			"2 overrange cleared since 1 [A10z]", "3 gap cleared since 1 []"}},
	} {
		if got := tell(test.blocks); !slices.Equal(got, test.want) {
			t.Errorf("%s: %q, want %q", test.blocks, got, test.want)
		}
	}
}

func TestStanding(t *testing.T) {
	w := New(newSimulated(1, simOptions{q: 1, p: 1}).rig, Options{})
	w.Judge(nil, Evidence{AtLimit: []bool{true, false}, Lost: Lost{Frames: 1}})
	want := []string{
		"S1 reached the limit: lower its gain or the drive; averaging waits",
		"frames were lost: averaging waits for the first block without a gap",
	}
	if got := w.Standing(nil); !slices.Equal(got, want) {
		t.Errorf("standing %q, want %q", got, want)
	}
	if w.Faults() {
		t.Error("a gap and an overrange are faults")
	}
	w.Judge(nil, Evidence{Block: 1})
	if got := w.Standing(nil); len(got) != 0 {
		t.Errorf("%q stand after a good block", got)
	}
}

func TestEventAsWritten(t *testing.T) {
	w := New(newSimulated(1, simOptions{q: 1, p: 1}).rig, Options{})
	events, _ := w.Judge(nil, Evidence{Block: 7, StartS: 3.5, EndS: 4.5, Lost: Lost{StartS: 4.25, Frames: 512}})
	got, err := json.Marshal(events[0])
	want := `{"time_s":4.5,"block":7,"since_block":7,"edge":"raised","kind":"gap","channels":[],"bands_hz":[],` +
		`"text":"512 frames were lost from 4.250 s on. Blocks that touch them are not averaged; if it happens again, look at the interface's cable and at what else the computer does."}`
	if err != nil || string(got) != want {
		t.Errorf("%s (%v), want %s", got, err, want)
	}
	events[0].Cause = CauseGain
	if got, _ := json.Marshal(events[0]); !strings.HasSuffix(string(got), `"cause":"gain"}`) {
		t.Errorf("%s does not end with its cause", got)
	}
}
