package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

// twoModes is a rig with two forces, two responses and two modes of the given bandwidth in lines.
func twoModes(bandwidth float64) modal {
	return modal{
		Shape:     spectra.Shape{Lines: 81, Forces: 2, Responses: 2},
		Averaging: spectra.Averaging{Halves: true},
		window:    spectra.Hann, block: 216, overlap: 0.5, direct: 0.01, noise: 0.1,
		modes: []madeMode{
			{25, bandwidth, []float64{1, 0.5}, []float64{1, 0.3}},
			{55, bandwidth, []float64{-0.7, 0.9}, []float64{0.5, 1}},
		},
	}
}

// driftOf runs a rig; its first mode moves by shift lines half-way.
func driftOf(m modal, seed uint64, blocks int, shift float64) (*Drift, *Estimates) {
	r := m.start(seed)
	r.run(blocks / 2)
	if shift != 0 {
		r.modes = append([]madeMode{}, r.modes...)
		r.modes[0].line += shift
	}
	r.run(blocks)
	s := r.snapshot()
	e := estimatesOf(s, nil)
	d := NewDrift(m.Shape)
	d.Update(s, e, m.target())
	return d, e
}

// TestDriftByChance: without a drift the mean of u is 1 and the chance of the worst is what it says.
// 0.05 of 400 is 20, four deviations of that are 17; four frequency responses that share their
// noise make it smaller than the bound for any.
func TestDriftByChance(t *testing.T) {
	for _, test := range []struct {
		name      string
		bandwidth float64
		blocks    int
	}{{"narrow modes, parts of 2 to 1", 3, 24}, {"wide modes, even parts", 12, 32}} {
		t.Run(test.name, func(t *testing.T) {
			m := twoModes(test.bandwidth)
			var mean float64
			unlikely, beyond := 0, 0
			const runs = 400
			for seed := range runs {
				d, _ := driftOf(m, uint64(seed), test.blocks, 0)
				for _, ratio := range d.Ratio {
					mean += ratio / runs / 4
				}
				if _, chance := d.furthest(m.target().Lines, func(int) bool { return true }); chance < 0.05 {
					unlikely++
				}
				if _, yes := d.Beyond(m.target()); yes {
					beyond++
				}
			}
			// Overlap costs a little: n_e of a part is not quite its share of n_e.
			if mean < 0.93 || mean > 1.05 {
				t.Errorf("mean of u is %.3f, want about 1", mean)
			}
			if unlikely < 2 || unlikely > 37 {
				t.Errorf("%d of %d runs drift with a chance below 0.05", unlikely, runs)
			}
			if beyond > 3 { // 0.4 are expected
				t.Errorf("%d of %d runs are said to drift", beyond, runs)
			}
			t.Logf("mean %.3f, %d below 0.05, %d said to drift", mean, unlikely, beyond)
		})
	}
}

// TestChanceOfAMean: 100 lines with a mean of 1.5. The variance of their sum has the flat top's |c|⁴, see
// flatTopCorrelation; then 2 scipy.stats.gamma.sf(1.5 f, f) with f = 100² over that variance, for the worst of two.
func TestChanceOfAMean(t *testing.T) {
	d := NewDrift(spectra.Shape{Lines: 200, Forces: 1, Responses: 2})
	d.sure, d.lines = []float64{0.9, 1.5}, []int{100, 100}
	n, chance := d.furthest(NewLineCorrelation(spectra.FlatTop), func(int) bool { return true })
	if n != 1 || math.Abs(chance-0.00898290) > 1e-6 {
		t.Errorf("frequency response %d by a chance of %v, want 1 by 0.00898290", n, chance)
	}
	if _, chance := d.furthest(LineCorrelation{}, func(n int) bool { return n == 0 }); chance != 1 {
		t.Errorf("chance of %v when none is beyond the mean, want 1", chance)
	}
}

