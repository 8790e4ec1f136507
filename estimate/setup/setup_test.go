package setup

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

func TestHealthyRigHasNothingFlagged(t *testing.T) {
	r := parseRig(t, madeRig)
	for seed := range uint64(4) {
		findings := Findings(r, newTrial(seed).measure(t, r)...)
		if got := flagged(findings); len(got) > 0 {
			t.Errorf("seed %d: %q", seed, got)
		}
		// Each channel: noise level twice, rise, offset, headroom, signal-to-noise. Each force: power
		// flow, drop. Hum once.
		if want := 6*madeChannels + 2*2 + 1; len(findings) != want {
			t.Errorf("seed %d: %d findings, want %d", seed, len(findings), want)
		}
	}
}

// checkShape tests what holds for all findings.
func checkShape(t *testing.T, findings []Finding) {
	t.Helper()
	if !slices.IsSortedFunc(findings, func(a, b Finding) int { return int(b.Severity - a.Severity) }) {
		t.Error("the worst findings do not come first")
	}
	for i, f := range findings {
		if i > 0 && f.Severity == findings[i-1].Severity && f.first() < findings[i-1].first() {
			t.Errorf("%q stands behind %q: not in the order of the channels", f.Text, findings[i-1].Text)
		}
		if f.Channels == nil || f.BandsHz == nil {
			t.Errorf("%q has a nil list", f.Text)
		}
		if strings.ContainsAny(f.Text, "\n\t") || strings.Contains(f.Text, "%!") || strings.Contains(f.Text, "NaN") || strings.Contains(f.Text, "Inf") {
			t.Errorf("text %q", f.Text)
		}
		if f.Severity > Info && !strings.Contains(strings.TrimPrefix(f.Text, strings.Join(f.Channels, ", ")+": "), ":") {
			t.Errorf("%q does not say what to do", f.Text)
		}
	}
}

func TestNumbers(t *testing.T) {
	r, s := parseRig(t, madeRig), newTrial(2)
	s.low.change(chA3z, plus(10))
	s.low[chA4x][100] = -25
	findings := Findings(r, s.measure(t, r)...)
	for _, test := range []struct {
		stage     Stage
		kind      Kind
		channel   string
		want, tol float64
		unit      string
		why       string
	}{
		{Idle, NoiseLevel, "S1", madeForceNoise * math.Sqrt(980.0/1280), 0.03 * madeForceNoise, "N", "white noise up to 1280 Hz, of which the band of interest has 980 Hz"},
		{Muted, NoiseLevel, "A5g", madeResponseNoise * math.Sqrt(980.0/1280), 0.03 * madeResponseNoise, "m/s²", "results are in m/s², also for a sensor in g"},
		{Low, DCOffset, "A3z", 1, 0.01, "V", "10 m/s² at 0.1 V per m/s²"},
		{Low, Headroom, "A4x", 12.04, 0.01, "dB", "-2.5 V of 10 V: 20 log10 4"},
		{Low, SignalToNoise, "S2", 60, 0.5, "dB", "20 N over 0.02 N: 20 log10 1000"},
		{Idle, NoiseRise, "A2z", 0, 0.5, "dB", "equal noise in both stages"},
		{Low, PowerFlow, "S1", 1, 0.01, "", "power flows in on every line"},
	} {
		f := find(t, findings, test.stage, test.kind, test.channel)
		if !(math.Abs(float64(f.Number)-test.want) <= test.tol) || f.Unit != test.unit {
			t.Errorf("%s of %s: %v %s, want %v %s (%s)", test.kind, test.channel, f.Number, f.Unit, test.want, test.unit, test.why)
		}
	}
}

// TestLimitIsThatOfTheChain: a conditioner that clips at 5 V before an input of 10 V.
func TestLimitIsThatOfTheChain(t *testing.T) {
	r := parseRig(t, strings.Replace(madeRig, "name = \"S1\"", "name = \"S1\"\nlimit = 5.0", 1))
	findings := Findings(r, newTrial(2).measure(t, r)...)
	f := find(t, findings, Idle, NoiseLevel, "S1")
	// 5 V at 0.01 V per N are 500 N.
	if want := fmt.Sprintf(" %.1f dB below its limit", 20*math.Log10(500/float64(f.Number))); !strings.HasSuffix(f.Text, want) {
		t.Errorf("%q, want %q", f.Text, want)
	}
	if f := find(t, findings, Low, Headroom, "S1"); !strings.Contains(f.Text, " of 5 V") {
		t.Errorf("%q", f.Text)
	}
}

