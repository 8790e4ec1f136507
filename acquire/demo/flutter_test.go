package demo

import (
	"math"
	"testing"
)

// A constant under a flutter: slow wander and fast rattle, each of the share asked for, and never a turned sign of
// the gain.
func TestFlutter(t *testing.T) {
	const rateHz, n, window = 2560, 400 * 2560, 16
	f := newFlutter(0.2, rateHz, stream(1, "test"))
	var slow, fast float64
	var means []float64
	for range n / window {
		var sum, squares float64
		for range window {
			v := f.of(10) / 10
			sum += v
			squares += v * v
		}
		mean := sum / window
		means = append(means, mean)
		fast += (squares - window*mean*mean) / (window - 1) / (n / window)
	}
	for _, m := range means {
		slow += (m - 1) * (m - 1) / float64(len(means))
	}
	// the mean over 16 frames, 6 ms, keeps 94 % of the wander and a sixteenth of the rattle's power; within them
	// the wander adds a little to the rattle. The wander has some thousand independent values: 2 % of its level.
	if got, want := math.Sqrt(slow), 0.2*math.Sqrt(0.94+1.0/window); math.Abs(got/want-1) > 0.08 {
		t.Errorf("wander %.3f: want %.3f", got, want)
	}
	if got := math.Sqrt(fast); got < 0.195 || got > 0.22 {
		t.Errorf("rattle %.3f: want a little above 0.2", got)
	}
	if f.of(0) != 0 {
		t.Error("a sensor at rest rattles")
	}
}
