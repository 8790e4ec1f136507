package main

import (
	"testing"

	"shakerwatch/acquire/demo"
)

func TestSettingsResolveToWhatTheyAreCalled(t *testing.T) {
	for _, s := range append(settings, base) {
		t.Run(s.name, func(t *testing.T) {
			drawn, err := demo.NewRandomRig(5, demo.RandomOptions{Excitation: s.excitation})
			if err != nil {
				t.Fatal(err)
			}
			r, err := s.apply(drawn)
			if err != nil {
				t.Fatal(err)
			}
			block, window, excitation := 4096, "hann", "random"
			if s.block != 0 {
				block = s.block
			}
			if s.excitation != "" {
				window, excitation = "rectangular", s.excitation
			}
			if s.window != "" {
				window = s.window
			}
			if r.Grid.Block != block || r.Analysis.Window != window || r.Analysis.Excitation != excitation || r.Analysis.Overlap != s.overlap {
				t.Errorf("block %d, %s window, overlap %g, %s: want %d, %s, %g, %s",
					r.Grid.Block, r.Analysis.Window, r.Analysis.Overlap, r.Analysis.Excitation, block, window, s.overlap, excitation)
			}
			if g := gridOf(r); g.length != r.BlockFrames() || g.step != g.length && s.excitation == "burst" || g.step < 1 {
				t.Errorf("grid %+v", g)
			}
		})
	}
}

func TestGrid(t *testing.T) {
	g := grid{first: 1000, step: 100, length: 200}
	for _, c := range []struct {
		frame           int64
		holding, behind int64
	}{
		{0, 0, 0},
		{1199, 0, 2}, // the last frame of block 0
		{1200, 1, 2}, // in block 1, which starts at 1100, and in block 2
		{1201, 1, 3},
		{1299, 1, 3},
		{1300, 2, 3},
	} {
		if got := g.holding(c.frame); got != c.holding {
			t.Errorf("block %d is the first to hold frame %d, want %d", got, c.frame, c.holding)
		}
		if got := g.behind(c.frame); got != c.behind {
			t.Errorf("block %d is the first behind frame %d, want %d", got, c.frame, c.behind)
		}
	}
	if got := g.hops(1515, 1); got != 2 { // block 3 ends at 1500
		t.Errorf("%d hops from block 1, want 2", got)
	}
}
