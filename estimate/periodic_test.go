package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

// product is the mean over blocks of [(Σ_p A_p)(Σ_p B_p)* - Σ_p A_p B_p*] / (K(K-1)), written out, a and
// b choosing line and channel.
func product(blocks [][][]complex128, a, b int) complex128 {
	var mean complex128
	for _, periods := range blocks {
		var sumA, sumB, same complex128
		for _, lines := range periods {
			sumA += lines[a]
			sumB += lines[b]
			same += lines[a] * cmplx.Conj(lines[b])
		}
		k := float64(len(periods))
		mean += (sumA*cmplx.Conj(sumB) - same) / complex(k*(k-1)*float64(len(blocks)), 0)
	}
	return mean
}

// TestDifferentPeriodsWrittenOut compares with H1 of the products written out.
func TestDifferentPeriodsWrittenOut(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		periods := rapid.IntRange(2, 5).Draw(t, "periods")
		rng := newRand(t)
		m := randomPeriodic(rng, 4, q, 2, q+rapid.IntRange(4, 12).Draw(t, "more"), periods)
		m.distortion = 0.2
		var blocks [][][]complex128
		s := m.snapshotOf(func() [][]complex128 {
			periods := m.block(rng)
			var kept [][]complex128
			for _, lines := range periods {
				kept = append(kept, slices.Clone(lines))
			}
			blocks = append(blocks, kept)
			return periods
		})
		written := spectra.NewSnapshot(m.shape, spectra.Averaging{})
		written.Averages, written.EffectiveAverages = s.Averages, s.EffectiveAverages
		channels := m.shape.Channels()
		for k := 1; k < s.Lines; k++ {
			for i := range q {
				for j := range q {
					n := (k*q+i)*q + j
					written.Gxx[n] = product(blocks, k*channels+i, k*channels+j)
					got := s.Gxx[n] - s.Noise.Gxx[n]/complex(float64(periods), 0)
					// Rounding of densities of a few units.
					if cmplx.Abs(got-written.Gxx[n]) > 1e-12 {
						t.Fatalf("line %d: Gxx_c[%d,%d] = %v, written out %v", k, i, j, got, written.Gxx[n])
					}
				}
				for o := range 2 {
					written.Gyx[(k*2+o)*q+i] = product(blocks, k*channels+q+o, k*channels+i)
				}
			}
		}
		got, want := periodicOf(s), estimatesOf(written, nil)
		for n := 2 * q; n < len(got.H); n++ {
			h := got.H[n]
			if cmplx.IsNaN(h) {
				continue // TestForcesOfNoise is about where
			}
			// The condition of the forces costs digits.
			if !(cmplx.Abs(h-want.H[n]) <= 1e-13*want.ForceConditionRaw[n/(2*q)]*100) {
				t.Fatalf("H[%d] = %v, written out %v", n, h, want.H[n])
			}
		}
	})
}

// TestDifferentPeriodsOutsideValues: periods typed in, results from NumPy 1.24 by the formulas of the
// comments (numpy.linalg.solve of the products written out, densities by numpy.mean).
func TestDifferentPeriodsOutsideValues(t *testing.T) {
	s := typedPeriods()
	e := periodicOf(s)
	d := NewDistortion(s.Shape)
	d.Update(s, e)
	const tolerance = 1e-12 // rounding; the values have 15 digits
	for i, want := range outsideH {
		if !(cmplx.Abs(e.H[2+i]-want) < tolerance) {
			t.Errorf("H[%d] = %v, NumPy %v", i, e.H[2+i], want)
		}
		if got, want := e.RandomError[2+i], outsideError[i]; !(math.Abs(got-want) < tolerance) {
			t.Errorf("random error %d = %v, NumPy %v", i, got, want)
		}
		if got, want := d.NoiseForce[2+i], outsideNoiseForce[i]; !(math.Abs(got-want) < tolerance) {
			t.Errorf("noise of force %d = %v, NumPy %v", i, got, want)
		}
	}
	for name, v := range map[string][2]float64{
		"noise of the response": {d.NoiseResponse[1], outsideNoiseResponse},
		"distortion":            {d.DistortionResponse[1], outsideDistortion},
		"chance":                {d.Chance[1], outsideChance},
	} {
		if !(math.Abs(v[0]-v[1]) < tolerance) {
			t.Errorf("%s %v, NumPy %v", name, v[0], v[1])
		}
	}
}

