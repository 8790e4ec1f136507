package web

import (
	"encoding/json"
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"shakerwatch/estimate"
)

// A refresh as a page reads it.
type readRefresh struct {
	Type   string
	Number int64
	Status struct {
		TimeS      *float64 `json:"time_s"`
		Averaged   int64
		Needed     *float64
		Worst      string
		WorstError *float64 `json:"worst_error"`
		Verdict    estimate.Verdict
	}
	View struct {
		Response, Force, Pair, First, Last int
		Log                                bool
		Runs                               [][2]int
		Parts                              []string
		Coherence                          []int
		Names                              map[string][]string
	}
	Curves map[string]json.RawMessage
}

func read[T any](t *testing.T, text []byte) T {
	t.Helper()
	var v T
	if err := json.Unmarshal(text, &v); err != nil {
		t.Fatalf("%v in %.200s", err, text)
	}
	return v
}

func (h *Hub) refreshFor(t *testing.T, v view) readRefresh {
	t.Helper()
	text, number := h.results.message(v)
	m := read[readRefresh](t, text)
	if m.Type != "refresh" || m.Number != number {
		t.Fatalf("type %q, number %d, want refresh %d", m.Type, m.Number, number)
	}
	return m
}

func TestRefreshCarriesTheEstimates(t *testing.T) {
	f := newFeed(t, 2, 14, 401)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	f.add(30)
	st, e := f.refresh(h)
	v := h.first
	v.response, v.force, v.shown = 3, 1, shown(5, 1)
	m := h.refreshFor(t, v)

	check := func(name string, want func(line int) float64) {
		t.Helper()
		got := m.curve(t, name)
		if len(got) != e.Lines {
			t.Fatalf("%s has %d points for %d lines", name, len(got), e.Lines)
		}
		for k, v := range got {
			if v == nil || math.Abs(*v-want(k)) > math.Max(0.51*steps()[name], 5e-3*math.Abs(want(k))) {
				t.Fatalf("%s at line %d: %v, want %g", name, k, v, want(k))
			}
		}
	}
	size := func(k int) float64 { return cmplx.Abs(e.H[(k*14+3)*2+1]) }
	check("coherence.worst", func(k int) float64 { return slices.Min(e.MultipleCoherence[k*14 : (k+1)*14]) })
	check("independence.condition", func(k int) float64 { return e.ForceCondition[k] })
	check("response.size", func(k int) float64 { return 20 * math.Log10(size(k)) })
	check("response.phase", func(k int) float64 { return 180 / math.Pi * cmplx.Phase(e.H[(k*14+3)*2+1]) })
	radius := func(k int) float64 { return e.ConfidenceRadius[(k*14+3)*2+1] }
	check("response.high", func(k int) float64 { return 20 * math.Log10(size(k)+radius(k)) })
	check("response.low", func(k int) float64 { return 20 * math.Log10(math.Max(size(k)-radius(k), size(k)*lowestShare)) })
	check("response.phase_high", func(k int) float64 {
		if radius(k) >= size(k) {
			return 180
		}
		return math.Min(180, 180/math.Pi*(cmplx.Phase(e.H[(k*14+3)*2+1])+math.Asin(radius(k)/size(k))))
	})
	check("coherence.partial", func(k int) float64 { return e.PartialCoherence[(k*14+3)*2+1] })
	check("coherence.chance", func(int) float64 { return e.Chance.Multiple })
	check("reciprocity.error", func(k int) float64 { return 100 * e.ReciprocityError[k] })

	spectrum := m.curveList(t, "forces.spectrum")
	if want := 10 * math.Log10(real(st.Gxx[200*4+3])); math.Abs(*spectrum[1][200]-want) > spectrumStep {
		t.Errorf("spectrum of the second force at line 200: %g dB, want %g", *spectrum[1][200], want)
	}
	coherence := m.curveList(t, "coherence.shown")
	if want := e.MultipleCoherence[200*14+1]; len(coherence) != 2 || math.Abs(*coherence[1][200]-want) > 1e-4 {
		t.Errorf("chosen coherences %d, the second at line 200 %g, want %g", len(coherence), *coherence[1][200], want)
	}
	worst := read[[]int](t, m.Curves["coherence.worst_of"])
	if row := e.MultipleCoherence[200*14 : 201*14]; row[worst[200]] != slices.Min(row) {
		t.Errorf("response %d is said to be the worst at line 200", worst[200])
	}
	if names := m.View.Names; names["response.size"][0] != "A4z/S2" || names["coherence.shown"][1] != hostile || names["reciprocity.ab"][0] != "at S1 from S2" {
		t.Errorf("names %v", names)
	}
	if m.Status.Averaged != 30 || m.Status.Worst == "" || *m.Status.WorstError != f.progress.Errors[f.progress.Worst] {
		t.Errorf("status %+v", m.Status)
	}
	if points := read[[][2]float64](t, m.Curves["convergence.error"]); len(points) != 1 || points[0][0] != 30 {
		t.Errorf("convergence %v", points)
	}
}

