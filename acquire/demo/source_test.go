package demo

import (
	"io"
	"math"
	"slices"
	"testing"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/rig"
)

var _ acquire.Source = (*Source)(nil)

func newDemo(t testing.TB, r *rig.Rig, seed uint64) *Source {
	t.Helper()
	s, err := New(r, seed)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// read returns the next frames of s, channel fastest. What s leaves unwritten is NaN.
func read(t testing.TB, s acquire.Source, frames int) []float64 {
	t.Helper()
	dst := make([]float64, frames*s.Channels())
	for i := range dst {
		dst[i] = math.NaN()
	}
	for done := 0; done < frames; {
		n, err := s.Read(dst[done*s.Channels():])
		if err != nil {
			t.Fatal(err)
		}
		done += n
	}
	return dst
}

// head ends a source after some frames.
type head struct {
	acquire.Source
	left int
}

func (h *head) Read(dst []float64) (n int, err error) {
	if h.left == 0 {
		return 0, io.EOF
	}
	n, err = h.Source.Read(dst[:min(len(dst), h.left*h.Channels())])
	h.left -= n
	return n, err
}

func TestSourceContractAndReadSizes(t *testing.T) {
	const frames = 3000
	want := read(t, newDemo(t, Rig(), 7), frames)
	for _, maxFrames := range []int{1, 2, 97, 1024} {
		read, err := sourcetest.Drain(t, &head{newDemo(t, Rig(), 7), frames}, maxFrames)
		if err != io.EOF || len(read) != 1 || !slices.Equal(read[0].Samples, want) {
			t.Errorf("up to %d frames a read: other samples than in one read, or ended with %v", maxFrames, err)
		}
	}
}

func TestSourceSeeds(t *testing.T) {
	first, second := read(t, newDemo(t, Rig(), 1), 10), read(t, newDemo(t, Rig(), 2), 10)
	for i := range first {
		if first[i] == second[i] {
			t.Fatalf("sample %d is the same for two seeds", i)
		}
	}
}

// The first frame comes from shakers that have run for a second.
func TestSourceHasRunIn(t *testing.T) {
	r, l := demoLayout(t)
	cold, _, err := newSource(r, l, 4)
	if err != nil {
		t.Fatal(err)
	}
	read(t, cold, 2560)
	if !slices.Equal(read(t, cold, 100), read(t, newDemo(t, r, 4), 100)) {
		t.Error("a second after a cold start other samples than at the first frame")
	}
}

// A load cell whose noise repeated its shaker's drive would seem to measure something of the drive.
func TestStreamsAreApart(t *testing.T) {
	r := Rig()
	seen := make(map[uint64]string)
	note := func(name string, first uint64) {
		if other, twice := seen[first]; twice {
			t.Errorf("the random numbers of %s are those of %s", name, other)
		}
		seen[first] = name
	}
	_, l := demoLayout(t)
	s, _, err := newSource(r, l, 1)
	if err != nil {
		t.Fatal(err)
	}
	for i, c := range append(r.Forces, r.Responses...) {
		note("the noise of "+c.Name, s.sensors[i].rng.Uint64())
	}
	for _, c := range r.Forces {
		note("the drive of "+c.Name, stream(1, "drive "+c.Name).Uint64())
	}
}

func TestSourceAllocatesNothing(t *testing.T) {
	s := newDemo(t, Rig(), 1)
	dst := make([]float64, 64*s.Channels())
	if n := testing.AllocsPerRun(100, func() { s.Read(dst) }); n != 0 {
		t.Errorf("%g allocations a read: want none", n)
	}
}

func TestSourceRefusesWhatItDoesNotSimulate(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(r *rig.Rig)
		want   string
	}{
		{"sound card", func(r *rig.Rig) { r.Source.Kind = "soundcard" },
			`skid.toml: source kind "soundcard" is not simulated: choose demo`},
		{"sine", func(r *rig.Rig) { r.Analysis.Excitation = "sine" },
			`skid.toml: excitation "sine" is not simulated: choose random, burst or periodic`},
	} {
		r := Rig()
		c.change(r)
		if _, err := New(r, 1); err == nil || err.Error() != c.want {
			t.Errorf("%s: %v: want %s", c.name, err, c.want)
		}
	}
}

