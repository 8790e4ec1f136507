package estimate

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// flat makes estimates of 11 lines with |H| = 1 and the given random error everywhere.
func flat(q, p, averages int, err float64) *Estimates {
	e := New(spectra.Shape{Lines: 11, Forces: q, Responses: p}, Method{Points: noPoints(q)})
	e.Averages, e.EffectiveAverages = averages, float64(averages)
	fill(e.H, 1)
	fill(e.RandomError, err)
	return e
}

var tenLines = Target{RandomError: 0.05, Share: 0.9, DepthDB: 20, First: 1, Last: 10}

func progressOf(e *Estimates, t Target) *Progress {
	var p Progress
	p.Update(e, t)
	return &p
}

func verdictOf(e *Estimates, t Target, standing ...string) Verdict {
	return Judge(e, progressOf(e, t), t, &Findings{Standing: standing}, func(n int) string { return fmt.Sprintf("frf%d", n) })
}

func TestVerdict(t *testing.T) {
	for _, test := range []struct {
		name     string
		q        int
		averages int
		err      float64
		want     State
	}{
		{"settles for eight averages", 1, 7, 0.01, Settling},
		{"then judges", 1, 8, 0.01, Enough},
		{"settles for three averages a force", 4, 11, 0.01, Settling},
		{"then judges four forces", 4, 12, 0.01, Enough},
		{"is not enough above the target", 2, 40, 0.0501, Averaging},
		{"is enough at the target", 2, 40, 0.05, Enough},
		{"is not enough when unknown", 2, 40, math.NaN(), Averaging},
	} {
		t.Run(test.name, func(t *testing.T) {
			v := verdictOf(flat(test.q, 2, test.averages, test.err), tenLines)
			if v.State != test.want {
				t.Errorf("%s (%v), want %s", v.State, v.Reasons, test.want)
			}
			if v.Reasons == nil {
				t.Error("reasons are nil")
			}
		})
	}
}

func TestReasonsNameTheWorst(t *testing.T) {
	e := flat(2, 3, 40, 0.01)
	for k := range 11 {
		e.RandomError[k*6+4] = 0.083
	}
	v := verdictOf(e, tenLines, "S1 reached the limit")
	if len(v.Reasons) != 2 || v.Reasons[0] != "S1 reached the limit" || !strings.HasPrefix(v.Reasons[1], "frf4: random error 8.3 % on 90 %") {
		t.Errorf("reasons %q", v.Reasons)
	}
}

func TestShareOfLines(t *testing.T) {
	e := flat(1, 1, 40, 0.01)
	e.RandomError[3] = 0.5 // one of ten lines may exceed
	if p := progressOf(e, tenLines); !p.Met || p.Errors[0] != 0.01 {
		t.Errorf("one bad line of ten: met %v with error %v", p.Met, p.Errors[0])
	}
	e.RandomError[4] = math.NaN() // an unknown one exceeds, too
	if p := progressOf(e, tenLines); p.Met || p.Errors[0] != 0.5 {
		t.Errorf("two bad lines of ten: met %v with error %v, want 0.5", p.Met, p.Errors[0])
	}
	e.RandomError[3] = math.NaN()
	if p := progressOf(e, tenLines); p.Met || !math.IsNaN(p.Errors[0]) || !math.IsNaN(float64(p.AveragesNeeded)) {
		t.Errorf("two unknown lines of ten: met %v with error %v and need %v", p.Met, p.Errors[0], p.AveragesNeeded)
	}
}

func TestRoundingAddsNoLine(t *testing.T) {
	values := make([]float64, 25)
	for i := range values {
		values[i] = float64(i + 1)
	}
	if got := shareQuantile(values, 0.28); got != 7 { // 0.28·25 is 7.000000000000001 in binary
		t.Errorf("28 %% of 25 lines reach up to line %v, want 7", got)
	}
}

func TestLinesFarBelowTheMaximumDoNotCount(t *testing.T) {
	e := flat(1, 1, 40, 0.01)
	for k := 5; k < 11; k++ {
		e.H[k], e.RandomError[k] = 0.099, 0.9 // -20.1 dB
	}
	if p := progressOf(e, tenLines); !p.Met {
		t.Errorf("lines 20.1 dB down count: error %v", p.Errors[0])
	}
	for k := 5; k < 11; k++ {
		e.H[k] = 0.101 // -19.9 dB
	}
	if p := progressOf(e, tenLines); p.Met {
		t.Error("lines 19.9 dB down do not count")
	}
}

func TestLinesOutsideTheBandDoNotCount(t *testing.T) {
	e := flat(1, 1, 40, 0.01)
	e.H[0], e.RandomError[0] = 1000, math.NaN()
	if p := progressOf(e, tenLines); !p.Met {
		t.Errorf("line 0 counts: error %v", p.Errors[0])
	}
}

