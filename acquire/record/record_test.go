package record

import (
	"io"
	"math"
	"path/filepath"
	"slices"
	"sync"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/wav"
)

func options(channels int, e wav.Encoding) Options {
	return Options{RateHz: testRateHz, Channels: channels, Encoding: e}
}

func mustCreate(t testing.TB, path string, o Options) *Recorder {
	t.Helper()
	r, err := Create(path, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func open(t testing.TB, path string) *wav.Reader {
	t.Helper()
	r, err := wav.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { r.Close() })
	return r
}

// What a pipeline gets of some channels live and in a replay of the recording is the same, bit for
// bit, gaps and their positions, too.
func TestReplaySeesTheSame(t *testing.T) {
	dir := t.TempDir()
	rapid.Check(t, func(rt *rapid.T) {
		channels := rapid.IntRange(1, 4).Draw(rt, "channels")
		e := rapid.SampledFrom([]wav.Encoding{wav.Float32, wav.Float64}).Draw(rt, "encoding")
		sample := rapid.Float64()
		if e == wav.Float32 { // as of a sound card
			sample = rapid.Custom(func(t *rapid.T) float64 { return float64(rapid.Float32().Draw(t, "value")) })
		}
		sample = rapid.OneOf(sample, rapid.SampledFrom([]float64{0, math.NaN(), math.Inf(1), math.Copysign(0, -1)}))
		source := &list{channels: channels, end: io.EOF}
		for range rapid.IntRange(1, 8).Draw(rt, "parts") {
			if rapid.Bool().Draw(rt, "gap") {
				source.parts = append(source.parts, &acquire.GapError{Frames: rapid.Int64Range(1, 50_000).Draw(rt, "lost")})
			} else {
				frames := rapid.IntRange(1, 40).Draw(rt, "frames")
				source.parts = append(source.parts, rapid.SliceOfN(sample, frames*channels, frames*channels).Draw(rt, "samples"))
			}
		}
		used := rapid.SliceOfNDistinct(rapid.IntRange(0, channels-1), 1, -1, rapid.ID).Draw(rt, "used")

		path := filepath.Join(dir, "run.wav")
		o := options(channels, e)
		o.Replace = true
		r := mustCreate(t, path, o)
		live, _ := sourcetest.Drain(t, acquire.Select(Tee(source.clone(), r), used), 60)
		if err := r.Close(); err != nil {
			rt.Fatal(err)
		}
		recording, err := wav.Open(path)
		if err != nil {
			rt.Fatal(err)
		}
		defer recording.Close()
		replayed, err := sourcetest.Drain(t, acquire.Select(recording, used), 60)
		if err != io.EOF || len(recording.Warnings()) > 0 {
			rt.Fatalf("replay ended by %v, warnings %q", err, recording.Warnings())
		}
		if !slices.EqualFunc(replayed, live, sameStretch) {
			rt.Fatalf("replayed %v, live %v", replayed, live)
		}
		if c := r.Counts(); c.Frames != recording.Frames() || c.Dropped != 0 || c.Bytes != c.Frames*int64(channels*e.Bytes()) {
			rt.Fatalf("%+v of a recording of %d frames", c, recording.Frames())
		}
	})
}

// A sound card gives float32: every one of them comes back, also the odd ones.
func TestFloat32IsExact(t *testing.T) {
	var samples []float64
	for bits := uint64(0); bits < 1<<32; bits += 16_411 { // a prime, so that all bits change
		samples = append(samples, float64(math.Float32frombits(uint32(bits))))
	}
	path := filepath.Join(t.TempDir(), "run.wav")
	o := options(1, wav.Float32)
	o.RateHz = 48000 // room for all of them in the queue
	r := mustCreate(t, path, o)
	sourcetest.Drain(t, Tee(&quick{list{channels: 1, end: io.EOF, parts: []any{samples}}}, r), 4096)
	if err := r.Close(); err != nil {
		t.Fatal(err)
	}
	got := make([]float64, len(samples))
	reader := open(t, path)
	for at := 0; at < len(got); {
		n, err := reader.Read(got[at:])
		if err != nil {
			t.Fatal(err)
		}
		at += n
	}
	equal(t, got, samples)
}

// quick is a list at 48,000 frames/s.
type quick struct{ list }

func (*quick) RateHz() float64 { return 48000 }

func TestGapsAreFramesOfNaN(t *testing.T) {
	path := filepath.Join(t.TempDir(), "run.wav")
	r := mustCreate(t, path, options(3, wav.Float64))
	source := &list{channels: 3, end: io.EOF, parts: []any{
		&acquire.GapError{Frames: 2}, counting(3, 2, 5), &acquire.GapError{Frames: 1}, &acquire.GapError{Frames: 1}, counting(3, 9, 1),
		&acquire.GapError{Frames: 4},
	}}
	want := everything(t, source.clone())
	sourcetest.Drain(t, Tee(source, r), 10)
	if err := r.Close(); err != nil {
		t.Fatal(err)
	}
	if len(want) != 3*14 {
		t.Fatalf("the test is about %d samples, want 42", len(want))
	}
	equal(t, everything(t, open(t, path)), want)
}

// Closing, counting and asking for errors while the capture runs.
func TestFromSeveralGoroutines(t *testing.T) {
	path := filepath.Join(t.TempDir(), "run.wav")
	r := mustCreate(t, path, options(2, wav.Float32))
	var running sync.WaitGroup
	running.Go(func() {
		s := Tee(&endless{channels: 2, gap: &acquire.GapError{Frames: 3}}, r)
		for range 2000 {
			s.Read(make([]float64, 2*10))
		}
	})
	for range 2 {
		running.Go(func() {
			for r.Counts().Frames < 1000 && r.Err() == nil {
			}
			if err := r.Close(); err != nil {
				t.Error(err)
			}
		})
	}
	running.Wait()
	// 1500 reads of 10 frames and 500 gaps of 3; what came after Close is dropped, or a gap of the source.
	c := r.Counts()
	if all := c.Frames + c.Dropped; c.Frames < 1000 || all > 1500*10+500*3 || all < 1500*10 {
		t.Errorf("%+v", c)
	}
	if n := open(t, path).Frames(); n != c.Frames {
		t.Errorf("the file has %d frames, %d were counted", n, c.Frames)
	}
}
