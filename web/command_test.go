package web

import (
	"fmt"
	"slices"
	"testing"

	"shakerwatch/acquire/rig"
)

var testFaults = []Fault{
	{Code: "detach", Name: "stinger off", Targets: []string{"S1", "S2"}},
	{Code: "lost", Name: "frames lost", Once: true},
}

func faultyHub(t *testing.T) *Hub {
	return NewHub(Run{Rig: madeRig(t, 2, 3, 101), Kind: "demo", Faults: testFaults})
}

func TestCommandsComeInOrder(t *testing.T) {
	h := faultyHub(t)
	want := []Command{{Kind: StartOver}, {Kind: Pause}, {Kind: Note, Text: "one"}, {Kind: Break, Fault: "detach", Target: "S2"}}
	for _, c := range want {
		if no := h.askCommand(c); no != "" {
			t.Fatalf("%v: %s", c, no)
		}
	}
	for _, c := range want {
		if got := <-h.Commands(); got != c {
			t.Errorf("got %v, want %v", got, c)
		}
	}
}

func TestCommandsThatMakeNoSenseAreRefused(t *testing.T) {
	paused := func(h *Hub) { h.Refresh(Status{Paused: true}, nil) }
	broken := func(h *Hub) { h.askCommand(Command{Kind: Break, Fault: "detach", Target: "S1"}) }
	for _, test := range []struct {
		name   string
		before func(h *Hub)
		c      Command
		want   string
	}{
		{"resume what runs", nil, Command{Kind: Resume}, "The average is not paused."},
		{"resume what is paused", paused, Command{Kind: Resume}, ""},
		{"pause what is paused", paused, Command{Kind: Pause}, "The average is paused already."},
		{"start over while paused", paused, Command{Kind: StartOver}, ""},
		{"after the end", func(h *Hub) { h.Ended("done") }, Command{Kind: Note, Text: "x"}, "The run has ended."},
		{"while finishing", func(h *Hub) { h.askFinish() }, Command{Kind: Pause}, "The run is finishing."},
		{"in a setup check", func(h *Hub) { h.PublishSetup(SetupState{}) }, Command{Kind: Pause}, "This is a setup check: nothing is averaged."},
		{"pause given blocks", func(h *Hub) { h.commands.fixed = true }, Command{Kind: Pause}, "This run averages the blocks it was given: they cannot be changed."},
		{"a note on given blocks", func(h *Hub) { h.commands.fixed = true }, Command{Kind: Note, Text: "x"}, ""},
		{"an unknown fault", nil, Command{Kind: Break, Fault: "melt", Target: "S1"}, "The simulated rig has nothing of that kind to break."},
		{"an unknown target", nil, Command{Kind: Break, Fault: "detach", Target: "S3"}, "The simulated rig has nothing of that kind to break."},
		{"no target", nil, Command{Kind: Break, Fault: "detach"}, "The simulated rig has nothing of that kind to break."},
		{"a target too many", nil, Command{Kind: Break, Fault: "lost", Target: "S1"}, "The simulated rig has nothing of that kind to break."},
		{"what needs no target", nil, Command{Kind: Break, Fault: "lost"}, ""},
		{"broken twice", broken, Command{Kind: Break, Fault: "detach", Target: "S1"}, "That is broken already."},
		{"broken elsewhere too", broken, Command{Kind: Break, Fault: "detach", Target: "S2"}, ""},
		{"mend what is broken", broken, Command{Kind: Mend, Fault: "detach", Target: "S1"}, ""},
		{"mend what is sound", broken, Command{Kind: Mend, Fault: "detach", Target: "S2"}, "That is not broken."},
	} {
		t.Run(test.name, func(t *testing.T) {
			h := faultyHub(t)
			if test.before != nil {
				test.before(h)
			}
			if got := h.askCommand(test.c); got != test.want {
				t.Errorf("got %q, want %q", got, test.want)
			}
		})
	}
}

// Nobody fetches: pages are refused, and the hub does not wait.
func TestCommandsThatNobodyTakesAreRefused(t *testing.T) {
	h := faultyHub(t)
	for range commandsWaiting {
		if no := h.askCommand(Command{Kind: StartOver}); no != "" {
			t.Fatal(no)
		}
	}
	asked, broken := h.commands.asked.number, h.commands.broken.number
	for _, c := range []Command{{Kind: StartOver}, {Kind: Break, Fault: "detach", Target: "S1"}} {
		if no := h.askCommand(c); no != "The program is busy with what was asked before. Try again in a moment." {
			t.Errorf("%v: %q", c, no)
		}
	}
	if h.commands.asked.number != asked || h.commands.broken.number != broken {
		t.Error("pages are told of a command that was refused")
	}
	<-h.Commands()
	if no := h.askCommand(Command{Kind: StartOver}); no != "" {
		t.Errorf("with room again: %q", no)
	}
}

func TestPagesAreToldWhatIsBroken(t *testing.T) {
	h := faultyHub(t)
	for _, step := range []struct {
		c    Command
		want string
	}{
		{Command{Kind: Break, Fault: "detach", Target: "S2"}, `[["detach","S2"]]`},
		{Command{Kind: Break, Fault: "lost"}, `[["detach","S2"]]`}, // it is over at once
		{Command{Kind: Break, Fault: "detach", Target: "S1"}, `[["detach","S2"],["detach","S1"]]`},
		{Command{Kind: Mend, Fault: "detach", Target: "S2"}, `[["detach","S1"]]`},
		{Command{Kind: Mend, Fault: "detach", Target: "S1"}, `[]`},
	} {
		if no := h.askCommand(step.c); no != "" {
			t.Fatal(no)
		}
		if got, want := string(h.commands.broken.text), fmt.Sprintf(`{"type":"broken","faults":%s}`, step.want); got != want {
			t.Errorf("after %v: %s, want %s", step.c, got, want)
		}
	}
}

func TestDescriptionHasPointsAndFaults(t *testing.T) {
	r := madeRig(t, 1, 1, 101)
	r.Points = nil
	read := func(run Run) description { return read[description](t, NewHub(run).description) }
	if d := read(Run{Rig: r}); d.Points == nil || len(d.Points) > 0 || d.Faults == nil || len(d.Faults) > 0 || d.Fixed {
		t.Errorf("without any: points %v, faults %v", d.Points, d.Faults)
	}
	r.Points = []rig.Point{{Name: hostile, X: 1, Y: -2.5, Z: 0}}
	d := read(Run{Rig: r, Faults: testFaults, Fixed: true})
	if !slices.Equal(d.Points, []point{{hostile, [3]float64{1, -2.5, 0}}}) || !d.Fixed {
		t.Errorf("points %v, fixed %v", d.Points, d.Fixed)
	}
	if len(d.Faults) != 2 || d.Faults[0].Targets[1] != "S2" || d.Faults[1].Targets == nil || !d.Faults[1].Once {
		t.Errorf("faults %+v", d.Faults)
	}
}