// TestNoiseBound: quantiles from SciPy 1.10, max(1, f.ppf(0.99, 2*(n-q+1), 2*M*(K-1))*(n-q+1)/n).
func TestNoiseBound(t *testing.T) {
	for _, test := range []struct {
		name       string
		q, m, k    int
		ne, wanted float64
	}{
		{"one force, two blocks", 1, 2, 2, 2, boundOneTwo},
		{"one force", 1, 16, 2, 16, boundOne},
		{"two forces", 2, 32, 4, 32, boundTwo},
		{"as many blocks as forces", 4, 4, 2, 4, boundFour},
		{"never below one", 20, 20, 2, 20, 1},
		{"exponential weights", 2, 400, 2, 39, boundExponential},
		{"fewer blocks than forces", 3, 2, 2, 2, math.NaN()},
		{"weights worth too few averages", 3, 10, 2, 2, math.NaN()},
	} {
		s := &spectra.Snapshot{
			Shape:    spectra.Shape{Lines: 1, Forces: test.q, Responses: 1},
			Averages: test.m, EffectiveAverages: test.ne,
			Averaging: spectra.Averaging{Periods: test.k},
		}
		var b noiseBound
		for _, again := range []string{"", ", second time"} {
			got := b.of(s)
			if math.IsNaN(got) && math.IsNaN(test.wanted) {
				continue
			}
			if !(math.Abs(got-test.wanted) < 1e-9*test.wanted) {
				t.Errorf("%s%s: %v, want %v", test.name, again, got, test.wanted)
			}
		}
	}
}

// TestNoiseBoundFollowsTheSnapshot: a kept bound is not another snapshot's.
func TestNoiseBoundFollowsTheSnapshot(t *testing.T) {
	s := &spectra.Snapshot{
		Shape:    spectra.Shape{Lines: 1, Forces: 1, Responses: 1},
		Averages: 8, EffectiveAverages: 8, Averaging: spectra.Averaging{Periods: 2},
	}
	var b noiseBound
	first := b.of(s)
	s.Averages, s.EffectiveAverages = 9, 9
	if got := b.of(s); !(got < first) {
		t.Errorf("bound %v with a block more, %v before", got, first)
	}
	s.Averages, s.EffectiveAverages = 8, 8
	if got := b.of(s); got != first {
		t.Errorf("bound %v, %v at first", got, first)
	}
}

// TestForcesOfNoise counts on how many lines H is given.
func TestForcesOfNoise(t *testing.T) {
	const lines = 2500
	// Four deviations of a share of the lines.
	scatter := 4 * math.Sqrt(emptyChance*(1-emptyChance)/lines)
	low, high := emptyChance-scatter, emptyChance+scatter
	for _, test := range []struct {
		name            string
		q, blocks, k    int
		mix             []complex128
		least, greatest float64
	}{
		{"one force, none acts", 1, 16, 2, []complex128{0}, low, high},
		{"one force, none acts, four periods, few blocks", 1, 4, 4, []complex128{0}, low, high},
		{"two forces in one direction", 2, 16, 2, []complex128{3, 0, 3, 0}, low, high},
		{"three forces in two directions", 3, 12, 2, []complex128{30, 9, 0, 9, 30, 0, 9, 9, 0}, low, high},
		{"three forces in one direction", 3, 16, 2, []complex128{3, 0, 0, 3, 0, 0, 3, 0, 0}, 0, emptyChance},
		{"two forces, none acts", 2, 16, 2, make([]complex128, 4), 0, emptyChance},
		{"two forces act", 2, 16, 2, dipping(2, 0.5), 1, 1},
		{"as many blocks as forces", 2, 2, 4, dipping(2, 1), 0.9, 1},
	} {
		rng := rand.New(rand.NewPCG(21, uint64(test.q)))
		m := randomPeriodic(rng, lines, test.q, 1, test.blocks, test.k)
		m.mix = test.mix
		e := periodicOf(m.snapshot(rng))
		var known float64
		for k := range lines {
			if !cmplx.IsNaN(e.H[k*test.q]) {
				known++
			}
		}
		if share := known / lines; !(share >= test.least && share <= test.greatest) {
			t.Errorf("%s: H on %.4f of the lines, want %.4f to %.4f", test.name, share, test.least, test.greatest)
		}
	}
}

