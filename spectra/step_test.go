package spectra

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestStep(t *testing.T) {
	for _, test := range []struct {
		name          string
		energies      []float64
		at            int
		before, after float64
	}{
		{"none", nil, 0, 0, 0},
		{"one", []float64{3}, 0, 0, 0},
		{"silence", []float64{0, 0, 0}, 0, 0, 0},
		{"not a number", []float64{0, math.NaN(), 1}, 0, 0, 0},
		{"up", []float64{0, 0, 0, 4, 2, 3}, 3, 0, 3},
		{"up from noise", []float64{0.1, 0.3, 0.2, 4, 2, 3}, 3, 0.2, 3},
		{"down", []float64{4, 2, 3, 1e-3, 1e-3}, 3, 3, 1e-3},
		{"a small first value", append(make([]float64, 20), 1e-9, 4, 2, 3), 20, 0, 9.000000001 / 4},
	} {
		t.Run(test.name, func(t *testing.T) {
			at, before, after := step(test.energies, 1e-12)
			if at != test.at || math.Abs(before-test.before) > 1e-12 || math.Abs(after-test.after) > 1e-12 {
				t.Errorf("step at %d from %v to %v, want %d, %v, %v", at, before, after, test.at, test.before, test.after)
			}
		})
	}
}

// In noise a step of 20 dB is placed to within a few samples. The bounds are those seen with these seeds.
func TestStepInNoise(t *testing.T) {
	var errors []int
	for seed := range uint64(400) {
		rng := newRand(seed)
		want := 40 + rng.IntN(120)
		energies := make([]float64, 200)
		for i := range energies {
			energies[i] = 0.01 * square(rng.NormFloat64())
			if i >= want {
				energies[i] *= 100
			}
		}
		at, _, _ := step(energies, 1e-12)
		errors = append(errors, at-want)
	}
	least, median, most := spread(errors)
	if least < -4 || median != 0 || most > 6 {
		t.Errorf("placed from %d to %d samples off, in the median %d", least, most, median)
	}
}

// The likeliest place, computed as it is defined.
func TestStepAsDefined(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		energies := rapid.SliceOfN(rapid.Float64Range(0.01, 10), 2, 40).Draw(t, "energies")
		mean := func(part []float64) (m float64) {
			for _, e := range part {
				m += e / float64(len(part))
			}
			return m
		}
		likelihood := func(at int) (sum float64) {
			before, after := mean(energies[:at]), mean(energies[at:])
			for i, e := range energies {
				level := before
				if i >= at {
					level = after
				}
				sum -= math.Log(level) + e/level
			}
			return sum
		}
		at, before, after := step(energies, 1e-12)
		for i := 1; i < len(energies); i++ {
			if likelihood(i) > likelihood(at)+1e-9 {
				t.Fatalf("step at %d, likelier at %d", at, i)
			}
		}
		if math.Abs(before-mean(energies[:at])) > 1e-9 || math.Abs(after-mean(energies[at:])) > 1e-9 {
			t.Errorf("levels %v and %v", before, after)
		}
	})
}
