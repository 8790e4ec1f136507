package estimate

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// TestMemoryCountsLikeTheAverage: n_e after any number of blocks is that of spectra.Effective, which adds the
// pairs one by one.
func TestMemoryCountsLikeTheAverage(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		window := rapid.SampledFrom(allWindows).Draw(t, "window").Values(32)
		hop := rapid.SampledFrom([]int{0, 1, 5, 8, 16, 32}).Draw(t, "hop")
		blocks := rapid.IntRange(2, 60).Draw(t, "memory")
		m := NewMemory(blocks, window, hop)
		effective := spectra.NewEffective(window, hop, 1, 1-1/float64(blocks))
		for n := range 150 {
			if got, want := m.Averages(n), effective.Averages(); math.Abs(got-want) > 1e-9*want {
				t.Fatalf("%v averages after %d blocks, want %v", got, n, want)
			}
			effective.Add(int64(n * hop))
		}
		if got, want := m.Averages(fullMemories*blocks), m.Limit(); math.Abs(got-want) > 1e-11*want {
			t.Fatalf("%v averages in the end, want %v", got, want)
		}
		need := rapid.Float64Range(1, 2*float64(blocks)).Draw(t, "need")
		n := m.BlocksFor(need)
		if math.IsNaN(n) {
			if need < m.Limit()*(1-1e-9) {
				t.Fatalf("%v averages are said to be beyond %v", need, m.Limit())
			}
		} else if m.Averages(int(n)) < need || m.Averages(int(n)-1) >= need {
			t.Fatalf("%v blocks for %v averages: %v, and %v one before", n, need, m.Averages(int(n)), m.Averages(int(n)-1))
		}
	})
}

// TestMemoryLimit has values worked out by hand: memory²(1-λ²) is 2·memory - 1 without overlap; a half overlapped
// Hann has rho² = 1/36 at one hop.
func TestMemoryLimit(t *testing.T) {
	if got := NewMemory(10, spectra.Rectangular.Values(8), 0).Limit(); math.Abs(got-19) > 1e-12 {
		t.Errorf("limit %v without overlap, want 19", got)
	}
	if got, want := NewMemory(10, spectra.Hann.Values(64), 32).Limit(), 19/(1+2*0.9/36); math.Abs(got-want) > 1e-12 {
		t.Errorf("limit %v of half overlapped Hann blocks, want %v", got, want)
	}
}

func TestNeedWithMemory(t *testing.T) {
	target := tenLines
	target.Memory = NewMemory(20, spectra.Rectangular.Values(8), 0) // worth 39 at most
	e := flat(2, 1, 12, 0.1)
	e.EffectiveAverages = target.Memory.Averages(12)
	// q + (n_e - q)·4 = 2 + 4·(n_e - 2), n_e = 11.85 after 12 blocks: 41.4, which no number of blocks is worth.
	p := progressOf(e, target)
	if !math.IsNaN(float64(p.AveragesNeeded)) || math.Abs(p.BeyondMemory-(2+4*(e.EffectiveAverages-2))) > 1e-9 {
		t.Errorf("%v averages needed, %v beyond the memory", p.AveragesNeeded, p.BeyondMemory)
	}
	v := verdictOf(e, target)
	if len(v.Reasons) != 2 || !strings.HasPrefix(v.Reasons[1], "the memory of 20 blocks can't reach it: ") {
		t.Errorf("reasons %q", v.Reasons)
	}
	fill(e.RandomError, 0.08)
	p = progressOf(e, target)
	need := 2 + (e.EffectiveAverages-2)*2.56
	if got := float64(p.AveragesNeeded); got != target.Memory.BlocksFor(need) || p.BeyondMemory != 0 {
		t.Errorf("%v blocks needed, %v beyond the memory, want %v blocks", got, p.BeyondMemory, target.Memory.BlocksFor(need))
	}
	if v := verdictOf(e, target); len(v.Reasons) != 1 {
		t.Errorf("reasons %q", v.Reasons)
	}
}

func TestMemoryOfRig(t *testing.T) {
	r := &rig.Rig{}
	r.Grid.Block, r.Grid.Hop, r.Grid.SpacingHz, r.Grid.Lines = 64, 32, 1, 20
	r.Analysis.Window = "hann"
	if NewTarget(r).Memory != nil {
		t.Error("linear averaging has a memory")
	}
	r.Analysis.Memory = 10
	if got := NewTarget(r).Memory.Limit(); math.Abs(got-19/1.05) > 1e-12 {
		t.Errorf("limit %v, want %v", got, 19/1.05)
	}
}