// TestDropAndMargin: where a flat force falls towards flat noise, what it has lost against its neighbours
// and what is left above the noise are together its signal-to-noise elsewhere: 26 dB here, less 2 dB
// for the skirts of the notch, which reach its neighbours.
func TestDropAndMargin(t *testing.T) {
	r, s := parseRig(t, madeRig), newTrial(5)
	s.low = driven(5, madeFrames, func(forces scene) { forces.notch(chS1) })
	s.hiss(chS1, 1)
	f := find(t, Findings(r, s.measure(t, r)...), Low, ForceDrop, "S1")
	var hz, margin, drop float64
	_, err := fmt.Sscanf(f.Text, "S1: nearest to its noise at %f Hz, %f dB above it and %f dB below its neighbours", &hz, &margin, &drop)
	if err != nil || math.Abs(hz-500) > 5 || math.Abs(margin+drop-24) > 2 || math.Abs(float64(f.Number)-margin) > 0.06 {
		t.Errorf("%q (%v): want 500 Hz, and 24 dB together", f.Text, err)
	}
	if len(f.BandsHz) != 1 || f.BandsHz[0][0] > 500 || f.BandsHz[0][1] < 500 {
		t.Errorf("bands %v, want one around 500 Hz", f.BandsHz)
	}
}

func TestRailIsWhereItStuckLonger(t *testing.T) {
	r := parseRig(t, madeRig)
	for _, test := range []struct{ lowest, highest int }{{60, 40}, {40, 60}} {
		s := newTrial(5)
		for n := range test.lowest {
			s.low[chA3z][2000+n] = -1e3
		}
		for n := range test.highest {
			s.low[chA3z][5000+n] = 1e3
		}
		f := find(t, Findings(r, s.measure(t, r)...), Low, RailedChannel, "A3z")
		if want := math.Copysign(10, float64(test.highest-test.lowest)); math.Abs(float64(f.Number)-want) > 1e-3 || !strings.Contains(f.Text, "for 0.0234 s") {
			t.Errorf("%d frames at the bottom, %d at the top: %q", test.lowest, test.highest, f.Text)
		}
	}
}

func TestMissingStages(t *testing.T) {
	r := parseRig(t, madeRig)
	m := newTrial(3).measure(t, r)
	count := func(findings []Finding, kind Kind) (n int) {
		for _, f := range findings {
			if f.Kind == kind {
				n++
			}
		}
		return n
	}
	for _, test := range []struct {
		name                        string
		m                           []Measurement
		missing, level, rise, ratio int
	}{
		{"none", nil, 0, 0, 0, 0},
		{"muted", m[:1], 0, 7, 0, 0},
		{"muted and idle", m[:2], 0, 14, 7, 0},
		{"idle alone", m[1:2], 1, 7, 0, 0},
		{"low alone", m[2:], 1, 0, 0, 0},
		{"low without idle", []Measurement{m[0], m[2]}, 1, 7, 0, 0},
		{"low without muted", m[1:], 1, 7, 0, 7},
		{"without samples", []Measurement{{Stage: Idle, Snapshot: m[1].Snapshot}, {Stage: Low, Snapshot: m[2].Snapshot}}, 1, 7, 0, 7},
		{"without densities", []Measurement{{Stage: Idle, Tally: m[1].Tally}, {Stage: Low, Tally: m[2].Tally}}, 1, 0, 0, 0},
	} {
		findings := Findings(r, test.m...)
		checkShape(t, findings)
		got := [4]int{count(findings, NotMeasured), count(findings, NoiseLevel), count(findings, NoiseRise), count(findings, SignalToNoise)}
		if want := [4]int{test.missing, test.level, test.rise, test.ratio}; got != want || len(flagged(findings)) > 0 {
			t.Errorf("%s: %v findings on what is missing, level, rise and ratio, want %v; flagged %q", test.name, got, want, flagged(findings))
		}
	}
}

func TestALaterMeasurementOfAStageCounts(t *testing.T) {
	r, s := parseRig(t, madeRig), newTrial(4)
	bad := newTrial(4)
	bad.low.change(chA3z, constant(0))
	m := append(bad.measure(t, r), s.measure(t, r)[Low])
	if got := flagged(Findings(r, m...)); len(got) > 0 {
		t.Errorf("after measuring again: %q", got)
	}
}

