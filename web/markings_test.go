package web

import (
	"math"
	"testing"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
)

// markedHub has the coherence of its three responses set to constants.
func markedHub(t *testing.T) (h *Hub, refresh func(coherences ...float64) string) {
	f := newFeed(t, 1, 3, 101)
	h = NewHub(Run{Rig: f.rig, Kind: "demo"})
	return h, func(coherences ...float64) string {
		e := f.estimates()
		for n := range e.MultipleCoherence {
			e.MultipleCoherence[n] = coherences[n%3]
		}
		for o := range 3 { // what lies outside of the judged band does not count
			e.MultipleCoherence[o] = 0
		}
		h.Refresh(Status{}, e)
		return string(h.markings.message.text)
	}
}

func TestLowCoherenceIsMarked(t *testing.T) {
	nan := math.NaN()
	for _, test := range []struct {
		name  string
		steps [][]float64
		want  string
	}{
		{"unknown", [][]float64{{nan, nan, nan}}, `"low_coherence":[],"known":[]`},
		{"well", [][]float64{{0.9, 0.51, 1}}, `"low_coherence":[],"known":[0,1,2]`},
		{"low", [][]float64{{0.9, 0.49, nan}}, `"low_coherence":[1],"known":[0,1]`},
		{"not yet well again", [][]float64{{0.9, 0.49, 1}, {0.9, 0.55, 1}}, `"low_coherence":[1],"known":[0,1,2]`},
		{"well again", [][]float64{{0.9, 0.49, 1}, {0.9, 0.61, 1}}, `"low_coherence":[],"known":[0,1,2]`},
		{"unknown again", [][]float64{{0.9, 0.49, 1}, {nan, nan, nan}}, `"low_coherence":[],"known":[]`},
	} {
		t.Run(test.name, func(t *testing.T) {
			_, refresh := markedHub(t)
			got := ""
			for _, coherences := range test.steps {
				got = refresh(coherences...)
			}
			if want := `{"type":"marks","standing":[],` + test.want + `}`; got != want {
				t.Errorf("%s, want %s", got, want)
			}
		})
	}
}

func TestLowCoherenceGoesByHalfOfTheLines(t *testing.T) {
	m := newMarkings(1, estimate.Target{First: 1, Last: 10})
	e := &estimate.Estimates{MultipleCoherence: make([]float64, 11)}
	e.Responses = 1
	for low := range 11 {
		for k := range e.MultipleCoherence {
			e.MultipleCoherence[k] = 0.9
			if k <= low {
				e.MultipleCoherence[k] = 0.1
			}
		}
		m.low[0] = false
		if m.judge(e); m.low[0] != (low > 5) {
			t.Errorf("with %d of 10 lines low the mark is %v", low, m.low[0])
		}
	}
}

func TestMarksAreSentWhenTheyChange(t *testing.T) {
	h, refresh := markedHub(t)
	refresh(1, 1, 1)
	first := h.markings.message.number
	refresh(0.9, 0.8, 0.7)
	h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: "note"})
	if n := h.markings.message.number; n != first {
		t.Errorf("%d messages say the same as the first", n-first)
	}
	h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: "dead-channel", Channels: []string{hostile}})
	m := read[struct {
		Standing []struct {
			Kind     string
			Channels []string
		}
	}](t, h.markings.message.text)
	if len(m.Standing) != 1 || m.Standing[0].Kind != "dead-channel" || m.Standing[0].Channels[0] != hostile {
		t.Errorf("%+v", m)
	}
}

func TestJudgingMarksAllocatesNothing(t *testing.T) {
	m := newMarkings(3, estimate.Target{First: 1, Last: 100})
	e := &estimate.Estimates{MultipleCoherence: make([]float64, 303)}
	e.Responses = 3
	if n := testing.AllocsPerRun(10, func() { m.judge(e) }); n > 0 {
		t.Errorf("%v allocations", n)
	}
}
