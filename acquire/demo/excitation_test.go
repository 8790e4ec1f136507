package demo

import (
	"io"
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/mat"

	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/rig"
)

// excited are a rig for each way in which the shakers can be driven.
func excited() map[string]*rig.Rig {
	return map[string]*rig.Rig{
		"random": Rig(), "burst": RigFor("burst"), "burst by trigger": triggered(), "periodic": RigFor("periodic"),
	}
}

func TestExcitationContractReadSizesAndMemory(t *testing.T) {
	const frames = 11000 // past two bursts and the first change of the periodic drive
	for name, r := range excited() {
		t.Run(name, func(t *testing.T) {
			want := read(t, newDemo(t, r, 7), frames)
			for _, maxFrames := range []int{3, 1024} {
				got, err := sourcetest.Drain(t, &head{newDemo(t, r, 7), frames}, maxFrames)
				if err != io.EOF || len(got) != 1 || !slices.Equal(got[0].Samples, want) {
					t.Errorf("up to %d frames a read: other samples than in one read, or ended with %v", maxFrames, err)
				}
			}
			if slices.Equal(read(t, newDemo(t, r, 8), frames), want) {
				t.Error("two seeds give the same samples")
			}
			s := newDemo(t, r, 7)
			dst := make([]float64, 512*s.Channels())
			if n := testing.AllocsPerRun(30, func() { s.Read(dst) }); n != 0 {
				t.Errorf("%g allocations a read: want none", n)
			}
		})
	}
}

func TestSetDriveScalesEveryExcitation(t *testing.T) {
	for name, r := range excited() {
		full := newDemo(t, r, 3)
		low := newDemo(t, r, 3)
		low.SetDrive(0.1)
		rms(low, 8)
		rms(full, 8)
		a, b := rms(full, 4), rms(low, 4)
		for _, c := range r.Forces {
			// the same drives: only what is left of the time at full drive and the noise differ
			if db := 20 * math.Log10(b[c.Index]/a[c.Index]); math.Abs(db+20) > 0.1 {
				t.Errorf("%s: %s at a tenth of the drive is %.2f dB: want -20", name, c.Name, db)
			}
		}
	}
}

// How long the skid rings with the shakers on it, and what that leaves of a burst and of the start of a
// period. The figures stand in the rig files and in burstShare.
func TestSkidComesToRest(t *testing.T) {
	_, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, l.sensors)
	var eigen mat.Eigen
	if !eigen.Factorize(sys.a, mat.EigenNone) {
		t.Fatal("no eigenvalues")
	}
	var cordS, armatureS, flexibleS float64 // time constants, the slowest of each kind
	for _, pole := range eigen.Values(nil) {
		s := -1 / real(pole)
		switch freqHz := cmplx.Abs(pole) / (2 * math.Pi); {
		case freqHz < 3:
			cordS = max(cordS, s)
		case freqHz < 15: // the skid and the armatures in their flexures
			armatureS = max(armatureS, s)
		default:
			flexibleS = max(flexibleS, s)
		}
	}
	const silenceS, periodS = (1 - burstShare) * 2, 1.6
	leftDB := func(afterS, timeS float64) float64 { return -20 * math.Log10(math.E) * afterS / timeS }
	t.Logf("time constants: cords %.2f s, armatures %.2f s, flexible modes %.3f s", cordS, armatureS, flexibleS)
	for _, c := range []struct {
		name     string
		got, max float64
	}{
		{"flexible modes after a burst", leftDB(silenceS, flexibleS), -80},
		{"armatures after a burst", leftDB(silenceS, armatureS), -12},
		{"flexible modes after a period", leftDB(periodS, flexibleS), -100},
		{"cords after eight periods", leftDB(8*periodS, cordS), -35},
	} {
		t.Logf("%s: %.1f dB", c.name, c.got)
		if c.got > c.max {
			t.Errorf("%s: %.1f dB: want at most %g", c.name, c.got, c.max)
		}
	}
}

// rectangular returns H1's lines from blocks that start every hop frames, without a window.
func rectangular(t *testing.T, s *Source, r *rig.Rig, blocks, hop int) []averaged {
	t.Helper()
	block := r.Grid.Block
	lines := make([]averaged, r.Grid.Lines)
	fft := fourier.NewFFT(block)
	v := make([]float64, block)
	x, y := make([][]complex128, len(r.Forces)), make([][]complex128, len(r.Responses))
	for range blocks {
		frames := read(t, s, hop)
		spectrum := func(c rig.Channel) []complex128 {
			for i := range v {
				v[i] = c.Scale() * frames[i*s.Channels()+c.Index]
			}
			return fft.Coefficients(nil, v)
		}
		for i, c := range r.Forces {
			x[i] = spectrum(c)
		}
		for o, c := range r.Responses {
			y[o] = spectrum(c)
		}
		for k := range lines {
			lines[k].add(k, x, y)
		}
	}
	return lines
}

// Without sensor noise what is left between H and the truth is leakage: what rings on at a block's end.
func TestWithoutAWindowNothingLeaks(t *testing.T) {
	const blocks = 10
	for _, c := range []struct {
		name      string
		rig       *rig.Rig
		skip, hop int
		max       float64 // of the median relative miss of H
	}{
		{"burst", RigFor("burst"), 0, 5120, 0.004}, // 0.0015 when written
		{"periodic, kept periods", RigFor("periodic"), (2 + 3) * 4096, 6 * 4096, 1e-5},
	} {
		s := newDemo(t, c.rig, 3)
		for i := range s.sensors {
			s.sensors[i].sigma = 0
		}
		if c.skip > 0 {
			read(t, s, c.skip)
		}
		truth, err := NewTruth(c.rig)
		if err != nil {
			t.Fatal(err)
		}
		lines := rectangular(t, s, c.rig, blocks, c.hop)
		var misses []float64
		for k := int(10 / c.rig.Grid.SpacingHz); k < len(lines); k++ {
			for o := range c.rig.Responses {
				h, _ := lines[k].h(o)
				for i := range h {
					want := truth.H(float64(k)*c.rig.Grid.SpacingHz, o, i)
					misses = append(misses, cmplx.Abs(h[i]-want)/cmplx.Abs(want))
				}
			}
		}
		slices.Sort(misses)
		median, most := misses[len(misses)/2], misses[len(misses)*95/100]
		t.Logf("%s: H off by %.2g in the median, %.2g on 95 %% of the lines", c.name, median, most)
		if median > c.max {
			t.Errorf("%s: H off by %.2g in the median: want at most %g", c.name, median, c.max)
		}
	}
}
