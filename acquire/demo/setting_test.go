package demo

import (
	"math"
	"slices"
	"testing"
)

// Before its onset a fault leaves every bit alone. From there on it befalls the channels that it
// should, and when it is over the others are as if nothing had been, where the structure was
// spared.
func TestFaultsAct(t *testing.T) {
	const rate, from, to, end = 2560, 2560, 3 * 2560, 4 * 2560
	r := Rig()
	sound := read(t, newDemo(t, r, 1), end)
	type check func(t *testing.T, before, during, plain []float64)
	ratioDB := func(lo, hi float64) check {
		return func(t *testing.T, _, during, plain []float64) {
			if dB := 20 * math.Log10(rmsOf(during)/rmsOf(plain)); dB < lo || dB > hi {
				t.Errorf("level %+.1f dB: want %g to %g", dB, lo, hi)
			}
		}
	}
	each := func(want func(v float64) float64, within float64) check {
		return func(t *testing.T, _, during, plain []float64) {
			for i, v := range during {
				if math.Abs(v-want(plain[i])) > within {
					t.Fatalf("frame %d: %g: want %g", i, v, want(plain[i]))
				}
			}
		}
	}
	for _, c := range []struct {
		fault    string
		channel  string
		check    check
		electric bool // spares the structure and all channels but this one
	}{
		{"detach@1s-3s:S1", "S1", ratioDB(-40, -24), false},
		{"detach@1s-3s:S1", "S2", ratioDB(-3, 3), false},
		{"unhook@1s-3s:S1", "S1", ratioDB(-60, -35), false},
		{"pad-off@1s-3s:S1", "S1", ratioDB(-12, 0), false},
		{"drive-off@1s-3s:S1", "S1", ratioDB(-35, -3), false},
		{"drive-off@1s-3s:all", "A12z", ratioDB(-60, -15), false},
		{"level@1s-3s:all", "S1", ratioDB(-8, -4), false},
		{"level@1s-3s:S2=10", "S2", ratioDB(8, 12), false},
		{"tied@1s-3s:S1,S2", "S2", ratioDB(-3, 3), false},
		{"mode-shift@1s-3s:all", "A12z", ratioDB(-6, 6), false},
		{"loose@1s-3s:A5z", "A5z", ratioDB(-2, 4), true},
		{"cut@1s-3s:A5z", "A5z", ratioDB(-80, -25), true},
		{"dead@1s-3s:A5z", "A5z", each(func(float64) float64 { return 0 }, 0), true},
		{"dead@1s-3s:A5z=0.25", "A5z", each(func(float64) float64 { return 0.25 }, 0), true},
		{"gain@1s-3s:A5z", "A5z", each(func(v float64) float64 { return 1.5 * v }, 1e-6), true},
		{"reverse@1s-3s:S1", "S1", each(func(v float64) float64 { return -v }, 0), true},
		{"overrange@1s-3s:A5z", "A5z", func(t *testing.T, _, during, _ []float64) {
			var clipped int
			for _, v := range during {
				if math.Abs(v) >= 1-0x1p-15 {
					clipped++
				}
			}
			if clipped < len(during)/4 {
				t.Errorf("%d of %d samples clip: want many", clipped, len(during))
			}
		}, true},
		{"tilt@1s-3s:A5z", "A5z", ratioDB(-6, 3), true},
		{"skew@1s-3s:A5z=3", "A5z", func(t *testing.T, before, during, plain []float64) {
			for i := 3; i < len(during); i++ {
				// apart from the noise, which is not late: 2.5e-3 m/s² per root Hz, 0.09 m/s² rms, six times that
				if math.Abs(during[i]-plain[i-3]) > 6*1.5*0.09*0.01/5 {
					t.Fatalf("frame %d: %g: want %g", i, during[i], plain[i-3])
				}
			}
		}, true},
		{"skew@1s-3s:A5z=0.5", "A5z", ratioDB(-0.1, 0.1), true},
		{"twin@1s-3s:A5z,A7z", "A5z", func(t *testing.T, _, during, _ []float64) {
			if want := column(t, r, sound, "A7z")[from:to]; !slices.Equal(during, want) {
				t.Error("not the signal of A7z")
			}
		}, true},
	} {
		t.Run(c.fault+" "+c.channel, func(t *testing.T) {
			got := read(t, faulty(t, r, 1, c.fault), end)
			if !slices.Equal(got[:from*16], sound[:from*16]) {
				t.Error("other samples before the onset")
			}
			v, plain := column(t, r, got, c.channel), column(t, r, sound, c.channel)
			if slices.Equal(v[from:to], plain[from:to]) {
				t.Error("nothing happens")
			}
			c.check(t, v[:from], v[from:to], plain[from:to])
			if !c.electric {
				// what rings on has little part in the level
				ratioDB(-6, 6)(t, nil, v[to+rate/2:], plain[to+rate/2:])
				return
			}
			for _, other := range r.Channels() {
				a, b := column(t, r, got, other.Name), column(t, r, sound, other.Name)
				if other.Name == c.channel {
					a, b = a[to:], b[to:]
				}
				for i := range a {
					if math.Abs(a[i]-b[i]) > 1e-7 { // another plant rounds otherwise
						t.Fatalf("%s, frame %d: %g: want %g as without the fault", other.Name, i, a[i], b[i])
					}
				}
			}
		})
	}
}

