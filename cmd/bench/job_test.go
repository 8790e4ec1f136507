package main

import (
	"math"
	"testing"
)

// TestDensities has the job's densities be those of noise that is known: a force of variance 1/12
// over half the rate, and a response of twice the force and noise of its own.
func TestDensities(t *testing.T) {
	b := newBench(t, size{1, 1, 64})
	recording, err := readRecording(b.recording(), b.size.frames(b.blocks())*b.size.channels())
	if err != nil {
		t.Fatal(err)
	}
	j := newJob(b.size, recording, 1)
	defer j.workers.Close()
	j.run()
	const density = 2. / 12 / rateHz
	var gxx, gyx, gyy float64
	for k := 2; k < b.size.lines(); k++ {
		gxx += real(j.snapshot.Gxx[k]) / float64(b.size.lines()-2)
		gyx += real(j.snapshot.Gyx[k]) / float64(b.size.lines()-2)
		gyy += j.snapshot.Gyy[k] / float64(b.size.lines()-2)
	}
	for _, c := range []struct {
		name      string
		got, want float64
	}{{"Gxx", gxx, density}, {"Gyx", gyx, 2 * density}, {"Gyy", gyy, 5 * density}} {
		// 64 blocks and some twenty lines: a tenth is more than three standard deviations.
		if math.Abs(c.got/c.want-1) > 0.1 {
			t.Errorf("%s is %.3g in the mean, want %.3g", c.name, c.got, c.want)
		}
	}
}
