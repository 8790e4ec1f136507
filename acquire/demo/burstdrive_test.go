package demo

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire/rig"
)

func triggered() *rig.Rig {
	r := RigFor("burst")
	r.Burst = rig.Burst{TriggerForce: "S1", TriggerLevel: 0.1, PreTriggerS: 0.05}
	return r
}

// currents returns the sub samples of a rig's first drive from the first frame that is read.
func currents(t testing.TB, r *rig.Rig, seed uint64, frames int) (i []float64, sub int) {
	t.Helper()
	_, l := demoLayout(t)
	sub = subSamples(r.Source.RateHz, r.Analysis.MaxFrequencyHz)
	drives, runIn, err := newDrives(r, l.shakers, sub, seed)
	if err != nil {
		t.Fatal(err)
	}
	i = make([]float64, (runIn+frames)*sub)
	drives[0].next(i)
	return i[runIn*sub:], sub
}

func TestBurstsAndSilence(t *testing.T) {
	off := RigFor("burst")
	off.Burst.PeriodS = 2.00013 // 5120.33 frames
	faster := RigFor("burst")
	faster.Source.RateHz, faster.Grid.Decimation = 51200, 20 // white samples lie 20 frames apart
	between := RigFor("burst")
	between.Source.RateHz, between.Grid.Decimation = 51200, 20
	between.Burst.PeriodS = 102407.0 / 51200
	for _, c := range []struct {
		name   string
		rig    *rig.Rig
		starts []int // frames of bursts
		period float64
	}{
		{"period", RigFor("burst"), []int{0, 5120, 10240}, 5120},
		{"period between frames", off, []int{0, 5120, 10241, 15361}, 5120.33},
		{"twenty times the rate", faster, []int{0, 102400}, 102400},
		{"starts between white samples", between, []int{0, 102407}, 102407},
		{"trigger", triggered(), []int{384, 384 + 5504, 384 + 2*5504}, 5504}, // 5 % of a block and 0.05 s more
	} {
		t.Run(c.name, func(t *testing.T) {
			last := c.starts[len(c.starts)-1]
			v, sub := currents(t, c.rig, 1, last+int(c.period))
			silentTo := 0
			for _, start := range c.starts {
				end := start + int(burstShare*c.period)
				for k, i := range v[silentTo*sub : start*sub] {
					if i != 0 {
						t.Fatalf("%g A at frame %d: want silence up to %d", i, silentTo+k/sub, start)
					}
				}
				var power float64
				for _, i := range v[start*sub : end*sub] {
					power += i * i
				}
				// the edges and the interpolation take about 5 % of the burst; 0.8 s of 1.1 kHz scatter by 2.4 %
				rms := math.Sqrt(power / float64((end-start)*sub))
				if full := defaultShaker.driveRMS; rms < 0.85*full || rms > 1.07*full {
					t.Errorf("burst at %d: %g A rms: want a little below %g", start, rms, full)
				}
				if v[start*sub] == 0 {
					t.Errorf("silence at frame %d: want the first of a burst", start)
				}
				silentTo = end + 1
			}
		})
	}
}

func TestBurstsDiffer(t *testing.T) {
	r := RigFor("burst")
	v, sub := currents(t, r, 1, 2*5120)
	period := 5120 * sub
	if slices.Equal(v[:period], v[period:]) {
		t.Error("two bursts are the same")
	}
	if other, _ := currents(t, r, 2, 2*5120); slices.Equal(v, other) {
		t.Error("two seeds give the same bursts")
	}
	r.Forces[0].Name = "S9"
	if other, _ := currents(t, r, 1, 2*5120); slices.Equal(v, other) {
		t.Error("two forces have the same bursts")
	}
}

// Fading the white samples, not the interpolated ones, keeps a burst in its band.
func TestBurstKeepsToItsBand(t *testing.T) {
	v, sub := currents(t, RigFor("burst"), 2, 5120)
	var in, out float64
	for k, c := range transform(v, 0, 1) {
		power := real(c)*real(c) + imag(c)*imag(c)
		switch freqHz := float64(k) * 0.5; {
		case freqHz < 1000:
			in = max(in, power)
		case freqHz > 1280 && freqHz < 2560*float64(sub)/2:
			out = max(out, power)
		}
	}
	if dB := 10 * math.Log10(out/in); dB > -85 {
		t.Errorf("loudest line above the stop at %.1f dB of the loudest below: want below -85", dB)
	}
}

func TestBurstFade(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := band{rateHz: rapid.Float64Range(100, 1e5).Draw(t, "rateHz"), every: rapid.IntRange(1, 50).Draw(t, "every")}
		period := rapid.Float64Range(1, 1e6).Draw(t, "period")
		reach := rapid.IntRange(1, 100).Draw(t, "reach")
		fade := burstFade(b, period, reach)
		if n := len(fade); n > 1 && float64((n+reach)*b.every) > burstShare*period {
			t.Fatalf("%d white samples and a reach of %d: want at most %g sub samples", n, reach, burstShare*period)
		}
		for i, v := range fade {
			if !(v > 0 && v <= 1) || v != fade[len(fade)-1-i] {
				t.Fatalf("weight %d is %g, its mirror %g: want both alike, above 0 to 1", i, v, fade[len(fade)-1-i])
			}
			if 2*i < len(fade)-1 && v > fade[i+1] {
				t.Fatalf("weight %d is %g, the next %g: want a rise", i, v, fade[i+1])
			}
		}
	})
}
