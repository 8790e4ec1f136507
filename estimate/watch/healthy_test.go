package watch

import (
	"fmt"
	"testing"
)

// TestHealthy: on rigs without a fault, whatever the window and overlap, no block is set aside and nothing is
// said but of bands in which the forces depend on each other, as they do at the resonances of these
// rigs.
func TestHealthy(t *testing.T) {
	for _, o := range []simOptions{
		{q: 2, p: 8},
		{q: 1, p: 3},
		{q: 3, p: 6, window: "hann", overlap: 0.75},
		{q: 2, p: 6, window: "hann", overlap: 0},
		{q: 2, p: 6, window: "hann", overlap: 0.66},
		{q: 2, p: 6, window: "rectangular", overlap: 0},
		{q: 2, p: 6, window: "rectangular", overlap: 0.5},
		{q: 2, p: 6, window: "flattop", overlap: 0.5},
		{q: 2, p: 6, window: "flattop", overlap: 0.75},
		{q: 2, p: 6, lines: 1.2},
		{q: 2, p: 6, lines: 6, memory: 20},
		{q: 2, p: 6, block: 512},
		{q: 5, p: 6, block: 4096},
		{q: 2, p: 6, window: "rectangular", excitation: "burst", lines: 6},
		{q: 3, p: 6, window: "rectangular", excitation: "periodic", lines: 6},
	} {
		t.Run(fmt.Sprintf("%+v", o), func(t *testing.T) {
			count := 0
			for seed := range *manySeeds {
				s := newSimulated(uint64(*firstSeed+seed), o)
				r := newRun(s, nil)
				r.blocks(min(100, 100*1024/s.rig.Grid.Block))
				r.end()
				count += int(r.block)
				for _, e := range r.events {
					if e.Kind != ForcesCorrelated {
						t.Errorf("seed %d: %+v", *firstSeed+seed, e)
					}
				}
				if len(r.aside) > 0 || len(r.averaged) != int(r.block) {
					t.Errorf("seed %d: set aside %v", *firstSeed+seed, r.aside)
				}
			}
			t.Logf("%d blocks", count)
		})
	}
}
