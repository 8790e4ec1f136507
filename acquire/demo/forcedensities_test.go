package demo

import (
	"math"
	"math/cmplx"
	"testing"
)

// TestForceDensitiesAgainstTheStateSpace compares with the transfer from drives to forces of the system that is simulated.
func TestForceDensitiesAgainstTheStateSpace(t *testing.T) {
	for seed, o := range []RandomOptions{{Shakers: 1}, {Shakers: 2, Drive: "voltage"}, {Shakers: 4, Drive: "current"}} {
		r, shares := drawn(t, uint64(seed), o), []float64{1, 0.5, 0, 2}[:o.Shakers]
		for name := range r.floors {
			r.floors[name] = floor{}
		}
		truth := r.Truth()
		sys := couple(truth.structure, truth.shakers, nil)
		for _, freqHz := range []float64{3, 47.3, 121, 200} {
			f, got := continuous(t, sys, freqHz), truth.ForceDensities(nil, freqHz, shares)
			for i := range o.Shakers {
				for j := range o.Shakers {
					var want complex128
					for k, sh := range truth.shakers {
						density := sh.driveRMS * sh.driveRMS / (1.14 * 200) // the band ends half way from 200 to 256 Hz
						want += complex(density*shares[k]*shares[k], 0) * f[i][k] * cmplx.Conj(f[j][k])
					}
					want *= complex(r.Rig.Forces[i].Sign()*r.Rig.Forces[j].Sign(), 0)
					scale := math.Sqrt(real(got[i*o.Shakers+i]) * real(got[j*o.Shakers+j]))
					if cmplx.Abs(got[i*o.Shakers+j]-want) > 1e-6*scale {
						t.Errorf("%s, %g Hz, forces %d and %d: %v, want %v", r.Name, freqHz, i, j, got[i*o.Shakers+j], want)
					}
				}
			}
		}
	}
}

// TestForceDensitiesAgainstAMeasurement compares the mean square of each force, and of its noise, with what the source
// delivers.
func TestForceDensitiesAgainstAMeasurement(t *testing.T) {
	r := drawn(t, 5, RandomOptions{Shakers: 2})
	s, err := r.Source(r.Rig, 3)
	if err != nil {
		t.Fatal(err)
	}
	measured, truth := read(t, s, 60*4096), r.Truth()
	const stepHz = 0.02
	for i, c := range r.Rig.Forces {
		var want float64
		for k := range int(200 / stepHz) {
			want += stepHz * real(truth.ForceDensities(nil, (float64(k)+0.5)*stepHz, nil)[i*2+i])
		}
		got := rmsOf(column(t, r.Rig, measured, c.Name)) * c.Scale()
		// The drives go on to 256 Hz, falling from 200 Hz on.
		if low, high := math.Sqrt(want), math.Sqrt(1.6*want); got < 0.93*low || got > high {
			t.Errorf("%s: %.4g N rms, want %.4g to %.4g", c.Name, got, low, high)
		}
	}
	quiet := floor{density: 2, rise: 20, cornerHz: 1}
	for _, c := range []struct{ freqHz, want float64 }{{1e-6, 2 * 2 * 20 * 20}, {1e6, 2 * 2}, {1, 2 * 2 * (10.5*10.5 + 9.5*9.5)}} {
		if got := quiet.densityAt(c.freqHz); math.Abs(got-c.want) > 1e-3*c.want {
			t.Errorf("noise at %g Hz: %g, want %g", c.freqHz, got, c.want)
		}
	}
}

func TestForceDensitiesRefuse(t *testing.T) {
	truth := drawn(t, 1, RandomOptions{Shakers: 2}).Truth()
	for name, call := range map[string]func(){
		"0 Hz":            func() { truth.ForceDensities(nil, 0, nil) },
		"above the band":  func() { truth.ForceDensities(nil, 200.1, nil) },
		"short dst":       func() { truth.ForceDensities(make([]complex128, 3), 10, nil) },
		"too many shares": func() { truth.ForceDensities(nil, 10, make([]float64, 3)) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			call()
		})
	}
}
