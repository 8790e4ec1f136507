package web

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
	"testing/synctest"

	"github.com/gorilla/websocket"

	"shakerwatch/estimate"
	"shakerwatch/estimate/setup"
)

// What a page reads of a setup check.
type readSetup struct {
	Type                              string
	Stages                            []setupStage
	Stage, Do, Beware, Worst, Summary string
	Waiting, Ended                    bool
	Part                              *float64
}

type readFindings struct {
	Findings []struct {
		Mark, Stage, Unit, Text string
		Channels                []string
		Number                  *float64
		BandsHz                 [][2]*float64 `json:"bands_hz"`
	}
}

func waitingFor(stage setup.Stage) SetupState { return SetupState{Stage: stage, Waiting: true} }

// proceeds counts what lies ready in Proceed, and takes it.
func (h *Hub) proceeds() (n int) {
	for {
		select {
		case <-h.Proceed():
			n++
		default:
			return n
		}
	}
}

func TestSetupMessage(t *testing.T) {
	nan := math.NaN()
	tests := []struct {
		name   string
		state  SetupState
		states string
		part   float64 // NaN: unknown
	}{
		{"waiting for the first", waitingFor(setup.Muted), "now next next", 0},
		{"measuring the second", SetupState{Stage: setup.Idle, Part: 0.25, Done: []setup.Stage{setup.Muted}}, "done now next", 0.25},
		{"no part known", SetupState{Stage: setup.Idle, Part: nan}, "next now next", nan},
		{"measuring once more", SetupState{Stage: setup.Idle, Part: 0.5, Done: []setup.Stage{setup.Muted, setup.Idle}}, "done now next", 0.5},
		{"ended", SetupState{Stage: setup.Low, Part: 1, Done: setup.Stages(), Ended: true, Summary: "2 in order"}, "done done done", 1},
		{"ended early", SetupState{Stage: setup.Idle, Done: []setup.Stage{setup.Muted}, Ended: true}, "done left-out left-out", 0},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			m := read[readSetup](t, setupMessage(test.state))
			var states []string
			for _, stage := range m.Stages {
				states = append(states, stage.State)
			}
			if got := strings.Join(states, " "); got != test.states {
				t.Errorf("stages are %s, want %s", got, test.states)
			}
			s := test.state
			if m.Type != "setup" || m.Stage != s.Stage.String() || m.Waiting != s.Waiting || m.Ended != s.Ended || m.Summary != s.Summary {
				t.Errorf("%+v", m)
			}
			if (m.Part == nil) != math.IsNaN(test.part) || m.Part != nil && *m.Part != test.part {
				t.Errorf("part %v, want %g", m.Part, test.part)
			}
		})
	}
}

// What a person is to beware of stands by itself on the page, so it has to be found in every instruction.
func TestInstructionIsPartedWhole(t *testing.T) {
	for _, stage := range setup.Stages() {
		do, beware := instruction(stage)
		if do+" "+beware != stage.Instruction() {
			t.Errorf("%v: %q and %q are not the whole instruction", stage, do, beware)
		}
		if !strings.HasPrefix(beware, "Keep clear") {
			t.Errorf("%v: the caution is %q", stage, beware)
		}
	}
}