// Every sample is one that a float32 recording keeps.
func TestSourceSamplesAreFloat32(t *testing.T) {
	for i, v := range read(t, newDemo(t, Rig(), 1), 2000) {
		if v != float64(float32(v)) {
			t.Fatalf("sample %d, %v, is no float32", i, v)
		}
	}
}

func TestSourceLevels(t *testing.T) {
	r := Rig()
	const seconds = 60
	v := read(t, newDemo(t, r, 1), seconds*2560)
	for _, c := range append(r.Forces, r.Responses...) {
		var peak, power float64
		for i := c.Index; i < len(v); i += r.Source.Channels {
			peak = max(peak, math.Abs(v[i]))
			power += v[i] * v[i]
		}
		rms := math.Sqrt(power / (seconds * 2560))
		headroomDB := -20 * math.Log10(peak)
		t.Logf("%-5s %6.2f N or m/s² rms, headroom %.1f dB", c.Name, rms*math.Abs(c.Scale()), headroomDB)
		if headroomDB < 6 || headroomDB > 40 {
			t.Errorf("%s: %.1f dB of headroom: want 6 to 40", c.Name, headroomDB)
		}
	}
}

// A channel's signal belongs to what it measures, not to its place in the file. Forces in another
// order change the order of sums, hence rounding.
func TestSourceInAnyOrder(t *testing.T) {
	const frames = 500
	r := Rig()
	want := read(t, newDemo(t, r, 3), frames)
	turned := Rig()
	slices.Reverse(turned.Forces)
	slices.Reverse(turned.Responses)
	for i := range turned.Forces {
		turned.Forces[i].Index = 20 + i
	}
	for i := range turned.Responses {
		turned.Responses[i].Index = 2 + i
	}
	turned.Source.Channels = 24
	got := read(t, newDemo(t, turned, 3), frames)
	index := make(map[string]int)
	for _, c := range append(turned.Forces, turned.Responses...) {
		index[c.Name] = c.Index
	}
	for _, c := range append(r.Forces, r.Responses...) {
		for i := range frames {
			a, b := want[i*16+c.Index], got[i*24+index[c.Name]]
			if math.Abs(a-b) > 3e-8 { // one unit in the last place of a float32 below 0.5
				t.Fatalf("%s, frame %d: %v, in another order %v", c.Name, i, a, b)
			}
		}
	}
	for _, unused := range []int{0, 1, 17, 19, 22, 23} {
		for i := range frames {
			if got[i*24+unused] != 0 {
				t.Fatalf("channel %d is not in the rig and carries %v: want 0", unused+1, got[i*24+unused])
			}
		}
	}
}

// A sensor that is taken out of the rig changes nothing elsewhere.
func TestSourceOfASubset(t *testing.T) {
	const frames = 500
	want := read(t, newDemo(t, Rig(), 3), frames)
	subset := Rig()
	subset.Responses = subset.Responses[4:6]
	got := read(t, newDemo(t, subset, 3), frames)
	for _, c := range append(subset.Forces, subset.Responses...) {
		for i := range frames {
			if a, b := want[i*16+c.Index], got[i*16+c.Index]; a != b {
				t.Fatalf("%s, frame %d: %v, in the subset %v", c.Name, i, a, b)
			}
		}
	}
}

func BenchmarkSource(b *testing.B) {
	s := newDemo(b, Rig(), 1)
	const frames = 256
	dst := make([]float64, frames*s.Channels())
	b.ReportAllocs()
	for b.Loop() {
		s.Read(dst)
	}
	b.ReportMetric(float64(b.N)*frames/s.RateHz()/b.Elapsed().Seconds(), "times-real-time")
}