func TestDifferentPeriodsUnknown(t *testing.T) {
	for _, test := range []struct {
		name   string
		spoil  func(m *madePeriodic)
		h, err bool // known
	}{
		{"healthy", func(m *madePeriodic) {}, true, true},
		{"no block", func(m *madePeriodic) { m.blocks = 0 }, false, false},
		{"fewer blocks than forces", func(m *madePeriodic) { m.blocks = 1 }, false, false},
		{"as many blocks as forces", func(m *madePeriodic) { m.blocks, m.periods, m.noiseForce = 2, 4, 1e-9 }, true, false},
		{"silent force", func(m *madePeriodic) { m.mix, m.noiseForce = []complex128{1, 0, 0, 0}, 0 }, false, false},
		{"locked forces without noise", func(m *madePeriodic) { m.mix, m.noiseForce = []complex128{1, 0, 1, 0}, 0 }, false, false},
		{"no noise", func(m *madePeriodic) { m.noiseForce, m.noiseResponse = 0, 0 }, true, true},
		{"silent response", func(m *madePeriodic) { m.h, m.noiseResponse = make([]complex128, 2), 0 }, true, false},
	} {
		rng := rand.New(rand.NewPCG(3, 5))
		m := randomPeriodic(rng, 3, 2, 1, 12, 2)
		test.spoil(&m)
		e := periodicOf(m.snapshot(rng))
		for n, h := range e.H {
			if cmplx.IsNaN(h) == test.h {
				t.Errorf("%s: H[%d] = %v", test.name, n, h)
			}
			if err, radius := e.RandomError[n], e.ConfidenceRadius[n]; math.IsNaN(err) == test.err || math.IsNaN(radius) == test.err {
				t.Errorf("%s: random error %v, radius %v", test.name, err, radius)
			}
		}
	}
}

func TestDifferentPeriodsWithoutNoiseAreH1(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	m := randomPeriodic(rng, 20, 3, 2, 9, 3)
	m.noiseForce, m.noiseResponse, m.distortion = 0, 0, 0.3
	s := m.snapshot(rng)
	h1, got := estimatesOf(s, nil), periodicOf(s)
	for n, want := range h1.H {
		if !(cmplx.Abs(got.H[n]-want) < 1e-9) {
			t.Errorf("H[%d] = %v, H1 %v", n, got.H[n], want)
		}
		if !(math.Abs(got.RandomError[n]/h1.RandomError[n]-1) < 1e-9) {
			t.Errorf("random error %v, H1's %v", got.RandomError[n], h1.RandomError[n])
		}
	}
}

// meanAndError are the mean of values and its standard deviation.
func meanAndError(values []float64) (mean, sd float64) {
	for _, v := range values {
		mean += v / float64(len(values))
	}
	for _, v := range values {
		sd += (v - mean) * (v - mean)
	}
	return mean, math.Sqrt(sd) / float64(len(values))
}

// biasOf gives the mean over lines of Re H_i/truth - 1 for response 0 and force i, and its deviation.
func biasOf(e *Estimates, truth []complex128, i int) (mean, sd float64) {
	q := e.Forces
	values := make([]float64, e.Lines)
	for k := range values {
		values[k] = real(e.H[k*e.Responses*q+i]/truth[i]) - 1
	}
	return meanAndError(values)
}

