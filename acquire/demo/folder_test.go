package demo

import (
	"math"
	"testing"
)

// An output inside a frame is the one that single sub steps give, an acceleration under a hammer included.
func TestOutputInsideAFrame(t *testing.T) {
	_, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, l.sensors, l.structure.pushAt(dof{11, 2}))
	const sub, stepS = 5, 1.0 / 12800
	early := make([]int, 16)
	for o := range early {
		early[o] = o % sub
	}
	folded, single := newStepper(sys, stepS, sub, early...), newStepper(sys, stepS, 1)
	rng := stream(1, "test")
	got, y, want := make([]float64, 16), make([]float64, 16), make([]float64, 16)
	for frame := range 50 {
		for k := range sub {
			for i := range 3 {
				v := rng.NormFloat64()
				folded.input(i)[k], single.input(i)[0] = v, v
			}
			single.step(y)
			for o := range want {
				if early[o] == sub-1-k {
					want[o] = y[o]
				}
			}
		}
		folded.step(got)
		for o := range got {
			if math.Abs(got[o]-want[o]) > 1e-8*(1+math.Abs(want[o])) {
				t.Fatalf("frame %d, output %d: %g: want %g", frame, o, got[o], want[o])
			}
		}
	}
}
