package rig

import "testing"

func TestContinuous(t *testing.T) {
	for _, c := range []struct {
		name  string
		pairs []string
		hop   int
		frame int64 // BlockFrames of the rig as it is
	}{
		{"random", nil, 2700, 5400 * 18},
		{"random, own overlap", []string{"line_spacing = 0.5", "line_spacing = 0.5\noverlap = 0.75\naveraging = \"exponential\"\nmemory = 7"}, 1350, 5400 * 18},
		{"burst", []string{"[analysis]", "[burst]\nperiod_s = 4\n[analysis]\nexcitation = \"burst\""}, 2700, 5400 * 18},
		{"periodic", []string{"[analysis]", "[periodic]\nperiod = 65536\nkeep_periods = 3\n[analysis]\nexcitation = \"periodic\""}, 2048, 3 * 65536},
		{"periodic, odd", []string{"[analysis]", "[periodic]\nperiod = 65537\n[analysis]\nexcitation = \"periodic\""}, 32769, 2 * 65537},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := must(t, broken(t, c.pairs...))
			if got := r.BlockFrames(); got != c.frame {
				t.Errorf("a block of %d frames, want %d", got, c.frame)
			}
			before := *r
			got := r.Continuous()
			a := got.Analysis
			if a.Excitation != "random" || a.Averaging != "linear" || a.Memory != 0 || a.Estimator != "h1" || a.Window != "hann" {
				t.Errorf("analysis %+v", a)
			}
			if got.Grid.Hop != c.hop || got.Burst != (Burst{}) || got.Periodic != (Periodic{}) {
				t.Errorf("hop %d, burst %+v, periodic %+v", got.Grid.Hop, got.Burst, got.Periodic)
			}
			g := got.Grid
			g.Hop = r.Grid.Hop
			if g != r.Grid {
				t.Errorf("other lines: %+v, want those of %+v", got.Grid, r.Grid)
			}
			if r.Analysis != before.Analysis || r.Grid != before.Grid || r.Periodic != before.Periodic {
				t.Error("the rig itself has changed")
			}
		})
	}
}
