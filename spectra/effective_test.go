package spectra

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The values are Welch's formula (IEEE Trans. Audio Electroacoust. AU-15, 1967) for Hann blocks:
// n / (1 + 2 Σ (1 - j/n) rho_j²), worked out apart from this code with NumPy.
func TestEffectiveAverages(t *testing.T) {
	for _, test := range []struct {
		overlap float64
		blocks  int
		want    float64
	}{
		{0.5, 10, 9.524}, {0.5, 30, 28.47}, {0.5, 100, 94.79},
		{0.75, 10, 5.475}, {0.75, 30, 15.86}, {0.75, 100, 52.22},
		{0, 30, 30},
	} {
		const n = 4096
		hop := int(n * (1 - test.overlap))
		e := NewEffective(Hann.Values(n), hop, 3, 1)
		for k := range test.blocks {
			e.Add(int64(3 * hop * k))
		}
		if got := e.Averages(); math.Abs(got-test.want) > 5e-4*test.want {
			t.Errorf("%d blocks at %.0f %%: %.4f, want %.4g", test.blocks, 100*test.overlap, got, test.want)
		}
	}
}

func TestEffectiveAveragesOfAnyList(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		block := rapid.IntRange(2, 64).Draw(t, "block")
		hop := rapid.IntRange(1, block).Draw(t, "hop")
		d := rapid.IntRange(1, 5).Draw(t, "decimation")
		window := Hann.Values(block)
		decay := rapid.SampledFrom([]float64{1, 0.5, 0.9, 0.99}).Draw(t, "decay")
		e := NewEffective(window, hop, d, decay)
		var starts []int64
		at := int64(0)
		for _, gap := range rapid.SliceOfN(rapid.Int64Range(1, 8), 1, 60).Draw(t, "gaps") {
			at += gap * int64(hop*d)
			starts = append(starts, at)
			e.Add(at)
		}
		// The definition, over all pairs.
		var sum, weight float64
		for i, a := range starts {
			wa := math.Pow(decay, float64(len(starts)-1-i))
			weight += wa
			for j, b := range starts {
				wb := math.Pow(decay, float64(len(starts)-1-j))
				rho := OverlapCorrelation(window, int(max(a-b, b-a))/d)
				sum += wa * wb * rho * rho
			}
		}
		want := weight * weight / sum
		if got := e.Averages(); math.Abs(got-want) > 1e-12*want {
			t.Fatalf("%v, want %v", got, want)
		}
	})
}

func TestNoAverages(t *testing.T) {
	e := NewEffective(Hann.Values(8), 4, 1, 1)
	if got := e.Averages(); got != 0 {
		t.Errorf("no block is worth %v averages, want 0", got)
	}
}
