package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"shakerwatch/spectra"
)

func distortionOf(s *spectra.Snapshot) *Distortion {
	d := NewDistortion(s.Shape)
	d.Update(s, periodicOf(s))
	return d
}

// exceeding is the share of lines, but 0 Hz, on which the distortion of response o exceeds Chance.
func (d *Distortion) exceeding(o int) float64 {
	var count float64
	for k := 1; k < d.Lines; k++ {
		if n := k*d.Responses + o; d.DistortionResponse[n] > d.Chance[n] {
			count++
		}
	}
	return count / float64(d.Lines-1)
}

// TestDistortionIsUnbiased draws distortion of known density; the mean over all lines may lie 4.5 of
// its own deviations and the bias that Update's comment gives off it. Without the factor n_e/(n_e-q), or with
// the noise of the response alone, it lies far off.
func TestDistortionIsUnbiased(t *testing.T) {
	const lines, density = 1500, 0.25
	for _, test := range []struct {
		name          string
		q, k, blocks  int
		force, answer float64
	}{
		{"no noise, one force", 1, 2, 16, 0, 0},
		{"no noise, four forces", 4, 2, 16, 0, 0},
		{"response noise", 2, 2, 16, 0, 0.3},
		{"force noise", 1, 2, 24, 0.2, 0},
		{"both, four periods", 3, 4, 24, 0.15, 0.3},
	} {
		rng := rand.New(rand.NewPCG(31, uint64(test.q)))
		m := randomPeriodic(rng, lines, test.q, 1, test.blocks, test.k)
		m.mix = dipping(test.q, 0.8)
		m.noiseForce, m.noiseResponse, m.distortion = test.force, test.answer, math.Sqrt(density)
		s := m.snapshot(rng)
		d := distortionOf(s)
		mean, sd := meanAndError(d.DistortionResponse[1:])
		var noise float64 // of the residual over K
		for _, h := range m.h {
			noise += (abs2(h)*test.force*test.force + test.answer*test.answer/float64(test.q)) / float64(test.k)
		}
		trace := test.force * test.force * (float64(test.q-1) + 1/0.64)
		bias := (noise/float64(test.k-1) + density/float64(test.k)) * trace / float64(test.blocks-test.q)
		t.Logf("%s: %.4f ± %.4f of %v", test.name, mean, sd, density)
		if !(math.Abs(mean-density) < 4.5*sd+bias) {
			t.Errorf("%s: mean %.4f ± %.4f, want %v", test.name, mean, sd, density)
		}
	}
}

// TestDistortionByChance counts how often a linear structure exceeds Chance: on 1 of 100 lines with
// noise on the response, up to 3 with much on the forces. And a distortion of twice the noise in the
// averaged periods does not hide.
func TestDistortionByChance(t *testing.T) {
	const lines = 2500
	deviation := math.Sqrt(distortionChance * (1 - distortionChance) / lines)
	for _, test := range []struct {
		name                     string
		q, k, blocks             int
		force, answer, distorted float64
		least, greatest          float64
	}{
		{"response noise", 2, 2, 16, 0.01, 0.3, 0, 0.01 - 4*deviation, 0.01 + 4*deviation},
		{"response noise, few blocks", 1, 4, 3, 0.0, 0.3, 0, 0.01 - 4*deviation, 0.01 + 4*deviation},
		{"10 % noise on the forces", 2, 2, 16, 0.1, 0.01, 0, 0.01 - 4*deviation, 0.01 + 6*deviation},
		{"70 % noise on the forces", 1, 2, 16, 0.7, 0.01, 0, 0.01, 0.03 + 4*deviation},
		{"70 % noise on two forces", 2, 4, 32, 0.7, 0.01, 0, 0.01 - 4*deviation, 0.03},
		{"distortion", 2, 2, 32, 0.01, 0.3, 0.3, 0.9, 1},
	} {
		rng := rand.New(rand.NewPCG(32, uint64(test.q)))
		m := randomPeriodic(rng, lines, test.q, 1, test.blocks, test.k)
		m.mix = dipping(test.q, 1)
		m.noiseForce, m.noiseResponse, m.distortion = test.force, test.answer, test.distorted
		d := distortionOf(m.snapshot(rng))
		if least := slices.Min(d.DistortionResponse); least < 0 {
			t.Errorf("%s: distortion %v", test.name, least)
		}
		share := d.exceeding(0)
		t.Logf("%s: %.4f", test.name, share)
		if !(share >= test.least && share <= test.greatest) {
			t.Errorf("%s: %.4f of the lines beyond chance, want %.4f to %.4f", test.name, share, test.least, test.greatest)
		}
	}
}

