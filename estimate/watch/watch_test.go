package watch

import (
	"encoding/json"
	"fmt"
	"slices"
	"testing"
)

// tell runs blocks through a watch over S1, A1z and A2z, one character a block: '.' nothing, 'g' a
// gap, 'a' and 'b' A1z and A2z at the limit, 'c' both, 'x' a gap and A1z. It returns what happened
// in short.
func tell(blocks string) []string {
	w := New([]string{"S1", "A1z", "A2z"})
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
		for _, event := range w.Judge(nil, e) {
			story = append(story, fmt.Sprintf("%d %s %s since %d %v", event.Block, event.Kind, event.Edge, event.SinceBlock, event.Channels))
		}
	}
	return story
}

func TestStories(t *testing.T) {
	for _, test := range []struct {
		blocks string
		want   []string
	}{
		{"......", nil},
		{"..gg.", []string{"2 gap raised since 2 []", "4 gap cleared since 2 []"}},
		{"..gg", []string{"2 gap raised since 2 []"}}, // what stands at the end stays open
		{"a.", []string{"0 overrange raised since 0 [A1z]", "1 overrange cleared since 0 [A1z]"}},
		{".ab.", []string{"1 overrange raised since 1 [A1z]", "3 overrange cleared since 1 [A1z A2z]"}},
		{".c.", []string{"1 overrange raised since 1 [A1z A2z]", "2 overrange cleared since 1 [A1z A2z]"}},
		{"a.a.", []string{
			"0 overrange raised since 0 [A1z]", "1 overrange cleared since 0 [A1z]",
			"2 overrange raised since 2 [A1z]", "3 overrange cleared since 2 [A1z]"}},
		{".xg.", []string{
			"1 overrange raised since 1 [A1z]", "1 gap raised since 1 []",
			"2 overrange cleared since 1 [A1z]", "3 gap cleared since 1 []"}},
	} {
		if got := tell(test.blocks); !slices.Equal(got, test.want) {
			t.Errorf("%s: %q, want %q", test.blocks, got, test.want)
		}
	}
}

func TestStanding(t *testing.T) {
	w := New([]string{"S1"})
	w.Judge(nil, Evidence{AtLimit: []bool{true}, Lost: Lost{Frames: 1}})
	want := []string{
		"S1 reached the limit: lower its gain or the drive; averaging waits",
		"frames were lost: averaging waits for the first block without a gap",
	}
	if got := w.Standing(nil); !slices.Equal(got, want) {
		t.Errorf("standing %q, want %q", got, want)
	}
	w.Judge(nil, Evidence{Block: 1})
	if got := w.Standing(nil); len(got) != 0 {
		t.Errorf("%q stand after a good block", got)
	}
}

func TestEventAsWritten(t *testing.T) {
	w := New([]string{"S1"})
	events := w.Judge(nil, Evidence{Block: 7, StartS: 3.5, EndS: 4.5, Lost: Lost{StartS: 4.25, Frames: 512}})
	got, err := json.Marshal(events[0])
	want := `{"time_s":4.5,"block":7,"since_block":7,"edge":"raised","kind":"gap","channels":[],"bands_hz":[],` +
		`"text":"512 frames were lost from 4.250 s on. Blocks that touch them are not averaged; if it happens again, look at the interface's cable and at what else the computer does."}`
	if err != nil || string(got) != want {
		t.Errorf("%s (%v), want %s", got, err, want)
	}
}

func TestJudgingAGoodBlockAllocatesNothing(t *testing.T) {
	w := New([]string{"S1"})
	if allocs := testing.AllocsPerRun(20, func() { w.Judge(nil, Evidence{}) }); allocs != 0 {
		t.Errorf("%v allocations a block, want none", allocs)
	}
}
