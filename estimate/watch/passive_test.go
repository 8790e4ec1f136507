package watch

import (
	"math"
	"testing"
)

// TestPassiveShare: what hangs at a driving point is passive whatever it is made of, and a force that drives is not.
func TestPassiveShare(t *testing.T) {
	d := newDrawn(3, 1, 1, 320)
	l := newLayout(d.rig)
	for _, test := range []struct {
		name  string
		force func(k int, a complex128) complex128 // on the structure, at line k with acceleration a
		want  bool
	}{
		{"a mass", func(_ int, a complex128) complex128 { return -0.3 * a }, true},
		{"a coil that an amplifier shorts", func(k int, a complex128) complex128 { return 0.3 * a * complex(0, 60/float64(k)) }, true},
		{"both, with noise", func(k int, a complex128) complex128 {
			return -0.3*a + 0.3*a*complex(0, 60/float64(k)) + 0.05*d.draw()
		}, true},
		{"a mass on flexures below their resonance is a spring", func(k int, a complex128) complex128 { return 0.3 * a * complex(900/float64(k*k), 0) }, false},
		{"a drive", func(k int, a complex128) complex128 { return a / d.h(float64(k)*drawnSpacingHz, 0, 0) }, false},
		{"a drive on a spring with losses", func(k int, a complex128) complex128 {
			return -a * complex(900/float64(k*k), 180/float64(k*k))
		}, false},
		{"a drive behind a heavy armature", func(k int, a complex128) complex128 {
			return a/d.h(float64(k)*drawnSpacingHz, 0, 0) - 0.3*a
		}, false},
	} {
		t.Run(test.name, func(t *testing.T) {
			b := &block{layout: l, lines: make([]complex128, 2*320)}
			for k := 1; k < 320; k++ {
				a := d.draw() * d.h(float64(k)*drawnSpacingHz, 0, 0)
				b.lines[2*k], b.lines[2*k+1] = test.force(k, a), a
			}
			if share := b.passiveShareOf(0); (share > passiveShare) != test.want || math.IsNaN(share) {
				t.Errorf("share %.2f, want passive: %t", share, test.want)
			}
		})
	}
}
