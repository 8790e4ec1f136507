package watch

import (
	"math"
	"math/cmplx"
	"testing"
)

// turned is what a delay makes of a channel.
func turned(delayS float64) func(k int, v complex128) complex128 {
	return func(k int, v complex128) complex128 {
		return v * cmplx.Rect(1, -2*math.Pi*float64(k)*drawnSpacingHz*delayS)
	}
}

func times(gain float64) func(k int, v complex128) complex128 {
	return func(_ int, v complex128) complex128 { return complex(gain, 0) * v }
}

// reciprocityFaults are what can be wrong with channel 0, a force, or 2, its driving-point response.
var reciprocityFaults = []struct {
	name    string
	channel int
	bend    func(k int, v complex128) complex128
	cause   Cause // empty: reciprocity holds
	late    bool  // so late that power seems to flow out
}{
	{"nothing", 2, times(1), "", false},
	{"gain within tolerance", 2, times(1.03), "", false},
	{"gain of 1.2", 2, times(1.2), CauseGain, false},
	{"gain of 0.8", 2, times(0.8), CauseGain, false},
	{"force gain of 2", 0, times(2), CauseGain, false},
	{"polarity", 2, times(-1), CausePolarity, false},
	{"force polarity", 0, times(-1), CausePolarity, false},
	{"delay of 0.15 ms", 2, turned(1.5e-4), CauseSkew, false},
	{"delay of 0.2 ms", 2, turned(2e-4), CauseSkew, false},
	{"delay of 0.4 ms", 2, turned(4e-4), CauseSkew, false},
	{"delay of -2 ms", 2, turned(-2e-3), CauseSkew, true},
	{"delay of a force, 1 ms", 0, turned(1e-3), CauseSkew, true},
}

func TestReciprocityCauses(t *testing.T) {
	for _, f := range reciprocityFaults {
		t.Run(f.name, func(t *testing.T) {
			for seed := range 2 * *manySeeds {
				d := newDrawn(uint64(*firstSeed+seed), 2, 3, 160)
				d.late = f.late
				d.bend = func(k, channel int, v complex128) complex128 {
					if channel == f.channel {
						return f.bend(k, v)
					}
					return v
				}
				d.check(t, f.cause, 24)
			}
		})
	}
	t.Run("tilted", func(t *testing.T) {
		for seed := range 2 * *manySeeds {
			d := newDrawn(uint64(*firstSeed+seed), 2, 3, 160)
			shape := d.shape[0]
			d.shape[0] = append([]float64(nil), shape...)
			straight := append([]float64(nil), shape...)
			d.check(t, "", 24)
			// The sensor at point 0 sees another direction as well; the force does not.
			for m := range d.shape[0] {
				d.shape[0][m] = 0.9*shape[m] + 0.5*d.shape[len(d.shape)-1][m]
			}
			d.forceShape = straight
			d.check(t, CauseLocal, 24)
		}
	})
}

func (d *drawn) check(t *testing.T, want Cause, n int) {
	t.Helper()
	var got Cause
	for _, f := range d.look(n) {
		if f.kind == PolaritySuspect && want != CausePolarity && !d.late {
			t.Error("polarity suspected")
		}
		if f.kind == ReciprocityOff {
			got = f.cause
			if f.detail == "" {
				t.Error("no words for it")
			}
		}
	}
	if got != want {
		t.Errorf("%q, want %q", got, want)
	}
}

// TestReciprocityScatter: with noise that both driving points share, and forces that depend on each other, the two
// sides still differ by no more than they are said to.
func TestReciprocityScatter(t *testing.T) {
	for _, share := range []float64{-0.9, 0, 0.9} {
		d := newDrawn(3, 2, 2, 300)
		d.common = func(int) float64 { return 0.8 }
		d.noise, d.shared = 0.7, share
		l := newLayout(d.rig)
		m, k := newModel(l), newLooker(d.rig, l, nil)
		s := d.snapshot(30)
		m.learn(s)
		k.model, k.s = m, s
		lines := k.sidesOf(0)
		if mean, _ := k.disagreement(lines, 1, 0); mean < 0.8 || mean > 1.2 {
			t.Errorf("noise shared by %g: mean of u is %.2f, want 1", share, mean)
		}
	}
}

// TestSkewIsNoPolarity: a delay that turns the phase by less than a quarter of a period in the band does not look
// like a reversed sensor.
func TestSkewIsNoPolarity(t *testing.T) {
	for seed := range uint64(6) {
		for _, delayS := range []float64{1e-4, 2e-4, 3e-4, 4e-4, 5e-4} {
			d := newDrawn(seed, 1, 2, 160)
			d.bend = func(k, channel int, v complex128) complex128 {
				if channel == 1 {
					return turned(delayS)(k, v)
				}
				return v
			}
			for _, f := range d.look(24) {
				if f.kind == PolaritySuspect {
					t.Errorf("seed %d, %g ms: polarity suspected", seed, delayS*1e3)
				}
			}
		}
	}
}

// TestLeakageIsNoCause: without a window what the forces leave unexplained is leakage, which biases both sides however
// many blocks are averaged, so it counts for more.
func TestLeakageIsNoCause(t *testing.T) {
	d := newDrawn(3, 2, 2, 300)
	d.noise = 0.2
	d.bend = func(_, channel int, v complex128) complex128 {
		if channel == 2 {
			return 1.12 * v
		}
		return v
	}
	mean := map[bool]float64{}
	s := d.snapshot(60)
	for _, taper := range []bool{false, true} {
		l := newLayout(d.rig)
		l.taper = taper
		m, k := newModel(l), newLooker(d.rig, l, nil)
		m.learn(s)
		k.model, k.s = m, s
		mean[taper], _ = k.disagreement(k.sidesOf(0), 1, 0)
	}
	if !(mean[true] < 0.7*mean[false]) {
		t.Errorf("mean of u %.2f without a window, %.2f with one", mean[true], mean[false])
	}
}
