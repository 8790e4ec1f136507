package estimate

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"shakerwatch/spectra"
)

// A coverage is how often confidence regions of level 0.90 held the truth.
type coverage struct {
	disc      float64 // of each frequency response by itself
	ellipsoid float64 // of all forces to one response at once
	box       float64 // the discs that are good for all forces at once
}

// cover runs s and gives the coverage over its lines and responses.
func (s *simulation) cover(rng *rand.Rand, runs int) coverage {
	p, q := len(s.structure), len(s.force)
	single := New(s.shape(), Method{Points: noPoints(q)})
	all := New(s.shape(), Method{Points: noPoints(q), Simultaneous: true})
	var c coverage
	deviation := make([]complex128, q)
	for range runs {
		snapshot := s.run(rng)
		single.Update(snapshot)
		all.Update(snapshot)
		for k, line := range s.lines {
			for o := range p {
				at := (k*p + o) * q
				box := 1.0
				for i := range q {
					deviation[i] = single.H[at+i] - s.truth(line, o, i)
					c.disc += within(cmplx.Abs(deviation[i]), single.ConfidenceRadius[at+i]) / float64(q)
					box *= within(cmplx.Abs(deviation[i]), all.ConfidenceRadius[at+i])
				}
				c.box += box
				c.ellipsoid += within(real(ellipse(deviation, snapshot.Gxx[k*q*q:])), ellipsoidBound(snapshot, all, k, o))
			}
		}
	}
	cases := float64(runs * len(s.lines) * p)
	return coverage{c.disc / cases, c.ellipsoid / cases, c.box / cases}
}

func within(v, bound float64) float64 {
	if v <= bound {
		return 1
	}
	return 0
}

// ellipse is d Gxx d^H.
func ellipse(d, gxx []complex128) complex128 {
	var power complex128
	for i := range d {
		for j := range d {
			power += d[i] * gxx[i*len(d)+j] * cmplx.Conj(d[j])
		}
	}
	return power
}

// ellipsoidBound is what d Gxx d^H of response o stays below: q F(2q, 2(n_e-q); level) Gyy (1-g2) / (n_e-q).
func ellipsoidBound(s *spectra.Snapshot, e *Estimates, k, o int) float64 {
	at := k*s.Responses + o
	residual := s.Gyy[at] * (1 - e.MultipleCoherence[at]) / (s.EffectiveAverages - float64(s.Forces))
	return residual * RegionFactor(s.Forces, s.EffectiveAverages, DefaultLevel, true)
}

// tellsTheTruth is what a region of level 0.90 must hold: 88 to 92 of 100.
func tellsTheTruth(share float64) bool { return share >= 0.88 && share <= 0.92 }

// randomRig has coloured forces, two responses and noise as loud as one of the signals, all filters so short
// against the block that no leakage shows. The Hann-windowed transforms of its lines do not depend on each
// other.
func randomRig(rng *rand.Rand, q int, correlated bool) simulation {
	s := simulation{
		window: spectra.Hann, block: 64, settle: 8, noise: 1,
		lines: []int{6, 10, 14, 18, 22, 26},
		force: filters(rng, q, q, 3), structure: filters(rng, 2, q, 3),
	}
	for i := range q {
		for j := range q {
			if i != j && !correlated {
				clear(s.force[i][j])
			}
		}
		s.force[i][i][0] += 2
	}
	return s
}

// TestCoverage goes from time samples through window, transform and average to the regions.
func TestCoverage(t *testing.T) {
	for n, test := range []struct {
		q          int
		correlated bool
		overlap    float64
		blocks     int
	}{
		{1, false, 0, 12}, {1, false, 0.5, 20},
		{2, false, 0, 16}, {2, true, 0, 16}, {2, false, 0.5, 20}, {2, true, 0.5, 20},
		{3, true, 0.5, 20}, {4, false, 0.5, 24}, {4, true, 0, 20}, {4, true, 0.5, 24},
	} {
		t.Run(fmt.Sprintf("%d forces, correlated %v, overlap %v", test.q, test.correlated, test.overlap), func(t *testing.T) {
			rng := rand.New(rand.NewPCG(41, uint64(n)))
			s := randomRig(rng, test.q, test.correlated)
			s.overlap, s.blocks = test.overlap, test.blocks
			// 400 runs, 6 lines and 2 responses: four deviations of the share are 0.017.
			c := s.cover(rng, 400)
			if !tellsTheTruth(c.disc) || !tellsTheTruth(c.ellipsoid) {
				t.Errorf("held the truth: discs %.3f, ellipsoids %.3f, want 0.88 to 0.92", c.disc, c.ellipsoid)
			}
			// The box stands around the ellipsoid; with one force they are the same.
			if c.box < c.ellipsoid || test.q == 1 && c.box != c.ellipsoid {
				t.Errorf("held the truth: boxes %.3f, ellipsoids %.3f", c.box, c.ellipsoid)
			}
			t.Logf("held the truth: discs %.3f, ellipsoids %.3f, boxes %.3f", c.disc, c.ellipsoid, c.box)
		})
	}
}

