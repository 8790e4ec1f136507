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

// oneMode is a rig with a single mode of the given bandwidth in lines, between two lines.
func oneMode(w spectra.Window, q, p int, bandwidth float64) modal {
	return modal{
		Shape: spectra.Shape{Lines: 201, Forces: q, Responses: p}, window: w, block: 512, overlap: 0.5,
		direct: 0.02, noise: 0.1,
		modes: []madeMode{{100.3, bandwidth, []float64{1, 0.5}[:q], []float64{1, 0.3, -0.5}[:p]}},
	}
}

func resonancesOf(m modal, seed uint64, blocks int) []Resonance {
	run := m.start(seed)
	run.run(blocks)
	r := NewResonances(m.Shape, m.window, true)
	r.Update(estimatesOf(run.snapshot(), nil), m.target())
	return r.List
}

// TestBandwidthIsMeasured against the half-power bandwidth with which the modes are made, 50 averages.
func TestBandwidthIsMeasured(t *testing.T) {
	const runs = 16
	for _, test := range []struct {
		window    spectra.Window
		q, p      int
		bandwidth float64
		tolerance float64 // of 9 runs in 10
	}{
		{spectra.Hann, 1, 1, 2, 0.15}, {spectra.Hann, 1, 1, 4, 0.1}, {spectra.Hann, 1, 1, 20, 0.05},
		{spectra.Hann, 2, 3, 2, 0.15}, {spectra.Hann, 2, 3, 8, 0.1}, {spectra.Hann, 2, 3, 20, 0.1},
		{spectra.Rectangular, 1, 1, 2, 0.15}, {spectra.Rectangular, 2, 3, 8, 0.15},
		// What a flat top leaves of a mode much narrower than its own four lines says little.
		{spectra.FlatTop, 1, 1, 4, 0.35}, {spectra.FlatTop, 2, 3, 8, 0.2}, {spectra.FlatTop, 2, 3, 20, 0.1},
	} {
		t.Run(fmt.Sprintf("%s %v lines %d x %d", test.window, test.bandwidth, test.p, test.q), func(t *testing.T) {
			var ratios []float64
			for seed := range uint64(runs) {
				list := resonancesOf(oneMode(test.window, test.q, test.p, test.bandwidth), seed, 50)
				if len(list) != 1 || math.Abs(list[0].FrequencyHz-100.3) > 0.15*test.bandwidth+0.1 { // lines are 1 Hz apart
					t.Fatalf("run %d: %v, want one at 100.3 Hz", seed, list)
				}
				ratios = append(ratios, float64(list[0].LinesPerBandwidth)/test.bandwidth)
			}
			off := 0
			for _, ratio := range ratios {
				if math.Abs(ratio-1) > test.tolerance {
					off++
				}
			}
			slices.Sort(ratios)
			if off > runs/8 || math.Abs(ratios[runs/2]-1) > test.tolerance/2 {
				t.Errorf("measured over true: %.3f", ratios)
			}
		})
	}
}

// TestNarrowModesReadAsNarrow: H drowns in leakage there, and still they must be seen.
func TestNarrowModesReadAsNarrow(t *testing.T) {
	for _, bandwidth := range []float64{0.3, 0.5} {
		for _, size := range [][2]int{{1, 1}, {2, 3}} {
			missed := 0
			for seed := range uint64(12) {
				list := resonancesOf(oneMode(spectra.Hann, size[0], size[1], bandwidth), seed, 50)
				if len(list) == 0 {
					missed++
				} else if len(list) != 1 || !(list[0].LinesPerBandwidth < 1) {
					t.Errorf("%v lines, run %d: %v", bandwidth, seed, list)
				}
			}
			if missed > 3 {
				t.Errorf("%d forces, %v lines: %d of 12 runs show nothing", size[0], bandwidth, missed)
			}
		}
	}
}

// TestSeveralModes: neighbours two bandwidths apart, and wide beside narrow.
func TestSeveralModes(t *testing.T) {
	m := oneMode(spectra.Hann, 2, 3, 4)
	m.modes = []madeMode{
		{30, 2, []float64{1, 0.5}, []float64{1, 0.3, -0.5}},
		{40, 2, []float64{0.7, -0.9}, []float64{0.5, 1, 0.5}},
		{47, 3, []float64{0.7, 0.9}, []float64{0.5, 1, 0.5}},
		{90, 4, []float64{1, 0.5}, []float64{1, 0.3, -0.5}},
		{98, 4, []float64{0.7, -0.9}, []float64{0.5, 1, 0.5}},
		{150, 15, []float64{0.7, -0.9}, []float64{0.5, 1, -0.5}},
	}
	for seed := range uint64(6) {
		list := resonancesOf(m, seed, 60)
		if len(list) != len(m.modes) {
			t.Errorf("run %d: %.2f", seed, list)
			continue
		}
		for n, mode := range m.modes {
			got := list[n]
			if math.Abs(got.FrequencyHz-mode.line) > 0.15*mode.bandwidth || math.Abs(float64(got.BandwidthHz)/mode.bandwidth-1) > 0.25 {
				t.Errorf("run %d: %.2f, want %v Hz with %v Hz", seed, got, mode.line, mode.bandwidth)
			}
		}
	}
}

