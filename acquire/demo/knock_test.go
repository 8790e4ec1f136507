package demo

import (
	"math"
	"testing"
)

func TestStrikeHasItsImpulse(t *testing.T) {
	const rateHz, sub = 2560.0, 29
	var sum float64
	dst := make([]float64, sub)
	for frame := range int64(20) {
		strike(dst, 1.5, frame-4, rateHz)
		for _, v := range dst {
			if v != 0 && frame < 4 {
				t.Fatalf("%g N before the knock", v)
			}
			sum += v / (rateHz * sub)
		}
	}
	if math.Abs(sum-1.5) > 1e-3 {
		t.Errorf("impulse %g N s: want 1.5", sum)
	}
	if peak := knockForce(1, knockS/2); math.Abs(peak-math.Pi/(2*knockS)) > 1e-9 {
		t.Errorf("peak %g N", peak)
	}
}
