package demo

import (
	"math"
	"testing"
)

// intervals of Simpson's rule; its error on these shapes is below 1e-8.
const intervals = 2000

// simpson integrates f from 0 to 1.
func simpson(f func(s float64) float64) float64 {
	sum := f(0) + f(1)
	for i := 1; i < intervals; i++ {
		sum += float64(2+2*(i%2)) * f(float64(i)/intervals)
	}
	return sum / (3 * intervals)
}

func TestBeamRoots(t *testing.T) {
	for i, b := range beamRoots {
		if miss := math.Cos(b) - 1/math.Cosh(b); math.Abs(miss) > 1e-13 {
			t.Errorf("root %d: cos b - 1/cosh b = %g: want 0", i, miss)
		}
		// one root near each odd multiple of pi/2
		if near := (float64(i) + 1.5) * math.Pi; math.Abs(b-near) > 0.02 {
			t.Errorf("root %d is %g: want one near %g", i, b, near)
		}
	}
}

func TestBeamOrthonormal(t *testing.T) {
	orders := len(beamRoots) + 2
	for a := range orders {
		for b := range a + 1 {
			got := simpson(func(s float64) float64 {
				fa, _ := beam(a, s)
				fb, _ := beam(b, s)
				return fa * fb
			})
			want := 0.0
			if a == b {
				want = 1
			}
			// 1e-7: cosh and sinh cancel to about 1e-9 at the highest root
			if math.Abs(got-want) > 1e-7 {
				t.Errorf("orders %d and %d: mean product %g: want %g", a, b, got, want)
			}
		}
	}
}

func TestBeamSlope(t *testing.T) {
	const h = 1e-5
	for order := range len(beamRoots) + 2 {
		for _, s := range []float64{0.013, 0.3, 0.77, 0.99} {
			lower, _ := beam(order, s-h)
			upper, _ := beam(order, s+h)
			_, slope := beam(order, s)
			// the central difference is off by h² times the third derivative, below 1e-6; rounding adds 1e-4
			if want := (upper - lower) / (2 * h); math.Abs(slope-want) > 5e-4 {
				t.Errorf("order %d at %g: slope %g: want %g", order, s, slope, want)
			}
		}
	}
}

// A free end carries no moment: the slope does not change there.
func TestBeamEndsAreFree(t *testing.T) {
	const h = 1e-4
	for order := 2; order < len(beamRoots)+2; order++ {
		for _, end := range []float64{0, 1 - h} {
			_, a := beam(order, end)
			_, b := beam(order, end+h)
			_, middle := beam(order, 0.5)
			_, middleH := beam(order, 0.5+h)
			bend := math.Abs(b-a) / h
			inside := math.Max(math.Abs(middleH-middle)/h, beamRoots[order-2]*beamRoots[order-2])
			if bend > 0.01*inside {
				t.Errorf("order %d at %g: curvature %g: want next to none of %g", order, end, bend, inside)
			}
		}
	}
}