func TestTooFewAverages(t *testing.T) {
	r, s := parseRig(t, madeRig), newTrial(4)
	cutTo := func(blocks int) []Measurement {
		var list []Measurement
		for stage, scene := range s.all() {
			frames := max(0, 1024+(blocks-1)*512)
			list = append(list, measure(t, r, Stage(stage), scene.digital(r)[:frames*madeChannels]))
		}
		return list
	}
	for _, test := range []struct {
		blocks int
		want   []string
	}{
		{0, []string{"look muted too-short []", "look idle too-short []", "look low too-short []"}},
		{1, []string{"look muted too-short []", "look idle too-short []", "look low too-short []",
			"look low power-flow [S1 A1z]", "look low power-flow [S2 A2z]"}}, // no random error, no sign
		{7, []string{"look muted too-short []", "look idle too-short []", "look low too-short []"}},
		{8, nil}, // max(8, 3q), formats: Enough
	} {
		findings := Findings(r, cutTo(test.blocks)...)
		checkShape(t, findings)
		got := flagged(findings)
		if test.blocks == 1 {
			// A single block scatters by so much that more may be flagged.
			got = slices.DeleteFunc(got, func(s string) bool { return !slices.Contains(test.want, s) })
		}
		if !slices.Equal(got, test.want) {
			t.Errorf("%d blocks: flagged %q, want %q", test.blocks, got, test.want)
		}
	}
}

func TestForceWithoutDrivingPoint(t *testing.T) {
	r := parseRig(t, strings.Replace(madeRig, "name = \"A1z\"\npoint = \"1\"", "name = \"A1z\"\npoint = \"9\"", 1))
	findings := Findings(r, newTrial(4).measure(t, r)...)
	checkShape(t, findings)
	if f := find(t, findings, Low, PowerFlow, "S1"); f.Severity != Info || !math.IsNaN(float64(f.Number)) {
		t.Errorf("%v", f)
	}
}

func TestFindingAsWritten(t *testing.T) {
	r := parseRig(t, madeRig)
	m := newTrial(4).measure(t, r)
	got, err := json.Marshal(find(t, Findings(r, m[1]), Muted, NotMeasured, ""))
	want := `{"stage":"muted","kind":"not-measured","channels":[],"number":null,"unit":"","bands_hz":[],"severity":"info",` +
		`"text":"nothing was measured with the amplifiers muted, so what the amplifiers add to the noise is unknown: measure that stage too"}`
	if err != nil || string(got) != want {
		t.Errorf("%s (%v), want %s", got, err, want)
	}
}

func TestWrongShapesPanic(t *testing.T) {
	r := parseRig(t, madeRig)
	other := *r
	other.Responses = other.Responses[:2]
	for name, m := range map[string]Measurement{
		"no such stage":    {Stage: 3},
		"before the first": {Stage: -1},
		"snapshot":         {Snapshot: spectra.NewSnapshot(spectra.Shape{Lines: 2, Forces: 1, Responses: 1}, spectra.Averaging{})},
		"tally":            {Tally: NewTally(&other)},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if text := fmt.Sprint(recover()); !strings.HasPrefix(text, "setup: ") {
					t.Errorf("panic %q", text)
				}
			}()
			Findings(r, m)
		})
	}
}

// TestSpoiltNumbers puts NaN and infinity into densities: nothing may panic, and no text may show a
// number that was not had.
func TestSpoiltNumbers(t *testing.T) {
	r := parseRig(t, madeRig)
	for name, v := range map[string]float64{"NaN": math.NaN(), "infinity": math.Inf(1), "zero": 0} {
		for _, stage := range Stages() {
			m := newTrial(4).measure(t, r)
			s := m[stage].Snapshot
			for k := range s.Lines {
				s.Gyy[k*s.Responses+2] = v
				s.Gxx[k*s.Forces*s.Forces] = complex(v, 0)
			}
			for _, f := range Findings(r, m...) {
				if strings.Contains(f.Text, "NaN") || strings.Contains(f.Text, "Inf") {
					t.Errorf("%s with %v: %q", name, stage, f.Text)
				}
			}
		}
	}
}

// TestNotANumberSamples goes past acquire.Select, which leaves such frames out.
func TestNotANumberSamples(t *testing.T) {
	r := parseRig(t, madeRig)
	frames := driven(4, 2000).digital(r)
	for n := range 2000 {
		frames[n*madeChannels+chA3z] = math.NaN()
	}
	low, muted := NewTally(r), NewTally(r)
	low.Add(frames)
	muted.Add(quiet(4, 2000).digital(r))
	findings := Findings(r, Measurement{Stage: Muted, Tally: muted}, Measurement{Stage: Low, Tally: low})
	checkShape(t, findings)
	if got, want := flagged(findings), []string{"look low dc-offset [A3z]", "look low headroom [A3z]"}; !slices.Equal(got, want) {
		t.Errorf("flagged %q, want %q", got, want)
	}
}

// withWindow is madeRig with another window.
func withWindow(t testing.TB, window string) *rig.Rig {
	return parseRig(t, strings.Replace(madeRig, "[analysis]", "[analysis]\nwindow = \""+window+"\"", 1))
}
