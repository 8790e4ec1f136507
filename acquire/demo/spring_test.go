package demo

import (
	"math"
	"slices"
	"testing"

	"shakerwatch/acquire/rig"
)

func TestSpringRefusesWhatDoesNotFit(t *testing.T) {
	for _, c := range []struct {
		name   string
		spring Spring
		want   string
	}{
		{"negative", Spring{"16", "18", "x", -1}, `spring at point "16": -1 N/m³: give 0 to 1e+24`},
		{"not a number", Spring{"16", "18", "x", math.NaN()}, `spring at point "16": NaN N/m³: give 0 to 1e+24`},
		{"no point", Spring{"99", "", "x", 1}, `spring from point "99" to "" along "x": the simulated structure has no such place: choose points from 1 to 20 and x, y or z`},
		{"no axis", Spring{"16", "", "+x", 1}, `spring from point "16" to "" along "+x": the simulated structure has no such place: choose points from 1 to 20 and x, y or z`},
	} {
		if err := newDemo(t, Rig(), 1).SetSpring(c.spring); err == nil || err.Error() != c.want {
			t.Errorf("%s: %v: want %s", c.name, err, c.want)
		}
	}
}

// A spring that was taken away again leaves the source as linear as it was.
func TestSpringOff(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	for _, nonlinearity := range []float64{1, 0} {
		if err := s.SetSpring(SkidSpring(nonlinearity)); err != nil {
			t.Fatal(err)
		}
	}
	if got, want := read(t, s, 300), read(t, newDemo(t, Rig(), 1), 300); !slices.Equal(got, want) {
		t.Error("a spring that was never stepped left a mark")
	}
}

func TestSpringToTheGround(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	if err := s.SetSpring(Spring{From: "12", Axis: "z", CubicNPerM3: 1e13}); err != nil {
		t.Fatal(err)
	}
	loose := newDemo(t, Rig(), 1)
	a, b := rms(s, 10), rms(loose, 10)
	if a[2] > 0.98*b[2] && a[2] < 1.02*b[2] {
		t.Errorf("A12z at %g with a spring and %g without: want a difference", a[2], b[2])
	}
}

// distorted is the median over lines and responses, in dB, of what the forces of two periods of different random
// blocks do not explain, against what they do: the truth is linear.
func distorted(t *testing.T, nonlinearity float64) (dB float64) {
	t.Helper()
	r := RigFor("periodic")
	r.Periodic = rig.Periodic{Period: 2048, SettlePeriods: 3, KeepPeriods: 2}
	r.Grid.Block, r.Grid.SpacingHz, r.Grid.Lines = 2048, 1.25, 801
	r.Responses = r.Responses[:4]
	s := newDemo(t, r, 2)
	for i := range s.sensors {
		s.sensors[i].sigma = 0
	}
	if err := s.SetSpring(SkidSpring(nonlinearity)); err != nil {
		t.Fatal(err)
	}
	read(t, s, (2+3)*2048)
	lines := rectangular(t, s, r, 4, 5*2048)
	var left []float64
	for k := 8; k < len(lines); k++ {
		for o := range r.Responses {
			_, coherence := lines[k].h(o)
			left = append(left, math.Abs(1-coherence))
		}
	}
	slices.Sort(left)
	return 10 * math.Log10(left[len(left)/2])
}

func TestSpringDistorts(t *testing.T) {
	none, weak, strong := distorted(t, 0), distorted(t, 0.1), distorted(t, 1)
	t.Logf("unexplained: %.1f dB linear, %.1f dB with a weak spring, %.1f dB with a strong one", none, weak, strong)
	if none > -65 {
		t.Errorf("%.1f dB unexplained without a spring: want next to nothing", none)
	}
	if weak < -60 || weak > -15 || strong < weak+6 {
		t.Errorf("%.1f and %.1f dB unexplained: want a distortion that shows and grows", weak, strong)
	}
}

func TestSpringAllocatesNothing(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	if err := s.SetSpring(SkidSpring(0.1)); err != nil {
		t.Fatal(err)
	}
	dst := make([]float64, 16*s.Channels())
	if n := testing.AllocsPerRun(10, func() { s.Read(dst) }); n != 0 {
		t.Errorf("%g allocations a read: want none", n)
	}
}

// What acts at two ends is equal and opposite, so the whole does not accelerate.
func TestSpringPushesBothEnds(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	across, err := s.across(SkidSpring(1))
	if err != nil {
		t.Fatal(err)
	}
	if surge := across[0]; math.Abs(surge) > 1e-15 {
		t.Errorf("share of surge %g: want none", surge)
	}
}

func BenchmarkSpring(b *testing.B) {
	s := newDemo(b, Rig(), 1)
	if err := s.SetSpring(SkidSpring(0.1)); err != nil {
		b.Fatal(err)
	}
	const frames = 64
	dst := make([]float64, frames*s.Channels())
	for b.Loop() {
		s.Read(dst)
	}
	b.ReportMetric(float64(b.N)*frames/s.RateHz()/b.Elapsed().Seconds(), "times-real-time")
}
