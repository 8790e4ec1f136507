package setup

import (
	"math"
	"math/rand/v2"
	"reflect"
	"testing"
)

// TestReservoirKeepsAllAlike feeds frames that hold their own number: every time has to have the same
// chance to be kept.
func TestReservoirKeepsAllAlike(t *testing.T) {
	const frames, parts = 100_000, 4
	r := newReservoir(2)
	for n := range frames {
		r.add([]float64{float64(n), -float64(n)})
	}
	if len(r.frames) != 2*keptFrames {
		t.Fatalf("%d samples kept", len(r.frames))
	}
	var counts [parts]int
	seen := map[float64]bool{}
	for i := 0; i < len(r.frames); i += 2 {
		if r.frames[i] != -r.frames[i+1] || seen[r.frames[i]] {
			t.Fatalf("frame %v with %v: torn apart or kept twice", r.frames[i], r.frames[i+1])
		}
		seen[r.frames[i]] = true
		counts[int(r.frames[i])*parts/frames]++
	}
	for part, n := range counts {
		// 256 expected, with a deviation of sqrt(1024 * 1/4 * 3/4) = 13.9.
		if math.Abs(float64(n)-keptFrames/parts) > 4*13.9 {
			t.Errorf("quarter %d of the time has %d of %d frames", part, n, keptFrames)
		}
	}
}

func TestTwins(t *testing.T) {
	const frames = 3000
	for _, test := range []struct {
		name string
		mix  func(rng *rand.Rand, a float64) float64
		want bool
		db   float64
		sign bool
	}{
		{"the same", func(_ *rand.Rand, a float64) float64 { return a }, true, -150, false},
		{"another gain and an offset", func(_ *rand.Rand, a float64) float64 { return 0.4 - 0.02*a }, true, -150, true},
		{"own noise 60 dB down", func(rng *rand.Rand, a float64) float64 { return a + 1e-3*0.1*rng.NormFloat64() }, true, -60, false},
		{"opposite, own noise 46 dB down", func(rng *rand.Rand, a float64) float64 { return -3 * (a + 5e-3*0.1*rng.NormFloat64()) }, true, -46, true},
		{"own noise 34 dB down", func(rng *rand.Rand, a float64) float64 { return a + 2e-2*0.1*rng.NormFloat64() }, false, 0, false},
		{"another signal", func(rng *rand.Rand, _ float64) float64 { return 0.1 * rng.NormFloat64() }, false, 0, false},
		{"constant", func(*rand.Rand, float64) float64 { return 0.3 }, false, 0, false},
		{"not a number", func(*rand.Rand, float64) float64 { return math.NaN() }, false, 0, false},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(8, 8))
			list := noiseFrames(9, frames)
			for n := range frames {
				list[n*madeChannels+5] = test.mix(rng, list[n*madeChannels+2])
			}
			twins := tallyOf(t, list).Twins()
			if !test.want {
				if twins != nil {
					t.Fatalf("twins %v", twins)
				}
				return
			}
			// What a gain leaves of 1024 frames scatters by 4 %, 0.2 dB; an exact multiple leaves rounding.
			if len(twins) != 1 || twins[0].A != 2 || twins[0].B != 5 || twins[0].Opposite != test.sign || math.Abs(twins[0].ResidualDB-test.db) > 0.8 {
				t.Errorf("twins %+v, want channels 2 and 5 at %v dB", twins, test.db)
			}
		})
	}
}

func TestTwinsNeedFrames(t *testing.T) {
	frames := noiseFrames(9, minKept)
	for n := range minKept {
		frames[n*madeChannels+5] = frames[n*madeChannels+2]
	}
	if got := tallyOf(t, frames[madeChannels:]).Twins(); got != nil {
		t.Errorf("twins %v from %d frames", got, minKept-1)
	}
	if got := tallyOf(t, frames).Twins(); !reflect.DeepEqual(got, []Twin{{2, 5, got[0].ResidualDB, false}}) {
		t.Errorf("twins %v from %d frames", got, minKept)
	}
}