// TestDriftOfUnevenParts holds the degrees of freedom to account where they are few: no window, no
// overlap, only noise, as in the comment on Drift.
func TestDriftOfUnevenParts(t *testing.T) {
	for _, test := range []struct {
		q, blocks   int
		ratio, sure float64
	}{{1, 8, 1, 0.97}, {2, 12, 1.12, 1.03}, {4, 24, 1.06, 1}, {4, 48, 1.02, 1.01}} {
		m := modal{
			Shape:     spectra.Shape{Lines: 129, Forces: test.q, Responses: 1},
			Averaging: spectra.Averaging{Halves: true},
			window:    spectra.Rectangular, block: 288, direct: 1, noise: 1,
		}
		var ratio, sure float64
		const runs = 60
		for seed := range runs {
			d, _ := driftOf(m, uint64(seed), test.blocks, 0)
			ratio += d.Ratio[0] / runs
			sure += d.sure[0] / runs
		}
		// 60 times 128 values with deviation 1 to 1.25: their mean's is 0.014 at most.
		if math.Abs(ratio-test.ratio) > 0.045 || math.Abs(sure-test.sure) > 0.045 {
			t.Errorf("q = %d, %d blocks: %.3f and %.3f, want %.2f and %.2f", test.q, test.blocks, ratio, sure, test.ratio, test.sure)
		}
	}
}

func TestDriftIsFound(t *testing.T) {
	m := twoModes(8)
	for seed := range uint64(10) {
		d, _ := driftOf(m, seed, 48, 2) // a quarter of the bandwidth
		n, beyond := d.Beyond(m.target())
		if !beyond {
			t.Errorf("run %d: a mode that moved by a quarter of its bandwidth is not found (ratios %.2f)", seed, d.Ratio)
		}
		// At x bandwidths off its centre |H| is 1/|1+2ix| and the move changes it by about 2·0.25/(1+4x²):
		// the root of the ratio of the integrals of their squares over x is 0.5/√2. The other mode,
		// which stays, has an eighth of the power.
		if n == 0 && math.Abs(d.Change[0]-0.33) > 0.15 {
			t.Errorf("run %d: change of %.3f of |H|, want about 0.33", seed, d.Change[0])
		}
	}
}

// TestDriftInOneLine works the ratio out from its definition, with the two parts as averages of
// their own.
func TestDriftInOneLine(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		rng := newRand(t)
		early := randomMade(rng, 3, q, 2, q+rapid.IntRange(1, 9).Draw(t, "early"))
		late := early
		late.blocks = q + rapid.IntRange(1, 9).Draw(t, "late")
		a, b := early.snapshot(rng), late.snapshot(rng)
		s := early.snapshot(rng)
		s.Early = spectra.Part{Densities: a.Densities, Averages: a.Averages, EffectiveAverages: a.EffectiveAverages}
		s.Late = spectra.Part{Densities: b.Densities, Averages: b.Averages, EffectiveAverages: b.EffectiveAverages}
		e, ea, eb := estimatesOf(s, nil), estimatesOf(a, nil), estimatesOf(b, nil)
		d := NewDrift(s.Shape)
		target := Target{RandomError: 0.05, Share: 0.9, DepthDB: 20, First: 1, Last: 1}
		d.Update(s, e, target)
		v := a.EffectiveAverages + b.EffectiveAverages - 2*float64(q)
		for n := range d.Ratio {
			at := 2*q + n
			variance := func(e *Estimates) float64 {
				sd := e.RandomError[at] * cmplx.Abs(e.H[at])
				return 2 * sd * sd
			}
			square := abs2(ea.H[at] - eb.H[at])
			sum := variance(ea) + variance(eb)
			want := v * math.Log(1+square/sum/v)
			change := math.Sqrt(math.Max(0, square-sum)) / cmplx.Abs(e.H[at])
			if math.Abs(d.Ratio[n]-want) > 1e-6*(1+want) || math.Abs(d.Change[n]-change) > 1e-6*(1+change) {
				t.Fatalf("ratio %v and change %v, want %v and %v", d.Ratio[n], d.Change[n], want, change)
			}
		}
	})
}

