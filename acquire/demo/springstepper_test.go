package demo

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestSolveCubic(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := math.Pow(10, rapid.Float64Range(-12, 12).Draw(t, "log a"))
		v := rapid.Float64Range(-1e3, 1e3).Draw(t, "v")
		u := solveCubic(a, v)
		if miss := u + a*cube(u) - v; math.Abs(miss) > 1e-12*math.Abs(v)+1e-300 {
			t.Fatalf("u = %g misses %g by %g", u, v, miss)
		}
	})
	if got := solveCubic(0, 3); got != 3 {
		t.Errorf("without a cube: %g: want 3", got)
	}
}

const (
	duffingRad   = 2 * math.Pi * 100 // of the linear part
	duffingZeta  = 0.003
	duffingShape = 0.5  // kg^-1/2
	duffingCubic = 8e13 // at 0.1 mm about 1.3 times the linear stiffness, 1.6e6 N/m
)

// oscillator returns a structure whose first mode carries a spring to the ground and whose second
// carries the shaker that a plant has.
func oscillator() (*structure, []attached, []dof) {
	s := &structure{points: []string{"a", "b"}, modes: []mode{
		{duffingRad, duffingZeta, [][3]float64{{duffingShape}, {0}}},
		{2 * math.Pi * 40, 0.02, [][3]float64{{0}, {0.3}}},
	}}
	return s, []attached{{shaker: defaultShaker, at: dof{1, 0}}}, []dof{{0, 0}}
}

// duffing integrates the first mode by the classical Runge-Kutta scheme with a step so small that its
// error is below 1e-9.
func duffing(q, seconds float64) float64 {
	const steps = 400_000
	h := seconds / steps
	slope := func(q, v float64) (float64, float64) {
		return v, -duffingRad*duffingRad*q - 2*duffingZeta*duffingRad*v - duffingShape*duffingCubic*cube(duffingShape*q)
	}
	v := 0.0
	for range steps {
		a1, b1 := slope(q, v)
		a2, b2 := slope(q+h/2*a1, v+h/2*b1)
		a3, b3 := slope(q+h/2*a2, v+h/2*b2)
		a4, b4 := slope(q+h*a3, v+h*b3)
		q += h / 6 * (a1 + 2*a2 + 2*a3 + a4)
		v += h / 6 * (b1 + 2*b2 + 2*b3 + b4)
	}
	return q
}

// Twenty-five periods of free motion of a spring that stiffens a lot, against another integration.
// The error falls with the square of the sub step.
func TestSpringStepperAgainstRungeKutta(t *testing.T) {
	const start, rateHz, frames = 1e-4 / duffingShape, 2560, 640
	want := duffing(start, frames/float64(rateHz))
	s, shakers, sensors := oscillator()
	across := s.pushAt(dof{0, 0})
	miss := func(sub int) float64 {
		sys := couple(s, shakers, sensors, across)
		p := newSpringStepper(sys, 1/float64(rateHz*sub), sub, fitted{across, duffingCubic})
		p.state()[0] = start
		p.start()
		y := make([]float64, 2)
		for range frames {
			p.step(y)
		}
		return math.Abs(p.state()[0]-want) / start
	}
	coarse, fine := miss(29), miss(58)
	t.Logf("after %d frames off by %.2e of the first displacement, with half the step by %.2e", frames, coarse, fine)
	if coarse > 3e-5 || fine > coarse/3.5 {
		t.Errorf("off by %.2e, with half the step by %.2e: want at most 3e-5, and a quarter", coarse, fine)
	}
}

func TestWeakSpringIsLinear(t *testing.T) {
	_, l := demoLayout(t)
	const sub, stepS = 6, 1.0 / 15360
	across := l.structure.pushAt(dof{15, 0})
	linear := newStepper(couple(l.structure, l.shakers, l.sensors), stepS, sub)
	sprung := newSpringStepper(couple(l.structure, l.shakers, l.sensors, across), stepS, sub, fitted{across, 1e-3})
	rng := stream(1, "test")
	want, got := make([]float64, 16), make([]float64, 16)
	for frame := range 200 {
		for i := range l.shakers {
			for k := range sub {
				v := rng.NormFloat64()
				linear.input(i)[k], sprung.input(i)[k] = v, v
			}
		}
		linear.step(want)
		sprung.step(got)
		for i := range got {
			if math.Abs(got[i]-want[i]) > 1e-8*(1+math.Abs(want[i])) {
				t.Fatalf("frame %d, output %d: %g: want %g", frame, i, got[i], want[i])
			}
		}
	}
}
