package spectra

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestDecayOfAKnownSignal(t *testing.T) {
	// An alternating signal has no mean; its mean square falls by 10 dB from segment to segment until
	// the last three, which are alike.
	const block = 200
	d := NewDecay(3, block, 0)
	samples := make([]float64, 3*block)
	for n := range block {
		level := math.Pow(10, -0.5*float64(min(n/10, 17)))
		samples[n] = level * float64(1-2*(n%2))
		samples[2*block+n] = 0.7 // an offset is no signal
	}
	d.Add(samples)
	d.Add(samples)
	if got := d.DB(0); math.Abs(got+170) > 1e-6 {
		t.Errorf("%v dB left, want -170", got)
	}
	if got := d.FallDB(0); math.Abs(got-20) > 1e-6 {
		t.Errorf("falls by %v dB in the last quarter, want 20: from -150 to -170", got)
	}
	for ch := 1; ch < 3; ch++ {
		if got := d.DB(ch); !math.IsNaN(got) {
			t.Errorf("%v dB left of a channel without signal, want NaN", got)
		}
	}
}

func TestDecayOfTooFewBlocks(t *testing.T) {
	d := NewDecay(1, 40, 0)
	for blocks := range 2 {
		if got := d.DB(0); !math.IsNaN(got) {
			t.Errorf("%v dB left after %d blocks, want NaN", got, blocks)
		}
		samples := make([]float64, 40)
		samples[3] = 1
		d.Add(samples)
	}
	if got := d.DB(0); !math.IsInf(got, -1) {
		t.Errorf("%v dB left of nothing, want -Inf", got)
	}
}

// The definition, computed as it is written.
func TestDecayAsDefined(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		block := rapid.IntRange(2, 90).Draw(t, "block")
		blocks := rapid.IntRange(2, 4).Draw(t, "blocks")
		rng := newRand(rapid.Uint64().Draw(t, "seed"))
		d := NewDecay(2, block, 0)
		all := make([][]float64, blocks)
		for k := range all {
			samples := make([]float64, 2*block)
			for i := range samples {
				samples[i] = 3 + rng.NormFloat64()*float64(2*block-i)
			}
			d.Add(samples)
			all[k] = samples[block:]
		}
		var offset, count float64
		for _, samples := range all {
			for _, v := range samples[19*block/20:] {
				offset += v
				count++
			}
		}
		offset /= count
		var sums [20]float64
		for _, samples := range all {
			for j := range sums {
				from, before := j*block/20, (j+1)*block/20
				for n := from; n < before; n++ {
					sums[j] += (samples[n] - offset) * (samples[n] - offset) / float64(before-from)
				}
			}
		}
		largest := 0.0
		for _, s := range sums {
			largest = max(largest, s)
		}
		if got, want := d.DB(1), 10*math.Log10(sums[19]/largest); math.Abs(got-want) > 1e-7 {
			t.Errorf("%v dB left, want %v", got, want)
		}
	})
}

func TestDecayPanics(t *testing.T) {
	wantPanic(t, func() { NewDecay(0, 5, 0) })
	wantPanic(t, func() { NewDecay(2, 5, 0).Add(make([]float64, 9)) })
}

func TestDecayAllocatesNothing(t *testing.T) {
	d, samples := NewDecay(4, 512, 0), make([]float64, 4*512)
	samples[5] = 1
	if allocs := testing.AllocsPerRun(10, func() { d.Add(samples); d.DB(0) }); allocs != 0 {
		t.Errorf("%v allocations a block, want none", allocs)
	}
}
