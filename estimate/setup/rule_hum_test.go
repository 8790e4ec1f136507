package setup

import (
	"math"
	"strings"
	"testing"

	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// humIn are the findings with the shakers off when something is added to the noise.
func humIn(t *testing.T, window string, spoil func(s *trial)) []Finding {
	t.Helper()
	r, s := withWindow(t, window), newTrial(6)
	spoil(s)
	return Findings(r, measure(t, r, Muted, s.muted.digital(r)), measure(t, r, Idle, s.idle.digital(r)))
}

// TestHumLevel compares with the analytic value: a sine of amplitude a has a/sqrt(2) rms, whether it
// lies on a line (50 Hz is line 20) or between two.
func TestHumLevel(t *testing.T) {
	const amplitude = 0.02
	for _, test := range []struct {
		name, window string
		hz           float64
		tolerance    float64 // relative
		why          string
	}{
		{"hann on a line", "hann", 50, 0.02, "noise at the line, 37 dB below"},
		{"hann off the line", "hann", 49.85, 0.02, "the same"},
		{"hann between lines", "hann", 151.2, 0.03, "side lobes beyond two lines hold less than 1 % of the power"},
		{"flat top", "flattop", 49.85, 0.02, "noise in eleven lines"},
		{"rectangular on a line", "rectangular", 50, 0.02, "noise"},
		{"rectangular off the line", "rectangular", 49.85, 0.04, "side lobes beyond one line"},
	} {
		t.Run(test.name, func(t *testing.T) {
			findings := humIn(t, test.window, func(s *trial) {
				s.idle.tone(chA3z, test.hz, amplitude)
				if test.hz > 100 {
					// The third harmonic of a grid that is 0.4 Hz off; the fundamental has to be there.
					s.idle.tone(chA3z, 50, amplitude/2)
				}
			})
			f := find(t, findings, Idle, MainsHum, "A3z")
			if want := amplitude / math.Sqrt2; math.Abs(float64(f.Number)/want-1) > test.tolerance || f.Unit != "m/s²" {
				t.Errorf("%v %s rms, want %v within %v (%s)", f.Number, f.Unit, want, test.tolerance, test.why)
			}
			at, within := test.hz, false
			for _, b := range f.BandsHz {
				within = within || b[0] <= at && at <= b[1]
			}
			if !within {
				t.Errorf("bands %v without %v Hz", f.BandsHz, at)
			}
		})
	}
}

// TestToneByNoiseBandwidth is the other way to a tone's level, for a tone on a line: its density times
// the noise bandwidth, 1.5 lines for Hann (Harris 1978).
func TestToneByNoiseBandwidth(t *testing.T) {
	r := parseRig(t, madeRig)
	s := newTrial(6)
	s.idle.tone(chA3z, 100, 0.05)
	c := newCheck(r, []Measurement{measure(t, r, Idle, s.idle.digital(r))})
	byLine := math.Sqrt(c.density(Idle, chA3z, 40) * 1.5 * r.Grid.SpacingHz)
	if got := c.toneRMS(Idle, chA3z, 40, 0); math.Abs(got/byLine-1) > 0.01 { // noise 45 dB below
		t.Errorf("%v rms from the main lobe, %v from the line", got, byLine)
	}
}

// TestToneAboveNoise takes the noise out of the main lobe: on densities of 2 a tone of 10 on one line
// and 4 on the next holds 14 times the spacing.
func TestToneAboveNoise(t *testing.T) {
	r := parseRig(t, madeRig)
	m := Measurement{Stage: Idle, Snapshot: spectra.NewSnapshot(estimate.ShapeOf(r), spectra.Averaging{})}
	m.Snapshot.Averages = 20
	for i := range m.Snapshot.Gyy {
		m.Snapshot.Gyy[i] = 2
	}
	p := len(r.Responses)
	m.Snapshot.Gyy[40*p+2] += 10
	m.Snapshot.Gyy[41*p+2] += 4
	c := newCheck(r, []Measurement{m})
	if got, want := c.toneRMS(Idle, chA3z, 40, 2), math.Sqrt(14*2.5); math.Abs(got-want) > 1e-12 {
		t.Errorf("%v rms, want %v", got, want)
	}
	if got := c.toneRMS(Idle, chA3z, 100, 2.5); got != 0 {
		t.Errorf("%v rms below the noise, want 0", got)
	}
}

func TestHumStories(t *testing.T) {
	for _, test := range []struct {
		name      string
		spoil     func(s *trial)
		want      string // in the text of A3z; empty for no hum
		severity  Severity
		bandCount int
	}{
		{"50 Hz", func(s *trial) { s.idle.tone(chA3z, 50, 0.02) }, "hum of 50 Hz mains, strongest 0.0141 m/s² rms at 50 Hz", Look, 1},
		{"60 Hz", func(s *trial) { s.idle.tone(chA3z, 60, 0.02) }, "hum of 60 Hz mains, strongest 0.0141 m/s² rms at 60 Hz", Look, 1},
		{"the strongest of three", func(s *trial) {
			s.idle.tone(chA3z, 50, 0.01)
			s.idle.tone(chA3z, 150, 0.02)
			s.idle.tone(chA3z, 250, 0.005)
		}, "at 150 Hz", Look, 3},
		{"300 Hz belongs to both and decides nothing", func(s *trial) {
			s.idle.tone(chA3z, 60, 0.005)
			s.idle.tone(chA3z, 300, 0.02)
		}, "hum of 60 Hz mains", Look, 2},
		{"300 Hz alone", func(s *trial) { s.idle.tone(chA3z, 300, 0.02) }, "", Info, 0},
		{"a tone at a high harmonic", func(s *trial) { s.idle.tone(chA3z, 350, 0.02) }, "", Info, 0},
		{"a tone beside mains", func(s *trial) { s.idle.tone(chA3z, 75, 0.02) }, "", Info, 0},
		{"little", func(s *trial) { s.idle.tone(chA3z, 50, 0.001) }, "hum of 50 Hz mains", Info, 1},
		{"hardly any", func(s *trial) { s.idle.tone(chA3z, 50, 0.0002) }, "", Info, 0},
		{"a resonance that the floor excites", func(s *trial) {
			m := newMass(100, 1, 0.04)
			for n, v := range s.muted[chS1] {
				s.idle[chA3z][n] += m.next(v)
			}
		}, "", Info, 0},
		{"from the sensor's ground", func(s *trial) {
			s.muted.tone(chA3z, 50, 0.02)
			s.idle.tone(chA3z, 50, 0.02)
		}, "with the amplifiers muted too: look for a ground loop", Look, 1},
		{"from the amplifiers", func(s *trial) {
			s.muted.tone(chA3z, 50, 0.005)
			s.idle.tone(chA3z, 50, 0.02)
		}, "which comes with the amplifiers: lead its cable away", Look, 1},
	} {
		t.Run(test.name, func(t *testing.T) {
			findings := humIn(t, "hann", test.spoil)
			checkShape(t, findings)
			if test.want == "" {
				if f := find(t, findings, Idle, MainsHum, ""); f.Severity != Info || f.Number != 0 {
					t.Errorf("%v", f)
				}
				return
			}
			f := find(t, findings, Idle, MainsHum, "A3z")
			if !strings.Contains(f.Text, test.want) || f.Severity != test.severity || len(f.BandsHz) != test.bandCount {
				t.Errorf("%v %v %q, want %q in it", f.Severity, f.BandsHz, f.Text, test.want)
			}
		})
	}
}

func TestHumWithoutTheSecondStage(t *testing.T) {
	r, s := parseRig(t, madeRig), newTrial(6)
	s.muted.tone(chA3z, 50, 0.02)
	f := find(t, Findings(r, measure(t, r, Muted, s.muted.digital(r))), Muted, MainsHum, "A3z")
	if !strings.Contains(f.Text, "around it: look for a ground loop") {
		t.Errorf("%q", f.Text)
	}
}

func TestLinesTooFarApartForHum(t *testing.T) {
	for _, test := range []struct {
		spacing, advice string
		coarse          bool
	}{
		{"5", "give a line_spacing of 4.17 Hz or less", true},
		{"4", "", false}, // 25 Hz are six lines: two of the tone, four of what is around it
	} {
		r := parseRig(t, strings.Replace(madeRig, "line_spacing = 2.5", "line_spacing = "+test.spacing, 1))
		s := newTrial(6)
		s.idle.tone(chA3z, 50, 0.02)
		findings := Findings(r, measure(t, r, Idle, s.idle.digital(r)))
		if !test.coarse {
			find(t, findings, Idle, MainsHum, "A3z")
			continue
		}
		if f := find(t, findings, Idle, MainsHum, ""); !math.IsNaN(float64(f.Number)) || !strings.Contains(f.Text, test.advice) {
			t.Errorf("%v", f)
		}
	}
}