// TestFlatStructureHasNoResonances: a false one in at most 1 of 24 runs of 600 lines, hum 20 dB above the noise or not.
func TestFlatStructureHasNoResonances(t *testing.T) {
	for _, hum := range []float64{0, 1} {
		for _, noise := range []float64{0.1, 1, 10} {
			found := 0
			for seed := range uint64(24) {
				m := modal{Shape: spectra.Shape{Lines: 601, Forces: 1 + int(seed%2), Responses: 2}, window: spectra.Hann,
					block: 1536, overlap: 0.5, direct: 1, noise: noise, hum: hum * noise}
				found += len(resonancesOf(m, seed, 12+int(seed)))
			}
			if found > 1 {
				t.Errorf("noise %v, hum %v: %d false resonances", noise, hum, found)
			}
		}
	}
}

// TestNoiseAloneIsNotSure: one frequency response, so that nothing averages out.
func TestNoiseAloneIsNotSure(t *testing.T) {
	found := 0
	for seed := range uint64(12) {
		m := modal{Shape: spectra.Shape{Lines: 2001, Forces: 1, Responses: 1}, window: spectra.Rectangular,
			block: 5000, direct: 1, noise: 0.1}
		found += len(resonancesOf(m, seed, 30))
	}
	if found > 1 {
		t.Errorf("%d false resonances in 12 runs of 2000 lines", found)
	}
}

func TestTwinsAreOne(t *testing.T) {
	r := NewResonances(spectra.Shape{Lines: 10, Forces: 1, Responses: 1}, spectra.Hann, true)
	r.peaks = append(r.peaks[:0],
		peak{line: 1, centre: 10, bandwidth: 4, prominence: 7}, peak{line: 2, centre: 11, bandwidth: 3, prominence: 9},
		peak{line: 3, centre: 12, bandwidth: 2, prominence: 8}, peak{line: 4, centre: 14, bandwidth: 2, prominence: 4},
		peak{line: 5, centre: 14.1, bandwidth: math.NaN(), prominence: 6})
	r.dropTwins()
	var lines []int
	for _, p := range r.peaks {
		lines = append(lines, p.line)
	}
	// 1 and 2 are 0.25 bandwidths apart, 2 and 3 a third; 3 and 4 a whole one; of 5 none is known.
	if !slices.Equal(lines, []int{2, 4, 5}) {
		t.Errorf("left are %v, want 2, 4 and 5", lines)
	}
}

// accelerance is -ω² Σ a/(ω_r² - ω² + 2iζω_rω), the modal form (Ewins, Modal Testing, 2nd ed., 2000).
func accelerance(freqHz float64, modes [][3]float64) (h complex128) {
	for _, m := range modes {
		f, zeta, a := m[0], m[1], m[2]
		h -= complex(a*freqHz*freqHz, 0) / complex(f*f-freqHz*freqHz, 2*zeta*f*freqHz)
	}
	return h
}

// exact are estimates with H of one force and one response as given, lines 1 Hz apart, and a random error so small
// that H is that.
func exact(lines int, h func(k int) complex128) *Estimates {
	e := New(spectra.Shape{Lines: lines, Forces: 1, Responses: 1}, Method{Points: noPoints(1)})
	e.Averages, e.EffectiveAverages = 100, 100
	for k := range lines {
		e.FrequencyHz[k] = float64(k)
		e.H[k] = h(k)
		e.RandomError[k] = 1e-4
		e.MultipleCoherence[k] = 0.999998
	}
	return e
}

func wide(lines int) Target {
	return Target{RandomError: 0.05, Share: 0.9, DepthDB: 20, First: 3, Last: lines - 1}
}

// TestBandwidthOfAccelerance: the half-power bandwidth of viscous damping is 2ζf, for light damping.
func TestBandwidthOfAccelerance(t *testing.T) {
	modes := [][3]float64{{60, 0.02, 1}, {130, 0.01, -0.5}, {300, 0.05, 2}, {600, 0.01, 1}, {612, 0.01, 0.8}, {900, 0.03, 1}}
	e := exact(1201, func(k int) complex128 { return accelerance(float64(k), modes) })
	r := NewResonances(e.Shape, spectra.Rectangular, false)
	r.Update(e, wide(1201))
	if len(r.List) != len(modes) {
		t.Fatalf("resonances %.2f, want %d", r.List, len(modes))
	}
	for n, m := range modes {
		got, bandwidth := r.List[n], 2*m[1]*m[0]
		if math.Abs(got.FrequencyHz-m[0]) > 0.05*bandwidth || math.Abs(float64(got.BandwidthHz)/bandwidth-1) > 0.1 { // two are a bandwidth apart
			t.Errorf("%.3f, want %v Hz with %v Hz", got, m[0], bandwidth)
		}
	}
	if _, found := r.Leakage(); found {
		t.Error("signals that fit into their blocks leak")
	}
}

