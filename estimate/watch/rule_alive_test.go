package watch

import (
	"math"
	"slices"
	"testing"
)

// TestTwins: one cable on two inputs is found whatever the inputs' gains and noise, and sensors that move alike are not.
func TestTwins(t *testing.T) {
	d := newDrawn(5, 2, 3, 400)
	l := newLayout(d.rig)
	for _, test := range []struct {
		name string
		a, b int // channels
		// twin makes channel b's line k of channel a's; mean is the root of a's mean power.
		twin func(k int, a complex128, mean float64) complex128
		want bool
	}{
		{"a copy", 2, 4, func(_ int, a complex128, _ float64) complex128 { return a }, true},
		{"another gain, reversed", 2, 4, func(_ int, a complex128, _ float64) complex128 { return -2.4 * a }, true},
		{"converters' noise, 85 dB down", 2, 4, func(_ int, a complex128, mean float64) complex128 {
			return a + complex(mean*math.Pow(10, -85./20), 0)*d.draw()
		}, true},
		{"filters that differ by 0.03 degrees", 2, 4, func(_ int, a complex128, _ float64) complex128 { return a * complex(1, 5e-4) }, true},
		{"parallel, ratio drifts by 15 %", 2, 4, func(k int, a complex128, _ float64) complex128 {
			return a * complex(2.4*(1+0.15*float64(k)/400), 0)
		}, false},
		{"parallel, but at the top of the band", 2, 4, func(k int, a complex128, _ float64) complex128 {
			if k > 360 {
				return 1.02 * a
			}
			return a
		}, false},
		{"parallel, with noise of their own 65 dB down", 2, 4, func(_ int, a complex128, mean float64) complex128 {
			return a + complex(mean*math.Pow(10, -65./20), 0)*d.draw()
		}, false},
		{"a lost force on a small mass", 0, 2, func(_ int, a complex128, mean float64) complex128 {
			return -50*a + complex(50*mean*1e-4, 0)*d.draw()
		}, false},
		{"a force on a response's input", 0, 2, func(_ int, a complex128, _ float64) complex128 { return a }, true},
	} {
		t.Run(test.name, func(t *testing.T) {
			lines := make([]complex128, 400*(l.q+l.p))
			var mean float64
			for k := range 400 {
				for ch := range l.q + l.p {
					lines[k*(l.q+l.p)+ch] = d.draw() * complex(1+float64(k%7), 0) // some lines are weak
				}
				mean += abs2(lines[k*(l.q+l.p)+test.a]) / 400
			}
			for k := range 400 {
				line := lines[k*(l.q+l.p):][:l.q+l.p]
				line[test.b] = test.twin(k, line[test.a], math.Sqrt(mean))
			}
			found := newTwins(l).find(nil, lines)
			switch {
			case (len(found) == 1) != test.want || len(found) > 1:
				t.Errorf("%+v, want a twin: %t", found, test.want)
			case test.want && !slices.Equal(found[0].channels, []int{test.a, test.b}):
				t.Errorf("channels %v, want %d and %d", found[0].channels, test.a, test.b)
			}
		})
	}
}