// TestNoiseIsTheInjectedOne puts samples through spectra.Engine: white noise of variance v has the
// one-sided density 2v/rate. Of M blocks with K periods the noise has 2M(K-1) degrees of freedom.
func TestNoiseIsTheInjectedOne(t *testing.T) {
	const (
		n, rateHz   = 256, 512.0
		blocks, k   = 20, 3
		force, resp = 0.2, 0.7 // standard deviations
	)
	shape := spectra.Shape{Lines: n/2 + 1, Forces: 2, Responses: 3}
	rng := rand.New(rand.NewPCG(41, 42))
	s := averageSamples(shape, n, k, blocks, rateHz, func(block *spectra.Block) {
		for ch := range shape.Channels() {
			sd := resp
			if ch < shape.Forces {
				sd = force
			}
			for i := range n {
				signal := rng.NormFloat64()
				for period := range k {
					block.Samples[(ch*k+period)*n+i] = signal + sd*rng.NormFloat64()
				}
			}
		}
	})
	d := distortionOf(s)
	chi := distuv.ChiSquared{K: 2 * blocks * (k - 1)}
	check := func(what string, values []float64, channels int, density float64) {
		t.Helper()
		var inside, used float64
		ratios := []float64{}
		for at, v := range values {
			if line := at / channels; line == 0 || line == n/2 {
				continue // no twin at negative frequency: half the density, half the degrees of freedom
			}
			ratio := v / density
			ratios = append(ratios, ratio)
			used++
			if p := chi.CDF(ratio * chi.K); p > 0.05 && p < 0.95 {
				inside++
			}
			// Some 600 values in all: beyond this by chance once in 800 runs.
			if p := chi.CDF(ratio * chi.K); p < 1e-6 || p > 1-1e-6 {
				t.Errorf("%s: %v times the injected noise at line %d", what, ratio, at/channels)
			}
		}
		mean, sd := meanAndError(ratios)
		if !(math.Abs(mean-1) < 4.5*sd) {
			t.Errorf("%s: mean %.4f ± %.4f of the injected noise", what, mean, sd)
		}
		if share := inside / used; !(math.Abs(share-0.9) < 4.5*math.Sqrt(0.09/used)) {
			t.Errorf("%s: %.3f of the lines inside the 90 %% bounds", what, share)
		}
	}
	check("forces", d.NoiseForce, shape.Forces, 2*force*force/rateHz)
	check("responses", d.NoiseResponse, shape.Responses, 2*resp*resp/rateHz)
}

// averageSamples averages random blocks of k periods of n samples, which fill writes, with the real
// engine.
func averageSamples(shape spectra.Shape, n, k, blocks int, rateHz float64, fill func(block *spectra.Block)) *spectra.Snapshot {
	window := spectra.Rectangular.Values(n)
	average := spectra.NewAverage(shape, window, 0, 1, rateHz, spectra.Averaging{Periods: k})
	workers := spectra.NewWorkers(1)
	defer workers.Close()
	engine := spectra.NewEngine(average, window, workers)
	block := spectra.NewBlock(shape, n, k)
	for b := range blocks {
		block.Start = int64(b * 10 * n)
		fill(block)
		engine.Transform([]*spectra.Block{block})
		engine.Add([]*spectra.Block{block})
	}
	s := spectra.NewSnapshot(shape, average.Averaging())
	average.SnapshotTo(s)
	return s
}

func TestDistortionUnknown(t *testing.T) {
	nan := math.NaN()
	for _, test := range []struct {
		name              string
		spoil             func(m *madePeriodic)
		noise, distortion float64 // NaN, 0, or 1 for a number above 0
	}{
		{"healthy", func(m *madePeriodic) {}, 1, 1},
		{"no block", func(m *madePeriodic) { m.blocks = 0 }, nan, nan},
		{"as many blocks as forces", func(m *madePeriodic) { m.blocks, m.noiseForce = 2, 1e-9 }, 1, nan},
		{"one block more", func(m *madePeriodic) { m.blocks, m.noiseForce = 3, 1e-9 }, 1, 1},
		{"no periods", func(m *madePeriodic) { m.periods = 1 }, nan, nan},
		{"forces of noise", func(m *madePeriodic) { m.mix = make([]complex128, 4) }, 1, nan},
		{"silent response", func(m *madePeriodic) { m.h, m.noiseResponse, m.distortion = make([]complex128, 2), 0, 0 }, 0, 0},
	} {
		rng := rand.New(rand.NewPCG(3, 5))
		m := randomPeriodic(rng, 2, 2, 1, 12, 2)
		m.distortion = 100 // so that none is cut at 0
		test.spoil(&m)
		s := m.snapshot(rng)
		e := estimatesOf(s, nil)
		if m.periods > 1 {
			e = periodicOf(s)
		}
		d := NewDistortion(s.Shape)
		fill(d.DistortionResponse, 7) // what was there before does not stay
		d.Update(s, e)
		is := func(v, want float64) bool {
			return v > 0 && want == 1 || v == want || math.IsNaN(v) && math.IsNaN(want)
		}
		for k := range s.Lines {
			if !is(d.NoiseResponse[k], test.noise) {
				t.Errorf("%s: noise %v", test.name, d.NoiseResponse[k])
			}
			if !is(d.DistortionResponse[k], test.distortion) || !is(d.Chance[k], test.distortion) {
				t.Errorf("%s: distortion %v, chance %v", test.name, d.DistortionResponse[k], d.Chance[k])
			}
		}
	}
}

func TestDistortionRefusesOtherShapes(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	s := randomPeriodic(rng, 3, 1, 1, 4, 2).snapshot(rng)
	defer func() {
		if recover() == nil {
			t.Error("a snapshot of another shape was taken")
		}
	}()
	NewDistortion(spectra.Shape{Lines: 4, Forces: 1, Responses: 1}).Update(s, periodicOf(s))
}

// TestResidualOfH1 is Gyy (1 - g2), the smallest there is.
func TestResidualOfH1(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 4))
	s := randomMade(rng, 10, 3, 1, 12).snapshot(rng)
	e := estimatesOf(s, nil)
	for k := range s.Lines {
		h := e.H[k*3 : (k+1)*3]
		got, want := residualAt(h, s, &s.Densities, k, 0), s.Gyy[k]*(1-e.MultipleCoherence[k])
		if !(math.Abs(got-want) < 1e-10*s.Gyy[k]) {
			t.Errorf("line %d: residual %v, want %v", k, got, want)
		}
		h[1] *= cmplx.Rect(1.01, 0.01)
		if more := residualAt(h, s, &s.Densities, k, 0); !(more > got) {
			t.Errorf("line %d: residual %v beside H1, %v with it", k, more, got)
		}
	}
}