func TestDriftUnknown(t *testing.T) {
	m := twoModes(8)
	known := func(d *Drift) (some bool) {
		for _, ratio := range d.Ratio {
			some = some || !math.IsNaN(ratio)
		}
		if _, beyond := d.Beyond(m.target()); beyond {
			t.Error("a drift is said to be there")
		}
		return some
	}
	if d, _ := driftOf(m, 1, 5, 0); known(d) { // parts of 2 and 3, worth less than two averages
		t.Error("a part that is worth fewer averages than there are forces has a drift")
	}
	if d, _ := driftOf(m, 1, 8, 0); !known(d) {
		t.Error("parts of four blocks have no drift")
	}
	exponential := m
	exponential.Averaging = spectra.Averaging{Memory: 20}
	if d, _ := driftOf(exponential, 1, 40, 8); known(d) {
		t.Error("exponential averaging has a drift")
	}
	r := m.start(1)
	r.run(32)
	s := r.snapshot()
	e := estimatesOf(s, nil)
	d := NewDrift(m.Shape)
	for k := range m.Lines {
		s.Late.Gyy[k*2+1] = 0
	}
	d.Update(s, e, m.target())
	if math.IsNaN(d.Ratio[0]) || !math.IsNaN(d.Ratio[2]) || !math.IsNaN(d.Change[3]) {
		t.Errorf("with the second response silent in one part: %v", d.Ratio)
	}
	s.Memory = 20
	if d.Update(s, e, m.target()); known(d) {
		t.Errorf("with a memory: %v", d.Ratio)
	}
	s.Memory = 0
	fill(s.Early.Gxx, 1) // forces that are the same
	if d.Update(s, e, m.target()); known(d) {
		t.Errorf("with forces that cannot be told apart: %v", d.Ratio)
	}
}

// TestSmallDriftIsNoAlarm: a change of 2 % of |H|, sure after many averages, is less than the 5 % that
// the target accepts.
func TestSmallDriftIsNoAlarm(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 3))
	early := randomMade(rng, 60, 1, 1, 4000)
	early.h[0], early.mix[0], early.noise = 1, 1, 0.1
	for _, test := range []struct {
		h    complex128
		want bool
	}{{1.02, false}, {1.1, true}} {
		late := early
		late.h = []complex128{test.h}
		a, b := early.snapshot(rng), late.snapshot(rng)
		s := early.snapshot(rng)
		s.Early = spectra.Part{Densities: a.Densities, EffectiveAverages: 4000}
		s.Late = spectra.Part{Densities: b.Densities, EffectiveAverages: 4000}
		d := NewDrift(s.Shape)
		target := Target{RandomError: 0.05, Share: 0.9, DepthDB: 20, First: 1, Last: 59}
		d.Update(s, estimatesOf(s, nil), target)
		if _, chance := d.furthest(target.Lines, func(int) bool { return true }); chance > 1e-9 {
			t.Errorf("H of 1 and %v: chance of %v", test.h, chance)
		}
		if _, got := d.Beyond(target); got != test.want {
			t.Errorf("H of 1 and %v, change %.3f: beyond is %v", test.h, d.Change[0], got)
		}
		if text := d.sentence(0, "A1/S1"); !strings.HasPrefix(text, "A1/S1: ") {
			t.Error(text)
		}
	}
}

func TestDriftAllocatesNothing(t *testing.T) {
	m := twoModes(8)
	r := m.start(1)
	r.run(20)
	s := r.snapshot()
	e := estimatesOf(s, nil)
	d, target := NewDrift(m.Shape), m.target()
	if allocs := testing.AllocsPerRun(20, func() { d.Update(s, e, target); d.Beyond(target) }); allocs > 0 {
		t.Errorf("%v allocations an update, want none", allocs)
	}
}