// TestBiasAtAResonance: 10 % noise on the forces (C = 0.01 of their density away from resonances),
// which stays when the force that drives a resonance dips by the factor of the case. The
// statistic is the mean over all lines of Re H/H_true - 1; it may lie 4.5 of its own deviations
// off what theory says, a chance of 7 in a million a case.
//
//	random excitation, H1:   E[H1] = H Gxx (Gxx + Gnn)^-1, with one force H/(1 + Gnn/Gxx)
//	K periods averaged, H1:  the same with Gnn/K
//	different periods:       H + H Cnn Gxx_c^-1 [q/K + tr(Gxx_c^-1 Cnn)/(K(K-1))] / n_e
func TestBiasAtAResonance(t *testing.T) {
	const lines, blocks, noise, deviations = 1500, 32, 0.1, 4.5
	for _, test := range []struct {
		name string
		q, k int
		dip  float64
	}{
		{"one force off resonance", 1, 2, 1},
		{"one force, 10 dB down", 1, 2, 0.316},
		{"one force, 14 dB down, four periods", 1, 4, 0.2},
		{"two forces, 10 dB down", 2, 2, 0.316},
		{"three forces, 12 dB down, four periods", 3, 4, 0.25},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(8, uint64(test.q)))
			m := randomPeriodic(rng, lines, test.q, 1, blocks, test.k)
			m.mix, m.noiseForce, m.noiseResponse = dipping(test.q, test.dip), noise, 0.02
			for i := range m.h {
				m.h[i] = 1 // a mode that all forces drive alike
			}
			// Here Gxx = mix mix^T, and h = (1,1,..) is its eigenvector with the value dip².
			low := func(c float64) float64 { return 1/(1+c/(test.dip*test.dip)) - 1 }

			check := func(what string, e *Estimates, want float64) {
				t.Helper()
				for i := range test.q {
					got, sd := biasOf(e, m.h, i)
					t.Logf("%s: H[%d] is off by %+.4f ± %.4f, theory %+.4f", what, i, got, sd, want)
					if !(math.Abs(got-want) < deviations*sd) {
						t.Errorf("%s: H[%d] is off by %+.4f ± %.4f, want %+.4f", what, i, got, sd, want)
					}
				}
			}
			random := m
			random.periods = 1
			s := m.snapshot(rng)
			check("random excitation", estimatesOf(random.snapshot(rng), nil), low(noise*noise))
			check("averaged periods", estimatesOf(s, nil), low(noise*noise/float64(test.k)))
			trace := noise * noise * (1/(test.dip*test.dip) + float64(test.q-1))
			factor := float64(test.q)/float64(test.k) + trace/float64(test.k*(test.k-1))
			check("different periods", periodicOf(s), noise*noise/(test.dip*test.dip)*factor/blocks)
		})
	}
}

func TestPeriodicUpdateAllocatesNothing(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	s := randomPeriodic(rng, 20, 3, 4, 12, 2).snapshot(rng)
	e, d := periodicOf(s), NewDistortion(s.Shape)
	if allocs := testing.AllocsPerRun(20, func() {
		s.EffectiveAverages += 1e-9 // as new blocks would, so that the bound is worked out again
		e.Update(s)
		d.Update(s, e)
	}); allocs != 0 {
		t.Errorf("%v allocations an update, want none", allocs)
	}
}

func BenchmarkPeriodicUpdate(b *testing.B) {
	for _, size := range []struct {
		name        string
		lines, q, p int
	}{{"2x12", 1601, 2, 12}, {"8x504", 801, 8, 504}} {
		b.Run(size.name, func(b *testing.B) {
			rng := rand.New(rand.NewPCG(1, 1))
			s := randomPeriodic(rng, size.lines, size.q, size.p, 10, 2).snapshot(rng)
			e, d := periodicOf(s), NewDistortion(s.Shape)
			for b.Loop() {
				e.Update(s)
				d.Update(s, e)
			}
		})
	}
}