// A stinger that is fitted again has no force in it: no blow of kilonewtons.
func TestRejoiningIsGentle(t *testing.T) {
	r := Rig()
	for _, kind := range []string{"detach", "unhook", "pad-off"} {
		v := column(t, r, read(t, faulty(t, r, 1, kind+"@1s-3s:S1,S2"), 6*2560), "S1")
		var before, after float64
		for i, x := range v {
			if i < 2560 {
				before = max(before, math.Abs(x))
			} else if i >= 3*2560 {
				after = max(after, math.Abs(x))
			}
		}
		if after > 2*before || after < before/2 {
			t.Errorf("%s: peak %g after it was fitted again, %g before: want about the same", kind, after, before)
		}
	}
}

func TestKnockIsFelt(t *testing.T) {
	r := Rig()
	sound, got := read(t, newDemo(t, r, 1), 8000), read(t, faulty(t, r, 1, "knock@2s:14z"), 8000)
	a, b := column(t, r, sound, "A14z"), column(t, r, got, "A14z")
	if !slices.Equal(a[:5120], b[:5120]) {
		t.Error("felt before it happened")
	}
	var early, late float64
	for i := range a {
		switch d := math.Abs(a[i] - b[i]); {
		case i >= 5120 && i < 5184:
			early = max(early, d)
		case i >= 7700:
			late = max(late, d)
		}
	}
	// digital: 100 m/s² is a fifth of full scale
	if early < 0.02 || late > early/20 {
		t.Errorf("%.3g of full scale after the knock and %.3g a second later: want a blow that dies out", early, late)
	}
}

// Late by a fraction of a frame: the phase falls with the frequency, whether the plant is linear or not.
func TestSkewTurnsThePhase(t *testing.T) {
	r := Rig()
	twin := r.Responses[0] // the same place on a channel of its own
	twin.Name, twin.Index = "B", r.Source.Channels
	r.Responses = append(r.Responses, twin)
	r.Source.Channels++
	for _, c := range []struct{ frames, nonlinearity float64 }{{0.5, 0}, {2.25, 0}, {0.5, 0.1}} {
		s := newDemo(t, r, 1)
		for i := range s.sensors {
			s.sensors[i].sigma = 0
		}
		if err := s.SetSpring(SkidSpring(c.nonlinearity)); err != nil {
			t.Fatal(err)
		}
		if err := s.SetFaults(Fault{Kind: "skew", Target: []string{"B"}, Amount: c.frames}); err != nil {
			t.Fatal(err)
		}
		read(t, s, 100)
		v := read(t, s, 8192)
		a, b := transform(column(t, r, v, "A12z"), 0, 1), transform(column(t, r, v, "B"), 0, 1)
		late := math.Round(c.frames*float64(s.sub)) / float64(s.sub)
		for _, freqHz := range []float64{60, 200, 500, 900} {
			var cross complex128
			for k := int((freqHz - 10) * 8192 / 2560); float64(k) < (freqHz+10)*8192/2560; k++ {
				cross += b[k] * complex(real(a[k]), -imag(a[k]))
			}
			got := math.Atan2(imag(cross), real(cross))
			want := math.Remainder(-2*math.Pi*freqHz*late/2560, 2*math.Pi)
			// the middle of the power lies within 10 Hz of the middle of the band
			if off := math.Remainder(got-want, 2*math.Pi); math.Abs(off) > 2*math.Pi*10*late/2560+0.01 {
				t.Errorf("%g frames late at %g Hz: phase %.3f: want %.3f", c.frames, freqHz, got, want)
			}
		}
	}
}