func TestTargetBand(t *testing.T) {
	r := &rig.Rig{}
	r.Grid.SpacingHz, r.Grid.Lines = 0.5, 201
	for _, test := range []struct {
		window string
		minHz  float64
		first  int
	}{{"hann", 0, 3}, {"flattop", 0, 6}, {"rectangular", 0, 2}, {"hann", 10, 20}, {"hann", 10.1, 21}} {
		r.Analysis.Window, r.Analysis.MinFrequencyHz = test.window, test.minHz
		if got := NewTarget(r); got.First != test.first || got.Last != 200 {
			t.Errorf("%s from %v Hz: lines %d to %d, want %d to 200", test.window, test.minHz, got.First, got.Last, test.first)
		}
	}
}

func TestAveragesNeeded(t *testing.T) {
	// n = q + (n_e - q)(error/target)² independent averages, times M/n_e blocks: with q = 2, n_e = 20,
	// M = 21 and twice the target, (2 + 18·4)·21/20 = 77.7. Worked out by hand.
	e := flat(2, 1, 21, 0.1)
	e.EffectiveAverages = 20
	if got := progressOf(e, tenLines).AveragesNeeded; got != 78 {
		t.Errorf("%v averages needed, want 78", got)
	}
	e.EffectiveAverages = 2
	if got := progressOf(e, tenLines).AveragesNeeded; !math.IsNaN(float64(got)) {
		t.Errorf("%v averages needed while nothing is known", got)
	}
}

// TestNeedComesTrue: the need predicted at some error is the number of averages at which the error
// formula gives the target.
func TestNeedComesTrue(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 8).Draw(t, "q")
		n := rapid.IntRange(q+1, 200).Draw(t, "n")
		err := rapid.Float64Range(0.01, 1).Draw(t, "error")
		needed := float64(progressOf(flat(q, 1, n, err), tenLines).AveragesNeeded)
		at := func(m float64) float64 { return err * math.Sqrt(float64(n-q)/(m-float64(q))) }
		if at(needed) > 0.05*(1+1e-6) || needed-1 > float64(q) && at(needed-1) < 0.05*(1-1e-6) {
			t.Fatalf("predicted %v: the error would be %v there and %v one before", needed, at(needed), at(needed-1))
		}
	})
}

func TestProgressAllocatesNothing(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	e := estimatesOf(randomMade(rng, 200, 2, 3, 20).snapshot(rng), nil)
	target := Target{RandomError: 0.05, Share: 0.9, DepthDB: 20, First: 3, Last: 199}
	p := progressOf(e, target)
	if allocs := testing.AllocsPerRun(20, func() { p.Update(e, target) }); allocs != 0 {
		t.Errorf("%v allocations an update, want none", allocs)
	}
}

func TestSettlingOfRig(t *testing.T) {
	r := &rig.Rig{Forces: make([]rig.Channel, 2)}
	r.Analysis.Window, r.Grid.SpacingHz, r.Grid.Lines = "rectangular", 1, 20
	for _, test := range []struct {
		excitation string
		want       int
	}{{"random", 8}, {"burst", 8}, {"periodic", 6}} {
		r.Analysis.Excitation = test.excitation
		target := NewTarget(r)
		if target.Settling != test.want {
			t.Errorf("%s: %d averages, want %d", test.excitation, target.Settling, test.want)
		}
	}
	target := tenLines
	target.Settling = 6
	for averages, want := range map[int]State{5: Settling, 6: Enough} {
		if v := verdictOf(flat(2, 1, averages, 0.01), target); v.State != want {
			t.Errorf("%d averages: %s, want %s", averages, v.State, want)
		}
	}
}

// TestReasonsTellWhatAveragingDoesNotMend goes through drift and leakage, in every state.
func TestReasonsTellWhatAveragingDoesNotMend(t *testing.T) {
	m := twoModes(1.5)
	for _, test := range []struct {
		name        string
		shift       float64
		randomError float64
		blocks      int
		state       State
		reasons     []string // parts of them
	}{
		{"settling", 3, 0.05, 6, Settling, []string{"6 of the 8"}},
		{"still averaging", 0, 0.01, 48, Averaging, []string{"random error", "only 1."}},
		{"enough", 0, 0.5, 48, Enough, []string{"only 1."}},
		{"enough of something that moved", 6, 0.5, 64, Enough, []string{"the first blocks and the later ones differ by", "lines wide"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			d, e := driftOf(m, 1, test.blocks, test.shift)
			target := m.target()
			target.RandomError = test.randomError
			r := NewResonances(m.Shape, m.window, true)
			r.Update(e, target)
			name := func(n int) string { return fmt.Sprintf("frf%d", n) }
			v := Judge(e, progressOf(e, target), target, &Findings{Drift: d, Resonances: r}, name)
			ok := v.State == test.state && len(v.Reasons) == len(test.reasons)
			for n, part := range test.reasons {
				ok = ok && strings.Contains(v.Reasons[n], part)
			}
			if !ok {
				t.Errorf("%s: %q", v.State, v.Reasons)
			}
			if v := Judge(e, progressOf(e, target), target, nil, name); v.Reasons == nil {
				t.Error("reasons are nil")
			}
		})
	}
}
