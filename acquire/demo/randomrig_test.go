package demo

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
	"shakerwatch/acquire/rig"
)

func drawn(t testing.TB, seed uint64, o RandomOptions) *RandomRig {
	t.Helper()
	r, err := NewRandomRig(seed, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestRandomRigIsSound(t *testing.T) {
	seen := make(map[string]int)
	for seed := range uint64(24) {
		r := drawn(t, seed, RandomOptions{})
		l, err := r.layout(r.Rig)
		if err != nil {
			t.Fatal(err)
		}
		q, p := len(r.Rig.Forces), len(r.Rig.Responses)
		seen[fmt.Sprint(q, " shakers")]++
		for i, f := range r.Rig.Forces {
			own := r.Rig.Responses[i]
			if own.Point != f.Point || own.Letter() != f.Letter() {
				t.Errorf("seed %d: force %s has no driving-point response", seed, f.Name)
			}
			seen["driving-point sign "+fmt.Sprint(own.Sign()*f.Sign())]++
		}
		if q < 1 || q > 4 || p < max(3, q) || p > 12 || r.Rig.Grid.Block != 4096 {
			t.Errorf("seed %d: %d forces, %d responses, block %d", seed, q, p, r.Rig.Grid.Block)
		}
		var inBand, close int
		var last mode
		for _, m := range r.structure.modes {
			freqHz := m.rateRad / (2 * math.Pi)
			if freqHz > 240*1.05 || m.damping < 0.004 {
				t.Errorf("seed %d: mode at %g Hz with damping %g", seed, freqHz, m.damping)
			}
			if freqHz > 10 && freqHz < 200 {
				inBand++
				if m.rateRad-last.rateRad < 1.6*2*last.damping*last.rateRad {
					close++
				}
			}
			last = m
		}
		if inBand < 3 || close < 1 {
			t.Errorf("seed %d, %s: %d modes in the band, %d close pairs: want 3 and 1", seed, r.Name, inBand, close)
		}
		var eigen mat.Eigen
		eigen.Factorize(couple(l.structure, l.shakers, l.sensors).a, mat.EigenNone)
		for _, pole := range eigen.Values(nil) {
			if real(pole) >= 0 {
				t.Errorf("seed %d: pole %v: want all to decay", seed, pole)
			}
		}
	}
	for _, want := range []string{"1 shakers", "2 shakers", "3 shakers", "4 shakers", "driving-point sign 1", "driving-point sign -1"} {
		if seen[want] == 0 {
			t.Errorf("no rig with %s among them: %v", want, seen)
		}
	}
}

func TestRandomRigLevels(t *testing.T) {
	for seed := range uint64(6) {
		r := drawn(t, seed, RandomOptions{})
		s, err := r.Source(r.Rig, 1)
		if err != nil {
			t.Fatal(err)
		}
		v := read(t, s, 8*4096)
		s.SetDrive(0)
		read(t, s, 60*512)
		quiet := read(t, s, 4096)
		for _, c := range r.Rig.Channels() {
			signal, noise := column(t, r.Rig, v, c.Name), column(t, r.Rig, quiet, c.Name)
			headroomDB := -20 * math.Log10(math.Max(slices.Max(signal), -slices.Min(signal)))
			aboveDB := 20 * math.Log10(rmsOf(signal)/rmsOf(noise))
			if headroomDB < 1 || headroomDB > 20 || aboveDB < 40 || aboveDB > 72 {
				t.Errorf("seed %d, %s: %.1f dB of headroom, %.1f dB above the noise: want 1 to 20 and 40 to 72",
					seed, c.Name, headroomDB, aboveDB)
			}
		}
	}
}

// In a burst the drive is louder than over a whole period.
func TestRandomRigHasHeadroomInBursts(t *testing.T) {
	for seed := range uint64(6) {
		r := drawn(t, seed, RandomOptions{Excitation: "burst"})
		s, err := r.Source(r.Rig, 1)
		if err != nil {
			t.Fatal(err)
		}
		v := read(t, s, 16*4096)
		for _, c := range r.Rig.Channels() {
			signal := column(t, r.Rig, v, c.Name)
			headroomDB := -20 * math.Log10(math.Max(slices.Max(signal), -slices.Min(signal)))
			if headroomDB < 1 || headroomDB > 20 {
				t.Errorf("seed %d, %s: %.1f dB of headroom: want 1 to 20", seed, c.Name, headroomDB)
			}
		}
	}
}

// What is measured on a rig with one force is the truth.
func TestRandomRigTruth(t *testing.T) {
	for seed, o := range []RandomOptions{
		{Shape: "beam", Drive: "voltage", Shakers: 2}, {Shape: "plate", Drive: "current", Shakers: 2},
		{Shape: "plate", Drive: "voltage", Shakers: 2, MaxFrequencyHz: 50},
	} {
		o.Excitation = "periodic"
		r := drawn(t, uint64(seed), o)
		s, err := r.Source(r.Rig, 5)
		if err != nil {
			t.Fatal(err)
		}
		p := r.Rig.Periodic
		read(t, s, (periodicLead+p.SettlePeriods)*p.Period)
		lines := rectangular(t, s, r.Rig, 6, (p.SettlePeriods+p.KeepPeriods)*p.Period)
		truth := r.Truth()
		var misses []float64
		for k := 80; k < 1600; k++ {
			for i := range 2 {
				for o := range r.Rig.Responses {
					h, _ := lines[k].h(o)
					want := truth.H(float64(k)*r.Rig.Grid.SpacingHz, o, i)
					misses = append(misses, math.Hypot(real(h[i]-want), imag(h[i]-want))/math.Hypot(real(want), imag(want)))
				}
			}
		}
		slices.Sort(misses)
		t.Logf("%s: off by %.2g in the median", r.Name, misses[len(misses)/2])
		if misses[len(misses)/2] > 0.02 {
			t.Errorf("%s: H off by %.2g in the median: want next to nothing", r.Name, misses[len(misses)/2])
		}
	}
}

// A voltage drive makes forces that drop and lock at resonances: physics, not drive.
func TestVoltageDriveDropsAndLocks(t *testing.T) {
	var drops, locks int
	const rigs = 8
	for seed := range uint64(rigs) {
		r := drawn(t, seed, RandomOptions{Drive: "voltage", Shakers: 2})
		l, err := r.layout(r.Rig)
		if err != nil {
			t.Fatal(err)
		}
		sys := couple(l.structure, l.shakers, nil)
		var lowest, highest, coherence float64 = math.Inf(1), 0, 0
		for freqHz := 20.0; freqHz < 200; freqHz += 0.5 {
			f := continuous(t, sys, freqHz)
			var power [2]float64
			var cross complex128
			for j := range 2 {
				for i := range 2 {
					power[i] += real(f[i][j])*real(f[i][j]) + imag(f[i][j])*imag(f[i][j])
				}
				cross += f[0][j] * complex(real(f[1][j]), -imag(f[1][j]))
			}
			lowest, highest = min(lowest, power[0]), max(highest, power[0])
			coherence = max(coherence, (real(cross)*real(cross)+imag(cross)*imag(cross))/(power[0]*power[1]))
		}
		t.Logf("%s: force S1 spans %.0f dB, coherence up to %.2f", r.Name, 10*math.Log10(highest/lowest), coherence)
		if highest > 10*lowest {
			drops++
		}
		if coherence > 0.6 {
			locks++
		}
	}
	// when written, 7 and 8
	if drops < rigs-2 || locks < rigs-2 {
		t.Errorf("%d and %d of %d rigs have a force that spans 10 dB and forces that lock: want nearly all", drops, locks, rigs)
	}
}

func TestRandomRigDependsOnItsSeedAlone(t *testing.T) {
	for seed := range uint64(9) {
		o := RandomOptions{Excitation: []string{"random", "burst", "periodic"}[seed%3]}
		a, b := drawn(t, seed, o), drawn(t, seed, o)
		if !bytes.Equal(a.Text, b.Text) {
			t.Fatalf("two rigs from one seed:\n%s\n%s", a.Text, b.Text)
		}
		if again, err := rig.Parse("random.toml", a.Text); err != nil || again.Title != a.Name {
			t.Fatalf("%v\n%s", err, a.Text)
		}
	}
	if bytes.Equal(drawn(t, 1, RandomOptions{}).Text, drawn(t, 2, RandomOptions{}).Text) {
		t.Error("two seeds give the same rig")
	}
}

func TestRandomRigRefuses(t *testing.T) {
	for _, c := range []struct {
		options RandomOptions
		want    string
	}{
		{RandomOptions{Shape: "shell"}, `random rig: shape "shell": choose beam or plate`},
		{RandomOptions{Drive: "air"}, `random rig: drive "air": choose current or voltage`},
		{RandomOptions{Excitation: "sine"}, `random rig: excitation "sine": choose random, burst or periodic`},
		{RandomOptions{Shakers: 5}, `random rig: 5 shakers: choose 1 to 4`},
		{RandomOptions{Shakers: 4, Responses: 3}, `random rig: 3 responses with 4 shakers: choose 4 to 12`},
		{RandomOptions{MaxFrequencyHz: math.NaN()}, `random rig: max frequency NaN Hz: choose 10 to 2000`},
	} {
		if _, err := NewRandomRig(1, c.options); err == nil || err.Error() != c.want {
			t.Errorf("%+v: %v: want %s", c.options, err, c.want)
		}
	}
}

// Fewer channels, other settings: the caller's rig, the drawn shakers.
func TestRandomRigWithAnotherRig(t *testing.T) {
	r := drawn(t, 3, RandomOptions{Shakers: 2, Responses: 5})
	fewer := *r.Rig
	fewer.Responses = fewer.Responses[2:4]
	a, err := r.Source(&fewer, 9)
	if err != nil {
		t.Fatal(err)
	}
	b, err := r.Source(r.Rig, 9)
	if err != nil {
		t.Fatal(err)
	}
	part, whole := read(t, a, 100), read(t, b, 100)
	for _, c := range fewer.Channels() {
		x, y := column(t, r.Rig, part, c.Name), column(t, r.Rig, whole, c.Name)
		for i := range x {
			if math.Abs(x[i]-y[i]) > 1e-7 {
				t.Fatalf("%s, frame %d: %g alone, %g among the others", c.Name, i, x[i], y[i])
			}
		}
	}
}

func BenchmarkRandomRig(b *testing.B) {
	r := drawn(b, 1, RandomOptions{Shakers: 4, Responses: 12})
	s, err := r.Source(r.Rig, 1)
	if err != nil {
		b.Fatal(err)
	}
	const frames = 256
	dst := make([]float64, frames*s.Channels())
	for b.Loop() {
		s.Read(dst)
	}
	b.ReportMetric(float64(b.N)*frames/s.RateHz()/b.Elapsed().Seconds(), "times-real-time")
}

func BenchmarkNewRandomRig(b *testing.B) {
	for seed := uint64(0); b.Loop(); seed++ {
		drawn(b, seed, RandomOptions{})
	}
}
