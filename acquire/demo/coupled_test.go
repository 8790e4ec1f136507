package demo

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"

	"shakerwatch/acquire/rig"
)

func demoLayout(t testing.TB) (*rig.Rig, layout) {
	t.Helper()
	r := Rig()
	l, err := newLayout(r, newSkid())
	if err != nil {
		t.Fatal(err)
	}
	return r, l
}

// lines calls visit for each line of the demo's band.
func lines(r *rig.Rig, visit func(freqHz float64)) {
	for k := int(math.Ceil(r.Analysis.MinFrequencyHz / demoSpacingHz)); ; k++ {
		freqHz := float64(k) * demoSpacingHz
		if freqHz > r.Analysis.MaxFrequencyHz {
			return
		}
		visit(freqHz)
	}
}

func TestCoupledForcesAgainstWrittenOut(t *testing.T) {
	r, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, nil)
	lines(r, func(freqHz float64) {
		got, want := continuous(t, sys, freqHz), forcesByHand(l.structure, l.shakers, freqHz)
		for i := range got {
			for j := range got[i] {
				// 1e-8: the stinger, 1e8 N/m, takes differences of displacements
				if cmplx.Abs(got[i][j]-want[i][j]) > 1e-8*cmplx.Abs(want[j][j]) {
					t.Fatalf("force %d for current %d at %g Hz: %v: want %v", i+1, j+1, freqHz, got[i][j], want[i][j])
				}
			}
		}
	})
}

// What the responses are to the forces must not depend on the shakers.
func TestCoupledResponsesFollowTheForces(t *testing.T) {
	r, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, l.sensors)
	q := len(l.shakers)
	lines(r, func(freqHz float64) {
		y := continuous(t, sys, freqHz)
		h := ratio(y[:q], y[q:])
		for o := range h {
			for i := range h[o] {
				want := l.structure.accelerance(freqHz, l.sensors[o], l.shakers[i].at)
				own := l.structure.accelerance(freqHz, l.shakers[i].at, l.shakers[i].at)
				if cmplx.Abs(h[o][i]-want) > 1e-8*(cmplx.Abs(want)+cmplx.Abs(own)) {
					t.Fatalf("H of %d and %d at %g Hz: %v: want %v", o, i, freqHz, h[o][i], want)
				}
			}
		}
	})
}

func TestCoupledIsStable(t *testing.T) {
	_, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, l.sensors)
	var eigen mat.Eigen
	if !eigen.Factorize(sys.a, mat.EigenNone) {
		t.Fatal("no eigenvalues")
	}
	for _, pole := range eigen.Values(nil) {
		if real(pole) >= 0 {
			t.Errorf("pole %v: want all to decay", pole)
		}
	}
}

// spread describes the forces at one line for independent drives of equal level.
type spread struct {
	power     [2]float64 // N² per A²
	coherence float64
	condition float64 // of the matrix scaled to a unit diagonal
}

func forcesAt(l layout, freqHz float64) spread {
	f := forcesByHand(l.structure, l.shakers, freqHz)
	var s spread
	var cross complex128
	for j := range 2 {
		for i := range 2 {
			s.power[i] += real(f[i][j])*real(f[i][j]) + imag(f[i][j])*imag(f[i][j])
		}
		cross += f[0][j] * cmplx.Conj(f[1][j])
	}
	s.coherence = real(cross*cmplx.Conj(cross)) / (s.power[0] * s.power[1])
	s.condition = (1 + math.Sqrt(s.coherence)) / (1 - math.Sqrt(s.coherence))
	return s
}

// The forces drop where the structure moves easily, and grow dependent there, though the currents
// are independent and flat.
func TestForcesDropAndLockAtResonances(t *testing.T) {
	_, l := demoLayout(t)
	worst := func(centreHz, halfWidthHz float64) (dropDB [2]float64, top spread) {
		for freqHz := centreHz - halfWidthHz; freqHz <= centreHz+halfWidthHz; freqHz += 0.1 {
			s := forcesAt(l, freqHz)
			for i := range 2 {
				// against the force on a blocked load cell below the stinger's resonance
				dropDB[i] = max(dropDB[i], 10*math.Log10(math.Pow(defaultShaker.forceNPerA, 2)/s.power[i]))
			}
			top.coherence = max(top.coherence, s.coherence)
			top.condition = max(top.condition, s.condition)
		}
		return dropDB, top
	}
	// measured on the model when it was tuned; kept so that it stays a useful demo
	for _, c := range []struct {
		name               string
		freqHz, halfHz     float64
		minDB, maxDB       [2]float64
		minCoherence, most float64
	}{
		{"close pair", 250.3, 8, [2]float64{8, 8}, [2]float64{25, 25}, 0.5, 0.9},
		{"second torsion mode", 152.9, 6, [2]float64{4, 0}, [2]float64{25, 25}, 0.6, 0.95},
		{"corner mode", 622.6, 8, [2]float64{12, 0}, [2]float64{25, 25}, 0, 0.3},
		{"between modes", 540, 8, [2]float64{-15, -15}, [2]float64{3, 3}, 0, 0.1},
	} {
		dropDB, top := worst(c.freqHz, c.halfHz)
		t.Logf("%s: drops %.1f and %.1f dB, coherence up to %.2f, condition up to %.1f",
			c.name, dropDB[0], dropDB[1], top.coherence, top.condition)
		for i := range 2 {
			if dropDB[i] < c.minDB[i] || dropDB[i] > c.maxDB[i] {
				t.Errorf("%s: force %d drops by %.1f dB: want %g to %g", c.name, i+1, dropDB[i], c.minDB[i], c.maxDB[i])
			}
		}
		if top.coherence < c.minCoherence || top.coherence > c.most {
			t.Errorf("%s: force coherence up to %.2f: want %g to %g", c.name, top.coherence, c.minCoherence, c.most)
		}
	}
	// the band as a whole stays usable
	var locked, all float64
	lines(Rig(), func(freqHz float64) {
		all++
		if forcesAt(l, freqHz).coherence > 0.3 {
			locked++
		}
	})
	t.Logf("force coherence above 0.3 on %.1f %% of the lines", 100*locked/all)
	if locked/all > 0.1 || locked == 0 {
		t.Errorf("force coherence above 0.3 on %.1f %% of the lines: want some, at most 10", 100*locked/all)
	}
}