func TestFindingsMessage(t *testing.T) {
	nan, inf := estimate.Number(math.NaN()), math.Inf(1)
	given := []setup.Finding{
		{Stage: setup.Muted, Severity: setup.Info, Channels: []string{"S1"}, Number: 3, Unit: "N", Text: "S1: noise 3 N"},
		{Stage: setup.Low, Severity: setup.Info, Number: nan, Text: "unknown: measure again"},
		{Stage: setup.Idle, Severity: setup.Look, Channels: []string{"S1", hostile}, Number: 7, Unit: "dB", BandsHz: [][2]float64{{50, 51}, {60, inf}}, Text: "S1, " + hostile + ": " + hostile},
		{Stage: setup.Low, Severity: setup.Stop, Channels: []string{"A1z"}, Number: nan, Text: "dead"},
		{Stage: setup.Idle, Severity: setup.Look, Channels: []string{"A1z"}, Text: "second"},
	}
	before := slices.Clone(given)
	text := findingsMessage(given)
	for i := range given {
		if given[i].Text != before[i].Text {
			t.Fatal("the caller's findings were put into another order")
		}
	}
	m := read[readFindings](t, text)
	var got []string
	for _, f := range m.Findings {
		got = append(got, f.Mark+" "+f.Text)
	}
	want := []string{"stop dead", "look " + hostile, "look second", "unknown unknown: measure again", "fine noise 3 N"}
	if !slices.Equal(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
	if f := m.Findings[1]; f.Stage != "idle" || *f.Number != 7 || f.Unit != "dB" || *f.BandsHz[0][1] != 51 || f.BandsHz[1][1] != nil {
		t.Errorf("%+v", f)
	}
	if f := m.Findings[3]; f.Number != nil || f.Channels == nil || f.BandsHz == nil {
		t.Errorf("%+v", f)
	}
	if worst(given) != "stop" || worst(given[:2]) != "unknown" || worst(given[:1]) != "fine" || worst(nil) != "" {
		t.Error("the worst finding is not the worst")
	}
}

// The page's order and words are those of the summary, whatever the findings.
func TestMarksAgreeWithTheSummary(t *testing.T) {
	counts := map[string]string{"stop": "1 to stop for", "look": "1 to look at", "unknown": "1 unknown", "fine": "1 in order"}
	for severity := setup.Info; severity <= setup.Stop; severity++ {
		for _, number := range []float64{1, math.NaN()} {
			f := setup.Finding{Severity: severity, Number: estimate.Number(number)}
			if got := counts[mark(f)]; got != setup.Summary([]setup.Finding{f}) {
				t.Errorf("severity %v, number %g is marked %q and counted as %q", severity, number, got, setup.Summary([]setup.Finding{f}))
			}
		}
	}
}

func TestMeasureIsTakenOnceAndOnlyForTheStageWaitedFor(t *testing.T) {
	muted, idle := setup.Muted, setup.Idle
	measuring := func(stage setup.Stage) SetupState { return SetupState{Stage: stage} }
	tests := []struct {
		name string
		play func(h *Hub)
		want int
	}{
		{"without a setup check", func(h *Hub) { h.askMeasure(muted) }, 0},
		{"waiting", func(h *Hub) { h.PublishSetup(waitingFor(muted)); h.askMeasure(muted) }, 1},
		{"twice", func(h *Hub) { h.PublishSetup(waitingFor(muted)); h.askMeasure(muted); h.askMeasure(muted) }, 1},
		{"of a page that is late", func(h *Hub) { h.PublishSetup(waitingFor(idle)); h.askMeasure(muted) }, 0},
		{"of a page that is early", func(h *Hub) { h.PublishSetup(waitingFor(muted)); h.askMeasure(idle) }, 0},
		{"while measuring", func(h *Hub) { h.PublishSetup(measuring(muted)); h.askMeasure(muted) }, 0},
		{"after the end", func(h *Hub) {
			h.PublishSetup(SetupState{Stage: muted, Waiting: true, Ended: true})
			h.askMeasure(muted)
		}, 0},
		{"after the program's end", func(h *Hub) { h.PublishSetup(waitingFor(muted)); h.Ended("done"); h.askMeasure(muted) }, 0},
		{"after finish", func(h *Hub) { h.PublishSetup(waitingFor(muted)); h.askFinish(); h.askMeasure(muted) }, 0},
		{"published anew meanwhile", func(h *Hub) {
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
		}, 1},
		{"not fetched before the next stage", func(h *Hub) {
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
			h.PublishSetup(waitingFor(idle))
		}, 0},
		{"not fetched before measuring", func(h *Hub) {
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
			h.PublishSetup(measuring(muted))
		}, 0},
		{"a second click after the first was fetched", func(h *Hub) {
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
			h.proceeds()
			h.askMeasure(muted)
		}, 0},
		{"the same stage again", func(h *Hub) {
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
			h.proceeds()
			h.PublishSetup(measuring(muted))
			h.PublishSetup(waitingFor(muted))
			h.askMeasure(muted)
		}, 1},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			h := NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true})
			test.play(h)
			if got := h.proceeds(); got != test.want {
				t.Errorf("%d values, want %d", got, test.want)
			}
		})
	}
}

