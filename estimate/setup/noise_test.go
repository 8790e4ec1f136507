package setup

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestNoiseOfStages(t *testing.T) {
	r := parseRig(t, madeRig)
	s := newTrial(7)
	s.idle.change(chA3z, constant(0))
	m := s.measure(t, r)
	n := NewNoise(r, m...)
	if err := n.Check(r); err != nil {
		t.Errorf("does not fit its own rig: %v", err)
	}
	l, q, p := r.Grid.Lines, len(r.Forces), len(r.Responses)
	if len(n.FrequencyHz) != l || n.FrequencyHz[3] != 7.5 {
		t.Errorf("%d lines, the fourth at %v Hz", len(n.FrequencyHz), n.FrequencyHz[3])
	}
	at := func(k, i int) float64 { return real(m[Idle].Snapshot.Gxx[(k*q+i)*q+i]) }
	for k := range l {
		if n.Force[k*q+1] != at(k, 1) || n.Response[k*p+1] != m[Idle].Snapshot.Gyy[k*p+1] || n.MutedResponse[k*p+4] != m[Muted].Snapshot.Gyy[k*p+4] {
			t.Fatalf("line %d: other densities than measured", k)
		}
		if !math.IsNaN(n.Response[k*p+2]) || math.IsNaN(n.MutedResponse[k*p+2]) {
			t.Fatalf("line %d: noise of a dead channel is %v, muted %v", k, n.Response[k*p+2], n.MutedResponse[k*p+2])
		}
	}
	n = NewNoise(r, m[Muted])
	if err := n.Check(r); err != nil || !math.IsNaN(n.Force[5]) || math.IsNaN(n.MutedForce[5]) {
		t.Errorf("muted alone: idle %v, muted %v, %v", n.Force[5], n.MutedForce[5], err)
	}
}

func TestNoiseFitsItsRigOnly(t *testing.T) {
	text := func(pairs ...string) string { return strings.NewReplacer(pairs...).Replace(madeRig) }
	oneLess := madeRig[:strings.LastIndex(madeRig, "[[response]]")]
	for _, test := range []struct {
		name, rig string
		spoil     func(*Noise)
		want      string
	}{
		{"the same rig", madeRig, nil, ""},
		{"another window", text("[analysis]", "[analysis]\nwindow = \"flattop\""), nil, ""},
		{"finer lines", text("line_spacing = 2.5", "line_spacing = 1.25"), nil,
			"noise: 401 lines 2.5 Hz apart, but the rig file has 801 lines 1.25 Hz apart: measure the noise of this rig again with --setup, or take back its [analysis]"},
		{"as many lines elsewhere", text("line_spacing = 2.5", "line_spacing = 1.25", "max_frequency = 1000", "max_frequency = 500"), nil,
			"noise: line 1 at 2.5 Hz, but the rig file has it at 1.25 Hz: measure the noise of this rig again with --setup, or take back its [analysis]"},
		{"a response less", oneLess, nil,
			"noise: noise_response has 5 responses, but the rig file has 4: measure the noise of this rig again with --setup, or take the rig file that it was measured with\n" +
				"noise: muted_response has 5 responses, but the rig file has 4: measure the noise of this rig again with --setup, or take the rig file that it was measured with"},
		{"nothing", madeRig, func(n *Noise) { *n = Noise{} },
			"noise: 0 lines, but the rig file has 401 lines 2.5 Hz apart: measure the noise of this rig again with --setup, or take back its [analysis]"},
		{"cut short", madeRig, func(n *Noise) { n.Force = n.Force[1:] },
			"noise: noise_force has 801 values, no whole number for each of 401 lines: measure the noise of this rig again with --setup"},
		{"negative", madeRig, func(n *Noise) { n.MutedForce[7] = -1 },
			"noise: muted_force holds -1 at line 3, which is no density: measure the noise of this rig again with --setup"},
		{"infinite", madeRig, func(n *Noise) { n.Response[12] = math.Inf(1) },
			"noise: noise_response holds +Inf at line 2, which is no density: measure the noise of this rig again with --setup"},
		{"frequency unknown", madeRig, func(n *Noise) { n.FrequencyHz[9] = math.NaN() },
			"noise: line 9 at NaN Hz, but the rig file has it at 22.5 Hz: measure the noise of this rig again with --setup, or take back its [analysis]"},
	} {
		t.Run(test.name, func(t *testing.T) {
			r := parseRig(t, madeRig)
			n := NewNoise(r, Measurement{Stage: Idle, Snapshot: measure(t, r, Idle, quiet(1, 2000).digital(r)).Snapshot})
			if test.spoil != nil {
				test.spoil(n)
			}
			got := ""
			if err := n.Check(parseRig(t, test.rig)); err != nil {
				got = err.Error()
			}
			if got != test.want {
				t.Errorf("%q, want %q", got, test.want)
			}
		})
	}
}

// TestNoiseOfAnyShape is what a file may hold: never a panic, and no error only for what can be used.
func TestNoiseOfAnyShape(t *testing.T) {
	r := parseRig(t, strings.Replace(madeRig, "line_spacing = 2.5", "line_spacing = 100", 1))
	l := r.Grid.Lines
	rapid.Check(t, func(rt *rapid.T) {
		list := func(name string, perLine int) []float64 {
			n := rapid.SampledFrom([]int{0, 1, l, l * perLine, l*perLine + 1}).Draw(rt, name)
			return rapid.SliceOfN(rapid.Float64(), n, n).Draw(rt, name)
		}
		n := &Noise{FrequencyHz: list("frequency", 1), Force: list("force", 2), Response: list("response", 5),
			MutedForce: list("muted force", 2), MutedResponse: list("muted response", 5)}
		if rapid.Bool().Draw(rt, "right lines") {
			n.FrequencyHz = nil
			for k := range l {
				n.FrequencyHz = append(n.FrequencyHz, float64(k)*r.Grid.SpacingHz)
			}
		}
		if n.Check(r) == nil && (len(n.FrequencyHz) != l || len(n.Force) != 2*l || len(n.MutedResponse) != 5*l) {
			rt.Error("taken as fitting")
		}
	})
}
