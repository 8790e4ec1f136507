package setup

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// negate turns a channel round in all stages.
func (s *trial) negate(ch int) {
	s.change(ch, func(v float64) float64 { return -v })
}

// change puts every sample of a channel through f in all stages.
func (s *trial) change(ch int, f func(float64) float64) {
	for _, scene := range s.all() {
		scene.change(ch, f)
	}
}

func (s scene) change(ch int, f func(float64) float64) {
	for n, v := range s[ch] {
		s[ch][n] = f(v)
	}
}

func (s *trial) hiss(ch int, rms float64) {
	for i, scene := range s.all() {
		scene.hiss(rand.New(rand.NewPCG(uint64(i), 77)), ch, rms)
	}
}

// notch takes 500 Hz out of a channel, and 24 dB on the lines next to it.
func (s scene) notch(ch int) {
	c, pole := 2*math.Cos(2*math.Pi*500/2560), 0.9
	var x1, x2, y1, y2 float64
	for n, x := range s[ch] {
		y := x - c*x1 + x2 + pole*c*y1 - pole*pole*y2
		x1, x2, y1, y2 = x, x1, y, y1
		s[ch][n] = y
	}
}

func times(gain float64) func(float64) float64 { return func(v float64) float64 { return gain * v } }
func plus(offset float64) func(float64) float64 {
	return func(v float64) float64 { return v + offset }
}
func constant(value float64) func(float64) float64 { return func(float64) float64 { return value } }