func TestPagesSeeTheSetupCheck(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		first := l.dial(t)
		defer first.conn.Close()
		h.PublishSetup(waitingFor(setup.Muted))
		if m := read[readSetup](t, first.next("setup")); m.Stage != "muted" || !m.Waiting {
			t.Errorf("%+v", m)
		}
		first.next("findings")
		first.ask(`{"type":"measure","stage":"idle"}`)
		if m := read[readSetup](t, first.next("setup")); m.Stage != "muted" { // so that its button does not stay spent
			t.Errorf("after a word that was not taken: %+v", m)
		}
		first.ask(`{"type":"measure","stage":"muted"}`)
		<-h.Proceed()

		found := []setup.Finding{{Stage: setup.Muted, Severity: setup.Look, Channels: []string{"S1"}, Number: 1, Text: "S1: look"}}
		s := SetupState{Stage: setup.Idle, Waiting: true, Done: []setup.Stage{setup.Muted}, Findings: found}
		h.PublishSetup(s)
		found[0].Text, s.Done[0] = "changed", setup.Low // the hub keeps no hold of them
		later := l.dial(t)
		defer later.conn.Close()
		for name, c := range map[string]*client{"the first page": first, "a page that comes later": later} {
			if m := read[readSetup](t, c.next("setup")); m.Stage != "idle" || m.Stages[0].State != "done" {
				t.Errorf("%s: %+v", name, m)
			}
			if m := read[readFindings](t, c.next("findings")); len(m.Findings) != 1 || m.Findings[0].Text != "look" {
				t.Errorf("%s: %+v", name, m)
			}
		}
	})
}

// Progress comes many times and the findings may be thousands: they are sent when they change.
func TestFindingsAreSentOnce(t *testing.T) {
	h := NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true})
	s := SetupState{Findings: []setup.Finding{{Text: "one"}}}
	var page sent
	var kinds []string
	for n := range 4 {
		s.Part = float64(n) / 4
		if n == 3 {
			s.Findings = append(s.Findings, setup.Finding{Text: "two"})
		}
		h.PublishSetup(s)
		for _, text := range h.news(&page, false, 0) {
			kinds = append(kinds, read[struct{ Type string }](t, text).Type)
		}
	}
	if got := strings.Join(kinds, " "); got != "setup findings setup setup setup findings" {
		t.Error(got)
	}
}

// A page that does not read holds up nobody, however large the findings.
func TestPublishSetupWaitsForNobody(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		stuck := l.dial(t)
		defer stuck.conn.Close()
		stuck.next("access")
		for n := range 100 {
			h.PublishSetup(SetupState{Stage: setup.Low, Part: float64(n) / 100, Findings: []setup.Finding{{Text: fmt.Sprint(n, strings.Repeat("x", 1<<16))}}})
			synctest.Wait()
		}
		if m := read[readSetup](t, stuck.next("setup")); *m.Part > 0.02 {
			t.Errorf("part %g was sent first", *m.Part)
		}
		for m := (readSetup{}); m.Part == nil || *m.Part < 0.99; {
			m = read[readSetup](t, stuck.next("setup")) // the newest follows
		}
	})
}

func TestAnUnknownStageEndsTheConnection(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		h.PublishSetup(waitingFor(setup.Muted))
		c := l.dial(t)
		defer c.conn.Close()
		c.next("findings")
		c.ask(`{"type":"measure","stage":"full power"}`)
		_, _, err := c.conn.ReadMessage()
		if !websocket.IsCloseError(err, websocket.ClosePolicyViolation) || h.proceeds() != 0 {
			t.Errorf("ended with %v", err)
		}
	})
}

func TestPublishSetupPanicsWithWhatDoesNotExist(t *testing.T) {
	for name, s := range map[string]SetupState{
		"stage":              {Stage: 3},
		"negative stage":     {Stage: -1},
		"stage done":         {Done: []setup.Stage{7}},
		"stage of a finding": {Findings: []setup.Finding{{Stage: 3}}},
		"severity":           {Findings: []setup.Finding{{Severity: 3}}},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if got := fmt.Sprint(recover()); !strings.HasPrefix(got, "web: ") {
					t.Errorf("panic %q", got)
				}
			}()
			NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}).PublishSetup(s)
		})
	}
}