func TestRefreshSaysWhatIsUnknown(t *testing.T) {
	f := newFeed(t, 2, 3, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	if text, number := h.results.message(h.first); text != nil || number != 0 {
		t.Errorf("before the first refresh: number %d, %s", number, text)
	}

	h.Refresh(Status{TimeS: math.NaN(), AveragesNeeded: estimate.Number(math.NaN())}, nil)
	m := h.refreshFor(t, h.first)
	if m.Curves["coherence.worst"] != nil || m.Status.TimeS != nil || m.Status.Needed != nil || m.Status.WorstError != nil || m.Status.Worst != "" {
		t.Errorf("without estimates: %+v", m)
	}

	f.add(1) // fewer averages than forces
	st, _ := f.refresh(h)
	m = h.refreshFor(t, h.first)
	for _, name := range []string{"coherence.worst", "coherence.tenth", "independence.raw", "response.size", "response.phase", "response.low", "reciprocity.ab", "reciprocity.error"} {
		for k, v := range m.curve(t, name) {
			if v != nil {
				t.Fatalf("%s at line %d after one average: %g", name, k, *v)
			}
		}
	}

	st.Gxx = nil
	h.Refresh(st, f.estimates())
	spectrum := h.refreshFor(t, h.first).curveList(t, "forces.spectrum")
	for _, v := range append(spectrum[0], spectrum[1]...) {
		if v != nil {
			t.Fatal("force spectra without Gxx")
		}
	}
}

func TestRefreshGivesTheFormerEstimatesBack(t *testing.T) {
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	first, second := f.estimates(), f.estimates()
	for i, test := range []struct{ give, want *estimate.Estimates }{
		{nil, nil}, {first, nil}, {nil, nil}, {second, first}, {first, second},
	} {
		if got := h.Refresh(Status{}, test.give); got != test.want {
			t.Errorf("call %d gave back %p, want %p", i, got, test.want)
		}
	}
}

func TestRefreshThinsToTheBandThatIsShown(t *testing.T) {
	f := newFeed(t, 1, 2, 2401)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	f.add(10)
	_, e := f.refresh(h)
	whole := h.refreshFor(t, h.first)
	if n := len(whole.curve(t, "response.size")); whole.points() != 801 || n != 801 {
		t.Errorf("the whole band has %d points, %v", n, whole.View.Runs)
	}
	bounds := func(values []*float64) (lo, hi float64) {
		lo, hi = math.Inf(1), math.Inf(-1)
		for _, v := range values {
			if v != nil {
				lo, hi = min(lo, *v), max(hi, *v)
			}
		}
		return lo, hi
	}
	size := make([]*float64, e.Lines)
	for k := range size {
		v := decibels(cmplx.Abs(e.H[k*2]))
		size[k] = &v
	}
	lo, hi := bounds(whole.curve(t, "response.size"))
	if wantLo, wantHi := bounds(size); math.Abs(lo-wantLo) > 0.01 || math.Abs(hi-wantHi) > 0.01 {
		t.Errorf("thinned, the frequency response reaches from %g to %g dB, want %g to %g", lo, hi, wantLo, wantHi)
	}
	force := whole.curveList(t, "forces.spectrum")[0]
	lo, hi = bounds(force)
	wantLo, wantHi := powerDecibels(slices.Min(e.PrincipalForces)), powerDecibels(slices.Max(e.PrincipalForces)) // the same with one force
	if math.Abs(lo-wantLo) > spectrumStep || math.Abs(hi-wantHi) > spectrumStep {
		t.Errorf("thinned, the force spectrum reaches from %g to %g dB, want %g to %g", lo, hi, wantLo, wantHi)
	}
	lo, _ = bounds(whole.curve(t, "coherence.worst"))
	if want := slices.Min(e.MultipleCoherence); math.Abs(lo-want) > 1e-4 {
		t.Errorf("thinned, the worst coherence is %g, want %g", lo, want)
	}
	v := h.first
	h.shape.band(&v, 100, 200)
	part := h.refreshFor(t, v)
	if n := len(part.curve(t, "response.size")); !slices.Equal(part.View.Runs, [][2]int{{161, 1}}) || n != 161 || part.View.First != 160 {
		t.Errorf("100 to 200 Hz has %d points %v from line %d on", n, part.View.Runs, part.View.First)
	}
}

// One message is made for all pages that look at the same, and none twice for the same refresh.
func TestMessagesAreMadeOnce(t *testing.T) {
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	f.refresh(h)
	a, _ := h.results.message(h.first)
	b, _ := h.results.message(h.first)
	if &a[0] != &b[0] {
		t.Error("the same view was made twice")
	}
	v := h.first
	for i := range 10 * maxBrowsers {
		v.last = 20 + i%80
		v.first = i / 80
		h.results.message(v)
		if len(h.results.views) > maxBrowsers {
			t.Fatalf("%d messages are kept", len(h.results.views))
		}
	}
}

func TestHubPanicsWhenTheCallerMixesShapes(t *testing.T) {
	f, other := newFeed(t, 2, 3, 101), newFeed(t, 2, 4, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	for name, call := range map[string]func(){
		"estimates of another rig": func() { h.Refresh(Status{}, other.estimates()) },
		"Gxx of another rig":       func() { h.Refresh(Status{Gxx: make([]complex128, 5)}, f.estimates()) },
		"too few levels":           func() { h.PublishLevels(Levels{RMS: make([]float64, 5), Peak: make([]float64, 4)}) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			call()
		})
	}
}

func TestDescription(t *testing.T) {
	f := newFeed(t, 2, 3, 101)
	d := read[struct {
		Type, Run, Title, Kind string
		Channels               []channel
		Forces, Lines          int
		Pairs                  [][2]int
		SpacingHz              float64 `json:"spacing_hz"`
		HopS                   float64 `json:"hop_s"`
		Target                 struct {
			FirstHz float64 `json:"first_hz"`
		}
		Plots []struct {
			ID     string
			Option map[string]any
		}
	}](t, NewHub(Run{Rig: f.rig, Kind: "recording", Saves: true}).description)
	if d.Type != "describe" || d.Run == "" || d.Title != f.rig.Title || d.Kind != "recording" {
		t.Errorf("%q %q %q %q", d.Type, d.Run, d.Title, d.Kind)
	}
	if d.Forces != 2 || len(d.Channels) != 5 || d.Channels[1] != (channel{"S2", "2", "+z", "N", "force"}) || d.Channels[3].Name != hostile {
		t.Errorf("%d forces of channels %+v", d.Forces, d.Channels)
	}
	if d.Lines != 101 || d.SpacingHz != 0.625 || d.Target.FirstHz != 10 || !slices.Equal(d.Pairs, [][2]int{{0, 1}}) || len(d.Plots) != 7 {
		t.Errorf("%+v", d)
	}
	if want := float64(f.rig.Grid.Hop) / f.rig.Grid.RateHz; math.Abs(d.HopS-want) > 1e-12 {
		t.Errorf("hop %g s, want %g", d.HopS, want)
	}
	if again := NewHub(Run{Rig: f.rig, Kind: "recording", Saves: true}).description; string(again) == string(NewHub(Run{Rig: f.rig, Kind: "recording", Saves: true}).description) {
		t.Error("two runs have the same name")
	}
}

func TestPublishLevelsKeepsNoHold(t *testing.T) {
	f := newFeed(t, 1, 1, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	l := Levels{TimeS: 1.5, RMS: []float64{0.25, math.NaN()}, Peak: []float64{1, 0.5}, Block: 0.75}
	h.PublishLevels(l)
	l.RMS[0], l.Peak[0] = 9, 9
	const want = `{"type":"levels","time_s":1.50,"block":0.75,"rms":[0.25,null],"peak":[1,0.5]}`
	if got := string(h.levels.text); got != want {
		t.Errorf("%s, want %s", got, want)
	}
}