// TestCoverageOfExponentialAveraging: with n_e from the weights the regions are no smaller than they
// should be, and too large where the memory is short: see RegionFactor.
func TestCoverageOfExponentialAveraging(t *testing.T) {
	for _, test := range []struct {
		memory, q int
		overlap   float64
		high      float64
	}{{6, 2, 0.5, 0.97}, {10, 2, 0.5, 0.94}, {20, 1, 0, 0.93}, {20, 4, 0.5, 0.94}} {
		t.Run(fmt.Sprintf("memory %d, %d forces, overlap %v", test.memory, test.q, test.overlap), func(t *testing.T) {
			rng := rand.New(rand.NewPCG(42, uint64(test.memory)))
			s := randomRig(rng, test.q, true)
			s.memory, s.blocks, s.overlap = test.memory, 4*test.memory, test.overlap
			c := s.cover(rng, 150)
			if c.disc < 0.88 || c.disc > test.high {
				t.Errorf("held the truth: discs %.3f, want 0.88 to %v", c.disc, test.high)
			}
			t.Logf("held the truth: discs %.3f, ellipsoids %.3f", c.disc, c.ellipsoid)
		})
	}
}

// TestLeakageBreaksCoverage: at a mode that is narrow against the lines, H1 is biased, and the region says
// nothing of that. Away from the mode, and at a wide one, it holds.
func TestLeakageBreaksCoverage(t *testing.T) {
	const block, peak = 128, 32
	for _, test := range []struct {
		widthLines, low, high float64
	}{{2, 0, 0.05}, {4, 0, 0.3}, {16, 0.84, 0.94}} {
		t.Run(fmt.Sprintf("half-power bandwidth of %v lines", test.widthLines), func(t *testing.T) {
			rng := rand.New(rand.NewPCG(43, uint64(test.widthLines)))
			// Poles r e^{±iθ}: half-power bandwidth -ln(r)/π of the rate, to first order in 1-r.
			r := math.Exp(-math.Pi * test.widthLines / block)
			s := simulation{
				window: spectra.Hann, block: block, overlap: 0.5, blocks: 80, settle: 2 * block,
				force: [][][]float64{{{1}}}, structure: [][][]float64{{{1 - r}}}, noise: 0.8 * (1 - r),
				resonance: []float64{2 * r * math.Cos(2*math.Pi*peak/block), -r * r},
			}
			s.lines = []int{peak}
			at := s.cover(rng, 400)
			s.lines = []int{8, 12, 52, 56}
			away := s.cover(rng, 150)
			t.Logf("held the truth: %.2f at the peak, %.3f away from it", at.disc, away.disc)
			if at.disc < test.low || at.disc > test.high {
				t.Errorf("held the truth at the peak: %.2f, want %v to %v", at.disc, test.low, test.high)
			}
			if away.disc < 0.85 || away.disc > 0.95 { // four deviations of a share of 600 are 0.05
				t.Errorf("held the truth away from the peak: %.3f, want 0.90", away.disc)
			}
		})
	}
}

// TestCoverageOfOtherEstimators: with noise on the force of ε times its power the variance of H2 and Hv is
// (1+ε)² times HVariance, so a region of level 0.90 holds the truth with probability 1 - 0.10^(1/(1+ε)²)
// however many averages there are. Noise on the response alone leaves Hv, whitened, with H1's.
func TestCoverageOfOtherEstimators(t *testing.T) {
	const lines, blocks = 3000, 100
	for _, test := range []struct {
		name           string
		estimator      string
		epsilon, noise float64
		whiten         bool
	}{
		{"h1, noise on the response", H1, 0, 2, false},
		{"h2, a little noise on the force", H2, 0.01, 0, false},
		{"h2, more of it", H2, 0.1, 0, false},
		{"h2, much", H2, 0.3, 0, false},
		{"hv, noise on the response", HV, 1e-4, 2, true},
		{"hv, a little noise on both", HV, 0.01, 0.3, true},
		{"hv, more of it", HV, 0.1, 1, true},
		{"hv, much", HV, 0.3, 2, true},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(44, 45))
			m := randomMade(rng, lines, 1, 1, blocks)
			m.h[0], m.mix[0] = cmplx.Rect(3, 1), 1
			m.noise, m.forceNoise = test.noise, math.Sqrt(test.epsilon)
			var noiseForce, noiseResponse []float64
			if test.whiten {
				noiseForce = slices.Repeat([]float64{test.epsilon}, lines)
				noiseResponse = slices.Repeat([]float64{test.noise * test.noise}, lines)
			}
			e := by(test.estimator, m.snapshot(rng), noiseForce, noiseResponse)
			held := 0.0
			for k, h := range e.H {
				held += within(cmplx.Abs(h-m.h[0]), e.ConfidenceRadius[k]) / lines
			}
			want := 1 - math.Pow(0.1, 1/((1+test.epsilon)*(1+test.epsilon)))
			if math.Abs(held-want) > 0.025 { // four deviations of a share of 3000, and the second order
				t.Errorf("held the truth: %.3f, want %.3f", held, want)
			}
			t.Logf("held the truth: %.3f, want %.3f", held, want)
		})
	}
}
