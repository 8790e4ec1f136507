package demo

import (
	"math"
	"testing"
)

const (
	suspensionModes = 6
	demoSpacingHz   = 0.625
)

func TestSkidModesSuitTheLines(t *testing.T) {
	for i, m := range skidModes[suspensionModes:] {
		if width := 2 * m.damping * m.frequencyHz; width < 3.8*demoSpacingHz {
			t.Errorf("mode %d at %g Hz is %.2f Hz wide: want about 4 lines or more", i, m.frequencyHz, width)
		}
		if m.frequencyHz < 25 || m.frequencyHz > 950 {
			t.Errorf("mode %d at %g Hz: want 25 to 950 Hz", i, m.frequencyHz)
		}
	}
	for i, m := range skidModes[:suspensionModes] {
		if m.frequencyHz > 3 {
			t.Errorf("suspension mode %d at %g Hz: want at most 3 Hz", i, m.frequencyHz)
		}
	}
}

func TestSkidHasOneClosePair(t *testing.T) {
	var pairs int
	for i, m := range skidModes[suspensionModes+1:] {
		below := skidModes[suspensionModes+i]
		if m.frequencyHz-below.frequencyHz < 2*2*m.damping*m.frequencyHz {
			pairs++
		}
	}
	if pairs != 1 {
		t.Errorf("%d pairs of modes within two half-power bandwidths: want 1", pairs)
	}
}

// The motion of the whole frame, its mass spread evenly over the plane in which it bends, weighs 1.
func TestSkidShapesAreMassNormalised(t *testing.T) {
	for _, m := range skidModes {
		mass := skidMassKg * simpson(func(sx float64) float64 {
			// Simpson's rule over y with few points: the shapes are smooth across
			const n = 40
			var sum float64
			for j := range n + 1 {
				v := skidShape(m.kind, m.along, m.across, sx*skidLengthM, float64(j)/n*skidWidthM, 0)
				weight := float64(2 + 2*(j%2))
				if j == 0 || j == n {
					weight = 1
				}
				if m.kind == sway {
					v[0] = 0 // the rotation of cross sections is left out of the mass, as for a slender beam
				}
				sum += weight * (v[0]*v[0] + v[1]*v[1] + v[2]*v[2])
			}
			return sum / (3 * n)
		})
		if math.Abs(mass-1) > 1e-4 {
			t.Errorf("mode at %g Hz: modal mass %g: want 1", m.frequencyHz, mass)
		}
	}
}

// Cross sections stay plane: the height times the slope, here by differences.
func TestSkidSlopesMoveWhatIsHigh(t *testing.T) {
	const h = 1e-6
	for _, m := range skidModes {
		at := func(xM, yM, heightM float64) [3]float64 {
			return skidShape(m.kind, m.along, m.across, xM, yM, heightM)
		}
		base, high := at(0.7, 0.3, 0), at(0.7, 0.3, 0.25)
		slopeX := (at(0.7+h, 0.3, 0)[2] - at(0.7-h, 0.3, 0)[2]) / (2 * h)
		slopeY := (at(0.7, 0.3+h, 0)[2] - at(0.7, 0.3-h, 0)[2]) / (2 * h)
		if m.kind != plate {
			slopeX, slopeY = 0, 0
		}
		for axis, want := range []float64{base[0] - 0.25*slopeX, base[1] - 0.25*slopeY, base[2]} {
			if math.Abs(high[axis]-want) > 1e-6 {
				t.Errorf("mode at %g Hz, axis %d: %g: want %g", m.frequencyHz, axis, high[axis], want)
			}
		}
	}
}
