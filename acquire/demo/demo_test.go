package demo

import (
	"bytes"
	"slices"
	"testing"

	"shakerwatch/acquire/rig"
)

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

func TestRigFor(t *testing.T) {
	for _, c := range []struct {
		excitation, path string
		block            int
		spacingHz        float64
		burst            rig.Burst
		periodic         rig.Periodic
	}{
		{"random", "skid.toml", 4096, 0.625, rig.Burst{}, rig.Periodic{}},
		{"burst", "skid_burst.toml", 5120, 0.5, rig.Burst{PeriodS: 2}, rig.Periodic{}},
		{"periodic", "skid_periodic.toml", 4096, 0.625, rig.Burst{}, rig.Periodic{Period: 4096, SettlePeriods: 3, KeepPeriods: 3}},
	} {
		r := RigFor(c.excitation)
		if r.Path != c.path || r.Analysis.Excitation != c.excitation {
			t.Errorf("%s: %s with excitation %s", c.excitation, r.Path, r.Analysis.Excitation)
		}
		if r.Grid.Block != c.block || r.Grid.SpacingHz != c.spacingHz || r.Burst != c.burst || r.Periodic != c.periodic {
			t.Errorf("%s: %+v, %+v, %+v: want a block of %d, lines every %g Hz, %+v, %+v",
				c.excitation, r.Grid, r.Burst, r.Periodic, c.block, c.spacingHz, c.burst, c.periodic)
		}
		got, want := r.Channels(), Rig().Channels()
		for i := range got {
			got[i].Line, want[i].Line = 0, 0
		}
		if r.Source != Rig().Source || !slices.Equal(got, want) {
			t.Errorf("%s: other channels than the demo's", c.excitation)
		}
	}
}

// What the caller does with a text does not come back.
func TestRigFileIsTheCallers(t *testing.T) {
	for _, excitation := range []string{"random", "burst", "periodic"} {
		_, text := RigFile(excitation)
		want := bytes.Clone(text)
		clear(text)
		if _, again := RigFile(excitation); !bytes.Equal(again, want) {
			t.Errorf("%s: the text changed with what was done to it", excitation)
		}
	}
}

func TestRigForPanicsOnAnother(t *testing.T) {
	defer func() {
		if got := recover(); got != `demo: no rig for excitation "sine"` {
			t.Errorf("%v: want a panic that names the excitation", got)
		}
	}()
	RigFor("sine")
}
