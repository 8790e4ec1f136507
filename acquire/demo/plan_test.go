package demo

import (
	"io"
	"math"
	"slices"
	"strings"
	"sync"
	"testing"

	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/rig"
)

// faulty returns the demo with faults.
func faulty(t testing.TB, r *rig.Rig, seed uint64, texts ...string) *Source {
	t.Helper()
	s := newDemo(t, r, seed)
	if err := s.SetFaults(parsed(t, texts...)...); err != nil {
		t.Fatal(err)
	}
	return s
}

func parsed(t testing.TB, texts ...string) (faults []Fault) {
	t.Helper()
	for _, text := range texts {
		f, err := ParseFault(text)
		if err != nil {
			t.Fatal(err)
		}
		faults = append(faults, f)
	}
	return faults
}

// column is a channel of frames, by its name.
func column(t testing.TB, r *rig.Rig, frames []float64, name string) (v []float64) {
	t.Helper()
	for _, c := range r.Channels() {
		if c.Name == name {
			for i := c.Index; i < len(frames); i += r.Source.Channels {
				v = append(v, frames[i])
			}
			return v
		}
	}
	t.Fatalf("no channel %s", name)
	return nil
}

func rmsOf(v []float64) float64 {
	var sum float64
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum / float64(len(v)))
}

// A long list of everything: the same bits whatever the reads, and no memory.
func everything() []string {
	return []string{
		"detach@0.1s-0.3s:S1", "unhook@0.2s-0.5s:S2", "pad-off@0.4s-0.6s:S1", "drive-off@0.5s-0.7s:S1",
		"level@0.6s-0.9s:all=-3", "tied@0.7s-0.9s:S1,S2", "tied-band@0.8s-1s:S2,S1", "loose@0.1s-1s:A5z,S1",
		"cut@0.3s-0.4s:A6z", "dead@0.3s-0.5s:A7z", "gain@0.2s:A9z", "overrange@0.5s-0.6s:S2", "reverse@0.9s:A10z",
		"skew@0.2s-0.8s:A1z=1.3", "tilt@0.4s-0.9s:A8y", "twin@0.6s:A14z,A16x", "mode-shift@0.3s-0.6s:250",
		"mode-damping@0.5s-0.7s:all", "knock@0.45s:A5z", "knock@0.9s:14y=2",
	}
}

func TestFaultsDoNotDependOnReads(t *testing.T) {
	const frames = 3000
	for name, nonlinearity := range map[string]float64{"linear": 0, "with a spring": 0.1} {
		fresh := func() *Source {
			s := faulty(t, Rig(), 3, everything()...)
			if err := s.SetSpring(SkidSpring(nonlinearity)); err != nil {
				t.Fatal(err)
			}
			return s
		}
		want := read(t, fresh(), frames)
		got, err := sourcetest.Drain(t, &head{fresh(), frames}, 97)
		if err != io.EOF || len(got) != 1 || !slices.Equal(got[0].Samples, want) {
			t.Errorf("%s: other samples in reads of up to 97 frames, or ended with %v", name, err)
		}
		for i, v := range want {
			if v != v || math.Abs(v) > 1 {
				t.Fatalf("%s: sample %d is %v", name, i, v)
			}
		}
		s := fresh()
		dst := make([]float64, 97*s.Channels())
		if n := testing.AllocsPerRun(30, func() { s.Read(dst) }); n != 0 {
			t.Errorf("%s: %g allocations a read: want none", name, n)
		}
	}
}

