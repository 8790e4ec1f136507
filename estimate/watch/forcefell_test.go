package watch

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// TestHeavyArmature: a force hardly falls when its drive ends, if the armature is heavy; it is lost all the same, and no
// block with it is averaged.
func TestHeavyArmature(t *testing.T) {
	for seed := range 4 * *manySeeds {
		s := newSimulated(uint64(*firstSeed+seed), simOptions{q: 3, p: 6})
		s.armature[1] = 8
		r := newRun(s, nil)
		r.then(30, func() { r.drive[1] = 0 })
		r.blocks(3)
		if db := r.watch.block.levels.db[1]; db < -12 {
			t.Errorf("seed %d: it fell by %.1f dB: this tests something else", *firstSeed+seed, db)
		}
		r.then(17, func() { r.drive[1] = 10 })
		r.blocks(14)
		r.end()
		r.expect(t, "force-lost raised", "force-lost cleared")
		for _, b := range r.averaged {
			if b >= 30 && b < 50 {
				t.Errorf("seed %d: block %d was averaged", *firstSeed+seed, b)
			}
		}
		for _, e := range r.events {
			if e.Kind == ForceLost && (!slices.Equal(e.Channels, []string{"S2"}) || e.Edge == Raised && e.Block > 33) {
				t.Errorf("seed %d: %v at block %d", *firstSeed+seed, e.Channels, e.Block)
			}
		}
	}
}

// TestLevelNearTheLimit: a level that changed by about as much as counts does not come and go.
func TestLevelNearTheLimit(t *testing.T) {
	for seed := range 2 * *manySeeds {
		for _, db := range []float64{-1.4, -1.7, -1.9, -2, -2.1, -2.3} {
			r := newRun(newSimulated(uint64(*firstSeed+seed), simOptions{q: 2, p: 4}), nil)
			r.then(30, func() { r.drive[1] *= math.Pow(10, db/20) })
			r.blocks(30)
			r.end()
			if got := r.kindsTold(); len(got) > 1 || len(got) == 1 && got[0] != "level-changed raised" {
				t.Errorf("seed %d, %g dB: %q", *firstSeed+seed, db, got)
			}
		}
	}
}

// TestTakenAlong: of two forces that changed level the one that did so by itself is named, with its own figure.
func TestTakenAlong(t *testing.T) {
	for _, test := range []struct {
		db    []float64
		want  []int
		value float64
	}{
		{[]float64{5, 2.2, 0.1}, []int{0}, 5},
		{[]float64{-2.1, -6, 0.1}, []int{1}, -6},
		{[]float64{5, -3, 0.1}, []int{0}, 5},
		{[]float64{9.6, 10, 10.3}, []int{0, 1, 2}, 10.3},
	} {
		w := New(newSimulated(1, simOptions{q: 3, p: 3}).rig, Options{})
		copy(w.block.levels.db, test.db)
		for i, db := range test.db {
			w.block.levels.moved[i] = math.Abs(db) > levelStep
			w.diagnose.driven[i] = true
		}
		found := w.diagnose.levels(nil, 0)
		if len(found) != 1 || !slices.Equal(found[0].channels, test.want) || found[0].value != test.value {
			t.Errorf("%v: %+v, want %v by %g dB", test.db, found, test.want, test.value)
		}
	}
}

// TestNothingIsBackWithoutADrive: what no longer shows because all drives stopped is not said to be mended.
func TestNothingIsBackWithoutADrive(t *testing.T) {
	r := newRun(newSimulated(13, simOptions{q: 2, p: 6}), nil)
	r.then(30, func() { r.off[1] = shakerOff })
	r.then(12, func() { clear(r.drive) })
	r.blocks(12)
	r.end()
	r.expect(t, "force-lost raised", "no-drive raised", "force-lost cleared")
	if last := r.events[len(r.events)-1].Text; strings.Contains(last, "back") {
		t.Errorf("%q", last)
	}
}
