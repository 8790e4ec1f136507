package demo

import (
	"math"
	"math/cmplx"
	"testing"
)

// linked is the demo with shaker S1 in some state, as a transfer from currents to outputs.
func linked(t *testing.T, to link, freqHz float64) [][]complex128 {
	t.Helper()
	_, l := demoLayout(t)
	l.shakers[0].link = to
	return continuous(t, couple(l.structure, l.shakers, l.sensors), freqHz)
}

func TestHangingCell(t *testing.T) {
	sh := defaultShaker
	for _, massKg := range []float64{0.02, 0.5} {
		for _, freqHz := range []float64{20, 150, 900} {
			y := linked(t, link{hanging, massKg}, freqHz)
			// mass times acceleration of an armature that carries it, by hand
			s := complex(0, 2*math.Pi*freqHz)
			total := complex(sh.armatureKg+massKg, 0)
			want := complex(massKg*sh.forceNPerA, 0) * s * s / (total*s*s + complex(sh.flexureNSPerM, 0)*s + complex(sh.flexureNPerM, 0))
			if cmplx.Abs(y[0][0]-want) > 1e-9*cmplx.Abs(want) {
				t.Errorf("%g kg at %g Hz: force %v per A: want %v", massKg, freqHz, y[0][0], want)
			}
			if y[0][1] != 0 {
				t.Errorf("%g kg at %g Hz: the other shaker reaches the cell", massKg, freqHz)
			}
			for o := 1; o < len(y); o++ {
				if cmplx.Abs(y[o][0]) > 1e-12 {
					t.Errorf("%g kg at %g Hz: output %d follows a shaker that hangs free", massKg, freqHz, o)
				}
			}
		}
	}
}

// A cell that hangs on the structure feels its mass times the structure's acceleration, and the structure feels
// that force: a = A_12 F_2 + A_11 F_1, F_1 = -m a.
func TestUnhookedCell(t *testing.T) {
	_, l := demoLayout(t)
	const massKg = 5 // heavy, so that the load shows
	s1, s2 := l.shakers[0].at, l.shakers[1].at
	for _, freqHz := range []float64{20, 152.9, 250, 900} {
		y := linked(t, link{unhooked, massKg}, freqHz)
		force := y[1][1]
		own, cross := l.structure.accelerance(freqHz, s1, s1), l.structure.accelerance(freqHz, s1, s2)
		a := cross * force / (1 + massKg*own)
		// output 2 is the driving-point response of S1
		if cmplx.Abs(y[2][1]-a) > 1e-8*cmplx.Abs(a) {
			t.Errorf("%g Hz: acceleration %v per A: want %v", freqHz, y[2][1], a)
		}
		if want := -massKg * a; cmplx.Abs(y[0][1]-want) > 1e-8*cmplx.Abs(want) {
			t.Errorf("%g Hz: force %v per A: want %v", freqHz, y[0][1], want)
		}
		for o := range y {
			if cmplx.Abs(y[o][0]) > 1e-12 {
				t.Errorf("%g Hz: output %d follows a shaker that is off", freqHz, o)
			}
		}
	}
}

// A shaker on a voltage, by hand: current (u - Bl v)/R on an armature that hangs free.
func TestVoltageDrive(t *testing.T) {
	_, l := demoLayout(t)
	sh := &l.shakers[0]
	sh.coilOhm = 0.7
	sh.link = link{hanging, 0.02}
	const freqHz = 30
	y := continuous(t, couple(l.structure, l.shakers, l.sensors), freqHz)
	s := complex(0, 2*math.Pi*freqHz)
	bl, ohm := complex(sh.forceNPerA, 0), complex(sh.coilOhm, 0)
	mass := complex(sh.armatureKg+0.02, 0)
	// mass v s = Bl i - (c + k/s) v, i = (1 - Bl v)/R
	v := bl / ohm / (mass*s + complex(sh.flexureNSPerM, 0) + complex(sh.flexureNPerM, 0)/s + bl*bl/ohm)
	if want := 0.02 * s * v; cmplx.Abs(y[0][0]-want) > 1e-9*cmplx.Abs(want) {
		t.Errorf("force %v per V: want %v", y[0][0], want)
	}
}
