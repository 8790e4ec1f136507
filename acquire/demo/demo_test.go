package demo

import "testing"

func TestRig(t *testing.T) {
	r := Rig()
	for _, c := range []struct {
		name      string
		got, want any
	}{
		{"kind", r.Source.Kind, "demo"},
		{"rate", r.Source.RateHz, 2560.0},
		{"decimation", r.Grid.Decimation, 1},
		{"block", r.Grid.Block, 4096},
		{"hop", r.Grid.Hop, 2048},
		{"spacing", r.Grid.SpacingHz, demoSpacingHz},
		{"lines", r.Grid.Lines, 1601},
		{"channels", r.Source.Channels, 16},
		{"forces", len(r.Forces), 2},
		{"responses", len(r.Responses), 14},
		{"window", r.Analysis.Window, "hann"},
		{"excitation", r.Analysis.Excitation, "random"},
		{"target", r.Target.RandomError, 0.03},
	} {
		if c.got != c.want {
			t.Errorf("%s: %v: want %v", c.name, c.got, c.want)
		}
	}
	if Rig() == r {
		t.Error("Rig handed out the same rig twice")
	}
}