// TestFaults makes one thing wrong at a time and wants that flagged and nothing else.
func TestFaults(t *testing.T) {
	for _, test := range []struct {
		name  string
		spoil func(*trial)
		want  []string
	}{
		{"sensor reversed", func(s *trial) { s.negate(chA1z) }, []string{"stop low polarity-suspect [S1 A1z]"}},
		{"force reversed", func(s *trial) { s.negate(chS2) }, []string{"stop low polarity-suspect [S2 A2z]"}},
		{"both reversed", func(s *trial) { s.negate(chS2); s.negate(chA2z) }, nil},
		{"sensor measures two motions", func(s *trial) {
			m := newMass(600, 7, 0.02)
			for n, x := range s.low[chS1] {
				s.low[chA1z][n] -= m.next(x)
			}
		}, []string{"look low power-flow [S1 A1z]"}},
		{"one cable on two inputs, one converter", func(s *trial) {
			for _, scene := range s.all() {
				copy(scene[chA4x], scene[chA3z])
			}
		}, []string{"stop low twin-channels [A3z A4x]"}},
		{"three alike, then two", func(s *trial) {
			copy(s.idle[chA4x], s.idle[chA3z])
			copy(s.idle[chA2z], s.idle[chA3z])
			copy(s.low[chA4x], s.low[chA3z])
		}, []string{"stop idle twin-channels [A2z A3z A4x]", "stop low twin-channels [A3z A4x]"}},
		{"one cable on two inputs, own gain and noise", func(s *trial) {
			for n, v := range s.low[chA3z] {
				s.low[chA4x][n] = -0.8*v + s.muted[chA4x][n]
			}
		}, []string{"look low twin-channels [A3z A4x]"}},
		{"nothing arrives", func(s *trial) { s.change(chA3z, constant(0)) }, []string{"stop low dead-channel [A3z]"}},
		{"nothing arrives but an offset", func(s *trial) { s.change(chA3z, constant(12)) }, []string{"stop low dead-channel [A3z]"}},
		{"cable off before the shakers", func(s *trial) { s.low.change(chA3z, constant(0)) }, []string{"stop low dead-channel [A3z]"}},
		{"noise below the converter's step", func(s *trial) {
			s.muted.change(chA3z, constant(0))
			s.idle.change(chA3z, constant(0))
		}, []string{"look idle dead-channel [A3z]"}},
		{"at the rail", func(s *trial) { s.change(chA3z, constant(-1e3)) }, []string{"stop low railed-channel [A3z]"}},
		{"at the conditioner's rail", func(s *trial) { s.change(chA3z, constant(51)) }, []string{"stop low railed-channel [A3z]"}},
		{"at the rail for a while", func(s *trial) {
			for n := range 40 {
				s.idle[chA3z][n+5000] = 1e3
			}
		}, []string{"stop idle railed-channel [A3z]"}},
		{"at the rail for a while, then silent for longer", func(s *trial) {
			s.idle.change(chA3z, constant(0))
			for n := range 40 {
				s.idle[chA3z][n+5000] = 1e3
			}
		}, []string{"stop idle railed-channel [A3z]"}},
		{"hum in a force", func(s *trial) {
			for _, scene := range s.all() {
				scene.tone(chS1, 50, 1)
			}
		}, []string{"look idle mains-hum [S1]"}},
		{"no drive but hum", func(s *trial) {
			s.low = quiet(98, madeFrames)
			s.low.tone(chA3z, 50, 1)
			s.low.tone(chA4x, 50, 1)
		}, []string{"stop low not-driven [S1]", "stop low not-driven [S2]"}},
		{"peaks clipped", func(s *trial) { s.low[chA3z][4000] = 1e3; s.low[chA3z][9000] = -1e3 },
			[]string{"stop low overrange [A3z]"}},
		{"offset", func(s *trial) { s.idle.change(chA3z, plus(-10)) }, []string{"look idle dc-offset [A3z]"}},
		{"offset of more than half the limit", func(s *trial) { s.low.change(chA3z, plus(-60)) },
			[]string{"stop low dc-offset [A3z]", "look low headroom [A3z]"}},
		{"noisy channel", func(s *trial) { s.hiss(chA3z, 8*madeResponseNoise) },
			[]string{"look muted noise-level [A3z]", "look idle noise-level [A3z]"}},
		{"noisy channel, alone of its kind", func(s *trial) { s.hiss(chA5g, 8*madeResponseNoise) }, nil},
		{"amplifier hisses into a cable", func(s *trial) {
			s.idle.hiss(rand.New(rand.NewPCG(1, 9)), chS1, 4*madeForceNoise)
		}, []string{"look idle noise-rise [S1]"}},
		{"hum", func(s *trial) {
			s.muted.tone(chA3z, 50, 0.01)
			s.idle.tone(chA3z, 50, 0.01)
		}, []string{"look idle mains-hum [A3z]"}},
		{"hum before the amplifiers only", func(s *trial) { s.muted.tone(chA3z, 50, 0.01) }, nil},
		{"little headroom", func(s *trial) { s.low.change(chA3z, times(4)) }, []string{"look low headroom [A3z]"}},
		{"little signal in the converter", func(s *trial) { s.change(chA3z, times(0.02)) }, []string{"look low headroom [A3z]"}},
		{"force drops into its noise", func(s *trial) {
			s.low = driven(5, madeFrames, func(forces scene) { forces.notch(chS1) })
			s.hiss(chS1, 1)
		}, []string{"look low force-drop [S1]"}},
		{"response near its noise in an octave", func(s *trial) { s.hiss(chA5g, 40*madeResponseNoise) },
			[]string{"look low signal-to-noise [A5g]"}},
		{"stinger off", func(s *trial) { copy(s.low[chS2], s.muted[chS2]) }, []string{"stop low not-driven [S2]"}},
		{"no drive at all", func(s *trial) {
			for ch := range s.low {
				s.low[ch] = quiet(99, madeFrames)[ch]
			}
		}, []string{"stop low not-driven [S1]", "stop low not-driven [S2]"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			r, s := parseRig(t, madeRig), newTrial(5)
			test.spoil(s)
			findings := Findings(r, s.measure(t, r)...)
			if got := flagged(findings); !slices.Equal(got, test.want) {
				t.Errorf("flagged %q, want %q", got, test.want)
			}
			checkShape(t, findings)
		})
	}
}