func TestHeavyDamping(t *testing.T) {
	for _, zeta := range []float64{0.1, 0.2} {
		e := exact(1201, func(k int) complex128 { return accelerance(float64(k), [][3]float64{{400, zeta, 1}}) })
		r := NewResonances(e.Shape, spectra.Hann, true)
		r.Update(e, wide(1201))
		// The mode is no 1/(1 + 2ix/B) any more, so 20 % is what one can ask for.
		if len(r.List) != 1 || math.Abs(r.List[0].FrequencyHz-400) > 40 || math.Abs(float64(r.List[0].BandwidthHz)/(800*zeta)-1) > 0.2 {
			t.Errorf("damping %v: %.1f, want 400 Hz with %v Hz", zeta, r.List, 800*zeta)
		}
		if _, found := r.Leakage(); found {
			t.Error("a wide mode leaks")
		}
	}
}

func TestResonancesAreBoundedAndOrdered(t *testing.T) {
	var modes [][3]float64
	for f := 30.0; f < 1900; f += 20 {
		modes = append(modes, [3]float64{f, 2 / f, 1 / f})
	}
	e := exact(2001, func(k int) complex128 { return accelerance(float64(k), modes) })
	r := NewResonances(e.Shape, spectra.Rectangular, false)
	r.Update(e, wide(2001))
	if len(r.List) != maxResonances {
		t.Errorf("%d resonances, want %d", len(r.List), maxResonances)
	}
	if !slices.IsSortedFunc(r.List, func(a, b Resonance) int { return int(math.Copysign(1, a.FrequencyHz-b.FrequencyHz)) }) {
		t.Errorf("not ordered: %v", r.List)
	}
	before := slices.Clone(r.List)
	if r.Update(e, wide(2001)); !slices.Equal(r.List, before) {
		t.Error("the same estimates give other resonances")
	}
}

func TestResonancesUnknown(t *testing.T) {
	m := oneMode(spectra.Hann, 2, 3, 8)
	if list := resonancesOf(m, 1, 2); len(list) != 0 {
		t.Errorf("two averages, two forces: %v", list)
	}
	run := m.start(1)
	run.run(50)
	e := estimatesOf(run.snapshot(), nil)
	for k := range e.Lines {
		for n := range 2 { // a silent response
			e.H[k*6+2+n], e.RandomError[k*6+2+n], e.MultipleCoherence[k*3+1] = 0, math.NaN(), math.NaN()
		}
		if k == 30 || k == 101 { // forces that cannot be told apart
			for n := range 6 {
				e.H[k*6+n], e.RandomError[k*6+n] = cmplx.NaN(), math.NaN()
			}
		}
	}
	r := NewResonances(m.Shape, m.window, true)
	r.Update(e, m.target())
	if len(r.List) == 0 || math.Abs(r.List[0].FrequencyHz-100.3) > 2 || math.Abs(float64(r.List[0].BandwidthHz)-8) > 2 {
		t.Errorf("%.2f, want one at 100.3 Hz with 8 Hz", r.List)
	}
	fill(e.H, cmplx.NaN())
	if r.Update(e, m.target()); len(r.List) != 0 {
		t.Errorf("nothing known: %v", r.List)
	}
	r.Update(e, Target{First: 5, Last: 6})
	if len(r.List) != 0 {
		t.Errorf("a band of two lines: %v", r.List)
	}
}

// TestLowest against its definition.
func TestLowest(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for range 200 {
		s := make([]float64, 1+rng.IntN(30))
		for n := range s {
			s[n] = float64(rng.IntN(12))
		}
		r := NewResonances(spectra.Shape{Lines: len(s), Forces: 1, Responses: 1}, spectra.Hann, true)
		for _, step := range []int{1, -1} {
			dst := make([]int, len(s))
			r.lowest(dst, s, step)
			for n := range s {
				want := s[n]
				for k := n - step; k >= 0 && k < len(s) && s[k] <= s[n]; k -= step {
					want = min(want, s[k])
				}
				if s[dst[n]] != want {
					t.Fatalf("%v from %d by %d: %v, want %v", s, n, step, s[dst[n]], want)
				}
			}
		}
	}
}

func TestResonancesAllocateNothing(t *testing.T) {
	m := oneMode(spectra.Hann, 2, 3, 4)
	run := m.start(1)
	run.run(50)
	e, target := estimatesOf(run.snapshot(), nil), m.target()
	r := NewResonances(m.Shape, m.window, true)
	if r.Update(e, target); len(r.List) == 0 {
		t.Fatal("no resonance")
	}
	if allocs := testing.AllocsPerRun(20, func() { r.Update(e, target); r.Leakage() }); allocs > 0 {
		t.Errorf("%v allocations an update, want none", allocs)
	}
}
