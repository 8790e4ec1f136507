package main

import (
	"math"
	"testing"

	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

func TestSameBits(t *testing.T) {
	made := func() *monitor.Result {
		r := &monitor.Result{Snapshot: &spectra.Snapshot{}, Estimates: &estimate.Estimates{}}
		r.Snapshot.Gxx, r.Snapshot.Gyx = []complex128{1 + 2i}, []complex128{3i}
		r.Snapshot.Gyy, r.Estimates.H = []float64{math.NaN()}, []complex128{complex(math.NaN(), 0)}
		r.Estimates.RandomError = []float64{0.1}
		r.Snapshot.Starts.Append(100)
		return r
	}
	if !sameBits(made(), made()) {
		t.Error("equal results, NaN among them, count as different")
	}
	for name, change := range map[string]func(r *monitor.Result){
		"Gxx":    func(r *monitor.Result) { r.Snapshot.Gxx[0] = complex(1, math.Nextafter(2, 3)) },
		"Gyx":    func(r *monitor.Result) { r.Snapshot.Gyx[0] = complex(math.Copysign(0, -1), 3) },
		"Gyy":    func(r *monitor.Result) { r.Snapshot.Gyy[0] = 1 },
		"H":      func(r *monitor.Result) { r.Estimates.H[0] = 0 },
		"error":  func(r *monitor.Result) { r.Estimates.RandomError[0] = 0.2 },
		"blocks": func(r *monitor.Result) { r.Snapshot.Starts.Append(200) },
	} {
		other := made()
		if change(other); sameBits(made(), other) {
			t.Errorf("%s: other bits count as the same", name)
		}
	}
}
