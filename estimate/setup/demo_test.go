package setup

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
)

// offFrames are frames of the demo's rig with the shakers off: white noise of the densities that the
// demo's sensors have, 4e-3 N and 2.5e-3 m/s² per root Hz, without its rise below 1 Hz.
func offFrames(r *rig.Rig, seed uint64, frames int) []float64 {
	rng := rand.New(rand.NewPCG(seed, 4))
	list := make([]float64, 0, frames*len(r.Channels()))
	for range frames {
		for ch, c := range r.Channels() {
			density := 2.5e-3
			if ch < len(r.Forces) {
				density = 4e-3
			}
			sigma := density * math.Sqrt(r.Source.RateHz/2)
			list = append(list, float64(float32(sigma*rng.NormFloat64()/c.Scale())))
		}
	}
	return list
}

// TestDemo takes the simulated rig through the check, as it is and with the sensor at S2 reversed.
func TestDemo(t *testing.T) {
	r := demo.Rig()
	source, err := demo.New(r, 1)
	if err != nil {
		t.Fatal(err)
	}
	channels, frames := source.Channels(), 4096+15*2048 // 16 blocks
	low := make([]float64, frames*channels)
	if _, err := source.Read(low); err != nil {
		t.Fatal(err)
	}
	muted := measure(t, r, Muted, offFrames(r, 1, frames))
	idle := measure(t, r, Idle, offFrames(r, 2, frames))
	if got := flagged(Findings(r, muted, idle, measure(t, r, Low, low))); len(got) > 0 {
		t.Errorf("healthy: %q", got)
	}
	for i := 3; i < len(low); i += channels { // A3z is the fourth channel
		low[i] = -low[i]
	}
	want := []string{"stop low polarity-suspect [S2 A3z]"}
	if got := flagged(Findings(r, muted, idle, measure(t, r, Low, low))); !slices.Equal(got, want) {
		t.Errorf("reversed: %q, want %q", got, want)
	}
}
