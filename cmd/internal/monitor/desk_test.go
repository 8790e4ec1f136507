package monitor

import (
	"math"
	"slices"
	"testing"

	"shakerwatch/estimate/watch"
	"shakerwatch/web"
)

// A directed source asks for something at some of its frames, and waits until that is heard.
type directed struct {
	*recorded
	at       map[int64]web.Command // by frame, multiples of the portion
	commands chan web.Command
}

func (s *directed) Read(dst []float64) (int, error) {
	if c, ok := s.at[s.recorded.at]; ok {
		delete(s.at, s.recorded.at)
		s.commands <- c
	}
	return s.recorded.Read(dst)
}

func direct(t *testing.T, at map[int64]web.Command) *Result {
	t.Helper()
	r := newRig(t, 390, 20, 0.5) // blocks of 50 frames, every 25
	s := &directed{recorded: newRecorded(5, 6000), at: at, commands: make(chan web.Command)}
	s.portion = 20
	return mustRun(t, Config{Rig: r, Source: s, Commands: s.commands})
}

// frameOf is the source frame of the only event of a kind.
func frameOf(t *testing.T, r *Result, kind watch.Kind) int64 {
	t.Helper()
	frame := int64(-1)
	for _, e := range r.Events {
		if e.Kind != kind {
			continue
		}
		if frame >= 0 {
			t.Fatalf("%s twice", kind)
		}
		frame = int64(math.Round(e.TimeS * 1000))
	}
	if frame < 0 {
		t.Fatalf("no event %s among %d", kind, len(r.Events))
	}
	return frame
}

func TestPauseKeepsBlocksOut(t *testing.T) {
	result := direct(t, map[int64]web.Command{
		2000: {Kind: web.Pause}, 2400: {Kind: web.Pause}, 3000: {Kind: web.Resume}, 3200: {Kind: web.Resume},
	})
	from, to := frameOf(t, result, "paused"), frameOf(t, result, "resumed")
	var before, after int
	for start := range result.Snapshot.Starts.All() {
		switch {
		case start+50 <= from:
			before++
		case start >= to:
			after++
		default:
			t.Errorf("the block at %d is averaged though averaging paused from %d to %d", start, from, to)
		}
	}
	if before == 0 || after == 0 || result.Aside["paused"] == 0 {
		t.Errorf("%d blocks averaged before and %d behind the pause, %d set aside by it", before, after, result.Aside["paused"])
	}
	// Every block of the grid was seen, and nothing else kept one out.
	if want := int64((6000-50)/25 + 1); result.Seen != want || result.Averaged+result.SetAside != want || result.Aside["paused"] != result.SetAside {
		t.Errorf("counts %+v, %v", result.Counts, result.Aside)
	}
}

func TestStartOverBeginsAnew(t *testing.T) {
	result := direct(t, map[int64]web.Command{3000: {Kind: web.StartOver}})
	at := frameOf(t, result, "started-over")
	starts := slices.Collect(result.Snapshot.Starts.All())
	if len(starts) == 0 || starts[0] < at || starts[0] >= at+25 {
		t.Fatalf("started over at %d, first block at %v", at, starts[:min(3, len(starts))])
	}
	if result.Averaged != int64(len(starts)) || result.Seen != result.Averaged || result.SetAside != 0 {
		t.Errorf("counts %+v of %d blocks", result.Counts, len(starts))
	}
	// The same blocks averaged alone give the same bits.
	listed := mustRun(t, Config{Rig: newRig(t, 390, 20, 0.5), Source: newRecorded(5, 6000), Only: starts})
	if !sameBits(result, listed) {
		t.Error("something of the old average is left in the new one")
	}
}

func TestNotesAndFaultsAreEvents(t *testing.T) {
	r := newRig(t, 390, 20, 0.5)
	s := &directed{recorded: newRecorded(5, 3000), commands: make(chan web.Command), at: map[int64]web.Command{
		1000: {Kind: web.Note, Text: "door opened"}, 2000: {Kind: web.Break, Fault: "detach", Target: "S1"},
	}}
	s.portion = 20
	var published []watch.Event
	result := mustRun(t, Config{
		Rig: r, Source: s, Commands: s.commands,
		OnBreak: func(c web.Command) string { return "broken: " + c.Fault + " " + c.Target },
		OnEvent: func(e watch.Event) { published = append(published, e) },
	})
	var texts []string
	for _, e := range result.Events {
		if e.Kind == note {
			texts = append(texts, string(e.Kind)+": "+e.Text)
		}
	}
	if want := []string{"note: door opened", "note: broken: detach S1"}; !slices.Equal(texts, want) || len(published) != len(result.Events) {
		t.Errorf("events %q and %d published, want %q", texts, len(published), want)
	}
}