func TestSetFaultsNamesWhatDoesNotFit(t *testing.T) {
	s := faulty(t, Rig(), 1, "reverse@0s:S1")
	want := read(t, faulty(t, Rig(), 1, "reverse@0s:S1"), 50)
	err := s.SetFaults(
		Fault{Kind: "detach", FromS: 1, Target: []string{"S3"}},
		Fault{Kind: "gain", FromS: 1, Target: []string{"all"}},
		Fault{Kind: "tilt", FromS: 1, Target: []string{"S1"}},
		Fault{Kind: "twin", FromS: 1, Target: []string{"A5z", "A5z"}},
		Fault{Kind: "knock", FromS: 1, Target: []string{"99z"}},
		Fault{Kind: "mode-shift", FromS: 1, Target: []string{"x"}},
		Fault{Kind: "no", FromS: math.NaN()},
	)
	channels := "A12z, A3z, A1z, A5z, A6z, A7z, A9z, A10z, A2y, A8y, A12y, A14z, A16x, A19y"
	const places = `give a channel, or a point from 1 to 20 with x, y or z, such as 1z`
	lines := []string{
		`fault "detach@1s:S3": no force has the name "S3": choose S1, S2 or all`,
		`fault "gain@1s:all": no channel has the name "all": choose S1, S2, ` + channels,
		`fault "tilt@1s:S1": no response has the name "S1": choose ` + channels,
		`fault "twin@1s:A5z,A5z": channel "A5z" stands twice: name it once`,
		`fault "knock@1s:99z": there is no place "99z": ` + places,
		`fault "mode-shift@1s:x": mode "x": give a frequency in Hz, or all`,
		`fault "no@NaNs": there is no kind "no": choose ` + kindNames(),
	}
	if err == nil || err.Error() != strings.Join(lines, "\n") {
		t.Errorf("%v\nwant\n%s", err, strings.Join(lines, "\n"))
	}
	if !slices.Equal(read(t, s, 50), want) {
		t.Error("the faults before did not stay")
	}
}

// Faults that stay in the list go on undisturbed when others come and go.
func TestSetFaultsKeepsWhatStands(t *testing.T) {
	r := Rig()
	whole := faulty(t, r, 1, "loose@0s:A5z", "knock@0.1s:14z")
	want := column(t, r, read(t, whole, 1000), "A5z")
	s := faulty(t, r, 1, "loose@0s:A5z", "knock@0.1s:14z")
	got := column(t, r, read(t, s, 500), "A5z")
	if err := s.SetFaults(parsed(t, "reverse@0s:S1", "loose@0s:A5z", "knock@0.1s:14z")...); err != nil {
		t.Fatal(err)
	}
	got = append(got, column(t, r, read(t, s, 500), "A5z")...)
	for i := range got {
		if math.Abs(got[i]-want[i]) > 1e-7 {
			t.Fatalf("frame %d: %g: want %g", i, got[i], want[i])
		}
	}
}

// Faults that are over when they are set leave no mark.
func TestFaultsOfThePast(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	read(t, s, 3000)
	if err := s.SetFaults(parsed(t, "detach@0.1s-0.5s:S1", "loose@0.2s-1s:S2", "lost@0.1s-1s")...); err != nil {
		t.Fatal(err)
	}
	whole := newDemo(t, Rig(), 1)
	read(t, whole, 3000)
	if !slices.Equal(read(t, s, 100), read(t, whole, 100)) {
		t.Error("other samples than without them")
	}
}

func TestSetFaultsWhileReading(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	lists := [][]Fault{parsed(t, "detach@0s:S1", "lost@0s=10"), parsed(t, "knock@0s:14z", "mode-shift@0s:250"), nil}
	var done sync.WaitGroup
	stop := make(chan struct{})
	done.Go(func() {
		dst := make([]float64, 64*16)
		for {
			select {
			case <-stop:
				return
			default:
				s.Read(dst)
			}
		}
	})
	for i := range 9 {
		if err := s.SetFaults(lists[i%3]...); err != nil {
			t.Error(err)
		}
		s.SetDrive(0.5)
		s.Frames()
	}
	close(stop)
	done.Wait()
	// all is sound again: a broken rig would have a force missing
	rms(s, 1)
	if v := rms(s, 2); v[0] < 0.01 || v[1] < 0.01 {
		t.Errorf("forces at %g and %g of full scale after the repair", v[0], v[1])
	}
}

// A knock that is asked for now, while the source runs, happens at the next frame.
func TestKnockNow(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	read(t, s, 1000)
	if s.Frames() != 1000 {
		t.Errorf("%d frames: want 1000", s.Frames())
	}
	if err := s.SetFaults(parsed(t, "knock@0s:14z=5", "lost@0s=7")...); err != nil {
		t.Fatal(err)
	}
	if n, err := s.Read(make([]float64, 16)); n != 0 || err == nil || err.Error() != "7 frames were lost" {
		t.Errorf("Read = %d, %v: want 7 lost frames", n, err)
	}
	sound := newDemo(t, Rig(), 1)
	read(t, sound, 1007)
	a, b := column(t, Rig(), read(t, sound, 20), "A14z"), column(t, Rig(), read(t, s, 20), "A14z")
	var most float64
	for i := range a {
		most = max(most, math.Abs(a[i]-b[i]))
	}
	if most < 0.02 {
		t.Errorf("the knock made %g of full scale: want more", most)
	}
}
